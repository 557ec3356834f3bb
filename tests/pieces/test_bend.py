"""Segmental bends against elementary geometry."""

from __future__ import annotations

from itertools import pairwise
from math import atan, cos, degrees, hypot, pi, radians, sin, tan

import numpy as np
import pytest
from hypothesis import example, given, settings
from hypothesis import strategies as st

from develop.errors import InputError
from develop.job.pipeline import checks_of, checks_of_all
from develop.pieces import kind_of
from develop.pieces.bend import Bend
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from tests.pieces.making import make

HARD = {"section": "ellipse 700 x 350", "angle": 90, "throat_radius": 350, "gores": 5, "turns_to": "right"}


def bend(**given):
    return make("bend", **given)


def gores(built):
    """Each gore's pattern, solid and frame, from end A to end B."""
    found = [(part, frame) for part in built.parts for frame in part.frames]

    def along(each):
        axis = each[1].axes[2]
        return np.arccos(np.clip(axis @ np.array([0.0, 0.0, 1.0]), -1.0, 1.0))

    return sorted(found, key=along)


def place(frame, points):
    return points @ frame.axes + frame.origin


def plane_of(part, frame, end):
    """Unit normal in the piece of a gore's end, towards end B."""
    spans = (part.solid.end_a if end == "a" else part.solid.end_b).spans
    normal = frame.axes.T @ np.cross(spans[:, 0], spans[:, 1])
    return normal / np.linalg.norm(normal)


# ---- the axis, the throat and the heel --------------------------------------------------------


@pytest.mark.parametrize(
    ("word", "way"), [("right", 0), ("top", 90), ("left", 180), ("bottom", 270), (37, 37)]
)
def test_the_axis_turns_to_that_direction_and_ends_square_to_its_radius(word, way) -> None:
    radius, angle = 500.0, 70.0
    built = bend(section="ellipse 300 x 200", angle=angle, radius=radius, gores=4, turns_to=word)
    t = np.array([cos(radians(way)), sin(radians(way)), 0.0])
    z = np.array([0.0, 0.0, 1.0])
    a = radians(angle)
    part, frame = gores(built)[-1]
    end = place(frame, part.solid.end_b.origin[None])[0]
    assert end == pytest.approx(radius * ((1 - cos(a)) * t + sin(a) * z), abs=1e-9)
    assert plane_of(part, frame, "b") == pytest.approx(sin(a) * t + cos(a) * z, abs=1e-12)
    # The section is not twisted: what is square to the plane of the bend stays so.
    side = np.cross(z, t)
    assert frame.axes @ side == pytest.approx(np.array([side[0], side[1], 0.0]), abs=1e-12)


def test_every_gore_touches_the_circle_of_its_radius() -> None:
    centre = np.array([0.0, 600.0, 0.0])
    built = bend(section="round 300", angle=90, radius=600, gores=5)
    for part, frame in gores(built):
        a, b = (place(frame, end.origin[None])[0] for end in (part.solid.end_a, part.solid.end_b))
        axis = (b - a) / np.linalg.norm(b - a)
        nearest = a + ((centre - a) @ axis) * axis
        assert np.linalg.norm(nearest - centre) == pytest.approx(600, abs=1e-9)


@pytest.mark.parametrize(("turns_to", "half"), [("right", 350), ("top", 175)])
def test_lengths_at_throat_and_heel(turns_to: str, half: float) -> None:
    built = bend(**{**HARD, "turns_to": turns_to, "throat_radius": 350})
    radius, slope = 350 + half, tan(radians(11.25))
    ends, full = gores(built)[0][0].pattern, gores(built)[1][0].pattern
    for pattern, times in ((ends, 1), (full, 2)):
        lengths = [row.length for row in pattern.divisions]
        assert min(lengths) == pytest.approx(times * (radius - half) * slope, abs=1e-9)
        assert max(lengths) == pytest.approx(times * (radius + half) * slope, abs=1e-9)
        # A cylinder's area is its girth times its length on the axis, however its ends are cut.
        girth = full.net.area / (2 * radius * slope)
        assert pattern.net.area == pytest.approx(times * girth * radius * slope, rel=1e-12)


def test_the_three_ways_to_give_the_radius_agree() -> None:
    section = {"section": "flat-oval 500 x 250", "angle": 60, "gores": 3, "turns_to": "right"}
    found = [
        bend(**section, **way).patterns[1].net.area
        for way in ({"radius": 650}, {"throat_radius": 400}, {"ratio": 1.3})
    ]
    assert found == pytest.approx([found[0]] * 3, rel=1e-14)


def test_the_throat_radius_is_measured_where_sizes_are() -> None:
    # A pipe is measured outside: its axis lies the throat radius and half the diameter from the centre.
    built = bend(section="pipe DN 200", angle=90, throat_radius=300, gores=3, thickness=6.3)
    part, frame = gores(built)[-1]
    end = place(frame, part.solid.end_b.origin[None])[0]
    assert hypot(*end[1:]) == pytest.approx((300 + 219.1 / 2) * 2**0.5, rel=1e-12)
    assert part.pattern.net.curve("b").length == pytest.approx(pi * (219.1 - 6.3), rel=1e-12)


@pytest.mark.parametrize(
    ("section", "turns_to", "words"),
    [
        ("ellipse 700 x 350", "right", "hard way"),
        ("ellipse 700 x 350", "bottom", "easy way"),
        ("ellipse 350 x 700", "top", "hard way"),
        ("round 400", "top", ""),
    ],
)
def test_it_says_hard_way_or_easy_way(section: str, turns_to: str, words: str) -> None:
    facts = bend(section=section, angle=90, radius=900, turns_to=turns_to).patterns[0].facts
    for each in ("hard way", "easy way"):
        assert any(each in fact for fact in facts) is (each == words)


def test_each_gore_says_its_own_throat_width() -> None:
    slope = tan(radians(90 / 8))
    for pattern, share in zip(bend(**HARD, stagger=30).patterns, (1, 2, 2, 2, 1), strict=True):
        assert f"throat width {350 * share * slope:.1f}" in pattern.facts


def test_the_facts_of_the_hard_way_bend() -> None:
    facts = "\n".join(bend(**HARD).patterns[1].facts)
    slope = tan(radians(90 / 8))
    for words in (
        "mitre angle 11.25°",
        f"end gores: throat {350 * slope:.1f}, heel {1050 * slope:.1f}",
        f"full gores: throat {700 * slope:.1f}, heel {2100 * slope:.1f}",
        f"throat width {700 * slope:.1f}",
        "radius 700.0 to the axis",
        "gores 2, 3, 4 of 5",
    ):
        assert words in facts


# ---- gores that are alike, and their seams ---------------------------------------------------


@pytest.mark.parametrize(
    ("more", "marks", "quantities"),
    [
        ({}, ["B-1", "B-2", "B-5"], [3, 9, 3]),
        ({"seams": "alternate"}, ["B-1", "B-2", "B-3", "B-5"], [3, 6, 3, 3]),
        ({"stagger": 30}, ["B-1", "B-2", "B-3", "B-4", "B-5"], [3] * 5),
        ({"stagger": 180}, ["B-1", "B-2", "B-3", "B-5"], [3, 6, 3, 3]),
        ({"gores": 2}, ["B-1", "B-2"], [3, 3]),
    ],
)
def test_gores_that_are_alike_are_one_pattern(more, marks, quantities) -> None:
    built = bend(**{**HARD, "mark": "B", "quantity": 3, **more})
    assert [pattern.mark for pattern in built.patterns] == marks
    assert [pattern.quantity for pattern in built.patterns] == quantities
    assert sum(quantities) == 3 * more.get("gores", 5)
    assert [3 * len(part.frames) for part in built.parts] == quantities
    assert [
        f"quantity {each}" in "".join(p.facts) for p, each in zip(built.patterns, quantities, strict=True)
    ]


def seams(built):
    return [degrees(part.pattern.divisions[0].direction) for part, _ in gores(built)]


@pytest.mark.parametrize(
    ("more", "expected"),
    [
        ({}, [0] * 5),
        ({"seam_at": "heel"}, [180] * 5),
        ({"seam_at": "side"}, [270] * 5),
        ({"seam_at": "other side"}, [90] * 5),
        ({"seam_at": 40}, [40] * 5),
        ({"stagger": 30}, [0, 30, 60, 90, 120]),
        ({"stagger": -100}, [0, 260, 160, 60, 320]),
        ({"seams": "alternate"}, [0, 180, 0, 180, 0]),
        ({"seams": "alternate", "seam_at": "heel"}, [180, 0, 180, 0, 180]),
    ],
)
def test_where_the_seams_are(more, expected) -> None:
    found = seams(bend(**{**HARD, **more}))
    assert (np.array(found) - expected + 180) % 360 == pytest.approx([180] * 5, abs=1e-9)


def test_the_throat_of_a_turned_ellipse_is_where_it_reaches_farthest() -> None:
    # Its tangent square to 37°: tan(direction) = (b²/a²) tan 37°, elementary.
    (found, *_) = seams(bend(**{**HARD, "turns_to": 37}))
    assert found == pytest.approx(degrees(atan(0.25 * tan(radians(37)))), abs=1e-9)


@pytest.mark.parametrize("section", ["ellipse 700 x 350", "flat-oval 700 x 350", "rectangle 700 x 350 r 40"])
@pytest.mark.parametrize("turns_to", ["right", 37])
def test_alternate_gores_fill_one_rectangle(section: str, turns_to) -> None:
    built = bend(**{**HARD, "section": section, "turns_to": turns_to, "seams": "alternate"})
    bottom, area = 0.0, 0.0
    x = np.linspace(0, built.patterns[0].net.curve("a").length, 2001)
    line = np.zeros_like(x)
    for part, _ in gores(built):
        a = part.pattern.net.curve("a").polyline(1e-4)
        b = part.pattern.net.curve("b").reversed().polyline(1e-4)
        # Laid on the gore before, the lower edge lies on its upper one all along.
        lower = np.interp(x, *a.T)
        assert np.ptp(lower - line) < 2e-3
        line = np.interp(x, *b.T) + float(np.mean(line - lower))
        area += part.pattern.net.area
    assert np.ptp(line) < 1e-3
    assert area == pytest.approx(x[-1] * (line[0] - bottom), rel=1e-6)


# ---- joints ------------------------------------------------------------------------------------


@pytest.mark.parametrize(
    "more",
    [
        {},
        {"stagger": 30},
        {"seams": "alternate", "turns_to": 37},
        {"thickness": 12, "sizes": "inside", "section": "ellipse 700 x 400"},
        {"section": "rectangle 500 x 300 r 0", "seam_at": "side"},
        {"section": "superellipse 500 x 300 n 3", "face": "inside"},
        {"section": "flat-oval 500 x 300", "angle": 170, "gores": 9},
    ],
)
def test_every_joint_is_checked_and_holds(more) -> None:
    built = bend(**{**HARD, **more})
    checks = checks_of(built)
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
    count = more.get("gores", 5)
    names = {check.name.partition(":")[0] for check in checks}
    assert {f"gore {k} to gore {k + 1}" for k in range(1, count)} <= names


def test_marks_run_on_from_gore_to_gore() -> None:
    built = bend(**{**HARD, "stagger": 30})
    found = gores(built)
    for (part, frame), (following, next_frame) in pairwise(found):
        for direction in np.radians([0, 90, 180, 270]):
            end = place(frame, part.solid.line_at(direction))[1]
            start = place(next_frame, following.solid.line_at(direction))[0]
            assert end == pytest.approx(start, abs=1e-9)


def test_a_joint_out_of_place_does_not_pass() -> None:
    from dataclasses import replace

    built = bend(**HARD)
    first = built.parts[0]
    moved = replace(first.frames[0], origin=first.frames[0].origin + np.array([0.0, 0.02, 0.0]))
    wrong = replace(built, parts=(replace(first, frames=(moved,)), *built.parts[1:]))
    failed = [check.name for check in checks_of(wrong) if not check.holds]
    assert failed == ["gore 1 to gore 2: largest distance of the folded edges"]


@pytest.mark.parametrize("seam_at", ["throat", "side", 20])
def test_the_opposite_hand_is_the_mirror_image(seam_at) -> None:
    piece, problems = read_piece(
        kind_of("bend"), {**HARD, "turns_to": 20, "stagger": 30, "seam_at": seam_at, "opposite_hand": 1}
    )
    assert not problems
    builds = builds_of(piece)
    assert all(check.holds for check in checks_of_all(builds))
    drawn, other = (np.array(seams(built)) for built in builds)
    assert (drawn + other - 180 + 180) % 360 == pytest.approx(np.full(5, 180), abs=1e-6)


# ---- refusals ------------------------------------------------------------------------------------


def refused(**given):
    with pytest.raises(InputError) as caught:
        bend(**given)
    (problem,) = caught.value.problems
    return problem


@pytest.mark.parametrize(
    ("way", "step"), [({"radius": 300}, 0.1), ({"throat_radius": 0.2}, 0.1), ({"ratio": 0.4}, 0.001)]
)
def test_gores_that_cross_are_refused_with_the_smallest_radius_that_works(way, step) -> None:
    given = {"section": "ellipse 700 x 350", "angle": 90, "gores": 5, "turns_to": "right"}
    problem = refused(**given, **way)
    (name,) = way
    assert problem.field == name
    least = float(problem.allowed.split()[0])
    bend(**given, **{name: least})
    assert refused(**given, **{name: least - step}).field == name


def test_in_plate_it_is_the_outside_that_must_clear() -> None:
    given = {"section": "round 400", "angle": 90, "gores": 3, "thickness": 20, "sizes": "inside"}
    assert refused(**given, radius=215).field == "radius"
    bend(**given, radius=225)


def test_too_many_gores_for_the_throat() -> None:
    given = {"section": "round 400", "angle": 10, "radius": 205}
    problem = refused(**given, gores=12)
    words = problem.allowed.split()
    most = int(words[words.index("gores") - 1])
    bend(**given, gores=most)
    assert refused(**given, gores=most + 1).field == "radius"


def test_too_few_gores_for_a_turn_of_almost_half_a_circle() -> None:
    given = {"section": "round 400", "angle": 179.9, "radius": 600}
    problem = refused(**given, gores=2)
    assert problem.field == "gores"
    least = int(problem.allowed.split()[0])
    bend(**given, gores=least)
    assert refused(**given, gores=least - 1).field == "gores"


def test_one_way_to_give_the_radius_is_needed_and_no_more() -> None:
    given = {"section": "round 400", "angle": 90}
    problem = refused(**given)
    assert problem.field == "radius"
    assert problem.allowed == "one of radius, throat_radius and ratio"
    _, problems = read_piece(kind_of("bend"), {**given, "radius": 500, "throat_radius": 300, "ratio": 1.5})
    assert [(each.field, each.allowed) for each in problems] == [
        ("throat_radius", "one of the two"),
        ("ratio", "one of the two"),
        ("ratio", "one of the two"),
    ]


def test_stagger_and_alternate_seams_exclude_each_other() -> None:
    assert refused(**HARD, seams="alternate", stagger=30).field == "stagger"


@pytest.mark.parametrize("angle", [0, 180, -90, 360])
def test_angles_from_0_to_180_exclusive(angle) -> None:
    _, problems = read_piece(kind_of("bend"), {"section": "round 400", "angle": angle, "radius": 600})
    assert [each.field for each in problems] == ["angle"]


@pytest.mark.parametrize("count", [0, 1, 2.5, 1000])
def test_at_least_two_gores(count) -> None:
    _, problems = read_piece(kind_of("bend"), {**HARD, "gores": count})
    assert [each.field for each in problems] == ["gores"]


def test_the_mitre_angle() -> None:
    piece, _ = read_piece(kind_of("bend"), HARD)
    assert isinstance(piece, Bend)
    assert degrees(piece.mitre) == pytest.approx(11.25)


# ---- whatever the bend -------------------------------------------------------------------------

SECTIONS = st.builds(
    lambda kind, width, height: f"round {width}" if kind == "round" else f"{kind} {width} x {height}",
    st.sampled_from(["round", "ellipse", "flat-oval", "rectangle"]),
    st.integers(100, 900),
    st.integers(100, 900),
)


@settings(max_examples=25, deadline=None)
@example(section="rectangle 100 x 100", angle=116, throat=20, count=2, turns_to=116, stagger=117)
@given(
    section=SECTIONS,
    angle=st.floats(5, 175),
    throat=st.floats(20, 2000),
    count=st.integers(2, 7),
    turns_to=st.floats(0, 360),
    stagger=st.floats(-180, 180),
)
def test_any_bend_holds(section, angle, throat, count, turns_to, stagger) -> None:
    built = bend(
        section=section, angle=angle, throat_radius=throat, gores=count, turns_to=turns_to, stagger=stagger
    )
    checks = checks_of(built)
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
    assert sum(pattern.quantity for pattern in built.patterns) == count
