"""Offsets against elementary geometry."""

from __future__ import annotations

from math import cos, degrees, hypot, pi, radians, sin, tan

import numpy as np
import pytest
from hypothesis import assume, given, settings
from hypothesis import strategies as st

from develop.errors import InputError
from develop.job.pipeline import checks_of, checks_of_all
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from tests.pieces.making import make

GIVEN = {"section": "flat-oval 500 x 250", "length": 1200, "offset": [300, 100]}


def legs(built):
    return [(part.pattern, part.solid, part.frames[0]) for part in built.parts]


@pytest.mark.parametrize("offset", [[300, 0], [-200, 0], [0, 250], [0, -80], [120, -160]])
@pytest.mark.parametrize("angle", [20, 45, 90])
def test_end_b_lies_where_it_should_and_square_to_the_axis(offset, angle) -> None:
    built = make("offset", section="ellipse 400 x 200", length=1500, offset=offset, angle=angle)
    _, solid, frame = legs(built)[-1]
    assert solid.end_b.origin @ frame.axes + frame.origin == pytest.approx([*offset, 1500], abs=1e-9)
    assert frame.axes == pytest.approx(np.eye(3), abs=1e-12)
    _, first, start = legs(built)[0]
    assert first.end_a.origin @ start.axes + start.origin == pytest.approx([0, 0, 0], abs=1e-12)


def test_the_legs_are_as_long_as_trigonometry_says() -> None:
    angle, aside = radians(30), hypot(300, 100)
    built = make("offset", **{**GIVEN, "length": 1500, "angle": 30})
    girth = pi * 250 + 2 * 250  # two straights and a whole circle
    middle, ends = aside / sin(angle), (1500 - aside / tan(angle)) / 2
    for (pattern, _, frame), length, lean in zip(
        legs(built), (ends, middle, ends), (0, angle, 0), strict=True
    ):
        # A cylinder's area is its girth times its length on the axis, however its ends are cut.
        assert pattern.net.area == pytest.approx(girth * length, rel=1e-12)
        assert frame.axes[2, 2] == pytest.approx(cos(lean), abs=1e-12)
    # Each end leg rises over the section by half the turn; the middle leg is as long all round.
    long, middle_leg = legs(built)[0][0], legs(built)[1][0]
    lengths = [row.length for row in long.divisions]
    reach = 125 + 125 * 300 / aside  # of the flat-oval towards the offset: half circle and half straight
    assert min(lengths) == pytest.approx(ends - reach * tan(angle / 2), abs=1e-9)
    assert [row.length for row in middle_leg.divisions] == pytest.approx([middle] * 25, abs=1e-9)


def test_the_end_legs_are_short_on_the_side_that_the_axis_turns_to() -> None:
    built = make("offset", section="round 300", length=1200, offset=[0, 250])
    for (pattern, _, _), shortest in zip((legs(built)[0], legs(built)[2]), (90, 270), strict=True):
        row = min(pattern.divisions, key=lambda row: row.length)
        assert degrees(row.direction) == pytest.approx(shortest, abs=1e-6)


def test_seams_are_shortest_or_where_they_are_asked_for() -> None:
    built = make("offset", section="round 300", length=1200, offset=[200, 0])
    starts = [degrees(pattern.divisions[0].direction) % 360 for pattern in built.patterns]
    assert (np.array(starts) - [0, 270, 180] + 180) % 360 == pytest.approx([180] * 3, abs=1e-9)
    built = make("offset", section="round 300", length=1200, offset=[200, 0], seam_at=35)
    assert [degrees(p.divisions[0].direction) for p in built.patterns] == pytest.approx([35] * 3)


@pytest.mark.parametrize(
    "more", [{}, {"thickness": 6, "sizes": "outside"}, {"section": "rectangle 400 x 200 r 0", "angle": 60}]
)
def test_both_joints_are_checked_and_hold(more) -> None:
    checks = checks_of(make("offset", **{**GIVEN, **more}))
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
    names = {check.name.partition(":")[0] for check in checks}
    assert names == {"offset-1", "offset-2", "offset-3", "leg 1 to leg 2", "leg 2 to leg 3"}


def test_the_opposite_hand_is_the_mirror_image() -> None:
    piece, _ = read_piece(kind_of("offset"), {**GIVEN, "opposite_hand": 2, "quantity": 3})
    builds = builds_of(piece)
    assert all(check.holds for check in checks_of_all(builds))
    assert [[p.quantity for p in built.patterns] for built in builds] == [[3] * 3, [2] * 3]


def refused(**given):
    with pytest.raises(InputError) as caught:
        make("offset", **given)
    (problem,) = caught.value.problems
    return problem


def test_a_leg_too_short_for_its_cut_is_refused_with_what_works() -> None:
    given = {"section": "round 400", "length": 500, "offset": [300, 0], "angle": 40}
    problem = refused(**given)
    assert problem.field == "length"
    words = problem.allowed.split()
    length, angle = float(words[1]), float(words[words.index("angle") + 1])
    make("offset", **{**given, "length": length})
    make("offset", **{**given, "angle": angle})
    assert refused(**{**given, "length": length - 0.2}).field == "length"
    assert refused(**{**given, "angle": angle - 0.2}).field == "length"


def test_an_angle_too_steep_is_refused_with_the_largest_that_works() -> None:
    given = {"section": "round 400", "length": 350, "offset": [100, 0], "angle": 85}
    words = refused(**given).allowed.split()
    most = float(words[words.index("angle") + 1])
    make("offset", **{**given, "angle": most})
    assert refused(**{**given, "angle": most + 0.2}).field == "length"


def test_where_no_angle_works_only_a_length_is_offered() -> None:
    given = {"section": "round 400", "length": 100, "offset": [300, 0]}
    problem = refused(**given)
    assert "angle" not in problem.allowed
    for angle in range(1, 91):
        assert refused(**{**given, "angle": angle}).field == "length"


def test_no_offset_is_no_offset() -> None:
    assert refused(section="round 400", length=500, offset=[0, 0]).field == "offset"


@settings(max_examples=25, deadline=None)
@given(
    section=st.sampled_from(
        ["round 300", "ellipse 500 x 200", "flat-oval 200 x 450", "rectangle 300 x 200 r 20"]
    ),
    right=st.floats(-500, 500),
    up=st.floats(-500, 500),
    angle=st.floats(5, 90),
)
def test_any_offset_holds_or_is_refused(section, right, up, angle) -> None:
    assume(hypot(right, up) > 1)
    try:
        built = make("offset", section=section, length=1500, offset=[right, up], angle=angle)
    except InputError as error:
        if [each.field for each in error.problems] != ["length"]:
            raise
        return
    checks = checks_of(built)
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
