"""Which pages a pattern is parted over, and where each lies on it. Coordinates are the pattern's own [mm].

The pages of a grid share an overlap. Half-way in it runs the line at which two pages are joined; so each
page has a cell of its own, and the cells cover the sheet without a gap. A page is left out if nothing is
drawn in its cell, unless it links pages that would else lie loose, as those round an opening in the midst.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import product

import numpy as np

from develop.outputs.paper import LONGEST, PageSetup
from develop.pattern.curve import Array

__all__ = ["HEAD", "Page", "Tiling", "column_name", "tiled"]

HEAD = 16.0
"""Height of the heading of each page, below its margin [mm]."""
_AROUND = 9.0  # [mm] room on each side of a pattern for what is drawn beside its lines


@dataclass(frozen=True)
class Page:
    """One page: its name, such as B3, its column and row from the upper left, and its window on the sheet.

    left, bottom, wide, high: the window [mm]. size: of the paper, width and height [mm].
    """

    name: str
    column: int
    row: int
    left: float
    bottom: float
    wide: float
    high: float
    size: tuple[float, float]


@dataclass(frozen=True)
class Tiling:
    """The pages that a pattern takes, row by row from the top, and the lines at which they are joined.

    across: x from the left edge of the first window, over the joints, to the right edge of the last;
    down: y from the top to the bottom likewise [mm]. overlap: on the sheet, in x and y [mm].
    """

    pages: tuple[Page, ...]
    across: tuple[float, ...]
    down: tuple[float, ...]
    overlap: tuple[float, float]

    def at(self, column: int, row: int) -> Page | None:
        """The page of a column and row, or None where it is left out."""
        return next((page for page in self.pages if (page.column, page.row) == (column, row)), None)

    def cell(self, page: Page) -> tuple[float, float, float, float]:
        """Left, bottom, right and top of what a page shows that no other need show [mm]."""
        left, right = self.across[page.column : page.column + 2]
        top, bottom = self.down[page.row : page.row + 2]
        return left, bottom, right, top


def tiled(points: Array, setup: PageSetup) -> Tiling:
    """The pages for a pattern.

    points: (n, 2) [mm], on all that is drawn and dense beside half the overlap.
    """
    ways = ("portrait", "landscape") if setup.orientation == "fewest" else (setup.orientation,)
    found = [_laid(points, setup, upright=way == "portrait") for way in ways]

    def cost(tiling: Tiling) -> tuple[int, float]:
        return len(tiling.pages), sum(page.size[0] * page.size[1] for page in tiling.pages)

    return min(found, key=cost)


def _laid(points: Array, setup: PageSetup, *, upright: bool) -> Tiling:
    low, high = points.min(axis=0) - _AROUND, points.max(axis=0) + _AROUND
    sides = (setup.paper.wide, setup.paper.high) if upright else (setup.paper.high, setup.paper.wide)
    heads = (0.0, HEAD)
    grid = []
    for k in (0, 1):
        factor = setup.factors[k]
        # All that stands on a page is drawn with the factor, so that the head takes its share too.
        around = 2.0 * setup.margin / factor + heads[k]
        overlap = setup.overlap / factor
        grid.append(_parted(float(low[k]), float(high[k]), (sides[k] or LONGEST) / factor - around, overlap,
                            fitted=sides[k] == 0.0))  # fmt: skip
    (xs, wide), (ups, tall) = grid
    ys = ups[::-1]  # rows go down from the top
    overlap_x, overlap_y = (setup.overlap / factor for factor in setup.factors)
    across = (xs[0], *(x + overlap_x / 2.0 for x in xs[1:]), xs[-1] + wide)
    down = (ys[0] + tall, *(y + tall - overlap_y / 2.0 for y in ys[1:]), ys[-1])
    columns = np.searchsorted(np.array(across[1:-1]), points[:, 0], side="right")
    rows = np.searchsorted(-np.array(down[1:-1]), -points[:, 1], side="right")
    size = (
        sides[0] or wide * setup.factors[0] + 2.0 * setup.margin,
        sides[1] or (tall + HEAD) * setup.factors[1] + 2.0 * setup.margin,
    )
    pages = tuple(
        Page(f"{column_name(column)}{row + 1}", column, row, xs[column], ys[row], wide, tall, size)
        for row, column in sorted(_linked(set(zip(rows.tolist(), columns.tolist(), strict=True))))
    )
    return Tiling(pages, across, down, (overlap_x, overlap_y))


def _linked(places: set[tuple[int, int]]) -> set[tuple[int, int]]:
    """The places (row, column), and those between them that make all hang together by their sides."""
    loose, groups = set(places), []
    while loose:
        ahead = [loose.pop()]
        groups.append(set(ahead))
        while ahead:
            row, column = ahead.pop()
            found = {(row + 1, column), (row - 1, column), (row, column + 1), (row, column - 1)} & loose
            loose -= found
            groups[-1] |= found
            ahead += found
    # In a fixed order, whatever order sets have.
    first, *others = sorted(groups, key=min)
    while others:
        near = [min(product(first, other), key=_away) for other in others]
        pair = min(near, key=_away)
        (row, column), (to_row, to_column) = pair
        first |= {(each, column) for each in range(min(row, to_row), max(row, to_row) + 1)}
        first |= {(to_row, each) for each in range(min(column, to_column), max(column, to_column) + 1)}
        first |= others.pop(near.index(pair))
    return first


def _away(
    pair: tuple[tuple[int, int], tuple[int, int]],
) -> tuple[int, tuple[tuple[int, int], tuple[int, int]]]:
    """How many sides lie between two places; among equals their own order decides."""
    (row, column), (to_row, to_column) = pair
    return abs(row - to_row) + abs(column - to_column), pair


def _parted(
    low: float, high: float, window: float, overlap: float, *, fitted: bool
) -> tuple[list[float], float]:
    """Where windows start that cover from low to high, and how long they are [mm].

    fitted: they may be shorter than `window`, as on a roll; else they reach as far beyond both ends.
    """
    count = max(1, math.ceil((high - low - overlap) / (window - overlap) - 1e-9))
    if fitted:
        window = min(window, math.ceil((high - low + (count - 1) * overlap) / count))
    beyond = count * (window - overlap) + overlap - (high - low)
    start = low - beyond / 2.0
    return [start + k * (window - overlap) for k in range(count)], window


def column_name(number: int) -> str:
    """A to Z, then AA, AB and so on, from 0.

    >>> [column_name(n) for n in (0, 25, 26, 701, 702)]
    ['A', 'Z', 'AA', 'ZZ', 'AAA']
    """
    name = ""
    number += 1
    while number:
        number, letter = divmod(number - 1, 26)
        name = chr(ord("A") + letter) + name
    return name
