"""Whether outlines cross themselves or each other, with numpy alone."""

from __future__ import annotations

import numpy as np

from develop.pattern.pattern import Outline
from develop.quadrature import Array

__all__ = ["crossings", "meet", "within"]

# Fine enough that a chord strays little from its curve, coarse enough for all pairs at once.
_CHORDS = 96
_ON = 1e-7  # [mm]


def crossings(outline: Outline) -> int:
    """How often sides of the outline cross, as a polygon of at most a few hundred chords."""
    points = np.vstack([_chords(curve.polyline(0.01)) for _, curve in outline.curves])
    p, q = points, np.roll(points, -1, axis=0)
    keep = np.abs(q - p).max(axis=1) > 0.0
    p, q = p[keep], q[keep]
    n = len(p)

    along = (q - p) / np.linalg.norm(q - p, axis=1)[:, None]

    def side(point: Array) -> Array:
        """How far left of each line [mm]; what rounding may have moved counts as on it."""
        r = point[None] - p[:, None]
        apart = along[:, None, 0] * r[..., 1] - along[:, None, 1] * r[..., 0]
        return np.asarray(np.where(np.abs(apart) < _ON, 0.0, apart))

    across = side(p) * side(q) < 0.0
    both = across & across.T
    i, j = np.nonzero(np.triu(both, k=2))
    return int(np.count_nonzero((j - i) != n - 1))


def meet(one: Array, other: Array) -> bool:
    """Whether two closed polylines (n, 2) and (m, 2) have a point in common."""
    p, d = one, np.roll(one, -1, axis=0) - one
    q, e = other, np.roll(other, -1, axis=0) - other
    for start in range(0, len(p), _CHORDS):
        a, b = p[start : start + _CHORDS, None], d[start : start + _CHORDS, None]
        gap = q - a
        square = b[..., 0] * e[:, 1] - b[..., 1] * e[:, 0]
        with np.errstate(divide="ignore", invalid="ignore"):
            t = (gap[..., 0] * e[:, 1] - gap[..., 1] * e[:, 0]) / square
            s = (gap[..., 0] * b[..., 1] - gap[..., 1] * b[..., 0]) / square
        if ((t >= 0.0) & (t <= 1.0) & (s >= 0.0) & (s <= 1.0)).any():
            return True
    return False


def within(points: Array, outline: Array) -> bool:
    """Whether all points (n, 2) lie inside the closed polyline (m, 2), by counting crossings."""
    start, end = outline, np.roll(outline, -1, axis=0)
    x, y = points[:, :1], points[:, 1:]
    with np.errstate(divide="ignore", invalid="ignore"):
        cross = start[:, 0] + (y - start[:, 1]) * (end - start)[:, 0] / (end - start)[:, 1]
    hits = ((start[:, 1] > y) != (end[:, 1] > y)) & (x < cross)
    return bool((hits.sum(axis=1) % 2 == 1).all())


def _chords(points: Array) -> Array:
    """The start and at most `_CHORDS` points of an open polyline, its last left to the next curve."""
    count = len(points) - 1
    if count <= 0:
        return points[:0]
    pick = np.linspace(0, count, min(count, _CHORDS) + 1).astype(int)[:-1]
    return np.asarray(points[pick])
