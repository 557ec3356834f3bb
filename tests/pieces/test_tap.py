"""The lap flange of a tap, against a planar geometry library."""

from __future__ import annotations

from math import ceil, pi, sqrt

import numpy as np
import pytest
from shapely import LineString, Point, Polygon, get_parts

from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.pattern.pattern import Outline
from tests.pieces.making import make


def tap(**given: object):
    return make(
        "branch",
        **{
            "header": "round 400",
            "header_length": 1000,
            "branch": "round 250",
            "centre_to_end": 500,
            "joint": "tap",
            **given,
        },
    )


def polygon(outline: Outline) -> Polygon:
    return Polygon(np.vstack([curve.polyline(1e-4)[:-1] for _, curve in outline.curves]))


@pytest.mark.parametrize("face", ["outside", "inside"])
@pytest.mark.parametrize(
    "given",
    [{}, {"angle": 60}, {"branch": "round 400"}, {"branch": "ellipse 300 x 150", "rotate": 20, "lap": 15}],
)
def test_the_flange_is_a_true_parallel_cut_in_to_the_net_line(given: dict[str, object], face: str) -> None:
    built = tap(face=face, **given)
    branch = built.patterns[0]
    lap = float(given.get("lap", 20))  # type: ignore[arg-type]
    net, cut = polygon(branch.net), polygon(branch.cut)
    assert cut.is_valid
    edge = LineString(branch.net.curve("a").polyline(1e-4))
    strip = edge.buffer(-lap, single_sided=True, quad_segs=500)
    flange = cut.difference(net)
    # All of the strip but for the cuts between the tabs, each a triangle 1 mm wide at the outer edge.
    assert flange.difference(strip.buffer(2e-3)).area < 0.5
    gone = strip.difference(cut.buffer(1e-4))
    cuts = [part for part in get_parts(gone) if part.area > 1.0]
    words = next(line for line in branch.facts if "tabs" in line)
    assert len(cuts) + 1 == int(words.split("to make ")[1].split()[0])
    for part in cuts:
        assert part.area == pytest.approx(0.5 * lap, rel=0.05)
        assert part.distance(edge) < 0.05
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed


def test_tabs_are_as_long_as_a_chord_with_a_sagitta_of_a_millimetre() -> None:
    # √(8 · 125 · 1) = 31.6 mm: for a pipe of 250 on a header so large that the joint is nearly its girth.
    built = tap(header="round 20000", header_length=2000, centre_to_end=11000)
    words = next(line for line in built.patterns[0].facts if "tabs" in line)
    assert f"make {ceil(250 * pi / sqrt(8 * 125.0))} tabs" in words


def test_the_net_line_stays_where_it_was() -> None:
    plain, tapped = tap(joint="set-on").patterns[0], tap().patterns[0]
    assert tapped.net.area == plain.net.area
    assert tapped.net.curve("a").length == plain.net.curve("a").length
    assert tapped.cut.area > plain.cut.area


def test_a_flange_that_folds_over_itself_is_refused_with_what_works() -> None:
    with pytest.raises(InputError, match=r"lap: 300 mm is more .* allowed: [\d.]+ mm or less"):
        tap(lap=300, angle=45, header_length=1600, centre_to_end=900)


@pytest.mark.parametrize("face", ["outside", "inside"])
@pytest.mark.parametrize("joint", [{"lap": 25}, {"joint": "set-on", "edge_b": "tap-flange 25"}])
def test_every_cut_of_the_tabs_is_in_a_table(joint: dict[str, object], face: str) -> None:
    pattern = tap(angle=60, thickness=1, face=face, **joint).patterns[0]
    end = "b" if "edge_b" in joint else "a"
    (table,) = pattern.figures
    assert f"END {end.upper()}" in table.title
    assert table.title.endswith("the net line" if end == "b" else "1 short of the net line")
    net = pattern.net.curve(end).polyline(1e-5)
    # Running lengths go from line 0, at the left.
    edge = LineString(net if net[0, 0] < net[-1, 0] else net[::-1])
    sheet = polygon(pattern.cut)
    tabs = len(table.rows) + 1
    stop = 0.0 if end == "b" else 1.0
    for n, (number, running, *places) in enumerate(table.rows, 1):
        inner, outer = np.array(places).reshape(2, 2)
        assert number == str(n)
        assert running == pytest.approx(n * edge.length / tabs, abs=1e-3)
        assert edge.distance(Point(inner)) < 1e-3
        assert edge.project(Point(inner)) == pytest.approx(running, abs=1e-3)
        assert np.hypot(*(outer - inner)) == pytest.approx(25.0, abs=1e-9)
        assert edge.distance(Point(outer)) == pytest.approx(25.0, abs=1e-3)
        # The cut is open from beyond where it stops to the outer edge, and the metal is whole before that.
        way = (outer - inner) / 25.0
        assert sheet.intersection(LineString([inner + (stop + 1e-3) * way, outer])).length < 0.01
        assert sheet.contains(Point(inner + (stop - 0.05) * way))
