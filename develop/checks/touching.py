"""The checks of edges that are cut square to the plate: they touch the other part, and nothing overlaps."""

from __future__ import annotations

import numpy as np

from develop.pattern.pattern import Pattern
from develop.quadrature import Array
from develop.solid.solid import Solid
from develop.solid.touching import TouchingEnd

__all__ = ["touching_misses", "touching_points"]

# Places across the wall at which an edge is looked at, its two corners among them.
_ACROSS = 5


def _walked(pattern: Pattern) -> Array:
    """Parameters (n,) of the dense lines, in the order in which they are folded."""
    u = pattern.rulings.u
    return u[::-1] if pattern.face == "inside" else u


def touching_points(
    pattern: Pattern, solid: Solid, lines: tuple[Array, Array, Array], name: str
) -> tuple[TouchingEnd, Array, Array] | None:
    """Of a folded edge, `a` or `b`, that touches another part: its end, the points that touch it (n, 3), and
    points across the wall (k, n, 3) [mm], from one corner to the other; None for any other edge.

    lines: the dense lines as `develop.checks.fold.folded` returns them.
    """
    end = solid.end_a if name == "a" else solid.end_b
    if not isinstance(end, TouchingEnd):
        return None
    a, b, normal = lines
    given = (a if name == "a" else b) - solid.distance * normal
    place = end.touching(_walked(pattern))
    across = np.linspace(end.inner, end.outer, _ACROSS if end.square else 1)
    return end, given + place[:, None] * normal, given + across[:, None, None] * normal


def touching_misses(
    pattern: Pattern, solid: Solid, lines: tuple[Array, Array, Array], name: str
) -> tuple[float, float | None] | None:
    """Of an edge, `a` or `b`: the largest distance [mm] of what should touch from the other part, and by how
    much any of it overlaps that part, which only an edge square to the plate can; None for any other edge."""
    found = touching_points(pattern, solid, lines, name)
    if found is None:
        return None
    end, touching, across = found
    off = float(np.max(np.abs(end.clear(touching)[0])))
    if not end.square:
        return off, None
    return off, max(float(np.max(-end.clear(across.reshape(-1, 3))[0])), 0.0)
