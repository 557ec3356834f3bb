"""Figures to check by tape: of each sheet as it is cut, and of the piece after it is closed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass
from math import pi
from typing import TYPE_CHECKING

import numpy as np

from develop.pattern.pattern import Figures
from develop.quadrature import Array
from develop.solid import End, Solid

if TYPE_CHECKING:
    from develop.pattern.pattern import Outline, Pattern, Rulings

__all__ = ["Wall", "closed_figures", "cone_scale", "corners_of", "cut_figures", "ends_of", "girth_outside"]

_HEADS = (("measure", ""), ("figure", ""), ("may be out", "by +/-"), ("found", ""))
_CORNER = np.radians(20.0)
_SQUARE = 1e-9
_AXES = ((1.0, 0.0), (-1.0, 0.0), (0.0, 1.0), (0.0, -1.0))


@dataclass(frozen=True)
class Wall:
    """A wall: its faces and the developed sheet outside the surface that carries the given sizes [mm]."""

    inside: float
    outside: float
    sheet: float

    @property
    def faces(self) -> tuple[tuple[str, float], ...]:
        """Faces by name with their distance; one for a wall without thickness."""
        if self.inside == self.outside:
            return (("", self.outside),)
        return (("outside", self.outside), ("inside", self.inside))


def cut_figures(pattern: Pattern, *, tolerance: float) -> Figures:
    """What a tape should read on the sheet before it is formed; tolerance [mm].

    The overall size is along the datum lines. Diagonals are of a cut outline with four corners.
    """
    bounds = np.vstack([curve.bounds() for _, curve in pattern.cut.curves])
    wide, high = (float(each) for each in np.ptp(bounds, axis=0))
    rows: list[tuple[str, float]] = [
        ("overall length, along y = 0", wide),
        ("overall height, along x = 0", high),
    ]
    corners = corners_of(pattern.cut)
    if len(corners) == 4:
        # From the lower left one on, anticlockwise.
        first = int(np.argmin(corners.sum(axis=1)))
        a, b, c, d = np.roll(corners, -first, axis=0)
        rows += [
            ("diagonal, lower left to upper right", float(np.hypot(*(c - a)))),
            ("diagonal, lower right to upper left", float(np.hypot(*(d - b)))),
        ]
    for name in "ab":
        curve = pattern.cut.curve(name)
        if curve is not None:
            rows.append((f"cut edge at END {name.upper()}, along it", float(curve.length)))
    return _table("To check by tape before forming", rows, tolerance)


def corners_of(outline: Outline) -> Array:
    """Corners (n, 2) [mm] between the named curves of an outline, anticlockwise.

    Where two of them run on into each other, within 20 degrees, there is none.
    """
    curves = [curve for _, curve in outline.curves]
    if len(curves) < 2:
        return np.empty((0, 2))
    found = []
    for before, after in zip([curves[-1], *curves[:-1]], curves, strict=True):
        into, out = _leaving(before.controls[::-1]), _leaving(after.controls)
        cross, dot = into[0] * out[1] - into[1] * out[0], -float(into @ out)
        if abs(np.arctan2(cross, dot)) > _CORNER:
            found.append(after.start)
    return np.array(found).reshape(-1, 2)


def _leaving(controls: Array) -> Array:
    """The direction (2,) in which a chain leaves its start."""
    steps = controls[1:] - controls[0]
    return np.asarray(steps[int(np.argmax(np.abs(steps).max(axis=1) > _SQUARE))])


def closed_figures(
    patterns: Sequence[Pattern], solid: Solid, wall: Wall, *, tape: float, tolerance: float, ends: str
) -> Figures:
    """What a tape should read on the piece after it is closed; tape: its thickness, tolerance [mm].

    patterns: of a side made in parts those of all its parts, one for each place round the whole solid, else
    the one. ends: those that are measured, of `a` and `b`.
    """
    rows: list[tuple[str, float]] = []
    for name in ends:
        end = f"END {name.upper()}"
        rows.append(
            (f"{end}: outside girth, by tape", girth_outside(patterns, solid, wall, end=name, tape=tape))
        )
        sizes = _sizes(solid, name, [distance for _, distance in wall.faces])
        for (face, _), (width, height) in zip(wall.faces, sizes, strict=False):
            where = f" {face}" if face else ""
            rows += [(f"{end}: width{where}", width), (f"{end}: height{where}", height)]
    square = ", square to the axis" if solid.side == "parallel" else ""
    parts = f" all {len(patterns)} parts" if len(patterns) > 1 else ""
    return _table(f"To check by tape after closing{parts}{square}; tape {tape:g} mm thick", rows, tolerance)


def girth_outside(patterns: Sequence[Pattern], solid: Solid, wall: Wall, *, end: str, tape: float) -> float:
    """What a tape of a thickness [mm] laid round the outside at an end, `a` or `b`, reads [mm].

    It reads along its middle, half its thickness outside the wall. On parallel sides, square to the
    axis: girth + 2π d (Steiner). On tapered ones along the edge, which is square to the plate: the
    developed edge, each step of it longer by d times the turn there, square to the roll lines. patterns: all
    that lie round the side.
    """
    if solid.side == "parallel":
        return solid.end_a.section.girth + 2.0 * pi * (wall.outside + 0.5 * tape)
    total = 0.0
    for pattern in patterns:
        curve = pattern.net.curve(end)
        assert curve is not None
        total += curve.length + _grown(pattern.rulings, end, wall.outside + 0.5 * tape - wall.sheet)
    return total


def _grown(rulings: Rulings, end: str, by: float) -> float:
    """How much longer the edge of the parallel surface at a distance `by` outside is [mm]."""
    edge = getattr(rulings, end)
    step, turn = np.diff(edge, axis=0), rulings.turn[1:]
    along = rulings.b - rulings.a
    along = along / np.hypot(*along.T)[:, None]
    middle = along[1:] + along[:-1]
    across = np.stack([middle[:, 1], -middle[:, 0]], axis=-1) / np.hypot(*middle.T)[:, None]
    moved = step + by * turn[:, None] * across
    return float(np.sum(np.hypot(*moved.T) - np.hypot(*step.T)))


def _sizes(solid: Solid, name: str, distances: Sequence[float]) -> list[tuple[float, float]]:
    """Width and height [mm] at an end, along its section's own axes, of faces so far outside the given
    surface; none where the end is no section.

    On a tapered side the corner of the edge, which is square to the plate, is measured.
    """
    end, scale = solid.end_a if solid.side == "parallel" or name == "a" else solid.end_b, 1.0
    if name == "b" and solid.cut_b is not None:
        height, rise = solid.cut_b
        if np.abs(rise).max() > 0.0:
            return []
        end, scale = solid.end_a, cone_scale(solid, height)
    section = end.section
    given = scale * np.array([section.width, section.height])
    more = np.array([2.0, 2.0])
    if solid.side == "hull" and any(distances):
        walk = solid.strip if end is solid.end_a else solid.strip_b
        # Towards both sides, the middle of a straight side.
        places = [section.parameters(*(np.array([each]) for each in axis)) for axis in _AXES]
        u = np.array([0.5 * float(first[0] + last[0]) for first, last in places])
        lean = np.sum((walk(u).normal @ end.spans) * np.array(_AXES), axis=1)
        more = lean[::2] + lean[1::2]
    return [(float(wide), float(high)) for wide, high in (given + d * more for d in distances)]


def cone_scale(solid: Solid, height: float) -> float:
    """Size of a square cut across a cone at a height [mm], in parts of its base."""
    apex = float(solid.end_b.origin[2])
    return (apex - height) / apex


def ends_of(pattern: Pattern, solid: Solid) -> str:
    """The ends of a side that can be measured: no points, and no joints with another duct."""
    found = ""
    for name, end in (("a", solid.end_a), ("b", solid.end_b)):
        # In thick plate the sheet has an edge at a point too, but no section to be measured.
        cut = name == "b" and solid.cut_b is not None
        if pattern.net.curve(name) is not None and type(end) is End and (cut or end.section.girth):
            found += name
    return found


def _table(title: str, rows: list[tuple[str, float]], tolerance: float) -> Figures:
    return Figures(title, _HEADS, tuple((words, figure, tolerance, None) for words, figure in rows))
