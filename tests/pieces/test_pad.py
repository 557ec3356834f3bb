"""Compensation plates, against the opening's own equation and a planar geometry library."""

from __future__ import annotations

from dataclasses import replace
from io import BytesIO
from math import asin, pi

import numpy as np
import pytest
from pypdf import PdfReader
from scipy.integrate import quad
from shapely import LineString, Polygon, unary_union
from shapely.affinity import translate

from develop.checks import check_part
from develop.errors import InputError, Refusal
from develop.job.pipeline import checks_of
from develop.outputs.pdf import printed
from develop.pattern.layout import lettered
from develop.pattern.pattern import Outline
from develop.pieces.wording import SIDES
from tests.pieces.making import make


def tee(**given: object):
    straight = {} if "header_length" in given else {"header_length": 1000}
    return make(
        "branch",
        **{
            "header": "round 400",
            **straight,
            "branch": "round 250",
            "centre_to_end": 500,
            "thickness": 8,
            "sizes": "outside",
            "pad": 60,
            **{name: value for name, value in given.items() if value is not None},
        },
    )


def pdf_words(pattern) -> str:
    data, _ = printed([lettered(pattern)])
    return " ".join(page.extract_text() for page in PdfReader(BytesIO(data)).pages)


def holds(built) -> None:
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed


def polygon(outline: Outline) -> Polygon:
    return Polygon(np.vstack([curve.polyline(1e-4)[:-1] for _, curve in outline.curves]))


def opening(r: float, header: float, sheet: float) -> Polygon:
    """The opening of a pipe of radius r square into a header of a radius, on a sheet of another radius.

    On the header r² = z² + (R sin θ)², and on the sheet x = R' θ.
    """
    # Evenly round the branch, so that the ends are as fine as the rest.
    round_ = np.linspace(0.0, 2.0 * pi, 20001)[:-1]
    theta = np.arcsin(np.clip(r * np.cos(round_) / header, -1.0, 1.0))
    return Polygon(np.stack([sheet * theta, r * np.sin(round_)], axis=1))


@pytest.mark.parametrize("neutral", [0.0, 0.5])
@pytest.mark.parametrize("thick", [8, 14])
def test_the_plate_is_the_opening_on_its_own_sheet_and_its_parallel(thick: float, neutral: float) -> None:
    built = tee(pad_thickness=thick, neutral_line=neutral, tell_tale=0)
    pad = built.patterns[2]
    assert pad.mark == "branch-pad"
    sheet = 200.0 + neutral * thick
    hole = opening(125.0, 200.0, sheet)
    middle = np.array(polygon(pad.openings[0]).centroid.coords[0])
    outline = opening(125.0, 200.0, sheet).buffer(60.0, quad_segs=2000)
    for drawn, expected in ((pad.openings[0], hole), (pad.net, outline)):
        shape = polygon(drawn)
        moved = Polygon(np.array(shape.exterior.coords) - middle)
        assert moved.symmetric_difference(expected).area < 2e-3 * expected.length
    area, _ = quad(
        lambda t: 2.0 * sheet * (125.0**2 - 200.0**2 * np.sin(t) ** 2) ** 0.5, -asin(0.625), asin(0.625)
    )
    assert pad.openings[0].area == pytest.approx(area, rel=1e-7)
    holds(built)


@pytest.mark.parametrize(
    "header",
    [
        {"kind": "cone", "section": "round 900", "height": 1200, "cut_b": 700},
        {"kind": "transition", "end_a": "rectangle 900 x 600 r 60", "end_b": "round 500", "length": 900},
        {
            "kind": "transition",
            "end_a": "ellipse 900 x 600",
            "end_b": "round 500",
            "length": 900,
            "offset": [90, 0],
        },
    ],
)
@pytest.mark.parametrize("pad_in", ["one", "halves"])
def test_a_plate_on_a_tapered_header(header: dict[str, object], pad_in: str) -> None:
    holds(
        tee(header=header, header_length=None, branch="round 200", centre_to_end=750, pad=50, pad_in=pad_in)
    )


def test_halves_make_the_whole() -> None:
    whole = tee(tell_tale=0, angle=65).patterns[2]
    first, second = tee(tell_tale=0, angle=65, pad_in="halves").patterns[2:]
    assert (first.mark, second.mark) == ("branch-pad-towards-a", "branch-pad-towards-b")
    ring = polygon(whole.net).difference(polygon(whole.openings[0]))
    assert polygon(first.net).area + polygon(second.net).area == pytest.approx(ring.area, rel=1e-6)
    for half in (first, second):
        for end in ("end_1", "end_2"):
            assert half.net.curve(end).length == pytest.approx(60.0, abs=1e-9)
    # Laid together, END 2 of the first on END 1 of the second, they are the ring and nothing twice.
    shift = first.net.curve("end_2").start - second.net.curve("end_1").end
    both = unary_union([polygon(first.net), translate(polygon(second.net), *shift)])
    low = np.array(both.bounds[:2]) - np.array(ring.bounds[:2])
    assert translate(both, *-low).symmetric_difference(ring).area < 2e-3 * ring.length


@pytest.mark.parametrize(
    "given",
    [
        {"angle": 50},
        {"branch": "round 400", "header_length": 1200},
        {"branch": "round 400", "header_length": 1200, "pad_in": "halves"},
        {"off_centre": 60, "angle": 75, "pad_in": "halves"},
        {"header": "ellipse 600 x 400", "branch": "flat-oval 300 x 200", "rotate": 30, "pad_in": "halves"},
        {"header": "flat-oval 600 x 400", "branch": "superellipse 200 x 200 n 4", "leaves_at": 45},
        {"joint": "set-in", "pad_thickness": 12, "leaves_at": "left"},
    ],
)
def test_every_check_holds(given: dict[str, object]) -> None:
    holds(tee(**given))


def test_equal_pipes_have_round_corners_to_their_plate() -> None:
    # At the two corners of the lens the plate goes round on an arc: Steiner's 2 π in all.
    pad = tee(branch="round 400", header_length=1200, tell_tale=0).patterns[2]
    inner = polygon(pad.openings[0])
    assert polygon(pad.net).length == pytest.approx(inner.length + 2 * pi * 60.0, abs=2e-3)
    assert polygon(pad.net).symmetric_difference(inner.buffer(60.0, quad_segs=2000)).area < 1.0


def test_the_tell_tale_hole_is_in_the_middle_of_the_width() -> None:
    for pad in (*tee(tell_tale=10).patterns[2:], *tee(tell_tale=10, pad_in="halves").patterns[2:]):
        hole = polygon(pad.openings[-1])
        assert hole.area == pytest.approx(25.0 * pi, rel=1e-4)
        whole = len(pad.openings) > 1
        edge = pad.openings[0].curves[0][1] if whole else pad.net.curve("inner")
        assert LineString(edge.polyline(1e-4)).distance(hole.centroid) == pytest.approx(30.0, abs=1e-3)
        assert polygon(pad.net).contains(hole)


def test_its_marks_are_those_of_the_opening() -> None:
    built = tee(angle=70, off_centre=30)
    header, pad = built.patterns[1:]
    marks = {
        pattern.mark: {mark.text for mark in pattern.marks if mark.edge == "opening"}
        for pattern in (header, pad)
    }
    assert (
        marks[header.mark]
        == marks[pad.mark]
        == {f"BRANCH {word}" for word in ("RIGHT", "TOP", "LEFT", "BOTTOM")}
    )


@pytest.mark.parametrize(
    ("given", "named"),
    [
        ({"pad": 400}, "pad: 400 mm reaches past"),
        ({"header_length": 400, "pad": 90}, "allowed: 74 mm or less"),
        ({"pad": -1}, "pad"),
        ({"pad_in": "thirds"}, "pad_in"),
        ({"tell_tale": 200}, "tell_tale"),
    ],
)
def test_what_has_no_room_is_refused(given: dict[str, object], named: str) -> None:
    with pytest.raises((InputError, AssertionError), match=named):
        tee(**given)


def test_the_largest_width_named_does_work() -> None:
    holds(tee(header_length=400, pad=74))


def wrong(built, **changed: object) -> set[str]:
    part = built.parts[2]
    pattern = replace(part.pattern, **changed)
    return {check.name for check in check_part(pattern, part.solid) if not check.holds}


def test_the_checks_can_fail() -> None:
    built = tee()
    pad = built.patterns[2]
    outer, hole, tale = pad.net.curves[0][1], *pad.openings
    eye = np.eye(2)
    wide = replace(pad.net, curves=(("outer", outer.moved(turn=1.001 * eye, shift=np.zeros(2))),))
    assert {"width, greatest", "outer edge against the inner"} <= wrong(built, net=wide)
    aside = replace(
        hole, curves=(("opening", hole.curves[0][1].moved(turn=eye, shift=np.array([0.1, 0.0]))),)
    )
    assert "inner edge, largest distance from the joint" in wrong(built, openings=(aside, tale))
    away = replace(tale, curves=(("holes", tale.curves[0][1].moved(turn=eye, shift=np.array([0.0, 40.0]))),))
    assert "tell-tale hole not clear of the edges" in wrong(built, openings=(hole, away))
    assert "opening, area against the joint" in wrong(
        built, openings=(replace(hole, area=hole.area + 1), tale)
    )
    solid = built.parts[2].solid
    found = {check.name for check in check_part(pad, replace(solid, width=59.0)) if not check.holds}
    assert "width, least" in found


@pytest.mark.parametrize("given", [{}, {"pad_in": "halves"}, {"branch": "round 30", "pad_in": "halves"}])
def test_a_tell_tale_hole_is_no_larger_than_what_is_named(given: dict[str, object]) -> None:
    with pytest.raises(Refusal) as caught:
        tee(**given, pad=40, tell_tale=41)
    (problem,) = caught.value.problems
    assert problem.field == "tell_tale"
    # The width less a millimetre on either side.
    assert problem.allowed == "38 mm or less, or 0 for none"
    holds(tee(**given, pad=40, tell_tale=38))


def test_a_tap_takes_no_plate() -> None:
    with pytest.raises(Refusal, match=r"^pad: 60 mm, but the lap flange.*allowed: joint = set-on or set-in"):
        tee(joint="tap")


def test_halves_say_which_end_lies_at_the_headers_right() -> None:
    # On the header's sheet, outside up, its right lies on the left of its top.
    for pad in tee(pad_in="halves", angle=70).patterns[2:]:
        words = {label.text: label.at for label in lettered(pad).labels}
        assert words["HEADER'S RIGHT"][0] < words["HEADER'S LEFT"][0]
        assert not [text for text in words if text.startswith("END ")]
        assert SIDES in pad.facts
        assert "edge from HEADER'S" in " ".join(pdf_words(pad).split())


def test_no_plate_is_said_to_be_faced() -> None:
    built = tee()
    shown = pdf_words(built.patterns[2])
    assert "Facing" not in shown
    assert "Facing" in pdf_words(built.patterns[1])


def test_a_plate_on_a_flat_face_is_not_rolled() -> None:
    """A rectangle of 600 with corners of 20 is flat for 280 mm to either side of its middle."""
    box = {"header": "rectangle 600 x 400 r 20", "branch": "round 150"}
    # The plate reaches 75 + pad to either side.
    flat, bent = (tee(**box, pad=pad, sizes="inside").patterns[2] for pad in (150, 215))
    for pattern, word in ((flat, "lies flat on the header"), (bent, "rolled to lie on the header")):
        assert any(fact.startswith(word) for fact in pattern.facts)
    assert flat.lines == ()
    assert len(bent.lines) > 0


def test_the_mark_is_read_from_arms_length() -> None:
    for pad in tee(pad_in="halves", angle=70).patterns[2:]:
        (mark,) = [label for label in lettered(pad).labels if label.text == pad.mark]
        assert mark.height >= 4.0  # [mm] common practice, no source
