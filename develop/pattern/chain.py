"""Chains of Béziers: lengths along them, places at given lengths, parts of them, where a line crosses."""

from __future__ import annotations

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.quadrature import NODES, WEIGHTS

__all__ = [
    "area_of",
    "between",
    "crossing",
    "crossings_of",
    "curvature_at",
    "curve_of",
    "joined",
    "length_of",
    "part_of",
    "place_at",
    "point_at",
    "rates_of",
    "share_at",
    "stretch",
]

_SAME = 1e-4  # [mm] a place so near to a joint of the chain is that joint
_NO_LENGTH = 1e-10  # [mm] a part no longer than this is rounding
_LAST = 1e-15  # a step so small is rounding
_ROUNDS = 60  # halvings of a share of one Bézier: to the last bit


def rates_of(pieces: Array, t: Array) -> tuple[Array, Array, Array]:
    """Points, first and second derivatives (n, k, 2) of Béziers (n, 4, 2) at shares t (n, k)."""
    p, t = pieces[:, None], t[..., None]
    s = 1.0 - t
    a, b, c = p[..., 1, :] - p[..., 0, :], p[..., 2, :] - p[..., 1, :], p[..., 3, :] - p[..., 2, :]
    at = (
        s**3 * p[..., 0, :]
        + 3 * s * s * t * p[..., 1, :]
        + 3 * s * t * t * p[..., 2, :]
        + t**3 * p[..., 3, :]
    )
    speed = 3.0 * (s * s * a + 2.0 * s * t * b + t * t * c)
    return at, speed, 6.0 * (s * (b - a) + t * (c - b))


def length_of(pieces: Array, share: Array) -> Array:
    """Length [mm] of Béziers (n, 4, 2) from their start to the share (n,) of the parameter, by Gauss."""
    speed = rates_of(pieces, share[:, None] * (0.5 * (NODES + 1.0)))[1]
    return np.asarray(share * (np.hypot(speed[..., 0], speed[..., 1]) @ (0.5 * WEIGHTS)))


def share_at(piece: Array, length: float) -> float:
    """The share of the parameter at a length [mm] along one Bézier: Newton's steps, kept between bounds."""
    low, high, t = 0.0, 1.0, 0.5
    for _ in range(_ROUNDS):
        over = float(length_of(piece[None], np.array([t]))[0]) - length
        low, high = (t, high) if over < 0.0 else (low, t)
        speed = float(np.hypot(*rates_of(piece[None], np.array([[t]]))[1][0, 0]))
        step = t - over / speed if speed > 0.0 else -1.0
        new = step if low < step < high else (low + high) / 2.0
        if abs(new - t) < _LAST:
            return new
        t = new
    return t


def part_of(piece: Array, low: float, high: float) -> Array:
    """The controls (4, 2) of the part of one Bézier between two shares of its parameter (de Casteljau)."""

    def blossom(r: float, s: float, t: float) -> Array:
        points = piece
        for share in (r, s, t):
            points = (1 - share) * points[:-1] + share * points[1:]
        return np.asarray(points[0])

    return np.array(
        [blossom(low, low, low), blossom(low, low, high), blossom(low, high, high), blossom(high, high, high)]
    )


def curve_of(pieces: Array, length: float | None = None) -> Curve:
    """The curve that Béziers (n, 4, 2) make head to tail; measured [mm] unless its length is given."""
    if length is None:
        length = float(length_of(pieces, np.ones(len(pieces))).sum())
    return Curve(np.vstack([pieces[:, :3].reshape(-1, 2), pieces[-1:, 3]]), length)


def joined(curves: list[Curve]) -> Curve:
    """Curves head to tail as one."""
    if len(curves) == 1:
        return curves[0]
    controls = [curves[0].controls[:1], *(curve.controls[1:] for curve in curves)]
    return Curve(np.vstack(controls), sum(curve.length for curve in curves))


def between(curve: Curve, start: tuple[int, float], end: tuple[int, float]) -> Curve:
    """The part of a curve from one place to another, each a piece's number and a share of it."""
    (i, t), (j, u) = start, end
    if curve.straight:
        points = np.array([curve.start + share * (curve.end - curve.start) for share in (t, u)])
        controls = points[0] + np.array([[0.0], [1.0], [2.0], [3.0]]) / 3.0 * (points[1] - points[0])
        return Curve(controls, float(np.hypot(*(points[1] - points[0]))), straight=True)
    pieces = curve.pieces[i : j + 1].copy()
    pieces[-1] = part_of(pieces[-1], t if i == j else 0.0, u)
    if i != j:
        pieces[0] = part_of(pieces[0], t, 1.0)
    # A part of no length at either end, or of no more than rounding, would have no direction of its own.
    keep = np.abs(pieces[:, 3] - pieces[:, 0]).max(axis=1) > _NO_LENGTH
    return curve_of(pieces[keep] if keep.any() else pieces[:1])


def place_at(curve: Curve, length: float) -> tuple[int, float]:
    """The place at a length [mm] along a curve: a piece's number and a share of it."""
    pieces = curve.pieces
    ends = np.concatenate([[0.0], np.cumsum(length_of(pieces, np.ones(len(pieces))))])
    i = int(np.clip(np.searchsorted(ends, length, side="right") - 1, 0, len(pieces) - 1))
    rest = length - float(ends[i])
    return i, 0.0 if rest <= 0.0 else 1.0 if length >= ends[i + 1] else share_at(pieces[i], rest)


def crossing(curve: Curve, point: Array, along: Array, near: Array) -> tuple[int, float] | None:
    """The place where a curve crosses the line through a point (2,) along (2,), the one nearest to another
    point (2,) [mm]; None where it does not. A place is a piece's number and a share of it."""
    found = crossings_of(curve, point, along)
    if not found:
        return None
    away = [float(np.hypot(*(point_at(curve, place)[0] - near))) for place in found]
    return found[int(np.argmin(away))]


def crossings_of(curve: Curve, point: Array, along: Array) -> list[tuple[int, float]]:
    """The places where a curve crosses the line through a point (2,) along (2,), in order."""
    side = (curve.pieces - point) @ np.array([-along[1], along[0]])
    return [(int(i), _root(side[i])) for i in np.flatnonzero(side[:, 0] * side[:, 3] <= 0.0)]


def point_at(curve: Curve, place: tuple[int, float]) -> tuple[Array, Array]:
    """The point (2,) [mm] at a place of a curve, and the unit tangent (2,) there."""
    i, t = place
    at, speed, _ = rates_of(curve.pieces[[i]], np.array([[t]]))
    return at[0, 0], speed[0, 0] / np.hypot(*speed[0, 0])


def curvature_at(curve: Curve, place: tuple[int, float]) -> float:
    """The curvature [1/mm] at a place of a curve, positive where it turns left."""
    _, speed, bend = rates_of(curve.pieces[[place[0]]], np.array([[place[1]]]))
    (vx, vy), (ax, ay) = speed[0, 0], bend[0, 0]
    return float((vx * ay - vy * ax) / np.hypot(vx, vy) ** 3)


def stretch(curve: Curve, start: float, end: float) -> Curve:
    """The part of a closed curve from one way round to another [mm]; it may run past the curve's start."""
    ends = np.concatenate([[0.0], np.cumsum(length_of(curve.pieces, np.ones(len(curve.pieces))))])
    whole = float(ends[-1])

    def snapped(way: float) -> float:
        joint = float(ends[np.argmin(np.abs(ends - way))])
        return joint if abs(joint - way) < _SAME else way

    low = snapped(start - np.floor(start / whole) * whole)
    low -= whole * (low >= whole)
    # Once round is once round, also where the chain is a little shorter than its curve.
    high = low + (whole if abs(end - start - curve.length) < _SAME else end - start)
    if high <= whole + _SAME:
        return between(curve, place_at(curve, low), place_at(curve, snapped(min(high, whole))))
    last = len(curve.pieces) - 1
    first = between(curve, place_at(curve, low), (last, 1.0))
    rest = snapped(high - whole)
    return joined([first, between(curve, (0, 0.0), place_at(curve, rest))]) if rest else first


def _root(side: Array) -> float:
    """Where a cubic with Bernstein coefficients (4,) of unlike signs at its ends is zero, by halving."""
    low, high = 0.0, 1.0
    rising = side[3] > side[0]
    for _ in range(_ROUNDS):
        t = 0.5 * (low + high)
        s = 1.0 - t
        value = s**3 * side[0] + 3 * s * s * t * side[1] + 3 * s * t * t * side[2] + t**3 * side[3]
        if (value < 0.0) == rising:
            low = t
        else:
            high = t
    return 0.5 * (low + high)


def area_of(curves: list[Curve]) -> float:
    """Area [mm²] inside a closed run of curves, positive anticlockwise: ½ ∮ (x dy − y dx), by Gauss."""
    origin, total = curves[0].start, 0.0
    for curve in curves:
        pieces = curve.pieces - origin
        at, speed, _ = rates_of(pieces, np.tile(0.5 * (NODES + 1.0), (len(pieces), 1)))
        cross = at[..., 0] * speed[..., 1] - at[..., 1] * speed[..., 0]
        total += 0.25 * float((cross @ WEIGHTS).sum())
    return total
