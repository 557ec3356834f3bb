"""Elementary geometry: a plane cuts an elliptic cylinder in an ellipse. With the section's half axes a
and b and the plane's rises r_x, r_y per mm, the cut is the image of the unit circle under the matrix
with columns a (1, 0, r_x) and b (0, 1, r_y); its half axes are the roots of the eigenvalues of the
2 × 2 product of that matrix with itself, and its girth is 4 A E(1 − B²/A²), here with 30 digits.
"""

from __future__ import annotations

from math import cos, radians, sin

import mpmath
import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import End, cut_slopes
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.trim import Plane

CASES = [
    (600.0, 300.0, 30.0, 0.0),
    (600.0, 300.0, 30.0, 90.0),
    (600.0, 300.0, 45.0, 37.0),
    (300.0, 600.0, 60.0, 200.0),
    (125.0, 125.0, 80.0, 123.0),
    (1000.0, 20.0, 25.0, 300.0),
    (20.0, 1000.0, 70.0, 15.0),
]


def exact_girth(width: float, height: float, slope: float, long: float) -> float:
    with mpmath.workdps(30):
        a, b = mpmath.mpf(width) / 2, mpmath.mpf(height) / 2
        rise = mpmath.tan(mpmath.radians(slope))
        x, y = rise * mpmath.cos(mpmath.radians(long)), rise * mpmath.sin(mpmath.radians(long))
        aa, bb, ab = a * a * (1 + x * x), b * b * (1 + y * y), a * b * x * y
        middle, apart = (aa + bb) / 2, mpmath.sqrt(((aa - bb) / 2) ** 2 + ab * ab)
        return float(4 * mpmath.sqrt(middle + apart) * mpmath.ellipe(1 - (middle - apart) / (middle + apart)))


@pytest.mark.parametrize(("width", "height", "slope", "long"), CASES)
@pytest.mark.parametrize("end_b", [True, False])
def test_cut_edge_is_the_girth_of_the_ellipse(
    width: float, height: float, slope: float, long: float, end_b: bool
) -> None:
    section = Ellipse(width=width, height=height)
    rise = cut_slopes(slope=radians(slope), long=radians(long), end_b=end_b)
    # Longest in the direction `long`: end B rises towards it, end A falls.
    towards = rise @ np.array([cos(radians(long)), sin(radians(long))])
    assert (towards > 0.0) == end_b
    far = 4000.0 if end_b else -4000.0
    square, cut = Plane(far * -1.0, np.zeros(2)), Plane(0.0, rise)
    sheet = Cylinder(section, *((square, cut) if end_b else (cut, square))).sheet(1.0)
    expected = exact_girth(width, height, slope, long)
    assert (sheet.edge_b if end_b else sheet.edge_a) == pytest.approx(expected, rel=2e-14)
    assert (sheet.edge_a if end_b else sheet.edge_b) == pytest.approx(section.girth, rel=2e-14)
    # The route of the checks, by supports alone.
    assert End.cut(section, height=0.0, rise=rise).girth == pytest.approx(expected, rel=2e-14)
    # A plane through the axis at height 0 takes off one side what it adds on the other.
    assert sheet.area == pytest.approx(4000.0 * section.girth, rel=1e-13)


@pytest.mark.parametrize(("width", "height", "slope", "long"), CASES)
def test_every_point_of_the_unrolled_cut_lies_on_the_plane(
    width: float, height: float, slope: float, long: float
) -> None:
    section = Ellipse(width=width, height=height)
    rise = cut_slopes(slope=radians(slope), long=radians(long), end_b=True)
    sheet = Cylinder(section, Plane(-3000.0, np.zeros(2)), Plane(7.0, rise)).sheet(0.0)
    arcs = section.girth * np.linspace(0.0, 0.999, 97)
    u = section.at_arc(arcs)
    lines = sheet.lines(sheet.from_a(u))
    points = section.point(u)
    assert np.abs(lines.a[:, 0] - arcs).max() < 1e-13 * section.girth
    assert np.abs(lines.b[:, 0] - arcs).max() < 1e-13 * section.girth
    assert np.abs(lines.b[:, 1] - (7.0 + points @ rise)).max() < 1e-12 * (1.0 + np.abs(points @ rise).max())
