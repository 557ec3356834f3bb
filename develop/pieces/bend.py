"""A segmental bend: gores of one section, the first and the last half as long as the others."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from math import atan, ceil, degrees, pi, tan
from typing import TYPE_CHECKING, ClassVar

from develop.errors import InputError, Refusal
from develop.pieces.common import Jointed
from develop.pieces.field_types import (
    BEND_SEAM,
    DIRECTION,
    MARK,
    SECTION,
    Angle,
    Choice,
    Count,
    Length,
    Number,
)
from develop.pieces.fields import about
from develop.pieces.wording import direction_words, measured_words, section_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.assemble import Wording
    from develop.pieces.built import Built
    from develop.pieces.cutting import Cutting
    from develop.pieces.mitred import Leg
    from develop.sections.section import Section
    from develop.surfaces.sheet import Sheet

__all__ = ["Bend"]

# Shorter than this [mm] at the throat, a half gore has nothing left to be joined.
_LEAST_THROAT = 0.1
_ALIKE = 1e-9
# As any length that can be given [mm].
_LONGEST_HEEL = 100_000.0


@dataclass(frozen=True, kw_only=True)
class Bend(Jointed):
    """A segmental bend; lengths in mm, angles in radians.

    With n gores the two at the ends are half ones, so there are n − 1 mitres, each of
    angle / (2 (n − 1)) (common practice: the axis touches the circle of the radius at each end
    and in the middle of each full gore).
    """

    kind: ClassVar[str] = "bend"
    example: ClassVar[dict[str, str | float]] = {
        "section": "ellipse 700 x 350",
        "angle": 90,
        "throat_radius": 350,
        "gores": 5,
        "turns_to": "right",
    }

    section: SectionSpec = field(metadata=about(SECTION, "the section, square to the axis"))
    angle: float = field(metadata=about(Angle(0.1, 179.9), "angle that the axis is turned by"))
    radius: float | None = field(
        default=None, metadata=about(Length(), "radius to the axis; or give throat_radius or ratio")
    )
    throat_radius: float | None = field(
        default=None,
        metadata=about(Length(), "radius to the throat, where sizes are measured", not_with="radius"),
    )
    ratio: float | None = field(
        default=None,
        metadata=about(
            Number(0.01, 1000.0),
            "radius to the axis over the width in the plane of the bend",
            not_with=("radius", "throat_radius"),
        ),
    )
    gores: int = field(default=5, metadata=about(Count(2, 200), "gores, the two half ones counted"))
    turns_to: float = field(
        default=0.5 * pi, metadata=about(DIRECTION, "direction the bend turns to, the side of the throat")
    )
    seams: str = field(
        default="same",
        metadata=about(
            Choice(("same", "alternate")),
            "seams of the gores on one side, or on opposite sides in turn, so that all gores are cut from "
            "one rectangle",
        ),
    )
    stagger: float = field(
        default=0.0,
        metadata=about(
            Angle(),
            "how far the seam of each gore is moved on, anticlockwise, from that of the gore before",
            handed=True,
        ),
    )
    gore_fit: str = field(
        default="flush",
        metadata=about(
            Choice(("flush", "into")), "gores edge to edge, or END B of each smaller, to go into the next"
        ),
    )
    clearance: float | None = field(
        default=None,
        metadata=about(
            Length(least=0.0, most=100.0),
            "left on each side of a gore that goes into the next; when left out, 0.5 mm in sheet and 1 mm in "
            "plate of 3 mm and more",
        ),
    )
    gore_lap: float = field(
        default=15.0,
        metadata=about(
            Length(least=0.0, most=200.0),
            "how far a gore that goes into the next reaches past the mitre's plane",
        ),
    )
    seam_at: float | str = field(
        default="shortest",
        metadata=about(
            BEND_SEAM,
            "where the first gore's seam is, facing end B; side: a quarter turn clockwise from turns_to",
            own=False,
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    @property
    def mitre(self) -> float:
        """The mitre angle [rad]: between each cut and a square one."""
        return self.angle / (2 * (self.gores - 1))

    def surface(self) -> tuple[Leg, ...]:
        """The gores, from end A to end B. Raises Refusal."""
        from develop.pieces.joint_edge import joint_edge
        from develop.pieces.mitred import Turn, legs_of
        from develop.pieces.wall import PLACES, reach

        if self.stagger and self.seams == "alternate":
            raise Refusal(
                field="stagger",
                given=f"{_angle(self.stagger)} is given together with seams = alternate",
                allowed="one of the two",
            )
        section = self.in_wall(self.section, field="section")
        radius = self._radius()
        outer = section.offset(self.thickness * (1.0 - PLACES[self.sizes]))
        self._room(radius, reach(outer, self.turns_to))
        self._long(radius + reach(outer, self.turns_to + pi))
        half = radius * tan(self.mitre)
        return legs_of(
            section,
            [half, *[2.0 * half] * (self.gores - 2), half],
            [Turn(2.0 * self.mitre, self.turns_to)] * (self.gores - 1),
            distance=self.distance(section),
            edge=joint_edge(self),
            into=self._into(section),
        )

    @property
    def _smaller(self) -> float:
        """How much smaller the end is that goes into the next gore, on each side [mm]."""
        from develop.pieces.fitted import left_clear

        return self.thickness + left_clear(self.clearance, self.thickness)

    def _into(self, section: Section) -> Section | None:
        """The section of an end that goes into the next gore; None for flush gores. Raises Refusal."""
        from develop.pieces.joint_edge import joint_edge

        if self.gore_fit == "flush":
            if self.clearance is not None:
                raise Refusal(
                    field="clearance",
                    given=f"{number_text(self.clearance)} mm, and the gores are flush",
                    allowed="gore_fit = into with it",
                )
            return None
        if joint_edge(self).how != "net":
            raise Refusal(
                field="gore_fit",
                given="into, with edges that are worked out to touch",
                allowed="touching = net with it, or flush gores",
            )
        if len(section.loose_spots):
            # Where the curve is as good as flat, two nearly equal ends pair their points by rounding.
            raise Refusal(
                field="gore_fit",
                given="into, of a section with flat spots such as a superellipse",
                allowed="flush, or a round, ellipse, flat-oval or rectangle section",
            )
        try:
            return section.offset(-self._smaller)
        except InputError:
            raise Refusal(
                field="gore_fit",
                given=f"into needs a wall {number_text(round(self._smaller, 3))} mm farther in, where the "
                f"tightest radius is {section.least_radius:.4g} mm",
                allowed="flush, or a rounder section",
            ) from None

    def _radius(self) -> float:
        """The radius to the axis [mm]. Raises Refusal when it is not given in any way."""
        if self.radius is not None:
            return self.radius
        from develop.pieces.wall import reach
        from develop.sections import section_of

        section = section_of(self.section)
        if self.throat_radius is not None:
            return self.throat_radius + reach(section, self.turns_to)
        if self.ratio is not None:
            return self.ratio * _across(section, self.turns_to)
        raise Refusal(field="radius", given="not given", allowed="one of radius, throat_radius and ratio")

    def _room(self, radius: float, throat: float) -> None:
        """Raises Refusal, with the smallest radius that works, where the gores would cross at the throat.

        throat: how far the wall's outside reaches from the axis to the throat [mm].
        """
        length = (radius - throat) * tan(self.mitre)
        if length >= _LEAST_THROAT:
            return
        least = throat + _LEAST_THROAT / tan(self.mitre)
        from develop.pieces.wall import reach
        from develop.sections import section_of

        section = section_of(self.section)
        # Rounded up, to a radius that does work.
        if self.radius is not None:
            name, works = "radius", f"{number_text(_up(least, 10))} mm"
        elif self.throat_radius is not None:
            name = "throat_radius"
            works = f"{number_text(_up(least - reach(section, self.turns_to), 10))} mm"
        else:
            name = "ratio"
            works = number_text(_up(least / _across(section, self.turns_to), 1000))
        given = (
            f"the gores would cross at the throat, {number_text(round(throat, 1))} mm from the axis of a "
            f"bend of {number_text(round(radius, 1))} mm radius"
            if radius < throat
            else f"the half gores would be {max(length, 0.0):.2g} mm long at the throat"
        )
        fewer = self._fewer(radius - throat)
        raise Refusal(
            field=name,
            given=given,
            allowed=f"{works} or more" + (f", or {fewer} gores or fewer" if fewer else ""),
        )

    def _long(self, heel: float) -> None:
        """Raises Refusal, with the fewest gores that work, where the gores are too long to be made.

        heel: from the centre of the bend to the wall's outside at the heel [mm].
        """
        if heel * tan(self.mitre) <= _LONGEST_HEEL:
            return
        least = ceil(self.angle / (2.0 * atan(_LONGEST_HEEL / heel)) - 1e-9) + 1
        raise Refusal(
            field="gores",
            given=f"{self.gores} gores need a mitre angle of {_angle(self.mitre)}, and are "
            f"{number_text(round(heel * tan(self.mitre) / 1000.0, 1))} m long at the heel",
            allowed=f"{least} gores or more",
        )

    def _fewer(self, clear: float) -> int:
        """The most gores that the throat has room for, 0 where there is none for two."""
        if clear <= 0.0 or clear * tan(0.5 * self.angle) < _LEAST_THROAT:
            return 0
        gores = 2
        while clear * tan(self.angle / (2 * gores)) >= _LEAST_THROAT:
            gores += 1
        return gores

    def _seams(self, section: Section) -> list[float]:
        """The direction of each gore's seam [rad]."""
        from develop.pieces.mitred import farthest

        throat, heel = farthest(section, self.turns_to), farthest(section, self.turns_to + pi)
        side = self.turns_to - 0.5 * pi
        words = {"shortest": throat, "throat": throat, "heel": heel, "side": side, "other side": side + pi}
        first = words[self.seam_at] if isinstance(self.seam_at, str) else self.seam_at
        if self.seams == "same":
            return [first + k * self.stagger for k in range(self.gores)]
        opposite = {throat: heel, heel: throat}.get(first, first + pi)
        return [opposite if k % 2 else first for k in range(self.gores)]

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.clearance import seam_warnings
        from develop.pieces.joint_edge import joint_edge
        from develop.pieces.mitred import built_of

        gores = self.surface()
        section = gores[0].section
        built = built_of(
            gores,
            self._seams(section),
            wording=lambda sheet, numbers: self._wording(sheet, section, numbers, units),
            divisions=self.divisions,
            cutting=lambda sheet, joints, share: self._lapped(
                self.cutting(sheet, joints=joints, units=units, share=share), joints, units
            ),
            edge=joint_edge(self),
            plate=self,
            units=units,
            name="gore",
        )
        return seam_warnings(built, clear=self.clear)

    def _lapped(self, cutting: Cutting, joints: str, units: str) -> Cutting:
        """What is cut of a gore, with the lap of an end that goes into the next one."""
        if self.gore_fit == "flush" or "b" not in joints or not self.gore_lap:
            return cutting
        from develop.pattern.allowance import Allowance
        from develop.pieces.cutting import Added

        return replace(
            cutting,
            allowances={**cutting.allowances, "b": Allowance(self.gore_lap)},
            facts=(
                *cutting.facts,
                f"END B: {measured_words(self.gore_lap, units)} added to lap in the next gore",
            ),
            added=(
                *(each for each in cutting.added if each.edge != "b"),
                Added("b", "gore lap", self.gore_lap),
            ),
        )

    def _wording(self, sheet: Sheet, section: Section, numbers: tuple[int, ...], units: str) -> Wording:
        """What the pattern of the gores of these numbers says."""
        from develop.pieces.joint_edge import joint_edge
        from develop.pieces.wall import reach

        radius, slope, edge = self._radius(), tan(self.mitre), joint_edge(self)
        # Of the plate, whose edge ends at its outside in the throat and at its inside at the heel.
        throat, heel = (
            (radius - reach(section, self.turns_to) - edge.at(inward=False)) * slope,
            (radius + reach(section, self.turns_to + pi) + edge.at(inward=True)) * slope,
        )

        def short(mm: float) -> str:
            return measured_words(mm, units)

        way = {1: ", hard way", -1: ", easy way", 0: ""}[_way(section, self.turns_to)]
        lengths = f"end gores: throat {short(throat)}, heel {short(heel)}"
        if self.gores > 2:
            lengths += f"; full gores: throat {short(2.0 * throat)}, heel {short(2.0 * heel)}"
        width = throat if {1, self.gores} & set(numbers) else 2.0 * throat
        which = ", ".join(map(str, numbers))
        alone = replace(self, mark=f"{self.mark}-{numbers[0]}", quantity=self.quantity * len(numbers))
        return alone.wording(
            sheet,
            (self.section,),
            sizes=f"{section_words(self.section, units)}, bend of {_angle(self.angle)}{way}, "
            f"radius {short(radius)} to the axis",
            held=edge.held("lengths", "cuts"),
            units=units,
            around=section,
            place=f"throat at {direction_words(self.turns_to)}, mitre angle {_angle(self.mitre)}",
            more=(
                f"gore{'s' if len(numbers) > 1 else ''} {which} of {self.gores}",
                lengths,
                f"throat width {short(width)}",
                *edge.words(mitre=True),
                *self._fit_words(numbers, units),
            ),
        )

    def _fit_words(self, numbers: tuple[int, ...], units: str) -> tuple[str, ...]:
        """What the sheets of these gores say of how they fit."""
        if self.gore_fit == "flush":
            return ()
        if self.gores in numbers:
            return ("END A takes the gore before it",)
        return (
            f"END B goes into the next gore: {measured_words(self._smaller, units)} smaller on each side",
        )


def _angle(angle: float) -> str:
    return f"{number_text(round(degrees(angle), 4))}°"


def _up(value: float, parts: int) -> float:
    """The value rounded up to a whole number of parts of 1."""
    return ceil(value * parts - 1e-9) / parts


def _across(section: Section, direction: float) -> float:
    """The width of the section along a direction [mm]."""
    from develop.pieces.wall import reach

    return reach(section, direction) + reach(section, direction + pi)


def _way(section: Section, turns_to: float) -> int:
    """1 for the hard way, the wide side in the plane of the bend; −1 for the easy way; 0 for neither."""
    inside, beside = _across(section, turns_to), _across(section, turns_to + 0.5 * pi)
    if abs(inside - beside) <= _ALIKE * max(inside, beside):
        return 0
    return 1 if inside > beside else -1
