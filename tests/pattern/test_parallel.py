"""Parallels of curves whose parallels are known, and against a planar geometry library."""

from __future__ import annotations

from itertools import pairwise
from math import inf, pi, sqrt

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import LineString, Point, Polygon

from develop.pattern.chain import joined, length_of, stretch
from develop.pattern.curve import Curve, segment
from develop.pattern.parallel import arc_about, parallel, room
from develop.sections.ellipse import Ellipse
from develop.surfaces.plane import plane_curve


def corner(*points: tuple[float, float]) -> Curve:
    at = np.array(points, dtype=float)
    return joined([segment(at[i], at[i + 1]) for i in range(len(at) - 1)])


def measured(curve: Curve) -> float:
    return float(length_of(curve.pieces, np.ones(len(curve.pieces))).sum())


@pytest.mark.parametrize("by", [-40.0, -5.0, 5.0, 200.0])
def test_a_circle_goes_to_a_circle(samples, by: float) -> None:
    moved = parallel(samples.arc(np.zeros(2), 100.0, 0.0, 2 * pi), by)
    # The circle itself is drawn within 0.0002 mm.
    assert np.hypot(*moved.polyline(1e-4).T) == pytest.approx(100.0 + by, abs=5e-4)
    assert moved.length == pytest.approx(2 * pi * (100.0 + by), abs=1e-3)


@pytest.mark.parametrize("by", [10.0, 60.0])
def test_an_ellipse_gains_two_pi_times_the_distance(by: float) -> None:
    # Steiner's formula for a convex curve; and the girth of the library's buffer.
    drawn = plane_curve(Ellipse(width=600.0, height=300.0))
    moved = parallel(Curve(drawn.controls, drawn.length), by)
    assert moved.length == pytest.approx(drawn.length + 2 * pi * by, abs=1e-3)
    assert measured(moved) == pytest.approx(moved.length, abs=1e-3)
    outline = Polygon(Curve(drawn.controls, drawn.length).polyline(1e-4))
    buffered = outline.buffer(by, quad_segs=2000)
    assert Polygon(moved.polyline(1e-4)).symmetric_difference(buffered).area < 2e-3 * drawn.length


def test_an_outer_corner_is_walked_round_on_an_arc() -> None:
    moved = parallel(corner((0, 0), (100, 0), (100, 80)), 30.0)
    assert moved.length == pytest.approx(180.0 + 0.5 * pi * 30.0, rel=1e-6)
    line = LineString(moved.polyline(1e-4))
    source = LineString([(0, 0), (100, 0), (100, 80)])
    for x, y in line.coords:
        assert source.distance(Point(x, y)) == pytest.approx(30.0, abs=1e-3)


def test_at_an_inner_corner_the_sides_stop_where_they_meet() -> None:
    moved = parallel(corner((0, 0), (100, 0), (100, 80)), -30.0)
    assert LineString(moved.polyline(1e-4)).equals_exact(LineString([(0, 30), (70, 30), (70, 80)]), 1e-9)
    assert moved.length == pytest.approx(120.0, abs=1e-9)


def test_an_inner_corner_between_curves(samples) -> None:
    # The outline of two circles of radius 100 about (±60, 0), round their crossing at (0, 80): their
    # parallels are circles of radius 110, which cross at (0, √(110² − 60²)).
    turn = float(np.arctan2(80.0, -60.0))
    right = samples.arc(np.array([60.0, 0.0]), 100.0, 0.0, turn)
    left = samples.arc(np.array([-60.0, 0.0]), 100.0, pi - turn, pi)
    both = joined([right, left])
    points = parallel(both, 10.0).polyline(1e-5)
    assert np.hypot(*(points - [0.0, sqrt(110.0**2 - 60.0**2)]).T).min() == pytest.approx(0.0, abs=1e-3)
    source = LineString(both.polyline(1e-5))
    assert [source.distance(Point(*p)) for p in points[::7]] == pytest.approx(
        [10.0] * len(points[::7]), abs=1e-3
    )


def test_room_is_the_least_radius_of_the_bends_to_that_side() -> None:
    # y = sin x: at its troughs the radius of curvature is 1, the centre above, to the left of the walk.
    x = np.linspace(0.0, 2 * pi, 400)
    pieces = []
    for a, b in pairwise(x):
        h = (b - a) / 3.0
        ends = np.array([[a, np.sin(a)], [b, np.sin(b)]])
        pieces.append(
            [ends[0], ends[0] + h * np.array([1, np.cos(a)]), ends[1] - h * np.array([1, np.cos(b)]), ends[1]]
        )
    controls = np.vstack([np.array(pieces)[:, :3].reshape(-1, 2), np.array(pieces)[-1:, 3]])
    wave = Curve(controls, 7.6404)  # 4 √2 E(1/2)
    assert room(wave) == pytest.approx(1.0, rel=1e-3)
    assert room(wave, right=False) == pytest.approx(1.0, rel=1e-3)
    assert room(segment(np.zeros(2), np.ones(2))) == inf
    assert room(corner((0, 0), (10, 0), (10, 10))) == inf
    assert room(corner((0, 0), (10, 0), (10, 10)), right=False) == 0.0


@given(turn=st.floats(-6.0, 6.0).filter(lambda t: abs(t) > 1e-3), radius=st.floats(0.5, 500.0))
def test_arcs_about_a_point_are_round(turn: float, radius: float) -> None:
    arc = arc_about(np.array([3.0, 4.0]), np.array([3.0 + radius, 4.0]), turn)
    away = arc.polyline(1e-3 * radius) - [3.0, 4.0]
    assert np.hypot(*away.T) == pytest.approx(radius, rel=1e-6)
    assert arc.length == pytest.approx(abs(turn) * radius, rel=1e-12)
    assert np.arctan2(away[-1, 1], away[-1, 0]) == pytest.approx(
        np.arctan2(np.sin(turn), np.cos(turn)), abs=1e-9
    )


@given(start=st.floats(-700.0, 1300.0), share=st.floats(0.01, 1.0))
def test_a_stretch_of_a_circle_has_its_length_and_place(start: float, share: float) -> None:
    circle = plane_curve(Ellipse(width=200.0, height=200.0))
    curve = Curve(circle.controls, circle.length)
    part = stretch(curve, start, start + share * curve.length)
    assert measured(part) == pytest.approx(share * 200.0 * pi, abs=1e-3)
    assert part.start == pytest.approx(100.0 * np.array([np.cos(start / 100), np.sin(start / 100)]), abs=1e-3)
