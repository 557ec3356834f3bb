"""Points along all that is drawn of a pattern: they tell which pages are empty, and where a word has room."""

from __future__ import annotations

import math

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.pattern.drawing import draw
from develop.pattern.lettering import Boxes, boxes_of
from develop.pattern.pattern import Label, Outline, Pattern

__all__ = ["Traces", "traced"]

_STEP = 2.0  # [mm] between points
_CHORDS = 0.05  # [mm]


class Traces:
    """The pen of the drawing walk that only notes where it goes."""

    def __init__(self) -> None:
        self._lines: list[Array] = []
        self._words: list[Array] = []

    def layer(self, name: str) -> None:
        """Layers are all alike here."""

    def contour(self, outline: Outline) -> None:
        """Along the contour."""
        for _, curve in outline.curves:
            self._along(curve.polyline(_CHORDS))

    def line(self, start: Array, end: Array) -> None:
        """Along the line."""
        self._along(np.stack([start, end]))

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        """Along the curve."""
        self._along(curve.polyline(_CHORDS))

    def pop(self, at: Array) -> None:
        """The point."""
        self._lines.append(np.asarray(at)[None])

    def text(self, label: Label) -> None:
        """Over the box that the words fill."""
        self._words.append(_filled(boxes_of((label,))))

    def _along(self, points: Array) -> None:
        """Points no farther apart than the step, along a polyline (n, 2)."""
        long = np.hypot(*np.diff(points, axis=0).T)
        sums = np.concatenate([[0.0], np.cumsum(long)])
        count = max(2, math.ceil(float(sums[-1]) / _STEP) + 1)
        at = np.linspace(0.0, float(sums[-1]), count)
        dense = np.stack([np.interp(at, sums, points[:, k]) for k in (0, 1)], axis=1)
        self._lines += [dense, points]

    @property
    def words(self) -> Array:
        """Points over all words, (n, 2) [mm]."""
        return np.vstack([np.empty((0, 2)), *self._words])

    @property
    def points(self) -> Array:
        """All points, (n, 2) [mm]."""
        return np.vstack([*self._lines, *self._words])


def traced(pattern: Pattern) -> Traces:
    """The traces of a pattern as it is drawn."""
    found = Traces()
    draw(pattern, found)
    return found


def _filled(boxes: Boxes) -> Array:
    """Points over a turned rectangle, (n, 2) [mm]."""
    (centre,), (along,), (half,) = boxes
    shares = [np.linspace(-size, size, max(2, math.ceil(2.0 * size / _STEP) + 1)) for size in half]
    x, y = (grid.ravel()[:, None] for grid in np.meshgrid(*shares))
    return np.asarray(centre + x * along + y * np.array([-along[1], along[0]]))
