"""What a section is to the air in it: hydraulic diameter, and the round duct of equal friction.

The rules for equal friction are fits to measurements, each of one shape, and are given for that
shape alone: nothing is stated for ellipses, superellipses, rounded rectangles or measured pipe.
"""

from __future__ import annotations

from dataclasses import dataclass

from develop.sections.spec import SectionSpec

__all__ = ["EqualFriction", "equal_friction", "hydraulic_diameter"]


@dataclass(frozen=True)
class EqualFriction:
    """Diameter [mm] of the round duct with the same loss at the same flow, its formula and source."""

    diameter: float
    formula: str
    source: str


def hydraulic_diameter(*, area: float, girth: float) -> float:
    """Four times the area over the girth [mm]: the diameter, for a round.

    >>> round(hydraulic_diameter(area=250.0 * 500.0, girth=1500.0), 4)
    333.3333
    """
    return 4.0 * area / girth


def equal_friction(spec: SectionSpec, *, area: float, girth: float) -> EqualFriction | None:
    """The round duct of equal friction, for the kinds that a published rule covers; else None.

    Flat oval, of area A [mm²] and girth P [mm]: Heyt and Diaz, 1.55 A^0.625 / P^0.25. Rectangle
    with sharp corners a × b: 1.30 (ab)^0.625 / (a + b)^0.25. Both are homogeneous, so any unit does.
    """
    if spec.kind == "flat-oval":
        return EqualFriction(
            1.55 * area**0.625 / girth**0.25,
            "1.55 A^0.625 / P^0.25",
            "Heyt and Diaz, in ASHRAE Fundamentals, duct design; for flat oval only",
        )
    if spec.kind == "rectangle" and spec.r == 0.0:
        a, b = spec.width, spec.height
        return EqualFriction(
            1.30 * (a * b) ** 0.625 / (a + b) ** 0.25,
            "1.30 (a b)^0.625 / (a + b)^0.25",
            "SMACNA 14-2, table in the ASHAE Guide 1956, chapter 32; for sharp corners only",
        )
    return None
