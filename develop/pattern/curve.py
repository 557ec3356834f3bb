"""Plane curves as they leave the program: chains of cubic Béziers."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

__all__ = ["Array", "Curve", "segment"]

Array = NDArray[np.float64]

# Share of the flattening tolerance that the chain of Béziers has already used up is the
# caller's matter; the bound below is for the chords alone.
_MOST_CHORDS = 4096


@dataclass(frozen=True)
class Curve:
    """A chain of n cubic Béziers in the flat.

    controls: (3 n + 1, 2) control points [mm], neighbours share their end point.
    length: the exact length of the curve that the chain stands for [mm].
    straight: the chain is one straight line (n = 1); writers draw it as a line.
    """

    controls: Array
    length: float
    straight: bool = False

    @property
    def start(self) -> Array:
        """First point, (2,) [mm]."""
        return np.asarray(self.controls[0])

    @property
    def end(self) -> Array:
        """Last point, (2,) [mm]."""
        return np.asarray(self.controls[-1])

    @property
    def pieces(self) -> Array:
        """The Béziers one by one, (n, 4, 2) [mm]."""
        first = np.arange(0, len(self.controls) - 1, 3)
        return np.asarray(self.controls[first[:, None] + np.arange(4)])

    def reversed(self) -> Curve:
        """The same curve walked from its other end."""
        return Curve(self.controls[::-1], self.length, self.straight)

    def moved(self, *, turn: Array, shift: Array) -> Curve:
        """The curve with every point p at turn · p + shift; turn (2, 2) keeps lengths."""
        return Curve(self.controls @ turn.T + shift, self.length, self.straight)

    def bounds(self) -> Array:
        """Least and greatest x and y of the chain, (2, 2) [mm], exactly.

        They lie at end points or where a cubic's derivative, a quadratic in t, is zero.
        """
        p = self.pieces
        c, b, a = (
            p[:, 1] - p[:, 0],
            p[:, 0] - 2 * p[:, 1] + p[:, 2],
            p[:, 3] - p[:, 0] + 3 * (p[:, 1] - p[:, 2]),
        )
        with np.errstate(divide="ignore", invalid="ignore"):
            root = np.sqrt(b * b - a * c)
            # Citardauq's form stays exact where a is small.
            q = -(b + np.where(b < 0.0, -root, root))
            t = np.stack([q / a, c / q])
        t = np.clip(np.where(np.isfinite(t), t, 0.0), 0.0, 1.0)
        turning = (
            (1 - t) ** 3 * p[:, 0]
            + 3 * (1 - t) ** 2 * t * p[:, 1]
            + 3 * (1 - t) * t**2 * p[:, 2]
            + t**3 * p[:, 3]
        ).reshape(-1, 2)
        points = np.vstack([turning, self.controls[::3]])
        return np.stack([points.min(axis=0), points.max(axis=0)])

    def polyline(self, tolerance: float) -> Array:
        """Points (k, 2) on the chain whose chords stay within `tolerance` [mm] of it.

        A cubic's distance from its chord cut into m equal steps of the parameter is at most
        max|B''| / (8 m²), with max|B''| reached at an end of the second differences.
        """
        if self.straight or len(self.controls) < 4:
            return self.controls[[0, -1]] if len(self.controls) > 1 else self.controls
        p = self.pieces
        bend = 6.0 * np.maximum(
            np.hypot(*(p[:, 0] - 2 * p[:, 1] + p[:, 2]).T),
            np.hypot(*(p[:, 1] - 2 * p[:, 2] + p[:, 3]).T),
        )
        steps = np.clip(np.ceil(np.sqrt(bend / (8.0 * tolerance))), 1, _MOST_CHORDS).astype(int)
        owner = np.repeat(np.arange(len(p)), steps)
        first = np.repeat(np.cumsum(steps) - steps, steps)
        t = ((np.arange(len(owner)) - first) / steps[owner])[:, None]
        q = p[owner]
        points = (
            (1 - t) ** 3 * q[:, 0]
            + 3 * (1 - t) ** 2 * t * q[:, 1]
            + 3 * (1 - t) * t**2 * q[:, 2]
            + t**3 * q[:, 3]
        )
        return np.vstack([points, self.controls[-1:]])


def segment(start: Array, end: Array) -> Curve:
    """The straight line from start to end, each (2,) [mm]."""
    start, end = np.asarray(start, dtype=float), np.asarray(end, dtype=float)
    controls = start + np.array([[0.0], [1.0], [2.0], [3.0]]) / 3.0 * (end - start)
    controls[-1] = end
    return Curve(controls, float(np.hypot(*(end - start))), straight=True)
