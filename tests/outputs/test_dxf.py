"""DXF files read back by ezdxf and, for what stands in the header, by a reader of bare group codes."""

from __future__ import annotations

import hashlib
import io
import json
import math
import os
import re
import subprocess
import sys
from dataclasses import replace
from itertools import combinations
from pathlib import Path

import ezdxf
import numpy as np
import pytest
from ezdxf import recover
from shapely import LineString, Polygon, distance, points

from develop.job.output_fields import Outputs
from develop.job.pipeline import make
from develop.outputs.dxf import dxf
from develop.pattern.curve import Curve, segment
from develop.pattern.pattern import Outline
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import read_piece
from tests.outputs.bulges import distances, drawn

SAMPLES = ["rectangle", "slanting", "fan"]
# Of what an outline of a duct can be: smooth, with corners, with straights, tight, to a point, with holes.
PIECES = {
    "transition": ("transition", {}),
    "rectangle": ("transition", {"end_a": "rectangle 600 x 300", "end_b": "round 400"}),
    "flat oval": ("transition", {"end_a": "flat-oval 600 x 300", "end_b": "rectangle 300 x 300 r 30"}),
    "tight": ("straight", {"section": "ellipse 600 x 30", "cut_b": "slope 40 long 70"}),
    "cone": ("cone", {}),
    "branch": ("branch", {}),
    "opening": ("opening", {}),
    "flange": ("flange", {}),
}


def raw(data: bytes):
    """(code, value) pairs: two lines each, as the DXF reference has them."""
    lines = data.decode("utf-8").splitlines()
    assert len(lines) % 2 == 0
    return [(int(code), value) for code, value in zip(lines[::2], lines[1::2], strict=True)]


def header(data: bytes):
    """Variables of the header, by name: the values up to the next."""
    pairs = raw(data)
    low = pairs.index((2, "HEADER"))
    high = next(n for n in range(low, len(pairs)) if pairs[n] == (0, "ENDSEC"))
    found, now = {}, None
    for code, value in pairs[low + 1 : high]:
        if code == 9:
            now = found[value] = []
        else:
            now.append(value.strip())
    return found


def opened(data: bytes):
    """The drawing; ezdxf finds nothing to mend in it, neither while it reads nor after."""
    document, auditor = recover.read(io.BytesIO(data))
    for each in (auditor, document.audit()):
        assert each.errors == []
        assert each.fixes == []
    return document


def entities(data: bytes, layer: str | None = None):
    return [each for each in opened(data).modelspace() if layer in (None, each.dxf.layer)]


def vertices(entity):
    """(x, y, bulge) of a polyline of either sort, and whether it is closed."""
    if entity.dxftype() == "LWPOLYLINE":
        return [(x, y, b) for x, y, b in entity.get_points("xyb")], entity.closed
    assert entity.dxftype() == "POLYLINE"
    found = [(v.dxf.location.x, v.dxf.location.y, v.dxf.get("bulge", 0.0)) for v in entity.vertices]
    return found, entity.is_closed


def contour(entity, rise=1e-3):
    if entity.dxftype() == "CIRCLE":
        x, y, _ = entity.dxf.center
        angle = np.linspace(0.0, 2.0 * math.pi, 400, endpoint=False)
        return np.stack(
            [x + entity.dxf.radius * np.cos(angle), y + entity.dxf.radius * np.sin(angle)], axis=1
        )
    found, closed = vertices(entity)
    assert closed
    return drawn(found, closed=True, rise=rise)


def made(name, tmp_path, *, outputs=Outputs(), **more):  # noqa: B008  # frozen
    """The record's patterns with their DXF files, as written by the program."""
    kind, given = PIECES[name]
    given = {"length": 450, **given} if given else dict(kind_of(kind).example)
    piece, problems = read_piece(kind_of(kind), {**given, **more})
    assert piece is not None, problems
    outcome = make(piece, folder=str(tmp_path), formats=("dxf", "json"), outputs=outputs)
    record = json.loads((tmp_path / f"{piece.mark}.json").read_bytes())
    return outcome, [(each, (tmp_path / f"{each['mark']}.dxf").read_bytes()) for each in record["patterns"]]


# ---- units and what is not in the file ------------------------------------------------------


@pytest.mark.parametrize("name", SAMPLES)
def test_both_units_headers_say_mm(samples, name):
    found = header(dxf(getattr(samples, name)()).data)
    assert found["$ACADVER"] == ["AC1024"]  # R2010
    assert found["$INSUNITS"] == ["4"]  # millimetres
    assert found["$MEASUREMENT"] == ["1"]  # metric
    assert opened(dxf(getattr(samples, name)()).data).units == ezdxf.units.MM


@pytest.mark.parametrize("name", SAMPLES)
def test_r12_says_mm_in_its_text(samples, name):
    data = dxf(getattr(samples, name)(), version="R12").data
    assert header(data)["$ACADVER"] == ["AC1009"]
    assert "$INSUNITS" not in header(data)  # came with R2000
    words = [each.dxf.text for each in entities(data, "text") if each.dxftype() == "TEXT"]
    assert [each for each in words if re.search(r"\bmm, 1:1", each)] == ["drawing in mm, 1:1"]
    assert {each.dxftype() for each in entities(data)} <= {"POLYLINE", "LINE", "TEXT", "POINT", "CIRCLE"}


def test_r12_says_mm_below_a_sheet_that_has_no_room(samples):
    small = samples.rectangle(40.0, 9.0)
    data = dxf(small, version="R12").data
    (words,) = (each for each in entities(data, "text") if each.dxf.text == "drawing in mm, 1:1")
    low = contour(entities(data, "cut")[0]).min(axis=0)
    assert words.dxf.insert.y > low[1] or words.dxf.align_point.y < low[1]


def test_extents_are_those_of_the_outline(samples):
    found = header(dxf(samples.rectangle(1256.6, 450.0)).data)
    assert [float(v) for v in found["$EXTMIN"]] == [0.0, 0.0, 0.0]
    assert [float(v) for v in found["$EXTMAX"]] == pytest.approx([1256.6, 450.0, 0.0])


@pytest.mark.parametrize("version", ["R2010", "R12"])
def test_no_date_user_or_version_is_in_the_file(samples, version):
    data = dxf(samples.fan(), version=version).data
    assert not {"$TDCREATE", "$TDUPDATE", "$LASTSAVEDBY", "$FINGERPRINTGUID", "$VERSIONGUID"} & set(
        header(data)
    )
    text = data.decode()
    assert ezdxf.__version__ not in text
    assert not re.search(r"\d{4}-\d\d-\d\d|\d\d:\d\d:\d\d|\{[0-9A-F]{8}-", text)


@pytest.mark.parametrize("seed", ["1", "4"])
@pytest.mark.parametrize("version", ["R2010", "R12"])
def test_the_same_pattern_gives_the_same_bytes_in_another_process(samples, version, seed):
    code = (
        "import sys, hashlib\nsys.path.insert(0, '.')\nfrom tests.outputs import samples\n"
        "from develop.outputs.dxf import dxf\n"
        f"sys.stdout.write(hashlib.sha256(dxf(samples.fan(), version={version!r}).data).hexdigest())"
    )
    done = subprocess.run(
        [sys.executable, "-c", code],
        capture_output=True,
        text=True,
        check=True,
        cwd=Path(__file__).parents[2],
        # Of these two the library's own sets of names come in another order.
        env={**os.environ, "PYTHONHASHSEED": seed},
    )
    assert done.stdout == hashlib.sha256(dxf(samples.fan(), version=version).data).hexdigest()
    assert dxf(samples.fan(large=301.0), version=version).data != dxf(samples.fan(), version=version).data


def test_nothing_is_said_on_the_way(samples, capfd):
    for version in ("R2010", "R12"):
        dxf(samples.fan(), version=version)
    assert capfd.readouterr() == ("", "")


# ---- layers ---------------------------------------------------------------------------------


def test_layers_are_those_of_the_svg_and_hold_what_they_should(samples):
    hole = Outline((("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * np.pi)),), np.pi * 2500)
    dashed = segment([30.0, 0.0], [30.0, 450.0])
    found = entities(dxf(replace(samples.rectangle(), openings=(hole,), dashed=(dashed,))).data)
    types = {
        layer: {e.dxftype() for e in found if e.dxf.layer == layer} for layer in {e.dxf.layer for e in found}
    }
    assert types == {
        "cut": {"LWPOLYLINE"},
        "cut-openings": {"CIRCLE"},
        "roll-lines": {"LINE"},
        "witness-marks": {"LINE"},
        "dashed-lines": {"LINE"},
        "text": {"TEXT", "LINE"},
    }
    colours = {layer.dxf.name: layer.dxf.color for layer in opened(dxf(samples.fan()).data).layers}
    used = [colours[name] for name in ("cut", "roll-lines", "witness-marks", "text")]
    assert len(set(used)) == len(used)


def test_lines_can_be_pops_or_for_a_pen_or_left_out(samples):
    def on(layer, lines_as):
        return entities(dxf(replace(samples.rectangle(), lines_as=lines_as)).data, layer)

    ticks, pops = on("roll-lines", "ticks"), on("roll-lines", "pops")
    assert {each.dxftype() for each in pops} == {"POINT"}
    at = sorted((round(e.dxf.location.x, 6), round(e.dxf.location.y, 6)) for e in pops)
    assert at == sorted((round(e.dxf.end.x, 6), round(e.dxf.end.y, 6)) for e in ticks)
    assert all(0.0 < y < 450.0 for _, y in at)
    assert on("roll-lines", "pen") == on("pen-lines", "full") == on("roll-lines", "none") == []
    assert len(on("pen-lines", "pen")) >= 19


def test_text_is_text_or_is_not_there(samples):
    pattern = samples.rectangle()
    words = [each.dxf.text for each in entities(dxf(pattern).data, "text") if each.dxftype() == "TEXT"]
    assert {"2 off", "galvanised, 1 mm thick", "END A", "SEAM"} <= set(words)
    data = dxf(pattern, text=False).data
    assert entities(data, "text") == []
    assert "text" not in opened(data).layers
    # Without words in their way full lines are whole.
    full = dxf(samples.rectangle(full=True), text=False).data
    lengths = [abs(each.dxf.end.y - each.dxf.start.y) for each in entities(full, "roll-lines")]
    assert min(lengths) > 400.0 - 24.0 * 2


def test_facts_are_comments_too_and_break_no_line(samples):
    pattern = samples.rectangle()
    data = dxf(replace(pattern, facts=(*pattern.facts, "two\nlines\r\n  0\nEOF"))).data
    comments = [value for code, value in raw(data) if code == 999]
    assert [*pattern.facts, "two lines 0 EOF"] == comments[: len(pattern.facts) + 1]
    opened(data)


@pytest.mark.parametrize("version", ["R2010", "R12"])
def test_any_letter_is_read_back(samples, version):
    mark = "Ä-Ω-北 ½ ⌀"
    pattern = samples.rectangle()
    labels = (replace(pattern.labels[0], text=mark), *pattern.labels[1:])
    data = dxf(replace(pattern, labels=labels, facts=()), version=version, text=True).data
    if version == "R2010":
        assert mark in [each.dxf.text for each in entities(data, "text") if each.dxftype() == "TEXT"]
    else:
        opened(data)


# ---- contours -------------------------------------------------------------------------------


@pytest.mark.parametrize("version", ["R2010", "R12"])
@pytest.mark.parametrize("name", SAMPLES)
def test_the_outline_is_one_closed_contour(samples, name, version):
    pattern = getattr(samples, name)()
    (entity,) = entities(dxf(pattern, version=version).data, "cut")
    found, closed = vertices(entity)
    assert closed
    places = [(x, y) for x, y, _ in found]
    assert len(set(places)) == len(places)  # closed by its flag, not by a point given twice
    polygon = Polygon(drawn(found, closed=True))
    assert polygon.is_valid
    assert polygon.exterior.is_ccw
    assert polygon.area == pytest.approx(pattern.net.area, abs=0.01 * polygon.length)


def test_a_cone_is_cut_in_two_arcs_and_two_lines(samples):
    """Its edges are circles about the apex, and the fan's are arcs to 1e-9 mm."""
    result = dxf(samples.fan(300.0, 200.0, 250.0))
    (entity,) = entities(result.data, "cut")
    found, _ = vertices(entity)
    assert result.arcs == 2
    assert [bool(bulge) for _, _, bulge in found] == [True, False, True, False]
    sweep = 2.0 * math.pi * 100.0 / math.hypot(250.0, 100.0)
    assert sorted(4.0 * math.atan(bulge) for _, _, bulge in found if bulge) == pytest.approx(
        [-sweep, sweep], abs=1e-6
    )


@pytest.mark.parametrize("curves", ["arcs", "polylines"])
@pytest.mark.parametrize("name", PIECES)
def test_outlines_are_the_records_within_the_tolerance(name, curves, tmp_path):
    for tolerance in (0.01, 0.05):
        _, files = made(name, tmp_path, outputs=Outputs(tolerance=tolerance, dxf_curves=curves))
        for pattern, data in files:
            cut = entities(data, "cut")
            holes = entities(data, "cut-openings")
            assert len(cut) == 1
            assert len(holes) == len(pattern["cut"]["openings"])
            for ring in (pattern["cut"]["outline"], *pattern["cut"]["openings"]):
                ring = np.array(ring)
                ours = min(
                    (contour(each) for each in (*cut, *holes)),
                    key=lambda points: (
                        np.abs(points.min(axis=0) - ring.min(axis=0)).max()
                        + np.abs(points.max(axis=0) - ring.max(axis=0)).max()
                    ),
                )
                dense = ring[:, None] + np.linspace(0, 1, 4)[:, None] * (np.roll(ring, -1, 0) - ring)[:, None]
                there = distance(points(dense.reshape(-1, 2)), LineString([*ours, ours[0]])).max()
                back = distance(points(ours), LineString([*ring, ring[0]])).max()
                # The record's chords and those that the arcs are drawn in here: 0.001 mm each.
                assert max(there, back) <= tolerance + 0.001, (pattern["mark"], there, back)


def test_a_transition_takes_at_most_a_hundred_arcs(tmp_path):
    outcome, _ = made("transition", tmp_path)
    assert 0 < outcome.arcs <= 100
    assert 0.0 < outcome.deviation <= 0.01


def test_bolt_holes_are_circles(tmp_path):
    _, ((record, data),) = made("flange", tmp_path)
    circles = [each for each in entities(data, "cut-openings") if each.dxftype() == "CIRCLE"]
    assert [each.dxf.radius for each in circles] == pytest.approx([5.5] * 16, abs=1e-4)
    (inner,) = (each for each in entities(data, "cut-openings") if each.dxftype() != "CIRCLE")
    assert Polygon(contour(inner)).area == pytest.approx(math.pi * 300.0 * 150.0, abs=0.01 * 1453.3)
    assert record["quantity"] == 1


@pytest.mark.parametrize("name", PIECES)
def test_nothing_is_drawn_twice(name, tmp_path):
    _, files = made(name, tmp_path, **({} if name in ("flange", "opening") else {"marks": "full"}))
    for _, data in files:
        strokes = []
        for each in entities(data):
            if each.dxftype() == "LINE":
                strokes.append(LineString([each.dxf.start.vec2, each.dxf.end.vec2]))
            elif each.dxftype() != "TEXT":
                if each.dxftype() == "LWPOLYLINE" and not each.closed:
                    found, _ = vertices(each)
                    strokes.append(LineString(drawn(found, closed=False, rise=1e-3)))
                    continue
                ring = contour(each)
                strokes.append(LineString([*ring, ring[0]]))
        for one, two in combinations(strokes, 2):
            if one.envelope.intersects(two.envelope):
                assert one.intersection(two).length < 1e-3


# ---- splines --------------------------------------------------------------------------------


def bspline(control, knots, u):
    """De Boor's algorithm, one point after another (de Boor 1978, from memory)."""
    found = []
    for t in u:
        k = max(n for n in range(3, len(control)) if knots[n] <= t)
        d = [np.array(control[n + k - 3]) for n in range(4)]
        for r in range(1, 4):
            for n in range(3, r - 1, -1):
                low, high = knots[n + k - 3], knots[n + 1 + k - r]
                d[n] = (1.0 - (t - low) / (high - low)) * d[n - 1] + (t - low) / (high - low) * d[n]
        found.append(d[3])
    return np.array(found)


def test_splines_are_the_curves_themselves_end_to_end(samples):
    """The edge of the oblique cut is y = 60 + 150 (1 - cos(x / 150)); the samples' Béziers are within 0.001 mm."""
    found = entities(dxf(samples.slanting(), curves="splines").data, "cut")
    assert [each.dxftype() for each in found] == ["LINE", "LINE", "SPLINE", "LINE"]
    spline = found[2]
    knots, control = list(spline.knots), [tuple(p)[:2] for p in spline.control_points]
    assert spline.dxf.degree == 3
    assert len(knots) == len(control) + 4
    at = bspline(control, knots, np.linspace(knots[0], knots[-1] - 1e-9, 500))
    assert at[:, 1] == pytest.approx(60.0 + 150.0 * (1.0 - np.cos(at[:, 0] / 150.0)), abs=2e-3)
    ends = [
        (tuple(e.dxf.start)[:2], tuple(e.dxf.end)[:2]) if e.dxftype() == "LINE" else (control[0], control[-1])
        for e in found
    ]
    for (_, end), (start, _) in zip(ends, [*ends[1:], ends[0]], strict=True):
        assert end == start


def test_dashed_lines_and_lap_keep_their_line_type(samples):
    pattern = samples.rectangle(600.0, 100.0)
    corner = [(0.0, 0.0), (625.0, 0.0), (625.0, 100.0), (0.0, 100.0)]
    lapped = Outline(
        tuple(
            (n, segment(corner[k], corner[(k + 1) % 4]))
            for k, n in enumerate(("a", "seam_right", "b", "seam_left"))
        ),
        62500.0,
    )
    curve = Curve(samples.arc(np.array([300.0, 50.0]), 20.0, 0.0, 2.0).controls, 40.0)
    data = dxf(replace(pattern, cut=lapped, dashed=(curve,))).data
    (net,) = entities(data, "net")
    assert (net.dxftype(), net.dxf.start.x, net.dxf.end.x) == ("LINE", 600.0, 600.0)
    (dashed,) = entities(data, "dashed-lines")
    found, closed = vertices(dashed)
    assert not closed
    assert distances(curve.polyline(0.0001), found, closed=False).max() < 0.001
    layers = opened(data).layers
    assert {name: layers.get(name).dxf.linetype.upper() for name in ("cut", "net", "dashed-lines")} == {
        "cut": "CONTINUOUS", "net": "DASHED", "dashed-lines": "DASHED",
    }  # fmt: skip


@pytest.mark.parametrize("kind", KINDS)
@pytest.mark.parametrize("version", ["R2010", "R12"])
def test_every_kind_is_read_without_complaint(kind, version):
    piece, _ = read_piece(kind_of(kind), kind_of(kind).example)
    assert piece is not None
    for pattern in piece.build().patterns:
        opened(dxf(pattern, version=version).data)


def test_every_layer_can_be_written():
    """Folds, laps, rivet holes and preparations have layers too: each that the walk may name has a colour."""
    from develop.outputs import dxf as module
    from develop.outputs import ink, svg
    from develop.pattern.drawing import LAYERS

    assert set(module._COLOURS) == set(LAYERS) == set(svg._COLOURS) == set(ink._WIDTHS)
    kind = kind_of("straight")
    given = {
        "section": "round 400",
        "length": 300,
        "seam": "grooved 6",
        "edge_a": "tap-flange 20",
        "rivet": 4,
    }
    piece, problems = read_piece(kind, given)
    assert piece is not None, problems
    (pattern,) = piece.build().patterns
    document = module.dxf(pattern).data
    assert {each.dxf.layer for each in entities(document)} >= {"cut", "cut-openings", "net", "fold-lines"}
    assert sum(each.dxftype() == "CIRCLE" for each in entities(document, "cut-openings")) == len(
        pattern.punched
    )
