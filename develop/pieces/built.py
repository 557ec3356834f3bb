"""What building a piece gives: its flat parts, where each stands in the finished piece, and their joints."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.solid import Frame, Solid

__all__ = ["Built", "Joint", "Part", "one"]


@dataclass(frozen=True)
class Part:
    """A pattern with the finished side that it makes.

    solid: the side in a frame of its own, from sections alone; what the pattern is checked against.
    frames: where that frame stands in the piece's, once for each time the part is used.
    """

    pattern: Pattern
    solid: Solid
    frames: tuple[Frame, ...]


@dataclass(frozen=True)
class Joint:
    """Two edges that meet: end `end` of part number `part` with end `other_end` of part `other`.

    place, other_place: which of the parts' frames they stand in.
    """

    part: int
    end: Literal["a", "b"]
    other: int
    other_end: Literal["a", "b"]
    place: int = 0
    other_place: int = 0


@dataclass(frozen=True)
class Built:
    """The parts of one piece, and the joints between them."""

    parts: tuple[Part, ...]
    joints: tuple[Joint, ...] = ()

    @property
    def patterns(self) -> tuple[Pattern, ...]:
        """The flat patterns."""
        return tuple(part.pattern for part in self.parts)

    @property
    def solid(self) -> Solid:
        """The finished side of the first part."""
        return self.parts[0].solid

    def with_patterns(self, patterns: Sequence[Pattern]) -> Built:
        """The same piece with other patterns for its parts."""
        parts = zip(self.parts, patterns, strict=True)
        return replace(self, parts=tuple(replace(part, pattern=pattern) for part, pattern in parts))


def one(pattern: Pattern, solid: Solid) -> Built:
    """A piece of one part that stands in the piece's own frame."""
    from develop.solid import Frame

    return Built((Part(pattern, solid, (Frame.square(),)),))
