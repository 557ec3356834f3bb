"""The checks of any part: rolled, flat, or a plate that lies on a rolled one."""

from __future__ import annotations

from develop.checks.check import Check, check
from develop.checks.flat import check_flat
from develop.checks.patch import check_patch
from develop.pattern.pattern import Pattern
from develop.solid import Made, Patch, Solid

__all__ = ["check_part"]


def check_part(pattern: Pattern, part: Made) -> tuple[Check, ...]:
    """Every check of a part against its finished shape."""
    if isinstance(part, Solid):
        return check(pattern, part)
    return check_patch(pattern, part) if isinstance(part, Patch) else check_flat(pattern, part)
