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
    between,
    inside,
    running,
)
from develop.sections.section import Section
from develop.solid.frame import Frame
from develop.surfaces.band_trim import BandTrim
from develop.surfaces.cylinder import CylinderSheet
from develop.surfaces.edges import TOLERANCE, Trace, chains
from develop.surfaces.sheet import Place, Sheet

__all__ = ["CylinderTrim", "Opening", "sideways"]


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

    def on_sheet(self, start: Array, sheet: Sheet) -> tuple[Place, Array]:
        """Places (n,) of the other's sheet and lengths (n,) [mm] on its lines, from z = 0, of the joint."""
        along = np.broadcast_to(np.array([0.0, 0.0, 1.0]), start.shape)
        lift = self.meet(start, along) * self.frame.axes[2, 2]
        height = (start @ self.frame.axes + self.frame.origin)[:, 2] + lift
        return sheet.from_a(self.on_section(start)), height

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
        place, length = trim.on_sheet(start, header)
        lines = header.lines(place)
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
