"""Arcs in place of Béziers, measured against curves of elementary geometry."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.outputs.biarcs import arcs_of
from develop.pattern.curve import Curve, segment
from tests.outputs.bulges import distances, length


def deviation(curve, arcs):
    """Largest distance of the Béziers, at many places, from the arcs; which make no detour between them."""
    vertices = [(*p, b) for p, b in zip(arcs.points.tolist(), [*arcs.bulges, 0.0], strict=True)]
    t = np.linspace(0.0, 1.0, max(600, 4000 // len(curve.pieces)))[:, None]
    theirs = np.vstack(
        [
            (1 - t) ** 3 * a + 3 * (1 - t) ** 2 * t * b + 3 * (1 - t) * t**2 * c + t**3 * d
            for a, b, c, d in curve.pieces
        ]
    )
    along = np.hypot(*np.diff(theirs, axis=0).T).sum()
    assert length(vertices, closed=False) == pytest.approx(along, rel=1e-4)
    return distances(theirs, vertices, closed=False).max()


def tangents(arcs):
    """Directions [rad] in which each arc starts and ends: half its sweep off its chord."""
    along = np.diff(arcs.points, axis=0)
    chord = np.arctan2(along[:, 1], along[:, 0])
    half = 2.0 * np.arctan(arcs.bulges)
    return chord - half, chord + half


def turned(a, b):
    return np.abs((np.asarray(a) - np.asarray(b) + math.pi) % (2.0 * math.pi) - math.pi)


def ellipse(a, b, samples, pieces=32):
    u = np.linspace(0.0, 2.0 * math.pi, pieces + 1)
    handle = 4.0 * math.tan(math.pi / pieces / 2.0)
    at = np.stack([a * np.cos(u), b * np.sin(u)], axis=1)
    at[-1] = at[0]
    return samples.curve_through(at, handle * np.stack([-a * np.sin(u), b * np.cos(u)], axis=1), 1.0)


def sinusoid(samples, radius=150.0, rise=150.0):
    return samples.slanting(radius, 60.0, math.degrees(math.atan(rise / radius))).net.curve("b")


@pytest.mark.parametrize("limit", [0.002, 0.0085, 0.1])
@pytest.mark.parametrize(("a", "b"), [(300.0, 150.0), (300.0, 20.0), (1000.0, 999.0)])
def test_an_ellipse_within_the_limit(samples, a, b, limit):
    curve = ellipse(a, b, samples)
    arcs = arcs_of(curve, limit=limit)
    found = deviation(curve, arcs)
    assert found <= limit
    assert arcs.deviation == pytest.approx(found, abs=0.03 * limit + 2e-5)
    assert arcs.points[0].tolist() == arcs.points[-1].tolist() == curve.start.tolist()
    out, into = tangents(arcs)
    assert turned(into, np.roll(out, -1)).max() < 1e-6


def test_arcs_are_few(samples):
    """A long stretch of one curve needs as many arcs as its limit asks for: 8 times the limit halves them.

    A biarc is out by the cube of its length (Meek and Walton, from memory)."""
    fine, coarse = (arcs_of(ellipse(300.0, 150.0, samples), limit=limit).count for limit in (0.005, 0.04))
    assert fine <= 80
    assert coarse == pytest.approx(fine / 2.0, rel=0.2)


def test_a_circle_is_one(samples):
    curve = samples.arc(np.array([40.0, 70.0]), 25.0, 0.3, 0.3 + 2.0 * math.pi)
    closed = Curve(np.vstack([curve.controls[:-1], curve.controls[:1]]), curve.length)
    for sign, each in ((1.0, closed), (-1.0, closed.reversed())):
        arcs = arcs_of(each, limit=0.01)
        assert arcs.circle == pytest.approx((40.0, 70.0, 25.0), abs=1e-6)
        assert arcs.bulges.tolist() == [sign, sign]
        assert deviation(each, arcs) < 2e-5


@pytest.mark.parametrize(("sweep", "count"), [(0.5, 1), (-3.0, 1), (5.0, 1), (6.0, 2)])
def test_an_arc_is_one_however_long(samples, sweep, count):
    curve = samples.arc(np.array([40.0, 70.0]), 900.0, 1.0, 1.0 + sweep)
    arcs = arcs_of(curve, limit=0.01)
    assert arcs.count == count
    assert (4.0 * np.arctan(arcs.bulges)).sum() == pytest.approx(sweep, abs=1e-6)
    assert arcs.points[-1].tolist() == curve.end.tolist()
    assert deviation(curve, arcs) < 1e-3


def test_a_nearly_round_ellipse_is_no_circle(samples):
    assert arcs_of(ellipse(300.0, 300.001, samples), limit=0.01).circle is not None
    assert arcs_of(ellipse(300.0, 300.1, samples), limit=0.01).circle is None


def test_straight_pieces_are_lines_and_corners_stay(samples):
    """A slot: two lines, two half circles; then a zigzag."""
    low, high = segment([0.0, 0.0], [100.0, 0.0]), segment([100.0, 50.0], [0.0, 50.0])
    right = samples.arc(np.array([100.0, 25.0]), 25.0, -math.pi / 2, math.pi / 2)
    left = samples.arc(np.array([0.0, 25.0]), 25.0, math.pi / 2, 1.5 * math.pi)
    chain = np.vstack([low.controls, *(each.controls[1:] for each in (right, high, left))])
    arcs = arcs_of(Curve(chain, 1.0), limit=0.01)
    assert arcs.bulges.tolist() == pytest.approx([0.0, 1.0, 0.0, 1.0], abs=1e-9)
    zigzag = np.vstack([low.controls, segment([100.0, 0.0], [50.0, 80.0]).controls[1:]])
    arcs = arcs_of(Curve(zigzag, 1.0), limit=0.01)
    assert arcs.points.tolist() == [[0.0, 0.0], [100.0, 0.0], [50.0, 80.0]]
    assert arcs.bulges.tolist() == [0.0, 0.0]


def test_a_corner_between_two_curves_is_kept_exactly(samples):
    first = samples.arc(np.zeros(2), 100.0, 0.0, 1.0)
    second = sinusoid(samples)
    shifted = second.controls - second.controls[0] + first.end
    arcs = arcs_of(Curve(np.vstack([first.controls, shifted[1:]]), 1.0), limit=0.01)
    assert first.end.tolist() in arcs.points.tolist()
    out, _ = tangents(arcs)
    corner = arcs.points.tolist().index(first.end.tolist())
    way = second.controls[1] - second.controls[0]
    assert turned(out[corner], math.atan2(way[1], way[0])) < 1e-9


def test_two_lines_in_one_direction_are_one():
    chain = np.vstack(
        [segment([0.0, 0.0], [3.0, 1.0]).controls, segment([3.0, 1.0], [9.0, 3.0]).controls[1:]]
    )
    assert arcs_of(Curve(chain, 1.0), limit=0.01).points.tolist() == [[0.0, 0.0], [9.0, 3.0]]


@settings(deadline=None, max_examples=100)
@given(st.lists(st.tuples(st.floats(-200, 200), st.floats(-200, 200)), min_size=4, max_size=4, unique=True))
def test_any_bezier_at_all_keeps_within_its_limit(corners):
    """Loops, cusps and all; where the curve turns on the spot a chord of a sixteenth of it may stand in."""
    curve = Curve(np.array(corners), 1.0)
    arcs = arcs_of(curve, limit=0.01)
    assert arcs.points[0].tolist() == curve.start.tolist()
    assert arcs.points[-1].tolist() == curve.end.tolist()
    assert np.isfinite(arcs.bulges).all()
    t = np.linspace(0.0, 1.0, 400)[:, None]
    a, b, c, d = np.array(corners)
    speed = np.hypot(*((1 - t) ** 2 * (b - a) + 2 * (1 - t) * t * (c - b) + t**2 * (d - c)).T)
    if speed.min() > 20.0:
        assert deviation(curve, arcs) <= 0.0101
