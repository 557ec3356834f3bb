"""The divisions table as rows of text, for whoever marks out by tape."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from develop.pattern.pattern import Division, Figures, WitnessMark
from develop.units import format_length

__all__ = ["Table", "divisions_table", "figures_table", "marks_table"]

_UNITS = {"mm": "mm", "in": "inches"}
# Wide enough to write a figure on by hand, about 30 mm on paper.
_TO_FILL = "." * 28


@dataclass(frozen=True)
class Table:
    """Rows of text under column heads. heads: two lines each, the lower may be empty."""

    title: str
    heads: tuple[tuple[str, str], ...]
    rows: tuple[tuple[str, ...], ...]


def divisions_table(divisions: Sequence[Division], *, units: str = "mm") -> Table:
    """The table of divisions: lengths in `mm` to 0.1, or in `in` to 1/32; directions in degrees.

    Running lengths are written from the seam, each from the start, so that no rounding gathers.
    """
    heads = (
        ("line", "no."),
        ("direction", "at END A"),
        ("running", "along A"),
        ("running", "along B"),
        ("length", "of line"),
        ("END A", "x"),
        ("END A", "y"),
        ("END B", "x"),
        ("END B", "y"),
    )
    rows = tuple(
        (
            str(d.number),
            f"{round(math.degrees(d.direction), 1) % 360.0:.1f}",
            *(
                _length(length, units)
                for length in (d.arc_a, d.arc_b, d.length, d.a[0], d.a[1], d.b[0], d.b[1])
            ),
        )
        for d in divisions
    )
    return Table(f"Lines to mark out ({_UNITS[units]}; directions in degrees anticlockwise)", heads, rows)


def _length(mm: float, units: str) -> str:
    """A length; what lies halfway is written the same wherever it stands, whatever its last digits."""
    return format_length(round(float(mm), 6), unit=units, suffix=False)


def marks_table(marks: Sequence[WitnessMark], *, units: str = "mm") -> Table:
    """The table of witness marks, END A first, each end from the left seam on.

    units: as in `divisions_table`.
    """
    heads = (("edge", ""), ("mark", ""), ("running", "along edge"), ("", "x"), ("", "y"))
    rows = tuple(
        (
            f"END {mark.edge.upper()}" if mark.edge in ("a", "b") else mark.edge,
            mark.text,
            *(_length(length, units) for length in (mark.arc, mark.at[0], mark.at[1])),
        )
        for mark in sorted(marks, key=lambda mark: (mark.edge, mark.arc))
    )
    return Table(f"Witness marks ({_UNITS[units]})", heads, rows)


def figures_table(figures: Figures, *, units: str = "mm") -> Table:
    """A further table of a pattern: lengths in `mm` to 0.1, or in `in` to 1/32, and dots to write on."""

    def text(cell: str | float | None) -> str:
        if cell is None:
            return _TO_FILL
        return cell if isinstance(cell, str) else format_length(float(cell), unit=units, suffix=False)

    rows = tuple(tuple(text(cell) for cell in row) for row in figures.rows)
    lengths = any(isinstance(cell, float | int) for row in figures.rows for cell in row)
    return Table(f"{figures.title} ({_UNITS[units]})" if lengths else figures.title, figures.heads, rows)
