"""Finding free places on a sheet: boxes of text against the outline, the marks and each other."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from develop.pattern.curve import Array, Curve
from develop.pattern.lettering import ASCENT, DESCENT, Boxes, text_height, text_width
from develop.pattern.pattern import Label, Outline, RollLine, WitnessMark
from develop.pattern.strokes import ring, roll_strokes, witness_lengths, witness_strokes

__all__ = [
    "SMALLEST", "Flags", "Rows", "Sheet", "Word", "boxes_at", "label_at", "left_of", "overlaps", "rows_of",
]  # fmt: skip

SMALLEST = 2.0
"""Least height [mm] of text that is to be read on the bench; on a sheet of 60 mm a little less must do."""

_AIR = 0.3  # [heights of capitals] kept free round a word

Rows = NDArray[np.intp]
Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Word:
    """A word to be placed. height: of its capitals [mm].

    places(size) gives middles (n, 2) of its box [mm] and angles (n,) [rad], best first.
    """

    text: str
    height: float
    places: Callable[[float], tuple[Array, Array]]


class Sheet:
    """What is on the sheet so far, and whether a box is free."""

    def __init__(
        self,
        net: Outline,
        marks: Sequence[WitnessMark],
        lines: Sequence[RollLine],
        avoid: Sequence[Curve],
        lines_as: str,
        openings: Sequence[Outline] = (),
    ) -> None:
        tolerance = 0.05 * text_height(net)
        self.outline = ring(net, tolerance)
        rings = [self.outline, *(ring(opening, tolerance) for opening in openings)]
        # Start and end of every side of the outline and of the openings.
        self.sides = np.vstack([np.stack([each, np.roll(each, -1, axis=0)], axis=1) for each in rings])
        self.lengths = witness_lengths(net, marks, self.outline)
        strokes = [
            self.sides,
            witness_strokes(marks, self.lengths),
        ]
        if lines_as in ("ticks", "pops"):
            strokes.append(roll_strokes(net, lines, marks, self.lengths, full=False))
        for curve in avoid:
            points = curve.polyline(tolerance)
            strokes.append(np.stack([points[:-1], points[1:]], axis=1))
        segments = np.vstack(strokes)
        self.middle = segments.mean(axis=1)
        self.reach = (segments[:, 1] - segments[:, 0]) / 2.0
        self.taken = Boxes(np.empty((0, 2)), np.empty((0, 2)), np.empty((0, 2)))
        self.least = min(SMALLEST, 0.6 * text_height(net))
        self.both_ends = net.curve("b") is not None
        self.labels: list[Label] = []

    def clear(self, boxes: Boxes, air: Array | float) -> Flags:
        """Which boxes, with `air` [mm] round them, lie on the sheet and off all strokes, (n,) bool."""
        half = boxes.half + np.reshape(air, (-1, 1))
        good = ~_crossed(boxes._replace(half=half), self.middle, self.reach)
        some = np.flatnonzero(good)
        good[some] = _inside(boxes.centre[some], self.sides)
        return good

    def free(self, boxes: Boxes, air: float) -> Flags:
        """Which boxes are clear and also touch no box that is taken, (n,) bool."""
        good = self.clear(boxes, air)
        some = np.flatnonzero(good)
        good[some] = ~overlaps(rows_of(boxes, some, air), self.taken)
        return good

    def take(self, boxes: Boxes) -> None:
        """Occupy the boxes."""
        self.taken = Boxes(*(np.vstack(pair) for pair in zip(self.taken, boxes, strict=True)))

    def write(self, words: Sequence[Word]) -> None:
        """Set each word at the first free one of its places, at its height or down to the smallest."""
        if not words:
            return
        # The first tries of all words against the outline in one go: the costly part of the work.
        tries = [self._tries(word, word.height) for word in words]
        every = Boxes(*(np.vstack(part) for part in zip(*tries, strict=True)))
        counts = [len(boxes.centre) for boxes in tries]
        air = np.repeat([_AIR * word.height for word in words], counts)
        clear = np.split(self.clear(every, air), np.cumsum(counts)[:-1])
        for word, boxes, good in zip(words, tries, clear, strict=True):
            size = word.height
            while not self._set(word.text, boxes, good, size) and size > self.least + 1e-9:
                size = max(self.least, 0.75 * size)
                boxes = self._tries(word, size)
                good = self.clear(boxes, _AIR * size)

    def _tries(self, word: Word, size: float) -> Boxes:
        centres, angles = word.places(size)
        return boxes_at(centres, angles, width=text_width(word.text, size), height=size * (ASCENT + DESCENT))

    def _set(self, text: str, boxes: Boxes, good: Flags, size: float) -> bool:
        some = np.flatnonzero(good)
        some = some[~overlaps(rows_of(boxes, some, _AIR * size), self.taken)]
        if not len(some):
            return False
        self.take(rows_of(boxes, some[:1]))
        cos, sin = boxes.along[some[0]]
        self.labels.append(label_at(text, boxes.centre[some[0]], math.atan2(sin, cos), size))
        return True


def rows_of(boxes: Boxes, rows: Rows, air: float = 0.0) -> Boxes:
    """Some of the boxes, each with `air` [mm] round it."""
    return Boxes(boxes.centre[rows], boxes.along[rows], boxes.half[rows] + air)


def boxes_at(centres: Array, angles: Array, *, width: float, height: float) -> Boxes:
    """Boxes of one size [mm] at centres (n, 2) [mm], turned by angles (n,) [rad]."""
    along = np.stack([np.cos(angles), np.sin(angles)], axis=1)
    return Boxes(centres, along, np.broadcast_to(np.array([width, height]) / 2.0, centres.shape))


def label_at(text: str, centre: Array, angle: float, height: float) -> Label:
    """A line of text, its height [mm] and angle [rad], whose box with room for descenders is centred here."""
    up = np.array([-math.sin(angle), math.cos(angle)])
    return Label(text, centre - up * (height * (ASCENT - DESCENT) / 2.0), angle, height)


def _crossed(boxes: Boxes, middle: Array, reach: Array) -> Flags:
    """Which boxes a segment (middle ± reach, (m, 2)) comes into, by separating axes, (n,) bool."""
    # Most pairs are far apart; only the others need the full test.
    round_box = np.hypot(boxes.half[:, 0], boxes.half[:, 1])[:, None]
    near = np.abs(middle[:, 0] - boxes.centre[:, :1]) < round_box + np.abs(reach[:, 0])
    near &= np.abs(middle[:, 1] - boxes.centre[:, 1:]) < round_box + np.abs(reach[:, 1])
    box, segment = np.nonzero(near)
    gap, half = middle[segment] - boxes.centre[box], reach[segment]
    (cos, sin), (wide, high) = boxes.along[box].T, boxes.half[box].T
    x, y = gap[:, 0] * cos + gap[:, 1] * sin, gap[:, 1] * cos - gap[:, 0] * sin
    dx, dy = half[:, 0] * cos + half[:, 1] * sin, half[:, 1] * cos - half[:, 0] * sin
    apart = np.abs(x * dy - y * dx)
    dx, dy = np.abs(dx), np.abs(dy)
    hit = (np.abs(x) < wide + dx) & (np.abs(y) < high + dy) & (apart < wide * dy + high * dx)
    crossed = np.zeros(len(boxes.centre), dtype=bool)
    crossed[box[hit]] = True
    return crossed


def _inside(points: Array, sides: Array) -> Flags:
    """Which points (n, 2) lie inside the outline and outside its openings, whose sides (m, 2, 2) these
    are, by counting crossings, (n,) bool."""
    start, end = sides[:, 0], sides[:, 1]
    x, y = points[:, :1], points[:, 1:]
    with np.errstate(divide="ignore", invalid="ignore"):
        cross = start[:, 0] + (y - start[:, 1]) * (end - start)[:, 0] / (end - start)[:, 1]
    hits = ((start[:, 1] > y) != (end[:, 1] > y)) & (x < cross)
    return np.asarray(hits.sum(axis=1) % 2 == 1)


def overlaps(boxes: Boxes, others: Boxes) -> Flags:
    """Which boxes overlap any of the others, by separating axes, (n,) bool."""
    if not len(others.centre):
        return np.zeros(len(boxes.centre), dtype=bool)
    gap = others.centre - boxes.centre[:, None]
    round_mine, round_theirs = np.hypot(*boxes.half.T)[:, None], np.hypot(*others.half.T)
    if (np.hypot(gap[..., 0], gap[..., 1]) >= round_mine + round_theirs).all():
        return np.zeros(len(boxes.centre), dtype=bool)
    cos = np.abs(boxes.along @ others.along.T)
    sin = np.abs(boxes.along[:, :1] * others.along[:, 1] - boxes.along[:, 1:] * others.along[:, 0])
    wide, high = boxes.half[:, :1], boxes.half[:, 1:]
    near = np.ones(cos.shape, dtype=bool)
    for axis, mine, theirs in (
        (boxes.along[:, None], wide, others.half[:, 0] * cos + others.half[:, 1] * sin),
        (left_of(boxes.along)[:, None], high, others.half[:, 0] * sin + others.half[:, 1] * cos),
        (others.along, wide * cos + high * sin, others.half[:, 0]),
        (left_of(others.along), wide * sin + high * cos, others.half[:, 1]),
    ):
        near &= np.abs((gap * axis).sum(axis=-1)) < mine + theirs
    return np.asarray(near.any(axis=1))


def left_of(vectors: Array) -> Array:
    """Vectors (n, 2) a quarter turn to the left."""
    return np.stack([-vectors[:, 1], vectors[:, 0]], axis=1)
