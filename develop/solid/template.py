"""Flat parts to check a formed piece with, as they should be: what their edges and areas measure."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.quadrature import Array
from develop.solid.end import End
from develop.solid.flat import Stretch
from develop.solid.frame import Frame

__all__ = ["FlatTemplate", "FloorOutlines"]


@dataclass(frozen=True)
class FlatTemplate:
    """A plate one edge of which, the `profile`, is a stretch of a section; the others are straight.

    scale: the section's size here, in parts of its own. corners: (n, 2) [mm] that the straight edges
    lead over from the end of the stretch back to its start. inside: the plate lies within the section.
    shift: from the section's plane to the pattern (2,) [mm].
    """

    stretch: Stretch
    scale: float
    corners: Array
    inside: bool
    shift: Array
    holes: None = None

    @property
    def _straight(self) -> Array:
        """Ends of the straight edges (n + 2, 2) [mm]."""
        ends = self.scale * self.stretch.section.point(np.array([self.stretch.stop, self.stretch.start]))
        return np.vstack([ends[:1], self.corners, ends[1:]])

    def lengths(self) -> dict[str, float]:
        """Lengths of the edges by name [mm]."""
        sides = np.hypot(*np.diff(self._straight, axis=0).T)
        found = {f"edge_{n}": float(side) for n, side in enumerate(sides, 1)}
        return {"profile": self.scale * self.stretch.length, **found}

    @property
    def area(self) -> float:
        """Area [mm²]: what the stretch sweeps from the centre, and the triangles under the straight edges."""
        x, y = self._straight.T
        swept = self.scale**2 * self.stretch.swept
        return abs(swept + 0.5 * float(np.sum(x[:-1] * y[1:] - y[:-1] * x[1:])))

    def end(self, name: str) -> End:
        """The closed curve that the profile is a part of, in its own plane."""
        placed = End.placed(self.stretch.section, Frame.square())
        return End(placed.section, placed.origin, self.scale * placed.spans, placed.back / self.scale)

    @property
    def rims(self) -> tuple[End, ...]:
        """The closed curves of its edges."""
        return (self.end("profile"),)


@dataclass(frozen=True)
class FloorOutlines:
    """A rectangular sheet with closed curves drawn on it.

    outlines: the curves by name, in the plane z = 0, in the order in which they are drawn. size: of the
    sheet [mm]. shift: from the plane to the pattern (2,) [mm].
    """

    outlines: tuple[tuple[str, End], ...]
    size: tuple[float, float]
    shift: Array
    holes: None = None

    def lengths(self) -> dict[str, float]:
        """Lengths of the sheet's edges by name [mm]."""
        wide, high = self.size
        return {"lower_edge": wide, "right_edge": high, "upper_edge": wide, "left_edge": high}

    @property
    def area(self) -> float:
        """Area of the sheet [mm²]."""
        return self.size[0] * self.size[1]

    def end(self, name: str) -> End:
        """One of the closed curves."""
        return dict(self.outlines)[name]

    @property
    def rims(self) -> tuple[End, ...]:
        """The closed curves."""
        return tuple(end for _, end in self.outlines)
