"""Modern Sheet-Metal Workers' Instructor, p. 33: the girth of a flat oval of length L and width W is
2 L + 1.142 W; for 6 by 15 that is 36.852. 1.142 stands for π − 2.
"""

from __future__ import annotations

from math import pi

import pytest

from develop.sections import section_of
from develop.sections.text import parse_section


def test_girth_of_6_by_15() -> None:
    rule = 2.0 * 15.0 + 1.142 * 6.0
    assert rule == pytest.approx(36.852, abs=5e-4)
    for text in ("flat-oval 15 x 6", "flat-oval 6 x 15"):
        girth = section_of(parse_section(text)).girth
        # What the third decimal of 1.142 costs: 6 times 0.00041.
        assert girth == pytest.approx(rule, rel=1e-4)
        assert girth == pytest.approx(36.84956, abs=5e-6)
        assert rule - girth == pytest.approx(6.0 * (1.142 - (pi - 2.0)), abs=1e-12)
