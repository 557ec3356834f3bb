"""C. B. Barber, D. P. Dobkin and H. Huhdanpaa, The Quickhull Algorithm for Convex Hulls, ACM
Transactions on Mathematical Software 22 (1996) 469-483, as scipy.spatial.ConvexHull.

The side of a transition is the side of the convex hull of its two ends. Points on the ends are laid
where one plane touches both, found here by bisection over the planes through the tangents of end A,
so that the areas of the hulls of n, 2 n, 4 n points go with even powers of 1/n and can be
extrapolated. Qhull knows nothing of that pairing: were it wrong, it would show other facets.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, radians, sin, sqrt

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.spatial import ConvexHull

from develop.sections.ellipse import Ellipse
from develop.sections.point import Point
from develop.sections.section import Section
from develop.solid import End, Frame, Rim, Solid
from develop.surfaces.band import Band

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Placed:
    """An ellipse with half axes a, b about a centre, in the plane of the unit vectors x and y."""

    a: float
    b: float
    centre: tuple[float, float, float]
    rotate: float = 0.0  # [deg] anticlockwise
    slope: float = 0.0  # [deg] out of the level
    long: float = 0.0  # [deg] where it stands highest

    @property
    def axes(self) -> tuple[Array, Array]:
        """Half axes as vectors: turned in the level, then leant towards `long`."""

        def leant(v: Array) -> Array:
            towards = np.array([cos(radians(self.long)), sin(radians(self.long)), 0.0])
            up, along = np.array([0.0, 0.0, 1.0]), float(v @ towards)
            c, s = cos(radians(self.slope)), sin(radians(self.slope))
            return np.asarray(v + along * ((c - 1.0) * towards + s * up))

        r = radians(self.rotate)
        x, y = np.array([cos(r), sin(r), 0.0]), np.array([-sin(r), cos(r), 0.0])
        return self.a * leant(x), self.b * leant(y)

    def points(self, t: Array) -> Array:
        x, y = self.axes
        return np.asarray(np.array(self.centre) + np.cos(t)[:, None] * x + np.sin(t)[:, None] * y)

    def farthest(self, normal: Array) -> Array:
        """The points farthest in these directions."""
        x, y = self.axes
        nx, ny = normal @ x, normal @ y
        size = np.maximum(np.hypot(nx, ny), 1e-300)
        return np.asarray(np.array(self.centre) + (nx / size)[:, None] * x + (ny / size)[:, None] * y)

    def cap(self, points: Array) -> float:
        """Area of the polygon."""
        p = points - np.array(self.centre)
        return float(0.5 * np.linalg.norm(np.cross(p, np.roll(p, -1, axis=0)).sum(axis=0)))

    def rim(self) -> Rim:
        section: Section = Ellipse(width=2 * self.a, height=2 * self.b) if self.a else Point()
        frame = Frame.square(at=self.centre, rotate=radians(self.rotate))
        return Rim(section, frame.tilted(slope=radians(self.slope), long=radians(self.long)))


def hull_side(one: Placed, other: Placed, n: int) -> float:
    """Area of the side of the hull of n points on each end."""
    t = 2.0 * np.pi * (np.arange(n) + 0.3) / n
    here = one.points(t)
    x, y = one.axes
    tangent = -np.sin(t)[:, None] * x + np.cos(t)[:, None] * y
    up = np.cross(x, y)
    out = np.cross(tangent, up)
    out, up = out / np.linalg.norm(out, axis=1)[:, None], up / np.linalg.norm(up)
    low, high = np.full(n, -np.pi / 2), np.full(n, np.pi / 2)
    for _ in range(60):
        angle = 0.5 * (low + high)
        normal = np.cos(angle)[:, None] * out + np.sin(angle)[:, None] * up
        outside = np.einsum("ni,ni->n", normal, other.farthest(normal) - here) > 0.0
        high, low = np.where(outside, angle, high), np.where(outside, low, angle)
    there = other.farthest(normal)
    if not other.a:
        return float(ConvexHull(np.vstack([here, there[:1]])).area) - one.cap(here)
    return float(ConvexHull(np.vstack([here, there])).area) - one.cap(here) - other.cap(there)


def extrapolated(one: Placed, other: Placed, n: int) -> tuple[float, float]:
    """Area by Richardson's extrapolation over n, 2 n, 4 n points, and how well it has settled."""
    first, second, third = (hull_side(one, other, k * n) for k in (1, 2, 4))
    low, high = (4.0 * second - first) / 3.0, (4.0 * third - second) / 3.0
    best = (16.0 * high - low) / 15.0
    return best, abs(best - high)


CASES = {
    "ellipse to round": (Placed(300, 150, (0, 0, 0)), Placed(200, 200, (80, 40, 400)), 60),
    "ellipse to round, level": (Placed(300, 150, (0, 0, 0)), Placed(200, 200, (0, 0, 450)), 60),
    "rotated": (Placed(300, 150, (0, 0, 0)), Placed(250, 120, (30, -60, 500), rotate=35), 60),
    "crossed": (Placed(300, 100, (0, 0, 0)), Placed(100, 300, (0, 0, 300)), 600),
    "one inside the other": (Placed(300, 200, (0, 0, 0)), Placed(50, 20, (40, 10, 100), rotate=70), 120),
    "far off the axis": (Placed(100, 100, (0, 0, 0)), Placed(60, 60, (400, 0, 150)), 60),
    "tilted": (Placed(300, 150, (0, 0, 0)), Placed(200, 200, (20, 50, 400), slope=30, long=90), 60),
    "tilted and turned": (
        Placed(300, 150, (0, 0, 0)),
        Placed(220, 110, (0, -40, 600), rotate=-50, slope=50, long=160),
        120,
    ),
    "both tilted": (
        Placed(200, 150, (0, 0, 0), slope=20, long=0),
        Placed(150, 150, (0, 0, 500), slope=25, long=100),
        120,
    ),
    "to a point": (Placed(300, 150, (0, 0, 0)), Placed(0, 0, (100, 50, 400)), 60),
    "to a point beyond the base": (Placed(200, 200, (0, 0, 0)), Placed(0, 0, (350, 0, 300)), 60),
}


@pytest.mark.parametrize("name", CASES)
def test_area(name: str) -> None:
    one, other, n = CASES[name]
    expected, settled = extrapolated(one, other, n)
    # The extrapolation must itself be worth something.
    assert settled < 1e-7 * expected
    sheet = Band(one.rim(), other.rim()).sheet(0.7)
    assert sheet.area == pytest.approx(expected, rel=1e-8)


@pytest.mark.parametrize("name", CASES)
def test_area_by_the_route_of_the_checks(name: str) -> None:
    one, other, n = CASES[name]
    a, b = one.rim(), other.rim()
    solid = Solid(End.placed(a.section, a.frame), End.placed(b.section, b.frame), side="hull", seam=0.0)
    assert solid.measures.area == pytest.approx(extrapolated(one, other, n)[0], rel=1e-8)


def test_points_joined_at_equal_angles_are_another_surface() -> None:
    """What the comparison can see: the surface between points at equal eccentric angles, which is not
    developable, is smaller by more than two percent."""
    one, other, _ = CASES["crossed"]
    t = np.linspace(0.0, 2.0 * np.pi, 2001)
    p, q = one.points(t), other.points(t)
    strips = np.cross(q[:-1] - p[:-1], p[1:] - p[:-1]), np.cross(q[1:] - q[:-1], q[:-1] - p[1:])
    paired = sum(0.5 * np.linalg.norm(each, axis=1).sum() for each in strips)
    assert paired / Band(one.rim(), other.rim()).sheet(0.0).area < 0.98


def test_cone_closed_form() -> None:
    """A right cone, so that the extrapolation itself is seen to be right: area π r s."""
    one, other = Placed(300, 300, (0, 0, 0)), Placed(0, 0, (0, 0, 400))
    assert extrapolated(one, other, 60)[0] == pytest.approx(
        np.pi * 300.0 * sqrt(300.0**2 + 400.0**2), rel=1e-11
    )
