"""The closing check: the flat pattern is folded up, line by line, and must land on the ends.

The sheet is taken as flat strips between neighbouring lines. Each is bent against the one before
by the turn that the pattern states, as a roll would; the first is laid on the seam of the finished
piece. Where the strips then lie follows from the pattern alone.
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from develop.pattern.pattern import Pattern
from develop.quadrature import Array
from develop.solid.solid import Solid, Strip

__all__ = ["closing_miss", "folded"]

_Complex = NDArray[np.complex128]


def folded(pattern: Pattern, solid: Solid) -> tuple[Array, Array, Array]:
    """The lines' ends (n, 3) [mm] and outward normals (n, 3) of the folded sheet, in the piece frame."""
    lines = pattern.rulings
    flat_a, flat_b, turn = lines.a, lines.b, lines.turn
    if pattern.face == "inside":
        # The inside is up: seen from the outside, the sheet is the mirror image.
        flip = np.array([-1.0, 1.0])
        flat_a, flat_b = (flat_a * flip)[::-1], (flat_b * flip)[::-1]
        turn = np.append(0.0, turn[1:][::-1])

    leg = flat_b - flat_a
    axis = leg / np.hypot(*leg.T)[:, None]
    # A strip lies half a turn past the line on its left and half a turn short of the next.
    half = 0.5 * np.append(turn[1:], 0.0)
    bend = half.copy()
    bend[1:] += half[:-1]
    alpha, beta = _running_product(0.5 * bend[:-1], axis[:-1])
    x, y, z = _axes(alpha, beta)
    strips = np.concatenate([np.arange(len(x)), [len(x) - 1]])

    def turned(vector: Array) -> Array:
        return vector[:, :1] * x + vector[:, 1:] * y

    steps = turned(np.diff(flat_a, axis=0))
    a = np.vstack([np.zeros(3), np.cumsum(steps, axis=0)])
    along = np.vstack([turned(axis[:-1]), axis[-1:, :1] * x[-1] + axis[-1:, 1:] * y[-1]])
    b = a + np.hypot(*leg.T)[:, None] * along
    # On a line the sheet stands between its strips: half a turn back from the one on the right.
    lean = np.append(half[:-1], -half[-2])[:, None]
    up = z[strips]
    normal = np.cos(lean) * up - np.sin(lean) * np.cross(along, up)

    start = solid.strip(np.array([solid.seam]))
    place = _seam_axes(start) @ _flat_axes(axis[0]).T
    origin = start.a[0] + solid.distance * start.normal[0]
    return a @ place.T + origin, b @ place.T + origin, normal @ place.T


def closing_miss(pattern: Pattern, solid: Solid, lines: tuple[Array, Array, Array] | None = None) -> float:
    """Largest distance [mm] of the folded sheet from both ends, and of its last line from its first.

    lines: what `folded` returns, if the caller has it.
    """
    a, b, normal = folded(pattern, solid) if lines is None else lines
    lift = solid.distance * normal
    closing = max(np.linalg.norm(a[-1] - a[0]), np.linalg.norm(b[-1] - b[0]))
    return float(
        max(
            np.max(solid.end_a.distance(a - lift)),
            np.max(solid.end_b.distance(b - lift)),
            closing,
        )
    )


def _running_product(half_angle: Array, axis: Array) -> tuple[_Complex, _Complex]:
    """Products of the rotations 0..i about axes (n, 2) of the flat, for all i, as unit quaternions.

    A quaternion w + x i + y j + z k is kept as α = w + x i and β = y + z i. Doubling the reach
    of every product in turn takes log2 n steps.
    """
    alpha = np.cos(half_angle) + 1j * np.sin(half_angle) * axis[:, 0]
    beta = (np.sin(half_angle) * axis[:, 1]).astype(complex)
    reach = 1
    while reach < len(alpha):
        a1, b1, a2, b2 = alpha[:-reach], beta[:-reach], alpha[reach:], beta[reach:]
        later_alpha = a1 * a2 - b1 * np.conj(b2)
        later_beta = a1 * b2 + b1 * np.conj(a2)
        alpha = np.concatenate([alpha[:reach], later_alpha])
        beta = np.concatenate([beta[:reach], later_beta])
        reach *= 2
    return alpha, beta


def _axes(alpha: _Complex, beta: _Complex) -> tuple[Array, Array, Array]:
    """Where the rotations take the flat's x, y and normal, each (n, 3)."""
    w, x, y, z = alpha.real, alpha.imag, beta.real, beta.imag
    return (
        np.stack([1 - 2 * (y * y + z * z), 2 * (x * y + w * z), 2 * (x * z - w * y)], axis=-1),
        np.stack([2 * (x * y - w * z), 1 - 2 * (x * x + z * z), 2 * (y * z + w * x)], axis=-1),
        np.stack([2 * (x * z + w * y), 2 * (y * z - w * x), 1 - 2 * (x * x + y * y)], axis=-1),
    )


def _flat_axes(axis: Array) -> Array:
    """Columns: along the first line, across it to the right, up; in the flat (3, 3)."""
    return np.array([[axis[0], axis[1], 0.0], [axis[1], -axis[0], 0.0], [0.0, 0.0, 1.0]])


def _seam_axes(strip: Strip) -> Array:
    """The same three on the finished piece's seam, (3, 3)."""
    along = strip.b[0] - strip.a[0]
    along = along / np.linalg.norm(along)
    up = strip.normal[0]
    return np.stack([along, np.cross(along, up), up], axis=1)
