"""Sheet gauges, from `gauges.toml`, which says where each table was read.

A gauge number means a thickness only together with its series: 20 gauge is 0.91 mm in steel, 1.01 mm
galvanised, 0.95 mm in stainless and 0.81 mm in aluminium.
"""

from __future__ import annotations

import re
from collections.abc import Mapping
from functools import cache
from types import MappingProxyType

from develop.errors import InputError, Problem
from develop.units import number_text, parse_length
from develop.wording import listed, near_miss, shown

__all__ = ["SERIES", "Gauge", "gauge_of", "is_gauge", "provenance", "thicknesses"]

SERIES: Mapping[str, str] = MappingProxyType(
    {
        "steel": "ga steel",
        "galvanised": "ga galvanised",
        "stainless": "ga stainless",
        "aluminium": "ga aluminium",
        "swg": "swg",
    }
)
"""Each series, and how it is written behind a number."""

# What names a series, beside the words that materials have.
_WORDS = {
    "swg": "swg", "isg": "swg", "standard wire gauge": "swg", "imperial standard wire gauge": "swg",
    "awg": "aluminium", "b&s": "aluminium", "brown & sharpe": "aluminium", "brown and sharpe": "aluminium",
    "american wire gauge": "aluminium",
    "msg": "steel", "mfrs": "steel", "manufacturers standard": "steel",
}  # fmt: skip
# The series that sheet of a material is sold by in the United States; of those above it in the family tree
# of materials.toml the nearest counts.
_BY_MATERIAL = {
    "steel": "steel", "galvanised": "galvanised", "stainless": "stainless", "aluminium": "aluminium",
    "copper": "aluminium", "brass": "aluminium", "bronze": "aluminium",
}  # fmt: skip

_GAUGE = r"ga(?:uge|ge)?|gge|g"
_ALL = rf"(?:{_GAUGE}|swg|isg|awg|msg|b\s?&\s?s)(?![a-z])"
_ANY = re.compile(rf"(?<![a-z]){_ALL}|#")
_BEHIND = re.compile(rf"(?<=[0-9])[-.]?(?={_ALL})")
_NUMBER = re.compile(r"(?<![\w./-])(?:[0-9]+/0|0{1,7}|[0-9]+)(?![./0-9-])")
_FILLING = {"ga", "gauge", "gage", "gge", "g", "no", "number", "#", "sheet", "plate"}


class Gauge(float):
    """A thickness [mm] that was given by its gauge: a plain number in all reckoning.

    name: the gauge, such as `20 ga galvanised`; material: what its series is for, empty for swg.
    """

    name: str
    material: str

    def __new__(cls, mm: float, name: str = "", material: str = "") -> Gauge:
        made = super().__new__(cls, mm)
        made.name, made.material = name, material
        return made


@cache
def _tables() -> dict[str, dict[str, object]]:
    import tomllib
    from os.path import dirname, join

    with open(join(dirname(__file__), "gauges.toml"), "rb") as file:
        return tomllib.load(file)


def thicknesses(series: str) -> Mapping[str, float]:
    """Thickness [in], as published, by gauge in one of `SERIES`; KeyError for another.

    >>> thicknesses("galvanised")["20"], thicknesses("swg")["20"]
    (0.0396, 0.036)
    """
    values = _tables()[series]["inch"]
    assert isinstance(values, dict)
    return MappingProxyType(values)


def provenance(series: str) -> Mapping[str, str]:
    """What the file says of a table: title, source, edition, page, read, disagree."""
    return MappingProxyType(
        {key: value for key, value in _tables()[series].items() if isinstance(value, str)}
    )


def is_gauge(text: str) -> bool:
    """Whether a text speaks of a gauge at all, with or without a series.

    >>> is_gauge("20 ga"), is_gauge("18SWG"), is_gauge("0.8 mm")
    (True, True, False)
    """
    return _ANY.search(text.lower()) is not None


def gauge_of(text: str) -> Gauge:
    """The thickness [mm] that a gauge with its series means. Raises InputError.

    The parts may stand in any order: `20 ga galvanised`, `galv. 20ga`, `#20 gauge steel`, `20 swg`.

    >>> gauge_of("20 ga galvanised").name, gauge_of("galvanized 20-gauge"), gauge_of("16swg")
    ('20 ga galvanised', 1.00584, 1.6256)
    """
    plain = re.sub(r"(?<=[a-z])\.", " ", _BEHIND.sub(" ", text.lower().replace("'", "").replace(",", " ")))
    plain = " ".join(re.sub(r"\bb\s?&\s?s\b", "b&s", plain.replace("#", " # ")).split())
    numbers = _NUMBER.findall(_without_materials(plain))
    if len(numbers) != 1:
        raise _refused(f"{shown(text)} has {'no' if not numbers else 'more than one'} gauge number", "20")
    number = _named(numbers[0])
    words = re.sub(rf"(?<!\S){re.escape(numbers[0])}(?!\S)", " ", plain, count=1)
    series, material, wrong = _series(words)
    if not series:
        raise _refused(f"{shown(text)} {wrong}", number)
    inch = thicknesses(series).get(number)
    if inch is None:
        sizes = tuple(thicknesses(series))
        raise _refused(
            f"{shown(text)}: there is no gauge {number} {SERIES[series].removeprefix('ga ')}",
            number,
            f"gauges {sizes[0]} to {sizes[-1]}",
        )
    made_of = material or ("" if series == "swg" else series)
    name = f"{number} {SERIES[series]}"
    if material and material != series:
        name = f"{number} {'swg' if series == 'swg' else 'ga'} {material.replace('-', ' ')}"
    return Gauge(_mm(inch), name, made_of)


def _mm(inch: float) -> float:
    return parse_length(inch, unit="in")


def _named(number: str) -> str:
    """A gauge as the tables have it: `000` is 3/0, `020` is 20."""
    if set(number) == {"0"}:
        return "0" if len(number) == 1 else f"{len(number)}/0"
    return "0" if number == "1/0" else number.lstrip("0")


def _without_materials(text: str) -> str:
    """The text without what a material's name has in it, such as the 304 of a stainless steel."""
    from develop.tables.materials import find_materials

    for _, start, end in reversed(find_materials(text)):
        text = f"{text[:start]} {text[end:]}"
    return text


def _series(words: str) -> tuple[str, str, str]:
    """The series and the material that the words name, or what is wrong with them."""
    from develop.tables.materials import find_materials, material_of

    named = set()
    rest = words
    for word in sorted(_WORDS, key=len, reverse=True):
        rest, count = re.subn(rf"(?<![\w&]){re.escape(word)}(?![\w&])", " ", rest)
        named |= {_WORDS[word]} if count else set()
    material = material_of(rest)
    found = find_materials(rest)
    for _, start, end in reversed(found):
        rest = f"{rest[:start]} {rest[end:]}"
    strange = [word for word in rest.split() if word not in _FILLING]
    if strange:
        from develop.tables.materials import material_words

        hint = near_miss(strange[0], [*material_words(), *_WORDS])
        return "", "", f"names no series of gauges: {shown(' '.join(strange))} is not known{hint}"
    if found and material is None:
        return "", "", "names more than one material"
    if len(named) > 1:
        return "", "", "names more than one series of gauges"
    if material is None:
        return (named.pop(), "", "") if named else ("", "", "is a thickness only together with its series")
    series = next((_BY_MATERIAL[each] for each in material.family if each in _BY_MATERIAL), "")
    if named == {"swg"}:
        return "swg", material.name, ""
    if named and named != {series}:
        return "", "", f"names a series of gauges that is not for {material.name}"
    return series, material.name, "" if series else f"has no series of gauges for {material.name}"


def _refused(given: str, number: str, first: str = "") -> InputError:
    """One message that names every series with what the number means in it."""
    meant = []
    for series, written in SERIES.items():
        inch = thicknesses(series).get(number)
        if inch is not None:
            meant.append(f"{number} {written} ({number_text(round(_mm(inch), 4))} mm)")
    choices = listed(meant) if meant else f"a gauge such as 20 with {listed(SERIES)}"
    return InputError(Problem(field="", given=given, allowed="; ".join(filter(None, (first, choices)))))
