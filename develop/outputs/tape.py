"""Pages of office paper from which a pattern is marked out by tape: facts, view, notes, tables.

No row of a table is cut in two, and each part of a table has its heads. All lengths in mm.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.outputs.blocks import CAUTIONS, Block, Grid, notes, title, view
from develop.outputs.ink import Ink
from develop.pattern.pattern import Pattern
from develop.pattern.points import edge_figures
from develop.pattern.table import divisions_table, figures_table, marks_table
from develop.units import format_length

__all__ = ["MARGIN", "TapePage", "paper", "tape_pages"]

MARGIN = 12.0
"""Left empty round each page [mm]."""

_PAPER = {"mm": (210.0, 297.0), "in": (215.9, 279.4)}  # A4 (ISO 216), Letter (ANSI Y14.1)
_STRIP = 8.0  # [mm] heading of a page
_GAP = 7.0
_TEXT = 3.0  # read at a table, not from an arm's length
_VIEW = 92.0  # [mm] width of the view of directions
_MANY = 12  # rows of witness marks that do not stand beside the view any more
_SAME = 1e-6  # [mm]
_FEW = 3  # rows of a table that are worth a place of their own at the foot or the head of a page


@dataclass(frozen=True)
class TapePage:
    """One page: its heading, and blocks with their left edge and their top below that of the page."""

    heading: str
    blocks: tuple[tuple[Block, float, float], ...]

    def draw(self, ink: Ink, high: float) -> None:
        """Draw on a page that is `high` within its margins [mm]."""
        ink.text(0.0, high - 3.5, self.heading, 3.5)
        for block, left, down in self.blocks:
            block.draw(ink, left, high - _STRIP - down)


def paper(pattern: Pattern) -> tuple[float, float]:
    """Width and height of the pages [mm]: A4, or Letter where the figures are inches."""
    return _PAPER[pattern.units]


def tape_pages(pattern: Pattern) -> tuple[TapePage, ...]:
    """The pages of a pattern, in order."""
    wide, high = (size - 2.0 * MARGIN for size in paper(pattern))
    flow = _Flow(high - _STRIP)
    flow.block(title(pattern, wide))
    marks = Grid(marks_table(pattern.marks, units=pattern.units), most=wide - _VIEW - 2.0)
    count = len(marks.table.rows)
    if not pattern.facing:
        flow.table(marks)
    elif count == 0:
        flow.block(view(_VIEW))
    elif count <= _MANY:
        flow.block(view(_VIEW), marks.part(0, count), apart=wide - marks.wide)
    else:
        flow.block(view(_VIEW))
        flow.table(marks)
    flow.block(notes(_texts(pattern), wide, _TEXT))
    flow.table(Grid(divisions_table(pattern.divisions, units=pattern.units), most=wide))
    for figures in (*pattern.figures, *edge_figures(pattern), *pattern.taped):
        flow.table(Grid(figures_table(figures, units=pattern.units), most=wide))
    count = len(flow.pages)
    words = f"{pattern.mark}   ·   to mark out by tape, not to scale   ·   page"
    return tuple(TapePage(f"{words} {n} of {count}", tuple(page)) for n, page in enumerate(flow.pages, 1))


class _Flow:
    """Blocks set one below the other, page by page of a height [mm]."""

    def __init__(self, high: float) -> None:
        self._high = high
        self._down = 0.0
        self.pages: list[list[tuple[Block, float, float]]] = [[]]

    def block(self, block: Block, beside: Block | None = None, *, apart: float = 0.0) -> None:
        """A block, and perhaps another `apart` from the left edge beside it [mm]."""
        high = max(block.high, beside.high if beside else 0.0)
        if self._down and self._down + high > self._high + 1e-9:
            self._turn()
        self.pages[-1].append((block, 0.0, self._down))
        if beside:
            self.pages[-1].append((beside, apart, self._down))
        self._down += high + _GAP

    def table(self, grid: Grid) -> None:
        """The rows of a table, on as many pages as they take."""
        first, count = 0, len(grid.table.rows)
        while first < count:
            left = count - first
            some = min(grid.fits(self._high - self._down), left)
            if some < left < some + _FEW:
                some = left - _FEW
            if self._down and some < min(_FEW, left):
                self._turn()
                continue
            self.block(grid.part(first, max(1, some)))
            first += max(1, some)

    def _turn(self) -> None:
        self.pages.append([])
        self._down = 0.0


def _texts(pattern: Pattern) -> list[str]:
    units = pattern.units
    figures = "inches" if units == "in" else "mm"
    return [
        f"All figures in {figures}. Strike the datum lines x = 0, at the left, and"
        " y = 0, at the bottom, square to each other; lay off x and y of each point from them, then draw each"
        " edge through its points, a smooth curve but for straight sides and corners." + _running(pattern),
        *_seam_and_flow(pattern),
        *_lap_corners(pattern),
        f"Measured from: {pattern.datum}.",
        *_diagonals(pattern),
        "The check square stands on the large sheet and is for that sheet; these figures hold at any scale.",
        *CAUTIONS,
    ]


def _running(pattern: Pattern) -> str:
    """Where the running lengths start."""
    if pattern.divisions:
        round_openings = ", round an opening from its point 1" if pattern.openings else ""
        first = pattern.divisions[0].number
        return f" Running lengths go along END A and END B from line {first}{round_openings}."
    if pattern.net.curve("end_1") is not None:
        start, _ = pattern.end_words
        return f" Running lengths of marks go along the edge from {start}, those of the outline from point 1."
    return " Running lengths go along each edge from its point 1."


def _seam_and_flow(pattern: Pattern) -> list[str]:
    """What the lines at both ends are, and which way the air goes."""
    if not pattern.divisions:
        return []
    first, last = pattern.divisions[0].number, pattern.divisions[-1].number
    flow = {"a to b": " Flow from END A to END B.", "b to a": " Flow from END B to END A."}.get(
        pattern.flow, ""
    )
    left, right = pattern.seam_words
    sides = f"Lines {first} and {last} are the two sides of the seam, straight."
    if left != right and left.startswith("JOINT"):
        sides = f"Line {first} is the side of {left}, line {last} of {right}, both straight."
    return [f"END A is the lower edge. {sides}{flow}"]


def _diagonals(pattern: Pattern) -> list[str]:
    """The two diagonals, for a check before cutting."""
    if not pattern.divisions:
        return []
    first, last = pattern.divisions[0], pattern.divisions[-1]
    rising, falling = (
        format_length(float(np.hypot(*(to - start))), unit=pattern.units)
        for start, to in ((first.a, last.b), (last.a, first.b))
    )
    return [
        f"Check before cutting: from line {first.number} at END A straight to line {last.number} at END B"
        f" is {rising}, from line {last.number} at END A to line {first.number} at END B {falling}."
    ]


def _lap_corners(pattern: Pattern) -> list[str]:
    """Where the allowances of the seams end, beyond the sides that meet."""
    found = []
    for side in ("seam_left", "seam_right"):
        inner, outer = pattern.net.curve(side), pattern.cut.curve(side)
        if inner is None or outer is None or np.abs(outer.start - inner.start).max() < _SAME:
            continue
        low, high = sorted((outer.start, outer.end), key=lambda point: float(point[1]))
        places = " and ".join(
            ", ".join(
                f"{name} {format_length(round(float(value), 6), unit=pattern.units, suffix=False)}"
                for name, value in zip("xy", point, strict=True)
            )
            for point in (low, high)
        )
        what = "lap" if pattern.lap_words == ("LAP", "LAP") else f"allowance on the {side[5:]}"
        found.append(
            f"The {what} goes on beyond the dashed line, with the same curves, to its corners at {places}."
        )
    return found
