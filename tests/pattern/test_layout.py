"""Words on the sheet: inside the outline, off one another and off all marks, upright, of a legible height.

The boxes are made here from the true widths of the type face, not from the program's estimate.
"""

from __future__ import annotations

import importlib.util
import math
from pathlib import Path

import numpy as np
import pytest
from reportlab.pdfbase.ttfonts import TTFont
from shapely import LineString, Polygon, box
from shapely.affinity import rotate, translate

from develop.pattern.lettering import arrow_label, text_width, upright
from develop.pattern.strokes import arrow_strokes, roll_strokes, witness_lengths, witness_strokes

SHAPES = {
    "rectangle": ("rectangle", {}),
    "rectangle with full lines": ("rectangle", {"full": True}),
    "tiny": ("rectangle", {"width": 60.0, "height": 40.0}),
    "smallest": ("rectangle", {"width": 3.0, "height": 2.0}),
    "huge": ("rectangle", {"width": 6000.0, "height": 2400.0}),
    "tall strip": ("rectangle", {"width": 94.0, "height": 6000.0}),
    "low strip": ("rectangle", {"width": 1885.0, "height": 40.0}),
    "many lines": ("rectangle", {"divisions": 180}),
    "slanting": ("slanting", {}),
    "steep, to a feather edge": ("slanting", {"short": 0.5, "slope": 70.0}),
    "steep, full lines": ("slanting", {"short": 20.0, "slope": 65.0, "full": True}),
    "fan": ("fan", {}),
    "340 degrees": ("fan", {"large": 300.0, "small": 20.0, "height": 97.0}),
    "narrow ring": ("fan", {"large": 300.0, "small": 240.0, "height": 10.0}),
    "cone to a point": ("fan", {"large": 300.0, "small": 0.0, "height": 400.0}),
}


@pytest.fixture(scope="module")
def face():
    folder = importlib.util.find_spec("matplotlib").submodule_search_locations[0]
    return TTFont("Measured", str(Path(folder, "mpl-data", "fonts", "ttf", "DejaVuSans.ttf")))


@pytest.fixture(params=SHAPES, name="pattern")
def _pattern(request, samples):
    name, sizes = SHAPES[request.param]
    return getattr(samples, name)(**sizes)


def outline_of(pattern) -> Polygon:
    points = [curve.polyline(1e-4)[:-1] for _, curve in pattern.net.curves]
    return Polygon(np.vstack(points))


def box_of(face, label) -> Polygon:
    """The box of a line of text: as wide as the face makes it, from its descenders to its capitals' top."""
    size = label.height / 0.729  # capitals of DejaVu Sans, from its OS/2 table
    wide = face.stringWidth(label.text, size)
    shape = box(-wide / 2, -0.236 * size, wide / 2, 0.76 * size)
    return translate(rotate(shape, label.angle, origin=(0, 0), use_radians=True), *label.at)


def every_label(pattern):
    return [*pattern.labels, *(arrow_label(arrow, text) for arrow, text in pattern.arrows)]


def test_words_lie_inside_the_outline(pattern, face):
    outline = outline_of(pattern)
    outside = [label.text for label in every_label(pattern) if not outline.contains(box_of(face, label))]
    assert outside == []
    for arrow, _ in pattern.arrows:
        for stroke in arrow_strokes(arrow):
            assert outline.contains(LineString(stroke))


def test_words_do_not_overlap(pattern, face):
    labels = every_label(pattern)
    boxes = [box_of(face, label) for label in labels]
    for n, one in enumerate(boxes):
        for m in range(n):
            assert not one.intersects(boxes[m]), (labels[n].text, labels[m].text)
    for arrow, _ in pattern.arrows:
        for stroke in arrow_strokes(arrow):
            crossed = [w.text for w, b in zip(labels, boxes, strict=True) if b.intersects(LineString(stroke))]
            assert crossed == []


def test_words_are_clear_of_ticks_and_witness_marks(pattern, face):
    lengths = witness_lengths(pattern.net, pattern.marks)
    strokes = [*witness_strokes(pattern.marks, lengths)]
    if not pattern.full_lines:
        strokes += [*roll_strokes(pattern.net, pattern.lines, pattern.marks, lengths, full=False)]
    assert strokes
    for label in pattern.labels:
        shape = box_of(face, label)
        assert not any(shape.intersects(LineString(stroke)) for stroke in strokes), label.text


def test_words_are_upright_and_no_taller_than_12_mm(pattern):
    for label in every_label(pattern):
        assert -math.pi / 2 < label.angle <= math.pi / 2 + 1e-8
        assert label.height <= 12.0


def test_facts_are_all_there(pattern):
    text = " ".join(label.text for label in pattern.labels)
    for fact in pattern.facts:
        assert fact in text


LEGIBLE = [name for name in SHAPES if name not in ("smallest", "tiny")]


@pytest.mark.parametrize("shape", LEGIBLE)
def test_ends_are_named_once_along_their_edges_and_no_text_is_under_2_mm(samples, shape):
    name, sizes = SHAPES[shape]
    pattern = getattr(samples, name)(**sizes)
    assert min(label.height for label in pattern.labels) >= 2.0
    for edge, word in (("a", "END A"), ("b", "END B")):
        found = [label for label in pattern.labels if label.text == word]
        curve = pattern.net.curve(edge)
        assert len(found) == (curve is not None)
        if curve is not None:
            points = curve.polyline(0.01)
            near = int(np.argmin(np.hypot(*(points - found[0].at).T)))
            near = min(max(near, 1), len(points) - 2)
            curved = len(points) > 2
            tangent = points[near + 1] - points[near - 1] if curved else points[-1] - points[0]
            across = abs(math.sin(math.atan2(tangent[1], tangent[0]) - found[0].angle))
            assert across < 0.2  # it follows its edge
            here = np.hypot(*(points - found[0].at).T).min()
            other = pattern.net.curve("b" if edge == "a" else "a")
            if other is not None and curved:
                there = np.hypot(*(other.polyline(0.01) - found[0].at).T).min()
                assert here < there


@pytest.mark.parametrize("shape", ["rectangle", "slanting", "fan", "340 degrees", "huge"])
def test_ordinary_sheets_carry_every_word(samples, shape):
    name, sizes = SHAPES[shape]
    pattern = getattr(samples, name)(**sizes)
    words = [label.text for label in pattern.labels]
    assert sorted(w for w in words if w in ("TOP", "LEFT", "RIGHT", "BOTTOM")) == sorted(
        mark.text for mark in pattern.marks
    )
    assert words.count("SEAM") == 2
    assert [text for _, text in pattern.arrows] == ["FLOW"]
    numbers = [int(w) for w in words if w.isdigit()]
    assert set(range(0, 25, 2)) <= set(numbers)


def test_flow_points_the_way_it_is_told(samples):
    ahead, back = (samples.rectangle(flow=flow).arrows[0][0] for flow in ("a to b", "b to a"))
    assert ahead[1][1] - ahead[0][1] > 0.0  # edge a lies at the bottom
    assert back[1][1] - back[0][1] < 0.0
    assert samples.rectangle(flow="").arrows == ()


def test_text_is_never_wider_than_estimated(face):
    letters = "".join(chr(n) for n in range(32, 127)) + "°×·±⌀½¼¾ÄÖÜäöüß"
    for letter in letters:
        true = face.stringWidth(letter, 1.0 / 0.729)
        assert true <= text_width(letter, 1.0) * 1.0001, letter
    line = "T1: transition, ellipse 600 x 300 to round 400, galvanised steel 1 mm thick"
    assert text_width(line, 1.0) < 1.25 * face.stringWidth(line, 1.0 / 0.729)


@pytest.mark.parametrize(
    ("angle", "turned"),
    [(0.0, 0.0), (180.0, 0.0), (90.0, 90.0), (-90.0, 90.0), (135.0, -45.0), (-100.0, 80.0), (350.0, -10.0)],
)
def test_upright(angle, turned):
    assert math.degrees(upright(math.radians(angle))) == pytest.approx(turned, abs=1e-9)


def numbers_at(pattern, edge):
    """The numbers at one edge, each known to be nearest to its own line."""
    ends = np.array([(row.a, row.b)[edge] for row in pattern.divisions])
    other = np.array([(row.b, row.a)[edge] for row in pattern.divisions])
    along = (other - ends) / np.hypot(*(other - ends).T)[:, None]
    found = []
    for label in (label for label in pattern.labels if label.text.isdigit()):
        gap = label.at - ends
        if np.hypot(*gap.T).min() > np.hypot(*(other - label.at).T).min():
            continue
        off = np.abs(gap[:, 0] * along[:, 1] - gap[:, 1] * along[:, 0])  # from each line
        near = int(np.argmin(np.where((gap * along).sum(axis=1) > 0.0, off, np.inf)))
        number = int(label.text)
        # A number in a corner may stand before the next line where the lines are very close.
        assert abs(near - number) <= (2 if number in (0, len(ends) - 1) and len(ends) > 100 else 0)
        found.append(number)
    assert len(set(found)) == len(found)
    return set(found)


@pytest.mark.parametrize(
    "shape", ["rectangle", "slanting", "fan", "340 degrees", "narrow ring", "huge", "low strip"]
)
@pytest.mark.parametrize("edge", [0, 1])
def test_first_last_and_numbers_at_witness_marks_stand_by_their_ticks(samples, shape, edge):
    name, sizes = SHAPES[shape]
    assert {0, 6, 12, 18, 24} <= numbers_at(getattr(samples, name)(**sizes), edge)


@pytest.mark.parametrize("edge", [0, 1])
def test_numbers_that_find_no_room_leave_the_others_clear(samples, edge):
    found = numbers_at(samples.rectangle(divisions=180), edge)
    assert {0, 180} <= found
    between = sorted(found - {45, 90, 135})
    assert len(between) > 30
    # Every fourth, but for what the words at the marks have displaced.
    assert all(number % 4 == 0 for number in between)
