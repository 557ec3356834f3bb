"""D. W. Cantrell, a formula for the girth of an ellipse, posted to a newsgroup in 2001 (from memory):
L = 4 (a + b) − 2 (4 − π) a b / H_p, with H_p = ((a^p + b^p)/2)^(1/p) and p = 0.825056. Another
approximation, to bracket.
"""

from __future__ import annotations

from math import pi

import pytest

from develop.sections.ellipse import Ellipse


def test_3_to_1() -> None:
    a, b, p = 3.0, 1.0, 0.825056
    rule = 4.0 * (a + b) - 2.0 * (4.0 - pi) * a * b / ((a**p + b**p) / 2.0) ** (1.0 / p)
    assert rule == pytest.approx(13.363788, abs=5e-7)
    assert rule / Ellipse(width=6.0, height=2.0).girth - 1.0 == pytest.approx(-8.3e-5, abs=0.05e-5)
