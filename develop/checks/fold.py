"""The closing check: the flat pattern is folded up, line by line, and must land on the ends.

The sheet is taken as flat strips between neighbouring lines. Each is bent against the one before
by the turn that the pattern states, as a roll would; the first is laid on the seam of the finished
piece, or on the line where a part of it begins. Where the strips then lie follows from the pattern alone.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from develop.pattern.pattern import Pattern
from develop.quadrature import Array, Indices
from develop.solid.solid import Solid

__all__ = ["closing_miss", "folded", "folded_on", "placed"]

_Complex = NDArray[np.complex128]
_FLIP = np.array([-1.0, 1.0])


@dataclass(frozen=True)
class _Folded:
    """A sheet folded up: its lines in the flat, and each strip's place in the piece frame.

    starts (n, 2): the lines' ends on edge A in the flat; axes (n, 2): their directions.
    a, b, normal: (n, 3) in space. x, y, up: (n - 1, 3), where each strip's axes have gone; turn
    (n - 1,): of the sheet over each strip [rad].
    """

    starts: Array
    axes: Array
    a: Array
    b: Array
    normal: Array
    x: Array
    y: Array
    up: Array
    turn: Array


def _fold(pattern: Pattern, solid: Solid) -> _Folded:
    lines = pattern.rulings
    flat_a, flat_b, turn = lines.a, lines.b, lines.turn
    if pattern.face == "inside":
        # The inside is up: seen from the outside, the sheet is the mirror image.
        flat_a, flat_b = (flat_a * _FLIP)[::-1], (flat_b * _FLIP)[::-1]
        turn = np.append(0.0, turn[1:][::-1])

    leg = flat_b - flat_a
    axis = leg / np.hypot(*leg.T)[:, None]
    # A strip lies half a turn past the line on its left and half a turn short of the next.
    half = 0.5 * np.append(turn[1:], 0.0)
    bend = half.copy()
    bend[1:] += half[:-1]
    alpha, beta = _running_product(0.5 * bend[:-1], axis[:-1])
    place = _seam_axes(solid) @ _flat_axes(axis[0]).T
    x, y, z = (each @ place.T for each in _axes(alpha, beta))

    def turned(vector: Array) -> Array:
        return vector[:, :1] * x + vector[:, 1:] * y

    origin = solid.sheet_seam[0]
    a = origin + np.vstack([np.zeros(3), np.cumsum(turned(np.diff(flat_a, axis=0)), axis=0)])
    along = np.vstack([turned(axis[:-1]), axis[-1:, :1] * x[-1] + axis[-1:, 1:] * y[-1]])
    b = a + np.hypot(*leg.T)[:, None] * along
    # On a line the sheet stands between its strips: half a turn back from the one on the right.
    lean = np.append(half[:-1], -half[-2])[:, None]
    up = np.vstack([z, z[-1:]])
    normal = np.cos(lean) * up - np.sin(lean) * np.cross(along, up)
    return _Folded(flat_a, axis, a, b, normal, x, y, z, turn[1:])


def folded(pattern: Pattern, solid: Solid) -> tuple[Array, Array, Array]:
    """The lines' ends (n, 3) [mm] and outward normals (n, 3) of the folded sheet, in the piece frame."""
    sheet = _fold(pattern, solid)
    return sheet.a, sheet.b, sheet.normal


def placed(pattern: Pattern, solid: Solid, points: Array) -> tuple[Array, Array]:
    """Where points (k, 2) [mm] of the flat lie on the folded sheet, (k, 3), and the normals there (k, 3)."""
    sheet = _fold(pattern, solid)
    flat = points * _FLIP if pattern.face == "inside" else points
    # The strip is told by how many lines a point lies to the right of.
    gap = flat[:, None] - sheet.starts[None, 1:-1]
    right = sheet.axes[1:-1, 1] * gap[..., 0] - sheet.axes[1:-1, 0] * gap[..., 1] > 0.0
    strip = right.sum(axis=1)
    step = flat - sheet.starts[strip]
    points = sheet.a[strip] + step[:, :1] * sheet.x[strip] + step[:, 1:] * sheet.y[strip]

    def beyond(line: Indices) -> Array:
        gap = flat - sheet.starts[line]
        return np.asarray(np.abs(sheet.axes[line, 1] * gap[:, 0] - sheet.axes[line, 0] * gap[:, 1]))

    # Across a strip the sheet that it stands for turns evenly.
    left, rest = beyond(strip), beyond(strip + 1)
    lean = (sheet.turn[strip] * (left / np.maximum(left + rest, 1e-300) - 0.5))[:, None]
    along = sheet.axes[strip, :1] * sheet.x[strip] + sheet.axes[strip, 1:] * sheet.y[strip]
    up = sheet.up[strip]
    return points, np.cos(lean) * up + np.sin(lean) * np.cross(along, up)


def folded_on(pattern: Pattern, solid: Solid, points: Array) -> Array:
    """Where points (k, 2) [mm] of the flat lie on the outside of the folded sheet, (k, 3) [mm]."""
    return placed(pattern, solid, points)[0]


def closing_miss(pattern: Pattern, solid: Solid, lines: tuple[Array, Array, Array] | None = None) -> float:
    """Largest distance [mm] of the folded sheet from both ends, and of its last line from its first.

    Of level edges also from the planes of the ends. Of a part of a side the last line is held to the line in
    space where the part ends.

    lines: what `folded` returns, if the caller has it.
    """
    a, b, normal = folded(pattern, solid) if lines is None else lines
    on_a, on_b = solid.on_ends(a, b, normal)
    if solid.stop is None:
        closing = max(float(np.linalg.norm(end[-1] - end[0])) for end in (a, b))
    else:
        last = np.stack([on_a[-1], on_b[-1]])
        closing = float(np.linalg.norm(last - solid.stop_line, axis=1).max())
    u = pattern.rulings.u[::-1] if pattern.face == "inside" else pattern.rulings.u
    return max(solid.misses(on_a, on_b, u), solid.plane_miss(a, b), closing)


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


def _seam_axes(solid: Solid) -> Array:
    """The same three on the finished piece's seam, (3, 3)."""
    strip = solid.strip(np.array([solid.seam]))
    along = solid.seam_line[1] - solid.seam_line[0]
    along = along / np.linalg.norm(along)
    up = strip.normal[0]
    return np.stack([along, np.cross(along, up), up], axis=1)
