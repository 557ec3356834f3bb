"""The fields of a plane cut: of an end, by slope and long; and at a height, as a cone has it."""

from __future__ import annotations

import re
from collections.abc import Collection, Mapping
from dataclasses import dataclass, replace

from develop.errors import InputError, Problem
from develop.pieces.field_types import DIRECTION, Angle, FieldType, Length
from develop.units import number_text
from develop.wording import listed, near_miss, shown

__all__ = ["CUT", "LEVEL_CUT", "Cut", "CutText", "LevelCut", "LevelCutText"]

_CUT_PARTS: dict[str, FieldType] = {"slope": Angle(least=0.0, most=89.9), "long": DIRECTION}
_PARTS: dict[str, FieldType] = {"height": Length(), **_CUT_PARTS}
_NAMES = re.compile(r"\b(height|slope|long)\b")


def _read_parts(
    parts: Mapping[str, object],
    types: Mapping[str, FieldType],
    needed: Collection[str] | None = None,
    *,
    unit: str,
    alone: bool = False,
) -> dict[str, float]:
    """The parts of a cut by name, each read as its type has it. Raises InputError with all that is wrong.

    needed: the parts that must be there, all where left out. alone: one part stands for the whole field.
    """
    problems = [
        Problem(name, f"no such field{near_miss(name, types)}", listed(types))
        for name in parts
        if name not in types
    ]
    read: dict[str, float] = {}
    for name, part in types.items():
        if name not in parts:
            if needed is None or name in needed:
                problems.append(Problem(name, "not given", part.allowed))
            continue
        try:
            value = part.read(parts[name], unit=unit)
            assert isinstance(value, float)
            read[name] = value
        except InputError as error:
            inside = "" if alone else name
            problems += [Problem(inside, each.given, each.allowed) for each in error.problems]
    if problems:
        raise InputError(problems)
    return read


def _mirrored_long(long: float) -> float:
    """The long direction [rad] with right and left exchanged."""
    mirrored = DIRECTION.mirrored(long)
    assert isinstance(mirrored, float)
    return mirrored


@dataclass(frozen=True)
class Cut:
    """An end cut by a plane.

    slope: angle between the plane and a square cut [rad], from 0, below a right angle.
    long: direction in which that end is longest [rad], facing end B.
    """

    slope: float
    long: float


@dataclass(frozen=True, eq=False, repr=False)
class CutText:
    """A cut as `slope 30 long 90`, as a table of slope and long, or `square` (None)."""

    metavar: str = "CUT"
    unit: str = "degrees"

    @property
    def allowed(self) -> str:
        return (
            "square, or slope 30 long 90 (in a job file also { slope = 30, long = 90 }), slope from 0 to 89.9"
        )

    def read(self, given: object, *, unit: str) -> Cut | None:
        if isinstance(given, dict):
            parts: dict[str, object] = given
        elif isinstance(given, str):
            if given.strip().lower() == "square":
                return None
            pairs = [part.split() for part in given.replace("=", " ").split(",")]
            words = [word for pair in pairs for word in pair]
            names, values = [word.lower() for word in words[::2]], words[1::2]
            # A comma stands between two pairs and nowhere else.
            if (
                not all(pair and len(pair) % 2 == 0 for pair in pairs)
                or sorted(names) != ["long", "slope"]
                or len(values) != 2
            ):
                raise InputError(Problem("", f"{shown(given)} is not a cut", self.allowed))
            parts = dict(zip(names, values, strict=True))
        else:
            raise InputError(Problem("", f"{shown(given)} is not a cut", self.allowed))
        return Cut(**_read_parts(parts, _CUT_PARTS, unit=unit))

    def record(self, value: object) -> object:
        if value is None:
            return "square"
        assert isinstance(value, Cut)
        return {name: part.record(getattr(value, name)) for name, part in _CUT_PARTS.items()}

    def text(self, value: object) -> str:
        if value is None:
            return "square"
        assert isinstance(value, Cut)
        return " ".join(f"{name} {part.text(getattr(value, name))}" for name, part in _CUT_PARTS.items())

    def mirrored(self, value: object) -> object:
        """The cut with right and left exchanged."""
        if value is None:
            return None
        assert isinstance(value, Cut)
        return replace(value, long=_mirrored_long(value.long))


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
        # A square cut needs no more than its height.
        needed = {"height"} if not {"slope", "long"} & set(parts) else set(_PARTS)
        # A height given alone stands for the whole field.
        alone = not isinstance(given, dict) and len(parts) == 1
        return LevelCut(**_read_parts(parts, _PARTS, needed, unit=unit, alone=alone))

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
        return replace(value, long=_mirrored_long(value.long))


CUT = CutText()
LEVEL_CUT = LevelCutText()
