"""S. Ramanujan, Modular equations and approximations to π, Quarterly Journal of Mathematics 45 (1914)
350-372, §16: the girth of an ellipse is nearly π (a + b) (1 + 3 h / (10 + √(4 − 3 h))), with
h = ((a − b)/(a + b))². An approximation: it shows how far a good rule of thumb is off, and no value
of it is expected of this program.
"""

from __future__ import annotations

from math import pi, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse


def second_formula(a: float, b: float) -> float:
    h = ((a - b) / (a + b)) ** 2
    return pi * (a + b) * (1.0 + 3.0 * h / (10.0 + sqrt(4.0 - 3.0 * h)))


def test_how_far_the_rule_is_off_at_2_to_1() -> None:
    rule, girth = second_formula(2.0, 1.0), Ellipse(width=4.0, height=2.0).girth
    assert rule == pytest.approx(9.68844821613, abs=5e-12)
    assert rule / girth - 1.0 == pytest.approx(-4.6e-10, abs=0.05e-10)


@pytest.mark.parametrize("ratio", [0.9, 0.5, 0.2, 0.1, 0.01, 0.001])
def test_the_rule_is_short_and_by_no_more_than_it_is_known_to_be(ratio: float) -> None:
    girth = Ellipse(width=2.0, height=2.0 * ratio).girth
    short = 1.0 - second_formula(1.0, ratio) / girth
    h = ((1.0 - ratio) / (1.0 + ratio)) ** 2
    # For nearly round ones the error is 3 h⁵ / 2¹⁷ of π (a + b), the first term that is left out;
    # all further terms have its sign. The flat ellipse bounds it: 22.4 times that.
    first = 3.0 * h**5 / 2.0**17 * pi * (1.0 + ratio) / girth
    assert first - 1e-14 <= short <= 22.4 * first + 1e-14
    assert short <= 4.03e-4


def test_the_rule_is_worst_for_the_flat_ellipse() -> None:
    # b = 0: the girth is 4 a, the rule gives π a (1 + 3/11).
    flat = Ellipse(width=2000.0, height=2e-3).girth
    assert second_formula(1000.0, 1e-3) / flat - 1.0 == pytest.approx(-4.02e-4, abs=5e-7)


def test_limits_of_girth_over_half_the_longer_axis() -> None:
    """2π when round, 4 when flat (common practice, no source), and falling between."""
    ratios = np.geomspace(1.0, 1e-6, 200)
    share = np.array([Ellipse(width=2.0, height=2.0 * r).girth for r in ratios])
    assert share[0] == pytest.approx(2.0 * pi, rel=1e-15)
    # 4 + 2 (b/a)² (ln(4a/b) − 1/2): the first terms of E(k) for k near 1 (DLMF 19.12.2).
    flat = ratios[-1]
    assert share[-1] == pytest.approx(4.0 + 2.0 * flat**2 * (np.log(4.0 / flat) - 0.5), rel=1e-14)
    assert np.all(np.diff(share) < 0.0)
    assert np.all((share >= 4.0) & (share <= 2.0 * pi + 1e-15))


@pytest.mark.parametrize(("width", "height"), [(600.0, 300.0), (1.0, 7.0), (123.0, 123.0)])
def test_area_is_pi_a_b(width: float, height: float) -> None:
    """Common knowledge; and Green's theorem over its own points agrees."""
    section = Ellipse(width=width, height=height)
    assert section.area == pytest.approx(pi * width * height / 4.0, rel=1e-15)
    u = np.arange(4096) * (2.0 * pi / 4096)
    at = section.walk(u)
    # ½ ∮ h ds; the trapezoidal rule is exact for this trigonometric polynomial.
    assert np.mean((at.x * at.ex + at.y * at.ey) * at.ds) * pi == pytest.approx(section.area, rel=1e-13)
