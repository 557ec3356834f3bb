"""The field of a marking band for a pipe that meets another: onto which header, and how."""

from __future__ import annotations

import re
from dataclasses import dataclass
from math import pi

from develop.errors import InputError, Problem
from develop.pieces.field_types import SECTION, Angle, FieldType, Length
from develop.sections.text import SectionSpec
from develop.units import number_text
from develop.wording import listed, near_miss, nearest, shown

__all__ = ["ONTO", "Onto", "OntoText"]

_PARTS: dict[str, FieldType] = {
    "header": SECTION,
    "angle": Angle(least=10.0, most=170.0),
    "off_centre": Length(least=-100_000.0, most=100_000.0),
}
_NAMES = re.compile(r"\b(angle|off[-_ ]cent(?:re|er))\b")


@dataclass(frozen=True)
class Onto:
    """A straight header that the pipe meets. angle [rad] between the axes; off_centre [mm]."""

    header: SectionSpec
    angle: float = 0.5 * pi
    off_centre: float = 0.0


@dataclass(frozen=True, eq=False, repr=False)
class OntoText:
    """A header as `round 400 angle 60 off_centre 20`, or as a table of these; `none` (None) for none."""

    metavar: str = "HEADER"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        return (
            "the section of a header, with angle and off_centre: round 400 angle 60 off_centre 20 (in a "
            'job file also { header = "round 400", angle = 60, off_centre = 20 }), angle from 10 to 170'
        )

    def read(self, given: object, *, unit: str) -> Onto | None:
        """The header, or None. Raises InputError."""
        if isinstance(given, dict):
            parts: dict[str, object] = dict(given)
        elif isinstance(given, str):
            if given.strip().lower() == "none":
                return None
            first, *rest = _NAMES.split(given)
            names = ["off_centre" if name.startswith("off") else name for name in rest[::2]]
            if len(set(names)) < len(names):
                raise InputError(Problem("", f"{shown(given)} says one thing twice", self.allowed))
            values = [value.strip(" =,") for value in rest[1::2]]
            parts = {"header": first.strip(" =,"), **dict(zip(names, values, strict=True))}
        else:
            raise InputError(Problem("", f"{shown(given)} is not a header", self.allowed))
        problems = [
            Problem(name, f"no such field{near_miss(name, _PARTS)}", listed(_PARTS))
            for name in parts
            if name not in _PARTS
        ]
        if "header" not in parts:
            problems.append(Problem("header", "not given", SECTION.allowed))
        read: dict[str, object] = {}
        for name in (name for name in _PARTS if name in parts):
            try:
                read[name] = _PARTS[name].read(parts[name], unit=unit)
            except InputError as error:
                # A word that is nearly one of these was taken for a part of the section.
                text = parts[name] if name == "header" and isinstance(given, str) else ""
                wrong = [word for word in str(text).split() if nearest(word, ("angle", "off_centre"))]
                if wrong:
                    hint = near_miss(wrong[0], ("angle", "off_centre"))
                    problems.append(
                        Problem("", f"{shown(wrong[0])} is no word of a header{hint}", self.allowed)
                    )
                    continue
                problems += [Problem(name, each.given, each.allowed) for each in error.problems]
        if problems:
            raise InputError(problems)
        return Onto(**read)  # type: ignore[arg-type]

    def record(self, value: object) -> object:
        """The header as a table, in mm and degrees."""
        if value is None:
            return None
        assert isinstance(value, Onto)
        return {name: part.record(getattr(value, name)) for name, part in _PARTS.items()}

    def text(self, value: object) -> str:
        """The header as one would give it."""
        if value is None:
            return "none"
        assert isinstance(value, Onto)
        return (
            f"{value.header.text} angle {_PARTS['angle'].text(value.angle)} "
            f"off_centre {number_text(value.off_centre)} mm"
        )

    def mirrored(self, value: object) -> object:
        """The header for the opposite hand."""
        assert isinstance(value, Onto)
        return Onto(value.header, value.angle, -value.off_centre + 0.0)


ONTO = OntoText()
