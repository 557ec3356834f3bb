"""What the material of a piece adds to its patterns: area, mass, and how it may be marked."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

from develop.pieces.wording import mass_words
from develop.tables.gauges import Gauge
from develop.tables.materials import Material, material_of, materials

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.built import Built

__all__ = ["known_material", "with_material"]


def known_material(material: str, thickness: float) -> Material | None:
    """The material that the text names, or else the one that the gauge of the thickness [mm] is for."""
    found = material_of(material)
    if found is None and not material and isinstance(thickness, Gauge) and thickness.material:
        return materials()[thickness.material]
    return found


def with_material(built: Built, *, material: str, thickness: float, units: str) -> Built:
    """The piece with its mass [kg] on each pattern, and area, mass and the rule for marking in its facts.

    thickness [mm]; units: of the figures on the sheets, `mm` or `in`. The mass stays unknown without a
    thickness, or where the material is none that is known.
    """
    known = known_material(material, thickness)
    return built.with_patterns([_weighed(each, known, thickness, units) for each in built.patterns])


def _weighed(pattern: Pattern, known: Material | None, thickness: float, units: str) -> Pattern:
    from develop.pattern.mass import cut_area, cut_mass

    density = known.density if known and thickness else None
    mass = cut_mass(pattern, thickness=thickness, density=density) if density else None
    lines = [mass_words(cut_area(pattern), mass, density, units, each=pattern.quantity > 1)]
    if known and known.marking:
        lines.append(known.marking)
    return replace(pattern, mass=mass, facts=(*pattern.facts[:-1], *lines, *pattern.facts[-1:]))
