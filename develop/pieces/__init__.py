"""The kinds of piece, one file each. This list alone is light: a kind is imported when it is asked for."""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.pieces.fields import Piece

__all__ = ["KINDS", "kind_of"]

# Name of the kind: its file, its class, and what it is.
KINDS: dict[str, tuple[str, str, str]] = {
    "straight": ("straight", "Straight", "a length of duct, either end square or cut by a plane"),
    "transition": ("transition", "Transition", "one section to another, the ends parallel"),
    "marking-band": (
        "marking_band",
        "MarkingBand",
        "a paper band for marking a plane cut on an existing pipe",
    ),
}


def kind_of(name: str) -> type[Piece]:
    """The class of a kind. KeyError for a name that is not in `KINDS`."""
    from importlib import import_module

    file, class_name, _ = KINDS[name]
    found: type[Piece] = getattr(import_module(f"develop.pieces.{file}"), class_name)
    return found
