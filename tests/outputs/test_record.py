"""The record read back with json and measured."""

from __future__ import annotations

import json
import math
from dataclasses import dataclass, replace

import numpy as np
import pytest

from develop.outputs.record import record
from develop.pattern.pattern import Outline, RollLine


@dataclass(frozen=True)
class Found:
    name: str
    expected: float
    got: float
    limit: float
    unit: str
    holds: bool


FINE = Found("girth of end A", 1256.6370614359173, 1256.6370614359175, 1e-8, "mm", True)
WRONG = Found("closing", 0.0, 0.5, 0.01, "mm", False)


def read(pattern, *, fields=None, checks=(FINE,)):
    return json.loads(record(pattern.mark, pattern.kind, fields or {}, [pattern], checks))


def area(points):
    x, y = np.array(points).T
    return 0.5 * float(np.sum(x * np.roll(y, -1) - y * np.roll(x, -1)))


def test_keys(samples):
    content = read(samples.fan(), fields={"length": 250.0, "material": "galvanised"})
    assert list(content) == ["mark", "kind", "units", "fields", "patterns", "checks"]
    assert (content["mark"], content["kind"], content["units"]) == ("C2", "transition", "mm")
    assert content["fields"] == {"length": 250.0, "material": "galvanised"}
    (pattern,) = content["patterns"]
    assert list(pattern) == ["mark", "quantity", "face", "net", "cut", "lines", "divisions", "marks"]
    assert (pattern["quantity"], pattern["face"]) == (2, "outside")
    assert set(pattern["net"]) == {"outline", "openings", "area", "edges"}
    assert set(pattern["cut"]) == {"outline", "openings", "area"}
    assert set(pattern["lines"][0]) == {"from", "to", "turn", "radius"}
    assert set(pattern["divisions"][0]) == {"direction", "a", "b", "length"}
    assert set(pattern["marks"][0]) == {"edge", "text", "at", "arc"}
    assert set(content["checks"][0]) == {"name", "expected", "got", "limit", "unit", "holds"}


def test_lengths_areas_and_checks_keep_all_their_digits(samples):
    content = read(samples.fan(300.0, 200.0, 250.0), checks=(FINE, WRONG))
    net = content["patterns"][0]["net"]
    slant = math.hypot(250.0, 100.0)
    assert net["edges"] == {
        "a": pytest.approx(2 * math.pi * 300.0, rel=1e-14),
        "b": pytest.approx(2 * math.pi * 200.0, rel=1e-14),
        "seam_left": pytest.approx(slant, rel=1e-12),
        "seam_right": pytest.approx(slant, rel=1e-12),
    }
    assert net["area"] == pytest.approx(math.pi * slant * 500.0, rel=1e-14)  # of a cone's frustum
    assert [check["got"] for check in content["checks"]] == [FINE.got, WRONG.got]
    assert [check["holds"] for check in content["checks"]] == [True, False]


def test_outline_keeps_within_a_thousandth_and_is_not_closed_twice(samples):
    content = read(samples.fan(300.0, 200.0, 250.0))
    points = np.array(content["patterns"][0]["net"]["outline"])
    assert points[0].tolist() != points[-1].tolist()
    assert (points != np.roll(points, 1, axis=0)).any(axis=1).all()
    slant = math.hypot(250.0, 100.0)
    middles = (points + np.roll(points, -1, axis=0)) / 2.0
    centre = np.array([(points[:, 0].min() + points[:, 0].max()) / 2, points[:, 1].min() + 3 * slant])
    radius = np.hypot(*(middles - centre).T)
    miss = np.minimum(np.abs(radius - 3 * slant), np.abs(radius - 2 * slant))
    # All chords but the two straight seams.
    assert np.sort(miss)[:-2].max() < 1e-3
    assert area(points) == pytest.approx(content["patterns"][0]["net"]["area"], abs=2e-3 * 3200.0)
    assert area(points) > 0.0  # anticlockwise


def test_coordinates_are_rounded_to_1e_6_without_minus_zero(samples):
    text = record("S", "straight", {}, [samples.slanting()], ()).decode()
    outline = json.loads(text, parse_float=str)["patterns"][0]["net"]["outline"]
    decimals = [len(v.partition(".")[2]) for point in outline for v in point]
    assert max(decimals) == 6
    assert "-0.0" not in text


def test_flat_lines_have_no_radius_and_turns_are_in_degrees(samples):
    line = RollLine(np.array([0.0, 0.0]), np.array([-1e-9, 10.0]), math.pi / 6, (120.5, math.inf))
    content = read(replace(samples.rectangle(), lines=(line,)))
    (found,) = content["patterns"][0]["lines"]
    assert found == {
        "from": [0.0, 0.0],
        "to": [0.0, 10.0],
        "turn": pytest.approx(30.0),
        "radius": [120.5, None],
    }


def test_directions_are_in_degrees(samples):
    rows = read(samples.rectangle())["patterns"][0]["divisions"]
    assert [row["direction"] for row in rows[:7]] == [270.0, 285.0, 300.0, 315.0, 330.0, 345.0, 0.0]
    assert rows[6]["a"] == [314.15, 0.0]
    assert rows[6]["length"] == 450.0


@pytest.mark.parametrize(
    ("radians", "degrees"),
    [(2 * math.pi, 0.0), (-1e-13, 0.0), (2 * math.pi - 1e-13, 0.0), (math.radians(90) - 2e-16, 90.0), (math.pi, 180.0),
     (math.radians(12.3456789), 12.3456789)],
)  # fmt: skip
def test_directions_read_as_they_are_meant(samples, radians, degrees):
    row = replace(samples.rectangle().divisions[0], direction=radians)
    (found,) = read(replace(samples.rectangle(), divisions=(row,)))["patterns"][0]["divisions"]
    assert str(found["direction"]) == str(degrees)


def test_witness_marks_with_their_running_lengths(samples):
    marks = read(samples.rectangle(1256.0, 450.0))["patterns"][0]["marks"]
    words = ("BOTTOM", "RIGHT", "TOP", "LEFT", "BOTTOM")
    assert marks == [
        {"edge": edge, "text": word, "at": [314.0 * n, y], "arc": 314.0 * n}
        for edge, y in (("a", 0.0), ("b", 450.0)) for n, word in enumerate(words)
    ]  # fmt: skip


def test_an_end_that_is_a_point_has_no_length(samples):
    edges = read(samples.fan(300.0, 0.0, 400.0))["patterns"][0]["net"]["edges"]
    assert edges["b"] == 0.0
    assert edges["a"] == pytest.approx(2 * math.pi * 300.0)


def test_openings_are_taken_off_the_area(samples):
    hole = Outline(
        (("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * math.pi)),), math.pi * 2500
    )
    content = read(replace(samples.rectangle(1256.6, 450.0), openings=(hole,)))
    net, cut = content["patterns"][0]["net"], content["patterns"][0]["cut"]
    assert net["area"] == cut["area"] == pytest.approx(1256.6 * 450.0 - math.pi * 2500.0, rel=1e-14)
    assert net["openings"] == cut["openings"]
    (points,) = net["openings"]
    assert np.hypot(*(np.array(points) - [600.0, 200.0]).T) == pytest.approx(50.0, abs=1e-5)
    assert points[0] != points[-1]
    assert net["edges"]["opening"] == pytest.approx(2 * math.pi * 50.0)


def test_an_opening_that_is_only_marked_is_not_cut(samples):
    hole = Outline(
        (("opening", samples.arc(np.array([600.0, 200.0]), 50.0, 0.0, 2 * math.pi)),), math.pi * 2500
    )
    content = read(replace(samples.rectangle(1256.6, 450.0), openings=(hole,), openings_as="marked"))
    net, cut = content["patterns"][0]["net"], content["patterns"][0]["cut"]
    assert len(net["openings"]) == 1
    assert cut["openings"] == []
    assert cut["area"] == pytest.approx(1256.6 * 450.0, rel=1e-14)
    assert net["area"] == pytest.approx(1256.6 * 450.0 - math.pi * 2500.0, rel=1e-14)


def test_a_number_that_is_none_is_refused(samples):
    with pytest.raises(ValueError, match="JSON"):
        record("S", "straight", {"length": math.nan}, [samples.rectangle()], ())


def test_a_check_without_an_answer_is_null(samples):
    found = read(samples.rectangle(), checks=(replace(WRONG, got=math.inf),))["checks"][0]
    assert found["got"] is None
    assert found["holds"] is False


def test_the_same_piece_gives_the_same_bytes(samples):
    one, other = (record("S", "straight", {"a": 1}, [samples.fan()], (FINE,)) for _ in range(2))
    assert one == other
    assert one.endswith(b"}\n")
