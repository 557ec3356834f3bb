"""Branches against elementary geometry: ellipses for equal tees, elliptic integrals for unequal ones."""

from __future__ import annotations

from math import cos, pi, radians, sin, sqrt, tan

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from tests.pieces.making import make


def tee(**given: object):
    return make(
        "branch",
        **{
            "header": "round 400",
            "header_length": 1000,
            "branch": "round 200",
            "centre_to_end": 500,
            **given,
        },
    )


def parts(built):
    branch, header = built.patterns
    assert branch.mark.endswith("-branch")
    assert header.mark.endswith("-header")
    return branch, header


def holds(built) -> None:
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed


@pytest.mark.parametrize("angle", [90, 60, 35, 120])
def test_the_joint_of_equal_cylinders_is_two_half_ellipses(angle: float) -> None:
    # Planes bisect the axes: half axes r / sin and r / cos of half the angle, each half an ellipse.
    r, half = 100.0, radians(angle) / 2
    built = tee(header="round 200", branch="round 200", angle=angle, header_length=1400, centre_to_end=700)

    def girth(a: float) -> float:
        a, b = max(a, r), min(a, r)
        return float(4 * a * mp.ellipe(1 - mp.mpf(b) ** 2 / mp.mpf(a) ** 2))

    expected = 0.5 * girth(r / sin(half)) + 0.5 * girth(r / cos(half))
    branch, header = parts(built)
    assert branch.net.curve("a").length == pytest.approx(expected, rel=1e-12)
    ((_, opening),) = header.openings[0].curves
    assert opening.length == pytest.approx(expected, rel=1e-12)
    holds(built)


def test_the_hole_of_an_equal_tee_unrolls_to_the_square_of_the_diameter() -> None:
    # Elementary: at height z the hole spans arcs 2 R asin(sqrt(R² − z²) / R); ∫ over z from −R to R is 4 R².
    _, header = parts(tee(header="round 200", branch="round 200"))
    assert header.openings[0].area == pytest.approx(4 * 100.0**2, rel=1e-11)
    assert header.net.area == pytest.approx(200 * pi * 1000, rel=1e-12)


@pytest.mark.parametrize("radius", [50, 100, 150, 199])
def test_the_joint_of_an_unequal_tee_is_an_elliptic_integral(radius: float) -> None:
    big, small = mp.mpf(200), mp.mpf(radius)

    def speed(t):
        # Height sqrt(R² − r² cos² t) over the branch's circle.
        return mp.sqrt(
            small**2 + (small**2 * mp.sin(t) * mp.cos(t)) ** 2 / (big**2 - (small * mp.cos(t)) ** 2)
        )

    expected = float(4 * mp.quad(speed, mp.linspace(0, mp.pi / 2, 9)))
    branch, _ = parts(tee(branch=f"round {2 * radius}"))
    assert branch.net.curve("a").length == pytest.approx(expected, rel=1e-11)


def test_ordinates_of_a_tee_are_those_of_the_two_circles() -> None:
    branch, _ = parts(tee(off_centre=40))
    for row in branch.divisions:
        # Facing the free end, right is the header's right.
        sideways = 40 + 100 * cos(row.direction)
        assert row.length == pytest.approx(500 - sqrt(200**2 - sideways**2), abs=1e-9)


def test_a_slanting_branch_is_longest_on_the_side_it_leans_away_from() -> None:
    # Elementary, in the plane of the two axes: up on the branch's free end is towards the header's end A.
    branch, _ = parts(tee(angle=60))
    at = {round(np.degrees(row.direction)) % 360: row.length for row in branch.divisions}
    reach = 200 / sin(radians(60))
    assert at[90] == pytest.approx(500 - reach + 100 / tan(radians(60)), abs=1e-9)
    assert at[270] == pytest.approx(500 - reach - 100 / tan(radians(60)), abs=1e-9)


def test_the_opening_leans_to_end_b_and_lies_at_from_a() -> None:
    _, header = parts(tee(angle=60, from_a=420))
    points = header.openings[0].curves[0][1].polyline(1e-4)
    # The axis of the branch leaves the header's surface R / tan(angle) beyond from_a.
    assert 420 < 420 + 200 / tan(radians(60)) < points[:, 1].max()
    assert points[:, 0].min() + points[:, 0].max() == pytest.approx(400 * pi, abs=1e-6)
    # The seam is opposite the branch.
    assert np.degrees(header.divisions[0].direction) == pytest.approx(270)


def test_off_centre_is_to_the_right_of_top() -> None:
    _, header = parts(tee(off_centre=60))
    top = next(mark.at[0] for mark in header.marks if mark.edge == "a" and mark.text == "TOP")
    right = next(mark.at[0] for mark in header.marks if mark.edge == "a" and mark.text == "RIGHT")
    points = header.openings[0].curves[0][1].polyline(1e-3)
    middle = 0.5 * (points[:, 0].min() + points[:, 0].max())
    assert (middle - top) * (right - top) > 0


def test_both_patterns_have_the_four_marks_of_the_branch() -> None:
    branch, header = parts(tee(angle=70, rotate=30, off_centre=20))
    on_branch = {mark.text: mark.at for mark in branch.marks if mark.edge == "a"}
    opening = [mark for mark in header.marks if mark.edge == "opening"]
    # The header has a RIGHT and a LEFT of its own.
    assert all(mark.text.startswith("BRANCH ") for mark in opening)
    on_header = {mark.text.removeprefix("BRANCH "): mark.at for mark in opening}
    assert set(on_branch) == set(on_header) == {"RIGHT", "TOP", "LEFT", "BOTTOM"}

    # Running lengths between the marks agree along both edges.
    def runs(points, curve):
        chain = curve.polyline(1e-5)
        sums = np.concatenate([[0], np.cumsum(np.hypot(*np.diff(chain, axis=0).T))])
        return {text: sums[np.argmin(np.hypot(*(chain - at).T))] for text, at in points.items()}, sums[-1]

    a, whole = runs(on_branch, branch.net.curve("a"))
    b, again = runs(on_header, header.openings[0].curves[0][1])
    assert whole == pytest.approx(again, abs=1e-3)
    for first, second in (("RIGHT", "TOP"), ("TOP", "LEFT"), ("LEFT", "BOTTOM")):
        assert (a[second] - a[first]) % whole == pytest.approx((b[second] - b[first]) % whole, abs=0.5)


@pytest.mark.parametrize("joint", ["set-on", "set-in"])
def test_in_plate_the_branch_meets_the_face_and_the_hole_is_its_bore_or_its_outside(joint: str) -> None:
    built = tee(thickness=8, sizes="outside", joint=joint)
    branch, header = parts(built)
    # Set on, the inside corner of its edge, square to the plate, is the first to touch.
    face, touches = (200.0, 92.0) if joint == "set-on" else (192.0, 100.0)
    for row in branch.divisions:
        assert row.length == pytest.approx(
            500 - sqrt(face**2 - (touches * cos(row.direction)) ** 2), abs=1e-9
        )
    ((_, opening),) = header.openings[0].curves
    points = opening.polyline(1e-4)
    height = points[:, 1].max() - points[:, 1].min()
    assert height == pytest.approx(200 - 16 if joint == "set-on" else 200, abs=1e-6)
    holds(built)


@pytest.mark.parametrize(
    ("given", "field"),
    [
        ({"branch": "round 401"}, "branch"),
        ({"off_centre": 101}, "off_centre"),
        ({"off_centre": -300}, "off_centre"),
        ({"centre_to_end": 150}, "centre_to_end"),
        ({"from_a": 60}, "from_a"),
        ({"header_length": 150, "angle": 45}, "header_length"),
    ],
)
def test_what_cannot_be_is_refused_naming_the_field(given, field) -> None:
    with pytest.raises(InputError) as caught:
        tee(**given)
    assert caught.value.problems[0].field == field


def test_the_largest_off_centre_that_is_named_works() -> None:
    with pytest.raises(InputError) as caught:
        tee(off_centre=150)
    words = caught.value.problems[0].allowed.split()
    for value in (float(words[1]), float(words[3])):
        holds(tee(off_centre=value))


@pytest.mark.parametrize("how", ["cut", "marked", "ties"])
def test_the_opening_is_cut_marked_or_left_on_ties(how: str) -> None:
    _, header = parts(tee(opening=how, thickness=4))
    assert (header.openings_as, header.tie) == (how, 8.0)
    words = {
        "cut": ", cut,",
        "marked": "only marked (dashed): cut after rolling",
        "ties": "left on 4 ties 8 wide,",
    }
    assert any(words[how] in fact for fact in header.facts), header.facts


@settings(max_examples=40, deadline=None, derandomize=True)
@given(
    st.sampled_from(["round 400", "ellipse 600 x 300", "flat-oval 600 x 300", "superellipse 500 x 400 n 3"]),
    st.sampled_from(["round 150", "ellipse 200 x 100", "flat-oval 180 x 90", "superellipse 160 x 120 n 2.5"]),
    st.floats(35, 145),
    st.floats(-60, 60),
    st.floats(0, 360),
    st.floats(0, 180),
    st.sampled_from(["outside", "inside"]),
)
def test_any_branch_into_any_header_passes_its_checks(header, branch, angle, off, leaves, turn, face) -> None:
    try:
        built = tee(
            header=header, branch=branch, angle=angle, off_centre=off, leaves_at=leaves, rotate=turn,
            face=face, header_length=2000, centre_to_end=900,
        )  # fmt: skip
    except InputError:
        return
    holds(built)


TAPER = {"kind": "transition", "end_a": "round 500", "end_b": "round 300", "length": 800}


def tapered(header, **given):
    return make("branch", header=header, **{"branch": "round 150", "centre_to_end": 500, **given})


@pytest.mark.parametrize(
    "given",
    [
        {},
        {"angle": 70, "off_centre": 30, "leaves_at": "2:00", "from_a": 350},
        {"thickness": 6, "sizes": "inside"},
        {"thickness": 6, "sizes": "outside", "joint": "set-in", "face": "inside"},
    ],
)
def test_a_branch_into_a_transition_passes_its_checks(given) -> None:
    holds(tapered(TAPER, **given))


def test_a_branch_into_a_cut_cone_passes_its_checks() -> None:
    holds(tapered({"kind": "cone", "section": "ellipse 600 x 500", "height": 1200, "cut_b": 700}))


def test_a_transition_of_equal_rounds_gives_the_same_branch_as_a_straight_header() -> None:
    equal = {"kind": "transition", "end_a": "round 400", "end_b": "round 400", "length": 900}
    a, b = (
        tapered(equal, angle=60, off_centre=40),
        tee(branch="round 150", header_length=900, angle=60, off_centre=40),
    )
    for here, there in zip(parts(a), parts(b), strict=True):
        assert here.net.area == pytest.approx(there.net.area, rel=1e-11)
        for name in "ab":
            assert here.net.curve(name).length == pytest.approx(there.net.curve(name).length, rel=1e-11)
    for row, other in zip(a.patterns[0].divisions, b.patterns[0].divisions, strict=True):
        assert row.length == pytest.approx(other.length, abs=1e-9)


def test_a_cone_and_a_cylinder_about_one_sphere_meet_in_planes() -> None:
    # Atkins, Practical Sheet and Plate Metal Work, fig. 19: with a common inscribed sphere the joint is plane.
    lean, r, height = radians(15), 100.0, 500.0
    at = r / cos(lean)
    end_a, end_b = (2 * (at + step * tan(lean)) for step in (height, -300.0))
    built = tapered(
        {"kind": "transition", "end_a": f"round {end_a!r}", "end_b": f"round {end_b!r}", "length": 800},
        branch="round 200", from_a=height,
    )  # fmt: skip
    holds(built)
    solid = built.parts[0].solid
    # The two ellipses cross where both surfaces touch the sphere: at the direction of the cone's lean.
    for low, high in ((lean + pi, 2 * pi - lean), (-lean, pi + lean)):
        u = np.linspace(low + 1e-3, high - 1e-3, 60)
        points = solid.end_a.point(u)
        centred = points - points.mean(axis=0)
        assert np.linalg.svd(centred)[1][-1] < 1e-8


@pytest.mark.parametrize(
    ("header", "given", "field"),
    [
        (TAPER, {"off_centre": 150}, "off_centre"),
        (TAPER, {"branch": "round 600"}, "branch"),
        (TAPER, {"header_length": 800}, "header_length"),
        (TAPER, {"from_a": 40}, "from_a"),
        ({**TAPER, "tilt": "slope 20 long bottom"}, {"from_a": 740}, "from_a"),
        ({**TAPER, "length": 200}, {"angle": 25, "centre_to_end": 900}, "angle"),
        ("round 400", {}, "header_length"),
    ],
)
def test_a_tapered_header_refuses_what_cannot_be(header, given, field) -> None:
    with pytest.raises(InputError) as caught:
        tapered(header, **given)
    assert caught.value.problems[0].field == field


@pytest.mark.parametrize(("off_centre", "side"), [(30, "right"), (-30, "left")])
@pytest.mark.parametrize("leaves_at", ["top", "bottom", "2:00"])
def test_off_centre_is_said_to_be_on_the_side_where_the_opening_is(off_centre, side, leaves_at) -> None:
    branch, header = parts(tee(off_centre=off_centre, leaves_at=leaves_at))
    for pattern in (branch, header):
        assert any(f", 30 off centre to the {side}" in fact for fact in pattern.facts)
        assert any("as the header's END B is faced, leaving direction up" in fact for fact in pattern.facts)
    # Outside up and END A below, direction grows to the right of the sheet, anticlockwise for one who
    # faces END B: what lies to the right of the leaving direction is on the left of the middle.
    x = header.openings[0].curves[0][1].polyline(1e-3)[:, 0]
    middle = 0.5 * header.net.curve("a").length
    assert bool(0.5 * (x.min() + x.max()) < middle) == (side == "right")


def test_nothing_is_said_of_sides_when_the_branch_is_on_the_centre() -> None:
    assert not any("off centre" in fact or "faced" in fact for p in parts(tee()) for fact in p.facts)


@pytest.mark.parametrize(("apex", "line"), [("0,0", "axis"), ("150,0", "sloping line of centres")])
def test_the_sheet_says_which_line_the_angle_is_measured_to(apex, line) -> None:
    header = {
        "kind": "cone",
        "section": "round 600",
        "height": 1500,
        "apex_offset": apex,
        "cut_b": "height 900",
    }
    built = make("branch", header=header, branch="round 250", angle=70, centre_to_end=600)
    for pattern in parts(built):
        assert any(f"70° to the header's {line}" in fact for fact in pattern.facts)


@pytest.mark.parametrize(
    ("branch", "largest"),
    [
        ("round 320", "round 300 or less"),
        ("ellipse 400 x 200", "ellipse 300 x 150 or less"),
        ("flat-oval 630 x 210", "flat-oval 300 x 100 or less"),
    ],
)
def test_a_branch_too_large_is_told_the_largest_that_works(branch: str, largest: str) -> None:
    given = {"header": "round 300", "header_length": 1500, "centre_to_end": 500}
    with pytest.raises(InputError) as caught:
        make("branch", **given, branch=branch)
    (problem,) = caught.value.problems
    assert (problem.field, problem.allowed) == ("branch", f"{largest}, or a larger header")
    make("branch", **given, branch=largest.removesuffix(" or less"))


@pytest.mark.parametrize(
    ("kind", "given", "field", "needed"),
    [
        ("branch", {"lap": 20}, "lap", "joint = tap"),
        ("branch", {"lap": 20, "joint": "set-in"}, "lap", "joint = tap"),
        ("branch", {"pad_in": "one"}, "pad_in", "pad"),
        ("branch", {"pad_thickness": 5}, "pad_thickness", "pad"),
        ("branch", {"tell_tale": 6, "pad": 0}, "tell_tale", "pad"),
        ("marking-band", {"joint": "set-on"}, "joint", "onto"),
    ],
)
def test_a_field_without_effect_is_refused(
    kind: str, given: dict[str, object], field: str, needed: str
) -> None:
    good = kind_of(kind).example
    assert read_piece(kind_of(kind), good)[1] == []
    (problem,) = read_piece(kind_of(kind), {**good, **given})[1]
    assert (problem.field, problem.allowed) == (field, f"only together with {needed}")
    # What is given for all pieces need not have an effect on each.
    assert read_piece(kind_of(kind), {**good, **given}, shared=[field])[1] == []
