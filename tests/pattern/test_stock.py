"""Whether a part goes into a rectangle, against elementary geometry and against shapely."""

from __future__ import annotations

import itertools
from math import cos, degrees, hypot, pi, sin

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from shapely import MultiPoint, Polygon, affinity, box

from develop.pattern.stock import hull, lying_in, smallest

RNG = np.random.default_rng(4)


def rectangle(wide: float, high: float, angle: float = 0.0) -> np.ndarray:
    corners = np.array([[0.0, 0.0], [wide, 0.0], [wide, high], [0.0, high]])
    c, s = cos(angle), sin(angle)
    return corners @ np.array([[c, s], [-s, c]]) + [17.0, -4.0]


def laid(corners: np.ndarray, angle: float) -> Polygon:
    """The part turned, its lower left limits on the axes; by shapely."""
    turned = affinity.rotate(Polygon(corners), degrees(angle), origin=(0.0, 0.0))
    low_x, low_y, _, _ = turned.bounds
    return affinity.translate(turned, -low_x, -low_y)


def test_a_hull_is_that_of_shapely() -> None:
    points = RNG.normal(size=(200, 2)) * [300.0, 80.0]
    mine, theirs = Polygon(hull(points)), MultiPoint(points).convex_hull
    assert mine.exterior.is_ccw
    assert mine.symmetric_difference(theirs).area == pytest.approx(0.0, abs=1e-9)
    assert len(hull(points)) == len(theirs.exterior.coords) - 1


@pytest.mark.parametrize("angle", [0.0, 0.3, 1.2, 2.9])
def test_a_rectangle_goes_into_its_own_size_and_not_into_a_thousandth_less(angle: float) -> None:
    part = hull(rectangle(1900.0, 700.0, angle))
    assert lying_in(part, (1900.0, 700.0)) is not None
    assert lying_in(part, (700.0, 1900.0)) is not None
    assert lying_in(part, (1900.0, 699.999)) is None
    assert lying_in(part, (1899.999, 700.0)) is None


def test_a_long_narrow_strip_goes_in_aslant() -> None:
    # A strip L x w turned by t takes L cos t + w sin t by L sin t + w cos t: into a square of side s it goes
    # best at 45 degrees, where both are (L + w) / sqrt 2.
    side = (1300.0 + 20.0) / 2.0**0.5
    part = hull(rectangle(1300.0, 20.0, 0.1))
    found = lying_in(part, (side + 1e-3, side + 1e-3))
    assert found is not None
    assert found.wide == pytest.approx(side, abs=1e-6)
    assert found.high == pytest.approx(side, abs=1e-6)
    assert lying_in(part, (side - 1e-3, side - 1e-3)) is None


@given(
    st.integers(0, 10_000),
    st.integers(3, 12),
    st.floats(0.3, 3.0),
    st.floats(0.3, 3.0),
)
def test_what_goes_in_lies_inside_and_what_does_not_goes_in_at_no_angle(
    seed: int, count: int, wide: float, high: float
) -> None:
    part = hull(np.random.default_rng(seed).normal(size=(count, 2)) * [1.0, 0.4])
    size = (max(wide, high), min(wide, high))
    found = lying_in(part, size)
    if found is not None:
        inside = laid(part, found.angle)
        assert box(-1e-9, -1e-9, size[0] + 2e-6, size[1] + 2e-6).covers(inside)
        assert inside.bounds[2:] == pytest.approx((found.wide, found.high), abs=1e-9)
        return
    for angle in np.linspace(0.0, pi, 721):
        _, _, x, y = laid(part, angle).bounds
        assert x > size[0] or y > size[1]


@given(st.integers(0, 10_000), st.integers(3, 30))
def test_the_least_rectangle_is_that_of_shapely(seed: int, count: int) -> None:
    part = hull(np.random.default_rng(seed).normal(size=(count, 2)) * [300.0, 90.0])
    found = smallest(part)
    corners = list(Polygon(part).minimum_rotated_rectangle.exterior.coords)
    sides = [hypot(b[0] - a[0], b[1] - a[1]) for a, b in itertools.pairwise(corners)]
    assert found.wide * found.high == pytest.approx(sides[0] * sides[1], rel=1e-9)
