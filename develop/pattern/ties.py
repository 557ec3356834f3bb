"""Ties: short bridges that hold an opening's waste in the sheet until it has been rolled."""

from __future__ import annotations

import numpy as np

from develop.pattern.chain import joined, length_of, stretch
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
    curve = joined([curve for _, curve in outline.curves])
    whole = float(length_of(curve.pieces, np.ones(len(curve.pieces))).sum())
    half = min(width, whole / 16.0) / 2.0
    middles = (np.arange(TIES) + 0.5) / TIES * whole
    starts = [float(each) + half for each in middles]
    ends = [float(each) - half for each in (*middles[1:], middles[0] + whole)]
    return [stretch(curve, start, end) for start, end in zip(starts, ends, strict=True)]
