"""The rectangle with rounded or sharp corners, and the flat oval as its roundest case."""

from __future__ import annotations

from math import pi

import numpy as np

from develop.sections.section import Array, Section, Walk

__all__ = ["Rectangle"]

# A normal that lies this close to that of a side [rad] is taken for the side's own.
_SAME_NORMAL = 1e-13
_QUARTER = 0.5 * pi


class Rectangle(Section):
    """A rectangle [mm] whose corners are quarter circles of radius r, 0 for sharp ones.

    With r half of the smaller size it is the flat oval: two straights and two half circles.
    The curve runs through straights, on which the normal stands, and corners, on which it turns
    by a right angle; u counts them, so that both are smooth on every piece. Half the right side
    comes first, as direction 0 is its middle.
    """

    def __init__(self, *, width: float, height: float, r: float) -> None:
        self.r = r
        self._core = np.array([0.5 * width - r, 0.5 * height - r])
        w, h = self._core
        # Corner centres from the right top one on, anticlockwise.
        self._centres = np.array([[w, h], [-w, h], [-w, -h], [w, -h]])
        lengths = [h, 2.0 * w, 2.0 * h, 2.0 * w, h]
        # Pieces: half a side, then corner and side in turn; sides of no length are left out.
        kinds: list[tuple[bool, int]] = []
        for side in range(5):
            if lengths[side] > 0.0:
                kinds.append((True, side))
            if side < 4:
                kinds.append((False, side))
        self._lengths = np.array(lengths)
        self._is_side = np.array([kind for kind, _ in kinds])
        self._number = np.array([number for _, number in kinds])
        self.breaks = np.arange(len(kinds) + 1, dtype=float)

    def walk(self, u: Array) -> Walk:
        u = np.asarray(u, dtype=float)
        local = u % self.period
        piece = np.minimum(local.astype(int), len(self._is_side) - 1)
        t = local - piece
        side, number = self._is_side[piece], self._number[piece]
        turn = np.where(side, 0.0, _QUARTER)
        quarter = number % 4
        phi = _QUARTER * quarter + turn * t
        ex, ey = np.cos(phi), np.sin(phi)
        # On a side the point starts at the corner before it; the first half side at its middle.
        centre = self._centres[np.where(side, (number - 1) % 4, quarter)]
        length = np.where(side, self._lengths[number], 0.0)
        begin = np.where(side & (number == 0), self._lengths[0], 0.0)
        along = begin + length * t
        x = centre[..., 0] + self.r * ex - along * ey
        y = centre[..., 1] + self.r * ey + along * ex
        return Walk(x, y, ex, ey, length + self.r * turn, turn)

    def support(self, nx: Array, ny: Array) -> Array:
        w, h = self._core
        return np.asarray(w * np.abs(nx) + h * np.abs(ny) + self.r * np.hypot(nx, ny))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        w, h = self._core
        size = np.hypot(nx, ny)
        share = self.r / np.where(size > 0.0, size, 1.0)
        return np.copysign(w, nx) + share * nx, np.copysign(h, ny) + share * ny

    def parameter(self, nx: Array, ny: Array) -> Array:
        return np.asarray(self.parameters(nx, ny)[0])

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        turned = (np.arctan2(ny, nx) % (2.0 * pi)) / _QUARTER
        nearest = np.round(turned)
        on_side = np.abs(turned - nearest) * _QUARTER <= _SAME_NORMAL
        corner = np.where(on_side, nearest, np.floor(turned)).astype(int) % 4
        t = np.where(on_side, 0.0, turned - np.floor(turned))
        starts = self._corner_starts
        high = starts[corner] + t
        before = starts[(corner - 1) % 4] + 1.0
        # Of the right side the first half comes at the start of the turn, the other at its end.
        low = np.where(on_side, before, high)
        return np.asarray(low), np.asarray(np.where(low > high, high + self.period, high))

    @property
    def _corner_starts(self) -> Array:
        return np.asarray(self.breaks[:-1][~self._is_side])

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        at = self.walk(self.within(nx, ny, low, high))
        return at.x, at.y

    @property
    def kinks(self) -> Array:
        return _QUARTER * np.arange(4.0)

    def radius(self, nx: Array, ny: Array) -> Array:
        return np.full_like(nx, self.r)

    @property
    def girth(self) -> float:
        return float(4.0 * self._core.sum() + 2.0 * pi * self.r)

    @property
    def area(self) -> float:
        w, h = 2.0 * self._core
        return float(w * h + 2.0 * (w + h) * self.r + pi * self.r**2)

    @property
    def least_radius(self) -> float:
        return self.r

    def rounder(self, distance: float) -> str:
        half = 0.5 * min(self.width, self.height)
        return f"r {distance:.10g} mm or more" if distance <= half else "a larger section"

    def _moved(self, distance: float) -> Section:
        r = self.r + distance
        w, h = 2.0 * (self._core + r)
        return Rectangle(width=float(w), height=float(h), r=r)
