"""E. Oberg, F. D. Jones, H. L. Horton and H. H. Ryffel, Machinery's Handbook, 31st edition, Industrial
Press 2020: p. 81 (girth of an ellipse, approximate), p. 89 (cylinder cut obliquely: curved area
1.5708 d (h1 + h2)), p. 90 (cone: diameter 6, height 4), p. 1421 (bends: fig. 13).
"""

from __future__ import annotations

from math import degrees, pi, radians, sqrt

import mpmath
import numpy as np
import pytest

from develop.checks import check
from develop.pieces.cut_types import Cut
from develop.pieces.straight import Straight
from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.sections.text import parse_section
from develop.solid import Frame, Rim
from develop.surfaces.band import Band
from develop.tables.bend_allowance import bend_allowance, neutral_line


def test_oblique_cut_cylinder_p_89() -> None:
    """Diameter 125, heights 100 and 150: the plane rises 50 over 125."""
    slope = np.arctan2(50.0, 125.0)
    piece = Straight(
        section=parse_section("round 125"),
        length=125.0,
        cut_b=Cut(slope=slope, long=radians(90.0)),
        seam_at=radians(90.0),
    )
    built = piece.build()
    (pattern,) = built.patterns
    # The book's 1.5708 is π/2 to 5 digits, a relative 3e-6 too much.
    assert pattern.net.area == pytest.approx(49087.5, rel=3e-6)
    assert pattern.net.area == pytest.approx(pi / 2 * 125.0 * 250.0, rel=1e-14)
    # Ordinates each 30 degrees, from the longest: 125 + 25 cos.
    ordinates = [row.length for row in pattern.divisions[::2]]
    half = [150.0, 146.65064, 137.5, 125.0, 112.5, 103.34936, 100.0]
    assert ordinates == pytest.approx(half + half[-2::-1], rel=0, abs=5e-6)  # as printed, 5 decimals
    # The cut edge is an ellipse with half axes 62.5 and 62.5 √1.16.
    with mpmath.workdps(30):
        long = mpmath.mpf("62.5") * mpmath.sqrt(mpmath.mpf("1.16"))
        cut_edge = 4 * long * mpmath.ellipe(1 - (mpmath.mpf("62.5") / long) ** 2)
    edge_a, edge_b = (pattern.net.curve(name).length for name in "ab")
    assert edge_b == pytest.approx(float(cut_edge), rel=1e-14)
    assert edge_b == pytest.approx(407.964722883, rel=0, abs=5e-10)
    assert edge_a == pytest.approx(125.0 * pi, rel=1e-14)
    assert all(each.holds for each in check(pattern, built.solid))


def test_cone_p_90() -> None:
    """Diameter 6, height 4: area 47.124, slant 5, so the flat is a fan of 216 degrees."""
    band = Band(
        Rim(Ellipse(width=6.0, height=6.0), Frame.square()), Rim(Point(), Frame.square(at=(0.0, 0.0, 4.0)))
    )
    sheet = band.sheet(0.0)
    assert sheet.area == pytest.approx(47.124, rel=0, abs=5e-4)
    assert sheet.area == pytest.approx(15.0 * pi, rel=1e-13)
    assert sheet.edge_a == pytest.approx(6.0 * pi, rel=1e-13)
    assert sheet.edge_b == pytest.approx(0.0, abs=1e-12)
    lines = sheet.lines(sheet.ends)
    assert np.abs(lines.length - 5.0).max() < 1e-14
    assert np.abs(np.linalg.norm(lines.a - lines.b[0], axis=1) - 5.0).max() < 1e-13
    assert degrees(abs(sheet.turn)) == pytest.approx(216.0, rel=1e-13)


def test_rule_of_thumb_p_81_is_half_a_percent_long() -> None:
    """Axes 200 and 150: π √(2 (a² + b²)) is printed as 555.37, a closer rule as 552.83."""
    girth = Ellipse(width=200.0, height=150.0).girth
    assert girth == pytest.approx(552.58730401774, rel=0, abs=5e-12)
    rule = pi * sqrt(2.0 * (100.0**2 + 75.0**2))
    assert rule == pytest.approx(555.37, abs=0.02)  # printed with π = 3.1416 and rounded roots
    assert rule / girth - 1.0 == pytest.approx(0.0050, abs=5e-5)
    assert 552.83 / girth - 1.0 == pytest.approx(0.00044, abs=5e-6)


def test_bends_of_soft_steel_p_1421() -> None:
    """Thickness 1/8; a bend of 180° with radius 3/8, one of 60° with radius 5/8, and 3.5 of flats: 5.545."""

    def bend(radius: float, angle: float) -> float:
        return bend_allowance("half-hard", radius=radius, thickness=0.125, angle=radians(angle))

    # Printed 1.338 and .707, which round 1.3375 up and .7075 down.
    assert bend(0.375, 180.0) == pytest.approx(1.3375, rel=1e-14)
    assert bend(0.625, 60.0) == pytest.approx(0.7075, rel=1e-13)
    assert 3.5 + bend(0.375, 180.0) + bend(0.625, 60.0) == pytest.approx(5.545, rel=1e-14)
    # With π/2 for 1.57 the whole is 5.5459.
    place = neutral_line("half-hard", radius=0.375, thickness=0.125)
    arcs = pi * (0.375 + place * 0.125) + pi / 3 * (0.625 + place * 0.125)
    assert 3.5 + arcs == pytest.approx(5.5459, rel=0, abs=5e-5)
