"""A length of duct, either end square or cut by a plane."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.cut_types import CUT, Cut
from develop.pieces.field_types import LENGTH, MARK, SECTION
from develop.pieces.fields import about
from develop.pieces.fitted import Fitted
from develop.pieces.wording import cut_words, section_words, size_words
from develop.sections.text import SectionSpec

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Share
    from develop.pieces.built import Built
    from develop.surfaces.band import Band
    from develop.surfaces.cylinder import Cylinder
    from develop.surfaces.sheet import Sheet

__all__ = ["Straight"]


@dataclass(frozen=True, kw_only=True)
class Straight(Fitted):
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

    def surface(self) -> Cylinder | Band:
        """The section carried along the axis between the two cuts; between ends that are fitted otherwise a
        slight taper. Raises Refusal."""
        from develop.pieces.cuts import cylinder_between
        from develop.pieces.wall import check_bend
        from develop.solid import Frame, Rim
        from develop.surfaces.band import Band

        section = self.in_wall(self.section, field="section")
        if self.fits:
            self._square()
        a, b = self.fitted(section, "a"), self.fitted(section, "b")
        if self.fit_a == self.fit_b:
            return cylinder_between(a, self.cut_a, self.cut_b, length=self.length, distance=self.distance(a))
        band = Band(Rim(a, Frame.square()), Rim(b, Frame.square(at=(0.0, 0.0, self.length))))
        band = replace(band, distance=self.distance(band))
        check_bend(band, thickness=self.thickness, sizes=self.sizes, instead="flush ends")
        return band

    def _square(self) -> None:
        """Raises Refusal where an end is cut sloping, as neither end of a taper may be."""
        for end, cut in (("a", self.cut_a), ("b", self.cut_b)):
            if cut is not None and cut.slope:
                fit = self.fits[0]
                raise Refusal(
                    field=f"fit_{fit.end}",
                    given=f"{fit.fit}, and END {end.upper()} is cut sloping",
                    allowed="flush, or both ends square and the sloping cut on a piece beside it",
                )

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal where a cut runs past the other end."""
        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.cuts import band_solid, cylinder_solid
        from develop.pieces.parting import parted
        from develop.surfaces.cylinder import Cylinder

        surface = self.surface()
        if isinstance(surface, Cylinder):
            section = other = surface.section
        else:
            section, other = surface.rim_a.section, surface.rim_b.section
        seam = seam_parameter(section, surface.lengths, self.seam_at)
        a, b = cut_words(self.cut_a), cut_words(self.cut_b)

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            return pattern_of(
                flat,
                section,
                other,
                wording=self.wording(
                    flat,
                    (self.section,),
                    sizes=f"{section_words(self.section, units)}, length {size_words(self.length, units)}",
                    place="both ends square" if a == b == "square" else f"END A {a}, END B {b}",
                    held="length and cuts" if not a == b == "square" else "length",
                    units=units,
                    around=section if isinstance(surface, Cylinder) else surface,
                    fits=self.fits,
                ),
                divisions=self.divisions,
                distance=surface.distance,
                cutting=self.cutting(flat, units=units, share=share),
                share=share,
            )

        if isinstance(surface, Cylinder):
            return parted(self, surface.sheet(seam), cylinder_solid(surface, seam), drawn, units=units)
        sheet = surface.sheet(seam)
        return parted(self, sheet, band_solid(surface, sheet, seam), drawn, units=units)
