"""The types a field can have: each reads a value from a job file or an option, and says what it allows.

Every type reads text as well as the plain value a job file may hold, and raises InputError with
all that is wrong with it; the field's name is filled in by whoever reads the whole piece.
They are never compared or printed: without those methods they load in half the time.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Protocol

from develop.errors import InputError, Problem
from develop.sections.text import ALLOWED, SectionSpec, parse_section
from develop.units import number_text, parse_angle, parse_direction, parse_length, parse_number
from develop.wording import listed, near_miss, shown

__all__ = [
    "ANGLE", "BEND_SEAM", "DIRECTION", "LENGTH", "MARK", "OFFSET", "SEAM", "SECTION", "TEXT",
    "THICKNESS", "Angle", "BendSeam", "Choice", "Count", "Direction", "FieldType",
    "Length", "Number", "Offset", "Pitch", "SectionText", "Text", "Thickness",
]  # fmt: skip


class FieldType(Protocol):
    """What a field can hold.

    metavar: its word in the help, such as LENGTH. unit: of a bare number, in words; empty for none.
    """

    @property
    def metavar(self) -> str: ...

    @property
    def unit(self) -> str: ...

    @property
    def allowed(self) -> str:
        """What may be given, as messages and the help say it."""
        ...

    def read(self, given: object, *, unit: str) -> object:
        """The value, in mm and radians; bare lengths in `unit`. Raises InputError."""
        ...

    def record(self, value: object) -> object:
        """The value for the record: mm and degrees, plain JSON."""
        ...

    def text(self, value: object) -> str:
        """The value as an option or a job file would give it."""
        ...


def _refused(given: str, allowed: str, *, inside: str = "") -> InputError:
    return InputError(Problem(field=inside, given=given, allowed=allowed))


def _degrees(angle: float) -> float:
    """Degrees without the last digits that the change to radians and back has cost."""
    return float(f"{math.degrees(angle):.14g}")


@dataclass(frozen=True, eq=False, repr=False)
class Length:
    """A length [mm] from `least` to `most`, both included."""

    least: float = 0.1
    most: float = 100_000.0
    metavar: str = "LENGTH"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        bounds = f"{_plain(self.least)} to {_plain(self.most)}"
        return f"a length from {bounds}, such as 450, 45 cm, 12-3/8 in or 1' 6\""

    def read(self, given: object, *, unit: str) -> float:
        mm = parse_length(given, unit=unit, allowed=self.allowed)
        if mm < self.least:
            wrong = "is negative" if mm < 0 else "is zero" if mm == 0 else "is too small"
            raise _refused(f"{shown(given)} {wrong}", self.allowed)
        if mm > self.most:
            raise _refused(f"{shown(given)} is too large", self.allowed)
        return mm

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return "" if value is None else f"{number_text(_number(value))} mm"


def _number(value: object) -> float:
    assert isinstance(value, int | float)
    return float(value)


def _plain(mm: float) -> str:
    return f"{number_text(mm / 1000)} m" if abs(mm) >= 10_000 else f"{number_text(mm)} mm"


@dataclass(frozen=True, eq=False, repr=False)
class Thickness(Length):
    """A thickness of sheet [mm], also by a gauge with its series; the record has the mm."""

    least: float = 0.0
    most: float = 1000.0

    @property
    def allowed(self) -> str:
        bounds = f"{_plain(self.least)} to {_plain(self.most)}"
        return (
            f"a length from {bounds}, such as 0.8, 3/32 in, or a gauge and its series: 20 ga galvanised, "
            "20 ga steel, 20 ga stainless, 20 ga aluminium, 20 swg"
        )

    def read(self, given: object, *, unit: str) -> float:
        if isinstance(given, str):
            from develop.tables.gauges import gauge_of, is_gauge

            if is_gauge(given):
                return gauge_of(given)
        return super().read(given, unit=unit)

    def record(self, value: object) -> object:
        return _number(value)

    def text(self, value: object) -> str:
        return getattr(value, "name", "") or super().text(value)


@dataclass(frozen=True, eq=False, repr=False)
class Angle:
    """An angle [rad]; `least` and `most` in degrees, both included."""

    least: float = -360.0
    most: float = 360.0
    metavar: str = "ANGLE"
    unit: str = "degrees"

    @property
    def allowed(self) -> str:
        return f"degrees from {number_text(self.least)} to {number_text(self.most)}"

    def read(self, given: object, *, unit: str) -> float:
        angle = parse_angle(given, allowed=self.allowed)
        if not self.least <= _degrees(angle) <= self.most:
            raise _refused(f"{shown(given)} is out of range", self.allowed)
        return angle

    def record(self, value: object) -> object:
        return _degrees(_number(value))

    def text(self, value: object) -> str:
        return number_text(_degrees(_number(value)))


def _mirrored_direction(direction: float) -> float:
    return (math.pi - direction) % (2.0 * math.pi)


@dataclass(frozen=True, eq=False, repr=False)
class Direction:
    """A direction round the section [rad], or one of the `words`, which stay words."""

    words: tuple[str, ...] = ()
    metavar: str = "DIRECTION"
    unit: str = "degrees"

    @property
    def allowed(self) -> str:
        own = "".join(f"{word}, " for word in self.words)
        return (
            f"{own}right, top, left, bottom, a clock time such as 2:30, or degrees anticlockwise from right"
        )

    def read(self, given: object, *, unit: str) -> float | str:
        word = given.strip().lower() if isinstance(given, str) else ""
        if word in self.words:
            return word
        try:
            return parse_direction(given, allowed=self.allowed)
        except InputError:
            hint = near_miss(word, self.words) if word else ""
            if not hint:
                raise
            raise _refused(f"{shown(given)} is not a direction{hint}", self.allowed) from None

    def record(self, value: object) -> object:
        return value if isinstance(value, str) else _degrees(_number(value))

    def text(self, value: object) -> str:
        return value if isinstance(value, str) else number_text(_degrees(_number(value)))

    def mirrored(self, value: object) -> object:
        """The direction with right and left exchanged."""
        return value if isinstance(value, str) else _mirrored_direction(_number(value))


@dataclass(frozen=True, eq=False, repr=False)
class BendSeam(Direction):
    """Where the seam of a bend is."""

    words: tuple[str, ...] = ("shortest", "throat", "heel", "side", "other side")

    def mirrored(self, value: object) -> object:
        """The place with right and left exchanged, on a bend that turns to the mirrored direction."""
        other = {"side": "other side", "other side": "side"}
        return other.get(value, value) if isinstance(value, str) else super().mirrored(value)


@dataclass(frozen=True, eq=False, repr=False)
class Count:
    """A whole number from `least` to `most`, both included."""

    least: int = 1
    most: int = 100_000
    metavar: str = "COUNT"
    unit: str = ""

    @property
    def allowed(self) -> str:
        return f"a whole number from {self.least} to {self.most}"

    def read(self, given: object, *, unit: str) -> int:
        number = parse_number(given, what="a whole number", allowed=self.allowed)
        if not math.isfinite(number) or number != int(number):
            raise _refused(f"{shown(given)} is not a whole number", self.allowed)
        if not self.least <= number <= self.most:
            raise _refused(f"{shown(given)} is out of range", self.allowed)
        return int(number)

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return str(value)


@dataclass(frozen=True, eq=False, repr=False)
class Number:
    """A number from `least` to `most`, both included."""

    least: float
    most: float
    metavar: str = "NUMBER"
    unit: str = ""

    @property
    def allowed(self) -> str:
        return f"a number from {number_text(self.least)} to {number_text(self.most)}"

    def read(self, given: object, *, unit: str) -> float:
        number = parse_number(given, what="a number", allowed=self.allowed)
        if not self.least <= number <= self.most:
            raise _refused(f"{shown(given)} is out of range", self.allowed)
        return number

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return "" if value is None else number_text(_number(value))


@dataclass(frozen=True, eq=False, repr=False)
class Choice:
    """One of a few words; spaces and capitals do not matter."""

    words: tuple[str, ...]
    metavar: str = "WORD"
    unit: str = ""

    @property
    def allowed(self) -> str:
        return listed(self.words)

    def read(self, given: object, *, unit: str) -> str:
        word = " ".join(given.split()) if isinstance(given, str) else ""
        known = {each.lower(): each for each in self.words}
        if word.lower() not in known:
            hint = near_miss(word, self.words) if word else ""
            raise _refused(f"{shown(given)} is not one of them{hint}", self.allowed)
        return known[word.lower()]

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return "" if value is None else str(value)

    def mirrored(self, value: object) -> object:
        """The word with right and left exchanged."""
        return {"right": "left", "left": "right"}.get(str(value), value)


@dataclass(frozen=True, eq=False, repr=False)
class Text:
    """One line of free text; as a `mark` it must also be fit for a file's name."""

    name: bool = False
    longest: int = 120
    metavar: str = "TEXT"
    unit: str = ""

    @property
    def allowed(self) -> str:
        if self.name:
            return (
                f"letters, digits, spaces and - _ . + = ( ) as in a file's name, at most {self.longest}, "
                "the first a letter, a digit or _"
            )
        return f"one line of text in quotes, at most {self.longest} characters"

    def read(self, given: object, *, unit: str) -> str:
        if not isinstance(given, str):
            raise _refused(f"{shown(given)} is not text", self.allowed)
        text = given.strip()
        wrong = self._wrong(text)
        if wrong:
            raise _refused(f"{shown(given)} {wrong}", self.allowed)
        return text

    def _wrong(self, text: str) -> str:
        if len(text) > self.longest or (self.name and len(text.encode(errors="replace")) > 2 * self.longest):
            return "is too long"
        odd = next((each for each in text if not each.isprintable()), None)
        if odd is not None:
            return f"has the character {shown(odd)}"
        if not self.name:
            return ""
        if not text:
            return "is empty"
        odd = next((each for each in text if not (each.isalnum() or each in " -_.+=()")), None)
        if odd is not None:
            return f"has the character {shown(odd)}"
        if not (text[0].isalnum() or text[0] == "_"):
            return f"begins with {shown(text[0])}"
        if text.endswith("."):
            return 'ends with "."'
        # These name devices on one family of systems, with or without an ending.
        if text.split(".")[0].strip().upper() in _DEVICES:
            return "cannot be a file's name on every system"
        return ""

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return str(value)


_DEVICES = {"CON", "PRN", "AUX", "NUL"} | {f"{port}{n}" for port in ("COM", "LPT") for n in range(10)}


@dataclass(frozen=True, eq=False, repr=False)
class SectionText:
    """A section in its text form."""

    metavar: str = "SECTION"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        return ALLOWED

    def read(self, given: object, *, unit: str) -> SectionSpec:
        return parse_section(given, unit=unit)

    def record(self, value: object) -> object:
        return self.text(value)

    def text(self, value: object) -> str:
        assert isinstance(value, SectionSpec)
        return value.text

    def mirrored(self, value: object) -> object:
        """The section with right and left exchanged: only a measured one changes."""
        assert isinstance(value, SectionSpec)
        if value.taped is None:
            return value
        pairs = zip(value.taped.directions, value.taped.diameters, strict=True)
        readings = " ".join(f"{number_text((180.0 - d) % 180.0)}:{number_text(s)}" for d, s in pairs)
        return parse_section(f"measured {readings} {value.taped.fit}")


@dataclass(frozen=True, eq=False, repr=False)
class Offset:
    """A shift to the right and up [mm], facing end B: `0,50` or [0, 50]."""

    most: float = 100_000.0
    metavar: str = "RIGHT,UP"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        return "right and up, such as 0,50 or -20,50 (in a job file also [0, 50]), each at most 100 m"

    def read(self, given: object, *, unit: str) -> tuple[float, float]:
        parts: list[object] = list(given.split(",")) if isinstance(given, str) else []
        if isinstance(given, list):
            parts = given
        if len(parts) != 2:
            raise _refused(f"{shown(given)} is not two lengths", self.allowed)
        right, up = (self._one(part, unit) for part in parts)
        return right, up

    def _one(self, given: object, unit: str) -> float:
        mm = parse_length(given, unit=unit, allowed=self.allowed)
        if abs(mm) > self.most:
            raise _refused(f"{shown(given)} is too large", self.allowed)
        return mm

    def record(self, value: object) -> object:
        return list(self._pair(value))

    def text(self, value: object) -> str:
        return ",".join(number_text(each) for each in self._pair(value))

    def mirrored(self, value: object) -> object:
        """The shift with right and left exchanged."""
        right, up = self._pair(value)
        return -right + 0.0, up

    def _pair(self, value: object) -> tuple[float, float]:
        assert isinstance(value, tuple)
        right, up = value
        return right, up


@dataclass(frozen=True, eq=False, repr=False)
class Pitch:
    """A roof's pitch as a rise in a run, `5 in 12` or `5:12`: its slope [rad]."""

    steepest: float = 85.0
    metavar: str = "PITCH"
    unit: str = ""

    @property
    def allowed(self) -> str:
        return f"a rise in a run, such as 5 in 12 or 5:12, up to {number_text(self.steepest)} degrees"

    def read(self, given: object, *, unit: str) -> float:
        parts = given.replace(":", " in ").split(" in ") if isinstance(given, str) else []
        if len(parts) != 2:
            raise _refused(f"{shown(given)} is not a pitch", self.allowed)
        rise, run = (parse_number(part, what="a pitch", allowed=self.allowed) for part in parts)
        if rise < 0.0 or run <= 0.0:
            raise _refused(f"{shown(given)} is not a rise of 0 or more in a run", self.allowed)
        slope = math.atan2(rise, run)
        if math.degrees(slope) > self.steepest:
            raise _refused(f"{shown(given)} is too steep", self.allowed)
        return slope

    def record(self, value: object) -> object:
        return None if value is None else self.text(value)

    def text(self, value: object) -> str:
        return "" if value is None else f"{number_text(round(12.0 * math.tan(_number(value)), 9))} in 12"


LENGTH = Length()
THICKNESS = Thickness()
ANGLE = Angle()
DIRECTION = Direction()
SEAM = Direction(words=("shortest",))
BEND_SEAM = BendSeam()
MARK = Text(name=True, longest=60)
TEXT = Text()
SECTION = SectionText()
OFFSET = Offset()
