"""J. Bird, Basic Engineering Mathematics, p. 253, problem 25: frustum with radii 3 and 2, height 3.6;
58.71 is printed for its curved area, with the slant rounded before use.
"""

from __future__ import annotations

from math import pi, sqrt

import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import Frame, Rim
from develop.surfaces.band import Band


def test_the_printed_area_is_rounded_on_the_way() -> None:
    rims = (
        Rim(Ellipse(width=6.0, height=6.0), Frame.square()),
        Rim(Ellipse(width=4.0, height=4.0), Frame.square(at=(0.0, 0.0, 3.6))),
    )
    area = Band(*rims).sheet(0.0).area
    assert area == pytest.approx(pi * 5.0 * sqrt(1.0 + 3.6**2), rel=1e-13)
    assert area == pytest.approx(58.68979, abs=5e-6)
    assert 58.71 - area == pytest.approx(0.0202, abs=5e-5)
