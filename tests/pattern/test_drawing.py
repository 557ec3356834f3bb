"""The drawing walk, seen through a pen that writes everything down."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from shapely import LineString, MultiLineString, unary_union

from develop.pattern.curve import segment
from develop.pattern.drawing import (
    CUT,
    DASHED,
    LAYERS,
    NET,
    OPENINGS,
    PEN_LINES,
    PRESS_LINES,
    ROLL_LINES,
    TEXT,
    WITNESS_MARKS,
    draw,
)
from develop.pattern.lettering import boxes_of
from develop.pattern.pattern import Outline


class Notes:
    """A pen that keeps what it is told, by layer."""

    def __init__(self):
        self.layers = {}

    def layer(self, name):
        assert name not in self.layers
        self.now = self.layers[name] = []

    def contour(self, outline):
        self.now.append(("contour", outline))

    def line(self, start, end):
        self.now.append(("line", np.array([start, end])))

    def curve(self, curve, *, dashed):
        self.now.append(("dashed" if dashed else "curve", curve))

    def pop(self, at):
        self.now.append(("pop", at))

    def text(self, label):
        self.now.append(("text", label))


def notes_of(pattern):
    pen = Notes()
    draw(pattern, pen)
    return pen.layers


def lines_of(layer):
    return [what for kind, what in layer if kind == "line"]


def test_layers_come_in_order_and_only_cut_lines_are_on_the_cut_layer(samples):
    layers = notes_of(samples.fan())
    assert list(layers) == [CUT, ROLL_LINES, WITNESS_MARKS, TEXT]
    assert [name for name in LAYERS if name in layers] == list(layers)
    assert [kind for kind, _ in layers[CUT]] == ["contour"]
    assert {kind for kind, _ in layers[ROLL_LINES]} == {"line"}


def test_openings_are_cut_on_a_layer_of_their_own_before_the_outline(samples):
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * np.pi)),), np.pi * 2500)
    layers = notes_of(replace(samples.rectangle(), openings=(hole,)))
    assert [what for _, what in layers[OPENINGS]] == [hole]
    assert [kind for kind, _ in layers[CUT]] == ["contour"]
    assert list(layers).index(OPENINGS) < list(layers).index(CUT)


def test_an_opening_that_is_only_marked_is_not_on_the_cut_layer(samples):
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * np.pi)),), np.pi * 2500)
    layers = notes_of(replace(samples.rectangle(), openings=(hole,), openings_as="marked"))
    assert [kind for kind, _ in layers[CUT]] == ["contour"]
    assert [what for _, what in layers[NET]] == [hole]
    assert OPENINGS not in layers


def test_an_opening_on_ties_is_cut_in_open_lines(samples):
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * np.pi)),), np.pi * 2500)
    layers = notes_of(replace(samples.rectangle(), openings=(hole,), openings_as="ties", tie=5.0))
    assert [kind for kind, _ in layers[CUT]] == ["contour"]
    assert [kind for kind, _ in layers[OPENINGS]] == ["curve"] * 4
    assert NET not in layers
    ends = [each for _, curve in layers[OPENINGS] for each in (curve.start, curve.end)]
    assert len(np.unique(np.round(ends, 6), axis=0)) == 8


@pytest.mark.parametrize("full", [False, True])
@pytest.mark.parametrize("name", ["rectangle", "slanting", "fan"])
def test_nothing_is_drawn_twice(samples, name, full):
    pattern = getattr(samples, name)(full=full)
    layers = notes_of(pattern)
    cut = [LineString(curve.polyline(1e-5)) for _, curve in pattern.cut.curves]
    strokes = [LineString(s) for layer in (ROLL_LINES, WITNESS_MARKS) for s in lines_of(layers[layer])]
    every = [*cut, *strokes]
    total = sum(line.length for line in every)
    assert unary_union(MultiLineString(every)).length == pytest.approx(total, abs=1e-6)


def test_roll_lines_are_ticks_at_both_edges_on_thin_sheet(samples):
    # 25 lines less the 2 on the seams, less the 3 that witness marks lie along: 20, at two edges.
    ticks = lines_of(notes_of(samples.rectangle(height=450.0))[ROLL_LINES])
    assert len(ticks) == 40
    assert all(2.0 <= LineString(t).length <= 12.0 for t in ticks)
    assert {float(t[0][1]) for t in ticks} == {0.0, 450.0}
    assert all(0.0 < t[1][1] < 450.0 for t in ticks)


def test_ticks_of_short_lines_do_not_meet(samples):
    pattern = samples.slanting(short=1.0, slope=60.0)
    for line in lines_of(notes_of(pattern)[ROLL_LINES]):
        x = line[0][0]
        rise = 150.0 * np.tan(np.radians(60.0)) * (1.0 - np.cos(x / 150.0)) + 1.0
        assert LineString(line).length <= rise / 4.0 + 1e-6


def test_at_a_point_there_are_no_ticks(samples):
    pattern = samples.fan(300.0, 0.0, 400.0)
    apex = pattern.net.curve("seam_right").end
    ticks = lines_of(notes_of(pattern)[ROLL_LINES])
    assert ticks
    assert all(np.hypot(*(t - apex).T).min() > 100.0 for t in ticks)


def test_full_lines_run_from_edge_to_edge_but_for_the_text(samples):
    pattern = samples.rectangle(full=True)
    layers = notes_of(pattern)
    boxes = boxes_of(pattern.labels)
    words = []
    for centre, along, half in zip(*boxes, strict=True):
        across = np.array([-along[1], along[0]])
        corners = [
            centre + s * along * half[0] + t * across * half[1]
            for s, t in ((-1, -1), (1, -1), (1, 1), (-1, 1))
        ]
        words.append(LineString([*corners, corners[0]]).convex_hull)
    lines = [LineString(s) for s in lines_of(layers[ROLL_LINES])]
    assert not any(line.intersects(word) for line in lines for word in words)
    # Line 7 meets the numbers at both edges and no other word: three pieces, from edge to edge.
    x = pattern.divisions[7].a[0]
    pieces = sorted(
        (s[:, 1].min(), s[:, 1].max()) for s in lines_of(layers[ROLL_LINES]) if abs(s[0][0] - x) < 1e-9
    )
    assert pieces[0][0] == 0.0
    assert pieces[-1][1] == 450.0
    assert sum(b - a for a, b in pieces) > 0.8 * 450.0


def test_net_line_is_drawn_only_where_it_is_not_cut(samples):
    pattern = samples.rectangle(width=600.0, height=100.0)
    corner = np.array([[0.0, 0.0], [625.0, 0.0], [625.0, 100.0], [0.0, 100.0]])
    names = ("a", "seam_right", "b", "seam_left")
    lapped = Outline(
        tuple((n, segment(corner[k], corner[(k + 1) % 4])) for k, n in enumerate(names)), 62500.0
    )
    layers = notes_of(replace(pattern, cut=lapped))
    assert [kind for kind, _ in layers[NET]] == ["curve"]
    assert layers[NET][0][1].start.tolist() == [600.0, 0.0]
    wide = Outline(
        tuple(
            (n, segment(corner[k] * 1.5 - 20, corner[(k + 1) % 4] * 1.5 - 20)) for k, n in enumerate(names)
        ),
        1.0,
    )
    assert [kind for kind, _ in notes_of(replace(pattern, cut=wide))[NET]] == ["contour"]
    assert NET not in notes_of(pattern)


def test_witness_marks_are_square_to_the_edge_and_not_on_the_seam(samples):
    pattern = samples.slanting()
    strokes = lines_of(notes_of(pattern)[WITNESS_MARKS])
    # Four directions at two edges; the ones at the seam are corners.
    assert len(strokes) == 6
    for start, end in strokes:
        if start[1] > 0.0:
            slope = np.sin(start[0] / 150.0)  # of y = c - 150 cos(x / 150)
            tangent = np.array([1.0, slope]) / np.hypot(1.0, slope)
            assert abs((end - start) @ tangent) < 1e-9 * 1000
        else:
            assert end[0] == start[0]
        assert 2.0 < np.hypot(*(end - start)) <= 24.0


def test_dashed_curves_are_dashed(samples):
    line = segment([10.0, 0.0], [10.0, 450.0])
    layers = notes_of(replace(samples.rectangle(), dashed=(line,)))
    assert layers[DASHED] == [("dashed", line)]


@pytest.mark.parametrize("name", ["rectangle", "slanting", "fan"])
def test_pops_stand_where_ticks_would_end(samples, name):
    pattern = getattr(samples, name)()
    ticks = lines_of(notes_of(pattern)[ROLL_LINES])
    pops = notes_of(replace(pattern, lines_as="pops"))[ROLL_LINES]
    assert {kind for kind, _ in pops} == {"pop"}
    assert np.array_equal([at for _, at in pops], [tick[1] for tick in ticks])


def test_pen_lines_are_full_lines_on_a_layer_of_their_own(samples):
    pattern = samples.rectangle(full=True)
    full = notes_of(pattern)
    layers = notes_of(replace(pattern, lines_as="pen"))
    assert PEN_LINES not in full
    assert ROLL_LINES not in layers
    assert np.array_equal(lines_of(layers[PEN_LINES]), lines_of(full[ROLL_LINES]))


def test_no_lines_leave_the_witness_marks(samples):
    pattern = samples.rectangle()
    layers = notes_of(replace(pattern, lines_as="none"))
    assert list(layers) == [CUT, WITNESS_MARKS, TEXT]
    assert np.array_equal(lines_of(layers[WITNESS_MARKS]), lines_of(notes_of(pattern)[WITNESS_MARKS]))


def test_press_lines_have_their_own_layer_but_for_a_pen(samples):
    pattern = samples.rectangle()
    pattern = replace(pattern, lines=tuple(replace(line, press=True) for line in pattern.lines))
    assert PRESS_LINES in notes_of(pattern)
    assert PRESS_LINES not in notes_of(replace(pattern, lines_as="pen"))
