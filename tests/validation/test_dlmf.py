"""NIST Digital Library of Mathematical Functions, §19.30(i), equation 19.30.5: the girth of an ellipse
with half axes a and b is L(a, b) = 4 a E(k) = 8 R_G(0, a², b²), with k² = 1 − b²/a² (from memory).
"""

from __future__ import annotations

import pytest
from scipy.special import ellipe, elliprg

from develop.sections.ellipse import Ellipse

AXES = [(1.0, 1.0), (3.0, 2.0), (2.0, 1.0), (300.0, 150.0), (10.0, 1.0), (250.0, 0.25), (1.0, 3.0)]


@pytest.mark.parametrize(("a", "b"), AXES)
def test_19_30_5_as_legendre_integral(a: float, b: float) -> None:
    girth = Ellipse(width=2.0 * a, height=2.0 * b).girth
    long, short = max(a, b), min(a, b)
    assert girth == pytest.approx(4.0 * long * ellipe(1.0 - (short / long) ** 2), rel=1e-14)


@pytest.mark.parametrize(("a", "b"), AXES)
def test_19_30_5_as_symmetric_integral(a: float, b: float) -> None:
    girth = Ellipse(width=2.0 * a, height=2.0 * b).girth
    assert girth == pytest.approx(8.0 * elliprg(0.0, a * a, b * b), rel=1e-14)
