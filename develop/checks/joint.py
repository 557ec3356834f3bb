"""Joints between the parts of a piece: edges of equal length that lie on each other in space."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.checks.fold import folded
from develop.pattern.pattern import Pattern
from develop.quadrature import Array
from develop.solid.frame import Frame
from develop.solid.solid import Solid

__all__ = ["Side", "joint_miss"]


@dataclass(frozen=True)
class Side:
    """One side of a joint: end `a` or `b` of a part, and where the part stands in the piece."""

    pattern: Pattern
    solid: Solid
    frame: Frame
    end: str

    @property
    def length(self) -> float:
        """Length of the edge [mm]."""
        curve = self.pattern.net.curve(self.end)
        return curve.length if curve else 0.0

    def edge(self) -> Array:
        """Points (n, 3) [mm] of the folded edge, on the given surface, in the piece frame."""
        a, b, normal = folded(self.pattern, self.solid)
        points = (a if self.end == "a" else b) - self.solid.distance * normal
        return points @ self.frame.axes + self.frame.origin


def joint_miss(side: Side, other: Side) -> float:
    """Largest distance [mm] of the one folded edge from the other part's end, and the other way round."""
    misses = []
    for mine, yours in ((side, other), (other, side)):
        local = (mine.edge() - yours.frame.origin) @ yours.frame.axes.T
        end = yours.solid.end_a if yours.end == "a" else yours.solid.end_b
        misses.append(float(np.max(end.distance(local))))
    return max(misses)
