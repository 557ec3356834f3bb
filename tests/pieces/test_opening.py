"""Openings in a sloping plate against elementary geometry."""

from __future__ import annotations

from math import atan2, cos, degrees, pi, radians, sin

import numpy as np
import pytest
from scipy.special import ellipe
from shapely.geometry import Polygon

from develop.job.pipeline import checks_of
from tests.pieces.making import make


def opening(**given):
    return make("opening", **{"section": "round 327", "pitch": "5 in 12", **given})


def hole(pattern):
    ((name, curve),) = pattern.openings[0].curves
    assert name == "opening"
    return curve


SECTIONS = ["round 327", "ellipse 600 x 300", "flat-oval 500 x 250", "rectangle 500 x 300", "superellipse 500 x 300 n 4",
            "measured 0:322 45:326 90:327 120:323"]  # fmt: skip


def test_the_hole_for_a_round_is_an_ellipse_longer_up_the_slope() -> None:
    # Elementary: a plane at slope s cuts a cylinder of radius r in an ellipse r by r / cos s.
    pattern = opening(clearance=50).patterns[0]
    slope = atan2(5, 12)
    (x0, y0), (x1, y1) = hole(pattern).bounds()
    assert x1 - x0 == pytest.approx(427, abs=1e-3)
    assert y1 - y0 == pytest.approx(427 / cos(slope), abs=1e-3)
    long, short = 213.5 / cos(slope), 213.5
    assert hole(pattern).length == pytest.approx(4 * long * ellipe(1 - (short / long) ** 2), rel=1e-12)
    assert pattern.openings[0].area == pytest.approx(pi * long * short, rel=1e-12)


def test_the_plate_leaves_the_margin_all_round() -> None:
    pattern = opening(margin=75).patterns[0]
    (x0, y0), (x1, y1) = hole(pattern).bounds()
    wide, high = np.vstack([curve.start for _, curve in pattern.net.curves]).max(axis=0)
    assert [x0, y0, wide - x1, high - y1] == pytest.approx([75] * 4, abs=1e-3)
    assert pattern.net.area == pytest.approx(wide * high, rel=1e-14)


@pytest.mark.parametrize("section", SECTIONS)
@pytest.mark.parametrize("high_side", [90, 30, 200])
def test_the_hole_laid_on_the_slope_is_plumb_over_the_duct_with_its_clearance(
    section: str, high_side: float
) -> None:
    # Turned back onto the slope and looked at from above, the hole is the duct's parallel curve.
    slope = radians(35)
    built = make("opening", section=section, slope=35, high_side=high_side, clearance=20)
    plan = make("opening", section=section, slope=0, high_side=90, clearance=0).parts[0]
    duct = Polygon(hole(plan.pattern).polyline(1e-4) - plan.solid.shift)
    part = built.parts[0]
    flat = hole(part.pattern).polyline(1e-3) - part.solid.shift
    across, up = radians(high_side - 90), radians(high_side)
    x = flat[:, 0] * cos(across) + flat[:, 1] * cos(slope) * cos(up)
    y = flat[:, 0] * sin(across) + flat[:, 1] * cos(slope) * sin(up)
    seen = Polygon(np.stack([x, y], axis=1))
    assert seen.symmetric_difference(duct.buffer(20, quad_segs=720)).area < 3.0
    assert all(check.holds for check in checks_of(built))


def test_marks_say_where_the_ducts_directions_are() -> None:
    pattern = make("opening", section="round 300", slope=30, high_side="right").patterns[0]
    part_centre = np.vstack([mark.at for mark in pattern.marks]).mean(axis=0)
    at = {mark.text: mark.at - part_centre for mark in pattern.marks}
    # Up the slope is the duct's right; then its top lies to the left.
    assert at["RIGHT"] == pytest.approx([0, 150 / cos(radians(30))], abs=1e-9)
    assert at["TOP"] == pytest.approx([-150, 0], abs=1e-9)
    assert pattern.arrow == "UP"


def test_centre_lines_run_from_the_hole_to_the_edge_through_the_axis() -> None:
    pattern = make("opening", section="rectangle 500 x 300", slope=20, high_side=70).patterns[0]
    assert len(pattern.dashed) == 4
    ends = np.array([(line.start, line.end) for line in pattern.dashed])
    level = [line for line in ends if abs(line[0, 1] - line[1, 1]) < 1e-9]
    upright = [line for line in ends if abs(line[0, 0] - line[1, 0]) < 1e-9]
    assert len(level) == len(upright) == 2
    assert level[0][0, 1] == pytest.approx(level[1][0, 1], abs=1e-9)
    assert upright[0][0, 0] == pytest.approx(upright[1][0, 0], abs=1e-9)


@pytest.mark.parametrize(
    ("pitch", "slope"), [("5 in 12", 22.6198649), ("5:12", 22.6198649), ("12 in 12", 45)]
)
def test_slope_and_pitch_are_both_said(pitch: str, slope: float) -> None:
    by_pitch = opening(pitch=pitch).patterns[0]
    by_slope = make("opening", section="round 327", slope=slope).patterns[0]
    assert hole(by_pitch).length == pytest.approx(hole(by_slope).length, rel=1e-8)
    words = next(fact for fact in by_pitch.facts if "slope" in fact)
    assert f"slope {round(slope, 3):g}°" in words
    rise = pitch.replace(":", " ").split()[0]
    assert f"pitch {rise} in 12" in words


def test_the_collar_stands_on_the_plate_as_high_as_asked_at_the_high_side() -> None:
    built = opening(clearance=50, collar=150, high_side="left")
    plate, collar = built.patterns
    assert (plate.mark, collar.mark) == ("opening-plate", "opening-collar")
    r, rise = 213.5, 5 / 12
    for row in collar.divisions:
        # Elementary: the plate falls by r tan s (1 - cos) from its high side.
        expected = 150 + r * rise * (1 - cos(row.direction - pi))
        assert row.length == pytest.approx(expected, abs=1e-9)
    assert degrees(collar.divisions[0].direction) == pytest.approx(180)
    assert collar.net.curve("a").length == pytest.approx(hole(plate).length, rel=1e-12)
    assert collar.net.curve("b").length == pytest.approx(2 * pi * r, rel=1e-12)


@pytest.mark.parametrize("section", SECTIONS)
@pytest.mark.parametrize("thickness", [0, 3])
def test_the_collar_meets_the_hole_in_space(section: str, thickness: float) -> None:
    built = opening(section=section, clearance=30, collar=80, high_side=30, thickness=thickness)
    checks = checks_of(built)
    joint = [check for check in checks if check.name.startswith("collar to plate")]
    assert len(joint) == (2 if thickness == 0 else 1)
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]


def test_a_thick_collar_is_developed_on_its_neutral_line_outside_the_hole() -> None:
    built = opening(clearance=0, collar=80, thickness=2)
    assert built.patterns[1].net.curve("b").length == pytest.approx(pi * 329, rel=1e-12)


def test_a_collar_turned_on_the_plate_fails_its_joint() -> None:
    from dataclasses import replace

    from develop.solid import Frame

    built = opening(section="ellipse 600 x 300", collar=80)
    part = built.parts[1]
    wrong = replace(part, frames=(Frame.square(rotate=0.05),))
    failing = [check for check in checks_of(replace(built, parts=(built.parts[0], wrong))) if not check.holds]
    assert any("distance" in check.name for check in failing)


@pytest.mark.parametrize(
    ("given", "field"),
    [
        ({"pitch": "steep"}, "pitch"),
        ({"pitch": "5 in 0"}, "pitch"),
        ({"pitch": "-5 in 12"}, "pitch"),
        ({"pitch": "500 in 12"}, "pitch"),
        ({"pitch": "5 in 12", "slope": 20}, "slope"),
        ({"slope": 89}, "slope"),
    ],
)
def test_slopes_that_are_none_are_refused(given, field: str) -> None:
    from develop.pieces import kind_of
    from develop.pieces.fields import read_piece

    piece, problems = read_piece(kind_of("opening"), {"section": "round 300", **given})
    assert piece is None
    assert field in {problem.field for problem in problems}


def test_a_flat_roof_is_allowed() -> None:
    pattern = make("opening", section="round 300").patterns[0]
    assert hole(pattern).length == pytest.approx(300 * pi, rel=1e-13)
