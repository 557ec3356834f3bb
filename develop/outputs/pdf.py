"""PDF at true scale: one large sheet for each pattern, then its pages to mark it out by tape.

A sheet over 5080 mm goes on to further pages.
"""

from __future__ import annotations

import io
import math
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from develop.outputs.document import canvas_of
from develop.outputs.ink import POINT, Ink, PatternPen
from develop.outputs.layers import MARKS, NOTES, Layers
from develop.outputs.pages import count, parted
from develop.outputs.panel import Panel, panels
from develop.outputs.tape import MARGIN, paper, tape_pages
from develop.pattern.curve import Array
from develop.pattern.drawing import draw
from develop.pattern.lettering import Boxes, arrow_box, boxes_of
from develop.pattern.pattern import Pattern

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

__all__ = ["pdf", "printed"]

_LARGEST = 5080.0  # [mm] 14400 points: what every viewer takes for a page
_MARGIN = 12.0  # [mm] printers leave up to 10 empty
_STRIP = 10.0  # [mm] line of text along the top of every page
_AROUND = 16.0  # [mm] between the pattern and what stands beside it
_STUB = 10.0  # [mm] of datum line on each side of the pattern
_OVERLAP = 60.0  # [mm] that neighbouring pages share
_CROSSES = 200.0  # [mm] from cross to cross in the overlap
_TINY = 100.0  # [mm] a pattern smaller than this in both directions has the small check square


@dataclass(frozen=True)
class _Sheet:
    """The whole sheet without margins [mm].

    pattern: where the pattern's (0, 0) is; corner: the panel's upper left one.
    extent: least and greatest coordinates of the pattern, in its own coordinates.
    """

    wide: float
    high: float
    pattern: tuple[float, float]
    extent: tuple[Array, Array]
    panel: Panel
    corner: tuple[float, float]


def pdf(patterns: Sequence[Pattern]) -> bytes:
    """The patterns as a PDF file: a sheet each, true to scale, then the pages for the tape.

    Raises WriteError if the type face is missing.
    """
    return printed(patterns)[0]


def printed(patterns: Sequence[Pattern]) -> tuple[bytes, tuple[int, ...]]:
    """The PDF file, and how many large sheets each pattern takes in it. Raises WriteError as `pdf`."""
    buffer = io.BytesIO()
    canvas = canvas_of(buffer, ", ".join(pattern.mark for pattern in patterns))
    layers = Layers(canvas)
    counts = tuple(_draw_sheet(canvas, layers, pattern, _arranged(pattern)) for pattern in patterns)
    for pattern in patterns:
        _draw_tape_pages(canvas, pattern)
    layers.finish()
    canvas.save()
    return buffer.getvalue(), counts


def _draw_tape_pages(canvas: Canvas, pattern: Pattern) -> None:
    size = paper(pattern)
    wide, high = (side - 2.0 * MARGIN for side in size)
    for page in tape_pages(pattern):
        canvas.setPageSize((size[0] * POINT, size[1] * POINT))
        page.draw(Ink(canvas, (0.0, 0.0, wide, high), MARGIN), high)
        canvas.showPage()


def _arranged(pattern: Pattern) -> _Sheet:
    """The panel beside the pattern or below it: few pages, then a small sheet, then not a long strip."""
    points = np.vstack(
        [curve.polyline(0.01) for outline in (pattern.cut, pattern.net) for _, curve in outline.curves]
    )
    low, high = points.min(axis=0), points.max(axis=0)
    wide, tall = (high - low).tolist()
    inner = _LARGEST - 2.0 * _MARGIN - _STRIP
    heights = [min(h, inner) for h in (tall, 115.0, 150.0, 200.0, 270.0, 360.0, 500.0, 700.0, 1000.0)]
    choices = []
    for panel in panels(pattern, tiny=max(wide, tall) < _TINY, heights=heights):
        beside = (wide + 3.0 * _AROUND + panel.wide, max(tall + 2.0 * _AROUND, panel.high))
        below = (max(wide + 2.0 * _AROUND, panel.wide), tall + 3.0 * _AROUND + panel.high)
        choices.append((beside, panel, True))
        # Below is the foot of the sheet: fine unless that is not on the first page.
        if below[1] <= inner:
            choices.append((below, panel, False))

    def cost(choice: tuple[tuple[float, float], Panel, bool]) -> tuple[int, float]:
        (w, h), _, _ = choice
        return count(w, inner, _OVERLAP) * count(h, inner, _OVERLAP), w * h * (max(w, h) / min(w, h)) ** 0.25

    (w, h), panel, is_beside = min(choices, key=cost)
    top = h - _AROUND - float(high[1])
    if not is_beside:
        return _Sheet(w, h, (_AROUND - float(low[0]), top), (low, high), panel, (0.0, panel.high))
    if cost(((w, h), panel, True))[0] > 1:  # the panel first, so that it lies whole on the first page
        return _Sheet(w, h, (panel.wide + 2.0 * _AROUND - float(low[0]), top), (low, high), panel, (0.0, h))
    corner = (wide + 3.0 * _AROUND, h)
    return _Sheet(w, h, (_AROUND - float(low[0]), top), (low, high), panel, corner)


def _reaches(pattern: Pattern, sheet: _Sheet) -> Array:
    """How far each label, arrow and block beside the pattern reaches on the sheet: least and greatest x
    and y, (n, 2, 2) [mm]."""
    found = [
        [[sheet.corner[0] + left, sheet.corner[1] - down - block.high],
         [sheet.corner[0] + left + block.wide, sheet.corner[1] - down]]
        for block, left, down in sheet.panel.blocks
    ]  # fmt: skip
    every = [boxes_of(pattern.labels)] if pattern.labels else []
    every += [arrow_box(arrow, text) for arrow, text in pattern.arrows]
    if not every:
        return np.array(found)
    boxes = Boxes(*(np.vstack(parts) for parts in zip(*every, strict=True)))
    cos, sin = np.abs(boxes.along).T[..., None]
    reach = boxes.half * cos + boxes.half[:, ::-1] * sin
    middle = boxes.centre + sheet.pattern
    return np.concatenate([found, np.stack([middle - reach, middle + reach], axis=1)])


def _draw_sheet(canvas: Canvas, layers: Layers, pattern: Pattern, sheet: _Sheet) -> int:
    """All pages of one sheet, from the top left, along the rows; returns how many they are."""
    inner = _LARGEST - 2.0 * _MARGIN - _STRIP
    reaches = _reaches(pattern, sheet)
    across = parted(sheet.wide, inner, _OVERLAP, reaches[:, :, 0].tolist())
    down = parted(sheet.high, inner, _OVERLAP, (sheet.high - reaches[:, ::-1, 1]).tolist())
    columns, rows = len(across), len(down)
    for row, (top, high) in enumerate(down):
        bottom = sheet.high - top - high
        for column, (left, wide) in enumerate(across):
            canvas.setPageSize(((wide + 2.0 * _MARGIN) * POINT, (high + _STRIP + 2.0 * _MARGIN) * POINT))
            ink = Ink(canvas, (left, bottom, wide, high + _STRIP), _MARGIN)
            layers.open(NOTES)
            ink.text(left, bottom + high + 4.0, _heading(pattern, row, column, rows, columns), 4.0)
            sheet.panel.draw(ink, *sheet.corner)
            draw(pattern, PatternPen(ink, *sheet.pattern, layers))
            layers.open(MARKS)
            _datum_lines(ink, sheet)
            for x in ([left] if column else []) + ([left + wide - _OVERLAP] if column < columns - 1 else []):
                _match_line(ink, (x + _OVERLAP / 2.0, bottom), (x + _OVERLAP / 2.0, bottom + high))
            for y in ([bottom + high] if row else []) + ([bottom + _OVERLAP] if row < rows - 1 else []):
                _match_line(ink, (left, y - _OVERLAP / 2.0), (left + wide, y - _OVERLAP / 2.0))
            layers.close()
            canvas.showPage()
    return rows * columns


def _heading(pattern: Pattern, row: int, column: int, rows: int, columns: int) -> str:
    """The line along the top of a page, with its neighbours by name."""
    number = row * columns + column + 1
    words = ["PRINT AT ACTUAL SIZE", pattern.mark, f"sheet {number} of {rows * columns}"]
    neighbours = (
        ("left", column > 0, number - 1),
        ("right", column < columns - 1, number + 1),
        ("above", row > 0, number - columns),
        ("below", row < rows - 1, number + columns),
    )
    words += [f"{side}: sheet {other}" for side, there, other in neighbours if there]
    if rows * columns > 1:
        words.append("lay crosses and dashed lines on each other")
    return "   ·   ".join(words)


def _datum_lines(ink: Ink, sheet: _Sheet) -> None:
    """Short ends of the lines x = 0 and y = 0, outside the pattern on both sides."""
    x, y = sheet.pattern
    (low_x, low_y), (high_x, high_y) = (point.tolist() for point in sheet.extent)
    ink.pen(0.25)
    for at in (y + low_y - _STUB - 2.0, y + high_y + 2.0):
        ink.line(x, at, x, at + _STUB)
        ink.text(x + 1.5, at + 3.5, "x = 0", 3.0)
    for at, word in ((x + low_x - _STUB - 2.0, -1.0), (x + high_x + 2.0, 1.0)):
        ink.line(at, y, at + _STUB, y)
        ink.text(at + word, y + 1.5, "y = 0", 3.0)


def _match_line(ink: Ink, start: tuple[float, float], end: tuple[float, float]) -> None:
    """A dashed line in the overlap, with crosses at the same places of the sheet on both pages."""
    ink.pen(0.18, (8.0, 4.0))
    ink.line(*start, *end)
    ink.pen(0.25)
    upright = start[0] == end[0]
    low, high = (start[1], end[1]) if upright else (start[0], end[0])
    for step in range(math.ceil((low + 10.0) / _CROSSES), math.floor((high - 10.0) / _CROSSES) + 1):
        x, y = (start[0], step * _CROSSES) if upright else (step * _CROSSES, start[1])
        ink.line(x - 8.0, y, x + 8.0, y)
        ink.line(x, y - 8.0, x, y + 8.0)
