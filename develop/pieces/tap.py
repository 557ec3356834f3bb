"""The lap flange of a tap: the branch goes on past the joint, cut in so that it can be turned out."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.pattern.allowance import Allowance
from develop.pattern.curve import Curve
from develop.pattern.parallel import room
from develop.pieces.cutting import tabs_for
from develop.surfaces.edges import edges

if TYPE_CHECKING:
    from develop.surfaces.cylinder import Cylinder
    from develop.surfaces.sheet import Sheet

__all__ = ["lap_flange"]

_FINE = 1e-6  # [mm]


def lap_flange(surface: Cylinder, sheet: Sheet, *, lap: float, thickness: float) -> Allowance:
    """The flange at end A, `lap` wide, in tabs of equal length along the joint; all [mm].

    sheet: the branch laid flat, or a part of it. Raises Refusal where the flange would fold over itself.
    """
    curve = Curve(edges(sheet, tolerance=_FINE)[0], sheet.edge_a)
    most = room(curve)
    if lap >= most:
        allowed = np.floor(most * 10.0 - 1.0) / 10.0
        raise Refusal(
            field="lap",
            given=f"{lap:g} mm is more than the joint leaves room for, bent to a radius of {most:.4g} mm",
            allowed=f"{allowed:g} mm or less" if allowed >= 1.0 else "another joint: set-on or set-in",
        )
    radius = surface.section.least_radius + surface.distance
    count = tabs_for(radius, sheet.edge_a, lap)
    shares = tuple(float(share) for share in np.arange(1, count) / count)
    return Allowance(lap, folded=True, tabs=shares, stop=min(thickness, 0.25 * lap))
