"""Gauss–Legendre panels: integrals, running integrals, derivatives and values in between.

A range is cut into panels; on each, a function is known at the `ORDER` Gauss nodes and is
taken for the polynomial through them. Integrals over whole panels are then exact for degree
2·ORDER − 1, and everything inside a panel is a small matrix product.
Source: the classical Gauss quadrature (Abramowitz & Stegun 25.4.29) and the barycentric form
of Lagrange interpolation (Berrut & Trefethen, SIAM Review 46, 2004).
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = [
    "DERIVATIVE",
    "NODES",
    "ORDER",
    "RUNNING",
    "WEIGHTS",
    "Array",
    "Indices",
    "Mask",
    "between",
    "Panels",
    "halves",
    "inside",
    "nodes_of",
    "resolved",
    "running",
    "tail",
]

Array = NDArray[np.float64]
Indices = NDArray[np.intp]
Mask = NDArray[np.bool_]

ORDER = 20


def _legendre(x: Array, degree: int) -> Array:
    """Legendre polynomials 0..degree at x (n,), as (degree + 1, n)."""
    values = [np.ones_like(x), x]
    for n in range(1, degree):
        values.append(((2 * n + 1) * x * values[n] - n * values[n - 1]) / (n + 1))
    return np.array(values)


def _gauss(order: int) -> tuple[Array, Array]:
    """Nodes and weights of the Gauss–Legendre rule, by Newton from the cosine estimate."""
    x = -np.cos(np.pi * (np.arange(1, order + 1) - 0.25) / (order + 0.5))
    for _ in range(100):
        p = _legendre(x, order)
        slope = order * (x * p[order] - p[order - 1]) / (x * x - 1.0)
        step = p[order] / slope
        x = x - step
        if np.max(np.abs(step)) < 1e-16:
            break
    x = 0.5 * (x - x[::-1])
    p = _legendre(x, order)
    slope = order * (x * p[order] - p[order - 1]) / (x * x - 1.0)
    return x, 2.0 / ((1.0 - x * x) * slope * slope)


NODES, WEIGHTS = _gauss(ORDER)
"""Nodes and weights on [-1, 1], each (ORDER,)."""

_BASIS = _legendre(NODES, ORDER)
_TO_COEFFICIENTS: Array = (np.arange(ORDER)[:, None] + 0.5) * WEIGHTS * _BASIS[:ORDER]


def _running_matrix() -> Array:
    # The primitive of P_n that is zero at -1 is (P_{n+1} - P_{n-1}) / (2 n + 1).
    primitive = np.empty((ORDER, ORDER))
    primitive[0] = NODES + 1.0
    for n in range(1, ORDER):
        primitive[n] = (_BASIS[n + 1] - _BASIS[n - 1]) / (2 * n + 1)
    return np.asarray(primitive.T @ _TO_COEFFICIENTS)


RUNNING: Array = _running_matrix()
"""(ORDER, ORDER): values at the nodes to the integral from -1 to each node."""

_POINTS = np.concatenate([[-1.0], NODES])


def _barycentric_weights(points: Array) -> Array:
    gaps = points[:, None] - points
    np.fill_diagonal(gaps, 1.0)
    weights = 1.0 / np.prod(2.0 * gaps, axis=1)
    return np.asarray(weights / np.max(np.abs(weights)))


_POINT_WEIGHTS = _barycentric_weights(_POINTS)
_NODE_WEIGHTS = _barycentric_weights(NODES)


def _derivative_matrix() -> Array:
    weights = _barycentric_weights(NODES)
    gaps = NODES[:, None] - NODES
    np.fill_diagonal(gaps, 1.0)
    matrix = weights / weights[:, None] / gaps
    np.fill_diagonal(matrix, 0.0)
    np.fill_diagonal(matrix, -matrix.sum(axis=1))
    return np.asarray(matrix)


DERIVATIVE: Array = _derivative_matrix()
"""(ORDER, ORDER): values at the nodes to the derivative at the nodes."""


def halves(ends: Array) -> Array:
    """Half lengths (m,) of the panels between ends (m + 1,)."""
    return np.asarray(0.5 * np.diff(ends))


def nodes_of(start: Array, end: Array) -> Array:
    """The nodes (m, ORDER) of panels from start (m,) to end (m,)."""
    return np.asarray((0.5 * (start + end))[:, None] + (0.5 * (end - start))[:, None] * NODES)


def running(values: Array, half: Array) -> tuple[Array, Array]:
    """The running integral of a function known at the nodes.

    values: (m, ORDER) or (m, ORDER, c); half: (m,) half lengths of the panels.
    Returns its value at each panel's start and nodes (m, ORDER + 1[, c]), and at the m + 1 ends.
    """
    if values.ndim == 2:
        scale = half[:, None]
        inside, whole = (values @ RUNNING.T) * scale, (values @ WEIGHTS) * half
    else:
        scale = half[:, None, None]
        inside, whole = (RUNNING @ values) * scale, (WEIGHTS @ values) * half[:, None]
    ends = np.zeros((len(values) + 1, *values.shape[2:]))
    np.cumsum(whole, axis=0, out=ends[1:])
    table = np.empty((len(values), ORDER + 1, *values.shape[2:]))
    table[:, 0] = ends[:-1]
    table[:, 1:] = ends[:-1, None] + inside
    return table, ends


def between(x: Array) -> Array:
    """Weights (n, ORDER + 1) that give a running integral at x (n,) in [-1, 1] from its table.

    The value in panel i is weights · table[i] with the table of `running`.
    """
    return _barycentric(x, _POINTS, _POINT_WEIGHTS)


def _barycentric(x: Array, points: Array, weights: Array) -> Array:
    gaps = x[:, None] - points
    hit = np.abs(gaps) < 1e-300
    gaps[hit] = 1.0
    share = weights / gaps
    rows = hit.any(axis=1)
    if rows.any():
        share[rows] = np.where(hit[rows], 1.0, 0.0)
    return np.asarray(share / share.sum(axis=1)[:, None])


def inside(x: Array) -> Array:
    """Weights (n, ORDER) that give a function at x (n,) in [-1, 1] from its values at the nodes."""
    return _barycentric(x, NODES, _NODE_WEIGHTS)


@dataclass(frozen=True)
class Panels:
    """Panels (m,) from start to end; origin is a number that both halves of a panel inherit."""

    start: Array
    end: Array
    origin: Indices

    @staticmethod
    def between(ends: Array) -> Panels:
        """The panels between ends (m + 1,), numbered in order."""
        return Panels(ends[:-1], ends[1:], np.arange(len(ends) - 1))

    @property
    def half(self) -> Array:
        """Half lengths (m,)."""
        return 0.5 * (self.end - self.start)

    @property
    def nodes(self) -> Array:
        """The Gauss nodes (m, ORDER)."""
        return nodes_of(self.start, self.end)

    def take(self, which: Mask | Indices) -> Panels:
        """Some of the panels."""
        return Panels(self.start[which], self.end[which], self.origin[which])

    def halved(self) -> Panels:
        """First halves, then second halves, (2 m,)."""
        middle = 0.5 * (self.start + self.end)
        return Panels(
            np.concatenate([self.start, middle]),
            np.concatenate([middle, self.end]),
            np.concatenate([self.origin, self.origin]),
        )


def resolved(
    panels: Panels,
    values: Callable[[Panels], Array],
    loose: Callable[[Panels, Array], Mask],
    *,
    rounds: int,
) -> tuple[Panels, Array]:
    """Halve panels until none is loose, or `rounds` times; in order, with their values.

    values: of some panels, (m, ORDER, c). loose: which of them, (m,), do not resolve their values.
    """
    order = np.arange(len(panels.start), dtype=float)
    done: list[tuple[Array, Panels, Array]] = []
    step = 1.0
    for turn in range(rounds + 1):
        found = values(panels)
        open_ = loose(panels, found) if turn < rounds else np.zeros(len(order), dtype=bool)
        if not (done or open_.any()):
            return panels, found
        done.append((order[~open_], panels.take(~open_), found[~open_]))
        if not open_.any():
            break
        step *= 0.5
        panels = panels.take(open_).halved()
        order = np.concatenate([order[open_], order[open_] + step])
    index = np.argsort(np.concatenate([part[0] for part in done]))
    parts = [part[1] for part in done]
    whole = Panels(
        np.concatenate([each.start for each in parts]),
        np.concatenate([each.end for each in parts]),
        np.concatenate([each.origin for each in parts]),
    )
    return whole.take(index), np.concatenate([part[2] for part in done])[index]


def tail(values: Array) -> Array:
    """How large the last two Legendre coefficients of each panel are, (m, c), for values (m, ORDER, c).

    An honest sign of whether ORDER nodes resolve the function: for an analytic one the
    coefficients fall geometrically, so the tail bounds what has been left out.
    """
    last = _TO_COEFFICIENTS[-2:] @ values
    return np.asarray(np.abs(last).sum(axis=1))
