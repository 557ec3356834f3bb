"""Lengths, angles and directions as people write them."""

from __future__ import annotations

import math
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.errors import InputError
from develop.units import (
    UNITS,
    format_length,
    number_text,
    parse_angle,
    parse_area,
    parse_direction,
    parse_length,
    parse_number,
)

# The inch is 25.4 mm and the foot twelve inches: international yard and pound agreement, 1959.
INCH = Fraction(254, 10)


@pytest.mark.parametrize(
    ("text", "mm"),
    [
        ("450", 450),
        ("450mm", 450),
        (" 450 mm ", 450),
        ("45 cm", 450),
        ("0.45 m", 450),
        (".45m", 450),
        ("450.", 450),
        ("4.5e2", 450),
        ("17-3/4 in", INCH * Fraction(71, 4)),
        ("17 3/4 in", INCH * Fraction(71, 4)),
        ("17 3/4 IN", INCH * Fraction(71, 4)),
        ('12-3/8"', INCH * Fraction(99, 8)),
        ("12-3/8 in", INCH * Fraction(99, 8)),
        ("3/4 in", INCH * Fraction(3, 4)),
        ("1' 6\"", INCH * 18),
        ("1'6\"", INCH * 18),
        ("1'-6\"", INCH * 18),
        ("1 ft 6 in", INCH * 18),
        ("1' 6-3/8\"", INCH * Fraction(147, 8)),
        ("1’ 6”", INCH * 18),
        ("1′ 6″", INCH * 18),
        ("2 ft", INCH * 24),
        ("-20", -20),
        ("−20", -20),
        ("- 1' 6\"", -INCH * 18),
        ("+20", 20),
        (450, 450),
        (12.375, Fraction(12375, 1000)),
    ],
)
def test_a_length_is_the_double_nearest_to_its_exact_value(text: object, mm: Fraction) -> None:
    assert parse_length(text) == float(mm)


@pytest.mark.parametrize(
    ("unit", "size"), [("mm", 1), ("cm", 10), ("m", 1000), ("in", INCH), ("ft", INCH * 12)]
)
def test_a_bare_number_is_in_the_unit_of_the_job(unit: str, size: Fraction) -> None:
    assert unit in UNITS
    assert parse_length("2-1/2", unit=unit) == float(size * Fraction(5, 2))
    assert parse_length(2.5, unit=unit) == float(size * Fraction(5, 2))
    assert parse_length("2-1/2 mm", unit=unit) == 2.5


@pytest.mark.parametrize(
    "wrong",
    [
        "", "  ", "abc", "nan", "inf", "-inf", "1e", "1.2.3", "4 5", "1/0", "1/2/3", "12-9/8 in", "1' 2'",
        "6\" 1'", "1 in 6 in", "1'-", "-", "'", "in", "1 ft 6", "5 kg", "5 mmm", "1,5", "٣", "0x10", "1_000", "--5",
        "1" * 100, True, None, [1], {"a": 1}, math.nan, math.inf, -math.inf, 10**400,
    ],
)  # fmt: skip
def test_what_is_not_a_length_is_refused_with_what_is_allowed(wrong: object) -> None:
    with pytest.raises(InputError) as refused:
        parse_length(wrong)
    (problem,) = refused.value.problems
    assert problem.given
    assert "450" in problem.allowed
    assert "\n" not in str(problem)


def test_a_wrong_unit_is_named_with_the_right_ones() -> None:
    with pytest.raises(InputError) as refused:
        parse_length("450 kg")
    assert '"450 kg" has the unit "kg"; allowed: mm, cm, m, in or ft' in str(refused.value)


@given(
    whole=st.integers(0, 4000),
    under=st.sampled_from([2, 4, 8, 16, 32, 64]),
    over=st.integers(0, 63),
    dash=st.sampled_from(["-", " "]),
)
def test_inches_with_a_fraction_are_exact(whole: int, over: int, under: int, dash: str) -> None:
    over %= under
    assert parse_length(f"{whole}{dash}{over}/{under} in") == float(INCH * (whole + Fraction(over, under)))


@given(st.floats(-1e5, 1e5), st.sampled_from([16, 32, 64]))
def test_inches_written_and_read_are_within_half_a_step(mm: float, fraction: int) -> None:
    text = format_length(mm, unit="in", fraction=fraction)
    assert abs(Fraction(parse_length(text)) - Fraction(mm)) <= INCH / fraction / 2 + Fraction(1, 10**9)


@given(st.floats(-1e5, 1e5), st.integers(0, 4), st.sampled_from(["mm", "cm", "m"]))
def test_decimals_written_and_read_are_within_half_a_step(mm: float, digits: int, unit: str) -> None:
    size = {"mm": 1, "cm": 10, "m": 1000}[unit]
    text = format_length(mm, unit=unit, digits=digits)
    error = abs(Fraction(parse_length(text)) - Fraction(mm))
    assert error <= Fraction(size, 2 * 10**digits) + Fraction(1, 10**9)


@given(st.floats(-1e7, 1e7))
def test_number_text_loses_nothing(value: float) -> None:
    assert float(number_text(value)) == value
    assert parse_length(number_text(value)) == value


@pytest.mark.parametrize(
    ("mm", "options", "text"),
    [
        (0.0, {}, "0.0 mm"),
        (-0.04, {}, "0.0 mm"),
        (0.05, {}, "0.1 mm"),
        (0.25, {}, "0.3 mm"),  # exactly half: away from zero
        (-0.25, {}, "-0.3 mm"),
        (999.96, {}, "1000.0 mm"),  # carries through every digit
        (1256.637, {"suffix": False}, "1256.6"),
        (1256.637, {"digits": 0}, "1257 mm"),
        (1256.637, {"unit": "m", "digits": 3}, "1.257 m"),
        (25.4 * 3 / 4, {"unit": "in"}, "3/4 in"),
        (25.4 * 31.999, {"unit": "in"}, "32 in"),  # the fraction carries into the whole
        (25.4 * (11 + 63.01 / 64), {"unit": "in", "fraction": 32}, "12 in"),
        (25.4 * (11 + 31 / 32), {"unit": "in", "fraction": 32}, "11-31/32 in"),
        (25.4 * (11 + 30 / 32), {"unit": "in", "fraction": 32}, "11-15/16 in"),
        (25.4 * (11 + 31.01 / 32), {"unit": "in", "fraction": 16}, "12 in"),
        (-25.4 * 1.5, {"unit": "in"}, "-1-1/2 in"),
        (0.1, {"unit": "in"}, "0 in"),
    ],
)
def test_lengths_as_they_are_printed(mm: float, options: dict[str, object], text: str) -> None:
    assert format_length(mm, **options) == text  # type: ignore[arg-type]


def test_a_minus_and_a_fraction_are_read_back() -> None:
    assert parse_length("-1-1/2 in") == float(-INCH * Fraction(3, 2))


@pytest.mark.parametrize("wrong", [math.nan, math.inf])
def test_what_is_no_length_is_not_printed(wrong: float) -> None:
    with pytest.raises(ValueError, match="not a length"):
        format_length(wrong)


def test_no_length_is_printed_in_an_unknown_unit() -> None:
    with pytest.raises(InputError, match='"ft" is not a unit to print; allowed: mm, cm, m or in'):
        format_length(1.0, unit="ft")


@pytest.mark.parametrize(
    ("text", "degrees"),
    [
        ("30", 30),
        ("-30", -30),
        ("22-1/2", 22.5),
        ("22.5°", 22.5),
        ("30 deg", 30),
        ("30 degrees", 30),
        (30, 30),
    ],
)
def test_angles(text: object, degrees: float) -> None:
    assert parse_angle(text) == math.radians(degrees)


@pytest.mark.parametrize("wrong", ["", "abc", "30 mm", "30 rad", "nan", math.inf, True, None, "30 30"])
def test_what_is_not_an_angle_is_refused(wrong: object) -> None:
    with pytest.raises(InputError) as refused:
        parse_angle(wrong)
    assert "degrees" in refused.value.problems[0].allowed


# Facing end B, anticlockwise from right; a clock on the wall before one runs the other way.
@pytest.mark.parametrize(
    ("text", "degrees"),
    [
        ("right", 0), ("top", 90), ("left", 180), ("bottom", 270), (" Top ", 90),
        ("3:00", 0), ("12:00", 90), ("0:00", 90), ("9:00", 180), ("6:00", 270), ("2:30", 15), ("1:00", 60),
        ("10:30", 135), ("11:59", 90.5), ("0", 0), ("90", 90), ("360", 0), ("-90", 270), (270, 270), (-360, 0),
        ("22-1/2", 22.5), ("-1e-30", 0),
    ],
)  # fmt: skip
def test_directions(text: object, degrees: float) -> None:
    assert parse_direction(text) == math.radians(degrees)


@given(st.floats(-360, 360))
def test_a_direction_is_within_one_turn(degrees: float) -> None:
    found = parse_direction(degrees)
    assert 0 <= found < 2 * math.pi
    assert math.isclose(math.cos(found), math.cos(math.radians(degrees)), abs_tol=1e-14)
    assert math.isclose(math.sin(found), math.sin(math.radians(degrees)), abs_tol=1e-14)


@pytest.mark.parametrize(
    ("wrong", "said"),
    [
        ("tpo", 'did you mean "top"?'),
        ("botom", 'did you mean "bottom"?'),
        ("13:00", "not a time on a clock"),
        ("2:60", "not a time on a clock"),
        ("2:3", "not a direction"),
        ("361", "more than a full turn"),
        ("-361", "more than a full turn"),
        ("nan", "not a direction"),
        (math.nan, "not a direction"),
        ("", "is empty"),
        ([1], "not a direction"),
    ],
)
def test_what_is_not_a_direction_is_refused(wrong: object, said: str) -> None:
    with pytest.raises(InputError, match="allowed: degrees") as refused:
        parse_direction(wrong)
    assert said in str(refused.value)


def test_a_plain_number_has_no_unit() -> None:
    assert parse_number("-1-1/2", what="a number", allowed="") == -1.5
    with pytest.raises(InputError, match='"3 mm" is not a number; allowed: any'):
        parse_number("3 mm", what="a number", allowed="any")


@pytest.mark.parametrize(
    ("text", "unit", "mm2"),
    [
        ("125000", "mm", 125_000),
        (125000, "mm", 125_000),
        ("125000 mm2", "in", 125_000),
        ("125000mm²", "mm", 125_000),
        ("1250 cm^2", "mm", 125_000),
        ("1250 sq cm", "mm", 125_000),
        ("0.125 m2", "mm", 125_000),
        ("100", "in", INCH**2 * 100),
        ("100 IN2", "mm", INCH**2 * 100),
        ("1-1/2 sq. ft", "mm", INCH**2 * 216),
        ("2", "ft", INCH**2 * 288),
    ],
)
def test_an_area_in_the_square_of_the_unit(text: object, unit: str, mm2: Fraction) -> None:
    assert parse_area(text, unit=unit) == float(mm2)


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "is empty"),
        ("x", "not an area"),
        (True, "not an area"),
        ("1/0 m2", "not an area"),
        ("125000 mm", 'has the unit "mm"'),
        ("125000 mm3", 'has the unit "mm3"'),
        ("1 acre", 'has the unit "acre"'),
        ("1 sq", 'has the unit "sq"'),
    ],
)
def test_what_is_not_an_area(text: object, said: str) -> None:
    with pytest.raises(InputError) as refused:
        parse_area(text)
    (problem,) = refused.value.problems
    assert said in problem.given
    assert "mm2" in problem.allowed
