"""What both surfaces offer once a seam is chosen: the sheet, laid flat."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, fields
from typing import Protocol

import numpy as np

from develop.quadrature import Array, Indices

__all__ = ["Lines", "Place", "Sheet"]


@dataclass(frozen=True)
class Place:
    """Rulings of a sheet by panel (n,) and position (n,) in [-1, 1] inside it."""

    panel: Indices
    x: Array

    def __getitem__(self, which: Indices) -> Place:
        return Place(self.panel[which], self.x[which])


@dataclass(frozen=True)
class Lines:
    """Rulings of the sheet, in the flat and in space; n of them.

    a, b: ends in the flat (n, 2) [mm]. tangent_a, tangent_b: unit tangents of the edges there,
    to the right (n, 2). arc_a, arc_b: running lengths of the edges from the left seam (n,) [mm].
    turn: of the sheet since the left seam (n,) [rad]. radius_a, radius_b: roll radii (n,) [mm].
    u_a: parameter of end A's section (n,). length: of the rulings (n,) [mm].
    """

    a: Array
    b: Array
    tangent_a: Array
    tangent_b: Array
    arc_a: Array
    arc_b: Array
    turn: Array
    radius_a: Array
    radius_b: Array
    u_a: Array
    length: Array

    def take(self, which: Sequence[int]) -> Lines:
        """Some of the rulings, in that order."""
        index = np.asarray(which)
        return Lines(*(getattr(self, each.name)[index] for each in fields(self)))


class Sheet(Protocol):
    """A surface slit along its seam and laid flat, end A at the bottom, outside up.

    area [mm²] and edge_a, edge_b, the lengths of its edges [mm], are exact. at_ends: the rulings
    at the panels' `ends`.
    """

    area: float
    edge_a: float
    edge_b: float
    at_ends: Lines

    @property
    def ends(self) -> Place:
        """The panels' ends, from the left seam to the right, (m + 1,)."""
        ...

    def lines(self, place: Place) -> Lines:
        """The rulings at a place."""
        ...

    def parameters(self, place: Place) -> tuple[Array, Array]:
        """Parameters (n,) of both ends' sections where rulings meet them, growing from the seam."""
        ...

    def from_a(self, u: Array) -> Place:
        """Where the rulings through the points u (n,) of end A's section lie, from the seam on."""
        ...

    def from_b(self, u: Array) -> Place:
        """Where the rulings through the points u (n,) of end B's section lie, from the seam on."""
        ...
