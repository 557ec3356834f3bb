"""The finished piece in space: ends, the side between them, its mesh; from sections alone."""

from __future__ import annotations

from develop.solid.end import End
from develop.solid.frame import Frame, Rim, cut_slopes
from develop.solid.solid import Solid

__all__ = ["End", "Frame", "Rim", "Solid", "cut_slopes"]
