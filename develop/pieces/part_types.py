"""The fields that say in how many parts a side is made, and what sheet each must go into."""

from __future__ import annotations

import re
from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.pieces.field_types import Count
from develop.units import number_text, parse_length
from develop.wording import shown

__all__ = ["FIT", "MADE_IN", "MOST_PARTS", "STOCK", "MadeIn", "Stock"]

FIT = "fit"
"""As many parts as are needed until each goes into the stock sheet."""

MOST_PARTS = 24

_COUNT = Count(least=1, most=MOST_PARTS)
_TIMES = re.compile(r"\s*[x×]\s*", re.IGNORECASE)


def _refused(given: str, allowed: str) -> InputError:
    return InputError(Problem("", given, allowed))


@dataclass(frozen=True, eq=False, repr=False)
class MadeIn:
    """How many parts, or `fit`."""

    metavar: str = "COUNT"
    unit: str = ""

    @property
    def allowed(self) -> str:
        """What may be given, in words."""
        return f"a whole number from 1 to {MOST_PARTS}, or {FIT}"

    def read(self, given: object, *, unit: str) -> int | str:
        """The count or `fit`. Raises InputError."""
        if isinstance(given, str) and given.strip().lower() == FIT:
            return FIT
        try:
            return _COUNT.read(given, unit=unit)
        except InputError as error:
            raise _refused(error.problems[0].given, self.allowed) from None

    def record(self, value: object) -> object:
        """The count or `fit`."""
        return value

    def text(self, value: object) -> str:
        """The value as an option would give it."""
        return str(value)


@dataclass(frozen=True, eq=False, repr=False)
class Stock:
    """The size of a sheet in the rack [mm], the longer side first."""

    least: float = 1.0
    most: float = 100_000.0
    metavar: str = "SIZE"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        """What may be given, in words."""
        return "length x width of a sheet, such as 2500 x 1250 or 10' x 5', each from 1 mm to 100 m"

    def read(self, given: object, *, unit: str) -> tuple[float, float]:
        """The two sides [mm], the longer first. Raises InputError."""
        parts = _TIMES.split(given.strip()) if isinstance(given, str) else []
        if len(parts) != 2 or not all(parts):
            raise _refused(f"{shown(given)} is not length x width", self.allowed)
        sides = [parse_length(each, unit=unit, allowed=self.allowed) for each in parts]
        for text, side in zip(parts, sides, strict=True):
            if side < self.least:
                raise _refused(f"{shown(text)} is too small", self.allowed)
            if side > self.most:
                raise _refused(f"{shown(text)} is too large", self.allowed)
        return max(sides), min(sides)

    def record(self, value: object) -> object:
        """The two sides [mm]."""
        return list(_sides(value))

    def text(self, value: object) -> str:
        """The value as an option would give it."""
        long, wide = _sides(value)
        return f"{number_text(long)} mm x {number_text(wide)} mm"


def _sides(value: object) -> tuple[float, float]:
    assert isinstance(value, tuple)
    long, wide = value
    return long, wide


MADE_IN = MadeIn()
STOCK = Stock()
