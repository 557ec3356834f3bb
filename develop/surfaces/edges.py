"""The edges of a sheet as chains of cubic Béziers, found once for both surfaces."""

from __future__ import annotations

import numpy as np

from develop.quadrature import Array, Indices
from develop.surfaces.sheet import Lines, Place, Sheet

__all__ = ["TOLERANCE", "edges"]

TOLERANCE = 2e-4
"""Largest distance of a chain from its curve [mm]; leaves most of 0.001 mm to who draws chords."""

_ROUNDS = 16
_MOST_PARTS = 8
_STANDS = 1e-9  # [mm]
_INSIDE = np.array([0.25, 0.5, 0.75])


def edges(sheet: Sheet, *, tolerance: float = TOLERANCE) -> tuple[Array, Array]:
    """Control points (3 n + 1, 2) [mm] of edge A and edge B, both from left to right.

    End points and end tangents of each Bézier are exact; a piece is cut up until it lies within
    `tolerance` [mm] of the curve at three points inside.
    """
    ends = sheet.ends
    panel = ends.panel[:-1]
    start, end = np.full(len(panel), -1.0), np.full(len(panel), 1.0)
    done: list[tuple[Array, Array, Array]] = []
    for _ in range(_ROUNDS):
        n = len(panel)
        x = start[:, None] + (end - start)[:, None] * np.array([0.0, *_INSIDE, 1.0])
        lines = sheet.lines(Place(np.repeat(panel, 5), x.ravel()))
        first, inside, last = (
            np.arange(0, 5 * n, 5),
            np.arange(5 * n).reshape(n, 5)[:, 1:4],
            np.arange(4, 5 * n, 5),
        )
        chains, misses = [], []
        for points, tangents, arcs in _each(lines):
            control = _fit(points, tangents, arcs, first, last)
            chains.append(control)
            misses.append(_miss(control, points[inside], tangents[inside], arcs, first, inside, last))
        miss = np.maximum(*misses)
        good = miss <= tolerance
        done.append(((panel + 0.5 * (start + 1.0))[good], chains[0][good], chains[1][good]))
        if good.all():
            break
        bad = ~good
        # The miss falls with the fifth power of the length or faster: cut by that at once.
        parts = np.clip(np.ceil((miss[bad] / tolerance) ** 0.2), 2, _MOST_PARTS).astype(int)
        owner = np.repeat(np.flatnonzero(bad), parts)
        number = np.arange(len(owner)) - np.repeat(np.cumsum(parts) - parts, parts)
        step = (end - start)[owner] / np.repeat(parts, parts)
        start = start[owner] + number * step
        panel, end = panel[owner], start + step
    order = np.argsort(np.concatenate([part[0] for part in done]))
    return _chain(np.concatenate([part[1] for part in done])[order]), _chain(
        np.concatenate([part[2] for part in done])[order]
    )


def _each(lines: Lines) -> tuple[tuple[Array, Array, Array], tuple[Array, Array, Array]]:
    return (lines.a, lines.tangent_a, lines.arc_a), (lines.b, lines.tangent_b, lines.arc_b)


def _fit(points: Array, tangents: Array, arcs: Array, first: Indices, last: Indices) -> Array:
    """Béziers (n, 4, 2) with exact end points and tangents, handles as for an arc of equal turn."""
    t0, t1 = tangents[first], tangents[last]
    turn = np.arctan2(t0[:, 0] * t1[:, 1] - t0[:, 1] * t1[:, 0], (t0 * t1).sum(axis=1))
    quarter = np.where(np.abs(turn) < 1e-4, 1.0, turn / 4.0)
    stretch = np.where(np.abs(turn) < 1e-4, 1.0, np.tan(quarter) / quarter)
    handle = ((arcs[last] - arcs[first]) * stretch / 3.0)[:, None]
    p0, p1 = points[first], points[last]
    return np.stack([p0, p0 + handle * t0, p1 - handle * t1, p1], axis=1)


def _miss(
    control: Array,
    points: Array,
    tangents: Array,
    arcs: Array,
    first: Indices,
    inside: Indices,
    last: Indices,
) -> Array:
    """Largest distance (n,) [mm] of the Béziers from points inside, measured square to the curve."""
    whole = np.maximum(arcs[last] - arcs[first], 1e-300)
    t = ((arcs[inside] - arcs[first][:, None]) / whole[:, None])[..., None]
    on = (
        (1 - t) ** 3 * control[:, None, 0]
        + 3 * (1 - t) ** 2 * t * control[:, None, 1]
        + 3 * (1 - t) * t**2 * control[:, None, 2]
        + t**3 * control[:, None, 3]
    )
    gap = on - points
    square = tangents[..., 0] * gap[..., 1] - tangents[..., 1] * gap[..., 0]
    return np.asarray(np.abs(square).max(axis=1))


def _chain(control: Array) -> Array:
    """Béziers (n, 4, 2) head to tail as one list (3 n + 1, 2), without those where the edge stands."""
    moves = np.abs(control[:, 3] - control[:, 0]).max(axis=1) > _STANDS
    if not moves.any():
        return control[0, :1]
    control = control[moves]
    return np.vstack([control[:, :3].reshape(-1, 2), control[-1:, 3]])
