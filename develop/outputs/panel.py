"""What stands beside a pattern on paper: check square, title block, view, notes, divisions table.

Each part is a block with a size, drawn from its upper left corner; `panel` stacks them in
columns. All lengths in mm; `height` of text is that of its capitals.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator, Sequence
from dataclasses import dataclass
from itertools import pairwise

from develop.outputs.fonts import width
from develop.outputs.ink import Ink
from develop.pattern.pattern import Pattern
from develop.pattern.table import Table, divisions_table

__all__ = ["Panel", "panels"]

_TEXT = 3.5  # [mm] legible from an arm's length
_TITLE = 6.0
_LEAD = 1.9  # from baseline to baseline over the height of capitals
_GAP = 10.0  # [mm] between blocks
_NOTES = 170.0  # [mm] width of the column of notes
_THIN, _THICK = 0.18, 0.35

_CAUTION = (
    "Cut sheet has sharp edges: wear cut-resistant gloves and eye protection.",
    "Local codes and licensed practice decide, not this sheet.",
)


@dataclass(frozen=True)
class _Block:
    """A part of the panel; draw(ink, left, top)."""

    wide: float
    high: float
    draw: Callable[[Ink, float, float], None]


@dataclass(frozen=True)
class Panel:
    """Blocks in columns: each with its left edge and its top below the panel's top."""

    wide: float
    high: float
    blocks: tuple[tuple[_Block, float, float], ...]

    def draw(self, ink: Ink, left: float, top: float) -> None:
        """Draw the panel with its upper left corner at (left, top)."""
        for block, x, down in self.blocks:
            block.draw(ink, left + x, top - down)


def panels(pattern: Pattern, *, units: str, tiny: bool, heights: Sequence[float]) -> Iterator[Panel]:
    """The panel packed into columns of at most each of the heights, where its largest block allows it."""
    table = divisions_table(pattern.divisions, units=units)
    fixed = [_square(50.0 if tiny else 100.0), _title(pattern), _view(), _notes(pattern, units)]
    for height in heights:
        height = max(height, *(block.high for block in fixed))
        yield _packed([*fixed, *_tables(table, height)], height)


def _packed(blocks: list[_Block], height: float) -> Panel:
    placed: list[tuple[_Block, float, float]] = []
    left = down = column = deepest = 0.0
    for block in blocks:
        if down and down + block.high > height + 1e-9:
            left, down, column = left + column + _GAP, 0.0, 0.0
        placed.append((block, left, down))
        deepest = max(deepest, down + block.high)
        down += block.high + _GAP
        column = max(column, block.wide)
    return Panel(left + column, deepest, tuple(placed))


def _square(side: float) -> _Block:
    words = ("CHECK SQUARE", f"{side:.0f} mm x {side:.0f} mm", "measure both ways", "before cutting")
    height = 4.0 if side == 100.0 else 3.0

    def draw(ink: Ink, left: float, top: float) -> None:
        ink.pen(_THICK)
        ink.rectangle(left, top - side, side, side)
        for n, word in enumerate(words):
            y = top - side / 2.0 + height * ((1.5 - n) * _LEAD - 0.5)
            ink.text(left + side / 2.0, y, word, height, anchor=0.5)

    return _Block(side, side, draw)


def _title(pattern: Pattern) -> _Block:
    first = _wrap(pattern.facts[0] if pattern.facts else pattern.mark, _NOTES - 8.0, _TITLE)
    rest = [line for fact in pattern.facts[1:] for line in _wrap(fact, _NOTES - 8.0, 4.0)]
    high = 4.0 + len(first) * _TITLE * _LEAD + len(rest) * 4.0 * _LEAD

    def draw(ink: Ink, left: float, top: float) -> None:
        ink.pen(_THICK)
        ink.rectangle(left, top - high, _NOTES, high)
        y = top - 2.0
        for line, height in [*((line, _TITLE) for line in first), *((line, 4.0) for line in rest)]:
            y -= height * _LEAD
            ink.text(left + 4.0, y + 0.45 * height, line, height)

    return _Block(_NOTES, high, draw)


def _view() -> _Block:
    """The circle of directions, as one sees it facing end B."""
    radius, wide, high = 18.0, _NOTES, 62.0
    words = (
        (0.0, "0  RIGHT", 0.0),
        (90.0, "90  TOP", 0.5),
        (180.0, "180  LEFT", 1.0),
        (270.0, "270  BOTTOM", 0.5),
    )

    def draw(ink: Ink, left: float, top: float) -> None:
        ink.text(left, top - _TEXT, "Facing END B: in front of it, looking in", _TEXT)
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

    return _Block(wide, high, draw)


def _polyline(ink: Ink, points: list[tuple[float, float]]) -> None:
    for start, end in pairwise(points):
        ink.line(*start, *end)


def _notes(pattern: Pattern, units: str) -> _Block:
    notes = [
        "PRINT AT ACTUAL SIZE (100 %), not fitted to the paper; then measure the check square both ways."
        " Paper stretches: where it matters, mark out from the table.",
        f"All figures in {'inches' if units == 'in' else 'mm'}; x from the datum line x = 0 at the left,"
        " y from the datum line y = 0 at the bottom; running lengths from the left seam.",
        f"Measured from: {pattern.datum}." if pattern.datum else "",
        "Cut on the middle of the thick line.",
        *_CAUTION,
    ]
    paragraphs = [_wrap(note, _NOTES, _TEXT) for note in notes if note]
    step, space = _TEXT * 1.75, _TEXT * 0.9

    def draw(ink: Ink, left: float, top: float) -> None:
        y = top - _TEXT
        for paragraph in paragraphs:
            for line in paragraph:
                ink.text(left, y, line, _TEXT)
                y -= step
            y -= space

    return _Block(_NOTES, sum(len(lines) * step + space for lines in paragraphs) - space, draw)


def _tables(table: Table, height: float) -> Iterator[_Block]:
    """The table, cut between rows into pieces no higher than `height`, each with its heads."""
    if not table.rows:
        return
    row = _TEXT * 2.0
    head = _TEXT * _LEAD * 3.0 + 1.0
    most = max(1, int((height - head) / row))
    pieces = math.ceil(len(table.rows) / most)
    each = math.ceil(len(table.rows) / pieces)
    pad = 3.0
    columns = [
        max(width(cell, _TEXT) for cell in (*heads, *(cells[n] for cells in table.rows))) + 2.0 * pad
        for n, heads in enumerate(table.heads)
    ]
    rights = [sum(columns[: n + 1]) - pad for n in range(len(columns))]
    wide = sum(columns)
    for first in range(0, len(table.rows), each):
        rows = table.rows[first : first + each]
        high = head + len(rows) * row

        def draw(
            ink: Ink,
            left: float,
            top: float,
            rows: Sequence[tuple[str, ...]] = rows,  # bound now: the loop goes on before the drawing
            high: float = high,
        ) -> None:
            step = _TEXT * _LEAD
            ink.text(left, top - _TEXT, table.title, _TEXT)
            for line in (0, 1):
                y = top - _TEXT - (line + 1) * step
                for right, heads in zip(rights, table.heads, strict=True):
                    ink.text(left + right, y, heads[line], _TEXT, anchor=1.0)
            ink.pen(_THICK)
            ink.line(left, top - head, left + wide, top - head)
            ink.pen(_THIN)
            for n, cells in enumerate(rows):
                y = top - head - (n + 0.75) * row
                for right, cell in zip(rights, cells, strict=True):
                    ink.text(left + right, y, cell, _TEXT, anchor=1.0)
                if n % 4 == 3:
                    ink.line(left, y - 0.25 * row, left + wide, y - 0.25 * row)
            ink.pen(_THICK)
            ink.line(left, top - high, left + wide, top - high)

        yield _Block(wide, high, draw)


def _wrap(text: str, wide: float, height: float) -> list[str]:
    """The text in lines no wider than `wide`."""
    lines: list[str] = []
    for word in text.split():
        if lines and width(f"{lines[-1]} {word}", height) <= wide:
            lines[-1] += f" {word}"
        else:
            lines.append(word)
    return lines
