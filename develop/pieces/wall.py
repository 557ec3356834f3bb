"""Where the wall lies: from the sizes given to the curve that is developed."""

from __future__ import annotations

from typing import TYPE_CHECKING

from develop.errors import Refusal

if TYPE_CHECKING:
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec
    from develop.surfaces.band import Band

__all__ = ["PLACES", "check_bend", "check_level", "given_section", "reach"]

# Places on each panel of a section at which the bend of a side is looked at.
_BETWEEN = 24

PLACES = {"inside": 0.0, "mean": 0.5, "outside": 1.0}
"""Where sizes can be measured, as a share of the thickness from the inside."""


def given_section(
    spec: SectionSpec, *, field: str, thickness: float, sizes: str, lining: float = 0.0
) -> Section:
    """The section on the surface that `sizes` names; a pipe's size is its outside, so it is moved in.

    thickness [mm]. lining: what lies inside the wall [mm]; sizes inside are then those that it leaves clear,
    and the section is moved out by as much. Raises Refusal naming `field` where the wall has no room, and
    for a lining where sizes are not inside.
    """
    from math import floor

    from develop.sections import section_of
    from develop.units import number_text

    if lining and sizes != "inside":
        raise Refusal(
            field="lining",
            given=f"{number_text(lining)} mm with sizes = {sizes}: a lining is inside of what is measured",
            allowed="sizes = inside, then clear inside the lining; or no lining",
        )
    section = section_of(spec)
    if lining and not spec.outside:
        section = section.offset(lining)
    places = {place: thickness * (share - PLACES[sizes]) for place, share in PLACES.items()}
    # At its outside a pipe has its size whatever is said of the others.
    ways = () if spec.outside or sizes == "inside" else ("sizes = inside",)

    def moved(section: Section, distance: float) -> Section:
        try:
            return section.offset(distance)
        except Refusal:
            radius = section.least_radius
            most = floor(thickness * radius / -distance * 10.0 + 1e-9) / 10.0
            thinner = (f"{number_text(most)} mm or less",) if most > 0.0 else ()
            room = f"the tightest radius is {radius:.4g} mm" if radius > 0.0 else "the corners are sharp"
            raise Refusal(
                field="thickness",
                given=f"{thickness:g} mm leaves no inside to {field}, {spec.text}, sizes "
                f"{'outside' if spec.outside else sizes}: {room}",
                allowed=", or ".join((*thinner, f"for {field} {section.rounder(-distance)}", *ways)),
            ) from None

    if spec.outside:
        section = moved(section, -places["outside"])
    # The inside of the wall must exist too, whatever is developed.
    moved(section, places["inside"])
    return section


def reach(section: Section, direction: float) -> float:
    """How far a section reaches from its centre in a direction [rad], [mm]."""
    from math import cos, sin

    import numpy as np

    return float(section.support(np.array(cos(direction)), np.array(sin(direction))))


def check_bend(band: Band, *, thickness: float, sizes: str, instead: str, ends: str = "AB") -> None:
    """Raises Refusal where a tapered side is bent tighter than its wall allows.

    thickness [mm]. instead: what helps beside a thinner wall, in words. ends: at which of its
    ends the side is looked at.
    """
    from math import floor

    import numpy as np

    from develop.units import number_text

    inner = thickness * PLACES[sizes]
    if inner == 0.0:
        return
    section = band.rim_a.section
    # By direction and, where a tight corner falls between whole degrees, by the section's own parameter.
    start, step = section.breaks[:-1, None], np.diff(section.breaks)[:, None]
    inside = (start + step * (np.arange(_BETWEEN) + 0.5) / _BETWEEN).ravel()
    radii = band.radii(np.concatenate([section.at_direction(np.radians(np.arange(360.0))), inside]))
    at = dict(zip("AB", radii.min(axis=0).tolist(), strict=True))
    end = min(ends, key=lambda each: at[each])
    tightest = at[end]
    if tightest > inner:
        return
    most = floor(thickness * tightest / inner * 10.0) / 10.0
    raise Refusal(
        field="thickness",
        given=f"{number_text(thickness)} mm leaves no inside where the slanting side is bent to a "
        f"radius of {tightest:.3g} mm, near END {end}",
        allowed=f"{number_text(most)} mm or less, or {instead}" if most > 0.0 else instead,
    )


def check_level(band: Band) -> None:
    """Raises Refusal where level edges would run back over themselves."""
    if not any(band.levels):
        return
    back = band.sheet(float(band.rim_a.section.breaks[0])).back
    if any(back):
        raise Refusal(
            field="edge_cut",
            given=f"level makes the edge at END {'A' if back[0] else 'B'} run back over itself, where the "
            "lines of a flat part of the side fan out from a point",
            allowed="square; or sizes measured on another face",
        )
