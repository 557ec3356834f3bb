"""M. Dawson-Haggerty and others, trimesh: area, closure and sense of a triangle mesh.

The finished piece as it is drawn, closed by its two ends: watertight, facing outward, its volume
that of the body, and the area of its side that of the flat pattern.
"""

from __future__ import annotations

from math import pi, radians, tan

import numpy as np
import pytest
import trimesh

from develop.pieces.cut_types import Cut
from develop.pieces.fields import Piece
from develop.pieces.marking_band import MarkingBand
from develop.pieces.straight import Straight
from develop.pieces.transition import Transition
from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.sections.text import parse_section
from develop.solid import End, Frame, Rim, Solid
from develop.surfaces.band import Band

PIECES: dict[str, Piece] = {
    "transition": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("round 400"),
        length=450.0,
        offset=(0.0, 50.0),
    ),
    "rotated": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("ellipse 500 x 200"),
        length=300.0,
        offset=(120.0, -80.0),
        rotate=radians(50.0),
    ),
    "square": Straight(section=parse_section("ellipse 600 x 300"), length=800.0),
    "cut at both ends": Straight(
        section=parse_section("ellipse 600 x 300"),
        length=800.0,
        cut_a=Cut(slope=radians(25.0), long=radians(200.0)),
        cut_b=Cut(slope=radians(40.0), long=radians(75.0)),
    ),
    "marking band": MarkingBand(
        section=parse_section("pipe DN 200"), cut=Cut(slope=radians(45.0), long=0.0), paper=0.0
    ),
}


def side(solid: Solid, count: int) -> trimesh.Trimesh:
    vertices, quads = solid.faces(count)
    triangles = np.vstack([quads[:, [0, 1, 2]], quads[:, [0, 2, 3]]])
    return trimesh.Trimesh(vertices, triangles, process=False)


def closed(solid: Solid, count: int) -> trimesh.Trimesh:
    """The side, with a fan of triangles over each end."""
    mesh = side(solid, count)
    i = np.arange(count)
    j = (i + 1) % count
    low, high = np.full(count, 2 * count), np.full(count, 2 * count + 1)
    middle = [mesh.vertices[:count].mean(axis=0), mesh.vertices[count : 2 * count].mean(axis=0)]
    faces = [mesh.faces, np.stack([j, i, low], axis=1), np.stack([i + count, j + count, high], axis=1)]
    return trimesh.Trimesh(np.vstack([mesh.vertices, middle]), np.vstack(faces), process=False)


@pytest.mark.parametrize("name", PIECES)
def test_closed_and_outward(name: str) -> None:
    mesh = closed(PIECES[name].build().solid, 240)
    assert mesh.is_watertight
    assert mesh.is_winding_consistent
    assert mesh.is_volume
    assert mesh.volume > 0.0


@pytest.mark.parametrize("name", PIECES)
def test_area_of_the_side_is_that_of_the_pattern(name: str) -> None:
    built = PIECES[name].build()
    coarse, fine = (side(built.solid, n).area for n in (1500, 3000))
    (pattern,) = built.patterns
    # Chords fall short by 1/n²; extrapolated, what is left is below 1e-8 of the area.
    assert (4.0 * fine - coarse) / 3.0 == pytest.approx(pattern.net.area, rel=1e-8)
    assert fine < pattern.net.area
    assert fine == pytest.approx(pattern.net.area, rel=1e-4)


@pytest.mark.parametrize("name", ["transition", "rotated"])
def test_a_transition_is_its_own_convex_hull(name: str) -> None:
    solid = PIECES[name].build().solid
    own, hull = [], []
    for n in (300, 600):
        mesh = closed(solid, n)
        own.append(mesh.volume)
        hull.append(mesh.convex_hull.volume)
    # Flat quads cut along a diagonal dent the hull by 1/n².
    assert hull[1] - own[1] == pytest.approx(0.0, abs=1e-4 * own[1])
    first, second = ((4.0 * fine - coarse) / 3.0 for coarse, fine in (own, hull))
    assert first == pytest.approx(second, rel=1e-7)


def test_volume_of_the_square_and_of_the_cut_straight() -> None:
    """Area times length on the axis, however the ends are cut: the planes pass through the axis' ends."""
    for name in ("square", "cut at both ends"):
        solid = PIECES[name].build().solid
        coarse, fine = (closed(solid, n).volume for n in (1000, 2000))
        assert (4.0 * fine - coarse) / 3.0 == pytest.approx(pi * 300.0 * 150.0 * 800.0, rel=1e-8)


def test_volume_of_the_marking_band() -> None:
    """50 wide at the narrow side, of 219.1 outside, cut at 45 degrees: π r² (50 + r)."""
    r = 219.1 / 2.0
    solid = PIECES["marking band"].build().solid
    coarse, fine = (closed(solid, n).volume for n in (1000, 2000))
    expected = pi * r * r * (50.0 + r * tan(pi / 4))
    assert (4.0 * fine - coarse) / 3.0 == pytest.approx(expected, rel=1e-8)


def test_a_cone_closes_in_its_point() -> None:
    base, apex = (
        Rim(Ellipse(width=6.0, height=6.0), Frame.square()),
        Rim(Point(), Frame.square(at=(0, 0, 4.0))),
    )
    solid = Solid(
        End.placed(base.section, base.frame), End.placed(apex.section, apex.frame), side="hull", seam=0.0
    )
    coarse, fine = (side(solid, n).area for n in (1000, 2000))
    assert (4.0 * fine - coarse) / 3.0 == pytest.approx(15.0 * pi, rel=1e-9)
    assert Band(base, apex).sheet(0.0).area == pytest.approx(15.0 * pi, rel=1e-13)
