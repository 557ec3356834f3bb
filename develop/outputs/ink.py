"""Strokes and text on PDF pages, in mm from the lower left corner of a window on the sheet.

Path operators are written here, with four decimals of a point (4e-5 mm): reportlab's own
path calls keep six digits, which on a sheet of 5 m is 0.002 mm.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

from develop.outputs.fonts import CAPITAL, FACE, width
from develop.outputs.layers import Layers
from develop.pattern.curve import Array, Curve
from develop.pattern.drawing import (
    CUT,
    DASHED,
    FOLD_LINES,
    NET,
    OPENINGS,
    PEN_LINES,
    PRESS_LINES,
    ROLL_LINES,
    TEXT,
    WITNESS_MARKS,
)
from develop.pattern.pattern import Label, Outline

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

__all__ = ["POINT", "Ink", "PatternPen"]

POINT = 72.0 / 25.4
"""Points of a PDF in a mm."""

_WIDTHS = {
    OPENINGS: 0.5,
    CUT: 0.5,
    NET: 0.25,
    ROLL_LINES: 0.18,
    PRESS_LINES: 0.25,
    PEN_LINES: 0.18,
    FOLD_LINES: 0.25,
    WITNESS_MARKS: 0.25,
    DASHED: 0.25,
    TEXT: 0.25,
}  # [mm]
_POP = 1.5  # [mm] half the cross at a centre pop
_DASHES = {NET: (4.0, 1.5)}  # [mm]


class Ink:
    """One page. window: left, bottom, width and height of the sheet's part on it [mm]; margin round it [mm].

    What lies wholly outside the page is not written at all, unless it is to be seen `everywhere`: through
    windows of other pages.
    """

    def __init__(
        self,
        canvas: Canvas,
        window: tuple[float, float, float, float],
        margin: float,
        *,
        everywhere: bool = False,
    ) -> None:
        self._canvas = canvas
        self._everywhere = everywhere
        self._left, self._bottom = window[0] - margin, window[1] - margin
        self._right, self._top = window[0] + window[2] + margin, window[1] + window[3] + margin

    def pen(self, thickness: float, dashes: tuple[float, ...] = ()) -> None:
        """Width of the strokes that follow, and the lengths of their dashes and gaps [mm]."""
        pattern = " ".join(f"{length * POINT:.3f}" for length in dashes)
        self._canvas.addLiteral(f"{thickness * POINT:.3f} w [{pattern}] 0 d 1 J 1 j")

    def line(self, x1: float, y1: float, x2: float, y2: float) -> None:
        """A straight stroke."""
        if self._sees(min(x1, x2), min(y1, y2), max(x1, x2), max(y1, y2)):
            self._canvas.addLiteral(f"{self._at(x1, y1)} m {self._at(x2, y2)} l S")

    def rectangle(self, x: float, y: float, wide: float, high: float) -> None:
        """A rectangle, its sides stroked."""
        if self._sees(x, y, x + wide, y + high):
            corners = ((x + wide, y), (x + wide, y + high), (x, y + high))
            steps = " ".join(f"{self._at(*corner)} l" for corner in corners)
            self._canvas.addLiteral(f"{self._at(x, y)} m {steps} s")

    def curves(self, curves: list[Array], *, straight: list[bool], closed: bool) -> None:
        """Chains of Béziers (3 n + 1, 2), head to tail, as one path; a straight one as a line."""
        low = [controls.min(axis=0) for controls in curves]
        high = [controls.max(axis=0) for controls in curves]
        if not self._sees(*(float(min(p[k] for p in low)) for k in (0, 1)),
                          *(float(max(p[k] for p in high)) for k in (0, 1))):  # fmt: skip
            return
        words = [f"{self._at(*curves[0][0])} m"]
        for controls, is_line in zip(curves, straight, strict=True):
            points = [self._at(x, y) for x, y in (controls[-1:] if is_line else controls[1:]).tolist()]
            if is_line:
                words.append(f"{points[0]} l")
            else:
                words += [f"{' '.join(points[n : n + 3])} c" for n in range(0, len(points), 3)]
        self._canvas.addLiteral(" ".join((*words, "s" if closed else "S")))

    def text(
        self, x: float, y: float, text: str, height: float, *, angle: float = 0.0, anchor: float = 0.0
    ) -> None:
        """A line of text, capitals of `height` [mm], turned by `angle` [rad].

        anchor: which of its places is at (x, y) [mm], 0 its left end, 0.5 middle, 1 right end.
        """
        wide = width(text, height) if anchor or angle else len(text) * height * 1.4
        reach = wide + 2.0 * height
        if not self._sees(x - reach, y - reach, x + reach, y + reach):
            return
        cos, sin = math.cos(angle), math.sin(angle)
        x, y = x - anchor * wide * cos, y - anchor * wide * sin
        words = self._canvas.beginText()
        words.setFont(FACE, round(height / CAPITAL * POINT, 3))
        place = ((x - self._left) * POINT, (y - self._bottom) * POINT)
        if angle:
            words.setTextTransform(cos, sin, -sin, cos, *place)
        else:  # the same in a third of the time
            words.setTextOrigin(*place)
        words.textOut(text)
        self._canvas.drawText(words)

    def _at(self, x: float, y: float) -> str:
        return f"{(x - self._left) * POINT:.4f} {(y - self._bottom) * POINT:.4f}"

    def _sees(self, x1: float, y1: float, x2: float, y2: float) -> bool:
        if self._everywhere:
            return True
        return x1 <= self._right and x2 >= self._left and y1 <= self._top and y2 >= self._bottom


class PatternPen:
    """The pen of the drawing walk on paper; the pattern's (0, 0) lies at (x, y) of the sheet [mm].

    Each layer of the drawing is one of `layers`, which the caller closes.
    """

    def __init__(self, ink: Ink, x: float, y: float, layers: Layers) -> None:
        self._ink = ink
        self._layers = layers
        self._x, self._y = x, y
        self._layer = CUT

    def layer(self, name: str) -> None:
        self._layer = name
        self._layers.open(name)
        self._ink.pen(_WIDTHS[name], _DASHES.get(name, ()))

    def contour(self, outline: Outline) -> None:
        curves = [curve for _, curve in outline.curves]
        self._curves(curves, closed=True)

    def line(self, start: Array, end: Array) -> None:
        (x1, y1), (x2, y2) = start.tolist(), end.tolist()
        self._ink.line(self._x + x1, self._y + y1, self._x + x2, self._y + y2)

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        if dashed:
            self._ink.pen(_WIDTHS[self._layer], (6.0, 3.0))
        self._curves([curve], closed=False)
        if dashed:
            self._ink.pen(_WIDTHS[self._layer], _DASHES.get(self._layer, ()))

    def pop(self, at: Array) -> None:
        x, y = self._x + float(at[0]), self._y + float(at[1])
        self._ink.line(x - _POP, y, x + _POP, y)
        self._ink.line(x, y - _POP, x, y + _POP)

    def text(self, label: Label) -> None:
        x, y = self._x + float(label.at[0]), self._y + float(label.at[1])
        self._ink.text(x, y, label.text, label.height, angle=label.angle, anchor=0.5)

    def _curves(self, curves: list[Curve], *, closed: bool) -> None:
        shift = (self._x, self._y)
        self._ink.curves(
            [curve.controls + shift for curve in curves],
            straight=[curve.straight for curve in curves],
            closed=closed,
        )
