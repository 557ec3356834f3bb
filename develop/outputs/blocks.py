"""What is printed beside a pattern: check square, title, view of directions, notes, tables.

Each part is a block with a size, drawn from its upper left corner. All lengths in mm; `height`
of text is that of its capitals.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass
from itertools import pairwise

from develop.outputs.fonts import width
from develop.outputs.ink import Ink
from develop.pattern.pattern import Pattern
from develop.pattern.table import Table

__all__ = ["CAUTIONS", "Block", "Grid", "notes", "square", "title", "view"]

CAUTIONS = (
    "Cut sheet has sharp edges: wear cut-resistant gloves and eye protection.",
    "Local codes and licensed practice decide, not this sheet.",
)
"""What every paper says of the work."""

_TEXT = 3.5  # [mm] legible from an arm's length
_TITLE, _FACTS = 6.0, 4.0
_LEAD = 1.9  # from baseline to baseline over the height of capitals
_THIN, _THICK = 0.18, 0.35


@dataclass(frozen=True)
class Block:
    """A part of a page: its size [mm]; draw(ink, left, top)."""

    wide: float
    high: float
    draw: Callable[[Ink, float, float], None]


def square(side: float, units: str) -> Block:
    """A square to be measured. side [mm], a whole number of millimetres or of inches."""
    size = f"{side:.0f} mm" if units == "mm" else f"{side / 25.4:.0f} in"
    words = ("CHECK SQUARE", f"{size} x {size}", "measure both ways", "before cutting")
    height = 4.0 if side >= 100.0 else 3.0

    def draw(ink: Ink, left: float, top: float) -> None:
        ink.pen(_THICK)
        ink.rectangle(left, top - side, side, side)
        for n, word in enumerate(words):
            y = top - side / 2.0 + height * ((1.5 - n) * _LEAD - 0.5)
            ink.text(left + side / 2.0, y, word, height, anchor=0.5)

    return Block(side, side, draw)


def title(pattern: Pattern, wide: float) -> Block:
    """The facts in a frame. wide [mm]."""
    room = wide - 8.0
    first, *rest = pattern.facts or (pattern.mark,)
    lines = [(line, _TITLE) for line in _wrap(first, room, _TITLE)]
    lines += [(line, _FACTS) for fact in rest for line in _wrap(fact, room, _FACTS)]
    high = 4.0 + sum(height * _LEAD for _, height in lines)

    def draw(ink: Ink, left: float, top: float) -> None:
        ink.pen(_THICK)
        ink.rectangle(left, top - high, wide, high)
        y = top - 2.0
        for line, height in lines:
            y -= height * _LEAD
            ink.text(left + 4.0, y + 0.45 * height, line, height)

    return Block(wide, high, draw)


def view(wide: float) -> Block:
    """The circle of directions, as one sees it facing end B. wide [mm]."""
    radius, high = 16.0, 58.0
    words = (
        (0.0, "0  RIGHT", 0.0),
        (90.0, "90  TOP", 0.5),
        (180.0, "180  LEFT", 1.0),
        (270.0, "270  BOTTOM", 0.5),
    )

    def draw(ink: Ink, left: float, top: float) -> None:
        for n, line in enumerate(_wrap("Facing END B: in front of it, looking in", wide - 16.0, _TEXT)):
            ink.text(left, top - _TEXT - n * _TEXT * _LEAD, line, _TEXT)
        x, y = left + wide / 2.0, top - high / 2.0 - 3.0

        def at(degrees: float, r: float) -> tuple[float, float]:
            turn = math.radians(degrees)
            return x + r * math.cos(turn), y + r * math.sin(turn)

        ink.pen(_THICK)
        _polyline(ink, [at(5.0 * n, radius) for n in range(73)])
        ink.pen(_THIN)
        _polyline(ink, [at(20.0 + 5.0 * n, radius - 5.0) for n in range(11)])
        tip = at(70.0, radius - 5.0)
        _polyline(ink, [at(57.0, radius - 3.6), tip, at(57.0, radius - 6.4)])
        for degrees, word, anchor in words:
            ink.line(*at(degrees, radius - 2.0), *at(degrees, radius + 2.0))
            px, py = at(degrees, radius + 4.0)
            drop = {90.0: 0.0, 270.0: _TEXT}.get(degrees, _TEXT / 2.0)
            ink.text(px, py - drop, word, _TEXT, anchor=anchor)

    return Block(wide, high, draw)


def _polyline(ink: Ink, points: list[tuple[float, float]]) -> None:
    for start, end in pairwise(points):
        ink.line(*start, *end)


def notes(texts: Sequence[str], wide: float, height: float = _TEXT) -> Block:
    """Paragraphs. wide, and height of the text [mm]."""
    paragraphs = [_wrap(text, wide, height) for text in texts]
    step, space = height * 1.75, height * 0.9

    def draw(ink: Ink, left: float, top: float) -> None:
        y = top - height
        for paragraph in paragraphs:
            for line in paragraph:
                ink.text(left, y, line, height)
                y -= step
            y -= space

    return Block(wide, sum(len(lines) * step + space for lines in paragraphs) - space, draw)


class Grid:
    """A table in columns, as wide as its text needs or, with smaller text, no wider than `most` [mm]."""

    def __init__(self, table: Table, *, most: float = math.inf) -> None:
        self.table = table
        columns = [
            max(width(cell, 1.0) for cell in (*heads, *(cells[n] for cells in table.rows)))
            for n, heads in enumerate(table.heads)
        ]
        pad = 6.0 / _TEXT  # between columns, over the height of the text
        whole = sum(columns) + pad * len(columns)
        self._text = min(_TEXT, most / whole)
        self.wide = self._text * whole
        self._rights = [self._text * (sum(columns[: n + 1]) + pad * (n + 0.5)) for n in range(len(columns))]
        self._row = self._text * 2.0
        self._head = self._text * _LEAD * 3.0 + 1.0

    def fits(self, high: float) -> int:
        """How many rows and the heads fit into a height [mm]."""
        return max(0, int((high - self._head + 1e-9) / self._row))

    def part(self, first: int, count: int) -> Block:
        """Some rows under the table's heads."""
        table, text, row, head = self.table, self._text, self._row, self._head
        rows = table.rows[first : first + count]
        high = head + len(rows) * row

        def draw(ink: Ink, left: float, top: float) -> None:
            ink.text(left, top - text, table.title + (" (continued)" if first else ""), text)
            for line in (0, 1):
                y = top - text - (line + 1) * text * _LEAD
                for right, heads in zip(self._rights, table.heads, strict=True):
                    if heads[line]:
                        ink.text(left + right, y, heads[line], text, anchor=1.0)
            ink.pen(_THICK)
            ink.line(left, top - head, left + self.wide, top - head)
            ink.pen(_THIN)
            for n, cells in enumerate(rows):
                y = top - head - (n + 0.75) * row
                for right, cell in zip(self._rights, cells, strict=True):
                    ink.text(left + right, y, cell, text, anchor=1.0)
                if n % 4 == 3:
                    ink.line(left, y - 0.25 * row, left + self.wide, y - 0.25 * row)
            ink.pen(_THICK)
            ink.line(left, top - high, left + self.wide, top - high)

        return Block(self.wide, high, draw)


def _wrap(text: str, wide: float, height: float) -> list[str]:
    """The text in lines no wider than `wide`."""
    lines: list[str] = []
    for word in text.split():
        if lines and width(f"{lines[-1]} {word}", height) <= wide:
            lines[-1] += f" {word}"
        else:
            lines.append(word)
    return lines
