"""Openings of a header: their edge, their area, and where the folded sheet has them."""

from __future__ import annotations

import numpy as np

from develop.checks.fold import placed
from develop.pattern.curve import Curve
from develop.pattern.pattern import Pattern
from develop.solid.meeting import MeetingEnd
from develop.solid.solid import Solid

__all__ = ["opening_miss"]

_CHORDS = 0.01


def opening_miss(
    pattern: Pattern, solid: Solid, curve: Curve, joint: MeetingEnd, *, lift: float | None = None
) -> float:
    """Largest distance [mm] of an opening's edge, on the folded header, from the joint with its branch.

    solid: the header's, whose frame is the one that the joint is placed in. lift: of the developed sheet
    outside the face that the joint lies on, where that is not the given surface.
    """
    lift = solid.distance if lift is None else lift
    points, normal = placed(pattern, solid, curve.polyline(_CHORDS)[:-1])
    local = (points - lift * normal - joint.frame.origin) @ joint.frame.axes.T
    return float(np.max(joint.distance(local)))
