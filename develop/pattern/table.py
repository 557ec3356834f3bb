"""The divisions table as rows of text, for whoever marks out by tape."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

from develop.pattern.pattern import Division, Figures
from develop.units import format_length

__all__ = ["Table", "divisions_table", "figures_table"]


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
        ("direction", "degrees"),
        ("running", "along A"),
        ("running", "along B"),
        ("length", "of line"),
        ("end A", "x"),
        ("end A", "y"),
        ("end B", "x"),
        ("end B", "y"),
    )
    rows = tuple(
        (
            str(d.number),
            f"{round(math.degrees(d.direction), 1) % 360.0:.1f}",
            *(
                format_length(float(length), unit=units, suffix=False)
                for length in (d.arc_a, d.arc_b, d.length, d.a[0], d.a[1], d.b[0], d.b[1])
            ),
        )
        for d in divisions
    )
    return Table(f"Lines to mark out ({'inches' if units == 'in' else 'mm'})", heads, rows)


def figures_table(figures: Figures, *, units: str = "mm") -> Table:
    """A further table of a pattern: lengths in `mm` to 0.1, or in `in` to 1/32."""
    rows = tuple(
        tuple(
            cell if isinstance(cell, str) else format_length(float(cell), unit=units, suffix=False)
            for cell in row
        )
        for row in figures.rows
    )
    return Table(f"{figures.title} ({'inches' if units == 'in' else 'mm'})", figures.heads, rows)
