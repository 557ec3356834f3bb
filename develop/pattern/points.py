"""Points on the edges that the table of lines does not give, to be marked out by tape."""

from __future__ import annotations

import numpy as np

from develop.pattern.chain import length_of, share_at
from develop.pattern.curve import Array
from develop.pattern.pattern import Figures, Outline, Pattern

__all__ = ["edge_figures", "points_round"]

_POINTS = 24
_CORNER = np.radians(1.0)
_SAME = 1e-6  # of the way round: two stations in one place
_HEADS = (("point", ""), ("running", "along edge"), ("edge", "x"), ("edge", "y"))


def edge_figures(pattern: Pattern) -> tuple[Figures, ...]:
    """A table of points for every opening, and for the outline where no lines are tabled.

    Bolt holes have their own table of centres.
    """
    outlines = [
        (f"opening{f' {n}' if len(pattern.openings) > 1 and n > 1 else ''}", outline)
        for n, outline in enumerate(pattern.openings, 1)
        if outline.curves[0][0] != "holes"
    ]
    if not pattern.divisions:
        outlines.insert(0, ("outline", pattern.net))
    return tuple(
        Figures(
            f"Points of the {name}, {pattern.openings_as}" if name != "outline" else "Points of the outline",
            _HEADS,
            tuple(
                (f"{n} corner" if corner else str(n), way, x, y)
                for n, (way, x, y, corner) in enumerate(points_round(outline), 1)
            ),
        )
        for name, outline in outlines
    )


def points_round(outline: Outline) -> list[tuple[float, float, float, bool]]:
    """Equal steps round the outline from its start, and all its corners: the way round to each, x and y [mm],
    and whether it is a corner. Of a straight-sided outline the corners alone.
    """
    pieces = np.concatenate([curve.pieces for _, curve in outline.curves])
    ends = np.concatenate([[0.0], np.cumsum(length_of(pieces, np.ones(len(pieces))))])
    whole = float(ends[-1])
    out, into = pieces[:, 1] - pieces[:, 0], np.roll(pieces[:, 3] - pieces[:, 2], 1, axis=0)
    cross = into[:, 0] * out[:, 1] - into[:, 1] * out[:, 0]
    corner = np.abs(np.arctan2(cross, (into * out).sum(axis=1))) > _CORNER
    corners = ends[:-1][corner]
    straight = all(curve.straight for _, curve in outline.curves)
    steps = np.empty(0) if straight else np.arange(_POINTS) / _POINTS * whole
    apart = np.abs(steps[:, None] - corners).min(axis=1, initial=np.inf) > _SAME * whole
    rows = [(float(way), True) for way in corners] + [(float(way), False) for way in steps[apart]]
    found = []
    for way, sharp in sorted(rows):
        i = min(int(np.searchsorted(ends, way, side="right")) - 1, len(pieces) - 1)
        t = share_at(pieces[i], way - float(ends[i])) if way > ends[i] else 0.0
        x, y = _point(pieces[i], t)
        found.append((way, x, y, sharp))
    return found


def _point(piece: Array, t: float) -> tuple[float, float]:
    """The point of a Bézier (4, 2) at t."""
    weights = np.array([(1 - t) ** 3, 3 * (1 - t) ** 2 * t, 3 * (1 - t) * t * t, t**3])
    x, y = weights @ piece
    return float(x), float(y)
