"""The planes that touch two rims, and the rulings along which they touch; notation as in `band`."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.quadrature import Array
from develop.solid.frame import Rim

__all__ = ["Contact", "Rulings", "rulings_between"]

_NEWTON_STEPS = 40


@dataclass(frozen=True)
class Contact:
    """One rim's side of a set of rulings; arrays (n,) or (n, 3), points in [mm]."""

    point: Array
    tangent: Array
    across: Array  # W
    cos_psi: Array
    sin_psi: Array
    normal_x: Array  # of the rim in its own plane
    normal_y: Array


@dataclass(frozen=True)
class Rulings:
    """Rulings with all that the flat map needs; lengths in [mm], derivatives by the walking parameter."""

    a: Contact
    b: Contact
    ruling: Array  # R, (n, 3)
    along: Array  # R·T of A
    over: Array  # R·W of A
    over_b: Array  # R·W of B
    length: Array
    dphi_a: Array
    dphi_b: Array
    ds_a: Array
    ds_b: Array


def _lean(walking: Rim, other: Rim, e: Array, h: Array) -> Array:
    """tan ψ (n,) on the walking rim of the planes that touch both, for its normals e (n, 3).

    The other rim's support in the direction e + τ n, less the walking rim's, is convex in τ
    and falls or rises throughout, as the other rim lies on one side: Newton needs no guard.
    """
    n = walking.frame.normal
    apart = other.frame.origin - walking.frame.origin
    x, y, _ = other.local(e)
    nx, ny, _ = other.local(n)
    base, rate = e @ apart - h, float(n @ apart)
    if not (nx or ny):
        # Parallel ends: the support does not change with τ.
        return np.asarray(-(base + other.section.support(x, y)) / rate)
    tau = np.zeros(len(e))
    last = np.inf
    for _ in range(_NEWTON_STEPS):
        mx, my = x + tau * nx, y + tau * ny
        fx, fy = other.section.touch(mx, my)
        slope = rate + fx * nx + fy * ny
        step = (base + tau * rate + fx * mx + fy * my) / slope
        tau = tau - step
        worst = float(np.max(np.abs(step) / (1.0 + np.abs(tau)), initial=0.0))
        if worst <= 1e-15 or (worst < 1e-9 and worst >= 0.5 * last):
            break
        last = worst
    return tau


def rulings_between(
    rim_a: Rim,
    rim_b: Rim,
    walking_a: bool,
    u: Array,
    reach: tuple[Array, Array] | None = None,
    fixed: Array | None = None,
) -> Rulings:
    """The rulings through the points u (n,) of the walking rim's section.

    reach: the stretch of the other rim in which its foot lies, where known; it decides on a
    straight side. fixed: the other rim's parameter itself, on facets.
    """
    walking, other = (rim_a, rim_b) if walking_a else (rim_b, rim_a)
    axes = walking.frame.axes
    at = walking.section.walk(u)
    e = at.ex[:, None] * axes[0] + at.ey[:, None] * axes[1]
    h = at.x * at.ex + at.y * at.ey
    tau = _lean(walking, other, e, h)
    cos_psi = 1.0 / np.sqrt(1.0 + tau * tau)
    sin_psi = tau * cos_psi
    normal = cos_psi[:, None] * e + sin_psi[:, None] * axes[2]

    def contact(rim: Rim, point: Array, cos_p: Array, sin_p: Array, x: Array, y: Array) -> Contact:
        ex, ey, n = rim.frame.axes
        tangent = x[:, None] * ey - y[:, None] * ex
        across = cos_p[:, None] * n - (sin_p * x)[:, None] * ex - (sin_p * y)[:, None] * ey
        return Contact(point, tangent, across, cos_p, sin_p, x, y)

    here = contact(walking, walking.place(at.x, at.y), cos_psi, sin_psi, at.ex, at.ey)
    ox, oy, oz = other.local(normal)
    size = np.sqrt(ox * ox + oy * oy)
    ox, oy = ox / size, oy / size
    if fixed is not None:
        on = other.section.walk(fixed)
        foot = on.x, on.y
    elif reach is not None:
        foot = other.section.foot(ox, oy, *reach)
    else:
        foot = other.section.touch(ox, oy)
    there = contact(other, other.place(*foot), size, oz, ox, oy)

    a, b = (here, there) if walking_a else (there, here)
    ruling = b.point - a.point
    over = np.einsum("ni,ni->n", ruling, a.across)
    over_b = np.einsum("ni,ni->n", ruling, b.across)
    along = np.einsum("ni,ni->n", ruling, a.tangent)
    # Both rims see the same turn of the sheet: |R| cos ψ / (R·W) dφ.
    ratio = (a.cos_psi * over_b) / (b.cos_psi * over)
    if walking_a:
        dphi_a, dphi_b = at.dphi, at.dphi * ratio
        ds_a, ds_b = at.ds, _speed(other.section.radius(ox, oy), dphi_b)
    else:
        dphi_b, dphi_a = at.dphi, at.dphi / ratio
        ds_b, ds_a = at.ds, _speed(other.section.radius(ox, oy), dphi_a)
    length = np.sqrt(np.einsum("ni,ni->n", ruling, ruling))
    return Rulings(a, b, ruling, along, over, over_b, length, dphi_a, dphi_b, ds_a, ds_b)


def _speed(radius: Array, dphi: Array) -> Array:
    """ds = ρ dφ, and none where the normal stands, though the radius be infinite there."""
    turns = dphi > 0.0
    return np.where(turns, np.where(turns, radius, 0.0) * dphi, 0.0)
