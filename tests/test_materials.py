"""Materials: densities against outside values, and how a material is found in a text."""

from __future__ import annotations

import re

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.tables.materials import find_materials, material_of, material_words, materials


@pytest.mark.parametrize(
    ("text", "density"),
    [
        ("stainless 304", 7900),  # EN 10088-1
        ("stainless 316", 8000),  # EN 10088-1
        ("stainless 430", 7700),  # EN 10088-1
        ("mild steel", 7850),  # from memory: EN 1993-1-2
        ("aluminium", 2700),  # from memory: EN 1999-1-1
        ("copper", 8960),  # from memory: the element at 20 °C
        ("zinc", 7140),  # from memory
        ("titanium", 4510),  # from memory
        ("lead", 11340),  # from memory
        ("brass", 8440),  # from memory
    ],
)
def test_published_densities(text: str, density: float) -> None:
    material = material_of(text)
    assert material is not None
    assert material.density == density


def test_the_gauge_rule_of_41_82_is_no_density() -> None:
    """41.82 lb/ft² an inch would be 8039 kg/m³; without its 2.5 per cent it is the steel's.

    Pound and foot: international yard and pound agreement, 1959.
    """
    implied = 41.82 * 0.45359237 / 0.3048**2 / 0.0254
    assert implied == pytest.approx(8039, abs=0.5)
    steel = materials()["steel"].density
    assert implied / steel - 1 > 0.02
    assert implied / 1.025 == pytest.approx(steel, rel=2e-3)


@pytest.mark.parametrize(
    ("text", "name"),
    [
        ("galvanised sheet", "galvanised"), ("Galvanized", "galvanised"), ("galv.", "galvanised"),
        ("steel, galvanised", "galvanised"), ("galvanised steel DX51D+Z275", "galvanised"),
        ("zinc-coated steel", "galvanised"), ("pre-painted galvanised steel", "painted"),
        ("aluminium-zinc coated steel", "aluminium-coated"), ("S235JR", "steel"), ("Mild Steel S355J2", "steel"),
        ("stainless steel", "stainless"), ("Stainless steel 316L", "stainless-316"), ("1.4404", "stainless-316"),
        ("1.4301 2B", "stainless-304"), ("AISI 304", "stainless-304"), ("SS304", "stainless-304"),
        ("aluminum", "aluminium"), ("aluminium 5052-H32", "aluminium-5052"), ("EN AW-1050A", "aluminium"),
        ("titanium-zinc", "titanium-zinc"), ("titanium grade 2", "titanium"), ("3.7035", "titanium"),
        ("copper-nickel 90/10", "copper-nickel"), ("phosphor bronze", "bronze"),
    ],
)  # fmt: skip
def test_a_material_is_found_by_its_words(text: str, name: str) -> None:
    material = material_of(text)
    assert material is not None
    assert material.name == name


@pytest.mark.parametrize(
    "text",
    [
        "",
        "  ",
        "cardboard",
        "steelwork",
        "steel and copper",
        "stainless or galvanised",
        "13041",
        "1304",
        "0.304",
        "İ",
    ],
)
def test_free_text_and_two_materials_are_none(text: str) -> None:
    assert material_of(text) is None


def test_no_word_means_two_materials() -> None:
    words = [(word, each.name) for each in materials().values() for word in each.words]
    assert len({word for word, _ in words}) == len(words)
    for word, name in words:
        found = material_of(word)
        assert found is not None
        assert found.name == name, word


def test_every_material_is_whole_and_says_where_its_density_comes_from() -> None:
    for name, each in materials().items():
        assert each.family[0] == name
        assert set(each.family) <= set(materials())
        assert 1_000 < each.density < 25_000
        assert each.source
        assert each.scribing in {"yes", "cut lines", "no"}
        assert bool(each.marking) == (each.scribing != "yes")
        assert all(word == word.lower().strip() and not re.search(r"[-_,;:()]", word) for word in each.words)


def test_coated_and_stainless_sheet_is_not_scribed() -> None:
    # Common practice, no source.
    for text in ("galvanised", "aluminised steel", "prepainted steel", "stainless", "316L"):
        material = material_of(text)
        assert material is not None
        assert material.scribing == "no"
        assert "do not scribe" in material.marking
    assert materials()["steel"].scribing == "yes"


@pytest.mark.parametrize(
    ("thickness", "radius"),
    # EN 10025-2, S235, bend line along the rolling direction; from memory.
    [
        (0.8, None),
        (1.0, None),
        (1.5, 1.6),
        (3, 3),
        (3.1, 6),
        (6, 10),
        (8, 16),
        (12, 25),
        (20, 45),
        (20.1, None),
    ],
)
def test_least_bend_radii(thickness: float, radius: float | None) -> None:
    assert materials()["steel"].least_bend_radius(thickness=thickness) == radius


def test_bend_radii_only_with_a_source_and_never_smaller_for_thicker_sheet() -> None:
    for each in materials().values():
        assert bool(each.bend_radii) == bool(each.bend_source)
        assert list(each.bend_radii) == sorted(each.bend_radii)
        radii = [radius for _, radius in each.bend_radii]
        assert radii == sorted(radii)
    assert materials()["galvanised"].least_bend_radius(thickness=3) is None


def test_the_table_cannot_be_changed() -> None:
    with pytest.raises(TypeError):
        materials()["steel"] = materials()["lead"]  # type: ignore[index]
    assert "stainless steel" in material_words()


@given(st.text(max_size=60))
def test_any_text_is_read_and_what_is_found_stands_there(text: str) -> None:
    material_of(text)
    for name, start, end in find_materials(text):
        assert re.sub(r"[-_,;:()\s]", " ", text[start:end].lower()) in materials()[name].words
