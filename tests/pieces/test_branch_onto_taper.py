"""Branches onto headers with flat facets and tilted ends: plane cuts, and where lines leave convex hulls."""

from __future__ import annotations

from math import atan2, cos, hypot, pi

import mpmath as mp
import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.spatial import ConvexHull

from develop.errors import InputError
from develop.job.pipeline import checks_of
from tests.pieces.making import make

Array = NDArray[np.float64]


def onto(header: dict[str, object], **given: object):
    return make(
        "branch",
        header={"kind": "transition", "length": 800, **header},
        **{"branch": "round 150", "centre_to_end": 500, **given},
    )


def holds(built) -> None:
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed


PYRAMID = {"end_a": "rectangle 500 x 400", "end_b": "rectangle 300 x 300"}
HEADERS = {
    "pyramid": (PYRAMID, {}),
    "over its edge": (PYRAMID, {"leaves_at": 40, "angle": 80}),
    "rounded corners": (
        {"end_a": "rectangle 500 x 400 r 40", "end_b": "rectangle 300 x 300 r 60"},
        {"leaves_at": "2:00"},
    ),
    "square to round": (
        {"end_a": "rectangle 500 x 400", "end_b": "round 300"},
        {"leaves_at": 30, "angle": 75},
    ),
    "round to square, turned": (
        {"end_a": "round 500", "end_b": "rectangle 300 x 300", "rotate": 20, "offset": [40, 10]},
        {"off_centre": 30, "leaves_at": "1:00", "angle": 100},
    ),
    "flat-oval": ({"end_a": "flat-oval 600 x 300", "end_b": "round 300"}, {"off_centre": 60}),
    "superellipse": ({"end_a": "superellipse 500 x 400 n 8", "end_b": "superellipse 300 x 300 n 4"}, {}),
    "tilted": (
        {"end_a": "round 500", "end_b": "round 300", "tilt": "slope 35 long 30"},
        {"leaves_at": "2:00", "angle": 65, "from_a": 300},
    ),
    "square, tilted": (
        {"end_a": "rectangle 500 x 400 r 30", "end_b": "flat-oval 400 x 300", "tilt": "slope 15 long 40"},
        {"leaves_at": "1:00", "branch": "ellipse 160 x 90"},
    ),
    "upright sides, flush": (
        {"end_a": "rectangle 500 x 400", "end_b": "rectangle 500 x 300"},
        {"branch": "round 500"},
    ),
}


@pytest.mark.parametrize("name", HEADERS)
def test_a_branch_passes_its_checks(name: str) -> None:
    header, given = HEADERS[name]
    holds(onto(header, **given))


@pytest.mark.parametrize(
    "given",
    [
        {"thickness": 5, "sizes": "outside", "joint": "set-in"},
        {"thickness": 5, "sizes": "mean", "neutral_line": 0.4, "face": "inside"},
    ],
)
def test_a_branch_over_an_edge_passes_its_checks_in_plate(given) -> None:
    header = {"end_a": "rectangle 500 x 400 r 30", "end_b": "rectangle 300 x 300 r 20"}
    holds(onto(header, leaves_at="1:20", **given))


def test_on_one_facet_of_a_pyramid_the_joint_is_a_plane_cut() -> None:
    # Elementary: the top facet falls 50 mm over 800; the cut of a round pipe by a plane is an ellipse.
    built = onto(PYRAMID)
    branch, header = built.patterns
    fall, r = 50.0 / 800.0, 75.0
    cosine = 1.0 / hypot(1.0, fall)
    long = mp.mpf(r) / mp.mpf(cosine)
    girth = float(4 * long * mp.ellipe(1 - (mp.mpf(r) / long) ** 2))
    assert branch.net.curve("a").length == pytest.approx(girth, rel=1e-13)
    ((_, opening),) = header.openings[0].curves
    assert opening.length == pytest.approx(girth, rel=1e-13)
    assert header.openings[0].area == pytest.approx(pi * r * r / cosine, rel=1e-13)
    # The branch stands at mid length, where the facet is 175 high; up is towards end A, where it is higher.
    frame = built.parts[0].frames[0]
    assert frame.axes[2] == pytest.approx([0.0, 1.0, 0.0], abs=1e-15)
    for row in branch.divisions:
        lift = 175.0 + fall * r * np.sin(row.direction)
        assert row.length == pytest.approx(500.0 - lift, abs=1e-10)


def test_the_header_keeps_the_area_of_its_trapeziums_less_the_hole() -> None:
    # Elementary: a frustum of a pyramid is four trapeziums.
    _, header = onto(PYRAMID).patterns
    area = (500 + 300) * hypot(800, 50) + (400 + 300) * hypot(800, 100)
    assert header.net.area == pytest.approx(area, rel=1e-12)


def outline(kind: str, count: int) -> Array:
    """Points (n, 2) of a section, `count` to each round part; a rectangle has its corners alone."""
    name, *size = kind.replace(" x ", " ").split()
    numbers = [float(each) for each in size if each not in "rn"]
    t = 2.0 * np.pi * np.arange(count) / count
    circle = np.stack([np.cos(t), np.sin(t)], axis=1)
    if name == "round":
        return 0.5 * numbers[0] * circle
    width, height = numbers[:2]
    r = 0.5 * min(width, height) if name == "flat-oval" else numbers[2] if len(numbers) > 2 else 0.0
    core = np.array([0.5 * width - r, 0.5 * height - r])
    corners = np.array([[1, 1], [-1, 1], [-1, -1], [1, -1]]) * core
    return np.vstack([corner + r * (circle if r else np.zeros((1, 2))) for corner in corners])


@pytest.mark.parametrize(
    "name",
    ["over its edge", "rounded corners", "square to round", "round to square, turned", "flat-oval", "tilted"],
)
def test_the_branch_ends_where_its_lines_leave_the_convex_hull(name: str) -> None:
    """C. B. Barber, D. P. Dobkin and H. Huhdanpaa, The Quickhull Algorithm for Convex Hulls (1996), as
    scipy.spatial.ConvexHull: of points on both ends, which leave it within their sagitta, 0.001 mm."""
    header, given = HEADERS[name]
    built = onto(header, **given)
    frame = built.parts[0].frames[0]
    count = 2400
    low = np.pad(outline(str(header["end_a"]), count), ((0, 0), (0, 1)))
    flat = outline(str(header["end_b"]), count)
    turn = np.radians(float(header.get("rotate", 0.0)))
    c, s = np.cos(turn), np.sin(turn)
    high = np.column_stack([flat @ np.array([[c, s], [-s, c]]), np.zeros(len(flat))])
    if "tilt" in header:
        _, slope, _, towards = str(header["tilt"]).split()
        lean, at = np.radians(float(slope)), np.radians(float(towards))
        out = np.array([np.cos(at), np.sin(at), 0.0])
        along = high @ out
        high = high + along[:, None] * ((np.cos(lean) - 1.0) * out + np.array([0.0, 0.0, np.sin(lean)]))
    high = high + np.array([*header.get("offset", (0.0, 0.0)), 800.0])
    hull = ConvexHull(np.vstack([low, high]))
    normals, offsets = hull.equations[:, :3], hull.equations[:, 3]
    ahead = normals @ frame.axes[2] > 1e-9
    for row in built.patterns[0].divisions:
        start = frame.origin + 75.0 * (
            np.cos(row.direction) * frame.axes[0] + np.sin(row.direction) * frame.axes[1]
        )
        lifts = -(normals[ahead] @ start + offsets[ahead]) / (normals[ahead] @ frame.axes[2])
        assert row.length == pytest.approx(500.0 - lifts.min(), abs=1e-3)


def test_the_range_of_from_a_that_is_named_works() -> None:
    header = {"end_a": "round 500", "end_b": "round 300", "tilt": "slope 20 long bottom"}
    with pytest.raises(InputError) as caught:
        onto(header, from_a=40)
    words = caught.value.problems[0].allowed.split()
    for value in (float(words[2]), float(words[4])):
        holds(onto(header, from_a=value))
    # At the top the tilted end is nearest: 800 less what a round 300 leant by 20 degrees falls there,
    # seen at the edge of the branch. From elementary geometry the last place lies below that.
    assert float(words[4]) < 800.0 - 150.0 * np.sin(np.radians(20.0)) - 75.0


def test_a_side_that_is_seen_edge_on_all_round_is_refused() -> None:
    # Elementary: a branch that leans less from the axis than the side does has no near and far side.
    lean = np.degrees(atan2(100.0, 200.0))
    assert cos(np.radians(25.0)) > cos(np.radians(lean))
    with pytest.raises(InputError) as caught:
        onto({"end_a": "round 500", "end_b": "round 300", "length": 200}, angle=25, centre_to_end=900)
    assert caught.value.problems[0].field == "angle"
