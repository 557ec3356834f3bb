"""Where a band cuts off lines that come from outside of it: the trim of a branch by a tapered header."""

from __future__ import annotations

from dataclasses import dataclass, field
from functools import cached_property

import numpy as np

from develop.errors import Refusal
from develop.quadrature import NODES, Array, Indices, Mask
from develop.sections.section import Section
from develop.solid.frame import Frame
from develop.surfaces.band import Band, Course, Swept
from develop.surfaces.sheet import Place, Sheet
from develop.surfaces.trim import Plane

__all__ = ["BandTrim"]

_STEPS = 60
# Steps below this part of an interval are followed by none that would be seen.
_CLOSE = 1e-9
_SETTLED = 4e-16
# What faces the lines by less than this is edge-on: a facet that they run along ends the near side.
_EDGE_ON = 1e-12
_SHARES: Array = np.concatenate([[0.0], 0.5 * (NODES + 1.0), [1.0]])


@dataclass(frozen=True)
class _Near:
    """Rulings along the near side, from one silhouette to the other, at k places of the course.

    origin, u: stretch and parameter (k,). across: R × d (k, 3) and its rate; level: its product with a
    (k,) and the rate. point, ruling (k, 3). normal (k, 3).
    """

    origin: Indices
    u: Array
    across: Array
    level: Array
    across_rate: Array
    level_rate: Array
    point: Array
    ruling: Array
    normal: Array


@dataclass(frozen=True)
class _Met:
    """Where lines meet rulings (n,): stretch and parameter, share of the ruling and its length [mm], and
    length along the line [mm]; whether the line met any; the share at which the sheet ends."""

    origin: Indices
    u: Array
    share: Array
    length: Array
    lift: Array
    met: Mask
    most: Array


@dataclass(frozen=True)
class BandTrim:
    """The near side of a band, for lines that come from outside of it, all one way.

    frame: where the trimmed cylinder stands in the band's frame; its lines run along the frame's z.
    outward: how far outside of the band the face lies that is met [mm]; its lines are the band's, moved.
    A line meets the ruling R from a where det(R, d, a − o) = 0, as three vectors in one plane.
    Raises Refusal where the side is seen edge-on on other than two lines.
    """

    band: Band
    frame: Frame
    outward: float = 0.0
    # The same lines are asked for by more than one who has no knowledge of the other.
    _known: dict[bytes, _Met] = field(default_factory=dict, repr=False, compare=False)

    def meet(self, start: Array, along: Array) -> Array:
        return self._met(start).lift

    def facing(self, start: Array) -> Array:
        """Outward normals (n, 3) of the side, in the trimmed cylinder's frame, where lines through start
        (n, 3) meet it."""
        found = self._met(start)
        return np.asarray(self._swept(found.origin, found.u).normal @ self.frame.axes.T)

    def on_sheet(self, start: Array, sheet: Sheet) -> tuple[Place, Array]:
        """Places (n,) of the band's sheet and lengths (n,) [mm] on its rulings, from end A, of the joint."""
        found = self._met(start)
        on_a = self._course.on_a[found.origin]
        panel, x = np.empty(len(on_a), dtype=int), np.empty(len(on_a))
        for which, place in ((on_a, sheet.from_a), (~on_a, sheet.from_b)):
            if which.any():
                at = place(found.u[which])
                panel[which], x[which] = at.panel, at.x
        return Place(panel, x), found.share * found.length

    def past(self, start: Array) -> Mask:
        """Which lines (n,) through start (n, 3) do not meet the side between its two ends."""
        found = self._met(start)
        return np.asarray((found.share <= 0.0) | (found.share >= found.most))

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of the trimmed cylinder's section at which the joint may have corners or kinks.

        They are where it may graze a silhouette of the band, and where its lines meet the edges of the
        band's facets and of what goes round its corners.
        """
        near = self._near
        mine = near.normal[[0, -1]] @ self.frame.axes[:2].T
        found = [u for normal in mine for u in np.concatenate(section.parameters(normal[:1], normal[1:]))]
        kinks = self._kinks
        # A line meets the ruling's where (R × d) · o is that of the ruling's points.
        across = near.across[kinks] @ self.frame.axes[:2].T
        reach = near.level[kinks] - near.across[kinks] @ self.frame.origin
        for flat, level in zip(across, reach, strict=True):
            size = float(np.hypot(*flat))
            n, side = flat / size, np.array([level / size])
            if -section.support(*-n) < side[0] < section.support(*n):
                found += [*section.at_side(n[0], n[1], side), *section.at_side(-n[0], -n[1], -side)]
        return tuple(float(u % section.period) for u in found)

    @property
    def silhouettes(self) -> tuple[Array, Array]:
        """The two lines where the side is seen edge-on: points (2, 3) [mm], outward unit normals (2, 3)."""
        return self._near.point[[0, -1]], self._near.normal[[0, -1]]

    def overhang(self, section: Section) -> float:
        """How far [mm] the trimmed section reaches beyond a silhouette; not above zero where it fits."""
        points, normals = self.silhouettes
        mine = normals @ self.frame.axes[:2].T
        reach = section.support(mine[:, 0], mine[:, 1]) + normals @ self.frame.origin
        return float(np.max(reach - np.einsum("ei,ei->e", normals, points)))

    # ---- the near side ----------------------------------------------------------------------

    @cached_property
    def _course(self) -> Course:
        return self.band.course(float(self.band.rim_a.section.breaks[0]))

    def _swept(self, origin: Indices, u: Array) -> Swept:
        found = self.band.swept(self._course, origin, u)
        if not self.outward:
            return found
        return Swept(
            point=found.point + self.outward * found.normal,
            ruling=found.ruling,
            normal=found.normal,
            point_rate=found.point_rate + self.outward * found.normal_rate,
            ruling_rate=found.ruling_rate,
            normal_rate=found.normal_rate,
        )

    @cached_property
    def _turned(self) -> Array:
        """The matrix (3, 3) that takes R to R × d."""
        return np.cross(np.eye(3), self.frame.axes[2])

    @cached_property
    def _near(self) -> _Near:
        course, d = self._course, self.frame.axes[2]
        m, k = len(course.start), len(_SHARES)
        origin = np.repeat(np.arange(m), k)
        u = (course.start[:, None] + (course.end - course.start)[:, None] * _SHARES).ravel()
        facing = self._swept(origin, u).normal @ d - _EDGE_ON
        faces = facing > 0.0
        before = np.roll(faces, 1)
        opens, closes = np.flatnonzero(faces & ~before), np.flatnonzero(before & ~faces)
        if len(opens) != 1 or len(closes) != 1:
            raise Refusal(
                field="angle",
                given=f"a branch that lies along the slanting side: it is seen edge-on on "
                f"{len(opens) + len(closes)} lines instead of two",
                allowed="an angle nearer to 90 degrees, or a header that tapers less",
            )
        count = m * k
        last = int(closes[0] - 1) % count
        ends, ends_u = self._edge_on(origin, u, facing, np.concatenate([opens, closes]))
        inner = (opens[0] + np.arange((last - opens[0]) % count + 1)) % count
        origin = np.concatenate([ends[:1], origin[inner], ends[1:]])
        u = np.concatenate([ends_u[:1], u[inner], ends_u[1:]])
        at = self._swept(origin, u)
        across, rate = at.ruling @ self._turned, at.ruling_rate @ self._turned
        return _Near(
            origin=origin,
            u=u,
            across=across,
            level=np.einsum("ki,ki->k", across, at.point),
            across_rate=rate,
            level_rate=np.einsum("ki,ki->k", rate, at.point) + np.einsum("ki,ki->k", across, at.point_rate),
            point=at.point,
            ruling=at.ruling,
            normal=at.normal,
        )

    def _edge_on(self, origin: Indices, u: Array, facing: Array, after: Indices) -> tuple[Indices, Array]:
        """Where the side is seen edge-on between places `after` (2,) of the course and those before them."""
        stretch, d = origin[after], self.frame.axes[2]
        # From stretch to stretch the plane goes on: it is edge-on where they join.
        joins = origin[after - 1] != stretch
        low, high = np.where(joins, u[after], u[after - 1]), u[after]
        first, last = facing[after - 1], facing[after]
        rising = last > first
        at = low - (high - low) * first / (last - first)
        for _ in range(_STEPS):
            here = self._swept(stretch, at)
            value, rate = here.normal @ d - _EDGE_ON, here.normal_rate @ d
            beyond = (value > 0.0) == rising
            low, high = np.where(beyond, low, at), np.where(beyond, at, high)
            following = at - value / np.where(rate == 0.0, np.inf, rate)
            inside = (rate != 0.0) & (following >= low) & (following <= high)
            following = np.where(inside, following, 0.5 * (low + high))
            moved, at = np.abs(following - at), following
            if np.all(moved <= 1e-15 * np.maximum(1.0, np.abs(at))):
                break
        return stretch, at

    @cached_property
    def _kinks(self) -> Indices:
        """Places of the near side at which facets, what goes round corners, or flat spots begin or end."""
        course, near = self._course, self._near
        middle = 0.5 * (course.start + course.end), 0.5 * (course.low + course.high)
        mine, yours = np.where(course.on_a, *middle), np.where(course.on_a, *middle[::-1])
        plain = np.ones(len(mine), dtype=bool)
        for rim, u in ((self.band.rim_a, mine), (self.band.rim_b, yours)):
            at = rim.section.walk(u)
            if rim.section.girth > 0.0:
                plain &= (at.ds > 0.0) & (at.dphi > 0.0) & (len(rim.section.loose_spots) == 0)
        plain &= ~course.facet
        joins = np.flatnonzero(np.diff(near.origin) != 0)
        return joins[~(plain[near.origin[joins]] & plain[near.origin[joins + 1]])]

    # ---- lines that meet it -------------------------------------------------------------------

    def _met(self, start: Array) -> _Met:
        key = start.tobytes()
        if key not in self._known:
            self._known[key] = self._find(np.asarray(start @ self.frame.axes + self.frame.origin))
        return self._known[key]

    def _find(self, origins: Array) -> _Met:
        near = self._near
        value = near.level - origins @ near.across.T
        side = value > 0.0
        changes = side[:, 1:] != side[:, :-1]
        met = changes.any(axis=1)
        interval = np.argmax(changes, axis=1)
        many = np.flatnonzero(changes.sum(axis=1) > 1)
        if len(many):
            interval[many] = self._between_ends(origins, value, changes, many)
        # A line that only grazes a silhouette may miss it by rounding: it is taken to meet it.
        end = np.abs(value[:, [0, -1]]).argmin(axis=1) * (len(near.u) - 1)
        origin = near.origin[np.where(met, interval, end)]
        u, point, ruling = near.u[end], near.point[end], near.ruling[end]
        if met.any():
            u[met], point[met], ruling[met] = self._roots(origins[met], interval[met], value[met])
        share, lift = self._crossing(origins, point, ruling)
        cut = self.band.cut_b
        most = np.asarray(cut.meet(point, ruling)) if isinstance(cut, Plane) else np.ones(len(u))
        return _Met(origin, u, share, np.sqrt(np.einsum("ni,ni->n", ruling, ruling)), lift, met, most)

    def _between_ends(self, origins: Array, value: Array, changes: Mask, many: Indices) -> Indices:
        """Of several places (n,) of sign changes that of a ruling between the ends, and not beyond them."""
        near = self._near
        row, k = np.nonzero(changes[many])
        line = many[row]
        before, after = value[line, k], value[line, k + 1]
        part = (before / (before - after))[:, None]
        point = near.point[k] + part * (near.point[k + 1] - near.point[k])
        ruling = near.ruling[k] + part * (near.ruling[k + 1] - near.ruling[k])
        share, _ = self._crossing(origins[line], point, ruling)
        beyond = np.maximum(np.maximum(-share, share - 1.0), 0.0)
        order = np.lexsort((np.arange(len(row)), beyond, row))
        first = order[np.diff(row[order], prepend=-1) > 0]
        return np.asarray(k[first])

    def _crossing(self, origins: Array, point: Array, ruling: Array) -> tuple[Array, Array]:
        """Share of the ruling and length along the line (n,) where the two meet."""
        square = -ruling @ self._turned  # d × R
        size = np.einsum("ni,ni->n", square, square)
        gap = point - origins
        share = np.einsum("ni,ni->n", gap @ self._turned, square) / size
        lift = np.einsum("ni,ni->n", np.cross(gap, ruling), square) / size
        return share, lift

    def _roots(self, origins: Array, interval: Indices, value: Array) -> tuple[Array, Array, Array]:
        """Where the determinant is zero in intervals (n,) of the near side: parameters (n,), with the
        points and rulings (n, 3) there. By Newton's method, halving where a step would leave."""
        near = self._near
        rows = np.arange(len(interval))
        origin = near.origin[interval]
        low = near.u[interval]
        high = np.where(near.origin[interval + 1] == origin, near.u[interval + 1], low)
        whole = high - low
        f_low, f_high = value[rows, interval], value[rows, interval + 1]
        rate_low, rate_high = (
            near.level_rate[k] - np.einsum("ni,ni->n", near.across_rate[k], origins)
            for k in (interval, interval + 1)
        )
        u = low + whole * _guess(f_low, f_high, rate_low * whole, rate_high * whole)
        falls = f_low > 0.0
        found_u, found_point, found_ruling = u.copy(), np.empty_like(origins), np.empty_like(origins)
        open_, last = rows, np.full(len(rows), np.inf)
        for _ in range(_STEPS):
            at = self._swept(origin[open_], u)
            across = at.ruling @ self._turned
            gap = at.point - origins[open_]
            f = np.einsum("ni,ni->n", across, gap)
            rate = np.einsum("ni,ni->n", at.ruling_rate @ self._turned, gap)
            rate += np.einsum("ni,ni->n", across, at.point_rate)
            before = (f > 0.0) == falls
            low, high = np.where(before, u, low), np.where(before, high, u)
            step = np.where(f == 0.0, 0.0, -f / np.where(rate == 0.0, np.inf, rate))
            stuck = (f != 0.0) & (rate == 0.0)
            following = u + step
            leaves = stuck | (following < low) | (following > high)
            following = np.where(leaves, 0.5 * (low + high), following)
            step = following - u
            size = np.abs(step)
            least = _SETTLED * np.maximum(1.0, np.abs(u))
            done = (size <= least) | ((size <= _CLOSE * whole) & (size <= 1e-3 * last) & ~leaves)
            # The last step is so short that the rulings go straight along it.
            found_u[open_] = following
            found_point[open_] = at.point + step[:, None] * at.point_rate
            found_ruling[open_] = at.ruling + step[:, None] * at.ruling_rate
            if done.all():
                break
            on = ~done
            open_, u, low, high, falls, last, whole = (
                each[on] for each in (open_, following, low, high, falls, size, whole)
            )
        return found_u, found_point, found_ruling


def _guess(f_low: Array, f_high: Array, rate_low: Array, rate_high: Array) -> Array:
    """Share (n,) of intervals at which a function is about zero, from its values and rates at both ends.

    The inverse function by Hermite's cubic; next to a silhouette, where the determinant has no rate, by a
    parabola.
    """
    gap = f_high - f_low
    part = np.clip(-f_low / np.where(gap == 0.0, 1.0, gap), 0.0, 1.0)
    with np.errstate(divide="ignore", invalid="ignore"):
        m0, m1 = gap / rate_low, gap / rate_high
        rest = 1.0 - part
        cubic = part * rest * rest * m0 + part * part * (3.0 - 2.0 * part) - part * part * rest * m1
    good0, good1 = ((m > 0.0) & (m < 3.0) for m in (m0, m1))
    return np.select(
        [good0 & good1, ~good0 & good1, good0 & ~good1], [cubic, np.sqrt(part), 1.0 - np.sqrt(rest)], part
    )
