"""Chains of Béziers as arcs and lines, for machines that cut nothing else.

A biarc is two arcs that meet in one tangent and take two points with their tangents: of the one
freedom that this leaves, the two outer legs of the control polygon are made equal. Their ends are
then 2 d apart, d the length of a leg, with the joint midway between them: |V − d (T₀ + T₁)| = 2 d,
V from the first point to the last, is a quadratic for d (elementary geometry). From each place on
the curve the longest biarc that keeps within the limit is taken; halving finds it.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import NamedTuple

import numpy as np

from develop.pattern.curve import Array, Curve

__all__ = ["Arcs", "arcs_of"]

_CORNER = 1e-4  # [rad] a greater turn between two Béziers is a corner
_STRAIGHT = 1e-7  # [mm] control points nearer than this to their chord make a line
_FLAT = 0.02  # of the limit: an arc that rises less over its chord is written as a line
_FLATTEST = 1e-4  # [mm] but never one that rises more than this
_MOST_HALF = 1.2  # [rad] half the sweep of one arc of a biarc, at most
_LOOKS = np.linspace(0.0, 1.0, 25)[1:]  # where a biarc on trial is looked at
_TRIAL = 0.97  # of the limit, while so few places are looked at
_ARC_TURN = 2e-4  # [rad] by how much one arc may leave the tangents at its ends
_FULL = 5.5  # [rad] an arc of more is cut in two


@dataclass(frozen=True)
class Arcs:
    """Arcs and lines head to tail.

    points: (n + 1, 2) [mm]. bulges: (n,), the tangent of a quarter of each arc's sweep,
    anticlockwise positive, 0 for a line. deviation: largest distance of the chain of Béziers from
    them, measured at many more places than were looked at to find them [mm].
    circle: centre x, y and radius [mm] where the whole is one circle; there are two half arcs then.
    """

    points: Array
    bulges: Array
    deviation: float
    circle: tuple[float, float, float] | None = None

    @property
    def count(self) -> int:
        """How many of them are arcs."""
        return int(np.count_nonzero(self.bulges))


class _Run(NamedTuple):
    """A smooth stretch: points (n, 2) [mm] and unit tangents (n, 2) at many places on it."""

    points: Array
    tangents: Array


class _Fit(NamedTuple):
    points: list[Array]  # without the first
    bulges: list[float]
    deviation: float


def arcs_of(curve: Curve, *, limit: float) -> Arcs:
    """The curve as arcs and lines that keep within `limit` [mm] of it.

    Its ends are kept to the last bit, its corners and their tangents too; the tangents of arcs that
    meet elsewhere are the same.
    """
    if curve.straight:
        return Arcs(curve.controls[[0, -1]], np.zeros(1), 0.0)
    pieces = curve.pieces
    runs = _runs(pieces)
    if len(runs) == 1 and isinstance(runs[0], _Run) and np.hypot(*(curve.end - curve.start)) < 1e-9:
        whole = _circle(runs[0], limit)
        if whole is not None:
            return whole
    points, bulges, worst = [curve.start], list[float](), 0.0
    for run in runs:
        if isinstance(run, _Run):
            fit = _one_arc(run, limit) or _biarcs(run, limit)
            points += fit.points
            bulges += fit.bulges
            worst = max(worst, fit.deviation)
        else:
            points.append(run)
            bulges.append(0.0)
    points[-1] = curve.end
    return Arcs(np.array(points), np.array(bulges), worst)


def _runs(pieces: Array) -> list[_Run | Array]:
    """Smooth stretches, and the ends (2,) of straight lines between them."""
    chord = pieces[:, 3] - pieces[:, 0]
    long = np.maximum(np.hypot(*chord.T), 1e-300)
    inner = pieces[:, 1:3] - pieces[:, :1]
    off = np.abs(inner[..., 0] * chord[:, None, 1] - inner[..., 1] * chord[:, None, 0]) / long[:, None]
    straight = (off < _STRAIGHT).all(axis=1)
    first, last = _end_tangents(pieces)
    turn = _angle(last[:-1], first[1:])
    smooth = np.abs(turn) < _CORNER
    found: list[_Run | Array] = []
    start = 0
    for n in range(1, len(pieces) + 1):
        goes_on = n < len(pieces) and straight[n] == straight[start] and smooth[n - 1]
        if goes_on and (not straight[start] or _level(pieces[start : n + 1])):
            continue
        found.append(pieces[n - 1, 3] if straight[start] else _sampled(pieces[start:n], first, start))
        start = n
    return found


def _level(pieces: Array) -> bool:
    """Whether straight Béziers lie on one line."""
    along = pieces[-1, 3] - pieces[0, 0]
    away = pieces[:, 3] - pieces[0, 0]
    return bool((np.abs(away[:, 0] * along[1] - away[:, 1] * along[0]) <= _STRAIGHT * np.hypot(*along)).all())


def _end_tangents(pieces: Array) -> tuple[Array, Array]:
    """Unit tangents (n, 2) at the starts and at the ends, also where a handle has no length."""

    def unit(*ways: Array) -> Array:
        found = ways[-1]
        for way in ways[-2::-1]:
            found = np.where(np.hypot(*way.T)[:, None] > 1e-9, way, found)
        return np.asarray(found / np.maximum(np.hypot(*found.T), 1e-300)[:, None])

    p = pieces
    return (
        unit(p[:, 1] - p[:, 0], p[:, 2] - p[:, 0], p[:, 3] - p[:, 0]),
        unit(p[:, 3] - p[:, 2], p[:, 3] - p[:, 1], p[:, 3] - p[:, 0]),
    )


def _angle(a: Array, b: Array) -> Array:
    """The turn (n,) [rad] from unit vectors a to b (n, 2)."""
    return np.asarray(np.arctan2(a[..., 0] * b[..., 1] - a[..., 1] * b[..., 0], (a * b).sum(axis=-1)))


def _sampled(pieces: Array, first: Array, start: int) -> _Run:
    """A smooth stretch of Béziers at equal steps of their parameters."""
    steps = min(1024, max(64, 2048 // len(pieces)))
    t = (np.arange(steps) / steps)[:, None]
    p = pieces[:, None]
    points = (
        (1 - t) ** 3 * p[..., 0, :]
        + 3 * (1 - t) ** 2 * t * p[..., 1, :]
        + 3 * (1 - t) * t**2 * p[..., 2, :]
        + t**3 * p[..., 3, :]
    )
    d = np.diff(pieces, axis=1)[:, None]
    tangents = (1 - t) ** 2 * d[..., 0, :] + 2 * (1 - t) * t * d[..., 1, :] + t**2 * d[..., 2, :]
    tangents[:, 0] = first[start : start + len(pieces)]
    tangents = np.vstack([tangents.reshape(-1, 2), _end_tangents(pieces[-1:])[1]])
    tangents /= np.maximum(np.hypot(*tangents.T), 1e-300)[:, None]
    return _Run(np.vstack([points.reshape(-1, 2), pieces[-1:, 3]]), tangents)


def _through(a: Array, b: Array, c: Array) -> tuple[float, float, float] | None:
    """Centre and radius [mm] of the circle through three points; None where they lie on a line."""
    (bx, by), (cx, cy) = (b - a).tolist(), (c - a).tolist()
    twice = 2.0 * (bx * cy - by * cx)
    if abs(twice) < 1e-9 * (bx * bx + by * by + cx * cx + cy * cy):
        return None
    b2, c2 = bx * bx + by * by, cx * cx + cy * cy
    x, y = (cy * b2 - by * c2) / twice, (bx * c2 - cx * b2) / twice
    return float(a[0]) + x, float(a[1]) + y, math.hypot(x, y)


def _circle(run: _Run, limit: float) -> Arcs | None:
    """The whole as a circle, where it is one."""
    n = len(run.points) - 1
    found = _through(*run.points[[0, n // 3, 2 * n // 3]])
    if found is None:
        return None
    x, y, radius = found
    worst = float(np.abs(np.hypot(*(run.points - (x, y)).T) - radius).max())
    if worst > limit / 2.0:
        return None
    turn = 1.0 if float(_angle(run.tangents[:1], run.tangents[1:2])[0]) > 0.0 else -1.0
    start = run.points[0]
    far = 2.0 * np.array([x, y]) - start
    return Arcs(np.array([start, far, start]), np.array([turn, turn]), worst, found)


def _one_arc(run: _Run, limit: float) -> _Fit | None:
    """The whole stretch as one arc, in two where it is nearly a circle; None where it is none."""
    points, tangents = run
    n = len(points) - 1
    found = _through(points[0], points[n // 2], points[n])
    if found is None:
        return None
    x, y, radius = found
    worst = float(np.abs(np.hypot(*(points - (x, y)).T) - radius).max())
    if worst > limit / 3.0:
        return None
    turn = float(_angle(tangents[:-1], tangents[1:]).sum())
    radial = (points[[0, n]] - (x, y)) / radius * math.copysign(1.0, turn)
    square = np.stack([-radial[:, 1], radial[:, 0]], axis=1)
    if float(np.abs(_angle(square, tangents[[0, n]])).max()) > _ARC_TURN:
        return None
    parts = 2 if abs(turn) > _FULL else 1
    swept = float(_angle(radial[:1], radial[1:])[0])
    swept += 2.0 * math.pi * round((turn - swept) / (2.0 * math.pi))
    bulge = math.tan(swept / parts / 4.0)
    if parts == 1:
        return _Fit([points[n]], [bulge], worst)
    half = math.atan2(float(points[0, 1]) - y, float(points[0, 0]) - x) + swept / 2.0
    middle = np.array([x + radius * math.cos(half), y + radius * math.sin(half)])
    return _Fit([middle, points[n]], [bulge, bulge], worst)


class _Biarc(NamedTuple):
    joint: Array  # (2,)
    at_joint: Array  # unit tangent (2,)
    halves: tuple[float, float]  # half the sweep of each arc [rad]


def _biarc(p: Array, t: Array, q: Array, u: Array) -> _Biarc | None:
    """The biarc from p with the unit tangent t to q with u; None where it would turn too far."""
    (tx, ty), (ux, uy), (vx, vy) = t.tolist(), u.tolist(), (q - p).tolist()
    square = vx * vx + vy * vy
    along = vx * (tx + ux) + vy * (ty + uy)
    root = along * along + 2.0 * (1.0 - tx * ux - ty * uy) * square
    legs = square / (along + math.sqrt(max(root, 0.0))) if along > 0.0 else 0.0
    if legs <= 0.0:
        return None
    jx, jy = (vx + legs * (tx - ux)) / 2.0, (vy + legs * (ty - uy)) / 2.0  # from p
    kx, ky = vx - jx, vy - jy
    first = math.atan2(tx * jy - ty * jx, tx * jx + ty * jy)
    second = math.atan2(kx * uy - ky * ux, kx * ux + ky * uy)
    if max(abs(first), abs(second)) > _MOST_HALF:
        return None
    cos, sin = math.cos(2.0 * first), math.sin(2.0 * first)
    at_joint = np.array([cos * tx - sin * ty, sin * tx + cos * ty])
    return _Biarc(p + np.array([jx, jy]), at_joint, (first, second))


def _away(points: Array, start: Array, tangent: Array, curvature: float) -> Array:
    """Distance (n,) [mm] of points from the circle that leaves `start` along `tangent`; also for a line.

    With x along the tangent and y square to it the circle is f = y − κ (x² + y²) / 2 = 0, and the
    distance 2 f / (1 + √(1 − 2 κ f)): no large radius is ever subtracted from another.
    """
    gap = points - start
    f = tangent[0] * gap[:, 1] - tangent[1] * gap[:, 0] - 0.5 * curvature * (gap * gap).sum(axis=1)
    return np.asarray(np.abs(2.0 * f / (1.0 + np.sqrt(np.maximum(1.0 - 2.0 * curvature * f, 0.0)))))


def _deviation(points: Array, start: Array, tangent: Array, biarc: _Biarc) -> float:
    """Largest distance [mm] of points (n, 2) on the stretch, the last of them its end, from its biarc."""
    before = (points - biarc.joint) @ biarc.at_joint <= 0.0
    worst = 0.0
    for part, foot, along, end, half in (
        (points[before], start, tangent, biarc.joint, biarc.halves[0]),
        (points[~before], biarc.joint, biarc.at_joint, points[-1], biarc.halves[1]),
    ):
        if len(part):
            curvature = 2.0 * math.sin(half) / max(float(np.hypot(*(end - foot))), 1e-300)
            worst = max(worst, float(_away(part, foot, along, curvature).max()))
    return worst


def _biarcs(run: _Run, limit: float) -> _Fit:
    """The stretch as the fewest biarcs that going along it and taking the longest each time gives."""
    points, tangents = run
    last = len(points) - 1
    flat = min(_FLAT * limit, _FLATTEST)

    def fits(i: int, j: int) -> _Biarc | None:
        biarc = _biarc(points[i], tangents[i], points[j], tangents[j])
        if biarc is None:
            return None
        looked = points[(i + _LOOKS * (j - i)).astype(int)]
        return biarc if _deviation(looked, points[i], tangents[i], biarc) <= _TRIAL * limit else None

    found, bulges, worst = list[Array](), list[float](), 0.0
    at, step = 0, max(last // 8, 1)
    while at < last:
        good, bad, best = at, last + 1, None
        reach = min(at + step, last)
        while True:
            biarc = fits(at, reach)
            if biarc is None:
                bad = reach
            else:
                good, best = reach, biarc
            if good == last or bad - good <= 1:
                break
            # Outwards by doubling while nothing has failed, then halving.
            reach = min(at + 2 * (reach - at), last) if bad > last else (good + bad) // 2
            if reach == good:
                break
        if best is None:  # not even the next place: a chord
            found.append(points[at + 1])
            bulges.append(0.0)
            at += 1
            continue
        own = _deviation(points[at + 1 : good + 1], points[at], tangents[at], best)
        while own > limit - flat and good > at + 1:  # worse between the places looked at
            good = at + max(15 * (good - at) // 16, 1)
            shorter = _biarc(points[at], tangents[at], points[good], tangents[good])
            if shorter is None:
                continue
            best = shorter
            own = _deviation(points[at + 1 : good + 1], points[at], tangents[at], best)
        flattened = 0.0
        for start, end, half in (
            (points[at], best.joint, best.halves[0]),
            (best.joint, points[good], best.halves[1]),
        ):
            rise = 0.5 * float(np.hypot(*(end - start))) * math.tan(half / 2.0)
            found.append(end)
            bulges.append(math.tan(half / 2.0) if abs(rise) > flat else 0.0)
            flattened = max(flattened, abs(rise) if abs(rise) <= flat else 0.0)
        worst = max(worst, own + flattened)
        step = good - at
        at = good
    return _Fit(found, bulges, worst)
