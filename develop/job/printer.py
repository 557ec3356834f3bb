"""What a printer makes of a length: measured values, one by one or in a small file for each printer."""

from __future__ import annotations

from dataclasses import dataclass

from develop.errors import InputError, Problem
from develop.units import number_text, parse_length
from develop.wording import near_miss, shown

__all__ = ["LARGEST", "LEAST", "Measured", "MeasuredLength", "Printer", "PrinterFile", "nominal"]

LEAST, LARGEST = 0.95, 1.05
"""Factors beyond these are no printer's fault, but that of a page that was fitted to the paper."""
_KEYS = ("name", "x", "y")


def nominal(axis: str, unit: str) -> float:
    """The distance [mm] between the crosses of the test page: 150 and 200 mm, or 6 and 8 in."""
    inches = unit in ("in", "ft")
    if axis == "x":
        return 6 * 25.4 if inches else 150.0
    return 8 * 25.4 if inches else 200.0


@dataclass(frozen=True)
class Measured:
    """A length as printed, and what it should have been [mm]."""

    printed: float
    meant: float

    @property
    def factor(self) -> float:
        """What a drawing must be multiplied by to come out true."""
        return self.meant / self.printed


@dataclass(frozen=True)
class Printer:
    """A printer's name, and what was measured on its test page; None where nothing was."""

    name: str
    x: Measured | None = None
    y: Measured | None = None


@dataclass(frozen=True, eq=False, repr=False)
class MeasuredLength:
    """A length measured on the test page, in X or Y, perhaps with what it should have been."""

    axis: str
    metavar: str = "LENGTH"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        """What may be given."""
        meant, inches = (nominal(self.axis, unit) for unit in ("mm", "in"))
        least = meant / LARGEST
        return (
            f"the length measured on the test page, from {least:.1f} to {meant / LEAST:.1f} for"
            f" {meant:.0f} mm ({inches / 25.4:.0f} in if the unit is inches), or such as"
            f' "998.5 of 1000", within 5 %'
        )

    def read(self, given: object, *, unit: str) -> Measured:
        """The measured length and what it is of. Raises InputError."""
        words: list[object] = [*given.split(" of ")] if isinstance(given, str) else [given]
        if len(words) > 2:
            raise InputError(Problem("", f"{shown(given)} is not a measured length", self.allowed))
        if len(words) == 2 and str(words[0]).strip()[-1:].isdigit():
            # The unit may stand behind both: 5.98 of 6 in.
            words[0] = str(words[0]) + str(words[1]).strip().lstrip("0123456789.-/ ")
        lengths = [parse_length(word, unit=unit, allowed=self.allowed) for word in words]
        printed, meant = lengths if len(lengths) == 2 else (lengths[0], nominal(self.axis, unit))
        if not (printed > 0.0 and meant > 0.0 and LEAST <= meant / printed <= LARGEST):
            which = (
                f"{shown(given)} is {number_text(round(printed, 3))} mm of {number_text(round(meant, 3))} mm"
            )
            how = f", a factor of {meant / printed:.4g}" if printed > 0.0 else ""
            raise InputError(
                Problem(
                    "",
                    f"{which}{how}: no printer is so far off; was the page fitted to the paper?",
                    self.allowed,
                )
            )
        return Measured(printed, meant)

    def record(self, value: object) -> object:
        """The two lengths [mm]."""
        return [value.printed, value.meant] if isinstance(value, Measured) else None

    def text(self, value: object) -> str:
        """The length as an option has it."""
        return (
            f"{number_text(value.printed)} of {number_text(value.meant)} mm"
            if isinstance(value, Measured)
            else ""
        )


@dataclass(frozen=True, eq=False, repr=False)
class PrinterFile:
    """A settings file of one printer: TOML with `name`, `x` and `y`, as the test page tells."""

    metavar: str = "FILE"
    unit: str = ""
    allowed: str = 'a TOML file with name = "..." and x and y such as "149.6 of 150", or one of them'

    def read(self, given: object, *, unit: str) -> Printer:
        """The printer in a file, whose bare lengths are in mm. Raises InputError with all that is wrong."""
        import tomllib
        from os import strerror

        if not isinstance(given, str) or not given or "\0" in given:
            raise InputError(Problem("", f"{shown(given)} is not a path", self.allowed))
        try:
            with open(given, encoding="utf-8-sig") as file:
                data = tomllib.loads(file.read(65_536))
        except OSError as error:
            reason = strerror(error.errno) if error.errno else str(error)
            raise InputError(Problem("", f"{given} cannot be read: {reason}", self.allowed)) from None
        except (ValueError, RecursionError) as error:
            reason = str(error).replace("\n", " ")
            raise InputError(Problem("", f"{given} is not a TOML file: {reason}", self.allowed)) from None
        return self._printer(given, data)

    def _printer(self, file: str, data: dict[str, object]) -> Printer:
        problems = [
            Problem("", f"{file}: {key}: no such field{near_miss(key, _KEYS)}", ", ".join(_KEYS))
            for key in data
            if key not in _KEYS
        ]
        name = data.get("name", "")
        if not isinstance(name, str) or not name.strip().isprintable() or not 0 < len(name.strip()) <= 40:
            wrong = f"{shown(name)} is not a name" if "name" in data else "not given"
            problems.append(Problem("", f"{file}: name: {wrong}", "one line of text, 1 to 40 characters"))
        found: dict[str, Measured] = {}
        for axis in ("x", "y"):
            if axis in data:
                try:
                    found[axis] = MeasuredLength(axis).read(data[axis], unit="mm")
                except InputError as error:
                    problems += [
                        Problem("", f"{file}: {axis}: {each.given}", each.allowed) for each in error.problems
                    ]
        if not found and not problems:
            problems.append(Problem("", f"{file} has neither x nor y", self.allowed))
        if problems:
            raise InputError(problems)
        return Printer(str(name).strip(), **found)

    def record(self, value: object) -> object:
        """The printer's name."""
        return value.name if isinstance(value, Printer) else None

    def text(self, value: object) -> str:
        """The printer's name."""
        return value.name if isinstance(value, Printer) else ""
