"""Math Central (University of Regina), Quandaries and Queries QQ.09.07: a frustum whose edges measure
44 and 32 and whose side measures 8 is answered with radii 30.3 and 22.1 and an angle of 83.2 degrees.
That is right for neither reading of the 8; both readings are here, and how far the answer is off.
"""

from __future__ import annotations

from math import degrees, pi, sqrt

import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import Frame, Rim
from develop.surfaces.band import Band


@pytest.mark.parametrize(
    ("height", "outer", "inner", "angle", "off"),
    [
        (8.0, 30.158, 21.933, 83.595, (0.142, 0.167, -0.395)),
        (sqrt(8.0**2 - (6.0 / pi) ** 2), 29.333, 21.333, 85.944, (0.967, 0.767, -2.744)),
    ],
    ids=["8 is the height", "8 is the slant"],
)
def test_the_printed_answer_is_off(
    height: float, outer: float, inner: float, angle: float, off: tuple[float, float, float]
) -> None:
    a, b = (Ellipse(width=girth / pi, height=girth / pi) for girth in (44.0, 32.0))
    sheet = Band(Rim(a, Frame.square()), Rim(b, Frame.square(at=(0.0, 0.0, height)))).sheet(0.0)
    assert (sheet.edge_a, sheet.edge_b) == pytest.approx((44.0, 32.0), rel=1e-13)
    turn = abs(sheet.turn)
    found = (44.0 / turn, 32.0 / turn, degrees(turn))
    assert found == pytest.approx((outer, inner, angle), abs=5e-4)
    printed = (30.3, 22.1, 83.2)
    assert [p - f for p, f in zip(printed, found, strict=True)] == pytest.approx(off, abs=1e-3)
