"""The cylinder: all rulings parallel to the axis, each end trimmed by a height along them.

Unrolled, x is the arc length round the square section and y the height of the trim; a plane cut
of a round cylinder becomes a sinusoid.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.quadrature import (
    DERIVATIVE,
    WEIGHTS,
    Array,
    Mask,
    Panels,
    between,
    inside,
    resolved,
    running,
    tail,
)
from develop.sections.section import Section, Walk
from develop.surfaces.sheet import Lines, Place
from develop.surfaces.square_edge import SquareEdge
from develop.surfaces.trim import Trim

__all__ = ["Cylinder", "CylinderSheet"]

_SAME = 1e-13
# What a panel's nodes may leave out, in parts of the piece's size; less is lost in the rounding of
# heights, which differentiating brings up some hundred times.
_LOOSE = 2e-13
_ROUNDS = 16
# Where an edge stands, a climb above this [mm per unit of the parameter] is one.
_STEP = 1e-5
_AXIS = np.array([0.0, 0.0, 1.0])


@dataclass(frozen=True)
class Cylinder:
    """A section carried along +z between two trims, the sheet lying `distance` [mm] outside of it.

    The trims meet the given section, a square edge the whole wall; an edge is cut square to the plate, so
    its height does not change across the thickness. breaks: further parameters at which panels must end,
    where a trim has corners. That the trims do not cross is for whoever makes a piece to see to.
    """

    section: Section
    trim_a: Trim | SquareEdge
    trim_b: Trim | SquareEdge
    distance: float = 0.0
    breaks: tuple[float, ...] = ()

    def lengths(self, u: Array) -> Array:
        """Lengths (n,) [mm] of the rulings at the section's parameters u (n,)."""
        at = self.section.walk(u)
        return _heights(self.trim_b, at) - _heights(self.trim_a, at)

    def sheet(self, seam: float) -> CylinderSheet:
        """The cylinder slit along the ruling at parameter `seam`, laid flat."""
        return CylinderSheet(self, seam)


class CylinderSheet:
    """A cylinder laid flat; see `Sheet`. Edge A's square line lies level."""

    def __init__(self, cylinder: Cylinder, seam: float) -> None:
        self.cylinder = cylinder
        section = cylinder.section
        self._seam = seam
        breaks = np.concatenate([section.breaks[:-1], cylinder.breaks])
        past = (breaks - seam) % section.period
        past = np.sort(np.where(past > section.period * (1.0 - _SAME), 0.0, past))
        past = past[np.diff(past, prepend=0.0) > section.period * _SAME]
        ends = np.concatenate([[0.0], past, [section.period]])
        whole = section.girth + 2.0 * np.pi * cylinder.distance

        def loose(panels: Panels, rates: Array) -> Mask:
            unresolved = tail(rates[..., :3]) * panels.half[:, None]
            size = whole + float(np.max(np.abs(rates[..., 4:6])))
            return np.asarray((unresolved > _LOOSE * size).any(axis=1))

        self.panels, rates = resolved(Panels.between(seam + ends), self._rates, loose, rounds=_ROUNDS)
        self._half = self.panels.half
        self._columns, totals = running(rates[..., :4], self._half)
        # Heights of both trims and their rates, and the stretch-out's: taken from the nodes everywhere, as a
        # trim may have a corner at a panel's end, and the section a flat side beside an arc.
        self._climbs = rates[..., [4, 5, 6, 7, 0]]
        self._stands = np.asarray((rates[..., 0] <= 0.0).all(axis=1))
        self.edge_a, self.edge_b = float(totals[-1, 1]), float(totals[-1, 2])
        rise = self._climbs[..., 1] - self._climbs[..., 0]
        self.area = float(np.sum(self._half * ((rise * rates[..., 0]) @ WEIGHTS)))
        self.at_ends = self.lines(self.ends)

    @property
    def heights_a(self) -> Array:
        """Heights of trim A at the panels' nodes, (m, ORDER) [mm]."""
        return np.asarray(self._climbs[..., 0])

    def _rates(self, panels: Panels) -> Array:
        """At the nodes (m, ORDER, 8): rates of the stretch-out, edges A and B and turn; heights of A
        and B and their rates."""
        at = self.cylinder.section.walk(panels.nodes)
        go = at.ds + self.cylinder.distance * at.dphi
        heights = [_heights(trim, at) for trim in (self.cylinder.trim_a, self.cylinder.trim_b)]
        climbs = [(z @ DERIVATIVE.T) / panels.half[:, None] for z in heights]
        speeds = [np.sqrt(go * go + climb * climb) for climb in climbs]
        return np.stack([go, *speeds, at.dphi, *heights, *climbs], axis=-1)

    @property
    def ends(self) -> Place:
        m = len(self._half)
        return Place(np.append(np.arange(m), m - 1), np.append(np.full(m, -1.0), 1.0))

    def lines(self, place: Place) -> Lines:
        section, d = self.cylinder.section, self.cylinder.distance
        u = self.panels.start[place.panel] + self._half[place.panel] * (place.x + 1.0)
        at = section.walk(u)
        row = np.einsum("nk,nkc->nc", between(place.x), self._columns[place.panel])
        climbs = np.einsum("nk,nkc->nc", inside(place.x), self._climbs[place.panel])
        # Interpolated, a stretch on which nothing goes on leaves a trace of its neighbours' rounding.
        go = np.where(self._stands[place.panel], 0.0, climbs[:, 4])
        ends, tangents = [], []
        for z, climb in ((climbs[:, 0], climbs[:, 2]), (climbs[:, 1], climbs[:, 3])):
            ends.append(np.stack([row[:, 0], z], axis=-1))
            # At a sharp corner of the section the edge stands, and a climb there is rounding, but for an edge
            # square to the plate, which may climb there from the one side's height to the other's.
            moves, climbs_there = go > 0.0, np.abs(climb) > _STEP
            along, up = np.where(moves | climbs_there, go, 1.0), np.where(moves | climbs_there, climb, 0.0)
            size = np.sqrt(along * along + up * up)
            tangents.append(np.stack([along / size, up / size], axis=-1))
        radius = section.radius(at.ex, at.ey) + d
        return Lines(
            a=ends[0],
            b=ends[1],
            tangent_a=tangents[0],
            tangent_b=tangents[1],
            arc_a=row[:, 1],
            arc_b=row[:, 2],
            turn=row[:, 3],
            radius_a=radius,
            radius_b=radius,
            u_a=u,
            length=ends[1][:, 1] - ends[0][:, 1],
        )

    def parameters(self, place: Place) -> tuple[Array, Array]:
        u = self.panels.start[place.panel] + self._half[place.panel] * (place.x + 1.0)
        return u, u

    def from_a(self, u: Array) -> Place:
        period = self.cylinder.section.period
        past = (np.asarray(u, dtype=float) - self._seam) % period
        local = self._seam + np.where(past > period * (1.0 - _SAME), 0.0, past)
        start = self.panels.start
        panel = np.clip(np.searchsorted(start, local, side="right") - 1, 0, len(start) - 1)
        return Place(panel, np.clip((local - start[panel]) / self._half[panel] - 1.0, -1.0, 1.0))

    def from_b(self, u: Array) -> Place:
        return self.from_a(u)


def _heights(trim: Trim | SquareEdge, at: Walk) -> Array:
    """Heights of a trim over a walk round the section, of the walk's shape."""
    start = np.stack([at.x.ravel(), at.y.ravel(), np.zeros(at.x.size)], axis=-1)
    if isinstance(trim, SquareEdge):
        out = np.stack([at.ex.ravel(), at.ey.ravel(), np.zeros(at.x.size)], axis=-1)
        return trim.heights(start, out).reshape(at.x.shape)
    return trim.meet(start, np.broadcast_to(_AXIS, start.shape)).reshape(at.x.shape)
