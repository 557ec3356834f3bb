"""Lengths and areas of what is drawn, against figures that can be worked out by hand or by mpmath."""

from __future__ import annotations

from math import pi, sqrt

import mpmath
import numpy as np
import pytest
from numpy.typing import NDArray
from shapely import Polygon

from develop.checks.crossings import crossings
from develop.checks.drawn import drawn_area, drawn_length
from develop.pattern.curve import Curve, segment
from develop.pattern.pattern import Outline
from develop.pieces.transition import Transition
from develop.sections.text import parse_section

Array = NDArray[np.float64]

PARABOLA = np.array([[0.0, 0.0], [1.0, 2.0], [2.0, 2.0], [3.0, 0.0]])
"""y = 2 x (1 − x/3) from 0 to 3, as one cubic."""


def polygon(points: Array) -> Outline:
    sides = zip(points, np.roll(points, -1, axis=0), strict=True)
    return Outline(tuple((str(k), segment(p, q)) for k, (p, q) in enumerate(sides)), 0.0)


def test_length_of_a_parabola() -> None:
    with mpmath.workdps(30):
        exact = mpmath.quad(lambda x: mpmath.sqrt(1 + (2 - mpmath.mpf(4) * x / 3) ** 2), [0, 1.5, 3])
    assert drawn_length(Curve(PARABOLA, 0.0)) == pytest.approx(float(exact), rel=1e-9)
    # The length that a curve says of itself is not looked at.
    assert drawn_length(Curve(PARABOLA, 99.0)) == drawn_length(Curve(PARABOLA, 0.0))


def test_length_of_a_straight_line_and_of_nothing() -> None:
    assert drawn_length(segment(np.array([1.0, 1.0]), np.array([4.0, 5.0]))) == pytest.approx(5.0, rel=1e-15)
    assert drawn_length(Curve(np.zeros((1, 2)), 7.0)) == 0.0


def test_area_under_a_parabola() -> None:
    """∫ 2 x (1 − x/3) dx from 0 to 3 is 3; walked along y = 0 first, it is positive."""
    base = segment(PARABOLA[0], PARABOLA[-1])
    arch = Curve(PARABOLA[::-1], 0.0)
    assert drawn_area(Outline((("a", base), ("b", arch)), 0.0)) == pytest.approx(3.0, rel=1e-14)
    back = (("b", arch.reversed()), ("a", base.reversed()))
    assert drawn_area(Outline(back, 0.0)) == pytest.approx(-3.0, rel=1e-14)
    # Far away on the sheet it is the same area.
    moved = tuple(
        (n, c.moved(turn=np.eye(2), shift=np.array([1e5, -2e5]))) for n, c in (("a", base), ("b", arch))
    )
    assert drawn_area(Outline(moved, 0.0)) == pytest.approx(3.0, rel=1e-9)


def test_area_of_polygons() -> None:
    points = np.array([[0.0, 0.0], [5.0, 1.0], [4.0, 4.0], [2.0, 2.0], [0.0, 3.0]])
    assert drawn_area(polygon(points)) == pytest.approx(Polygon(points).area, rel=1e-14)


def test_circle_of_four_beziers() -> None:
    """The usual handle 4/3 (√2 − 1), against shapely's area of a fine polygon of it."""
    k = 4.0 / 3.0 * (sqrt(2.0) - 1.0)
    quarter = np.array([[1.0, 0.0], [1.0, k], [k, 1.0], [0.0, 1.0]])
    turn = np.array([[0.0, 1.0], [-1.0, 0.0]])
    curves = []
    for n in range(4):
        curves.append((str(n), Curve(quarter @ np.linalg.matrix_power(turn, n), 0.0)))
    fine = np.vstack([curve.polyline(1e-9)[:-1] for _, curve in curves])
    area = drawn_area(Outline(tuple(curves), 0.0))
    # 4096 chords a quarter cut off 8e-8.
    assert area == pytest.approx(Polygon(fine).area, abs=1e-7)
    assert area == pytest.approx(pi, rel=3e-4)  # such circles bulge by up to 2.7e-4
    assert area > pi


# ---- crossings ----------------------------------------------------------------------------


@pytest.mark.parametrize("angle", np.linspace(0.0, 2.0 * pi, 41))
def test_a_rectangle_with_many_points_on_its_sides_never_crosses(angle: float) -> None:
    """Points in line must not be taken for crossings, however the rectangle lies."""
    x = np.linspace(0.0, 1000.0, 60)[:-1]
    y = np.linspace(0.0, 300.0, 40)[:-1]
    ring = np.vstack(
        [
            np.stack([x, 0 * x], axis=1),
            np.stack([1000.0 + 0 * y, y], axis=1),
            np.stack([1000.0 - x, 300.0 + 0 * x], axis=1),
            np.stack([0 * y, 300.0 - y], axis=1),
        ]
    )
    c, s = np.cos(angle), np.sin(angle)
    assert crossings(polygon(ring @ np.array([[c, s], [-s, c]]) + 17.3)) == 0


@pytest.mark.parametrize("section", ["round 400", "ellipse 600 x 300", "ellipse 100 x 1500"])
@pytest.mark.parametrize("seam", [0.0, 0.3, 2.0, 5.0])
def test_a_transition_between_equal_sections_does_not_cross(section: str, seam: float) -> None:
    """Its edges are straight lines of many Béziers, level but for rounding."""
    spec = parse_section(section)
    (pattern,) = Transition(end_a=spec, end_b=spec, length=300.0, seam_at=seam).build().patterns
    assert crossings(pattern.cut) == 0


def test_bow_tie() -> None:
    assert crossings(polygon(np.array([[0.0, 0.0], [1.0, 1.0], [1.0, 0.0], [0.0, 1.0]]))) == 1


def test_a_side_through_another_part_counts_both_ways() -> None:
    points = np.array(
        [[0.0, 0.0], [10.0, 0.0], [10.0, 5.0], [5.0, 5.0], [5.0, -1.0], [4.0, -1.0], [4.0, 5.0], [0.0, 5.0]]
    )
    assert not Polygon(points).is_valid
    assert crossings(polygon(points)) == 2


def test_a_loop_inside_one_curve() -> None:
    """One cubic that crosses itself, closed by a line."""
    loop = np.array([[0.0, 0.0], [30.0, 20.0], [-20.0, 20.0], [10.0, 0.0]])
    outline = Outline((("a", Curve(loop, 0.0)), ("b", segment(loop[-1], loop[0]))), 0.0)
    assert not Polygon(outline.curves[0][1].polyline(1e-3)).is_valid
    assert crossings(outline) == 1
