"""The text form of sections."""

from __future__ import annotations

from fractions import Fraction

import pytest
from hypothesis import assume, given
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
        ("600 x 300", 'did you mean "ellipse 600 x 300"?', "round 400"),
        ("oval 600 x 300", 'did you mean "ellipse 600 x 300"? an oval of two straights', "round 400"),
        ("oval", "not a section; an oval of two straights and two half circles is not made yet", "round 400"),
        ("flat-oval 600 x 300", "not a section; an oval of two straights", "round 400"),
        ("flat oval 600x300", "not a section; an oval of two straights", "round 400"),
        ("elipse 600 x 300", 'did you mean "ellipse"?', "ellipse 600 x 300"),
        ("rectangle 600 x 300", "not a section", "round 400, ellipse 600 x 300 or pipe"),
        ("flat-oval 600 x 300", "not a section", "round 400, ellipse 600 x 300 or pipe"),
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
    for start in ("", "round ", "ellipse ", "pipe DN ", "pipe NPS ", "pipe "):
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
