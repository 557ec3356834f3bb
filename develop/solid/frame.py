"""Planes in space, and sections placed on them."""

from __future__ import annotations

from dataclasses import dataclass
from math import cos, sin, tan

import numpy as np

from develop.quadrature import Array
from develop.sections.section import Section

__all__ = ["Frame", "Rim", "cut_slopes"]


@dataclass(frozen=True)
class Frame:
    """A plane with a centre: origin (3,) [mm], axes (3, 3) with the unit rows x, y, normal."""

    origin: Array
    axes: Array

    @staticmethod
    def square(*, at: tuple[float, float, float] = (0.0, 0.0, 0.0), rotate: float = 0.0) -> Frame:
        """Square to the axis +z at a centre [mm], turned by `rotate` [rad] anticlockwise."""
        # Exact for quarter turns, so that straight sides which should be parallel are.
        c, s = (0.0 if abs(each) < 1e-15 else each for each in (cos(rotate), sin(rotate)))
        return Frame(np.array(at, dtype=float), np.array([[c, s, 0.0], [-s, c, 0.0], [0.0, 0.0, 1.0]]))

    def tilted(self, *, slope: float, long: float) -> Frame:
        """Turned about its centre by `slope` [rad] so that it stands highest at direction `long` [rad]."""
        # Rotation about the horizontal axis square to `long` (Rodrigues' formula).
        k = np.array([sin(long), -cos(long), 0.0])
        cross = np.array([[0.0, -k[2], k[1]], [k[2], 0.0, -k[0]], [-k[1], k[0], 0.0]])
        turn = np.eye(3) + sin(slope) * cross + (1.0 - cos(slope)) * (cross @ cross)
        return Frame(self.origin, self.axes @ turn.T)

    @property
    def normal(self) -> Array:
        """Unit normal (3,), on towards end B."""
        return np.asarray(self.axes[2])


@dataclass(frozen=True)
class Rim:
    """A section placed in space: end A or end B."""

    section: Section
    frame: Frame

    def local(self, vector: Array) -> tuple[Array, Array, Array]:
        """Components of vectors (..., 3) along the plane's x and y and its normal."""
        along = vector @ self.frame.axes.T
        return along[..., 0], along[..., 1], along[..., 2]

    def place(self, x: Array, y: Array) -> Array:
        """Points (..., 3) in space of points x, y of the plane [mm]."""
        axes = self.frame.axes
        return np.asarray(self.frame.origin + x[..., None] * axes[0] + y[..., None] * axes[1])

    def support(self, normal: Array) -> Array:
        """Support (...) [mm] of the rim in the directions (..., 3), homogeneous of degree 1."""
        nx, ny, _ = self.local(normal)
        return normal @ self.frame.origin + self.section.support(nx, ny)

    def touch(self, normal: Array) -> Array:
        """The rim's points (..., 3) [mm] farthest in the directions (..., 3)."""
        nx, ny, _ = self.local(normal)
        return self.place(*self.section.touch(nx, ny))

    def highest_over(self, frame: Frame, *, sign: float) -> float:
        """Largest height [mm] of the rim over a plane, heights counted along sign times its normal."""
        up = sign * frame.normal
        return float(self.support(up)) - float(up @ frame.origin)


def cut_slopes(*, slope: float, long: float, end_b: bool) -> Array:
    """Rise of a plane cut per mm to the right and up, (2,).

    slope [rad] from a square cut, long [rad] the direction in which that end is longest.
    """
    rise = tan(slope) if end_b else -tan(slope)
    return np.array([rise * cos(long), rise * sin(long)])
