"""Points round outlines whose points are known."""

from __future__ import annotations

from dataclasses import replace
from math import pi

import numpy as np
import pytest

from develop.pattern.curve import segment
from develop.pattern.pattern import Outline
from develop.pattern.points import edge_figures, points_round


def ring(corners) -> Outline:
    points = np.array(corners, dtype=float)
    sides = zip(points, np.roll(points, -1, axis=0), strict=True)
    return Outline(tuple(("side", segment(*side)) for side in sides), 1.0)


def test_a_round_hole_has_24_points_at_equal_angles(samples) -> None:
    hole = Outline((("opening", samples.arc(np.array([300.0, 200.0]), 100.0, 0.0, 2 * pi)),), 1.0)
    found = points_round(hole)
    assert len(found) == 24
    for n, (way, x, y, corner) in enumerate(found):
        angle = n * pi / 12
        assert not corner
        assert way == pytest.approx(100 * angle, abs=1e-3)
        assert (x, y) == pytest.approx((300 + 100 * np.cos(angle), 200 + 100 * np.sin(angle)), abs=1e-3)


def test_of_straight_sides_the_corners_alone() -> None:
    found = points_round(ring([[0, 0], [80, 0], [80, 60], [0, 60]]))
    assert all(corner for *_, corner in found)
    expected = [(0.0, 0.0, 0.0), (80.0, 80.0, 0.0), (140.0, 80.0, 60.0), (220.0, 0.0, 60.0)]
    assert np.array([row[:3] for row in found]) == pytest.approx(np.array(expected), abs=1e-12)


def test_corners_between_the_steps_are_given_too(samples) -> None:
    half = samples.arc(np.zeros(2), 100.0, 0.0, pi)
    found = points_round(Outline((("opening", half), ("opening", segment(half.end, half.start))), 1.0))
    corners = [(x, y) for _, x, y, corner in found if corner]
    assert corners == [pytest.approx((100.0, 0.0), abs=1e-9), pytest.approx((-100.0, 0.0), abs=1e-9)]
    assert len(found) == 25  # the start is one of the 24
    assert [way for way, *_ in found] == sorted(way for way, *_ in found)


def test_openings_have_a_table_and_outlines_where_no_lines_are_tabled(samples) -> None:
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * pi)),), 1.0)
    bolts = Outline((("holes", samples.arc(np.array([300.0, 200.0]), 5.0, 0.0, 2 * pi)),), 1.0)
    pattern = replace(samples.rectangle(), openings=(hole, bolts))
    assert [each.title for each in edge_figures(pattern)] == ["Points of the opening, cut"]
    flat = replace(pattern, divisions=())
    assert [each.title for each in edge_figures(flat)] == [
        "Points of the outline",
        "Points of the opening, cut",
    ]
    assert edge_figures(samples.rectangle()) == ()
