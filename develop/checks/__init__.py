"""Proof of every pattern: edges, seam, area and the closing check, by routes of their own.

Nothing here reaches the code that unrolls, not even through others; a test holds that.
"""

from __future__ import annotations

from develop.checks.check import Check, check, check_joint
from develop.checks.divided import check_divided
from develop.checks.fold import folded_on
from develop.checks.hand import check_hand
from develop.checks.joint import Side
from develop.checks.part import check_part

__all__ = [
    "Check",
    "Side",
    "check",
    "check_divided",
    "check_hand",
    "check_joint",
    "check_part",
    "folded_on",
]
