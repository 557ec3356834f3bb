"""A duct of any section through a flat sloping plate, such as a roof."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING, ClassVar

from develop.pieces.common import Flat
from develop.pieces.field_types import DIRECTION, MARK, SEAM, SECTION, Angle, Count, Length, Pitch
from develop.pieces.fields import about
from develop.pieces.neutral import Neutral, neutral_of
from develop.pieces.rule_types import NEUTRAL
from develop.pieces.wording import direction_words, plate_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.built import Built
    from develop.surfaces.cylinder import Cylinder

__all__ = ["Opening"]

_STEEPEST = 85.0
_SMALL = Length(least=0.0, most=10_000.0)


@dataclass(frozen=True, kw_only=True)
class Opening(Flat):
    """A duct through a flat sloping plate, with a collar if asked for; lengths in mm, angles in radians.

    The duct's axis is upright, END B above: facing END B is looking down on the plate.
    """

    kind: ClassVar[str] = "opening"
    example: ClassVar[dict[str, str | float]] = {
        "section": "round 327",
        "pitch": "5 in 12",
        "clearance": 50,
        "collar": 150,
    }

    section: SectionSpec = field(metadata=about(SECTION, "outside of the duct, square to its axis"))
    slope: float = field(
        default=0.0,
        metadata=about(
            Angle(least=0.0, most=_STEEPEST),
            "of the plate, from a plane square to the duct",
            not_with="pitch",
        ),
    )
    pitch: float | None = field(
        default=None, metadata=about(Pitch(_STEEPEST), "the slope as a rise in a run", not_with="slope")
    )
    high_side: float = field(
        default=1.5707963267948966,
        metadata=about(DIRECTION, "the direction in which the plate rises, facing end B"),
    )
    clearance: float = field(
        default=0.0, metadata=about(_SMALL, "between duct and hole all round, measured square to the duct")
    )
    margin: float = field(
        default=50.0,
        metadata=about(Length(least=1.0, most=10_000.0), "plate round the hole, on its own face"),
    )
    collar: float | None = field(
        default=None,
        metadata=about(Length(), "height of an upstand round the hole, above the plate at its high side"),
    )
    neutral_line: float | str = field(
        default=0.5,
        metadata=about(
            NEUTRAL,
            "where the collar's neutral line lies, 0 inside to 1 outside, or a rule that tells",
            own=False,
        ),
    )
    seam_at: float | str = field(
        default="shortest", metadata=about(SEAM, "where the collar's seam is, facing end B", own=False)
    )
    divisions: int = field(
        default=24,
        metadata=about(
            Count(least=3, most=720), "equal arcs of the collar's end A, a line at each", own=False
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    @property
    def _slope(self) -> float:
        return self.slope if self.pitch is None else self.pitch

    def surface(self) -> Cylinder:
        """The wall of the hole from the plate upwards, as high as the collar. Raises Refusal."""
        from math import cos, sin, tan

        import numpy as np

        from develop.sections import section_of
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        hole = section_of(self.section).offset(self.clearance)
        rise = tan(self._slope) * np.array([cos(self.high_side), sin(self.high_side)])
        high = float(hole.support(rise[0], rise[1]))
        # The collar stands on the hole's edge, its inside level with it.
        wall = Cylinder(hole, Plane(0.0, rise), Plane(high + (self.collar or 1.0), np.zeros(2)))
        return replace(wall, distance=self.thickness * self._neutral(wall).place)

    def _neutral(self, wall: Cylinder) -> Neutral:
        """Where the collar's neutral line lies. Raises Refusal."""
        if self.collar is None:
            return Neutral(0.5)
        return neutral_of(
            self.neutral_line,
            thickness=self.thickness,
            inner=0.0,
            sheet=lambda: replace(wall, distance=0.0).sheet(float(wall.section.breaks[0])),
        )

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.built import Built, Joint, Part
        from develop.pieces.roof_plate import collar_part, plate_part

        wall = self.surface()
        facts = self._facts()
        parted = self.collar is not None
        plate: Part = plate_part(
            wall.section,
            slope=self._slope,
            high_side=self.high_side,
            margin=self.margin,
            mark=f"{self.mark}-plate" if parted else self.mark,
            kind=self.kind,
            quantity=self.quantity,
            facts=facts,
            material=self._material(),
        )
        if not parted:
            return Built((plate,))
        collar = collar_part(
            wall,
            seam_at=self.seam_at,
            divisions=self.divisions,
            mark=f"{self.mark}-collar",
            kind=self.kind,
            quantity=self.quantity,
            facts=(
                f"collar round {self.section.text} and {number_text(self.clearance)} clear, inside sizes",
                f"{number_text(self.collar or 0.0)} high at the high side, END A stands on the plate",
                *facts[1:2],
                *self._neutral(wall).words(),
            ),
            material=self._material(),
            lines_as="full" if self.thickness >= 3.0 else "ticks",
        )
        return Built((plate, collar), (Joint(1, "a", 0, "opening", name="collar to plate"),))

    def _material(self) -> str:
        return plate_words(self.material, self.thickness)

    def _facts(self) -> tuple[str, ...]:
        from math import degrees, tan

        slope = self._slope
        clear = f", {number_text(self.clearance)} clear all round" if self.clearance else ""
        rise = 12.0 * tan(slope)
        return (
            f"for {self.section.text}{clear}",
            f"slope {number_text(round(degrees(slope), 3))}°, pitch {number_text(round(rise, 3))} in 12, "
            f"high side {direction_words(self.high_side).upper()}"
            if slope
            else f"no slope, {direction_words(self.high_side).upper()} at the upper edge",
            f"{number_text(self.margin)} of plate round the hole",
        )
