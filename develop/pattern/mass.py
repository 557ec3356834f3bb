"""Area and mass of what a pattern takes from the sheet."""

from __future__ import annotations

from math import fsum

from develop.pattern.pattern import Pattern

__all__ = ["cut_area", "cut_mass"]


def cut_area(pattern: Pattern) -> float:
    """Area inside the cut line less the openings that are cut [mm²]; those that are only marked stay in."""
    holes = fsum(opening.area for opening in pattern.openings) if pattern.openings_as != "marked" else 0.0
    holes += fsum(hole.area for hole in pattern.punched)
    return float(pattern.cut.area - holes)


def cut_mass(pattern: Pattern, *, thickness: float, density: float) -> float:
    """Mass of one cut pattern [kg]: its area by the thickness [mm] and the density [kg/m³].

    A flat pattern has its mass exactly so, whatever line of the wall it develops.
    """
    return cut_area(pattern) * thickness * density * 1e-9
