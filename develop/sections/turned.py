"""A section turned about its centre."""

from __future__ import annotations

from math import cos, pi, sin

import numpy as np

from develop.sections.section import Array, Section, Walk

__all__ = ["Turned"]


class Turned(Section):
    """The base section turned anticlockwise by an angle [rad]; u is the base's, begun elsewhere.

    So that arcs still count from direction 0, the turn begins at the base's point in the direction
    −angle, which becomes one more break.
    """

    def __init__(self, base: Section, angle: float) -> None:
        self.base, self.angle = base, angle
        self._c, self._s = cos(angle), sin(angle)
        start = float(base.at_direction(np.array([-angle]))[0])
        past = np.sort((base.breaks[:-1] - start) % base.period)
        inside = past[(past > 1e-12 * base.period) & (past < (1.0 - 1e-12) * base.period)]
        self.breaks = start + np.concatenate([[0.0], inside, [base.period]])

    def _forth(self, x: Array, y: Array) -> tuple[Array, Array]:
        return self._c * x - self._s * y, self._s * x + self._c * y

    def _back(self, x: Array, y: Array) -> tuple[Array, Array]:
        return self._c * x + self._s * y, self._c * y - self._s * x

    def _in_turn(self, u: Array) -> Array:
        start, period = self.breaks[0], self.period
        past = (u - start) % period
        return np.asarray(start + np.where(past >= period * (1.0 - 1e-15), 0.0, past))

    def walk(self, u: Array) -> Walk:
        at = self.base.walk(u)
        return Walk(*self._forth(at.x, at.y), *self._forth(at.ex, at.ey), at.ds, at.dphi)

    def support(self, nx: Array, ny: Array) -> Array:
        return self.base.support(*self._back(nx, ny))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        return self._forth(*self.base.touch(*self._back(nx, ny)))

    def parameter(self, nx: Array, ny: Array) -> Array:
        return self._in_turn(self.base.parameter(*self._back(nx, ny)))

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        first, last = self.base.parameters(*self._back(nx, ny))
        begin = self._in_turn(first)
        return begin, begin + (last - first)

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        return self._forth(*self.base.foot(*self._back(nx, ny), low, high))

    def at_direction(self, direction: Array) -> Array:
        return self._in_turn(self.base.at_direction(np.asarray(direction, dtype=float) - self.angle))

    @property
    def loose_spots(self) -> Array:
        return self._in_turn(self.base.loose_spots)

    @property
    def kinks(self) -> Array:
        return np.sort((self.base.kinks + self.angle) % (2.0 * pi))

    def radius(self, nx: Array, ny: Array) -> Array:
        return self.base.radius(*self._back(nx, ny))

    @property
    def girth(self) -> float:
        return self.base.girth

    @property
    def area(self) -> float:
        return self.base.area

    @property
    def least_radius(self) -> float:
        return self.base.least_radius

    def _moved(self, distance: float) -> Section:
        # Not a parallel of this: its point in direction 0 is another one.
        return Turned(self.base.offset(distance), self.angle)
