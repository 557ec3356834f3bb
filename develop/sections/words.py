"""The words of a section's text: sizes with x between, and words with a value each, in any order."""

from __future__ import annotations

import re
from collections.abc import Sequence
from dataclasses import dataclass

from develop.errors import InputError
from develop.sections.spec import LARGEST, SMALLEST, refused
from develop.units import UNITS, parse_area, parse_length, parse_number
from develop.wording import near_miss, shown

__all__ = ["Words", "read_words", "size_of"]

_LIMITS = "sizes from 0.1 mm to 100 m"
_BETWEEN = re.compile(r"[xX×]")
_BRACKETS = re.compile(r"([^()]+)\(([^()]*)\)")
_WORD = re.compile(r"[^\W\d_]{2,}")
_LEAST_RATIO, _MOST_RATIO = 0.001, 1000.0


@dataclass(frozen=True)
class Words:
    """What a text gives: sizes [mm], values by word [mm, mm², or a plain number].

    bracketed: the words stood in brackets behind sizes that follow from them.
    """

    sizes: tuple[float, ...]
    values: dict[str, float]
    bracketed: bool


def read_words(text: str, rest: str, words: Sequence[str], *, unit: str, form: str) -> Words:
    """The sizes and the values of some `words` in `rest`, the text behind the name of the kind.

    form: what would be right, for messages. Raises InputError.
    """
    brackets = _BRACKETS.fullmatch(rest)
    ahead, behind = (brackets[1], brackets[2]) if brackets else (rest, "")
    known = re.compile(rf"(?<![^\W\d_])({'|'.join(words)})(?![^\W\d_])", re.IGNORECASE)
    pieces = known.split(re.sub(r",\s+", " ", f"{ahead} {behind}" if brackets else rest))
    if brackets and (known.search(ahead) or not known.search(behind)):
        raise refused(f"{shown(text)}: only what sizes follow from stands in brackets", form)
    first = pieces[0].strip()
    strange = next((word for word in _WORD.findall(rest) if _is_strange(word, words)), "")
    if strange:
        hint = near_miss(strange, [word for word in words if len(word) > 1])
        if hint or (first.startswith(strange) and len(pieces) > 1):
            raise refused(f"{shown(text)} has the word {shown(strange)}{hint}", form)
    sizes = _BETWEEN.split(first) if first else []
    if not all(size.strip() for size in sizes):
        raise refused(f"{shown(text)} does not have two sizes", f"{form}; width, then height")
    values: dict[str, float] = {}
    for word, value in zip(map(str.lower, pieces[1::2]), pieces[2::2], strict=True):
        if word in values:
            raise refused(f"{shown(text)} has {word} twice", form)
        values[word] = _value(text, word, value.strip(), unit, form)
    return Words(tuple(size_of(text, size, unit) for size in sizes), values, brackets is not None)


def _is_strange(word: str, words: Sequence[str]) -> bool:
    return word.lower() not in (*words, *UNITS, "sq")


def size_of(text: str, size: str, unit: str, *, what: str = "") -> float:
    """One size of a section [mm]; `text` and `what` are for messages. Raises InputError."""
    try:
        mm = parse_length(size, unit=unit)
    except InputError as error:
        (problem,) = error.problems
        raise refused(f"{shown(text)}: {what}{problem.given}", _LIMITS) from None
    if mm <= 0:
        raise refused(f"{shown(text)}: {what}{shown(size.strip())} is not above zero", _LIMITS)
    if not SMALLEST <= mm <= LARGEST:
        raise refused(
            f"{shown(text)}: {what}{shown(size.strip())} is too {'small' if mm < 1 else 'large'}", _LIMITS
        )
    return mm


def _value(text: str, word: str, value: str, unit: str, form: str) -> float:
    """The value of one word [mm, mm² or plain]."""
    if not value:
        raise refused(f"{shown(text)} has no value behind {word}", form)
    if word in ("width", "height"):
        return size_of(text, value, unit, what=f"{word} ")
    try:
        if word in ("girth", "r"):
            number = parse_length(value, unit=unit)
        elif word == "area":
            number = parse_area(value, unit=unit)
        else:
            allowed = f"{word} 0.5" if word == "ratio" else f"{word} 2.5"
            number = parse_number(value, what=f"a number for {word}", allowed=allowed)
    except InputError as error:
        (problem,) = error.problems
        raise refused(f"{shown(text)}: {word}: {problem.given}", problem.allowed) from None
    if word == "r" and number == 0.0:
        return 0.0
    least = "0 or more" if word == "r" else "above zero"
    if not 0.0 < number < float("inf"):
        raise refused(f"{shown(text)}: {word} {shown(value)} is not {least}", f"{word} {least}")
    if word == "ratio" and not _LEAST_RATIO <= number <= _MOST_RATIO:
        raise refused(f"{shown(text)}: ratio {shown(value)}", "ratio (height over width) from 0.001 to 1000")
    return number
