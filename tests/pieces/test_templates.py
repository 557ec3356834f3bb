"""Checking templates and floor outlines, against elementary geometry, Steiner's formula, scipy and shapely."""

from __future__ import annotations

from dataclasses import replace
from math import cos, hypot, pi, radians, sin, tan

import numpy as np
import pytest
from scipy.special import ellipe
from shapely import Polygon

from develop.checks import check_part
from develop.job.pipeline import checks_of, make
from develop.pattern.curve import Curve
from develop.pattern.pattern import Outline
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import builds_of
from develop.solid import FlatTemplate, FloorOutlines


def built(kind: str, **given: object):
    piece, problems = read_piece(kind_of(kind), given)
    assert not problems, problems
    return builds_of(piece)[0]


def parts(kind: str, what=FlatTemplate, **given: object):
    return [part for part in built(kind, **given).parts if isinstance(part.solid, what)]


def outline(pattern) -> np.ndarray:
    return np.vstack([curve.polyline(0.001)[:-1] for _, curve in pattern.net.curves])


ELLIPSE = {
    "kind": "straight",
    "section": "ellipse 600 x 300",
    "length": 500,
    "thickness": 6,
    "sizes": "outside",
}
OUT, IN = (600.0, 300.0), 6.0


def ellipse_girth() -> float:
    return 4 * 300 * float(ellipe(1 - 0.25))


def test_none_unless_asked_for() -> None:
    assert len(built(**ELLIPSE).parts) == 1


def test_half_of_the_inside_by_steiner() -> None:
    (part,) = parts(**ELLIPSE, templates="inside")
    curve = dict(part.pattern.net.curves)
    assert curve["profile"].length == pytest.approx((ellipse_girth() - 2 * pi * IN) / 2, rel=1e-12)
    assert curve["edge_1"].length == pytest.approx(588, rel=1e-12)
    area = (pi * 300 * 150 - ellipse_girth() * IN + pi * IN**2) / 2
    assert part.pattern.net.area == pytest.approx(area, rel=1e-12)
    assert Polygon(outline(part.pattern)).area == pytest.approx(area, rel=1e-5)
    # A true parallel: every point keeps 6 mm from the outside ellipse.
    points = curve["profile"].polyline(0.01) - part.solid.shift
    t = np.linspace(0, 2 * pi, 20001)
    whole = np.stack([300 * np.cos(t), 150 * np.sin(t)], axis=1)
    apart = [np.hypot(*(whole - point).T).min() for point in points[::5]]
    assert apart == pytest.approx(np.full(len(apart), IN), abs=1e-3)


def test_half_of_the_outside_is_open_for_it() -> None:
    (part,) = parts(**ELLIPSE, templates="outside")
    shape = Polygon(outline(part.pattern))
    assert shape.is_valid
    t = np.linspace(0, pi, 2001)
    half = Polygon(np.stack([300 * np.cos(t), 150 * np.sin(t)], axis=1) + part.solid.shift)
    assert shape.intersection(half).area < 1.0
    hull = shape.envelope
    assert hull.area == pytest.approx(shape.area + half.area, rel=1e-5)
    # A margin of a tenth of the larger size, as the page says.
    low_x, low_y, high_x, high_y = hull.bounds
    assert (high_x - low_x, high_y - low_y) == pytest.approx((720, 210), abs=1e-6)
    assert dict(part.pattern.net.curves)["profile"].length == pytest.approx(ellipse_girth() / 2, rel=1e-12)


@pytest.mark.parametrize(
    "section", ["rectangle 400 x 200 r 30", "rectangle 400 x 200 r 0", "flat-oval 400 x 200"]
)
@pytest.mark.parametrize("share", ["half", "quarter"])
def test_corners_and_straight_sides(section: str, share: str) -> None:
    found = parts(
        "straight",
        section=section,
        length=300,
        thickness=4,
        sizes="inside",
        templates="both",
        template_share=share,
    )
    inside, outside = (dict(part.pattern.net.curves)["profile"].length for part in found)
    girth, area = {
        "rectangle 400 x 200 r 30": (1200 - 240 + 60 * pi, 80000 - 3600 + 900 * pi),
        "rectangle 400 x 200 r 0": (1200, 80000),
        "flat-oval 400 x 200": (400 + 200 * pi, 40000 + 10000 * pi),
    }[section]
    parted = 4 if share == "quarter" else 2
    assert inside == pytest.approx(girth / parted, rel=1e-12)
    assert outside == pytest.approx((girth + 8 * pi) / parted, rel=1e-12)
    assert found[0].pattern.net.area == pytest.approx(area / parted, rel=1e-12)
    assert all(check.holds for part in found for check in check_part(part.pattern, part.solid))


def test_round_ones_only_on_request() -> None:
    given = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "templates": "inside"}
    (part,) = parts("transition", **given)
    assert any("END A" in fact for fact in part.pattern.facts)
    assert len(parts("transition", **given, template_sections="all")) == 2
    round_one = {"section": "round 400", "length": 300, "templates": "both"}
    assert parts("straight", **round_one) == []
    (text,) = built("straight", **round_one).warnings
    assert "every section is round; template_sections = all" in text
    assert built("straight", **round_one, template_sections="all").warnings == ()
    assert len(parts("straight", **round_one, template_sections="all")) == 2


def test_one_template_for_ends_that_are_alike() -> None:
    (part,) = parts("bend", section="ellipse 600 x 300", angle=90, radius=600, gores=4, templates="inside")
    assert any("both ends" in fact for fact in part.pattern.facts)
    two = parts(
        "transition", end_a="ellipse 600 x 300", end_b="ellipse 300 x 600", length=500, templates="inside"
    )
    assert len(two) == 2


def test_a_cut_cone_has_its_small_end() -> None:
    found = parts(
        "cone", section="ellipse 600 x 300", height=900, cut_b="height 300", thickness=3, sizes="inside",
        templates="both", template_share="quarter",
    )  # fmt: skip
    lengths = [dict(part.pattern.net.curves)["profile"].length for part in found]
    girth = ellipse_girth()
    small = girth * 2 / 3
    expected = [girth, girth + 6 * pi, small, small + 6 * pi]
    assert [4 * length for length in lengths] == pytest.approx(expected, rel=1e-11)
    assert all(check.holds for part in found for check in check_part(part.pattern, part.solid))
    sloping = parts(
        "cone",
        section="ellipse 600 x 300",
        height=900,
        cut_b="height 300 slope 10 long top",
        templates="inside",
    )
    assert len(sloping) == 1


def test_a_sloping_wall_is_said() -> None:
    (part,) = parts(
        "transition", end_a="ellipse 600 x 300", end_b="round 200", length=200, thickness=10, sizes="inside",
        templates="outside",
    )  # fmt: skip
    assert any(fact.startswith("true parallel section; the sloping wall") for fact in part.pattern.facts)
    (inner,) = parts(
        "transition", end_a="ellipse 600 x 300", end_b="round 200", length=200, thickness=10, sizes="inside",
        templates="inside",
    )  # fmt: skip
    assert not any("sloping" in fact for fact in inner.pattern.facts)


def test_the_marks_name_directions_of_the_piece() -> None:
    found = parts(
        "transition", end_a="round 400", end_b="ellipse 600 x 300", length=450, rotate=30, templates="inside"
    )
    (part,) = found
    marks = {mark.text: mark.at - part.solid.shift for mark in part.pattern.marks}
    # Turned anticlockwise by 30 degrees, the piece's top lies 60 degrees from the ellipse's own right.
    assert set(marks) == {"TOP", "LEFT"}
    for word, angle in (("TOP", 60), ("LEFT", 150)):
        t = radians(angle)
        far = 1 / hypot(cos(t) / 300, sin(t) / 150)
        assert marks[word] == pytest.approx([far * cos(t), far * sin(t)], abs=1e-6)


def test_the_checks_find_a_wrong_template() -> None:
    (part,) = parts(**ELLIPSE, templates="inside")
    curves = tuple(
        (name, Curve(curve.controls * 1.0002, curve.length)) for name, curve in part.pattern.net.curves
    )
    wrong = replace(part.pattern, net=Outline(curves, part.pattern.net.area))
    failed = {check.name for check in check_part(wrong, part.solid) if not check.holds}
    assert {
        "profile edge as drawn, against its length",
        "profile, largest distance from its section",
    } <= failed
    longer = tuple((name, Curve(c.controls, c.length * (1 + 1e-9))) for name, c in part.pattern.net.curves)
    wrong = replace(part.pattern, net=Outline(longer, part.pattern.net.area * (1 + 1e-9)))
    failed = {check.name for check in check_part(wrong, part.solid) if not check.holds}
    assert {"profile edge against its length", "area less openings"} <= failed


def test_the_plan_of_both_ends() -> None:
    (part,) = parts(
        "transition", FloorOutlines, end_a="ellipse 600 x 300", end_b="round 400", length=450, offset="30,50",
        thickness=4, floor="outlines",
    )  # fmt: skip
    names = [name for name, _ in part.solid.outlines]
    assert names == ["END A outside", "END A inside", "END B outside", "END B inside"]
    sizes = [np.ptp(curve.bounds(), axis=0) for curve in part.pattern.thin]
    assert np.array(sizes) == pytest.approx(
        np.array([[604, 304], [596, 296], [404, 404], [396, 396]]), abs=1e-3
    )
    a, _, b, _ = (curve.bounds().mean(axis=0) for curve in part.pattern.thin)
    assert b - a == pytest.approx([30, 50], abs=1e-3)
    marks = {mark.text: mark.at for mark in part.pattern.marks}
    assert marks["A RIGHT"] - a == pytest.approx([302, 0], abs=1e-6)
    assert marks["B TOP"] - b == pytest.approx([0, 198], abs=1e-6)  # the smaller end is marked inside
    assert any("SEAM" in text for text in marks if text.startswith("A"))
    assert any("SEAM" in text for text in marks if text.startswith("B"))
    assert "END B 30 right, 50 up" in part.pattern.facts


def test_the_seam_on_the_floor_lies_where_it_was_put() -> None:
    (part,) = parts("straight", FloorOutlines, section="round 400", length=300, seam_at=30, floor="outlines")
    (mark,) = (mark for mark in part.pattern.marks if "SEAM" in mark.text)
    centre = part.pattern.thin[0].bounds().mean(axis=0)
    t = radians(30)
    assert mark.at - centre == pytest.approx([200 * cos(t), 200 * sin(t)], abs=1e-3)
    assert mark.arc == pytest.approx(200 * t, abs=1e-6)


def test_a_sloping_end_is_drawn_in_its_own_plane_and_a_tilted_one_in_plan() -> None:
    first, second = parts(
        "straight",
        FloorOutlines,
        section="round 400",
        length=500,
        cut_b="slope 30 long top",
        floor="outlines",
    )
    assert np.ptp(first.pattern.thin[0].bounds(), axis=0) == pytest.approx([400, 400], abs=1e-3)
    assert np.ptp(second.pattern.thin[0].bounds(), axis=0) == pytest.approx(
        [400, 400 / cos(pi / 6)], abs=1e-3
    )
    assert second.pattern.thin[0].length == pytest.approx(
        4 * 200 / cos(pi / 6) * float(ellipe(1 - cos(pi / 6) ** 2)), rel=1e-11
    )
    (plan,) = parts(
        "transition", FloorOutlines, end_a="round 400", end_b="round 300", length=450, tilt="slope 20 long top",
        floor="outlines",
    )  # fmt: skip
    tilted = plan.pattern.thin[1]
    assert np.ptp(tilted.bounds(), axis=0) == pytest.approx([300, 300 * cos(radians(20))], abs=1e-3)
    assert all(check.holds for check in check_part(plan.pattern, plan.solid))


def test_only_free_ends_are_drawn() -> None:
    found = parts(
        "bend", FloorOutlines, section="ellipse 600 x 300", angle=90, radius=600, gores=4, floor="outlines"
    )
    # Both half gores have a square end that is free; every mitre is joined.
    assert len(found) == 2
    for part in found:
        assert np.ptp(part.pattern.thin[0].bounds(), axis=0) == pytest.approx([600, 300], abs=1e-3)
    assert tan(radians(15)) > 0.2  # a mitre would be longer than the section by as much


def test_the_checks_find_a_wrong_outline() -> None:
    (part,) = parts("straight", FloorOutlines, section="ellipse 600 x 300", length=300, floor="outlines")
    moved = tuple(curve.moved(turn=np.eye(2), shift=np.array([0.01, 0.0])) for curve in part.pattern.thin)
    failed = [c.name for c in check_part(replace(part.pattern, thin=moved), part.solid) if not c.holds]
    assert failed == ["outline of END A/B, largest distance from its section"]


@pytest.mark.parametrize(
    ("kind", "given"),
    [
        ("straight", {"section": "superellipse 600 x 300 n 8", "length": 500, "opposite_hand": 1,
                      "cut_b": "slope 20 long right"}),
        ("transition", {"end_a": "rectangle 600 x 400 r 20", "end_b": "flat-oval 500 x 250", "length": 500,
                        "rotate": 20, "opposite_hand": 1}),
        ("branch", {"header": "ellipse 600 x 400", "header_length": 900, "branch": "ellipse 200 x 300",
                    "centre_to_end": 600}),
        ("offset", {"section": "ellipse 300 x 200", "length": 900, "offset": "100,50", "angle": 30}),
    ],
)  # fmt: skip
def test_every_check_holds_and_every_file_is_written(kind: str, given: dict, tmp_path) -> None:
    piece, problems = read_piece(
        kind_of(kind),
        {**given, "templates": "both", "template_sections": "all", "floor": "outlines", "thickness": 2},
    )
    assert not problems, problems
    outcome = make(piece, folder=str(tmp_path))
    assert outcome.failed == ()
    for file in outcome.files:
        assert (tmp_path / file).stat().st_size > 0
    assert any("template" in file for file in outcome.files)
    assert all(check.holds for check in checks_of(builds_of(piece)[0]))


def test_the_floor_has_a_table_of_points_on_the_tape_pages_alone() -> None:
    (part,) = parts("straight", FloorOutlines, section="ellipse 600 x 300", length=300, floor="outlines")
    assert part.pattern.figures == ()
    (table,) = part.pattern.taped
    centre = part.pattern.thin[0].bounds().mean(axis=0)
    for _, _, x, y in table.rows:
        # The ellipse's own equation.
        assert ((x - centre[0]) / 300) ** 2 + ((y - centre[1]) / 150) ** 2 == pytest.approx(1, abs=1e-5)
    assert len(table.rows) >= 24


def test_a_section_that_does_not_lie_along_its_axes_gets_a_half() -> None:
    # An ellipse that leans: its caliper readings are symmetrical about 30 degrees, not about 0.
    (part,) = parts(
        "straight", section="measured 0:332 30:340 60:332 120:320 150:324", length=300, templates="inside",
        template_share="quarter",
    )  # fmt: skip
    assert "half: turned half round it checks the other half" in part.pattern.facts
    curve = dict(part.pattern.net.curves)["profile"]
    assert curve.start + curve.end == pytest.approx(2 * part.solid.shift, abs=1e-9)  # ends across the centre
    assert all(check.holds for check in check_part(part.pattern, part.solid))
    upright = parts(
        "straight", section="ellipse 340 x 320", length=300, templates="inside", template_share="quarter"
    )
    assert any(fact.startswith("quarter") for fact in upright[0].pattern.facts)
