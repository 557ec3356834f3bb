"""E. A. Atkins, Practical Sheet and Plate Metal Work, Pitman 1908: chapter XII, fig. 82, a cone cap of
diameter 3 and slant 2; the arc struck with radius 2 is as long as the girth.
"""

from __future__ import annotations

from math import degrees, pi, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.solid import Frame, Rim
from develop.surfaces.band import Band


@pytest.mark.parametrize("point_up", [True, False])
def test_cone_cap(point_up: bool) -> None:
    height = sqrt(2.0**2 - 1.5**2)
    rims = (
        Rim(Ellipse(width=3.0, height=3.0), Frame.square(at=(0.0, 0.0, 0.0 if point_up else height))),
        Rim(Point(), Frame.square(at=(0.0, 0.0, height if point_up else 0.0))),
    )
    sheet = Band(*(rims if point_up else rims[::-1])).sheet(2.0)
    round_edge, apex_edge = (sheet.edge_a, sheet.edge_b) if point_up else (sheet.edge_b, sheet.edge_a)
    assert round_edge == pytest.approx(3.0 * pi, rel=1e-13)
    assert apex_edge == pytest.approx(0.0, abs=1e-12)
    assert sheet.area == pytest.approx(3.0 * pi, rel=1e-13)
    lines = sheet.lines(sheet.ends)
    apex, arc = (lines.b, lines.a) if point_up else (lines.a, lines.b)
    assert np.abs(apex - apex[0]).max() < 1e-13
    assert np.abs(np.linalg.norm(arc - apex[0], axis=1) - 2.0).max() < 1e-13
    # The fan: three quarters of the full circle. Its sign tells which end is the wider.
    first, last = (arc - apex[0])[0], (arc - apex[0])[-1]
    assert first @ last == pytest.approx(4.0 * np.cos(1.5 * pi), abs=1e-12)
    assert degrees(abs(sheet.turn)) == pytest.approx(270.0, rel=1e-13)
