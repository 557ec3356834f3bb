"""Outside diameters of pipe, from `pipes.toml`, which says where each table was read."""

from __future__ import annotations

from collections.abc import Mapping
from functools import cache
from types import MappingProxyType

__all__ = ["SERIES", "Outside", "by_dn", "by_nps", "provenance"]

Outside = Mapping[str, float]

# Word in a section's text, and the standard it stands for.
SERIES: Mapping[str, str] = MappingProxyType({"asme": "ASME B36.10M", "en": "EN 10220 series 1"})


@cache
def _tables() -> dict[str, dict[str, object]]:
    import tomllib
    from os.path import dirname, join

    with open(join(dirname(__file__), "pipes.toml"), "rb") as file:
        return tomllib.load(file)


def _column(table: str, column: str) -> dict[str, float]:
    values = _tables()[table][column]
    assert isinstance(values, dict)
    return values


def by_dn(series: str) -> Outside:
    """Outside diameter [mm] by DN, in one of `SERIES`; KeyError for another.

    >>> by_dn("asme")["125"], by_dn("en")["125"]
    (141.3, 139.7)
    """
    if series not in SERIES:
        raise KeyError(series)
    return MappingProxyType(_column(series, "mm"))


def by_nps() -> Outside:
    """Outside diameter [mm] by NPS; sizes with a fraction are written `2-1/2`.

    >>> by_nps()["4"]
    114.3
    """
    from develop.units import parse_length

    inches = _column("nps", "inch")
    return MappingProxyType({name: parse_length(inch, unit="in") for name, inch in inches.items()})


def provenance(table: str) -> Mapping[str, str]:
    """What the file says of a table (`asme`, `nps` or `en`): title, source, edition, page, read, disagree."""
    return MappingProxyType({key: value for key, value in _tables()[table].items() if isinstance(value, str)})
