"""The strokes inside the outline: roll lines or their ticks, witness marks, arrows.

All are arrays of shape (n, 2, 2): n strokes, two ends each [mm].
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.lettering import text_height
from develop.pattern.pattern import NumberedHole, Outline, RollLine, WitnessMark

__all__ = ["arrow_strokes", "hole_strokes", "ring", "roll_strokes", "witness_lengths", "witness_strokes"]

_SAME = 1e-6  # two points closer than this [mm] are one point of the sheet
_OF_RADIUS = 0.6  # that the strokes of a hole's centre reach
_NONE: Array = np.empty((0, 2, 2))


def ring(net: Outline, tolerance: float) -> Array:
    """The outline as one open polyline (n, 2) [mm], its first point not repeated at the end."""
    return np.vstack([curve.polyline(tolerance)[:-1] for _, curve in net.curves])


def witness_lengths(net: Outline, marks: Sequence[WitnessMark], outline: Array | None = None) -> Array:
    """Length of each witness mark's stroke, (n,) [mm]: at most a quarter of the sheet's depth there.

    Zero at a corner: there the cut itself is the mark, and a stroke would lie on the seam.
    outline: the net's polyline within 0.05 text heights, if the caller has it.
    """
    if not marks:
        return np.empty(0)
    height = text_height(net)
    outline = ring(net, 0.05 * height) if outline is None else outline
    start, along = outline, np.roll(outline, -1, axis=0) - outline
    at = np.array([mark.at for mark in marks])[:, None]
    inward = np.array([mark.inward for mark in marks])[:, None]
    across = inward[..., 0] * along[:, 1] - inward[..., 1] * along[:, 0]
    gap = start - at
    with np.errstate(divide="ignore", invalid="ignore"):
        depth = (gap[..., 0] * along[:, 1] - gap[..., 1] * along[:, 0]) / across
        where = (gap[..., 0] * inward[..., 1] - gap[..., 1] * inward[..., 0]) / across
    # An edge flattened within 0.05 h may pass this far inside the mark that stands on it.
    hit = (where >= 0.0) & (where <= 1.0) & (depth > 0.1 * height) & np.isfinite(depth)
    depth = np.where(hit, depth, np.inf).min(axis=1)
    corners = np.array([curve.start for _, curve in net.curves])
    at_corner = (np.hypot(*np.moveaxis(at - corners, -1, 0)) < _SAME).any(axis=1)
    return np.where(at_corner | ~np.isfinite(depth), 0.0, np.minimum(2.0 * height, depth / 4.0))


def witness_strokes(marks: Sequence[WitnessMark], length: Array) -> Array:
    """The witness marks of these lengths (n,), from the edge into the sheet; those at corners have none."""
    if not marks:
        return _NONE
    at = np.array([mark.at for mark in marks])
    inward = np.array([mark.inward for mark in marks])
    return np.stack([at, at + inward * length[:, None]], axis=1)[length > 0.0]


def roll_strokes(
    net: Outline,
    lines: Sequence[RollLine],
    marks: Sequence[WitnessMark],
    length_of_marks: Array,
    *,
    full: bool,
) -> Array:
    """Full roll lines, or ticks at both of their ends; length_of_marks as `witness_lengths` gives it.

    A line on a seam is left out, since the cut is there already; and where a witness mark
    lies along a roll line, the line starts where the mark ends: nothing is drawn twice.
    At an end that is a point there are no ticks: all of them would meet in it.
    """
    if not lines:
        return _NONE
    ends = np.array([(line.start, line.end) for line in lines])
    length = np.hypot(*(ends[:, 1] - ends[:, 0]).T)
    keep = length > _SAME
    for name, curve in net.curves:
        if name.startswith("seam"):
            seam = curve.controls[[0, -1]]
            for side in (seam, seam[::-1]):
                keep &= np.abs(ends - side).max(axis=(1, 2)) > _SAME
    ends, length = ends[keep], length[keep]
    along = (ends[:, 1] - ends[:, 0]) / length[:, None]
    first = _marked(ends[:, 0], along, marks, length_of_marks)
    last = _marked(ends[:, 1], -along, marks, length_of_marks)
    if full:
        return np.stack([ends[:, 0] + along * first[:, None], ends[:, 1] - along * last[:, None]], axis=1)
    tick = np.minimum(text_height(net), length / 4.0)[:, None]
    at_a = np.stack([ends[:, 0], ends[:, 0] + along * tick], axis=1)[first == 0.0]
    at_b = np.stack([ends[:, 1], ends[:, 1] - along * tick], axis=1)[last == 0.0]
    return np.vstack([at_a, at_b]) if net.curve("b") is not None else at_a


def _marked(points: Array, along: Array, marks: Sequence[WitnessMark], length: Array) -> Array:
    """How far from each point (n, 2) a witness mark covers the line that leaves it `along`, (n,) [mm]."""
    if not marks:
        return np.zeros(len(points))
    at = np.array([mark.at for mark in marks])
    inward = np.array([mark.inward for mark in marks])
    same = np.abs(points[:, None] - at).max(axis=-1) < _SAME
    # Within a degree of each other the two strokes would be one thick one.
    same &= along @ inward.T > 0.9998
    return np.asarray(np.where(same, length, 0.0).max(axis=1))


def hole_strokes(holes: Sequence[NumberedHole]) -> Array:
    """A stroke through the centre of each hole, square to the line that they stand on: with it a cross."""
    if not holes:
        return _NONE
    half = np.array([_OF_RADIUS * hole.radius * hole.outward for hole in holes])
    centre = np.array([hole.centre for hole in holes])
    return np.stack([centre - half, centre + half], axis=1)


def arrow_strokes(arrow: Array) -> Array:
    """Shaft and two barbs of an arrow that points from arrow[0] to arrow[1]."""
    tail, head = arrow
    back = (tail - head) * 0.22
    side = np.array([-back[1], back[0]]) * 0.45
    return np.array([[tail, head], [head + back + side, head], [head, head + back - side]])
