"""`develop girth SECTION`: girth, area, and the points that divide the girth equally by arc."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import click

from develop.cli.options import JSON, FieldsCommand, units_option
from develop.pieces.field_types import SECTION, Count
from develop.pieces.fields import Declared
from develop.sections.friction import EqualFriction, equal_friction, hydraulic_diameter
from develop.sections.text import SectionSpec
from develop.units import UNITS, format_length, number_text

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
        "that no rounding adds up. Facing end B of a piece; see develop kinds.\n\n"
        "Also shown: the hydraulic diameter; for flat oval and for rectangles with sharp corners the "
        "round duct of equal friction, with its source; for a measured section by how much each reading "
        "misses the curve.",
        epilog='\b\nFor example:\n  develop girth "ellipse 600 x 300" --divisions 12\n'
        '  develop girth "flat-oval girth 1256.6 height 200"\n'
        '  develop girth "measured 0:322 45:326 90:327 135:323"',
    )


@dataclass(frozen=True)
class _Found:
    """What is shown of a section: lengths [mm], area [mm²]; points by equal arcs, directions [deg]."""

    spec: SectionSpec
    girth: float
    area: float
    arcs: list[float]
    points: list[list[float]]
    directions: list[float]

    @property
    def hydraulic(self) -> float:
        return hydraulic_diameter(area=self.area, girth=self.girth)

    @property
    def friction(self) -> EqualFriction | None:
        return equal_friction(self.spec, area=self.area, girth=self.girth)


def _show(values: Mapping[str, object]) -> int:
    spec, count, unit = values["section"], values["divisions"], str(values["units"])
    assert isinstance(spec, SectionSpec)
    assert isinstance(count, int)
    found = _find(spec, count)
    if values["json"]:
        import json

        click.echo(json.dumps(_data(found), indent=2, allow_nan=False))
    else:
        click.echo("\n".join([*_head(found, unit), "", *_table(found, unit)]))
    return 0


def _find(spec: SectionSpec, count: int) -> _Found:
    import numpy as np

    from develop.sections import section_of

    section = section_of(spec)
    girth = float(section.girth)
    arcs = girth * np.arange(count) / count
    u = section.at_arc(arcs)
    directions = [math.degrees(angle) for angle in section.direction(u).tolist()]
    return _Found(spec, girth, float(section.area), arcs.tolist(), section.point(u).tolist(), directions)


def _data(found: _Found) -> dict[str, object]:
    """For --json, in mm and degrees; `equal_friction` and `measured` only where they apply."""
    spec = found.spec
    rows = [{"arc": s, "x": x, "y": y} for s, (x, y) in zip(found.arcs, found.points, strict=True)]
    data: dict[str, object] = {
        "section": spec.text,
        "width": spec.width,
        "height": spec.height,
        "girth": found.girth,
        "area": found.area,
        "hydraulic_diameter": found.hydraulic,
    }
    if found.friction is not None:
        same = found.friction
        data["equal_friction"] = {
            "diameter": same.diameter,
            "formula": same.formula,
            "source": same.source,
        }
    if spec.taped is not None:
        taped = spec.taped
        readings = zip(taped.directions, taped.diameters, taped.residuals, strict=True)
        data["measured"] = {
            "fit": taped.fit,
            "readings": [
                {"direction": direction, "diameter": diameter, "residual": residual}
                for direction, diameter, residual in readings
            ],
            "largest_residual": taped.largest_residual,
        }
    data["divisions"] = rows
    return data


def _named(spec: SectionSpec, unit: str) -> str:
    """The section, its sizes in the unit of the table; a pipe has a name instead."""
    if spec.kind == "pipe":
        return spec.text
    sizes = [spec.width] if spec.kind == "round" else [spec.width, spec.height]
    if spec.taped is not None:
        name = f"measured, {len(spec.taped.directions)} readings, {spec.taped.fit}, overall"
    else:
        name = spec.kind
    if unit == "mm":
        exact = "(" not in spec.text and spec.taped is None
        size = f"{' x '.join(number_text(each if exact else round(each, 4)) for each in sizes)} mm"
    else:
        size = " x ".join(format_length(each, unit=unit) for each in sizes)
    if spec.kind == "rectangle" and spec.r:
        size += f" r {f'{number_text(spec.r)} mm' if unit == 'mm' else format_length(spec.r, unit=unit)}"
    if spec.kind == "superellipse":
        size += f" n {number_text(spec.n)}"
    return f"{name} {size}"


def _head(found: _Found, unit: str) -> list[str]:
    spec = found.spec
    size = UNITS[unit][0] / UNITS[unit][1]
    digits = 0 if unit == "mm" else 2
    lines = [
        f"{_named(spec, unit)}: girth {format_length(found.girth, unit=unit)}, "
        f"area {found.area / size**2:.{digits}f} {'mm²' if unit == 'mm' else 'square inches'}",
        f"Lengths in {'mm' if unit == 'mm' else 'inches'}, directions in degrees: "
        "anticlockwise from the right, facing end B.",
        f"Hydraulic diameter, 4 area / girth: {format_length(found.hydraulic, unit=unit)} "
        "(of the size as given; air sees the inside).",
    ]
    if found.friction is not None:
        same = found.friction
        lines.append(
            f"Round duct of equal friction: {format_length(same.diameter, unit=unit)}, "
            f"{same.formula} ({same.source})."
        )
    if spec.taped is not None:
        lines += ["", *_readings(spec, unit)]
    return lines


def _readings(spec: SectionSpec, unit: str) -> list[str]:
    """The diameters as measured and by how much each misses the fitted curve, to 0.01 mm or 1/128 in."""
    taped = spec.taped
    assert taped is not None
    rows: list[tuple[str, ...]] = [("caliper at", "diameter", "less fitted")]
    for direction, diameter, residual in zip(taped.directions, taped.diameters, taped.residuals, strict=True):
        rows.append(
            (
                f"{direction:.1f}",
                format_length(diameter, unit=unit, suffix=False),
                format_length(residual, unit=unit, digits=2, fraction=128, suffix=False),
            )
        )
    largest = format_length(taped.largest_residual, unit=unit, digits=2, fraction=128)
    return [
        *_columns(rows),
        f"Largest difference: {largest}. Where it is too large, measure again.",
    ]


def _table(found: _Found, unit: str) -> list[str]:
    """What a person marks out from: lengths to 0.1 mm or 1/32 in, directions to 0.1 degrees."""
    rows: list[tuple[str, ...]] = [("point", "running length", "direction", "x", "y")]
    for number, (arc, direction, (x, y)) in enumerate(
        zip(found.arcs, found.directions, found.points, strict=True)
    ):
        lengths = [format_length(each, unit=unit, suffix=False) for each in (arc, x, y)]
        # A direction of 359.96 degrees reads 0.0, not 360.0.
        rows.append((str(number), lengths[0], f"{round(direction, 1) % 360.0:.1f}", *lengths[1:]))
    rows.append(("0", format_length(found.girth, unit=unit, suffix=False), *rows[1][2:]))
    return _columns(rows)


def _columns(rows: list[tuple[str, ...]]) -> list[str]:
    widths = [max(map(len, column)) for column in zip(*rows, strict=True)]
    return ["  ".join(cell.rjust(width) for cell, width in zip(row, widths, strict=True)) for row in rows]
