"""What building a piece gives: its flat parts, where each stands in the finished piece, and their joints."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.solid import Frame, Made, Placed, Solid

__all__ = ["Built", "Divided", "Joint", "Part", "one"]


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

    An end is `a` or `b` of a rolled part or one of its seams by name, or an edge of a flat one.

    place, other_place: which of the parts' frames they stand in. also, other_also: further parts with the
    numbers of their frames, where a side in several parts has that end.
    name: of the joint, in checks; else the marks of the two patterns. apart: the one goes into the other, so
    that the edges are not equal and do not lie on each other.
    """

    part: int
    end: str
    other: int
    other_end: str
    place: int = 0
    other_place: int = 0
    name: str = ""
    also: tuple[tuple[int, int], ...] = ()
    other_also: tuple[tuple[int, int], ...] = ()
    apart: bool = False

    @property
    def sides(self) -> tuple[tuple[str, tuple[tuple[int, int], ...]], ...]:
        """Both sides: the end and all the parts that have it, each with the number of its frame."""
        return (
            (self.end, ((self.part, self.place), *self.also)),
            (self.other_end, ((self.other, self.other_place), *self.other_also)),
        )


@dataclass(frozen=True)
class Divided:
    """A side made in parts. mark: of the whole side. solid: the whole side, in a frame of its own.

    parts: the numbers of its parts in the piece. places: the frames of each of them in the side's own.
    numbers: of those places, counted round the side from 1. frames: where the side stands in the piece.
    """

    mark: str
    solid: Solid
    parts: tuple[int, ...]
    places: tuple[tuple[Frame, ...], ...]
    numbers: tuple[tuple[int, ...], ...]
    frames: tuple[Frame, ...]

    def copies(self, copy: int) -> tuple[tuple[int, int], ...]:
        """The parts of one of the sides like this, each with the number of its frame in the piece."""
        return tuple(
            (part, copy * len(places) + k)
            for part, places in zip(self.parts, self.places, strict=True)
            for k in range(len(places))
        )


@dataclass(frozen=True)
class Built:
    """The parts of one piece, the joints between them, and what whoever makes it is to be warned of.

    both_hands: the piece is its own mirror image, and serves as its opposite hand too. order: numbers of the
    parts from END A to END B, where they do not stand so. divided: the sides that are made in several of
    these parts.
    """

    parts: tuple[Part, ...]
    joints: tuple[Joint, ...] = ()
    warned: tuple[str, ...] = ()
    both_hands: bool = False
    order: tuple[int, ...] = ()
    divided: tuple[Divided, ...] = ()

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

    def stands(self, part: int, place: int) -> Frame | None:
        """Where the whole side stands that a part belongs to, in one of its places; None for no such part."""
        for side in self.divided:
            if part in side.parts:
                return side.frames[place // len(side.places[side.parts.index(part)])]
        return None

    @property
    def whole_parts(self) -> tuple[tuple[int, Part], ...]:
        """Every part with its number; a side made in parts as a whole, by its own mark and first number."""
        whole = {side.parts[0]: side for side in self.divided}
        others = {number for side in self.divided for number in side.parts[1:]}
        found = []
        for number, part in enumerate(self.parts):
            if number in whole:
                side = whole[number]
                pattern = replace(part.pattern, mark=side.mark)
                found.append((number, Part(pattern, side.solid, side.frames)))
            elif number not in others:
                found.append((number, part))
        return tuple(found)

    def patterns_round(self, number: int) -> tuple[Pattern, ...]:
        """The patterns of the side at that part, one for each place of a part of it; none where the side is
        that of another part before."""
        for side in self.divided:
            if number in side.parts:
                own = zip(side.parts, side.places, strict=True)
                first = number == side.parts[0]
                return tuple(self.parts[n].pattern for n, at in own for _ in at) if first else ()
        return (self.parts[number].pattern,)

    @property
    def wholes(self) -> tuple[tuple[Made, tuple[Frame, ...]], ...]:
        """Every part with the frames it stands in, the piece's own where it has none; a side made in parts as
        a whole."""
        from develop.solid import Frame

        return tuple((part.solid, part.frames or (Frame.square(),)) for _, part in self.whole_parts)

    @property
    def sides(self) -> tuple[tuple[str, Placed], ...]:
        """Every rolled side where it stands in the piece, from END A on, with its mark, as a whole."""
        from develop.solid import Placed, Solid

        whole = dict(self.whole_parts)
        return tuple(
            (part.pattern.mark, Placed(part.solid, frame))
            for part in (whole[n] for n in self.order or range(len(self.parts)) if n in whole)
            if isinstance(part.solid, Solid)
            for frame in part.frames
        )

    @property
    def placed(self) -> tuple[Placed, ...]:
        """Every rolled side where it stands in the piece, from END A on."""
        return tuple(placed for _, placed in self.sides)

    def placed_at(self, frames: Sequence[Frame], *, first: int = 0) -> Built:
        """The same, of one side only, standing at some frames of a larger piece.

        first: the number that its first part has there.
        """
        if not self.divided:
            return replace(self, parts=tuple(replace(part, frames=tuple(frames)) for part in self.parts))
        (side,) = self.divided
        parts = tuple(
            replace(part, frames=tuple(_within(place, frame) for frame in frames for place in places))
            for part, places in zip(self.parts, side.places, strict=True)
        )
        joints = tuple(
            replace(joint, part=joint.part + first, other=joint.other + first) for joint in self.joints
        )
        numbers = tuple(first + number for number in side.parts)
        return replace(
            self,
            parts=parts,
            joints=joints,
            divided=(replace(side, parts=numbers, frames=tuple(frames)),),
        )

    def copies(self, copy: int, *, first: int = 0) -> tuple[tuple[int, int], ...]:
        """The parts of one of the places of a single side, each with the number of its frame there."""
        return self.divided[0].copies(copy) if self.divided else ((first, copy),)

    def with_patterns(self, patterns: Sequence[Pattern]) -> Built:
        """The same piece with other patterns for its parts."""
        parts = zip(self.parts, patterns, strict=True)
        return replace(self, parts=tuple(replace(part, pattern=pattern) for part, pattern in parts))


def one(pattern: Pattern, solid: Made) -> Built:
    """A piece of one part that stands in the piece's own frame."""
    from develop.solid import Frame

    return Built((Part(pattern, solid, (Frame.square(),)),))


def _within(place: Frame, frame: Frame) -> Frame:
    """A frame that is given in another one, where that stands."""
    from develop.solid import Frame

    return Frame(place.origin @ frame.axes + frame.origin, place.axes @ frame.axes)
