"""The text form of a section: `round 400`, `ellipse 600 x 300`, `pipe DN 150`."""

from __future__ import annotations

import re
from collections.abc import Callable
from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.units import number_text, parse_length
from develop.wording import listed, near_miss, shown

__all__ = ["FLATTEST", "LARGEST", "SMALLEST", "SectionSpec", "parse_section"]

SMALLEST = 0.1
LARGEST = 100_000.0
# Flatter than this an ellipse is a folded sheet; results are proven down to here.
FLATTEST = 1000.0

_FORMS = {
    "round": "round 400",
    "ellipse": "ellipse 600 x 300",
    "pipe": "pipe DN 150 or pipe NPS 6",
}
_ALLOWED = f"{listed(_FORMS.values())}; sizes from 0.1 mm to 100 m"
_LONGEST_SIZE = 12
_SIZE_TEXT = r"[0-9][^xX×]{0,20}"
# Ways in which people write a round section or an oval that are not forms of their own.
_DIAMETER = re.compile(
    rf"(?:circle|circular|dia(?:m(?:eter)?)?\.?|[Øø⌀∅])?\s*({_SIZE_TEXT}?)\s*(?:dia(?:m(?:eter)?)?\.?|[Øø⌀∅])?",
    re.IGNORECASE,
)
_TWO_SIZES = re.compile(rf"{_SIZE_TEXT}[xX×]\s*{_SIZE_TEXT}")
_OVAL = re.compile(rf"(flat[ -]?)?oval\s*({_TWO_SIZES.pattern})?.*", re.IGNORECASE | re.DOTALL)
_BETWEEN = re.compile(r"[xX×]")
_PIPE = re.compile(r"(DN|NPS)\s*([^a-z]*?)(?:\s+([a-z0-9.]+(?:\s.*)?))?", re.IGNORECASE)


@dataclass(frozen=True)
class SectionSpec:
    """A section as its text says it.

    kind: `round`, `ellipse` or `pipe`. width, height: overall [mm].
    text: the same section in one canonical form, sizes in mm.
    outside: the size is the outside whatever the piece's `sizes` says, as for every pipe.
    """

    kind: str
    width: float
    height: float
    text: str
    outside: bool = False


def _refused(given: str, allowed: str = _ALLOWED) -> InputError:
    return InputError(Problem(field="", given=given, allowed=allowed))


def parse_section(text: object, *, unit: str = "mm") -> SectionSpec:
    """The section that a text names; bare numbers in `unit`. Raises InputError with what is allowed.

    >>> parse_section("ellipse 24 in × 300").text
    'ellipse 609.6 x 300'
    """
    if not isinstance(text, str):
        raise _refused(f"{shown(text)} is not a section")
    name, _, rest = text.strip().partition(" ")
    read = _READERS.get(name.lower())
    if read is None:
        # `ellipse600x300` and `round400` are clear enough to be taken for what they are.
        joined = re.fullmatch(r"\s*(round|ellipse|pipe)\s*(.*)", text, re.IGNORECASE | re.DOTALL)
        if joined is None:
            raise _refused(f"{shown(text)} is not a section{_hint(text)}")
        read, rest = _READERS[joined[1].lower()], joined[2]
    return read(text, rest.strip(), unit)


def _hint(text: str) -> str:
    """What a text that is no section was meant for, as far as it can be known."""
    plain = text.strip()
    diameter = _DIAMETER.fullmatch(plain)
    if diameter:
        return f"; did you mean {shown(f'round {diameter[1]}')}?"
    oval = _OVAL.fullmatch(plain)
    if oval:
        no_flat = "an oval of two straights and two half circles is not made yet"
        meant = f"did you mean {shown(f'ellipse {oval[2]}')}? " if oval[2] and not oval[1] else ""
        return f"; {meant}{no_flat}"
    if _TWO_SIZES.fullmatch(plain):
        return f"; did you mean {shown(f'ellipse {plain}')}?"
    name = plain.partition(" ")[0]
    return near_miss(name, _FORMS) if name else ""


def _size(text: str, size: str, unit: str) -> float:
    """One size of a section [mm]."""
    try:
        mm = parse_length(size, unit=unit)
    except InputError as error:
        (problem,) = error.problems
        raise _refused(f"{shown(text)}: {problem.given}") from None
    if mm <= 0:
        raise _refused(f"{shown(text)}: {shown(size.strip())} is not above zero")
    if not SMALLEST <= mm <= LARGEST:
        raise _refused(f"{shown(text)}: {shown(size.strip())} is too {'small' if mm < 1 else 'large'}")
    return mm


def _round(text: str, rest: str, unit: str) -> SectionSpec:
    if not rest:
        raise _refused(f"{shown(text)} has no diameter", "round 400; 0.1 mm to 100 m")
    if _BETWEEN.search(rest):
        raise _refused(f"{shown(text)} has two sizes; a round section has one, its diameter")
    size = _size(text, rest, unit)
    return SectionSpec("round", size, size, f"round {number_text(size)}")


def _ellipse(text: str, rest: str, unit: str) -> SectionSpec:
    sizes = _BETWEEN.split(rest)
    if len(sizes) != 2 or not all(size.strip() for size in sizes):
        raise _refused(f"{shown(text)} does not have two sizes", "ellipse 600 x 300; width, then height")
    width, height = (_size(text, size, unit) for size in sizes)
    if max(width, height) > FLATTEST * min(width, height):
        raise _refused(
            f"{shown(text)} is flatter than 1 to {FLATTEST:g}",
            f"width and height within 1 to {FLATTEST:g} of each other",
        )
    return SectionSpec("ellipse", width, height, f"ellipse {number_text(width)} x {number_text(height)}")


def _pipe(text: str, rest: str, unit: str) -> SectionSpec:
    from develop.tables.pipes import SERIES

    found = _PIPE.fullmatch(rest)
    if found is None or not 0 < len(found[2].strip()) <= _LONGEST_SIZE:
        raise _refused(f"{shown(text)} is not a pipe", "pipe DN 150 or pipe NPS 6, perhaps with asme or en")
    system, size = found[1].upper(), "-".join(found[2].replace("-", " ").split())
    series = (found[3] or "").lower()
    if series and series not in SERIES:
        hint = near_miss(series, SERIES)
        raise _refused(
            f"{shown(text)}: {shown(found[3])} is not a series{hint}",
            listed(f"{word} ({standard})" for word, standard in SERIES.items()),
        )
    return (_by_dn if system == "DN" else _by_nps)(text, size, series)


def _by_dn(text: str, size: str, series: str) -> SectionSpec:
    from develop.tables.pipes import SERIES, by_dn

    tables = {word: by_dn(word) for word in SERIES if series in ("", word)}
    found = {word: table[size] for word, table in tables.items() if size in table}
    if not found:
        sizes = sorted({int(each) for table in tables.values() for each in table})
        where = SERIES[series] if series else listed(SERIES.values())
        raise _refused(
            f"{shown(text)}: DN {size} is not in {where}", f"pipe DN and one of {listed(map(str, sizes))}"
        )
    if len(set(found.values())) > 1:
        both = ", ".join(f"{number_text(mm)} mm in {SERIES[word]}" for word, mm in found.items())
        raise _refused(f"{shown(text)} is {both}", listed(f"pipe DN {size} {word}" for word in found))
    outside = next(iter(found.values()))
    # The series is part of the name only where it makes a difference.
    differ = len({by_dn(word).get(size, outside) for word in SERIES}) > 1
    name = f"pipe DN {size} {series}" if differ else f"pipe DN {size}"
    return SectionSpec("pipe", outside, outside, name, outside=True)


def _by_nps(text: str, size: str, series: str) -> SectionSpec:
    from develop.tables.pipes import by_nps

    table = by_nps()
    if series == "en":
        raise _refused(f"{shown(text)}: EN 10220 has no NPS sizes", f"pipe NPS {size} or a DN size")
    if size not in table:
        raise _refused(
            f"{shown(text)}: NPS {size} is not in the table", f"pipe NPS and one of {listed(table)}"
        )
    return SectionSpec("pipe", table[size], table[size], f"pipe NPS {size}", outside=True)


_READERS: dict[str, Callable[[str, str, str], SectionSpec]] = {
    "round": _round,
    "ellipse": _ellipse,
    "pipe": _pipe,
}
