"""The checks of one pattern against the finished piece, as they stand in the record."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import fsum

import numpy as np

from develop.checks.crossings import crossings
from develop.checks.drawn import drawn_area, drawn_length
from develop.checks.fold import closing_miss, folded
from develop.checks.joint import Side, joint_miss
from develop.checks.marked import all_places, drawn_miss, marks_miss, roll_lines_miss, table_miss
from develop.checks.openings import opening_miss
from develop.checks.touching import touching_misses
from develop.pattern.curve import Curve
from develop.pattern.pattern import Outline, Pattern
from develop.solid.meeting import MeetingEnd
from develop.solid.solid import Solid

__all__ = ["Check", "check", "check_joint"]

_RELATIVE = 1e-11
# An edge that is a cut across the side is measured in space by differentiating positions.
_MEASURED = 1e-10
# Both areas are sums over panels whose ends differ; on extreme shapes their rounding reaches 1e-10.
_AREA = 1e-10
_ROUNDING = 1e-13
_SMALLEST = 1e-9
# Drawn chains lie within 0.0002 mm of the exact edges.
_DRAWN_LENGTH = 0.01
_CLOSING = 0.01
_DRAWN = 1e-3
# Where a branch only grazes its header, a height is no better than the root of the rounding.
_TABLE = 1e-5
_TURN = 1e-4  # [degrees]


@dataclass(frozen=True)
class Check:
    """One check: `got` may differ from `expected` by `limit`, all in `unit`."""

    name: str
    expected: float
    got: float
    limit: float
    unit: str

    @property
    def holds(self) -> bool:
        """Whether the difference is within the limit; not for a got that is no number."""
        return bool(abs(self.got - self.expected) <= self.limit)


def check_joint(name: str, side: Sequence[Side], other: Sequence[Side]) -> tuple[Check, ...]:
    """The checks of a joint: equal edges that lie on each other within the limit of the closing check.

    side, other: of each of the two, all the parts that have the edge. Where one sheet is developed on
    another surface than its edge lies on, the lengths differ; so they do between a taper, whose thickness
    lies square to its plate, and a parallel side.
    """
    length, expected = (fsum(each.length for each in parts) for parts in (other, side))
    limit = max(_SMALLEST, _RELATIVE * expected)
    miss = max(joint_miss(mine, yours) for mine in side for yours in other)
    found = Check(f"{name}: largest distance of the folded edges", 0.0, miss, _CLOSING, "mm")
    one, two = side[0], other[0]
    if one.distance != two.distance or (one.distance and one.tapers != two.tapers):
        return (found,)
    return (Check(f"{name}: edges that are joined", expected, length, limit, "mm"), found)


def check(pattern: Pattern, solid: Solid) -> tuple[Check, ...]:
    """Every check of a pattern [mm, mm²] against the finished piece.

    The girths come from the ends' support functions (Cauchy) where the sheet lies on the surface
    that carries them, else, and for the area, from quadrature in space over lines that were found
    by halving angles. "As drawn" measures the Béziers that leave the program.
    """
    net = pattern.net
    girths = dict(zip("ab", solid.girths(), strict=True))
    whole = "girth" if solid.stop is None else "stretch of the girth"
    checks = []
    for name, girth in girths.items():
        curve = net.curve(name)
        length = curve.length if curve else 0.0
        # The places of points are exact to about 1e-16 of the whole piece, not of a small end.
        share = _RELATIVE if solid.cut_b is None else _MEASURED
        limit = max(_SMALLEST, share * girth, _ROUNDING * max(girths.values()))
        drawn = drawn_length(curve) if curve else 0.0
        end = f"edge at END {name.upper()}"
        checks.append(Check(f"{end} against the {whole}", girth, length, limit, "mm"))
        checks.append(Check(f"{end} as drawn, against the {whole}", girth, drawn, _DRAWN_LENGTH, "mm"))
    left, right = (net.curve(f"seam_{side}") for side in ("left", "right"))
    assert left is not None
    assert right is not None
    checks += _seams(solid, left, right, inside_up=pattern.face == "inside")
    area = solid.measures.area - sum(joint.opened for joint in solid.openings)
    got = net.area - sum(opening.area for opening in pattern.openings)
    lines = folded(pattern, solid)
    roll_off, turn_off = roll_lines_miss(pattern)
    checks += [
        Check("area against the finished side", area, got, max(1e-6, _AREA * area), "mm²"),
        Check(
            "area as drawn, against the finished side",
            area,
            drawn_area(net) - sum(drawn_area(each) for each in pattern.openings),
            # A strip of the chains' tolerance along the whole outline.
            max(1e-3, 1e-3 * (girths["a"] + girths["b"])),
            "mm²",
        ),
        Check(
            "closing check, largest distance from the ends",
            0.0,
            closing_miss(pattern, solid, lines),
            _CLOSING,
            "mm",
        ),
        Check("outline as drawn, largest distance from the lines", 0.0, drawn_miss(pattern), _DRAWN, "mm"),
        Check("roll lines, largest distance from the lines", 0.0, roll_off, _DRAWN, "mm"),
        Check("roll lines, largest error of a turn", 0.0, turn_off, _TURN, "degrees"),
        Check("table, largest error", 0.0, table_miss(pattern, solid), _TABLE, "mm"),
        *(
            [Check("witness marks, largest error", 0.0, marks_miss(pattern, lines, solid), _CLOSING, "mm")]
            if solid.stop is None or all_places(pattern)
            else []
        ),
        Check("outline crosses itself", 0.0, float(crossings(pattern.cut)), 0.0, "times"),
    ]
    for name in "ab":
        touching = touching_misses(pattern, solid, lines, name)
        if touching is None:
            continue
        off, over = touching
        words = f"edge at END {name.upper()}, at the joint"
        checks.append(Check(f"{words}: largest distance of what touches", 0.0, off, _CLOSING, "mm"))
        if over is not None:
            checks.append(Check(f"{words}: largest overlap of the wall", 0.0, over, _CLOSING, "mm"))
    for outline, joint in zip(pattern.openings, solid.openings, strict=True):
        checks += _opening(pattern, solid, outline, joint)
    return tuple(checks)


def _seams(solid: Solid, left: Curve, right: Curve, *, inside_up: bool) -> list[Check]:
    """The checks of the seams of a pattern against the lines of the finished piece that they lie on."""
    true_left, true_right = (
        float(np.linalg.norm(line[1] - line[0])) for line in (solid.sheet_seam, solid.sheet_stop)
    )
    if inside_up:
        true_left, true_right = true_right, true_left
    limit = max(1e-6, _RELATIVE * max(true_left, true_right))
    if solid.stop is None:
        return [
            Check("seam, right side against left", drawn_length(left), drawn_length(right), limit, "mm"),
            Check("seam against the finished piece", true_left, drawn_length(left), limit, "mm"),
        ]
    return [
        Check(f"{side} seam against the finished piece", true, drawn_length(curve), limit, "mm")
        for side, true, curve in (("left", true_left, left), ("right", true_right, right))
    ]


def _opening(pattern: Pattern, solid: Solid, outline: Outline, joint: MeetingEnd) -> list[Check]:
    """The checks of an opening of a header against its joint with a branch."""
    ((_, curve),) = outline.curves
    found = [
        Check(
            "opening, area against the joint",
            joint.opened,
            outline.area,
            max(1e-6, _AREA * joint.opened),
            "mm²",
        ),
        Check(
            "opening, largest distance from the joint",
            0.0,
            opening_miss(pattern, solid, curve, joint),
            _CLOSING,
            "mm",
        ),
        Check("opening crosses itself", 0.0, float(crossings(outline)), 0.0, "times"),
    ]
    if solid.distance == 0.0:
        limit = max(_SMALLEST, _RELATIVE * joint.girth)
        found.insert(0, Check("opening, edge against the joint", joint.girth, curve.length, limit, "mm"))
    return found
