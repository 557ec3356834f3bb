"""SVG files read back by an XML parser and measured against elementary geometry."""

from __future__ import annotations

import math
import re
from dataclasses import replace
from xml.etree import ElementTree as ET

import numpy as np
import pytest

from develop.outputs.svg import svg
from develop.pattern.curve import segment
from develop.pattern.pattern import Outline
from tests.outputs.beziers import sampled

SVG = "{http://www.w3.org/2000/svg}"


def read(pattern):
    return ET.fromstring(svg(pattern))


def group(root, name):
    return next(each for each in root.iter(f"{SVG}g") if each.get("id") == name)


def path_of(words):
    """Segments of a path of M, L, C, Z: lists of points, and whether it is closed."""
    tokens = re.findall(r"[MLCZ]|-?[0-9.]+", words)
    assert "".join(tokens) == re.sub(r"[\s,]", "", words)  # nothing else is in it
    numbers = {"M": 2, "L": 2, "C": 6, "Z": 0}
    segments, at, closed, n = [], None, False, 0
    while n < len(tokens):
        letter = tokens[n]
        points = np.array([float(v) for v in tokens[n + 1 : n + 1 + numbers[letter]]]).reshape(-1, 2)
        n += 1 + numbers[letter]
        if letter == "M":
            assert at is None  # one contour in a path
            start = points[0]
        elif letter == "Z":
            closed = True
        else:
            segments.append(np.vstack([at, points]))
        at = points[-1] if len(points) else at
    assert not closed or n == len(tokens)
    return segments, closed, start


def area(points):
    x, y = points.T
    return 0.5 * abs(float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1))))


def test_size_is_in_mm_and_matches_the_view_box(samples):
    root = read(samples.rectangle(1256.6, 450.0))
    assert root.tag == f"{SVG}svg"
    width, height = root.get("width"), root.get("height")
    assert width.endswith("mm")
    assert height.endswith("mm")
    assert [float(v) for v in root.get("viewBox").split()] == [0, 0, float(width[:-2]), float(height[:-2])]
    assert float(width[:-2]) == pytest.approx(1258.6, abs=1e-9)
    assert float(height[:-2]) == pytest.approx(452.0, abs=1e-9)


@pytest.mark.parametrize("name", ["rectangle", "slanting", "fan"])
def test_cut_layer_is_one_closed_contour(samples, name):
    paths = list(group(read(getattr(samples, name)()), "cut"))
    assert [each.tag for each in paths] == [f"{SVG}path"]
    segments, closed, start = path_of(paths[0].get("d"))
    assert closed
    assert segments[-1][-1].tolist() == start.tolist()  # ends coincide, as well as being joined
    assert "transform" not in paths[0].attrib


def test_contour_of_a_rectangle_is_four_lines_at_true_scale(samples):
    segments, _, _ = path_of(group(read(samples.rectangle(1256.6, 450.0)), "cut")[0].get("d"))
    assert [len(s) for s in segments] == [2, 2, 2, 2]
    corners = np.array([s[0] for s in segments])
    # END A at the bottom, and y runs down: the lower left corner comes first, then the lower right.
    assert corners == pytest.approx(np.array([[1, 451], [1257.6, 451], [1257.6, 1], [1, 1]]), abs=2e-6)


def test_contour_of_a_cone_lies_on_its_two_circles(samples):
    root = read(samples.fan(300.0, 200.0, 250.0))
    segments, _, _ = path_of(group(root, "cut")[0].get("d"))
    curved = [s for s in segments if len(s) == 4]
    assert len(curved) == len(segments) - 2
    slant = math.hypot(250.0, 100.0)
    turn = 2 * math.pi * 100.0 / slant
    points = sampled(curved)
    # The lowest point of the outer circle is at the foot of the drawing, its centre one radius above it.
    centre = np.array([float(root.get("width")[:-2]) / 2, float(root.get("height")[:-2]) - 1.0 - 3 * slant])
    radius = np.hypot(*(points - centre).T)
    outer = radius > 2.5 * slant
    assert radius[outer] == pytest.approx(3 * slant, abs=2e-3)  # R s / (R - r)
    assert radius[~outer] == pytest.approx(2 * slant, abs=2e-3)
    assert outer.any()
    assert not outer.all()
    assert area(sampled(segments, 400)) == pytest.approx(turn / 2 * slant**2 * 5.0, rel=1e-6)


def test_an_oblique_cut_is_a_sinusoid_the_right_way_up(samples):
    root = read(samples.slanting(150.0, 60.0, 45.0))
    segments, _, _ = path_of(group(root, "cut")[0].get("d"))
    points = sampled([s for s in segments if len(s) == 4])
    x, y = points[:, 0] - 1.0, float(root.get("height")[:-2]) - 1.0 - points[:, 1]
    assert y == pytest.approx(60.0 + 150.0 * (1.0 - np.cos(x / 150.0)), abs=2e-3)


def test_layers_are_groups_without_fill_clip_or_transform(samples):
    root = read(samples.fan())
    groups = [each for each in root if each.tag == f"{SVG}g"]
    assert [each.get("id") for each in groups] == ["cut", "roll-lines", "witness-marks", "text"]
    for each in groups:
        assert each.get("fill") == "none"
        assert float(each.get("stroke-width")) <= 0.1
    assert len({each.get("stroke") for each in groups}) == len(groups)
    assert {each.tag for each in root.iter()} == {
        SVG + t for t in ("svg", "title", "desc", "g", "path", "text")
    }
    turned = [each for each in root.iter() if "transform" in each.attrib]
    assert turned
    assert {each.tag for each in turned} == {f"{SVG}text"}


def test_no_path_is_written_twice(samples):
    paths = [each.get("d") for each in read(samples.rectangle(full=True)).iter(f"{SVG}path")]
    assert len(paths) == len(set(paths)) > 40


def test_quantity_material_and_thickness_are_in_the_text(samples):
    pattern = samples.rectangle()
    words = [each.text for each in group(read(pattern), "text").iter(f"{SVG}text")]
    assert set(pattern.facts) <= set(words)
    assert "2 off" in words
    assert "galvanised, 1 mm thick" in words
    assert {"END A", "END B", "SEAM", "TOP", "FLOW"} <= set(words)
    assert all(fact in read(pattern).find(f"{SVG}desc").text for fact in pattern.facts)


def test_text_stands_at_its_place_turned_the_right_way(samples):
    pattern = samples.fan()
    label = next(each for each in pattern.labels if each.text == "RIGHT")
    found = next(each for each in group(read(pattern), "text") if each.text == "RIGHT")
    x, y = float(found.get("x")), float(found.get("y"))
    angle, cx, cy = (float(v) for v in re.findall(r"-?[0-9.]+", found.get("transform")))
    assert (cx, cy) == (x, y)
    assert angle == pytest.approx(-math.degrees(label.angle), abs=1e-5)  # SVG turns clockwise
    height = float(read(pattern).get("height")[:-2])
    assert (x, y) == pytest.approx((label.at[0] + 1.0, height - 1.0 - label.at[1]), abs=2e-3)
    assert float(found.get("font-size")) == pytest.approx(label.height / 0.729, abs=1e-5)


def test_marks_are_escaped(samples):
    root = read(replace(samples.rectangle(), mark='A<1> & "B"'))
    assert root.find(f"{SVG}title").text == 'A<1> & "B"'


def test_lap_has_its_net_line_on_a_layer_of_its_own(samples):
    pattern = samples.rectangle(600.0, 100.0)
    corner = [(0.0, 0.0), (625.0, 0.0), (625.0, 100.0), (0.0, 100.0)]
    names = ("a", "seam_right", "b", "seam_left")
    lapped = Outline(
        tuple((n, segment(corner[k], corner[(k + 1) % 4])) for k, n in enumerate(names)), 62500.0
    )
    root = read(replace(pattern, cut=lapped))
    segments, closed, _ = path_of(group(root, "net")[0].get("d"))
    assert not closed
    assert np.vstack(segments).tolist() == [[601.0, 101.0], [601.0, 1.0]]
    assert float(root.get("width")[:-2]) == 627.0


def test_dashed_lines(samples):
    root = read(replace(samples.rectangle(), dashed=(segment([30.0, 0.0], [30.0, 450.0]),)))
    dashed = [each for each in root.iter() if "stroke-dasharray" in each.attrib]
    assert [path_of(each.get("d"))[0][0].tolist() for each in dashed] == [[[31.0, 451.0], [31.0, 1.0]]]


def test_numbers_are_plain_and_to_1e_6(samples):
    text = svg(samples.fan()).decode()
    numbers = re.findall(r"-?[0-9]+\.[0-9]+", "".join(re.findall(r'd="([^"]*)"', text)))
    assert max(len(n.split(".")[1]) for n in numbers) == 6
    assert not any(n.endswith("0") for n in numbers)
    assert not re.search(r"[0-9]e[-+]?[0-9]", text)


def test_the_same_pattern_gives_the_same_bytes(samples):
    assert svg(samples.slanting()) == svg(samples.slanting())
    assert svg(samples.slanting()) != svg(samples.slanting(short=61.0))


def test_openings_have_a_layer_of_their_own_and_come_before_the_outline(samples):
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * np.pi)),), np.pi * 2500)
    root = read(replace(samples.rectangle(), openings=(hole,)))
    groups = [each.get("id") for each in root.iter(f"{SVG}g")]
    assert groups[:2] == ["cut-openings", "cut"]
    ((segments, closed, _),) = (path_of(each.get("d")) for each in group(root, "cut-openings"))
    assert closed
    assert area(sampled(segments)) == pytest.approx(np.pi * 2500, rel=1e-4)
    assert len(group(root, "cut")) == 1


def test_pops_are_small_circles_and_pen_lines_a_layer(samples):
    pops = list(group(read(replace(samples.rectangle(), lines_as="pops")), "roll-lines"))
    ticks = list(group(read(samples.rectangle()), "roll-lines"))
    assert {each.tag for each in pops} == {f"{SVG}circle"}
    assert {float(each.get("r")) for each in pops} == {0.25}
    at = sorted((float(each.get("cx")), float(each.get("cy"))) for each in pops)
    assert at == sorted(tuple(path_of(each.get("d"))[0][0][1].tolist()) for each in ticks)
    root = read(replace(samples.rectangle(), lines_as="pen"))
    assert "roll-lines" not in [each.get("id") for each in root.iter(f"{SVG}g")]
    assert len(group(root, "pen-lines")) >= 19


def test_text_can_be_left_out(samples):
    root = ET.fromstring(svg(samples.rectangle(), text=False))
    assert [each.get("id") for each in root.iter(f"{SVG}g")] == ["cut", "roll-lines", "witness-marks"]
    assert root.find(f"{SVG}desc").text
