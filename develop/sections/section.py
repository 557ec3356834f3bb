"""What every section offers: a closed convex curve walked by a natural parameter.

The curve is given by its support function h, the distance of the tangent line with outward
normal e = (cos φ, sin φ) from the centre. Moving the wall outward by d adds d to h and exactly
2πd to the girth (Steiner's formula for parallel curves).

The parameter u is chosen by each section so that the point, the arc s(u) and the direction of
the normal φ(u) are smooth between its `breaks`. A corner is a stretch of u in which only φ
moves, a straight side one in which only s moves.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.errors import Refusal
from develop.quadrature import Array, Indices, between, halves, nodes_of, running

_NO_RATE = 1e-300
__all__ = ["Array", "Parallel", "Section", "Walk"]

_STEPS = 12
_BISECTIONS = 60


@dataclass(frozen=True)
class Walk:
    """The curve at given u; all arrays of u's shape.

    x, y: point [mm]. ex, ey: outward unit normal. ds: ds/du [mm]. dphi: dφ/du [rad].
    """

    x: Array
    y: Array
    ex: Array
    ey: Array
    ds: Array
    dphi: Array


class Section(ABC):
    """A closed convex curve about its centre; lengths in mm, angles in radians.

    breaks: panel ends of u over one turn, (m + 1,), the first where the curve has direction 0.
    """

    breaks: Array

    @property
    def period(self) -> float:
        """Length of one turn in u."""
        return float(self.breaks[-1] - self.breaks[0])

    @abstractmethod
    def walk(self, u: Array) -> Walk:
        """The curve at u, any shape."""

    @abstractmethod
    def support(self, nx: Array, ny: Array) -> Array:
        """Support h of the vector n, homogeneous of degree 1: |n| h(direction of n) [mm]."""

    @abstractmethod
    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        """The point (x, y) [mm] where the tangent line has the normal direction n."""

    @abstractmethod
    def parameter(self, nx: Array, ny: Array) -> Array:
        """The u in one turn from breaks[0] at which the normal has the direction of n."""

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        """First and last u at which the normal has the direction of n: the ends of a straight side.

        Equal where the curve turns. The last is not below the first, so it may pass breaks[-1].
        """
        u = self.parameter(nx, ny)
        return u, u

    def within(self, nx: Array, ny: Array, low: Array, high: Array) -> Array:
        """The u nearest to the stretch from low to high, in its turn, where the normal is n.

        Where a whole straight side has that normal, the part of it in the stretch decides.
        """
        first, last = self.parameters(nx, ny)
        middle = 0.5 * (low + high)
        turns = np.round((middle - 0.5 * (first + last)) / self.period) * self.period
        return np.clip(np.clip(middle, first + turns, last + turns), low, high)

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        """The touching point for the normal n in the stretch of u from low to high."""
        return self.touch(nx, ny)

    @property
    def loose_spots(self) -> Array:
        """Parameters (k,) near which the rounding of a normal moves the parameter a long way."""
        return np.zeros(0)

    @property
    def kinks(self) -> Array:
        """Directions φ of the normals at which the support is not smooth (k,) [rad]."""
        return np.zeros(0)

    @abstractmethod
    def radius(self, nx: Array, ny: Array) -> Array:
        """Radius of curvature [mm] where the normal has the direction of n."""

    @property
    @abstractmethod
    def girth(self) -> float:
        """Length of the curve [mm]."""

    @property
    @abstractmethod
    def area(self) -> float:
        """Area inside [mm²]."""

    @property
    @abstractmethod
    def least_radius(self) -> float:
        """The smallest radius of curvature [mm]."""

    # ---- what follows from these -------------------------------------------------------

    @property
    def width(self) -> float:
        """Overall width [mm]."""
        one, none = np.ones(()), np.zeros(())
        return float(self.support(one, none) + self.support(-one, none))

    @property
    def height(self) -> float:
        """Overall height [mm]."""
        one, none = np.ones(()), np.zeros(())
        return float(self.support(none, one) + self.support(none, -one))

    def offset(self, distance: float) -> Section:
        """The parallel curve at `distance` [mm] outward (inward when negative).

        Raises Refusal where an inward move is more than the tightest radius, or leaves nothing.
        """
        if distance == 0.0:
            return self
        if -distance > self.least_radius or -2.0 * distance >= min(self.width, self.height):
            raise Refusal(
                field="sizes",
                given=f"the wall lies {-distance:g} mm inside the given size, where the tightest "
                f"radius is {self.least_radius:.4g} mm",
                allowed=f"a wall within the tightest radius: {self.rounder(-distance)}, a thinner wall",
            )
        return self._moved(distance)

    def rounder(self, distance: float) -> str:
        """What would let a wall lie `distance` [mm] inside, for messages."""
        return "a larger or rounder section"

    def _moved(self, distance: float) -> Section:
        return Parallel(self, distance)

    def point(self, u: Array) -> Array:
        """Points (n, 2) [mm] at u (n,)."""
        at = self.walk(np.asarray(u, dtype=float))
        return np.stack([at.x, at.y], axis=-1)

    def direction(self, u: Array) -> Array:
        """Direction (n,) [rad, 0 to 2π] of the point at u, seen from the centre."""
        at = self.walk(np.asarray(u, dtype=float))
        return np.asarray(np.arctan2(at.y, at.x) % (2.0 * np.pi))

    @cached_property
    def _half(self) -> Array:
        return halves(self.breaks)

    @cached_property
    def _table(self) -> tuple[Array, Array]:
        at = self.walk(nodes_of(self.breaks[:-1], self.breaks[1:]))
        return running(np.stack([at.ds, at.dphi], axis=-1), self._half)

    @cached_property
    def _known(self) -> tuple[Array, Array]:
        """u and arc at each panel's start and nodes and at the last end, for first guesses."""
        u = np.concatenate(
            [self.breaks[:-1, None], nodes_of(self.breaks[:-1], self.breaks[1:])], axis=1
        ).ravel()
        u = np.append(u, self.breaks[-1])
        return u, np.append(self._table[0][..., 0].ravel(), self._table[1][-1, 0])

    @cached_property
    def _seen(self) -> Array:
        """Directions of the same points from the centre, growing."""
        at = self.walk(self._known[0])
        return np.unwrap(np.arctan2(at.y, at.x))

    def _run(self, u: Array, column: int) -> Array:
        turns = np.floor((u - self.breaks[0]) / self.period)
        local = u - turns * self.period
        panel = np.clip(np.searchsorted(self.breaks, local, side="right") - 1, 0, len(self._half) - 1)
        x = (local - self.breaks[panel]) / self._half[panel] - 1.0
        table, ends = self._table
        inside = np.einsum("nk,nk->n", between(x), table[panel][..., column])
        return np.asarray(inside + turns * ends[-1, column])

    def arc(self, u: Array) -> Array:
        """Arc length (n,) [mm] from direction 0 to u (n,), anticlockwise, beyond one turn too."""
        return self._run(np.asarray(u, dtype=float), 0)

    def turning(self, u: Array) -> Array:
        """Angle (n,) [rad] that the normal has turned from direction 0 to u (n,)."""
        return self._run(np.asarray(u, dtype=float), 1)

    def at_arc(self, arc: Array) -> Array:
        """The u (n,) at arc lengths (n,) [mm] from direction 0, beyond one turn too: `arc` inverted."""
        arc = np.asarray(arc, dtype=float)
        u_known, arc_known = self._known
        whole = arc_known[-1]
        turns = np.floor(arc / whole)
        local = arc - turns * whole
        i = np.clip(np.searchsorted(arc_known, local, side="right") - 1, 0, len(arc_known) - 2)
        low, high = u_known[i], u_known[i + 1]
        u = self._inverse(i, local, u_known, arc_known)
        for _ in range(_STEPS):
            ds = self.walk(u).ds
            # On a corner the arc stands, and every u on it is right.
            step = (self._run(u, 0) - local) / np.where(ds > 0.0, ds, np.inf)
            u = np.clip(u - step, low, high)
            if np.max(np.abs(step), initial=0.0) <= 4e-9 * self.period:
                break
        return np.asarray(u + turns * self.period)

    def at_direction(self, direction: Array) -> Array:
        """The u (n,) whose point lies in the directions (n,) [rad], seen from the centre."""
        u_known, seen = self._known[0], self._seen
        wanted = seen[0] + (np.asarray(direction, dtype=float) - seen[0]) % (2.0 * np.pi)
        i = np.clip(np.searchsorted(seen, wanted, side="right") - 1, 0, len(seen) - 2)
        low, high = u_known[i], u_known[i + 1]
        gap = seen[i + 1] - seen[i]
        u = low + (wanted - seen[i]) / np.where(gap > 0.0, gap, np.inf) * (high - low)
        c, s = np.cos(wanted), np.sin(wanted)
        for _ in range(_STEPS):
            at = self.walk(u)
            # The point's distance from the line in that direction: linear along a straight side.
            rate = at.ds * (c * at.ex + s * at.ey)
            step = (c * at.y - s * at.x) / np.where(rate > 0.0, rate, np.inf)
            u = np.clip(u - step, low, high)
            if np.max(np.abs(step), initial=0.0) <= 1e-15 * self.period:
                break
        return np.asarray(u)

    def at_side(self, nx: float, ny: float, reach: Array) -> Array:
        """The u (n,) where the curve lies `reach` [mm] along the unit vector n, on its way anticlockwise
        from the farthest point in the direction n to the farthest against it.

        reach: (n,), from −h(−n) to h(n).
        """
        one = np.ones(1)
        first = float(self.parameters(nx * one, ny * one)[1][0])
        last = float(self.parameters(-nx * one, -ny * one)[0][0])
        first -= np.floor((first - self.breaks[0]) / self.period) * self.period
        last += np.ceil((first - last) / self.period) * self.period
        known = self._known[0][:-1]
        known = np.concatenate([known, known + self.period])
        known = np.concatenate([[first], known[(known > first) & (known < last)], [last]])
        at = self.walk(known)
        # Falling from the one to the other: the curve is convex.
        reached = np.minimum.accumulate(at.x * nx + at.y * ny)
        i = np.clip(len(known) - np.searchsorted(reached[::-1], reach, side="left") - 1, 0, len(known) - 2)
        low, high = known[i], known[i + 1]
        u = 0.5 * (low + high)
        for _ in range(_BISECTIONS):
            at = self.walk(u)
            miss = at.x * nx + at.y * ny - reach
            low, high = np.where(miss > 0.0, u, low), np.where(miss > 0.0, high, u)
            rate = at.ds * (at.ex * ny - at.ey * nx)
            step = miss / np.where(rate < 0.0, rate, -np.inf)
            newton = u - step
            # A step too small to move u ends on the side that was just closed.
            inside = (newton >= low) & (newton <= high) & (rate < 0.0)
            following = np.where(inside, newton, 0.5 * (low + high))
            moved = np.max(np.abs(following - u), initial=0.0)
            u = following
            if moved <= 1e-15 * self.period:
                break
        return np.asarray(u)

    def _inverse(self, i: Indices, local: Array, u_known: Array, arc_known: Array) -> Array:
        # Cubic Hermite of u over s: its slopes 1/ds are known, so that one Newton step suffices.
        gap = arc_known[i + 1] - arc_known[i]
        t = (local - arc_known[i]) / np.where(gap > 0.0, gap, np.inf)
        slope = self._slopes
        low, high = slope[i] * gap, slope[i + 1] * gap
        u0, u1 = u_known[i], u_known[i + 1]
        smooth = (
            u0
            + t * low
            + t * t * (3.0 * (u1 - u0) - 2.0 * low - high)
            + t * t * t * (low + high - 2.0 * (u1 - u0))
        )
        return np.asarray(np.clip(smooth, u0, u1))

    @cached_property
    def _slopes(self) -> Array:
        ds = self.walk(self._known[0]).ds
        # A rate so small that its inverse is no number belongs to an arc that is none.
        there = ds > _NO_RATE
        return np.asarray(np.where(there, 1.0 / np.where(there, ds, 1.0), 0.0))


class Parallel(Section):
    """The curve at a constant distance outside (negative: inside) another one.

    The normal does not change, so u, φ(u) and the breaks are those of the base curve; the point
    moves d along the normal, ds gains d·dφ, h gains d. Source: Steiner's formula.
    """

    def __init__(self, base: Section, distance: float) -> None:
        self.base, self.distance = base, distance
        self.breaks = base.breaks

    def walk(self, u: Array) -> Walk:
        at, d = self.base.walk(u), self.distance
        return Walk(at.x + d * at.ex, at.y + d * at.ey, at.ex, at.ey, at.ds + d * at.dphi, at.dphi)

    def support(self, nx: Array, ny: Array) -> Array:
        return self.base.support(nx, ny) + self.distance * np.hypot(nx, ny)

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        x, y = self.base.touch(nx, ny)
        share = self.distance / np.hypot(nx, ny)
        return x + share * nx, y + share * ny

    def parameter(self, nx: Array, ny: Array) -> Array:
        return self.base.parameter(nx, ny)

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        return self.base.parameters(nx, ny)

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        x, y = self.base.foot(nx, ny, low, high)
        share = self.distance / np.hypot(nx, ny)
        return x + share * nx, y + share * ny

    @property
    def loose_spots(self) -> Array:
        return self.base.loose_spots

    @property
    def kinks(self) -> Array:
        return self.base.kinks

    def radius(self, nx: Array, ny: Array) -> Array:
        return self.base.radius(nx, ny) + self.distance

    @property
    def girth(self) -> float:
        return self.base.girth + 2.0 * np.pi * self.distance

    @property
    def area(self) -> float:
        d = self.distance
        return self.base.area + self.base.girth * d + np.pi * d * d

    @property
    def least_radius(self) -> float:
        return self.base.least_radius + self.distance

    def _moved(self, distance: float) -> Section:
        return self.base.offset(self.distance + distance)
