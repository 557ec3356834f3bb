"""The trim of an edge that is cut square to the plate, so that it touches what it is cut off by.

Along a ruling with the outward normal e such an edge is level from p + inner · e to p + outer · e; it ends
where the first of these points meets the other part.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Protocol

import numpy as np

from develop.quadrature import Array, Mask
from develop.sections.section import Parallel, Section
from develop.surfaces.trim import Trim

__all__ = ["Face", "SquareEdge"]

_AXIS = np.array([0.0, 0.0, 1.0])
# A face that leans less than this to an edge is level along it.
_LEVEL = 1e-12
_ROOT_STEPS = 60
_NEAR = 1e-12
_SAMPLES = 720
_HALVINGS = 50
_APART = 1e-6


class Face(Trim, Protocol):
    """A convex surface, or a plane, that an edge is cut off by."""

    def facing(self, start: Array) -> Array:
        """Normals (n, 3), with a part along +z, where lines along z through start (n, 3) meet it."""
        ...

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of the trimmed section where lines through it meet corners of the face."""
        ...


@dataclass(frozen=True)
class SquareEdge:
    """An edge with its corners at inner and outer from the given surface, along the normal [mm], on a face.

    upper: the edge is the side's end B, below the face, which is then a plane; else it is its end A. With
    inner and outer the same it is the line of a face of the wall, of an edge cut along the other part.
    """

    face: Face
    inner: float
    outer: float
    upper: bool = False

    def heights(self, start: Array, out: Array) -> Array:
        """Heights (n,) [mm] of the edge on rulings through start (n, 3), z = 0, normals out (n, 3)."""
        sign = -1.0 if self.upper else 1.0
        along = np.broadcast_to(_AXIS, start.shape)
        found = sign * self.face.meet(start + self.inner * out, along)
        if self.inner == self.outer:
            return sign * found
        found = np.maximum(found, sign * self.face.meet(start + self.outer * out, along))
        between = (self._climb(start, out, self.inner) > _LEVEL) & (
            self._climb(start, out, self.outer) < -_LEVEL
        )
        if between.any():
            p, e = start[between], out[between]
            top = p + self._summit(p, e)[:, None] * e
            found[between] = np.maximum(found[between], sign * self.face.meet(top, along[between]))
        return sign * found

    def _climb(self, start: Array, out: Array, place: float | Array) -> Array:
        """How the face rises outward, towards the trimmed part, at a place of the edge (n,): its sign, and
        zero where it does, as the rise itself grows without limit at a silhouette."""
        normal = self.face.facing(start + np.asarray(place)[..., None] * out)
        rise = -np.einsum("ni,ni->n", normal, out)
        return np.asarray(-rise if self.upper else rise)

    def _summit(self, start: Array, out: Array) -> Array:
        """Where between its corners (n,) an edge lies on top of a convex face: regula falsi (Illinois)."""
        low, high = np.full(len(start), self.inner), np.full(len(start), self.outer)
        at_low, at_high = self._climb(start, out, low), self._climb(start, out, high)
        place = 0.5 * (low + high)
        for _ in range(_ROOT_STEPS):
            change = at_high - at_low
            place = np.where(
                change != 0.0, high - at_high * (high - low) / np.where(change != 0.0, change, 1.0), low
            )
            at = self._climb(start, out, place)
            crossed = at * at_high < 0.0
            at_low = np.where(crossed, at_high, 0.5 * at_low)
            low = np.where(crossed, high, low)
            high, at_high = place, at
            if np.max(np.abs(high - low) * (at != 0.0), initial=0.0) <= _NEAR * (self.outer - self.inner):
                break
        return np.asarray(place)

    def breaks(self, section: Section) -> tuple[float, ...]:
        """Parameters of the section where panels must end: where what touches changes, and where a corner of
        the edge meets a corner of the face."""
        corners = [
            u for place in {self.inner, self.outer} for u in self.face.breaks(Parallel(section, place))
        ]
        if self.inner == self.outer:
            return tuple(corners)
        u = section.breaks[0] + section.period * np.arange(_SAMPLES + 1) / _SAMPLES
        found = [np.asarray(corners)]
        for place in (self.inner, self.outer):

            def rises(u: Array, place: float = place) -> Mask:
                at = section.walk(u)
                start = np.stack([at.x, at.y, np.zeros_like(at.x)], axis=-1)
                out = np.stack([at.ex, at.ey, np.zeros_like(at.x)], axis=-1)
                return np.asarray(self._climb(start, out, place) > _LEVEL)

            seen = rises(u)
            changes = np.flatnonzero(seen[1:] != seen[:-1])
            low, high, first = u[changes], u[changes + 1], seen[changes]
            for _ in range(_HALVINGS if len(changes) else 0):
                middle = 0.5 * (low + high)
                same = rises(middle) == first
                low, high = np.where(same, middle, low), np.where(same, high, middle)
            found.append(high)
        spots = np.sort(np.concatenate(found) % section.period)
        return tuple(spots[np.diff(spots, prepend=-1.0) > _APART * section.period].tolist())
