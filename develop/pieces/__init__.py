"""The kinds of piece, one file each. This list alone is light: a kind is imported when it is asked for."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.pieces.fields import Piece

__all__ = ["KINDS", "kind_of"]

# Name of the kind: its file, its class, and what it is.
KINDS: dict[str, tuple[str, str, str]] = {
    "straight": ("straight", "Straight", "a length of duct, either end square or cut by a plane"),
    "bend": ("bend", "Bend", "a segmental bend of mitred gores, the two end ones half as long"),
    "branch": ("branch", "Branch", "one duct into another: the branch, and the header with its opening"),
    "offset": ("offset", "Offset", "two mitred joints that carry the axis sideways"),
    "cone": ("cone", "Cone", "a section to a point, or cut short, square or sloping"),
    "transition": ("transition", "Transition", "one section to another, the ends parallel or one tilted"),
    "marking-band": (
        "marking_band",
        "MarkingBand",
        "a paper band for marking a slanting cut on an existing pipe, or where it meets another",
    ),
    "opening": ("opening", "Opening", "a duct of any section through a flat sloping plate"),
    "flange": ("flange", "Flange", "a flat ring or blank to any section, whole or in parts"),
}


def kind_of(name: str) -> type[Piece]:
    """The class of a kind. KeyError for a name that is not in `KINDS`."""
    from importlib import import_module

    file, class_name, _ = KINDS[name]
    found: type[Piece] = getattr(import_module(f"develop.pieces.{file}"), class_name)
    return found
