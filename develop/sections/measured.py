"""The curve of an out-of-round pipe, fitted to diameters measured across it in several directions.

A diameter between two parallel jaws is the width of the curve square to them,
w(φ) = h(φ) + h(φ + π): twice the even part of the support function. It says nothing of odd
harmonics (curves of constant width other than the circle have those alone), so the fitted curve
has none and is the same after half a turn.
"""

from __future__ import annotations

from collections.abc import Sequence
from math import ceil, degrees, hypot, pi

import numpy as np

from develop.sections.ellipse import Ellipse
from develop.sections.section import Array, Section, Walk
from develop.sections.spec import Taped
from develop.sections.turned import Turned

__all__ = ["NotConvex", "Smooth", "curve_of", "fitted"]

_STEPS = 60
# Phase of the highest harmonic on one panel of 20 nodes [rad]: resolved to rounding.
_PHASE = 4.0
# A fit that foretells readings at most so many times worse than the best may stand for it.
_AS_GOOD = 2.0


class NotConvex(ValueError):
    """The readings fit no closed convex curve; the text says where it fails."""


class Smooth(Section):
    """Support h(φ) = c₀ + Σ (a_k cos 2kφ + b_k sin 2kφ) [mm], k = 1 .. K; u is φ [rad].

    Radius of curvature ρ = h + h″ = c₀ + Σ (1 − 4k²)(...), girth 2π c₀ (Cauchy), area
    ½∮ h ρ dφ = π c₀² + ½ π Σ (1 − 4k²)(a_k² + b_k²). Raises NotConvex unless ρ > 0 everywhere.
    """

    def __init__(self, coefficients: Sequence[float]) -> None:
        given = np.array(coefficients, dtype=float)
        self._constant, self._cos, self._sin = float(given[0]), given[1::2], given[2::2]
        self._even = 2.0 * np.arange(1, len(self._cos) + 1)
        self._least, at = self._tightest()
        if self._least <= 0.0:
            side = round(degrees(at)) % 180
            raise NotConvex(f"the curve through these diameters is hollow near {side} degrees")
        start = self._start()
        panels = max(8, ceil(2.0 * pi * self._even[-1] / _PHASE))
        self.breaks = start + np.linspace(0.0, 2.0 * pi, panels + 1)

    def _series(self, phi: Array, derivative: int) -> Array:
        """h (0), h′ (1), or ρ = h + h″ (2) at φ, any shape [mm]."""
        phase = phi[..., None] * self._even
        c, s = np.cos(phase), np.sin(phase)
        if derivative == 0:
            return np.asarray(self._constant + c @ self._cos + s @ self._sin)
        if derivative == 1:
            return np.asarray(c @ (self._even * self._sin) - s @ (self._even * self._cos))
        weight = 1.0 - self._even**2
        return np.asarray(self._constant + c @ (weight * self._cos) + s @ (weight * self._sin))

    def _tightest(self) -> tuple[float, float]:
        """The least radius of curvature [mm] and its direction [rad]."""
        phi = np.linspace(0.0, pi, 64 * len(self._even) + 1)
        step, best = float(phi[1]), float(phi[np.argmin(self._series(phi, 2))])
        for _ in range(12):
            near = best + step * np.linspace(-1.0, 1.0, 9)
            best, step = float(near[np.argmin(self._series(near, 2))]), 0.25 * step
        return float(self._series(np.array([best]), 2)[0]), best

    def _start(self) -> float:
        """The φ at which the point lies in direction 0: h sin φ + h′ cos φ = 0, growing there."""
        low, high = -0.5 * pi, 0.5 * pi
        for _ in range(_STEPS):
            middle = np.array([0.5 * (low + high)])
            y = self._series(middle, 0) * np.sin(middle) + self._series(middle, 1) * np.cos(middle)
            low, high = (float(middle[0]), high) if y[0] < 0.0 else (low, float(middle[0]))
        return 0.5 * (low + high)

    def walk(self, u: Array) -> Walk:
        u = np.asarray(u, dtype=float)
        h, dh = self._series(u, 0), self._series(u, 1)
        c, s = np.cos(u), np.sin(u)
        return Walk(h * c - dh * s, h * s + dh * c, c, s, self._series(u, 2), np.ones_like(u))

    def support(self, nx: Array, ny: Array) -> Array:
        return np.asarray(np.hypot(nx, ny) * self._series(np.arctan2(ny, nx), 0))

    def touch(self, nx: Array, ny: Array) -> tuple[Array, Array]:
        at = self.walk(np.arctan2(ny, nx))
        return at.x, at.y

    def parameter(self, nx: Array, ny: Array) -> Array:
        past = (np.arctan2(ny, nx) - self.breaks[0]) % (2.0 * pi)
        return np.asarray(self.breaks[0] + past)

    def radius(self, nx: Array, ny: Array) -> Array:
        return self._series(np.arctan2(ny, nx), 2)

    @property
    def girth(self) -> float:
        return 2.0 * pi * self._constant

    @property
    def area(self) -> float:
        weight = 1.0 - self._even**2
        return float(pi * self._constant**2 + 0.5 * pi * (weight * (self._cos**2 + self._sin**2)).sum())

    @property
    def least_radius(self) -> float:
        return self._least

    def _moved(self, distance: float) -> Section:
        if distance == -self._least:
            return super()._moved(distance)
        pairs = np.stack([self._cos, self._sin], axis=-1).ravel()
        return Smooth([self._constant + distance, *pairs.tolist()])


def curve_of(taped: Taped) -> Section:
    """The fitted curve of a measured section."""
    if taped.fit == "smooth":
        return Smooth(taped.curve)
    width, height, angle = taped.curve
    ellipse = Ellipse(width=width, height=height)
    return ellipse if angle == 0.0 else Turned(ellipse, angle)


def fitted(
    directions: Sequence[float], diameters: Sequence[float], fit: str
) -> tuple[tuple[float, ...], tuple[float, ...]]:
    """The curve, as in `Taped.curve`, and the residuals (n,) [mm], by least squares.

    directions [deg] and diameters [mm] (n,), n at least 3; fit: `ellipse` or `smooth`. Raises
    NotConvex where the readings belong to no convex curve.
    """
    phi, width = np.radians(directions), np.array(diameters, dtype=float)
    curve, model = (_ellipse if fit == "ellipse" else _smooth)(phi, width)
    return tuple(map(float, curve)), tuple((width - model).tolist())


def _ellipse(phi: Array, width: Array) -> tuple[Sequence[float], Array]:
    """Axes and angle of the ellipse, turned by any angle, that is nearest to the widths.

    (w/2)² = A + B cos 2φ + C sin 2φ is linear in its three numbers, which gives the start; then
    Gauss–Newton on w itself.
    """
    design = np.stack([np.ones_like(phi), np.cos(2.0 * phi), np.sin(2.0 * phi)], axis=-1)
    scale = float(np.mean(width))
    half = 0.5 * width / scale
    form = np.linalg.lstsq(design, half * half, rcond=None)[0]
    for _ in range(_STEPS):
        square = design @ form
        if form[0] <= hypot(form[1], form[2]) or square.min() <= 0.0:
            raise NotConvex("no ellipse has these diameters")
        size = np.sqrt(square)
        step = np.linalg.lstsq(design / (2.0 * size[:, None]), half - size, rcond=None)[0]
        form = form + step
        if np.abs(step).max() <= 1e-15 * form[0]:
            break
    oval = hypot(form[1], form[2])
    if form[0] <= oval:
        raise NotConvex("no ellipse has these diameters")
    large, small = 2.0 * scale * np.sqrt(form[0] + oval), 2.0 * scale * np.sqrt(form[0] - oval)
    # What rounding alone has made out of round is round.
    if oval <= 1e-14 * form[0]:
        return [2.0 * scale * np.sqrt(form[0])] * 2 + [0.0], 2.0 * scale * np.sqrt(design @ form)
    # The axis nearer to the horizontal is called the width.
    angle = 0.5 * float(np.arctan2(form[2], form[1]))
    if abs(angle) <= 0.25 * pi:
        axes = (large, small)
    else:
        axes, angle = (small, large), angle - np.copysign(0.5 * pi, angle)
    return [*axes, angle if abs(angle) > 1e-14 else 0.0], 2.0 * scale * np.sqrt(design @ form)


def _smooth(phi: Array, width: Array) -> tuple[Sequence[float], Array]:
    """The Fourier series with as many harmonics as the readings carry.

    At most so many that two readings fall on every wave, also in the widest gap, and that a third
    of the readings is left over to judge by. Among those the number is taken that foretells each
    reading best from the others (leave-one-out; its error is residual / (1 − leverage), exactly). That
    is what smooths:
    a harmonic that follows the errors of reading foretells worse. Of those that foretell nearly
    as well the first convex one is taken, as errors alone can make a curve hollow.
    """
    n = len(phi)
    gap = float(np.max(np.diff(np.append(phi, phi[0] + pi))))
    most = max(1, min((n - 2) // 3, int(0.5 * pi / gap + 1e-9)))
    found: list[tuple[float, Sequence[float], Array]] = []
    for harmonics in range(1, most + 1):
        even = 2.0 * np.arange(1, harmonics + 1)
        waves = np.stack([np.cos(phi[:, None] * even), np.sin(phi[:, None] * even)], axis=-1).reshape(n, -1)
        design = np.concatenate([np.ones((n, 1)), waves], axis=1)
        q, r = np.linalg.qr(design)
        coefficients = np.linalg.solve(r, q.T @ width)
        model = design @ coefficients
        left = 1.0 - (q * q).sum(axis=1)
        if n > design.shape[1]:
            error = float(np.sqrt(np.mean(((width - model) / np.maximum(left, 1e-12)) ** 2)))
        else:
            error = 0.0  # three readings: one curve, and nothing to judge it by
        found.append((error, (0.5 * coefficients).tolist(), model))
    # What differs by rounding alone is alike, and the fewest harmonics do.
    rounding = 1e-12 * float(width.max())
    found.sort(key=lambda each: (max(each[0], rounding), len(each[1])))
    hollow: NotConvex | None = None
    for error, curve, model in found:
        if error > _AS_GOOD * max(found[0][0], rounding):
            break
        try:
            Smooth(curve)
        except NotConvex as failed:
            hollow = hollow or failed
        else:
            return curve, model
    assert hollow is not None
    raise hollow
