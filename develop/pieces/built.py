"""What building a piece gives: its flat patterns and the finished piece itself."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.solid import Solid

__all__ = ["Built"]


@dataclass(frozen=True)
class Built:
    """The flat patterns of one piece and the finished piece, found from its sections alone."""

    patterns: tuple[Pattern, ...]
    solid: Solid
