"""A section made larger or smaller all over: what a plane parallel to its base cuts off a cone."""

from __future__ import annotations

from develop.sections.section import Array, Section, Walk

__all__ = ["Scaled"]


class Scaled(Section):
    """The curve similar to another, all lengths times a factor; u and the normals stay."""

    def __init__(self, base: Section, factor: float) -> None:
        self.base, self.factor = base, factor
        self.breaks = base.breaks

    def walk(self, u: Array) -> Walk:
        at, f = self.base.walk(u), self.factor
        return Walk(f * at.x, f * at.y, at.ex, at.ey, f * at.ds, at.dphi)

    def support(self, nx: Array, ny: Array) -> Array:
        return self.factor * self.base.support(nx, ny)

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        x, y = self.base.touch(nx, ny)
        return self.factor * x, self.factor * y

    def parameter(self, nx: Array, ny: Array) -> Array:
        return self.base.parameter(nx, ny)

    def parameters(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        return self.base.parameters(nx, ny)

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        x, y = self.base.foot(nx, ny, low, high)
        return self.factor * x, self.factor * y

    @property
    def loose_spots(self) -> Array:
        return self.base.loose_spots

    @property
    def kinks(self) -> Array:
        return self.base.kinks

    def radius(self, nx: Array, ny: Array) -> Array:
        return self.factor * self.base.radius(nx, ny)

    @property
    def girth(self) -> float:
        return self.factor * self.base.girth

    @property
    def area(self) -> float:
        return self.factor * self.factor * self.base.area

    @property
    def least_radius(self) -> float:
        return self.factor * self.base.least_radius
