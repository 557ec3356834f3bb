"""H. Dirnböck and H. Stachel, The Development of the Oloid, Journal for Geometry and Graphics 1 (1997)
105-118: the hull of two unit circles in perpendicular planes, each through the other's centre. It is
developable, with rulings of √3 and the area 4π, but each rim crosses the other's plane: its sheet is
no closed strip from rim to rim, and a band between such rims must be refused, not answered.
"""

from __future__ import annotations

from math import pi, sqrt

import numpy as np
import pytest
from scipy.spatial import ConvexHull

from develop.errors import Refusal
from develop.sections.ellipse import Ellipse
from develop.solid import Frame, Rim
from develop.surfaces.band import Band


def circles(apart: float) -> tuple[Rim, Rim]:
    """Unit circles: one about the origin in z = 0, one standing on edge, its centre `apart` to the right."""
    standing = Frame(
        np.array([apart, 0.0, 0.0]), np.array([[1.0, 0.0, 0.0], [0.0, 0.0, 1.0], [0.0, -1.0, 0.0]])
    )
    unit = Ellipse(width=2.0, height=2.0)
    return Rim(unit, Frame.square()), Rim(unit, standing)


def test_the_rims_are_those_of_the_oloid() -> None:
    """So that the refusal below is of the right body: hull area 4π, extrapolated."""
    u = np.linspace(0.0, 2.0 * pi, 1801)[:-1]
    areas = []
    for step in (2, 1):
        points = [rim.place(*rim.section.touch(np.cos(u[::step]), np.sin(u[::step]))) for rim in circles(1.0)]
        areas.append(ConvexHull(np.vstack(points)).area)
    assert (4.0 * areas[1] - areas[0]) / 3.0 == pytest.approx(4.0 * pi, rel=3e-6)


def test_refused() -> None:
    with pytest.raises(Refusal, match="through the plane of end") as caught:
        Band(*circles(1.0))
    (problem,) = caught.value.problems
    assert "1 mm through" in problem.given
    assert "farther apart" in problem.allowed


@pytest.mark.parametrize("swapped", [False, True])
def test_refused_either_way_round(swapped: bool) -> None:
    rims = circles(1.0)
    with pytest.raises(Refusal, match="through the plane of end"):
        Band(*(rims[::-1] if swapped else rims))


def test_moved_until_each_rim_clears_the_others_plane_it_is_answered() -> None:
    """Turned to clear both planes, the same circles make a band; just short of that they do not."""
    unit = Ellipse(width=2.0, height=2.0)
    lifted = sqrt(2.0) / 2.0  # a circle leaning 45 degrees hangs so far below its centre

    def leaning(extra: float) -> Band:
        # At 45 degrees each reaches as far below the other's plane: 1 · sin 45°.
        frame = Frame.square(at=(0.0, 0.0, lifted + extra)).tilted(slope=pi / 4, long=0.0)
        return Band(Rim(unit, Frame.square()), Rim(unit, frame))

    with pytest.raises(Refusal, match="through the plane of end"):
        leaning(-0.001)
    assert leaning(0.6).sheet(0.0).edge_b == pytest.approx(2.0 * pi, rel=1e-12)
