"""Where the wall lies: from the sizes given to the curve that is developed."""

from __future__ import annotations

from typing import TYPE_CHECKING

from develop.errors import InputError, Problem, Refusal

if TYPE_CHECKING:
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec

__all__ = ["PLACES", "given_section", "neutral_distance"]

PLACES = {"inside": 0.0, "mean": 0.5, "outside": 1.0}
"""Where sizes can be measured, as a share of the thickness from the inside."""


def given_section(spec: SectionSpec, *, field: str, thickness: float, sizes: str) -> Section:
    """The section on the surface that `sizes` names; a pipe's size is its outside, so it is moved in.

    thickness [mm]. Raises Refusal naming `field` where the wall has no room.
    """
    from develop.sections import section_of

    section = section_of(spec)
    places = {place: thickness * (share - PLACES[sizes]) for place, share in PLACES.items()}
    if spec.outside:
        section = _moved(section, -places["outside"], field, thickness)
    # The inside of the wall must exist too, whatever is developed.
    _moved(section, places["inside"], field, thickness)
    return section


def _moved(section: Section, distance: float, field: str, thickness: float) -> Section:
    try:
        return section.offset(distance)
    except Refusal:
        raise InputError(
            Problem(
                field="thickness",
                given=f"{thickness:g} mm leaves no inside to the {field}, whose tightest radius is "
                f"{section.least_radius:.4g} mm",
                allowed=f"a wall that lies within that radius: here at most "
                f"{thickness * section.least_radius / -distance:.4g} mm",
            )
        ) from None


def neutral_distance(*, thickness: float, sizes: str, neutral_line: float) -> float:
    """How far outside the given surface the neutral line lies [mm]."""
    return thickness * (neutral_line - PLACES[sizes])
