"""Slip joints: ends that go into their neighbour or over it, and parallel collars on tapers."""

from __future__ import annotations

import json
from dataclasses import replace
from math import hypot, pi

import numpy as np
import pytest

from develop.errors import InputError
from develop.job.pipeline import checks_of, checks_of_all
from develop.job.pipeline import make as write
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from develop.sections.ellipse import Ellipse
from develop.sections.rectangle import Rectangle
from develop.sections.scaled import Scaled
from develop.solid import Frame
from tests.pieces.making import make
from tests.pieces.test_wall import holds, refused

ROUND = {"section": "round 300", "length": 900, "sizes": "inside", "thickness": 0.8}
TAPER = {
    "end_a": "ellipse 600 x 300",
    "end_b": "round 400",
    "length": 450,
    "sizes": "inside",
    "thickness": 0.8,
}
CONE = {"section": "round 800", "height": 1000, "cut_b": "height 600", "sizes": "inside", "thickness": 3}


@pytest.mark.parametrize(("fit", "sign"), [("into", -1.0), ("over", 1.0)])
@pytest.mark.parametrize("sizes", ["inside", "mean", "outside"])
def test_a_slip_joint_needs_unequal_girths(fit: str, sign: float, sizes: str) -> None:
    """By elementary geometry: the wall's own thickness and the clearance on each side; the sheet is a right
    cone, its thickness square to it."""
    built = make("straight", **{**ROUND, "sizes": sizes}, fit_b=fit, clearance=0.7)
    by = 0.8 + 0.7
    lean = 900.0 / hypot(900.0, by)
    out = {"inside": 0.4, "mean": 0.0, "outside": -0.4}[sizes] * lean
    net = built.patterns[0].net
    assert net.curve("a").length == pytest.approx(2.0 * pi * (150.0 + out), rel=1e-12)
    assert net.curve("b").length == pytest.approx(2.0 * pi * (150.0 + sign * by + out), rel=1e-12)
    holds(built)


def test_what_goes_in_has_the_clearance_on_each_side() -> None:
    for section in ("ellipse 600 x 300", "rectangle 500 x 300 r 40", "flat-oval 500 x 250"):
        given = {**ROUND, "section": section}
        into = make("straight", **given, fit_b="into", clearance=0.5).solid.end_b.section
        over = make("straight", **given, fit_a="over", clearance=0.5).solid.end_a.section
        plain = make("straight", **given).solid.end_a.section
        angle = np.linspace(0.0, 2.0 * pi, 400)
        x, y = np.cos(angle), np.sin(angle)
        # Its outside, 0.8 out of its inside, leaves 0.5 to the neighbour's inside all round.
        assert plain.support(x, y) - (into.support(x, y) + 0.8) == pytest.approx(0.5, abs=1e-12)
        # The other way round: its inside, and the neighbour's outside.
        assert over.support(x, y) - (plain.support(x, y) + 0.8) == pytest.approx(0.5, abs=1e-12)


@pytest.mark.parametrize(("thickness", "clear"), [(0.8, 0.5), (2.99, 0.5), (3, 1.0), (10, 1.0)])
def test_the_clearance_when_none_is_given(thickness: float, clear: float) -> None:
    # Common practice, no source.
    (fit,) = make("straight", **{**ROUND, "thickness": thickness}, fit_a="into").patterns[0].wall.fits
    assert fit == ("a", "into", clear, -(thickness + clear))


def test_both_ends_alike_stay_parallel() -> None:
    built = make("straight", **ROUND, fit_a="into", fit_b="into", clearance=0.5)
    net = built.patterns[0].net
    assert net.curve("a").length == pytest.approx(2.0 * pi * (150.0 - 1.3 + 0.4), rel=1e-13)
    assert net.curve("a").length == pytest.approx(net.curve("b").length, rel=1e-14)
    holds(built)


def test_the_sheets_and_the_record_say_the_fit(tmp_path) -> None:
    piece, problems = read_piece(kind_of("straight"), {**ROUND, "fit_b": "into", "clearance": 0.5})
    assert piece is not None, problems
    facts = piece.build().patterns[0].facts
    assert "END B goes into its neighbour: 1.3 smaller on each side" in facts
    assert "(0.8 thick, 0.5 clear)" in facts
    assert any(
        "in" in fact and "0.051 in smaller" in fact for fact in piece.build(units="in").patterns[0].facts
    )
    write(piece, folder=str(tmp_path), formats=("json",))
    record = json.loads((tmp_path / "straight.json").read_text(encoding="utf-8"))
    assert record["fields"]["fit_b"] == "into"
    assert record["patterns"][0]["wall"]["fits"] == [
        {"end": "b", "fit": "into", "clearance": 0.5, "moved": -1.3}
    ]


@pytest.mark.parametrize(
    ("kind", "given", "field", "works"),
    [
        ("straight", {**ROUND, "fit_b": "into", "cut_a": "slope 10 long top"}, "fit_b", "both ends square"),
        ("straight", {**ROUND, "fit_a": "over", "cut_a": "slope 10 long top"}, "fit_a", "both ends square"),
        ("straight", {**ROUND, "clearance": 1}, "clearance", "fit_a or fit_b"),
        ("straight", {**ROUND, "section": "rectangle 300 x 200", "fit_a": "into"}, "fit_a", "over or flush"),
        ("transition", {**TAPER, "end_a": "rectangle 300 x 200", "fit_a": "into"}, "fit_a", "over or flush"),
        ("transition", {**TAPER, "rotate": 10, "collar_b": 50}, "collar_b", "rotate 0"),
        ("cone", {**CONE, "cut_b": "none", "fit_b": "into"}, "fit_b", "a square cut_b"),
        ("cone", {**CONE, "cut_b": "none", "collar_b": 50}, "collar_b", "a square cut_b"),
        ("cone", {**CONE, "cut_b": "height 600 slope 10 long top", "fit_a": "into"}, "fit_a", "square cut_b"),
        ("cone", {**CONE, "cut_b": "height 600 slope 10 long top", "collar_b": 50}, "collar_b", "square cut_b"),
    ],
)  # fmt: skip
def test_what_cannot_be_fitted_is_refused_with_what_works(kind: str, given, field: str, works: str) -> None:
    problem = refused(kind, **given)
    assert problem.field == field
    assert works in problem.allowed


def test_words_that_are_no_fit_are_refused() -> None:
    _, problems = read_piece(kind_of("straight"), {**ROUND, "fit_a": "in to", "clearance": -1})
    assert {problem.field for problem in problems} == {"fit_a", "clearance"}


# ---- on tapers --------------------------------------------------------------------------------


def test_a_tapered_mouth_that_is_to_slip_is_warned_of() -> None:
    built = make("transition", **TAPER, fit_a="into")
    assert len(built.warnings) == 1
    assert "END A tapers by up to" in built.warnings[0]
    assert any(fact.startswith("CAUTION: END A tapers") for fact in built.patterns[0].facts)
    assert make("transition", **TAPER, fit_a="into", collar_a=60).warnings == ()
    # Slight as on a straight it slips.
    assert make("transition", **{**TAPER, "end_a": "round 405"}, fit_a="into").warnings == ()
    assert make("straight", **ROUND, fit_a="into").warnings == ()


def test_a_fitted_end_of_a_cone_is_parallel_to_what_is_cut_off() -> None:
    # Similar figures: at 600 of 1000 the radius is 400 · 2/5; into: 4 mm less; half the wall, square to it.
    built = make("cone", **CONE, fit_b="into", collar_b=80)
    lean = 600.0 / hypot(600.0, 400.0 - 156.0)
    assert built.patterns[0].net.curve("b").length == pytest.approx(
        2.0 * pi * (156.0 + 1.5 * lean), rel=1e-12
    )
    assert built.patterns[1].net.curve("a").length == pytest.approx(2.0 * pi * 157.5, rel=1e-13)
    holds(built)


@pytest.mark.parametrize(
    ("kind", "given"),
    [
        ("transition", {**TAPER, "collar_a": 60, "collar_b": 80}),
        ("transition", {**TAPER, "collar_a": 60, "fit_a": "into", "fit_b": "over", "collar_b": 40,
                        "offset": "30,50", "seam_at": 100, "face": "inside"}),
        ("transition", {**TAPER, "thickness": 8, "edge_cut": "level", "tilt": "slope 12 long 30",
                        "collar_a": 60, "collar_b": 80, "gap": 2, "seam": "butt"}),
        ("transition", {**TAPER, "end_a": "rectangle 500 x 300 r 40", "collar_a": 60, "seam": "lap 20",
                        "edge_a": "hem 10", "sizes": "outside"}),
        ("cone", {**CONE, "apex_offset": "100,50", "collar_a": 60, "collar_b": 80, "sizes": "mean"}),
        ("cone", {**CONE, "cut_b": "height 500 slope 15 long 40", "collar_a": 60, "edge_cut": "level"}),
        ("cone", {**CONE, "section": "ellipse 800 x 500", "fit_a": "over", "fit_b": "into", "collar_a": 50}),
        ("cone", {**CONE, "cut_b": "none", "fit_a": "into", "collar_a": 50}),
        ("cone", {**CONE, "section": "superellipse 800 x 500 n 3", "collar_b": 50}),
        ("straight", {**ROUND, "section": "rectangle 500 x 300 r 40", "fit_a": "into", "seam_at": 30}),
        ("straight", {**ROUND, "section": "measured 0:322 45:326 90:327 135:323", "fit_a": "over"}),
    ],
)  # fmt: skip
def test_every_check_holds_with_fits_and_collars_and_on_the_opposite_hand(kind: str, given) -> None:
    piece, problems = read_piece(kind_of(kind), {**given, "opposite_hand": 1})
    assert piece is not None, problems
    checks = checks_of_all(builds_of(piece))
    assert all(each.holds for each in checks), [each for each in checks if not each.holds]


def test_a_collar_is_a_part_with_its_own_seam_opposite_that_of_the_taper() -> None:
    built = make("transition", **TAPER, collar_a=60, collar_b=80, seam_at=270, quantity=3)
    side, at_a, at_b = built.patterns
    assert [pattern.mark for pattern in built.patterns] == [
        "transition", "transition-collar-a", "transition-collar-b",
    ]  # fmt: skip
    assert {pattern.quantity for pattern in built.patterns} == {3}
    for pattern, length in ((at_a, 60.0), (at_b, 80.0)):
        assert {round(row.length, 9) for row in pattern.divisions} == {length}
        assert np.degrees(pattern.divisions[0].direction) == pytest.approx(90.0, abs=1e-6)
    assert np.degrees(side.divisions[0].direction) == pytest.approx(270.0, abs=1e-6)
    names = [each.name for each in checks_of(built)]
    assert "collar a to side: largest distance of the folded edges" in names
    assert "collar b to side: largest distance of the folded edges" in names


def test_in_the_picture_the_parts_stand_from_end_a_to_end_b() -> None:
    built = make("transition", **TAPER, collar_a=60, collar_b=80)
    low = [float(each.frame.origin[2] + each.solid.end_a.origin[2]) for each in built.placed]
    assert low == pytest.approx([-60.0, 0.0, 450.0])
    assert built.solid is built.parts[0].solid


def test_edges_are_worked_on_the_free_ends_and_gaps_taken_at_the_joints() -> None:
    built = make(
        "transition", **{**TAPER, "thickness": 6}, collar_a=60, trim_a=25, edge_b="flange 20 out", gap=3
    )
    side, collar = built.patterns
    at = {
        pattern.mark: {(each.edge, round(each.width, 9)) for each in pattern.added}
        for pattern in (side, collar)
    }
    assert ("a", 25.0) in at["transition-collar-a"]
    assert ("b", -1.5) in at["transition-collar-a"]
    assert ("a", -1.5) in at["transition"]
    assert ("b", 20.0) in at["transition"]
    assert all(edge != "a" or width < 0 for edge, width in at["transition"])


@pytest.mark.parametrize("number", [1, 2])
def test_a_collar_that_stands_elsewhere_fails_its_joint(number: int) -> None:
    built = make("transition", **TAPER, collar_a=60, collar_b=80)
    parts = list(built.parts)
    (frame,) = parts[number].frames
    parts[number] = replace(parts[number], frames=(Frame(frame.origin + np.array([0.02, 0, 0]), frame.axes),))
    failed = [each.name for each in checks_of(replace(built, parts=tuple(parts))) if not each.holds]
    assert failed == [f"collar {'ab'[number - 1]} to side: largest distance of the folded edges"]


@pytest.mark.parametrize(
    "base", [Ellipse(width=600.0, height=300.0), Rectangle(width=500.0, height=300.0, r=40.0)]
)
def test_a_scaled_section_is_similar(base) -> None:
    other = type(base)(
        **{"width": base.width * 0.4, "height": base.height * 0.4}
        | ({"r": 16.0} if hasattr(base, "r") else {})
    )
    scaled = Scaled(base, 0.4)
    assert scaled.girth == pytest.approx(other.girth, rel=1e-14)
    assert scaled.area == pytest.approx(other.area, rel=1e-14)
    assert scaled.least_radius == pytest.approx(other.least_radius, rel=1e-14)
    angle = np.linspace(0.1, 6.3, 50)
    x, y = np.cos(angle), np.sin(angle)
    assert scaled.support(x, y) == pytest.approx(other.support(x, y), rel=1e-14)
    assert np.stack(scaled.touch(x, y)) == pytest.approx(np.stack(other.touch(x, y)), abs=1e-10)
    arcs = np.linspace(0.0, scaled.girth, 30)
    assert scaled.point(scaled.at_arc(arcs)) == pytest.approx(other.point(other.at_arc(arcs)), abs=1e-9)
    with pytest.raises(InputError):
        scaled.offset(-scaled.least_radius - 1.0)
