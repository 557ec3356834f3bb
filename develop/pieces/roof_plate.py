"""A sloping plate with the hole for an upright duct, and the collar that stands on it."""

from __future__ import annotations

from math import cos, sin

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.pattern import WitnessMark
from develop.pieces.assemble import Wording, pattern_of, seam_parameter
from develop.pieces.built import Part
from develop.pieces.cuts import cylinder_solid
from develop.pieces.flat import Plate, closed, direction_marks, drawn, pattern_of_plate, rectangle
from develop.sections.section import Section
from develop.solid import End, FlatPlate, Frame
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.plane import plane_curve

__all__ = ["collar_part", "plate_part"]

_SAME = 1e-6  # [mm]
_SHARES = (0.5, 0.3, 0.7, 0.15, 0.85)


def plate_part(
    hole: Section,
    *,
    slope: float,
    high_side: float,
    margin: float,
    mark: str,
    kind: str,
    quantity: int,
    facts: tuple[str, ...],
    material: str,
) -> Part:
    """The plate: x across and y up the slope, from where the duct's axis meets it.

    hole: square to the duct. slope, high_side [rad]; margin [mm].
    """
    across, up = np.array([sin(high_side), -cos(high_side)]), np.array([cos(high_side), sin(high_side)])
    # Up the slope the plate is longer than its plan.
    into = np.stack([across, up / cos(slope)])
    curve = plane_curve(hole, into=into)
    reach = np.array([float(hole.support(*side)) for side in (*(-into), *into)])
    low, high = -reach[:2] - margin, reach[2:] + margin
    marks, lines = [], []
    for _, m in direction_marks(hole, "opening", outward=True):
        # A normal goes over by the inverse transpose.
        inward = np.linalg.solve(into.T, m.inward)
        at = into @ m.at
        marks.append(WitnessMark(at, inward / np.hypot(*inward), m.text, m.edge, _along(drawn(curve), at)))
    for unit, edge in zip((*-np.eye(2), *np.eye(2)), (*-low, *high), strict=True):
        start, end = _on_axis(hole, into, unit), unit * edge
        if any(np.abs(m.at - start).max() < _SAME for m in marks):
            # The witness mark there takes up to a quarter of the way.
            start = start + 0.25 * (end - start)
        lines.append(segment(start, end))
    plate = Plate(
        rectangle(low, high),
        (closed("opening", curve),),
        tuple(marks),
        tuple(lines),
        _places(low, high, margin),
    )
    wide, tall = (float(each) for each in reach[2:] + reach[:2])
    title = f"{mark}: {kind}" if mark != kind else mark
    pattern = pattern_of_plate(
        plate,
        mark=mark,
        kind=kind,
        quantity=quantity,
        facts=(
            title,
            *facts,
            f"hole {wide:.1f} across and {tall:.1f} up the slope; dashed: centre lines through the axis",
            material,
            f"quantity {quantity}, outside up",
        ),
        flow="a to b" if slope else "",
        arrow="UP",
    )
    spans = np.vstack([into, np.zeros(2)])
    end = End(hole, np.zeros(3), spans, np.column_stack([np.linalg.inv(into), np.zeros(2)]))
    size = tuple(float(each) for each in high - low)
    frame = Frame(
        np.zeros(3),
        np.array(
            [
                [*across, 0.0],
                [*(cos(slope) * up), sin(slope)],
                [*(-sin(slope) * up), cos(slope)],
            ]
        ),
    )
    return Part(pattern, FlatPlate(end, (size[0], size[1]), plate.shift), (frame,))


def _on_axis(hole: Section, into: Array, unit: Array) -> Array:
    """Where a line from the axis in the plate's direction `unit` (2,) leaves the hole."""
    back = np.linalg.solve(into, unit)
    u = hole.at_direction(np.array([np.arctan2(back[1], back[0])]))
    return np.asarray(into @ hole.point(u)[0])


def _places(low: Array, high: Array, margin: float) -> Array:
    """Lines up the slope in the four strips beside the hole, that words may stand on."""
    x = low[0] + np.array(_SHARES) * (high[0] - low[0])
    y = low[1] + np.array(_SHARES) * (high[1] - low[1])
    strips = [
        np.stack(
            [np.column_stack([x, np.full_like(x, y0)]), np.column_stack([x, np.full_like(x, y0 + margin)])], 1
        )
        for y0 in (low[1], high[1] - margin)
    ]
    half = min(0.2 * (high[1] - low[1]), 2.0 * margin)
    for left in (low[0] + 0.5 * margin, high[0] - 0.5 * margin):
        strips.append(np.array([[[left, at - half], [left, at + half]] for at in y]))
    return np.concatenate(strips)


def collar_part(
    wall: Cylinder,
    *,
    seam_at: float | str,
    divisions: int,
    mark: str,
    kind: str,
    quantity: int,
    facts: tuple[str, ...],
    material: str,
    lines_as: str,
) -> Part:
    """The collar: cut at the bottom by the plate's plane, square on top."""
    seam = seam_parameter(wall.section, wall.lengths, seam_at)
    pattern = pattern_of(
        wall.sheet(seam),
        wall.section,
        wall.section,
        wording=Wording(
            mark=mark,
            kind=kind,
            quantity=quantity,
            face="outside",
            facts=(f"{mark}: {kind}", *facts, material, f"quantity {quantity}, outside up"),
            datum="datum lines x = 0 and y = 0, the left and lower limits of the pattern",
            flow="",
            lines_as=lines_as,
        ),
        divisions=divisions,
        distance=wall.distance,
    )
    return Part(pattern, cylinder_solid(wall, seam), (Frame.square(),))


def _along(curve: Curve, point: Array) -> float:
    """Running length [mm] along the hole's edge, from its start to a point on it, to 0.001 mm."""
    points = curve.polyline(1e-4)
    steps = np.diff(points, axis=0)
    lengths = np.hypot(*steps.T)
    sums = np.concatenate([[0.0], np.cumsum(lengths)])
    # The foot on each chord; the nearest of them is on the edge.
    past = np.clip(
        np.einsum("ni,ni->n", point - points[:-1], steps) / np.maximum(lengths, 1e-300), 0.0, lengths
    )
    foot = points[:-1] + (past / np.maximum(lengths, 1e-300))[:, None] * steps
    i = np.argmin(np.hypot(*(foot - point).T))
    return float((sums[i] + past[i]) / sums[-1] * curve.length)
