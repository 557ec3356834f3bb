"""A finished side where it stands in its piece."""

from __future__ import annotations

from dataclasses import dataclass

from develop.quadrature import Array, Indices
from develop.solid.frame import Frame
from develop.solid.solid import Solid

__all__ = ["Placed"]


@dataclass(frozen=True)
class Placed:
    """A solid whose own frame stands at `frame` in the piece's; everything here is in the piece's."""

    solid: Solid
    frame: Frame

    def _in_piece(self, points: Array) -> Array:
        """Points (n, 3) [mm] of the solid's own frame."""
        return points @ self.frame.axes + self.frame.origin

    def faces(self, count: int = 240) -> tuple[Array, Indices]:
        """The side as a mesh: vertices (2 count, 3) [mm] and quads (count, 4), outward."""
        vertices, faces = self.solid.faces(count)
        return self._in_piece(vertices), faces

    def rim_a(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end A."""
        return self._in_piece(self.solid.rim_a(count))

    def rim_b(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end B."""
        return self._in_piece(self.solid.rim_b(count))

    @property
    def seam_line(self) -> Array:
        """The seam (2, 3) [mm], from end A to end B."""
        return self._in_piece(self.solid.seam_line)

    @property
    def joint_lines(self) -> Array:
        """The further lines at which the side is parted (k, 2, 3) [mm]."""
        return self._in_piece(self.solid.joint_lines)

    @property
    def top_line(self) -> Array:
        """The line (2, 3) [mm] at the top of end A."""
        return self._in_piece(self.solid.top_line)
