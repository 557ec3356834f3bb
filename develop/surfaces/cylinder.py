"""The cylinder: all rulings parallel to the axis, each end trimmed by a height along them.

Unrolled, x is the arc length round the square section and y the height of the trim; a plane cut
of a round cylinder becomes a sinusoid.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.quadrature import WEIGHTS, Array, Mask, Panels, between, resolved, running, tail
from develop.sections.section import Section, Walk
from develop.surfaces.sheet import Lines, Place
from develop.surfaces.trim import Trim

__all__ = ["Cylinder", "CylinderSheet"]

_SAME = 1e-9
# What a panel's nodes leave out, in parts of the girth.
_LOOSE = 1e-14
_ROUNDS = 40
_AXIS = np.array([0.0, 0.0, 1.0])


@dataclass(frozen=True)
class Cylinder:
    """A section carried along +z between two trims, the sheet lying `distance` [mm] outside of it.

    The trims meet the given section; an edge is cut square to the plate, so its height does not
    change across the thickness. breaks: further parameters at which panels must end, where a trim
    has corners. That the trims do not cross is for whoever makes a piece to see to.
    """

    section: Section
    trim_a: Trim
    trim_b: Trim
    distance: float = 0.0
    breaks: tuple[float, ...] = ()

    def lengths(self, u: Array) -> Array:
        """Lengths (n,) [mm] of the rulings at the section's parameters u (n,)."""
        at = self.section.walk(u)
        return _trimmed(self.trim_b, at)[0] - _trimmed(self.trim_a, at)[0]

    def sheet(self, seam: float, *, beyond: float = 0.0) -> CylinderSheet:
        """The cylinder slit along the ruling at parameter `seam`, laid flat.

        beyond: how much of the next turn is laid on at the right [mm of arc], for a lap.
        """
        return CylinderSheet(self, seam, beyond)


class CylinderSheet:
    """A cylinder laid flat; see `Sheet`. Edge A's square line lies level."""

    def __init__(self, cylinder: Cylinder, seam: float, beyond: float = 0.0) -> None:
        self.cylinder = cylinder
        section = cylinder.section
        self._seam = seam
        breaks = np.concatenate([section.breaks[:-1], cylinder.breaks])
        past = (breaks - seam) % section.period
        past = np.sort(np.where(past > section.period * (1.0 - _SAME), 0.0, past))
        past = past[np.diff(past, prepend=0.0) > section.period * _SAME]
        ends = np.concatenate([[0.0], past, [section.period]])
        if beyond > 0.0:
            moved = section.offset(cylinder.distance)
            start = moved.arc(np.array([seam]))
            last = float(moved.at_arc(start + moved.girth + beyond)[0]) - seam
            further = ends[1:-1] + section.period
            ends = np.concatenate([ends, further[further < last - _SAME], [last]])
        whole = section.girth + 2.0 * np.pi * cylinder.distance

        def loose(panels: Panels, rates: Array) -> Mask:
            unresolved = tail(rates[..., :3]) * panels.half[:, None]
            return np.asarray((unresolved > _LOOSE * whole).any(axis=1))

        self._panels, rates = resolved(Panels.between(seam + ends), self._rates, loose, rounds=_ROUNDS)
        self._half = self._panels.half
        self._columns, totals = running(rates[..., :4], self._half)
        self.edge_a, self.edge_b = float(totals[-1, 1]), float(totals[-1, 2])
        self.area = float(np.sum(self._half * (rates[..., 4] @ WEIGHTS)))
        self.at_ends = self.lines(self.ends)

    def _rates(self, panels: Panels) -> Array:
        """At the nodes (m, ORDER, 5): rates of the stretch-out, edges A and B, turn and area."""
        at = self.cylinder.section.walk(panels.nodes)
        go = at.ds + self.cylinder.distance * at.dphi
        (low, climb_a), (high, climb_b) = (
            _trimmed(trim, at) for trim in (self.cylinder.trim_a, self.cylinder.trim_b)
        )
        return np.stack(
            [
                go,
                np.sqrt(go * go + climb_a * climb_a),
                np.sqrt(go * go + climb_b * climb_b),
                at.dphi,
                (high - low) * go,
            ],
            axis=-1,
        )

    @property
    def ends(self) -> Place:
        m = len(self._half)
        return Place(np.append(np.arange(m), m - 1), np.append(np.full(m, -1.0), 1.0))

    def lines(self, place: Place) -> Lines:
        cylinder, section, d = self.cylinder, self.cylinder.section, self.cylinder.distance
        u = self._panels.start[place.panel] + self._half[place.panel] * (place.x + 1.0)
        at = section.walk(u)
        row = np.einsum("nk,nkc->nc", between(place.x), self._columns[place.panel])
        go = at.ds + d * at.dphi
        ends, tangents = [], []
        for trim in (cylinder.trim_a, cylinder.trim_b):
            z, climb = _trimmed(trim, at)
            size = np.sqrt(go * go + climb * climb)
            ends.append(np.stack([row[:, 0], z], axis=-1))
            # At a sharp corner of the section the edge stands.
            size = np.where(size > 0.0, size, 1.0)
            tangents.append(np.stack([np.where(go > 0.0, go, 1.0) / size, climb / size], axis=-1))
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

    def from_a(self, u: Array) -> Place:
        period = self.cylinder.section.period
        past = (np.asarray(u, dtype=float) - self._seam) % period
        local = self._seam + np.where(past > period * (1.0 - _SAME), 0.0, past)
        start = self._panels.start
        panel = np.clip(np.searchsorted(start, local, side="right") - 1, 0, len(start) - 1)
        return Place(panel, np.clip((local - start[panel]) / self._half[panel] - 1.0, -1.0, 1.0))

    def from_b(self, u: Array) -> Place:
        return self.from_a(u)


def _trimmed(trim: Trim, at: Walk) -> tuple[Array, Array]:
    """Height of the trim over a walk round the section, and its rate along it."""
    shape = at.x.shape
    start = np.stack([at.x.ravel(), at.y.ravel(), np.zeros(at.x.size)], axis=-1)
    z = trim.meet(start, np.broadcast_to(_AXIS, start.shape))
    normal = trim.normal(np.stack([start[:, 0], start[:, 1], z], axis=-1))
    # Along the joint the tangent T + climb·axis lies square to the normal.
    across = at.ex.ravel() * normal[:, 1] - at.ey.ravel() * normal[:, 0]
    upright = normal[:, 2]
    climb = -across / np.where(upright == 0.0, np.inf, upright)
    return z.reshape(shape), at.ds * climb.reshape(shape)
