"""The superellipse (Lamé curve) |x/a|^n + |y/b|^n = 1."""

from __future__ import annotations

from functools import cached_property
from math import ceil, pi

import numpy as np

from develop.quadrature import Mask, Panels, resolved, tail
from develop.sections.section import Array, Section, Walk

__all__ = ["Superellipse"]

# What a panel's nodes may leave out of the arc and of the turning, in parts of a quarter.
_LOOSE = 1e-15
_ROUNDS = 12


class Superellipse(Section):
    """|x/a|^n + |y/b|^n = 1 with half width a and half height b [mm]; n from 1.2 to 20.

    Support h = ((a|cos φ|)^q + (b|sin φ|)^q)^(1/q), q = n / (n − 1) (the dual norm, by Hölder).
    u counts eighths of the turn from direction 0. In each, the smaller of x/a and y/b is
    2^(−1/n) w^k for w from 0 on the axis to 1 at the middle of the quarter: the power k takes the
    edge off |x|^n and off the turning, which goes with |x|^(n−1), where the curve meets the axis.
    """

    def __init__(self, *, width: float, height: float, n: float) -> None:
        self.a, self.b, self.n = 0.5 * width, 0.5 * height, n
        self.q = n / (n - 1.0)
        self._power = max(4.0, ceil(4.0 / (n - 1.0)))
        quarter = self._quarter()
        half = np.concatenate([quarter, (4.0 - quarter[::-1])[1:]])
        self.breaks = np.concatenate([half, half[1:] + 4.0])

    def _quarter(self) -> Array:
        """Panel ends of the first quarter that resolve its arc and its turning."""
        whole = np.array([self.a + self.b, 1.0])

        def values(panels: Panels) -> Array:
            at = self.walk(panels.nodes)
            return np.stack([at.ds, at.dphi], axis=-1)

        def loose(panels: Panels, found: Array) -> Mask:
            left_out = tail(found) * panels.half[:, None]
            return np.asarray((left_out > _LOOSE * whole).any(axis=1))

        panels, _ = resolved(Panels.between(np.arange(3.0)), values, loose, rounds=_ROUNDS)
        return np.append(panels.start, 2.0)

    def walk(self, u: Array) -> Walk:
        u = np.asarray(u, dtype=float)
        n, local = self.n, u % 8.0
        eighth = np.minimum(local.astype(int), 7)
        quarter, odd = eighth // 2, (eighth % 2).astype(bool)
        # w runs from 0 on an axis to 1 at the middle of the quarter.
        w = np.where(odd, eighth + 1 - local, local - eighth)
        small = 2.0 ** (-1.0 / n) * w**self._power
        d_small = 2.0 ** (-1.0 / n) * self._power * w ** (self._power - 1.0)
        rest = -np.expm1(np.log1p(-(small**n)) / n)  # 1 - large, without loss
        large = 1.0 - rest
        ratio = small / large
        slope = ratio ** (n - 1.0)  # -d large / d small
        # Where the quarter begins the second coordinate of (start axis, end axis) is the small one.
        begin, end = np.where(odd, small, large), np.where(odd, large, small)
        sign = np.where(odd, -1.0, 1.0)
        d_begin = np.where(odd, d_small, -slope * d_small) * sign
        d_end = np.where(odd, -slope * d_small, d_small) * sign
        g_begin = np.where(odd, slope, 1.0)
        g_end = np.where(odd, 1.0, slope)
        # Unit normal in the quarter's own axes: (begin^(n-1) / p, end^(n-1) / q).
        flip = (quarter % 2).astype(bool)
        p, q = np.where(flip, self.b, self.a), np.where(flip, self.a, self.b)
        m1, m2 = g_begin / p, g_end / q
        size = np.sqrt(m1 * m1 + m2 * m2)
        speed = np.sqrt((p * d_begin) ** 2 + (q * d_end) ** 2)
        # tan of the normal's angle in the quarter is (end / begin)^(n-1) p / q.
        lead = (n - 1.0) * m1 * m2 / (size * size)
        with np.errstate(divide="ignore", invalid="ignore"):
            dphi = np.where(w > 0.0, lead * d_small * (1.0 / small + slope / large), 0.0)
        dphi = np.where(np.isfinite(dphi), dphi, 0.0)
        c = np.array([1.0, 0.0, -1.0, 0.0])[quarter]
        s = np.array([0.0, 1.0, 0.0, -1.0])[quarter]
        first, second = p * begin, q * end
        nx, ny = m1 / size, m2 / size
        return Walk(
            c * first - s * second,
            s * first + c * second,
            c * nx - s * ny,
            s * nx + c * ny,
            speed,
            dphi,
        )

    def support(self, nx: Array, ny: Array) -> Array:
        p, q = self.a * np.abs(nx), self.b * np.abs(ny)
        top = np.maximum(np.maximum(p, q), 1e-300)
        return np.asarray(top * ((p / top) ** self.q + (q / top) ** self.q) ** (1.0 / self.q))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        h = self.support(nx, ny)
        power = self.q - 1.0
        x = self.a * np.sign(nx) * (self.a * np.abs(nx) / h) ** power
        y = self.b * np.sign(ny) * (self.b * np.abs(ny) / h) ** power
        return np.asarray(x), np.asarray(y)

    def parameter(self, nx: Array, ny: Array) -> Array:
        nx, ny = np.asarray(nx, dtype=float), np.asarray(ny, dtype=float)
        x, y = self.touch(nx, ny)
        x, y = np.abs(x) / self.a, np.abs(y) / self.b
        # By signs and not by angle: on a flat side the normal may turn by less than an angle can hold.
        right, up = (nx > 0.0) | ((nx == 0.0) & (ny < 0.0)), (ny > 0.0) | ((ny == 0.0) & (nx > 0.0))
        quarter = np.where(up, np.where(right, 0, 1), np.where(right, 3, 2))
        flip = (quarter % 2).astype(bool)
        end, begin = np.where(flip, x, y), np.where(flip, y, x)
        small = np.minimum(end, begin)
        w = np.minimum((small * 2.0 ** (1.0 / self.n)) ** (1.0 / self._power), 1.0)
        return np.asarray(2.0 * quarter + np.where(end <= begin, w, 2.0 - w))

    def radius(self, nx: Array, ny: Array) -> Array:
        # ρ = h + h″; for this dual norm it is (q − 1)(ab)^q |cos sin|^(q−2) / h^(2q−1).
        size = np.hypot(nx, ny)
        c, s = np.abs(nx) / size, np.abs(ny) / size
        h = self.support(nx, ny) / size
        q = self.q
        with np.errstate(divide="ignore"):
            return np.asarray(
                (q - 1.0) * (self.a * self.b) ** q * (c * s) ** (q - 2.0) / h ** (2.0 * q - 1.0)
            )

    def foot(self, nx: Array, ny: Array, low: Array, high: Array) -> tuple[Array, Array]:
        # Near an axis the normal tells little of the place: the stretch tells more.
        at = self.walk(self.within(nx, ny, low, high))
        return at.x, at.y

    @property
    def loose_spots(self) -> Array:
        return np.arange(0.0, 8.0, 2.0)

    @property
    def kinks(self) -> Array:
        return 0.5 * pi * np.arange(4.0)

    @cached_property
    def _girth(self) -> float:
        return float(self._table[1][-1, 0])

    @property
    def girth(self) -> float:
        return self._girth

    @cached_property
    def _area(self) -> float:
        # 4ab Γ(1 + 1/n)² / Γ(1 + 2/n), the classical integral (DLMF 5.12.1 for the beta function).
        from math import gamma

        return 4.0 * self.a * self.b * gamma(1.0 + 1.0 / self.n) ** 2 / gamma(1.0 + 2.0 / self.n)

    @property
    def area(self) -> float:
        return self._area

    @cached_property
    def _least_radius(self) -> float:
        if self.n < 2.0:
            return 0.0  # on the axes, where ρ goes with |cos sin|^(q − 2)
        # One quarter has all radii; the place of the least is closed in on.
        best, step = 1.0, 1.0 / 64.0
        u = np.linspace(0.0, 2.0, 129)
        for _ in range(12):
            at = self.walk(u)
            found = self.radius(at.ex, at.ey)
            best, least = float(u[np.argmin(found)]), float(np.min(found))
            u, step = np.clip(best + step * np.linspace(-1.0, 1.0, 17), 0.0, 2.0), 0.125 * step
        return least

    @property
    def least_radius(self) -> float:
        return self._least_radius
