"""The text form of standard pipe: `pipe DN 150`, `pipe NPS 6`, with the series where they differ."""

from __future__ import annotations

import re

from develop.sections.spec import SectionSpec, refused
from develop.units import number_text
from develop.wording import listed, near_miss, shown

__all__ = ["read_pipe"]

_LONGEST_SIZE = 12
_PIPE = re.compile(r"(DN|NPS)\s*([^a-z]*?)(?:\s+([a-z0-9.]+(?:\s.*)?))?", re.IGNORECASE)


def read_pipe(text: str, rest: str, unit: str) -> SectionSpec:
    """The pipe that `rest`, the text behind the word pipe, names; the unit does not matter."""
    from develop.tables.pipes import SERIES

    found = _PIPE.fullmatch(rest)
    if found is None or not 0 < len(found[2].strip()) <= _LONGEST_SIZE:
        raise refused(f"{shown(text)} is not a pipe", "pipe DN 150 or pipe NPS 6, perhaps with asme or en")
    system, size = found[1].upper(), "-".join(found[2].replace("-", " ").split())
    series = (found[3] or "").lower()
    if series and series not in SERIES:
        hint = near_miss(series, SERIES)
        raise refused(
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
        raise refused(
            f"{shown(text)}: DN {size} is not in {where}", f"pipe DN and one of {listed(map(str, sizes))}"
        )
    if len(set(found.values())) > 1:
        both = ", ".join(f"{number_text(mm)} mm in {SERIES[word]}" for word, mm in found.items())
        raise refused(f"{shown(text)} is {both}", listed(f"pipe DN {size} {word}" for word in found))
    outside = next(iter(found.values()))
    # The series is part of the name only where it makes a difference.
    differ = len({by_dn(word).get(size, outside) for word in SERIES}) > 1
    name = f"pipe DN {size} {series}" if differ else f"pipe DN {size}"
    return SectionSpec("pipe", outside, outside, name, outside=True)


def _by_nps(text: str, size: str, series: str) -> SectionSpec:
    from develop.tables.pipes import by_nps

    table = by_nps()
    if series == "en":
        raise refused(f"{shown(text)}: EN 10220 has no NPS sizes", f"pipe NPS {size} or a DN size")
    if size not in table:
        raise refused(
            f"{shown(text)}: NPS {size} is not in the table", f"pipe NPS and one of {listed(table)}"
        )
    return SectionSpec("pipe", table[size], table[size], f"pipe NPS {size}", outside=True)
