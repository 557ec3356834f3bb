"""What the sheets say of a piece, in the words of the shop."""

from __future__ import annotations

from math import degrees
from typing import TYPE_CHECKING

from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.field_types import Cut

__all__ = ["cut_words", "direction_words", "plate_words", "sizes_words", "wall_words"]

_WORDS = {0.0: "right", 90.0: "top", 180.0: "left", 270.0: "bottom"}


def direction_words(direction: float) -> str:
    """A direction [rad] as a word where it has one, else in degrees."""
    angle = round(degrees(direction) % 360.0, 6)
    return _WORDS.get(angle % 360.0, f"{number_text(angle)}°")


def cut_words(cut: Cut | None) -> str:
    """How an end is cut."""
    if cut is None or cut.slope == 0.0:
        return "square"
    return f"cut {number_text(round(degrees(cut.slope), 6))}°, longest at {direction_words(cut.long)}"


def sizes_words(sizes: str, thickness: float) -> str:
    """Where the given sizes are measured."""
    if thickness == 0.0:
        return "sizes on the developed line"
    return {"mean": "sizes to mid-thickness"}.get(sizes, f"sizes {sizes}")


def wall_words(material: str, thickness: float) -> str:
    """Material and thickness."""
    plate = f"{number_text(thickness)} mm thick" if thickness else "no thickness allowed for"
    return ", ".join(part for part in (material, plate) if part)


def plate_words(material: str, thickness: float) -> str:
    """Material and thickness of a flat plate, whose pattern they do not change."""
    plate = f"{number_text(thickness)} mm thick" if thickness else "thickness not stated"
    return ", ".join(part for part in (material, plate) if part)
