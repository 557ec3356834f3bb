"""Where one cylinder meets another: the trim of a branch, and the opening of its header."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import (
    DERIVATIVE,
    WEIGHTS,
    Array,
    Indices,
    Mask,
    between,
    inside,
    nodes_of,
    running,
)
from develop.sections.section import Section
from develop.solid.frame import Frame
from develop.surfaces.band import Band
from develop.surfaces.cylinder import CylinderSheet
from develop.surfaces.edges import TOLERANCE, Trace, chains
from develop.surfaces.sheet import Sheet

_ROOT_STEPS = 40
_HALVINGS = 60

__all__ = ["BandTrim", "CylinderTrim", "Opening", "sideways"]


@dataclass(frozen=True)
class CylinderTrim:
    """The near side of another cylinder, for lines that come from outside of it, all one way.

    section: of the other cylinder, whose axis is the z of its frame. frame: where the trimmed
    cylinder stands in the other's frame. towards: its z runs towards the other, and not away from it.
    """

    section: Section
    frame: Frame
    towards: bool = False

    def meet(self, start: Array, along: Array) -> Array:
        right = sideways(self.frame, towards=self.towards)
        out = np.array([-right[1], right[0]])
        into = float((along[0] @ self.frame.axes)[:2] @ out)
        place = start @ self.frame.axes + self.frame.origin
        at = self.section.walk(self.on_section(start))
        return np.asarray((at.x * out[0] + at.y * out[1] - place[:, :2] @ out) / into)

    def on_section(self, start: Array) -> Array:
        """Parameters (n,) of the other's section where lines through start (n, 3) leave it."""
        right = sideways(self.frame, towards=self.towards)
        reach = (start @ self.frame.axes + self.frame.origin)[:, :2] @ right
        most, least = (float(self.section.support(*(s * right))) * s for s in (1.0, -1.0))
        return self.section.at_side(right[0], right[1], np.clip(reach, least, most))

    def facing(self, start: Array) -> Array:
        """Outward normals (n, 3) of the other's side, in the trimmed cylinder's frame, where lines through
        start (n, 3) meet it."""
        at = self.section.walk(self.on_section(start))
        return np.asarray(np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1) @ self.frame.axes.T)

    def place(self, start: Array) -> tuple[Array, Array]:
        """Parameters (n,) of the other's section and lengths (n,) [mm] on its lines, from z = 0, of the
        joint."""
        along = np.broadcast_to(np.array([0.0, 0.0, 1.0]), start.shape)
        lift = self.meet(start, along) * self.frame.axes[2, 2]
        return self.on_section(start), (start @ self.frame.axes + self.frame.origin)[:, 2] + lift

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of the trimmed cylinder's section where the joint may have corners.

        They are where that section reaches farthest to either side, and where its lines meet the
        breaks of the other's.
        """
        right = sideways(self.frame, towards=self.towards)
        mine = self.frame.axes[:2, :2] @ right
        shift = float(self.frame.origin[:2] @ right)
        far, near = (section.parameters(*(s * mine[:, None])) for s in (1.0, -1.0))
        found = [*far, *near]
        at = self.section.walk(self.section.breaks[:-1])
        reach = at.x * right[0] + at.y * right[1] - shift
        # Only breaks on the near side, within the reach of the trimmed section.
        out = np.array([-right[1], right[0]])
        most, least = (s * float(section.support(*(s * mine))) for s in (1.0, -1.0))
        there = reach[(at.ex * out[0] + at.ey * out[1] >= -1e-12) & (reach < most) & (reach > least)]
        if len(there):
            found.append(section.at_side(mine[0], mine[1], there))
            found.append(section.at_side(-mine[0], -mine[1], -there))
        return tuple(float(u) for u in np.concatenate(found) % section.period)


def sideways(frame: Frame, *, towards: bool = False) -> Array:
    """The unit vector (2,) across a header, to the right when its branch points up.

    frame: the branch's, in the header's; seen along the header's axis from its end B to its end A.
    towards: the frame's z runs towards the header.
    """
    out = -frame.axes[2, :2] if towards else frame.axes[2, :2]
    return np.asarray(np.array([out[1], -out[0]]) / np.hypot(*out))


@dataclass(frozen=True)
class BandTrim:
    """The near side of a band, for lines that come from outside of it, all one way.

    frame: where the trimmed cylinder stands in the band's frame; its lines run along the frame's z.
    outward: how far outside of the band the face lies that is met [mm]; its lines are the band's, moved.
    A line meets the ruling R from a where det(R, d, a − o) = 0, as three vectors in one plane.
    """

    band: Band
    frame: Frame
    outward: float = 0.0

    def meet(self, start: Array, along: Array) -> Array:
        return self._found(start)[2]

    def facing(self, start: Array) -> Array:
        """Outward normals (n, 3) of the side, in the trimmed cylinder's frame, where lines through start
        (n, 3) meet it."""
        return np.asarray(self.band.normals(self._found(start)[0]) @ self.frame.axes.T)

    def place(self, start: Array) -> tuple[Array, Array]:
        """Parameters (n,) of the band's end A and lengths (n,) [mm] on its rulings of the joint."""
        u, share, _ = self._found(start)
        return u, share * np.linalg.norm(self._rulings(u)[1], axis=1)

    def misses(self, start: Array) -> Mask:
        """Which lines (n,) through start (n, 3) do not meet the side between its two ends."""
        _, share, _ = self._found(start)
        return np.asarray(~self._changes(self._origins(start)).any(axis=1) | (share <= 0.0) | (share >= 1.0))

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of the trimmed cylinder's section where it may graze a silhouette of the band."""
        return tuple(
            float(u)
            for normal in self.silhouettes[1] @ self.frame.axes[:2].T
            for u in np.concatenate(section.parameters(normal[:1], normal[1:])) % section.period
        )

    @property
    def silhouettes(self) -> tuple[Array, Array]:
        """The two lines where the side is seen edge-on: points (2, 3) [mm], outward unit normals (2, 3)."""
        ends = self._table[0][[0, -1]]
        return self._rulings(ends)[0], self.band.normals(ends)

    def overhang(self, section: Section) -> float:
        """How far [mm] the trimmed section reaches beyond a silhouette; not above zero where it fits."""
        points, normals = self.silhouettes
        mine = normals @ self.frame.axes[:2].T
        reach = section.support(mine[:, 0], mine[:, 1]) + normals @ self.frame.origin
        return float(np.max(reach - np.einsum("ei,ei->e", normals, points)))

    def _origins(self, start: Array) -> Array:
        return np.asarray(start @ self.frame.axes + self.frame.origin)

    def _rulings(self, u: Array) -> tuple[Array, Array]:
        a, ruling = self.band.rulings(u)
        return (a + self.outward * self.band.normals(u) if self.outward else a), ruling

    def _facing(self, u: Array) -> Array:
        """How far (n,) the side faces the way the lines come from, at end A's parameters u (n,)."""
        return np.asarray(self.band.normals(u) @ self.frame.axes[2])

    @cached_property
    def _table(self) -> tuple[Array, Array, Array]:
        """Parameters (k,) along the near side, with R × d and its product with a, for the determinant.

        From one silhouette to the other, where the side is seen edge-on: there each line leaves once.
        """
        section = self.band.rim_a.section
        nodes = nodes_of(section.breaks[:-1], section.breaks[1:]).ravel()
        u = np.append(nodes, nodes[0] + section.period)
        faces = self._facing(u) > 0.0
        (opens,), (closes,) = (
            np.flatnonzero(faces[1:] & ~faces[:-1]),
            np.flatnonzero(~faces[1:] & faces[:-1]),
        )
        low, high = u[[opens, closes]], u[[opens + 1, closes + 1]]
        rising = np.array([True, False])
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + high)
            before = (self._facing(middle) > 0.0) != rising
            low, high = np.where(before, middle, low), np.where(before, high, middle)
        start, end = 0.5 * (low + high)
        end += section.period * (end < start)
        inner = np.concatenate([nodes, nodes + section.period])
        near = np.concatenate([[start], inner[(inner > start) & (inner < end)], [end]])
        a, ruling = self._rulings(near)
        across = np.cross(ruling, self.frame.axes[2])
        return near, across, np.einsum("ki,ki->k", across, a)

    def _changes(self, origins: Array) -> Mask:
        """Between which neighbours of the table the determinant changes its sign, (n, k - 1)."""
        _, across, level = self._table
        side = level - origins @ across.T > 0.0
        return np.asarray(side[:, 1:] != side[:, :-1])

    def _found(self, start: Array) -> tuple[Array, Array, Array]:
        origins = self._origins(start)
        u, across, level = self._table
        changes = self._changes(origins)
        # A line that only grazes a silhouette may miss it by rounding: it is taken to meet it.
        at_end = np.abs(level[[0, -1]] - origins @ across[[0, -1]].T).argmin(axis=1) * (len(u) - 2)
        k = np.where(changes.any(axis=1), np.argmax(changes, axis=1), at_end)
        at = self._root(origins, u[k], u[k + 1])
        share, lift = self._crossing(origins, *self._rulings(at))
        return at, share, lift

    def _crossing(self, origins: Array, a: Array, ruling: Array) -> tuple[Array, Array]:
        """Share of the ruling and length along the line (n,) where the two meet."""
        d = self.frame.axes[2]
        square = np.cross(d, ruling)
        size = np.einsum("ni,ni->n", square, square)
        gap = a - origins
        share = np.einsum("ni,ni->n", np.cross(gap, d), square) / size
        lift = np.einsum("ni,ni->n", np.cross(gap, ruling), square) / size
        return share, lift

    def _root(self, origins: Array, low: Array, high: Array) -> Array:
        """Where the determinant is zero between low and high (n,): regula falsi, as Illinois has it."""

        def value(u: Array) -> Array:
            a, ruling = self._rulings(u)
            return np.asarray(np.einsum("ni,ni->n", np.cross(ruling, self.frame.axes[2]), a - origins))

        f_low, f_high = value(low), value(high)
        u = 0.5 * (low + high)
        for _ in range(_ROOT_STEPS):
            change = f_high - f_low
            u = np.where(
                change != 0.0, high - f_high * (high - low) / np.where(change != 0.0, change, 1.0), low
            )
            f = value(u)
            crossed = f * f_high < 0.0
            f_low = np.where(crossed, f_high, 0.5 * f_low)
            low = np.where(crossed, high, low)
            high, f_high = u, f
            if np.max(np.abs(high - low) * (f != 0.0), initial=0.0) <= 1e-15 * abs(float(np.max(u))):
                break
            if np.max(np.abs(f), initial=0.0) == 0.0:
                break
        return u


class Opening:
    """The closed curve on a header's flat sheet where a branch meets it, walked round the branch.

    branch: the branch's sheet, whose end A is trimmed by the header. Anticlockwise on the outside
    of the header, as the branch's own section is.
    """

    def __init__(self, branch: CylinderSheet, header: Sheet, trim: CylinderTrim | BandTrim) -> None:
        self._branch = branch
        panels = branch.panels
        u = panels.nodes
        at = branch.cylinder.section.walk(u)
        start = np.stack([at.x.ravel(), at.y.ravel(), np.zeros(u.size)], axis=-1)
        on, length = trim.place(start)
        lines = header.lines(header.from_a(on))
        points = lines.a + (length / lines.length)[:, None] * (lines.b - lines.a)
        self._points = points.reshape(*u.shape, 2)
        half = panels.half[:, None, None]
        self._rates = (DERIVATIVE @ self._points) / half
        speed = np.sqrt((self._rates**2).sum(axis=-1))
        self._arcs, ends = running(speed, panels.half)
        self.length = float(ends[-1])
        cross = self._points[..., 0] * self._rates[..., 1] - self._points[..., 1] * self._rates[..., 0]
        self.area = 0.5 * float(np.sum(panels.half * (cross @ WEIGHTS)))

    def trace(self, panel: Indices, x: Array) -> Trace:
        """The curve at positions of the branch sheet's panels."""
        share = inside(x)
        points = np.einsum("nk,nkc->nc", share, self._points[panel])
        rates = np.einsum("nk,nkc->nc", share, self._rates[panel])
        arcs = np.einsum("nk,nk->n", between(x), self._arcs[panel])
        return Trace(points, rates / np.sqrt((rates**2).sum(axis=-1))[:, None], arcs)

    @cached_property
    def controls(self) -> Array:
        """Control points (3 n + 1, 2) [mm] of the curve as a chain of Béziers, closed."""
        return self.chain(TOLERANCE)

    def chain(self, tolerance: float) -> Array:
        """The same as `controls` within a tolerance [mm] of its own."""

        def traces(panel: Indices, x: Array) -> tuple[Trace, ...]:
            return (self.trace(panel, x),)

        (chain,) = chains(traces, len(self._branch.panels.start), tolerance=tolerance)
        chain[-1] = chain[0]
        return chain
