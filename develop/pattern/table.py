"""The divisions table as rows of text, for whoever marks out by tape."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from fractions import Fraction

from develop.pattern.pattern import Division

__all__ = ["Table", "divisions_table", "inches", "millimetres"]


@dataclass(frozen=True)
class Table:
    """Rows of text under column heads. heads: two lines each, the lower may be empty."""

    title: str
    heads: tuple[tuple[str, str], ...]
    rows: tuple[tuple[str, ...], ...]


def millimetres(length: float) -> str:
    """A length [mm] to 0.1 mm."""
    return f"{_positive(round(length, 1)):.1f}"


def inches(length: float, denominator: int = 32) -> str:
    """A length [mm] in inches to the nearest 1/denominator, as `12-3/8`; 1 in is 25.4 mm exactly."""
    parts = round(abs(length) / 25.4 * denominator)
    whole, rest = divmod(parts, denominator)
    sign = "-" if length < 0 and parts else ""
    if not rest:
        return f"{sign}{whole}"
    fraction = Fraction(rest, denominator)
    return f"{sign}{whole}-{fraction}" if whole else f"{sign}{fraction}"


def divisions_table(divisions: Sequence[Division], *, units: str = "mm") -> Table:
    """The table of divisions: lengths in `mm` to 0.1, or in `in` to 1/32; directions in degrees.

    Running lengths are written from the seam, each from the start, so that no rounding gathers.
    """
    write = inches if units == "in" else millimetres
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
            f"{_positive(round(math.degrees(d.direction) % 360.0, 1)) % 360.0:.1f}",
            *(
                write(float(length))
                for length in (d.arc_a, d.arc_b, d.length, d.a[0], d.a[1], d.b[0], d.b[1])
            ),
        )
        for d in divisions
    )
    return Table(f"Lines to mark out ({'inches' if units == 'in' else 'mm'})", heads, rows)


def _positive(value: float) -> float:
    """The value, with minus zero as zero."""
    return value + 0.0
