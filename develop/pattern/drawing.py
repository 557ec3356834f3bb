"""The one walk over a pattern that every drawing is made by.

A pen knows a format; the walk knows a pattern. What is drawn, on which layer and in which
order is decided here alone, so that all the files of a piece show the same thing.
"""

from __future__ import annotations

from typing import Protocol

import numpy as np

from develop.pattern.chain import length_of, stretch
from develop.pattern.curve import Array, Curve
from develop.pattern.lettering import Boxes, arrow_box, arrow_label, boxes_of, text_height
from develop.pattern.pattern import Label, Outline, Pattern
from develop.pattern.strokes import (
    arrow_strokes,
    hole_strokes,
    roll_strokes,
    witness_lengths,
    witness_strokes,
)
from develop.pattern.ties import between_ties

__all__ = [
    "CUT",
    "DASHED",
    "FOLD_LINES",
    "LAYERS",
    "NET",
    "OPENINGS",
    "PEN_LINES",
    "PRESS_LINES",
    "ROLL_LINES",
    "TEXT",
    "WITNESS_MARKS",
    "Pen",
    "draw",
]

CUT = "cut"
OPENINGS = "cut-openings"
NET = "net"
ROLL_LINES = "roll-lines"
PRESS_LINES = "press-lines"
PEN_LINES = "pen-lines"
FOLD_LINES = "fold-lines"
WITNESS_MARKS = "witness-marks"
DASHED = "dashed-lines"
TEXT = "text"
# A little air round text, in proportion to it: a quarter of its box's lesser side.
_AIR = 0.25
_MOST_STEPS = 20_000  # along a line that text interrupts
_ON_LINE = 0.005  # [mm] nearer than this two lines are one on any sheet
LAYERS = (OPENINGS, CUT, NET, ROLL_LINES, PRESS_LINES, PEN_LINES, FOLD_LINES, WITNESS_MARKS, DASHED, TEXT)
"""One for each operation, in the order in which they are drawn: what is inside is cut before the outline."""


class Pen(Protocol):
    """What a format must be able to do. Coordinates are the pattern's own [mm], y up."""

    def layer(self, name: str) -> None:
        """All that follows belongs to this layer, one of LAYERS; each is named once."""

    def contour(self, outline: Outline) -> None:
        """One closed contour."""

    def line(self, start: Array, end: Array) -> None:
        """A straight line from start to end, each (2,)."""

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        """An open curve, dashed where asked."""

    def pop(self, at: Array) -> None:
        """A centre pop at a point (2,)."""

    def text(self, label: Label) -> None:
        """A line of text."""


def draw(pattern: Pattern, pen: Pen) -> None:
    """Draw the pattern with the pen, layer by layer; a layer without content is not named.

    Roll lines and thin lines stop short of any text that stands on them.
    """
    marked = pattern.openings if pattern.openings_as == "marked" else ()
    if pattern.punched or (pattern.openings and not marked):
        pen.layer(OPENINGS)
        for opening in pattern.punched:
            pen.contour(opening)
    if pattern.openings and not marked:
        for opening in pattern.openings:
            if pattern.openings_as == "ties":
                for curve in between_ties(opening, pattern.tie):
                    pen.curve(curve, dashed=False)
            else:
                pen.contour(opening)
    pen.layer(CUT)
    pen.contour(pattern.cut)
    net = _off_the_cut(pattern.net, pattern.cut)
    if net or marked:
        pen.layer(NET)
        for opening in marked:
            pen.contour(opening)
        if len(net) == len(pattern.net.curves):
            pen.contour(pattern.net)
        else:
            for curve in net:
                pen.curve(curve, dashed=False)
    lengths = witness_lengths(pattern.net, pattern.marks)
    if pattern.lines_as != "none":
        _draw_lines(pattern, pen, lengths)
    if pattern.folds:
        pen.layer(FOLD_LINES)
        for curve in pattern.folds:
            pen.curve(curve, dashed=True)
    marks = np.concatenate([witness_strokes(pattern.marks, lengths), hole_strokes(pattern.holes)])
    if len(marks) or pattern.thin:
        pen.layer(WITNESS_MARKS)
        for start, end in marks:
            pen.line(start, end)
        for curve in pattern.thin:
            for part in _outside(curve, _text_boxes(pattern)):
                pen.curve(part, dashed=False)
    if pattern.dashed:
        pen.layer(DASHED)
        for curve in pattern.dashed:
            pen.curve(curve, dashed=True)
    if pattern.labels or pattern.arrows:
        pen.layer(TEXT)
        for label in pattern.labels:
            pen.text(label)
        for arrow, text in pattern.arrows:
            for start, end in arrow_strokes(arrow):
                pen.line(start, end)
            pen.text(arrow_label(arrow, text))


def _draw_lines(pattern: Pattern, pen: Pen, lengths: Array) -> None:
    """The roll or press lines, marked as the pattern asks; lengths: of the witness marks (n,) [mm].

    A pop stands where a tick would end: at the edge itself the cut would take it away.
    """
    strokes = roll_strokes(pattern.net, pattern.lines, pattern.marks, lengths, full=pattern.full_lines)
    if pattern.full_lines:
        strokes = _off_the_marks(strokes, witness_strokes(pattern.marks, lengths))
        strokes = _around(strokes, _text_boxes(pattern), least=text_height(pattern.net))
    if not len(strokes):
        return
    if pattern.lines_as == "pen":
        pen.layer(PEN_LINES)
    else:
        pen.layer(PRESS_LINES if any(line.press for line in pattern.lines) else ROLL_LINES)
    for start, end in strokes:
        if pattern.lines_as == "pops":
            pen.pop(end)
        else:
            pen.line(start, end)


def _off_the_marks(strokes: Array, marks: Array) -> Array:
    """The strokes (n, 2, 2) without what witness marks (k, 2, 2) draw already, as at openings."""
    found = []
    for start, end in strokes:
        along = end - start
        long = float(np.hypot(*along))
        gap = marks - start
        off = np.abs(gap[..., 0] * along[1] - gap[..., 1] * along[0]).max(axis=1) / long
        shares = np.sort(gap[off < _ON_LINE] @ along / long**2, axis=1)
        at = 0.0
        for low, high in [*sorted(np.clip(shares, 0.0, 1.0).tolist()), (1.0, 1.0)]:
            if (low - at) * long > _ON_LINE:
                found.append(np.array([start + at * along, start + low * along]))
            at = max(at, high)
    return np.array(found) if found else np.empty((0, 2, 2))


def _off_the_cut(net: Outline, cut: Outline) -> list[Curve]:
    """The curves of the net line that do not lie on the cut line: what is cut need not be drawn again."""
    if net is cut:
        return []
    points = np.vstack([curve.polyline(0.001) for _, curve in cut.curves])
    start, along = points[:-1], np.diff(points, axis=0)
    square = np.maximum((along**2).sum(axis=1), 1e-300)

    def lies_on(curve: Curve) -> bool:
        line = curve.polyline(0.1)
        line = np.vstack([line, (line[:-1] + line[1:]) / 2.0]) if curve.straight else line
        share = np.clip(((line[:, None] - start) * along).sum(axis=-1) / square, 0.0, 1.0)
        miss = line[:, None] - start - share[..., None] * along
        return bool((np.hypot(miss[..., 0], miss[..., 1]).min(axis=1) < _ON_LINE).all())

    return [curve for _, curve in net.curves if not lies_on(curve)]


def _text_boxes(pattern: Pattern) -> Boxes:
    """The boxes of all text and arrows of the pattern."""
    boxes = [boxes_of(pattern.labels)] if pattern.labels else []
    boxes += [arrow_box(arrow, text) for arrow, text in pattern.arrows]
    if not boxes:
        return Boxes(np.empty((0, 2)), np.empty((0, 2)), np.empty((0, 2)))
    return Boxes(*(np.vstack(parts) for parts in zip(*boxes, strict=True)))


def _outside(curve: Curve, boxes: Boxes) -> list[Curve]:
    """The parts of a curve that lie in no box."""
    if not len(boxes.centre):
        return [curve]
    points = curve.polyline(_ON_LINE)
    sums = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(points, axis=0).T))])
    steps = int(np.ceil(8.0 * sums[-1] / boxes.half.min())) + 1
    at = np.linspace(0.0, sums[-1], min(steps, _MOST_STEPS))
    gap = np.stack([np.interp(at, sums, points[:, k]) for k in (0, 1)], axis=1)[:, None] - boxes.centre
    across = np.stack([-boxes.along[:, 1], boxes.along[:, 0]], axis=1)
    half = boxes.half + _AIR * boxes.half.min(axis=1)[:, None]
    hidden = np.abs((gap * boxes.along).sum(axis=-1)) < half[:, 0]
    hidden &= np.abs((gap * across).sum(axis=-1)) < half[:, 1]
    seen = np.concatenate([[0], ~hidden.any(axis=1), [0]]).astype(int)
    if seen[1:-1].all():
        return [curve]
    ends = np.concatenate([[0.0], np.cumsum(length_of(curve.pieces, np.ones(len(curve.pieces))))])
    scale = ends[-1] / sums[-1]
    first, last = np.flatnonzero(np.diff(seen) > 0), np.flatnonzero(np.diff(seen) < 0) - 1
    return [
        stretch(curve, float(at[i] * scale), float(min(at[j] * scale, ends[-1])))
        for i, j in zip(first, last, strict=True)
        if j > i
    ]


def _around(strokes: Array, boxes: Boxes, *, least: float) -> Array:
    """The strokes (n, 2, 2) without what lies in a box or close to it, (k, 2, 2).

    Scraps between two boxes that are shorter than `least` [mm] are left out too.
    """
    if not len(strokes) or not len(boxes.centre):
        return strokes
    half = boxes.half + _AIR * boxes.half.min(axis=1)[:, None]
    across = np.stack([-boxes.along[:, 1], boxes.along[:, 0]], axis=1)
    frame = np.stack([boxes.along, across], axis=1)  # (k, 2, 2)
    ends = np.einsum("kij,nekj->nkei", frame, strokes[:, :, None] - boxes.centre)
    start, along = ends[:, :, 0], ends[:, :, 1] - ends[:, :, 0]
    with np.errstate(divide="ignore", invalid="ignore"):
        low, high = (-half - start) / along, (half - start) / along
    # Parallel to a side: inside its strip the whole way, or not at all.
    still, within = np.abs(along) < 1e-12, np.abs(start) <= half
    low, high = (
        np.where(still, np.where(within, -np.inf, np.inf), np.minimum(low, high)).max(axis=-1),
        np.where(still, np.where(within, np.inf, -np.inf), np.maximum(low, high)).min(axis=-1),
    )
    pieces: list[Array] = []
    for n, (tail, head) in enumerate(strokes):
        at, scrap = 0.0, least / max(float(np.hypot(*(head - tail))), 1e-9)
        hidden = [(low[n, k], high[n, k]) for k in np.flatnonzero(high[n] > low[n])]
        for enter, leave in [*sorted(hidden), (1.0, 1.0)]:
            between = at > 0.0 and enter < 1.0
            if min(enter, 1.0) > at + (scrap if between else 1e-9):
                pieces.append(np.array([tail + at * (head - tail), tail + min(enter, 1.0) * (head - tail)]))
            at = max(at, leave)
    return np.array(pieces) if pieces else np.empty((0, 2, 2))
