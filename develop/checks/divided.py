"""The checks of a side that is made in parts: together the parts are the whole side."""

from __future__ import annotations

from collections.abc import Sequence
from math import fsum

import numpy as np

from develop.checks.check import Check
from develop.checks.fold import folded
from develop.checks.marked import all_places, marks_miss
from develop.pattern.pattern import Pattern
from develop.solid.frame import Frame
from develop.solid.solid import Solid

__all__ = ["check_divided"]

_RELATIVE = 1e-11
_MEASURED = 1e-10
_AREA = 1e-10
_SMALLEST = 1e-9
_CLOSING = 0.01

_Used = tuple[Pattern, Solid, tuple[Frame, ...], tuple[int, ...]]


def check_divided(name: str, parts: Sequence[_Used], whole: Solid) -> tuple[Check, ...]:
    """The checks of all parts of a side together [mm, mm²].

    parts: each pattern with its part of the side, the frames that this is used in, in the frame of the
    whole, and the numbers of those places. Their edges add up to the girths and their areas to the whole
    side; and where one pattern serves several places it is folded up at each, and its marks are read there.
    """
    found = []
    for end, girth in zip("ab", whole.girths(), strict=True):
        curves = [(pattern.net.curve(end), len(frames)) for pattern, _, frames, _ in parts]
        total = fsum(curve.length * count for curve, count in curves if curve is not None)
        limit = max(_SMALLEST, (_RELATIVE if whole.cut_b is None else _MEASURED) * girth)
        found.append(Check(f"{name}, edges at END {end.upper()}", girth, total, limit, "mm"))
    area = whole.measures.area
    total = fsum(pattern.net.area * len(frames) for pattern, _, frames, _ in parts)
    found.append(Check(f"{name}, area", area, total, max(1e-6, _AREA * area), "mm²"))
    for pattern, solid, frames, numbers in parts:
        if len(frames) < 2:
            continue
        a, b, normal = folded(pattern, solid)
        worst = marked = 0.0
        for frame, number in zip(frames, numbers, strict=True):
            at = (a @ frame.axes + frame.origin, b @ frame.axes + frame.origin, normal @ frame.axes)
            on_a, on_b = whole.on_ends(*at)
            first = whole.end_a
            x, y = ((on_a - first.origin) @ first.back.T).T
            u = first.section.at_direction(np.arctan2(y, x))
            worst = max(worst, whole.misses(on_a, on_b, u), whole.plane_miss(at[0], at[1]))
            if not all_places(pattern):
                marked = max(marked, marks_miss(pattern, at, whole, place=number))
        found.append(Check(f"{pattern.mark}: at all its places, from the ends", 0.0, worst, _CLOSING, "mm"))
        found.append(Check(f"{pattern.mark}: witness marks at all its places", 0.0, marked, _CLOSING, "mm"))
    return tuple(found)
