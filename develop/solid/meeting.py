"""Where a branch meets a cylindrical header, as an end of the branch in space; from sections alone."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.sections.section import Section
from develop.solid.end import End
from develop.solid.frame import Frame

__all__ = ["MeetingEnd", "nearest"]

_BISECTIONS = 60
_STEPS = 8
_LOOSE = 1e-12
_ROUNDS = 14


@dataclass(frozen=True)
class MeetingEnd(End):
    """The end A of a branch that is carried along its +z: where its lines enter the header.

    header: the header's section, about the z of its own frame. frame: the branch's, in the header's.
    sheet: how far outside of that section the header's sheet is developed [mm]. towards: the branch's
        +z runs towards the header, so that this is its end B.
    """

    header: Section
    frame: Frame
    sheet: float = 0.0
    towards: bool = False

    @staticmethod
    def of(
        section: Section, header: Section, frame: Frame, *, sheet: float = 0.0, towards: bool = False
    ) -> MeetingEnd:
        """The end of a branch of a section; `sheet` [mm] and `towards` as for the class."""
        flat = np.eye(3)[:, :2]
        return MeetingEnd(section, np.zeros(3), flat, flat.T, header, frame, sheet, towards)

    @property
    def _out(self) -> Array:
        """The unit vector (2,) across the header's axis, from it along the branch."""
        out = self.frame.axes[2, :2] * (-1.0 if self.towards else 1.0)
        return np.asarray(out / np.hypot(*out))

    def on_header(self, u: Array) -> tuple[Array, Array]:
        """The header's parameter (n,) and the points (n, 3) [mm], in the header's frame, of the joint.

        Along the header's near side, from its farthest reach to one side to the other, how far a
        point lies to the side falls throughout: halving finds where it is that of the branch's line.
        """
        axes, out = self.frame.axes, self._out
        right = np.array([out[1], -out[0]])
        at = self.section.walk(u)
        place = at.x[:, None] * axes[0] + at.y[:, None] * axes[1] + self.frame.origin
        reach = place[:, :2] @ right
        header = self.header
        one = np.ones(1)
        start = float(header.parameters(*(right[:, None] * one))[1][0])
        end = float(header.parameters(*(-right[:, None] * one))[0][0])
        end += np.ceil((start - end) / header.period) * header.period
        low, high = np.full(len(u), start), np.full(len(u), end)
        for _ in range(_BISECTIONS):
            middle = 0.5 * (low + high)
            on = header.walk(middle)
            beyond = on.x * right[0] + on.y * right[1] > reach
            low, high = np.where(beyond, middle, low), np.where(beyond, high, middle)
        middle = 0.5 * (low + high)
        on = header.walk(middle)
        lift = (on.x * out[0] + on.y * out[1] - place[:, :2] @ out) / (axes[2, :2] @ out)
        return middle, place + lift[:, None] * axes[2]

    def point(self, u: Array) -> Array:
        points = self.on_header(np.asarray(u, dtype=float))[1]
        return np.asarray((points - self.frame.origin) @ self.frame.axes.T)

    @property
    def breaks(self) -> Array:
        """Parameters of the branch's section where the joint may have corners."""
        axes, out = self.frame.axes, self._out
        right = np.array([out[1], -out[0]])
        mine = axes[:2, :2] @ right
        far = [self.section.parameters(*(s * mine[:, None])) for s in (1.0, -1.0)]
        found = [value for pair in far for value in pair]
        on = self.header.walk(self.header.breaks[:-1])
        reach = on.x * right[0] + on.y * right[1] - self.frame.origin[:2] @ right
        most, least = (s * float(self.section.support(*(s * mine))) for s in (1.0, -1.0))
        there = reach[(reach < most) & (reach > least)]
        if len(there):
            found.append(self.section.at_side(mine[0], mine[1], there))
            found.append(self.section.at_side(-mine[0], -mine[1], -there))
        return np.concatenate(found)

    @cached_property
    def _panels(self) -> tuple[Panels, Array]:
        """Panels of the branch's parameter that resolve the joint, with its speed and the area rate."""
        section = self.section
        start, period = section.breaks[0], section.period
        ends = np.sort(
            np.concatenate([section.breaks[:-1] - start, (self.breaks - start) % period, [period]])
        )
        ends = ends[np.diff(ends, prepend=-1.0) > 1e-9 * period]
        ends[-1] = period

        def values(panels: Panels) -> Array:
            on, points = self.on_header(panels.nodes.ravel())
            shape = (*panels.nodes.shape, 3)
            rates = (DERIVATIVE @ points.reshape(shape)) / panels.half[:, None, None]
            return np.stack(
                [np.linalg.norm(rates, axis=-1), self._swept(on).reshape(shape[:2]) * rates[..., 2]], axis=-1
            )

        def loose(panels: Panels, found: Array) -> Mask:
            size = np.array([1.0, max(section.girth, 1.0)]) * section.girth
            return np.asarray((tail(found) * panels.half[:, None] > _LOOSE * size).any(axis=1))

        return resolved(Panels.between(start + ends), values, loose, rounds=_ROUNDS)

    def _swept(self, on: Array) -> Array:
        """Arc (n,) [mm] on the header's sheet: the area that the joint encloses is ∮ s dz (Green)."""
        return self.header.arc(on) + self.sheet * self.header.turning(on)

    @cached_property
    def girth(self) -> float:
        """Length of the joint [mm], by quadrature in space."""
        panels, found = self._panels
        return float(np.sum((found[..., 0] @ WEIGHTS) * panels.half))

    @property
    def opened(self) -> float:
        """Area [mm²] that the joint encloses on the header's unrolled surface."""
        panels, found = self._panels
        return float(np.sum((found[..., 1] @ WEIGHTS) * panels.half))

    def distance(self, points: Array) -> Array:
        """Distance (n,) [mm] of points (n, 3), in the branch's frame, from the joint.

        From the point on the same line of the branch, steps along the joint lead to the nearest;
        the best point met is taken as it is, so the distance is never understated.
        """
        return nearest(self.section, self.point, points)


def nearest(section: Section, point: Callable[[Array], Array], points: Array) -> Array:
    """Distance (n,) [mm] of points (n, 3) from a curve over a section, never understated.

    point: of the curve at the section's parameters (n,).
    """
    u = section.at_direction(np.arctan2(points[:, 1], points[:, 0]))
    step = 1e-7 * section.period
    best = np.full(len(points), np.inf)
    for _ in range(_STEPS):
        foot = point(u)
        gap = points - foot
        square = (gap * gap).sum(axis=1)
        gained = float(np.max(best - square))
        best = np.minimum(best, square)
        if gained <= 1e-9:
            break
        along = (point(u + step) - foot) / step
        size = (along * along).sum(axis=1)
        u = u + (gap * along).sum(axis=1) / np.where(size > 0.0, size, np.inf)
    return np.asarray(np.sqrt(best))
