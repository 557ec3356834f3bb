"""Sections under a linear map, against ellipses, mpmath and a planar geometry library."""

from __future__ import annotations

from math import cos, pi, radians, sin

import numpy as np
import pytest
from mpmath import mp
from shapely import Polygon
from shapely.affinity import affine_transform

from develop.sections import section_of
from develop.sections.carried import Carried
from develop.sections.text import parse_section

TEXTS = ["round 400", "ellipse 600 x 300", "flat-oval 600 x 300", "rectangle 500 x 300 r 40"]


def steep(angle: float, long: float) -> np.ndarray:
    c, s = cos(long), sin(long)
    return np.outer([c, s], [c, s]) / cos(angle) + np.outer([-s, c], [-s, c])


@pytest.mark.parametrize("angle", [15.0, 40.0, 60.0])
def test_a_slanting_cut_of_a_round_pipe_is_an_ellipse(angle: float) -> None:
    cut = Carried(section_of(parse_section("round 400")), steep(radians(angle), radians(25.0)))
    a, b = 200.0 / cos(radians(angle)), 200.0
    assert cut.girth == pytest.approx(
        float(4 * a * mp.ellipe(1 - mp.mpf(b) ** 2 / mp.mpf(a) ** 2)), rel=1e-12
    )
    assert cut.area == pytest.approx(pi * a * b, rel=1e-13)
    assert cut.least_radius == pytest.approx(b * b / a, rel=1e-3)
    n = np.radians(np.arange(0.0, 360.0, 7.0))
    along = n - radians(25.0)
    assert cut.support(np.cos(n), np.sin(n)) == pytest.approx(
        np.hypot(a * np.cos(along), b * np.sin(along)), rel=1e-13
    )
    h = np.hypot(a * np.cos(along), b * np.sin(along))
    assert cut.radius(np.cos(n), np.sin(n)) == pytest.approx(a * a * b * b / h**3, rel=1e-11)


@pytest.mark.parametrize("text", TEXTS)
def test_it_is_the_image_that_the_library_makes(text: str) -> None:
    base = section_of(parse_section(text))
    m = steep(radians(35.0), radians(70.0))
    u = np.linspace(base.breaks[0], base.breaks[-1], 4001)[:-1]
    image = affine_transform(Polygon(base.point(u)), [m[0, 0], m[0, 1], m[1, 0], m[1, 1], 0.0, 0.0])
    mine = Carried(base, m)
    assert Polygon(mine.point(u)).symmetric_difference(image).area < 1e-6
    assert mine.girth == pytest.approx(image.length, rel=1e-5)
    assert mine.area == pytest.approx(image.area, rel=1e-5)


@pytest.mark.parametrize("text", TEXTS)
def test_its_parts_agree_with_each_other(text: str) -> None:
    mine = Carried(section_of(parse_section(text)), steep(radians(30.0), radians(20.0)))
    u = np.linspace(mine.breaks[0], mine.breaks[-1], 97)[1:-1]
    at = mine.walk(u)
    assert mine.support(at.ex, at.ey) == pytest.approx(at.x * at.ex + at.y * at.ey, abs=1e-10)
    x, y = mine.touch(at.ex, at.ey)
    assert x * at.ex + y * at.ey == pytest.approx(mine.support(at.ex, at.ey), abs=1e-10)
    arcs = mine.arc(u)
    assert mine.arc(mine.at_arc(arcs)) == pytest.approx(arcs, abs=1e-9)
