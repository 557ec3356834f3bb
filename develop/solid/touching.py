"""Edges cut square to the plate that touch a mitre's plane or a header, as ends in space; from sections alone.

An edge cut square to the plate is level across the wall: at a line of the side with the outward normal e it
reaches from p + inner · e to p + outer · e, all at one height. It goes on until the first of these points
meets the other part. On a plane that is one of the two corners; on a header's round side it may also lie
between them.
"""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.sections.section import Parallel, Section, Walk
from develop.solid.end import End
from develop.solid.meeting import MeetingEnd, nearest
from develop.solid.taper_meeting import TaperMeetingEnd

__all__ = ["MitredEnd", "StandingEnd", "TouchingEnd"]

_GOLDEN = 0.5 * (np.sqrt(5.0) - 1.0)
_STEPS = 80
_COARSE = 181
_SAMPLES = 720
_HALVINGS = 40
_LOOSE = 1e-12
_ROUNDS = 14
# A normal of the other part that leans less than this to the wall's [rad] is square to it.
_SQUARE = 1e-7
# Changes of the corner that lie nearer to each other than this part of a turn are one.
_APART = 1e-6


@dataclass(frozen=True)
class TouchingEnd(End):
    """The end of a side that is carried along +z, its edge square to the plate, against another part.

    inner, outer: where the edge's two corners lie, from the given surface along the outward normal [mm]; the
    same for an edge that is cut along the other part, whose line on that face is meant.
    """

    inner: float
    outer: float

    @abstractmethod
    def _reached(self, at: Walk) -> tuple[Array, Array]:
        """Height of the edge and place of what touches, from the given surface (n,) [mm], on lines of a walk."""

    @abstractmethod
    def clear(self, points: Array) -> tuple[Array, Array]:
        """How far points (n, 3) [mm] are clear of the other part, negative where they overlap it, (n,), and
        that part's unit normals there (n, 3), which point to this one."""

    @property
    def square(self) -> bool:
        """The edge is cut square to the plate."""
        return self.inner != self.outer

    def point(self, u: Array) -> Array:
        at = self.section.walk(np.asarray(u, dtype=float))
        return np.stack([at.x, at.y, self._reached(at)[0]], axis=-1)

    def across(self, u: Array, place: float | Array) -> Array:
        """Points (n, 3) [mm] of the edge, so far from the given surface along the normal [mm]."""
        at = self.section.walk(np.asarray(u, dtype=float))
        normal = np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1)
        return np.asarray(self.point(u) + np.asarray(place)[..., None] * normal)

    def touching(self, u: Array) -> Array:
        """Where on the edge it touches, from the given surface along the normal (n,) [mm]."""
        return self._reached(self.section.walk(np.asarray(u, dtype=float)))[1]

    @cached_property
    def breaks(self) -> Array:
        """Parameters where what touches changes, by halving."""
        section = self.section
        u = np.concatenate(
            [section.breaks, section.breaks[0] + section.period * (np.arange(_SAMPLES) + 0.5) / _SAMPLES]
        )
        u = np.unique(u)

        def corner(u: Array) -> Array:
            place = self.touching(u)
            return np.asarray(1.0 * (place == self.outer) - 1.0 * (place == self.inner))

        low, high = u[:-1], u[1:]
        first, last = corner(low), corner(high)
        changes = np.flatnonzero(first != last)
        low, high, first = low[changes], high[changes], first[changes]
        for _ in range(_HALVINGS if len(changes) else 0):
            middle = 0.5 * (low + high)
            same = corner(middle) == first
            low, high = np.where(same, middle, low), np.where(same, high, middle)
        found = np.sort(np.concatenate([high, self._corners]) % section.period)
        return found[np.diff(found, prepend=-1.0) > _APART * section.period]

    @property
    def _corners(self) -> Array:
        """Parameters (k,) where the curve may have corners though one corner goes on touching."""
        return np.zeros(0)

    @cached_property
    def girth(self) -> float:
        """Length of the edge on the given surface [mm], by quadrature in space."""
        section = self.section
        start, period = section.breaks[0], section.period
        ends = np.concatenate([section.breaks[:-1] - start, (self.breaks - start) % period, [period]])
        ends = np.sort(ends)
        ends = ends[np.diff(ends, prepend=-1.0) > 1e-9 * period]
        ends[-1] = period

        def values(panels: Panels) -> Array:
            points = self.point(panels.nodes.ravel()).reshape(*panels.nodes.shape, 3)
            rates = (DERIVATIVE @ points) / panels.half[:, None, None]
            return np.linalg.norm(rates, axis=-1)[..., None]

        def loose(panels: Panels, found: Array) -> Mask:
            return np.asarray(tail(found)[:, 0] * panels.half > _LOOSE * section.girth)

        panels, found = resolved(Panels.between(start + ends), values, loose, rounds=_ROUNDS)
        return float(np.sum((found[..., 0] @ WEIGHTS) * panels.half))

    def distance(self, points: Array) -> Array:
        """Distance (n,) [mm] of points (n, 3) from the edge on the given surface, never understated."""
        return nearest(self.section, self.point, points)

    @abstractmethod
    def off(self, points: Array) -> Array:
        """Distance (n,) [mm] of points (n, 3) from what the edge's corners can touch."""


@dataclass(frozen=True)
class MitredEnd(TouchingEnd):
    """An end against the plane z = height + rise · (x, y) [mm]. upper: it is end B, below that plane."""

    height: float
    rise: Array
    upper: bool

    @staticmethod
    def of(
        section: Section, *, inner: float, outer: float, height: float, rise: Array, upper: bool
    ) -> MitredEnd:
        """The end of a leg of a section, with its edge's corners, at a plane; as for the class."""
        flat = np.eye(3)[:, :2]
        return MitredEnd(section, np.zeros(3), flat, flat.T, inner, outer, height, rise, upper)

    def _reached(self, at: Walk) -> tuple[Array, Array]:
        # The plane climbs by rise · e along the edge: what it meets first is one end of it.
        climb = at.ex * self.rise[0] + at.ey * self.rise[1]
        level = self.height + at.x * self.rise[0] + at.y * self.rise[1]
        inside = (climb > 0.0) == self.upper
        place = np.where(inside, self.inner, self.outer)
        return level + place * climb, place

    def clear(self, points: Array) -> tuple[Array, Array]:
        sign = -1.0 if self.upper else 1.0
        normal = sign * np.array([-self.rise[0], -self.rise[1], 1.0])
        normal = normal / np.linalg.norm(normal)
        apart = (points - np.array([0.0, 0.0, self.height])) @ normal
        return np.asarray(apart), np.broadcast_to(normal, points.shape)

    def off(self, points: Array) -> Array:
        rings = [
            End.cut(Parallel(self.section, place), height=self.height, rise=self.rise).distance(points)
            for place in {self.inner, self.outer}
        ]
        return np.asarray(np.min(rings, axis=0))


@dataclass(frozen=True)
class StandingEnd(TouchingEnd):
    """The end A of a branch against the outside of a header. met: where its given surface meets that.

    By its tangent planes N the header lies below (h(N) − N · q) / (N · z) over any point q across the branch,
    z the branch's axis, and the least of these is its height. Over an edge from inner to outer that is
    highest where, of all planes, the least of the greatest over the edge is: the header is convex, so the two
    may change places (minimax), and one search over N finds the height of the whole edge.
    """

    met: MeetingEnd

    @staticmethod
    def of(met: MeetingEnd, *, inner: float, outer: float) -> StandingEnd:
        """The end of the branch that `met` is the end of, its edge's corners at inner and outer [mm]."""
        return StandingEnd(met.section, met.origin, met.spans, met.back, inner, outer, met)

    def _planes(self, phi: Array) -> tuple[Array, Array]:
        """Unit normals (..., 3) and supports (...) [mm] of the header's tangent planes, in the branch's frame
        with its origin, for directions φ across the header."""
        met, shape = self.met, phi.shape
        flat = phi.ravel()
        if isinstance(met, TaperMeetingEnd):
            a, _, normal = met._rulings(flat)
            normal = normal / np.linalg.norm(normal, axis=1)[:, None]
            support = np.einsum("ni,ni->n", normal, a)
        else:
            normal = np.stack([np.cos(flat), np.sin(flat), np.zeros_like(flat)], axis=-1)
            support = met.header.support(normal[:, 0], normal[:, 1])
        support = support - normal @ met.frame.origin
        return (normal @ met.frame.axes.T).reshape(*shape, 3), support.reshape(shape)

    @cached_property
    def _near(self) -> tuple[float, float]:
        """Directions φ between which the header's side faces the branch."""
        met = self.met
        if isinstance(met, TaperMeetingEnd):
            return met._near
        out = met.frame.axes[2, :2]
        middle = float(np.arctan2(out[1], out[0]))
        return middle - 0.5 * np.pi, middle + 0.5 * np.pi

    def _reached(self, at: Walk) -> tuple[Array, Array]:
        shape = at.x.shape
        x, y, ex, ey = (each.ravel() for each in (at.x, at.y, at.ex, at.ey))

        def most(phi: Array) -> tuple[Array, Array, Array]:
            """Height of the planes over the edge, its greatest; N · e; N · z."""
            normal, support = self._planes(phi)
            lean = normal[:, 0] * ex + normal[:, 1] * ey
            rest = support - normal[:, 0] * x - normal[:, 1] * y
            facing = np.maximum(normal[:, 2], 1e-300)
            return (rest + np.maximum(-self.inner * lean, -self.outer * lean)) / facing, lean, facing

        low, high = (np.full(len(x), end) for end in self._near)
        a, b = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
        at_a, at_b = most(a)[0], most(b)[0]
        best, phi = np.minimum(at_a, at_b), np.where(at_a < at_b, a, b)
        for _ in range(_STEPS):
            left = at_a < at_b
            low, high = np.where(left, low, a), np.where(left, b, high)
            fresh = np.where(left, high - _GOLDEN * (high - low), low + _GOLDEN * (high - low))
            found = most(fresh)[0]
            a, b = np.where(left, fresh, b), np.where(left, a, fresh)
            at_a, at_b = np.where(left, found, at_b), np.where(left, at_a, found)
            better = found < best
            best, phi = np.where(better, found, best), np.where(better, fresh, phi)
        lean = most(phi)[1]
        place = np.where(lean < 0.0, self.outer, self.inner)
        if self.square:
            between = np.abs(lean) < _SQUARE
            place = np.where(between, self._between(phi, x, y, ex, ey), place)
        return best.reshape(shape), place.reshape(shape)

    def _between(self, phi: Array, x: Array, y: Array, ex: Array, ey: Array) -> Array:
        """Where on an edge that the header's normal is square to it touches, (n,) [mm]: as far to the side as
        the header's line of contact, or at the inside where the edge lies along that line."""
        met = self.met
        if isinstance(met, TaperMeetingEnd):
            a, ruling, normal = met._rulings(phi)
        else:
            e = np.stack([np.cos(phi), np.sin(phi)])
            touch = met.header.touch(e[0], e[1])
            a = np.stack([*touch, np.zeros_like(phi)], axis=-1)
            ruling = np.broadcast_to(np.array([0.0, 0.0, 1.0]), a.shape)
            normal = np.stack([*e, np.zeros_like(phi)], axis=-1)
        # Across the line of contact, in its tangent plane: the edge and the branch's axis give both.
        side = np.cross(normal, ruling)
        axes = met.frame.axes
        edge = ex[:, None] * axes[0] + ey[:, None] * axes[1]
        origin = x[:, None] * axes[0] + y[:, None] * axes[1] + met.frame.origin
        lift = np.einsum("ni,ni->n", normal, a - origin) / (normal @ axes[2])
        origin = origin + lift[:, None] * axes[2]
        rate = np.einsum("ni,ni->n", edge, side)
        level = np.abs(rate) < 1e-6 * np.linalg.norm(side, axis=1)
        step = np.einsum("ni,ni->n", a - origin, side) / np.where(level, 1.0, rate)
        return np.where(level, self.inner, np.clip(step, self.inner, self.outer))

    def clear(self, points: Array) -> tuple[Array, Array]:
        # A point is as far outside of a convex side as of the tangent plane that it is farthest from.
        start, end = self._near
        grid = np.linspace(start, end, _COARSE)
        normal, support = self._planes(grid)
        index = np.argmax(points @ normal.T - support, axis=1)
        step = grid[1] - grid[0]
        low, high = grid[index] - step, grid[index] + step

        def apart(phi: Array) -> Array:
            normal, support = self._planes(phi)
            return np.asarray(np.einsum("ni,ni->n", normal, points) - support)

        for _ in range(_STEPS // 2):
            a, b = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
            left = apart(a) > apart(b)
            low, high = np.where(left, low, a), np.where(left, b, high)
        phi = 0.5 * (low + high)
        return apart(phi), self._planes(phi)[0]

    def off(self, points: Array) -> Array:
        return np.abs(self.clear(points)[0])

    @property
    def _corners(self) -> Array:
        found = []
        for place in {self.inner, self.outer}:
            moved = MeetingEnd.of(Parallel(self.section, place), self.met.header, self.met.frame)
            if not isinstance(self.met, TaperMeetingEnd):
                found.append(moved.breaks)
        return np.concatenate(found) if found else np.asarray(self.met.breaks)
