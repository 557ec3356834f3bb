"""Seams and edges as a job names them, `grooved 6` or `flange 25 out`, to allowances and fold lines."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TypeVar

from develop.errors import InputError, Problem
from develop.tables.rules import EdgeFormula, Linear, Rules, SeamFormula, shipped
from develop.units import number_text, parse_length
from develop.wording import listed, near_miss, shown

__all__ = ["EdgeRule", "SeamRule", "edge_of", "seam_of"]

_Formula = TypeVar("_Formula", bound=SeamFormula | EdgeFormula)

_LARGEST = 1000.0
_FILLING = re.compile(r"\b(?:seam|edge)\b")
_PARTS = re.compile(r"\s*([a-z][a-z\s-]*?)\s*(-?[0-9.].*?)?\s*(?:turned\s+(in|out)|(\bout))?\s*")


@dataclass(frozen=True)
class SeamRule:
    """What a seam adds to a pattern. size, left, right [mm]: allowances beyond the left and right net line.

    left_folds, right_folds: distances of fold lines outside the net line [mm], the nearest first.
    ends: shape of its ends, `square` or `notched`. source: of the rule.
    """

    name: str
    size: float
    left: float
    right: float
    left_folds: tuple[float, ...]
    right_folds: tuple[float, ...]
    ends: str
    source: str

    @property
    def text(self) -> str:
        """As a job would give it."""
        return _text(self.name, self.size)


@dataclass(frozen=True)
class EdgeRule:
    """What an edge at an end adds to a pattern. size, allowance [mm]; folds as for a seam [mm].

    turned: `in`, `out`, or empty where it is neither.
    """

    name: str
    size: float
    allowance: float
    folds: tuple[float, ...]
    turned: str
    ends: str
    source: str

    @property
    def text(self) -> str:
        """As a job would give it."""
        return _text(self.name, self.size) + (f" turned {self.turned}" if self.turned else "")


def _text(name: str, size: float) -> str:
    return f"{name} {number_text(size)} mm" if size else name


def seam_of(
    text: object, *, thickness: float = 0.0, unit: str = "mm", rules: Rules | None = None
) -> SeamRule:
    """The seam that a text names, for a sheet of the thickness [mm]; a bare size is in `unit`.

    rules: the shop's own, else those that come with the program. Raises InputError.

    >>> seam = seam_of("grooved 6")
    >>> seam.left, seam.right, seam.right_folds, seam_of("lap 25").right, seam_of("butt").right
    (9.0, 9.0, (3.0,), 25.0, 0.0)
    """
    formulas = (rules or shipped()).seams
    formula, size, rest = _read(text, formulas, unit, "seam")
    if rest:
        raise _wrong(f"{shown(text)}: a seam is not turned {rest}", f"{formula.name} without it")

    def reckoned(allowance: Linear, folds: tuple[Linear, ...]) -> tuple[float, tuple[float, ...]]:
        return _reckoned(allowance, folds, size=size, thickness=thickness, given=text)

    left, left_folds = reckoned(formula.left, formula.left_folds)
    right, right_folds = reckoned(formula.right, formula.right_folds)
    return SeamRule(
        name=formula.name, size=size, left=left, right=right, left_folds=left_folds, right_folds=right_folds,
        ends=formula.ends, source=formula.source,
    )  # fmt: skip


def edge_of(
    text: object, *, thickness: float = 0.0, unit: str = "mm", rules: Rules | None = None
) -> EdgeRule:
    """The edge that a text names, for a sheet of the thickness [mm]; a bare size is in `unit`.

    rules: the shop's own, else those that come with the program. Raises InputError.

    >>> edge_of("wired 4", thickness=0.5).allowance, edge_of("flange 25 turned in").turned
    (10.5, 'in')
    """
    formulas = (rules or shipped()).edges
    formula, size, rest = _read(text, formulas, unit, "edge")
    if rest and not formula.turned:
        raise _wrong(f"{shown(text)}: {formula.name} is not turned {rest}", f"{formula.name} alone")
    allowance, folds = _reckoned(formula.allowance, formula.folds, size=size, thickness=thickness, given=text)
    return EdgeRule(
        name=formula.name, size=size, allowance=allowance, folds=folds,
        turned=(rest or "out") if formula.turned else "", ends=formula.ends, source=formula.source,
    )  # fmt: skip


def _wrong(given: str, allowed: str) -> InputError:
    return InputError(Problem(field="", given=given, allowed=allowed))


def _allowed(formulas: Mapping[str, SeamFormula | EdgeFormula]) -> str:
    return listed(f"{name} SIZE" if each.size else name for name, each in formulas.items())


def _read(
    text: object, formulas: Mapping[str, _Formula], unit: str, what: str
) -> tuple[_Formula, float, str]:
    """The rule that is named, the size [mm], and the words behind it."""
    if not isinstance(text, str):
        raise _wrong(f"{shown(text)} is not {'an' if what == 'edge' else 'a'} {what}", _allowed(formulas))
    names = {word: each for each in formulas.values() for word in (each.name.replace("-", " "), *each.also)}
    lower = _FILLING.sub(" ", text.lower())
    found = _PARTS.fullmatch(lower)
    words = " ".join(found[1].replace("-", " ").split()) if found else ""
    if found is None or words not in names:
        hint = near_miss(words, names)
        raise _wrong(
            f"{shown(text)} is not {'an' if what == 'edge' else 'a'} {what}{hint}", _allowed(formulas)
        )
    formula = names[words]
    turned = found[3] or found[4] or ""
    if not formula.size:
        if found[2]:
            raise _wrong(f"{shown(text)}: {formula.name} takes no size", formula.name)
        return formula, 0.0, turned
    allowed = f"{formula.name} and the {formula.size}, up to {number_text(_LARGEST)} mm"
    size = found[2]
    if not size:
        raise _wrong(f"{shown(text)}: the {formula.size} is not given", allowed)
    if not turned and getattr(formula, "turned", False) and re.search(r"[0-9.\s]in$", size):
        number = size.removesuffix("in").strip()
        either = f'{formula.name} {number}" or {formula.name} {number} turned in'
        raise _wrong(f"{shown(text)} can be read as inches or as turned in", either)
    mm = parse_length(size, unit=unit, allowed=allowed)
    if not 0.0 < mm <= _LARGEST:
        raise _wrong(f"{shown(text)} is too {'large' if mm > 0.0 else 'small'}", allowed)
    return formula, mm, turned


def _reckoned(
    allowance: Linear, folds: tuple[Linear, ...], *, size: float, thickness: float, given: object
) -> tuple[float, tuple[float, ...]]:
    """Allowance and fold lines [mm]; a size for which they come out below nothing is refused."""
    whole = allowance.of(size=size, thickness=thickness)
    lines = tuple(sorted(each.of(size=size, thickness=thickness) for each in folds))
    if whole < 0.0 or (lines and not 0.0 <= lines[0] <= lines[-1] <= whole):
        raise _wrong(f"{shown(given)} is too small for this rule", "a larger size")
    return whole, lines
