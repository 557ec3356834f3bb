"""A length of duct, either end square or cut by a plane."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING, ClassVar

from develop.pieces.common import Plate
from develop.pieces.cut_types import CUT, Cut
from develop.pieces.field_types import LENGTH, MARK, SECTION
from develop.pieces.fields import about
from develop.pieces.wording import cut_words, section_words, size_words
from develop.sections.text import SectionSpec

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Share
    from develop.pieces.built import Built
    from develop.surfaces.cylinder import Cylinder
    from develop.surfaces.sheet import Sheet

__all__ = ["Straight"]


@dataclass(frozen=True, kw_only=True)
class Straight(Plate):
    """A length of duct, either end square or cut by a plane; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "straight"
    example: ClassVar[dict[str, str | float]] = {
        "section": "ellipse 600 x 300",
        "length": 800,
        "cut_b": "slope 30 long top",
    }

    section: SectionSpec = field(metadata=about(SECTION, "the section, square to the axis"))
    length: float = field(metadata=about(LENGTH, "length on the axis"))
    cut_a: Cut | None = field(default=None, metadata=about(CUT, "cut of end A"))
    cut_b: Cut | None = field(default=None, metadata=about(CUT, "cut of end B"))
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    def surface(self) -> Cylinder:
        """The section carried along the axis between the two cuts. Raises Refusal."""
        from develop.pieces.cuts import cylinder_between
        from develop.pieces.wall import given_section, neutral_distance

        section = given_section(self.section, field="section", thickness=self.thickness, sizes=self.sizes)
        distance = neutral_distance(
            thickness=self.thickness, sizes=self.sizes, neutral_line=self.neutral_line
        )
        return cylinder_between(section, self.cut_a, self.cut_b, length=self.length, distance=distance)

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal where a cut runs past the other end."""
        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.cuts import cylinder_solid
        from develop.pieces.parting import parted

        surface = self.surface()
        section = surface.section
        seam = seam_parameter(section, surface.lengths, self.seam_at)
        a, b = cut_words(self.cut_a), cut_words(self.cut_b)

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            return pattern_of(
                flat,
                section,
                section,
                wording=self.wording(
                    flat,
                    (self.section,),
                    sizes=f"{section_words(self.section, units)}, length {size_words(self.length, units)}",
                    place="both ends square" if a == b == "square" else f"END A {a}, END B {b}",
                    held="length and cuts" if not a == b == "square" else "length",
                    units=units,
                ),
                divisions=self.divisions,
                distance=surface.distance,
                cutting=self.cutting(flat, units=units, share=share),
                share=share,
            )

        return parted(self, surface.sheet(seam), cylinder_solid(surface, seam), drawn, units=units)
