"""The finished piece: two ends and the side between them, found from the sections alone.

Nothing here knows how the side is unrolled; it is what the pattern is checked against.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import Literal

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Indices, Mask, Panels, resolved, tail
from develop.solid.end import End

__all__ = ["Measures", "Solid", "Strip"]

_BISECTIONS = 56
_SAME = 1e-9
# Panels are halved until what their nodes leave out is less than this part of the whole. Smaller
# would only add the rounding of ever shorter panels.
_LOOSE = 5e-12
_ROUNDS = 8


@dataclass(frozen=True)
class Strip:
    """Straight lines of the side: ends a, b (n, 3) [mm] and outward unit normals (n, 3)."""

    a: Array
    b: Array
    normal: Array


@dataclass(frozen=True)
class Measures:
    """What the finished side measures: edge lengths [mm] and area [mm²]."""

    edge_a: float
    edge_b: float
    area: float


@dataclass(frozen=True)
class Solid:
    """A piece between two ends.

    side: `parallel`, lines along +z between two cuts of one section, or `hull`, the side of the
        convex hull of the two ends.
    seam: parameter of end A's section where the seam runs.
    distance: of the developed sheet outside the surface that carries the ends [mm].
    """

    end_a: End
    end_b: End
    side: Literal["parallel", "hull"]
    seam: float
    distance: float = 0.0

    def strip(self, u: Array) -> Strip:
        """The side's straight lines through end A at its section's parameter u (n,)."""
        if self.side == "parallel":
            at = self.end_a.section.walk(u)
            normal = np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1)
            return Strip(self.end_a.point(u), self.end_b.point(u), normal)
        normal = self._touching(self.end_a, self.end_b, u)
        return Strip(self.end_a.point(u), self.end_b.touch(normal), normal)

    def _touching(self, on: End, other: End, u: Array) -> Array:
        """Unit normals (n, 3) of the planes through the tangents of one end that touch the other.

        As the plane turns about the tangent, the other end lies wholly outside of it, then wholly
        inside: halving the angle finds where it touches, from supports alone.
        """
        at = on.section.walk(u)
        e = np.stack([at.ex, at.ey], axis=-1) @ on.spans.T
        up = np.cross(on.spans[:, 0], on.spans[:, 1])
        above = float((other.origin - on.origin) @ up) > 0.0
        point = on.point(u)
        low = np.full(len(u), -0.5 * np.pi)
        high = -low
        for _ in range(_BISECTIONS):
            middle = 0.5 * (low + high)
            normal = np.cos(middle)[:, None] * e + np.sin(middle)[:, None] * up
            beyond = other.support(normal) - np.einsum("ni,ni->n", normal, point)
            less = (beyond > 0.0) == above
            high = np.where(less, middle, high)
            low = np.where(less, low, middle)
        angle = 0.5 * (low + high)
        return np.asarray(np.cos(angle)[:, None] * e + np.sin(angle)[:, None] * up)

    @cached_property
    def measures(self) -> Measures:
        """Lengths of the two edges of the sheet and its area, by quadrature in space.

        Between a line R and its neighbour the area is ½ (|R × a'| + |R × b'|) du, as one plane
        touches the side all along a line; each half is integrated along its own end.
        """
        (edge_a, area_a), (edge_b, area_b) = (
            self._swept(on, other) for on, other in ((self.end_a, self.end_b), (self.end_b, self.end_a))
        )
        return Measures(edge_a, edge_b, area_a + area_b)

    def _swept(self, on: End, other: End) -> tuple[float, float]:
        """Length of the edge at one end [mm] and its part of the area [mm²]."""
        first = Panels.between(self._panel_ends(on, other))

        def rates(panels: Panels) -> Array:
            return self._rates(on, other, panels)

        reach = float(np.linalg.norm(other.origin - on.origin)) + other.section.width + other.section.height
        whole = on.section.girth * np.array([1.0, reach])

        def loose(panels: Panels, found: Array) -> Mask:
            return np.asarray((tail(found) * panels.half[:, None] > _LOOSE * whole).any(axis=1))

        panels, found = resolved(first, rates, loose, rounds=_ROUNDS)
        edge, area = ((WEIGHTS @ found) * panels.half[:, None]).sum(axis=0)
        return float(edge), float(area)

    def _rates(self, on: End, other: End, panels: Panels) -> Array:
        """At the nodes along one end: rates of its edge and of ½ |R × edge| (m, ORDER, 2)."""
        nodes = panels.nodes
        u = nodes.ravel()
        at = on.section.walk(u)
        if self.side == "parallel":
            normal = np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1)
            far = other.point(u)
        else:
            normal = self._touching(on, other, u)
            far = other.touch(normal)
        velocity = at.ds[:, None] * (np.stack([-at.ey, at.ex], axis=-1) @ on.spans.T)
        if self.distance != 0.0:
            turn = (DERIVATIVE @ normal.reshape(*nodes.shape, 3)) / panels.half[:, None, None]
            velocity = velocity + self.distance * turn.reshape(-1, 3)
        swept = np.linalg.norm(np.cross(far - on.point(u), velocity), axis=-1)
        return np.stack([np.linalg.norm(velocity, axis=-1), 0.5 * swept], axis=-1).reshape(*nodes.shape, 2)

    def _panel_ends(self, on: End, other: End) -> Array:
        """Panels of one end's parameter that end at the breaks of both ends."""
        section = on.section
        start, period = section.breaks[0], section.period
        ends = section.breaks - start
        if self.side == "hull":
            flat = self._touching(other, on, other.section.breaks[:-1]) @ on.spans
            past = (section.parameter(flat[:, 0], flat[:, 1]) - start) % period
            ends = np.sort(np.concatenate([ends, past]))
            ends = ends[np.concatenate([[True], np.diff(ends) > _SAME * period])]
            ends[-1] = period
        return np.asarray(start + ends)

    # ---- for pictures and meshes -----------------------------------------------------------

    def around(self, count: int) -> Array:
        """Parameters (count,) of end A spread evenly by arc and turn together, from the seam on."""
        section = self.end_a.section
        fine = self.seam + np.linspace(0.0, section.period, 16 * count + 1)
        at = section.walk(fine)
        girth = max(section.girth, 1e-300)
        growth = np.hypot(at.ds / girth, at.dphi / (2.0 * np.pi))
        total = np.concatenate([[0.0], np.cumsum(0.5 * (growth[1:] + growth[:-1]))])
        return np.asarray(np.interp(np.arange(count) / count * total[-1], total, fine))

    def faces(self, count: int = 240) -> tuple[Array, Indices]:
        """The side as a mesh: vertices (2 count, 3) [mm] and quads (count, 4), outward."""
        strip = self.strip(self.around(count))
        i = np.arange(count)
        j = (i + 1) % count
        return np.vstack([strip.a, strip.b]), np.stack([i, j, j + count, i + count], axis=1)

    def rim_a(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end A."""
        return self.strip(self.around(count)).a

    def rim_b(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end B."""
        return self.strip(self.around(count)).b

    def line_at(self, direction: float) -> Array:
        """The straight line (2, 3) [mm] of the side at a direction [rad] of end A."""
        strip = self.strip(self.end_a.section.at_direction(np.array([direction])))
        return np.vstack([strip.a, strip.b])

    @property
    def seam_line(self) -> Array:
        """The seam (2, 3) [mm], from end A to end B."""
        strip = self.strip(np.array([self.seam]))
        return np.vstack([strip.a, strip.b])

    @property
    def top_line(self) -> Array:
        """The line (2, 3) [mm] at the top of end A."""
        return self.line_at(0.5 * np.pi)
