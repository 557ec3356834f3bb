"""The fields that name a rule for a seam or an edge; the rule itself is looked up when the piece is made."""

from __future__ import annotations

import re
from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.units import number_text, parse_number
from develop.wording import listed, near_miss, shown

__all__ = ["BEND_RULES", "EDGE", "NEUTRAL", "SEAM_RULE", "NeutralLine", "RuleText"]

BEND_RULES = ("soft", "half-hard", "hard", "aircraft", "by-radius")
"""The published rules for bends, by name; `tables/bends.toml` has them, which the help need not read."""

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


@dataclass(frozen=True, eq=False, repr=False)
class NeutralLine:
    """A place in the thickness, 0 inside to 1 outside, or the name of a published rule."""

    metavar: str = "PLACE"
    unit: str = ""

    @property
    def allowed(self) -> str:
        """What may be given, in words."""
        return f"a number from 0 to 1, or a published rule: {listed(BEND_RULES)}"

    def read(self, given: object, *, unit: str) -> float | str:
        """The number or the rule's name. Raises InputError."""
        if isinstance(given, str) and any(each.isalpha() for each in given):
            name = "-".join(given.lower().replace("-", " ").split())
            if name not in BEND_RULES:
                wrong = f"{shown(given)} is not a rule for bends{near_miss(name, BEND_RULES)}"
                raise InputError(Problem("", wrong, self.allowed))
            return name
        number = parse_number(given, what="a number", allowed=self.allowed)
        if not 0.0 <= number <= 1.0:
            raise InputError(Problem("", f"{shown(given)} is out of range", self.allowed))
        return number

    def record(self, value: object) -> object:
        """The number or the name."""
        return value

    def text(self, value: object) -> str:
        """The same as text."""
        return value if isinstance(value, str) else number_text(float(str(value)))


NEUTRAL = NeutralLine()
SEAM_RULE = RuleText("butt, lap 25, grooved 6, standing 25")
EDGE = RuleText("raw, lap 20, flange 25 out, hem 10, wired 6")
