"""Straight pieces against elementary geometry."""

from __future__ import annotations

from math import cos, degrees, pi, radians, tan

import numpy as np
import pytest

from develop.errors import InputError
from tests.pieces.making import make


def edge(pattern, name):
    return pattern.net.curve(name)


def test_a_square_round_is_a_rectangle_of_girth_by_length() -> None:
    (pattern,) = make("straight", section="round 400", length=620).patterns
    assert edge(pattern, "a").length == pytest.approx(400 * pi, rel=1e-14)
    assert edge(pattern, "b").length == pytest.approx(400 * pi, rel=1e-14)
    assert pattern.net.area == pytest.approx(400 * pi * 620, rel=1e-14)
    corners = np.array([curve.start for _, curve in pattern.net.curves])
    expected = [[0, 0], [400 * pi, 0], [400 * pi, 620], [0, 620]]
    assert np.abs(corners - expected).max() < 1e-10


def test_ordinates_of_a_cut_cylinder_follow_the_cosine() -> None:
    # Elementary: on a cylinder of radius r a plane at slope s rises r tan s cos(direction - long).
    (pattern,) = make("straight", section="round 300", length=500, cut_b="slope 25 long top").patterns
    assert len(pattern.divisions) == 25
    for row in pattern.divisions:
        expected = 500 + 150 * tan(radians(25)) * cos(row.direction - pi / 2)
        assert row.length == pytest.approx(expected, abs=1e-9)
        assert row.a[1] == pytest.approx(0.0, abs=1e-9)
        assert row.b[1] == pytest.approx(expected, abs=1e-9)


@pytest.mark.parametrize("end", ["cut_a", "cut_b"])
@pytest.mark.parametrize(("word", "direction"), [("right", 0), ("top", 90), ("left", 180), ("bottom", 270)])
def test_long_is_where_that_end_is_longest(end: str, word: str, direction: int) -> None:
    (pattern,) = make(
        "straight", section="ellipse 600 x 300", length=900, **{end: f"slope 20 long {word}"}
    ).patterns
    longest = max(pattern.divisions, key=lambda row: row.length)
    assert (degrees(longest.direction) - direction + 180) % 360 == pytest.approx(180, abs=1e-6)


def test_the_seam_is_where_the_side_is_shortest_and_ties_go_to_the_bottom() -> None:
    (cut,) = make("straight", section="round 300", length=500, cut_b="slope 25 long 40").patterns
    assert degrees(cut.divisions[0].direction) == pytest.approx(220)
    (square,) = make("straight", section="round 300", length=500).patterns
    assert degrees(square.divisions[0].direction) == pytest.approx(270)


def test_divisions_are_equal_arcs_from_seam_to_seam() -> None:
    (pattern,) = make("straight", section="ellipse 600 x 300", length=800, divisions=7).patterns
    arcs = np.array([row.arc_a for row in pattern.divisions])
    assert np.allclose(arcs, np.arange(8) / 7 * arcs[-1], rtol=0, atol=1e-9)
    assert arcs[-1] == pytest.approx(pattern.net.curve("a").length, abs=1e-9)


def test_turns_of_the_sheet_add_up_to_once_round() -> None:
    (pattern,) = make("straight", section="ellipse 600 x 300", length=800).patterns
    assert sum(line.turn for line in pattern.lines) == pytest.approx(2 * pi, abs=1e-12)
    # Roll radii between the sharpest and the flattest of the ellipse, b²/a and a²/b.
    radii = [radius for line in pattern.lines for radius in line.radius]
    assert min(radii) == pytest.approx(150**2 / 300, rel=1e-9)
    assert max(radii) == pytest.approx(300**2 / 150, rel=1e-9)


@pytest.mark.parametrize(
    ("sizes", "neutral", "distance"),
    [("inside", 0.5, 5.0), ("outside", 0.5, -5.0), ("mean", 0.5, 0.0), ("inside", 0.4, 4.0)],
)
def test_the_girth_is_that_of_the_neutral_line(sizes: str, neutral: float, distance: float) -> None:
    # Steiner's formula: a parallel curve at distance d is longer by 2 pi d.
    thin = make("straight", section="ellipse 600 x 300", length=800).patterns[0]
    thick = make(
        "straight",
        section="ellipse 600 x 300",
        length=800,
        thickness=10,
        sizes=sizes,
        neutral_line=neutral,
    ).patterns[0]
    grown = thick.net.curve("a").length - thin.net.curve("a").length
    assert grown == pytest.approx(2 * pi * distance, abs=1e-9)


def test_a_pipe_is_measured_outside_whatever_sizes_says() -> None:
    # 219.1 outside, 6.3 wall, neutral line in the middle.
    for sizes in ("inside", "mean", "outside"):
        (pattern,) = make("straight", section="pipe DN 200", length=300, thickness=6.3, sizes=sizes).patterns
        assert pattern.net.curve("a").length == pytest.approx(pi * (219.1 - 6.3), rel=1e-12)


@pytest.mark.parametrize(
    ("fields", "named"),
    [
        ({"cut_b": "slope 50 long top"}, "cut_b"),
        ({"cut_a": "slope 50 long top"}, "cut_a"),
        ({"cut_a": "slope 30 long top", "cut_b": "slope 31 long top"}, "cut_b"),
    ],
)
def test_a_cut_past_the_other_end_is_refused_with_the_steepest_that_works(fields, named) -> None:
    with pytest.raises(InputError) as caught:
        make("straight", section="round 200", length=100, **fields)
    (problem,) = caught.value.problems
    assert problem.field == named
    words = problem.allowed.split()
    slope, length = float(words[1]), float(words[words.index("length") + 2])
    # What the message allows must work, and a little more must not.
    make("straight", section="round 200", length=100, **{**fields, named: f"slope {slope} long top"})
    make("straight", section="round 200", length=length, **fields)
    with pytest.raises(InputError):
        make(
            "straight", section="round 200", length=100, **{**fields, named: f"slope {slope + 0.2} long top"}
        )
    with pytest.raises(InputError):
        make("straight", section="round 200", length=length - 0.3, **fields)


def test_a_wall_thicker_than_the_tightest_radius_is_refused() -> None:
    with pytest.raises(InputError) as caught:
        make("straight", section="ellipse 600 x 100", length=500, thickness=12, sizes="outside")
    (problem,) = caught.value.problems
    assert problem.field == "thickness"
    # b²/a = 50²/300 = 8.333: the ellipse's tightest radius.
    assert "8.3 mm or less" in problem.allowed


def test_height_over_width_is_allowed() -> None:
    tall = make("straight", section="ellipse 300 x 600", length=500).patterns[0]
    wide = make("straight", section="ellipse 600 x 300", length=500).patterns[0]
    assert tall.net.curve("a").length == pytest.approx(wide.net.curve("a").length, rel=1e-14)


def test_full_lines_on_plate_and_ticks_on_sheet() -> None:
    def full(**given: object) -> bool:
        return make("straight", section="round 300", length=500, **given).patterns[0].full_lines

    assert not full()
    assert not full(thickness=2.9)
    assert full(thickness=3)
    assert full(marks="full")
    assert not full(thickness=12, marks="ticks")
    assert full(marks="pen")
    assert not full(thickness=12, marks="pops")


@pytest.mark.parametrize("marks", ["ticks", "full", "pops", "pen", "none"])
def test_lines_are_marked_as_asked(marks: str) -> None:
    for thickness in (1, 12):
        (pattern,) = make(
            "straight", section="round 300", length=500, marks=marks, thickness=thickness
        ).patterns
        assert pattern.lines_as == marks


@pytest.mark.parametrize("face", ["outside", "inside"])
def test_witness_marks_know_their_running_lengths(face: str) -> None:
    (pattern,) = make("straight", section="round 300", length=500, seam_at="bottom", face=face).patterns
    quarter = 300 * pi / 4
    words = ["BOTTOM", "RIGHT", "TOP", "LEFT", "BOTTOM"]
    for edge in "ab":
        marks = sorted((mark.arc, mark.text) for mark in pattern.marks if mark.edge == edge)
        assert [text for _, text in marks] == (words if face == "outside" else words[::-1])
        assert [arc for arc, _ in marks] == pytest.approx([n * quarter for n in range(5)], abs=1e-9)
        for mark in pattern.marks:
            assert mark.at[0] == pytest.approx(mark.arc, abs=1e-9)  # square edges are straight
