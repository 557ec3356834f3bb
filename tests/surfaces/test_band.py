"""The band between two ends, where the answer is known in closed form, and where there is none."""

from __future__ import annotations

from math import atan2, cos, degrees, hypot, pi, radians, sin, sqrt

import numpy as np
import pytest
from numpy.typing import NDArray

from develop.errors import Refusal
from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.solid import Frame, Rim
from develop.surfaces.band import Band
from develop.surfaces.edges import edges

Array = NDArray[np.float64]


def rim(
    width: float, height: float, *, at: tuple[float, float, float] = (0.0, 0.0, 0.0), rotate: float = 0.0
) -> Rim:
    return Rim(Ellipse(width=width, height=height), Frame.square(at=at, rotate=rotate))


def test_parallel_ends_meet_at_equal_normals() -> None:
    """Published special case: the foot of a ruling has the same normal, and sin ψ is −Δh over the slant."""
    band = Band(rim(600.0, 300.0), rim(400.0, 400.0, at=(80.0, 40.0, 400.0)))
    sheet = band.sheet(0.0)
    phi = np.linspace(0.0, 2.0 * pi, 25)[:-1]
    u = band.rim_a.section.parameter(np.cos(phi), np.sin(phi))
    lines = sheet.lines(sheet.from_a(u))
    a = np.stack([300.0**2 * np.cos(phi), 150.0**2 * np.sin(phi)], axis=1)
    a /= np.hypot(300.0 * np.cos(phi), 150.0 * np.sin(phi))[:, None]
    b = np.array([80.0, 40.0]) + 200.0 * np.stack([np.cos(phi), np.sin(phi)], axis=1)
    assert lines.length == pytest.approx(np.hypot(np.hypot(*(b - a).T), 400.0), rel=1e-13)
    # From either end's parameter it is the same line.
    again = sheet.lines(sheet.from_b(phi))
    assert np.abs(again.a - lines.a).max() < 1e-9
    assert np.abs(again.b - lines.b).max() < 1e-9


def test_oblique_round_cylinder() -> None:
    """Equal rounds side by side: a cylinder over an ellipse. Length of its square section times its slant."""
    from scipy.special import ellipe

    sheet = Band(rim(200.0, 200.0), rim(200.0, 200.0, at=(150.0, 0.0, 200.0))).sheet(0.3)
    slant = 250.0
    lines = sheet.lines(sheet.ends)
    assert lines.length == pytest.approx(np.full(len(lines.a), slant), rel=1e-14)
    # The square section has half axes 100 and 100 · 200/250.
    assert sheet.area == pytest.approx(slant * 4.0 * 100.0 * ellipe(1.0 - 0.8**2), rel=1e-13)
    # All lines are parallel in the flat too.
    leg = (lines.b - lines.a) / slant
    assert np.abs(leg - leg[0]).max() < 1e-13
    assert lines.turn[-1] - lines.turn[0] == pytest.approx(2.0 * pi, rel=1e-12)


def test_right_frustum_turn_and_roll_radius() -> None:
    """Common practice for cones: roll radius r / cos of the half angle; the bends add up to 2π times it."""
    r, s, height = 200.0, 100.0, 240.0
    slant = hypot(r - s, height)
    sheet = Band(rim(2 * r, 2 * r), rim(2 * s, 2 * s, at=(0.0, 0.0, height))).sheet(0.0)
    lines = sheet.lines(sheet.from_a(np.linspace(0.2, 6.0, 9)))
    half_angle = atan2(r - s, height)
    assert lines.radius_a == pytest.approx(np.full(9, r / cos(half_angle)), rel=1e-12)
    assert lines.radius_b == pytest.approx(np.full(9, s / cos(half_angle)), rel=1e-12)
    ends = sheet.lines(sheet.ends)
    assert ends.turn[-1] - ends.turn[0] == pytest.approx(2.0 * pi * cos(half_angle), rel=1e-12)
    assert degrees(abs(sheet.turn)) == pytest.approx(360.0 * r / (slant * r / (r - s)), rel=1e-12)


@pytest.mark.parametrize("distance", [3.0, -3.0, 8.0])
def test_right_frustum_in_thick_plate(distance: float) -> None:
    """The neutral surface lies d off, square to the plate: an edge cut square to it has radius r + d cos."""
    r, s, height = 200.0, 100.0, 240.0
    half_angle = atan2(r - s, height)
    sheet = Band(rim(2 * r, 2 * r), rim(2 * s, 2 * s, at=(0.0, 0.0, height)), distance).sheet(0.0)
    out = distance * cos(half_angle)
    assert sheet.edge_a == pytest.approx(2.0 * pi * (r + out), rel=1e-12)
    assert sheet.edge_b == pytest.approx(2.0 * pi * (s + out), rel=1e-12)
    slant = hypot(r - s, height)
    assert sheet.area == pytest.approx(pi * (r + s + 2.0 * out) * slant, rel=1e-12)
    assert sheet.lines(sheet.ends).length == pytest.approx(slant, rel=1e-13)


def test_cone_of_2400_inside_at_47_degrees_in_16_mm_plate() -> None:
    """Half the plate added all round, as on parallel work, makes the edge 16 mm too long: cut square to the
    plate, its middle lies only 8 cos 47° out."""
    half_angle = radians(47.0)
    top = 2400.0 - 2.0 * 800.0 * sin(half_angle)
    sheet = Band(rim(2400.0, 2400.0), rim(top, top, at=(0.0, 0.0, 800.0 * cos(half_angle))), 8.0).sheet(0.0)
    assert sheet.edge_a == pytest.approx((2400.0 + 16.0 * cos(half_angle)) * pi, rel=1e-12)
    assert (2400.0 + 16.0) * pi - sheet.edge_a == pytest.approx(16.0, abs=0.05)


def test_apex_at_either_end_and_the_same_fan() -> None:
    up = Band(rim(300.0, 200.0), Rim(Point(), Frame.square(at=(50.0, -20.0, 250.0)))).sheet(0.0)
    down = Band(Rim(Point(), Frame.square()), rim(300.0, 200.0, at=(-50.0, 20.0, 250.0))).sheet(0.0)
    assert down.area == pytest.approx(up.area, rel=1e-12)
    assert down.edge_b == pytest.approx(up.edge_a, rel=1e-12)
    assert down.edge_a == pytest.approx(0.0, abs=1e-10)
    chain_a, chain_b = edges(down)
    assert np.abs(chain_a - chain_a[0]).max() < 1e-9
    assert np.hypot(*(chain_b[-1] - chain_b[0])) > 1.0


def test_between_two_points_there_is_nothing_to_roll() -> None:
    """No side, no area: refused, or nothing at all, but never a number that looks like one."""
    try:
        sheet = Band(Rim(Point(), Frame.square()), Rim(Point(), Frame.square(at=(0.0, 0.0, 100.0)))).sheet(
            0.0
        )
    except (Refusal, ValueError, ZeroDivisionError):
        return
    assert sheet.area == pytest.approx(0.0, abs=1e-9)


def test_tilted_round_ends_of_a_cone_are_cone_sections() -> None:
    """A plane cut of a right cone: the band from a round to that ellipse lies on the cone, so its area is
    that of the lateral surface between, π r s less the small cone's, by the projection onto the base."""
    r, height, slope = 300.0, 600.0, radians(25.0)
    k = r / height  # the cone's radius falls by k a mm of height
    # The plane z = 200 + x tan(slope) cuts it; in the plane the section is an ellipse.
    t = np.tan(slope)
    right = (height - 200.0) * k / (1.0 + k * t)
    left = (height - 200.0) * k / (1.0 - k * t)
    centre_x, half_x = 0.5 * (right - left), 0.5 * (right + left)
    centre_z = 200.0 + centre_x * t
    # Half width across: where x is centre_x, y² = (k (height − z))² − x².
    half_y = sqrt((k * (height - centre_z)) ** 2 - centre_x**2)
    cut = Ellipse(width=2.0 * half_x / cos(slope), height=2.0 * half_y)
    frame = Frame.square(at=(centre_x, 0.0, centre_z)).tilted(slope=slope, long=0.0)
    sheet = Band(rim(2 * r, 2 * r), Rim(cut, frame)).sheet(pi / 2)
    # Lateral area over a region of the base plane is the region's area over sin of the half angle.
    sine = r / hypot(r, height)
    expected = (pi * r * r - pi * half_x * half_y) / sine
    assert sheet.area == pytest.approx(expected, rel=1e-12)
    # All lines run to the one apex.
    lines = sheet.lines(sheet.ends)
    slant = hypot(r, height)
    apex = lines.a + (lines.b - lines.a) / lines.length[:, None] * slant
    assert np.abs(apex - apex[0]).max() < 1e-9


@pytest.mark.parametrize(
    ("low", "tilt"),
    [(0.0, 0.0), (-50.0, 0.0), (99.0, 30.0), (50.0, 80.0)],
)
def test_ends_through_each_other_are_refused(low: float, tilt: float) -> None:
    frame = Frame.square(at=(0.0, 0.0, low)).tilted(slope=radians(tilt), long=1.0)
    with pytest.raises(Refusal) as caught:
        Band(rim(600.0, 300.0), Rim(Ellipse(width=400.0, height=400.0), frame))
    (problem,) = caught.value.problems
    assert problem.field == "length"
    assert "reaches" in problem.given
    assert "through the plane" in problem.given


def test_an_end_in_the_plane_of_the_other_is_refused() -> None:
    """A ring in one plane is flat already; it is no side to be rolled, and its lines would have no order."""
    with pytest.raises(Refusal):
        Band(rim(600.0, 600.0), rim(200.0, 200.0, at=(10.0, 0.0, 0.0)))


def test_end_b_behind_end_a_is_refused() -> None:
    with pytest.raises(Refusal):
        Band(rim(300.0, 300.0), rim(300.0, 300.0, at=(0.0, 0.0, -200.0)))
