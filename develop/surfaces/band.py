"""The band: the developable surface that joins two plane convex rims placed anyhow in space.

Each rim lies wholly on one side of the other's plane; the surface is then the side of their
convex hull. Its straight lines, the rulings, join points with coplanar tangents: along each, one
plane touches both rims. Published condition: det(a', b', b - a) = 0 ("stationary bisecant").
A section of no size is a point, and the band a cone: no code of its own.

Notation: N the outward normal along a ruling, e = (cos φ, sin φ) the normal of a rim in its own
plane with normal n, N = cos ψ e + sin ψ n, T = the rim's tangent, W = N × T, R = b − a.
"""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, fields
from functools import cached_property

import numpy as np

from develop.errors import Refusal
from develop.quadrature import (
    DERIVATIVE,
    WEIGHTS,
    Array,
    Indices,
    Mask,
    Panels,
    between,
    resolved,
    running,
    tail,
)
from develop.sections.section import Section
from develop.solid.frame import Rim
from develop.surfaces.sheet import Lines, Place
from develop.surfaces.touching import Contact, Rulings, rulings_between
from develop.surfaces.trim import Plane

__all__ = ["Band", "BandSheet", "Course", "Swept"]

_ROUNDS = 24
_SAME = 1e-9
# Parameters that differ by less than this part of a turn differ by rounding.
_ROUNDING = 1e-13
_FARTHER = 4.0
# Normals that differ by less than this [rad] are one normal and its rounding.
_ALIKE = 1e-12
# An edge that moves less than this on a panel, in parts of the piece, stands.
_STANDS = 1e-12
# Nearest that a rim may come to the other's plane, in parts of the larger size: closer, a ruling
# has no length left to be marked out.
_CLEAR = 1e-6


@dataclass(frozen=True)
class Course:
    """The stretches that the walk round a band is made of, in the sections' parameters; arrays (m,).

    Each runs from start to end of the parameter of rim A or, where not on_a, of rim B; low and high
    are the other rim's parameters at its ends. On a facet both rims run along parallel straight
    sides and the plane stands, so the other parameter goes in proportion.
    """

    on_a: Mask
    facet: Mask
    start: Array
    end: Array
    low: Array
    high: Array


@dataclass(frozen=True)
class Swept:
    """Rulings at places of a course and how they move along it; arrays (n, 3).

    point: on end A [mm]. ruling: from there to end B [mm]. normal: outward, of unit length.
    The rates are by the parameter that is walked.
    """

    point: Array
    ruling: Array
    normal: Array
    point_rate: Array
    ruling_rate: Array
    normal_rate: Array


@dataclass(frozen=True)
class Band:
    """The side of the convex hull of two rims, the sheet lying `distance` [mm] outside of it.

    cut_a, cut_b: where an end of the sheet is not its rim but a cut across the rulings.
    level: the sheet's edges lie in the planes of its ends, or of its cuts; else the plate is cut square
    to itself there, through the rim. A point has no plane, and is never level.
    Raises Refusal where a rim reaches through the other's plane.
    """

    rim_a: Rim
    rim_b: Rim
    distance: float = 0.0
    cut_a: Plane | None = None
    cut_b: Plane | None = None
    level: bool = False

    def __post_init__(self) -> None:
        size = max(r.section.width + r.section.height for r in (self.rim_a, self.rim_b))
        low_b = -self.rim_b.highest_over(self.rim_a.frame, sign=-1.0)
        low_a = -self.rim_a.highest_over(self.rim_b.frame, sign=1.0)
        if min(low_a, low_b) <= _CLEAR * size:
            worse, other, by = ("B", "A", low_b) if low_b <= low_a else ("A", "B", low_a)
            raise Refusal(
                field="length",
                given=f"end {worse} reaches {max(-by, 0.0):.4g} mm through the plane of end {other}",
                allowed=f"ends that lie each on one side of the other: at least "
                f"{_CLEAR * size - by:.4g} mm farther apart there",
            )

    # ---- the rulings ----------------------------------------------------------------------

    def _rulings(
        self,
        walking_a: bool,
        u: Array,
        reach: tuple[Array, Array] | None = None,
        fixed: Array | None = None,
    ) -> Rulings:
        return rulings_between(self.rim_a, self.rim_b, walking_a, u, reach, fixed)

    def rulings(self, u: Array) -> tuple[Array, Array]:
        """Points on end A and the rulings to end B, (n, 3) each, at end A's parameters u (n,)."""
        r = self._rulings(True, u)
        return r.a.point, r.ruling

    def normals(self, u: Array) -> Array:
        """Outward unit normals (n, 3) along the rulings from end A's parameters u (n,)."""
        r = self._rulings(True, u)
        return np.cross(r.a.tangent, r.a.across)

    def swept(self, course: Course, origin: Indices, u: Array) -> Swept:
        """The rulings at the parameters u (n,) of the stretches `origin` (n,) of a course."""
        parts = []
        for which, walking_a, r in self._on_course(course, origin, u):
            turn = r.a.cos_psi * r.dphi_a
            ds_b = r.ds_b
            if walking_a and course.facet[origin[which][0]]:
                # On a facet end B's foot goes along in proportion.
                i = origin[which]
                pace = (course.high[i] - course.low[i]) / (course.end[i] - course.start[i])
                along = course.low[i] + pace * (u[which] - course.start[i])
                ds_b = self.rim_b.section.walk(along).ds * pace
            # Where a curve is flat its foot may run off at no end of speed.
            ds_a, ds_b = (np.where(np.isfinite(ds), ds, 0.0) for ds in (r.ds_a, ds_b))
            tangent, across = r.a.tangent, r.a.across
            point_rate = ds_a[:, None] * tangent
            part = Swept(
                point=r.a.point,
                ruling=r.ruling,
                normal=np.stack(
                    [
                        tangent[:, 1] * across[:, 2] - tangent[:, 2] * across[:, 1],
                        tangent[:, 2] * across[:, 0] - tangent[:, 0] * across[:, 2],
                        tangent[:, 0] * across[:, 1] - tangent[:, 1] * across[:, 0],
                    ],
                    axis=-1,
                ),
                point_rate=point_rate,
                ruling_rate=ds_b[:, None] * r.b.tangent - point_rate,
                # Square to the ruling, in the plane that touches.
                normal_rate=turn[:, None] * (tangent - (r.along / r.over)[:, None] * across),
            )
            parts.append((which, part))
        if len(parts) == 1:
            return parts[0][1]
        index = np.argsort(np.concatenate([np.flatnonzero(which) for which, _ in parts]))
        return Swept(
            *(np.concatenate([getattr(part, f.name) for _, part in parts])[index] for f in fields(Swept))
        )

    def lengths(self, u: Array) -> Array:
        """Lengths (n,) [mm] of the rulings through the points u (n,) of end A's section, between the cuts."""
        r = self._rulings(True, u)
        low, high = self._shares(r)
        return np.asarray((high - low) * r.length)

    def _shares(self, r: Rulings) -> tuple[Array, Array]:
        """Where the sheet's two ends lie on rulings, in parts of R, (n,) each.

        Moved out by d N, a ruling of a level end is d sin ψ off the plane of its rim, and reaches it
        −d sin ψ / (R·n) farther on.
        """
        low, high = np.zeros(len(r.length)), np.ones(len(r.length))
        level_a, level_b = self.levels
        start = r.a.point
        if level_a or level_b:
            start = start + self.distance * np.cross(r.a.tangent, r.a.across)
        if self.cut_a:
            low = self.cut_a.meet(start if level_a else r.a.point, r.ruling)
        elif level_a:
            low = -self.distance * r.a.sin_psi / (r.ruling @ self.rim_a.frame.normal)
        if self.cut_b:
            high = self.cut_b.meet(start if level_b else r.a.point, r.ruling)
        elif level_b:
            high = 1.0 - self.distance * r.b.sin_psi / (r.ruling @ self.rim_b.frame.normal)
        return low, high

    @property
    def levels(self) -> tuple[bool, bool]:
        """Which of the two ends have edges that leave their rim to be level."""
        moved = self.level and self.distance != 0.0
        return tuple(
            moved and bool(cut or rim.section.girth)
            for cut, rim in ((self.cut_a, self.rim_a), (self.cut_b, self.rim_b))
        )  # type: ignore[return-value]

    @property
    def trimmed(self) -> tuple[bool, bool]:
        """Which of the two ends of the sheet are found along the rulings, not from the rim."""
        level_a, level_b = self.levels
        return bool(self.cut_a) or level_a, bool(self.cut_b) or level_b

    def radii(self, u: Array) -> Array:
        """Roll radii (n, 2) [mm] at both ends of the rulings through u (n,) of end A's section.

        On the surface that carries the rims: ρ (R·W)² / (cos ψ |R|²), by Euler's formula for the
        normal curvature square to a ruling; from rim to rim they change in proportion.
        """
        r = self._rulings(True, u)
        radii = self._radii(r)
        if not any(self.trimmed):
            return radii
        return np.stack([_part_way(radii, share) for share in self._shares(r)], axis=-1)

    def _radii(self, r: Rulings) -> Array:
        rows = []
        for rim, contact, over in ((self.rim_a, r.a, r.over), (self.rim_b, r.b, r.over_b)):
            plane = rim.section.radius(contact.normal_x, contact.normal_y)
            rows.append(plane * over**2 / (contact.cos_psi * r.length**2))
        return np.stack(rows, axis=-1)

    def foot(self, u: Array) -> Array:
        """Parameters (n,) of end B's section on the rulings through u (n,) of end A's."""
        return self._foot(True, u)

    def _foot(self, walking_a: bool, u: Array) -> Array:
        """The other rim's parameter (n,) on the rulings through u (n,) of the walking rim."""
        rulings = self._rulings(walking_a, u)
        other, c = (self.rim_b, rulings.b) if walking_a else (self.rim_a, rulings.a)
        return other.section.parameter(c.normal_x, c.normal_y)

    # ---- the flat map -------------------------------------------------------------------

    def _on_course(self, course: Course, origin: Indices, u: Array) -> Iterator[tuple[Mask, bool, Rulings]]:
        """The rulings at u (n,) of the stretches `origin` (n,), in up to three groups."""
        on_a, facet = course.on_a[origin], course.facet[origin]
        for walking_a, which in ((True, on_a & ~facet), (False, ~on_a), (True, facet)):
            if not which.any():
                continue
            i, mine = origin[which], u[which]
            low, high = course.low[i], course.high[i]
            if walking_a and facet[which][0]:
                share = (mine - course.start[i]) / (course.end[i] - course.start[i])
                yield which, True, self._rulings(True, mine, fixed=low + share * (high - low))
            else:
                yield which, walking_a, self._rulings(walking_a, mine, (low, high))

    def _rates(self, course: Course, panels: Panels) -> Array:
        """At each panel's nodes (m, k, 6): rates of θ, turn, edge along T and W; then R·T, R·W.

        Of a cut band (m, k, 8): also where the sheet's two ends lie, in parts of R.
        """
        nodes = panels.nodes
        origin = np.repeat(panels.origin, nodes.shape[1])
        cut = any(self.trimmed)
        rates = np.empty((nodes.size, 8 if cut else 6))
        for which, _, r in self._on_course(course, origin, nodes.ravel()):
            turn = r.a.cos_psi * r.dphi_a
            slant = turn / r.over
            rates[which] = np.stack(
                [
                    r.dphi_a * r.a.sin_psi,
                    slant * r.length,
                    r.ds_a + self.distance * turn,
                    -self.distance * slant * r.along,
                    r.along,
                    r.over,
                    *(self._shares(r) if cut else ()),
                ],
                axis=-1,
            )
        return rates.reshape(*nodes.shape, -1)

    def sheet(self, seam: float, *, tolerance: float = 1e-10) -> BandSheet:
        """The band slit along the ruling at parameter `seam` of end A's section, laid flat.

        tolerance: what the unresolved part of each panel may move a point [mm].
        """
        course = self.course(seam)
        size = max(r.section.width + r.section.height for r in (self.rim_a, self.rim_b))
        size += float(np.linalg.norm(self.rim_b.frame.origin - self.rim_a.frame.origin))
        allowed = max(tolerance, 4e-14 * size)

        def loose(panels: Panels, rates: Array) -> Mask:
            half = panels.half[:, None]
            # Angles count by how far they swing the whole piece; R itself is used unintegrated, and
            # parts of it count by how long it can be.
            one = np.ones_like(half)
            columns = [size * half, size * half, half, half, one, one, size * one, size * one]
            scale = np.concatenate(columns[: rates.shape[2]], axis=1)
            noise = 4e-14 * np.max(np.abs(rates), axis=1) * scale
            return np.asarray((tail(rates) * scale > np.maximum(allowed, noise)).any(axis=1))

        def rates(panels: Panels) -> Array:
            return self._rates(course, panels)

        first = Panels(course.start, course.end, np.arange(len(course.start)))
        return BandSheet(self, course, *resolved(first, rates, loose, rounds=_ROUNDS))

    def course(self, seam: float) -> Course:
        """The walk once round from the seam, its stretches ending at the breaks of both rims."""
        a, b = self.rim_a.section, self.rim_b.section
        u_a, u_b = np.append(seam, a.breaks[:-1]), b.breaks[:-1]
        by_a, by_b = self._rulings(True, u_a), self._rulings(False, u_b)
        u_a, paired_b = _paired(a, by_a.a, u_a, b, by_a.b)
        u_b, paired_a = _paired(b, by_b.b, u_b, a, by_b.a)
        ends_a, ends_b = np.concatenate([u_a, paired_a]), np.concatenate([paired_b, u_b])
        start_b = ends_b[0]
        past_a, past_b = _past(ends_a, seam, a.period), _past(ends_b, start_b, b.period)
        # What lies at the seam but for rounding lies at the seam.
        past_a, past_b = (
            np.where(past < _ROUNDING * each.period, 0.0, past) for past, each in ((past_a, a), (past_b, b))
        )
        # Where one rim stands at the seam, the other's place tells whether the turn begins or ends.
        past_a, past_b = (
            np.where((past_a == 0.0) & (past_b > 0.5 * b.period), a.period, past_a),
            np.where((past_b == 0.0) & (past_a > 0.5 * a.period), b.period, past_b),
        )
        # A break of one rim that falls on the seam or on a break of the other is one end, not two.
        share = past_a / a.period + past_b / b.period
        index = np.argsort(share, kind="stable")
        index = index[(np.diff(share[index], prepend=-1.0) > _SAME) & (share[index] < 2.0 - _SAME)]
        ends_a = np.append(past_a[index], a.period) + seam
        ends_b = np.append(past_b[index], b.period) + start_b
        middle_a, middle_b = (0.5 * (ends[1:] + ends[:-1]) for ends in (ends_a, ends_b))
        moves_a, moves_b = np.diff(ends_a) > _SAME, np.diff(ends_b) > _SAME
        stands_a, stands_b = a.walk(middle_a).dphi == 0.0, b.walk(middle_b).dphi == 0.0
        facet = moves_a & moves_b & stands_a & stands_b
        # Walked from the rim whose contact moves farther, the other moves smoothly along. Where it
        # makes little difference end A is walked throughout, which is one pass instead of two.
        farther = _FARTHER * np.diff(a.arc(ends_a)) >= np.diff(b.arc(ends_b))
        if bool(len(a.loose_spots)) != bool(len(b.loose_spots)):
            # Near such a spot only its own rim can be walked smoothly.
            farther = np.full(len(farther), bool(len(a.loose_spots)))
        on_a = facet | (moves_a & (farther | ~moves_b))
        return Course(
            on_a,
            facet,
            np.where(on_a, ends_a[:-1], ends_b[:-1]),
            np.where(on_a, ends_a[1:], ends_b[1:]),
            np.where(on_a, ends_b[:-1], ends_a[:-1]),
            np.where(on_a, ends_b[1:], ends_a[1:]),
        )


def _paired(mine: Section, contact: Contact, u: Array, yours: Section, other: Contact) -> tuple[Array, Array]:
    """The other rim's parameters (n,) to those of one rim (n,), in proportion along parallel sides."""
    low, high = yours.parameters(other.normal_x, other.normal_y)
    first, last = mine.parameters(contact.normal_x, contact.normal_y)
    past = (u - first) % mine.period
    past = np.where(past > mine.period - _SAME, 0.0, past)
    length = last - first
    spots = yours.loose_spots
    if len(spots):
        # Where a curve turns hardly or at once, a straight side's normal with its rounding tells little.
        at = yours.walk(spots)
        nx, ny = other.normal_x[:, None], other.normal_y[:, None]
        same = (np.abs(nx * at.ey - ny * at.ex) < _ALIKE) & (nx * at.ex + ny * at.ey > 0.0)
        same &= (length > 0.0)[:, None]
        low, high = (np.where(same.any(axis=1), spots[np.argmax(same, axis=1)], each) for each in (low, high))
    share = np.where(length > 0.0, past / np.where(length > 0.0, length, 1.0), 0.0)
    spots = mine.loose_spots
    if len(spots):
        # So close to such a spot that the normals are alike, its side tells which end of a straight
        # side of the other comes with it.
        beyond = (u[:, None] - spots + 0.5 * mine.period) % mine.period - 0.5 * mine.period
        nearest = beyond[np.arange(len(u)), np.argmin(np.abs(beyond), axis=1)]
        share = np.where((length == 0.0) & (nearest > _SAME), 1.0, share)
    return u, low + np.clip(share, 0.0, 1.0) * (high - low)


def _part_way(radii: Array, share: Array) -> Array:
    """Roll radii (n,) part of the way along rulings, from those at both rims (n, 2)."""
    flat = np.asarray(~np.isfinite(radii).all(axis=1))
    first, last = np.where(flat[:, None], 0.0, radii).T
    return np.where(flat, np.inf, first + share * (last - first))


def _past(u: Array, start: float, period: float) -> Array:
    """How far u (n,) lies past the start in one turn, a whole turn counting as none."""
    past = (u - start) % period
    return np.where(past > period * (1.0 - _ROUNDING), 0.0, past)


class BandSheet:
    """A band laid flat; see `Sheet`. Turned so that the edge at end A lies level on the whole.

    back: whether the edge at end A, and at end B, runs back over itself, as a level one may.

    Unrolled by θ' = φ' sin ψ (the geodesic curvature of end A's edge) and P' along T and W.
    """

    def __init__(self, band: Band, course: Course, panels: Panels, rates: Array) -> None:
        self.band = band
        self._course, self._panels = course, panels
        half = panels.half
        legs = rates[..., 4:6]
        angles, angle_ends = running(rates[..., :2], half)
        lean = -0.5 * angle_ends[-1, 0]
        angles[..., 0] += lean
        angle_ends[:, 0] += lean
        theta = angles[:, 1:, 0]
        c, s = np.cos(theta), np.sin(theta)
        step = np.stack(
            [
                rates[..., 2] * c - rates[..., 3] * s,
                rates[..., 2] * s + rates[..., 3] * c,
                np.sqrt(rates[..., 2] ** 2 + rates[..., 3] ** 2),
            ],
            axis=-1,
        )
        path, path_ends = running(step, half)
        p = path[:, 1:, :2]
        q = np.stack(
            [
                p[..., 0] + legs[..., 0] * c - legs[..., 1] * s,
                p[..., 1] + legs[..., 0] * s + legs[..., 1] * c,
            ],
            axis=-1,
        )
        p_step = step[..., :2]
        trimmed_a, trimmed_b = band.trimmed
        if trimmed_a or trimmed_b:
            low, high = rates[..., 6:7], rates[..., 7:8]
            p, q = p + low * (q - p), p + high * (q - p)
        # The speed along an edge is taken from the flat map itself, not from the end's section, so
        # that its length proves the map.
        if trimmed_a:
            p_step = (DERIVATIVE @ p) / half[:, None, None]
            path[..., 2], path_ends[:, 2] = running(np.sqrt((p_step**2).sum(axis=-1)), half)
        q_step = (DERIVATIVE @ q) / half[:, None, None]
        q_speed = np.sqrt((q_step**2).sum(axis=-1))
        # Where the edge stands, its speed is rounding that the derivative amplifies.
        apex = band.rim_b.section.girth == 0.0 and band.distance == 0.0 and not band.cut_b
        stands = q_speed.max(axis=1) * half <= _STANDS * (np.abs(p).max() + np.abs(q).max())
        q_speed[stands | apex] = 0.0
        speed, speed_ends = running(q_speed, half)
        self._table = np.concatenate([angles, path, speed[..., None]], axis=-1)
        self.edge_a = float(path_ends[-1, 2])
        self.edge_b = float(speed_ends[-1])
        self.turn = float(angle_ends[-1, 0] - angle_ends[0, 0])

        def swept(point: Array, rate: Array) -> float:
            cross = point[..., 0] * rate[..., 1] - point[..., 1] * rate[..., 0]
            return float(np.sum(half * (cross @ WEIGHTS)))

        # Beyond a point from which lines of a flat face fan out they cross, and the edge runs back.
        leg = q - p

        def back(rate: Array) -> bool:
            over = rate[..., 0] * leg[..., 1] - rate[..., 1] * leg[..., 0]
            size = np.sqrt((rate**2).sum(axis=-1) * (leg**2).sum(axis=-1))
            moves = size * half[:, None] > _STANDS * size.max()
            return bool((moves & (over < -_SAME * size)).any())

        self.back = back(p_step) and band.levels[0], back(q_step) and band.levels[1]
        self.at_ends = self.lines(self.ends)
        a0, a1, b0, b1 = *self.at_ends.a[[0, -1]], *self.at_ends.b[[0, -1]]
        seams = a1[0] * b1[1] - a1[1] * b1[0] - (a0[0] * b0[1] - a0[1] * b0[0])
        self.area = 0.5 * (swept(p, p_step) - swept(q, q_step) + float(seams))

    @property
    def ends(self) -> Place:
        m = len(self._panels.start)
        return Place(np.append(np.arange(m), m - 1), np.append(np.full(m, -1.0), 1.0))

    def lines(self, place: Place) -> Lines:
        panels = self._panels
        u = panels.start[place.panel] + panels.half[place.panel] * (place.x + 1.0)
        # At a panel's end the section is asked on the panel's own side: beyond, a corner may begin.
        low, high = np.nextafter(panels.start, np.inf), np.nextafter(panels.end, -np.inf)
        u = np.clip(u, low[place.panel], high[place.panel])
        table = np.einsum("nk,nkc->nc", between(place.x), self._table[place.panel])
        course, origin = self._course, panels.origin[place.panel]
        groups = list(self.band._on_course(course, origin, u))
        parts = []
        for which, on_a, r in groups:
            u_a = u[which]
            if not on_a:
                # Where a straight side begins or ends, the stretch tells which.
                low, high = course.low[origin[which]], course.high[origin[which]]
                u_a = self.band.rim_a.section.within(r.a.normal_x, r.a.normal_y, low, high)
            parts.append(self._lines(u_a, table[which], r))
        if len(parts) == 1:
            return parts[0]
        index = np.argsort(np.concatenate([np.flatnonzero(which) for which, _, _ in groups]))
        return Lines(
            *(np.concatenate([getattr(part, f.name) for part in parts])[index] for f in fields(Lines))
        )

    def _lines(self, u_a: Array, table: Array, r: Rulings) -> Lines:
        band, d = self.band, self.band.distance
        a, b = r.a, r.b
        theta = table[:, 0]
        c, s = np.cos(theta), np.sin(theta)

        def flat(along: Array, over: Array) -> Array:
            return np.stack([along * c - over * s, along * s + over * c], axis=-1)

        p, leg = table[:, 2:4], flat(r.along, r.over)
        radii = band._radii(r)
        turn = a.cos_psi * r.dphi_a
        ends = []
        square_b = tuple(np.einsum("ni,ni->n", b.tangent, v) for v in (a.tangent, a.across))
        shares = band._shares(r)
        for i, (cut, rim, tangent) in enumerate(
            (
                (band.cut_a, band.rim_a, (np.ones_like(c), np.zeros_like(c))),
                (band.cut_b, band.rim_b, square_b),
            )
        ):
            at, radius, level = shares[i], radii[:, i], band.levels[i]
            if band.trimmed[i]:
                radius = _part_way(radii, at)
                points = a.point + at[:, None] * r.ruling
                normal = cut.normal(points) if cut else np.broadcast_to(rim.frame.normal, points.shape)
                # The joint runs along N × n; its part to the right of the ruling must be positive.
                t, w = (
                    -np.einsum("ni,ni->n", normal, a.across),
                    np.einsum("ni,ni->n", normal, a.tangent),
                )
                tangent = t, w
            t, w = tangent
            right = (t * r.over - w * r.along) / r.length
            t, w = (np.where(right < 0.0, -each, each) for each in (t, w))
            straight = _unit(flat(t, w), flat(np.ones_like(c), np.zeros_like(c)))
            if d != 0.0 and not level:
                # The edge goes on across the rulings and, as the sheet leans more or less, with d N'. Where
                # it stands, or a curve is flat, the tangent found before is kept.
                with np.errstate(invalid="ignore"):
                    across = (1.0 - at) * r.ds_a * r.over + at * r.ds_b * r.over_b
                    size = across / (r.length * np.abs(np.where(right == 0.0, np.inf, right)))
                    moved = flat(size * t + d * turn, size * w - d * turn * r.along / r.over)
                straight = _unit(moved, straight)
            ends.append((p + at[:, None] * leg, straight, radius + d, at))
        (end_a, tangent_a, radius_a, low), (end_b, tangent_b, radius_b, high) = ends
        return Lines(
            a=end_a,
            b=end_b,
            tangent_a=tangent_a,
            tangent_b=tangent_b,
            arc_a=table[:, 4],
            arc_b=table[:, 5],
            turn=table[:, 1],
            radius_a=radius_a,
            radius_b=radius_b,
            u_a=u_a,
            length=(high - low) * r.length,
        )

    def parameters(self, place: Place) -> tuple[Array, Array]:
        panels, course, band = self._panels, self._course, self.band
        origin = panels.origin[place.panel]
        mine = panels.start[place.panel] + panels.half[place.panel] * (place.x + 1.0)
        mine = np.where(place.x == 1.0, panels.end[place.panel], mine)
        low, high, on_a = course.low[origin], course.high[origin], course.on_a[origin]
        yours = np.empty_like(mine)
        for which, walking_a, r in band._on_course(course, origin, mine):
            rim, c = (band.rim_b, r.b) if walking_a else (band.rim_a, r.a)
            yours[which] = rim.section.within(c.normal_x, c.normal_y, low[which], high[which])
        share = (mine - course.start[origin]) / (course.end[origin] - course.start[origin])
        yours = np.where(course.facet[origin], low + share * (high - low), yours)
        # Stretches end exactly where the next begins.
        yours = np.where(mine == course.start[origin], low, np.where(mine == course.end[origin], high, yours))
        return np.where(on_a, mine, yours), np.where(on_a, yours, mine)

    @cached_property
    def _spans(self) -> tuple[Array, Array]:
        """Parameters of both rims at the panels' ends, (m + 1,) each, growing from the seam."""
        return self.parameters(self.ends)

    @property
    def seam_b(self) -> float:
        """Parameter of end B's section where the seam meets it."""
        return float(self._spans[1][0])

    def from_a(self, u: Array) -> Place:
        return self._from(True, np.asarray(u, dtype=float))

    def from_b(self, u: Array) -> Place:
        return self._from(False, np.asarray(u, dtype=float))

    def _from(self, side: bool, u: Array) -> Place:
        band, panels, course = self.band, self._panels, self._course
        ends = self._spans[0 if side else 1]
        section = (band.rim_a if side else band.rim_b).section
        local = ends[0] + _past(u, ends[0], section.period)
        panel = np.clip(np.searchsorted(ends, local, side="right") - 1, 0, len(ends) - 2)
        origin = panels.origin[panel]
        on_a, facet = course.on_a[origin], course.facet[origin]
        walked = local.copy()
        # On a facet both rims go in proportion; elsewhere a rim that is not walked is found by its plane.
        go = facet & (not side)
        if go.any():
            i = origin[go]
            share = (local[go] - course.low[i]) / (course.high[i] - course.low[i])
            walked[go] = course.start[i] + share * (course.end[i] - course.start[i])
        cross = (on_a != side) & ~facet
        if cross.any():
            i = origin[cross]
            r = band._rulings(side, local[cross], (course.start[i], course.end[i]))
            walking, c = (band.rim_b, r.b) if side else (band.rim_a, r.a)
            walked[cross] = walking.section.within(c.normal_x, c.normal_y, course.start[i], course.end[i])
        x = np.clip((walked - panels.start[panel]) / panels.half[panel] - 1.0, -1.0, 1.0)
        return Place(panel, x)


def _unit(vector: Array, fallback: Array) -> Array:
    """Unit vectors (n, 2); the fallback where an edge stands at a corner."""
    size = np.sqrt((vector**2).sum(axis=-1))[:, None]
    moves = np.isfinite(size) & (size > 0.0)
    return np.where(moves, vector / np.where(moves, size, 1.0), fallback)
