"""Lengths along Béziers, and the places at given lengths."""

from __future__ import annotations

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.quadrature import NODES, WEIGHTS

__all__ = ["length_of", "share_at", "stretch"]

_ROUNDS = 60  # halvings of a share of one Bézier: to the last bit


def length_of(pieces: Array, share: Array) -> Array:
    """Length [mm] of Béziers (n, 4, 2) from their start to the share (n,) of the parameter, by Gauss."""
    t = (share[:, None] * (0.5 * (NODES + 1.0)))[..., None]
    step = np.diff(pieces, axis=1)[:, None]
    speed = 3.0 * (
        (1 - t) ** 2 * step[..., 0, :] + 2 * (1 - t) * t * step[..., 1, :] + t**2 * step[..., 2, :]
    )
    return np.asarray(share * (np.hypot(speed[..., 0], speed[..., 1]) @ (0.5 * WEIGHTS)))


def share_at(piece: Array, length: float) -> float:
    """The share of the parameter at a length [mm] along one Bézier."""
    low, high = 0.0, 1.0
    for _ in range(_ROUNDS):
        middle = (low + high) / 2.0
        if length_of(piece[None], np.array([middle]))[0] < length:
            low = middle
        else:
            high = middle
    return (low + high) / 2.0


def stretch(pieces: Array, ends: Array, start: float, end: float) -> Curve:
    """The part of a chain of Béziers (n, 4, 2) from one length along it to another [mm].

    ends: running lengths at the ends of its pieces (n + 1,) [mm]. Of a closed chain the part may run past
    the start.
    """
    whole = ends[-1]
    if start >= whole:
        return stretch(pieces, ends, start - whole, end - whole)
    if end > whole:
        first = stretch(pieces, ends, start, whole).controls
        return Curve(
            np.vstack([first, stretch(pieces, ends, 0.0, end - whole).controls[1:]]), float(end - start)
        )
    chain: list[Array] = []
    for piece, low, high in zip(pieces, ends[:-1], ends[1:], strict=True):
        if high > start and low < end:
            t = share_at(piece, start - low) if low < start else 0.0
            u = share_at(piece, end - low) if high > end else 1.0
            part = _between(piece, t, u)
            chain.append(part[1:] if chain else part)
    return Curve(np.vstack(chain), float(end - start))


def _between(piece: Array, low: float, high: float) -> Array:
    """The controls (4, 2) of the part of one Bézier between two shares of its parameter (de Casteljau)."""

    def blossom(r: float, s: float, t: float) -> Array:
        points = piece
        for share in (r, s, t):
            points = (1 - share) * points[:-1] + share * points[1:]
        return np.asarray(points[0])

    return np.array(
        [blossom(low, low, low), blossom(low, low, high), blossom(low, high, high), blossom(high, high, high)]
    )
