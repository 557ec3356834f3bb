"""The opposite hand: whether its finished piece is the mirror image of the drawn one, right for left."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from develop.checks.check import Check
from develop.quadrature import Array
from develop.solid import Made
from develop.solid.end import End
from develop.solid.flat import FlatRing
from develop.solid.frame import Frame
from develop.solid.solid import Solid

__all__ = ["check_hand"]

_FLIP = np.array([-1.0, 1.0, 1.0])
_POINTS = 96
_MISS = 1e-4

_Placed = tuple[Made, tuple[Frame, ...]]


def check_hand(name: str, parts: Sequence[_Placed], others: Sequence[_Placed]) -> Check:
    """The largest distance [mm] of the mirrored ends of a piece's parts from those of its opposite hand.

    parts, others: of the two, each part with the frames it stands in, in the same order. Both
    finished pieces were found from their fields alone.
    """
    worst = 0.0
    for (part, frames), (other, other_frames) in zip(_told_apart(parts), _told_apart(others), strict=True):
        for here, there in zip(frames, other_frames, strict=True):
            worst = max(worst, _miss(part, here, other, there))
    return Check(f"{name}: largest distance from the mirror image", 0.0, worst, _MISS, "mm")


def _miss(part: Made, here: Frame, other: Made, there: Frame) -> float:
    """Largest distance [mm] of the mirrored ends of a part, at `here`, from the other's at `there`."""

    def local(points: Array) -> Array:
        return np.asarray(((points @ here.axes + here.origin) * _FLIP - there.origin) @ there.axes.T)

    if isinstance(part, Solid) and isinstance(other, Solid) and other.cut_b is not None:
        # A cut end is found along the lines of the side, not as a curve of its own.
        a, b, end = local(part.rim_a(_POINTS)), local(part.rim_b(_POINTS)), other.end_a
        x, y = ((a - end.origin) @ end.back.T).T
        return other.misses(a, b, end.section.at_direction(np.arctan2(y, x)))
    rims = zip(_rims(part), _rims(other), strict=True)
    return max(float(np.max(yours.end.distance(local(mine.points)))) for mine, yours in rims)


def _told_apart(parts: Sequence[_Placed]) -> list[_Placed]:
    """The parts, but of those of one flat ring only the first: all lie on the same curves."""
    found: list[_Placed] = []
    for part, frames in parts:
        if not isinstance(part, FlatRing):
            found.append((part, frames))
        elif not any(isinstance(each, FlatRing) for each, _ in found):
            found.append((part, frames[:1]))
    return found


@dataclass(frozen=True)
class _Rim:
    """An end in its part's own frame, and points (n, 3) round it [mm]."""

    end: End
    points: Array


def _rims(part: Made) -> tuple[_Rim, ...]:
    if isinstance(part, Solid):
        return _Rim(part.end_a, part.rim_a(_POINTS)), _Rim(part.end_b, part.rim_b(_POINTS))
    found = []
    for end in part.rims:
        section = end.section
        u = section.breaks[0] + section.period * np.arange(_POINTS) / _POINTS
        found.append(_Rim(end, end.point(u)))
    return tuple(found)
