"""The folded sheet itself: where its lines come to lie in space."""

from __future__ import annotations

from math import radians

import numpy as np
import pytest
from numpy.typing import NDArray

from develop.checks.fold import closing_miss, folded
from develop.pieces.cut_types import Cut
from develop.pieces.fields import Piece
from develop.pieces.straight import Straight
from develop.pieces.transition import Transition
from develop.sections.text import parse_section

Array = NDArray[np.float64]

PIECES: dict[str, Piece] = {
    "transition": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("round 400"),
        length=450.0,
        offset=(0.0, 50.0),
    ),
    "inside up": Transition(
        end_a=parse_section("round 300"),
        end_b=parse_section("ellipse 500 x 200"),
        length=300.0,
        rotate=radians(25.0),
        face="inside",
        thickness=4.0,
        sizes="outside",
    ),
    "flat cone": Transition(end_a=parse_section("round 55"), end_b=parse_section("round 405"), length=20.0),
    "steep cut": Straight(
        section=parse_section("round 125"), length=500.0, cut_a=Cut(slope=radians(70.0), long=radians(30.0))
    ),
}

every = pytest.mark.parametrize("name", PIECES)


@every
def test_lands_on_both_ends_and_closes(name: str) -> None:
    built = PIECES[name].build()
    (pattern,) = built.patterns
    miss = closing_miss(pattern, built.solid)
    assert 0.0 <= miss < 0.005
    a, b, normal = folded(pattern, built.solid)
    lift = built.solid.distance * normal
    # Said again without the solid's own measure of distance: nearest of many points of each end.
    u = np.linspace(0.0, 2.0 * np.pi, 20_000)
    for lines, end in ((a - lift, built.solid.end_a), (b - lift, built.solid.end_b)):
        rim = end.point(u)
        for point in lines[:: max(1, len(lines) // 40)]:
            near = int(np.argmin(((rim - point) ** 2).sum(axis=1)))
            step = np.linalg.norm(rim[near] - rim[near - 1])
            assert np.linalg.norm(rim[near] - point) <= miss + step
    assert np.linalg.norm(a[-1] - a[0]) <= miss
    assert np.linalg.norm(b[-1] - b[0]) <= miss


@every
def test_folding_keeps_every_length(name: str) -> None:
    """A fold bends between strips only: lines, steps along the edges and diagonals stay as they are flat."""
    built = PIECES[name].build()
    (pattern,) = built.patterns
    a, b, normal = folded(pattern, built.solid)
    lines = pattern.rulings
    flat_a, flat_b = lines.a, lines.b
    if pattern.face == "inside":
        flat_a, flat_b = flat_a[::-1], flat_b[::-1]

    def flat(p: Array, q: Array) -> Array:
        return np.asarray(np.hypot(*(q - p).T))

    def space(p: Array, q: Array) -> Array:
        return np.asarray(np.linalg.norm(q - p, axis=1))

    assert np.abs(flat(flat_a, flat_b) - space(a, b)).max() < 1e-9
    assert np.abs(flat(flat_a[:-1], flat_a[1:]) - space(a[:-1], a[1:])).max() < 1e-9
    assert np.abs(flat(flat_b[:-1], flat_b[1:]) - space(b[:-1], b[1:])).max() < 2e-9
    assert np.abs(flat(flat_a[:-1], flat_b[1:]) - space(a[:-1], b[1:])).max() < 2e-9
    assert np.abs(np.linalg.norm(normal, axis=1) - 1.0).max() < 1e-12


@every
def test_normals_point_out_of_the_finished_piece(name: str) -> None:
    built = PIECES[name].build()
    (pattern,) = built.patterns
    a, b, normal = folded(pattern, built.solid)
    middle = 0.5 * (a.mean(axis=0) + b.mean(axis=0))
    out = 0.5 * (a + b) - middle
    assert np.all((out * normal).sum(axis=1) > 0.0)


@every
def test_lines_land_where_the_solid_has_them(name: str) -> None:
    """Not only on the ends but at the right place along them: line by line against the solid."""
    built = PIECES[name].build()
    (pattern,) = built.patterns
    solid = built.solid
    a, b, normal = folded(pattern, solid)
    lift = solid.distance * normal
    q = (a - lift - solid.end_a.origin) @ solid.end_a.back.T
    strip = solid.strip(solid.end_a.section.at_direction(np.arctan2(q[:, 1], q[:, 0])))
    assert np.abs(strip.a - (a - lift)).max() < 0.01
    # The far end is reached over the length of the line, so it may swing a little more.
    assert np.abs(strip.b - (b - lift)).max() < 0.2


def test_halved_strips_fold_four_times_closer() -> None:
    """What is left of the miss is that of flat strips, not of the pattern: it goes with their square."""
    from dataclasses import replace

    built = PIECES["transition"].build()
    (pattern,) = built.patterns
    solid, lines = built.solid, pattern.rulings
    misses = []
    for step in (8, 4, 2):
        keep = np.arange(0, len(lines.a), step)
        keep = keep if keep[-1] == len(lines.a) - 1 else np.append(keep, len(lines.a) - 1)
        turn = np.diff(np.cumsum(lines.turn)[keep], prepend=0.0)
        coarse = replace(lines, a=lines.a[keep], b=lines.b[keep], turn=turn)
        misses.append(closing_miss(replace(pattern, rulings=coarse), solid))
    assert misses[0] / misses[1] == pytest.approx(4.0, rel=0.15)
    assert misses[1] / misses[2] == pytest.approx(4.0, rel=0.15)
