"""Edges whose radius is too long to be swung: coordinates from a chord instead."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.pattern import Figures, Pattern
from develop.units import number_text

__all__ = ["with_chords"]

# Farther [mm] from the circle than this an edge is no arc, and nobody would swing it.
_ROUND = 0.01
_STRAIGHT = 1e-6


def with_chords(pattern: Pattern, swing: float) -> Pattern:
    """The pattern with a table of chord and offsets, if an edge is an arc of more than `swing` [mm].

    Between the ends of an arc of radius r the chord c rises by h = r − √(r² − c²/4).
    """
    edges = {name: np.array([getattr(row, name) for row in pattern.divisions]) for name in "ab"}
    radii = {name: _radius(points) for name, points in edges.items()}
    long = {name: radius for name, radius in radii.items() if radius is not None and radius > swing}
    if not long:
        return pattern
    facts: list[str] = []
    columns: list[list[str | float]] = [[str(row.number) for row in pattern.divisions]]
    heads = [("line", "no.")]
    for name, radius in long.items():
        along, offset, chord = _from_chord(edges[name])
        rise = radius - np.sqrt(radius * radius - 0.25 * chord * chord)
        facts.append(
            f"END {name.upper()}: radius {number_text(round(radius / 1000.0, 3))} m, too long to swing: "
            f"chord {chord:.1f}, rise {rise:.1f}, offsets in the table"
        )
        columns += [[float(each) for each in column] for column in (along, offset)]
        heads += [(f"chord {name.upper()}", "along"), (f"chord {name.upper()}", "offset")]
    figures = Figures(
        "From the chord between the seams, offsets square to it",
        tuple(heads),
        tuple(zip(*columns, strict=True)),
    )
    return replace(
        pattern,
        facts=(*pattern.facts[:-1], *facts, *pattern.facts[-1:]),
        figures=(*pattern.figures, figures),
    )


def _from_chord(points: Array) -> tuple[Array, Array, float]:
    """Places along the chord from the first point to the last (n,), offsets square to it (n,), its length."""
    chord = points[-1] - points[0]
    length = float(np.hypot(*chord))
    unit = chord / length
    step = points - points[0]
    offset = unit[0] * step[:, 1] - unit[1] * step[:, 0]
    # Of an arc all offsets lie on one side.
    return step @ unit, np.abs(offset) + 0.0, length


def _radius(points: Array) -> float | None:
    """The radius of the circle on which the points (n, 2) lie [mm], or None if they are on none.

    Through the first, a middle and the last: abc / (4 area), from elementary geometry.
    """
    p, q, r = points[0], points[len(points) // 2], points[-1]
    sides = [float(np.hypot(*(v - u))) for u, v in ((p, q), (q, r), (r, p))]
    double = abs(float((q - p)[0] * (r - p)[1] - (q - p)[1] * (r - p)[0]))
    if min(sides) < _STRAIGHT or double < _STRAIGHT * max(sides):
        return None
    radius = sides[0] * sides[1] * sides[2] / (2.0 * double)
    along, offset, chord = _from_chord(points)
    rise = radius - np.sqrt(max(radius * radius - 0.25 * chord * chord, 0.0))
    from_centre = np.hypot(along - 0.5 * chord, offset + (radius - rise))
    return radius if float(np.abs(from_centre - radius).max()) < _ROUND else None
