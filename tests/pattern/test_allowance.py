"""What is added along the edges, against elementary geometry and a planar geometry library."""

from __future__ import annotations

from math import asin, cos, pi

import numpy as np
import pytest
from shapely import LineString, Point, Polygon, get_parts

from develop.pattern.allowance import Allowance, allowed
from develop.pattern.pattern import Outline
from tests.pieces.making import make

GIRTH = 400.0 * pi


def net(kind: str = "straight", **fields: object) -> Outline:
    fields = fields or {"section": "round 400", "length": 500}
    return make(kind, **fields).patterns[0].net


def cut(outline: Outline, **allowances: Allowance) -> Outline:
    return allowed(outline, outline.curves, allowances)


def polygon(outline: Outline) -> Polygon:
    found = Polygon(np.vstack([curve.polyline(1e-4)[:-1] for _, curve in outline.curves]))
    assert found.is_valid
    return found


def bounds(outline: Outline) -> list[float]:
    return [float(v) for v in polygon(outline).bounds]


OBLIQUE = {"section": "round 400", "length": 500, "cut_b": "slope 35 long 20", "cut_a": "slope 15 long 200"}
TAPER = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "offset": "80,40", "seam_at": 200}


def test_nothing_added_is_the_net_line_itself() -> None:
    outline = net()
    assert cut(outline) is outline
    assert cut(outline, a=Allowance(0.0)) is outline


def test_a_lap_makes_a_rectangle_wider_over_its_full_length() -> None:
    assert bounds(cut(net(), seam_right=Allowance(25.0))) == pytest.approx([0, 0, GIRTH + 25, 500], abs=1e-6)
    assert bounds(cut(net(), seam_left=Allowance(25.0))) == pytest.approx([-25, 0, GIRTH, 500], abs=1e-6)


def test_edges_go_on_and_gaps_are_taken_off() -> None:
    more = cut(
        net(), a=Allowance(20.0), b=Allowance(30.0), seam_left=Allowance(-1.5), seam_right=Allowance(-1.5)
    )
    assert bounds(more) == pytest.approx([1.5, -20, GIRTH - 1.5, 530], abs=1e-6)
    assert more.area == pytest.approx((GIRTH - 3) * 550, rel=1e-9)


@pytest.mark.parametrize("width", [5.0, 25.0, 60.0])
def test_a_lap_repeats_the_other_side_of_the_sheet(width: float) -> None:
    # Past its right seam a rolled pipe goes on with what its left side shows: the sinusoids of its cuts.
    outline = net(**OBLIQUE)
    lapped = cut(outline, seam_right=Allowance(width))
    left, right = outline.curve("seam_left"), lapped.curve("seam_right")
    x0 = left.start[0]
    strip = polygon(outline).intersection(
        Polygon([(x0, -900), (x0 + width, -900), (x0 + width, 2000), (x0, 2000)])
    )
    assert lapped.area - outline.area == pytest.approx(strip.area, abs=2e-3)
    assert right.start[0] - x0 == pytest.approx(GIRTH + width, abs=1e-6)


@pytest.mark.parametrize("seam", ["seam_left", "seam_right"])
def test_a_lap_on_a_tapered_side_is_its_width_all_along(seam: str) -> None:
    outline = net("transition", **TAPER)
    lapped = cut(outline, **{seam: Allowance(30.0)})
    old, new = (LineString(each.curve(seam).polyline(0.1)) for each in (outline, lapped))
    assert old.distance(new) == pytest.approx(30.0, abs=1e-6)
    # Its ends lie where the other side's edges lie, turned about: at the same distances from the seam's ends.
    turned = polygon(lapped).difference(polygon(outline).buffer(1e-6))
    assert turned.area == pytest.approx(lapped.area - outline.area, abs=0.1)


@pytest.mark.parametrize("name", ["a", "b"])
@pytest.mark.parametrize("kind", ["straight", "transition"])
def test_a_folded_strip_is_as_wide_everywhere_and_square_at_its_ends(kind: str, name: str) -> None:
    outline = net(kind, **(TAPER if kind == "transition" else OBLIQUE))
    width = 20.0
    folded = cut(outline, **{name: Allowance(width, folded=True)})
    edge = LineString(outline.curve(name).polyline(1e-4))
    added = polygon(folded).difference(polygon(outline))
    # One-sided and flat at its ends: what the library makes of the same edge.
    expected = edge.buffer(-width, single_sided=True, quad_segs=64)
    assert added.symmetric_difference(expected).area < 0.02 * edge.length


def test_laps_stop_at_a_folded_end() -> None:
    outline = net()
    both = cut(outline, seam_right=Allowance(25.0), a=Allowance(12.0, folded=True))
    shape = polygon(both)
    assert shape.area == pytest.approx(GIRTH * 512 + 25 * 500, rel=1e-9)
    # The corner is notched: nothing of it beside the fold.
    assert not shape.intersects(Point(GIRTH + 1.0, -1.0))
    assert shape.intersects(Point(GIRTH - 1.0, -11.0))
    assert shape.intersects(Point(GIRTH + 24.0, 1.0))


def test_tabs_are_cut_in_to_the_net_line() -> None:
    tabs = tuple(np.arange(1, 12) / 12)
    cut_in = cut(net(), a=Allowance(20.0, folded=True, tabs=tabs, opening=1.0, stop=2.0))
    shape = polygon(cut_in)
    # Eleven triangles of 1 mm by 18 mm are gone.
    assert shape.area == pytest.approx(GIRTH * 520 - 11 * 0.5 * 1.0 * 18.0, rel=1e-9)
    teeth = get_parts(shape.intersection(LineString([(-50, -19.999), (2000, -19.999)])))
    assert len(teeth) == 12


@pytest.mark.parametrize("width", [2.0, 25.0])
def test_at_an_apex_a_lap_ends_square(width: float) -> None:
    outline = net("cone", section="round 500", height=400)
    lapped = cut(outline, seam_right=Allowance(width))
    slant = (250.0**2 + 400.0**2) ** 0.5
    # The strip lies under the same circle about the apex as the sector does.
    expected = 0.5 * (width * (slant**2 - width**2) ** 0.5 + slant**2 * asin(width / slant))
    assert lapped.area - outline.area == pytest.approx(expected, abs=1e-3 * width)


def test_a_gap_at_the_seams_of_a_cone_takes_a_strip_off_both() -> None:
    outline = net("cone", section="round 500", height=400, cut_b=200)
    gapped = cut(outline, seam_left=Allowance(-1.5), seam_right=Allowance(-1.5))
    left, right = gapped.curve("seam_left"), gapped.curve("seam_right")
    source = [LineString(outline.curve(each).polyline(1.0)) for each in ("seam_left", "seam_right")]
    for new, old in zip((left, right), source, strict=True):
        assert old.distance(Point(*new.start)) == pytest.approx(1.5, abs=1e-5)
        assert old.distance(Point(*new.end)) == pytest.approx(1.5, abs=1e-5)
    assert polygon(gapped).within(polygon(outline).buffer(1e-3))


def test_the_added_areas_add_up() -> None:
    outline = net(**OBLIQUE)
    a, lap = Allowance(10.0), Allowance(25.0)
    alone = sum(cut(outline, **{k: v}).area - outline.area for k, v in (("a", a), ("seam_right", lap)))
    both = cut(outline, a=a, seam_right=lap).area - outline.area
    corner = both - alone
    # The corner is a parallelogram of 25 by 10 / cos of the edge's slope at the seam.
    edge = outline.curve("a")
    ahead = edge.controls[1] - edge.controls[0]
    lean = abs(np.arctan2(ahead[1], ahead[0]))
    assert corner == pytest.approx(25.0 * 10.0 / cos(lean), rel=0.02)
