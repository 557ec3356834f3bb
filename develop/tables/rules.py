"""Rules for seams and edges: from a size and a thickness to allowances and fold lines.

The rules that come with the program stand in `seams.toml` and `edges.toml`; tables of the same form
override them or add to them. Everything is measured outward from the net line, square to it.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from functools import cache
from types import MappingProxyType
from typing import Any, TypeVar

from develop.errors import InputError, Problem
from develop.units import number_text
from develop.wording import listed, near_miss, shown

__all__ = ["ENDS", "EdgeFormula", "Linear", "Rules", "SeamFormula", "read_tables", "shipped"]

ENDS = ("square", "notched")
"""Shapes of the ends of an allowance."""

_LINEAR = ("size", "thickness", "fixed")
_MOST = 1000.0
_SIDES = ("left", "right")
_Formula = TypeVar("_Formula", bound="SeamFormula | EdgeFormula")


@dataclass(frozen=True)
class Linear:
    """size times the size of the seam, and thickness times that of the sheet, and fixed [mm]."""

    size: float = 0.0
    thickness: float = 0.0
    fixed: float = 0.0

    def of(self, *, size: float, thickness: float) -> float:
        """The length [mm] for a size and a thickness [mm].

        >>> Linear(size=2.5, thickness=1.0).of(size=4.0, thickness=0.5)
        10.5
        """
        return self.size * size + self.thickness * thickness + self.fixed


@dataclass(frozen=True)
class SeamFormula:
    """The rule of one kind of seam.

    also: other names. size: what its size is, in words; empty for a seam that takes none.
    left, right: allowance on each side; left_folds, right_folds: fold lines inside them.
    """

    name: str
    about: str
    also: tuple[str, ...] = ()
    size: str = ""
    left: Linear = Linear()
    right: Linear = Linear()
    left_folds: tuple[Linear, ...] = ()
    right_folds: tuple[Linear, ...] = ()
    ends: str = "square"
    source: str = "the shop's own"


@dataclass(frozen=True)
class EdgeFormula:
    """The rule of one kind of edge; as for a seam, but for one allowance.

    turned: whether it may be made in or out.
    """

    name: str
    about: str
    also: tuple[str, ...] = ()
    size: str = ""
    turned: bool = False
    allowance: Linear = Linear()
    folds: tuple[Linear, ...] = ()
    ends: str = "square"
    source: str = "the shop's own"


@dataclass(frozen=True)
class Rules:
    """The rules of seams and of edges by name."""

    seams: Mapping[str, SeamFormula] = field(default_factory=lambda: MappingProxyType({}))
    edges: Mapping[str, EdgeFormula] = field(default_factory=lambda: MappingProxyType({}))


@cache
def shipped() -> Rules:
    """The rules that come with the program.

    >>> shipped().seams["grooved"].left
    Linear(size=1.5, thickness=0.0, fixed=0.0)
    """
    import tomllib
    from os.path import dirname, join

    data: dict[str, object] = {}
    for name in ("seams", "edges"):
        with open(join(dirname(__file__), f"{name}.toml"), "rb") as file:
            data |= tomllib.load(file)
    return read_tables(data)


def _nowhere(*_: str | int) -> str:
    return ""


def read_tables(
    data: Mapping[str, object], *, base: Rules | None = None, place: Callable[..., str] = _nowhere
) -> Rules:
    """Rules from the tables `[seams.NAME]` and `[edges.NAME]`, over those of `base`.

    A table that has a name of base's replaces that rule whole. place: where a path of keys stands.
    Raises InputError with every problem.
    """
    reading = _Reading(place)
    for name in data:
        if name not in ("seams", "edges"):
            reading.wrong((name,), f"no such table{near_miss(name, ('seams', 'edges'))}",
                          "[seams.NAME] and [edges.NAME]")  # fmt: skip
    base = base or Rules()
    seams = reading.formulas(data, "seams", reading.seam, base.seams)
    edges = reading.formulas(data, "edges", reading.edge, base.edges)
    if reading.problems:
        raise InputError(reading.problems)
    return Rules(MappingProxyType(seams), MappingProxyType(edges))


class _Reading:
    """One reading, which gathers every problem."""

    def __init__(self, place: Callable[..., str]) -> None:
        self.place = place
        self.problems: list[Problem] = []

    def wrong(self, path: tuple[str | int, ...], given: str, allowed: str) -> None:
        field = ".".join(str(each) for each in path)
        self.problems.append(Problem(field, given, allowed, self.place(*path)))

    def formulas(
        self,
        data: Mapping[str, object],
        kind: str,
        read: Callable[[str, Mapping[str, object]], _Formula],
        base: Mapping[str, _Formula],
    ) -> dict[str, _Formula]:
        tables = data.get(kind, {})
        if not isinstance(tables, dict):
            self.wrong((kind,), f"{shown(tables)} is not a table", f"[{kind}.NAME]")
            return {}
        found = dict(base)
        for name, table in tables.items():
            plain = " ".join(name.lower().replace("-", " ").split())
            if not plain or not plain.replace(" ", "").isalpha():
                self.wrong((kind, name), f"{shown(name)} is not a name", "letters, words parted by -")
            elif isinstance(table, dict):
                found[plain.replace(" ", "-")] = read(plain.replace(" ", "-"), table)
            else:
                self.wrong((kind, name), f"{shown(table)} is not a table", f"[{kind}.{name}]")
        names: dict[str, str] = {}
        for each in found.values():
            for word in (each.name.replace("-", " "), *each.also):
                other = names.setdefault(word, each.name)
                if other != each.name:
                    self.wrong(
                        (kind, each.name), f"{shown(word)} is also a name of {other}", "names of its own"
                    )
        return found

    def seam(self, name: str, table: Mapping[str, object]) -> SeamFormula:
        path = ("seams", name)
        self._keys(
            path, table, ("about", "also", "size", *_SIDES, "left_folds", "right_folds", "ends", "source")
        )
        return SeamFormula(
            name=name,
            left=self._linear((*path, "left"), table.get("left", {}), table),
            right=self._linear((*path, "right"), table.get("right", {}), table),
            left_folds=self._folds((*path, "left_folds"), table.get("left_folds", []), table),
            right_folds=self._folds((*path, "right_folds"), table.get("right_folds", []), table),
            **self._words(path, table),
        )

    def edge(self, name: str, table: Mapping[str, object]) -> EdgeFormula:
        path = ("edges", name)
        self._keys(path, table, ("about", "also", "size", "turned", "allowance", "folds", "ends", "source"))
        turned = table.get("turned", False)
        if not isinstance(turned, bool):
            self.wrong((*path, "turned"), f"{shown(turned)} is not true or false", "true or false")
        return EdgeFormula(
            name=name,
            turned=turned is True,
            allowance=self._linear((*path, "allowance"), table.get("allowance", {}), table),
            folds=self._folds((*path, "folds"), table.get("folds", []), table),
            **self._words(path, table),
        )

    def _keys(self, path: tuple[str, ...], table: Mapping[str, object], known: tuple[str, ...]) -> None:
        for key in table:
            if key not in known:
                self.wrong((*path, key), f"no such field{near_miss(key, known)}", ", ".join(known))

    def _words(self, path: tuple[str, ...], table: Mapping[str, object]) -> dict[str, Any]:
        also = table.get("also", [])
        if not isinstance(also, list) or not all(isinstance(each, str) and each.strip() for each in also):
            self.wrong((*path, "also"), f"{shown(also)} is not a list of names", '["single welt"]')
            also = []
        found: dict[str, object] = {
            "also": tuple(" ".join(e.lower().replace("-", " ").split()) for e in also)
        }
        for key, default in (("about", ""), ("size", ""), ("source", "the shop's own")):
            text = table.get(key, default)
            if not isinstance(text, str):
                self.wrong((*path, key), f"{shown(text)} is not text", "text in quotes")
            found[key] = str(text)
        ends = table.get("ends", "square")
        if ends not in ENDS:
            self.wrong((*path, "ends"), f"{shown(ends)} is not one of them", listed(ENDS))
        found["ends"] = str(ends)
        return found

    def _linear(self, path: tuple[str | int, ...], given: object, table: Mapping[str, object]) -> Linear:
        if not isinstance(given, dict):
            allowed = "{ size = 1, thickness = 0, fixed = 0 }, each 0 where it is left out"
            self.wrong(path, f"{shown(given)} is not a rule", allowed)
            return Linear()
        values = {}
        for key, value in given.items():
            if key not in _LINEAR:
                self.wrong((*path, key), f"no such part{near_miss(key, _LINEAR)}", listed(_LINEAR))
            elif isinstance(value, bool) or not isinstance(value, int | float) or not abs(value) <= _MOST:
                self.wrong((*path, key), f"{shown(value)} is not a number", f"up to {number_text(_MOST)}")
            elif key == "size" and value and not table.get("size"):
                self.wrong(
                    (*path, key), "the table does not say what its size is", 'size = "width of it" too'
                )
            else:
                values[key] = float(value)
        return Linear(**values)

    def _folds(self, path: tuple[str, ...], given: object, table: Mapping[str, object]) -> tuple[Linear, ...]:
        if not isinstance(given, list):
            self.wrong(path, f"{shown(given)} is not a list", "[{ size = 0.5 }]")
            return ()
        return tuple(self._linear((*path, i), each, table) for i, each in enumerate(given))
