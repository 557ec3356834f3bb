"""An offset: two mitres that carry the axis sideways, the ends square and in line with each other."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from math import atan, atan2, ceil, cos, degrees, floor, hypot, pi, radians, sin, sqrt, tan
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Jointed
from develop.pieces.field_types import LENGTH, MARK, OFFSET, SECTION, Angle
from develop.pieces.fields import about
from develop.pieces.wording import measured_words, section_words, shift_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.assemble import Wording
    from develop.pieces.built import Built
    from develop.pieces.mitred import Leg
    from develop.sections.section import Section
    from develop.surfaces.sheet import Sheet

__all__ = ["Offset"]

# Shorter than this [mm] on its short side, a leg has nothing left to be joined.
_LEAST_SIDE = 0.1


@dataclass(frozen=True, kw_only=True)
class Offset(Jointed):
    """Three mitred legs that carry the axis sideways; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "offset"
    example: ClassVar[dict[str, str | float]] = {
        "section": "flat-oval 500 x 250",
        "length": 1200,
        "offset": "300,0",
        "angle": 45,
    }

    section: SectionSpec = field(metadata=about(SECTION, "the section, square to the axis"))
    length: float = field(metadata=about(LENGTH, "distance between the planes of the ends"))
    offset: tuple[float, float] = field(
        metadata=about(OFFSET, "centre of end B, right of and above that of end A")
    )
    angle: float = field(
        default=radians(45.0),
        metadata=about(Angle(0.1, 90.0), "angle of the middle leg to the axis of the ends"),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    @property
    def middle(self) -> float:
        """Length of the middle leg on its axis [mm]."""
        return hypot(*self.offset) / sin(self.angle)

    @property
    def ends(self) -> float:
        """Length of each end leg on its axis [mm]."""
        return 0.5 * (self.length - self.middle * cos(self.angle))

    def surface(self) -> tuple[Leg, ...]:
        """The three legs, from end A to end B. Raises Refusal."""
        from develop.pieces.joint_edge import joint_edge
        from develop.pieces.mitred import Turn, legs_of
        from develop.pieces.wall import PLACES, reach

        section = self.in_wall(self.section, field="section")
        aside = hypot(*self.offset)
        if self.middle < _LEAST_SIDE:
            raise Refusal(
                field="offset",
                given=f"{number_text(self.offset[0])},{number_text(self.offset[1])} carries the axis nowhere",
                allowed=f"at least {number_text(_LEAST_SIDE)} mm to one side; for none, a straight piece",
            )
        towards = atan2(self.offset[1], self.offset[0])
        outer = section.offset(self.thickness * (1.0 - PLACES[self.sizes]))
        self._room(aside, max(reach(outer, towards), reach(outer, towards + pi)))
        return legs_of(
            section,
            [self.ends, self.middle, self.ends],
            [Turn(self.angle, towards), Turn(self.angle, towards + pi)],
            distance=self.distance(section),
            edge=joint_edge(self),
        )

    def _room(self, aside: float, throat: float) -> None:
        """Raises Refusal where an end leg is too short for its cut, with what works.

        aside: how far the axis is carried [mm]. throat: how far the wall's outside reaches to the
        throats [mm].
        The middle leg lies between parallel planes, so it is never too short.
        """
        side = self.ends - throat * tan(0.5 * self.angle)
        if side >= _LEAST_SIDE:
            return
        length = aside / tan(self.angle) + 2.0 * (throat * tan(0.5 * self.angle) + _LEAST_SIDE)
        works = f"length {number_text(ceil(length * 10.0 - 1e-6) / 10.0)} mm or more"
        angle = self._angle(aside, throat)
        raise Refusal(
            field="length",
            given=f"{number_text(self.length)} mm leaves the end legs {_LEAST_SIDE - side:.4g} mm short for "
            f"their cuts of {number_text(round(degrees(0.5 * self.angle), 4))}°",
            allowed=works + (f", or {angle}" if angle else ""),
        )

    def _angle(self, aside: float, throat: float) -> str:
        """The nearest angle that works, in words; empty where none does.

        With T = tan(angle / 2), cot(angle) = (1 − T²) / 2T, and the short side of an end leg is
        long enough where (aside − 4 throat) T² + 2 L T − aside >= 0, L the length less what two sides need.
        """
        left = self.length - 2.0 * _LEAST_SIDE
        root = left * left + aside * (aside - 4.0 * throat)
        if left <= 0.0 or root < 0.0:
            return ""
        least = degrees(2.0 * atan(aside / (left + sqrt(root))))
        rest = left - sqrt(root)
        most = min(degrees(2.0 * atan(aside / rest)), 90.0) if rest > 0.0 else 90.0
        least, most = ceil(least * 10.0 - 1e-6) / 10.0, floor(most * 10.0 + 1e-6) / 10.0
        if least > most:
            return ""
        if degrees(self.angle) < least:
            return f"angle {number_text(least)} or more" + (
                f", up to {number_text(most)}" if most < 90.0 else ""
            )
        return f"angle {number_text(most)} or less, down to {number_text(least)}"

    def _seams(self, section: Section) -> list[float]:
        """The direction of each leg's seam [rad]: of the middle leg, equally long all round, the bottom."""
        from develop.pieces.mitred import farthest

        if not isinstance(self.seam_at, str):
            return [self.seam_at] * 3
        towards = atan2(self.offset[1], self.offset[0])
        return [farthest(section, towards), 1.5 * pi, farthest(section, towards + pi)]

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.clearance import seam_warnings
        from develop.pieces.joint_edge import joint_edge
        from develop.pieces.mitred import built_of

        legs = self.surface()
        section = legs[0].section
        built = built_of(
            legs,
            self._seams(section),
            wording=lambda sheet, numbers: self._wording(sheet, section, numbers, units),
            divisions=self.divisions,
            cutting=lambda sheet, joints, share: self.cutting(sheet, joints=joints, units=units, share=share),
            edge=joint_edge(self),
            plate=self,
            units=units,
            name="leg",
        )
        return seam_warnings(built, clear=self.clear)

    def _wording(self, sheet: Sheet, section: Section, numbers: tuple[int, ...], units: str) -> Wording:
        """What the pattern of the legs of these numbers says."""
        from develop.pieces.joint_edge import joint_edge

        edge = joint_edge(self)
        right, up = self.offset
        on_axis = self.middle if numbers[0] == 2 else self.ends
        alone = replace(self, mark=f"{self.mark}-{numbers[0]}", quantity=self.quantity * len(numbers))
        return alone.wording(
            sheet,
            (self.section,),
            sizes=f"{section_words(self.section, units)}, offset, length {size_words(self.length, units)}",
            place=f"{shift_words(right, up, units)}, "
            f"middle leg at {number_text(round(degrees(self.angle), 6))}°",
            held=edge.held("lengths", "cuts"),
            units=units,
            around=section,
            more=(
                f"leg {numbers[0]} of 3, mitre angle {number_text(round(degrees(0.5 * self.angle), 4))}°, "
                f"{measured_words(on_axis, units)} long on the axis",
                *edge.words(mitre=True),
            ),
        )
