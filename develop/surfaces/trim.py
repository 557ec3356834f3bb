"""Trims: where an end of a sheet is cut off, found along each of its rulings."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Protocol

import numpy as np

from develop.quadrature import Array

if TYPE_CHECKING:
    from develop.sections.section import Section

__all__ = ["Plane", "Trim"]


class Trim(Protocol):
    """A surface that cuts rulings off."""

    def meet(self, start: Array, along: Array) -> Array:
        """Where lines from start (n, 3) along (n, 3) meet it, in parts (n,) of `along`."""
        ...


@dataclass(frozen=True)
class Plane:
    """The plane z = height + rise · (x, y) [mm]; rise (2,), zero for a square cut."""

    height: float
    rise: Array

    def at(self, x: Array, y: Array) -> Array:
        """Its height over the points x, y [mm]."""
        return np.asarray(self.height + self.rise[0] * x + self.rise[1] * y)

    def meet(self, start: Array, along: Array) -> Array:
        short = self.at(start[..., 0], start[..., 1]) - start[..., 2]
        return np.asarray(short / (along[..., 2] - along[..., :2] @ self.rise))

    def normal(self, points: Array) -> Array:
        """A normal (n, 3), of any length, at its points (n, 3)."""
        return np.broadcast_to(np.array([-self.rise[0], -self.rise[1], 1.0]), points.shape)

    def facing(self, start: Array) -> Array:
        """A normal (n, 3) with a part along +z where lines along z through start (n, 3) meet it."""
        return self.normal(start)

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of a section where its lines meet corners of the plane, which has none."""
        return ()
