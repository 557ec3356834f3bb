"""Commands whose options are declared fields: all are read together, so all errors come at once."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, replace

import click

from develop.errors import InputError, Problem
from develop.job.output_fields import FORMATS_FIELD, OUTPUT_FIELDS
from develop.pieces.field_types import Choice, Text
from develop.pieces.fields import Declared, read_fields
from develop.units import UNITS
from develop.wording import near_miss, nearest, shown

__all__ = ["JSON", "OUT", "OUTPUT_OPTIONS", "RULES_OPTION", "FieldsCommand", "Flag", "PathOf", "units_option"]


@dataclass(frozen=True, eq=False, repr=False)
class PathOf:
    """A path of a file or folder; `allowed` says of what."""

    allowed: str
    metavar: str
    unit: str = ""

    def read(self, given: object, *, unit: str) -> str:
        if not isinstance(given, str) or not given or "\0" in given:
            raise InputError(Problem("", f"{shown(given)} is not a path", self.allowed))
        return given

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return str(value)


@dataclass(frozen=True, eq=False, repr=False)
class Flag:
    """An option without a value."""

    metavar: str = ""
    unit: str = ""
    allowed: str = "the option alone, without a value"

    def read(self, given: object, *, unit: str) -> bool:
        return bool(given)

    def record(self, value: object) -> object:
        return value

    def text(self, value: object) -> str:
        return ""


OUT = Declared(
    name="out",
    type=PathOf("a folder; it is made if it is not there", "DIR"),
    help="folder for the files; made if it is not there",
    required=True,
)
RULES_OPTION = Declared(
    name="rules",
    type=PathOf("a TOML file of rules", "FILE"),
    help="the shop's own rules for seams and edges",
    required=False,
    default="",
)
OUTPUT_OPTIONS = (FORMATS_FIELD, *OUTPUT_FIELDS)
JSON = Declared(name="json", type=Flag(), help="data alone, in mm", required=False, default=False)
_SHORT = {"-o": "--out"}
_UNITS = Choice(tuple(UNITS))


def units_option(text: str) -> Declared:
    """`--units`, one of those that a job file can have."""
    return Declared(name="units", type=_UNITS, help=text, required=False, default="mm")


class FieldsCommand(click.Command):
    """A command whose options are all declared fields, and whose argument, if any, is one too.

    action: called with the values by name; its int is the exit code. The options named in
    `first` are read before the others, as they say how the others are read (the unit).
    """

    def __init__(
        self,
        name: str,
        action: Callable[[Mapping[str, object]], int],
        *,
        options: Sequence[Declared],
        argument: Declared | None = None,
        text: str,
        epilog: str = "",
    ) -> None:
        self.declared = {each.option: each for each in options}
        self.argument = argument
        self.action = action
        params: list[click.Parameter] = []
        if argument is not None:
            metavar = argument.type.metavar
            params.append(click.Argument([argument.name], required=False, metavar=metavar))
        params += [_click_option(each) for each in options]
        usage = [each for each in options if each.required]
        super().__init__(name, params=params, help=text, epilog=epilog, callback=None)
        self.options_metavar = " ".join(
            [f"{_shortest(each)} {each.type.metavar}" for each in usage] + ["[OPTIONS]"]
        )

    def parse_args(self, ctx: click.Context, args: list[str]) -> list[str]:
        if ctx.resilient_parsing:
            return args
        problems: list[Problem] = []
        meant: set[str] = set()
        given, rest = self._sorted(ctx, args, problems, meant)
        if self.argument is not None and rest:
            # The words of a section may come without quotes.
            given[self.argument.name] = " ".join(rest)
        elif rest:
            problems += [Problem("", f"{shown(each)} belongs to no option", "options only") for each in rest]
        ctx.params = self._read(given, problems, meant)
        ctx.args = []
        return []

    def invoke(self, ctx: click.Context) -> int:
        return self.action(ctx.params)

    def _read(
        self, given: Mapping[str, object], problems: list[Problem], meant: set[str]
    ) -> dict[str, object]:
        """The values by name; a needed option that was misspelt is one problem, not two."""
        declared = (() if self.argument is None else (self.argument,)) + tuple(self.declared.values())
        try:
            unit = _UNITS.read(given.get("units", "mm"), unit="")
        except InputError:
            unit = "mm"  # the units are one of the problems then
        values, found = read_fields(declared, given, unit=unit)
        problems += [self._named(each) for each in found if each.field not in meant or each.field in given]
        if problems:
            raise InputError(problems)
        return values

    def _named(self, problem: Problem) -> Problem:
        """The problem with the option's name, or the argument's, in place of the field's."""
        name, _, inside = problem.field.partition(".")
        if self.argument is not None and name == self.argument.name:
            return replace(problem, field=self.argument.type.metavar.strip("[]"))
        option = "--" + name.replace("_", "-")
        return replace(problem, field=f"{option}: {inside}" if inside else option)

    def _sorted(
        self, ctx: click.Context, args: Sequence[str], problems: list[Problem], meant: set[str]
    ) -> tuple[dict[str, object], list[str]]:
        """Raw values by field name, and what is left over. Values may begin with a minus sign."""
        given: dict[str, object] = {}
        rest: list[str] = []
        left = list(args)
        while left:
            word = left.pop(0)
            if word == "--":
                return given, rest + left
            if word == "--help":
                click.echo(ctx.get_help())
                ctx.exit()
            if not word.startswith("-") or word == "-" or _is_number(word):
                rest.append(word)
                continue
            option, joined, value = word.partition("=")
            if word[:2] in _SHORT and not word.startswith("--"):
                option, value = _SHORT[word[:2]], word[2:].removeprefix("=")
                joined = value
            declared = self.declared.get(option)
            if declared is None:
                near = nearest(option, self.declared)
                meant.add(self.declared[near].name if near else "")
                hint = near_miss(option, self.declared)
                problems.append(Problem(option, f"no such option{hint}", f"see {ctx.command_path} --help"))
                if not joined and left and (not left[0].startswith("-") or _is_number(left[0])):
                    left.pop(0)  # its value, most likely
                continue
            if declared.name in given:
                problems.append(Problem(option, "given twice", "each option once"))
            if isinstance(declared.type, Flag):
                given[declared.name] = True
                if joined:
                    problems.append(Problem(option, f"{shown(value)} is given", declared.type.allowed))
            elif joined:
                given[declared.name] = value
            elif left and not self._is_option(left[0]):
                given[declared.name] = left.pop(0)
            else:
                problems.append(Problem(option, "no value given", declared.type.allowed))
                meant.add(declared.name)
        return given, rest

    def _is_option(self, word: str) -> bool:
        name = word.partition("=")[0]
        return name in self.declared or name in _SHORT or name in ("--help", "--")


def _is_number(word: str) -> bool:
    """Whether a word with a minus sign is the start of a number."""
    return word[1:2].isdigit() or word[1:2] == "."


def _shortest(declared: Declared) -> str:
    return next((short for short, option in _SHORT.items() if option == declared.option), declared.option)


def _click_option(declared: Declared) -> click.Option:
    """The option as click's help and shell completion show it."""
    names = [short for short, option in _SHORT.items() if option == declared.option]
    text = declared.help
    if declared.required:
        text += "  [needed]"
    elif declared.default_text:
        text += f"  [{declared.default_text}]"
    if isinstance(declared.type, Flag):
        return click.Option([*names, declared.option], is_flag=True, help=text)
    metavar = declared.type.metavar
    if isinstance(declared.type, Choice):
        metavar = "|".join(declared.type.words)
    if isinstance(declared.type, Text) and declared.type.name:
        metavar = "NAME"
    return click.Option([*names, declared.option], metavar=metavar, help=text)
