"""The opposite hand of a piece: the same kind with right and left exchanged in all its fields."""

from __future__ import annotations

from dataclasses import replace
from math import pi
from typing import TYPE_CHECKING

from develop.pieces.fields import Piece, fields_of

if TYPE_CHECKING:
    from develop.pieces.built import Built

__all__ = ["OPPOSITE", "builds_of", "mirrored", "opposite"]

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

    Raises Refusal.
    """
    built = _built(piece, units)
    count: int = getattr(piece, "opposite_hand", 0)
    if not count:
        return (built,)
    other = opposite(piece, quantity=count)
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
    from develop.pieces.sheet_metal import with_material

    thickness: float = getattr(piece, "thickness", 0.0)
    return with_material(built, material=piece.material, thickness=thickness, units=units)


def _seam(piece: Piece, built: Built) -> float | None:
    """Direction [rad] of the seam of a single rolled part that chose it itself.

    Of two places that are equally short the one to the right is taken: mirrored, that is the left one.
    """
    from develop.solid import Solid

    solid = built.parts[0].solid
    if getattr(piece, "seam_at", None) != "shortest" or len(built.parts) > 1 or not isinstance(solid, Solid):
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
