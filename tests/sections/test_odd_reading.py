"""The reading that makes a hollow, against widths of ellipses spoilt in one place."""

from __future__ import annotations

from math import cos, hypot, radians, sin, sqrt

import pytest

from develop.errors import InputError
from develop.sections.odd_reading import odd_reading
from develop.sections.text import parse_section

DIRECTIONS = [15.0 * k for k in range(12)]


def widths(a: float, b: float) -> list[float]:
    """Of an ellipse with half axes a, b between parallel jaws: 2 sqrt(a² cos² + b² sin²) (from memory)."""
    return [2.0 * hypot(a * cos(radians(d)), b * sin(radians(d))) for d in DIRECTIONS]


@pytest.mark.parametrize("axes", [(160.0, 160.0), (200.0, 150.0), (120.0, 180.0)])
@pytest.mark.parametrize("wrong", range(12))
@pytest.mark.parametrize("share", [0.7, 0.85, 1.15, 1.3])
def test_the_spoilt_reading_is_named_and_the_true_one_is_allowed(axes, wrong: int, share: float) -> None:
    true = widths(*axes)
    spoilt = [size * share if k == wrong else size for k, size in enumerate(true)]
    found = odd_reading(DIRECTIONS, spoilt)
    assert found is not None
    at, low, high = found
    assert at == wrong
    assert low <= true[wrong] <= high
    assert not low <= spoilt[wrong] <= high


def test_readings_of_an_ellipse_have_none() -> None:
    assert odd_reading(DIRECTIONS, widths(300.0, 100.0)) is None


def test_the_bounds_are_where_three_tangents_meet() -> None:
    # w(45) = [w(0) + w(90)] sin 45 for a sharp corner at 45; no more than that, and for 0 no less than
    # w(45) / sin 45 - w(90).
    found = odd_reading([0.0, 45.0, 90.0, 135.0], [322.0, 326.0, 32.0, 323.0])
    assert found is not None
    at, low, high = found
    assert at == 2
    assert low == pytest.approx(326.0 * sqrt(2.0) - 322.0, rel=1e-12)
    assert high == pytest.approx((326.0 + 323.0) * sin(radians(45.0)), rel=1e-12)


def test_the_message_names_the_reading_and_what_it_may_be() -> None:
    with pytest.raises(InputError) as refused:
        parse_section("measured 0:322 45:326 90:32 135:323")
    (problem,) = refused.value.problems
    assert "the reading 90:32 is 107 mm less than its neighbours allow" in problem.given
    assert "there from 139.1 to 458.9 mm; measure again at 90 degrees" in problem.allowed
