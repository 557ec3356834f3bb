"""What building a piece gives: its flat parts, where each stands in the finished piece, and their joints."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.solid import Frame, Made, Placed

__all__ = ["Built", "Joint", "Part", "one"]


@dataclass(frozen=True)
class Part:
    """A pattern with the finished side that it makes.

    solid: the side, or the flat plate, in a frame of its own, from sections alone; what the pattern is
    checked against.
    frames: where that frame stands in the piece's, once for each time the part is used.
    """

    pattern: Pattern
    solid: Made
    frames: tuple[Frame, ...]


@dataclass(frozen=True)
class Joint:
    """Two edges that meet: end `end` of part number `part` with end `other_end` of part `other`.

    An end is `a` or `b` of a rolled part, or an edge of a flat one by name.

    place, other_place: which of the parts' frames they stand in.
    name: of the joint, in checks; else the marks of the two patterns.
    """

    part: int
    end: str
    other: int
    other_end: str
    place: int = 0
    other_place: int = 0
    name: str = ""


@dataclass(frozen=True)
class Built:
    """The parts of one piece, the joints between them, and what whoever makes it is to be warned of.

    both_hands: the piece is its own mirror image, and serves as its opposite hand too. order: numbers of the
    parts from END A to END B, where they do not stand so.
    """

    parts: tuple[Part, ...]
    joints: tuple[Joint, ...] = ()
    warned: tuple[str, ...] = ()
    both_hands: bool = False
    order: tuple[int, ...] = ()

    @property
    def warnings(self) -> tuple[str, ...]:
        """All that is said of the piece and of its patterns, each once."""
        own = (f"{pattern.mark}: {text}" for pattern in self.patterns for text in pattern.warnings)
        return tuple(dict.fromkeys((*self.warned, *own)))

    @property
    def patterns(self) -> tuple[Pattern, ...]:
        """The flat patterns."""
        return tuple(part.pattern for part in self.parts)

    @property
    def solid(self) -> Made:
        """The finished side of the first part."""
        return self.parts[0].solid

    @property
    def placed(self) -> tuple[Placed, ...]:
        """Every rolled part where it stands in the piece, as often as it is used, from END A on."""
        from develop.solid import Placed, Solid

        return tuple(
            Placed(part.solid, frame)
            for part in (self.parts[number] for number in self.order or range(len(self.parts)))
            if isinstance(part.solid, Solid)
            for frame in part.frames
        )

    def with_patterns(self, patterns: Sequence[Pattern]) -> Built:
        """The same piece with other patterns for its parts."""
        parts = zip(self.parts, patterns, strict=True)
        return replace(self, parts=tuple(replace(part, pattern=pattern) for part, pattern in parts))


def one(pattern: Pattern, solid: Made) -> Built:
    """A piece of one part that stands in the piece's own frame."""
    from develop.solid import Frame

    return Built((Part(pattern, solid, (Frame.square(),)),))
