"""The cylinder by hand: round pipes, where every figure has a closed form."""

from __future__ import annotations

from math import pi, radians, sqrt, tan

import numpy as np
import pytest
from numpy.typing import NDArray

from develop.pieces.cuts import shortest, steepest
from develop.sections.ellipse import Ellipse
from develop.solid import cut_slopes
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.edges import edges
from develop.surfaces.trim import Plane

Array = NDArray[np.float64]

LEVEL = np.zeros(2)


def pipe(radius: float = 100.0, *, distance: float = 0.0, slope: float = 0.0, long: float = 0.0) -> Cylinder:
    cut = cut_slopes(slope=radians(slope), long=radians(long), end_b=True)
    return Cylinder(
        Ellipse(width=2 * radius, height=2 * radius), Plane(0.0, LEVEL), Plane(300.0, cut), distance
    )


def test_square_pipe_is_a_rectangle() -> None:
    sheet = pipe().sheet(1.0)
    assert (sheet.edge_a, sheet.edge_b) == pytest.approx((200.0 * pi, 200.0 * pi), rel=1e-15)
    assert sheet.area == pytest.approx(200.0 * pi * 300.0, rel=1e-15)
    lines = sheet.lines(sheet.ends)
    assert np.abs(lines.a[:, 1]).max() == 0.0
    assert np.abs(lines.b[:, 1] - 300.0).max() == 0.0
    assert lines.turn[-1] - lines.turn[0] == pytest.approx(2.0 * pi, rel=1e-14)
    assert lines.radius_a == pytest.approx(np.full(len(lines.a), 100.0), rel=1e-14)


@pytest.mark.parametrize("seam", [0.0, 1.3, 4.0])
def test_seam_and_running_length(seam: float) -> None:
    """From the seam on, anticlockwise, to the right: the running length is r times the angle gone."""
    sheet = pipe(slope=30.0, long=75.0).sheet(seam)
    u = seam + np.linspace(0.0, 6.2, 9)
    lines = sheet.lines(sheet.from_a(u))
    assert lines.a[:, 0] == pytest.approx(100.0 * (u - seam), abs=2e-12)
    height = 300.0 + tan(radians(30.0)) * 100.0 * np.cos(u - radians(75.0))
    assert lines.b[:, 1] == pytest.approx(height, abs=2e-12)
    assert lines.length == pytest.approx(height, abs=2e-12)
    # The sinusoid's slope there.
    slope = -tan(radians(30.0)) * np.sin(u - radians(75.0))
    assert lines.tangent_b[:, 1] / lines.tangent_b[:, 0] == pytest.approx(slope, abs=2e-12)
    assert sheet.from_b(u).x == pytest.approx(sheet.from_a(u).x)


@pytest.mark.parametrize("distance", [2.5, -2.5])
def test_at_a_distance_lengths_stay_and_girths_go(distance: float) -> None:
    plain, moved = pipe(slope=40.0), pipe(slope=40.0, distance=distance)
    one, two = plain.sheet(0.0), moved.sheet(0.0)
    assert two.edge_a == pytest.approx(2.0 * pi * (100.0 + distance), rel=1e-14)
    u = np.linspace(0.0, 6.0, 13)
    first, second = one.lines(one.from_a(u)), two.lines(two.from_a(u))
    # Cut square to the plate: no height changes across the thickness.
    assert second.length == pytest.approx(first.length, rel=1e-14)
    assert second.a[:, 0] == pytest.approx(first.a[:, 0] * (100.0 + distance) / 100.0, abs=2e-12)


@pytest.mark.parametrize(("slope", "long"), [(0.0, 0.0), (30.0, 0.0), (60.0, 200.0), (71.0, 45.0)])
def test_shortest_line(slope: float, long: float) -> None:
    surface = pipe(slope=slope, long=long)
    expected = 300.0 - 100.0 * tan(radians(slope))
    low, high = surface.trim_a, surface.trim_b
    assert shortest(surface.section, low, high) == pytest.approx(expected, abs=1e-10)
    u = np.linspace(0.0, 2 * pi, 3601)
    assert surface.lengths(u).min() == pytest.approx(expected, abs=3e-4 * tan(radians(slope)) + 1e-10)


def test_steepest_cut() -> None:
    """Just when the cut's low side meets the other end: tan = 300 / 100."""
    surface = pipe(slope=80.0, long=10.0)
    found = steepest(surface.section, surface.trim_a, surface.trim_b, which="b")
    assert tan(radians(found)) == pytest.approx(3.0, rel=1e-12)


def test_steepest_against_a_cut_at_the_other_end() -> None:
    """End A cut at 45 degrees takes 100 off its short side; what is left for B depends on the direction."""
    section = Ellipse(width=200.0, height=200.0)
    rise_a = cut_slopes(slope=radians(45.0), long=0.0, end_b=False)

    def of(long: float) -> float:
        rise_b = cut_slopes(slope=radians(85.0), long=long, end_b=True)
        return steepest(section, Plane(0.0, rise_a), Plane(300.0, rise_b), which="b")

    # Both long at the right: on the left 300 − 100 − 100 tan = 0. Opposite: 300 + 100 − 100 tan … = 0.
    assert tan(radians(of(0.0))) == pytest.approx(2.0, rel=1e-12)
    assert tan(radians(of(pi))) == pytest.approx(4.0, rel=1e-12)
    assert tan(radians(of(pi / 2))) == pytest.approx(sqrt(8.0), rel=1e-12)


@pytest.mark.parametrize("slope", [0.0, 20.0, 60.0, 80.0])
def test_drawn_edge_is_the_sinusoid(slope: float) -> None:
    surface = pipe(slope=slope, long=30.0)
    sheet = surface.sheet(0.0)
    a, b = edges(sheet)
    assert np.abs(a[:, 1]).max() == 0.0
    assert (len(b) - 1) % 3 == 0
    p = b[np.arange(0, len(b) - 1, 3)[:, None] + np.arange(4)]
    for t in (0.1, 0.3, 0.5, 0.77):
        x, y = (
            (1 - t) ** 3 * p[:, 0]
            + 3 * (1 - t) ** 2 * t * p[:, 1]
            + 3 * (1 - t) * t**2 * p[:, 2]
            + t**3 * p[:, 3]
        ).T
        rise = tan(radians(slope))
        gap = y - (300.0 + 100.0 * rise * np.cos(x / 100.0 - radians(30.0)))
        # Measured upwards; square to the curve it is less.
        square = gap / np.sqrt(1.0 + (rise * np.sin(x / 100.0 - radians(30.0))) ** 2)
        assert np.abs(square).max() < 2.2e-4


def test_edges_end_at_a_rounded_corner_as_their_own_side_does() -> None:
    """In thick plate an edge has a kink where a flat side goes over into its corner's arc.

    On the flat it climbs as the plane does; on the arc, developed 2.5 outside, by r / (r + 2.5) of that.
    """
    from develop.sections.rectangle import Rectangle

    section = Rectangle(width=400.0, height=300.0, r=40.0)
    rise = cut_slopes(slope=radians(40.0), long=0.5 * pi, end_b=True)
    sheet = Cylinder(section, Plane(0.0, np.zeros(2)), Plane(600.0, rise), 2.5).sheet(
        float(section.breaks[0])
    )
    _, b = edges(sheet)
    pieces = b[np.arange(0, len(b) - 1, 3)[:, None] + np.arange(4)]
    assert len(pieces) < 60
    start, end = pieces[:, 1] - pieces[:, 0], pieces[:, 3] - pieces[:, 2]
    slopes = [each[:, 1] / each[:, 0] for each in (end[:-1], start[1:])]
    kinks = np.flatnonzero(np.abs(slopes[0] - slopes[1]) > 1e-3)
    steep = tan(radians(40.0))
    found = sorted(np.abs(np.stack([slopes[0][kinks], slopes[1][kinks]], axis=1)).max(axis=1))
    less = sorted(np.abs(np.stack([slopes[0][kinks], slopes[1][kinks]], axis=1)).min(axis=1))
    # Four of them, on the two sides that climb.
    assert found == pytest.approx([steep] * 4, rel=1e-6)
    assert less == pytest.approx([steep * 40.0 / 42.5] * 4, rel=1e-6)
