"""The point: a section of no size, the apex of a cone."""

from __future__ import annotations

from math import pi

import numpy as np

from develop.sections.section import Array, Section, Walk

__all__ = ["Point"]


class Point(Section):
    """A single corner: the normal goes once round while the point stands; u is φ [rad]."""

    def __init__(self) -> None:
        self.breaks = np.linspace(0.0, 2.0 * pi, 5)

    def walk(self, u: Array) -> Walk:
        none = np.zeros_like(u)
        return Walk(none, none, np.cos(u), np.sin(u), none, np.ones_like(u))

    def support(self, nx: Array, ny: Array) -> Array:
        return np.zeros_like(nx)

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        return np.zeros_like(nx), np.zeros_like(ny)

    def parameter(self, nx: Array, ny: Array) -> Array:
        return np.asarray(np.arctan2(ny, nx) % (2.0 * pi))

    def radius(self, nx: Array, ny: Array) -> Array:
        return np.zeros_like(nx)

    @property
    def girth(self) -> float:
        return 0.0

    @property
    def area(self) -> float:
        return 0.0

    @property
    def least_radius(self) -> float:
        return 0.0
