"""A change from one section to another, the two ends parallel."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import ceil, floor
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Plate
from develop.pieces.field_types import ANGLE, LENGTH, MARK, OFFSET, SECTION, Choice
from develop.pieces.fields import about
from develop.pieces.wording import section_words, shift_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

# Shorter than this part of its largest size, a transition is a flat ring and not a side to be rolled.
_FLATTEST = 1000.0

if TYPE_CHECKING:
    from develop.pieces.built import Built
    from develop.sections.section import Section
    from develop.surfaces.band import Band

__all__ = ["Transition"]


@dataclass(frozen=True, kw_only=True)
class Transition(Plate):
    """A change from one section to another, the two ends parallel; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "transition"
    example: ClassVar[dict[str, str | float]] = {
        "end_a": "ellipse 600 x 300",
        "end_b": "round 400",
        "length": 450,
        "offset": "0,50",
    }

    end_a: SectionSpec = field(metadata=about(SECTION, "section of end A"))
    end_b: SectionSpec = field(metadata=about(SECTION, "section of end B"))
    length: float = field(metadata=about(LENGTH, "distance between the planes of the ends"))
    offset: tuple[float, float] = field(
        default=(0.0, 0.0), metadata=about(OFFSET, "centre of end B, right of and above that of end A")
    )
    flush: str | None = field(
        default=None,
        metadata=about(
            Choice(("bottom", "top", "left", "right")),
            "the side on which both ends are level",
            not_with="offset",
        ),
    )
    rotate: float = field(
        default=0.0, metadata=about(ANGLE, "end B turned anticlockwise about its own centre, facing end B")
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    def surface(self) -> Band:
        """The band between the two ends. Raises Refusal."""
        from develop.pieces.wall import given_section, neutral_distance
        from develop.solid import Frame, Rim
        from develop.surfaces.band import Band

        a, b = (
            given_section(spec, field=field, thickness=self.thickness, sizes=self.sizes)
            for field, spec in (("end_a", self.end_a), ("end_b", self.end_b))
        )
        shift = self.offset if self.flush is None else self._level(a, b, self.flush)
        size = max(a.width, a.height, b.width, b.height)
        if self.length < size / _FLATTEST:
            raise Refusal(
                field="length",
                given=f"{number_text(self.length)} mm between ends of up to {number_text(round(size, 1))} mm "
                "makes a side as good as flat",
                allowed=f"{number_text(ceil(size / _FLATTEST * 10.0) / 10.0)} mm or more; "
                "for less, a flat ring",
            )
        band = Band(
            Rim(a, Frame.square()),
            Rim(b, Frame.square(at=(*shift, self.length), rotate=self.rotate)),
            neutral_distance(thickness=self.thickness, sizes=self.sizes, neutral_line=self.neutral_line),
        )
        self._bend(band)
        return band

    def _bend(self, band: Band) -> None:
        """Raises Refusal where the side is bent tighter than its wall allows."""
        import numpy as np

        from develop.pieces.wall import PLACES

        inner = self.thickness * PLACES[self.sizes]
        if inner == 0.0:
            return
        section = band.rim_a.section
        radii = band.radii(section.at_direction(np.radians(np.arange(360.0))))
        tightest = float(radii.min())
        if tightest > inner:
            return
        end = "A" if radii[:, 0].min() <= radii[:, 1].min() else "B"
        most = floor(self.thickness * tightest / inner * 10.0) / 10.0
        raise Refusal(
            field="thickness",
            given=f"{number_text(self.thickness)} mm leaves no inside where the slanting side is bent to a "
            f"radius of {tightest:.3g} mm, near END {end}",
            allowed=f"{number_text(most)} mm or less, or a longer piece" if most > 0.0 else "a longer piece",
        )

    def _level(self, a: Section, b: Section, side: str) -> tuple[float, float]:
        """The offset [mm] at which both ends reach equally far to one side."""
        from math import cos, sin

        import numpy as np

        x, y = {"right": (1.0, 0.0), "top": (0.0, 1.0), "left": (-1.0, 0.0), "bottom": (0.0, -1.0)}[side]
        c, s = cos(self.rotate), sin(self.rotate)
        reach_a = a.support(np.array(x), np.array(y))
        reach_b = b.support(np.array(c * x + s * y), np.array(c * y - s * x))
        more = float(reach_a - reach_b)
        return more * x, more * y

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from math import degrees

        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.built import Built
        from develop.solid import End, Solid

        surface = self.surface()
        a, b = surface.rim_a, surface.rim_b
        seam = seam_parameter(a.section, surface.lengths, self.seam_at)
        flat = surface.sheet(seam)
        right, up, _ = (float(each) for each in b.frame.origin)
        place = [f"length {size_words(self.length, units)}"]
        if self.flush:
            place.append(f"flush at the {self.flush}")
        place.append(shift_words(right, up, units))
        if self.rotate and self.end_b.width != self.end_b.height:  # a round end looks the same turned
            place.append(f"rotated {number_text(round(degrees(self.rotate), 6))}°")
        pattern = pattern_of(
            flat,
            a.section,
            b.section,
            wording=self.wording(
                flat,
                (self.end_a, self.end_b),
                sizes=f"END A {section_words(self.end_a, units)} to END B {section_words(self.end_b, units)}",
                place=", ".join(place),
                held="length",
                units=units,
            ),
            divisions=self.divisions,
            distance=surface.distance,
            turn_b=self.rotate,
        )
        solid = Solid(
            End.placed(a.section, a.frame),
            End.placed(b.section, b.frame),
            side="hull",
            seam=seam,
            distance=surface.distance,
        )
        return Built((pattern,), solid)
