"""The reading of a measured section that fits none of its neighbours."""

from __future__ import annotations

from collections.abc import Sequence
from math import inf, radians, sin

__all__ = ["odd_reading"]

# Less than this part of a diameter is rounding.
_SAME = 1e-9
_DIGITS = 6  # of a change [mm] that is as good as another
_HALF_TURN = 180.0


def odd_reading(directions: Sequence[float], diameters: Sequence[float]) -> tuple[int, float, float] | None:
    """The reading that makes a hollow: its number, and the least and greatest diameter [mm] that the
    others leave it, inf where they set no bound; None where no single reading is at fault.

    directions [deg], ascending in a half turn, and diameters [mm], (n,). A diameter is the width of the
    curve between two parallel jaws, a support function: of three directions the middle one has at most
    w(b) = [w(a) sin(c - b) + w(c) sin(b - a)] / sin(c - a), as the tangents at a and c meet there
    (Minkowski: supports are sublinear). The same for the outer ones says how small a reading may be.
    Of the readings that, left out, leave a possible curve it is the one that least has to change; of two
    that have to change alike, the smaller.
    """
    readings = list(zip(directions, diameters, strict=True))
    found: list[tuple[float, float, int, float, float]] = []
    for i, (at, size) in enumerate(readings):
        # The others, from the one after it to the one before it a half turn on.
        others = readings[i + 1 :] + [(d + _HALF_TURN, w) for d, w in readings[:i]]
        if len(others) < 2 or _violated(others):
            continue
        low, high = _range(at + _HALF_TURN, others)
        off = max(low - size, size - high)
        if low <= high and off > _SAME * size:
            found.append((round(off, _DIGITS), size, i, low, high))
    return min(found)[2:] if found else None


def _violated(readings: list[tuple[float, float]]) -> bool:
    """Whether any reading is more than its two neighbours allow; the readings go on after a half turn."""
    n = len(readings)
    round_it = readings + [(d + _HALF_TURN, w) for d, w in readings[:2]]
    return any(
        round_it[k + 1][1] > _most(round_it[k], round_it[k + 1][0], round_it[k + 2]) * (1.0 + _SAME)
        for k in range(n)
    )


def _most(before: tuple[float, float], at: float, after: tuple[float, float]) -> float:
    """The greatest width at a direction [deg] between two others, inf if they are a half turn apart."""
    whole = sin(radians(after[0] - before[0]))
    if after[0] - before[0] >= _HALF_TURN - _SAME:
        return inf
    return (before[1] * sin(radians(after[0] - at)) + after[1] * sin(radians(at - before[0]))) / whole


def _range(at: float, others: list[tuple[float, float]]) -> tuple[float, float]:
    """What the others, which lie round a direction [deg] from the next one to the last, allow there."""
    following, last = others[0], others[-1]
    following = (following[0] + _HALF_TURN, following[1])
    high = _most(last, at, following)
    low = 0.0
    # A neighbour may not be more than this reading and the one beyond it allow.
    second = (others[1][0] + _HALF_TURN, others[1][1])
    for near, far in ((last, others[-2]), (following, second)):
        reach = abs(near[0] - far[0])
        if abs(at - far[0]) >= _HALF_TURN - _SAME:
            continue
        share = sin(radians(abs(at - near[0]))) / sin(radians(reach))
        low = max(low, near[1] * sin(radians(abs(at - far[0]))) / sin(radians(reach)) - far[1] * share)
    return low, high
