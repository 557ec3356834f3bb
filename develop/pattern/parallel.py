"""The true parallel of a curve in the flat, as a curve of its own."""

from __future__ import annotations

import numpy as np

from develop.errors import Refusal
from develop.pattern.chain import between, crossing, curve_of, joined, point_at, rates_of
from develop.pattern.curve import Array, Curve, segment
from develop.quadrature import NODES, WEIGHTS, Indices, running
from develop.quadrature import between as share_between
from develop.surfaces.edges import TOLERANCE, Trace, chains

__all__ = ["arc_about", "parallel", "room", "turns_of"]

_KINK = 1e-6  # [rad] less is rounding
_SHORT = 1e-3  # [mm]
_ARC = np.pi / 6.0
_SAMPLES = np.linspace(0.0, 1.0, 9)
_STEPS = 12


def room(curve: Curve, *, right: bool = True) -> float:
    """How far to its right, or left, the parallel of a curve is one smooth curve [mm]; inf without a bound.

    It is the least radius of those bends whose centre lies on that side; 0 where a corner does.
    """
    if curve.straight or len(curve.controls) < 4:
        return float("inf")
    pieces = _sound(curve.pieces)
    _, speed, bend = rates_of(pieces, np.tile(_SAMPLES, (len(pieces), 1)))
    square = speed[..., 0] * bend[..., 1] - speed[..., 1] * bend[..., 0]
    size = np.hypot(speed[..., 0], speed[..., 1])
    with np.errstate(divide="ignore", invalid="ignore"):
        curvature = square / size**3
    sharpest = float(np.nanmax(curvature if not right else -curvature, initial=0.0))
    turns = turns_of(pieces)
    if ((turns if not right else -turns) > _KINK).any():
        return 0.0
    return 1.0 / sharpest if sharpest > 0.0 else float("inf")


def parallel(curve: Curve, by: float, *, tolerance: float = TOLERANCE) -> Curve:
    """The curve at a distance `by` [mm] to the right of another, walked the same way; negative: to the left.

    Round an outer corner it runs on an arc about that corner, at an inner one the two sides stop where they
    meet. Its length is exact for a curve that bends outward, or less than its `room`: length + by · turn
    (Steiner). tolerance: as in `chains` [mm]. Raises Refusal, which names no field, where it would fold.
    """
    if by == 0.0:
        return curve
    if curve.straight:
        along = (curve.end - curve.start) / curve.length
        aside = by * np.array([along[1], -along[0]])
        return segment(curve.start + aside, curve.end + aside)
    pieces = _sound(curve.pieces)
    _check_folding(pieces, by)
    turns = turns_of(pieces)
    kinks = np.flatnonzero(np.abs(turns) > _KINK)
    runs = np.split(np.arange(len(pieces)), kinks + 1)
    found: list[Curve] = [_smooth(pieces[runs[0]], by, tolerance)]
    for kink, run in zip(kinks, runs[1:], strict=True):
        new = _smooth(pieces[run], by, tolerance)
        if turns[kink] * by > 0.0:
            found.append(arc_about(pieces[run[0]][0], found[-1].end, float(turns[kink])))
        else:
            found[-1], new = _met(found[-1], new)
        found.append(new)
    return joined(found)


def _check_folding(pieces: Array, by: float) -> None:
    """Raises Refusal where Béziers (n, 4, 2) are bent so tightly to that side that a parallel turns back."""
    _, speed, bend = rates_of(pieces, np.tile(_SAMPLES, (len(pieces), 1)))
    turn = speed[..., 0] * bend[..., 1] - speed[..., 1] * bend[..., 0]
    size = np.hypot(speed[..., 0], speed[..., 1])
    folds = size**3 + by * turn <= 0.0
    if not folds.any():
        return
    radius = float((size[folds] ** 3 / np.abs(turn[folds])).min())
    raise Refusal(
        field="",
        given=f"{abs(by):g} mm beside an edge that is bent to {radius:.3g} mm in the flat folds over itself",
        allowed=f"less than {radius:.3g} mm there, or rounder corners",
    )


def _sound(pieces: Array) -> Array:
    """The Béziers (n, 4, 2) without those so short that their direction is rounding; the others join."""
    short = np.hypot(*(pieces[:, 3] - pieces[:, 0]).T) < _SHORT
    if not short.any() or short.all():
        return pieces
    kept = pieces[~short].copy()
    kept[0, :2] += pieces[0, 0] - kept[0, 0]
    gap = kept[:-1, 3] - kept[1:, 0]
    kept[1:, 0] += gap
    kept[1:, 1] += gap
    kept[-1, 2:] += pieces[-1, 3] - kept[-1, 3]
    return np.asarray(kept)


def _ends(pieces: Array) -> tuple[Array, Array]:
    """Unit tangents (n, 2) at the starts and ends of Béziers."""
    out = []
    for steps in (np.diff(pieces, axis=1), np.diff(pieces, axis=1)[:, ::-1]):
        size = np.hypot(steps[..., 0], steps[..., 1])
        first = np.argmax(size > 1e-12, axis=1)
        row = np.arange(len(pieces))
        out.append(steps[row, first] / np.maximum(size[row, first], 1e-300)[:, None])
    return out[0], out[1]


def turns_of(pieces: Array) -> Array:
    """By how much the direction jumps from each Bézier to the next (n - 1,) [rad]."""
    start, end = _ends(pieces)
    a, b = end[:-1], start[1:]
    return np.asarray(np.arctan2(a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0], (a * b).sum(axis=1)))


def _smooth(pieces: Array, by: float, tolerance: float) -> Curve:
    """The parallel of Béziers without corners."""
    half = np.full(len(pieces), 0.5)

    def speeds(t: Array) -> tuple[Array, Array, Array]:
        """Points and unit tangents (n, k, 2) of the parallel, and its speed (n, k)."""
        at, speed, bend = rates_of(pieces, t)
        size = np.hypot(speed[..., 0], speed[..., 1])
        unit = speed / np.maximum(size, 1e-300)[..., None]
        turn = (speed[..., 0] * bend[..., 1] - speed[..., 1] * bend[..., 0]) / np.maximum(size, 1e-300) ** 2
        return at + by * np.stack([unit[..., 1], -unit[..., 0]], axis=-1), unit, size + by * turn

    table, _ = running(speeds(np.tile(0.5 * (NODES + 1.0), (len(pieces), 1)))[2], half)

    def traces(panel: Indices, x: Array) -> tuple[Trace]:
        at, speed, _ = rates_of(pieces[panel], 0.5 * (x + 1.0)[:, None])
        unit = speed[:, 0] / np.maximum(np.hypot(*speed[:, 0].T), 1e-300)[:, None]
        points = at[:, 0] + by * np.stack([unit[:, 1], -unit[:, 0]], axis=-1)
        return (Trace(points, unit, np.einsum("nk,nk->n", share_between(x), table[panel])),)

    (controls,) = chains(traces, len(pieces), tolerance=tolerance)
    length = float((speeds(np.tile(0.5 * (NODES + 1.0), (len(pieces), 1)))[2] @ WEIGHTS * half).sum())
    return Curve(controls, length)


def arc_about(centre: Array, start: Array, turn: float) -> Curve:
    """A round arc from a start through a turn [rad]."""
    parts = max(int(np.ceil(abs(turn) / _ARC)), 1)
    step = turn / parts
    arm = start - centre
    angles = np.arange(parts + 1) * step
    points = np.stack(
        [
            np.cos(angles) * arm[0] - np.sin(angles) * arm[1],
            np.sin(angles) * arm[0] + np.cos(angles) * arm[1],
        ],
        axis=-1,
    )
    handle = 4.0 / 3.0 * np.tan(step / 4.0) * np.stack([-points[:, 1], points[:, 0]], axis=-1)
    pieces = np.stack([points[:-1], points[:-1] + handle[:-1], points[1:] - handle[1:], points[1:]], axis=1)
    return curve_of(centre + pieces, abs(turn) * float(np.hypot(*arm)))


def _met(one: Curve, other: Curve) -> tuple[Curve, Curve]:
    """Two parallels that cross beside an inner corner, each up to where they do."""
    at: tuple[int, float] = (len(one.controls) // 3 - 1, 1.0)
    to: tuple[int, float] = (0, 0.0)
    # In turn, each against the other's tangent: as Newton's steps for two curves at once.
    for _ in range(_STEPS):
        at = _against(one, at, other, to)
        to = _against(other, to, one, at)
    end, start = between(one, (0, 0.0), at), between(other, to, (len(other.controls) // 3 - 1, 1.0))
    # One point for both, to the last bit.
    controls = start.controls.copy()
    controls[0] = end.end
    return end, Curve(controls, start.length, start.straight)


def _against(
    curve: Curve, place: tuple[int, float], other: Curve, at: tuple[int, float]
) -> tuple[int, float]:
    """Where a curve crosses another's tangent at a place, near to that; its own place if it does not."""
    point, along = point_at(other, at)
    found = crossing(curve, point, along, point)
    return place if found is None else found
