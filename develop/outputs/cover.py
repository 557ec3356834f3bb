"""The first page of a tiled file: the check square, how the pages go together, and a map of them.

Blocks are set from their upper left corners, as on all paper. All lengths in mm of the drawing, which the
printer's factors, if there are any, make true.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from develop.outputs.blocks import CAUTIONS, Block, notes, square
from develop.outputs.fonts import width
from develop.outputs.ink import Ink
from develop.outputs.page_marks import Word, placed
from develop.outputs.paper import LONGEST, PageSetup
from develop.outputs.tiling import Tiling
from develop.pattern.curve import Array
from develop.pattern.pattern import Pattern

__all__ = ["Cover", "Mapped", "covers"]

_TEXT = 3.0
_ACTUAL = "PRINT AT ACTUAL SIZE (100 %)"
_GAP = 7.0
_BESIDE = 60.0  # [mm] of room beside the square that text can stand in
_COLUMN = 190.0  # [mm] of text at most
_LEAST = 75.0  # [mm] height of a map that is alone
_SMALL = 62.0  # [mm] height of one of several
_ROLL = 150.0  # [mm] height of a map on a roll
_ROLL_WIDE = 480.0  # [mm] width of the first page where a roll runs upwards
_NAME = 4.0  # [mm] height of a page's name on the map, at most
# Where in its cell it is tried, as shares of the room.
_PLACES = (
    (0.5, 0.5), (0.5, 0.2), (0.5, 0.8), (0.15, 0.5), (0.85, 0.5), (0.15, 0.15), (0.85, 0.85),
    (0.15, 0.85), (0.85, 0.15), (0.5, 0.08), (0.5, 0.92), (0.06, 0.06), (0.94, 0.94),
    (0.06, 0.94), (0.94, 0.06),
)  # fmt: skip


@dataclass(frozen=True)
class Mapped:
    """A pattern and its pages."""

    pattern: Pattern
    tiling: Tiling


@dataclass(frozen=True)
class Cover:
    """One page of paper [mm], and blocks with their left edge and their top below that of the room on it.

    high: height of that room [mm].
    """

    size: tuple[float, float]
    high: float
    blocks: tuple[tuple[Block, float, float], ...]

    def draw(self, ink: Ink) -> None:
        """Draw the page; the ink's (0, 0) is the lower left corner of the room inside the margins."""
        for block, left, down in self.blocks:
            block.draw(ink, left, self.high - down)


def covers(title: str, maps: Sequence[Mapped], setup: PageSetup) -> tuple[Cover, ...]:
    """The pages that come first: one, or more where not all fits on it."""
    wide, high = _room(setup)
    column = min(wide, _COLUMN)
    head = [(f"{title}   ·   {_ACTUAL}", 3.2)]
    if setup.factor_words:
        head.append((setup.factor_words, 3.2))
    page = _Flow(high, _lines(head, column))
    _write_column(page, title, maps, setup, column)
    beside = wide >= _COLUMN + 160.0 and len(page.pages) == 1
    used = page.down
    if beside:
        page.left, page.down = column + 15.0, 0.0
    many = 1 if len(maps) == 1 else max(2, int((wide - page.left) // 150.0))
    least = _LEAST if len(maps) == 1 else _SMALL
    for first in range(0, len(maps), many):
        if high - page.down < least:
            page.turn()
        rows = math.ceil((len(maps) - first) / many)
        rest = min(high, max(used, _ROLL)) - page.down if setup.paper.is_roll else high - page.down
        tall = max(least, (rest - (rows - 1) * _GAP) / rows)
        each = (wide - page.left - (many - 1) * 10.0) / many
        blocks = [_map(one, each, tall, setup) for one in maps[first : first + many]]
        for n, block in enumerate(blocks):
            page.put(block, n * (each + 10.0))
        page.down += max(block.high for block in blocks) + _GAP
    return tuple(_cover(blocks, high, setup) for blocks in page.pages)


def _room(setup: PageSetup) -> tuple[float, float]:
    """Width and height inside the margins [mm of the drawing]; a roll is cut as long as is needed."""
    paper = setup.paper
    sides = (paper.wide, paper.high or LONGEST)
    if setup.orientation == "landscape":
        sides = (paper.high or _ROLL_WIDE, paper.wide)
    wide, high = (
        (side - 2.0 * setup.margin) / factor for side, factor in zip(sides, setup.factors, strict=True)
    )
    return wide, high


def _cover(blocks: Sequence[tuple[Block, float, float]], high: float, setup: PageSetup) -> Cover:
    """The page for blocks; one of an upright roll ends below them."""
    paper, edges = setup.paper, 2.0 * setup.margin
    if setup.orientation == "landscape":
        return Cover((paper.high or _ROLL_WIDE, paper.wide), high, tuple(blocks))
    if paper.is_roll:
        high = max(down + block.high for block, _, down in blocks) + 1.0
    return Cover((paper.wide, paper.high or high * setup.factors[1] + edges), high, tuple(blocks))


class _Flow:
    """Blocks set one below the other, page by page of a height [mm]; head: of every page but the first."""

    def __init__(self, high: float, head: Block) -> None:
        self._head = head
        self.high, self.left, self.down = high, 0.0, 0.0
        self.pages: list[list[tuple[Block, float, float]]] = [[]]

    def put(self, block: Block, right: float = 0.0) -> None:
        """A block here, or to the right of here."""
        self.pages[-1].append((block, self.left + right, self.down))

    def stack(self, block: Block) -> None:
        """A block here, or on the next page if it does not fit, and go on below it."""
        if self.down and self.down + block.high > self.high:
            self.turn()
        self.put(block)
        self.down += block.high + _GAP

    def turn(self) -> None:
        """Go on at the top of a new page."""
        self.pages.append([(self._head, 0.0, 0.0)])
        self.left, self.down = 0.0, self._head.high + _GAP


def _write_column(page: _Flow, title: str, maps: Sequence[Mapped], setup: PageSetup, wide: float) -> None:
    """Title, square and words, in a column of a width [mm]."""
    units = maps[0].pattern.units
    page.stack(_title(title, sum(len(one.tiling.pages) for one in maps), setup, wide))
    check = square(100.0 if units == "mm" else 101.6, units)
    first, rest = _texts(units)
    room = wide - check.wide - 8.0
    if room >= _BESIDE:
        words = notes(first, room, _TEXT)
        page.put(words, check.wide + 8.0)
        page.stack(check)
        page.down += max(0.0, words.high - check.high)
    else:
        page.stack(check)
        page.stack(notes(first, wide, _TEXT))
    page.stack(notes(rest, wide, _TEXT))


def _title(title: str, count: int, setup: PageSetup, wide: float) -> Block:
    """What is in the file, and the factors if there are any."""
    paper = setup.paper
    kind = f"a roll {paper.wide:g} mm wide" if paper.is_roll else paper.name
    pages = f"{count} page{'s' if count != 1 else ''} on {kind}"
    lines = [
        (f"{title}: {pages}", 5.5),
        (f"{_ACTUAL}, NOT FITTED TO THE PAPER", 4.0),
        ("This page first: measure the square before you print the rest.", 3.2),
    ]
    if setup.factor_words:
        lines.append((f"{setup.factor_words}: for that printer alone, not for another", 3.2))
    return _lines(lines, wide)


def _lines(lines: Sequence[tuple[str, float]], wide: float) -> Block:
    """Lines of text, each with the height of its capitals, or smaller if it must be [mm]."""

    def draw(ink: Ink, left: float, top: float) -> None:
        for text, height in lines:
            top -= height
            ink.text(left, top, text, height * min(1.0, wide / width(text, height)))
            top -= 0.7 * height

    return Block(wide, sum(1.7 * height for _, height in lines), draw)


def _texts(units: str) -> tuple[list[str], list[str]]:
    """What stands beside the square, and what below it."""
    side, within = ("100 mm", "0.3 mm") if units == "mm" else ("4 in", "1/64 in")
    return (
        [
            f"Measure the square both ways with a steel rule: {side} within {within}. If it is not, the page"
            " was fitted to the paper, or the printer is not true: develop printer-test"
            " tells how to find its factors.",
            "Each page has the letter of its column and the number of its row, as on the map. Pages that"
            " would be empty are left out.",
            "Cut each page back along its dashed lines, if it has any at the right and below.",
            "Begin at the lower right. Lay each page on its neighbours, line on line and cross on"
            " cross, and tape it.",
        ],
        [
            "When all is taped, measure the long checks where there are any, and see with a straightedge that"
            " the thin datum lines x = 0 and y = 0 run straight through the joints. Paper stretches: where"
            " it matters, mark out from the table of the PDF with the large sheet. Cut on the"
            " middle of the thick line.",
            " ".join(CAUTIONS),
        ],
    )


def _map(one: Mapped, wide: float, high: float, setup: PageSetup) -> Block:
    """The pages with their names, and the pattern's outline over them."""
    tiling, pattern = one.tiling, one.pattern
    count = len(tiling.pages)
    width_first, height_first = tiling.pages[0].size
    way = "" if setup.paper.is_roll else ", portrait" if height_first >= width_first else ", landscape"
    caption = [
        (f"{pattern.mark}: {count} page{'s' if count != 1 else ''}{way}", 3.4),
        (pattern.facts[1] if len(pattern.facts) > 1 else pattern.kind, 2.6),
    ]
    words = _lines(caption, wide)
    top_room = words.high + 1.0
    whole = (tiling.across[-1] - tiling.across[0], tiling.down[0] - tiling.down[-1])
    scale = min((wide - 1.0) / whole[0], (high - top_room - 1.0) / whole[1], 0.35)
    outlines = [pattern.cut, *pattern.openings]
    points = np.vstack([curve.polyline(0.5 / scale) for each in outlines for _, curve in each.curves])
    dense = np.vstack([start + np.linspace(0.0, 1.0, 60)[:, None] * (end - start)
                       for start, end in pairwise(points)])  # fmt: skip
    corner = np.array([tiling.across[0], tiling.down[0]])

    def draw(ink: Ink, left: float, top: float) -> None:
        words.draw(ink, left, top)
        shift = np.array([left + 0.5, top - top_room]) - scale * corner
        shown = scale * dense + shift
        ink.pen(0.13)
        names = []
        for page in tiling.pages:
            low_x, low_y, high_x, high_y = scale * np.array(tiling.cell(page)) + np.tile(shift, 2)
            ink.rectangle(low_x, low_y, high_x - low_x, high_y - low_y)
            names.append(_name(page.name, (low_x, low_y, high_x, high_y), shown))
        ink.pen(0.35)
        for outline in outlines:
            curves = [curve for _, curve in outline.curves]
            ink.curves(
                [scale * curve.controls + shift for curve in curves],
                straight=[curve.straight for curve in curves],
                closed=True,
            )
        for word in names:
            word.draw(ink)

    return Block(wide, top_room + scale * whole[1] + 1.0, draw)


def _name(text: str, cell: tuple[float, float, float, float], points: Array) -> Word:
    """A page's name in its cell of the map, clear of the outline if it can be."""
    left, bottom, right, top = cell
    largest = min(_NAME, 0.3 * (top - bottom), 0.6 * (right - left) / width(text, 1.0))
    choices = []
    for height in (largest, 0.7 * largest):
        long = width(text, height)
        choices += [
            Word(
                text, (left + x * (right - left - long), bottom + y * (top - bottom - height)), False, height
            )
            for x, y in _PLACES
        ]
    return placed(choices, points)
