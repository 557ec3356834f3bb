"""Ties: short bridges that hold an opening's waste in the sheet until it has been rolled."""

from __future__ import annotations

from itertools import pairwise

import numpy as np

from develop.pattern.chain import length_of, stretch
from develop.pattern.curve import Curve
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
        cuts.append(stretch(pieces, ends, start, end - 2.0 * half))
    return cuts
