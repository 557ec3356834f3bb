"""Ties: short bridges that hold an opening's waste in the sheet until it has been rolled."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.pattern.pattern import Outline

__all__ = ["TIES", "between_ties", "tie_width"]

# Four, half-way between the four marks of the opening: common practice, no source.
TIES = 4
_ROUNDS = 60  # halvings of a share of one Bézier: to the last bit
_NODES, _WEIGHTS = (each / 2.0 for each in np.polynomial.legendre.leggauss(16))
_NODES = _NODES + 0.5


def tie_width(thickness: float) -> float:
    """Width of a tie [mm]: 5 mm, or twice the thickness [mm] of plate (common practice, no source)."""
    return max(5.0, 2.0 * thickness)


def between_ties(outline: Outline, width: float) -> list[Curve]:
    """What is cut of an opening that stays on its ties: the curves (open) between one tie and the next.

    The ties stand at 1/8, 3/8, 5/8 and 7/8 of the way round the outline, each `width` [mm] of the way
    wide, at most a sixteenth of the whole.
    """
    pieces = np.concatenate([curve.pieces for _, curve in outline.curves])
    ends = np.concatenate([[0.0], np.cumsum(_length(pieces, np.ones(len(pieces))))])
    whole = float(ends[-1])
    half = min(width, whole / 16.0) / 2.0
    middles = (np.arange(TIES) + 0.5) / TIES * whole
    cuts = []
    for start, end in pairwise([*(middles + half), middles[0] + half + whole]):
        cuts.append(_stretch(pieces, ends, start, end - 2.0 * half))
    return cuts


def _stretch(pieces: Array, ends: Array, start: float, end: float) -> Curve:
    """The part of the closed chain from one way round to another [mm]; it may run past the chain's start."""
    whole = ends[-1]
    if start >= whole:
        return _stretch(pieces, ends, start - whole, end - whole)
    if end > whole:
        first = _stretch(pieces, ends, start, whole).controls
        return Curve(
            np.vstack([first, _stretch(pieces, ends, 0.0, end - whole).controls[1:]]), float(end - start)
        )
    chain: list[Array] = []
    for piece, low, high in zip(pieces, ends[:-1], ends[1:], strict=True):
        if high > start and low < end:
            t = _share(piece, start - low) if low < start else 0.0
            u = _share(piece, end - low) if high > end else 1.0
            part = _between(piece, t, u)
            chain.append(part[1:] if chain else part)
    return Curve(np.vstack(chain), float(end - start))


def _length(pieces: Array, share: Array) -> Array:
    """Length [mm] of Béziers (n, 4, 2) from their start to the share (n,) of the parameter, by Gauss."""
    t = (share[:, None] * _NODES)[..., None]
    step = np.diff(pieces, axis=1)[:, None]
    speed = 3.0 * (
        (1 - t) ** 2 * step[..., 0, :] + 2 * (1 - t) * t * step[..., 1, :] + t**2 * step[..., 2, :]
    )
    return np.asarray(share * (np.hypot(speed[..., 0], speed[..., 1]) @ _WEIGHTS))


def _share(piece: Array, length: float) -> float:
    """The share of the parameter at a length [mm] along one Bézier."""
    low, high = 0.0, 1.0
    for _ in range(_ROUNDS):
        middle = (low + high) / 2.0
        if _length(piece[None], np.array([middle]))[0] < length:
            low = middle
        else:
            high = middle
    return (low + high) / 2.0


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
