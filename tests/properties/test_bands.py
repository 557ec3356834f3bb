"""Random bands between tilted ends and points, through the library: the pieces that need them come later."""

from __future__ import annotations

from math import radians

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from numpy.typing import NDArray
from scipy.special import ellipe

from develop.errors import Refusal
from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.solid import End, Frame, Rim, Solid
from develop.surfaces.band import Band, BandSheet
from develop.surfaces.sheet import Place

Array = NDArray[np.float64]


def sizes(least: float, most: float) -> st.SearchStrategy[float]:
    return st.floats(np.log(least), np.log(most)).map(lambda x: round(float(np.exp(x)), 2))


angles = st.floats(0.0, 360.0).map(lambda x: round(x, 2))


@st.composite
def ellipses(draw: st.DrawFn) -> Ellipse:
    """Any way up, to 1:50."""
    long, ratio, upright = draw(sizes(50.0, 1500.0)), draw(sizes(1.0, 50.0)), draw(st.booleans())
    sizes_ = (long / ratio, long) if upright else (long, long / ratio)
    return Ellipse(width=sizes_[0], height=sizes_[1])


@st.composite
def bands(draw: st.DrawFn, steepest: float = 60.0) -> Band:
    """End B turned and tilted up to 60 degrees, end A too, moved apart until each clears the other's plane."""
    a, b = draw(ellipses()), draw(ellipses())
    slope = draw(st.floats(0.0, steepest))
    # End A leans less: together they stay below a right angle.
    frame_a = Frame.square().tilted(
        slope=radians(draw(st.floats(0.0, 80.0 - steepest))), long=radians(draw(angles))
    )
    shift = (draw(st.floats(-200.0, 200.0)), draw(st.floats(-200.0, 200.0)))
    leant = Frame.square(rotate=radians(draw(angles))).tilted(
        slope=radians(slope), long=radians(draw(angles))
    )
    clear = draw(sizes(5.0, 1000.0))
    rim_a = Rim(a, frame_a)

    def at(height: float) -> Rim:
        return Rim(b, Frame(np.array([*shift, height]), leant.axes))

    # Heights at which end B just clears the plane of A, and A that of B.
    probe = at(0.0)
    low = probe.highest_over(frame_a, sign=-1.0) / frame_a.normal[2]
    high = rim_a.highest_over(probe.frame, sign=1.0) / leant.normal[2]
    return Band(rim_a, at(max(low, high) + clear))


def girth(section: Ellipse) -> float:
    a, b = max(section.a, section.b), min(section.a, section.b)
    return float(4.0 * a * ellipe(1.0 - (b / a) ** 2))


def solid_of(band: Band, seam: float = 0.0) -> Solid:
    ends = (End.placed(rim.section, rim.frame) for rim in (band.rim_a, band.rim_b))
    return Solid(*ends, side="hull", seam=seam, distance=band.distance)


def places(sheet: BandSheet, count: int = 5) -> Place:
    m = len(sheet.ends.x) - 1
    return Place(np.repeat(np.arange(m), count), np.tile(np.linspace(-1.0, 1.0, count), m))


def size_of(band: Band) -> float:
    return float(
        sum(rim.section.width + rim.section.height for rim in (band.rim_a, band.rim_b))
        + np.linalg.norm(band.rim_b.frame.origin - band.rim_a.frame.origin)
    )


@given(bands(), angles)
def test_edges_equal_the_girths(band: Band, seam: float) -> None:
    sheet = band.sheet(radians(seam))
    assert sheet.edge_a == pytest.approx(girth(band.rim_a.section), rel=1e-11)
    assert sheet.edge_b == pytest.approx(girth(band.rim_b.section), rel=1e-11)


@given(bands())
def test_area_and_edges_by_the_route_of_the_checks(band: Band) -> None:
    sheet, measures = band.sheet(0.0), solid_of(band).measures
    assert sheet.area == pytest.approx(measures.area, rel=1e-11)
    assert sheet.edge_a == pytest.approx(measures.edge_a, rel=1e-11)
    assert sheet.edge_b == pytest.approx(measures.edge_b, rel=1e-11)


@given(bands())
def test_corners_to_1e_9_mm_against_a_tighter_tolerance(band: Band) -> None:
    """The same sheet, resolved a thousand times finer, lies on the first."""
    usual, fine = band.sheet(0.0), band.sheet(0.0, tolerance=1e-13)
    u = np.linspace(0.0, 2.0 * np.pi, 37)[:-1]
    one, two = usual.lines(usual.from_a(u)), fine.lines(fine.from_a(u))
    limit = max(1e-9, 3e-13 * size_of(band))
    for name in ("a", "b", "arc_a", "arc_b", "length"):
        assert np.abs(getattr(one, name) - getattr(two, name)).max() < limit
    assert np.abs(one.turn - two.turn).max() < 1e-11


@given(bands())
def test_rulings_keep_their_length_and_touch_both_ends(band: Band) -> None:
    """In space one plane touches both ends along each ruling: neither end passes through it."""
    sheet = band.sheet(1.0)
    lines = sheet.lines(places(sheet, 3))
    strip = solid_of(band).strip(lines.u_a)
    size = size_of(band)
    true = np.linalg.norm(strip.b - strip.a, axis=1)
    assert np.abs(np.hypot(*(lines.b - lines.a).T) - true).max() < 1e-10 * size
    assert np.abs(lines.length - true).max() < 1e-10 * size
    rim = np.linspace(0.0, 2.0 * np.pi, 200)
    for each in (band.rim_a, band.rim_b):
        x, y = each.section.touch(np.cos(rim), np.sin(rim))
        points = each.place(x, y)
        outside = (points @ strip.normal.T) - np.einsum("ni,ni->n", strip.a, strip.normal)
        assert outside.max() < 1e-11 * size
    across = np.einsum("ni,ni->n", strip.b - strip.a, strip.normal)
    assert np.abs(across).max() < 1e-11 * size


@given(bands())
def test_coplanar_tangents(band: Band) -> None:
    """The published condition, det(a', b', b − a) = 0, at the ends that the sheet's edges say: the
    angle between ruling and edge in the flat is that in space, at both ends."""
    sheet = band.sheet(0.0)
    lines = sheet.lines(places(sheet, 3))
    solid = solid_of(band)
    strip = solid.strip(lines.u_a)
    ruling, flat = strip.b - strip.a, lines.b - lines.a
    tangents = []
    for end, points in ((solid.end_a, strip.a), (solid.end_b, strip.b)):
        xy = (points - end.origin) @ end.spans
        a, b = end.section.a, end.section.b
        along = np.stack([-xy[:, 1] * a / b, xy[:, 0] * b / a], axis=1) @ end.spans.T
        tangents.append(along / np.linalg.norm(along, axis=1)[:, None])
    size = np.linalg.norm(ruling, axis=1)
    volume = np.einsum("ni,ni->n", np.cross(*tangents), ruling) / size
    assert np.abs(volume).max() < 1e-7
    for tangent, edge in zip(tangents, (lines.tangent_a, lines.tangent_b), strict=True):
        assert (
            np.abs(np.einsum("ni,ni->n", tangent, ruling) - (edge * flat).sum(axis=1)).max()
            < 2e-7 * size.max()
        )


@given(ellipses(), st.floats(-500.0, 500.0), st.floats(-500.0, 500.0), sizes(20.0, 2000.0), st.booleans())
def test_cones_to_a_point(base: Ellipse, x: float, y: float, height: float, point_up: bool) -> None:
    """From every seam the fan closes: edge, area and radii against the distances from the apex."""
    rims = [Rim(base, Frame.square()), Rim(Point(), Frame.square(at=(x, y, height if point_up else -height)))]
    band = Band(*(rims if point_up else rims[::-1]))
    sheet = band.sheet(0.5)
    edge, apex = (sheet.edge_a, sheet.edge_b) if point_up else (sheet.edge_b, sheet.edge_a)
    assert edge == pytest.approx(girth(base), rel=1e-11)
    assert apex == pytest.approx(0.0, abs=1e-11 * size_of(band))
    lines = sheet.lines(places(sheet, 5))
    far, tip = (lines.a, lines.b) if point_up else (lines.b, lines.a)
    size = size_of(band)
    assert np.abs(tip - tip[0]).max() < 1e-10 * size
    # ½ ∮ |r × r'|, r the vector from the apex: periodic, so the trapezoidal rule is enough.
    n = 1 << 14
    t = np.arange(n) * (2.0 * np.pi / n)
    r = np.stack(
        [base.a * np.cos(t) - x, base.b * np.sin(t) - y, np.full(n, -rims[1].frame.origin[2])], axis=1
    )
    rate = np.stack([-base.a * np.sin(t), base.b * np.cos(t), np.zeros(n)], axis=1)
    exact = np.linalg.norm(np.cross(r, rate), axis=1).mean() * np.pi
    assert sheet.area == pytest.approx(float(exact), rel=1e-10)
    distances = np.linalg.norm(r, axis=1)
    radii = np.hypot(*(far - tip[0]).T)
    # The nearest and farthest of 16384 points of the base, between which every radius lies.
    assert distances.min() - 1e-4 * size < radii.min()
    assert radii.max() < distances.max() + 1e-4 * size


@given(bands(), angles, angles)
def test_the_seam_changes_nothing_but_where_it_is_cut(band: Band, one: float, other: float) -> None:
    first, second = band.sheet(radians(one)), band.sheet(radians(other))
    assert first.area == pytest.approx(second.area, rel=1e-12)
    assert first.edge_a == pytest.approx(second.edge_a, rel=1e-12)
    assert first.edge_b == pytest.approx(second.edge_b, rel=1e-12)
    u = np.linspace(0.0, 6.0, 25)
    mine, yours = first.lines(first.from_a(u)), second.lines(second.from_a(u))
    assert np.abs(mine.length - yours.length).max() < 1e-10 * size_of(band)
    gone = (mine.arc_a - yours.arc_a) % first.edge_a
    assert np.abs((gone - gone[0] + 0.5 * first.edge_a) % first.edge_a - 0.5 * first.edge_a).max() < 1e-9


@given(bands(), st.floats(0.001, 2.0))
def test_pushed_through_the_other_plane_it_is_refused(band: Band, through: float) -> None:
    """Lowered until one end reaches through the plane of the other: refused, with a length that works."""
    a, b = band.rim_a, band.rim_b
    up = np.array([0.0, 0.0, 1.0])
    clear_b = -b.highest_over(a.frame, sign=-1.0) / a.frame.normal[2]
    clear_a = -a.highest_over(b.frame, sign=1.0) / b.frame.normal[2]
    least = min(clear_a, clear_b)
    size = max(rim.section.width + rim.section.height for rim in (a, b))
    with pytest.raises(Refusal, match="through the plane of end") as caught:
        Band(a, Rim(b.section, Frame(b.frame.origin - up * (least + through), b.frame.axes)))
    (problem,) = caught.value.problems
    assert problem.field == "length"
    Band(a, Rim(b.section, Frame(b.frame.origin - up * (least - 1e-4 * size), b.frame.axes)))


@given(bands(steepest=40.0), st.floats(0.01, 0.8), st.booleans())
def test_a_sheet_at_a_distance(band: Band, share: float, inward: bool) -> None:
    """Outward, and inward as far as the tightest roll: edges and area by the route of the checks."""
    sheet = band.sheet(0.0)
    lines = sheet.lines(places(sheet, 9))
    tightest = min(float(lines.radius_a.min()), float(lines.radius_b.min()))
    distance = share * min(20.0, tightest) * (-1.0 if inward else 1.0)
    moved = Band(band.rim_a, band.rim_b, distance)
    found, measures = moved.sheet(0.0), solid_of(moved).measures
    assert found.edge_a == pytest.approx(measures.edge_a, rel=1e-10)
    assert found.edge_b == pytest.approx(measures.edge_b, rel=1e-10)
    assert found.area == pytest.approx(measures.area, rel=1e-10)
    # Steiner in space: the area grows by the distance times the turn times each ruling's length.
    turned = found.lines(places(found, 9))
    assert turned.turn[-1] == pytest.approx(lines.turn[-1], rel=1e-9)
    assert (found.area > sheet.area) == (distance > 0.0)
