"""The record: the pattern and its checks as JSON, for whatever reads them next."""

from __future__ import annotations

import json
import math
from collections.abc import Mapping, Sequence
from typing import Protocol

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.mass import cut_area
from develop.pattern.pattern import Addition, Figures, Forming, Outline, Pattern, Wall

__all__ = ["Verdict", "record"]

# [mm] The Béziers keep within 0.0002 mm of the true curve; together that is 0.001 mm.
_CHORDS = 0.0008
_DIGITS = 6  # of a coordinate [mm]
_DEGREES = 9


class Verdict(Protocol):
    """One check: what was expected, what was found, and whether the difference is within the limit."""

    @property
    def name(self) -> str: ...
    @property
    def expected(self) -> float: ...
    @property
    def got(self) -> float: ...
    @property
    def limit(self) -> float: ...
    @property
    def unit(self) -> str: ...
    @property
    def holds(self) -> bool: ...


def record(
    mark: str,
    kind: str,
    fields: Mapping[str, object],
    patterns: Sequence[Pattern],
    checks: Sequence[Verdict],
    warnings: Sequence[str] = (),
) -> bytes:
    """The record of one piece as JSON: mm, degrees and kg.

    Coordinates are rounded to 1e-6 mm, directions to 1e-9 degrees; lengths, areas and checks keep
    all their digits. An infinite roll radius is null. fields: the fields as understood, ready for JSON.
    warnings: left out when there are none.
    """
    content = {
        "mark": mark,
        "kind": kind,
        "units": "mm",
        "fields": dict(fields),
        "patterns": [_pattern(pattern) for pattern in patterns],
        "checks": [
            {
                "name": check.name,
                "expected": _finite(check.expected),
                "got": _finite(check.got),
                "limit": _finite(check.limit),
                "unit": check.unit,
                "holds": bool(check.holds),
            }
            for check in checks
        ],
        **({"warnings": list(dict.fromkeys(warnings))} if warnings else {}),
    }
    return json.dumps(content, ensure_ascii=False, allow_nan=False, separators=(",", ":")).encode() + b"\n"


def _pattern(pattern: Pattern) -> dict[str, object]:
    openings = [_points(opening) for opening in pattern.openings]
    holes = math.fsum(opening.area for opening in pattern.openings)
    marked = pattern.openings_as == "marked"
    return {
        "mark": pattern.mark,
        "quantity": pattern.quantity,
        "face": pattern.face,
        "net": {
            "outline": _points(pattern.net),
            "openings": openings,
            "area": float(pattern.net.area - holes),
            "edges": _edges(pattern),
        },
        "cut": {
            "outline": _points(pattern.cut),
            "openings": [*([] if marked else openings), *(_points(each) for each in pattern.punched)],
            "area": cut_area(pattern),
            **({} if pattern.mass is None else {"mass": float(pattern.mass)}),
        },
        **({"allowances": [_added(each) for each in pattern.added]} if pattern.added else {}),
        **({} if pattern.wall is None else {"wall": _wall(pattern.wall)}),
        "lines": [
            {
                "from": _rounded(line.start),
                "to": _rounded(line.end),
                "turn": math.degrees(line.turn),
                "radius": [_finite(radius) for radius in line.radius],
            }
            for line in pattern.lines
        ],
        "divisions": [
            {
                "direction": _direction(division.direction),
                "a": _rounded(division.a),
                "b": _rounded(division.b),
                "length": float(division.length),
            }
            for division in pattern.divisions
        ],
        "marks": [
            {"edge": mark.edge, "text": mark.text, "at": _rounded(mark.at), "arc": float(mark.arc)}
            for mark in pattern.marks
        ],
        **({"forming": _forming(pattern.forming)} if pattern.forming else {}),
        **({"figures": [_figures(each) for each in pattern.figures]} if pattern.figures else {}),
        **({"tape_figures": [_figures(each) for each in pattern.taped]} if pattern.taped else {}),
    }


def _added(added: Addition) -> dict[str, object]:
    """One allowance: the edge, the rule by name, the width, and the source of the rule where it has one."""
    found: dict[str, object] = {"edge": added.edge, "rule": added.rule, "width": float(added.width)}
    return {**found, "source": added.source} if added.source else found


def _wall(wall: Wall) -> dict[str, object]:
    """How the thickness was taken: the neutral line with its rule, lining, edges and fits."""
    found: dict[str, object] = {"neutral_line": float(wall.neutral_line)}
    if wall.rule:
        found |= {"rule": wall.rule, "source": wall.source, "places": [float(each) for each in wall.places]}
    return {
        **found,
        "lining": float(wall.lining),
        "edge_cut": wall.edge_cut,
        "fits": [
            {"end": end, "fit": fit, "clearance": float(clearance), "moved": float(moved)}
            for end, fit, clearance, moved in wall.fits
        ],
    }


def _forming(forming: Forming) -> dict[str, object]:
    """Where the sheet is rolled tightest: mm, degrees and percent."""
    return {
        "radius": _finite(forming.radius),
        "inside_radius": _finite(forming.inside),
        "ends": forming.ends,
        "directions": [_direction(each) for each in forming.directions],
        "strain": forming.strain,
        "least_inside_radius": forming.least,
        **({"source": forming.source} if forming.source else {}),
    }


def _figures(figures: Figures) -> dict[str, object]:
    """A further table, lengths with all their digits; null for what is to be written in by hand."""
    return {
        "title": figures.title,
        "heads": [" ".join(filter(None, head)) for head in figures.heads],
        "rows": [list(row) for row in figures.rows],
    }


def _edges(pattern: Pattern) -> dict[str, float]:
    """Exact lengths of the named edges; an end that is a point has the length 0."""
    lengths = {name: float(curve.length) for name, curve in pattern.net.curves}
    if "a" in lengths:
        lengths.setdefault("b", 0.0)
    for opening in pattern.openings:
        for name, curve in opening.curves:
            lengths[name] = lengths.get(name, 0.0) + float(curve.length)
    return lengths


def _points(outline: Outline) -> list[list[float]]:
    """The contour as points, the first not repeated at the end, no two neighbours the same."""
    points = np.vstack([curve.polyline(_CHORDS)[:-1] for _, curve in outline.curves])
    points = np.round(points, _DIGITS) + 0.0  # no minus zero
    points = points[(points != np.roll(points, 1, axis=0)).any(axis=1)]
    result: list[list[float]] = points.tolist()
    return result


def _rounded(point: Array) -> list[float]:
    return [round(float(value), _DIGITS) + 0.0 for value in point]


def _direction(angle: float) -> float:
    """A direction [rad] in degrees from 0, below 360, without the last digits that pi has cost."""
    return round(math.degrees(angle), _DEGREES) % 360.0


def _finite(value: float) -> float | None:
    """The number, or null for JSON, which knows no infinity."""
    return float(value) if math.isfinite(value) else None
