"""M. Abramowitz and I. A. Stegun (eds.), Handbook of Mathematical Functions, National Bureau of
Standards, Applied Mathematics Series 55, 1964: chapter 17 by L. M. Milne-Thomson, tables 17.1
(complete E, 15 D as given again by J. Burkardt's TEST_VALUES `elliptic_em_values`) and 17.6
(incomplete E, 8 D, p. 616 and following; values from memory).

The ellipse with half axes 1 and cos α has the girth 4 E(sin² α), and from the end of its short axis
the arc over the eccentric angle φ is E(φ\\α).
"""

from __future__ import annotations

from math import cos, pi, radians, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse, ellipse_girth

LAST_DIGIT_OF_17_6 = 5e-9  # half a unit of the eighth decimal


@pytest.mark.parametrize(
    ("phi", "alpha", "expected"),
    [(30, 30, 0.51788193), (45, 45, 0.74818650), (60, 60, 0.91839329), (75, 60, 1.07585669)],
)
def test_table_17_6(phi: int, alpha: int, expected: float) -> None:
    short = cos(radians(alpha))
    wide = Ellipse(width=2.0, height=2.0 * short)
    top = np.array([pi / 2, pi / 2 + radians(phi), pi / 2 - radians(phi)])
    arcs = wide.arc(top)
    assert arcs[1] - arcs[0] == pytest.approx(expected, rel=0, abs=LAST_DIGIT_OF_17_6)
    assert arcs[0] - arcs[2] == pytest.approx(expected, rel=0, abs=LAST_DIGIT_OF_17_6)
    # Standing upright, the short axis ends at the right, where running lengths start.
    upright = Ellipse(width=2.0 * short, height=2.0)
    assert upright.arc(np.array([radians(phi)]))[0] == pytest.approx(expected, rel=0, abs=LAST_DIGIT_OF_17_6)


@pytest.mark.parametrize(
    ("m", "expected"), [(0.0, pi / 2), (0.25, 1.467462209339427), (0.75, 1.211056027568459), (1.0, 1.0)]
)
def test_complete_integral_of_the_second_kind(m: float, expected: float) -> None:
    # The values end at 1e-15; four of them and the rounding of √(1 − m) may add up to 1e-14.
    assert ellipse_girth(1.0, sqrt(1.0 - m)) == pytest.approx(4.0 * expected, rel=0, abs=1e-14)
