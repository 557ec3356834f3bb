"""Lengths along Béziers, and the places at given lengths."""

from __future__ import annotations

import numpy as np

from develop.pattern.curve import Array
from develop.quadrature import NODES, WEIGHTS

__all__ = ["length_of", "share_at"]

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
