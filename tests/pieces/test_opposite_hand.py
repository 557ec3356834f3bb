"""The opposite hand: mirrored pieces, their words, files and checks."""

from __future__ import annotations

import json
from dataclasses import replace
from math import degrees, radians

import numpy as np
import pytest

from develop.job.pipeline import checks_of_all
from develop.job.pipeline import make as write
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import read_piece
from develop.pieces.hand import OPPOSITE, builds_of, opposite

SIDED = {
    "straight": {"section": "ellipse 600 x 300", "length": 800, "cut_a": "slope 10 long 200", "cut_b": "slope 30 long 25"},
    "transition": {
        "end_a": "rectangle 600 x 300 r 50",
        "end_b": "ellipse 400 x 200",
        "length": 450,
        "offset": "40,-25",
        "rotate": 20,
        "tilt": "slope 12 long 30",
    },
    "bend": {"section": "ellipse 700 x 350", "angle": 90, "throat_radius": 400, "gores": 4, "turns_to": 30, "seam_at": 50},
    "offset": {"section": "round 300", "length": 1500, "offset": "200,100"},
    "cone": {"section": "ellipse 500 x 300", "height": 600, "apex_offset": "50,20",
             "cut_b": "height 300 slope 10 long 30"},
    "branch": {"header": "round 400", "branch": "ellipse 200 x 150", "header_length": 900, "angle": 60,
               "leaves_at": 30, "off_centre": 30, "rotate": 20, "centre_to_end": 500},
    "marking-band": {"section": "pipe DN 200", "cut": "slope 45 long 20"},
    "flange": {"section": "measured 0:322 45:326 90:327 120:323", "width": 40, "holes": 9, "hole_diameter": 9,
               "centre_line": 20, "first_hole": "on"},
    "opening": {"section": "ellipse 500 x 300", "slope": 25, "high_side": 35, "clearance": 10, "collar": 90},
}  # fmt: skip


def piece(kind: str, **given):
    found, problems = read_piece(kind_of(kind), {"opposite_hand": 2, **given})
    assert not problems, problems
    assert found is not None
    return found


@pytest.mark.parametrize("kind", KINDS)
def test_the_opposite_hand_of_every_kind_is_its_mirror_image(kind: str) -> None:
    builds = builds_of(piece(kind, **SIDED.get(kind, dict(kind_of(kind).example))))
    checks = checks_of_all(builds)
    mirror = [check for check in checks if check.name.endswith("from the mirror image")]
    assert len(mirror) == 1
    assert all(check.holds for check in checks), [check for check in checks if not check.holds]
    # The mirrored pattern is proved like the drawn one, each check again.
    assert len(checks) == 2 * len(
        [c for c in checks if not c.name.startswith(builds[1].patterns[0].mark)]
    ) + 1 or (len(builds[0].parts) > 1)


@pytest.mark.parametrize("kind", ["straight", "transition", "flange", "opening"])
def test_edges_and_areas_are_those_of_the_drawn_piece(kind: str) -> None:
    drawn, other = builds_of(piece(kind, **SIDED[kind]))
    for mine, yours in zip(drawn.patterns, other.patterns, strict=True):
        assert yours.net.area == pytest.approx(mine.net.area, rel=1e-11)
        for (_, a), (_, b) in zip(
            sorted(mine.net.curves, key=_name), sorted(yours.net.curves, key=_name), strict=True
        ):
            assert a.length == pytest.approx(b.length, rel=1e-9)


def _name(pair):
    # Mirrored, the left seam is the right one.
    return pair[0].replace("left", "side").replace("right", "side")


def test_the_outline_of_a_mirrored_sheet_is_the_mirrored_outline() -> None:
    drawn, other = builds_of(piece("transition", **SIDED["transition"], seam_at=100))
    wide = max(curve.bounds()[1, 0] for _, curve in drawn.patterns[0].net.curves)
    for mine, yours in zip(drawn.patterns[0].divisions, other.patterns[0].divisions[::-1], strict=True):
        assert yours.a == pytest.approx(mine.a * [-1, 1] + [wide, 0], abs=1e-3)
        assert yours.b == pytest.approx(mine.b * [-1, 1] + [wide, 0], abs=1e-3)
        turned = degrees(mine.direction + yours.direction) % 360
        assert turned == pytest.approx(180, abs=1e-6)


@pytest.mark.parametrize(("long", "word"), [("right", "LEFT"), ("left", "RIGHT")])
def test_words_on_the_mirrored_piece_are_right_for_it(long: str, word: str) -> None:
    # A cut that is longest at the right makes the mirrored piece longest at its left.
    _, other = builds_of(piece("straight", section="round 300", length=500, cut_b=f"slope 25 long {long}"))
    pattern = other.patterns[0]
    at_b = {mark.text: mark.at[1] for mark in pattern.marks if mark.edge == "b"}
    assert max(at_b, key=lambda each: at_b[each]) == word
    assert any(f"longest at {word.lower()}" in fact for fact in pattern.facts)
    assert any("OPPOSITE HAND" in fact for fact in pattern.facts)


def test_a_seam_that_was_chosen_to_the_right_is_to_the_left_of_the_mirrored_piece() -> None:
    # After half a turn it is the same, so two places are equally short; its mirror image is another piece.
    given = {"end_a": "ellipse 300 x 600", "end_b": "ellipse 640 x 600", "rotate": 20, "length": 400}
    drawn, other = builds_of(piece("transition", **given))
    seams = [degrees(built.patterns[0].divisions[0].direction) for built in (drawn, other)]
    assert sum(seams) % 360 == pytest.approx(180, abs=1e-6)


def test_fields_are_mirrored_each_by_its_type() -> None:
    mirrored = opposite(piece("transition", **{**SIDED["transition"], "seam_at": "2:00"}))
    assert mirrored.offset == (-40.0, -25.0)
    assert mirrored.rotate == pytest.approx(radians(-20))
    assert mirrored.tilt.long == pytest.approx(radians(150))
    assert mirrored.tilt.slope == pytest.approx(radians(12))
    assert mirrored.seam_at == pytest.approx(radians(150))
    flush = opposite(piece("transition", end_a="round 400", end_b="round 300", length=400, flush="left"))
    assert flush.flush == "right"
    measured = opposite(piece("flange", section="measured 0:322 45:326 90:327 120:323", width=40))
    assert measured.section.text == "measured 0:322 60:323 90:327 135:326 ellipse"


def test_twice_mirrored_is_the_piece_itself() -> None:
    given = piece("transition", **SIDED["transition"])
    again = opposite(opposite(given))
    assert again.offset == given.offset
    assert again.rotate == pytest.approx(given.rotate)
    assert again.tilt.long == pytest.approx(given.tilt.long)


def test_both_hands_are_written_with_their_quantities(tmp_path) -> None:
    found = piece("transition", **SIDED["transition"], mark="A1", quantity=3)
    outcome = write(found, folder=str(tmp_path), formats=("svg", "json"))
    assert not outcome.failed
    assert {each.name for each in tmp_path.iterdir()} == {"A1.svg", f"A1{OPPOSITE}.svg", "A1.json"}
    record = json.loads((tmp_path / "A1.json").read_text())
    assert [(p["mark"], p["quantity"]) for p in record["patterns"]] == [("A1", 3), (f"A1{OPPOSITE}", 2)]
    assert record["fields"]["opposite_hand"] == 2
    for net in (p["net"] for p in record["patterns"]):
        assert net["area"] == pytest.approx(record["patterns"][0]["net"]["area"], rel=1e-11)
    assert "OPPOSITE HAND of A1" in (tmp_path / f"A1{OPPOSITE}.svg").read_text()


def test_without_an_opposite_hand_nothing_is_said_of_it() -> None:
    (built,) = builds_of(piece("transition", **SIDED["transition"], opposite_hand=0))
    assert not any("hand" in fact for fact in built.patterns[0].facts)


def test_a_piece_that_is_not_the_mirror_image_fails_the_check() -> None:
    drawn, other = builds_of(piece("transition", **SIDED["transition"]))
    assert checks_of_all((drawn, other))[-1].holds
    for wrong in (
        replace(opposite(piece("transition", **SIDED["transition"])), rotate=radians(20)),
        piece("transition", **SIDED["transition"], opposite_hand=0),
    ):
        last = checks_of_all((drawn, wrong.build()))[-1]
        assert last.name.endswith("from the mirror image")
        assert not last.holds
        assert last.got > 1.0


def test_the_mirrored_solid_is_the_mirror_image_point_by_point() -> None:
    drawn, other = (built.solid for built in builds_of(piece("straight", **SIDED["straight"])))
    u = drawn.end_a.section.at_direction(np.radians(np.arange(0, 360, 10)))
    mirrored = other.end_a.section.at_direction(np.radians(180 - np.arange(0, 360, 10)))
    for name in ("end_a", "end_b"):
        mine, yours = getattr(drawn, name).point(u), getattr(other, name).point(mirrored)
        assert np.abs(mine * [-1, 1, 1] - yours).max() < 1e-9


ALIKE = [
    ("straight", {"section": "ellipse 600 x 300", "length": 500}),
    ("straight", {"section": "round 300", "length": 500, "cut_b": "slope 25 long top", "face": "inside"}),
    ("transition", {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "flush": "bottom"}),
    ("transition", {"end_a": "ellipse 300 x 600", "end_b": "round 620", "length": 450}),
    ("transition", {"end_a": "rectangle 400 x 300 r 40", "end_b": "round 300", "length": 450, "kicks": 3}),
    ("bend", {"section": "ellipse 700 x 350", "angle": 90, "throat_radius": 350, "gores": 4, "turns_to": "top"}),
    ("branch", {"header": "round 400", "branch": "round 200", "header_length": 900, "centre_to_end": 500}),
    ("flange", {"section": "ellipse 600 x 300", "width": 40, "holes": 16, "hole_diameter": 11, "made_in": 4}),
    # Numbered from the right, the mirrored holes from the left: the same holes.
    ("flange", {"section": "ellipse 600 x 300", "width": 40, "holes": 16, "hole_diameter": 11,
                "centre_line": "right", "first_hole": "on"}),
    ("opening", {"section": "round 327", "pitch": "5 in 12", "collar": 150}),
    ("cone", {"section": "round 300", "height": 500}),
]  # fmt: skip


@pytest.mark.parametrize(("kind", "given"), ALIKE)
def test_a_piece_that_is_its_own_mirror_image_is_made_more_often_of_one_pattern(kind, given) -> None:
    (alone,) = builds_of(piece(kind, **given, opposite_hand=0, quantity=3))
    (both,) = builds_of(piece(kind, **given, quantity=3))
    for one, more in zip(alone.patterns, both.patterns, strict=True):
        assert 3 * more.quantity == 5 * one.quantity
        assert [fact for fact in more.facts if "hand" in fact] == [
            "both hands are alike: pieces as drawn 3, of opposite hand 2"
        ]
        assert any(fact.startswith((f"quantity {more.quantity}", "quantity")) for fact in more.facts)
        assert f"quantity {more.quantity}" in " ".join(more.facts)
    checks = checks_of_all((both,))
    assert [each.name for each in checks].count("both hands: largest distance from the mirror image") == 1
    assert all(each.holds for each in checks)


@pytest.mark.parametrize(
    ("kind", "given"),
    [
        ("transition", {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "offset": "0.01,0"}),
        ("straight", {"section": "ellipse 600 x 300", "length": 500, "seam_at": "right"}),
        ("flange", {"section": "ellipse 600 x 300", "width": 40, "holes": 15, "hole_diameter": 11,
                    "centre_line": "right"}),
        ("branch", {"header": "round 400", "branch": "round 200", "header_length": 900, "centre_to_end": 500,
                    "off_centre": 0.01}),
    ],
)  # fmt: skip
def test_a_piece_that_has_a_right_and_a_left_keeps_two_patterns(kind, given) -> None:
    assert len(builds_of(piece(kind, **given))) == 2


def test_a_piece_wrongly_taken_for_its_mirror_image_fails_the_check() -> None:
    drawn = builds_of(piece("transition", **SIDED["transition"]))[0]
    last = checks_of_all((replace(drawn, both_hands=True),))[-1]
    assert last.name.endswith("from the mirror image")
    assert not last.holds
