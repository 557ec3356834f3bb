"""S. Gillies and others, Shapely, on GEOS: areas, validity and distances of plane figures.

The outline as it is written in the record, read back from its bytes, and as it is drawn.
"""

from __future__ import annotations

import json
from math import radians

import numpy as np
import pytest
from shapely import LineString, Point, Polygon

from develop.outputs.record import record
from develop.pieces.cut_types import Cut
from develop.pieces.fields import Piece, record_of
from develop.pieces.marking_band import MarkingBand
from develop.pieces.straight import Straight
from develop.pieces.transition import Transition
from develop.sections.text import parse_section

WRITTEN = 0.001  # [mm] the outline's promise

PIECES: dict[str, Piece] = {
    "transition": Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("round 400"),
        length=400.0,
        offset=(80.0, 40.0),
    ),
    "inside up": Transition(
        end_a=parse_section("round 250"),
        end_b=parse_section("ellipse 100 x 400"),
        length=150.0,
        rotate=radians(20.0),
        face="inside",
        thickness=2.0,
        sizes="inside",
    ),
    "flat cone": Transition(end_a=parse_section("round 900"), end_b=parse_section("round 200"), length=60.0),
    "straight": Straight(
        section=parse_section("ellipse 600 x 300"),
        length=800.0,
        cut_a=Cut(slope=radians(10.0), long=radians(123.0)),
        cut_b=Cut(slope=radians(60.0), long=radians(90.0)),
    ),
    "marking band": MarkingBand(section=parse_section("pipe DN 200"), cut=Cut(slope=radians(45.0), long=0.0)),
}


def written(piece: Piece) -> dict[str, object]:
    built = piece.build()
    data = json.loads(record(piece.mark, piece.kind, record_of(piece), built.patterns, ()))
    (pattern,) = data["patterns"]
    return pattern


@pytest.mark.parametrize("name", PIECES)
@pytest.mark.parametrize("which", ["net", "cut"])
def test_area_of_the_written_outline(name: str, which: str) -> None:
    part = written(PIECES[name])[which]
    polygon = Polygon(part["outline"])
    assert polygon.is_valid
    assert polygon.exterior.is_ccw
    # A strip as wide as the outline's promise, all along it.
    assert polygon.area == pytest.approx(part["area"], abs=WRITTEN * polygon.length)


@pytest.mark.parametrize("name", PIECES)
def test_length_of_the_written_edges(name: str) -> None:
    """Between the corners of the pattern, the outline is as long as the edges say; chords are never longer."""
    pattern = written(PIECES[name])
    ring = np.array(pattern["net"]["outline"])
    rows = pattern["divisions"]
    corners = [np.array(rows[i][end]) for i, end in ((0, "a"), (-1, "a"), (-1, "b"), (0, "b"))]
    at = [int(np.argmin(np.hypot(*(ring - corner).T))) for corner in corners]
    assert max(float(np.hypot(*(ring[k] - corner))) for k, corner in zip(at, corners, strict=True)) < 2e-6
    ring = np.roll(ring, -at[0], axis=0)
    at = [(k - at[0]) % len(ring) for k in at]
    assert at == sorted(at)  # anticlockwise: along a, up the right seam, back along b
    ring = np.vstack([ring, ring[:1]])
    edges = pattern["net"]["edges"]
    for start, end, edge in zip(
        at, [*at[1:], len(ring) - 1], ("a", "seam_right", "b", "seam_left"), strict=True
    ):
        drawn = np.hypot(*np.diff(ring[start : end + 1], axis=0).T).sum()
        assert drawn == pytest.approx(edges[edge], abs=0.01)
        assert drawn <= edges[edge] + 1e-3


@pytest.mark.parametrize("name", PIECES)
def test_dense_rulings_end_on_the_written_outline(name: str) -> None:
    """Every dense ruling's end, an exact point of its edge, lies within 0.001 mm of the outline."""
    (pattern,) = PIECES[name].build().patterns
    ring = LineString([*(outline := written(PIECES[name])["net"]["outline"]), outline[0]])
    ends = np.vstack([pattern.rulings.a, pattern.rulings.b])[::5]
    assert max(ring.distance(Point(*end)) for end in ends) <= WRITTEN


@pytest.mark.parametrize("name", PIECES)
def test_what_is_drawn_lies_within_the_written_outline(name: str) -> None:
    """And the other way round: corners of the outline lie on the drawn Béziers, chords beside them."""
    (pattern,) = PIECES[name].build().patterns
    ring = LineString([*(outline := written(PIECES[name])["net"]["outline"]), outline[0]])
    drawn = LineString(np.vstack([curve.polyline(2e-5) for _, curve in pattern.net.curves]))
    assert ring.hausdorff_distance(drawn) <= WRITTEN


@pytest.mark.parametrize("name", PIECES)
def test_roll_lines_and_marks_lie_on_the_part(name: str) -> None:
    (pattern,) = PIECES[name].build().patterns
    ring = np.vstack([curve.polyline(1e-3)[:-1] for _, curve in pattern.net.curves])
    part = Polygon(ring).buffer(2e-3)
    for line in pattern.lines:
        assert part.contains(LineString([line.start, line.end]))
    border = part.exterior
    for mark in pattern.marks:
        assert border.distance(Point(*mark.at)) < 5e-3
        assert np.hypot(*mark.inward) == pytest.approx(1.0, rel=1e-12)
        corner = border.distance(Point(*mark.at)) > 0.0 and any(
            np.hypot(*(mark.at - curve.start)) < 1e-6 for _, curve in pattern.net.curves
        )
        assert corner or part.contains(Point(*(mark.at + mark.inward)))
