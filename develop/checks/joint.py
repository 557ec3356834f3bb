"""Joints between the parts of a piece: edges of equal length that lie on each other in space."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.checks.fold import folded
from develop.checks.touching import touching_points
from develop.pattern.pattern import Pattern
from develop.quadrature import Array
from develop.solid import Made, Patch
from develop.solid.end import End
from develop.solid.frame import Frame
from develop.solid.solid import Solid
from develop.solid.touching import TouchingEnd

__all__ = ["Side", "joint_miss"]

_CHORDS = 1e-3  # [mm]


@dataclass(frozen=True)
class Side:
    """One side of a joint: end `a` or `b` of a rolled part, one of its seams or an edge of a flat one, and
    where the part stands in the piece.

    whole: where the whole side stands whose ends the part has, of one made in parts.
    """

    pattern: Pattern
    solid: Made
    frame: Frame
    end: str
    whole: Frame | None = None

    @property
    def length(self) -> float:
        """Length of the edge [mm]."""
        outlines = (self.pattern.net, *self.pattern.openings)
        curves = (curve for outline in outlines for name, curve in outline.curves if name == self.end)
        return sum(curve.length for curve in curves)

    @property
    def distance(self) -> float:
        """Of the developed sheet outside the surface that its ends are given on [mm]."""
        return self.solid.distance if isinstance(self.solid, Solid) else 0.0

    @property
    def tapers(self) -> bool:
        """Whether the part's thickness does not lie in the plane of its end."""
        return isinstance(self.solid, Solid) and self.solid.side == "hull"

    @property
    def curve(self) -> End:
        """Where the edge should lie, in the part's own frame, or the whole side's."""
        if isinstance(self.solid, Solid):
            return self.solid.end_a if self.end == "a" else self.solid.end_b
        assert not isinstance(self.solid, Patch), "a plate that only lies on a side joins nothing"
        return self.solid.end(self.end)

    def edge(self) -> Array:
        """Points (n, 3) [mm] of the folded edge, on the given surface, in the piece frame; of an edge that
        touches another part what touches it."""
        if isinstance(self.solid, Solid):
            lines = folded(self.pattern, self.solid)
            a, b = self.solid.on_ends(*lines)
            if self.end.startswith("seam"):
                # Folded, the sheet has its outside up: what was drawn left may be right.
                right = (self.end == "seam_right") != (self.pattern.face == "inside")
                points = np.stack([each[-1 if right else 0] for each in (a, b)])
            else:
                points = a if self.end == "a" else b
                touching = touching_points(self.pattern, self.solid, lines, self.end)
                if touching is not None:
                    points = touching[1]
        else:
            assert not isinstance(self.solid, Patch)
            outlines = (self.pattern.net, *self.pattern.openings)
            curves = (curve for outline in outlines for name, curve in outline.curves if name == self.end)
            flat = np.vstack([curve.polyline(_CHORDS) for curve in curves]) - self.solid.shift
            points = np.column_stack([flat, np.zeros(len(flat))])
        return points @ self.frame.axes + self.frame.origin


def joint_miss(side: Side, other: Side) -> float:
    """Largest distance [mm] of the one folded edge from the other part's end, and the other way round.

    Folded seams are held to each other, end by end.
    """
    if side.end.startswith("seam"):
        return float(np.linalg.norm(side.edge() - other.edge(), axis=1).max())
    misses = []
    for mine, yours in ((side, other), (other, side)):
        frame = yours.whole or yours.frame
        local = (mine.edge() - frame.origin) @ frame.axes.T
        curve = yours.curve
        off = curve.off(local) if isinstance(curve, TouchingEnd) else curve.distance(local)
        misses.append(float(np.max(off)))
    return max(misses)
