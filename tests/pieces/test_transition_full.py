"""Transitions with tilted ends, on the press brake, and too long to be swung."""

from __future__ import annotations

from math import asin, atan2, cos, degrees, hypot, pi, radians, sin, sqrt
from xml.etree import ElementTree as ET

import numpy as np
import pytest
from scipy.spatial import ConvexHull

from develop.errors import InputError
from develop.job.pipeline import checks_of, checks_of_all
from develop.job.pipeline import make as write
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from tests.pieces.making import make


def transition(**given):
    return make("transition", **{"end_a": "round 400", "end_b": "round 300", "length": 450, **given})


def holds(built) -> bool:
    return all(check.holds for check in checks_of(built))


# ---- the two pieces that the trade would try ------------------------------------------------


def test_ellipse_to_round_flush_at_the_bottom_one_of_each_hand() -> None:
    piece, problems = read_piece(
        kind_of("transition"),
        {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "flush": "bottom",
         "sizes": "inside", "thickness": 1.5, "opposite_hand": 1},
    )  # fmt: skip
    assert not problems
    builds = builds_of(piece)
    assert all(check.holds for check in checks_of_all(builds))
    # It is its own mirror image: two of the one pattern.
    (built,) = builds
    assert built.patterns[0].quantity == 2
    # Elementary: flush at the bottom, the round stands 200 - 150 higher.
    assert built.solid.end_b.origin == pytest.approx([0, 50, 450])
    rows = built.patterns[0].divisions
    wide = rows[-1].a[0]
    for row, across in zip(rows, rows[::-1], strict=True):
        assert row.length == pytest.approx(across.length, abs=1e-9)
        assert row.a[0] == pytest.approx(wide - across.a[0], abs=1e-6)


def test_a_long_taper_is_given_from_chords() -> None:
    # Elementary: slant s, pattern radius R = r s / (r - r'), opening angle 2 pi r / R.
    built = make("transition", end_a="round 1600", end_b="round 1500", length=2400)
    (pattern,) = built.patterns
    slant = hypot(2400, 50)
    (figures,) = pattern.figures
    assert len(figures.rows) == 25
    for n, (r, words) in enumerate(((800, "END A"), (750, "END B"))):
        radius = r * slant / 50
        angle = 2 * pi * r / radius
        chord, rise = 2 * radius * sin(angle / 2), radius * (1 - cos(angle / 2))
        fact = next(fact for fact in pattern.facts if fact.startswith(f"{words}: radius"))
        assert f"radius {radius / 1000:.3f} m" in fact
        assert f"chord {chord:.1f}, rise {rise:.1f}" in fact
        for row in figures.rows:
            along, offset = row[1 + 2 * n], row[2 + 2 * n]
            at = angle * (int(row[0]) / 24 - 0.5)
            assert along == pytest.approx(chord / 2 + radius * sin(at), abs=1e-6)
            assert offset == pytest.approx(radius * cos(at) - radius + rise, abs=1e-6)
    assert holds(built)


def test_the_facts_give_chord_and_rise() -> None:
    facts = make("transition", end_a="round 1600", end_b="round 1500", length=2400).patterns[0].facts
    assert any(fact.startswith("END A: radius 38.408 m, too long to swing: chord 5023") for fact in facts)


def test_the_longest_radius_that_is_swung_can_be_set() -> None:
    given = {"end_a": "round 400", "end_b": "round 300", "length": 450}
    radius = 200 * hypot(450, 50) / 50
    assert not make("transition", **given).patterns[0].figures
    assert not make("transition", **given, swing=radius + 1).patterns[0].figures
    assert make("transition", **given, swing=radius - 1).patterns[0].figures
    # Edges that are no arcs are never swung.
    assert not make("transition", **{**given, "offset": "60,0"}, swing=100).patterns[0].figures


# ---- tilted ends ----------------------------------------------------------------------------


@pytest.mark.parametrize("long", [0, 90, 130])
def test_tilt_turns_end_b_about_its_centre(long: float) -> None:
    built = transition(tilt=f"slope 25 long {long}", offset="30,-20")
    end = built.solid.end_b
    assert end.origin == pytest.approx([30, -20, 450])
    points = end.point(np.linspace(end.section.breaks[0], end.section.breaks[-1], 721))
    # Still a circle of 300 about its centre, highest at `long` by r sin(slope).
    assert np.linalg.norm(points - end.origin, axis=1) == pytest.approx(np.full(721, 150), abs=1e-9)
    top = points[np.argmax(points[:, 2])] - end.origin
    assert top[2] == pytest.approx(150 * sin(radians(25)), abs=1e-3)
    assert hypot(top[0], top[1]) == pytest.approx(150 * cos(radians(25)), abs=1e-3)
    assert (degrees(atan2(top[1], top[0])) - long + 180) % 360 == pytest.approx(180, abs=0.6)
    assert holds(built)
    assert any(f"tilted 25°, the piece longest at {'right' if long == 0 else 'top' if long == 90 else '130°'}" in fact
               for fact in built.patterns[0].facts)  # fmt: skip


@pytest.mark.parametrize(
    ("end_a", "end_b"),
    [
        ("round 400", "round 300"),
        ("ellipse 600 x 300", "superellipse 300 x 300 n 4"),
        ("rectangle 500 x 300", "round 350"),
        ("flat-oval 500 x 250", "rectangle 300 x 300 r 60"),
    ],
)
@pytest.mark.parametrize("tilt", ["slope 20 long top", "slope 35 long 200"])
def test_tilted_sides_have_the_area_of_the_convex_hull(end_a: str, end_b: str, tilt: str) -> None:
    built = transition(end_a=end_a, end_b=end_b, tilt=tilt, rotate=15, offset="20,10")
    assert holds(built)
    solid = built.solid
    rims = []
    for end in (solid.end_a, solid.end_b):
        girth = end.section.girth
        rims.append(end.point(end.section.at_arc(np.linspace(0, girth, 4000, endpoint=False))))
    hull = ConvexHull(np.vstack(rims)).area - solid.end_a.section.area - solid.end_b.section.area
    # Polygons of 4000 corners fall short by about 4e-7 of the girth.
    assert built.patterns[0].net.area == pytest.approx(hull, rel=3e-6)


def test_a_tilt_of_nothing_is_no_tilt() -> None:
    plain, tilted = transition(), transition(tilt="slope 0 long top")
    assert tilted.patterns[0].net.area == plain.patterns[0].net.area
    assert tilted.patterns[0].facts == plain.patterns[0].facts


def test_flush_is_meant_as_the_end_stands_tilted() -> None:
    solid = transition(flush="top", tilt="slope 40 long top").solid
    # Tilted by 40 degrees a round of 300 reaches up 150 cos 40 from its centre.
    assert solid.end_b.origin[1] == pytest.approx(200 - 150 * cos(radians(40)), abs=1e-9)


@pytest.mark.parametrize("offset", ["0,0", "150,-80"])
@pytest.mark.parametrize("tilt", ["slope 75 long top", "slope 80 long 200"])
def test_ends_that_cross_are_refused_with_the_tilt_and_the_length_that_work(tilt: str, offset: str) -> None:
    given = {"length": 150, "offset": offset}
    with pytest.raises(InputError) as caught:
        transition(**given, tilt=tilt)
    (problem,) = caught.value.problems
    assert problem.field == "tilt"
    words = problem.allowed.split()
    slope, length = float(words[1]), float(words[words.index("length") + 2])
    long = tilt.split("long ")[1]
    assert holds(transition(**given, tilt=f"slope {slope} long {long}"))
    assert holds(transition(**{**given, "length": length}, tilt=tilt))
    for worse in (
        {**given, "tilt": f"slope {slope + 0.2} long {long}"},
        {**given, "length": length - 0.3, "tilt": tilt},
    ):
        with pytest.raises(InputError):
            transition(**worse)


def test_the_largest_tilt_of_two_rounds_in_line_by_elementary_geometry() -> None:
    # End B dips r' sin(slope) below its centre: it reaches end A's plane at 150 sin(slope) = 100. End A
    # lies below end B's plane while 200 sin(slope) < 100 cos(slope), which is sooner.
    with pytest.raises(InputError) as caught:
        transition(length=100, tilt="slope 60 long top")
    slope = float(caught.value.problems[0].allowed.split()[1])
    assert slope == pytest.approx(min(degrees(asin(100 / 150)), degrees(atan2(100, 200))), abs=0.6)


# ---- square to round, by Pythagoras ---------------------------------------------------------


def square_to_round(**given):
    return make(
        "transition", **{"end_a": "rectangle 600 x 300", "end_b": "round 400", "length": 450, **given}
    )


def corners_of(pattern):
    """Where edge A bends."""
    knots = pattern.net.curve("a").controls[::3]
    step = np.diff(knots, axis=0)
    turn = step[:-1, 0] * step[1:, 1] - step[:-1, 1] * step[1:, 0]
    return knots[1:-1][np.abs(turn) > 1e-3 * np.hypot(*step[1:].T)]


def test_true_lengths_from_the_corners_to_the_quarters_of_the_round() -> None:
    pattern = square_to_round().patterns[0]
    corners = corners_of(pattern)
    assert len(corners) == 4
    marks = {mark.text: mark.at for mark in pattern.marks if mark.edge == "b"}
    # The flat triangle over the right side has its point at (200, 0, 450): sides by Pythagoras.
    for word, length in (("RIGHT", sqrt(100**2 + 150**2 + 450**2)), ("TOP", sqrt(300**2 + 50**2 + 450**2))):
        near = np.sort(np.hypot(*(corners - marks[word]).T))[:2]
        assert near == pytest.approx([length, length], abs=1e-9)


def corner_turn(phi):
    """Running turn [rad] of the planes through the corner (300, 150, 0) that touch the round at phi."""
    p = np.stack([200 * np.cos(phi), 200 * np.sin(phi), np.full_like(phi, 450.0)], axis=1)
    t = np.stack([-np.sin(phi), np.cos(phi), np.zeros_like(phi)], axis=1)
    normal = np.cross(p - [300.0, 150.0, 0.0], t)
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    return np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(normal, axis=0), axis=1))])


@pytest.mark.parametrize("kicks", [1, 2, 5, 12])
def test_press_lines_of_a_corner_share_its_turn_equally(kicks: int) -> None:
    pattern = square_to_round(kicks=kicks, seam_at="bottom").patterns[0]
    assert len(pattern.lines) == 4 * kicks
    assert all(line.press for line in pattern.lines)
    phi = np.linspace(0, pi / 2, 200_001)
    turn = corner_turn(phi)
    assert [line.turn for line in pattern.lines] == pytest.approx([turn[-1] / kicks] * (4 * kicks), abs=1e-8)
    # The second corner from the bottom seam is the right top one.
    for n, line in enumerate(pattern.lines[kicks : 2 * kicks]):
        at = np.interp((n + 0.5) / kicks * turn[-1], turn, phi)
        true = sqrt((300 - 200 * cos(at)) ** 2 + (150 - 200 * sin(at)) ** 2 + 450**2)
        row = pattern.divisions[kicks + n + 1]
        assert row.length == pytest.approx(true, abs=1e-6)
        assert line.end == pytest.approx(row.b)
        # Stopped short of the sharp corner, straight on.
        assert np.hypot(*(line.start - row.a)) == pytest.approx(10, abs=1e-9)
        ahead, whole = line.end - line.start, row.b - row.a
        assert ahead[0] * whole[1] - ahead[1] * whole[0] == pytest.approx(0, abs=1e-6)
    assert holds(square_to_round(kicks=kicks))


def test_the_lines_to_mark_out_are_the_press_lines_between_the_seams() -> None:
    pattern = square_to_round(kicks=3).patterns[0]
    assert [row.number for row in pattern.divisions] == list(range(14))
    (figures,) = pattern.figures
    assert [row[0] for row in figures.rows] == [str(n) for n in range(1, 13)]
    assert [float(row[1]) for row in figures.rows] == pytest.approx(
        [degrees(line.turn) for line in pattern.lines], abs=0.051
    )
    assert any(fact.startswith("12 press lines, bent") for fact in pattern.facts)


@pytest.mark.parametrize(("face", "way"), [("outside", "away from you"), ("inside", "towards you")])
def test_the_sheet_says_once_which_way_to_bend(face: str, way: str) -> None:
    # A convex piece closes on its inside: with the outside up the sheet is bent down, away from who looks at it.
    facts = square_to_round(kicks=3, face=face).patterns[0].facts
    assert [fact for fact in facts if fact.startswith("bend ")] == [f"bend {way}: this face is the {face}"]
    assert not any(fact.startswith("bend ") for fact in square_to_round().patterns[0].facts)


def test_a_fold_from_corner_to_corner_is_bent_at_once_by_the_angle_of_its_planes() -> None:
    built = make("transition", end_a="rectangle 600 x 400", end_b="rectangle 300 x 200", length=300, kicks=4)
    pattern = built.patterns[0]
    # Outward normals of the right and the top plane of the frustum: their slopes are 150 and 100 in 300.
    right, top = np.array([300, 0, 150]), np.array([0, 300, 100])
    between = np.arccos(right @ top / np.linalg.norm(right) / np.linalg.norm(top))
    assert [line.turn for line in pattern.lines] == pytest.approx([between] * 4, abs=1e-10)
    # Nothing converges: the whole fold is drawn.
    assert all(
        np.hypot(*(line.end - line.start)) == pytest.approx(sqrt(150**2 + 100**2 + 300**2))
        for line in pattern.lines
    )
    assert holds(built)


@pytest.mark.parametrize(
    ("given", "count"),
    [
        ({"end_a": "rectangle 600 x 300 r 40", "end_b": "round 400"}, 16),
        ({"end_a": "flat-oval 600 x 300", "end_b": "round 400"}, 16),
        ({"end_a": "ellipse 600 x 300", "end_b": "round 400"}, 16),
        ({"end_a": "rectangle 600 x 300", "end_b": "round 400", "seam_at": 63, "flush": "left"}, 16),
        ({"end_a": "round 400", "end_b": "rectangle 400 x 300", "tilt": "slope 10 long 30"}, 16),
    ],
)
@pytest.mark.parametrize("face", ["outside", "inside"])
def test_kicks_add_up_to_the_turn_of_the_sheet_and_count_by_right_angles(
    given, count: int, face: str
) -> None:
    built = make("transition", **given, length=450, kicks=4, face=face)
    pattern = built.patterns[0]
    assert abs(len(pattern.lines) - count) <= 1
    # The turn of the finished side's normals, by small steps.
    solid = built.solid
    u = solid.seam + np.linspace(0, solid.end_a.section.period, 400_001)
    normal = solid.strip(u).normal
    turn = np.linalg.norm(np.diff(normal, axis=0), axis=1).sum()
    assert sum(line.turn for line in pattern.lines) == pytest.approx(turn, rel=2e-6)
    assert holds(built)


def test_inside_up_the_lines_and_angles_come_in_the_other_order() -> None:
    given = {"kicks": 3, "flush": "left", "tilt": "slope 8 long 20"}
    outside, inside = (square_to_round(**given, face=face).patterns[0] for face in ("outside", "inside"))
    assert [line.turn for line in inside.lines] == pytest.approx([line.turn for line in outside.lines[::-1]])
    for here, there in zip(inside.lines, outside.lines[::-1], strict=True):
        assert np.hypot(*(here.end - here.start)) == pytest.approx(
            np.hypot(*(there.end - there.start)), abs=1e-9
        )
    assert [row[1] for row in inside.figures[0].rows] == [row[1] for row in outside.figures[0].rows[::-1]]


def test_lines_stop_where_they_come_closer_than_the_die_allows() -> None:
    pattern = square_to_round(kicks=4, die=12).patterns[0]
    starts = np.array([line.start for line in pattern.lines[:4]])
    apart = np.hypot(*np.diff(starts, axis=0).T)
    assert (apart > 11.0).all()
    assert (np.hypot(*(starts - corners_of(pattern)[0]).T) > 20).all()


def test_a_die_too_wide_for_the_kicks_is_refused_with_what_works() -> None:
    with pytest.raises(InputError) as caught:
        square_to_round(kicks=12, die=40)
    (problem,) = caught.value.problems
    assert problem.field == "kicks"
    words = problem.allowed.split()
    works, die = int(words[0]), float(words[-2])
    assert holds(square_to_round(kicks=works, die=40))
    assert holds(square_to_round(kicks=12, die=die))
    for worse in ({"kicks": works + 1, "die": 40}, {"kicks": 12, "die": die + 0.2}):
        with pytest.raises(InputError):
            square_to_round(**worse)


def test_press_lines_have_a_layer_of_their_own_and_roll_lines_theirs(tmp_path) -> None:
    for mark, kicks in (("P", 3), ("R", 0)):
        piece, _ = read_piece(
            kind_of("transition"),
            {
                "end_a": "rectangle 600 x 300",
                "end_b": "round 400",
                "length": 450,
                "kicks": kicks,
                "mark": mark,
            },
        )
        write(piece, folder=str(tmp_path), formats=("svg",))
    layers = {
        mark: {
            group.get("id")
            for group in ET.parse(tmp_path / f"{mark}.svg").getroot().iter()
            if group.get("id")
        }
        for mark in "PR"
    }
    assert "press-lines" in layers["P"]
    assert "roll-lines" not in layers["P"]
    assert "roll-lines" in layers["R"]
    assert "press-lines" not in layers["R"]
