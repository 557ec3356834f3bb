"""Random transitions: what must hold for every one of them."""

from __future__ import annotations

from dataclasses import replace
from math import atan2, cos, degrees, hypot, pi, radians, sin

import numpy as np
import pytest
from hypothesis import assume, event, given
from hypothesis import strategies as st
from numpy.typing import NDArray
from shapely import Polygon

from develop.checks import check
from develop.pattern.pattern import Pattern
from develop.pieces.straight import Straight
from develop.pieces.transition import Transition
from develop.sections.text import SectionSpec, parse_section
from develop.solid import Solid
from develop.surfaces.edges import TOLERANCE, edges
from develop.surfaces.sheet import Place, Sheet

Array = NDArray[np.float64]

CROSSING = "outline crosses itself"


def sizes(least: float = 40.0, most: float = 1500.0) -> st.SearchStrategy[float]:
    """Sizes spread evenly over their logarithm, as they are in a shop, to 0.01 mm."""
    return st.floats(np.log(least), np.log(most)).map(lambda x: round(float(np.exp(x)), 2))


sections = st.one_of(
    sizes().map(lambda d: parse_section(f"round {d}")),
    st.tuples(sizes(), sizes()).map(lambda wh: parse_section(f"ellipse {wh[0]} x {wh[1]}")),
)
angles = st.floats(0.0, 360.0).map(lambda x: round(x, 2))
shifts = st.floats(-400.0, 400.0).map(lambda x: round(x, 2))


@st.composite
def transitions(draw: st.DrawFn, **fixed: object) -> Transition:
    fields: dict[str, object] = {
        "end_a": draw(sections),
        "end_b": draw(sections),
        "length": draw(sizes(20.0, 3000.0)),
        "offset": (draw(shifts), draw(shifts)),
        "rotate": radians(draw(angles)),
        "seam_at": radians(draw(angles)),
        "divisions": draw(st.integers(3, 48)),
    }
    return Transition(**{**fields, **fixed})  # type: ignore[arg-type]


def places(sheet: Sheet, count: int = 5) -> Place:
    """`count` rulings in each panel, ends included."""
    m = len(sheet.ends.x) - 1
    return Place(np.repeat(np.arange(m), count), np.tile(np.linspace(-1.0, 1.0, count), m))


def reaches(piece: Transition) -> float:
    """A length of the size of the piece [mm]."""
    widest = max(piece.end_a.width, piece.end_a.height, piece.end_b.width, piece.end_b.height)
    return float(piece.length + widest + hypot(*piece.offset))


def girth_of(spec: SectionSpec) -> float:
    from scipy.special import ellipe

    a, b = 0.5 * max(spec.width, spec.height), 0.5 * min(spec.width, spec.height)
    return float(4.0 * a * ellipe(1.0 - (b / a) ** 2))


# ---- edges, checks ------------------------------------------------------------------------


@given(transitions())
def test_edges_equal_the_girths(piece: Transition) -> None:
    (pattern,) = piece.build().patterns
    for name, end in (("a", piece.end_a), ("b", piece.end_b)):
        curve = pattern.net.curve(name)
        assert curve is not None
        assert curve.length == pytest.approx(girth_of(end), rel=1e-11)
        assert pattern.divisions[-1].arc_a == pytest.approx(girth_of(piece.end_a), rel=1e-11)
        assert pattern.divisions[-1].arc_b == pytest.approx(girth_of(piece.end_b), rel=1e-11)


@given(
    transitions(),
    st.sampled_from(["outside", "inside"]),
    st.sampled_from(["inside", "mean", "outside"]),
    st.floats(0.0, 1.0),
    st.floats(0.0, 0.9),
)
def test_every_check_holds(piece: Transition, face: str, sizes: str, line: float, share: float) -> None:
    """For any thickness that leaves an inside; only a flat that truly overlaps itself says so."""
    sheet = piece.surface().sheet(0.0)
    lines = sheet.lines(places(sheet, 12))
    tightest = min(float(lines.radius_a.min()), float(lines.radius_b.min()))
    thickness = round(min(20.0, share * tightest), 3)
    piece = replace(piece, face=face, sizes=sizes, neutral_line=line, thickness=thickness)
    built = piece.build()
    (pattern,) = built.patterns
    checks = check(pattern, built.solid)
    assert len(checks) >= 8
    assert [each for each in checks if not each.holds and each.name != CROSSING] == []
    (crossing,) = (each for each in checks if each.name == CROSSING)
    ring = np.vstack([curve.polyline(0.01)[:-1] for _, curve in pattern.cut.curves])
    event(f"overlaps itself: {not crossing.holds}")
    assert crossing.holds == Polygon(ring).is_valid


@given(transitions())
def test_drawn_edges_lie_on_the_exact_ones(piece: Transition) -> None:
    """The Béziers stay within 0.0002 mm of the ends of dense rulings, and the other way round."""
    sheet = piece.surface().sheet(float(piece.surface().rim_a.section.at_direction(np.array([1.0]))[0]))
    lines = sheet.lines(places(sheet, 60))
    for chain, points, tangents, arcs in (
        (edges(sheet)[0], lines.a, lines.tangent_a, lines.arc_a),
        (edges(sheet)[1], lines.b, lines.tangent_b, lines.arc_b),
    ):
        # The fit is tried at three points inside each Bézier; between them it may pass a little.
        assert distance_from_chain(points, chain, arcs).max() <= 1.1 * TOLERANCE
        # End points and end directions are exact.
        assert np.hypot(*(chain[0] - points[0])) < 1e-9
        assert np.hypot(*(chain[-1] - points[-1])) < 1e-9
        for tip, tangent in ((chain[1] - chain[0], tangents[0]), (chain[-1] - chain[-2], tangents[-1])):
            assert abs(tip[0] * tangent[1] - tip[1] * tangent[0]) < 1e-9 * np.hypot(*tip) + 1e-12


def distance_from_chain(points: Array, chain: Array, arcs: Array) -> Array:
    """Distance (n,) of points that lie along a chain of Béziers, given their running lengths."""
    p = chain[np.arange(0, len(chain) - 1, 3)[:, None] + np.arange(4)]
    steps = 16
    samples = np.array([bezier(p, np.full(len(p), k / steps))[0] for k in range(steps)])
    drawn = np.vstack([samples.transpose(1, 0, 2).reshape(-1, 2), chain[-1:]])
    along = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(drawn, axis=0).T))])
    beside = np.interp(arcs / arcs[-1], along / along[-1], np.arange(len(along)) / steps)
    piece = np.clip(beside.astype(int), 0, len(p) - 1)
    t = beside - piece
    for _ in range(6):
        at, speed = bezier(p[piece], t)
        t = np.clip(t - ((at - points) * speed).sum(axis=1) / (speed * speed).sum(axis=1), -0.05, 1.05)
    return np.asarray(np.hypot(*(bezier(p[piece], t)[0] - points).T))


def bezier(p: Array, t: Array) -> tuple[Array, Array]:
    """Points and derivatives (n, 2) of Béziers (n, 4, 2) at t (n,)."""
    s, t = (1.0 - t)[:, None], t[:, None]
    at = s**3 * p[:, 0] + 3 * s * s * t * p[:, 1] + 3 * s * t * t * p[:, 2] + t**3 * p[:, 3]
    slopes = (p[:, 1] - p[:, 0], p[:, 2] - p[:, 1], p[:, 3] - p[:, 2])
    return at, 3.0 * (s * s * slopes[0] + 2.0 * s * t * slopes[1] + t * t * slopes[2])


def distance_to_segment(points: Array, start: Array, end: Array) -> Array:
    along = end - start
    size = np.maximum((along * along).sum(axis=1), 1e-300)
    t = np.clip(((points - start) * along).sum(axis=1) / size, 0.0, 1.0)
    return np.asarray(np.hypot(*(points - start - t[:, None] * along).T))


# ---- from space to the flat ---------------------------------------------------------------


@given(transitions())
def test_rulings_and_the_angles_at_their_ends_keep_from_space_to_flat(piece: Transition) -> None:
    """Lengths of the rulings, and on both edges the angles between edge and ruling: with the edges'
    lengths that is the whole first fundamental form, so every diagonal keeps its length too."""
    surface = piece.surface()
    sheet = surface.sheet(float(piece.seam_at))
    lines = sheet.lines(places(sheet, 4))
    solid = piece.build().solid
    space = solid.strip(lines.u_a)
    R, r = space.b - space.a, lines.b - lines.a
    size = reaches(piece)
    assert np.abs(np.linalg.norm(R, axis=1) - np.hypot(*r.T)).max() < 1e-11 * size
    assert np.abs(np.hypot(*r.T) - lines.length).max() < 1e-11 * size
    for edge in "ab":
        flat = (getattr(lines, f"tangent_{edge}") * r).sum(axis=1)
        assert (
            np.abs(flat - (tangent_in_space(solid, edge, space.normal) * R).sum(axis=1)).max() < 1e-9 * size
        )


def tangent_in_space(solid: Solid, edge: str, normal: Array) -> Array:
    """Unit tangents (n, 3) of a level rim: square to the normal of the side and to the axis."""
    assert edge in "ab"
    along = np.stack([-normal[:, 1], normal[:, 0], np.zeros(len(normal))], axis=1)
    return np.asarray(along / np.linalg.norm(along, axis=1)[:, None])


@given(transitions(divisions=720))
def test_lines_and_diagonals_of_the_pattern_against_the_solid(piece: Transition) -> None:
    """All 720 lines of the divisions table, and the short diagonals between them."""
    built = piece.build()
    (pattern,) = built.patterns
    rows = pattern.divisions
    a, b = np.array([row.a for row in rows]), np.array([row.b for row in rows])
    section = built.solid.end_a.section
    # The rows' directions name the lines in space, whatever the sheet says of itself.
    space = built.solid.strip(section.at_direction(np.array([row.direction for row in rows])))
    size = reaches(piece)
    true = np.linalg.norm(space.b - space.a, axis=1)
    assert np.abs(np.hypot(*(b - a).T) - true).max() < 1e-10 * size
    assert np.abs(np.array([row.length for row in rows]) - true).max() < 1e-10 * size
    # The diagonal of a narrow strip is longer flat than straight through space, by what the strip
    # bends: at most about (arc · turn) · turn / 8 of the strip.
    turn = np.array([line.turn for line in pattern.lines[1:]])
    arc = np.maximum(np.diff([row.arc_a for row in rows]), np.diff([row.arc_b for row in rows]))
    for start, end, s, e in (
        (a[:-1], b[1:], space.a[:-1], space.b[1:]),
        (b[:-1], a[1:], space.b[:-1], space.a[1:]),
    ):
        longer = np.hypot(*(end - start).T) - np.linalg.norm(e - s, axis=1)
        assert longer.min() > -1e-10 * size
        assert np.all(longer <= arc * turn * np.maximum(turn, 1e-3) / 2.0 + 1e-10 * size)


@given(transitions(seam_at=0.0))
def test_marks_stand_where_the_solid_says(piece: Transition) -> None:
    """The witness marks on both edges, found again by their running lengths."""
    built = piece.build()
    (pattern,) = built.patterns
    size = reaches(piece)
    for mark in pattern.marks:
        curve = pattern.net.curve(mark.edge)
        assert curve is not None
        points = curve.polyline(1e-4)
        assert (
            distance_to_segment(np.broadcast_to(mark.at, (len(points) - 1, 2)), points[:-1], points[1:]).min()
            < 4e-4
        )
    names = {(mark.text, mark.edge) for mark in pattern.marks}
    assert names == {(text, edge) for text in ("RIGHT", "TOP", "LEFT", "BOTTOM") for edge in "ab"}
    # On end A, TOP lies a quarter of the girth from RIGHT, where the seam is.
    assert np.hypot(*(marks_of(pattern, "RIGHT", "a")[0] - pattern.divisions[0].a)) < 1e-7 * size


def marks_of(pattern: Pattern, text: str, edge: str) -> list[Array]:
    return [mark.at for mark in pattern.marks if (mark.text, mark.edge) == (text, edge)]


# ---- symmetries ---------------------------------------------------------------------------


def sheet_of(piece: Transition) -> tuple[Sheet, Solid]:
    surface = piece.surface()
    seam = float(surface.rim_a.section.at_direction(np.array([piece.seam_at]))[0])
    return surface.sheet(seam), piece.build().solid


def congruence(points: Array, images: Array, *, mirrored: bool) -> float:
    """Largest distance (after the best fit) of images from points moved, and mirrored if told so."""
    p, q = points - points.mean(axis=0), images - images.mean(axis=0)
    u, _, vt = np.linalg.svd(p.T @ q)
    sign = (-1.0 if mirrored else 1.0) * np.sign(np.linalg.det(u @ vt))
    turn = u @ np.diag([1.0, sign]) @ vt
    return float(np.hypot(*(p @ turn - q).T).max())


@given(transitions())
def test_swapping_the_ends_mirrors_the_pattern(piece: Transition) -> None:
    """End B first, turned back by the rotation: the mirror image of the piece in the level plane."""
    c, s = cos(piece.rotate), sin(piece.rotate)
    x, y = piece.offset
    solid = piece.build().solid
    at_b = (solid.seam_line[1] - solid.end_b.origin) @ solid.end_b.spans
    other = replace(
        piece,
        end_a=piece.end_b,
        end_b=piece.end_a,
        offset=(-(c * x + s * y), s * x - c * y),
        rotate=-piece.rotate,
        seam_at=atan2(at_b[1], at_b[0]),
    )
    one, two = piece.build(), other.build()
    here, there = one.patterns[0].net, two.patterns[0].net
    size = reaches(piece)
    assert there.area == pytest.approx(here.area, rel=1e-11)
    for mine, yours in (("a", "b"), ("b", "a"), ("seam_left", "seam_left"), ("seam_right", "seam_right")):
        assert there.curve(yours).length == pytest.approx(here.curve(mine).length, rel=1e-10)
    first, second = sheet_of(piece)[0], sheet_of(other)[0]
    lines = first.lines(places(first))
    again = second.lines(second.from_b(lines.u_a[1:-1]))
    points = np.vstack([lines.a[1:-1], lines.b[1:-1]])
    images = np.vstack([again.b, again.a])
    # Where the seam's own direction is not met to the last digit, nothing at it may be compared.
    inside = np.tile(np.abs(again.arc_b - lines.arc_a[1:-1]) < 1e-6 * size, 2)
    assert inside.mean() > 0.9
    assert congruence(points[inside], images[inside], mirrored=True) < 1e-8 * size
    assert np.abs(np.sort(again.length) - np.sort(lines.length[1:-1])).max() < 1e-9 * size


@given(sections, sizes(20.0, 3000.0), angles, st.integers(3, 48), st.sampled_from(["outside", "inside"]))
def test_between_equal_sections_it_is_the_straight_piece(
    section: SectionSpec, length: float, seam: float, divisions: int, face: str
) -> None:
    shared = {"length": length, "seam_at": radians(seam), "divisions": divisions, "face": face}
    band = Transition(end_a=section, end_b=section, **shared).build()  # type: ignore[arg-type]
    tube = Straight(section=section, **shared).build()  # type: ignore[arg-type]
    (one,), (other,) = band.patterns, tube.patterns
    size = length + section.width + section.height
    assert one.net.area == pytest.approx(other.net.area, rel=1e-12)
    assert [name for name, _ in one.net.curves] == [name for name, _ in other.net.curves]
    for (_, mine), (_, yours) in zip(one.net.curves, other.net.curves, strict=True):
        assert mine.length == pytest.approx(yours.length, rel=1e-12)
        assert np.abs(mine.start - yours.start).max() < 1e-9 * size
    assert len(one.divisions) == len(other.divisions) == divisions + 1
    for mine, yours in zip(one.divisions, other.divisions, strict=True):
        assert np.abs(np.concatenate([mine.a - yours.a, mine.b - yours.b])).max() < 1e-9 * size
        assert mine.length == pytest.approx(yours.length, rel=1e-12)
        assert mine.direction == pytest.approx(yours.direction, abs=1e-9)
    for mine, yours in zip(one.lines, other.lines, strict=True):
        assert mine.turn == pytest.approx(yours.turn, abs=1e-9)
        assert mine.radius == pytest.approx(yours.radius, rel=1e-7)
    for mine, yours in zip(one.marks, other.marks, strict=True):
        assert (mine.text, mine.edge) == (yours.text, yours.edge)
        assert np.abs(mine.at - yours.at).max() < 1e-9 * size
    assert band.solid.measures.area == pytest.approx(tube.solid.measures.area, rel=1e-12)


@given(transitions(), st.sampled_from([0.125, 0.5, 4.0, 16.0, 3.7]))
def test_scaling_scales(piece: Transition, k: float) -> None:
    def scaled(spec: SectionSpec) -> SectionSpec:
        return replace(spec, width=k * spec.width, height=k * spec.height)

    (one,) = piece.build().patterns
    larger = replace(
        piece,
        end_a=scaled(piece.end_a),
        end_b=scaled(piece.end_b),
        length=k * piece.length,
        offset=(k * piece.offset[0], k * piece.offset[1]),
    )
    (two,) = larger.build().patterns
    size = reaches(piece)
    assert two.net.area == pytest.approx(k * k * one.net.area, rel=1e-11)
    for name in ("a", "b", "seam_left", "seam_right"):
        assert two.net.curve(name).length == pytest.approx(k * one.net.curve(name).length, rel=1e-11)
    for mine, yours in zip(one.divisions, two.divisions, strict=True):
        # The datum lines are laid along the drawn limits, which are known to 0.001 mm.
        a, b = mine.b - mine.a, yours.b - yours.a
        assert np.abs(b - k * a).max() < 1e-9 * k * size
        assert yours.length == pytest.approx(k * mine.length, rel=1e-10)
    for first, second in zip(one.lines, two.lines, strict=True):
        assert second.turn == pytest.approx(first.turn, abs=1e-9)
        assert second.radius == pytest.approx(tuple(k * r for r in first.radius), rel=1e-7)


@given(transitions(face="outside"))
def test_inside_up_is_the_mirror_image(piece: Transition) -> None:
    (one,) = piece.build().patterns
    (two,) = replace(piece, face="inside").build().patterns
    assert (one.face, two.face) == ("outside", "inside")
    size = reaches(piece)

    def mirrored(point: Array) -> Array:
        return np.array([far - point[0], point[1]])

    far = float(two.divisions[0].a[0] + one.divisions[-1].a[0])
    assert two.net.area == one.net.area
    for name, other in (("a", "a"), ("b", "b"), ("seam_left", "seam_right"), ("seam_right", "seam_left")):
        mine, yours = one.net.curve(name), two.net.curve(other)
        assert yours.length == mine.length
        # Edges keep their sense, anticlockwise, so the mirrored ones run the other way.
        assert np.abs(mirrored(mine.start) - yours.end).max() < 2e-3
        back = mine.controls[::-1] * np.array([-1.0, 1.0])
        assert np.abs((back - back[0]) - (yours.controls - yours.controls[0])).max() < 1e-9 * size
    # The drawing starts at the datum lines again.
    ring = np.vstack([curve.polyline(1e-3) for _, curve in two.net.curves])
    assert np.abs(ring.min(axis=0)).max() < 2e-3
    # Lines and marks go with it; divisions again from the left seam, now the other side of the cut.
    assert len(one.lines) == len(two.lines)
    for mine, yours in zip(one.lines, two.lines[::-1], strict=True):
        assert np.abs(mirrored(mine.start) - yours.start).max() < 1e-9 * size
        assert np.abs(mirrored(mine.end) - yours.end).max() < 1e-9 * size
        assert mine.radius == yours.radius
    assert [line.turn for line in two.lines[1:]] == pytest.approx(
        [line.turn for line in one.lines[:0:-1]], abs=1e-12
    )
    assert two.lines[0].turn == one.lines[0].turn == 0.0
    assert len(two.marks) == len(one.marks)
    for mark in one.marks:
        twins = [twin for twin in two.marks if (twin.text, twin.edge) == (mark.text, mark.edge)]
        gap, twin = min((float(np.hypot(*(twin.at - mirrored(mark.at)))), n) for n, twin in enumerate(twins))
        assert gap < 1e-9 * size
        assert np.abs(twins[twin].inward - mark.inward * np.array([-1.0, 1.0])).max() < 1e-9


# ---- signs --------------------------------------------------------------------------------


@given(transitions())
def test_the_sign_of_offset_seen_in_the_solid(piece: Transition) -> None:
    """Facing end B, x to the right and y up: end B's limits lie where offset and size put them."""
    solid = replace(piece, rotate=0.0).build().solid
    x, y = piece.offset
    rim = solid.rim_b(2000)
    w, h = piece.end_b.width / 2.0, piece.end_b.height / 2.0
    # 2000 points miss the limits by less than a thousandth of the size.
    assert rim.min(axis=0) == pytest.approx([x - w, y - h, piece.length], abs=1e-3 * (w + h))
    assert rim.max(axis=0) == pytest.approx([x + w, y + h, piece.length], abs=1e-3 * (w + h))
    start = solid.rim_a(2000)
    assert start.max(axis=0) == pytest.approx(
        [piece.end_a.width / 2.0, piece.end_a.height / 2.0, 0.0],
        abs=1e-3 * (piece.end_a.width + piece.end_a.height),
    )
    assert np.array_equal(start[:, 2], np.zeros(2000))


@given(transitions(end_b=parse_section("ellipse 500 x 100")), st.floats(-80.0, 80.0))
def test_the_sign_of_rotate_seen_in_the_solid(piece: Transition, turned: float) -> None:
    """The long axis of end B is seen anticlockwise of level, facing end B."""
    assume(abs(turned) > 1.0)
    solid = replace(piece, rotate=radians(turned)).build().solid
    rim = solid.rim_b(2000) - solid.end_b.origin
    farthest = rim[np.argmax(np.hypot(rim[:, 0], rim[:, 1]))]
    seen = (degrees(atan2(farthest[1], farthest[0])) + 90.0) % 180.0 - 90.0
    assert seen == pytest.approx(turned, abs=0.5)


@given(st.floats(0.0, 360.0), st.floats(20.0, 150.0), sizes(100.0, 800.0))
def test_the_sign_of_offset_seen_in_the_pattern(towards: float, reach: float, length: float) -> None:
    """Between rounds the line at the direction of the offset is the shortest: the side leans inwards
    least there. So a direction read in the table is a direction seen in the solid."""
    piece = Transition(
        end_a=parse_section("round 400"),
        end_b=parse_section("round 150"),
        length=length,
        offset=(reach * cos(radians(towards)), reach * sin(radians(towards))),
        seam_at=radians(towards - 180.0),
        divisions=360,
    )
    assume(reach < 125.0)
    (pattern,) = piece.build().patterns
    shortest = min(pattern.divisions, key=lambda row: row.length)
    assert (degrees(shortest.direction) - towards + 180.0) % 360.0 - 180.0 == pytest.approx(0.0, abs=1.0)
    assert shortest.length == pytest.approx(hypot(length, 125.0 - reach), rel=1e-4)
    # The table runs with the pattern: from the left seam to the right, anticlockwise facing end B.
    gone = np.unwrap([row.direction for row in pattern.divisions])
    assert np.all(np.diff(gone) > 0.0)
    assert gone[-1] - gone[0] == pytest.approx(2.0 * pi, abs=1e-9)
    assert pattern.divisions[0].a[0] < pattern.divisions[-1].a[0]


@pytest.mark.parametrize(
    ("offset", "near", "far"),
    [((0.0, 60.0), "TOP", "BOTTOM"), ((60.0, 0.0), "RIGHT", "LEFT"), ((0.0, -60.0), "BOTTOM", "TOP")],
)
def test_the_sign_of_offset_seen_in_the_witness_marks(
    offset: tuple[float, float], near: str, far: str
) -> None:
    piece = Transition(
        end_a=parse_section("round 400"),
        end_b=parse_section("round 200"),
        length=300.0,
        offset=offset,
        seam_at=radians(45.0),
    )
    (pattern,) = piece.build().patterns

    def apart(text: str) -> float:
        (a,), (b,) = marks_of(pattern, text, "a"), marks_of(pattern, text, "b")
        return float(np.hypot(*(b - a)))

    assert apart(near) == pytest.approx(hypot(300.0, 100.0 - 60.0), rel=1e-12)
    assert apart(far) == pytest.approx(hypot(300.0, 100.0 + 60.0), rel=1e-12)


@pytest.mark.parametrize("turned", [20.0, -35.0])
def test_the_sign_of_rotate_seen_in_the_witness_marks(turned: float) -> None:
    """Marks on end B stand where the neighbour's do, at the directions of the piece, not of the turned
    section. Between two round ends a mark joins its twin; on a turned ellipse the running length from
    the mark RIGHT to the end of the long axis is the arc of the ellipse over the turn."""
    piece = Transition(
        end_a=parse_section("round 400"),
        end_b=parse_section("ellipse 500 x 150"),
        length=300.0,
        rotate=radians(turned),
        seam_at=radians(180.0),
        divisions=720,
    )
    built = piece.build()
    (pattern,) = built.patterns
    # By symmetry the line at the end of the long axis of end B is at that direction on end A too.
    (right,) = marks_of(pattern, "RIGHT", "b")
    sharpest = min(pattern.lines[180:541], key=lambda line: line.radius[1])
    place = next(row for row in pattern.divisions if np.array_equal(row.a, sharpest.start))
    assert degrees(place.direction) % 360.0 == pytest.approx(turned % 360.0, abs=0.6)
    assert np.sign(place.b[0] - right[0]) == np.sign(turned)
    from scipy.special import ellipeinc

    t = atan2(sin(radians(turned)) / 75.0, cos(radians(turned)) / 250.0)
    m = 1.0 - (75.0 / 250.0) ** 2
    arc = 250.0 * (ellipeinc(np.pi / 2, m) - ellipeinc(np.pi / 2 - abs(t), m))
    assert np.hypot(*(place.b - right)) == pytest.approx(arc, rel=0.06)


# ---- flush --------------------------------------------------------------------------------


@given(
    transitions(),
    st.sampled_from([("right", 0, 1.0), ("top", 1, 1.0), ("left", 0, -1.0), ("bottom", 1, -1.0)]),
)
def test_flush_levels_that_side(piece: Transition, side: tuple[str, int, float]) -> None:
    word, axis, sign = side
    solid = replace(piece, offset=(0.0, 0.0), flush=word).build().solid
    reach_a = (sign * solid.rim_a(4000)[:, axis]).max()
    reach_b = (sign * solid.rim_b(4000)[:, axis]).max()
    assert reach_a == pytest.approx(reach_b, abs=1e-4 * reaches(piece))
    assert abs(solid.end_b.origin[1 - axis]) < 1e-9


def test_congruence_tells_a_mirror_image_from_a_turned_one() -> None:
    points = np.array([[0.0, 0.0], [2.0, 0.0], [0.0, 1.0]])
    turned = points @ np.array([[0.6, 0.8], [-0.8, 0.6]]) + 7.0
    assert congruence(points, turned, mirrored=False) < 1e-12
    assert congruence(points, turned * np.array([-1.0, 1.0]), mirrored=True) < 1e-12
    assert congruence(points, turned, mirrored=True) > 0.1
