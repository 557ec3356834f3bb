"""J. W. Heyt and M. J. Diaz, the round duct of equal friction to a flat oval one, as ASHRAE
Fundamentals, duct design, gives it: De = 1.55 A^0.625 / P^0.25. No printed table was seen; the
values are the formula's, worked with mpmath to 25 digits. One copy prints the exponent of P as .325.
"""

from __future__ import annotations

import pytest

from develop.sections import section_of
from develop.sections.friction import equal_friction
from develop.sections.text import parse_section


def diameter(text: str) -> float:
    spec = parse_section(text)
    section = section_of(spec)
    found = equal_friction(spec, area=section.area, girth=section.girth)
    assert found is not None
    return found.diameter


@pytest.mark.parametrize(
    ("text", "expected"),
    [("flat-oval 15 x 6", 9.90293), ("flat-oval 8 x 14", 11.04442), ("flat-oval 500 x 250", 369.685)],
)
def test_the_formula(text: str, expected: float) -> None:
    digits = len(str(expected).partition(".")[2])
    assert diameter(text) == pytest.approx(expected, abs=0.5 * 10.0**-digits)


def test_a_round_one_is_nearly_its_own_equal() -> None:
    # 1.55 (π/4)^0.625 / π^0.25 = 1.0011: the fit is to a tenth of a percent what it must be.
    assert diameter("flat-oval 400 x 400") == pytest.approx(400.0, rel=2e-3)


def test_the_misprint_is_not_even_a_length() -> None:
    """With exponent .325 twice the duct would not have twice the diameter."""
    assert diameter("flat-oval 1000 x 500") == pytest.approx(2.0 * diameter("flat-oval 500 x 250"), rel=1e-14)
    spec = parse_section("flat-oval 500 x 250")
    one = section_of(spec)
    misprint = [1.55 * (k * k * one.area) ** 0.625 / (k * one.girth) ** 0.325 for k in (1.0, 2.0)]
    assert misprint[1] / misprint[0] == pytest.approx(2.0**0.925, rel=1e-12)
