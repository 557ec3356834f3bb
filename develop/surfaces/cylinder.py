"""The cylinder: all rulings parallel to the axis, each end trimmed by a height along them.

Unrolled, x is the arc length round the square section and y the height of the trim; a plane cut
of a round cylinder becomes a sinusoid.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import atan2, degrees, hypot

import numpy as np

from develop.quadrature import WEIGHTS, Array, Mask, Panels, between, resolved, running, tail
from develop.sections.section import Section, Walk
from develop.surfaces.sheet import Lines, Place

__all__ = ["Cylinder", "CylinderSheet", "Trim"]

_SAME = 1e-9
# What a panel's nodes leave out, in parts of the girth.
_LOOSE = 1e-14
_ROUNDS = 40


@dataclass(frozen=True)
class Trim:
    """A plane trim: height z = height + rise · (x, y) [mm]; rise (2,), zero for a square end."""

    height: float
    rise: Array

    def at(self, x: Array, y: Array) -> Array:
        """Height of the trim over the points x, y [mm]."""
        return np.asarray(self.height + self.rise[0] * x + self.rise[1] * y)


@dataclass(frozen=True)
class Cylinder:
    """A section carried along +z between two trims, the sheet lying `distance` [mm] outside of it.

    The trims meet the given section; an edge is cut square to the plate, so its height does not
    change across the thickness. Where the trims cross, `shortest` is not above zero; whoever makes a
    piece refuses that in terms of the piece's own fields.
    """

    section: Section
    trim_a: Trim
    trim_b: Trim
    distance: float = 0.0

    @property
    def shortest(self) -> float:
        """The least height between the trims [mm], negative where they cross."""
        rise = self.trim_b.rise - self.trim_a.rise
        down = float(self.section.support(np.array(-rise[0]), np.array(-rise[1])))
        return self.trim_b.height - self.trim_a.height - down

    def lengths(self, u: Array) -> Array:
        """Lengths (n,) [mm] of the rulings at the section's parameters u (n,)."""
        at = self.section.walk(u)
        return self.trim_b.at(at.x, at.y) - self.trim_a.at(at.x, at.y)

    def steepest(self, *, which: str) -> float:
        """The steepest slope [deg] of cut `a` or `b`, in its own direction, that the piece allows.

        0 where none does, as the other cut alone already runs past.
        """
        mine, other = (self.trim_a, self.trim_b) if which == "a" else (self.trim_b, self.trim_a)
        size = hypot(*mine.rise)
        if size == 0.0:
            return 0.0
        length = self.trim_b.height - self.trim_a.height
        sign = 1.0 if which == "b" else -1.0
        unit = sign * mine.rise / size

        def left(t: float) -> float:
            down = -(t * unit - sign * other.rise)
            return length - float(self.section.support(np.array(down[0]), np.array(down[1])))

        if left(0.0) <= 0.0:
            return 0.0
        low, high = 0.0, 1.0
        while left(high) > 0.0 and high < 1e6:
            low, high = high, 2.0 * high
        for _ in range(60):
            middle = 0.5 * (low + high)
            low, high = (middle, high) if left(middle) > 0.0 else (low, middle)
        return degrees(atan2(low, 1.0))

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
        past = (section.breaks[:-1] - seam) % section.period
        past = np.sort(np.where(past > section.period * (1.0 - _SAME), 0.0, past))
        past = past[past > section.period * _SAME]
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
    """Height of the trim and its rate along the section, at a walk."""
    return trim.at(at.x, at.y), at.ds * (trim.rise[1] * at.ex - trim.rise[0] * at.ey)
