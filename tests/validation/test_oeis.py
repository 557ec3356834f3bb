"""The On-Line Encyclopedia of Integer Sequences: decimal expansions of the girths of ellipses,
A138500 (2, 1), A334848 (3, 1), A334849 (3, 2), A105419 (√2, 1: also the arc length of one period of
the sine), A274014 (a = 1, eccentricity sin 15°, closed form by Ramanujan).
"""

from __future__ import annotations

from math import cos, pi, radians, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import cut_slopes
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.trim import Plane

# Two units in the last place of a double of this size.
FLOAT = 4.5e-16


@pytest.mark.parametrize(
    ("a", "b", "expected"),
    [
        (2.0, 1.0, 9.6884482205476761984),
        (3.0, 1.0, 13.36489322055525823),
        (3.0, 2.0, 15.86543958929058979),
        (sqrt(2.0), 1.0, 7.64039557805542403),
        (1.0, cos(radians(15.0)), 6.17660198765869346),
    ],
)
def test_girth(a: float, b: float, expected: float) -> None:
    assert Ellipse(width=2.0 * a, height=2.0 * b).girth == pytest.approx(expected, rel=FLOAT)
    assert Ellipse(width=2.0 * b, height=2.0 * a).girth == pytest.approx(expected, rel=FLOAT)


def test_a105419_is_the_edge_of_a_45_degree_cut() -> None:
    round_ = Ellipse(width=2.0, height=2.0)
    cut = cut_slopes(slope=pi / 4, long=0.0, end_b=True)
    sheet = Cylinder(round_, Plane(-2.0, np.zeros(2)), Plane(0.0, cut)).sheet(0.0)
    assert sheet.edge_b == pytest.approx(7.64039557805542403, rel=1e-14)
    assert sheet.edge_a == pytest.approx(2.0 * pi, rel=1e-14)
    # Unrolled, it is one period of the sine, here from its crest: x the arc, y the ordinate.
    at = sheet.lines(sheet.from_a(np.radians(np.arange(0.0, 360.0, 7.5))))
    assert np.abs(at.b[:, 1] - np.cos(at.b[:, 0])).max() < 1e-14
