"""Whether an outline crosses itself, with numpy alone."""

from __future__ import annotations

import numpy as np

from develop.pattern.pattern import Outline
from develop.quadrature import Array

__all__ = ["crossings"]

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


def _chords(points: Array) -> Array:
    """The start and at most `_CHORDS` points of an open polyline, its last left to the next curve."""
    count = len(points) - 1
    if count <= 0:
        return points[:0]
    pick = np.linspace(0, count, min(count, _CHORDS) + 1).astype(int)[:-1]
    return np.asarray(points[pick])
