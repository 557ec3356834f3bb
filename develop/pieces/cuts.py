"""Cylinders between plane cuts, as a straight duct and a marking band both need them."""

from __future__ import annotations

from math import atan2, degrees, hypot
from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.solid import End, MitredEnd, Solid, cut_slopes
from develop.surfaces.band import Band, BandSheet
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.square_edge import SquareEdge
from develop.surfaces.trim import Plane

if TYPE_CHECKING:
    from develop.pieces.cut_types import Cut
    from develop.quadrature import Array
    from develop.sections.section import Section

__all__ = ["band_solid", "cylinder_between", "cylinder_solid", "end_of", "shortest", "steepest", "trim"]


def trim(cut: Cut | None, *, height: float, end_b: bool) -> Plane:
    """The trim of an end whose cut meets the axis at a height [mm]."""
    rise: Array = np.zeros(2) if cut is None else cut_slopes(slope=cut.slope, long=cut.long, end_b=end_b)
    return Plane(height, rise)


def cylinder_between(
    section: Section, cut_a: Cut | None, cut_b: Cut | None, *, length: float, distance: float
) -> Cylinder:
    """The cylinder between two cuts, `length` [mm] apart on the axis.

    Raises Refusal naming the cut that runs past the other end, with the steepest slope that works
    and the least length that does.
    """
    low, high = trim(cut_a, height=0.0, end_b=False), trim(cut_b, height=length, end_b=True)
    short = shortest(section, low, high)
    if short > 0.0:
        return Cylinder(section, low, high, distance)
    # The steeper cut is named; the other stays as it is.
    name, cut = ("cut_a", cut_a) if _slope(cut_a) > _slope(cut_b) else ("cut_b", cut_b)
    assert cut is not None
    most = steepest(section, low, high, which=name[-1])
    # Rounded down, to a slope that does work.
    works = np.floor(most * 10.0 - 1e-6) / 10.0
    other = "the other end" if not _slope(cut_a) * _slope(cut_b) else "the other end's cut"
    least = np.ceil((length - short) * 10.0 + 1e-6) / 10.0
    slope = f"slope {works:g} or less, or a" if works > 0.0 else "a flatter cut at the other end, or a"
    raise Refusal(
        field=name,
        given=f"slope {degrees(cut.slope):g} runs {-short:.4g} mm past {other}",
        allowed=f"{slope} length of {least:g} mm or more",
    )


def _slope(cut: Cut | None) -> float:
    return cut.slope if cut else 0.0


def shortest(section: Section, low: Plane, high: Plane) -> float:
    """The least height [mm] between two planes over a section, negative where they cross."""
    rise = high.rise - low.rise
    down = float(section.support(np.array(-rise[0]), np.array(-rise[1])))
    return high.height - low.height - down


def steepest(section: Section, low: Plane, high: Plane, *, which: str) -> float:
    """The steepest slope [deg] of cut `a` (low) or `b`, in its own direction, that the piece allows.

    0 where none does, as the other cut alone already runs past.
    """
    mine = low if which == "a" else high
    unit = mine.rise / hypot(*mine.rise)

    def left(t: float) -> float:
        turned = Plane(mine.height, t * unit)
        return shortest(section, *((turned, high) if which == "a" else (low, turned)))

    if left(0.0) <= 0.0:
        return 0.0
    under, over = 0.0, 1.0
    while left(over) > 0.0 and over < 1e6:
        under, over = over, 2.0 * over
    for _ in range(60):
        middle = 0.5 * (under + over)
        under, over = (middle, over) if left(middle) > 0.0 else (under, middle)
    return degrees(atan2(under, 1.0))


def cylinder_solid(surface: Cylinder, seam: float) -> Solid:
    """The finished piece of a cylinder between plane cuts; seam is a parameter of its section."""
    a, b = (end_of(surface, end) for end in "ab")
    return Solid(a, b, side="parallel", seam=seam, seam_b=seam, distance=surface.distance)


def band_solid(surface: Band, sheet: BandSheet, seam: float) -> Solid:
    """The finished piece of a band; seam is a parameter of end A's section, that of its sheet."""
    cut = surface.cut_b
    return Solid(
        End.placed(surface.rim_a.section, surface.rim_a.frame),
        End.placed(surface.rim_b.section, surface.rim_b.frame),
        side="hull",
        seam=seam,
        seam_b=sheet.seam_b,
        distance=surface.distance,
        cut_b=(cut.height, cut.rise) if cut else None,
        level=surface.level,
    )


def end_of(surface: Cylinder, end: str) -> End:
    """The finished end, `a` or `b`, of a cylinder that is cut by a plane there."""
    trim = surface.trim_a if end == "a" else surface.trim_b
    if not isinstance(trim, SquareEdge):
        assert isinstance(trim, Plane)
        return End.cut(surface.section, height=trim.height, rise=trim.rise)
    plane = trim.face
    assert isinstance(plane, Plane)
    return MitredEnd.of(
        surface.section,
        inner=trim.inner,
        outer=trim.outer,
        height=plane.height,
        rise=plane.rise,
        upper=trim.upper,
    )
