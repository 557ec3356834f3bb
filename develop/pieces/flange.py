"""A flat ring, or a blank, to any section."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Flat
from develop.pieces.field_types import DIRECTION, MARK, SECTION, Choice, Count, Length
from develop.pieces.fields import about
from develop.pieces.wording import direction_words, plate_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pattern.curve import Array
    from develop.pieces.built import Built
    from develop.sections.section import Parallel, Section

__all__ = ["Flange"]

_SMALL = Length(least=0.0, most=10_000.0)


@dataclass(frozen=True, kw_only=True)
class Flange(Flat):
    """A flat ring or blank to a section; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "flange"
    example: ClassVar[dict[str, str | float]] = {
        "section": "ellipse 600 x 300",
        "width": 40,
        "holes": 16,
        "hole_diameter": 11,
    }

    section: SectionSpec = field(
        metadata=about(SECTION, "the section that the inner edge is given by, just as it is given")
    )
    width: float = field(metadata=about(Length(), "from the inner edge to the outer, square to both"))
    clearance: float = field(
        default=0.0, metadata=about(_SMALL, "how far the inner edge lies outside the section, all round")
    )
    form: str = field(
        default="ring",
        metadata=about(Choice(("ring", "blank")), "open inside, or a blank that closes the section"),
    )
    holes: int = field(default=0, metadata=about(Count(least=0, most=1000), "how many bolt holes"))
    hole_diameter: float | None = field(default=None, metadata=about(Length(), "diameter of the holes"))
    pitch_line: float | None = field(
        default=None,
        metadata=about(
            Length(), "from the inner edge to the line that the holes stand on; half the width if not given"
        ),
    )
    first_hole: str = field(
        default="astride",
        metadata=about(Choice(("on", "astride")), "whether a hole lies on the centre line or two astride it"),
    )
    centre_line: float = field(
        default=1.5707963267948966,
        metadata=about(DIRECTION, "the centre line that the first hole is set out from, facing end B"),
    )
    made_in: int = field(
        default=1,
        metadata=about(
            Count(most=64),
            "in how many parts a ring is cut, of equal length along the pitch line, but clear of the holes",
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    @property
    def _pitch(self) -> float:
        return 0.5 * self.width if self.pitch_line is None else self.pitch_line

    def surface(self) -> Section:
        """The curve of the inner edge. Raises Refusal."""
        from develop.sections import section_of

        self._check_parts()
        inner = section_of(self.section).offset(self.clearance)
        if self.holes:
            self._check_holes(inner)
        return inner

    def _check_parts(self) -> None:
        if self.made_in > 1 and self.form == "blank":
            raise Refusal(field="made_in", given=f"{self.made_in} parts of a blank", allowed="1, or a ring")
        if self.holes and self.made_in > self.holes:
            raise Refusal(
                field="made_in",
                given=f"{self.made_in} parts are more than there are holes ({self.holes})",
                allowed=f"{self.holes} or fewer, or no holes",
            )

    def _check_holes(self, inner: Section) -> None:
        """Raises Refusal where the holes have no room on the plate or beside each other."""
        from math import floor

        import numpy as np

        if self.hole_diameter is None:
            raise Refusal(
                field="hole_diameter", given="not given, but there are holes", allowed=Length().allowed
            )
        if not self._pitch < self.width:
            raise Refusal(
                field="pitch_line",
                given=f"{number_text(self._pitch)} mm lies off a flange {number_text(self.width)} mm wide",
                allowed=f"less than {number_text(self.width)} mm",
            )
        room = 2.0 * (
            self.width - self._pitch if self.form == "blank" else min(self._pitch, self.width - self._pitch)
        )
        centres = self._centres(inner)
        apart = float(np.hypot(*(np.roll(centres, -1, axis=0) - centres).T).min()) if self.holes > 1 else room
        most = min(room, apart)
        if self.hole_diameter >= most:
            why = "reach the edge" if most == room else "run into each other"
            works = floor(most * 10.0 - 1e-6) / 10.0
            raise Refusal(
                field="hole_diameter",
                given=f"holes of {number_text(self.hole_diameter)} mm {why}",
                allowed=f"{number_text(works)} mm or less"
                if works > 0.0
                else "fewer holes or a wider flange",
            )

    def _line(self, inner: Section) -> Parallel:
        """The pitch line: a parallel of the inner edge, walked by the same parameter."""
        from develop.sections.section import Parallel

        return Parallel(inner, self._pitch)

    def _set_out(self, inner: Section) -> tuple[Array, Array]:
        """Parameters of the holes (holes,), and of the ends of the parts (made_in + 1,)."""
        import numpy as np

        line = self._line(inner)
        start = float(line.arc(line.at_direction(np.array([self.centre_line])))[0])
        aside = 0.5 if self.first_hole == "astride" else 0.0
        holes = np.arange(self.holes) + aside
        # Parts end midway between two holes.
        count = self.holes or self.made_in
        ends = np.round(np.arange(self.made_in + 1) * count / self.made_in) + (
            aside - 0.5 if self.holes else 0.0
        )
        return (
            line.at_arc(start + line.girth * holes / max(self.holes, 1)),
            line.at_arc(start + line.girth * ends / count),
        )

    def _centres(self, inner: Section) -> Array:
        """Centres of the holes (holes, 2) [mm], in the section's plane."""
        return self._line(inner).point(self._set_out(inner)[0])

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.built import Built
        from develop.pieces.flat_ring import parts_of

        inner = self.surface()
        holes, ends = self._set_out(inner)
        line = self._line(inner)
        spacing = line.girth / self.holes if self.holes else 0.0
        return Built(
            parts_of(
                inner,
                width=self.width,
                line=line,
                holes=holes,
                radius=0.5 * (self.hole_diameter or 0.0),
                ends=ends if self.made_in > 1 else None,
                blank=self.form == "blank",
                others=((self.centre_line, direction_words(self.centre_line).upper()),),
                mark=self.mark,
                kind=self.kind,
                quantity=self.quantity,
                facts=self._facts(spacing),
            )
        )

    def _facts(self, spacing: float) -> tuple[str, ...]:
        """What every part says, but for its mark and quantity."""
        clear = f" and {number_text(self.clearance)} clear all round" if self.clearance else ""
        form = "inner edge" if self.form == "ring" else "blank over"
        facts = [f"{form} {self.section.text}{clear}, {number_text(self.width)} wide"]
        if self.holes and self.hole_diameter is not None:
            first = direction_words(self.centre_line).upper()
            facts += [
                f"{self.holes} holes of {number_text(self.hole_diameter)} on the pitch line, "
                f"{number_text(self._pitch)} from the inner edge",
                f"{number_text(round(spacing, 2))} from hole to hole along the pitch line, first "
                f"{self.first_hole} the centre line {first}",
            ]
        return (*facts, plate_words(self.material, self.thickness))
