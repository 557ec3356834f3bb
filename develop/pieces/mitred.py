"""Mitred work: legs of one section whose axis turns at each mitre, as bends and offsets are made.

At a mitre the plane halves the angle between the two axes, so both legs are cut by half the turn
and their edges are one curve. The section is carried along without twisting.
"""

from __future__ import annotations

from collections.abc import Callable, Sequence
from dataclasses import dataclass
from math import cos, pi, sin, tau
from typing import TYPE_CHECKING

import numpy as np

from develop.pieces.assemble import pattern_of
from develop.pieces.built import Built, Divided, Joint, Part
from develop.pieces.cut_types import Cut
from develop.pieces.cuts import band_solid, cylinder_solid, end_of, trim
from develop.pieces.joint_edge import JointEdge, trims_of, with_bevels
from develop.pieces.parting import parted
from develop.sections.carried import Carried
from develop.solid import Frame, MitredEnd, Rim, TouchingEnd
from develop.surfaces.band import Band
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.square_edge import SquareEdge
from develop.surfaces.trim import Plane

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Share, Wording
    from develop.pieces.common import Plate
    from develop.pieces.cutting import Cutting
    from develop.sections.section import Section
    from develop.surfaces.sheet import Sheet

__all__ = ["Leg", "Turn", "built_of", "farthest", "legs_of"]


@dataclass(frozen=True)
class Turn:
    """A mitre: how far the axis turns there [rad], and to which direction round the section [rad]."""

    angle: float
    towards: float

    @property
    def cut(self) -> Cut:
        """The cut of both legs: half the turn, longest on the side that the axis turns away from."""
        return Cut(slope=0.5 * self.angle, long=self.towards + pi)


@dataclass(frozen=True)
class Leg:
    """One leg: its surface in a frame of its own, whose +z is the leg's axis, and that frame's place.

    section: square to the axis; cuts: the planes of its two ends. A leg that goes into the next is a band.
    """

    surface: Cylinder | Band
    frame: Frame
    section: Section
    cuts: tuple[Plane, Plane]

    @property
    def shape(self) -> tuple[float, ...]:
        """What two legs of one section have in common when they are alike."""
        a, b = self.cuts
        return a.height, *map(float, a.rise), b.height, *map(float, b.rise)


def farthest(section: Section, towards: float) -> float:
    """The direction [rad] in which the section's point lies that reaches farthest towards a direction.

    The throat of a leg that turns there. Of a straight side the middle.
    """
    nx, ny = np.array([cos(towards)]), np.array([sin(towards)])
    first, last = section.parameters(nx, ny)
    return float(section.direction(0.5 * (first + last))[0])


def legs_of(
    section: Section,
    lengths: Sequence[float],
    turns: Sequence[Turn],
    *,
    distance: float,
    edge: JointEdge,
    into: Section | None = None,
) -> tuple[Leg, ...]:
    """The legs, n of them, from their lengths on the axis [mm] and the n − 1 turns between them.

    edge: how their edges are made where they meet. into: the section of an end that goes into the next leg.

    Whether a leg is long enough for its cuts is for whoever makes a piece to see to.
    """
    legs: list[Leg] = []
    origin, axes = np.zeros(3), np.eye(3)
    for i, length in enumerate(lengths):
        before = turns[i - 1] if i else None
        after = turns[i] if i < len(turns) else None
        foot = trim(before.cut if before else None, height=0.0, end_b=False)
        head = trim(after.cut if after else None, height=length, end_b=True)
        low, high = edge.trim(foot) if before else foot, edge.trim(head, upper=True) if after else head
        breaks = [u for each in (low, high) if isinstance(each, SquareEdge) for u in each.breaks(section)]
        surface: Cylinder | Band = Cylinder(section, low, high, distance, tuple(breaks))
        if into is not None:
            rim_a = _cut_rim(section, before.cut if before else None, 0.0, end_b=False)
            rim_b = _cut_rim(into if after else section, after.cut if after else None, length, end_b=True)
            surface = Band(rim_a, rim_b, distance)
        assert isinstance(foot, Plane)
        assert isinstance(head, Plane)
        legs.append(Leg(surface, Frame(origin, axes), section, (foot, head)))
        origin = origin + length * axes[2]
        if after is not None:
            # Tilted so that it stands highest at the heel: its normal leans to the throat.
            axes = Frame.square().tilted(slope=after.angle, long=after.towards + pi).axes @ axes
    return tuple(legs)


def _cut_rim(section: Section, cut: Cut | None, height: float, *, end_b: bool) -> Rim:
    """The end of a parallel side that a plane cuts at a height on its axis [mm]."""
    frame = Frame.square(at=(0.0, 0.0, height))
    if cut is None or cut.slope == 0.0:
        return Rim(section, frame)
    c, s = cos(cut.long), sin(cut.long)
    steep, level = np.outer([c, s], [c, s]), np.outer([-s, c], [-s, c])
    # Up the slope lengths grow, along the level line they stay.
    carried = Carried(section, steep / cos(cut.slope) + level)
    return Rim(carried, frame.tilted(slope=cut.slope, long=cut.long + (0.0 if end_b else pi)))


def built_of(
    legs: Sequence[Leg],
    seams: Sequence[float],
    *,
    wording: Callable[[Sheet, tuple[int, ...]], Wording],
    divisions: int,
    name: str,
    cutting: Callable[[Sheet, str, Share | None], Cutting],
    edge: JointEdge,
    plate: Plate,
    units: str,
) -> Built:
    """The piece of these legs; those alike, seam and all, are one pattern that is used several times.

    seams: the direction of each leg's seam [rad]. wording: of the pattern of a sheet that serves the legs
    of these numbers, counted from 1. name: what a leg is called, such as `gore`. cutting: what is cut beyond
    the net line of a leg, or of a part of one, whose ends of these letters meet its neighbours. edge: how
    those are made. plate: the piece, which says in how many parts each leg is made. Raises Refusal.
    """
    groups: dict[tuple[float, ...], list[int]] = {}
    for i, (leg, seam) in enumerate(zip(legs, seams, strict=True)):
        # So far apart as a seam can be told from another; a whole turn is none.
        told = round(seam % tau, 9) % round(tau, 9)
        groups.setdefault((*leg.shape, told), []).append(i)
    parts: list[Part] = []
    found: list[Joint] = []
    divided: list[Divided] = []
    parts_of: dict[int, tuple[tuple[int, int], ...]] = {}
    for members in groups.values():
        surface, section = legs[members[0]].surface, legs[members[0]].section
        seam = float(section.at_direction(np.array([seams[members[0]]]))[0])
        joined = ("a" if members[0] else "") + ("b" if members[0] < len(legs) - 1 else "")

        def drawn(
            flat: Sheet,
            share: Share | None,
            surface: Cylinder | Band = surface,
            numbers: tuple[int, ...] = tuple(i + 1 for i in members),
            joined: str = joined,
        ) -> Pattern:
            ends = (
                (surface.section,) * 2
                if isinstance(surface, Cylinder)
                else (surface.rim_a.section, surface.rim_b.section)
            )
            pattern = pattern_of(
                flat,
                *ends,
                wording=wording(flat, numbers),
                divisions=divisions,
                distance=surface.distance,
                cutting=cutting(flat, joined, share),
                share=share,
            )
            if not isinstance(surface, Cylinder):
                return pattern
            return with_bevels(pattern, edge, {end: _bevelled(surface, end) for end in joined}, plates=2)

        if isinstance(surface, Cylinder):
            made = parted(plate, surface.sheet(seam), cylinder_solid(surface, seam), drawn, units=units)
        else:
            flat = surface.sheet(seam)
            made = parted(plate, flat, band_solid(surface, flat, seam), drawn, units=units)
        made = made.placed_at([legs[i].frame for i in members], first=len(parts))
        parts_of |= {i: made.copies(place, first=len(parts)) for place, i in enumerate(members)}
        parts += made.parts
        found += made.joints
        divided += made.divided
    joints = []
    for i in range(len(legs) - 1):
        (part, place), *also = parts_of[i]
        (other, other_place), *other_also = parts_of[i + 1]
        joints.append(
            Joint(
                part, "b", other, "a", place, other_place, f"{name} {i + 1} to {name} {i + 2}",
                tuple(also), tuple(other_also), apart=not isinstance(legs[i].surface, Cylinder),
            )
        )  # fmt: skip
    return Built(tuple(parts), (*joints, *found), divided=tuple(divided))


def _bevelled(surface: Cylinder, end: str) -> TouchingEnd:
    """The end of a leg as its table of bevels takes it: what touches or, where net lines meet, those."""
    found = end_of(surface, end)
    if isinstance(found, TouchingEnd):
        return found
    (plane,) = trims_of((surface.trim_a if end == "a" else surface.trim_b,))
    assert isinstance(plane, Plane)
    return MitredEnd.of(
        surface.section, inner=0.0, outer=0.0, height=plane.height, rise=plane.rise, upper=end == "b"
    )
