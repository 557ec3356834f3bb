"""The rectangle with rounded or sharp corners, against elementary geometry."""

from __future__ import annotations

from math import cos, pi, sin

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.errors import InputError, Refusal
from develop.pieces.wall import given_section
from develop.sections import section_of
from develop.sections.rectangle import Rectangle
from develop.sections.text import parse_section
from tests.sections.agreement import assert_agrees, assert_parallel

SIZES = [
    (500.0, 300.0, 40.0),
    (500.0, 300.0, 0.0),
    (300.0, 500.0, 7.5),
    (300.0, 300.0, 0.0),
    (1000.0, 1.0, 0.25),
]


def walked(width: float, height: float, r: float, arc: float) -> tuple[float, float, float]:
    """x, y and the normal's direction at an arc from the right, laid off side by side in 30 digits."""
    with mp.workdps(30):
        w, h, r, left = mp.mpf(width) / 2 - r, mp.mpf(height) / 2 - r, mp.mpf(r), mp.mpf(arc)
        # Half the right side, then corner and side in turn.
        sides = [h, 2 * w, 2 * h, 2 * w, h]
        centres = [(w, h), (-w, h), (-w, -h), (w, -h)]
        for k in range(5):
            phi = k * mp.pi / 2
            ex, ey = mp.cos(phi), mp.sin(phi)
            if left <= sides[k] or k == 4:
                x0, y0 = (w, 0) if k == 0 else centres[k - 1]
                return float(x0 + r * ex - left * ey), float(y0 + r * ey + left * ex), float(phi)
            left -= sides[k]
            if left < r * mp.pi / 2:
                phi += left / r
                cx, cy = centres[k]
                return float(cx + r * mp.cos(phi)), float(cy + r * mp.sin(phi)), float(phi)
            left -= r * mp.pi / 2
    raise AssertionError


@pytest.mark.parametrize(("width", "height", "r"), SIZES)
def test_girth_area_and_points_at_arcs(width: float, height: float, r: float) -> None:
    section = Rectangle(width=width, height=height, r=r)
    with mp.workdps(30):
        girth = 2 * (mp.mpf(width) + height) - (8 - 2 * mp.pi) * r
        area = mp.mpf(width) * height - (4 - mp.pi) * mp.mpf(r) ** 2
    assert section.girth == pytest.approx(float(girth), rel=1e-15)
    assert section.area == pytest.approx(float(area), rel=1e-15)
    arcs = float(girth) * (np.arange(101) + 0.3) / 101.0
    at = section.walk(section.at_arc(arcs))
    for arc, x, y, ex, ey in zip(arcs, at.x, at.y, at.ex, at.ey, strict=True):
        px, py, phi = walked(width, height, r, arc)
        assert (x, y) == pytest.approx((px, py), abs=1e-14 * float(girth))
        # At a radius r an error of the arc turns the normal by that over r.
        assert (ex, ey) == pytest.approx((cos(phi), sin(phi)), abs=1e-12 * float(girth) / max(r, 1.0))


@pytest.mark.parametrize(("width", "height", "r"), SIZES)
def test_all_descriptions_agree(width: float, height: float, r: float) -> None:
    assert_agrees(Rectangle(width=width, height=height, r=r))


@settings(derandomize=True, deadline=None, max_examples=40)
@given(st.floats(0.1, 1e5), st.floats(0.001, 1000.0), st.floats(0.0, 1.0))
def test_every_rectangle(width: float, ratio: float, share: float) -> None:
    height = width * ratio
    section = Rectangle(width=width, height=height, r=0.5 * share * min(width, height))
    assert section.width == pytest.approx(width, rel=1e-15)
    assert section.height == pytest.approx(height, rel=1e-15)
    arcs = section.girth * np.linspace(0.0, 1.0, 40)[:-1]
    assert np.abs(section.arc(section.at_arc(arcs)) - arcs).max() < 1e-14 * section.girth
    assert_parallel(section, 0.01 * width)


@pytest.mark.parametrize("distance", [3.0, 40.0])
@pytest.mark.parametrize(("width", "height", "r"), SIZES)
def test_outward_sharp_corners_grow_quarter_circles(
    width: float, height: float, r: float, distance: float
) -> None:
    section = Rectangle(width=width, height=height, r=r)
    assert_parallel(section, distance)
    moved = section.offset(distance)
    assert_agrees(moved)
    n = np.array(cos(0.3)), np.array(sin(0.3))
    assert float(moved.radius(*n)) == pytest.approx(r + distance, rel=1e-15)


def test_inward_down_to_a_sharp_corner_and_no_further() -> None:
    section = Rectangle(width=500.0, height=300.0, r=40.0)
    sharp = section.offset(-40.0)
    assert (sharp.width, sharp.height, sharp.least_radius) == (420.0, 220.0, 0.0)
    assert sharp.girth == pytest.approx(2.0 * (420.0 + 220.0), rel=1e-15)
    with pytest.raises(Refusal, match=r"tightest radius is 40 mm.*r 41.5 mm or more"):
        section.offset(-41.5)
    with pytest.raises(Refusal, match="a larger section"):
        section.offset(-151.0)


def test_a_sharp_corner_measured_outside_is_refused_with_the_smallest_r_that_works() -> None:
    def wall(r: str, sizes: str) -> None:
        given_section(
            parse_section(f"rectangle 500 x 300 r {r}"), field="section", thickness=6.0, sizes=sizes
        )

    with pytest.raises(InputError, match="the corners are sharp; allowed: for section r 6 mm or more"):
        wall("0", "outside")
    wall("6", "outside")
    with pytest.raises(InputError, match="3 mm or less, or for section r 3 mm or more") as refused:
        wall("1.5", "mean")
    assert refused.value.problems[0].field == "thickness"
    wall("3", "mean")
    wall("0", "inside")


def test_with_the_largest_radius_it_is_the_flat_oval() -> None:
    one = section_of(parse_section("rectangle 600 x 300 r 150"))
    other = section_of(parse_section("flat-oval 600 x 300"))
    assert (one.girth, one.area) == (other.girth, other.area)
    assert np.array_equal(one.breaks, other.breaks)


def test_what_the_corners_leave_straight() -> None:
    section = Rectangle(width=500.0, height=300.0, r=40.0)
    first, last = section.parameters(np.array([0.0]), np.array([1.0]))
    ends = section.point(np.concatenate([first, last]))
    assert ends == pytest.approx(np.array([[210.0, 150.0], [-210.0, 150.0]]), abs=1e-12)
    # The right side is walked in two halves: the last of a turn and the first of the next.
    first, last = section.parameters(np.array([1.0]), np.array([0.0]))
    ends = section.point(np.concatenate([first, last]))
    assert ends == pytest.approx(np.array([[250.0, -110.0], [250.0, 110.0]]), abs=1e-12)
    assert last[0] > section.breaks[-1] > first[0]
    assert section.kinks == pytest.approx(np.array([0.0, 0.5, 1.0, 1.5]) * pi)
