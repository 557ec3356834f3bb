"""Ties on outlines whose lengths are known: a circle and a square."""

from __future__ import annotations

from math import pi, sin

import numpy as np
import pytest
from shapely import LineString, Polygon

from develop.pattern.curve import segment
from develop.pattern.pattern import Outline
from develop.pattern.ties import between_ties, tie_width


def square(side: float) -> Outline:
    corners = side * np.array([[0.0, 0.0], [1.0, 0.0], [1.0, 1.0], [0.0, 1.0]])
    return Outline(
        tuple(("opening", segment(corners[i], corners[(i + 1) % 4])) for i in range(4)), side * side
    )


def circle(samples, radius: float) -> Outline:
    return Outline((("opening", samples.arc(np.zeros(2), radius, 0.0, 2 * pi)),), pi * radius**2)


def test_a_round_hole_keeps_four_ties_of_the_width_asked_for(samples) -> None:
    cuts = between_ties(circle(samples, 100.0), 6.0)
    assert len(cuts) == 4
    assert sum(cut.length for cut in cuts) == pytest.approx(2 * pi * 100 - 4 * 6.0, abs=1e-4)
    for cut, after in zip(cuts, cuts[1:] + cuts[:1], strict=True):
        # The chord of an arc of 6 mm.
        assert np.hypot(*(after.start - cut.end)) == pytest.approx(200 * sin(6 / 200), abs=1e-4)
        middle = (after.start + cut.end) / 2
        # Half-way between the marks at the four quarters.
        assert np.degrees(np.arctan2(middle[1], middle[0])) % 90 == pytest.approx(45, abs=1e-3)
        assert np.hypot(*cut.polyline(1e-4).T) == pytest.approx(100.0, abs=1e-3)
        # Measured along the drawing, by other code.
        assert LineString(cut.polyline(1e-5)).length == pytest.approx(cut.length, abs=1e-3)


def test_ties_of_a_square_stand_in_the_middle_of_its_sides_and_its_corners_are_cut() -> None:
    cuts = between_ties(square(80.0), 6.0)
    for cut, corner, start, end in zip(
        cuts,
        [[80, 0], [80, 80], [0, 80], [0, 0]],
        [[43, 0], [80, 43], [37, 80], [0, 37]],
        [[80, 37], [43, 80], [0, 43], [37, 0]],
        strict=True,
    ):
        assert cut.start == pytest.approx(np.array(start), abs=1e-9)
        assert cut.end == pytest.approx(np.array(end), abs=1e-9)
        assert np.hypot(*(cut.controls - corner).T).min() < 1e-9
        assert LineString(cut.polyline(0.01)).length == pytest.approx(74.0, abs=1e-9)
        assert (
            Polygon([[0, 0], [80, 0], [80, 80], [0, 80]])
            .boundary.buffer(1e-9)
            .covers(LineString(cut.polyline(0.01)))
        )


def test_a_small_hole_is_still_cut() -> None:
    cuts = between_ties(square(4.0), 6.0)
    assert sum(LineString(cut.polyline(0.01)).length for cut in cuts) == pytest.approx(16.0 * 3 / 4, abs=1e-9)


def test_ties_grow_with_the_plate() -> None:
    assert (tie_width(0.0), tie_width(1.0), tie_width(8.0)) == (5.0, 5.0, 16.0)
