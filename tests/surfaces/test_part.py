"""A part of a sheet, against elementary geometry: sectors of a cone, strips of a cylinder."""

from __future__ import annotations

import itertools
from math import cos, hypot, pi, sin

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.solid import Frame, Rim
from develop.surfaces.band import Band
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.part import SheetPart
from develop.surfaces.trim import Plane

CUTS = np.radians([10.0, 75.0, 200.0, 340.0])


def round_(diameter: float):
    return Ellipse(width=diameter, height=diameter)


def part_of(sheet, first: float, last: float) -> SheetPart:
    places = sheet.from_a(np.array([first, last]))
    return SheetPart(sheet, places[np.array([0])], places[np.array([1])])


@pytest.mark.parametrize(("first", "last"), list(itertools.pairwise(CUTS)))
def test_a_strip_of_a_cut_cylinder(first: float, last: float) -> None:
    # Height 500 + 100 sin t over the arc 200 t; both seams are lines of the cylinder.
    section = round_(400)
    surface = Cylinder(section, Plane(0.0, np.zeros(2)), Plane(500.0, np.array([0.0, 0.5])))
    part = part_of(surface.sheet(0.0), first, last)
    assert part.edge_a == pytest.approx(200.0 * (last - first), rel=1e-13)
    area = 200.0 * (500.0 * (last - first) - 100.0 * (cos(last) - cos(first)))
    assert part.area == pytest.approx(area, rel=1e-12)
    assert part.at_ends.length[[0, -1]] == pytest.approx(
        [500.0 + 100.0 * sin(first), 500.0 + 100.0 * sin(last)], rel=1e-12
    )
    assert part.at_ends.turn[-1] == pytest.approx(last - first, rel=1e-12)
    assert part.parameters(part.ends)[0][[0, -1]] == pytest.approx([first, last], abs=1e-12)


@pytest.mark.parametrize(("first", "last"), list(itertools.pairwise(CUTS)))
def test_a_sector_of_a_right_cone(first: float, last: float) -> None:
    # Slant s, base radius r: the sector's angle in the flat is (r / s) t.
    slant = hypot(300.0, 400.0)
    cone = Band(Rim(round_(600), Frame.square()), Rim(Point(), Frame.square(at=(0.0, 0.0, 400.0))))
    part = part_of(cone.sheet(0.0), first, last)
    turn = 300.0 / slant * (last - first)
    assert part.edge_a == pytest.approx(slant * turn, rel=1e-12)
    assert part.edge_b == 0.0
    assert part.area == pytest.approx(0.5 * slant**2 * turn, rel=1e-11)
    ends = part.at_ends
    # Its seams lean alike to either side of the upright, by half of that angle each.
    assert np.degrees(np.arctan2(*(ends.b[0] - ends.a[0]))) == pytest.approx(np.degrees(0.5 * turn), abs=1e-9)
    assert np.degrees(np.arctan2(*(ends.b[-1] - ends.a[-1]))) == pytest.approx(
        -np.degrees(0.5 * turn), abs=1e-9
    )


def test_rulings_of_the_whole_are_found_on_the_parts_that_have_them() -> None:
    sheet = Cylinder(round_(400), Plane(0.0, np.zeros(2)), Plane(500.0, np.zeros(2))).sheet(0.0)
    cuts = [0.0, 0.5 * pi, pi]
    parts = [part_of(sheet, a, b) for a, b in itertools.pairwise(cuts)]
    place = sheet.from_a(np.array([0.0, 0.25 * pi, 0.5 * pi, 1.7 * pi]))
    which, at = parts[0].found(place)
    assert which.tolist() == [0, 1, 2]
    assert parts[0].lines(at).arc_a == pytest.approx([0.0, 50.0 * pi, 100.0 * pi], abs=1e-9)
    # What lies on the seam of the whole lies on both sides of it.
    last = SheetPart(sheet, sheet.from_a(np.array([1.5 * pi])), sheet.ends[np.array([-1])])
    which, at = last.found(place)
    assert sorted(which.tolist()) == [0, 3]
