"""A part of a sheet: the stretch between two of its rulings, as a sheet of its own."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from develop.quadrature import DERIVATIVE, NODES, WEIGHTS, Array, Indices
from develop.surfaces.sheet import Lines, Place, Sheet

__all__ = ["SheetPart"]

# Places of a panel, in parts of it, that differ by rounding.
_SAME = 1e-9


class SheetPart:
    """The stretch of a sheet from one ruling to another; see `Sheet`.

    It is turned so that its two seams lean alike to either side of the upright; on a cylinder, whose
    rulings all stand upright, it stays as it is. Running lengths and turns count from its own left seam.
    whole: the sheet. turned: the turn (2, 2) that its coordinates are taken through.
    """

    def __init__(self, whole: Sheet, start: Place, stop: Place) -> None:
        """start, stop: one ruling each (1,), the second to the right of the first."""
        self.whole = whole
        first, last = float(_along(start)[0]), float(_along(stop)[0])
        inner = np.arange(1.0, len(whole.ends.panel) - 1.0)
        bounds = np.concatenate([[first], inner[(inner > first + _SAME) & (inner < last - _SAME)], [last]])
        self._bounds = bounds
        self._panel = np.floor(0.5 * (bounds[:-1] + bounds[1:])).astype(np.int64)
        self._low = 2.0 * (bounds[:-1] - self._panel) - 1.0
        self._half = np.diff(bounds)
        self.turned, self._first = np.eye(2), None
        at = whole.lines(self._in_whole(self.ends))
        leg = at.b - at.a
        lean = np.unwrap(np.arctan2(leg[:, 0], leg[:, 1]))
        middle = 0.5 * float(lean[0] + lean[-1])
        c, s = np.cos(middle), np.sin(middle)
        self.turned = np.array([[c, -s], [s, c]])
        self._first = at.take([0])
        self.at_ends = self.lines(self.ends)
        self.edge_a, self.edge_b = float(self.at_ends.arc_a[-1]), float(self.at_ends.arc_b[-1])
        self.area = self._area()

    def _area(self) -> float:
        """By Green's theorem round the part: along edge A, up, back along edge B, down."""
        m, k = len(self._panel), len(NODES)
        at = self.lines(Place(np.repeat(np.arange(m), k), np.tile(NODES, m)))
        a, b = at.a.reshape(m, k, 2), at.b.reshape(m, k, 2)

        def swept(points: Array) -> float:
            rate = DERIVATIVE @ points
            cross = points[..., 0] * rate[..., 1] - points[..., 1] * rate[..., 0]
            return float(np.sum(cross @ WEIGHTS))

        a0, a1, b0, b1 = *self.at_ends.a[[0, -1]], *self.at_ends.b[[0, -1]]
        seams = a1[0] * b1[1] - a1[1] * b1[0] - (a0[0] * b0[1] - a0[1] * b0[0])
        return 0.5 * (swept(a) - swept(b) + float(seams))

    @property
    def ends(self) -> Place:
        m = len(self._panel)
        return Place(np.append(np.arange(m), m - 1), np.append(np.full(m, -1.0), 1.0))

    def _in_whole(self, place: Place) -> Place:
        """The same rulings by the panels of the whole sheet."""
        panel, low, half = self._panel[place.panel], self._low[place.panel], self._half[place.panel]
        return Place(panel, np.clip(low + half * (place.x + 1.0), -1.0, 1.0))

    def _here(self, along: Array) -> Place:
        """Rulings at places along the whole sheet (n,); what lies beyond an end comes to lie on it."""
        m = len(self._panel)
        panel = np.clip(np.searchsorted(self._bounds, along, side="right") - 1, 0, m - 1)
        x = 2.0 * (along - self._bounds[panel]) / self._half[panel] - 1.0
        return Place(panel, np.clip(x, -1.0, 1.0))

    def lines(self, place: Place) -> Lines:
        at = self.whole.lines(self._in_whole(place))
        first = self._first
        if first is None:
            return at
        return replace(
            at,
            a=at.a @ self.turned.T,
            b=at.b @ self.turned.T,
            tangent_a=at.tangent_a @ self.turned.T,
            tangent_b=at.tangent_b @ self.turned.T,
            arc_a=at.arc_a - first.arc_a,
            arc_b=at.arc_b - first.arc_b,
            turn=at.turn - first.turn,
        )

    def parameters(self, place: Place) -> tuple[Array, Array]:
        return self.whole.parameters(self._in_whole(place))

    def from_a(self, u: Array) -> Place:
        return self._here(_along(self.whole.from_a(u)))

    def from_b(self, u: Array) -> Place:
        return self._here(_along(self.whole.from_b(u)))

    def found(self, place: Place) -> tuple[Indices, Place]:
        """Which of some rulings of the whole sheet (n,) lie on this part, and where.

        One that lies on the seam of the whole is looked for on both sides of it.
        """
        along, end = _along(place), float(len(self.whole.ends.panel) - 1)
        near = 1e-7
        number = np.arange(len(along))
        at_start, at_end = along <= near, along >= end - near
        along = np.concatenate([along, np.full(int(at_start.sum()), end), np.zeros(int(at_end.sum()))])
        number = np.concatenate([number, number[at_start], number[at_end]])
        on = (along >= self._bounds[0] - near) & (along <= self._bounds[-1] + near)
        return number[on], self._here(along[on])


def _along(place: Place) -> Array:
    """How many panels lie to the left of rulings, parts of a panel too (n,)."""
    return np.asarray(place.panel + 0.5 * (place.x + 1.0))
