"""Marking bands against elementary geometry."""

from __future__ import annotations

from math import cos, pi, radians, sin, tan

import numpy as np
import pytest

from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.pattern.layout import lettered
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from tests.pieces.making import make


def band(**given: object):
    return make("marking-band", **{"section": "pipe DN 200", "cut": "slope 45 long 0", **given}).patterns[0]


def test_it_is_developed_on_the_outside_plus_half_the_paper() -> None:
    pattern = band(paper=0.2)
    # DN 200 is 219.1 outside (ASME B36.10M).
    assert pattern.net.curve("a").length == pytest.approx(pi * 219.3, rel=1e-12)


def test_inside_it_is_half_the_paper_less() -> None:
    pattern = band(paper=0.2, face="inside", thickness=6.3)
    assert pattern.net.curve("a").length == pytest.approx(pi * (219.1 - 12.6 - 0.2), rel=1e-12)


def test_inside_a_pipe_needs_its_wall() -> None:
    with pytest.raises(InputError) as caught:
        band(face="inside")
    assert caught.value.problems[0].field == "thickness"


def test_a_round_taped_outside_with_a_wall() -> None:
    pattern = band(section="round 300", sizes="outside", thickness=8, paper=0.1)
    assert pattern.net.curve("a").length == pytest.approx(pi * 300.1, rel=1e-12)


def test_the_marking_edge_is_the_cut_at_the_pipes_face() -> None:
    # The plane meets the pipe at r tan 45 cos(direction); the paper only stretches x.
    pattern = band(narrowest=50)
    r = 219.1 / 2
    for row in pattern.divisions:
        assert row.length == pytest.approx(50 + r * (1 + cos(row.direction)), abs=1e-9)


def test_the_narrowest_place_is_as_asked() -> None:
    pattern = band(narrowest=30, cut="slope 22.5 long top")
    assert min(row.length for row in pattern.divisions) == pytest.approx(30, abs=1e-9)
    r = 219.1 / 2
    assert max(row.length for row in pattern.divisions) == pytest.approx(
        30 + 2 * r * tan(radians(22.5)), abs=1e-9
    )


def test_the_lap_goes_on_with_the_same_curve() -> None:
    pattern = band(lap=40, seam_at=200)
    girth = pi * 219.2
    cut = pattern.cut.curve("b").reversed()
    assert pattern.cut.curve("a").length == pytest.approx(girth + 40, rel=1e-12)
    points = cut.polyline(1e-4)
    beyond = points[points[:, 0] > girth]
    assert beyond[-1, 0] == pytest.approx(girth + 40, abs=1e-9)
    r, seam = 219.1 / 2, radians(200)
    low = 50 + r
    expected = low + r * np.cos(seam + beyond[:, 0] / (r + 0.05))
    assert np.abs(beyond[:, 1] - expected).max() < 1e-3
    # Lapped over the start, the two edges lie on each other.
    start = points[points[:, 0] < 40]
    again = np.interp(start[:, 0] + girth, points[:, 0], points[:, 1])
    assert np.abs(again - start[:, 1]).max() < 2e-3


def test_without_a_lap_cut_equals_net() -> None:
    pattern = band(lap=0)
    assert pattern.cut == pattern.net


def test_the_inside_band_is_mirrored() -> None:
    # Standing inside, direction grows to the left.
    pattern = band(face="inside", thickness=6.3, cut="slope 45 long 90", seam_at="bottom")
    at = {mark.text: mark.at[0] for mark in pattern.marks if mark.edge == "a" and mark.text != "BOTTOM"}
    assert at["LEFT"] < at["TOP"] < at["RIGHT"]


def test_sine_of_the_slanting_tangent() -> None:
    # Halfway up a 45 degree cut the edge climbs at 45 degrees on the pipe's face.
    pattern = band(paper=0, lap=0, seam_at="left")
    edge = pattern.net.curve("b").reversed()
    points = edge.polyline(1e-4)
    x = pi * 219.1 / 4
    i = np.searchsorted(points[:, 0], x)
    climb = (points[i + 1, 1] - points[i - 1, 1]) / (points[i + 1, 0] - points[i - 1, 0])
    assert climb == pytest.approx(sin(pi / 2), abs=1e-3)


def test_its_sheet_says_what_it_fits_and_how() -> None:
    facts = band(thickness=6.3).facts
    # DN 200 is 219.1 outside; round the paper's middle that is pi 219.2 = 688.6.
    for words in (
        "pipe DN 200, 219.1 outside, wall 6.3", "cut 45°, longest at right", "mark along END B",
        "the pipe stays on the END A side", "wrap round, this side out", "girth of the band 688.6",
        "paper 0.1 mm thick",
    ):  # fmt: skip
        assert words in facts


def test_inside_its_sheet_says_wall_and_inside() -> None:
    facts = band(thickness=6.3, face="inside").facts
    # 219.1 - 2 x 6.3 = 206.5; less the paper pi 206.4 = 648.4.
    for words in (
        "pipe DN 200, 206.5 inside, wall 6.3", "lay inside, this side in towards you", "girth of the band 648.4",
    ):  # fmt: skip
        assert words in facts


def test_sizes_are_outside_unless_told() -> None:
    assert "round 300, 300 outside, wall 8" in band(section="round 300", thickness=8).facts
    assert "round 300, 316 outside, wall 8" in band(section="round 300", thickness=8, sizes="inside").facts
    assert (
        "ellipse 400 x 200, 416 x 216 outside, wall 8"
        in band(section="ellipse 400 x 200", thickness=8, sizes="inside").facts
    )
    assert band(section="round 300").net.curve("a").length == pytest.approx(pi * 300.1, rel=1e-12)


@pytest.mark.parametrize("sizes", ["outside", "mean"])
def test_inside_a_round_that_is_not_measured_inside_needs_its_wall(sizes: str) -> None:
    with pytest.raises(InputError) as caught:
        band(section="round 300", face="inside", sizes=sizes)
    (problem,) = caught.value.problems
    assert problem.field == "thickness"
    assert problem.allowed == "the pipe's wall thickness, or sizes = inside"
    made = band(section="round 300", face="inside", sizes="inside")
    assert made.net.curve("a").length == pytest.approx(pi * 299.9, rel=1e-12)


def words_of(pattern):
    return {label.text: label for label in lettered(pattern).labels}


@pytest.mark.parametrize("face", ["outside", "inside"])
def test_the_sides_say_how_they_meet_and_the_lap_is_called_so(face: str) -> None:
    pattern = band(face=face, thickness=6.3, lap=30, seam_at="bottom", cut="slope 30 long top", narrowest=80)
    words = words_of(pattern)
    assert "SEAM" not in words
    whole = pattern.cut.curve("a").length
    girth = pattern.net.curve("a").length
    # Outside up the lap is beyond the right end; mirrored, beyond the left one.
    edge, dashed, lap = (0.0, girth, girth + 15.0) if face == "outside" else (whole, 30.0, 15.0)
    for text, x, off in (
        ("THIS EDGE TO DASHED LINE", edge, 8.0),
        ("MEETS HERE", dashed, 8.0),
        ("LAP", lap, 4.0),
    ):
        label = words[text]
        assert abs(label.at[0] - x) < off, text
        assert abs(label.angle) == pytest.approx(pi / 2, abs=1e-6)
        assert label.height >= 2.0
    # The last word on the band's own side of the line, the first within the sheet.
    assert 0.0 < words["THIS EDGE TO DASHED LINE"].at[0] < whole
    assert bool(words["MEETS HERE"].at[0] < dashed) is (face == "outside")
    # The net line where the edge must meet is drawn, dashed, at the place the words say.
    assert pattern.net.curve("seam_right" if face == "outside" else "seam_left").start[0] == pytest.approx(
        dashed
    )


def test_without_a_lap_the_edges_meet() -> None:
    pattern = band(lap=0, narrowest=80)
    texts = [label.text for label in lettered(pattern).labels]
    assert texts.count("EDGES MEET") == 2
    assert "LAP" not in texts


def test_inches() -> None:
    piece, _ = read_piece(kind_of("marking-band"), {"section": "pipe NPS 8", "cut": "slope 45 long 0"})
    # NPS 8 is 8.625 in outside (ASME B36.10M).
    assert "pipe NPS 8, 8-5/8 in outside" in piece.build(units="in").patterns[0].facts


def test_a_lap_of_more_than_half_the_girth_is_refused() -> None:
    with pytest.raises(InputError) as caught:
        band(section="pipe DN 100", lap=500)
    assert caught.value.problems[0].field == "lap"


def onto(**given: object):
    return make("marking-band", **{"section": "pipe DN 150", "onto": "round 400", "joint": "set-in", **given})


def test_a_saddle_follows_the_two_circles() -> None:
    # Elementary: at x to the side the header's face is R − sqrt(R² − x²) farther from the pipe's end.
    band, hole = onto(narrowest=40).patterns
    assert band.mark.endswith("-band")
    assert hole.mark.endswith("-hole")
    r = 168.3 / 2
    for row in band.divisions:
        expected = 40 + 200 - np.sqrt(200**2 - (r * cos(row.direction)) ** 2)
        assert row.length == pytest.approx(expected, abs=1e-9)


def test_the_hole_of_a_saddle_has_its_published_width_and_the_joints_length() -> None:
    band, hole = onto(paper=0).patterns
    ((_, edge),) = hole.openings[0].curves
    assert edge.length == pytest.approx(band.net.curve("b").length, rel=1e-11)
    points = edge.polyline(1e-5)
    assert np.ptp(points[:, 1]) == pytest.approx(168.3, abs=1e-6)
    assert np.ptp(points[:, 0]) == pytest.approx(2 * 200 * np.arcsin(168.3 / 400), abs=1e-6)
    # The least width of the band lies above and below the hole.
    assert points[:, 1].min() == pytest.approx(50, abs=1e-6)


@pytest.mark.parametrize(
    "given",
    [
        {"onto": "round 400 angle 60 off_centre 30"},
        {"onto": "round 400 angle 120 off_centre -30", "thickness": 7.1, "face": "inside"},
        {"onto": "pipe DN 150"},
        {"onto": {"header": "ellipse 500 x 300", "angle": 75}, "seam_at": "left"},
        {"onto": "round girth 1921", "lap": 0},
    ],
)
def test_a_saddle_and_its_hole_pass_their_checks(given) -> None:
    failed = [each for each in checks_of(onto(**given)) if not each.holds]
    assert not failed, failed


def test_off_centre_is_on_the_right_of_the_headers_top_seen_facing_its_end_b() -> None:
    _, hole = onto(onto="round 400 off_centre 60").patterns
    words = {mark.text: mark.at[0] for mark in hole.marks if mark.edge == "a"}
    points = hole.openings[0].curves[0][1].polyline(1e-3)
    middle = 0.5 * (points[:, 0].min() + points[:, 0].max())
    assert (middle - words["TOP"]) * (words["RIGHT"] - words["TOP"]) > 0


@pytest.mark.parametrize(
    ("given", "field"),
    [
        ({"onto": "round 100"}, "onto"),
        ({"onto": "round 400 off_centre 150"}, "onto"),
    ],
)
def test_a_pipe_beside_the_header_is_refused(given, field) -> None:
    with pytest.raises(InputError) as caught:
        onto(**given)
    assert caught.value.problems[0].field == field


@pytest.mark.parametrize(
    ("text", "field"),
    [
        ("round 400 angle 5", "onto.angle"),
        ("round 400 angle 60 angle 70", "onto"),
        ("angle 60", "onto.header"),
        ({"header": "round 400", "agnle": 60}, "onto.agnle"),
        (7, "onto"),
    ],
)
def test_what_is_no_header_is_refused(text, field) -> None:
    _, problems = read_piece(kind_of("marking-band"), {"section": "pipe DN 150", "onto": text})
    assert [each.field for each in problems] == [field]


def test_cut_and_onto_exclude_each_other() -> None:
    _, problems = read_piece(
        kind_of("marking-band"), {"section": "pipe DN 150", "onto": "round 400", "cut": "slope 45 long right"}
    )
    assert "onto" in " ".join(map(str, problems))


def test_the_marks_of_band_and_hole_meet() -> None:
    # Moved to the header's right, the pipe reaches farther down on that side, which is the left for one
    # who faces the saddle. The hole's mark of that name must lie on the header's right.
    band, hole = onto(onto="round 400 off_centre 60").patterns
    rows = {round(np.degrees(row.direction)) % 360: row.length for row in band.divisions}
    assert rows[180] > rows[0]
    words = {mark.text: mark.at[0] for mark in hole.marks if mark.edge == "a"}
    on_hole = {mark.text: mark.at[0] for mark in hole.marks if mark.edge == "opening"}
    towards_right = words["RIGHT"] - words["TOP"]
    assert (on_hole["PIPE LEFT"] - on_hole["PIPE RIGHT"]) * towards_right > 0


def test_an_out_of_round_pipe_fits_its_hole() -> None:
    failed = [
        each for each in checks_of(onto(section="measured 0:160 50:166 90:171 140:165", onto="round 400"))
        if not each.holds
    ]  # fmt: skip
    assert not failed, failed


@pytest.mark.parametrize(
    ("joint", "size", "word"),
    [
        # ASME B36.10: NPS 6 is 168.3 outside with a wall of 7.11; bore = outside less two walls.
        ("set-on", 168.3 - 2 * 7.11, "bore"),
        ("set-in", 168.3, "outside"),
    ],
)
@pytest.mark.parametrize("face", ["outside", "inside"])
def test_a_set_on_pipe_has_its_bore_for_a_hole_and_a_set_in_one_its_outside(joint, size, word, face) -> None:
    built = onto(joint=joint, thickness=7.11, face=face, paper=0)
    band, hole = built.patterns
    assert np.ptp(hole.openings[0].curves[0][1].polyline(1e-5)[:, 1]) == pytest.approx(size, abs=1e-6)
    assert f"{joint}: the hole is the {word} of the pipe, {size:g}" in hole.facts
    assert any(fact.startswith(joint) for fact in band.facts)
    assert all(each.holds for each in checks_of(built))


@pytest.mark.parametrize(
    ("given", "other"),
    [
        ({"joint": "set-on"}, "set-in"),
        ({"joint": "set-on", "section": "round 168.3", "sizes": "outside"}, "set-in"),
        ({"joint": "set-in", "section": "round 168.3", "sizes": "inside"}, "set-on"),
        ({"joint": "set-on", "section": "round 168.3", "sizes": "mean"}, ""),
    ],
)
def test_a_hole_on_the_far_face_of_an_unknown_wall_is_refused(given, other) -> None:
    with pytest.raises(InputError) as caught:
        onto(**given)
    (problem,) = caught.value.problems
    assert problem.field == "thickness"
    assert (f"joint = {other}" in problem.allowed) is bool(other)


@pytest.mark.parametrize(("given", "side"), [("20", "right"), ("-20", "left")])
def test_off_centre_names_its_side_on_band_and_hole(given, side) -> None:
    for pattern in onto(onto=f"round 400 off_centre {given}").patterns:
        assert any(f"20 off centre to the {side}" in fact for fact in pattern.facts)
        assert any("END B is faced" in fact for fact in pattern.facts)


def test_a_misspelt_word_of_a_header_is_named() -> None:
    given = {"section": "pipe DN 100", "onto": "round 300 angel 60"}
    (problem,) = read_piece(kind_of("marking-band"), given)[1]
    assert problem.field == "onto"
    assert problem.given == '"angel" is no word of a header; did you mean "angle"?'
