"""Cylinders between plane cuts, as a straight duct and a marking band both need them."""

from __future__ import annotations

from math import degrees
from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.solid import End, Solid, cut_slopes
from develop.surfaces.cylinder import Cylinder, Trim

if TYPE_CHECKING:
    from develop.pieces.field_types import Cut
    from develop.quadrature import Array
    from develop.sections.section import Section

__all__ = ["cylinder_between", "cylinder_solid", "trim"]


def trim(cut: Cut | None, *, height: float, end_b: bool) -> Trim:
    """The trim of an end whose cut meets the axis at a height [mm]."""
    rise: Array = np.zeros(2) if cut is None else cut_slopes(slope=cut.slope, long=cut.long, end_b=end_b)
    return Trim(height, rise)


def cylinder_between(
    section: Section, cut_a: Cut | None, cut_b: Cut | None, *, length: float, distance: float
) -> Cylinder:
    """The cylinder between two cuts, `length` [mm] apart on the axis.

    Raises Refusal naming the cut that runs past the other end, with the steepest slope that works
    and the least length that does.
    """
    surface = Cylinder(
        section,
        trim(cut_a, height=0.0, end_b=False),
        trim(cut_b, height=length, end_b=True),
        distance,
    )
    short = surface.shortest
    if short > 0.0:
        return surface
    # The steeper cut is named; the other stays as it is.
    name, cut = ("cut_a", cut_a) if _slope(cut_a) > _slope(cut_b) else ("cut_b", cut_b)
    assert cut is not None
    steepest = surface.steepest(which=name[-1])
    # Rounded down, to a slope that does work.
    works = np.floor(steepest * 10.0 - 1e-6) / 10.0
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


def cylinder_solid(surface: Cylinder, seam: float) -> Solid:
    """The finished piece of a cylinder; seam is a parameter of its section."""
    a, b = (
        End.cut(surface.section, height=each.height, rise=each.rise)
        for each in (surface.trim_a, surface.trim_b)
    )
    return Solid(a, b, side="parallel", seam=seam, seam_b=seam, distance=surface.distance)
