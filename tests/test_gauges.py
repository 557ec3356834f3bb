"""The gauge tables against the weights and the formula that they are made from, and how gauges are read."""

from __future__ import annotations

from contextlib import suppress
from fractions import Fraction
from itertools import pairwise

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.errors import InputError
from develop.pieces.field_types import THICKNESS
from develop.tables.gauges import SERIES, Gauge, gauge_of, is_gauge, provenance, thicknesses

# Ounces per square foot by the Act of 3 March 1893, 15 U.S.C. 206. Read there: 10 (5.625 lb), 16 (2.5 lb), 18
# (2 lb), 20 (1.5 lb), 22 (1.25 lb); the others from memory.
OUNCES = {
    1: "180", 2: "170", 3: "160", 4: "150", 5: "140", 6: "130", 7: "120", 8: "110", 9: "100", 10: "90",
    11: "80", 12: "70", 13: "60", 14: "50", 15: "45", 16: "40", 17: "36", 18: "32", 19: "28", 20: "24", 21: "22",
    22: "20", 23: "18", 24: "16", 25: "14", 26: "12", 27: "11", 28: "10", 29: "9", 30: "8", 31: "7", 32: "6.5",
    33: "6", 34: "5.5", 35: "5", 36: "4.5", 37: "4.25", 38: "4",
}  # fmt: skip
HALF = Fraction(1, 20000)  # of the last of four decimals [in]


def published(series: str) -> dict[int, Fraction]:
    return {
        int(number): Fraction(str(inch)) for number, inch in thicknesses(series).items() if number.isdigit()
    }


def test_the_statutory_gauge_is_a_640th_of_an_inch_to_the_ounce() -> None:
    assert published("stainless") == {number: Fraction(ounces) / 640 for number, ounces in OUNCES.items()}


def test_the_manufacturers_gauge_is_the_weight_over_41_82() -> None:
    # Machinery's Handbook, 31st edition, p. 1453: t = (lb/ft²) / 41.82.
    for number, inch in published("steel").items():
        exact = Fraction(OUNCES[number]) / 16 / Fraction("41.82")
        assert abs(inch - exact) <= HALF, number
    assert set(published("steel")) == set(range(3, 39))


def test_the_galvanised_gauge_has_two_and_a_half_ounces_of_zinc() -> None:
    # Machinery's Handbook, 31st edition, p. 1453: .156 lb/ft² more, which is 2.5 oz.
    for number, inch in published("galvanised").items():
        exact = (Fraction(OUNCES[number]) + Fraction("2.5")) / 16 / Fraction("41.82")
        # Gauge 32 is printed a digit short; the table says so.
        assert abs(inch - exact) <= (HALF if number != 32 else HALF * Fraction("1.02")), number
    assert set(published("galvanised")) == set(range(8, 33))


@pytest.mark.parametrize(
    ("series", "number", "inch"),
    [
        # Machinery's Handbook, 31st edition, p. 1453.
        ("steel", "10", 0.1345), ("steel", "12", 0.1046), ("steel", "16", 0.0598), ("steel", "18", 0.0478),
        ("steel", "20", 0.0359),
        # Its misprints, .0244 and .2118, are not taken over.
        ("stainless", "21", 0.034375), ("stainless", "5", 0.21875),
        # 15 U.S.C. 206.
        ("stainless", "10", 0.140625), ("stainless", "16", 0.0625), ("stainless", "20", 0.0375),
        # From memory.
        ("galvanised", "20", 0.0396), ("galvanised", "24", 0.0276), ("galvanised", "26", 0.0217),
        ("swg", "7/0", 0.5), ("swg", "0", 0.324), ("swg", "10", 0.128), ("swg", "16", 0.064), ("swg", "20", 0.036),
        ("swg", "28", 0.0148), ("swg", "50", 0.001),
        ("aluminium", "16", 0.0508), ("aluminium", "18", 0.0403), ("aluminium", "20", 0.032),
    ],
)  # fmt: skip
def test_published_thicknesses(series: str, number: str, inch: float) -> None:
    assert thicknesses(series)[number] == inch


def test_brown_and_sharpe_is_a_geometric_series() -> None:
    """0.005 in times 92 to the power (36 - n)/39; 2/0 is n = -1. ASTM B258."""
    sizes = thicknesses("aluminium")
    for number, inch in sizes.items():
        n = 1 - int(number[0]) if "/" in number else int(number)
        # |t - 0.005 · 92^(k/39)| is at most half a digit: compare the 39th powers, which are exact.
        k, low, high = 36 - n, Fraction(str(inch)) - HALF, Fraction(str(inch)) + HALF
        exact = Fraction(1, 200) ** 39 * Fraction(92) ** k
        assert low**39 <= exact <= high**39, number
    assert set(sizes) == {"4/0", "3/0", "2/0", *map(str, range(37))}


def test_the_imperial_gauge_falls_by_steps_that_never_grow() -> None:
    # Order in Council of 1883, from memory: the steps were laid down in whole mils, later in fifths of them.
    inches = [Fraction(str(inch)) for inch in thicknesses("swg").values()]
    steps = [a - b for a, b in pairwise(inches)]
    assert len(inches) == 57  # 7/0 to 50
    assert all(step > 0 for step in steps)
    assert all(step % Fraction(1, 5000) == 0 for step in steps)
    assert steps == sorted(steps, reverse=True)


@pytest.mark.parametrize("series", SERIES)
def test_every_series_falls_and_says_where_it_was_read(series: str) -> None:
    inches = list(thicknesses(series).values())
    assert inches == sorted(set(inches), reverse=True)
    said = provenance(series)
    assert set(said) == {"title", "source", "edition", "page", "read", "disagree"}
    assert all(said.values())


def test_an_unknown_series_is_no_table() -> None:
    with pytest.raises(KeyError):
        thicknesses("birmingham")
    with pytest.raises(TypeError):
        thicknesses("swg")["20"] = 1.0  # type: ignore[index]


@pytest.mark.parametrize(
    ("text", "mm", "name", "material"),
    [
        # In mm from the inches above.
        ("20 ga galvanised", 1.00584, "20 ga galvanised", "galvanised"),
        ("20ga galv.", 1.00584, "20 ga galvanised", "galvanised"),
        ("GALVANIZED 20-gauge", 1.00584, "20 ga galvanised", "galvanised"),
        ("galvanised steel, 20 gauge", 1.00584, "20 ga galvanised", "galvanised"),
        ("20 g galvanised sheet", 1.00584, "20 ga galvanised", "galvanised"),
        ("#20 steel", 0.91186, "20 ga steel", "steel"),
        ("No. 20 gage mild steel", 0.91186, "20 ga steel", "steel"),
        ("20 ga stainless", 0.9525, "20 ga stainless", "stainless"),
        ("16 gauge 316L stainless steel", 1.5875, "16 ga stainless 316", "stainless-316"),
        ("1.4301, 18 ga", 1.27, "18 ga stainless 304", "stainless-304"),
        ("20 ga aluminum", 0.8128, "20 ga aluminium", "aluminium"),
        ("20 B & S aluminium", 0.8128, "20 ga aluminium", "aluminium"),
        ("20 awg", 0.8128, "20 ga aluminium", "aluminium"),
        ("20 ga brass", 0.8128, "20 ga brass", "brass"),
        ("20 swg", 0.9144, "20 swg", ""),
        ("20SWG", 0.9144, "20 swg", ""),
        ("20 swg galvanised", 0.9144, "20 swg galvanised", "galvanised"),
        ("000 swg", 9.4488, "3/0 swg", ""),
        ("3/0 swg", 9.4488, "3/0 swg", ""),
        ("0 swg", 8.2296, "0 swg", ""),
    ],
)  # fmt: skip
def test_spellings_of_a_gauge(text: str, mm: float, name: str, material: str) -> None:
    assert is_gauge(text)
    found = gauge_of(text)
    assert (found, found.name, found.material) == (mm, name, material)
    again = gauge_of(found.name)
    assert (again, again.name, again.material) == (mm, name, material)


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("20 ga", "is a thickness only together with its series"),
        ("20 ga wood", '"wood" is not known'),
        ("20 ga galvanisd", 'did you mean "galvanised"?'),
        ("20 ga us standard steel", '"us standard" is not known'),
        ("ga steel", "no gauge number"),
        ("20 ga steel 22 ga", "more than one gauge number"),
        ("20.5 ga steel", "no gauge number"),
        ("-20 ga steel", "no gauge number"),
        ("1/2 ga steel", "no gauge number"),
        ("20 ga steel copper", "more than one material"),
        ("20 swg awg", "more than one series"),
        ("20 awg steel", "names a series of gauges that is not for steel"),
        ("20 ga lead", "has no series of gauges for lead"),
        ("99 ga steel", "there is no gauge 99 steel; allowed: gauges 3 to 38"),
    ],
)
def test_what_is_no_gauge_is_refused_with_every_series(text: str, words: str) -> None:
    with pytest.raises(InputError) as caught:
        THICKNESS.read(text, unit="mm")
    (problem,) = caught.value.problems
    assert words in str(problem)
    for series in SERIES:
        assert series in problem.allowed


def test_a_gauge_that_one_series_lacks_is_offered_in_the_others() -> None:
    with pytest.raises(
        InputError, match="no gauge 2 steel; allowed: gauges 3 to 38; 2 ga stainless"
    ) as caught:
        gauge_of("2 ga steel")
    assert "2 ga steel (" not in str(caught.value)


def test_the_message_gives_what_the_number_is_in_each_series() -> None:
    with pytest.raises(InputError) as caught:
        gauge_of("20 gauge")
    assert str(caught.value) == (
        '"20 gauge" is a thickness only together with its series; allowed: 20 ga steel (0.9119 mm), 20 ga '
        "galvanised (1.0058 mm), 20 ga stainless (0.9525 mm), 20 ga aluminium (0.8128 mm) or 20 swg (0.9144 mm)"
    )


@pytest.mark.parametrize("text", ["0.8", "0.8 mm", "1/16 in", "1' 6\"", "0.8 galvanised", "8 cm"])
def test_a_length_is_no_gauge(text: str) -> None:
    assert not is_gauge(text)


def test_the_field_takes_both_and_the_record_has_mm() -> None:
    given = THICKNESS.read("20 ga galvanised", unit="in")
    assert THICKNESS.record(given) == 1.00584
    assert type(THICKNESS.record(given)) is float
    assert THICKNESS.text(given) == "20 ga galvanised"
    assert THICKNESS.read(THICKNESS.text(given), unit="mm") == given
    assert THICKNESS.read("1/32 in", unit="mm") == 0.79375
    assert THICKNESS.text(0.8) == "0.8 mm"


def test_a_gauge_is_a_plain_number_in_all_reckoning() -> None:
    import copy
    import pickle

    gauge = gauge_of("20 swg")
    assert type(gauge * 2) is float
    for other in (copy.deepcopy(gauge), pickle.loads(pickle.dumps(gauge))):
        assert (other, other.name, type(other)) == (0.9144, "20 swg", Gauge)


@given(st.text(max_size=40))
def test_any_text_is_read_or_refused(text: str) -> None:
    for given_text in (text, f"20 ga {text}", f"{text} swg"):
        with suppress(InputError):
            assert 0 <= THICKNESS.read(given_text, unit="mm") <= 1000
