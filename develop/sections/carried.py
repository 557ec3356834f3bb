"""The image of a section under a linear map of its plane, as a slanting cut of a parallel side shows it."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from develop.quadrature import Array
from develop.sections.section import Section, Walk

__all__ = ["Carried"]

_PLACES = 201


class Carried(Section):
    """The points M p of another section's points p; M (2, 2) keeps the way round.

    Parameters and breaks are those of the base. A unit tangent t goes to M t, so that ds gains |M t|, the
    angle of the normal changes by dφ' = det M / |M t|² dφ, and h'(n) = h(Mᵀ n): linear algebra of supports.
    """

    def __init__(self, base: Section, into: Array) -> None:
        self.base, self.into = base, into
        self.breaks = base.breaks
        self._det = float(np.linalg.det(into))

    def walk(self, u: Array) -> Walk:
        at, m = self.base.walk(u), self.into
        tx, ty = m[0, 0] * -at.ey + m[0, 1] * at.ex, m[1, 0] * -at.ey + m[1, 1] * at.ex
        size = np.hypot(tx, ty)
        return Walk(
            m[0, 0] * at.x + m[0, 1] * at.y,
            m[1, 0] * at.x + m[1, 1] * at.y,
            ty / size,
            -tx / size,
            at.ds * size,
            at.dphi * self._det / (size * size),
        )

    def _back(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        m = self.into
        return m[0, 0] * nx + m[1, 0] * ny, m[0, 1] * nx + m[1, 1] * ny

    def support(self, nx: Array, ny: Array) -> Array:
        return self.base.support(*self._back(nx, ny))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        x, y = self.base.touch(*self._back(nx, ny))
        m = self.into
        return m[0, 0] * x + m[0, 1] * y, m[1, 0] * x + m[1, 1] * y

    def parameter(self, nx: Array, ny: Array) -> Array:
        return self.base.parameter(*self._back(nx, ny))

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        return self.base.parameters(*self._back(nx, ny))

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        x, y = self.base.foot(*self._back(nx, ny), low, high)
        m = self.into
        return m[0, 0] * x + m[0, 1] * y, m[1, 0] * x + m[1, 1] * y

    @property
    def loose_spots(self) -> Array:
        return self.base.loose_spots

    @property
    def kinks(self) -> Array:
        kinks = self.base.kinks
        # n with Mᵀ n along the base's kink.
        n = np.linalg.solve(self.into.T, np.stack([np.cos(kinks), np.sin(kinks)]))
        return np.asarray(np.arctan2(n[1], n[0]))

    def radius(self, nx: Array, ny: Array) -> Array:
        bx, by = self._back(nx, ny)
        size = np.hypot(bx, by)
        tx, ty = self.into @ np.stack([-by / size, bx / size]).reshape(2, -1)
        stretch = np.hypot(tx, ty).reshape(np.shape(bx))
        return np.asarray(self.base.radius(bx, by) * stretch**3 / self._det)

    @cached_property
    def girth(self) -> float:
        return float(self._table[1][-1, 0])

    @property
    def area(self) -> float:
        return self._det * self.base.area

    @cached_property
    def least_radius(self) -> float:
        # Looked for among so many places on each panel that the top of a bend is met within 1e-4.
        share = np.linspace(0.0, 1.0, _PLACES)
        at = self.walk((self.breaks[:-1, None] + np.diff(self.breaks)[:, None] * share).ravel())
        turns = at.dphi > 0.0
        return float(np.min(at.ds[turns] / at.dphi[turns], initial=np.inf))
