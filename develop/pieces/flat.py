"""Flat plates: from curves in the flat to the pattern."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import pi

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.pattern import Figures, NumberedHole, Outline, Pattern, Rulings, WitnessMark
from develop.sections.ellipse import Ellipse
from develop.sections.section import Section
from develop.surfaces.plane import PlaneCurve, plane_curve

__all__ = [
    "DIRECTIONS",
    "Plate",
    "closed",
    "direction_marks",
    "drawn",
    "holes_at",
    "pattern_of_plate",
    "rectangle",
]

DIRECTIONS: tuple[tuple[float, str], ...] = (
    (0.0, "RIGHT"),
    (0.5 * pi, "TOP"),
    (pi, "LEFT"),
    (1.5 * pi, "BOTTOM"),
)
"""The directions [rad] that are marked, with their words."""


@dataclass(frozen=True)
class Plate:
    """A flat plate in its own coordinates, before it is put between the datum lines.

    marks, dashed, places, thin and holes: as the pattern has them. Figures that name coordinates are
    made once the shift is known.
    """

    net: Outline
    openings: tuple[Outline, ...]
    marks: tuple[WitnessMark, ...]
    dashed: tuple[Curve, ...]
    places: Array
    thin: tuple[Curve, ...] = ()
    holes: tuple[NumberedHole, ...] = ()

    @property
    def shift(self) -> Array:
        """What brings the outline to the datum lines (2,) [mm]."""
        low = np.vstack([curve.bounds() for _, curve in self.net.curves]).min(axis=0)
        return np.asarray(-low)


def drawn(curve: PlaneCurve) -> Curve:
    """A plane curve as the pattern has it."""
    return Curve(curve.controls, curve.length)


def closed(name: str, curve: PlaneCurve) -> Outline:
    """The contour of a closed plane curve."""
    return Outline(((name, drawn(curve)),), curve.swept)


def holes_at(centres: Array, radius: float) -> tuple[Outline, ...]:
    """Round holes of a radius [mm] at centres (n, 2) [mm]."""
    circle = plane_curve(Ellipse(width=2.0 * radius, height=2.0 * radius))
    area = pi * radius * radius
    template = drawn(circle)
    return tuple(
        Outline((("holes", template.moved(turn=np.eye(2), shift=centre)),), area) for centre in centres
    )


def direction_marks(
    section: Section, edge: str, *, outward: bool, others: Sequence[tuple[float, str]] = ()
) -> list[tuple[float, WitnessMark]]:
    """Marks on a section at right, top, left and bottom and at `others`, each with its parameter.

    outward: the plate lies outside of the section.
    """
    wanted = [*DIRECTIONS, *others]
    u = section.at_direction(np.array([direction for direction, _ in wanted]))
    at, arcs = section.walk(u), section.arc(u)
    sign = 1.0 if outward else -1.0
    return [
        (
            float(u[i]),
            WitnessMark(
                np.array([at.x[i], at.y[i]]),
                sign * np.array([at.ex[i], at.ey[i]]),
                wanted[i][1],
                edge,
                float(arcs[i]),
            ),
        )
        for i in range(len(wanted))
    ]


def pattern_of_plate(
    plate: Plate,
    *,
    mark: str,
    kind: str,
    quantity: int,
    facts: tuple[str, ...],
    figures: tuple[Figures, ...] = (),
    flow: str = "",
    arrow: str = "FLOW",
) -> Pattern:
    """The pattern of a flat plate, its lowest and leftmost points on the datum lines."""
    shift = plate.shift

    def moved(outline: Outline) -> Outline:
        curves = tuple((name, curve.moved(turn=np.eye(2), shift=shift)) for name, curve in outline.curves)
        return Outline(curves, outline.area)

    net = moved(plate.net)
    none = np.empty((0, 2))
    return Pattern(
        mark=mark,
        kind=kind,
        quantity=quantity,
        face="outside",
        net=net,
        cut=net,
        openings=tuple(moved(each) for each in plate.openings),
        lines=(),
        divisions=(),
        marks=tuple(WitnessMark(m.at + shift, m.inward, m.text, m.edge, m.arc) for m in plate.marks),
        facts=facts,
        datum="datum lines x = 0 and y = 0, the left and lower limits of the pattern",
        lines_as="ticks",
        rulings=Rulings(none, none, np.empty(0), np.empty(0)),
        flow=flow,
        dashed=tuple(curve.moved(turn=np.eye(2), shift=shift) for curve in plate.dashed),
        arrow=arrow,
        places=plate.places + shift,
        figures=figures,
        thin=tuple(curve.moved(turn=np.eye(2), shift=shift) for curve in plate.thin),
        holes=tuple(replace(hole, centre=hole.centre + shift) for hole in plate.holes),
    )


def rectangle(low: Array, high: Array) -> Outline:
    """A rectangle between two corners (2,) [mm], its sides named."""
    corners = np.array([low, [high[0], low[1]], high, [low[0], high[1]]])
    names = ("lower_edge", "right_edge", "upper_edge", "left_edge")
    curves = tuple((name, segment(corners[i], corners[(i + 1) % 4])) for i, name in enumerate(names))
    return Outline(curves, float(np.prod(high - low)))
