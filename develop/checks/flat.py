"""The checks of a flat part: every edge and area against what its sections say, and its openings."""

from __future__ import annotations

from itertools import combinations

import numpy as np

from develop.checks.check import Check
from develop.checks.crossings import crossings, meet, within
from develop.checks.drawn import drawn_area, drawn_length
from develop.pattern.curve import Curve
from develop.pattern.pattern import Outline, Pattern
from develop.quadrature import Array
from develop.solid.end import End
from develop.solid.flat import FlatPlate, FlatRing, Holes, Stretch
from develop.solid.template import FlatTemplate, FloorOutlines

__all__ = ["check_flat"]

_RELATIVE = 1e-11
_SMALLEST = 1e-9
_DRAWN_LENGTH = 0.01
# A hole's centre is found from its drawn outline, which keeps within 0.0002 mm.
_PLACE = 1e-3


def check_flat(
    pattern: Pattern, part: FlatRing | FlatPlate | FlatTemplate | FloorOutlines
) -> tuple[Check, ...]:
    """Every check of a flat pattern [mm, mm²].

    Expected lengths come from support functions (Cauchy's formula, Steiner's for parallels), areas
    from closed forms. "As drawn" measures the Béziers that leave the program.
    """
    exact: dict[str, float] = {}
    drawn: dict[str, float] = {}
    count: dict[str, int] = {}
    for outline in (pattern.net, *pattern.openings):
        for name, curve in outline.curves:
            exact[name] = exact.get(name, 0.0) + curve.length
            drawn[name] = drawn.get(name, 0.0) + drawn_length(curve)
            count[name] = count.get(name, 0) + 1
    checks = []
    expected = part.lengths()
    for name in sorted(expected.keys() | exact.keys()):
        length = expected.get(name, 0.0)
        limit = max(_SMALLEST, _RELATIVE * length)
        words = name.replace("_", " ")
        words = f"{words}, all together" if name == "holes" else words if "edge" in words else f"{words} edge"
        checks.append(Check(f"{words} against its length", length, exact.get(name, 0.0), limit, "mm"))
        limit = _DRAWN_LENGTH * count.get(name, 1)
        checks.append(
            Check(f"{words} as drawn, against its length", length, drawn.get(name, 0.0), limit, "mm")
        )
    area = part.area
    exact_area = pattern.net.area - sum(opening.area for opening in pattern.openings)
    drawn_less = drawn_area(pattern.net) - sum(drawn_area(opening) for opening in pattern.openings)
    checks += [
        Check("area less openings", area, exact_area, max(1e-6, _RELATIVE * pattern.net.area), "mm²"),
        Check("area as drawn", area, drawn_less, max(1e-3, 1e-3 * sum(expected.values())), "mm²"),
    ]
    if part.holes is not None and part.holes.here:
        checks += _holes(pattern, part.holes, part.shift, closed=part.holes.here == part.holes.count)
    if isinstance(part, FlatTemplate):
        (profile,) = (curve for name, curve in pattern.net.curves if name == "profile")
        checks.append(_off("profile", profile, part.end("profile"), part.shift))
    if isinstance(part, FloorOutlines):
        checks += _outlines(pattern, part)
    outlines = (pattern.cut, *pattern.openings)
    checks += [
        Check(
            "openings not clear of the outline or of each other", 0.0, float(_unclear(outlines)), 0.0, "times"
        ),
        Check("outlines cross themselves", 0.0, float(sum(map(crossings, outlines))), 0.0, "times"),
    ]
    return tuple(checks)


def _off(name: str, curve: Curve, end: End, shift: Array) -> Check:
    """How far a drawn curve lies off the closed curve that it is, or is a part of."""
    points = curve.polyline(_PLACE) - shift
    far = end.distance(np.column_stack([points, np.zeros(len(points))]))
    return Check(f"{name}, largest distance from its section", 0.0, float(far.max()), _PLACE, "mm")


def _outlines(pattern: Pattern, part: FloorOutlines) -> list[Check]:
    """The outlines drawn on a sheet: the girth of each by Cauchy's formula, and its place."""
    found = []
    for (name, end), curve in zip(part.outlines, pattern.thin, strict=True):
        limit = max(_SMALLEST, _RELATIVE * end.girth)
        found += [
            Check(f"outline of {name} against its girth", end.girth, curve.length, limit, "mm"),
            Check(f"outline of {name} as drawn", end.girth, drawn_length(curve), _DRAWN_LENGTH, "mm"),
            _off(f"outline of {name}", curve, end, part.shift),
        ]
    return found


def _holes(pattern: Pattern, holes: Holes, shift: Array, *, closed: bool) -> list[Check]:
    """How far the drawn holes lie off the pitch line, and their spacing along it, from its support."""
    bounds = [o.curves[0][1].bounds() for o in pattern.openings if o.curves[0][0] == "holes"]
    centres = np.array([low_high.mean(axis=0) for low_high in bounds]) - shift
    u = holes.pitch.at_direction(np.arctan2(centres[:, 1], centres[:, 0]))
    off = np.hypot(*(holes.pitch.point(u) - centres).T)
    found = [
        Check("holes off the pitch line, largest distance", 0.0, float(off.max()), _PLACE, "mm"),
        Check("number of holes", float(holes.here), float(len(centres)), 0.0, ""),
    ]
    following = np.roll(u, -1) if closed else u[1:]
    if len(centres) > 1:
        arcs = [
            Stretch(holes.pitch, a, b).length for a, b in zip(u.tolist(), following.tolist(), strict=False)
        ]
        worst = max(arcs, key=lambda arc: abs(arc - holes.spacing))
        found.append(Check("hole spacing along the pitch line, worst", holes.spacing, worst, _PLACE, "mm"))
    return found


def _unclear(outlines: tuple[Outline, ...]) -> int:
    """How many openings do not lie wholly in the outline (the first), or meet another opening."""
    openings = outlines[1:]
    lines = [np.vstack([curve.polyline(0.01)[:-1] for _, curve in each.curves]) for each in outlines]
    found = sum(
        1 for k in range(1, len(lines)) if meet(lines[0], lines[k]) or not within(lines[k][:1], lines[0])
    )
    low, high = (np.array([getattr(line, f)(axis=0) for line in lines[1:]]) for f in ("min", "max"))
    for i, j in combinations(range(len(openings)), 2):
        if (low[i] > high[j]).any() or (low[j] > high[i]).any():
            continue
        one, other = lines[i + 1], lines[j + 1]
        found += int(meet(one, other) or within(one[:1], other) or within(other[:1], one))
    return found
