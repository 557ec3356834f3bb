"""J. Steiner, Über parallele Flächen, Monatsbericht der Akademie der Wissenschaften zu Berlin (1840)
114-118: the parallel of a convex curve at the distance d is 2πd longer and π d² + L d larger.

The trap beside it: the ellipse with both axes longer by 2 d is another, shorter curve.
"""

from __future__ import annotations

from math import pi

import numpy as np
import pytest
from shapely import Polygon

from develop.errors import Refusal
from develop.sections.ellipse import Ellipse

AXES = [(400.0, 200.0), (300.0, 300.0), (10.0, 1000.0), (1000.0, 1.0)]


def test_the_curve_1_outside_of_the_half_axes_200_and_100() -> None:
    outside = Ellipse(width=400.0, height=200.0).offset(1.0)
    assert outside.girth == pytest.approx(975.12800736, abs=5e-9)
    longer_axes = Ellipse(width=402.0, height=202.0).girth
    assert longer_axes - outside.girth == pytest.approx(-0.17714, abs=5e-6)


@pytest.mark.parametrize(("width", "height"), AXES)
@pytest.mark.parametrize("distance", [0.3, 1.0, 25.0])
def test_outward_the_girth_grows_by_2_pi_d(width: float, height: float, distance: float) -> None:
    section = Ellipse(width=width, height=height)
    outside = section.offset(distance)
    assert outside.girth - section.girth == pytest.approx(2.0 * pi * distance, abs=2e-13 * outside.girth)
    assert outside.area - section.area == pytest.approx(
        section.girth * distance + pi * distance**2, abs=2e-15 * outside.area
    )
    # The same from its points, by quadrature.
    assert outside.arc(outside.breaks[-1:])[0] == pytest.approx(outside.girth, rel=1e-14)
    assert outside.width == pytest.approx(width + 2.0 * distance, rel=1e-15)
    assert outside.height == pytest.approx(height + 2.0 * distance, rel=1e-15)


@pytest.mark.parametrize(("width", "height"), AXES)
def test_inward_down_to_the_tightest_radius_and_no_further(width: float, height: float) -> None:
    section = Ellipse(width=width, height=height)
    tightest = min(width, height) ** 2 / max(width, height) / 2.0
    assert section.least_radius == pytest.approx(tightest, rel=1e-15)
    inside = section.offset(-0.999 * tightest)
    assert section.girth - inside.girth == pytest.approx(
        2.0 * pi * 0.999 * tightest, abs=2e-13 * section.girth
    )
    assert inside.least_radius == pytest.approx(0.001 * tightest, rel=1e-9)
    with pytest.raises(Refusal, match="tightest radius"):
        section.offset(-1.001 * tightest)


def test_inward_from_a_parallel_counts_from_the_first_curve() -> None:
    section = Ellipse(width=400.0, height=200.0)
    moved = section.offset(5.0).offset(-5.0 - 49.0)
    assert moved.girth == pytest.approx(section.girth - 2.0 * pi * 49.0, rel=1e-14)
    with pytest.raises(Refusal, match="tightest radius"):
        section.offset(5.0).offset(-5.0 - 50.1)


@pytest.mark.parametrize("distance", [20.0, -20.0])
def test_against_shapely(distance: float) -> None:
    """Points on the moved curve lie at the distance from a fine polygon of the given one."""
    section = Ellipse(width=400.0, height=200.0)
    fine = Polygon(section.point(np.linspace(0.0, 2.0 * pi, 4001)))
    buffered = fine.buffer(distance, quad_segs=400)
    moved = section.offset(distance)
    polygon = Polygon(moved.point(np.linspace(0.0, 2.0 * pi, 4001)))
    # 4000 chords stray by up to 2e-4 mm, and GEOS drops points that matter less than that to it.
    assert polygon.hausdorff_distance(buffered) < 2e-3
    assert buffered.length == pytest.approx(moved.girth, abs=2e-3)
    assert buffered.area == pytest.approx(moved.area, abs=0.1)  # a strip of 1e-4 mm
