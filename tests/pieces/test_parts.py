"""Sides made in parts, against elementary geometry, scipy and shapely; and what is refused."""

from __future__ import annotations

import json
from dataclasses import replace
from math import ceil, cos, hypot, pi, radians, sin
from pathlib import Path

import numpy as np
import pytest
from scipy.integrate import quad
from shapely import MultiPoint, Polygon, affinity, box
from trimesh import Trimesh

from develop.errors import InputError, Refusal
from develop.job.pipeline import checks_of, checks_of_all
from develop.job.pipeline import make as make_files
from develop.outputs.solid_files import meshes_of
from develop.pieces import kind_of
from develop.pieces.built import Built
from develop.pieces.fields import Piece, read_piece
from develop.pieces.hand import builds_of
from develop.pieces.part_types import MADE_IN, STOCK
from tests.pieces.making import make

REDUCER = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "offset": "0,50"}
CONE = {"section": "round 2400", "height": 1120, "cut_b": "height 700"}
HOPPER = {"end_a": "rectangle 600 x 300", "end_b": "round 400", "length": 450, "kicks": 6}


def edge(pattern, name: str) -> float:
    return pattern.net.curve(name).length


def points(outline) -> np.ndarray:
    return np.vstack([curve.polyline(1e-3)[:-1] for _, curve in outline.curves])


def piece_of(kind: str, **given: object) -> Piece:
    piece, problems = read_piece(kind_of(kind), given)
    assert piece is not None, problems
    return piece


def hold(built: Built) -> None:
    assert [check for check in checks_of(built) if not check.holds] == []


def parts_in(kind: str, **given: object) -> int:
    return sum(len(part.frames) for part in make(kind, mark="T1", **given).parts)


# ---- against elementary geometry ----------------------------------------------------------------


@pytest.mark.parametrize("count", [2, 3, 4, 7])
def test_a_cylinder_in_equal_rectangles(count: int) -> None:
    built = make("straight", section="round 400", length=800, made_in=count, mark="T1")
    (pattern,) = built.patterns
    assert pattern.mark == "T1-1"
    assert pattern.quantity == count
    wide = 400.0 * pi / count
    assert [edge(pattern, name) for name in ("a", "b")] == pytest.approx([wide, wide], rel=1e-13)
    assert [edge(pattern, f"seam_{side}") for side in ("left", "right")] == pytest.approx([800.0] * 2)
    corners = points(pattern.net)
    assert corners.min(axis=0) == pytest.approx((0.0, 0.0), abs=1e-9)
    assert corners.max(axis=0) == pytest.approx((wide, 800.0), abs=1e-9)
    assert pattern.net.area == pytest.approx(800.0 * wide, rel=1e-13)
    # Its roll lines share the turn of 360 degrees over as many parts.
    assert sum(line.turn for line in pattern.lines) == pytest.approx(2.0 * pi / count, rel=1e-12)
    hold(built)


@pytest.mark.parametrize("count", [2, 3, 4])
def test_a_right_cone_in_sectors(count: int) -> None:
    # A mean radius R over the height H to the apex makes a fan of 2 pi R / s, s the slant height.
    built = make("cone", **CONE, made_in=count, mark="C1")
    (pattern,) = built.patterns
    slant = hypot(1200.0, 1120.0)
    turn = 2.0 * pi * 1200.0 / slant / count
    inner = slant * (1.0 - 700.0 / 1120.0)
    assert pattern.quantity == count
    assert edge(pattern, "a") == pytest.approx(slant * turn, rel=1e-12)
    assert edge(pattern, "b") == pytest.approx(inner * turn, rel=1e-11)
    assert edge(pattern, "seam_left") == pytest.approx(slant - inner, rel=1e-12)
    assert edge(pattern, "seam_right") == pytest.approx(slant - inner, rel=1e-12)
    assert pattern.net.area == pytest.approx(0.5 * (slant**2 - inner**2) * turn, rel=1e-11)
    # Two corners lie a chord apart.
    (a0, a1) = (pattern.net.curve("a").start, pattern.net.curve("a").end)
    assert np.hypot(*(a1 - a0)) == pytest.approx(2.0 * slant * sin(0.5 * turn), rel=1e-11)
    hold(built)


def test_plate_is_developed_square_to_its_wall() -> None:
    # Inside 2400 in 16 mm: the mid line of the wall lies 8 mm out, square to the slanting side, so its
    # radius is larger by 8 cos a, a the side's angle to the axis.
    built = make("cone", **CONE, made_in=4, thickness=16, sizes="inside", mark="C1")
    (pattern,) = built.patterns
    outward = 8.0 * 1120.0 / hypot(1200.0, 1120.0)
    assert edge(pattern, "a") == pytest.approx(2.0 * pi * (1200.0 + outward) / 4, rel=1e-11)
    assert edge(pattern, "b") == pytest.approx(2.0 * pi * (450.0 + outward) / 4, rel=1e-11)
    hold(built)


def test_a_cut_cylinder_in_three_against_scipy() -> None:
    # Cut at 30 degrees, longest at the top: height 800 + r tan 30 sin t. The seam is at the shortest, below.
    built = make("straight", section="round 400", length=800, cut_b="slope 30 long top", made_in=3, mark="T1")
    rise = 200.0 * np.tan(radians(30.0))
    starts = np.radians([270.0, 390.0, 510.0])
    assert [pattern.mark for pattern in built.patterns] == ["T1-1", "T1-2", "T1-3"]
    for pattern, start in zip(built.patterns, starts, strict=True):
        stop = start + 2.0 * pi / 3.0
        length, _ = quad(lambda t: hypot(200.0, rise * cos(t)), start, stop, epsabs=1e-12, epsrel=1e-13)
        assert edge(pattern, "a") == pytest.approx(400.0 * pi / 3.0, rel=1e-13)
        assert edge(pattern, "b") == pytest.approx(length, rel=1e-11)
        assert edge(pattern, "seam_left") == pytest.approx(800.0 + rise * sin(start), rel=1e-12)
        assert edge(pattern, "seam_right") == pytest.approx(800.0 + rise * sin(stop), rel=1e-12)
        area = 200.0 * (800.0 * (stop - start) - rise * (cos(stop) - cos(start)))
        assert pattern.net.area == pytest.approx(area, rel=1e-12)
        assert Polygon(points(pattern.net)).area == pytest.approx(area, rel=1e-5)
    hold(built)


def test_halves_of_a_rectangle_to_round_meet_in_the_middle_of_two_flats() -> None:
    built = make("transition", **HOPPER, made_in=2, mark="K1")
    (pattern,) = built.patterns
    assert pattern.quantity == 2
    # Half the girth of each end; the seam joins the middle of a long side to the circle below it.
    assert edge(pattern, "a") == pytest.approx(900.0, rel=1e-12)
    assert edge(pattern, "b") == pytest.approx(200.0 * pi, rel=1e-12)
    seam = hypot(450.0, 200.0 - 150.0)
    assert edge(pattern, "seam_left") == pytest.approx(seam, rel=1e-12)
    assert edge(pattern, "seam_right") == pytest.approx(seam, rel=1e-12)
    # Two corners of six bends each.
    assert len(pattern.lines) == 12
    # Each corner is a part of a cone over a quarter of the circle; bent along its rulings it turns by the way
    # that its unit normal goes, here along many small steps.
    t = np.linspace(-0.5 * pi, 0.0, 20_001)
    circle = np.stack([200.0 * np.cos(t), 200.0 * np.sin(t), np.full_like(t, 450.0)], axis=1)
    normal = np.cross(np.stack([-np.sin(t), np.cos(t), 0.0 * t], axis=1), circle - [300.0, -150.0, 0.0])
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    corner = np.linalg.norm(np.diff(normal, axis=0), axis=1).sum()
    assert [line.turn for line in pattern.lines] == pytest.approx([corner / 6.0] * 12, rel=1e-7)
    hold(built)


# ---- parts and the whole ------------------------------------------------------------------------

CASES = {
    "straight": ("straight", {"section": "rectangle 600 x 300 r 40", "length": 800, "cut_b": "slope 10 long 40"}),
    "inside up": ("straight", {"section": "round 400", "length": 800, "cut_b": "slope 30 long top", "face": "inside"}),
    "cone": ("cone", {"section": "ellipse 600 x 400", "height": 700, "apex_offset": "100,0"}),
    "cut cone": ("cone", {"section": "ellipse 600 x 400", "height": 700, "cut_b": "height 300 slope 20 long top"}),
    "transition": ("transition", REDUCER),
    "tilted": ("transition", {**REDUCER, "tilt": "slope 15 long top", "thickness": 3, "sizes": "inside"}),
    "bent": ("transition", {"end_a": "round 400", "end_b": "rectangle 600 x 300", "length": 450, "kicks": 4}),
}  # fmt: skip


@pytest.mark.parametrize("count", [2, 3, 4])
@pytest.mark.parametrize("name", CASES)
def test_the_parts_are_the_whole(name: str, count: int) -> None:
    kind, given = CASES[name]
    (whole,) = make(kind, mark="T1", **given).patterns
    built = make(kind, mark="T1", **given, made_in=count)
    used = [(part.pattern, len(part.frames)) for part in built.parts]
    assert sum(n for _, n in used) == count
    assert sum(pattern.quantity for pattern, _ in used) == count
    assert sum(pattern.net.area * n for pattern, n in used) == pytest.approx(whole.net.area, rel=1e-10)
    assert sum(edge(pattern, "a") * n for pattern, n in used) == pytest.approx(edge(whole, "a"), rel=1e-10)
    if whole.net.curve("b") is not None:
        b = sum(edge(pattern, "b") * n for pattern, n in used)
        assert b == pytest.approx(edge(whole, "b"), rel=1e-10)
    hold(built)
    joints = [check for check in checks_of(built) if check.name.startswith("JOINT")]
    assert len(joints) == 2 * count


@pytest.mark.parametrize("face", ["outside", "inside"])
def test_lines_number_on_and_seams_say_which_joint_they_make(face: str) -> None:
    given = {**REDUCER, "end_b": "superellipse 400 x 350 n 2.5", "rotate": 10}
    built = make("transition", **given, made_in=4, face=face, seam="lap 15", mark="T1")
    (whole,) = make("transition", **given, face=face, seam="lap 15", mark="T1").patterns
    rows = [pattern.divisions for pattern in built.patterns]
    assert [(row[0].number, row[-1].number) for row in rows] == [(0, 6), (6, 12), (12, 18), (18, 24)]
    # The lines are those of the whole, one by one.
    for row in rows:
        for each in row:
            twin = whole.divisions[each.number]
            assert cos(each.direction - twin.direction) == pytest.approx(1.0, abs=1e-12)
            assert each.length == pytest.approx(twin.length, abs=1e-6)
    assert [pattern.seam_words for pattern in built.patterns] == [
        ("JOINT 1", "JOINT 2"), ("JOINT 2", "JOINT 3"), ("JOINT 3", "JOINT 4"), ("JOINT 4", "JOINT 1"),
    ]  # fmt: skip
    # Each side of a joint is as long as the other.
    for left, right in zip(built.patterns, built.patterns[1:] + built.patterns[:1], strict=True):
        assert edge(left, "seam_right") == pytest.approx(edge(right, "seam_left"), rel=1e-11)
    texts = [mark.text for pattern in built.patterns for mark in pattern.marks if mark.edge == "a"]
    assert set(texts) == {"RIGHT", "TOP", "LEFT", "BOTTOM"}
    hold(built)


def test_a_part_says_where_its_joints_are() -> None:
    first, second = make("transition", **REDUCER, made_in=2, mark="T1").patterns
    assert first.facts[0] == "T1-1: transition, part 1 of 2"
    assert "JOINT 1 at bottom and JOINT 2 at top of END A" in first.facts
    assert "JOINT 2 at top and JOINT 1 at bottom of END A" in second.facts


def test_seam_at_says_where_halves_meet() -> None:
    built = make("transition", **REDUCER, made_in=2, seam_at="right", mark="T1")
    assert any("JOINT 1 at right and JOINT 2 at left" in fact for fact in built.patterns[0].facts)


def test_parts_that_are_alike_have_a_table_of_places() -> None:
    (pattern,) = make("straight", section="round 400", length=800, made_in=4, mark="T1").patterns
    (table,) = pattern.figures
    assert [row[1:5] for row in table.rows] == [
        ("1", "270.00", "2", "0.00"), ("2", "0.00", "3", "90.00"),
        ("3", "90.00", "4", "180.00"), ("4", "180.00", "1", "270.00"),
    ]  # fmt: skip
    assert [(row[5], row[6]) for row in table.rows] == [("0", "6"), ("6", "12"), ("12", "18"), ("18", "24")]
    assert {mark.text for mark in pattern.marks} == {
        "BOTTOM 1/RIGHT 2/TOP 3/LEFT 4", "RIGHT 1/TOP 2/LEFT 3/BOTTOM 4",
    }  # fmt: skip


def test_what_is_alike_in_shape_and_not_in_its_rolling_is_not_alike() -> None:
    # Both ends of an ellipse cut square are equal rectangles; quarters from the right roll alike only
    # when turned over: the flat comes first in one and last in the next.
    built = make("straight", section="ellipse 600 x 300", length=500, made_in=4, seam_at=0, mark="T1")
    assert [pattern.quantity for pattern in built.patterns] == [2, 2]
    areas = [pattern.net.area for pattern in built.patterns]
    assert areas[0] == pytest.approx(areas[1], rel=1e-12)
    hold(built)


def test_a_corner_elsewhere_between_two_lines_is_not_alike() -> None:
    # Girth 962 in 7 parts of 137.43, from the middle of a long side on: the corners lie 14.43 and 85.43 mm
    # past a joint, and so on; every part is the same rectangle.
    given = {"section": "rectangle 246 x 235", "length": 500, "made_in": 7, "divisions": 7}
    built = make("straight", **given, mark="T1")
    bends = []
    for pattern in built.patterns:
        turn = pattern.rulings.turn
        where = pattern.rulings.a[np.flatnonzero(turn > 1e-9), 0]
        bends.append(where.tolist())
    # Of those that are one pattern, none has its corner elsewhere.
    middles = 123.0 + np.cumsum([0.0, 235.0, 246.0, 235.0])
    part = 962.0 / 7.0
    expected = sorted(round(float(each % part), 6) for each in middles)
    found = [round(each[0], 6) for each, p in zip(bends, built.patterns, strict=True) if each]
    assert sorted(set(found)) == sorted(set(expected))
    assert sum(p.quantity for p in built.patterns) == 7
    hold(built)


# ---- allowances on each side --------------------------------------------------------------------


def test_every_part_has_the_allowance_of_its_own_seams() -> None:
    bare = make("straight", section="round 400", length=800, made_in=4, mark="T1").patterns[0]
    lapped = make("straight", section="round 400", length=800, made_in=4, seam="lap 25", mark="T1").patterns[
        0
    ]
    wide = 100.0 * pi
    assert np.ptp(points(lapped.cut), axis=0) == pytest.approx((wide + 25.0, 800.0), abs=1e-9)
    assert lapped.cut.area - bare.cut.area == pytest.approx(25.0 * 800.0, rel=1e-9)
    gapped = make("straight", section="round 400", length=800, made_in=4, gap=3, mark="T1").patterns[0]
    assert np.ptp(points(gapped.cut), axis=0) == pytest.approx((wide - 3.0, 800.0), abs=1e-9)
    shrunk = make("straight", section="round 400", length=800, made_in=4, weld_shrinkage=2, mark="T1")
    assert np.ptp(points(shrunk.patterns[0].cut), axis=0) == pytest.approx((wide + 0.5, 800.0), abs=1e-9)


def test_past_a_seam_the_edge_goes_on_as_the_neighbours() -> None:
    # Unrolled, the cut is 800 + 200 tan 30 sin t over 200 t, also on a lap that lies beyond a part's seam.
    built = make(
        "straight", section="round 400", length=800, cut_b="slope 30 long top", made_in=3, seam="lap 40",
        mark="T1",
    )  # fmt: skip
    rise = 200.0 * np.tan(radians(30.0))
    for pattern, start in zip(built.patterns, np.radians([270.0, 30.0, 150.0]), strict=True):
        x, y = pattern.cut.curve("b").polyline(1e-3).T
        left = float(pattern.net.curve("a").start[0])
        foot = float(pattern.net.curve("a").start[1])
        assert x.max() - left == pytest.approx(400.0 * pi / 3.0 + 40.0, abs=1e-6)
        assert np.abs(y - foot - (800.0 + rise * np.sin(start + (x - left) / 200.0))).max() < 2e-3


def test_the_lap_of_a_sector_is_a_sector() -> None:
    # A lap that goes on as the neighbour does ends on the same two arcs.
    (bare,) = make("cone", **CONE, made_in=3, mark="C1").patterns
    (pattern,) = make("cone", **CONE, made_in=3, seam="lap 60", mark="C1").patterns
    slant = hypot(1200.0, 1120.0)
    turn = 2.0 * pi * 1200.0 / slant / 3.0
    a = pattern.net.curve("a")
    # The apex: on the seams, a slant from their feet.
    left = pattern.net.curve("seam_left").reversed()
    apex = left.start + (left.end - left.start) / left.length * slant
    far = np.hypot(*(pattern.cut.curve("a").polyline(1e-3) - apex).T)
    near = np.hypot(*(pattern.cut.curve("b").polyline(1e-3) - apex).T)
    assert far == pytest.approx(slant, abs=2e-3)
    assert near == pytest.approx(slant * 0.375, abs=2e-3)
    assert np.hypot(*(a.end - a.start)) == pytest.approx(2.0 * slant * sin(0.5 * turn), rel=1e-10)
    assert pattern.net.area == pytest.approx(bare.net.area, rel=1e-12)


# ---- the stock sheet ----------------------------------------------------------------------------


def goes(pattern, stock: tuple[float, float]) -> bool:
    """By shapely, at every tenth of a degree."""
    part = MultiPoint(points(pattern.cut)).convex_hull
    for angle in np.arange(0.0, 180.0, 0.1):
        low_x, low_y, x, y = affinity.rotate(part, angle, origin=(0, 0)).bounds
        if x - low_x <= stock[0] + 1e-3 and y - low_y <= stock[1] + 1e-3:
            return True
    return False


def test_fit_makes_as_few_parts_as_go_in() -> None:
    # Girth 6283.2 over sheets 2500 long: three parts.
    built = make("straight", section="round 2000", length=1200, made_in="fit", mark="S1")
    (pattern,) = built.patterns
    assert pattern.quantity == ceil(2000.0 * pi / 2500.0) == 3
    assert goes(pattern, (2500.0, 1250.0))
    assert any(fact.startswith("goes into stock 2500 x 1250") for fact in pattern.facts)
    hold(built)


@pytest.mark.parametrize(("more", "count"), [(0.01, 3), (-0.01, 4)])
def test_a_stock_sheet_that_just_fits_and_one_that_just_does_not(more: float, count: int) -> None:
    # Each of three parts is a rectangle a third of the girth long, and a lap.
    long = 2000.0 * pi / 3.0 + 25.0 + more
    given = {"section": "round 2000", "length": 1200, "seam": "lap 25", "made_in": "fit"}
    assert parts_in("straight", **given, stock=f"{long} x 1200") == count
    assert parts_in("straight", **given, stock=f"{long} x 1250") == count


def test_a_part_that_goes_in_only_aslant_goes_in() -> None:
    # A strip of 1300 by 20 goes into a square of (1300 + 20) / sqrt 2.
    side = 1320.0 / 2.0**0.5
    given = {"section": f"round {20.0 / pi}", "length": 1300, "made_in": "fit"}
    built = make("straight", **given, stock=f"{side + 0.01} x {side + 0.01}", mark="S1")
    assert [pattern.quantity for pattern in built.patterns] == [1]
    assert any("turned 45° anticlockwise" in fact for fact in built.patterns[0].facts)
    assert parts_in("straight", **given, stock=f"{side - 0.1} x {side - 0.1}") > 1


def test_fit_of_a_transition_by_shapely() -> None:
    given = {"end_a": "ellipse 3000 x 2000", "end_b": "round 1600", "length": 1500, "gap": 2}
    built = make("transition", **given, made_in="fit", stock="3000 x 1500", mark="T1")
    count = sum(pattern.quantity for pattern in built.patterns)
    assert all(goes(pattern, (3000.0, 1500.0)) for pattern in built.patterns)
    fewer = make("transition", **given, made_in=count - 1, mark="T1")
    assert not all(goes(pattern, (3000.0, 1500.0)) for pattern in fewer.patterns)
    hold(built)


def test_a_piece_that_goes_in_whole_stays_whole() -> None:
    built = make("straight", section="round 300", length=800, made_in="fit", mark="S1")
    assert [pattern.mark for pattern in built.patterns] == ["S1"]
    assert box(0, 0, 2500, 1250).covers(Polygon(points(built.patterns[0].cut)))


def test_stock_that_takes_no_part_is_refused_with_one_that_does() -> None:
    given = {"section": "round 2000", "length": 5200, "made_in": "fit"}
    with pytest.raises(Refusal) as refused:
        make("straight", **given, mark="S1")
    (problem,) = refused.value.problems
    assert problem.field == "stock"
    assert "2500 x 1250" in problem.given
    size = problem.allowed.split(" mm")[0]
    assert parts_in("straight", **given, stock=size) == 24


# ---- bends, offsets, branches -------------------------------------------------------------------


def test_gores_in_halves_meet_their_neighbours() -> None:
    built = make("bend", section="round 400", angle=90, radius=600, gores=5, made_in=2, mark="B1")
    assert [(pattern.mark, pattern.quantity) for pattern in built.patterns] == [
        ("B1-1-1", 1), ("B1-1-2", 1), ("B1-2-1", 3), ("B1-2-2", 3), ("B1-5-1", 1), ("B1-5-2", 1),
    ]  # fmt: skip
    # Parted at throat and heel: a full gore is 2 (600 ∓ 200) tan 11.25 there.
    full = built.patterns[2]
    throat, heel = (2.0 * (600.0 + r) * np.tan(radians(11.25)) for r in (-200.0, 200.0))
    assert edge(full, "seam_left") == pytest.approx(throat, rel=1e-11)
    assert edge(full, "seam_right") == pytest.approx(heel, rel=1e-11)
    names = [check.name for check in checks_of(built)]
    assert "gore 2 to gore 3: edges that are joined" in names
    hold(built)


def test_legs_of_an_offset_in_halves() -> None:
    built = make("offset", section="round 300", length=1500, offset="200,300", made_in=2, mark="O1")
    assert sum(pattern.quantity for pattern in built.patterns) == 6
    hold(built)


TEE = {"header": "round 400", "header_length": 900, "branch": "round 250", "centre_to_end": 500}


@pytest.mark.parametrize("count", [2, 3, 4])
@pytest.mark.parametrize("joint", ["set-on", "set-in", "tap"])
def test_a_branch_and_its_header_in_parts(count: int, joint: str) -> None:
    lap = {"lap": 15} if joint == "tap" else {}
    built = make("branch", **TEE, angle=60, joint=joint, **lap, thickness=1, made_in=count, mark="B1")
    with_opening = [pattern for pattern in built.patterns if pattern.openings]
    assert len(with_opening) == 1
    assert with_opening[0].quantity == 1
    headers = [p for p in built.patterns if "-header-" in p.mark]
    assert sum(p.quantity for p in headers) == count
    # The opening lies clear inside its part.
    outline = Polygon(points(with_opening[0].net))
    assert outline.contains(Polygon(points(with_opening[0].openings[0])))
    hold(built)


def test_the_joint_of_a_header_that_would_cut_the_opening_is_refused_with_what_works() -> None:
    with pytest.raises(Refusal) as refused:
        make("branch", **TEE, made_in=2, header_seam="bottom", mark="B1")
    (problem,) = refused.value.problems
    assert problem.field == "made_in"
    count, _, where = problem.allowed.partition(" with header_seam = ")
    hold(make("branch", **TEE, made_in=int(count), header_seam=where, mark="B1"))


# ---- both hands ---------------------------------------------------------------------------------


def test_the_opposite_hand_is_made_in_parts_too() -> None:
    given = {"section": "superellipse 600 x 300 n 2.5", "length": 800, "cut_b": "slope 10 long 40"}
    piece, _ = read_piece(kind_of("straight"), {**given, "made_in": 3, "opposite_hand": 2, "mark": "T1"})
    builds = builds_of(piece)
    assert [len(built.patterns) for built in builds] == [3, 3]
    assert all(check.holds for check in checks_of_all(builds))
    # Mirrored, the last part is the first.
    drawn, other = ([edge(pattern, "b") for pattern in built.patterns] for built in builds)
    assert other == pytest.approx(drawn[::-1], rel=1e-10)


# ---- the checks can fail ------------------------------------------------------------------------


def failing(built: Built) -> set[str]:
    return {check.name.partition(": ")[2] for check in checks_of(built) if not check.holds}


def test_a_part_of_another_place_fails_its_checks() -> None:
    built = make("transition", **REDUCER, made_in=2, seam_at=40, mark="T1")
    first, second = built.parts
    wrong = replace(built, parts=(replace(first, pattern=replace(second.pattern, mark="T1-1")), second))
    found = failing(wrong)
    assert "closing check, largest distance from the ends" in found
    assert "witness marks, largest error" in found


def test_joints_that_do_not_lie_on_each_other_fail() -> None:
    built = make("straight", section="round 400", length=800, made_in=4, mark="T1")
    (part,) = built.parts
    frames = (part.frames[0], part.frames[2], *part.frames[2:])
    wrong = replace(built, parts=(replace(part, frames=frames),))
    assert any("largest distance of the folded edges" in name for name in failing(wrong))


def test_marks_of_the_wrong_place_fail() -> None:
    built = make("straight", section="round 400", length=800, made_in=2, mark="T1")
    (part,) = built.parts
    marks = [replace(mark, text=mark.text.replace("RIGHT", "LEFT")) for mark in part.pattern.marks]
    wrong = built.with_patterns([replace(part.pattern, marks=tuple(marks))])
    assert "witness marks at all its places" in failing(wrong)


def test_a_missing_part_fails_the_sums() -> None:
    built = make("transition", **REDUCER, made_in=3, mark="T1")
    (side,) = built.divided
    wrong = replace(
        built,
        divided=(replace(side, parts=side.parts[:2], places=side.places[:2], numbers=side.numbers[:2]),),
    )
    names = {check.name for check in checks_of(wrong) if not check.holds}
    assert {"all parts, area", "all parts, edges at END A", "all parts, edges at END B"} <= names


# ---- what is given ------------------------------------------------------------------------------


@pytest.mark.parametrize(
    ("given", "value"), [(1, 1), ("3", 3), (4, 4), ("fit", "fit"), (" FIT ", "fit"), (2.0, 2)]
)
def test_how_many_parts(given: object, value: object) -> None:
    assert MADE_IN.read(given, unit="mm") == value
    assert MADE_IN.read(MADE_IN.text(value), unit="mm") == value


@pytest.mark.parametrize("given", [0, 25, -1, 2.5, "some", "", True, None, [2], "inf", float("nan")])
def test_no_number_of_parts(given: object) -> None:
    with pytest.raises(InputError) as refused:
        MADE_IN.read(given, unit="mm")
    assert refused.value.problems[0].allowed == "a whole number from 1 to 24, or fit"


@pytest.mark.parametrize(
    ("given", "value"),
    [
        ("2500 x 1250", (2500.0, 1250.0)),
        ("1250x2500", (2500.0, 1250.0)),
        ("10' × 5'", (3048.0, 1524.0)),
        ("2.5 m x 1250 mm", (2500.0, 1250.0)),
    ],
)
def test_a_stock_sheet(given: str, value: tuple[float, float]) -> None:
    assert STOCK.read(given, unit="mm") == pytest.approx(value, rel=1e-15)
    assert STOCK.read(STOCK.text(value), unit="in") == value


@pytest.mark.parametrize(
    "given", ["2500", "2500 x", "x 1250", "0 x 1250", "2500 x -1", "200 km x 1", 2500, "1x2x3"]
)
def test_no_stock_sheet(given: object) -> None:
    with pytest.raises(InputError) as refused:
        STOCK.read(given, unit="mm")
    assert "2500 x 1250" in refused.value.problems[0].allowed


def test_too_many_parts_for_the_flats_of_a_bent_side_are_refused() -> None:
    with pytest.raises(Refusal) as refused:
        make("transition", **HOPPER, made_in=9, mark="K1")
    (problem,) = refused.value.problems
    assert problem.field == "made_in"
    most = int(problem.allowed.split()[0])
    hold(make("transition", **HOPPER, made_in=most, mark="K1"))


def test_all_that_is_wrong_is_said_at_once() -> None:
    _, problems = read_piece(
        kind_of("straight"),
        {"section": "round 400", "length": 800, "made_in": 0, "stock": "big", "mark": "T1"},
    )
    assert {problem.field for problem in problems} == {"made_in", "stock"}


# ---- with what else is asked for -------------------------------------------------------------------


@pytest.mark.parametrize("count", [2, 3])
def test_level_edges_of_a_right_cone_in_parts(count: int) -> None:
    # The sheet lies d = t / 2 outside of the inside; in the planes of the ends its radius is d / cos more,
    # with the angle of the side to the axis (elementary geometry).
    given = {**CONE, "thickness": 16, "sizes": "inside", "edge_cut": "level"}
    built = make("cone", **given, made_in=count, mark="C1")
    hold(built)
    (pattern,) = built.patterns
    more = 8.0 / cos(np.arctan2(1200.0, 1120.0))
    radii = [1200.0 + more, 1200.0 * (1.0 - 700.0 / 1120.0) + more]
    girths = [count * edge(pattern, name) for name in "ab"]
    assert girths == pytest.approx([2.0 * pi * radius for radius in radii], rel=1e-12)


@pytest.mark.parametrize("face", ["outside", "inside"])
@pytest.mark.parametrize("count", [2, 3, 4])
@pytest.mark.parametrize(
    "given",
    [
        {"end_a": "rectangle 600 x 400 r 30", "end_b": "rectangle 300 x 200 r 20", "length": 400},
        {"end_a": "ellipse 600 x 400", "end_b": "round 350", "length": 400, "tilt": "slope 10 long top"},
    ],
    ids=["flats", "curved"],
)
def test_level_edges_in_parts_hold(given: dict[str, object], count: int, face: str) -> None:
    level = {**given, "thickness": 8, "sizes": "inside", "edge_cut": "level"}
    hold(make("transition", **level, made_in=count, face=face, mark="T1"))


@pytest.mark.parametrize("count", [2, 3])
def test_collars_stay_whole_and_meet_every_part(count: int) -> None:
    given = {"end_a": "round 600", "end_b": "round 350", "length": 400, "thickness": 2, "fit_b": "into"}
    built = make("transition", **given, collar_a=50, collar_b=60, made_in=count, mark="T1")
    assert [mark for mark, _ in built.sides] == ["T1-collar-a", "T1", "T1-collar-b"]
    collars = [joint for joint in built.joints if joint.name.startswith("collar")]
    assert [len(parts) for joint in collars for _, parts in joint.sides] == [1, count, 1, count]
    assert all(len(part.frames) == 1 for part in built.parts if "collar" in part.pattern.mark)
    hold(built)


def test_figures_after_closing_are_given_once_for_the_whole() -> None:
    given = {"section": "ellipse 600 x 300", "length": 800, "thickness": 2, "cut_b": "slope 20 long right"}
    (built,) = builds_of(piece_of("straight", **given, made_in=3, mark="T1"))
    titles = [[figures.title for figures in pattern.taped] for pattern in built.patterns]
    assert [len(each) for each in titles] == [2, 1, 1]
    assert "all 3 parts" in titles[0][1]
    # A tape of 0.2 mm on the outside of 2 mm reads the ellipse's girth and 2 pi times 1.1 mm (Steiner).
    first = built.patterns[0].taped[1]
    girth, _ = quad(lambda u: hypot(300.0 * sin(u), 150.0 * cos(u)), 0.0, 2.0 * pi, epsabs=1e-10)
    assert first.rows[0][1] == pytest.approx(girth + 2.0 * pi * 1.1, rel=1e-12)


@pytest.mark.parametrize("count", [2, 3])
def test_the_girth_after_closing_of_a_cone_in_parts(count: int) -> None:
    # Square to the plate, the middle of the tape lies 8.1 mm outside of the mean along the normal.
    (built,) = builds_of(piece_of("cone", **CONE, thickness=16, made_in=count, mark="C1"))
    (pattern,) = built.patterns
    rows = {row[0]: row[1] for row in pattern.taped[1].rows}
    lean = 1120.0 / hypot(1120.0, 1200.0)
    assert rows["END A: outside girth, by tape"] == pytest.approx(2.0 * pi * (1200.0 + 8.1 * lean), rel=1e-7)


def test_each_part_tells_its_own_tightest_place() -> None:
    given = {
        "section": "ellipse 600 x 300",
        "length": 800,
        "seam_at": "bottom",
        "cut_b": "slope 9 long right",
    }
    (built,) = builds_of(piece_of("straight", **given, made_in=2, mark="T1"))
    # b²/a at both ends of the longer axis (elementary geometry), one in each half.
    found = [pattern.forming for pattern in built.patterns]
    assert [each.radius for each in found] == pytest.approx([75.0, 75.0], rel=1e-6)
    assert [each.directions for each in found] == [pytest.approx((0.0,)), pytest.approx((pi,))]


def test_the_corners_of_a_bent_side_are_each_tightest_in_their_own_part() -> None:
    # The corners of radius 40 begin where the longer sides end, 260 right and left of the middle, 200 off it.
    given = {"end_a": "rectangle 600 x 400 r 40", "end_b": "round 350", "length": 400, "seam_at": "bottom"}
    (built,) = builds_of(piece_of("transition", **given, thickness=4, sizes="inside", made_in=3, mark="T1"))
    corner = np.round(np.degrees(np.arctan2(200.0, 260.0)), 1)
    found = [np.degrees(pattern.forming.directions) for pattern in built.patterns]
    expected = [[360.0 - corner], [corner, 180.0 - corner], [180.0 + corner]]
    assert [each.tolist() for each in found] == [pytest.approx(each, abs=1e-9) for each in expected]


def test_a_part_of_a_cylinder_is_as_tight_all_over() -> None:
    (built,) = builds_of(piece_of("straight", section="round 400", length=800, made_in=3, mark="T1"))
    (pattern,) = built.patterns
    assert pattern.forming.directions == ()
    assert any(fact.startswith("tightest radius") and "all round" in fact for fact in pattern.facts)


@pytest.mark.parametrize("face", ["outside", "inside"])
def test_templates_and_outlines_are_made_once_for_all_parts(face: str) -> None:
    asked = {"templates": "both", "floor": "outlines", "template_sections": "all", "face": face}
    given = {**REDUCER, **asked, "thickness": 3, "mark": "T1"}
    built, whole = (builds_of(piece_of("transition", **given, made_in=count))[0] for count in (3, 1))
    assert [each.mark for each in built.patterns[3:]] == [each.mark for each in whole.patterns[1:]]
    hold(built)
    marks = {mark.text: mark.at for mark in built.patterns[-1].marks}
    # The joints stand on the floor in the order in which the parts are drawn and stand.
    at_a = [built.divided[0].solid.seam_line, *built.divided[0].solid.joint_lines]
    centre = np.mean([marks["A RIGHT"], marks["A LEFT"]], axis=0)
    for n in (2, 3):
        (at,) = (at for text, at in marks.items() if text.endswith(f"JOINT {n}") and text.startswith("A"))
        line = at_a[n - 1 if face == "outside" else 4 - n]
        one, other = (np.arctan2(*each[1::-1]) for each in (at - centre, line[0]))
        assert abs((one - other + pi) % (2.0 * pi) - pi) < 0.02  # the outside stands a little off


def test_a_piece_that_is_its_own_mirror_image_stays_so_with_templates() -> None:
    given = {"section": "ellipse 600 x 300", "length": 800, "templates": "outside", "floor": "outlines"}
    (built,) = builds_of(piece_of("straight", **given, opposite_hand=1, made_in=2, mark="T1"))
    assert built.both_hands


def test_the_ends_of_a_cone_to_the_point_are_its_base_alone() -> None:
    given = {"section": "round 400", "height": 500, "thickness": 4, "sizes": "inside"}
    asked = {"floor": "outlines", "templates": "outside", "template_sections": "all"}
    (built,) = builds_of(piece_of("cone", **given, **asked, made_in=2, mark="C1"))
    hold(built)
    assert [each.mark for each in built.patterns] == ["C1-1", "C1-template-outside", "C1-floor"]


def test_a_side_in_parts_is_one_body() -> None:
    given = {"section": "round 400", "length": 800, "thickness": 10, "sizes": "outside", "made_in": 3}
    for rule in (0.5, "soft"):
        (built,) = builds_of(piece_of("straight", **given, neutral_line=rule, mark="T1"))
        (mesh,) = meshes_of(built, thickness=10.0, neutral_line=0.5)
        body = Trimesh(mesh.vertices, mesh.triangles)
        assert body.is_watertight
        assert body.volume == pytest.approx(pi * (200.0**2 - 190.0**2) * 800.0, rel=1e-3)
        assert np.hypot(*body.vertices[:, :2].T).max() == pytest.approx(200.0, abs=1e-3)


# ---- files --------------------------------------------------------------------------------------


def test_the_files_of_a_piece_in_parts(tmp_path: Path) -> None:
    piece, _ = read_piece(kind_of("transition"), {**REDUCER, "made_in": 2, "seam": "lap 15", "mark": "T1"})
    outcome = make_files(piece, folder=str(tmp_path))
    assert outcome.failed == ()
    assert sorted(outcome.files) == [
        "T1-1.dxf", "T1-1.svg", "T1-2.dxf", "T1-2.svg", "T1-pages.pdf", "T1.glb", "T1.json", "T1.pdf", "T1.png", "T1.stl",
    ]  # fmt: skip
    record = json.loads((tmp_path / "T1.json").read_text(encoding="utf-8"))
    assert record["fields"]["made_in"] == 2
    assert record["fields"]["stock"] == [2500.0, 1250.0]
    assert [pattern["mark"] for pattern in record["patterns"]] == ["T1-1", "T1-2"]
    for pattern in record["patterns"]:
        net, cut = Polygon(pattern["net"]["outline"]), Polygon(pattern["cut"]["outline"])
        assert net.is_valid
        assert cut.is_valid
        assert net.area == pytest.approx(pattern["net"]["area"], rel=1e-5)
        assert cut.area - net.area == pytest.approx(15.0 * pattern["net"]["edges"]["seam_right"], rel=2e-2)
    first = (tmp_path / "T1-1.svg").read_text(encoding="utf-8")
    assert "JOINT 1" in first
    assert "JOINT 2" in first
    again = make_files(piece, folder=str(tmp_path / "again"), formats=("svg", "json"))
    for name in again.files:
        assert (tmp_path / name).read_bytes() == (tmp_path / "again" / name).read_bytes()
