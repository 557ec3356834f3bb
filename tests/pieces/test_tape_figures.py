"""Figures to check by tape, against elementary geometry, Steiner's formula, scipy and shapely."""

from __future__ import annotations

import json
from math import cos, hypot, pi, radians

import numpy as np
import pytest
from scipy.special import ellipe
from shapely import Polygon

from develop.outputs.record import record
from develop.outputs.tape import MARGIN, paper, tape_pages
from develop.pattern.layout import lettered
from develop.pattern.table import figures_table
from develop.pieces import kind_of
from develop.pieces.fields import read_piece, record_of
from develop.pieces.hand import builds_of


def made(kind: str, **given: object):
    piece, problems = read_piece(kind_of(kind), given)
    assert not problems, problems
    return piece, builds_of(piece)[0]


def figures(kind: str, **given: object) -> dict[str, float]:
    pattern = made(kind, **given)[1].patterns[0]
    return {row[0]: row[1] for table in pattern.taped for row in table.rows}


def ellipse_girth(width: float, height: float) -> float:
    a, b = max(width, height) / 2, min(width, height) / 2
    return 4 * a * float(ellipe(1 - (b / a) ** 2))


def test_a_square_cut_straight() -> None:
    found = figures("straight", section="round 400", length=300, thickness=2, sizes="inside", tape=0.5)
    girth = pi * 402
    assert found["overall length, along y = 0"] == pytest.approx(girth, rel=1e-12)
    assert found["overall height, along x = 0"] == pytest.approx(300, rel=1e-12)
    for name in ("diagonal, lower left to upper right", "diagonal, lower right to upper left"):
        assert found[name] == pytest.approx(hypot(girth, 300), rel=1e-12)
    assert found["cut edge at END A, along it"] == pytest.approx(girth, rel=1e-12)
    for end in "AB":
        # The tape's middle is a circle 0.25 mm outside the wall.
        assert found[f"END {end}: outside girth, by tape"] == pytest.approx(pi * 404.5, rel=1e-12)
        assert found[f"END {end}: width outside"] == pytest.approx(404)
        assert found[f"END {end}: height inside"] == pytest.approx(400)


@pytest.mark.parametrize("sizes", ["inside", "mean", "outside"])
def test_an_ellipse_by_steiner(sizes: str) -> None:
    found = figures("straight", section="ellipse 600 x 300", length=300, thickness=8, sizes=sizes, tape=0.2)
    out = {"inside": 8, "mean": 4, "outside": 0}[sizes]
    expected = ellipse_girth(600, 300) + 2 * pi * (out + 0.1)
    assert found["END A: outside girth, by tape"] == pytest.approx(expected, rel=1e-12)
    assert found["END B: width outside"] == pytest.approx(600 + 2 * out)
    assert found["END B: height inside"] == pytest.approx(300 + 2 * out - 16)


def test_a_lap_is_in_the_cut_figures() -> None:
    found = figures("straight", section="round 400", length=300, seam="lap 25")
    assert found["overall length, along y = 0"] == pytest.approx(pi * 400 + 25, rel=1e-9)
    assert found["diagonal, lower left to upper right"] == pytest.approx(hypot(pi * 400 + 25, 300), rel=1e-9)


def test_a_right_cone_in_thick_plate() -> None:
    # The edge is square to the plate: its outer corner lies t cos(lean) outside of the inner one.
    given = {
        "section": "round 2400",
        "height": 1120,
        "cut_b": "height 700",
        "thickness": 16,
        "sizes": "inside",
    }
    lean = 1120 / hypot(1200, 1120)
    for line in (0.0, 0.5, 1.0):
        found = figures("cone", **given, neutral_line=line, tape=0.4)
        for end, inner in (("A", 1200), ("B", 450)):
            expected = 2 * pi * (inner + 16.2 * lean)
            assert found[f"END {end}: outside girth, by tape"] == pytest.approx(expected, abs=0.01)
            assert found[f"END {end}: width inside"] == pytest.approx(2 * inner, rel=1e-12)
            assert found[f"END {end}: height outside"] == pytest.approx(2 * (inner + 16 * lean), rel=1e-9)
    # Straight edges of the sheet meet its arcs at four corners: a ring's sector.
    slant, turn = hypot(1200, 1120), 2 * pi * 1200 / hypot(1200, 1120)
    outer, inner_radius = slant, slant * 450 / 1200
    across = outer**2 + inner_radius**2 - 2 * outer * inner_radius * cos(2 * pi - turn if turn > pi else turn)
    net = figures("cone", **{**given, "thickness": 0}, tape=0)
    assert net["diagonal, lower left to upper right"] == pytest.approx(across**0.5, rel=1e-9)
    assert net["END A: outside girth, by tape"] == pytest.approx(2 * pi * 1200, rel=1e-11)


def test_a_slanting_transition_by_its_outer_corner() -> None:
    # Far points of the touching planes, from the ellipse's own equation: n = (x/a², y/b²), both ends alike, so
    # the side is parallel and leans one way: the outer corner is the curve moved along the plane's normal.
    found = figures(
        "transition", end_a="ellipse 600 x 300", end_b="ellipse 600 x 300", length=400, offset="0,200",
        thickness=10, tape=0.2,
    )  # fmt: skip
    t = np.linspace(0, 2 * pi, 20001)
    normal = np.stack([np.cos(t) / 300, np.sin(t) / 150, np.zeros_like(t)], axis=1)
    along = np.array([0.0, 200.0, 400.0])
    normal[:, 2] = -(normal[:, :2] @ along[:2]) / along[2]
    normal /= np.linalg.norm(normal, axis=1)[:, None]
    base = np.stack([300 * np.cos(t), 150 * np.sin(t), np.zeros_like(t)], axis=1)
    taped = base + 5.1 * normal
    expected = np.linalg.norm(np.diff(taped, axis=0), axis=1).sum()
    assert found["END A: outside girth, by tape"] == pytest.approx(expected, abs=0.02)
    assert found["END B: outside girth, by tape"] == pytest.approx(expected, abs=0.02)
    corner = base + 5 * normal
    for axis, word in ((0, "width"), (1, "height")):
        assert found[f"END A: {word} outside"] == pytest.approx(np.ptp(corner[:, axis]), abs=0.02)


def test_bounds_and_diagonals_by_shapely() -> None:
    given = {
        "end_a": "ellipse 600 x 300",
        "end_b": "round 400",
        "length": 400,
        "offset": "80,40",
        "seam": "lap 20",
    }
    piece, built = made("transition", **given)
    data = json.loads(record(piece.mark, piece.kind, record_of(piece), built.patterns, ()))
    (pattern,) = data["patterns"]
    outline = np.array(pattern["cut"]["outline"])
    low_x, low_y, high_x, high_y = Polygon(outline).bounds
    rows = {row[0]: row[1] for table in pattern["tape_figures"] for row in table["rows"]}
    assert rows["overall length, along y = 0"] == pytest.approx(high_x - low_x, abs=1e-3)
    assert rows["overall height, along x = 0"] == pytest.approx(high_y - low_y, abs=1e-3)
    into = outline - np.roll(outline, 1, axis=0)
    out = np.roll(outline, -1, axis=0) - outline
    turn = np.arctan2(into[:, 0] * out[:, 1] - into[:, 1] * out[:, 0], (into * out).sum(axis=1))
    corners = outline[turn > radians(45)]
    assert len(corners) == 4
    corners = np.roll(corners, -int(np.argmin(corners.sum(axis=1))), axis=0)
    rising, falling = (float(np.hypot(*(corners[k + 2] - corners[k]))) for k in (0, 1))
    assert rows["diagonal, lower left to upper right"] == pytest.approx(rising, abs=1e-3)
    assert rows["diagonal, lower right to upper left"] == pytest.approx(falling, abs=1e-3)


def test_an_end_that_is_a_point_is_not_measured() -> None:
    found = figures("cone", section="round 400", height=300)
    assert not any("END B" in name for name in found)
    assert not any("diagonal" in name for name in found)
    assert "END A: width" in found  # a wall without thickness has one face


def test_a_joint_with_a_header_is_not_measured() -> None:
    built = made("branch", header="round 600", header_length=900, branch="round 200", centre_to_end=600)[1]
    branch = next(each for each in built.patterns if each.mark == "branch-branch")
    words = [row[0] for table in branch.taped for row in table.rows if row[0].startswith("END")]
    assert len({word[:5] for word in words}) == 1


def test_a_plate_with_an_opening_has_its_diagonals() -> None:
    found = figures("opening", section="round 300", margin=50)
    assert found["overall length, along y = 0"] == pytest.approx(400)
    for name in ("diagonal, lower left to upper right", "diagonal, lower right to upper left"):
        assert found[name] == pytest.approx(400 * 2**0.5)


def test_the_tolerance_is_the_users_and_the_last_column_is_empty() -> None:
    pattern = made("straight", section="round 400", length=300, tape_tolerance=0.5)[1].patterns[0]
    for table in pattern.taped:
        assert all(row[2] == 0.5 and row[3] is None for row in table.rows)
        written = figures_table(table)
        assert all(set(row[3]) == {"."} for row in written.rows)
    inches = figures_table(pattern.taped[1], units="in")
    # π (400 + 0.2) mm = 49.498 in: 49-1/2 to the nearest 1/32.
    assert inches.rows[0][1] == "49-1/2"


def test_the_tables_stand_on_the_tape_pages_with_room_to_write() -> None:
    pattern = lettered(made("straight", section="ellipse 600 x 300", length=300, thickness=2)[1].patterns[0])
    wide = paper(pattern)[0] - 2 * MARGIN
    blocks = [block for page in tape_pages(pattern) for block, _, _ in page.blocks]
    assert all(block.wide <= wide + 1e-6 for block in blocks)
    from develop.outputs.fonts import width

    written = figures_table(pattern.taped[0])
    assert width(written.rows[0][3], 3.5) >= 25.0  # [mm] to write a figure on by hand: common practice
