"""Every error that a user can meet, each with its exit code.

    DevelopError                    exit code
    ├── InputError        2         one or more problems with what was given
    │   └── Refusal                 a shape that cannot be made flat, and the nearest that works
    └── WriteError        3         the files could not be written

Exit code 0 is "done", 1 is "written, but a check does not hold"; neither is an error.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace

__all__ = ["DevelopError", "InputError", "Problem", "Refusal", "WriteError"]


@dataclass(frozen=True)
class Problem:
    """One thing that is wrong with the input.

    `field` is the field's name; `given` says what was given, `allowed` what would be right;
    `place` is where it stands, such as `hall.toml:12` or `piece P3`, empty when unknown.
    """

    field: str
    given: str
    allowed: str
    place: str = ""

    def __str__(self) -> str:
        head = ": ".join(part for part in (self.place, self.field) if part)
        body = f"{self.given}; allowed: {self.allowed}" if self.allowed else self.given
        return f"{head}: {body}" if head else body

    def at(self, place: str) -> Problem:
        """The same problem, at a place."""
        return replace(self, place=place)


class DevelopError(Exception):
    """The root of all errors that are shown to a user without a traceback."""

    exit_code = 2


class InputError(DevelopError):
    """Bad input: carries every problem found, not only the first."""

    exit_code = 2

    def __init__(self, problems: Problem | Sequence[Problem]) -> None:
        self.problems: tuple[Problem, ...] = (problems,) if isinstance(problems, Problem) else tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class Refusal(InputError):
    """A shape that cannot be made flat or cannot exist: one problem, with the nearest that works."""

    def __init__(self, *, field: str, given: str, allowed: str) -> None:
        super().__init__(Problem(field=field, given=given, allowed=allowed))


class WriteError(DevelopError):
    """A file or folder could not be written."""

    exit_code = 3
