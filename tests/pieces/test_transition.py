"""Transitions against elementary geometry and in the finished piece."""

from __future__ import annotations

from math import degrees, hypot, pi, radians, sqrt

import numpy as np
import pytest

from develop.errors import InputError
from tests.pieces.making import make


def test_two_rounds_in_line_are_a_cone() -> None:
    # Elementary: a frustum develops into a ring sector of radii R r1/(r1 - r2) and angle 2 pi (r1 - r2)/s.
    big, small, height = 200.0, 120.0, 150.0
    slant = hypot(big - small, height)
    (pattern,) = make("transition", end_a="round 400", end_b="round 240", length=150).patterns
    assert pattern.net.area == pytest.approx(pi * (big + small) * slant, rel=1e-12)
    a = pattern.net.curve("a").polyline(1e-3)
    # Circle through three points of edge A.
    p, q, r = a[0], a[len(a) // 2], a[-1]
    m = 2 * np.array([q - p, r - p])
    centre = np.linalg.solve(m, [q @ q - p @ p, r @ r - p @ p])
    assert np.hypot(*(p - centre)) == pytest.approx(big * slant / (big - small), rel=1e-9)
    assert all(row.length == pytest.approx(slant, rel=1e-12) for row in pattern.divisions)


@pytest.mark.parametrize("side", ["bottom", "top", "left", "right"])
@pytest.mark.parametrize("rotate", [0, 35])
def test_flush_brings_both_ends_level_on_that_side(side: str, rotate: float) -> None:
    solid = make(
        "transition",
        end_a="ellipse 600 x 300",
        end_b="ellipse 420 x 200",
        length=450,
        flush=side,
        rotate=rotate,
    ).solid
    axis, sign = {"right": (0, 1), "left": (0, -1), "top": (1, 1), "bottom": (1, -1)}[side]
    u = np.linspace(0, 2 * pi, 20001)
    reach_a = (sign * solid.end_a.point(u)[:, axis]).max()
    reach_b = (sign * solid.end_b.point(u)[:, axis]).max()
    assert reach_a == pytest.approx(reach_b, abs=1e-4)
    # The other way the centre has not moved.
    assert solid.end_b.origin[1 - axis] == pytest.approx(0.0, abs=1e-9)


def test_offset_moves_end_b_right_and_up_and_rotate_turns_it_anticlockwise() -> None:
    solid = make(
        "transition",
        end_a="round 400",
        end_b="ellipse 300 x 100",
        length=450,
        offset=[70, -20],
        rotate=30,
    ).solid
    assert solid.end_b.origin == pytest.approx([70, -20, 450])
    far = solid.end_b.point(np.array([0.0]))[0] - solid.end_b.origin
    assert far == pytest.approx([150 * sqrt(3) / 2, 75, 0])


def test_marks_at_end_b_are_in_the_piece_frame_whatever_its_rotation() -> None:
    # A round does not change when it is turned about its centre, so neither may its marks.
    plain, turned = (
        make("transition", end_a="ellipse 600 x 300", end_b="round 400", length=450, rotate=angle).patterns[0]
        for angle in (0, 50)
    )
    # The datum lines touch the drawn outline, which is exact to 0.0002 mm only.
    shift = plain.marks[0].at - turned.marks[0].at
    assert np.abs(shift).max() < 4e-4
    for mark, other in zip(plain.marks, turned.marks, strict=True):
        assert mark.text == other.text
        assert np.abs(mark.at - other.at - shift).max() < 1e-8


def test_each_end_has_its_four_marks_and_one_on_the_seam_twice() -> None:
    (pattern,) = make("transition", end_a="ellipse 600 x 300", end_b="round 400", length=450).patterns
    for edge in "ab":
        texts = sorted(mark.text for mark in pattern.marks if mark.edge == edge)
        assert texts == ["BOTTOM", "BOTTOM", "LEFT", "RIGHT", "TOP"]
    assert degrees(pattern.divisions[0].direction) == pytest.approx(270)


def test_marks_point_into_the_sheet() -> None:
    (pattern,) = make(
        "transition", end_a="ellipse 600 x 300", end_b="round 400", length=450, face="inside"
    ).patterns
    middle = np.mean([[*row.a, *row.b] for row in pattern.divisions], axis=0).reshape(2, 2)
    for mark in pattern.marks:
        towards = middle[1 if mark.edge == "a" else 0] - mark.at
        assert np.hypot(*mark.inward) == pytest.approx(1.0)
        if mark.text in ("TOP",):
            assert mark.inward @ towards > 0


def test_direction_grows_to_the_right_seen_on_the_outside_and_to_the_left_on_the_inside() -> None:
    given = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "seam_at": "bottom"}
    (outside,) = make("transition", **given).patterns
    (inside,) = make("transition", **given, face="inside").patterns
    names = ["RIGHT", "TOP", "LEFT"]

    def order(pattern):
        found = sorted((m.at[0], m.text) for m in pattern.marks if m.edge == "a" and m.text in names)
        return [text for _, text in found]

    assert order(outside) == names
    assert order(inside) == names[::-1]
    width = outside.net.curve("seam_right").start[0] - outside.net.curve("seam_left").end[0]
    for here, there in zip(outside.divisions, inside.divisions[::-1], strict=True):
        assert np.abs(here.a * [-1, 1] + [width, 0] - there.a).max() < 1e-6
        assert np.abs(here.b * [-1, 1] + [width, 0] - there.b).max() < 1e-6
    assert sum(line.turn for line in inside.lines) == pytest.approx(sum(line.turn for line in outside.lines))


def test_no_coordinate_is_negative_and_the_datum_lines_touch_the_pattern() -> None:
    (pattern,) = make(
        "transition", end_a="ellipse 600 x 300", end_b="round 400", length=450, offset=[200, 90]
    ).patterns
    low = np.vstack([curve.polyline(1e-7) for _, curve in pattern.cut.curves]).min(axis=0)
    assert (low > -1e-9).all()
    assert (low < 1e-6).all()


def test_true_lengths_are_the_distances_in_space() -> None:
    built = make("transition", end_a="ellipse 600 x 300", end_b="round 400", length=450, offset=[80, 40])
    (pattern,) = built.patterns
    for row in pattern.divisions:
        line = built.solid.line_at(row.direction)
        assert row.length == pytest.approx(np.linalg.norm(line[1] - line[0]), abs=1e-9)
        assert np.hypot(*(row.b - row.a)) == pytest.approx(row.length, abs=1e-9)


def test_a_tapered_side_in_plate_takes_the_thickness_square_to_the_plate() -> None:
    # Elementary: the mid surface of a cone lies t/2 square to the plate, t/2 cos(half angle) in radius.
    t, big, small, height = 16.0, 1200.0, 450.0, 700.0
    slant = hypot(big - small, height)
    (pattern,) = make(
        "transition", end_a="round 2400", end_b="round 900", length=700, thickness=16, sizes="inside"
    ).patterns
    out = t / 2 * height / slant
    assert pattern.net.curve("a").length == pytest.approx(2 * pi * (big + out), rel=1e-12)
    assert pattern.net.curve("b").length == pytest.approx(2 * pi * (small + out), rel=1e-12)


def test_seam_at_a_clock_position() -> None:
    (pattern,) = make(
        "transition", end_a="ellipse 600 x 300", end_b="round 400", length=450, seam_at="2:00"
    ).patterns
    assert pattern.divisions[0].direction == pytest.approx(radians(30))


def test_a_wall_with_no_inside_is_refused_naming_the_end() -> None:
    with pytest.raises(InputError) as caught:
        make("transition", end_a="round 400", end_b="round 10", length=450, thickness=12, sizes="outside")
    assert "end_b" in str(caught.value)


@pytest.mark.parametrize("sizes", ["mean", "outside"])
def test_a_side_bent_tighter_than_its_wall_is_refused_with_what_works(sizes: str) -> None:
    # Elementary: a cone's roll radius is its radius over the cosine of its lean. Here the side also
    # slants so far sideways that it is bent tighter than either end.
    given = {"end_a": "round 668.3", "end_b": "round 60", "length": 87.1, "offset": [316.7, -160.1]}
    make("transition", **given, thickness=12.6, sizes="inside")
    with pytest.raises(InputError) as caught:
        make("transition", **given, thickness=25, sizes=sizes)
    (problem,) = caught.value.problems
    assert problem.field == "thickness"
    most = float(problem.allowed.split()[0])
    make("transition", **given, thickness=most, sizes=sizes)


def test_a_transition_as_good_as_flat_is_refused_with_the_least_length() -> None:
    with pytest.raises(InputError) as caught:
        make("transition", end_a="round 394", end_b="round 219", length=0.3)
    (problem,) = caught.value.problems
    assert problem.field == "length"
    make("transition", end_a="round 394", end_b="round 219", length=float(problem.allowed.split()[0]))
