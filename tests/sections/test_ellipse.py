"""The ellipse and its parallels as closed convex curves: what the surfaces take for granted."""

from __future__ import annotations

from math import atan2, pi

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from numpy.typing import NDArray

from develop.errors import Refusal
from develop.sections import section_of
from develop.sections.ellipse import Ellipse, ellipse_girth
from develop.sections.point import Point
from develop.sections.section import Section
from develop.sections.text import parse_section

Array = NDArray[np.float64]

CURVES: dict[str, Section] = {
    "round": Ellipse(width=400.0, height=400.0),
    "wide": Ellipse(width=600.0, height=300.0),
    "high": Ellipse(width=100.0, height=900.0),
    "flat": Ellipse(width=1000.0, height=1.0),
    "outside": Ellipse(width=600.0, height=300.0).offset(12.0),
    "inside": Ellipse(width=600.0, height=300.0).offset(-70.0),
    "point": Point(),
}
every = pytest.mark.parametrize("name", CURVES)
U = np.linspace(0.0, 2.0 * pi, 101)[:-1]


@every
def test_tangent_and_normal(name: str) -> None:
    """The walk's own derivatives: along the tangent at ds, the normal turning at dphi."""
    section = CURVES[name]
    h = 1e-5
    before, at, after = (section.walk(U + d) for d in (-h, 0.0, h))
    size = section.width + section.height
    assert np.abs(np.hypot(at.ex, at.ey) - 1.0).max() < 1e-15
    # Central differences: their own error goes with h² and with the third derivative.
    dx, dy = (after.x - before.x) / (2 * h), (after.y - before.y) / (2 * h)
    assert np.abs(dx + at.ey * at.ds).max() < 1e-7 * size + 1e-12
    assert np.abs(dy - at.ex * at.ds).max() < 1e-7 * size + 1e-12
    turn = np.arctan2(
        before.ex * after.ey - before.ey * after.ex, before.ex * after.ex + before.ey * after.ey
    )
    # At the tips of the flat one the normal turns half round within 0.004: no difference is fine there.
    calm = at.dphi < 50.0
    assert np.abs(turn / (2 * h) - at.dphi)[calm].max() < 1e-4
    assert calm.sum() >= 98


@every
def test_support_touch_and_parameter_agree_with_the_walk(name: str) -> None:
    section = CURVES[name]
    at = section.walk(U)
    size = section.width + section.height + 1.0
    for length in (1.0, 3.7):
        nx, ny = length * at.ex, length * at.ey
        h = section.support(nx, ny)
        assert np.abs(h - length * (at.x * at.ex + at.y * at.ey)).max() < 1e-13 * size * length
        x, y = section.touch(nx, ny)
        # Where the curve is nearly straight, the point of a given normal is known as its radius allows.
        slack = 1e-15 * section.radius(nx, ny) * 10 + 1e-13 * size
        assert np.all(np.hypot(x - at.x, y - at.y) <= slack)
        gap = (section.parameter(nx, ny) - U + pi) % (2 * pi) - pi
        assert np.abs(gap).max() < 1e-11


@every
def test_no_point_lies_beyond_a_tangent(name: str) -> None:
    section = CURVES[name]
    points = section.point(U)
    direction = np.linspace(0.0, 2.0 * pi, 73)
    n = np.stack([np.cos(direction), np.sin(direction)])
    beyond = points @ n - section.support(*n)
    assert beyond.max() < 1e-12 * (section.width + section.height + 1.0)


@pytest.mark.parametrize("name", [name for name in CURVES if name != "point"])
def test_radius_of_curvature(name: str) -> None:
    section = CURVES[name]
    at = section.walk(U)
    assert section.radius(at.ex, at.ey) == pytest.approx(at.ds / at.dphi, rel=1e-9)
    assert section.radius(5.0 * at.ex, 5.0 * at.ey) == pytest.approx(at.ds / at.dphi, rel=1e-9)
    assert section.least_radius == pytest.approx(float((at.ds / at.dphi).min()), rel=1e-9)


@every
def test_turning_is_one_turn_a_turn(name: str) -> None:
    section = CURVES[name]
    total = section.turning(np.array([0.0, section.period, 2.0 * section.period, -section.period]))
    assert total == pytest.approx([0.0, 2.0 * pi, 4.0 * pi, -2.0 * pi], abs=1e-12)


@pytest.mark.parametrize("name", [name for name in CURVES if name != "point"])
def test_direction_and_its_inverse(name: str) -> None:
    section = CURVES[name]
    wanted = np.concatenate([np.linspace(-1.0, 7.0, 41), [0.0, pi / 2, pi, 3 * pi / 2]])
    u = section.at_direction(wanted)
    gap = (section.direction(u) - wanted + pi) % (2 * pi) - pi
    # Near the long sides of the flat one a direction is as fine as the sides are long.
    slender = max(section.width / section.height, section.height / section.width)
    assert np.abs(gap).max() < 1e-14 * (10.0 + slender)
    seen = np.array([atan2(y, x) for x, y in section.point(u)])
    assert np.abs((seen - wanted + pi) % (2 * pi) - pi).max() < 1e-14 * (10.0 + slender)


@pytest.mark.parametrize("name", ["wide", "high", "outside", "inside"])
def test_quarters(name: str) -> None:
    """Symmetric about both axes: right, top, left and bottom stand a quarter of the girth apart."""
    section = CURVES[name]
    u = section.at_direction(np.array([0.0, pi / 2, pi, 3 * pi / 2]))
    assert section.arc(u) / section.girth == pytest.approx([0.0, 0.25, 0.5, 0.75], abs=1e-13)
    assert section.point(u)[[0, 1], [0, 1]] == pytest.approx(
        [section.width / 2, section.height / 2], rel=1e-14
    )


def test_a_parallel_of_a_circle_is_a_circle() -> None:
    moved = Ellipse(width=400.0, height=400.0).offset(7.0)
    assert isinstance(moved, Ellipse)
    assert (moved.width, moved.height) == (414.0, 414.0)
    same = Ellipse(width=600.0, height=300.0)
    assert same.offset(0.0) is same


@pytest.mark.parametrize("inward", [200.0, 200.1, 1e9])
def test_a_circle_moved_in_to_nothing_is_refused(inward: float) -> None:
    """At exactly its radius nothing is left of it to be a curve."""
    with pytest.raises(Refusal, match="tightest radius"):
        Ellipse(width=400.0, height=400.0).offset(-inward)


def test_the_girth_of_a_line_is_there_and_back() -> None:
    assert ellipse_girth(3.0, 0.0) == 12.0
    assert ellipse_girth(0.0, 3.0) == 12.0


@pytest.mark.parametrize(
    ("text", "width", "height"),
    [("round 400", 400.0, 400.0), ("ellipse 600 x 300", 600.0, 300.0), ("pipe DN 200", 219.1, 219.1)],
)
def test_the_curve_of_a_text(text: str, width: float, height: float) -> None:
    section = section_of(parse_section(text))
    assert isinstance(section, Ellipse)
    assert (section.width, section.height) == pytest.approx((width, height), rel=1e-15)


@settings(max_examples=60, deadline=None, derandomize=True, database=None)
@given(st.floats(0.1, 1e5), st.floats(0.1, 1e5), st.floats(1e-3, 1e3), st.floats(-3.0, 3.0))
def test_scaling(width: float, height: float, k: float, share: float) -> None:
    one, two = Ellipse(width=width, height=height), Ellipse(width=k * width, height=k * height)
    assert two.girth == pytest.approx(k * one.girth, rel=1e-14)
    assert two.area == pytest.approx(k * k * one.area, rel=1e-14)
    arc = np.array([share * one.girth])
    there, back = one.at_arc(arc), one.arc(one.at_arc(arc))
    assert back == pytest.approx(arc, abs=1e-13 * one.girth * (1.0 + abs(share)))
    assert two.arc(there) == pytest.approx(k * arc, abs=3e-13 * two.girth * (1.0 + abs(share)))
