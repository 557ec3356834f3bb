"""What the sheets say, in mm and in inches."""

from __future__ import annotations

from math import pi

import pytest

from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.pieces.wording import shift_words, size_words


def facts(kind: str, *, units: str = "mm", **given: object) -> tuple[str, ...]:
    piece, problems = read_piece(kind_of(kind), given, unit=units)
    assert not problems, problems
    assert piece is not None
    (pattern,) = piece.build(units=units).patterns
    assert pattern.units == units
    return pattern.facts


def test_a_transition_of_sheet() -> None:
    said = facts(
        "transition", end_a="round 400", end_b="ellipse 300 x 200", length=450, offset=[50, -50.8], rotate=30,
        thickness=0.8, sizes="inside", material="galvanised", mark="T1", quantity=2,
    )  # fmt: skip
    # A round of 400 inside is 400.8 at mid-thickness; the ellipse's girth is read from the record's own checks.
    assert said[:4] == (
        "T1: transition", "END A round 400 to END B ellipse 300 x 200",
        "length 450, END B 50 right, 50.8 down, rotated 30°", "sizes inside",
    )  # fmt: skip
    assert said[5:] == ("galvanised, 0.8 mm thick", "quantity 2, outside up")


def test_edges_are_as_developed() -> None:
    # A square-cut round: girth of mid-thickness, pi (400 + 6).
    said = facts("straight", section="round 400", length=620, thickness=6, sizes="inside")
    assert f"edges: END A {pi * 406:.1f}, END B {pi * 406:.1f}" in said
    said = facts("straight", section="round 400", length=620)
    assert f"edges: END A {pi * 400:.1f}, END B {pi * 400:.1f}" in said


@pytest.mark.parametrize(("thickness", "told"), [(2.9, False), (3, True)])
def test_plate_says_how_its_edges_are_cut(thickness: float, told: bool) -> None:
    square = facts("straight", section="round 400", length=620, thickness=thickness)
    cut = facts("straight", section="round 400", length=620, thickness=thickness, cut_b="slope 20 long top")
    tapered = facts("transition", end_a="round 400", end_b="round 300", length=450, thickness=thickness)
    for said, held in ((square, "length"), (cut, "length and cuts"), (tapered, "length")):
        assert ("edges square to the plate" in said) is told
        assert (f"{held} at the given sizes" in said) is told


@pytest.mark.parametrize(("sizes", "where"), [
    ("mean", "mid-thickness"), ("inside", "the inside"), ("outside", "the given sizes"),
])  # fmt: skip
def test_plate_of_a_pipe_says_where_its_lengths_are_held(sizes: str, where: str) -> None:
    given = {"length": 1000, "cut_b": "slope 30 long top", "thickness": 10, "sizes": sizes}
    said = facts("straight", section="pipe DN 800", **given)
    assert "sizes outside" in said
    assert f"length and cuts at {where}" in said
    other = facts("straight", section="round 813", **given)
    assert "length and cuts at the given sizes" in other


@pytest.mark.parametrize(("thickness", "sizes", "words"), [
    (0, "mean", "net, no thickness"), (0, "inside", "net, no thickness"), (2, "mean", "sizes mean (mid-thickness)"),
    (2, "outside", "sizes outside"),
])  # fmt: skip
def test_where_sizes_are_measured(thickness: float, sizes: str, words: str) -> None:
    said = facts("straight", section="round 400", length=620, thickness=thickness, sizes=sizes)
    assert said[3] == words
    assert ("net, no thickness" in said) is (f"{thickness} mm thick" not in said)


def test_a_pipe_is_measured_outside_and_says_so() -> None:
    given = {"length": 300, "thickness": 6.3, "sizes": "inside"}
    assert facts("straight", section="pipe DN 200", **given)[3] == "sizes outside"
    said = facts("transition", end_a="pipe DN 200", end_b="round 150", **given)
    assert said[3] == "sizes inside, the pipe's outside"


@pytest.mark.parametrize("end_b", ["round 300", "ellipse 300 x 300", "pipe DN 250"])
def test_a_round_end_is_not_rotated_and_no_shift_is_centred(end_b: str) -> None:
    said = facts("transition", end_a="round 400", end_b=end_b, length=450, rotate=30)
    assert said[2] == "length 450, END B centred"


def test_shifts_are_told_by_their_side() -> None:
    assert shift_words(-20.0, 0.0, "mm") == "END B 20 left"
    assert shift_words(0.0, 12.5, "mm") == "END B 12.5 up"
    assert shift_words(25.4, -38.1, "in") == "END B 1 in right, 1-1/2 in down"
    assert shift_words(1e-13, -1e-13, "mm") == "END B centred"


def test_a_long_material_takes_several_lines() -> None:
    words = "stainless steel 1.4404 cold rolled, brushed one side, protected by film on the other side"
    said = facts("straight", section="round 400", length=620, thickness=1.5, material=words)
    lines = said[5:-1]
    assert len(lines) > 1
    assert max(map(len, lines)) < 56
    assert " ".join(lines) == f"{words}, 1.5 mm thick"


def test_inches_are_whole_and_fractions() -> None:
    said = facts(
        "transition", units="in", end_a="ellipse 24 x 12", end_b="round 16", length="17-3/4", offset=[2, "-1-1/2"],
        thickness="1/4", sizes="mean",
    )  # fmt: skip
    assert said[1:3] == (
        "END A ellipse 24 in x 12 in to END B round 16 in", "length 17-3/4 in, END B 2 in right, 1-1/2 in down",
    )  # fmt: skip
    # 16 pi = 50.265 in; edge B of plate may differ by a little, so only its form is looked at here.
    assert "1/4 in thick" in said
    round_facts = facts("straight", units="in", section="round 16", length=24)
    assert "edges: END A 50-1/4 in, END B 50-1/4 in" in round_facts


@pytest.mark.parametrize(("mm", "mm_words", "inch_words"), [
    (25.4, "25.4", "1 in"), (9.921875, "9.922", "25/64 in"), (400.0, "400", "15.748 in"), (0.8, "0.8", "0.031 in"),
    (0.0, "0", "0 in"), (314.325, "314.325", "12-3/8 in"),
])  # fmt: skip
def test_a_size_is_a_fraction_only_where_it_is_one(mm: float, mm_words: str, inch_words: str) -> None:
    assert size_words(mm, "mm") == mm_words
    assert size_words(mm, "in") == inch_words
