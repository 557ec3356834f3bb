"""The fields that name a rule for a seam or an edge; the rule itself is looked up when the piece is made."""

from __future__ import annotations

import re
from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.wording import shown

__all__ = ["EDGE", "SEAM_RULE", "RuleText"]

# A bare number, but for what may follow a size.
_BARE = re.compile(r"(?<![\w./])(\d[\d./-]*)(?=\s*(?:turned\b|\bout\b|$))")


@dataclass(frozen=True, eq=False, repr=False)
class RuleText:
    """The name of a rule with its size, as text with the unit of the size."""

    examples: str
    metavar: str = "RULE"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        """What may be given, in words."""
        return f"a rule and its size, such as {self.examples}"

    def read(self, given: object, *, unit: str) -> str:
        """The text, its bare size given its unit. Raises InputError for what is no text."""
        if not isinstance(given, str) or not given.strip():
            raise InputError(Problem("", f"{shown(given)} is not a rule", self.allowed))
        words = " ".join(given.lower().split())
        return _BARE.sub(lambda found: f"{found[1]} {unit}", words)

    def record(self, value: object) -> object:
        """The text."""
        return value

    def text(self, value: object) -> str:
        """The text."""
        return str(value)


SEAM_RULE = RuleText("butt, lap 25, grooved 6, standing 25")
EDGE = RuleText("raw, lap 20, flange 25 out, hem 10, wired 6")
