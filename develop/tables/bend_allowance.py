"""Bend allowances by published rules, from `bends.toml`, which says where each was read.

A rule's length for a bend is that of an arc at some place in the thickness: the neutral line, 0 at the
inside and 1 at the outside of the bend.
"""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from math import isfinite, pi
from types import MappingProxyType

from develop.errors import InputError, Problem
from develop.wording import listed, near_miss, shown

__all__ = ["BendRule", "bend_allowance", "bend_rules", "neutral_line"]

_QUARTER = 0.5 * pi


@dataclass(frozen=True)
class BendRule:
    """One published rule.

    per_radius, per_thickness: parts of the length of a 90° bend. steps: (bound of radius over thickness,
    place of the neutral line) in rising order, for a rule that gives the place itself.
    """

    name: str
    about: str
    source: str
    read: str
    per_radius: float = _QUARTER
    per_thickness: float = 0.0
    steps: tuple[tuple[float, float], ...] = ()


@cache
def bend_rules() -> Mapping[str, BendRule]:
    """Every rule by name.

    >>> list(bend_rules())
    ['soft', 'half-hard', 'hard', 'aircraft', 'by-radius']
    """
    import tomllib
    from os.path import dirname, join

    with open(join(dirname(__file__), "bends.toml"), "rb") as file:
        data = tomllib.load(file)
    found = {}
    for name, table in data.items():
        steps = tuple(
            (each.get("below", float("inf")), each["neutral_line"]) for each in table.pop("steps", ())
        )
        found[name] = BendRule(name=name, steps=steps, **table)
    return MappingProxyType(found)


def neutral_line(rule: str, *, radius: float, thickness: float) -> float:
    """Where the neutral line lies, 0 inside to 1 outside, for an inside radius [mm] and a thickness [mm].

    For a rule of lengths, what it gives the thickness over π/2; its 1.57 for the radius is π/2 rounded, and
    is taken as that, or the place would run out of the wall as the radius grows. Raises InputError.

    >>> round(neutral_line("half-hard", radius=0.0, thickness=3.0), 4)
    0.4074
    >>> [neutral_line("by-radius", radius=radius, thickness=2.0) for radius in (3.0, 4.0)]
    [0.33, 0.5]
    """
    found = _rule(rule)
    _check(radius, thickness)
    if found.steps:
        return next(place for bound, place in found.steps if radius < bound * thickness)
    return found.per_thickness / _QUARTER


def bend_allowance(rule: str, *, radius: float, thickness: float, angle: float) -> float:
    """Length of sheet in a bend [mm] by the rule as it is printed: inside radius and thickness [mm], angle of
    the bend [rad], 0 where it stays flat. Raises InputError.

    >>> round(bend_allowance("half-hard", radius=9.525, thickness=3.175, angle=pi) / 25.4, 4)
    1.3375
    """
    found = _rule(rule)
    _check(radius, thickness)
    if found.steps:
        return angle * (radius + neutral_line(rule, radius=radius, thickness=thickness) * thickness)
    return angle / _QUARTER * (found.per_radius * radius + found.per_thickness * thickness)


def _rule(name: str) -> BendRule:
    plain = "-".join(name.lower().replace("-", " ").split())
    rules = bend_rules()
    if plain not in rules:
        given = f"{shown(name)} is not a rule for bends{near_miss(plain, rules)}"
        raise InputError(Problem(field="", given=given, allowed=listed(rules)))
    return rules[plain]


def _check(radius: float, thickness: float) -> None:
    wrong = []
    if not (isfinite(radius) and radius >= 0.0):
        wrong.append(Problem("radius", f"{radius:g} mm", "0 mm or more"))
    if not (isfinite(thickness) and thickness > 0.0):
        wrong.append(Problem("thickness", f"{thickness:g} mm", "more than 0 mm"))
    if wrong:
        raise InputError(wrong)
