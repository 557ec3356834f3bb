"""Curves in the flat as chains of cubic Béziers, found once for sheets and for flat plates."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from develop.quadrature import Array, Indices
from develop.surfaces.sheet import Place, Sheet

__all__ = ["TOLERANCE", "Trace", "chains", "edges"]

TOLERANCE = 2e-4
"""Largest distance of a chain from its curve [mm]; leaves most of 0.001 mm to who draws chords."""

_ROUNDS = 16
_MOST_PARTS = 8
_STANDS = 1e-9  # [mm]
_INSIDE = np.array([0.25, 0.5, 0.75])


@dataclass(frozen=True)
class Trace:
    """A curve at some places: points (n, 2), unit tangents (n, 2), running lengths (n,); mm."""

    points: Array
    tangents: Array
    arcs: Array


def edges(sheet: Sheet, *, tolerance: float = TOLERANCE) -> tuple[Array, Array]:
    """Control points (3 n + 1, 2) [mm] of edge A and edge B, both from left to right."""

    def traces(panel: Indices, x: Array) -> tuple[Trace, ...]:
        lines = sheet.lines(Place(panel, x))
        return (
            Trace(lines.a, lines.tangent_a, lines.arc_a),
            Trace(lines.b, lines.tangent_b, lines.arc_b),
        )

    a, b = chains(traces, len(sheet.ends.panel) - 1, tolerance=tolerance)
    return a, b


def chains(
    traces: Callable[[Indices, Array], tuple[Trace, ...]], panels: int, *, tolerance: float = TOLERANCE
) -> tuple[Array, ...]:
    """Control points (3 n + 1, 2) [mm] of curves that are smooth on each of a number of panels.

    traces: the curves at positions (n,) in [-1, 1] of panels (n,), all of them at once.
    End points and end tangents of each Bézier are exact; a piece is cut up until it lies within
    `tolerance` [mm] of the curve at three points inside, on every curve.
    """
    panel = np.arange(panels)
    start, end = np.full(panels, -1.0), np.full(panels, 1.0)
    done: list[tuple[Array, tuple[Array, ...]]] = []
    for _ in range(_ROUNDS):
        n = len(panel)
        x = start[:, None] + (end - start)[:, None] * np.array([0.0, *_INSIDE, 1.0])
        fits, misses = [], []
        for trace in traces(np.repeat(panel, 5), x.ravel()):
            each = Trace(
                trace.points.reshape(n, 5, 2), trace.tangents.reshape(n, 5, 2), trace.arcs.reshape(n, 5)
            )
            fits.append(_fit(each))
            misses.append(_miss(fits[-1], each))
        miss = np.max(misses, axis=0)
        good = miss <= tolerance
        done.append(((panel + 0.5 * (start + 1.0))[good], tuple(fit[good] for fit in fits)))
        if good.all():
            break
        bad = ~good
        # The miss falls with the fourth power of the length, or faster: cut by that at once.
        parts = np.clip(np.ceil((miss[bad] / tolerance) ** 0.25), 2, _MOST_PARTS).astype(int)
        owner = np.repeat(np.flatnonzero(bad), parts)
        number = np.arange(len(owner)) - np.repeat(np.cumsum(parts) - parts, parts)
        step = (end - start)[owner] / np.repeat(parts, parts)
        start = start[owner] + number * step
        panel, end = panel[owner], start + step
    order = np.argsort(np.concatenate([place for place, _ in done]))
    return tuple(_chain(np.concatenate([fits[i] for _, fits in done])[order]) for i in range(len(done[0][1])))


def _fit(trace: Trace) -> Array:
    """Béziers (n, 4, 2) with exact end points and tangents, handles as for an arc of equal turn."""
    t0, t1 = trace.tangents[:, 0], trace.tangents[:, -1]
    turn = np.arctan2(t0[:, 0] * t1[:, 1] - t0[:, 1] * t1[:, 0], (t0 * t1).sum(axis=1))
    quarter = np.where(np.abs(turn) < 1e-4, 1.0, turn / 4.0)
    stretch = np.where(np.abs(turn) < 1e-4, 1.0, np.tan(quarter) / quarter)
    handle = ((trace.arcs[:, -1] - trace.arcs[:, 0]) * stretch / 3.0)[:, None]
    p0, p1 = trace.points[:, 0], trace.points[:, -1]
    return np.stack([p0, p0 + handle * t0, p1 - handle * t1, p1], axis=1)


def _miss(control: Array, trace: Trace) -> Array:
    """Largest distance (n,) [mm] of the Béziers from points inside, measured square to the curve."""
    arcs = trace.arcs - trace.arcs[:, :1]
    # Where the edge stands at a corner its arcs are rounding and nothing else.
    t = (arcs[:, 1:4] / np.maximum(arcs[:, -1:], _STANDS))[..., None]
    on = (
        (1 - t) ** 3 * control[:, None, 0]
        + 3 * (1 - t) ** 2 * t * control[:, None, 1]
        + 3 * (1 - t) * t**2 * control[:, None, 2]
        + t**3 * control[:, None, 3]
    )
    gap, along = on - trace.points[:, 1:4], trace.tangents[:, 1:4]
    square = along[..., 0] * gap[..., 1] - along[..., 1] * gap[..., 0]
    return np.asarray(np.abs(square).max(axis=1))


def _chain(control: Array) -> Array:
    """Béziers (n, 4, 2) head to tail as one list (3 n + 1, 2), without those where the edge stands."""
    moves = np.abs(control[:, 3] - control[:, 0]).max(axis=1) > _STANDS
    if not moves.any():
        return np.asarray(control[0, :1])
    control = control[moves]
    return np.vstack([control[:, :3].reshape(-1, 2), control[-1:, 3]])
