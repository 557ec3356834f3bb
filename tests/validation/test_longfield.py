"""Emmett E. Longfield, Sheet Metal Drafting, McGraw-Hill 1921: p. 32 (girth of a 7 in pipe), p. 59
(elbows of several pieces, the end ones half, problems 13B to J), p. 82 (cone, base 5, slant 12), p. 96
(elbow of 3 pieces), p. 128 (funnel: frustum 6 to 3, height 3). The book takes π = 3.1416.
"""

from __future__ import annotations

from math import atan, cos, degrees, pi, radians, sin, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.sections.text import parse_section
from develop.solid import Frame, Rim
from develop.surfaces.band import Band
from tests.pieces.making import make

PI_OF_THE_BOOK = 3.1416


def round_rim(diameter: float, height: float) -> Rim:
    return Rim(Ellipse(width=diameter, height=diameter), Frame.square(at=(0.0, 0.0, height)))


def test_girth_p_32() -> None:
    size = parse_section("round 7 in").width / 25.4
    girth = Ellipse(width=size, height=size).girth
    assert girth == pytest.approx(7.0 * pi, rel=1e-15)
    assert girth == pytest.approx(21.9912, abs=7.0 * (PI_OF_THE_BOOK - pi) + 5e-6)


def test_cone_p_82() -> None:
    apex = Rim(Point(), Frame.square(at=(0.0, 0.0, sqrt(12.0**2 - 2.5**2))))
    sheet = Band(round_rim(5.0, 0.0), apex).sheet(1.0)
    assert sheet.edge_a == pytest.approx(15.7080, abs=5.0 * (PI_OF_THE_BOOK - pi) + 5e-6)
    assert sheet.edge_a == pytest.approx(5.0 * pi, rel=1e-13)
    assert sheet.area == pytest.approx(30.0 * pi, rel=1e-13)
    assert degrees(abs(sheet.turn)) == pytest.approx(75.0, rel=1e-13)
    assert np.abs(sheet.lines(sheet.ends).length - 12.0).max() < 1e-14


def test_funnel_p_128() -> None:
    sheet = Band(round_rim(6.0, 0.0), round_rim(3.0, 3.0)).sheet(4.0)
    slant = sqrt(1.5**2 + 3.0**2)
    lines = sheet.lines(sheet.ends)
    assert np.abs(lines.length - slant).max() < 1e-14
    assert sheet.area == pytest.approx(pi * 4.5 * slant, rel=1e-13)
    assert sheet.edge_a == pytest.approx(6.0 * pi, rel=1e-13)
    assert sheet.edge_b == pytest.approx(3.0 * pi, rel=1e-13)
    # Both edges are arcs about one centre, where the lines meet: radius 6.708204, half of it inside.
    first, last = lines.take([0]), lines.take([-1])
    along = (first.b - first.a)[0] / slant
    centre = first.a[0] + along * 2.0 * slant
    assert np.abs(centre - (last.a + 2.0 * (last.b - last.a))[0]).max() < 1e-13
    every = sheet.lines(sheet.from_a(np.linspace(0.1, 6.2, 40)))
    assert np.abs(np.linalg.norm(every.a - centre, axis=1) - 6.708204).max() < 5e-7
    assert np.abs(np.linalg.norm(every.b - centre, axis=1) - slant).max() < 1e-13
    assert degrees(abs(sheet.turn)) == pytest.approx(360.0 * 3.0 / (2.0 * slant), rel=1e-13)
    assert degrees(abs(sheet.turn)) == pytest.approx(160.99689, abs=5e-6)


@pytest.mark.parametrize(
    ("count", "angle", "mitre"),
    [
        (5, 90, 11.25),
        (4, 75, 12.5),  # 13B
        (3, 90, 22.5),  # 13C
        *[(n, 12 * (n - 1), 6.0) for n in range(2, 9)],  # 13D to J: from 2 pieces of 12° to 8 of 84°
    ],
)
def test_mitre_angles_of_elbows_p_59(count: int, angle: float, mitre: float) -> None:
    pattern = make("bend", section="round 200", angle=angle, radius=900, gores=count).patterns[0]
    lengths = [row.length for row in pattern.divisions]
    assert degrees(atan((max(lengths) - min(lengths)) / 200.0)) == pytest.approx(mitre, abs=1e-9)


@pytest.mark.parametrize(
    ("count", "lines"), [(5, [11.25, 33.75, 56.25, 78.75]), (3, [22.5, 67.5])], ids=["p. 59", "p. 96"]
)
def test_mitre_lines_of_elbows_fan_out_from_the_centre(count: int, lines: list[float]) -> None:
    built = make("bend", section="round 200", angle=90, radius=300, gores=count)
    found = []
    for part in built.parts:
        spans = part.solid.end_b.spans
        across = np.cross(spans[:, 0], spans[:, 1])
        found += [across @ frame.axes / np.linalg.norm(across) for frame in part.frames]
    # The last gore's end B is the square end of the elbow, at 90°.
    for normal, line in zip(found, [*lines, 90.0], strict=True):
        assert normal == pytest.approx([0.0, sin(radians(line)), cos(radians(line))], abs=1e-12)
