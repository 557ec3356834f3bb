"""ASHAE Guide 1956, chapter 32, table 1: diameters of round ducts of equal friction to rectangular
ones, to a tenth of an inch; the formula 1.30 (ab)^0.625 / (a + b)^0.25 as SMACNA table 14-2 states it,
whose row for 300 by 500 mm is 420.
"""

from __future__ import annotations

import pytest

from develop.sections import section_of
from develop.sections.friction import equal_friction
from develop.sections.text import parse_section


@pytest.mark.parametrize(
    ("a", "b", "expected", "ulp"),
    [(6, 6, 6.6, 0.1), (8, 10, 9.8, 0.1), (8, 12, 10.7, 0.1), (10, 20, 15.2, 0.1), (300, 500, 420, 1.0)],
)
def test_rows(a: float, b: float, expected: float, ulp: float) -> None:
    for text in (f"rectangle {a} x {b}", f"rectangle {b} x {a}"):
        spec = parse_section(text)
        section = section_of(spec)
        found = equal_friction(spec, area=section.area, girth=section.girth)
        assert found is not None
        assert found.diameter == pytest.approx(expected, abs=0.5 * ulp)
