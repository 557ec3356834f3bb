"""The ellipse, and the circle as its equal-sided case."""

from __future__ import annotations

from functools import cached_property
from math import atan2, atanh, pi, sqrt

import numpy as np

from develop.sections.section import Array, Section, Walk

__all__ = ["Ellipse", "ellipse_girth"]

# The speed of an ellipse has its singular points at the distance atanh(b/a) from the ends of
# the long axis, in the complex plane of the eccentric angle. Panels of 1.2 times that length, then
# growing by 2.2, keep running integrals at full precision between the 16 nodes too (measured).
_FIRST, _GROWTH = 1.2, 2.2


def ellipse_girth(a: float, b: float) -> float:
    """Girth [mm] of the ellipse with half axes a and b [mm].

    L = 2π (a² − Σ 2^(n−1) c_n²) / M(a, b) with M the arithmetic-geometric mean and
    c_0² = a² − b², c_n = (a_(n−1) − b_(n−1)) / 2.
    Source: Abramowitz & Stegun 17.6.4; DLMF 19.8.6.

    >>> round(ellipse_girth(2.0, 1.0), 12)
    9.688448220548
    """
    a, b = max(a, b), min(a, b)
    if b == 0.0:
        return 4.0 * a
    total, weight = a * a - 0.5 * (a - b) * (a + b), 0.5
    p, q = a, b
    while True:
        c = 0.5 * (p - q)
        p, q = 0.5 * (p + q), sqrt(p * q)
        weight *= 2.0
        total -= weight * c * c
        if c <= 1e-9 * p:
            return 2.0 * pi * total / p


def _graded(ratio: float) -> Array:
    """Panel ends over a quarter turn, fine where the curve is sharp (u = 0), for ratio b/a <= 1."""
    ends, step = [0.0], _FIRST * (atanh(ratio) if ratio < 0.9 else 1.5)
    end = step
    while end < 0.75 * (pi / 2):
        ends.append(end)
        end *= _GROWTH
    return np.array([*ends, pi / 2])


class Ellipse(Section):
    """The ellipse with half width a and half height b [mm], u its eccentric angle [rad].

    x = a cos u, y = b sin u; h(n) = √(a² n_x² + b² n_y²); radius of curvature a²b²/h³.
    """

    def __init__(self, *, width: float, height: float) -> None:
        self.a, self.b = 0.5 * width, 0.5 * height
        quarter = _graded(min(self.a, self.b) / max(self.a, self.b))
        if self.b > self.a:
            quarter = pi / 2 - quarter[::-1]
        half = np.concatenate([quarter, (pi - quarter[::-1])[1:]])
        self.breaks = np.concatenate([half, pi + half[1:]])

    def walk(self, u: Array) -> Walk:
        a, b = self.a, self.b
        c, s = np.cos(u), np.sin(u)
        bc, as_ = b * c, a * s
        g = np.sqrt(bc * bc + as_ * as_)
        return Walk(a * c, b * s, bc / g, as_ / g, g, (a * b) / (g * g))

    def support(self, nx: Array, ny: Array) -> Array:
        return np.asarray(np.sqrt((self.a * nx) ** 2 + (self.b * ny) ** 2))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        a, b = self.a, self.b
        h = np.sqrt((a * nx) ** 2 + (b * ny) ** 2)
        return (a * a) * nx / h, (b * b) * ny / h

    def parameter(self, nx: Array, ny: Array) -> Array:
        return np.asarray(np.arctan2(self.b * ny, self.a * nx) % (2.0 * pi))

    def at_direction(self, direction: Array) -> Array:
        return np.asarray(np.arctan2(self.a * np.sin(direction), self.b * np.cos(direction)) % (2.0 * pi))

    def at_side(self, nx: float, ny: float, reach: Array) -> Array:
        # x n_x + y n_y = A cos(u − u0) with A the support of n.
        far, start = sqrt((self.a * nx) ** 2 + (self.b * ny) ** 2), atan2(self.b * ny, self.a * nx)
        return np.asarray(start + np.arccos(np.clip(reach / far, -1.0, 1.0)))

    def radius(self, nx: Array, ny: Array) -> Array:
        size = np.hypot(nx, ny)
        return np.asarray((self.a * self.b) ** 2 * (size / self.support(nx, ny)) ** 3)

    @cached_property
    def _girth(self) -> float:
        return ellipse_girth(self.a, self.b)

    @property
    def girth(self) -> float:
        return self._girth

    @property
    def area(self) -> float:
        return pi * self.a * self.b

    @property
    def least_radius(self) -> float:
        return min(self.a, self.b) ** 2 / max(self.a, self.b)

    def _moved(self, distance: float) -> Section:
        if self.a == self.b:
            return Ellipse(width=2.0 * (self.a + distance), height=2.0 * (self.b + distance))
        return super()._moved(distance)
