"""Lengths, angles and directions as people write them, and lengths as they read them.

Inside the program a length is in mm and an angle in radians. Text is taken as an exact
fraction and rounded once, so `12-3/8 in` is the double nearest to 314.325 mm.
"""

from __future__ import annotations

import math
import re

from develop.errors import InputError, Problem
from develop.wording import listed, near_miss, shown

__all__ = [
    "DIRECTION_WORDS",
    "UNITS",
    "format_length",
    "number_text",
    "parse_angle",
    "parse_area",
    "parse_direction",
    "parse_length",
    "parse_number",
    "sheet_unit",
]

# Each unit in mm as an exact fraction. The inch is 25.4 mm by definition (international yard and
# pound agreement, 1959).
UNITS: dict[str, tuple[int, int]] = {
    "mm": (1, 1),
    "cm": (10, 1),
    "m": (1000, 1),
    "in": (254, 10),
    "ft": (3048, 10),
}
_MARKS = {"'": "ft", "′": "ft", "’": "ft", '"': "in", "″": "in", "”": "in"}

# Facing end B: x right, y up, anticlockwise.
DIRECTION_WORDS: dict[str, int] = {"right": 0, "top": 90, "left": 180, "bottom": 270}

_AMOUNT = (
    r"(?:(?P<whole>[0-9]+)(?:\s*-\s*|\s+))?(?P<over>[0-9]+)\s*/\s*(?P<under>[0-9]+)"
    r"|(?P<decimal>(?:[0-9]+\.?[0-9]*|\.[0-9]+)(?:[eE](?P<power>[+-]?[0-9]{1,3}))?)"
)
_QUANTITY = re.compile(rf"\s*(?:{_AMOUNT})\s*(?P<unit>[^\W\d_]+|['′’\"″”])?\s*")
_SIGN = re.compile(r"\s*([+\-−])?")
_CLOCK = re.compile(r"([0-9]{1,2}):([0-9]{2})")
_LONGEST = 80

_LENGTHS = "a length such as 450, 45 cm, 12-3/8 in or 1' 6\""


def _problem(given: str, allowed: str) -> InputError:
    return InputError(Problem(field="", given=given, allowed=allowed))


def _ratio(found: re.Match[str]) -> tuple[int, int] | None:
    """The amount that was matched as numerator and denominator; None for a fraction that is none."""
    if found["decimal"] is None:
        over, under = int(found["over"]), int(found["under"])
        if under == 0 or (found["whole"] is not None and over >= under):
            return None
        return int(found["whole"] or 0) * under + over, under
    digits, _, power = found["decimal"].lower().partition("e")
    before, _, after = digits.partition(".")
    shift = int(power or 0) - len(after)
    number = int(before + after)
    return (number * 10**shift, 1) if shift >= 0 else (number, 10**-shift)


def _quotient(number: int, divisor: int) -> float:
    """The double nearest to number / divisor; inf when it is too large for one."""
    try:
        return number / divisor
    except OverflowError:
        return math.inf


def _as_text(given: object, *, what: str, allowed: str) -> str:
    """Text of a value from the command line or a job file; numbers become text, all else is refused."""
    if isinstance(given, bool) or not isinstance(given, str | int | float):
        raise _problem(f"{shown(given)} is not {what}", allowed)
    if isinstance(given, float) and not math.isfinite(given):
        raise _problem(f"{given} is not {what}", allowed)
    if isinstance(given, int) and abs(given) >= 10**30:
        raise _problem(f"{shown(given)} is not {what}", allowed)
    text = given if isinstance(given, str) else repr(given)
    if not text.strip():
        raise _problem(f"{shown(text)} is empty", allowed)
    if len(text) > _LONGEST:
        raise _problem(f"{shown(text)} is not {what}", allowed)
    return text


def parse_length(given: object, *, unit: str = "mm", allowed: str = _LENGTHS) -> float:
    """A length [mm] from text or a number; a bare number is in `unit`.

    Suffixes mm, cm, m, in, ft, ' and "; fractions and feet with inches. Raises InputError.

    >>> parse_length("12-3/8 in"), parse_length("1' 6\\""), parse_length(24, unit="in")
    (314.325, 457.2, 609.6)
    """
    text = _as_text(given, what="a length", allowed=allowed)
    sign = _SIGN.match(text)
    assert sign is not None  # every part of the pattern is optional
    at, total, under = sign.end(), 0, 1
    names: list[str] = []
    while at < len(text) or not names:
        found = _QUANTITY.match(text, at)
        ratio = _ratio(found) if found else None
        if found is None or ratio is None:
            raise _problem(f"{shown(given)} is not a length", allowed)
        written = found["unit"]
        name = unit if written is None else _MARKS.get(written, written.lower())
        if name not in UNITS:
            raise _problem(f"{shown(given)} has the unit {shown(written)}", f"{listed(UNITS)}; {allowed}")
        names.append(name if written else "")
        mm = UNITS[name]
        total, under = total * ratio[1] * mm[1] + ratio[0] * mm[0] * under, under * ratio[1] * mm[1]
        at = found.end()
        if names == ["ft"] and text[at : at + 1] == "-":  # 1'-6", as drawings have it
            at += 1
            if at == len(text):
                raise _problem(f"{shown(given)} is not a length", allowed)
    if len(names) > 1 and names != ["ft", "in"]:
        raise _problem(f"{shown(given)} is not a length", allowed)
    return _quotient(-total if sign[1] in ("-", "−") else total, under)


_AREAS = "an area such as 125000 mm2, 0.125 m2, 194 in2 or 1-1/2 ft2"
_SIZED = re.compile(rf"\s*(?:{_AMOUNT})\s*(?P<unit>.*?)\s*")


def parse_area(given: object, *, unit: str = "mm", allowed: str = _AREAS) -> float:
    """An area [mm²] from text or a number; a bare number is in the square of `unit`.

    Suffixes mm2, cm2, m2, in2 and ft2, also as mm² or sq mm; fractions. Raises InputError.

    >>> parse_area("0.125 m2"), parse_area("1-1/2 sq in"), parse_area(2, unit="in")
    (125000.0, 967.74, 1290.32)
    """
    text = _as_text(given, what="an area", allowed=allowed)
    sign = _SIGN.match(text)
    assert sign is not None  # every part of the pattern is optional
    found = _SIZED.fullmatch(text, sign.end())
    ratio = _ratio(found) if found else None
    if found is None or ratio is None:
        raise _problem(f"{shown(given)} is not an area", allowed)
    squares = {f"{name}2": size for name, size in UNITS.items()}
    written = found["unit"]
    name = re.sub(r"(?:\^2|²)$", "2", re.sub(r"^sq\.?\s*([a-z]+)$", r"\g<1>2", written.lower())) or f"{unit}2"
    if name not in squares:
        raise _problem(f"{shown(given)} has the unit {shown(written)}", f"{listed(squares)}; {allowed}")
    over, under = squares[name]
    number = -ratio[0] if sign[1] in ("-", "−") else ratio[0]
    return _quotient(number * over * over, ratio[1] * under * under)


def parse_number(given: object, *, what: str, allowed: str, suffixes: tuple[str, ...] = ()) -> float:
    """A plain number, decimal or with a fraction, and perhaps one of the suffixes. Raises InputError.

    >>> parse_number("22-1/2", what="a number", allowed="")
    22.5
    """
    text = _as_text(given, what=what, allowed=allowed).strip()
    for suffix in suffixes:
        if text.lower().endswith(suffix):
            text = text[: -len(suffix)]
            break
    sign = _SIGN.match(text)
    assert sign is not None  # every part of the pattern is optional
    found = _QUANTITY.fullmatch(text, sign.end())
    ratio = _ratio(found) if found else None
    if found is None or ratio is None or found["unit"]:
        raise _problem(f"{shown(given)} is not {what}", allowed)
    return _quotient(-ratio[0] if sign[1] in ("-", "−") else ratio[0], ratio[1])


_DEGREES = ("degrees", "degree", "deg", "°")


def parse_angle(given: object, *, allowed: str = "degrees, such as 30 or 22-1/2") -> float:
    """An angle [rad] from degrees as text or a number. Raises InputError.

    >>> round(parse_angle("-30") * 6 / math.pi, 15)
    -1.0
    """
    return math.radians(parse_number(given, what="an angle", allowed=allowed, suffixes=_DEGREES))


_DIRECTIONS = (
    "degrees from 0 to 360 anticlockwise facing end B (0 is right), right, top, left, bottom, or 2:30"
)


def parse_direction(given: object, *, allowed: str = _DIRECTIONS) -> float:
    """A direction round the section, facing end B: [rad] in [0, 2 pi), anticlockwise from right.

    Degrees from -360 to 360, a word, or a clock position; twelve o'clock is top. Raises InputError.

    >>> parse_direction("3:00"), parse_direction("top") == parse_direction("12:00") == math.pi / 2
    (0.0, True)
    """
    word = given.strip().lower() if isinstance(given, str) else ""
    if word in DIRECTION_WORDS:
        return math.radians(DIRECTION_WORDS[word])
    clock = _CLOCK.fullmatch(word)
    if clock:
        hour, minute = int(clock[1]), int(clock[2])
        if hour > 12 or minute > 59:
            raise _problem(f"{shown(given)} is not a time on a clock of twelve hours", allowed)
        return math.radians((90 - 30 * hour - minute / 2) % 360)
    try:
        degrees = parse_number(given, what="a direction", allowed=allowed, suffixes=_DEGREES)
    except InputError:
        hint = near_miss(word, DIRECTION_WORDS) if word else ""
        if not hint:
            raise
        raise _problem(f"{shown(given)} is not a direction{hint}", allowed) from None
    if not -360 <= degrees <= 360:
        raise _problem(f"{shown(given)} is more than a full turn", allowed)
    turned = degrees % 360
    return math.radians(turned) if turned < 360 else 0.0


def number_text(value: float) -> str:
    """A number with all its digits and none that say nothing.

    >>> number_text(600.0), number_text(355.6), number_text(-0.0)
    ('600', '355.6', '0')
    """
    return str(int(value)) if value == int(value) and abs(value) < 1e15 else repr(float(value))


def sheet_unit(unit: str) -> str:
    """The unit that sheets are written in when lengths were given in `unit`: `in` for in and ft, else `mm`.

    >>> sheet_unit("ft"), sheet_unit("cm")
    ('in', 'mm')
    """
    return "in" if unit in ("in", "ft") else "mm"


def format_length(
    mm: float, *, unit: str = "mm", digits: int = 1, fraction: int = 32, suffix: bool = True
) -> str:
    """A length [mm] for a reader: decimals in mm, cm or m; whole and fraction in inches.

    Rounded once, half away from zero, from the exact value. Raises InputError for a unit that has
    no such form, ValueError for a length that is not finite.

    >>> format_length(1256.64), format_length(1268.5, unit="in"), format_length(25.3, unit="in")
    ('1256.6 mm', '49-15/16 in', '1 in')
    """
    if unit not in ("mm", "cm", "m", "in"):
        raise _problem(f"{shown(unit)} is not a unit to print", listed(("mm", "cm", "m", "in")))
    if not math.isfinite(mm):
        raise ValueError(f"{mm} is not a length")
    over, under = abs(float(mm)).as_integer_ratio()
    size = UNITS[unit]
    parts = fraction if unit == "in" else 10**digits
    over, under = over * size[1] * parts, under * size[0]
    steps = (2 * over + under) // (2 * under)
    whole, rest = divmod(steps, parts)
    if unit == "in":
        if rest:
            shared = math.gcd(rest, parts)
            small = f"{rest // shared}/{parts // shared}"
            text = f"{whole}-{small}" if whole else small
        else:
            text = str(whole)
    else:
        text = f"{whole}.{rest:0{digits}d}" if digits else str(whole)
    return f"{'-' if mm < 0 and steps else ''}{text}{' ' + unit if suffix else ''}"
