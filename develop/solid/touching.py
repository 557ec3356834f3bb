"""Edges cut square to the plate that touch a mitre's plane or a header, in space; from sections alone.

An edge cut square to the plate is level across the wall: at a line of the side with the outward normal e it
reaches from p + inner · e to p + outer · e, all at one height. It goes on until the first of these points
meets the other part. On a plane that is one of the two corners; on a header's round side it may also lie
between them.
"""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.sections.section import Parallel, Section, Walk
from develop.solid.end import End
from develop.solid.meeting import MeetingEnd, nearest
from develop.solid.taper_meeting import TaperMeetingEnd

__all__ = ["MitredEnd", "StandingEnd", "TouchingEnd"]

_GOLDEN = 0.5 * (np.sqrt(5.0) - 1.0)
_BISECTIONS = 60
_STEPS = 45
_COARSE = 181
_SAMPLES = 720
_HALVINGS = 40
_LOOSE = 1e-12
_ROUNDS = 14
# Less than this [rad] out of square is square, but for rounding.
_SQUARE = 1e-12
# A plane that faces the branch by less than this is seen edge-on.
_EDGE_ON = 1e-4
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
        """Height of the edge, and the place of what touches from the given surface, (n,) [mm], of a walk."""

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

        found = [self._corners]
        # Between the two corners a place that touches may run from the one to the other in no time, yet
        # turn the edge by much: both its ends are wanted.
        for corner in {self.inner, self.outer}:
            here = self.touching(u) == corner
            changes = np.flatnonzero(here[1:] != here[:-1])
            low, high, first = u[changes], u[changes + 1], here[changes]
            for _ in range(_HALVINGS if len(changes) else 0):
                middle = 0.5 * (low + high)
                same = (self.touching(middle) == corner) == first
                low, high = np.where(same, middle, low), np.where(same, high, middle)
            found.append(high)
        spots = np.sort(np.concatenate(found) % section.period)
        spots = spots[np.diff(spots, prepend=-1.0) > _APART * section.period]
        # Those of the section itself are known exactly.
        half = 0.5 * section.period
        away = np.abs((spots[:, None] - section.breaks + half) % section.period - half)
        return np.asarray(spots[(away > _APART * section.period).all(axis=1)])

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
            return np.asarray(np.linalg.norm(rates, axis=-1)[..., None])

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
    z the branch's axis, and the least of these is its height. It is convex, so that its greatest height over
    an edge is also the least, of all planes, of the greatest over the edge (minimax): one search over N finds
    the height of the whole edge and what touches. A plane is greatest over the edge's inner corner where it
    falls outward, and over the outer one where it rises.
    """

    met: MeetingEnd

    @staticmethod
    def of(met: MeetingEnd, *, inner: float, outer: float) -> StandingEnd:
        """The end of the branch that `met` is the end of, its edge's corners at inner and outer [mm]."""
        return StandingEnd(met.section, met.origin, met.spans, met.back, inner, outer, met)

    def _lines(self, phi: Array) -> tuple[Array, Array, Array]:
        """The header's straight lines for directions φ (n,) across it, in the branch's frame: points and
        directions (n, 3) [mm], and the unit normals (n, 3) along them."""
        met = self.met
        if isinstance(met, TaperMeetingEnd):
            normal = met.normals(phi)
            a, ruling = met.feet(normal)
        else:
            normal = np.stack([np.cos(phi), np.sin(phi), np.zeros_like(phi)], axis=-1)
            touch = met.header.touch(normal[:, 0], normal[:, 1])
            a = np.stack([*touch, np.zeros_like(phi)], axis=-1)
            ruling = np.broadcast_to(np.array([0.0, 0.0, 1.0]), a.shape)
        axes = met.frame.axes.T
        return (a - met.frame.origin) @ axes, ruling @ axes, normal @ axes

    @cached_property
    def _grid(self) -> tuple[Array, Array, Array]:
        """Directions φ (k,) all round or, of a straight header, from silhouette to silhouette, with unit
        normals (k, 3) and supports (k,) [mm] of the planes, in the branch's frame. The first and the last
        only bound the rest."""
        met = self.met
        if isinstance(met, TaperMeetingEnd):
            phi = met.grid[0]
            phi = np.concatenate([phi[-1:] - 2.0 * np.pi, phi, phi[:1] + 2.0 * np.pi])
        else:
            out = met.frame.axes[2, :2]
            phi = float(np.arctan2(out[1], out[0])) + 0.5 * np.pi * np.linspace(-1.0, 1.0, _COARSE)
        a, _, normal = self._lines(phi)
        return phi, normal, np.einsum("ki,ki->k", normal, a)

    def _reached(self, at: Walk) -> tuple[Array, Array]:
        shape = at.x.shape
        x, y, ex, ey = (each.ravel() for each in (at.x, at.y, at.ex, at.ey))
        given = np.stack([x, y, np.zeros_like(x)], axis=-1)
        out = np.stack([ex, ey, np.zeros_like(x)], axis=-1)
        phis, normals, supports = self._grid
        leans, seen = out @ normals.T, normals[:, 2] > 0.0
        rest = supports - given @ normals.T + np.maximum(-self.inner * leans, -self.outer * leans)
        rest = np.where(seen, rest / np.where(seen, normals[:, 2], 1.0), np.inf)
        i = 1 + np.argmin(rest[:, 1:-1], axis=1)
        middle, low, high = phis[i], phis[i - 1], phis[i + 1]
        # Short of the least of the planes the header's line lies on the one side of the branch's line, past
        # it on the other: of the line, of the edge's two corners, over which the plane is higher.
        phi = middle
        for _ in range(_BISECTIONS):
            a, ruling, normal = self._lines(phi)
            lean = np.einsum("ni,ni->n", normal, out)
            corner = given + np.where(lean >= 0.0, self.inner, self.outer)[:, None] * out
            gap = a - corner
            short = ruling[:, 1] * gap[:, 0] - ruling[:, 0] * gap[:, 1] < 0.0
            short = np.where(normal[:, 2] > 0.0, short, phi < middle)
            low, high = np.where(short, phi, low), np.where(short, high, phi)
            phi = 0.5 * (low + high)
        a, ruling, normal = self._lines(phi)
        lean = np.einsum("ni,ni->n", normal, out)
        place = np.where(lean < 0.0, self.outer, self.inner)
        if self.square:
            # Square to the wall, the header's side touches where its line crosses the edge, or all along.
            across = ruling[:, 1] * ex - ruling[:, 0] * ey
            level = np.abs(across) < _SQUARE * np.linalg.norm(ruling, axis=1)
            gap = a - given
            step = (ruling[:, 1] * gap[:, 0] - ruling[:, 0] * gap[:, 1]) / np.where(level, 1.0, across)
            step = np.where(level, self.inner, np.clip(step, self.inner, self.outer))
            place = np.where(np.abs(lean) < _SQUARE, step, place)
        # Along the branch's axis to the plane or, where it is seen edge-on, to where the branch's line and
        # the header's cross: of a flat side any line gives the plane.
        corner = given + place[:, None] * out
        facing = normal[:, 2] > _EDGE_ON
        on_plane = np.einsum("ni,ni->n", normal, a - corner) / np.where(facing, normal[:, 2], 1.0)
        square = np.stack([-ruling[:, 1], ruling[:, 0], np.zeros_like(x)], axis=-1)
        size = np.einsum("ni,ni->n", square, square)
        crossing = np.einsum("ni,ni->n", np.cross(a - corner, ruling), square) / size
        height = np.where(facing, on_plane, crossing)
        return height.reshape(shape), place.reshape(shape)

    def clear(self, points: Array) -> tuple[Array, Array]:
        # A point is as far outside of a convex side as of the tangent plane that it is farthest from.
        phis, normals, supports = self._grid
        i = 1 + np.argmax((points @ normals.T - supports)[:, 1:-1], axis=1)
        low, high = phis[i - 1], phis[i + 1]

        def apart(phi: Array) -> Array:
            a, _, normal = self._lines(phi)
            return np.asarray(np.einsum("ni,ni->n", normal, points - a))

        for _ in range(_STEPS):
            first, last = high - _GOLDEN * (high - low), low + _GOLDEN * (high - low)
            left = apart(first) > apart(last)
            low, high = np.where(left, low, first), np.where(left, last, high)
        phi = 0.5 * (low + high)
        return apart(phi), self._lines(phi)[2]

    def off(self, points: Array) -> Array:
        return np.abs(self.clear(points)[0])

    @property
    def _corners(self) -> Array:
        moved = [replace(self.met, section=Parallel(self.section, p)) for p in {self.inner, self.outer}]
        return np.concatenate([each.breaks for each in moved])
