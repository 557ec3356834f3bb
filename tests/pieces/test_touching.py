"""Edges of plate that touch: elementary geometry of round mitres and saddles, planar walls, SciPy's search."""

from __future__ import annotations

from dataclasses import replace
from math import acos, asin, cos, degrees, pi, radians, sin, sqrt, tan

import numpy as np
import pytest
from scipy.optimize import minimize_scalar
from shapely import Polygon

from develop.checks import check_part
from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.pattern.pattern import Pattern
from develop.pieces import kind_of
from develop.pieces.fields import read_piece
from develop.solid import MitredEnd
from tests.pieces.making import make

R, T, TO = 1219.0, 12.0, radians(90.0)
OUTER, INNER = 406.5, 394.5
MITRE = radians(11.25)
OVERLAP = "edge at END B, at the joint: largest overlap of the wall"
TOUCHES = "edge at END B, at the joint: largest distance of what touches"


def bend(**given: object):
    return make(
        "bend",
        **{"section": "round 813", "sizes": "outside", "thickness": T, "angle": 90, "radius": R, **given},
    )


def tee(**given: object):
    return make(
        "branch",
        **{
            "header": "round 600",
            "header_length": 1500,
            "branch": "round 273",
            "centre_to_end": 700,
            "thickness": 10,
            "sizes": "outside",
            **given,
        },
    )


def holds(built) -> None:
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed


def reached(psi: float) -> float:
    """Length of an end gore's line, psi from the throat: the plane at the corner that it meets first."""
    corner = OUTER if cos(psi) > 0 else INNER
    return tan(MITRE) * (R - corner * cos(psi))


# ---- mitres --------------------------------------------------------------------------------


@pytest.mark.parametrize("face", ["outside", "inside"])
@pytest.mark.parametrize(("sizes", "size"), [("outside", 813), ("inside", 789), ("mean", 801)])
def test_a_round_mitre_touches_inside_at_the_heel_and_outside_at_the_throat(sizes, size, face) -> None:
    # Elementary geometry, and the same plate however its size is given.
    built = bend(section=f"round {size}", sizes=sizes, face=face)
    for row in built.patterns[0].divisions:
        assert row.length == pytest.approx(reached(row.direction - TO), abs=1e-9)
    for row in built.patterns[1].divisions:
        assert row.length == pytest.approx(2.0 * reached(row.direction - TO), abs=1e-9)
    holds(built)


def wall(psi: float, length: float) -> np.ndarray:
    """The wall of an end gore cut through its axis, psi from the throat: away from the centre of the bend."""
    place = [-cos(psi) * r for r in (INNER, OUTER)]
    return np.array([(place[0], 0.0), (place[1], 0.0), (place[1], length), (place[0], length)])


def mirrored(points: np.ndarray) -> np.ndarray:
    """The next gore's wall: the mirror image in the mitre's plane y = tan(mitre) (R + x)."""
    along = np.array([cos(MITRE), sin(MITRE)])
    from_centre = points + np.array([R, 0.0])
    return 2.0 * (from_centre @ along)[:, None] * along - from_centre - np.array([R, 0.0])


@pytest.mark.parametrize("psi", [0.0, pi])
@pytest.mark.parametrize(("touching", "over"), [("auto", 0.0), ("net", T * T * tan(MITRE) / 2.0)])
def test_the_two_walls_touch_and_do_not_overlap(psi: float, touching: str, over: float) -> None:
    # Where net lines meet at mid-thickness each wall reaches t / 2 tan(mitre) too far at one corner: the two
    # overlap in a kite of t / 2 by that, and are a wedge of the same size short at the other corner.
    row = next(
        r
        for r in bend(section="round 801", sizes="mean", touching=touching).patterns[0].divisions
        if cos(r.direction - TO - psi) > 1.0 - 1e-12
    )
    mine = wall(psi, row.length)
    one, other = Polygon(mine), Polygon(mirrored(mine))
    shared = one.intersection(other).area
    if not over:
        assert one.distance(other) == pytest.approx(0.0, abs=1e-9)
        assert shared == pytest.approx(0.0, abs=1e-6)
    else:
        # Two triangles of base t / 2 and height t / 2 tan(mitre), less what lies beyond the other's end.
        half = (0.5 * T) ** 2 * tan(MITRE)
        assert 0.9 * half < shared < 1.1 * half


def test_the_net_line_of_thin_sheet_stays_and_plate_is_worked_out() -> None:
    def lengths(**given: object) -> list[float]:
        return [row.length for row in bend(**given).patterns[0].divisions]

    assert lengths(thickness=2.9) == lengths(thickness=2.9, touching="net")
    assert lengths(thickness=3.0) == lengths(thickness=3.0, touching="worked out")
    assert lengths(thickness=3.0) != lengths(thickness=3.0, touching="net")
    assert lengths(touching="bevelled") == lengths(touching="net")


def rows_of(pattern):
    (table,) = pattern.figures
    return table, dict(zip((row.number for row in pattern.divisions), table.rows, strict=True))


def test_the_table_of_a_mitre() -> None:
    # sin(bevel) = sin(mitre) |cos ψ|, by the dot product of the plane's normal with the wall's; both plates
    # lean by it, so that the corner left open is 2 t sin(bevel) wide.
    pattern = bend().patterns[1]
    table, rows = rows_of(pattern)
    assert table.title.startswith("END A and END B")
    for division in pattern.divisions:
        _, touches, bevel, between, gap = rows[division.number]
        psi = division.direction - TO
        lean = asin(sin(MITRE) * abs(cos(psi)))
        assert float(bevel[:-1]) == pytest.approx(degrees(lean), abs=0.006)
        side = -1.0 if cos(psi) > 0 else 1.0
        assert float(between[:-1]) == pytest.approx(180.0 + 2.0 * side * degrees(lean), abs=0.006)
        assert gap == pytest.approx(2.0 * T * sin(lean), abs=1e-8)
        assert touches == ("both" if gap < 0.005 else "outside" if cos(psi) > 0 else "inside")


@pytest.mark.parametrize(("face", "radius"), [("outside", OUTER), ("inside", INNER)])
def test_cut_along_the_mitre_the_line_is_that_of_the_face_that_is_up(face: str, radius: float) -> None:
    pattern = bend(touching="bevelled", joint_cut="along", face=face).patterns[0]
    _, rows = rows_of(pattern)
    for division in pattern.divisions:
        psi = division.direction - TO
        assert division.length == pytest.approx(tan(MITRE) * (R - radius * cos(psi)), abs=1e-9)
        _, longer, bevel, _, by = rows[division.number]
        assert by == pytest.approx(T * tan(MITRE) * abs(cos(psi)), abs=1e-8)
        if by > 0.1:
            assert longer == ("inside" if cos(psi) > 0 else "outside")
            assert float(bevel[:-1]) == pytest.approx(degrees(asin(sin(MITRE) * abs(cos(psi)))), abs=0.006)
    holds(bend(touching="bevelled", joint_cut="along", face=face))


def test_bevelled_says_which_face_stands_beyond_the_joint() -> None:
    pattern = bend(touching="bevelled").patterns[0]
    _, rows = rows_of(pattern)
    for division in pattern.divisions:
        turn = cos(division.direction - TO)
        expected = "" if abs(turn) < 1e-9 else "outside" if turn > 0 else "inside"
        assert rows[division.number][1] == expected


def test_the_throat_width_is_that_of_the_plate() -> None:
    facts = " ".join(bend(gores=5).patterns[1].facts)
    throat, heel = (2.0 * tan(MITRE) * (R + r) for r in (-OUTER, INNER))
    assert f"throat width {throat:.1f}" in facts
    assert f"full gores: throat {throat:.1f}, heel {heel:.1f}" in facts


@pytest.mark.parametrize(
    "given",
    [
        {"section": "rectangle 800 x 500 r 60", "turns_to": "top"},
        {"section": "rectangle 800 x 500 r 60", "turns_to": 20, "neutral_line": 0.4, "sizes": "inside"},
        {"section": "rectangle 800 x 500 r 0", "turns_to": 20, "sizes": "inside"},
        {"section": "rectangle 800 x 500 r 0", "turns_to": 20, "sizes": "inside", "neutral_line": 0},
        {"section": "ellipse 800 x 400", "turns_to": 30, "face": "inside", "sizes": "mean"},
        {"section": "flat-oval 800 x 400", "turns_to": "left", "opposite_hand": 1},
        {"section": "superellipse 800 x 500 n 4", "turns_to": 70},
        {"gap": 3, "trim_a": 25, "trim_b": 25, "gap_on": "one side"},
        {"gores": 2, "seam_at": "heel"},
    ],
)
def test_every_check_of_a_bend_holds(given: dict[str, object]) -> None:
    holds(bend(**given))


@pytest.mark.parametrize(
    "given", [{}, {"joint_cut": "along", "touching": "bevelled"}, {"section": "ellipse 600 x 400"}]
)
def test_every_check_of_an_offset_holds(given: dict[str, object]) -> None:
    built = make(
        "offset",
        **{"section": "round 400", "thickness": 8, "length": 1500, "offset": "200,150", "angle": 40, **given},
    )
    assert len(built.patterns[1].figures) == 2  # the middle leg's throats lie opposite each other
    holds(built)


# ---- on a header -----------------------------------------------------------------------------


def height(x: float, y: float, angle: float, radius: float) -> float:
    """Where a branch's line at x to the right and y up meets a round header, along the branch's axis.

    Up runs cos(angle) away from the header's axis per mm, the branch's axis sin(angle).
    """
    return (sqrt(radius * radius - x * x) - y * cos(angle)) / sin(angle)


@pytest.mark.parametrize(("angle", "off"), [(90, 0), (60, 0), (50, 120), (90, -120), (115, 60)])
def test_the_edge_on_a_round_header_ends_where_the_first_of_it_touches(angle: float, off: float) -> None:
    # The greatest height over the whole edge, its two corners and what lies between, by SciPy's search.
    built = tee(angle=angle, off_centre=off, divisions=360)
    lean = radians(angle)
    between = 0
    for row in built.patterns[0].divisions:
        c, s = cos(row.direction), sin(row.direction)

        def over(r: float, c: float = c, s: float = s) -> float:
            return height(off + r * c, r * s, lean, 300.0)

        found = minimize_scalar(lambda r: -over(r), bounds=(126.5, 136.5), method="bounded",
                                options={"xatol": 1e-9})  # fmt: skip
        corners = max(over(126.5), over(136.5))
        best = max(corners, -found.fun)
        between += best > corners + 1e-6
        assert row.length == pytest.approx(700.0 - best, abs=1e-8)
    assert between or angle == 90
    holds(built)


def test_an_edge_that_lies_on_the_crown_touches_between_its_corners() -> None:
    # 131.5 mm off centre the crown runs along the middle of the wall on one side.
    built = tee(off_centre=131.5, divisions=4, seam_at="right")
    pattern = built.patterns[0]
    _, rows = rows_of(pattern)
    (row,) = (each for each in pattern.divisions[:-1] if abs(each.direction - pi) < 1e-9)
    assert row.length == pytest.approx(400.0, abs=1e-9)
    assert rows[row.number][1] == "between"
    assert rows[row.number][4] == pytest.approx(sqrt(300.0**2 + 5.0**2) - 300.0, abs=1e-8)


def test_the_table_of_a_square_tee() -> None:
    # N · e = x / R · cos θ where the inside corner, x = r cos θ, touches; what is left at the outside corner is
    # its distance from the header's axis less the header's radius.
    pattern = tee().patterns[0]
    _, rows = rows_of(pattern)
    for division in pattern.divisions:
        _, touches, bevel, between, gap = rows[division.number]
        c = cos(division.direction)
        lean = 126.5 * c * c / 300.0
        assert float(bevel[:-1]) == pytest.approx(degrees(asin(lean)), abs=0.006)
        assert float(between[:-1]) == pytest.approx(180.0 - degrees(acos(lean)), abs=0.006)
        across, up = 136.5 * c, sqrt(300.0**2 - (126.5 * c) ** 2)
        assert gap == pytest.approx(sqrt(across**2 + up**2) - 300.0, abs=1e-8)
        assert touches == ("both" if gap < 0.005 else "inside")


@pytest.mark.parametrize(("face", "radius"), [("outside", 136.5), ("inside", 126.5)])
def test_cut_along_the_header_the_line_is_that_of_the_face_that_is_up(face: str, radius: float) -> None:
    built = tee(touching="bevelled", joint_cut="along", face=face)
    for row in built.patterns[0].divisions:
        expected = 700.0 - sqrt(300.0**2 - (radius * cos(row.direction)) ** 2)
        assert row.length == pytest.approx(expected, abs=1e-9)
    holds(built)


def test_a_line_that_would_lie_beside_the_header_is_refused() -> None:
    given = {"header": "round 400", "branch": "round 400", "sizes": "inside", "centre_to_end": 900}
    holds(tee(**given))
    holds(tee(**given, touching="bevelled", joint_cut="along"))
    with pytest.raises(InputError, match="off_centre"):
        tee(**{**given, "branch": "round 396"}, touching="bevelled", joint_cut="along", off_centre=4)


@pytest.mark.parametrize("joint", ["set-in", "tap"])
def test_only_a_branch_that_is_set_on_touches_with_its_edge(joint: str) -> None:
    def bevels(pattern: Pattern) -> list[str]:
        # The cuts between a tap's tabs are tabled anyhow.
        return [each.title for each in pattern.figures if not each.title.startswith("Cuts between the tabs")]

    pattern = tee(joint=joint).patterns[0]
    assert bevels(pattern) == bevels(tee(joint=joint, touching="net").patterns[0]) == []
    assert [r.length for r in pattern.divisions] == [
        r.length for r in tee(joint=joint, touching="net").patterns[0].divisions
    ]


@pytest.mark.parametrize(
    "given",
    [
        {"header": "round girth 1921", "gap": 3},
        {"header": "ellipse 600 x 400", "branch": "flat-oval 300 x 200", "rotate": 30},
        {
            "header": "flat-oval 700 x 400",
            "branch": "rectangle 300 x 200 r 40",
            "angle": 60,
            "off_centre": 90,
        },
        {"header": "rectangle 500 x 400 r 30", "branch": "round 300", "angle": 70, "off_centre": 90},
        {"header": "round 400", "branch": "round 400", "angle": 60, "sizes": "mean", "centre_to_end": 900},
        {"off_centre": 163.5, "face": "inside"},
        {
            "header": "rectangle 852 x 355 r 80",
            "leaves_at": 234,
            "angle": 50,
            "centre_to_end": 1700,
            "header_length": 4000,
        },
        {
            "header": "flat-oval 950 x 510",
            "branch": "superellipse 318 x 206 n 2.7",
            "leaves_at": 275,
            "rotate": 90,
            "centre_to_end": 1200,
        },
        {"angle": 30, "sizes": "inside", "centre_to_end": 1200, "header_length": 2500},
    ],
)
def test_every_check_of_a_branch_holds(given: dict[str, object]) -> None:
    holds(tee(**given))


@pytest.mark.parametrize(
    "header",
    [
        {"kind": "cone", "section": "round 800", "height": 1600, "cut_b": 900},
        {"kind": "transition", "end_a": "ellipse 800 x 600", "end_b": "round 500", "length": 1200},
        {"kind": "transition", "end_a": "rectangle 800 x 600 r 20", "end_b": "round 500", "length": 1200},
    ],
)
@pytest.mark.parametrize(
    "more", [{}, {"off_centre": 60, "angle": 75}, {"leaves_at": 0, "branch": "flat-oval 300 x 160"}]
)
def test_every_check_on_a_tapered_header_holds(header: dict[str, object], more: dict[str, object]) -> None:
    given = {"branch": "round 250", "centre_to_end": 700, "thickness": 10, "sizes": "outside"}
    holds(make("branch", header=header, **{**given, **more}))


# ---- refusals, and checks that fail -----------------------------------------------------------


@pytest.mark.parametrize("touching", ["worked out", "net", "auto"])
def test_along_the_joint_goes_with_bevelled_edges_only(touching: str) -> None:
    given = {"section": "round 400", "angle": 90, "radius": 600, "thickness": 8, "joint_cut": "along"}
    piece, problems = read_piece(kind_of("bend"), {**given, "touching": touching})
    assert not problems
    assert piece is not None
    if touching == "auto":
        assert piece.build().patterns[0].figures[0].title == "END B: edge along the joint"
        return
    with pytest.raises(InputError) as caught:
        piece.check()
    (problem,) = caught.value.problems
    assert problem.field == "joint_cut"
    assert touching in problem.given


def of(part, name: str):
    (found,) = (each for each in check_part(part.pattern, part.solid) if each.name == name)
    return found


def test_a_net_line_overlaps_and_the_check_says_by_how_much() -> None:
    # At mid-thickness a square edge reaches t / 2 · sin(mitre) past the plane at one of its corners.
    part = bend(section="round 801", sizes="mean", touching="net").parts[0]
    plane = part.solid.end_b
    end = MitredEnd.of(
        plane.section, inner=-6.0, outer=6.0, height=float(plane.origin[2]), rise=plane.spans[2], upper=True
    )
    wrong = replace(part, solid=replace(part.solid, end_b=end))
    assert of(wrong, OVERLAP).got == pytest.approx(6.0 * sin(MITRE), abs=1e-3)
    assert not of(wrong, OVERLAP).holds


@pytest.mark.parametrize(("by", "name"), [(0.05, OVERLAP), (0.05, TOUCHES), (-0.05, TOUCHES)])
def test_an_edge_that_is_moved_is_found(by: float, name: str) -> None:
    part = bend().parts[0]
    assert of(part, name).holds
    lines = part.pattern.rulings
    moved = replace(lines, b=lines.b + np.array([0.0, by]))
    wrong = replace(part, pattern=replace(part.pattern, rulings=moved))
    found = of(wrong, name)
    assert not found.holds
    assert found.got == pytest.approx(0.05 * cos(MITRE), abs=1e-3)
