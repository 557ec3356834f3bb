"""What stands beside a pattern on its large sheet, stacked in columns. All lengths in mm."""

from __future__ import annotations

import math
from collections.abc import Iterator, Sequence
from dataclasses import dataclass

from develop.outputs.blocks import CAUTIONS, Block, Grid, notes, square, title, view
from develop.outputs.ink import Ink
from develop.pattern.pattern import Pattern
from develop.pattern.table import divisions_table, figures_table

__all__ = ["Panel", "panels"]

_GAP = 10.0  # [mm] between blocks
_WIDE = 170.0  # [mm] width of a column of text


@dataclass(frozen=True)
class Panel:
    """Blocks in columns: each with its left edge and its top below the panel's top."""

    wide: float
    high: float
    blocks: tuple[tuple[Block, float, float], ...]

    def draw(self, ink: Ink, left: float, top: float) -> None:
        """Draw the panel with its upper left corner at (left, top)."""
        for block, x, down in self.blocks:
            block.draw(ink, left + x, top - down)


def panels(pattern: Pattern, *, tiny: bool, heights: Sequence[float]) -> Iterator[Panel]:
    """The panel packed into columns of at most each of the heights, where its largest block allows it."""
    grids = [
        Grid(divisions_table(pattern.divisions, units=pattern.units)),
        *(Grid(figures_table(each, units=pattern.units)) for each in pattern.figures),
    ]
    # A rule must be able to prove it: a whole number of inches on a sheet in inches.
    sides = (50.0, 100.0) if pattern.units == "mm" else (50.8, 101.6)
    fixed = [
        square(sides[0 if tiny else 1], pattern.units),
        title(pattern, _WIDE),
        *((view(_WIDE),) if pattern.facing else ()),
        notes(_texts(pattern), _WIDE),
    ]
    for height in heights:
        height = max(height, *(block.high for block in fixed))
        yield _packed([*fixed, *(part for grid in grids for part in _parts(grid, height))], height)


def _packed(blocks: list[Block], height: float) -> Panel:
    placed: list[tuple[Block, float, float]] = []
    left = down = column = deepest = 0.0
    for block in blocks:
        if down and down + block.high > height + 1e-9:
            left, down, column = left + column + _GAP, 0.0, 0.0
        placed.append((block, left, down))
        deepest = max(deepest, down + block.high)
        down += block.high + _GAP
        column = max(column, block.wide)
    return Panel(left + column, deepest, tuple(placed))


def _texts(pattern: Pattern) -> list[str]:
    texts = [
        "PRINT AT ACTUAL SIZE (100 %), not fitted to the paper; then measure the check square both ways."
        " Paper stretches: where it matters, mark out from the table.",
        f"All figures in {'inches' if pattern.units == 'in' else 'mm'}; x from the datum line x = 0 at the"
        " left, y from the datum line y = 0 at the bottom"
        + (
            f"; running lengths along END A and END B from line {pattern.divisions[0].number}."
            if pattern.divisions
            else "."
        ),
        f"Measured from: {pattern.datum}." if pattern.datum else "",
        "Cut on the middle of the thick line.",
        *CAUTIONS,
    ]
    return [text for text in texts if text]


def _parts(grid: Grid, height: float) -> Iterator[Block]:
    """The table, cut between rows into equal pieces no higher than `height`."""
    count = len(grid.table.rows)
    if not count:
        return
    pieces = math.ceil(count / max(1, grid.fits(height)))
    each = math.ceil(count / pieces)
    for first in range(0, count, each):
        yield grid.part(first, each)
