"""Full-size outlines of the ends of a piece, to be set out on the assembly floor."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import pi
from typing import TYPE_CHECKING

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.pattern import Figures, Outline, WitnessMark
from develop.pattern.points import points_round
from develop.pieces.built import Part
from develop.pieces.flat import DIRECTIONS, Plate, pattern_of_plate, rectangle
from develop.solid import End, FloorOutlines
from develop.surfaces.plane import plane_curve

if TYPE_CHECKING:
    from develop.sections.section import Section

__all__ = ["FloorEnd", "floor_part"]

_MARGIN = 60.0  # [mm] round the outlines
_NEAR = 1e-9  # of the way round: a mark is the seam
_COLUMNS = 24


@dataclass(frozen=True)
class FloorEnd:
    """One end as it is drawn.

    name: `A` or `B`, or both where they are one. section: on the surface of the given sizes. into: (2, 2)
    from the section's plane to the drawing. at: its centre there (2,) [mm]. seams: words of the seams that
    end there, and the section's parameters. turn: of the section's own axes in the piece [rad].
    """

    name: str
    section: Section
    into: Array
    at: Array
    seams: tuple[tuple[str, float], ...]
    turn: float = 0.0


def floor_part(
    ends: Sequence[FloorEnd],
    faces: Sequence[tuple[str, float]],
    *,
    mark: str,
    kind: str,
    units: str,
    facts: tuple[str, ...],
) -> Part:
    """The drawing of some ends; faces: by name, with their distance outside the given surface [mm]."""
    thin: list[Curve] = []
    names: list[str] = []
    outlines: list[tuple[str, End]] = []
    areas: list[float] = []
    marks: list[WitnessMark] = []
    # Marks of the larger end stand outside of it, those of the smaller inside: so they keep clear.
    largest = max(range(len(ends)), key=lambda i: _size(ends[i]))
    for i, each in enumerate(ends):
        for face, distance in faces:
            section = each.section.offset(distance)
            found = plane_curve(section, into=each.into)
            thin.append(Curve(found.controls, found.length).moved(turn=np.eye(2), shift=each.at))
            names.append(f"END {each.name}{' ' + face if face else ''}")
            areas.append(found.swept)
            outlines.append((names[-1], _placed(section, each)))
        face, distance = faces[0] if i == largest else faces[-1]
        marks += _marks(each, each.section.offset(distance), outward=i == largest)
    bounds = np.vstack([curve.bounds() for curve in thin])
    low, high = bounds.min(axis=0) - _MARGIN, bounds.max(axis=0) + _MARGIN
    lines = [line for each in ends for line in _centre_lines(each, faces[0][1])]
    plate = Plate(rectangle(low, high), (), tuple(marks), tuple(lines), _places(low, high), tuple(thin))
    shift = plate.shift
    moved = [curve.moved(turn=np.eye(2), shift=shift) for curve in thin]
    pattern = pattern_of_plate(
        plate,
        mark=mark,
        kind=kind,
        quantity=1,
        facts=facts,
    )
    points = tuple(
        _points(name, Outline(((name, curve),), area))
        for name, curve, area in zip(names, moved, areas, strict=True)
    )
    size = (float(high[0] - low[0]), float(high[1] - low[1]))
    return Part(replace(pattern, units=units, taped=points), FloorOutlines(tuple(outlines), size, shift), ())


def _size(end: FloorEnd) -> float:
    return float(abs(np.linalg.det(end.into))) * end.section.area


def _placed(section: Section, end: FloorEnd) -> End:
    """The curve in the plane of the drawing."""
    spans = np.vstack([end.into, np.zeros(2)])
    back = np.hstack([np.linalg.inv(end.into), np.zeros((2, 1))])
    return End(section, np.array([*end.at, 0.0]), spans, back)


def _marks(end: FloorEnd, section: Section, *, outward: bool) -> list[WitnessMark]:
    """Right, top, left, bottom and the seams, running lengths from the start of the outline."""
    wanted = [direction - end.turn for direction, _ in DIRECTIONS]
    u = section.at_direction(np.array(wanted))
    words = [word for _, word in DIRECTIONS]
    start = float(section.breaks[0])
    for seam, where in end.seams:
        apart = np.abs((u - where + 0.5 * section.period) % section.period - 0.5 * section.period)
        nearest = int(np.argmin(apart))
        if apart[nearest] < _NEAR * section.period:
            words[nearest] += f"/{seam}"
        else:
            u, words = np.append(u, where), [*words, seam]
    at = section.walk(u)
    points = np.stack([at.x, at.y], axis=-1) @ end.into.T + end.at
    along = np.stack([-at.ey, at.ex], axis=-1) @ end.into.T
    out = np.stack([along[:, 1], -along[:, 0]], axis=-1) / np.hypot(*along.T)[:, None]
    found = []
    for i, word in enumerate(words):
        past = start + (u[i] - start) % section.period
        arc = plane_curve(section, into=end.into, start=start, stop=past).length if past > start else 0.0
        inward = out[i] if outward else -out[i]
        edge = end.name.lower() if len(end.name) == 1 else f"END {end.name}"
        found.append(WitnessMark(points[i], inward, f"{end.name} {word}", edge, arc))
    return found


def _centre_lines(end: FloorEnd, distance: float) -> list[Curve]:
    """Both centre lines of an end, as the piece has them, across its outline."""
    section = end.section.offset(distance)
    found = []
    for direction in (0.0, 0.5 * pi):
        u = section.at_direction(np.array([direction, direction + pi]) - end.turn)
        found.append(segment(*(section.point(u) @ end.into.T + end.at)))
    return found


def _points(name: str, outline: Outline) -> Figures:
    heads = (("point", ""), ("running", "along it"), ("", "x"), ("", "y"))
    rows = tuple(
        (f"{n} corner" if corner else str(n), way, x, y)
        for n, (way, x, y, corner) in enumerate(points_round(outline), 1)
    )
    return Figures(f"Points of the outline of {name}", heads, rows)


def _places(low: Array, high: Array) -> Array:
    """Upright lines that words may stand on, those between the middle and the sides first."""
    wide, tall = high - low
    x = (np.arange(_COLUMNS) + 0.5) / _COLUMNS
    x = x[np.argsort(np.abs(np.abs(x - 0.5) - 0.2), kind="stable")]
    return np.array(
        [
            [[low[0] + share * wide, low[1] + y * tall], [low[0] + share * wide, low[1] + (y + 0.3) * tall]]
            for share in x
            for y in (0.55, 0.15)
        ]
    )
