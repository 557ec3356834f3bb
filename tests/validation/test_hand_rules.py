"""Two old rules for the girth of an ellipse of 6 by 4, wrong by up to one percent:
half the sum of the diameters times π, from a reprint of the American Mechanic (author and year not
shown), and 2 √(D² + d²) + d/3, from The Mechanic's Assistant, Appleton 1849, p. 92.
Neither is expected of this program; how far they are off is.
"""

from __future__ import annotations

from math import pi, sqrt

import pytest

from develop.sections.ellipse import Ellipse

GIRTH = 15.86543958929058979  # OEIS A334849


def test_half_the_sum_of_the_diameters() -> None:
    rule = pi * (6.0 + 4.0) / 2.0
    assert rule == pytest.approx(15.7080, abs=5e-5)
    assert rule / Ellipse(width=6.0, height=4.0).girth - 1.0 == pytest.approx(-0.0099, abs=5e-5)
    assert Ellipse(width=6.0, height=4.0).girth == pytest.approx(GIRTH, rel=4.5e-16)


def test_the_mechanics_assistant() -> None:
    rule = 2.0 * sqrt(6.0**2 + 4.0**2) + 4.0 / 3.0
    assert rule == pytest.approx(15.7555, abs=1e-4)
    assert rule / Ellipse(width=6.0, height=4.0).girth - 1.0 == pytest.approx(-0.0069, abs=5e-5)
    # For a circle it is as much too long.
    circle = 2.0 * sqrt(2.0) + 1.0 / 3.0
    assert circle / Ellipse(width=1.0, height=1.0).girth - 1.0 == pytest.approx(0.0064, abs=5e-5)
