"""The checks can fail: a good pattern with one thing changed, and the check that must not hold then."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace
from math import pi, radians, sin

import numpy as np
import pytest
from numpy.typing import NDArray

from develop.checks import Check, check
from develop.pattern.curve import Curve, segment
from develop.pattern.pattern import Outline, Pattern, Rulings
from develop.pieces.built import Built
from develop.pieces.cut_types import Cut
from develop.pieces.marking_band import MarkingBand
from develop.pieces.straight import Straight
from develop.pieces.transition import Transition
from develop.sections.text import parse_section
from develop.solid import Solid

Array = NDArray[np.float64]

BUILT = {
    "transition": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("round 400"),
        length=400.0,
        offset=(80.0, 40.0),
        seam_at=radians(200.0),
    ).build(),
    "inside up": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("ellipse 350 x 300"),
        length=400.0,
        rotate=radians(30.0),
        thickness=3.0,
        sizes="inside",
        face="inside",
        seam_at=radians(10.0),
    ).build(),
    "straight": Straight(
        section=parse_section("ellipse 600 x 300"),
        length=800.0,
        cut_b=Cut(slope=radians(30.0), long=radians(75.0)),
        seam_at=radians(300.0),
    ).build(),
    "marking band": MarkingBand(
        section=parse_section("pipe DN 200"), cut=Cut(slope=radians(45.0), long=0.0), seam_at=radians(200.0)
    ).build(),
}

every = pytest.mark.parametrize("name", BUILT)
EXACT_A, EXACT_B = (f"edge at END {end} against the girth" for end in "AB")
DRAWN_A, DRAWN_B = (f"edge at END {end} as drawn, against the girth" for end in "AB")
SEAMS = "seam, right side against left"
SEAM = "seam against the finished piece"
AREA, DRAWN_AREA = "area against the finished side", "area as drawn, against the finished side"
CLOSING = "closing check, largest distance from the ends"
CROSSING = "outline crosses itself"


def failing(pattern: Pattern, solid: Solid) -> set[str]:
    return {each.name for each in check(pattern, solid) if not each.holds}


def outline(net: Outline, change: Callable[[str, Curve], Curve], *, area: float | None = None) -> Outline:
    curves = tuple((name, change(name, curve)) for name, curve in net.curves)
    return Outline(curves, net.area if area is None else area)


def moved(curve: Curve, change: Callable[[Array], Array], factor: float = 1.0) -> Curve:
    return Curve(change(curve.controls), curve.length * factor, curve.straight)


def parts(name: str) -> tuple[Pattern, Solid]:
    built: Built = BUILT[name]
    return built.patterns[0], built.solid


def through(pattern: Pattern, points: Callable[[Array], Array]) -> Pattern:
    """The pattern with every one of its points moved, but nothing said of it changed."""
    net = outline(pattern.net, lambda _, curve: moved(curve, points))
    rulings = replace(pattern.rulings, a=points(pattern.rulings.a), b=points(pattern.rulings.b))
    lines = tuple(replace(line, start=points(line.start), end=points(line.end)) for line in pattern.lines)
    rows = tuple(replace(row, a=points(row.a), b=points(row.b)) for row in pattern.divisions)
    marks = tuple(replace(mark, at=points(mark.at)) for mark in pattern.marks)
    return replace(pattern, net=net, cut=net, rulings=rulings, lines=lines, divisions=rows, marks=marks)


@every
def test_untouched_every_check_holds(name: str) -> None:
    pattern, solid = parts(name)
    assert failing(pattern, solid) == set()
    # Moved on the sheet and turned, it is the same pattern.
    c, s = np.cos(0.3), np.sin(0.3)
    assert failing(through(pattern, lambda p: p @ np.array([[c, s], [-s, c]]) + 50.0), solid) == set()


@every
def test_stretched_by_a_ten_thousandth(name: str) -> None:
    pattern, solid = parts(name)
    stretched = through(pattern, lambda p: p * np.array([1.0001, 1.0]))
    assert {DRAWN_A, DRAWN_B, CLOSING} <= failing(stretched, solid)
    higher = through(pattern, lambda p: p * np.array([1.0, 1.0001]))
    assert {SEAM, CLOSING} <= failing(higher, solid)


@every
@pytest.mark.parametrize("edge", ["a", "b"])
def test_edge_longer_by_a_billionth(name: str, edge: str) -> None:
    """What the record gives as the exact length."""
    pattern, solid = parts(name)
    net = outline(pattern.net, lambda each, curve: moved(curve, np.copy, 1.0 + 1e-9 * (each == edge)))
    assert failing(replace(pattern, net=net), solid) == {EXACT_A if edge == "a" else EXACT_B}


@every
def test_area_larger_by_a_billionth(name: str) -> None:
    pattern, solid = parts(name)
    net = replace(pattern.net, area=pattern.net.area * (1.0 + 1e-9))
    assert failing(replace(pattern, net=net), solid) == {AREA}


@every
@pytest.mark.parametrize("edge", ["a", "b"])
def test_one_bezier_bent(name: str, edge: str) -> None:
    """One handle of one Bézier pulled out by 3 mm, square to the edge."""
    pattern, solid = parts(name)

    def bent(each: str, curve: Curve) -> Curve:
        if each != edge:
            return curve
        controls = curve.controls.copy()
        k = 3 * (len(controls) // 6)
        along = controls[k + 3] - controls[k]
        controls[k + 1] += 3.0 * np.array([-along[1], along[0]]) / np.hypot(*along)
        return Curve(controls, curve.length)

    net = outline(pattern.net, bent)
    assert failing(replace(pattern, net=net, cut=net), solid) != set()


@every
def test_outline_moved_off_its_lines(name: str) -> None:
    """The contour shifted by 1 mm on the sheet, its lines and marks left where they were."""
    pattern, solid = parts(name)
    net = outline(pattern.net, lambda _, curve: moved(curve, lambda p: p + np.array([1.0, 0.0])))
    assert failing(replace(pattern, net=net, cut=net), solid) != set()


@every
def test_outline_mirrored_without_its_lines(name: str) -> None:
    pattern, solid = parts(name)
    ring = np.vstack([curve.controls for _, curve in pattern.net.curves])
    far = ring[:, 0].min() + ring[:, 0].max()
    sides = {"seam_left": "seam_right", "seam_right": "seam_left"}
    flipped = {
        sides.get(each, each): moved(
            curve.reversed(), lambda p: np.array([far, 0.0]) + p * np.array([-1.0, 1.0])
        )
        for each, curve in pattern.net.curves
    }
    net = Outline(tuple((each, flipped[each]) for each, _ in pattern.net.curves), pattern.net.area)
    assert failing(replace(pattern, net=net, cut=net), solid) != set()


@every
def test_mirrored_as_a_whole(name: str) -> None:
    """Cut from the wrong face: a part that is not symmetric about its seam does not close turned over."""
    pattern, solid = parts(name)
    other = {"outside": "inside", "inside": "outside"}[pattern.face]
    found = failing(replace(pattern, face=other), solid)
    assert CLOSING in found


@every
@pytest.mark.parametrize("share", [0.05, 0.3, 0.5, 0.9])
def test_one_turn_wrong_by_a_tenth_of_a_degree(name: str, share: float) -> None:
    pattern, solid = parts(name)
    turn = pattern.rulings.turn.copy()
    turn[int(share * len(turn))] += radians(0.1)
    tampered = replace(pattern, rulings=replace(pattern.rulings, turn=turn))
    assert CLOSING in failing(tampered, solid)


@every
def test_rolled_the_wrong_way(name: str) -> None:
    pattern, solid = parts(name)
    rolled = replace(pattern, rulings=replace(pattern.rulings, turn=-pattern.rulings.turn))
    assert CLOSING in failing(rolled, solid)


@every
def test_lines_in_another_order(name: str) -> None:
    pattern, solid = parts(name)
    r = pattern.rulings
    order = np.arange(len(r.a))
    order[100:200], order[200:300] = order[200:300].copy(), order[100:200].copy()
    assert CLOSING in failing(
        replace(pattern, rulings=Rulings(r.a[order], r.b[order], r.turn, r.u, r.distance)), solid
    )


@every
@pytest.mark.parametrize("turned", [3.0, 90.0])
def test_seam_elsewhere_on_the_finished_piece(name: str, turned: float) -> None:
    pattern, solid = parts(name)
    found = failing(pattern, replace(solid, seam=solid.seam + radians(turned)))
    assert {SEAM, CLOSING} <= found


@every
def test_one_side_of_the_seam_shorter(name: str) -> None:
    pattern, solid = parts(name)

    def cut_short(each: str, curve: Curve) -> Curve:
        if each != "seam_right":
            return curve
        return segment(curve.start, curve.start + (curve.end - curve.start) * (1.0 - 1e-4))

    assert SEAMS in failing(replace(pattern, net=outline(pattern.net, cut_short)), solid)


@pytest.mark.parametrize("name", ["transition", "inside up", "straight"])
def test_edges_swapped(name: str) -> None:
    pattern, solid = parts(name)
    curves = dict(pattern.net.curves)
    curves["a"], curves["b"] = curves["b"].reversed(), curves["a"].reversed()
    net = Outline(tuple((each, curves[each]) for each, _ in pattern.net.curves), pattern.net.area)
    assert {EXACT_A, DRAWN_A, EXACT_B, DRAWN_B} <= failing(replace(pattern, net=net), solid)


@pytest.mark.parametrize("name", ["transition", "inside up", "straight"])
def test_ends_of_the_piece_swapped(name: str) -> None:
    pattern, solid = parts(name)
    upside_down = Solid(solid.end_b, solid.end_a, side=solid.side, seam=solid.seam, distance=solid.distance)
    assert {EXACT_A, EXACT_B} <= failing(pattern, upside_down)


@every
@pytest.mark.parametrize("steps", [12, 24, 96])
def test_girth_stepped_with_dividers(name: str, steps: int) -> None:
    """The edge laid off as so many chords of the end, as by hand: short by π²/(6 steps²) at least."""
    pattern, solid = parts(name)
    factor = sin(pi / steps) / (pi / steps)
    pulled = through(pattern, lambda p: p * np.array([factor, 1.0]))
    net = outline(pulled.net, lambda each, c: moved(c, np.copy, factor if each in "ab" else 1.0))
    found = failing(replace(pulled, net=net, cut=net), solid)
    assert {EXACT_A, EXACT_B, DRAWN_A, DRAWN_B, DRAWN_AREA, CLOSING} <= found


@every
def test_neutral_line_forgotten(name: str) -> None:
    """The pattern of the bare sizes against a piece whose sheet lies 0.01 mm further out."""
    pattern, solid = parts(name)
    found = failing(pattern, replace(solid, distance=solid.distance + 0.01))
    assert {EXACT_A, EXACT_B, AREA, CLOSING} & found >= {EXACT_A, EXACT_B, AREA}


@pytest.mark.parametrize("name", ["transition", "straight"])
def test_another_piece(name: str) -> None:
    """A piece that is 0.1 mm longer."""
    pattern, solid = parts(name)
    higher = replace(solid.end_b, origin=solid.end_b.origin + np.array([0.0, 0.0, 0.1]))
    assert {SEAM, AREA, CLOSING} <= failing(pattern, replace(solid, end_b=higher))


@every
def test_contour_that_crosses_itself(name: str) -> None:
    """The right side of the seam leant over, across the left one."""
    pattern, solid = parts(name)
    curves = dict(pattern.net.curves)
    left, right = curves["seam_left"], curves["seam_right"]
    a, b = curves["a"].controls.copy(), curves["b"].controls.copy()
    far = left.end + (left.end - right.start) * 0.2
    a[-1] = far
    curves["a"] = Curve(a, curves["a"].length)
    curves["b"] = Curve(b, curves["b"].length)
    curves["seam_right"] = segment(far, right.end)
    net = Outline(tuple((each, curves[each]) for each, _ in pattern.net.curves), pattern.net.area)
    assert CROSSING in failing(replace(pattern, net=net, cut=net), solid)


@every
def test_roll_line_moved(name: str) -> None:
    """One roll line 1 mm along the edges: it would be rolled in the wrong place."""
    pattern, solid = parts(name)
    k = len(pattern.lines) // 3
    line = pattern.lines[k]
    shift = np.array([1.0, 0.0])
    lines = list(pattern.lines)
    lines[k] = replace(line, start=line.start + shift, end=line.end + shift)
    assert failing(replace(pattern, lines=tuple(lines)), solid) != set()


@every
def test_roll_line_turned_wrong(name: str) -> None:
    pattern, solid = parts(name)
    k = len(pattern.lines) // 3
    lines = list(pattern.lines)
    lines[k] = replace(lines[k], turn=lines[k].turn + radians(1.0))
    assert failing(replace(pattern, lines=tuple(lines)), solid) != set()


@every
def test_true_length_in_the_table_wrong(name: str) -> None:
    pattern, solid = parts(name)
    k = len(pattern.divisions) // 3
    rows = list(pattern.divisions)
    rows[k] = replace(rows[k], length=rows[k].length + 0.1)
    assert failing(replace(pattern, divisions=tuple(rows)), solid) != set()


@every
def test_witness_mark_moved(name: str) -> None:
    """TOP of END B, which the neighbour's TOP must meet, 1 mm aside along the edge."""
    pattern, solid = parts(name)
    marks = [
        replace(mark, at=mark.at + 1.0 * np.array([-mark.inward[1], mark.inward[0]]))
        if (mark.text, mark.edge) == ("TOP", "b")
        else mark
        for mark in pattern.marks
    ]
    assert failing(replace(pattern, marks=tuple(marks)), solid) != set()


# ---- the single check ---------------------------------------------------------------------


@pytest.mark.parametrize(
    ("expected", "got", "limit", "holds"),
    [
        (1.0, 1.5, 0.5, True),
        (1.0, 1.500001, 0.5, False),
        (1.0, 0.5, 0.5, True),
        (0.0, 0.0, 0.0, True),
        (0.0, 1.0, 0.0, False),
        (1.0, float("nan"), 1e9, False),
        (float("nan"), 1.0, 1e9, False),
        (1.0, float("inf"), 1e9, False),
        (float("inf"), float("inf"), 1.0, False),
    ],
)
def test_holds(expected: float, got: float, limit: float, holds: bool) -> None:
    assert Check("one", expected, got, limit, "mm").holds is holds
