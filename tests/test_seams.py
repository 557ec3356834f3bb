"""Seams and edges: worked examples of the trade, and how they are read."""

from __future__ import annotations

from contextlib import suppress

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.errors import InputError
from develop.tables.rules import Linear, Rules, read_tables, shipped
from develop.tables.seams import EdgeRule, SeamRule, edge_of, seam_of


@pytest.mark.parametrize(
    ("text", "left", "right", "left_folds", "right_folds"),
    [
        ("butt", 0, 0, (), ()),
        # All of it on one side: common practice, no source.
        ("lap 25", 0, 25, (), ()),
        # Three times the width of the seam, half of it each side: textbooks, from memory.
        ("grooved 6", 9, 9, (3,), (3,)),
        ('grooved 1/4"', 9.525, 9.525, (3.175,), (3.175,)),
        ("welt 10", 15, 15, (5,), (5,)),
        # One edge single, the other double, three times in all: common practice, no source.
        ("standing 25", 25, 50, (0,), (0, 25)),
        ("double 6", 6, 12, (0,), (0, 6)),
        # 35 and 45 mm for 25 mm finished: common practice, no source.
        ("double-standing 25", 35, 45, (0, 25), (0, 25, 35)),
        # Pocket twice its depth and about 1/4 in; from memory.
        ("pittsburgh 8", 6.5, 22, (0,), (0, 8, 16)),
    ],
)
def test_worked_seams(
    text: str, left: float, right: float, left_folds: tuple[float, ...], right_folds: tuple[float, ...]
) -> None:
    seam = seam_of(text)
    assert isinstance(seam, SeamRule)
    assert (seam.left, seam.right) == pytest.approx((left, right), rel=1e-14)
    assert seam.left_folds == pytest.approx(left_folds, rel=1e-14)
    assert seam.right_folds == pytest.approx(right_folds, rel=1e-14)
    # Common practice, no source: only folded seams are notched.
    assert seam.ends == ("notched" if left_folds else "square")
    assert seam.source
    assert seam_of(seam.text) == seam


@pytest.mark.parametrize("width", [4.0, 6.0, 10.0])
def test_the_halves_of_a_grooved_seam_meet_in_its_middle(width: float) -> None:
    """By hand: hooked to the width w, each side runs w/2 past the middle, folds, and comes back w."""
    seam = seam_of(f"grooved {width}")
    for allowance, folds in ((seam.left, seam.left_folds), (seam.right, seam.right_folds)):
        assert folds == (width / 2,)
        assert allowance - folds[0] == width
    assert seam.left + seam.right == 3 * width


@pytest.mark.parametrize(
    ("text", "thickness", "allowance", "folds", "turned", "ends"),
    [
        ("raw", 1, 0, (), "", "square"),
        ("lap 20", 1, 20, (), "", "square"),
        ("flange 25", 1, 25, (0,), "out", "notched"),
        ("flange 25 out", 1, 25, (0,), "out", "notched"),
        ("flange 25 turned in", 1, 25, (0,), "in", "notched"),
        ("flange 1 in turned in", 1, 25.4, (0,), "in", "notched"),
        ("flange 1 in out", 1, 25.4, (0,), "out", "notched"),
        ("tap flange 30", 1, 30, (0,), "", "notched"),
        ("hem 8", 1, 8, (0,), "out", "notched"),
        ("single hem 8", 1, 8, (0,), "out", "notched"),
        # Twice the width of the hem: common practice, no source.
        ("double hem 8", 1, 16, (0, 8), "out", "notched"),
        # Two and a half diameters of the wire and the thickness: textbooks, from memory.
        ("wired 4", 0.5, 10.5, (0,), "out", "notched"),
        ("wired edge 6", 0, 15, (0,), "out", "notched"),
    ],
)
def test_worked_edges(
    text: str, thickness: float, allowance: float, folds: tuple[float, ...], turned: str, ends: str
) -> None:
    edge = edge_of(text, thickness=thickness)
    assert isinstance(edge, EdgeRule)
    assert edge.allowance == pytest.approx(allowance, rel=1e-14)
    assert (edge.folds, edge.turned, edge.ends) == (folds, turned, ends)
    assert edge_of(edge.text, thickness=thickness) == edge


@pytest.mark.parametrize(
    "text", ["Grooved 6", "grooved seam 6", "grooved-lock 6 mm", " GROOVED  0.6 cm ", "grooved6"]
)
def test_spellings_of_a_seam(text: str) -> None:
    assert seam_of(text) == seam_of("grooved 6")


def test_a_bare_size_is_in_the_given_unit() -> None:
    assert seam_of("lap 1", unit="in").right == 25.4
    assert seam_of("lap 1 in").right == 25.4
    assert edge_of("hem 1/2", unit="in").allowance == 12.7


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("lap", "the width of the lap is not given"),
        ("butt 4", "butt takes no size"),
        ("lapp 25", 'is not a seam; did you mean "lap"?'),
        ("", "is not a seam"),
        ("25", "is not a seam"),
        (25, "25 is not a seam"),
        ("lap -2", "is too small"),
        ("lap 0", "is too small"),
        ("lap 2000", "is too large"),
        ("lap 2 ells", '"ells"'),
        ("lap 25 out", "a seam is not turned out"),
        ("pittsburgh 1", "too small for this rule"),
    ],
)
def test_what_is_no_seam_is_refused(text: object, words: str) -> None:
    with pytest.raises(InputError) as caught:
        seam_of(text)
    (problem,) = caught.value.problems
    assert words in problem.given
    assert problem.allowed


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("flange 25 in", 'can be read as inches or as turned in; allowed: flange 25" or flange 25 turned in'),
        ("lap 20 turned in", "lap is not turned in"),
        ("flang 20", 'did you mean "flange"?'),
        ("raw 3", "raw takes no size"),
        ("hem", "the width of the hem is not given"),
    ],
)
def test_what_is_no_edge_is_refused(text: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        edge_of(text)
    assert words in str(caught.value)


def test_every_shipped_rule_says_what_it_is_and_whence() -> None:
    rules = shipped()
    assert list(rules.seams) == [
        "butt", "lap", "grooved", "welt", "standing", "double-standing", "pittsburgh", "double",
    ]  # fmt: skip
    assert list(rules.edges) == ["raw", "lap", "flange", "tap-flange", "hem", "double-hem", "wired"]
    for each in (*rules.seams.values(), *rules.edges.values()):
        assert each.about
        assert each.source.startswith(("common practice, no source", "textbooks, from memory")) or (
            "textbooks, from memory" in each.source
        )


def test_a_shop_overrides_and_adds() -> None:
    own = {
        "seams": {
            "grooved": {"size": "width", "left": {"size": 1.5, "thickness": 2}, "right": {"size": 1.5}},
            "Cup-Clip": {"left": {"fixed": 12.5}, "left_folds": [{}], "ends": "notched"},
        }
    }
    rules = read_tables(own, base=shipped())
    assert seam_of("grooved 6", thickness=1, rules=rules).left == 11
    # Replaced whole: it has no fold lines and is the shop's own.
    assert seam_of("grooved 6", rules=rules).left_folds == ()
    assert seam_of("grooved 6", rules=rules).source == "the shop's own"
    assert seam_of("cup clip", rules=rules).left == 12.5
    assert seam_of("lap 25", rules=rules).right == 25
    assert seam_of("grooved 6", thickness=1).left == 9  # what came with the program stays
    assert rules.edges == shipped().edges


def test_all_that_is_wrong_with_rules_is_found_at_once() -> None:
    wrong = {
        "seam": {},
        "edges": {"flange": {"turned": "yes", "allowance": 3}, "bead": 5},
        "seams": {
            "lap": {"right": {"size": 1}, "colour": "red"},
            "other": {
                "size": 3,
                "left": {"width": 1},
                "right": {"fixed": True},
                "left_folds": {},
                "ends": "round",
            },
            "grooved2": {},
            "hook": {"also": ["lap"]},
        },
    }
    with pytest.raises(InputError) as caught:
        read_tables(wrong, base=shipped())
    assert {problem.field for problem in caught.value.problems} == {
        "seam", "edges.flange.turned", "edges.flange.allowance", "edges.bead", "seams.lap.right.size",
        "seams.lap.colour", "seams.other.size", "seams.other.left.width", "seams.other.right.fixed",
        "seams.other.left_folds", "seams.other.ends", "seams.grooved2", "seams.hook",
    }  # fmt: skip
    assert all(problem.given and problem.allowed for problem in caught.value.problems)


def test_rules_cannot_be_changed() -> None:
    with pytest.raises(TypeError):
        shipped().seams["lap"] = shipped().seams["butt"]  # type: ignore[index]
    assert Rules().seams == {}
    assert Linear() == Linear(0, 0, 0)


@given(st.text(max_size=30))
def test_any_text_is_read_or_refused(text: str) -> None:
    for given_text in (text, f"lap {text}", f"flange 25 {text}"):
        with suppress(InputError):
            assert seam_of(given_text).right >= 0
        with suppress(InputError):
            assert edge_of(given_text).allowance >= 0
