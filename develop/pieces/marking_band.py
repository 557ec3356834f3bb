"""A paper band, wrapped round an existing pipe, for marking an oblique plane cut on it."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Marked
from develop.pieces.field_types import CUT, MARK, SECTION, Choice, Cut, Length
from develop.pieces.fields import about
from develop.pieces.wording import cut_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.built import Built
    from develop.surfaces.cylinder import Cylinder

__all__ = ["MarkingBand"]


@dataclass(frozen=True, kw_only=True)
class MarkingBand(Marked):
    """A paper band for marking a plane cut on an existing pipe; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "marking-band"
    example: ClassVar[dict[str, str | float]] = {"section": "pipe DN 200", "cut": "slope 45 long right"}

    section: SectionSpec = field(metadata=about(SECTION, "section of the pipe"))
    cut: Cut | None = field(metadata=about(CUT, "the cut to mark"))
    paper: float = field(default=0.1, metadata=about(Length(least=0.0, most=10.0), "thickness of the paper"))
    face: str = field(
        default="outside",
        metadata=about(Choice(("outside", "inside")), "wrapped round the outside, or laid in the inside"),
    )
    lap: float = field(
        default=25.0, metadata=about(Length(least=0.0, most=1000.0), "how far the band laps over itself")
    )
    narrowest: float = field(
        default=50.0, metadata=about(Length(least=1.0, most=10_000.0), "least width of the band")
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    def surface(self) -> Cylinder:
        """The pipe's face from the band's square edge to the cut, the paper half its thickness off it.

        Raises Refusal.
        """
        import numpy as np

        from develop.pieces.cuts import trim
        from develop.pieces.wall import PLACES, given_section
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        outside = self.face == "outside"
        if not outside and self.section.outside and self.thickness == 0.0:
            raise Refusal(
                field="thickness",
                given="not given, but the band is laid inside a pipe, whose size is its outside",
                allowed="the pipe's wall thickness",
            )
        given = given_section(self.section, field="section", thickness=self.thickness, sizes=self.sizes)
        face = given.offset(self.thickness * (PLACES[self.face] - PLACES[self.sizes]))
        cut = trim(self.cut, height=0.0, end_b=True)
        down = float(face.support(np.array(-cut.rise[0]), np.array(-cut.rise[1])))
        # END A is the band's own square edge, so far below the cut that the band is nowhere too narrow.
        return Cylinder(
            face,
            Plane(-down - self.narrowest, np.zeros(2)),
            cut,
            0.5 * self.paper if outside else -0.5 * self.paper,
        )

    def build(self) -> Built:
        """Raises Refusal."""
        from develop.pieces.assemble import Wording, pattern_of, seam_parameter
        from develop.pieces.built import one
        from develop.pieces.cuts import cylinder_solid

        surface = self.surface()
        face = surface.section
        seam = seam_parameter(face, surface.lengths, self.seam_at)
        where = "round the outside" if self.face == "outside" else "inside, against the wall"
        pattern = pattern_of(
            surface.sheet(seam),
            face,
            face,
            wording=Wording(
                mark=self.mark,
                kind=self.kind,
                quantity=self.quantity,
                face=self.face,
                facts=(
                    f"{self.mark}: {self.kind}" if self.mark != self.kind else self.mark,
                    f"{self.section.text}, {cut_words(self.cut)}",
                    f"wrap {where}; mark along END B",
                    f"paper {number_text(self.paper)} mm, lap {number_text(self.lap)}",
                    f"quantity {self.quantity}",
                ),
                datum="datum line y = 0, the band's square edge",
                flow="",
                full_lines=False,
            ),
            divisions=self.divisions,
            distance=surface.distance,
            cut=surface.sheet(seam, beyond=self.lap) if self.lap else None,
        )
        return one(pattern, cylinder_solid(surface, seam))
