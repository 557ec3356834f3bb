"""A paper band, wrapped round an existing pipe, for marking an oblique plane cut on it."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import floor
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Marked
from develop.pieces.field_types import CUT, MARK, SECTION, Choice, Cut, Length
from develop.pieces.fields import about
from develop.pieces.wording import cut_words, measured_words, section_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.built import Built
    from develop.sections.section import Section
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
    sizes: str = field(
        default="outside",
        metadata=about(
            Choice(("inside", "outside", "mean")),
            "where the given sizes are measured; a pipe's size is always its outside",
            own=False,
        ),
    )

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
        if not outside and self.thickness == 0.0 and (self.section.outside or self.sizes != "inside"):
            where = "at mid-thickness" if self.sizes == "mean" else "its outside"
            raise Refusal(
                field="thickness",
                given=f"not given, but the band is laid inside a pipe whose size is {where}",
                allowed="the pipe's wall thickness" + ("" if self.section.outside else ", or sizes = inside"),
            )
        given = given_section(self.section, field="section", thickness=self.thickness, sizes=self.sizes)
        if self.lap > 0.5 * given.girth:
            raise Refusal(
                field="lap",
                given=f"{number_text(self.lap)} mm is more than half the pipe's girth",
                allowed=f"{number_text(floor(0.5 * given.girth))} mm or less",
            )
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

    def _facts(self, face: Section, girth: float, units: str) -> tuple[str, ...]:
        """What the sheet says; face: the pipe's face that the band lies on; girth of the band [mm]."""
        outside = self.face == "outside"
        size = size_words(face.width, units)
        if self.section.width != self.section.height:
            size = f"{size} x {size_words(face.height, units)}"
        wall = f", wall {size_words(self.thickness, units)}" if self.thickness else ""
        cut = cut_words(self.cut)
        return (
            f"{self.mark}: {self.kind}" if self.mark != self.kind else self.mark,
            f"{section_words(self.section, units)}, {size} {self.face}{wall}",
            "square cut" if cut == "square" else cut,
            "mark along END B",
            "the pipe stays on the END A side",
            "wrap round, this side out" if outside else "lay inside, this side in towards you",
            f"girth of the band {measured_words(girth, units)}",
            f"lap {measured_words(self.lap, units)} beyond the dashed line, the edge goes on"
            if self.lap
            else "no lap",
            f"paper {size_words(self.paper, units)}{' mm' if units == 'mm' else ''} thick",
            f"quantity {self.quantity}",
        )

    def _seam_words(self) -> tuple[str, str]:
        """What the left and the right side say of how the band closes."""
        if not self.lap:
            return ("EDGES MEET", "EDGES MEET")
        words = ("THIS EDGE TO DASHED LINE", "MEETS HERE")
        # Seen from the inside the band is mirrored, its lap at the left.
        return words if self.face == "outside" else (words[1], words[0])

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.assemble import Wording, pattern_of, seam_parameter
        from develop.pieces.built import one
        from develop.pieces.cuts import cylinder_solid

        surface = self.surface()
        face = surface.section
        seam = seam_parameter(face, surface.lengths, self.seam_at)
        flat = surface.sheet(seam)
        pattern = pattern_of(
            flat,
            face,
            face,
            wording=Wording(
                mark=self.mark,
                kind=self.kind,
                quantity=self.quantity,
                face=self.face,
                facts=self._facts(face, flat.edge_a, units),
                datum="datum line y = 0, the band's square edge",
                flow="",
                full_lines=False,
                units=units,
                seam_words=self._seam_words(),
            ),
            divisions=self.divisions,
            distance=surface.distance,
            cut=surface.sheet(seam, beyond=self.lap) if self.lap else None,
        )
        return one(pattern, cylinder_solid(surface, seam))
