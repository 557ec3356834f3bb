"""Thickness: linings, published rules for the neutral line, edges square or level, on every kind."""

from __future__ import annotations

import json
from dataclasses import replace
from math import atan2, cos, degrees, hypot, pi, sin, sqrt

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq
from scipy.special import ellipe

from develop.checks import check
from develop.checks.fold import folded
from develop.errors import InputError, Refusal
from develop.job.pipeline import checks_of, checks_of_all
from develop.job.pipeline import make as write
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from develop.pieces.rule_types import BEND_RULES, NEUTRAL
from develop.tables.bend_allowance import bend_rules
from tests.pieces.making import make

ELLIPSE = 4.0 * 300.0 * float(ellipe(1.0 - 0.25))  # girth of 600 x 300, DLMF 19.30.5
DUCT = {"section": "ellipse 600 x 300", "length": 800, "sizes": "inside"}
TAPER = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "sizes": "inside"}
CONE = {"section": "round 2400", "height": 1120, "cut_b": "height 700", "sizes": "inside", "thickness": 16}


def refused(kind: str, **given: object):
    with pytest.raises(InputError) as error:
        make(kind, **given)
    (problem,) = error.value.problems
    return problem


def holds(built) -> None:
    checks = checks_of(built)
    assert all(each.holds for each in checks), [each for each in checks if not each.holds]


def record_of_files(tmp_path, kind: str, **given: object) -> dict:
    piece, problems = read_piece(kind_of(kind), given)
    assert piece is not None, problems
    write(piece, folder=str(tmp_path), formats=("json",))
    return json.loads((tmp_path / f"{piece.mark}.json").read_text(encoding="utf-8"))


# ---- inside, outside, lining -------------------------------------------------------------------


def test_a_10_mm_plate_rolled_to_an_inside_ellipse_closes() -> None:
    # Steiner: the line 5 mm outside of the ellipse is 2 π 5 longer than it.
    built = make("straight", **DUCT, thickness=10)
    assert built.patterns[0].net.curve("a").length == pytest.approx(ELLIPSE + 10.0 * pi, rel=1e-13)
    holds(built)


@pytest.mark.parametrize("lining", [1, 25, 50.5])
def test_inside_a_lining_the_wall_is_a_true_parallel_farther_out(lining: float) -> None:
    built = make("straight", **DUCT, thickness=0.8, lining=lining)
    # Steiner again: lining and half the thickness.
    out = lining + 0.4
    assert built.patterns[0].net.curve("a").length == pytest.approx(ELLIPSE + 2.0 * pi * out, rel=1e-13)
    # Not an ellipse with longer axes, which is shorter.
    a, b = 300.0 + out, 150.0 + out
    assert 4.0 * a * float(ellipe(1.0 - (b / a) ** 2)) < built.patterns[0].net.curve("a").length - 1e-3
    holds(built)


def test_the_sheet_says_the_clear_size_and_the_duct(tmp_path) -> None:
    facts = make("straight", **DUCT, thickness=0.8, lining=25).patterns[0].facts
    assert "clear inside the lining of 25, duct 650 x 350 inside" in facts
    record = record_of_files(tmp_path, "straight", **DUCT, thickness=0.8, lining=25)
    assert record["fields"]["lining"] == 25.0
    assert record["patterns"][0]["wall"]["lining"] == 25.0


@pytest.mark.parametrize("sizes", ["outside", "mean"])
@pytest.mark.parametrize("kind", ["straight", "transition", "bend"])
def test_a_lining_wants_sizes_inside(kind: str, sizes: str) -> None:
    problem = refused(kind, **{**kind_of(kind).example, "sizes": sizes, "thickness": 1, "lining": 10})
    assert problem.field == "lining"
    assert "sizes = inside" in problem.allowed
    make(kind, **{**kind_of(kind).example, "sizes": "inside", "thickness": 1, "lining": 10})


@pytest.mark.parametrize("kind", ["straight", "bend", "offset", "cone", "transition", "branch"])
def test_every_kind_with_a_lining_and_a_rule_holds_its_checks(kind: str) -> None:
    given = {**kind_of(kind).example, "sizes": "inside", "thickness": 2, "lining": 20, "neutral_line": "hard"}
    if kind == "bend":
        given["throat_radius"] = 500
    built = make(kind, **given)
    holds(built)
    assert all(any("lining of 20" in fact for fact in pattern.facts) for pattern in built.patterns)


def test_a_pipe_in_a_lining_stays_its_outside() -> None:
    built = make("straight", section="pipe DN 200", length=500, sizes="inside", thickness=6, lining=10)
    # 219.1 outside: EN 10220 and ASME B36.10M; less half the wall on each side.
    assert built.patterns[0].net.curve("a").length == pytest.approx(pi * (219.1 - 6.0), rel=1e-13)


# ---- the neutral line by a rule -------------------------------------------------------------------


def test_the_rules_of_the_field_are_those_of_the_table() -> None:
    assert tuple(bend_rules()) == BEND_RULES
    assert NEUTRAL.read("Half hard", unit="mm") == "half-hard"
    assert NEUTRAL.read("0.4", unit="mm") == NEUTRAL.read(0.4, unit="mm") == 0.4


@pytest.mark.parametrize("wrong", ["haf-hard", "softest", 1.01, -0.1, "2", "", None, [], True, "nan"])
def test_what_is_neither_a_place_nor_a_rule_is_refused(wrong: object) -> None:
    with pytest.raises(InputError) as error:
        NEUTRAL.read(wrong, unit="mm")
    assert "0 to 1" in str(error.value)
    assert "by-radius" in str(error.value)


@pytest.mark.parametrize(("rule", "per_thickness"), [("soft", 0.55), ("half-hard", 0.64), ("hard", 0.71)])
def test_a_box_of_four_bends_takes_what_the_handbook_gives(rule: str, per_thickness: float) -> None:
    # Machinery's Handbook, 31st edition, p. 1421: a 90° bend takes (0.55, 0.64, 0.71) T + 1.57 R; π/2 for 1.57.
    # 0.64 read in a copy, the others from memory.
    built = make(
        "straight",
        section="rectangle 500 x 300 r 6",
        length=400,
        sizes="inside",
        thickness=3,
        neutral_line=rule,
    )
    flats = 2.0 * (488.0 + 288.0)
    bend = per_thickness * 3.0 + pi / 2.0 * 6.0
    assert built.patterns[0].net.curve("a").length == pytest.approx(flats + 4.0 * bend, rel=1e-13)
    holds(built)


def test_round_an_ellipse_the_rule_is_summed_by_turn() -> None:
    # ∮ (ρ + p(ρ) t) dφ with p = 0.33 below ρ = 2 t and 0.5 above (rule from memory), by quad.
    t, a, b = 2.0, 300.0, 20.0

    def radius(phi: float) -> float:
        return (a * b) ** 2 / sqrt((a * cos(phi)) ** 2 + (b * sin(phi)) ** 2) ** 3

    change = brentq(lambda phi: radius(phi) - 2.0 * t, 0.0, pi / 2.0, xtol=1e-15)
    inside = 4.0 * quad(radius, 0.0, pi / 2.0, epsabs=0, epsrel=1e-12, limit=500)[0]
    girth = inside + 4.0 * t * (0.33 * change + 0.5 * (pi / 2.0 - change))
    given = {"section": "ellipse 600 x 40", "length": 500, "sizes": "inside", "thickness": t}
    pattern = make("straight", **given, neutral_line="by-radius").patterns[0]
    assert pattern.net.curve("a").length == pytest.approx(girth, rel=1e-10)
    assert pattern.wall.neutral_line == pytest.approx(
        (0.33 * change + 0.5 * (pi / 2.0 - change)) / (pi / 2.0), rel=1e-10
    )
    assert pattern.wall.places == (0.33, 0.5)
    assert any("0.33 to 0.5 round the section: their mean by turn" in fact for fact in pattern.facts)
    holds(make("straight", **given, neutral_line="by-radius"))


@pytest.mark.parametrize(("r", "place"), [(3.9, 0.33), (4, 0.5), (40, 0.5)])
def test_where_all_bends_are_alike_the_rule_has_one_place(r: float, place: float) -> None:
    given = {"section": f"rectangle 500 x 300 r {r}", "length": 400, "sizes": "inside", "thickness": 2}
    wall = make("straight", **given, neutral_line="by-radius").patterns[0].wall
    assert wall.neutral_line == place
    assert wall.places == (place, place)


def test_on_a_taper_it_is_the_mean_of_both_ends() -> None:
    # All of end A's turn is in corners of no radius, all of end B's at 200 mm and more.
    built = make(
        "transition", **{**TAPER, "end_a": "rectangle 600 x 300"}, thickness=6, neutral_line="by-radius"
    )
    assert built.patterns[0].wall.neutral_line == pytest.approx(0.5 * (0.33 + 0.5), rel=1e-12)
    holds(built)


def test_a_rule_needs_a_thickness() -> None:
    assert refused("straight", **DUCT, neutral_line="soft").field == "neutral_line"


def test_the_record_has_the_rule_its_place_and_its_source(tmp_path) -> None:
    record = record_of_files(tmp_path, "straight", **DUCT, thickness=3, neutral_line="half hard")
    assert record["fields"]["neutral_line"] == "half-hard"
    wall = record["patterns"][0]["wall"]
    assert wall["neutral_line"] == pytest.approx(0.64 / (pi / 2.0), rel=1e-14)
    assert (wall["rule"], wall["edge_cut"], wall["fits"]) == ("half-hard", "square", [])
    assert "Machinery's Handbook" in wall["source"]
    plain = record_of_files(tmp_path, "straight", **DUCT, thickness=3)
    assert "wall" not in plain["patterns"][0]


@pytest.mark.parametrize(
    ("end_a", "end_b", "thickness"),
    [
        ("rectangle 600 x 300 r 30", "rectangle 300 x 200", 0),
        ("flat-oval 600 x 300", "flat-oval 500 x 200", 2),
        ("rectangle 600 x 300", "rectangle 300 x 200", 6),
        ("rectangle 600 x 300", "round 400", 6),
    ],
)
@pytest.mark.parametrize("face", ["outside", "inside"])
def test_lines_of_flat_faces_and_of_thick_corners_are_told_apart(end_a, end_b, thickness, face) -> None:
    # Their lines have one normal, or start in one direction: the checks must compare the same ones.
    given = {"end_a": end_a, "end_b": end_b, "length": 450, "sizes": "inside", "face": face}
    holds(make("transition", **given, thickness=thickness))


# ---- edges square and level -------------------------------------------------------------------


@pytest.mark.parametrize(("edge_cut", "power"), [("square", 1), ("level", -1)])
@pytest.mark.parametrize("kind", ["cone", "transition"])
def test_the_cone_2400_to_900_in_16_mm_plate(kind: str, edge_cut: str, power: int) -> None:
    """Elementary geometry: mid-plate is a right cone too, 8 mm off square to the plate. Square edges lie
    8 cos ψ, level ones 8 / cos ψ farther from the axis; flat, both edges are arcs about one point."""
    given = CONE if kind == "cone" else {
        "end_a": "round 2400", "end_b": "round 900", "length": 700, "sizes": "inside", "thickness": 16,
    }  # fmt: skip
    built = make(kind, **given, edge_cut=edge_cut)
    net = built.patterns[0].net
    slant = hypot(750.0, 700.0)
    lean = 700.0 / slant
    radii = [radius + 8.0 * lean**power for radius in (1200.0, 450.0)]
    for end, radius in zip("ab", radii, strict=True):
        assert net.curve(end).length == pytest.approx(2.0 * pi * radius, rel=1e-12)
    # The seams meet in the centre of the sector, at the slant heights of mid-plate.
    left, right = net.curve("seam_left"), net.curve("seam_right")
    along, back = left.end - left.start, right.end - right.start
    share = np.linalg.solve(np.column_stack([along, -back]), right.start - left.start)[0]
    centre = left.start + share * along
    for end, radius in zip("ab", radii, strict=True):
        far = np.hypot(*(net.curve(end).polyline(0.001) - centre).T)
        assert far == pytest.approx(np.full(len(far), radius * slant / 750.0), abs=2e-3)
    holds(built)


def test_what_forgetting_it_costs_on_that_cone() -> None:
    # Thickness laid in the plane of the end: 2 π (1200 + 8).
    parallel = 2.0 * pi * 1208.0
    square = make("cone", **CONE).patterns[0].net.curve("a").length
    level = make("cone", **CONE, edge_cut="level").patterns[0].net.curve("a").length
    assert parallel - square == pytest.approx(16.0, abs=0.05)
    assert level - parallel == pytest.approx(23.4, abs=0.05)


@pytest.mark.parametrize("sizes", ["inside", "outside"])
def test_level_edges_have_the_support_of_their_plane(sizes: str) -> None:
    """Concentric ellipses in parallel planes: equal normals, sin ψ = −Δh / √(Δh² + H²). Cauchy's formula
    with the support h + d / cos ψ, summed by the trapezoidal rule."""
    built = make(
        "transition", end_a="ellipse 600 x 300", end_b="ellipse 350 x 400", length=300, sizes=sizes,
        thickness=12, edge_cut="level",
    )  # fmt: skip
    d = 6.0 if sizes == "inside" else -6.0
    phi = np.arange(4096) * 2.0 * pi / 4096
    h = [np.hypot(w / 2 * np.cos(phi), t / 2 * np.sin(phi)) for w, t in ((600, 300), (350, 400))]
    apart = h[1] - h[0]
    lean = 300.0 / np.hypot(apart, 300.0)
    for end, support in zip("ab", h, strict=True):
        girth = 2.0 * pi * float(np.mean(support + d / lean))
        assert built.patterns[0].net.curve(end).length == pytest.approx(girth, rel=1e-12)
    holds(built)
    # Folded up, the edges lie in the two planes.
    a, b, _ = folded(built.patterns[0], built.solid)
    assert np.abs(a[:, 2]).max() < 0.005
    assert np.abs(b[:, 2] - 300.0).max() < 0.005


@pytest.mark.parametrize(
    ("kind", "more"),
    [
        ("transition", {"tilt": "slope 15 long 40", "rotate": 20, "offset": "0,50"}),
        ("transition", {"end_b": "superellipse 300 x 300 n 3", "face": "inside", "sizes": "outside"}),
        ("transition", {"end_b": "ellipse 300 x 400", "face": "inside", "neutral_line": "hard"}),
        ("transition", {"end_a": "flat-oval 600 x 300", "end_b": "flat-oval 300 x 600", "sizes": "outside"}),
        ("transition", {"end_a": "rectangle 600 x 300 r 40", "end_b": "rectangle 400 x 200 r 30"}),
        ("cone", {"cut_b": "height 500 slope 20 long 30", "section": "ellipse 600 x 400", "height": 900}),
        ("cone", {"cut_b": "height 500 slope 20 long 30", "section": "rectangle 600 x 400", "height": 900}),
        ("cone", {"cut_b": None, "apex_offset": "100,50"}),
    ],
)
def test_every_check_holds_with_level_edges_and_on_the_opposite_hand(kind: str, more) -> None:
    given = {**(TAPER if kind == "transition" else CONE), "thickness": 8, "edge_cut": "level", **more}
    given = {key: value for key, value in given.items() if value is not None}
    piece, problems = read_piece(kind_of(kind), {**given, "opposite_hand": 1})
    assert piece is not None, problems
    checks = checks_of_all(builds_of(piece))
    assert all(each.holds for each in checks), [each for each in checks if not each.holds]


def test_square_edges_taken_for_level_do_not_pass_and_the_other_way_round() -> None:
    for cut, other in (("level", False), ("square", True)):
        built = make("transition", **TAPER, thickness=8, edge_cut=cut)
        found = {c.name for c in check(built.patterns[0], replace(built.solid, level=other)) if not c.holds}
        assert "edge at END A against the girth" in found
        assert "area against the finished side" in found
        assert any("closing check" in name for name in found)


def test_level_edges_on_the_surface_of_the_sizes_are_the_rims() -> None:
    square, level = (
        make("transition", **{**TAPER, "sizes": "mean"}, thickness=8, edge_cut=cut)
        for cut in ("square", "level")
    )
    for name in ("a", "b", "seam_left"):
        one, other = (built.patterns[0].net.curve(name) for built in (square, level))
        assert one.controls == pytest.approx(other.controls, abs=1e-9)


def test_the_point_of_a_cone_is_not_level() -> None:
    # It has no plane: the plate leaves the ring that it leaves when cut square.
    given = {"section": "round 500", "height": 600, "sizes": "inside", "thickness": 4}
    level = make("cone", **given, edge_cut="level").patterns[0]
    assert level.net.curve("b").length == pytest.approx(
        2.0 * pi * 2.0 * 600.0 / hypot(250.0, 600.0), rel=1e-9
    )


@pytest.mark.parametrize("ends", [("rectangle 600 x 300", "round 400"), ("flat-oval 600 x 300", "round 250")])
def test_level_is_refused_where_the_plate_would_run_back_over_itself(ends) -> None:
    given = {"end_a": ends[0], "end_b": ends[1], "length": 450, "offset": "0,120", "sizes": "inside"}
    problem = refused("transition", **given, thickness=8, edge_cut="level")
    assert problem.field == "edge_cut"
    assert problem.allowed.startswith("square")
    holds(make("transition", **given, thickness=8, edge_cut="square"))


def test_the_sheet_says_how_far_off_square_level_edges_are() -> None:
    facts = make("cone", **CONE, edge_cut="level").patterns[0].facts
    lean = degrees(atan2(750.0, 700.0))
    assert "edges level with the planes of the ends" in facts
    assert f"off square by: END A {lean:.0f}°, END B {lean:.0f}°" in facts
    assert "edges square to the plate" not in facts
    assert "edges square to the plate" in make("cone", **CONE).patterns[0].facts


def test_a_header_has_no_level_edges() -> None:
    header = {"kind": "transition", **TAPER, "edge_cut": "level"}
    del header["sizes"]
    piece, problems = read_piece(
        kind_of("branch"),
        {"header": header, "branch": "round 100", "centre_to_end": 400, "thickness": 3, "sizes": "inside"},
    )
    assert piece is not None, problems
    with pytest.raises(Refusal) as error:
        piece.build()
    assert error.value.problems[0].field == "header"
