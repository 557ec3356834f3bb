"""Sections from diameters, against curves whose widths are known in closed form, and scipy's fit."""

from __future__ import annotations

from itertools import pairwise
from math import cos, pi, radians, sin

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import least_squares

from develop.errors import InputError, Refusal
from develop.sections import section_of
from develop.sections.ellipse import Ellipse
from develop.sections.measured import Smooth, fitted
from develop.sections.rectangle import Rectangle
from develop.sections.section import Section
from develop.sections.text import SectionSpec, parse_section
from develop.sections.turned import Turned
from tests.sections.agreement import assert_agrees, assert_parallel

QUARTERS = (0.0, 45.0, 90.0, 135.0)


def ellipse_width(width: float, height: float, turned: float, direction: float) -> float:
    """Distance of the two tangent lines square to a direction, of a turned ellipse (degrees)."""
    phi = radians(direction - turned)
    return ((width * cos(phi)) ** 2 + (height * sin(phi)) ** 2) ** 0.5


def measured(directions: tuple[float, ...], diameters: list[float], fit: str = "") -> SectionSpec:
    readings = " ".join(f"{d}:{s!r}" for d, s in zip(directions, diameters, strict=True))
    return parse_section(f"measured {readings} {fit}")


def widths(section: Section, directions: tuple[float, ...]) -> list[float]:
    phi = np.radians(directions)
    c, s = np.cos(phi), np.sin(phi)
    return (section.support(c, s) + section.support(-c, -s)).tolist()


@settings(derandomize=True, deadline=None, max_examples=60)
@given(st.floats(100.0, 1000.0), st.floats(0.4, 1.0), st.floats(-90.0, 90.0), st.integers(3, 9))
def test_an_ellipse_is_found_again(width: float, ratio: float, turned: float, count: int) -> None:
    height = ratio * width
    directions = tuple(180.0 * k / count for k in range(count))
    spec = measured(directions, [ellipse_width(width, height, turned, d) for d in directions], "ellipse")
    section = section_of(spec)
    assert spec.taped is not None
    assert spec.taped.largest_residual < 1e-10 * width
    with mp.workdps(30):
        girth = 2 * mp.mpf(width) * mp.ellipe(1 - (mp.mpf(height) / mp.mpf(width)) ** 2)
    assert section.girth == pytest.approx(float(girth), rel=1e-12)
    assert section.area == pytest.approx(pi * width * height / 4.0, rel=1e-12)
    every = tuple(range(0, 180, 7))
    expected = [ellipse_width(width, height, turned, d) for d in every]
    assert widths(section, every) == pytest.approx(expected, abs=1e-11 * width)
    assert (spec.width, spec.height) == (section.width, section.height)


def test_least_squares_on_the_widths_themselves() -> None:
    diameters = np.array([322.0, 327.5, 327.0, 321.0, 325.0])
    directions = (0.0, 40.0, 85.0, 130.0, 160.0)
    phi = np.radians(directions)

    def residuals(p: np.ndarray) -> np.ndarray:
        return diameters - np.sqrt((p[0] * np.cos(phi - p[2])) ** 2 + (p[1] * np.sin(phi - p[2])) ** 2)

    best = least_squares(residuals, [325.0, 322.0, 0.7], xtol=1e-15, ftol=1e-15, gtol=1e-15)
    spec = measured(directions, diameters.tolist(), "ellipse")
    assert spec.taped is not None
    assert spec.taped.residuals == pytest.approx(best.fun.tolist(), abs=1e-6)
    assert sum(r * r for r in spec.taped.residuals) <= 2.0 * best.cost * (1.0 + 1e-12)
    assert spec.taped.largest_residual == max(map(abs, spec.taped.residuals)) > 0.3


def test_what_reads_alike_all_round_is_round() -> None:
    spec = measured(QUARTERS, [325.0] * 4)
    section = section_of(spec)
    assert section.girth == pytest.approx(325.0 * pi, rel=1e-14)
    assert section.least_radius == pytest.approx(162.5, rel=1e-13)


def test_a_flue_taped_at_322_to_327() -> None:
    spec = parse_section("measured 0:322 45:326 90:327 135:323")
    assert spec.text == "measured 0:322 45:326 90:327 135:323 ellipse"
    section = section_of(spec)
    # The mean of four evenly spaced diameters times π is the girth but for harmonics from the 8th.
    assert section.girth == pytest.approx(pi * (322 + 326 + 327 + 323) / 4, abs=0.01)
    assert 322.0 * pi < section.girth < 327.0 * pi
    assert_agrees(section)
    assert_parallel(section, -5.0)
    assert_parallel(section, 50.0)


# ---- the smooth curve ----------------------------------------------------------------------

TWELVE = tuple(15.0 * k for k in range(12))


def series(coefficients: list[float], direction: float) -> float:
    """h at a direction [deg] of c0, a1, b1, a2, b2 ... in 2φ, 4φ ..."""
    phi, total = radians(direction), coefficients[0]
    for k, (a, b) in enumerate(zip(coefficients[1::2], coefficients[2::2], strict=True), 1):
        total += a * cos(2 * k * phi) + b * sin(2 * k * phi)
    return total


def test_a_smooth_curve_is_found_again() -> None:
    given_ = [162.0, 3.0, -1.0, 0.4, 0.3, -0.1, 0.05]
    spec = measured(TWELVE, [2.0 * series(given_, d) for d in TWELVE])
    assert spec.taped is not None
    assert spec.taped.fit == "smooth"
    assert spec.taped.curve[:7] == pytest.approx(given_, abs=1e-11)
    assert spec.taped.largest_residual < 1e-10
    section = section_of(spec)
    assert section.girth == pytest.approx(2.0 * pi * 162.0, rel=1e-13)  # Cauchy
    with mp.workdps(30):
        area = mp.quad(
            lambda t: (
                (162 + 3 * mp.cos(2 * t) - mp.sin(2 * t) + mp.mpf("0.4") * mp.cos(4 * t) + mp.mpf("0.3") * mp.sin(4 * t)
                 - mp.mpf("0.1") * mp.cos(6 * t) + mp.mpf("0.05") * mp.sin(6 * t)) ** 2
                - (-6 * mp.sin(2 * t) - 2 * mp.cos(2 * t) - mp.mpf("1.6") * mp.sin(4 * t) + mp.mpf("1.2") * mp.cos(4 * t)
                   + mp.mpf("0.6") * mp.sin(6 * t) + mp.mpf("0.3") * mp.cos(6 * t)) ** 2
            ) / 2,
            mp.linspace(0, 2 * mp.pi, 9),
        )  # fmt: skip
    assert section.area == pytest.approx(float(area), rel=1e-12)
    assert_agrees(section)
    assert_parallel(section, 6.0)
    assert_parallel(section, -section.least_radius * 0.9)


def test_odd_harmonics_cannot_be_seen_and_are_not_invented() -> None:
    """A curve of constant width 300 that is not round reads 300 everywhere: it becomes the circle."""
    support = [150.0 + 8.0 * cos(3.0 * radians(d)) for d in TWELVE]
    opposite = [150.0 + 8.0 * cos(3.0 * radians(d + 180.0)) for d in TWELVE]
    spec = measured(TWELVE, [a + b for a, b in zip(support, opposite, strict=True)])
    section = section_of(spec)
    # Barbier: every curve of constant width has the girth of the circle.
    assert section.girth == pytest.approx(300.0 * pi, rel=1e-13)
    assert section.least_radius == pytest.approx(150.0, rel=1e-10)


@pytest.mark.parametrize("seed", range(6))
def test_the_number_of_harmonics_foretells_each_reading_best_from_the_others(seed: int) -> None:
    """Against leaving the readings out one by one, really, with numpy's least squares."""
    noise = np.random.default_rng(seed).normal(0.0, 0.4, len(TWELVE))
    true = [200.0, 2.5, 1.0, 0.5 * (seed % 3), 0.0]
    diameters = np.array([2.0 * series(true, d) for d in TWELVE]) + noise
    phi = np.radians(TWELVE)
    errors = {}
    for harmonics in range(1, 4):
        columns = [np.ones(12)]
        for k in range(1, harmonics + 1):
            columns += [np.cos(2 * k * phi), np.sin(2 * k * phi)]
        design = np.stack(columns, axis=-1)
        misses = []
        for out in range(12):
            keep = np.arange(12) != out
            found = np.linalg.lstsq(design[keep], diameters[keep], rcond=None)[0]
            misses.append(diameters[out] - design[out] @ found)
        errors[harmonics] = float(np.mean(np.square(misses)))
    best = min(errors, key=errors.__getitem__)
    curve, residuals = fitted(TWELVE, diameters.tolist(), "smooth")
    assert len(curve) == 1 + 2 * best
    assert np.sum(np.square(residuals)) > 0.0


@pytest.mark.parametrize("seed", range(8))
def test_errors_of_reading_alone_do_not_make_a_pipe_hollow(seed: int) -> None:
    """36 readings of an oval pipe, a millimetre loose: harmonics to the 34th would be hollow."""
    directions = tuple(5.0 * k for k in range(36))
    noise = np.random.default_rng(seed).normal(0.0, 1.0, 36)
    diameters = [
        round(ellipse_width(330.0, 320.0, 25.0, d) + e) for d, e in zip(directions, noise, strict=True)
    ]
    section = section_of(measured(directions, [float(d) for d in diameters]))
    assert section.least_radius > 0.0
    # The girth's own error is π/6 of one reading's, by the mean of 36.
    exact = pi * 325.0 * (1.0 + (5.0 / 325.0) ** 2 / 4.0)
    assert section.girth == pytest.approx(exact, abs=4.0 * pi * 1.04 / 6.0)


def test_a_wide_gap_carries_no_waves_shorter_than_itself() -> None:
    # Eleven readings, but 60 degrees without one: waves of 180 / K degrees with two readings on each.
    directions = (*(12.0 * k for k in range(11)),)
    true = [200.0, 2.0, 0.0, 0.0, 1.5]
    curve, _ = fitted(directions, [2.0 * series(true, d) for d in directions], "smooth")
    assert len(curve) == 3


def test_the_words_ellipse_and_smooth_and_the_default() -> None:
    readings = "0:320 36:322 72:325 108:324 144:321"
    five, four = parse_section(f"measured {readings}"), parse_section("measured 0:320 45:322 90:325 135:324")
    assert five.taped is not None
    assert four.taped is not None
    assert (five.taped.fit, four.taped.fit) == ("smooth", "ellipse")
    other = parse_section(f"measured {readings} Ellipse")
    assert other.taped is not None
    assert other.taped.fit == "ellipse"
    three = parse_section("measured 0:320 60:322 120:325 smooth")
    assert three.taped is not None
    assert three.taped.largest_residual < 1e-10


def test_directions_are_of_half_a_turn_and_sorted() -> None:
    one = parse_section("measured 0:322 45:326 90:327 135:323")
    assert parse_section("measured 315:323, -90 : 327 mm; 225°: 32.6 cm 180:322 ellipse") == one
    assert parse_section(one.text) == one
    inch = parse_section("measured 0:12-3/4 45:12-7/8 in 90:327 mm 135: 323mm", unit="in")
    assert inch.taped is not None
    assert inch.taped.diameters == (323.85, 327.025, 327.0, 323.0)


@pytest.mark.parametrize(
    ("text", "said", "allowed"),
    [
        ("measured", "not a list of diameters", "0:322 45:326"),
        ("measured 322 326", "not a list of diameters", "0:322 45:326"),
        ("measured 0:322", "1 reading", "3 to 72 readings"),
        ("measured 0:322 90:326", "2 readings", "ellipse 600 x 300"),
        ("measured 0:322 45:326 90:327 225:326", "two readings at 45 degrees", "same diameter"),
        ("measured 0:322 45:326 90:327 179.8:322", "two readings at 179.8 degrees", "same diameter"),
        ("measured 0:322 30:326 60:327", "leaves 120 degrees from 60 to 0", "at most 90 degrees apart"),
        ("measured 0:322 45:326 90:327 135:0", "not above zero", "0.1 mm to 100 m"),
        ("measured 0:322 45:326 90:327 135:-3", "not above zero", "0.1 mm to 100 m"),
        ("measured 0:322 45:326 90:327 135:x", "not a length", "0.1 mm to 100 m"),
        ("measured 0:322 45:326 90:327 135:", "empty", "0.1 mm to 100 m"),
        ("measured 0:322 45:326 90:327 135:323 elipse", 'did you mean "ellipse"?', "ellipse or smooth"),
        ("measured 0:322 45:326 90:327 400:323", "more than a full turn", "degrees"),
        ("measured 0:322 45:326 90:32 135:323", "the reading 90:32 is", "measure again at 90"),
        ("measured 0:400 22.5:350 45:300 67.5:350 90:400 112.5:350 135:300 157.5:350", "hollow near", "measure again"),
    ],
)  # fmt: skip
def test_what_is_refused(text: str, said: str, allowed: str) -> None:
    with pytest.raises(InputError) as refused:
        parse_section(text)
    (problem,) = refused.value.problems
    assert said in problem.given
    assert allowed in problem.allowed
    assert "\n" not in str(problem)


def test_a_hollow_curve_is_refused_just_where_the_radius_turns_negative() -> None:
    # h = 100 + a cos 4φ has ρ = 100 − 15 a cos 4φ: convex up to a = 100 / 15.
    limit = 100.0 / 15.0
    almost = Smooth([100.0, 0.0, 0.0, limit * (1.0 - 1e-9), 0.0])
    assert 0.0 < almost.least_radius < 1e-6
    with pytest.raises(ValueError, match=r"hollow near (0|90) degrees"):
        Smooth([100.0, 0.0, 0.0, limit * (1.0 + 1e-9), 0.0])
    with pytest.raises(Refusal, match="tightest radius"):
        almost.offset(-0.001)


# ---- turned --------------------------------------------------------------------------------


@pytest.mark.parametrize("angle", [0.3, -1.2, 0.5 * pi, pi, 4.0])
@pytest.mark.parametrize(
    "base",
    [
        Ellipse(width=600.0, height=300.0),
        Rectangle(width=500.0, height=300.0, r=40.0),
        Rectangle(width=500.0, height=300.0, r=0.0),
    ],
    ids=["ellipse", "rectangle", "sharp"],
)
def test_a_turned_section_is_the_same_turned(base: Section, angle: float) -> None:
    section = Turned(base, angle)
    assert_agrees(section)
    assert_parallel(section, 10.0)
    assert_agrees(section.offset(10.0))
    c, s = cos(angle), sin(angle)
    direction = np.linspace(0.0, 6.0, 25)
    mine = section.point(section.at_direction(direction))
    yours = base.point(base.at_direction(direction - angle))
    turned = np.stack([c * yours[:, 0] - s * yours[:, 1], s * yours[:, 0] + c * yours[:, 1]], axis=-1)
    assert np.abs(mine - turned).max() < 1e-9
    arcs = section.arc(section.at_direction(direction))
    assert all(one < other for one, other in pairwise(arcs))
    assert arcs[0] == pytest.approx(0.0, abs=1e-9)
