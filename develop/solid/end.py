"""An end of the finished piece: a section carried into space, by a plane or by a plane cut."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.sections.section import Section
from develop.solid.frame import Frame

__all__ = ["End"]

_NEAREST_STEPS = 12
_NEAR_ENOUGH = 1e-9  # [mm²]
_MOST_STEPS = 1 << 21
_LOOSE = 1e-15
_ROUNDS = 30
_SAME = 1e-9  # [rad]


def _on_panels(support: Callable[[Array], Array], ends: Array) -> float:
    """The integral of a support over the directions between ends, on panels that resolve it."""

    def values(panels: Panels) -> Array:
        return support(panels.nodes)[..., None]

    def loose(panels: Panels, found: Array) -> Mask:
        return np.asarray((tail(found)[:, 0] * panels.half) > _LOOSE * np.max(found))

    panels, found = resolved(Panels.between(ends), values, loose, rounds=_ROUNDS)
    return float(np.sum((found[..., 0] @ WEIGHTS) * panels.half))


@dataclass(frozen=True)
class End:
    """The closed plane curve origin + spans · p, p the points of a section.

    origin (3,) [mm]; spans (3, 2), the images of the section's x and y; back (2, 3) takes a
    point's offset from the origin to section coordinates, along the direction that the spans
    were carried in.
    """

    section: Section
    origin: Array
    spans: Array
    back: Array

    @staticmethod
    def placed(section: Section, frame: Frame) -> End:
        """The section itself, on a plane."""
        spans = frame.axes[:2].T
        return End(section, frame.origin, spans, spans.T)

    @staticmethod
    def cut(section: Section, *, height: float, rise: Array) -> End:
        """Where a plane z = height + rise · (x, y) cuts the section carried along z [mm]."""
        spans = np.array([[1.0, 0.0], [0.0, 1.0], [float(rise[0]), float(rise[1])]])
        return End(section, np.array([0.0, 0.0, height]), spans, np.eye(3)[:2])

    @property
    def breaks(self) -> Array:
        """Parameters (k,) where the curve has corners that its section has not."""
        return np.zeros(0)

    def point(self, u: Array) -> Array:
        """Points (n, 3) [mm] at the section's parameter u (n,)."""
        return np.asarray(self.origin + self.section.point(u) @ self.spans.T)

    def support(self, normal: Array) -> Array:
        """Support (n,) [mm] of the curve in directions (n, 3), homogeneous of degree 1."""
        flat = normal @ self.spans
        return normal @ self.origin + self.section.support(flat[:, 0], flat[:, 1])

    def touch(self, normal: Array) -> Array:
        """The curve's points (n, 3) [mm] farthest in directions (n, 3)."""
        flat = normal @ self.spans
        return np.asarray(
            self.origin + np.stack(self.section.touch(flat[:, 0], flat[:, 1]), axis=-1) @ self.spans.T
        )

    @property
    def _into(self) -> Array:
        """The spans by axes of their own plane (2, 2): rows are the images of the section's x and y."""
        first = self.spans[:, 0] / np.linalg.norm(self.spans[:, 0])
        second = self.spans[:, 1] - first * (first @ self.spans[:, 1])
        second = second / np.linalg.norm(second)
        return np.asarray(self.spans.T @ np.stack([first, second], axis=1))

    def stretch(self, start: float, stop: float) -> float:
        """Length [mm] of the curve between parameters start and stop, anticlockwise; less than once round.

        From the support h: ∫ h dφ between the normals of its ends, plus by how much farther the last point
        lies along its tangent than the first: as ds = (h + h″) dφ with h′ the place along the tangent,
        Cauchy's formula for an open stretch.
        """
        if stop <= start:
            return 0.0
        into = self._into
        at = self.section.walk(np.array([start, stop]))
        # Tangents go with the map; normals stand square to them.
        tangent = np.stack([-at.ey, at.ex], axis=-1) @ into
        tangent = tangent / np.linalg.norm(tangent, axis=1)[:, None]
        points = np.stack([at.x, at.y], axis=-1) @ into
        along = (points * tangent).sum(axis=1)
        first, last = np.arctan2(-tangent[:, 0], tangent[:, 1])
        turn = float(last - first) % (2.0 * np.pi)
        # Two places on one straight side have the same normal, but for rounding.
        if turn > 2.0 * np.pi - _SAME:
            turn = 0.0
        if turn < _SAME:
            return float(along[1] - along[0])
        kinks = self.section.kinks
        back = (
            np.linalg.solve(into, np.stack([np.cos(kinks), np.sin(kinks)]))
            if len(kinks)
            else np.zeros((2, 0))
        )
        past = np.sort((np.arctan2(back[1], back[0]) - first) % (2.0 * np.pi))
        past = past[(past > _SAME) & (past < turn - _SAME)]

        def support(angle: Array) -> Array:
            n = np.asarray(np.stack([np.cos(angle), np.sin(angle)], axis=-1) @ into.T)
            return self.section.support(n[..., 0], n[..., 1])

        swept = _on_panels(support, first + np.concatenate([[0.0], past, [turn]]))
        return swept + float(along[1] - along[0])

    @cached_property
    def girth(self) -> float:
        """Length of the curve [mm] by Cauchy's formula: the integral of the support over all
        directions in its plane.

        It shares nothing with the arc lengths of the sections. A smooth support is summed by the
        trapezoidal rule, doubled until it stands still; one with kinks on panels between them.
        """
        into = self._into

        def support(angle: Array) -> Array:
            n = np.asarray(np.stack([np.cos(angle), np.sin(angle)], axis=-1) @ into.T)
            return self.section.support(n[..., 0], n[..., 1])

        kinks = self.section.kinks
        if len(kinks):
            back = np.linalg.solve(into, np.stack([np.cos(kinks), np.sin(kinks)]))
            at = np.sort(np.arctan2(back[1], back[0]) % (2.0 * np.pi))
            return _on_panels(support, np.append(at, at[0] + 2.0 * np.pi))

        def mean(start: float, count: int) -> float:
            angle = np.asarray(start + np.arange(count) * (2.0 * np.pi / count), dtype=float)
            return float(np.mean(support(angle)))

        count, value = 128, mean(0.0, 128)
        while count < _MOST_STEPS:
            finer = 0.5 * (value + mean(np.pi / count, count))
            still = abs(finer - value) <= 4e-15 * abs(finer)
            count, value = 2 * count, finer
            if still:
                break
        return 2.0 * np.pi * value

    def distance(self, points: Array) -> Array:
        """Distance (n,) [mm] of points (n, 3) from the curve.

        From the curve's point in the same direction from the centre, steps along the tangent lead
        to the nearest; the best point met is taken as it is, so the distance is never understated.
        """
        q = (points - self.origin) @ self.back.T
        u = self.section.at_direction(np.arctan2(q[:, 1], q[:, 0]))
        best = np.full(len(q), np.inf)
        for _ in range(_NEAREST_STEPS):
            at = self.section.walk(u)
            foot = np.stack([at.x, at.y], axis=-1)
            gap = points - (self.origin + foot @ self.spans.T)
            square = (gap * gap).sum(axis=1)
            gained = float(np.max(best - square))
            best = np.minimum(best, square)
            if gained <= _NEAR_ENOUGH:
                break
            along = (q[:, 1] - at.y) * at.ex - (q[:, 0] - at.x) * at.ey
            u = u + np.where(at.ds > 0.0, along / np.where(at.ds > 0.0, at.ds, 1.0), 0.0)
        return np.asarray(np.sqrt(best))
