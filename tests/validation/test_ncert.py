"""National Council of Educational Research and Training, Mathematics: Textbook for Class X, chapter 13
(surface areas and volumes), exercise 13.4: questions 2 and 3 (frustum from its girths; the fez), and
the tin funnel as given in a copy of the solutions. The book takes π = 22/7 or 3.14.
"""

from __future__ import annotations

from math import degrees, pi, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import Frame, Rim
from develop.surfaces.band import Band, BandSheet
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.trim import Plane


def frustum(radius_a: float, radius_b: float, height: float) -> BandSheet:
    a, b = (Ellipse(width=2.0 * r, height=2.0 * r) for r in (radius_a, radius_b))
    return Band(Rim(a, Frame.square()), Rim(b, Frame.square(at=(0.0, 0.0, height)))).sheet(0.5)


def radii(sheet: BandSheet) -> tuple[float, float]:
    """Radii of the two arcs of the flat: edge length over the angle of the fan."""
    return sheet.edge_a / abs(sheet.turn), sheet.edge_b / abs(sheet.turn)


def test_question_2_frustum_from_its_girths() -> None:
    """Slant 4, girths 18 and 6: the curved area is half their sum times the slant, 48."""
    r, s = 9.0 / pi, 3.0 / pi
    sheet = frustum(r, s, sqrt(16.0 - (r - s) ** 2))
    assert sheet.area == pytest.approx(48.0, rel=1e-13)
    assert (sheet.edge_a, sheet.edge_b) == pytest.approx((18.0, 6.0), rel=1e-13)
    assert radii(sheet) == pytest.approx((6.0, 2.0), rel=1e-13)
    assert abs(sheet.turn) == pytest.approx(3.0, rel=1e-13)


def test_tin_funnel() -> None:
    """A pipe of 8, 10 long, on a cone from 18 to 8, height 12: 781.86 with π = 3.14, that is 249 π."""
    cone = frustum(9.0, 4.0, 12.0)
    pipe = Cylinder(Ellipse(width=8.0, height=8.0), Plane(0.0, np.zeros(2)), Plane(10.0, np.zeros(2))).sheet(
        0.0
    )
    assert cone.area + pipe.area == pytest.approx(249.0 * pi, rel=1e-13)
    assert (cone.area + pipe.area) * 3.14 / pi == pytest.approx(781.86, abs=5e-3)
    assert radii(cone) == pytest.approx((23.4, 10.4), rel=1e-13)
    assert degrees(abs(cone.turn)) == pytest.approx(138.46154, abs=5e-6)


def test_question_3_fez() -> None:
    """Radii 10 and 4, slant 15, with its top: 710 2/7 with π = 22/7."""
    side = frustum(10.0, 4.0, sqrt(15.0**2 - 6.0**2))
    total = side.area + Ellipse(width=8.0, height=8.0).area
    assert total == pytest.approx(226.0 * pi, rel=1e-13)
    assert total == pytest.approx(709.99994, abs=5e-6)
    assert total * (22.0 / 7.0) / pi == pytest.approx(710.2857, abs=5e-5)
