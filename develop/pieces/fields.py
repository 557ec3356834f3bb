"""One declaration of a kind's fields, and what is made from it.

A kind is a frozen, keyword-only dataclass; `about` puts a field's type and its help into the
metadata. From that come the schema of the job file, the options of the command line, the help,
the reference page and the `fields` of the record.
"""

from __future__ import annotations

import dataclasses
from abc import ABC, abstractmethod
from collections.abc import Collection, Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, ClassVar

from develop.errors import InputError, Problem
from develop.pieces.field_types import FieldType
from develop.wording import near_miss, nearest, shown

if TYPE_CHECKING:
    from develop.pieces.built import Built

__all__ = ["Declared", "Piece", "about", "fields_of", "read_fields", "read_piece", "record_of"]


class Piece(ABC):
    """What every kind of piece offers beside its fields, which are in mm and radians.

    kind: its name. example: fields of a piece that runs, as a job file has them, lengths in mm.
    """

    kind: ClassVar[str]
    example: ClassVar[Mapping[str, str | float]]

    mark: str

    @abstractmethod
    def surface(self) -> object:
        """The surface that carries the piece, cheaply: raises Refusal for one that cannot be."""

    def check(self) -> None:
        """Raises Refusal, cheaply, for a piece that cannot be."""
        self.surface()

    @abstractmethod
    def build(self, *, units: str = "mm") -> Built:
        """The flat patterns and the finished piece. units: of the figures on the sheets, `mm` or `in`.

        Raises Refusal.
        """


def about(
    kind: FieldType,
    text: str,
    *,
    not_with: str | tuple[str, ...] = (),
    only_with: str | tuple[str, str] | None = None,
    own: bool = True,
    handed: bool = False,
) -> dict[str, object]:
    """Metadata of a field: its type, its help, the fields it excludes, and whether it is the kind's own.

    only_with: another field without which this one would have no effect, or that field and its word.
    handed: a number that counts to the right or anticlockwise, so that the opposite hand has it
    negative. Directions, cuts, offsets and sections are mirrored by their types.
    """
    others = (not_with,) if isinstance(not_with, str) else not_with
    return {
        "type": kind,
        "help": text,
        "not_with": others,
        "only_with": (only_with, "") if isinstance(only_with, str) else only_with,
        "own": own,
        "handed": handed,
    }


@dataclass(frozen=True)
class Declared:
    """A field as declared. default: its value when it is not given; `required` if it must be."""

    name: str
    type: FieldType
    help: str
    required: bool
    default: object = field(default=None)
    not_with: tuple[str, ...] = ()
    only_with: tuple[str, str] | None = None
    own: bool = True
    handed: bool = False

    @property
    def option(self) -> str:
        """Its name on the command line."""
        return "--" + self.name.replace("_", "-")

    @property
    def default_text(self) -> str:
        """The default as one would give it; empty for none."""
        return "" if self.required else self.type.text(self.default)

    @property
    def needs(self) -> str:
        """What it has no effect without, in words; empty where it always has one."""
        return " = ".join(word for word in self.only_with or () if word)

    def idle(self, values: Mapping[str, object]) -> bool:
        """Whether it has no effect beside those values; one that could not be read is no reason."""
        name, word = self.only_with or ("", "")
        if name not in values:
            return False
        return values[name] != word if word else not values[name]


_DECLARED = ("type", "help", "not_with", "only_with", "own", "handed")


def fields_of(kind: type[Piece]) -> tuple[Declared, ...]:
    """The fields of a kind: its own first, as declared, then those it shares."""
    found = []
    for each in dataclasses.fields(kind):  # type: ignore[arg-type]  # every kind is a dataclass
        if "type" not in each.metadata:
            continue
        required = each.default is dataclasses.MISSING
        found.append(
            Declared(
                name=each.name,
                required=required,
                default=None if required else each.default,
                **{key: each.metadata[key] for key in _DECLARED},
            )
        )
    return tuple(sorted(found, key=lambda declared: not declared.own))


def read_fields(
    declared: tuple[Declared, ...],
    given: Mapping[str, object],
    *,
    unit: str,
    where: str = "",
    shared: Collection[str] = (),
) -> tuple[dict[str, object], list[Problem]]:
    """Values by name and every problem; the values are complete only when there is no problem.

    given: raw values by field name, from options or a job file. where: whose fields these are.
    shared: those of the given that are meant for other pieces too, and need have no effect here.
    """
    names = {each.name: each for each in declared}
    problems: list[Problem] = []
    meant: set[str] = set()
    for name in given:
        if name not in names:
            hint = near_miss(name, names)
            which = f"no such field{' of ' + where if where else ''}{hint}"
            problems.append(Problem(name, which, ", ".join(names)))
            meant.add(nearest(name, names))
    values: dict[str, object] = {}
    for name, each in names.items():
        if name not in given:
            if each.required and name not in meant:
                problems.append(Problem(name, "not given", each.type.allowed))
            values[name] = each.default
            continue
        try:
            values[name] = each.type.read(given[name], unit=unit)
        except InputError as error:
            for problem in error.problems:
                inside = f"{name}.{problem.field}" if problem.field else name
                problems.append(Problem(inside, problem.given, problem.allowed))
        problems += [
            Problem(name, f"{shown(given[name])} is given together with {other}", "one of the two")
            for other in each.not_with
            if other in given
        ]
    problems += [
        Problem(name, f"{shown(given[name])} has no effect here", f"only together with {each.needs}")
        for name, each in names.items()
        if name in given and name not in shared and each.idle(values)
    ]
    return values, problems


def read_piece(
    kind: type[Piece], given: Mapping[str, object], *, unit: str = "mm", shared: Collection[str] = ()
) -> tuple[Piece | None, list[Problem]]:
    """The piece, or None and every problem with what was given; bare lengths in `unit`.

    shared: those of the given that are meant for other pieces too, and need have no effect here.
    """
    values, problems = read_fields(fields_of(kind), given, unit=unit, where=kind.kind, shared=shared)
    return (None, problems) if problems else (kind(**values), [])


def record_of(piece: Piece) -> dict[str, object]:
    """The fields as understood, for the record: mm and degrees, in the order of the declaration."""
    found: dict[str, object] = {}
    for each in fields_of(type(piece)):
        found[each.name] = each.type.record(getattr(piece, each.name))
    return found
