"""Emmett E. Longfield, Sheet Metal Drafting, McGraw-Hill 1921: p. 32 (girth of a 7 in pipe), p. 82
(cone, base 5, slant 12), p. 128 (funnel: frustum 6 to 3, height 3). The book takes π = 3.1416.
"""

from __future__ import annotations

from math import degrees, pi, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.sections.text import parse_section
from develop.solid import Frame, Rim
from develop.surfaces.band import Band

PI_OF_THE_BOOK = 3.1416


def round_rim(diameter: float, height: float) -> Rim:
    return Rim(Ellipse(width=diameter, height=diameter), Frame.square(at=(0.0, 0.0, height)))


def test_girth_p_32() -> None:
    size = parse_section("round 7 in").width / 25.4
    girth = Ellipse(width=size, height=size).girth
    assert girth == pytest.approx(7.0 * pi, rel=1e-15)
    assert girth == pytest.approx(21.9912, abs=7.0 * (PI_OF_THE_BOOK - pi) + 5e-6)


def test_cone_p_82() -> None:
    apex = Rim(Point(), Frame.square(at=(0.0, 0.0, sqrt(12.0**2 - 2.5**2))))
    sheet = Band(round_rim(5.0, 0.0), apex).sheet(1.0)
    assert sheet.edge_a == pytest.approx(15.7080, abs=5.0 * (PI_OF_THE_BOOK - pi) + 5e-6)
    assert sheet.edge_a == pytest.approx(5.0 * pi, rel=1e-13)
    assert sheet.area == pytest.approx(30.0 * pi, rel=1e-13)
    assert degrees(abs(sheet.turn)) == pytest.approx(75.0, rel=1e-13)
    assert np.abs(sheet.lines(sheet.ends).length - 12.0).max() < 1e-14


def test_funnel_p_128() -> None:
    sheet = Band(round_rim(6.0, 0.0), round_rim(3.0, 3.0)).sheet(4.0)
    slant = sqrt(1.5**2 + 3.0**2)
    lines = sheet.lines(sheet.ends)
    assert np.abs(lines.length - slant).max() < 1e-14
    assert sheet.area == pytest.approx(pi * 4.5 * slant, rel=1e-13)
    assert sheet.edge_a == pytest.approx(6.0 * pi, rel=1e-13)
    assert sheet.edge_b == pytest.approx(3.0 * pi, rel=1e-13)
    # Both edges are arcs about one centre, where the lines meet: radius 6.708204, half of it inside.
    first, last = lines.take([0]), lines.take([-1])
    along = (first.b - first.a)[0] / slant
    centre = first.a[0] + along * 2.0 * slant
    assert np.abs(centre - (last.a + 2.0 * (last.b - last.a))[0]).max() < 1e-13
    every = sheet.lines(sheet.from_a(np.linspace(0.1, 6.2, 40)))
    assert np.abs(np.linalg.norm(every.a - centre, axis=1) - 6.708204).max() < 5e-7
    assert np.abs(np.linalg.norm(every.b - centre, axis=1) - slant).max() < 1e-13
    assert degrees(abs(sheet.turn)) == pytest.approx(360.0 * 3.0 / (2.0 * slant), rel=1e-13)
    assert degrees(abs(sheet.turn)) == pytest.approx(160.99689, abs=5e-6)
