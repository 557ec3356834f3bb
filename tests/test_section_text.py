"""The text form of sections."""

from __future__ import annotations

from fractions import Fraction
from math import pi

import mpmath as mp
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from develop.errors import InputError
from develop.sections.text import FLATTEST, SectionSpec, parse_section


@pytest.mark.parametrize(
    ("text", "kind", "width", "height"),
    [
        ("round 400", "round", 400, 400),
        ("Round  400 mm", "round", 400, 400),
        ("round400", "round", 400, 400),
        ("round 1' 6\"", "round", 457.2, 457.2),
        ("round 0.1", "round", 0.1, 0.1),
        ("round 100 m", "round", 100_000, 100_000),
        ("ellipse 600 x 300", "ellipse", 600, 300),
        ("ellipse 600x300", "ellipse", 600, 300),
        ("ellipse 600 X 300", "ellipse", 600, 300),
        ("ellipse 600 × 300", "ellipse", 600, 300),
        ("ellipse600×300", "ellipse", 600, 300),
        ("ellipse 300 x 600", "ellipse", 300, 600),  # height over width is allowed
        ("ellipse 24 in x 12 in", "ellipse", 609.6, 304.8),
        ("ellipse 60 cm x 12-3/8 in", "ellipse", 600, 314.325),
        ("flat-oval 600 x 300", "flat-oval", 600, 300),
        ("Flat oval 300 x 600", "flat-oval", 300, 600),
        ("flat-oval 300 x 300", "flat-oval", 300, 300),
        ("rectangle 500x300", "rectangle", 500, 300),
        ("rectangle 500 x 300 r 40", "rectangle", 500, 300),
        ("superellipse 600 x 300 n 2.5", "superellipse", 600, 300),
        ("ellipse width 600 height 300", "ellipse", 600, 300),
        ("ellipse height 300, width 600", "ellipse", 600, 300),
        ("ellipse ratio 0.5 width 600", "ellipse", 600, 300),
        ("flat-oval ratio 1/2 height 300", "flat-oval", 600, 300),
    ],
)
def test_what_a_text_means(text: str, kind: str, width: float, height: float) -> None:
    spec = parse_section(text)
    assert (spec.kind, spec.width, spec.height, spec.outside) == (kind, width, height, False)
    assert parse_section(spec.text) == spec


def test_bare_numbers_are_in_the_unit_of_the_job() -> None:
    assert parse_section("ellipse 24 x 300 mm", unit="in").text == "ellipse 609.6 x 300"


@given(st.floats(0.1, 1e5), st.floats(0.1, 1e5))
def test_the_canonical_text_loses_nothing(width: float, height: float) -> None:
    assume(max(width, height) <= FLATTEST * min(width, height))
    spec = parse_section(f"ellipse {width!r} x {height!r}")
    assert (spec.width, spec.height) == (width, height)
    assert parse_section(spec.text) == spec


# Outside diameters: ASME B36.10M as in the references' table; EN 10220 from memory.
@pytest.mark.parametrize(
    ("text", "outside", "canonical"),
    [
        ("pipe DN 150", 168.3, "pipe DN 150"),
        ("Pipe dn150", 168.3, "pipe DN 150"),
        ("pipe DN 150 asme", 168.3, "pipe DN 150"),
        ("pipe DN 150 en", 168.3, "pipe DN 150"),
        ("pipe DN 125 asme", 141.3, "pipe DN 125 asme"),
        ("pipe DN 125 EN", 139.7, "pipe DN 125 en"),
        ("pipe DN 65 asme", 73.0, "pipe DN 65 asme"),
        ("pipe DN 65 en", 76.1, "pipe DN 65 en"),
        ("pipe DN 300 en", 323.9, "pipe DN 300 en"),
        ("pipe DN 1000", 1016.0, "pipe DN 1000"),
        ("pipe DN 90", 101.6, "pipe DN 90"),
        ("pipe NPS 6", float(Fraction(6625, 1000) * Fraction(254, 10)), "pipe NPS 6"),
        ("pipe NPS 2-1/2", float(Fraction(2875, 1000) * Fraction(254, 10)), "pipe NPS 2-1/2"),
        ("pipe nps 2 1/2 asme", float(Fraction(2875, 1000) * Fraction(254, 10)), "pipe NPS 2-1/2"),
        ("pipe NPS 3/4", float(Fraction(105, 100) * Fraction(254, 10)), "pipe NPS 3/4"),
    ],
)
def test_a_pipe_has_its_published_outside(text: str, outside: float, canonical: str) -> None:
    spec = parse_section(text, unit="in")
    assert spec == SectionSpec("pipe", outside, outside, canonical, outside=True)
    assert parse_section(canonical) == spec


@pytest.mark.parametrize(
    ("text", "said", "allowed"),
    [
        ("", "not a section", "ellipse 600 x 300"),
        (400, "400 is not a section", "round 400"),
        ("400", 'did you mean "round 400"?', "round 400"),
        ("Ø300", 'did you mean "round 300"?', "round 400"),
        ("⌀ 12-3/8 in", 'did you mean "round 12-3/8 in"?', "round 400"),
        ("dia 300", 'did you mean "round 300"?', "round 400"),
        ("dia. 300 mm", 'did you mean "round 300 mm"?', "round 400"),
        ("Diameter 300", 'did you mean "round 300"?', "round 400"),
        ("300 dia", 'did you mean "round 300"?', "round 400"),
        ("circle 300", 'did you mean "round 300"?', "round 400"),
        ("600 x 300", 'did you mean "ellipse 600 x 300", "flat-oval 600 x 300" or', "round 400"),
        ("oval 600 x 300", 'did you mean "ellipse 600 x 300" or "flat-oval 600 x 300"?', "round 400"),
        ("oval", 'did you mean "flat-oval"?', "round 400"),
        ("elipse 600 x 300", 'did you mean "ellipse"?', "ellipse 600 x 300"),
        ("rectangel 600 x 300", 'did you mean "rectangle"?', "rectangle 500 x 300 r 40"),
        ("square 600", 'did you mean "rectangle"?', "rectangle 500 x 300 r 40"),
        ("circular 600", 'did you mean "round 600"?', "round 400"),
        ("hexagon 600 x 300", "not a section", "round 400, ellipse 600 x 300, flat-oval 600 x 300"),
        ("rounded 400", "not a section", "round 400"),
        ("rectangle 500", "two sizes", "width, then height"),
        ("rectangle 500 x 300 r 150.1", "radius 150.1 mm do not fit", "r from 0 to 150 mm"),
        ("rectangle 500 x 300 r -1", "not 0 or more", "r 0 or more"),
        ("rectangle 500 x 300 r", "no value behind r", "rectangle 500 x 300 r 40"),
        ("rectangle 500 x 300 r 10 r 20", "has r twice", "rectangle 500 x 300 r 40"),
        ("rectangle 500 x 300 40", "not a length", "0.1 mm to 100 m"),
        ("rectangle 1 x 1001", "flatter than 1 to 1000", "within 1 to 1000"),
        ("flat-oval 1 x 1001", "flatter than 1 to 1000", "within 1 to 1000"),
        ("superellipse 600 x 300", "no exponent", "n from 1.2 to 20"),
        ("superellipse 600 x 300 n 1.19", "exponent 1.19", "n from 1.2 to 20"),
        ("superellipse 600 x 300 n 20.1", "exponent 20.1", "n from 1.2 to 20"),
        ("superellipse 600 x 300 n two", "not a number for n", "n 2.5"),
        ("superellipse n 2", "two sizes", "width, then height"),
        ("round girth", "no value behind girth", "round girth 1257"),
        ("round girth 0", "not above zero", "girth above zero"),
        ("round girth 0.3", "makes a diameter of 0.09549 mm", "0.1 mm to 100 m"),
        ("round 400 girth 1257", "more than once", "round girth 1257"),
        ("round girth 1257 area 125000", "more than once", "round area 125000"),
        ("round area 125000 mm", 'unit "mm"', "mm2, cm2, m2, in2 or ft2"),
        ("round girht 1257", 'did you mean "girth"?', "round girth 1257"),
        ("ellipse girth 1257", "girth alone", "two of girth, area, width, height, ratio"),
        ("ellipse girth 1257 area 9e4", "two sections, one wide and one high", "two of girth"),
        ("ellipse girth 1257 width 400 height 300", "more than two", "two of girth"),
        ("ellipse 600 x 300 girth 1257", "sizes and more", "two of girth"),
        ("ellipse girth 1257 hight 300", 'did you mean "height"?', "two of girth"),
        ("ellipse girth 1257 ratio 0", "not above zero", "ratio above zero"),
        ("ellipse girth 1257 ratio 1001", 'ratio "1001"', "from 0.001 to 1000"),
        ("ellipse girth 1257 height 0.05", "too small", "0.1 mm to 100 m"),
        (
            "ellipse girth 1256.6 height 629",
            "of girth 1256.6 mm cannot have the height 629 mm",
            "height from 0.6283 to 628.29 mm",
        ),
        (
            "flat-oval girth 1256.6 width 629",
            "cannot have the width 629 mm",
            "width from 0.62795 to 627.94 mm",
        ),
        (
            "ellipse area 1e9 height 600",
            "of area 1000000000 mm² cannot have the height 600 mm",
            "height from 12733 to 100000 mm",
        ),
        ("ellipse width 99 m ratio 1.1", "cannot have the ratio 1.1", "ratio from 0.001 to 1.0101"),
        ("ellipse girth 0.2 ratio 1", "no ellipse of girth 0.2 mm", "sizes from 0.1 mm to 100 m"),
        ("ellipse 490 x 300 (girth 1256.6, height 300)", "makes 488.6535 x 300 mm", "sizes that follow"),
        ("ellipse 600 x 300 (thin)", "brackets", "ellipse 600 x 300"),
        ("round", "no diameter", "round 400"),
        ("round 400 x 300", "two sizes", "round 400"),
        ("round 0", "not above zero", "0.1 mm to 100 m"),
        ("round -400", "not above zero", "0.1 mm to 100 m"),
        ("round 0.09", "too small", "0.1 mm to 100 m"),
        ("round 100.1 m", "too large", "0.1 mm to 100 m"),
        ("round 1e300", "too large", "0.1 mm to 100 m"),
        ("round nan", "not a length", "0.1 mm to 100 m"),
        ("round inf", "not a length", "0.1 mm to 100 m"),
        ("round 400 kg", 'unit "kg"', "0.1 mm to 100 m"),
        ("ellipse 600", "two sizes", "width, then height"),
        ("ellipse 600 x", "two sizes", "width, then height"),
        ("ellipse 600 x 300 x 200", "two sizes", "width, then height"),
        ("ellipse 600 x 0", "not above zero", "0.1 mm to 100 m"),
        ("pipe", "not a pipe", "pipe DN 150 or pipe NPS 6"),
        ("pipe 150", "not a pipe", "pipe DN 150 or pipe NPS 6"),
        ("pipe DN", "not a pipe", "pipe DN 150 or pipe NPS 6"),
        ("pipe DN 126", "DN 126 is not in", "125, 150"),
        ("pipe DN 1000 asme", "DN 1000 is not in ASME B36.10M", "1200"),
        ("pipe DN 90 en", "DN 90 is not in EN 10220", "80, 100"),
        ("pipe NPS 7", "NPS 7 is not in", "6, 8"),
        ("pipe NPS 6 en", "no NPS sizes", "pipe NPS 6"),
        ("pipe DN 125 din", '"din" is not a series', "asme (ASME B36.10M) or en (EN 10220 series 1)"),
        (
            "pipe DN 125",
            "141.3 mm in ASME B36.10M, 139.7 mm in EN 10220",
            "pipe DN 125 asme or pipe DN 125 en",
        ),
        ("pipe DN 20", "26.7 mm in ASME B36.10M, 26.9 mm in EN 10220", "pipe DN 20 asme or pipe DN 20 en"),
    ],
)
def test_what_is_not_a_section_is_refused_with_what_is_allowed(text: object, said: str, allowed: str) -> None:
    with pytest.raises(InputError) as refused:
        parse_section(text)
    (problem,) = refused.value.problems
    assert said in problem.given
    assert allowed in problem.allowed
    assert "\n" not in str(problem)


@given(st.text(max_size=40))
def test_any_text_is_a_section_or_refused(text: str) -> None:
    starts = ("", "round ", "ellipse ", "flat-oval ", "superellipse ", "rectangle ", "measured ", "pipe ")
    for start in (
        *starts,
        "pipe DN ",
        "pipe NPS ",
        "round girth ",
        "ellipse girth 1257 ",
        "measured 0:1 60:1 ",
    ):
        try:
            spec = parse_section(start + text)
        except InputError:
            continue
        assert 0.1 <= spec.width <= 1e5
        assert 0.1 <= spec.height <= 1e5


def test_a_flatter_ellipse_than_one_to_a_thousand_is_refused() -> None:
    assert parse_section("ellipse 1000 x 1").height == 1
    with pytest.raises(InputError, match="flatter than 1 to 1000"):
        parse_section("ellipse 1 x 1000.1")


# ---- by what the trade knows instead -------------------------------------------------------


def ellipse_girth(width: float, height: float) -> float:
    """4 a E(1 − b²/a²) in 30 digits: DLMF 19.30.5."""
    with mp.workdps(30):
        large, small = mp.mpf(max(width, height)), mp.mpf(min(width, height))
        return float(2 * large * mp.ellipe(1 - (small / large) ** 2))


def flat_oval_girth(width: float, height: float) -> float:
    return 2.0 * abs(width - height) + pi * min(width, height)


GIRTHS = {"ellipse": ellipse_girth, "flat-oval": flat_oval_girth}


def ellipse_area(width: float, height: float) -> float:
    return pi * width * height / 4.0


def flat_oval_area(width: float, height: float) -> float:
    small = min(width, height)
    return abs(width - height) * small + pi * small**2 / 4.0


AREAS = {"ellipse": ellipse_area, "flat-oval": flat_oval_area}


@settings(derandomize=True, deadline=None, max_examples=150)
@given(
    st.sampled_from(sorted(GIRTHS)),
    st.floats(1.0, 9e4),
    st.floats(0.00101, 990.0),
    st.sampled_from(["width", "height", "ratio"]),
)
def test_by_girth_and_by_area(kind: str, width: float, ratio: float, word: str) -> None:
    height = width * ratio
    assume(0.11 <= height <= 99_000.0)
    values = {"width": width, "height": height, "ratio": height / width}
    girth, area = GIRTHS[kind](width, height), AREAS[kind](width, height)
    spec = parse_section(f"{kind} girth {girth!r} {word} {values[word]!r}")
    assert GIRTHS[kind](spec.width, spec.height) == pytest.approx(girth, rel=1e-13)
    # A long thin one's small size is only as well known as its share of the girth.
    assert spec.width == pytest.approx(width, rel=1e-11, abs=1e-11 * girth)
    assert spec.height == pytest.approx(height, rel=1e-11, abs=1e-11 * girth)
    assert parse_section(spec.text) == spec
    assert hash(parse_section(spec.text)) == hash(spec)
    spec = parse_section(f"{kind} {word} {values[word]!r} area {area!r}")
    assert AREAS[kind](spec.width, spec.height) == pytest.approx(area, rel=1e-13)
    assert (spec.width, spec.height) == pytest.approx((width, height), rel=1e-11)
    assert parse_section(spec.text) == spec


def test_the_girth_of_the_section_is_the_girth_that_was_given() -> None:
    from develop.sections import section_of

    for text in (
        "round girth 1921", "ellipse girth 1256.6 height 300", "ellipse girth 1256.6 width 450",
        "ellipse girth 1256.6 ratio 0.5", "flat-oval girth 1256.6 height 300", "flat-oval girth 1256.6 height 500",
        "flat-oval ratio 0.001 girth 1256.6", "ellipse ratio 1000 girth 1256.6",
    ):  # fmt: skip
        girth = float(text.partition("girth ")[2].split()[0])
        assert section_of(parse_section(text)).girth == pytest.approx(girth, rel=1e-13), text


def test_the_canonical_text_says_the_sizes_and_what_they_follow_from() -> None:
    # From the doubled half axes 244.32674 and 150: 2 x 488.65348 E(0.62310) = 1256.6, with mpmath.
    assert ellipse_girth(488.65348, 300.0) == pytest.approx(1256.6, abs=1e-4)
    spec = parse_section("ellipse height 30 cm girth 1.2566 m")
    assert spec.text == "ellipse 488.6535 x 300 (girth 1256.6, height 300)"
    assert parse_section("round girth 1921").text == "round 611.4733 (girth 1921)"
    assert parse_section("round girth 1921").outside  # a tape goes round the outside
    assert not parse_section("round area 125000").outside
    assert parse_section("flat-oval girth 24 in ratio 1/2", unit="in").text.endswith(
        "(girth 609.6, ratio 0.5)"
    )
    assert parse_section("rectangle 500 x 300 r 0").text == "rectangle 500 x 300"
    assert parse_section("rectangle 500 x 300 r 1-1/2 in").r == 38.1
    assert parse_section("superellipse 600 x 300 n 2-1/2").text == "superellipse 600 x 300 n 2.5"


def test_an_area_is_in_the_square_of_the_unit() -> None:
    width = 4.0 * 125_000.0 / (pi * 300.0)
    for text in ("area 125000", "area 125000 mm2", "area 0.125 m²", "area 1250 sq cm", "area 1250 cm^2"):
        assert parse_section(f"ellipse {text} height 300").width == pytest.approx(width, rel=1e-15)
    inch = parse_section("round area 100", unit="in")
    assert inch.width == pytest.approx((4.0 * 100.0 / pi) ** 0.5 * 25.4, rel=1e-15)
    assert parse_section("round area 1-1/2 ft2").width == pytest.approx((6.0 / pi) ** 0.5 * 304.8, rel=1e-15)


@pytest.mark.parametrize("kind", sorted(GIRTHS))
@pytest.mark.parametrize(
    "whole", ["girth 1256.6", "area 125000", "girth 0.5", "area 2e9", "width 90 m", "height 0.2"]
)
@pytest.mark.parametrize("word", ["width", "height", "ratio"])
def test_the_range_that_a_refusal_states_is_the_range_that_works(kind: str, whole: str, word: str) -> None:
    if {whole.partition(" ")[0], word} <= {"width", "height"}:
        return  # two sizes: the second is asked to fit the first, tested above
    unit = "" if word == "ratio" else " mm"
    wrong = ("1000", "0.001") if word == "ratio" else ("99999", "0.1001")
    for value in wrong:
        try:
            parse_section(f"{kind} {whole} {word} {value}")
        except InputError as error:
            allowed = error.problems[0].allowed
            low, high = (
                each.removesuffix(" mm") for each in allowed.removeprefix(f"{word} from ").split(" to ")
            )
            assert allowed == f"{word} from {low} to {high}{unit}"
            for end in (low, high):
                spec = parse_section(f"{kind} {whole} {word} {end}{unit}")
                assert 0.0999 <= min(spec.width, spec.height) <= max(spec.width, spec.height) <= 1e5 + 1
            for outside in (float(low) * 0.9999, float(high) * 1.0001):
                with pytest.raises(InputError):
                    parse_section(f"{kind} {whole} {word} {outside!r}{unit}")


def test_importing_the_text_forms_brings_no_numpy() -> None:
    import subprocess
    import sys

    code = "import sys, develop.sections.text; print('numpy' in sys.modules)"
    found = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True)
    assert found.stdout.strip() == "False"
