"""A plate that lies on a rolled side, round the joint with a branch."""

from __future__ import annotations

from dataclasses import dataclass

from develop.solid.end import End
from develop.solid.meeting import MeetingEnd
from develop.solid.solid import Solid

__all__ = ["Patch"]


@dataclass(frozen=True)
class Patch:
    """A plate on a rolled side, or a part of it, as wide as `width` [mm] all round a joint.

    under: the side that it lies on, in the header's frame; its distance is that of the developed plate.
    joint: the plate's edge along the branch, in the branch's frame, which is this part's own.
    lift: of that sheet outside the face that the plate lies on [mm]. tell_tale: radius of the hole through
    it [mm], 0 for none. whole: in one piece.
    """

    under: Solid
    joint: MeetingEnd
    width: float
    lift: float
    tell_tale: float = 0.0
    whole: bool = True

    @property
    def rims(self) -> tuple[End, ...]:
        """The closed curve of its inner edge."""
        return (self.joint,)
