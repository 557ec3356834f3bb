"""Area, mass and marking of every cut pattern, on the sheets and in the record."""

from __future__ import annotations

import json
from collections.abc import Mapping
from math import pi
from pathlib import Path

import pytest

from develop.job.pipeline import make
from develop.pattern.mass import cut_area, cut_mass
from develop.pattern.pattern import Pattern
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import fields_of, read_piece
from develop.pieces.hand import builds_of
from develop.pieces.sheet_metal import known_material
from develop.tables.gauges import gauge_of


def patterns(kind: str, *, units: str = "mm", **given: object) -> list[Pattern]:
    piece, problems = read_piece(kind_of(kind), given)
    assert problems == []
    assert piece is not None
    return [pattern for built in builds_of(piece, units=units) for pattern in built.patterns]


ROUND: Mapping[str, object] = {"section": "round 400", "length": 1000}


def test_mass_of_a_round_length_in_inches_of_gauge() -> None:
    """π 400 1000 mm² of 0.0396 in at 7850 kg/m³ (published gauge and density), by hand."""
    (pattern,) = patterns("straight", **ROUND, thickness="20 ga galvanised")
    mass = pi * 0.4 * 1.0 * (0.0396 * 0.0254) * 7850
    assert pattern.mass == pytest.approx(mass, rel=1e-13)
    assert f"area 1.257 m², {mass:.3f} kg at 7850 kg/m³" in pattern.facts
    assert "20 ga galvanised, 1.006 mm thick" in pattern.facts
    assert "zinc-coated: mark by pen, do not scribe" in pattern.facts
    assert pattern.facts[-1] == "quantity 1, outside up"


def test_the_same_in_inches_and_pounds() -> None:
    (pattern,) = patterns("straight", units="in", **ROUND, thickness="20 ga galvanised", quantity=3)
    # International foot and pound, 1959.
    feet, pounds = pi * 0.4 / 0.3048**2, pi * 0.4 * 0.0396 * 0.0254 * 7850 / 0.45359237
    assert f"area {feet:.2f} ft² each, {pounds:.2f} lb at 490.1 lb/ft³" in pattern.facts
    assert "20 ga galvanised, 0.0396 in thick" in pattern.facts


def test_a_flat_ring_less_its_holes() -> None:
    """Aluminium ring 300 to 380, 8 holes of 11, 3 thick: elementary geometry, 2700 kg/m³."""
    given = {"section": "round 300", "width": 40, "holes": 8, "hole_diameter": 11, "thickness": 3}
    (pattern,) = patterns("flange", **given, material="aluminium")
    area = pi / 4 * (380**2 - 300**2 - 8 * 11**2)
    assert cut_area(pattern) == pytest.approx(area, rel=1e-12)
    assert pattern.mass == pytest.approx(area * 3 * 2700e-9, rel=1e-12)
    assert "aluminium: scribe lines to cut only, else a pen" in pattern.facts


@pytest.mark.parametrize(
    ("given", "material"),
    [
        ({}, None),
        ({"material": "galvanised sheet"}, "galvanised"),  # no thickness
        ({"thickness": 0.8}, None),
        ({"material": "cardboard", "thickness": 0.8}, None),
        ({"material": "cardboard", "thickness": "20 ga galvanised"}, None),
        ({"thickness": "20 swg"}, None),
    ],
)
def test_where_material_or_thickness_is_unknown_so_is_the_mass(given: dict, material: str | None) -> None:
    (pattern,) = patterns("straight", **ROUND, **given)
    assert pattern.mass is None
    assert any(fact.startswith("area 1.257 m²") and "kg" not in fact for fact in pattern.facts)
    assert any("scribe" in fact for fact in pattern.facts) == (material == "galvanised")


def test_the_gauge_names_the_material_where_none_is_given() -> None:
    found = known_material("", gauge_of("18 ga stainless 316"))
    assert found is not None
    assert found.name == "stainless-316"
    stated = known_material("mild steel", gauge_of("20 swg galvanised"))
    assert stated is not None
    assert stated.name == "steel"
    assert known_material("", 0.8) is None


@pytest.mark.parametrize(
    ("material", "gauge", "words"),
    [
        ("", "20 ga galvanised", "20 ga galvanised, 1.006 mm thick"),
        ("galvanised sheet", "20 ga galvanised", "galvanised sheet, 20 ga, 1.006 mm thick"),
        ("stainless 316L", "18 ga stainless", "stainless 316L, 18 ga, 1.27 mm thick"),
        ("galvanised", "20 swg", "galvanised, 20 swg, 0.914 mm thick"),
        ("our stock", "20 ga steel", "our stock, 20 ga steel, 0.912 mm thick"),
        ("copper", "20 ga steel", "copper, 20 ga steel, 0.912 mm thick"),
    ],
)
@pytest.mark.parametrize("kind", ["straight", "flange"])
def test_the_gauge_stands_beside_the_material(kind: str, material: str, gauge: str, words: str) -> None:
    given = ROUND if kind == "straight" else {"section": "round 400", "width": 30}
    (pattern,) = patterns(kind, **given, material=material, thickness=gauge)
    assert words in pattern.facts


@pytest.mark.parametrize("kind", KINDS)
def test_the_record_has_area_and_mass_of_every_pattern(kind: str, tmp_path: Path) -> None:
    names = {each.name for each in fields_of(kind_of(kind))}
    given = {**kind_of(kind).example, "thickness": "1 mm"}
    if "material" in names:
        given["material"] = "stainless 304"
    piece, problems = read_piece(kind_of(kind), given)
    assert problems == []
    assert piece is not None
    make(piece, folder=str(tmp_path), formats=("json",))
    record = json.loads((tmp_path / f"{kind}.json").read_bytes())
    for pattern in record["patterns"]:
        cut = pattern["cut"]
        if "material" not in names:
            assert "mass" not in cut
        else:
            # 1 mm of 7900 kg/m³ is 7.9 kg/m², EN 10088-1.
            assert cut["mass"] == pytest.approx(cut["area"] * 7.9e-6, rel=1e-13)
            assert cut["mass"] == pytest.approx(shoelace(cut) * 7.9e-6, rel=1e-3)


def shoelace(cut: dict) -> float:
    """Area of the written outline less the written openings."""

    def area(points: list[list[float]]) -> float:
        return (
            abs(sum(a[0] * b[1] - a[1] * b[0] for a, b in zip(points, points[1:] + points[:1], strict=True)))
            / 2
        )

    return area(cut["outline"]) - sum(map(area, cut["openings"]))


def test_openings_that_are_only_marked_stay_in_the_mass() -> None:
    given = {"header": "round 500", "branch": "round 300", "header_length": 900, "centre_to_end": 500,
             "material": "steel", "thickness": 2}  # fmt: skip
    cut, marked = (patterns("branch", **given, opening=how)[-1] for how in ("cut", "marked"))
    hole = cut.openings[0].area
    assert hole > 60_000
    assert cut.mass is not None
    assert marked.mass is not None
    assert marked.mass - cut.mass == pytest.approx(hole * 2 * 7850e-9, rel=1e-9)
    assert cut_mass(marked, thickness=2.0, density=7850.0) == marked.mass


def test_the_opposite_hand_weighs_the_same_and_says_so() -> None:
    one, other = patterns(
        "straight", **ROUND, cut_b="slope 20 long 30", thickness=1, material="copper", opposite_hand=2
    )
    assert one.mass == pytest.approx(other.mass, rel=1e-13)
    assert any("m² each" in fact for fact in other.facts)
    assert not any("each" in fact for fact in one.facts)


def test_a_marking_band_of_paper_has_no_mass() -> None:
    (pattern,) = patterns("marking-band", section="pipe DN 200", cut="slope 45 long 0", thickness=6.3)
    assert pattern.mass is None
    assert not any("m²" in fact for fact in pattern.facts)
