"""The finished piece in space: ends, the side between them, its mesh; from sections alone."""

from __future__ import annotations

from develop.solid.end import End
from develop.solid.flat import FlatPlate, FlatRing, Holes, Stretch
from develop.solid.frame import Frame, Rim, cut_slopes
from develop.solid.meeting import MeetingEnd
from develop.solid.patch import Patch
from develop.solid.placed import Placed
from develop.solid.solid import Solid
from develop.solid.taper_meeting import TaperMeetingEnd
from develop.solid.template import FlatTemplate, FloorOutlines
from develop.solid.touching import MitredEnd, StandingEnd, TouchingEnd
from develop.solid.wall import Mesh, plate, wall

__all__ = [
    "End",
    "FlatPlate",
    "FlatRing",
    "FlatTemplate",
    "FloorOutlines",
    "Frame",
    "Holes",
    "Made",
    "MeetingEnd",
    "Mesh",
    "MitredEnd",
    "Patch",
    "Placed",
    "Rim",
    "Solid",
    "StandingEnd",
    "Stretch",
    "TaperMeetingEnd",
    "TouchingEnd",
    "cut_slopes",
    "plate",
    "wall",
]

Made = Solid | FlatRing | FlatPlate | FlatTemplate | FloorOutlines | Patch
"""The finished shape of any one part."""
