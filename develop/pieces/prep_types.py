"""The field of a weld preparation: how an edge of plate is bevelled."""

from __future__ import annotations

import re
from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.units import number_text, parse_length
from develop.wording import shown

__all__ = ["PREPARATION", "Preparation", "PreparationText"]

_TEXT = re.compile(
    r"bevel\s+(\d+(?:\.\d+)?)\s*(?:°|deg|degrees)?(?:\s+root\s+(.+?))?(?:\s+(outside|inside))?"
)
_STEEPEST = 75.0  # [degrees]


@dataclass(frozen=True)
class Preparation:
    """A bevel: its angle from square [degrees], the root face left [mm], and the face that it is cut from."""

    angle: float
    root: float
    face: str

    @property
    def text(self) -> str:
        """As a job would give it."""
        return f"bevel {number_text(self.angle)} root {number_text(self.root)} mm {self.face}"


@dataclass(frozen=True, eq=False, repr=False)
class PreparationText:
    """A bevel as `bevel 30 root 2 outside`; `square` (None) for none."""

    metavar: str = "PREPARATION"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        """What may be given, in words."""
        return (
            "square, or a bevel with its angle from square (more than 0, up to 75 degrees), the root face "
            "that is left and the face that it is cut from: bevel 30 root 2 outside"
        )

    def read(self, given: object, *, unit: str) -> Preparation | None:
        """The preparation, None for a square edge. Raises InputError."""
        words = " ".join(given.lower().split()) if isinstance(given, str) else ""
        if words in ("square", "none"):
            return None
        found = _TEXT.fullmatch(words)
        if found is None:
            raise InputError(Problem("", f"{shown(given)} is not a preparation", self.allowed))
        angle = float(found[1])
        root = parse_length(found[2], unit=unit, allowed=self.allowed) if found[2] else 0.0
        if not 0.0 < angle <= _STEEPEST or root < 0.0:
            raise InputError(Problem("", f"{shown(given)} is out of range", self.allowed))
        return Preparation(angle, root, found[3] or "outside")

    def record(self, value: object) -> object:
        """The text."""
        return self.text(value)

    def text(self, value: object) -> str:
        """The text."""
        return value.text if isinstance(value, Preparation) else "square"


PREPARATION = PreparationText()
