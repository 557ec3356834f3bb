"""Lengths and areas of what is drawn: chains of cubic Béziers, measured as they are."""

from __future__ import annotations

import numpy as np

from develop.pattern.curve import Curve
from develop.pattern.pattern import Outline
from develop.quadrature import NODES, WEIGHTS, Array

__all__ = ["drawn_area", "drawn_length"]

_T = 0.5 * (NODES + 1.0)
# Columns are the derivative of the Bernstein cubic at the nodes.
_SLOPE: Array = 3.0 * np.stack(
    [
        -((1 - _T) ** 2),
        (1 - _T) ** 2 - 2 * _T * (1 - _T),
        2 * _T * (1 - _T) - _T**2,
        _T**2,
    ],
    axis=1,
)


def drawn_length(curve: Curve) -> float:
    """Length [mm] of a chain of Béziers, by Gauss quadrature of its speed."""
    if len(curve.controls) < 4:
        return 0.0
    velocity = np.einsum("kp,npc->nkc", _SLOPE, curve.pieces)
    return float(0.5 * np.sum(np.sqrt((velocity**2).sum(axis=-1)) @ WEIGHTS))


def drawn_area(outline: Outline) -> float:
    """Area [mm²] inside a closed contour of Béziers, positive anticlockwise.

    Green's theorem, ½ ∮ (x dy − y dx), is exact for each cubic as a sum over the cross products of
    its control points, by integrating products of Bernstein polynomials.
    """
    total = 0.0
    for _, curve in outline.curves:
        p = curve.pieces - outline.curves[0][1].start

        def cross(i: int, j: int, p: Array = p) -> Array:
            return np.asarray(p[:, i, 0] * p[:, j, 1] - p[:, i, 1] * p[:, j, 0])

        near = 6 * (cross(0, 1) + cross(2, 3)) + 3 * cross(1, 2)
        far = 3 * (cross(0, 2) + cross(1, 3)) + cross(0, 3)
        total += float(np.sum(near + far))
    return total / 20.0
