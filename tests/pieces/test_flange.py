"""Flanges against parallel curves, elementary geometry and planar polygons."""

from __future__ import annotations

from math import atan2, hypot, pi

import numpy as np
import pytest
from shapely.geometry import LineString, Point, Polygon

from develop.errors import InputError
from develop.job.pipeline import checks_of
from tests.pieces.making import make


def ring(**given):
    return make("flange", **{"section": "ellipse 600 x 300", "width": 40, **given})


def curves(pattern, name):
    outlines = (pattern.net, *pattern.openings)
    return [curve for outline in outlines for each, curve in outline.curves if each == name]


def length(pattern, name):
    return sum(curve.length for curve in curves(pattern, name))


def polygon(pattern):
    def points(outline):
        return np.vstack([curve.polyline(1e-4)[:-1] for _, curve in outline.curves])

    return Polygon(points(pattern.net), [points(opening) for opening in pattern.openings])


def centres(pattern):
    return np.array([curve.bounds().mean(axis=0) for curve in curves(pattern, "holes")])


def area(pattern):
    return pattern.net.area - sum(opening.area for opening in pattern.openings)


SECTIONS = [
    "round 400",
    "ellipse 600 x 300",
    "flat-oval 600 x 300",
    "rectangle 500 x 300 r 40",
    "rectangle 500 x 300",
    "superellipse 500 x 300 n 3",
    "measured 0:322 45:326 90:327 120:323",
]


@pytest.mark.parametrize("section", SECTIONS)
def test_the_outer_edge_is_longer_by_two_pi_times_the_width(section: str) -> None:
    # Steiner's formula for parallel curves: length + 2 pi d, area + length d + pi d².
    pattern = ring(section=section).patterns[0]
    inner, outer = length(pattern, "inner"), length(pattern, "outer")
    assert outer - inner == pytest.approx(2 * pi * 40, rel=1e-11)
    assert area(pattern) == pytest.approx(inner * 40 + pi * 40**2, rel=1e-11)


@pytest.mark.parametrize("section", SECTIONS)
def test_every_check_holds_and_the_polygon_has_the_area(section: str) -> None:
    built = ring(section=section, holes=14, hole_diameter=11, clearance=1.5)
    checks = checks_of(built)
    assert len(checks) >= 10
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
    shape = polygon(built.patterns[0])
    assert shape.is_valid
    # Chords within 0.0001 mm over an outline of a few metres.
    assert shape.area == pytest.approx(area(built.patterns[0]), abs=1.0)


@pytest.mark.parametrize("section", SECTIONS)
def test_every_point_of_the_outer_edge_lies_at_the_width_from_the_inner(section: str) -> None:
    pattern = ring(section=section).patterns[0]
    inside = Polygon(curves(pattern, "inner")[0].polyline(1e-4))
    far = [inside.distance(Point(p)) for p in curves(pattern, "outer")[0].polyline(0.01)[::7]]
    assert min(far) == pytest.approx(40, abs=2e-3)
    assert max(far) == pytest.approx(40, abs=2e-3)


def test_a_sharp_corner_gives_a_quarter_circle_outside() -> None:
    pattern = ring(section="rectangle 500 x 300", width=40).patterns[0]
    assert length(pattern, "inner") == pytest.approx(1600, rel=1e-14)
    assert length(pattern, "outer") == pytest.approx(1600 + 80 * pi, rel=1e-14)
    # Between straights the outline is an arc about the corner of the inner edge, here at (540, 40).
    outer = curves(pattern, "outer")[0].polyline(1e-4)
    corner = outer[(outer[:, 0] > 540 + 1e-6) & (outer[:, 1] < 40 - 1e-6)]
    assert len(corner) > 10
    assert np.abs(np.hypot(*(corner - [540, 40]).T) - 40).max() < 1e-3


def test_clearance_moves_the_inner_edge_out_all_round() -> None:
    tight, loose = ring().patterns[0], ring(clearance=3).patterns[0]
    assert length(loose, "inner") - length(tight, "inner") == pytest.approx(6 * pi, abs=1e-9)


def test_holes_of_a_round_flange_stand_on_a_circle_at_equal_angles() -> None:
    pattern = ring(section="round 400", holes=12, hole_diameter=11, pitch_line=15, first_hole="on").patterns[
        0
    ]
    found = centres(pattern) - 240
    assert np.hypot(*found.T) == pytest.approx(np.full(12, 215), abs=1e-6)
    angles = np.sort(np.degrees(np.arctan2(found[:, 1], found[:, 0])) % 360)
    assert np.diff(angles) == pytest.approx(np.full(11, 30), abs=1e-6)
    assert np.abs(angles - 90).min() < 1e-6


def test_astride_puts_the_centre_line_midway_between_two_holes() -> None:
    pattern = ring(section="round 400", holes=12, hole_diameter=11, centre_line="right").patterns[0]
    found = centres(pattern) - 240
    angles = np.degrees(np.arctan2(found[:, 1], found[:, 0]))
    assert sorted(np.abs(angles))[:2] == pytest.approx([15, 15], abs=1e-6)


def test_holes_on_an_ellipse_stand_at_equal_arcs_of_the_true_parallel() -> None:
    pattern = ring(holes=16, hole_diameter=11, first_hole="on", centre_line="right").patterns[0]
    found = centres(pattern) - [340, 190]
    # The pitch line as a polygon of 400,000 chords: x = a cos t, y = b sin t, moved 20 along the normal.
    t = np.linspace(0, 2 * pi, 400_001)
    normal = np.stack([150 * np.cos(t), 300 * np.sin(t)], axis=1)
    line = np.stack([300 * np.cos(t), 150 * np.sin(t)], axis=1)
    line += 20 * normal / np.hypot(*normal.T)[:, None]
    arc = np.concatenate([[0], np.cumsum(np.hypot(*np.diff(line, axis=0).T))])
    for n, centre in enumerate(found):
        nearest = int(np.argmin(np.hypot(*(line[:-1] - centre).T)))
        assert hypot(*(line[nearest] - centre)) < 0.01
        assert (arc[nearest] - n * arc[-1] / 16 + 300) % arc[-1] == pytest.approx(300, abs=0.01)
    assert any("first on the centre line RIGHT" in fact for fact in pattern.facts)
    assert any(f"{arc[-1] / 16:.2f}" in fact for fact in pattern.facts)


def test_a_blank_is_the_whole_plate_inside_the_outer_edge() -> None:
    blank = ring(form="blank", holes=8, hole_diameter=12).patterns[0]
    assert not curves(blank, "inner")
    outer = ring().patterns[0].net.area
    assert area(blank) == pytest.approx(outer - 8 * pi * 36, rel=1e-12)
    assert len(blank.dashed) == 2


@pytest.mark.parametrize("parts", [2, 3, 4, 5])
def test_a_round_ring_in_parts_is_one_outline_cut_so_often(parts: int) -> None:
    built = ring(section="round 800", width=60, made_in=parts, quantity=2)
    (pattern,) = built.patterns
    assert pattern.quantity == 2 * parts
    assert len(built.parts[0].frames) == parts
    assert length(pattern, "inner") == pytest.approx(800 * pi / parts, rel=1e-12)
    assert length(pattern, "outer") == pytest.approx(920 * pi / parts, rel=1e-12)
    assert area(pattern) == pytest.approx(pi * (460**2 - 400**2) / parts, rel=1e-12)


@pytest.mark.parametrize("section", SECTIONS)
@pytest.mark.parametrize(("parts", "holes"), [(3, 0), (2, 6), (4, 14), (5, 13)])
def test_parts_add_up_to_the_ring(section: str, parts: int, holes: int) -> None:
    given = {"section": section, "holes": holes, **({"hole_diameter": 9} if holes else {})}
    whole = ring(**given).patterns[0]
    built = ring(**given, made_in=parts)
    assert sum(pattern.quantity for pattern in built.patterns) == parts
    for name in ("inner", "outer"):
        added = sum(pattern.quantity * length(pattern, name) for pattern in built.patterns)
        assert added == pytest.approx(length(whole, name), rel=1e-11)
    assert sum(p.quantity * area(p) for p in built.patterns) == pytest.approx(area(whole), rel=1e-11)
    assert sum(p.quantity * len(p.openings) for p in built.patterns) == holes
    assert all(check.holds for check in checks_of(built))


def test_alike_parts_cover_the_ring_where_their_frames_put_them() -> None:
    built = ring(section="ellipse 800 x 500", width=60, made_in=4)
    (part,) = built.parts
    shape = polygon(part.pattern)
    flat = np.array(shape.exterior.coords) - part.solid.shift
    pieces = [Polygon((flat @ frame.axes[:2] + frame.origin)[:, :2]) for frame in part.frames]
    whole = ring(section="ellipse 800 x 500", width=60)
    full = polygon(whole.patterns[0])
    moved = Polygon(
        np.array(full.exterior.coords) - whole.parts[0].solid.shift,
        [np.array(each.coords) - whole.parts[0].solid.shift for each in full.interiors],
    )
    cover = pieces[0]
    for piece in pieces[1:]:
        assert cover.intersection(piece).area < 0.5
        cover = cover.union(piece)
    assert cover.symmetric_difference(moved).area < 1.0


def test_cuts_between_parts_are_square_to_both_edges_and_miss_the_holes() -> None:
    (pattern,) = ring(section="round 800", width=60, holes=12, hole_diameter=14, made_in=3).patterns
    for name in ("end_1", "end_2"):
        assert length(pattern, name) == pytest.approx(60, abs=1e-9)
    ends = [
        curve.polyline(1)[[0, -1]].mean(axis=0)
        for curve in (*curves(pattern, "end_1"), *curves(pattern, "end_2"))
    ]
    # Half a hole spacing along the pitch line, 30 degrees on a circle of radius 430: chord 2 r sin(7.5).
    near = [min(hypot(*(centre - end)) for centre in centres(pattern)) for end in ends]
    assert near == pytest.approx([2 * 430 * np.sin(pi / 24)] * 2, abs=1e-6)


def test_marks_name_the_directions_on_the_inner_edge() -> None:
    pattern = ring(centre_line=30, holes=8, hole_diameter=9).patterns[0]
    at = {mark.text: mark.at - [340, 190] for mark in pattern.marks}
    assert set(at) == {"RIGHT", "TOP", "LEFT", "BOTTOM", "30°"}
    assert at["TOP"] == pytest.approx([0, 150], abs=1e-9)
    assert at["LEFT"] == pytest.approx([-300, 0], abs=1e-9)
    assert np.degrees(atan2(at["30°"][1], at["30°"][0])) == pytest.approx(30, abs=1e-9)


def refused(**given):
    with pytest.raises(InputError) as caught:
        ring(**given)
    (problem,) = caught.value.problems
    return problem


def test_holes_without_a_diameter_are_refused() -> None:
    assert refused(holes=8).field == "hole_diameter"


@pytest.mark.parametrize(
    ("given", "reason"),
    [
        ({"holes": 8, "hole_diameter": 45}, "reach the edge"),
        ({"holes": 8, "hole_diameter": 25, "pitch_line": 10}, "reach the edge"),
        ({"holes": 60, "hole_diameter": 30}, "run into each other"),
    ],
)
def test_holes_without_room_are_refused_with_the_largest_that_has_it(given, reason: str) -> None:
    problem = refused(**given)
    assert problem.field == "hole_diameter"
    assert reason in problem.given
    most = float(problem.allowed.split()[0])
    built = ring(**{**given, "hole_diameter": most})
    assert all(check.holds for check in checks_of(built))
    refused(**{**given, "hole_diameter": most + 0.2})


def test_a_pitch_line_off_the_flange_and_too_many_parts_are_refused() -> None:
    assert refused(holes=8, hole_diameter=5, pitch_line=40).field == "pitch_line"
    assert refused(holes=3, hole_diameter=5, made_in=4).field == "made_in"
    assert refused(form="blank", made_in=2).field == "made_in"


def test_a_pattern_whose_hole_is_moved_fails_its_checks() -> None:
    from dataclasses import replace

    from develop.checks import check_part
    from develop.pattern.pattern import Outline

    built = ring(holes=8, hole_diameter=11)
    part = built.parts[0]

    def moved(shift):
        *others, last = part.pattern.openings
        ((name, curve),) = last.curves
        outline = Outline(((name, curve.moved(turn=np.eye(2), shift=np.array(shift))),), last.area)
        return replace(part.pattern, openings=(*others, outline))

    def failing(pattern):
        return {check.name for check in check_part(pattern, part.solid) if not check.holds}

    assert failing(part.pattern) == set()
    assert "hole spacing along the pitch line, worst" in failing(moved([0.5, 0.0]))
    assert "openings not clear of the outline or of each other" in failing(moved([30.0, 30.0]))


def test_a_wrong_edge_or_area_fails_its_check() -> None:
    from dataclasses import replace

    from develop.checks import check_part

    part = ring().parts[0]
    wider = replace(part.solid, width=40.01)
    names = {check.name for check in check_part(part.pattern, wider) if not check.holds}
    assert {
        "outer edge against its length",
        "outer edge as drawn, against its length",
        "area less openings",
    } <= names


def test_parts_that_are_mirror_images_say_how_many_are_turned_over() -> None:
    # Quarters of an oval are two of one hand and two of the other; those of a ring are all one hand.
    (oval,) = ring(section="ellipse 800 x 500", width=60, made_in=4, quantity=3).patterns
    assert oval.facts[-1] == "quantity 12, drawn facing END B; 6 of them turned over"
    (circle,) = ring(section="round 800", width=60, made_in=4).patterns
    assert circle.facts[-1] == "quantity 4, drawn facing END B"


def sheet_of(pattern):
    """What the drawing walk draws, by layer: contours, lines, curves and words."""
    from develop.pattern.drawing import draw
    from develop.pattern.layout import lettered

    class Notes:
        def __init__(self) -> None:
            self.drawn: dict[str, list[tuple[str, object]]] = {}

        def layer(self, name) -> None:
            self.now = self.drawn.setdefault(name, [])

        def contour(self, outline) -> None:
            self.now.append(("contour", outline))

        def line(self, start, end) -> None:
            self.now.append(("line", np.array([start, end])))

        def curve(self, curve, *, dashed) -> None:
            self.now.append(("dashed" if dashed else "curve", curve))

        def text(self, label) -> None:
            self.now.append(("text", label))

    pen = Notes()
    draw(lettered(pattern), pen)
    return pen.drawn


@pytest.mark.parametrize("given", [{}, {"made_in": 4}, {"made_in": 3}, {"form": "blank"}])
def test_holes_have_centre_crosses_on_a_thin_pitch_line_and_numbers_of_their_table(given) -> None:
    for part in ring(holes=12, hole_diameter=11, **given).parts:
        pattern, layers = part.pattern, sheet_of(part.pattern)
        assert {kind for kind, _ in layers["cut"]} == {"contour"}
        (table,) = (each for each in pattern.figures if each.title.startswith("Centres"))
        at = np.array([row[2:] for row in table.rows])
        assert [row[0] for row in table.rows] == [str(n) for n in range(1, len(at) + 1)]
        assert np.abs(at[:, None] - centres(pattern)).max(axis=-1).min(axis=1).max() < 1e-3
        strokes = [line for kind, line in layers["witness-marks"] if kind == "line"]
        middles = np.array([line.mean(axis=0) for line in strokes])
        pitch = [curve for kind, curve in layers["witness-marks"] if kind == "curve"]
        points = np.vstack([curve.polyline(1e-3) for curve in pitch])
        # Elementary: the pitch line is everywhere half the width from the inner edge's own curve.
        inner = Polygon(_inner_points())
        off = [inner.exterior.distance(Point(*point)) for point in points - part.solid.shift]
        assert off == pytest.approx([20.0] * len(off), abs=2e-3)
        for centre in at:
            (cross,) = (
                line
                for line, middle in zip(strokes, middles, strict=True)
                if np.abs(middle - centre).max() < 1e-6
            )
            assert 1.0 < np.hypot(*(cross[1] - cross[0])) < 11.0
        words = {label.text: label.at for kind, label in layers["text"] if kind == "text"}
        for row in table.rows:
            near = np.hypot(*(at - words[row[0]]).T)
            assert np.argmin(near) == int(row[0]) - 1
            assert near.min() < 20.0


def _inner_points():
    t = np.linspace(0, 2 * pi, 4000)
    return np.stack([300 * np.cos(t), 150 * np.sin(t)], axis=1)


def test_the_pitch_line_stops_short_of_the_words_on_it() -> None:
    (part,) = ring(holes=12, hole_diameter=11, made_in=4).parts
    layers = sheet_of(part.pattern)
    lines = [curve.polyline(0.01) for kind, curve in layers["witness-marks"] if kind == "curve"]
    words = [label for kind, label in layers["text"] if kind == "text" and len(label.text) > 2]
    assert any(label.text.startswith("flange") for label in words)
    for label in words:
        # Along the baseline and up from it; letters are hardly narrower than half their height.
        ahead = np.array([np.cos(label.angle), np.sin(label.angle)])
        off = np.vstack(lines) - label.at
        along, up = off @ ahead, off @ np.array([-ahead[1], ahead[0]])
        within = (np.abs(along) < 0.25 * len(label.text) * label.height) & (up > 0.0) & (up < label.height)
        assert not within.any(), label.text


@pytest.mark.parametrize("made_in", [2, 3, 4])
def test_a_part_counts_its_holes_from_its_end_and_says_which_that_is(made_in: int) -> None:
    pattern = ring(section="round 400", holes=12, hole_diameter=11, made_in=made_in).patterns[0]
    spacing = 2 * pi * 220 / 12
    (table,) = (each for each in pattern.figures if each.title.startswith("Centres"))
    assert [row[1] for row in table.rows] == pytest.approx(
        [(n + 0.5) * spacing for n in range(12 // made_in)]
    )
    assert "from END 1" in table.heads[1]
    words = {label.text: label.at for kind, label in sheet_of(pattern)["text"] if kind == "text"}
    for name, word in (("end_1", "END 1"), ("end_2", "END 2")):
        (end,) = curves(pattern, name)
        assert np.hypot(*(words[word] - 0.5 * (end.start + end.end))) < 12.0


def test_a_whole_ring_counts_from_its_first_hole() -> None:
    (table,) = ring(holes=12, hole_diameter=11).patterns[0].figures
    assert table.rows[0][1] == 0.0
    assert "from hole 1" in table.heads[1]


@pytest.mark.parametrize("section", ["round 400", "ellipse 600 x 300", "flat-oval 600 x 300"])
@pytest.mark.parametrize("made_in", [2, 3, 4, 5])
def test_the_parts_of_a_ring_carry_its_marks_where_they_stand(section: str, made_in: int) -> None:
    built = ring(section=section, made_in=made_in)
    seen = set()
    number = {}
    for part in built.parts:
        pattern = part.pattern
        for place in (each for each in pattern.figures if each.title.startswith("Places")):
            number[id(part)] = [int(row[0]) for row in place.rows]
        numbers = number.get(id(part), [0])
        assert len(numbers) == len(part.frames)
        (inner,) = curves(pattern, "inner")
        for n, frame in zip(numbers, part.frames, strict=True):
            for mark in pattern.marks:
                # Running lengths go from END 1, where the inner edge ends in the outline's own round.
                back = LineString(inner.reversed().polyline(1e-4))
                assert mark.arc == pytest.approx(back.project(Point(*mark.at)), abs=0.01)
                assert back.distance(Point(*mark.at)) < 1e-3
                texts = [each.split() for each in mark.text.split("/")]
                here = [t[0] for t in texts if len(t) == 1 or int(t[1]) == n]
                if not here:
                    continue
                x, y = ((mark.at - part.solid.shift) @ frame.axes[:2] + frame.origin)[:2]
                angle = np.degrees(atan2(y, x)) % 360
                word = {0: "RIGHT", 90: "TOP", 180: "LEFT", 270: "BOTTOM"}[round(angle) % 360]
                assert angle == pytest.approx(round(angle), abs=1e-6)
                assert word in here
                seen.add(word)
    assert seen == {"RIGHT", "TOP", "LEFT", "BOTTOM"}
