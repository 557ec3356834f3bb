"""Straight sides of an end, and what lies between two that are parallel."""

from __future__ import annotations

import numpy as np

from develop.quadrature import Array
from develop.solid.end import End

__all__ = ["contact", "paired", "straights"]

# Normals nearer than this are those of one flat face.
_ONE_FACE = 1e-9


def straights(end: End) -> Array:
    """First and last parameters (k, 2) of the straight stretches of an end; a side may have several."""
    breaks = end.section.breaks
    at = end.section.walk(0.5 * (breaks[1:] + breaks[:-1]))
    flat = (at.dphi == 0.0) & (at.ds > 0.0)
    return np.stack([breaks[:-1][flat], breaks[1:][flat]], axis=1)


def _side(end: End, normal: Array) -> Array | None:
    """First and last parameter (2,) of the straight side that has a normal (3,); None where none has."""
    flat = normal @ end.spans
    for stretch in straights(end):
        at = end.section.walk(np.array([stretch.mean()]))
        apart = abs(float(at.ex[0] * flat[1] - at.ey[0] * flat[0]))
        along = float(at.ex[0] * flat[0] + at.ey[0] * flat[1])
        if apart < _ONE_FACE * float(np.hypot(*flat)) and along > 0.0:
            return np.concatenate(end.section.parameters(at.ex, at.ey))
    return None


def contact(end: End, normal: Array) -> Array:
    """The first and the last parameter (2,) at which a plane of a normal (3,) touches an end."""
    side = _side(end, normal)
    if side is not None:
        return side
    flat = normal @ end.spans
    return np.repeat(end.section.parameter(flat[:1], flat[1:2]), 2)


def paired(mine: End, yours: End, u: Array, normal: Array, touched: Array) -> Array:
    """Points (n, 3) of another end that go with the points u (n,) of an end.

    normal: of the planes that touch both (n, 3). touched: where those touch the other end (n, 3). Along two
    straight sides that are parallel a plane touches the whole of both, and their points go in proportion.
    """
    at = mine.section.walk(u)
    rows = np.flatnonzero((at.dphi == 0.0) & (at.ds > 0.0))
    if not len(rows) or not len(straights(yours)):
        return touched
    found = touched.copy()
    first, last = mine.section.parameters(at.ex[rows], at.ey[rows])
    for start, end in {(float(a), float(b)) for a, b in zip(first, last, strict=True)}:
        these = rows[(first == start) & (last == end)]
        side = _side(yours, normal[these[0]])
        if side is None:
            continue
        period = mine.section.period
        share = np.clip(((u[these] - start + 0.5 * _ONE_FACE) % period) / (end - start), 0.0, 1.0)
        found[these] = yours.point(side[0] + share * (side[1] - side[0]))
    return found
