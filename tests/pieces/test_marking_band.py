"""Marking bands against elementary geometry."""

from __future__ import annotations

from math import cos, pi, radians, sin, tan

import numpy as np
import pytest

from develop.errors import InputError
from tests.pieces.making import make


def band(**given: object):
    return make("marking-band", **{"section": "pipe DN 200", "cut": "slope 45 long 0", **given}).patterns[0]


def test_it_is_developed_on_the_outside_plus_half_the_paper() -> None:
    pattern = band(paper=0.2)
    # DN 200 is 219.1 outside (ASME B36.10M).
    assert pattern.net.curve("a").length == pytest.approx(pi * 219.3, rel=1e-12)


def test_inside_it_is_half_the_paper_less() -> None:
    pattern = band(paper=0.2, face="inside", thickness=6.3)
    assert pattern.net.curve("a").length == pytest.approx(pi * (219.1 - 12.6 - 0.2), rel=1e-12)


def test_inside_a_pipe_needs_its_wall() -> None:
    with pytest.raises(InputError) as caught:
        band(face="inside")
    assert caught.value.problems[0].field == "thickness"


def test_a_round_taped_outside_with_a_wall() -> None:
    pattern = band(section="round 300", sizes="outside", thickness=8, paper=0.1)
    assert pattern.net.curve("a").length == pytest.approx(pi * 300.1, rel=1e-12)


def test_the_marking_edge_is_the_cut_at_the_pipes_face() -> None:
    # The plane meets the pipe at r tan 45 cos(direction); the paper only stretches x.
    pattern = band(narrowest=50)
    r = 219.1 / 2
    for row in pattern.divisions:
        assert row.length == pytest.approx(50 + r * (1 + cos(row.direction)), abs=1e-9)


def test_the_narrowest_place_is_as_asked() -> None:
    pattern = band(narrowest=30, cut="slope 22.5 long top")
    assert min(row.length for row in pattern.divisions) == pytest.approx(30, abs=1e-9)
    r = 219.1 / 2
    assert max(row.length for row in pattern.divisions) == pytest.approx(
        30 + 2 * r * tan(radians(22.5)), abs=1e-9
    )


def test_the_lap_goes_on_with_the_same_curve() -> None:
    pattern = band(lap=40, seam_at=200)
    girth = pi * 219.2
    cut = pattern.cut.curve("b").reversed()
    assert pattern.cut.curve("a").length == pytest.approx(girth + 40, rel=1e-12)
    points = cut.polyline(1e-4)
    beyond = points[points[:, 0] > girth]
    assert beyond[-1, 0] == pytest.approx(girth + 40, abs=1e-9)
    r, seam = 219.1 / 2, radians(200)
    low = 50 + r
    expected = low + r * np.cos(seam + beyond[:, 0] / (r + 0.05))
    assert np.abs(beyond[:, 1] - expected).max() < 1e-3
    # Lapped over the start, the two edges lie on each other.
    start = points[points[:, 0] < 40]
    again = np.interp(start[:, 0] + girth, points[:, 0], points[:, 1])
    assert np.abs(again - start[:, 1]).max() < 2e-3


def test_without_a_lap_cut_equals_net() -> None:
    pattern = band(lap=0)
    assert pattern.cut == pattern.net


def test_the_inside_band_is_mirrored() -> None:
    # Standing inside, direction grows to the left.
    pattern = band(face="inside", thickness=6.3, cut="slope 45 long 90", seam_at="bottom")
    at = {mark.text: mark.at[0] for mark in pattern.marks if mark.edge == "a" and mark.text != "BOTTOM"}
    assert at["LEFT"] < at["TOP"] < at["RIGHT"]


def test_sine_of_the_slanting_tangent() -> None:
    # Halfway up a 45 degree cut the edge climbs at 45 degrees on the pipe's face.
    pattern = band(paper=0, lap=0, seam_at="left")
    edge = pattern.net.curve("b").reversed()
    points = edge.polyline(1e-4)
    x = pi * 219.1 / 4
    i = np.searchsorted(points[:, 0], x)
    climb = (points[i + 1, 1] - points[i - 1, 1]) / (points[i + 1, 0] - points[i - 1, 0])
    assert climb == pytest.approx(sin(pi / 2), abs=1e-3)
