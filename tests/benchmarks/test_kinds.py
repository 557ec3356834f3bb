"""How long the net pattern of each kind takes, and hard geometry; `pytest -m benchmark -s`.

Times are the best of several, once loaded. The goals are for a quiet machine; a busy one of two cores
may take `BUSY` times as long before a test fails.
"""

from __future__ import annotations

from collections.abc import Mapping

import pytest

from develop.pieces import KINDS, kind_of
from develop.pieces.fields import Piece, read_piece
from tests.benchmarks.timing import BUSY, best, ms, show
from tests.validation.test_trefethen_weideman import CASES, laid_flat, miss, reference

pytestmark = pytest.mark.benchmark

SINGLE, PAIR, FLAT = 5e-3, 15e-3, 4e-3

STRAIGHT = {"header": "round 400", "header_length": 900, "branch": "round 150", "centre_to_end": 500}
TRANSITION = {"kind": "transition", "end_a": "round 500", "end_b": "round 300", "length": 800}
ELLIPTICAL = {**TRANSITION, "end_a": "ellipse 600 x 400"}
CONE = {"kind": "cone", "section": "ellipse 600 x 500", "height": 1200, "cut_b": 700}
ONTO = {"branch": "round 150", "centre_to_end": 500}
BRANCHES: dict[str, dict[str, object]] = {
    "straight": STRAIGHT,
    "straight, leaning, off centre, in plate": {**STRAIGHT, "angle": 55, "off_centre": 30, "thickness": 4},
    "straight flat-oval": {**STRAIGHT, "header": "flat-oval 600 x 300"},
    "transition": {**ONTO, "header": TRANSITION},
    "transition, leaning, off centre": {**ONTO, "header": TRANSITION, "angle": 70, "off_centre": 30},
    "transition in plate": {**ONTO, "header": TRANSITION, "thickness": 4},
    "elliptical transition": {**ONTO, "header": ELLIPTICAL},
    "cut cone": {**ONTO, "header": CONE},
}


def piece(kind: str, given: Mapping[str, object]) -> Piece:
    found, problems = read_piece(kind_of(kind), given)
    assert found is not None, problems
    return found


def test_every_kind() -> None:
    rows, late = [], []
    for kind in KINDS:
        one = piece(kind, kind_of(kind).example)
        parts = len(one.build().patterns)
        took = best(one.build)
        goal = PAIR if kind == "branch" else SINGLE if parts == 1 else None
        rows.append((kind, ms(took), f"{parts} parts" if goal is None else f"goal {ms(goal)}"))
        # Of several parts without a goal of their own, each may take what a single one may.
        if took > BUSY * (goal or parts * SINGLE):
            late.append(rows[-1])
    show("Net pattern of each kind's example, best of 41", rows)
    assert not late


def test_branches_with_their_headers() -> None:
    rows, late = [], []
    for name, given in BRANCHES.items():
        took = best(piece("branch", given).build, repeats=15)
        rows.append((name, ms(took), f"goal {ms(PAIR)}"))
        # Edges that are worked out to touch are searched for: shown, as they miss the goal by far.
        if took > BUSY * PAIR and "in plate" not in name:
            late.append(rows[-1])
    show("Branch with its header, best of 15", rows)
    assert not late


def test_flat_sections_and_steep_tilts() -> None:
    rows, late = [], []
    for name, hard in CASES.items():
        took = best(lambda hard=hard: hard.band().sheet(0.0))
        out = miss(laid_flat(hard.band()), reference(hard, hard.steps))
        rows.append((name, ms(took), f"goal {ms(FLAT)}; out by {out:.1e} mm, goal {hard.goal:g}"))
        if took > BUSY * FLAT or out > hard.goal:
            late.append(rows[-1])
    show("Geometry of flat sections and steep tilts, best of 41", rows)
    assert not late
