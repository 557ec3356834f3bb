"""Random straight pieces and marking bands: what must hold for every one of them."""

from __future__ import annotations

from dataclasses import replace
from math import cos, degrees, pi, radians, sin, tan

import mpmath
import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from numpy.typing import NDArray

from develop.checks import check
from develop.errors import InputError, Refusal
from develop.pieces.cut_types import Cut
from develop.pieces.marking_band import MarkingBand
from develop.pieces.straight import Straight
from develop.sections.text import SectionSpec, parse_section

Array = NDArray[np.float64]


def sizes(least: float, most: float) -> st.SearchStrategy[float]:
    return st.floats(np.log(least), np.log(most)).map(lambda x: round(float(np.exp(x)), 2))


sections = st.one_of(
    sizes(40.0, 2000.0).map(lambda d: parse_section(f"round {d}")),
    st.tuples(sizes(40.0, 2000.0), sizes(40.0, 2000.0)).map(
        lambda wh: parse_section(f"ellipse {wh[0]} x {wh[1]}")
    ),
)
angles = st.floats(0.0, 360.0).map(lambda x: round(x, 2))
cuts = st.one_of(
    st.none(),
    st.tuples(st.floats(0.0, 75.0), angles).map(
        lambda each: Cut(slope=radians(round(each[0], 2)), long=radians(each[1]))
    ),
)


@st.composite
def straights(draw: st.DrawFn, **fixed: object) -> Straight:
    """A length that leaves something of the piece, at whatever cuts."""
    section = fixed.get("section") or draw(sections)
    cut_a, cut_b = (fixed[name] if name in fixed else draw(cuts) for name in ("cut_a", "cut_b"))
    reach = max(section.width, section.height) / 2.0
    least = sum(reach * tan(cut.slope) for cut in (cut_a, cut_b) if cut) + 1.0
    fields: dict[str, object] = {
        "section": section,
        "cut_a": cut_a,
        "cut_b": cut_b,
        "length": round(least + draw(sizes(0.5, 3000.0)), 2),
        "seam_at": radians(draw(angles)),
        "divisions": draw(st.integers(3, 48)),
    }
    return Straight(**{**fields, **fixed})  # type: ignore[arg-type]


def girth_of_cut(spec: SectionSpec, cut: Cut | None) -> float:
    """Girth of the ellipse in which a plane cuts the cylinder, with 25 digits."""
    with mpmath.workdps(25):
        a, b = mpmath.mpf(spec.width) / 2, mpmath.mpf(spec.height) / 2
        rise = mpmath.tan(cut.slope) if cut else mpmath.mpf(0)
        x, y = (rise * f(cut.long if cut else 0.0) for f in (mpmath.cos, mpmath.sin))
        aa, bb, ab = a * a * (1 + x * x), b * b * (1 + y * y), a * b * x * y
        middle, apart = (aa + bb) / 2, mpmath.sqrt(((aa - bb) / 2) ** 2 + ab * ab)
        long, short = mpmath.sqrt(middle + apart), mpmath.sqrt(middle - apart)
        return float(4 * long * mpmath.ellipe(1 - (short / long) ** 2))


@given(straights())
def test_edges_equal_the_girths_of_the_cuts(piece: Straight) -> None:
    (pattern,) = piece.build().patterns
    for name, cut in (("a", piece.cut_a), ("b", piece.cut_b)):
        curve = pattern.net.curve(name)
        assert curve is not None
        assert curve.length == pytest.approx(girth_of_cut(piece.section, cut), rel=1e-11)
    # Each cut passes through its end of the axis, so the area is that of the square piece.
    assert pattern.net.area == pytest.approx(girth_of_cut(piece.section, None) * piece.length, rel=1e-12)


@given(
    straights(),
    st.sampled_from(["outside", "inside"]),
    st.sampled_from(["inside", "mean", "outside"]),
    st.floats(0.0, 1.0),
    st.floats(0.0, 0.9),
)
def test_every_check_holds(piece: Straight, face: str, sizes: str, line: float, share: float) -> None:
    spec = piece.section
    tightest = min(spec.width, spec.height) ** 2 / max(spec.width, spec.height) / 2.0
    thickness = round(min(25.0, share * tightest), 3)
    built = replace(piece, face=face, sizes=sizes, neutral_line=line, thickness=thickness).build()
    (pattern,) = built.patterns
    assert [each for each in check(pattern, built.solid) if not each.holds] == []


@given(straights())
def test_ordinates_are_the_heights_of_the_planes(piece: Straight) -> None:
    """Each line of the table is as long as the two planes are apart over its point of the section."""
    (pattern,) = piece.build().patterns
    spec = piece.section
    rows = pattern.divisions
    direction = np.array([row.direction for row in rows])
    reach = 1.0 / np.hypot(2 * np.cos(direction) / spec.width, 2 * np.sin(direction) / spec.height)
    points = reach[:, None] * np.stack([np.cos(direction), np.sin(direction)], axis=1)

    def rise(cut: Cut | None) -> Array:
        if cut is None:
            return np.zeros(len(points))
        return np.asarray(tan(cut.slope) * (points @ np.array([cos(cut.long), sin(cut.long)])))

    size = piece.length + spec.width + spec.height
    expected = piece.length + rise(piece.cut_a) + rise(piece.cut_b)
    assert np.abs(np.array([row.length for row in rows]) - expected).max() < 1e-11 * size
    # Upright in the flat, equal running lengths of the square section apart.
    x_a, x_b = (np.array([getattr(row, end)[0] for row in rows]) for end in "ab")
    assert np.abs(x_a - x_b).max() < 1e-12 * size
    girth = girth_of_cut(spec, None)
    assert np.abs(x_a - x_a[0] - girth * np.arange(len(rows)) / (len(rows) - 1)).max() < 1e-12 * girth
    # The highest point of end B's cut lies towards `long`, the lowest of end A's too.
    if piece.cut_b and piece.cut_b.slope > radians(1.0):
        ends = rise(piece.cut_b)
        top, bottom = rows[int(np.argmax(ends))].b[1], rows[int(np.argmin(ends))].b[1]
        assert top > bottom
    if piece.cut_a and piece.cut_a.slope > radians(1.0):
        ends = rise(piece.cut_a)
        assert rows[int(np.argmax(ends))].a[1] < rows[int(np.argmin(ends))].a[1]


@given(
    straights(cut_a=None, cut_b=None),
    st.sampled_from(
        [("inside", 1.0), ("inside", 0.5), ("mean", 0.5), ("mean", 0.0), ("outside", 0.5), ("outside", 0.0)]
    ),
    st.floats(0.01, 0.9),
)
def test_the_girth_grows_by_2_pi_times_the_distance_of_the_neutral_line(
    piece: Straight, where: tuple[str, float], share: float
) -> None:
    measured, line = where
    spec = piece.section
    tightest = min(spec.width, spec.height) ** 2 / max(spec.width, spec.height) / 2.0
    thickness = round(min(40.0, share * tightest), 4)
    assume(thickness > 0.0)
    (pattern,) = replace(piece, sizes=measured, neutral_line=line, thickness=thickness).build().patterns
    outward = thickness * (line - {"inside": 0.0, "mean": 0.5, "outside": 1.0}[measured])
    for name in "ab":
        curve = pattern.net.curve(name)
        assert curve is not None
        grown = curve.length - girth_of_cut(spec, None)
        assert grown == pytest.approx(2.0 * pi * outward, abs=1e-12 * curve.length)
    assert pattern.net.area == pytest.approx(curve.length * piece.length, rel=1e-12)


@given(st.floats(0.1, 30.0))
def test_a_pipe_is_measured_outside_whatever_sizes_says(wall: float) -> None:
    pipe = parse_section("pipe DN 200")
    lengths = []
    for measured in ("inside", "mean", "outside"):
        piece = Straight(section=pipe, length=300.0, thickness=wall, sizes=measured)
        curve = piece.build().patterns[0].net.curve("a")
        assert curve is not None
        lengths.append(curve.length)
    # EN 10220: 219.1 mm outside; the neutral line half the wall inside of it.
    assert lengths == pytest.approx([pi * (219.1 - wall)] * 3, rel=1e-12)


@given(straights(), st.sampled_from(["a", "b"]), st.floats(1.0, 30.0))
def test_a_cut_past_the_other_end_is_refused_with_what_works(piece: Straight, end: str, more: float) -> None:
    """The steepest slope that the message names does work, and a tenth of a degree more does not."""
    spec = piece.section
    short = min(piece.length, 0.9 * min(spec.width, spec.height))
    steep = Cut(slope=radians(min(89.0, 62.0 + more)), long=radians(10.0))
    given_ = replace(piece, length=short, **{"cut_a": None, "cut_b": None, f"cut_{end}": steep})
    with pytest.raises(Refusal) as caught:
        given_.build()
    (problem,) = caught.value.problems
    assert problem.field == f"cut_{end}"
    assert f"slope {degrees(steep.slope):g}" in problem.given
    works = float(problem.allowed.split("slope ")[1].split(" or less")[0])
    replace(given_, **{f"cut_{end}": Cut(slope=radians(works), long=steep.long)}).build()
    with pytest.raises(InputError):
        replace(given_, **{f"cut_{end}": Cut(slope=radians(works + 0.11), long=steep.long)}).build()
    least = float(problem.allowed.split("length of ")[1].split(" mm")[0])
    replace(given_, length=least).build()


@given(
    st.sampled_from(["pipe DN 200", "pipe NPS 6", "round 400", "ellipse 500 x 300"]),
    st.floats(0.0, 75.0),
    angles,
    st.floats(0.0, 1.0),
    st.sampled_from(["outside", "inside"]),
    st.floats(0.0, 60.0).map(lambda x: round(x, 2)),
)
def test_marking_band(text: str, slope: float, long: float, paper: float, face: str, lap: float) -> None:
    """Developed half the paper's thickness off the face it lies on; with a lap at one side."""
    spec = parse_section(text)
    wall = 4.0
    piece = MarkingBand(
        section=spec,
        cut=Cut(slope=radians(slope), long=radians(long)),
        paper=paper,
        face=face,
        lap=lap,
        thickness=wall,
        sizes="outside",
    )
    built = piece.build()
    (pattern,) = built.patterns
    outward = 0.5 * paper if face == "outside" else -wall - 0.5 * paper
    girth = girth_of_cut(spec, None) + 2.0 * pi * outward
    square = pattern.net.curve("a")
    assert square is not None
    assert square.length == pytest.approx(girth, rel=1e-12)
    whole = pattern.cut.curve("a")
    assert whole is not None
    assert whole.length == pytest.approx(girth + lap, rel=1e-12)
    # Nowhere narrower than it should be, and just so wide at the narrowest place.
    drawn = np.vstack([curve.polyline(1e-3) for name, curve in pattern.net.curves if name == "b"])
    assert drawn[:, 1].min() == pytest.approx(piece.narrowest, abs=0.01)
    assert [each for each in check(pattern, built.solid) if not each.holds] == []
