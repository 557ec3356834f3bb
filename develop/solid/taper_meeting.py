"""Where a branch meets a tapered header, as an end of the branch in space; from sections alone."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import (
    DERIVATIVE,
    RUNNING,
    WEIGHTS,
    Array,
    Indices,
    Mask,
    Panels,
    inside,
    resolved,
    tail,
)
from develop.sections.section import Section
from develop.solid.frame import Frame, Rim
from develop.solid.meeting import MeetingEnd

__all__ = ["TaperMeetingEnd"]

_HALVINGS = 54
_ROOT_STEPS = 60
_STEPS = 720
_LOOSE = 1e-12
_ROUNDS = 14
_ROLLS = 40
# Planes whose normals, seen square to end A, differ by less than this [rad] are one.
_SAME = 1e-9
# A line that comes at a flatter angle to the plane than this [rad] is placed by the ruling instead.
_FLAT = 1e-3


@dataclass(frozen=True)
class _Facets:
    """Flat facets of a side: normals' angles φ (k,), unit normals (k, 3), and the points (k, 2, 3) [mm] on
    end A and on end B between which its first and its last line run."""

    phi: Array
    normal: Array
    a: Array
    b: Array


@dataclass(frozen=True)
class TaperMeetingEnd(MeetingEnd):
    """The end A of a branch where its lines enter the side between two rims.

    The side is bounded by the planes that touch both rims, one for each direction φ square to end A.
    A line out of the header leaves it at the first of these planes: that is how the joint is found.
    rim_a, rim_b: the header's ends, in its frame; header is rim A's section. outward: how far outside of
    the rims the face lies that is met [mm]; sheet: how far outside of that face the header's sheet, or the
    plate that lies on it, is developed [mm].
    """

    rim_b: Rim | None = None
    rim_a: Rim | None = None
    outward: float = 0.0

    @staticmethod
    def between(
        section: Section, rim_a: Rim, rim_b: Rim, frame: Frame, *, sheet: float = 0.0, outward: float = 0.0
    ) -> TaperMeetingEnd:
        """The end of a branch of a section, in a header between two rims."""
        flat = np.eye(3)[:, :2]
        return TaperMeetingEnd(
            section, np.zeros(3), flat, flat.T, rim_a.section, frame, sheet, False, rim_b, rim_a, outward
        )

    @property
    def _rims(self) -> tuple[Rim, Rim]:
        assert self.rim_a is not None
        assert self.rim_b is not None
        return self.rim_a, self.rim_b

    # ---- the planes that touch both rims ------------------------------------------------------

    def normals(self, phi: Array) -> Array:
        """Unit normals (n, 3) of the planes that touch both rims, square to end A at the angles φ (n,)."""
        a, b = self._rims
        x, y, _ = a.frame.axes
        return _touching(a, b, np.cos(phi)[:, None] * x + np.sin(phi)[:, None] * y)

    @cached_property
    def _facets(self) -> _Facets:
        a, b = self._rims
        normals = np.vstack([_touching(a, b, _straight(a)), _touching(b, a, _straight(b))])
        x, y, _ = a.local(normals)
        phi = np.arctan2(y, x) % (2.0 * np.pi)
        order = np.argsort(phi)
        order = order[np.diff(phi[order], prepend=-1.0) > _SAME]
        normals, phi = normals[order], phi[order]
        if len(phi) > 1 and phi[0] + 2.0 * np.pi - phi[-1] < _SAME:
            normals, phi = normals[:-1], phi[:-1]
        ends = []
        for rim in (a, b):
            nx, ny, _ = rim.local(normals)
            places = [rim.section.walk(u) for u in rim.section.parameters(nx, ny)]
            ends.append(np.stack([rim.place(at.x, at.y) for at in places], axis=1))
        return _Facets(phi, normals, ends[0], ends[1])

    @cached_property
    def grid(self) -> tuple[Array, Array, Array]:
        """Angles φ (k,), normals (k, 3) and levels (k,) of planes all round, those of facets among them."""
        even, flats = 2.0 * np.pi * (np.arange(_STEPS) + 0.5) / _STEPS, self._facets.phi
        # Those that stand for a facet stand well apart from the rest.
        apart = np.abs((even[:, None] - flats + np.pi) % (2.0 * np.pi) - np.pi) > 0.1 * np.pi / _STEPS
        phi = np.sort(np.concatenate([even[apart.all(axis=1)], flats]))
        normal = self.normals(phi)
        return phi, normal, self._level(normal)

    def _level(self, normal: Array) -> Array:
        """How far (n,) the planes of these unit normals, moved out to the face, lie from the origin."""
        return np.asarray(self._rims[0].support(normal) + self.outward)

    def feet(self, normal: Array) -> tuple[Array, Array]:
        """Points on end A, moved out to the face, and rulings to end B, (n, 3) each."""
        a, b = (rim.touch(normal) for rim in self._rims)
        return a + self.outward * normal, b - a

    # ---- the joint -----------------------------------------------------------------------------

    def _met(self, u: Array) -> tuple[Array, Array, Array]:
        """Angle φ (n,), unit normal and point of the joint (n, 3), in the header's frame."""
        axes, d = self.frame.axes, self.frame.axes[2]
        at = self.section.walk(u)
        origins = at.x[:, None] * axes[0] + at.y[:, None] * axes[1] + self.frame.origin
        phis, normals, levels = self.grid
        against = normals @ d
        seen = against > 0.0
        lift = np.where(seen, (levels - origins @ normals.T) / np.where(seen, against, 1.0), np.inf)
        i = np.argmin(lift, axis=1)
        middle = phis[i]
        low = np.where(i > 0, phis[i - 1], phis[-1] - 2.0 * np.pi)
        high = np.where(i < len(phis) - 1, phis[(i + 1) % len(phis)], phis[0] + 2.0 * np.pi)
        # How soon the line reaches the plane falls up to the joint and rises from there on.
        phi = middle
        for _ in range(_HALVINGS):
            up = self._falls(phi, origins, middle)
            low, high = np.where(up, phi, low), np.where(up, high, phi)
            phi = 0.5 * (low + high)
        normal = self.normals(phi)
        foot, ruling = self.feet(normal)
        against = normal @ d
        flat = against < _FLAT
        lift = (self._level(normal) - np.einsum("ni,ni->n", origins, normal)) / np.where(flat, 1.0, against)
        square = np.cross(d, ruling)
        share = np.einsum("ni,ni->n", np.cross(foot - origins, d), square) / np.einsum(
            "ni,ni->n", square, square
        )
        points = np.where(flat[:, None], foot + share[:, None] * ruling, origins + lift[:, None] * d)
        return phi, normal, points

    def _falls(self, phi: Array, origins: Array, middle: Array) -> Mask:
        """Whether a step on along φ brings the plane nearer to the line's origin (n,)."""
        d = self.frame.axes[2]
        normal = self.normals(phi)
        foot, ruling = self.feet(normal)
        against = normal @ d
        seen = against > 0.0
        lift = (self._level(normal) - np.einsum("ni,ni->n", origins, normal)) / np.where(seen, against, 1.0)
        gap = foot - origins - lift[:, None] * d
        # The plane turns about its ruling: its normal moves along R × N.
        falls = np.einsum("ni,ni->n", np.cross(ruling, normal), gap) < 0.0
        return np.where(seen, falls, phi < middle)

    def on_header(self, u: Array) -> tuple[Array, Array]:
        phi, _, points = self._met(u)
        return phi, points

    @property
    def breaks(self) -> Array:
        """Parameters of the branch's section where it may graze the header's silhouettes, and where its
        lines meet the edges of the header's facets."""
        d, section = self.frame.axes[2], self.section
        phis, normals, _ = self.grid
        seen = normals @ d > 0.0
        (after,) = np.nonzero(seen != np.roll(seen, 1))
        low, high = np.where(after > 0, phis[after - 1], phis[-1] - 2.0 * np.pi), phis[after]
        rising = seen[after]
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + high)
            beyond = (self.normals(middle) @ d > 0.0) == rising
            low, high = np.where(beyond, low, middle), np.where(beyond, middle, high)
        found = [np.zeros(0)]
        for normal in self.normals(0.5 * (low + high)) @ self.frame.axes[:2].T:
            found += [*section.parameters(normal[:1], normal[1:])]
        facets = self._facets
        lift = self.outward * facets.normal[:, None]
        for start, end in zip(
            (facets.a + lift).reshape(-1, 3), (facets.b + lift).reshape(-1, 3), strict=True
        ):
            # The plane through that edge along the branch's lines cuts the branch's section.
            across = np.cross(end - start, d)
            flat = self.frame.axes[:2] @ across
            size = float(np.hypot(*flat))
            n, reach = flat / size, np.array([across @ (start - self.frame.origin) / size])
            if -section.support(*-n) < reach[0] < section.support(*n):
                found += [section.at_side(n[0], n[1], reach), section.at_side(-n[0], -n[1], -reach)]
        return np.concatenate(found)

    @cached_property
    def _panels(self) -> tuple[Panels, Array]:
        """Panels of the branch's parameter that resolve the joint and its normals, with its speed."""
        section = self.section
        start, period = section.breaks[0], section.period
        ends = np.sort(
            np.concatenate([section.breaks[:-1] - start, (self.breaks - start) % period, [period]])
        )
        ends = ends[np.diff(ends, prepend=-1.0) > 1e-9 * period]
        ends[-1] = period

        def values(panels: Panels) -> Array:
            _, normal, points = self._met(panels.nodes.ravel())
            shape = (*panels.nodes.shape, 3)
            rates = (DERIVATIVE @ points.reshape(shape)) / panels.half[:, None, None]
            speed = np.linalg.norm(rates, axis=-1, keepdims=True)
            return np.concatenate([speed, normal.reshape(shape)], axis=-1)

        def loose(panels: Panels, found: Array) -> Mask:
            unresolved = tail(found)
            unresolved[:, 0] *= panels.half / section.girth
            return np.asarray((unresolved > _LOOSE).any(axis=1))

        return resolved(Panels.between(start + ends), values, loose, rounds=_ROUNDS)

    @property
    def opened(self) -> float:
        """Area [mm²] that the joint encloses on the header's developed sheet.

        The side is rolled on a table along the joint, without slipping or twisting: a direction E in the
        sheet then changes only by E' = −(E · N') N, and the joint's path on the table encloses the area
        (Green). Over a sharp edge the sheet turns about the edge.
        """
        panels, _ = self._panels
        _, normals, points = self._met(panels.nodes.ravel())
        shape = (*panels.nodes.shape, 3)
        normals = normals.reshape(shape)
        moved = points.reshape(shape) + self.sheet * normals
        before, after = (inside(np.array([x]))[0] for x in (-1.0, 1.0))
        place, area = np.zeros(2), 0.0
        last = before @ normals[0]
        along = np.cross(last, np.eye(3)[np.argmin(np.abs(last))])
        for normal, point, half in zip(normals, moved, panels.half, strict=True):
            first = before @ normal
            step, along = _over(last, first, along, self.sheet)
            area += 0.5 * float(place[0] * step[1] - place[1] * step[0])
            place = place + step
            rate, turn = DERIVATIVE @ point / half, DERIVATIVE @ normal / half
            rolled = np.broadcast_to(along, normal.shape)
            for _ in range(_ROLLS):
                change = -np.einsum("ki,ki->k", rolled, turn)[:, None] * normal
                again = along + half * (RUNNING @ change)
                settled = float(np.max(np.abs(again - rolled))) < 1e-15
                rolled = again
                if settled:
                    break
            beside = np.cross(normal, rolled)
            flat = np.stack([np.einsum("ki,ki->k", rate, each) for each in (rolled, beside)], axis=-1)
            path = place + half * (RUNNING @ flat)
            area += 0.5 * half * float(WEIGHTS @ (path[:, 0] * flat[:, 1] - path[:, 1] * flat[:, 0]))
            place = place + half * (WEIGHTS @ flat)
            along = along + half * (WEIGHTS @ change)
            last = after @ normal
        step, _ = _over(last, before @ normals[0], along, self.sheet)
        return area + 0.5 * float(place[0] * step[1] - place[1] * step[0])


def _over(last: Array, first: Array, along: Array, distance: float) -> tuple[Array, Array]:
    """Over an edge where the normal turns from one unit vector (3,) to another: the step (2,) [mm] on the
    table of a sheet at a distance outside of it, and what becomes of a direction (3,) in the sheet."""
    across = first - (first @ last) * last
    size = float(np.linalg.norm(across))
    ahead = across / size if size > 0.0 else across
    turn = float(np.arctan2(size, first @ last))
    part = float(along @ ahead)
    step = distance * turn * np.array([part, float(np.cross(last, along) @ ahead)])
    # The part across the edge turns with the sheet; that along it stays.
    turned = along + part * (np.cos(turn) * ahead - np.sin(turn) * last - ahead)
    turned = turned - (turned @ first) * first
    return step, turned / np.linalg.norm(turned)


def _straight(rim: Rim) -> Array:
    """Normals (k, 3), in the rim's own plane, of its straight sides and of where it is nearly straight."""
    section = rim.section
    at = section.walk(np.append(0.5 * (section.breaks[1:] + section.breaks[:-1]), section.loose_spots))
    flat: Indices = np.flatnonzero((at.dphi == 0.0) & (at.ds > 0.0))
    x, y, _ = rim.frame.axes
    return np.asarray(at.ex[flat, None] * x + at.ey[flat, None] * y)


def _touching(on: Rim, other: Rim, e: Array) -> Array:
    """Unit normals (n, 3) of planes that touch both rims, cos ψ e + sin ψ n for e (n, 3) in the one's plane.

    As the plane turns about the one rim, the other lies outside of it, then inside: by supports alone
    and regula falsi as Illinois has it.
    """
    n = on.frame.normal
    level, height = on.support(e), float(on.frame.origin @ n)
    above = 1.0 if float((other.frame.origin - on.frame.origin) @ n) > 0.0 else -1.0

    def beyond(lean: Array) -> Array:
        c, s = np.cos(lean), np.sin(lean)
        return np.asarray(above * (other.support(c[:, None] * e + s[:, None] * n) - c * level - s * height))

    low, high = np.full(len(e), -0.5 * np.pi), np.full(len(e), 0.5 * np.pi)
    if above < 0.0:
        low, high = high, low
    f_low, f_high = beyond(low), beyond(high)
    lean = high
    for _ in range(_ROOT_STEPS):
        change = f_high - f_low
        lean = np.where(
            change != 0.0, high - f_high * (high - low) / np.where(change != 0.0, change, 1.0), high
        )
        f = beyond(lean)
        crossed = f * f_high < 0.0
        f_low = np.where(crossed, f_high, 0.5 * f_low)
        low = np.where(crossed, high, low)
        moved = np.abs(lean - high) * (f != 0.0)
        high, f_high = lean, f
        if np.max(moved, initial=0.0) <= 2e-16:
            break
    return np.asarray(np.cos(lean)[:, None] * e + np.sin(lean)[:, None] * n)
