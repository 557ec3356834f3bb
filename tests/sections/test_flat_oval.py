"""The flat oval: two straights and two half circles, against elementary geometry."""

from __future__ import annotations

from math import pi

import mpmath as mp
import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from develop.errors import Refusal
from develop.sections import section_of
from develop.sections.text import parse_section
from tests.sections.agreement import assert_agrees, assert_parallel

TEXTS = ["flat-oval 600 x 300", "flat-oval 300 x 600", "flat-oval 300 x 300", "flat-oval 1000 x 1"]


@pytest.mark.parametrize("text", TEXTS)
def test_all_descriptions_agree(text: str) -> None:
    section = section_of(parse_section(text))
    assert_agrees(section)
    assert_parallel(section, 12.5)
    assert_parallel(section, -0.4)


@settings(derandomize=True, deadline=None, max_examples=60)
@given(st.floats(0.1, 1e5), st.floats(0.1, 1e5))
def test_girth_and_area_of_every_flat_oval(width: float, height: float) -> None:
    assume(max(width, height) <= 1000.0 * min(width, height))
    section = section_of(parse_section(f"flat-oval {width!r} x {height!r}"))
    with mp.workdps(30):
        small, straight = mp.mpf(min(width, height)), abs(mp.mpf(width) - mp.mpf(height))
        assert section.girth == pytest.approx(float(2 * straight + mp.pi * small), rel=4e-16)
        assert section.area == pytest.approx(float(straight * small + mp.pi * small**2 / 4), rel=6e-16)
    assert section.least_radius == 0.5 * min(width, height)


def test_points_at_known_arcs() -> None:
    section = section_of(parse_section("flat-oval 600 x 300"))
    # A quarter turn of radius 150, half the top, the rest of it, the left half circle.
    arcs = np.array(
        [0.0, 75.0 * pi, 75.0 * pi + 150.0, 75.0 * pi + 300.0, 150.0 * pi + 300.0, 225.0 * pi + 450.0]
    )
    points = [[300, 0], [150, 150], [0, 150], [-150, 150], [-300, 0], [0, -150]]
    assert section.point(section.at_arc(arcs)) == pytest.approx(np.array(points, dtype=float), abs=1e-12)


def test_equal_sizes_make_a_circle() -> None:
    section, circle = (section_of(parse_section(f"{text}")) for text in ("flat-oval 300 x 300", "round 300"))
    arcs = np.linspace(0.0, 2000.0, 99)
    assert section.point(section.at_arc(arcs)) == pytest.approx(circle.point(circle.at_arc(arcs)), abs=1e-12)
    assert section.girth == pytest.approx(circle.girth, rel=1e-15)


def test_inward_the_half_circles_close_up() -> None:
    section = section_of(parse_section("flat-oval 600 x 300"))
    assert section.offset(-149.0).height == pytest.approx(2.0, rel=1e-12)
    with pytest.raises(Refusal, match=r"tightest radius is 150 mm.*a larger section"):
        section.offset(-150.5)
