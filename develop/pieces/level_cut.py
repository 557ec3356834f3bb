"""The field of a cut at a height, square or sloping, as a cone has it."""

from __future__ import annotations

import re
from dataclasses import dataclass, replace

from develop.errors import InputError, Problem
from develop.pieces.field_types import DIRECTION, Angle, FieldType, Length
from develop.units import number_text
from develop.wording import listed, near_miss, shown

__all__ = ["LEVEL_CUT", "LevelCut", "LevelCutText"]

_PARTS: dict[str, FieldType] = {"height": Length(), "slope": Angle(least=0.0, most=89.9), "long": DIRECTION}
_NAMES = re.compile(r"\b(height|slope|long)\b")


@dataclass(frozen=True)
class LevelCut:
    """A plane cut that meets the line of centres at a height [mm].

    slope: angle between the plane and a square cut [rad]. long: direction in which the piece is
    longest [rad], facing end B.
    """

    height: float
    slope: float = 0.0
    long: float = 0.0


@dataclass(frozen=True, eq=False, repr=False)
class LevelCutText:
    """A cut as `300`, as `height 300 slope 20 long top`, as a table of these, or `none` (None)."""

    metavar: str = "CUT"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        return (
            "none, the height of a square cut such as 300, or height 300 slope 20 long top (in a job file "
            'also { height = 300, slope = 20, long = "top" }), slope from 0 to 89.9'
        )

    def read(self, given: object, *, unit: str) -> LevelCut | None:
        parts = self._parts(given)
        if parts is None:
            return None
        problems = [
            Problem(name, f"no such field{near_miss(name, _PARTS)}", listed(_PARTS))
            for name in parts
            if name not in _PARTS
        ]
        # A square cut needs no more than its height.
        needed = {"height"} if not {"slope", "long"} & set(parts) else set(_PARTS)
        read: dict[str, float] = {}
        for name, part in _PARTS.items():
            if name not in parts:
                if name in needed:
                    problems.append(Problem(name, "not given", part.allowed))
                continue
            try:
                value = part.read(parts[name], unit=unit)
                assert isinstance(value, float)
                read[name] = value
            except InputError as error:
                # A height given alone stands for the whole field.
                inside = name if isinstance(given, dict) or len(parts) > 1 else ""
                problems += [Problem(inside, each.given, each.allowed) for each in error.problems]
        if problems:
            raise InputError(problems)
        return LevelCut(**read)

    def _parts(self, given: object) -> dict[str, object] | None:
        """The parts by name, as given; None for no cut."""
        if isinstance(given, dict):
            return dict(given)
        if not isinstance(given, str):
            return {"height": given}
        text = given.strip().lower()
        if text == "none":
            return None
        first, *rest = _NAMES.split(text)
        if not rest:
            return {"height": given}
        names, values = rest[::2], [value.strip(" =,") for value in rest[1::2]]
        if first.strip() or len(set(names)) < len(names) or not all(values):
            raise InputError(Problem("", f"{shown(given)} is not a cut", self.allowed))
        return dict(zip(names, values, strict=True))

    def record(self, value: object) -> object:
        if value is None:
            return "none"
        assert isinstance(value, LevelCut)
        return {
            "height": value.height,
            "slope": _PARTS["slope"].record(value.slope),
            "long": _PARTS["long"].record(value.long),
        }

    def text(self, value: object) -> str:
        if value is None:
            return "none"
        assert isinstance(value, LevelCut)
        height = f"{number_text(value.height)} mm"
        if value.slope == 0.0:
            return height
        slope, long = (_PARTS[name].text(getattr(value, name)) for name in ("slope", "long"))
        return f"height {height} slope {slope} long {long}"

    def mirrored(self, value: object) -> object:
        """The cut with right and left exchanged."""
        if value is None:
            return None
        assert isinstance(value, LevelCut)
        long = DIRECTION.mirrored(value.long)
        assert isinstance(long, float)
        return replace(value, long=long)


LEVEL_CUT = LevelCutText()
