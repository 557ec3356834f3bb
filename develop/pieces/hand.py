"""The opposite hand of a piece: the same kind with right and left exchanged in all its fields."""

from __future__ import annotations

from dataclasses import replace
from math import pi
from typing import TYPE_CHECKING

from develop.pieces.fields import Piece, fields_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from develop.pattern.curve import Array, Curve
    from develop.pattern.pattern import Pattern
    from develop.pieces.built import Built

__all__ = ["OPPOSITE", "builds_of", "mirrored", "opposite"]

# Sheets that differ by less [mm] are one; turns at roll lines are compared at the end of a lever [mm].
_SAME, _LEVER = 1e-3, 1e3
# Chords of curves keep within [mm]; points compared on each.
_CHORDS, _POINTS = 1e-4, 65

OPPOSITE = "-opposite-hand"
"""What the mark of an opposite hand ends in."""


def opposite(piece: Piece, *, quantity: int = 1) -> Piece:
    """The opposite hand of a piece, as a piece of its own with its own mark."""
    own = {"mark": piece.mark + OPPOSITE, "quantity": quantity, "opposite_hand": 0}
    return replace(mirrored(piece), **own)  # type: ignore[type-var]


def mirrored(piece: Piece) -> Piece:
    """The mirror image of a piece.

    Its directions, cuts, offsets and sections are mirrored by their types, numbers that count to the
    right or anticlockwise are negative (`handed` in their declaration), the rest stays.
    """
    values: dict[str, object] = {}
    for each in fields_of(type(piece)):
        value = getattr(piece, each.name)
        mirror = getattr(each.type, "mirrored", None)
        if mirror is not None:
            values[each.name] = None if value is None else mirror(value)
        elif each.handed and value is not None:
            values[each.name] = -value + 0.0
    return replace(piece, **values)  # type: ignore[type-var]  # every kind is a dataclass


def builds_of(piece: Piece, *, units: str = "mm") -> tuple[Built, ...]:
    """The piece as built, and its opposite hand where some are wanted; units as for `build`.

    A piece that is its own mirror image is its opposite hand: there are only more of it. Raises Refusal.
    """
    built = _built(piece, units)
    count: int = getattr(piece, "opposite_hand", 0)
    if not count:
        return (built,)
    other = opposite(piece, quantity=count)
    # Templates and outlines come after what is cut, and add nothing to tell hands apart by.
    theirs = other.build(units=units).patterns
    if _alike(built.patterns[: len(theirs)], theirs):
        return (_both(piece, count, units),)
    seam = _seam(piece, built)
    if seam is not None:
        other = replace(other, seam_at=(pi - seam) % (2.0 * pi))  # type: ignore[type-var]
    return (
        _said(built, f"as drawn; {count} of opposite hand on a pattern of its own", after=2),
        _said(
            _built(other, units),
            f"OPPOSITE HAND of {piece.mark}: its mirror image, right for left",
            after=1,
        ),
    )


def _built(piece: Piece, units: str) -> Built:
    """The piece as built, with what its material adds, if it has one."""
    built = piece.build(units=units)
    if not hasattr(piece, "material"):
        return built
    from develop.pieces.after_forming import with_forming
    from develop.pieces.sheet_metal import known_material, with_material

    thickness: float = getattr(piece, "thickness", 0.0)
    built = with_material(built, material=piece.material, thickness=thickness, units=units)
    return with_forming(built, piece, known=known_material(piece.material, thickness), units=units)


def _alike(patterns: Sequence[Pattern], others: Sequence[Pattern]) -> bool:
    """Whether all that is cut, bent and marked is the same, mark by mark: then so is the finished piece."""
    return len(patterns) == len(others) and all(map(_same, patterns, others))


def _same(one: Pattern, other: Pattern) -> bool:
    import numpy as np

    def strokes(pattern: Pattern) -> tuple[list[str], list[Array], list[Array]]:
        named = [curve for outline in (pattern.net, pattern.cut) for curve in outline.curves]
        lines = [np.stack([line.start, line.end]) for line in pattern.lines]
        points = [mark.at[None] for mark in pattern.marks]
        openings = [np.vstack([_along(curve) for _, curve in outline.curves]) for outline in pattern.openings]
        words = [pattern.openings_as, *(name for name, _ in named), *(mark.text for mark in pattern.marks)]
        return words, [*(_along(curve) for _, curve in named), *lines, *points], openings

    (words, mine, holes), (other_words, yours, other_holes) = strokes(one), strokes(other)
    if words != other_words or len(mine) != len(yours) or len(holes) != len(other_holes):
        return False
    if holes:
        # Bolt holes may be numbered from another centre line.
        apart = np.hypot(*np.moveaxis(_middles(holes)[:, None] - _middles(other_holes), -1, 0))
        nearest = apart.argmin(axis=1)
        if len(set(nearest.tolist())) < len(holes):
            return False
        mine, yours = [*mine, *holes], [*yours, *(other_holes[k] for k in nearest)]
    mine.append(_LEVER * np.array([[line.turn] for line in one.lines]))
    yours.append(_LEVER * np.array([[line.turn] for line in other.lines]))
    return all(
        a.shape == b.shape and float(np.abs(a - b).max(initial=0.0)) < _SAME
        for a, b in zip(mine, yours, strict=True)
    )


def _along(curve: Curve) -> Array:
    """Points at equal shares of a curve's length (_POINTS, 2) [mm]."""
    import numpy as np

    points = curve.polyline(_CHORDS)
    sums = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(points, axis=0).T))])
    at = np.linspace(0.0, sums[-1], _POINTS)
    return np.stack([np.interp(at, sums, points[:, k]) for k in (0, 1)], axis=1)


def _middles(outlines: Sequence[Array]) -> Array:
    import numpy as np

    return np.array([points.mean(axis=0) for points in outlines])


def _both(piece: Piece, count: int, units: str) -> Built:
    """The piece with so many more as there are of the opposite hand, which its patterns say."""
    drawn: int = getattr(piece, "quantity", 1)
    built = _built(replace(piece, quantity=drawn + count), units)  # type: ignore[type-var]
    words = f"both hands are alike: pieces as drawn {drawn}, of opposite hand {count}"
    return replace(_said(built, words, after=2), both_hands=True)


def _seam(piece: Piece, built: Built) -> float | None:
    """Direction [rad] of the seam of a single rolled side that chose it itself.

    Of two places that are equally short the one to the right is taken: mirrored, that is the left one.
    """
    from develop.solid import Solid

    (solid, _), *others = built.wholes
    if getattr(piece, "seam_at", None) != "shortest" or not isinstance(solid, Solid):
        return None
    if any(isinstance(other, Solid) for other, _ in others):
        return None
    import numpy as np

    return float(solid.end_a.section.direction(np.array([solid.seam]))[0])


def _said(built: Built, words: str, *, after: int) -> Built:
    """The same with a line more after so many facts of each pattern."""
    return built.with_patterns(
        [
            replace(pattern, facts=(*pattern.facts[:after], words, *pattern.facts[after:]))
            for pattern in built.patterns
        ]
    )
