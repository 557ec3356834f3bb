"""A cone: a section to a point, or cut short, square or sloping; the apex anywhere above the base."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from math import atan, ceil, cos, degrees, floor, pi, sin, tan
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.cut_types import LEVEL_CUT, LevelCut
from develop.pieces.field_types import LENGTH, MARK, OFFSET, SECTION
from develop.pieces.fields import about
from develop.pieces.fitted import Tapered
from develop.pieces.wording import direction_words, section_words, shift_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Share
    from develop.pieces.built import Built
    from develop.sections.section import Section
    from develop.solid import Rim
    from develop.surfaces.band import Band
    from develop.surfaces.sheet import Sheet
    from develop.surfaces.trim import Plane

__all__ = ["Cone"]

# Lower than this part of its largest size, a cone is as good as flat.
_FLATTEST = 1000.0
# Nearest that a cut may come to the base or to the apex [mm]: less cannot be made.
_NEAREST = 0.1


@dataclass(frozen=True, kw_only=True)
class Cone(Tapered):
    """A section to a point, or cut short; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "cone"
    example: ClassVar[dict[str, str | float]] = {
        "section": "ellipse 600 x 400",
        "height": 700,
        "apex_offset": "100,0",
        "cut_b": "height 300 slope 20 long top",
    }

    section: SectionSpec = field(metadata=about(SECTION, "section of the base, END A"))
    height: float = field(metadata=about(LENGTH, "height of the apex over the base, the cut part included"))
    apex_offset: tuple[float, float] = field(
        default=(0.0, 0.0), metadata=about(OFFSET, "the apex, right of and above the centre of the base")
    )
    cut_b: LevelCut | None = field(
        default=None,
        metadata=about(
            LEVEL_CUT, "where END B is cut: the height on the line of centres; none: to the point"
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    def surface(self) -> Band:
        """The side from the base to the apex or the cut. Raises Refusal."""
        from develop.pieces.wall import check_level
        from develop.sections.point import Point
        from develop.solid import Frame, Rim
        from develop.surfaces.band import Band

        section = self.in_wall(self.section, field="section")
        size = max(section.width, section.height)
        if self.height < size / _FLATTEST:
            raise Refusal(
                field="height",
                given=f"{number_text(self.height)} mm over a base of {number_text(round(size, 1))} mm makes "
                "a side as good as flat",
                allowed=f"{number_text(ceil(size / _FLATTEST * 10.0) / 10.0)} mm or more",
            )
        if self.cut_b is not None:
            self._room(section, self.cut_b)
        self._fitting()
        rim = Rim(self.fitted(section, "a"), Frame.square())
        if self.cut_b is not None and (self.fits or self.collar_b is not None):
            band = Band(rim, self._cut_rim(section, self.cut_b), level=self.level)
        else:
            band = Band(
                rim,
                Rim(Point(), Frame.square(at=(*self.apex_offset, self.height))),
                cut_b=self._plane(self.cut_b) if self.cut_b else None,
                level=self.level,
            )
        band = replace(band, distance=self.distance(band))
        self._bend(band)
        check_level(band)
        return band

    def _cut_rim(self, section: Section, cut: LevelCut) -> Rim:
        """END B, where it is cut square: similar to the base, as its fit wants it."""
        from develop.sections.scaled import Scaled
        from develop.solid import Frame, Rim

        share = cut.height / self.height
        right, up = (share * each for each in self.apex_offset)
        scaled = Scaled(section, 1.0 - share)
        return Rim(self.fitted(scaled, "b"), Frame.square(at=(right, up, cut.height)))

    def _fitting(self) -> None:
        """Raises Refusal for a fit or a collar that END B cannot have."""
        at_b = [("fit_b", self.fit_b)] if self.fit_b != "flush" else []
        if self.collar_b is not None:
            at_b.append(("collar_b", f"{number_text(self.collar_b)} mm"))
        sloping = self.cut_b is not None and self.cut_b.slope != 0.0
        wrong = at_b if self.cut_b is None or sloping else []
        if sloping and self.fit_a != "flush":
            wrong = [("fit_a", self.fit_a), *wrong]
        for name, given in wrong:
            raise Refusal(
                field=name,
                given=f"{given}, and {'END B is cut sloping' if sloping else 'END B is a point'}",
                allowed="a square cut_b, such as height 300, with it; or neither fit nor collar there",
            )

    def _plane(self, cut: LevelCut) -> Plane:
        """The cutting plane, through the line of centres at the cut's height."""
        from develop.solid import cut_slopes
        from develop.surfaces.trim import Plane

        rise = cut_slopes(slope=cut.slope, long=cut.long, end_b=True)
        share = cut.height / self.height
        return Plane(cut.height - share * float(rise @ self.apex_offset), rise)

    def _room(self, section: Section, cut: LevelCut) -> None:
        """Raises Refusal where the cut runs past the apex or the base, with what works.

        With o the apex offset and r the rise of the plane, it is at height h (1 − r·o/H) over the
        centre of the base and passes below the apex where (H − h) (1 − r·o/H) > 0.
        """
        from develop.pieces.wall import reach

        if cut.height > self.height - _NEAREST + 1e-9:
            most = floor((self.height - _NEAREST) * 10.0 + 1e-6) / 10.0
            raise Refusal(
                field="cut_b",
                given=f"height {number_text(cut.height)} mm is not below the apex, at "
                f"{number_text(self.height)} mm",
                allowed=f"height {number_text(most)} mm or less, or none for a cone to the point",
            )
        towards = (cos(cut.long) * self.apex_offset[0] + sin(cut.long) * self.apex_offset[1]) / self.height
        down = reach(section, cut.long + pi)
        upright = 1.0 - tan(cut.slope) * towards
        clear = cut.height * upright - tan(cut.slope) * down
        if clear >= _NEAREST and upright > 0.0:
            return
        # Flat enough that the plane stays the least height over the base's lowest side.
        lift = cut.height - _NEAREST
        steepest = floor(degrees(atan(lift / (down + cut.height * towards))) * 10.0 + 1e-6) / 10.0
        works = []
        if lift > 0.0 and steepest > 0.0:
            works.append(f"slope {number_text(steepest)} or less")
        if upright > 0.0:
            least = ceil((tan(cut.slope) * down + _NEAREST) / upright * 10.0 - 1e-6) / 10.0
            if least <= self.height - _NEAREST:
                works.append(f"height {number_text(least)} mm or more")
        raise Refusal(
            field="cut_b",
            given=f"slope {number_text(round(degrees(cut.slope), 6))} at height {number_text(cut.height)} mm "
            + (
                f"runs {_NEAREST - clear:.4g} mm past the base"
                if clear < _NEAREST and upright > 0.0
                else "misses the apex"
            ),
            allowed=", or ".join(works) or f"a cut between {_NEAREST} mm and the apex",
        )

    def _bend(self, band: Band) -> None:
        """Raises Refusal where the side is bent tighter than its wall allows."""
        from develop.pieces.wall import check_bend

        if self.cut_b is None:
            if band.distance < 0.0:
                raise Refusal(
                    field="sizes",
                    given=f"{self.sizes}: the sheet lies {number_text(round(-band.distance, 4))} mm inside "
                    "of a side that comes to a point, where it has no room",
                    allowed="sizes = inside or mean, or a cut_b",
                )
            check_bend(band, thickness=self.thickness, sizes=self.sizes, instead="a larger base", ends="A")
            return
        check_bend(band, thickness=self.thickness, sizes=self.sizes, instead="a lower cut_b")

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.cuts import band_solid
        from develop.pieces.parting import parted

        surface = self.surface()
        section = surface.rim_a.section
        seam = seam_parameter(section, surface.lengths, self.seam_at)
        sheet = surface.sheet(seam)

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            cutting = self.cutting(flat, joints=self.collared, units=units, share=share)
            return pattern_of(
                flat,
                section,
                None if surface.cut_b or not surface.rim_b.section.girth else surface.rim_b.section,
                wording=self.wording(
                    flat,
                    (self.section,),
                    sizes=f"{section_words(self.section, units)}, cone, height to the apex "
                    f"{size_words(self.height, units)}",
                    place=f"{self._apex_words(units)}, {self._cut_words(units)}",
                    held="heights",
                    units=units,
                    around=surface,
                    level=self.level_words(surface),
                    fits=self.fits,
                ),
                divisions=self.divisions,
                distance=surface.distance,
                cutting=self.cautioned(cutting, surface),
                share=share,
            )

        return self.with_collars(
            parted(self, sheet, band_solid(surface, sheet, seam), drawn, units=units),
            surface,
            specs={"a": self.section},
            seam=seam,
            seam_b=sheet.seam_b,
            units=units,
        )

    def _apex_words(self, units: str) -> str:
        if self.apex_offset == (0.0, 0.0):
            return "apex over the centre"
        return shift_words(*self.apex_offset, units).replace("END B", "apex")

    def _cut_words(self, units: str) -> str:
        if self.cut_b is None:
            return "to the point"
        at = f"cut at height {size_words(self.cut_b.height, units)}"
        if self.cut_b.slope == 0.0:
            return f"{at}, square"
        slope = number_text(round(degrees(self.cut_b.slope), 6))
        return f"{at}, {slope}°, longest at {direction_words(self.cut_b.long)}"
