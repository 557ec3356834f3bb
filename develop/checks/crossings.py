"""Whether an outline crosses itself, with numpy alone."""

from __future__ import annotations

import numpy as np

from develop.pattern.pattern import Outline
from develop.quadrature import Array

__all__ = ["crossings"]

# Fine enough that a chord strays little from its curve, coarse enough for all pairs at once.
_CHORDS = 96


def crossings(outline: Outline) -> int:
    """How often sides of the outline cross, as a polygon of at most a few hundred chords."""
    points = np.vstack([_chords(curve.polyline(0.01)) for _, curve in outline.curves])
    p, q = points, np.roll(points, -1, axis=0)
    keep = np.abs(q - p).max(axis=1) > 0.0
    p, q = p[keep], q[keep]
    n = len(p)

    def side(origin: Array, towards: Array, point: Array) -> Array:
        d = (towards - origin)[:, None]
        r = point[None] - origin[:, None]
        return np.asarray(d[..., 0] * r[..., 1] - d[..., 1] * r[..., 0])

    apart_p, apart_q = side(p, q, p), side(p, q, q)
    across = apart_p * apart_q < 0.0
    both = across & across.T
    i, j = np.nonzero(np.triu(both, k=2))
    return int(np.count_nonzero((j - i) != n - 1))


def _chords(points: Array) -> Array:
    """The start and at most `_CHORDS` points of an open polyline, its last left to the next curve."""
    count = len(points) - 1
    if count <= 0:
        return points[:0]
    pick = np.linspace(0, count, min(count, _CHORDS) + 1).astype(int)[:-1]
    return np.asarray(points[pick])
