"""Ties: short bridges that hold an opening's waste in the sheet until it has been rolled."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from develop.pattern.chain import length_of, share_at
from develop.pattern.curve import Array, Curve
from develop.pattern.pattern import Outline

__all__ = ["TIES", "between_ties", "tie_width"]

# Four, half-way between the four marks of the opening: common practice, no source.
TIES = 4


def tie_width(thickness: float) -> float:
    """Width of a tie [mm]: 5 mm, or twice the thickness [mm] of plate (common practice, no source)."""
    return max(5.0, 2.0 * thickness)


def between_ties(outline: Outline, width: float) -> list[Curve]:
    """What is cut of an opening that stays on its ties: the curves (open) between one tie and the next.

    The ties stand at 1/8, 3/8, 5/8 and 7/8 of the way round the outline, each `width` [mm] of the way
    wide, at most a sixteenth of the whole.
    """
    pieces = np.concatenate([curve.pieces for _, curve in outline.curves])
    ends = np.concatenate([[0.0], np.cumsum(length_of(pieces, np.ones(len(pieces))))])
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
