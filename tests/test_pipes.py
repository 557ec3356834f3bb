"""The pipe table against the inch sizes that it is rounded from."""

from __future__ import annotations

from fractions import Fraction

import pytest

from develop.tables.pipes import SERIES, by_dn, by_nps, provenance

# Which NPS is which DN: ASME B36.10M, from memory.
PAIRS = {
    "1/2": "15", "3/4": "20", "1": "25", "1-1/4": "32", "1-1/2": "40", "2": "50", "2-1/2": "65", "3": "80",
    "3-1/2": "90", "4": "100", "5": "125", "6": "150", "8": "200", "10": "250", "12": "300", "14": "350",
    "16": "400", "18": "450", "20": "500", "22": "550", "24": "600", "30": "750", "36": "900", "48": "1200",
}  # fmt: skip


def test_every_inch_size_has_its_metric_pair() -> None:
    assert set(by_nps()) == set(PAIRS)
    assert set(by_dn("asme")) == set(PAIRS.values())


@pytest.mark.parametrize(("nps", "dn"), PAIRS.items())
def test_the_metric_size_is_the_inch_size_rounded(nps: str, dn: str) -> None:
    # To 0.1 mm up to NPS 16, to 1 mm above; halves go either way between the standards.
    step = Fraction(1, 10) if int(dn) <= 400 else Fraction(1)
    rounded = Fraction(str(by_dn("asme")[dn]))
    assert abs(Fraction(str(by_nps()[nps])) - rounded) <= step / 2


def test_from_nps_14_up_the_outside_is_the_size_in_inches() -> None:
    # Common practice, no source.
    for nps, mm in by_nps().items():
        if nps.isdigit() and int(nps) >= 14:
            assert mm == float(Fraction(254, 10) * int(nps))


def test_an_outside_is_larger_than_the_next_smaller_size() -> None:
    for table in (by_dn("asme"), by_dn("en"), by_nps()):
        sizes = list(table.values())
        assert sizes == sorted(set(sizes))


def test_where_the_two_series_differ() -> None:
    asme, en = by_dn("asme"), by_dn("en")
    assert {dn for dn in asme.keys() & en.keys() if asme[dn] != en[dn]} == {
        "20",
        "25",
        "32",
        "65",
        "125",
        "300",
    }


@pytest.mark.parametrize("table", ["asme", "nps", "en"])
def test_every_table_says_where_it_was_read(table: str) -> None:
    said = provenance(table)
    assert {"title", "source", "edition", "page", "read", "disagree"} == set(said)
    assert all(said.values())


def test_an_unknown_series_is_no_table() -> None:
    assert set(SERIES) == {"asme", "en"}
    with pytest.raises(KeyError):
        by_dn("nps")


def test_a_table_cannot_be_changed() -> None:
    with pytest.raises(TypeError):
        by_dn("asme")["15"] = 1.0  # type: ignore[index]
