"""`develop girth SECTION`: girth, area, and the points that divide the girth equally by arc."""

from __future__ import annotations

import math
from collections.abc import Mapping

import click

from develop.cli.options import JSON, FieldsCommand, units_option
from develop.pieces.field_types import SECTION, Count
from develop.pieces.fields import Declared
from develop.pieces.wording import section_words
from develop.sections.text import SectionSpec
from develop.units import UNITS, format_length, sheet_unit

__all__ = ["command"]

_SECTION = Declared(name="section", type=SECTION, help="the section", required=True)
_DIVISIONS = Declared(
    name="divisions", type=Count(1, 10_000), help="equal arcs of the girth", required=False, default=24
)


def command(summary: str) -> click.Command:
    """The command."""
    return FieldsCommand(
        "girth",
        _show,
        options=[_DIVISIONS, JSON, units_option("unit of bare numbers; in and ft give a table in inches")],
        argument=_SECTION,
        text=f"Show {summary}.\n\n"
        "The points start at the right and go round anticlockwise; x is to the right "
        "of the centre, y above it. Running lengths are laid off from the start, each rounded by itself, so "
        "that no rounding adds up. In a piece, seen facing end B.",
        epilog='\b\nFor example:\n  develop girth "ellipse 600 x 300" --divisions 12',
    )


def _show(values: Mapping[str, object]) -> int:
    import numpy as np

    from develop.sections import section_of

    spec, count, unit = values["section"], values["divisions"], sheet_unit(str(values["units"]))
    assert isinstance(spec, SectionSpec)
    assert isinstance(count, int)
    section = section_of(spec)
    girth, area = float(section.girth), float(section.area)
    arcs = girth * np.arange(count) / count
    u = section.at_arc(arcs)
    points = section.point(u).tolist()
    if values["json"]:
        import json

        rows = [{"arc": s, "x": x, "y": y} for s, (x, y) in zip(arcs.tolist(), points, strict=True)]
        data = {"section": spec.text, "girth": girth, "area": area, "divisions": rows}
        click.echo(json.dumps(data, indent=2, allow_nan=False))
        return 0
    directions = [math.degrees(angle) for angle in section.direction(u).tolist()]
    click.echo(_table(spec, girth, area, unit, arcs.tolist(), directions, points))
    return 0


def _named(spec: SectionSpec, unit: str) -> str:
    """The section, its sizes in the unit of the table; a pipe has a name instead."""
    return section_words(spec, unit) + (" mm" if unit == "mm" and spec.kind != "pipe" else "")


def _table(
    spec: SectionSpec,
    girth: float,
    area: float,
    unit: str,
    arcs: list[float],
    directions: list[float],
    points: list[list[float]],
) -> str:
    """What a person marks out from: lengths to 0.1 mm or 1/32 in, directions to 0.1 degrees."""
    size = UNITS[unit][0] / UNITS[unit][1]
    rows: list[tuple[str, ...]] = [("point", "running length", "direction", "x", "y")]
    for number, (arc, direction, (x, y)) in enumerate(zip(arcs, directions, points, strict=True)):
        lengths = [format_length(each, unit=unit, suffix=False) for each in (arc, x, y)]
        # A direction of 359.96 degrees reads 0.0, not 360.0.
        rows.append((str(number), lengths[0], f"{round(direction, 1) % 360.0:.1f}", *lengths[1:]))
    first = rows[1]
    rows.append(("0", format_length(girth, unit=unit, suffix=False), *first[2:]))
    widths = [max(len(row[column]) for row in rows) for column in range(5)]
    lines = ["  ".join(cell.rjust(width) for cell, width in zip(row, widths, strict=True)) for row in rows]
    digits = 0 if unit == "mm" else 2
    unit_name = "mm" if unit == "mm" else "inches"
    head = [
        f"{_named(spec, unit)}: girth {format_length(girth, unit=unit)}, "
        f"area {area / size**2:.{digits}f} {'mm²' if unit == 'mm' else 'square inches'}",
        f"Lengths in {unit_name}, directions in degrees: anticlockwise from the right, facing end B.",
        "",
    ]
    return "\n".join(head + lines)
