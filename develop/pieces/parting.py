"""A side made in parts: divided along its rulings, each part with a pattern, and their joints."""

from __future__ import annotations

from collections.abc import Callable, Iterable, Sequence
from dataclasses import dataclass, replace
from math import ceil, degrees, hypot
from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.pattern.pattern import Figures, Pattern
from develop.pattern.stock import Lying, lying_in, outline_hull, smallest
from develop.pieces.alike import alike, marks_of, motion
from develop.pieces.assemble import Hole, Share
from develop.pieces.built import Built, Divided, Joint, Part, one
from develop.pieces.part_lines import part_lines
from develop.pieces.part_types import FIT, MOST_PARTS
from develop.pieces.wording import direction_words, size_words
from develop.solid import Frame, Solid
from develop.surfaces.part import SheetPart
from develop.surfaces.sheet import Place, Sheet
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.common import Plate
    from develop.quadrature import Array

__all__ = ["Draw", "holes_on", "parted"]

Draw = Callable[[Sheet, Share | None], Pattern]
"""Makes the pattern of a sheet: of a whole one, or of a part that stands so among the others."""


def parted(
    plate: Plate, sheet: Sheet, solid: Solid, draw: Draw, *, units: str, opposite: bool = False
) -> Built:
    """The piece of one side, in as many parts as its `made_in` says.

    sheet: the whole side laid flat; solid: the same in space. opposite: whether two parts meet opposite the
    seam, as the usual halves do, and not where they share the girth.
    Raises Refusal where the side cannot be so divided.
    """

    def made(count: int) -> Built:
        if count == 1:
            return one(draw(sheet, None), solid)
        return _divided(plate, lines_of(count), sheet, solid, draw)

    def lines_of(count: int) -> Place:
        section = solid.end_a.section.offset(solid.distance)
        bent = bool(getattr(plate, "kicks", 0))
        return part_lines(sheet, section, count, opposite=opposite, bent=bent)

    if plate.made_in != FIT:
        assert isinstance(plate.made_in, int)
        return made(plate.made_in)
    stock = plate.stock
    fewest = min(max(ceil(sheet.area / (stock[0] * stock[1])), 1), MOST_PARTS)
    if float(np.max(sheet.at_ends.length)) > hypot(*stock):
        # However many parts there are, their lines are no shorter.
        fewest = MOST_PARTS
    found: Built | None = None
    for count in range(fewest, MOST_PARTS + 1):
        try:
            found = made(count)
        except Refusal as refusal:
            # Some numbers of parts cannot be: a line falls on an opening, or there are too few flats.
            if refusal.problems[0].field != "made_in" or (found is None and count == MOST_PARTS):
                raise
            continue
        lying = [lying_in(outline_hull(pattern.cut), stock) for pattern in found.patterns]
        goes = [each for each in lying if each is not None]
        if len(goes) == len(lying):
            return found.with_patterns(
                [_goes(*each, stock, units) for each in zip(found.patterns, goes, strict=True)]
            )
    assert found is not None
    raise _no_stock(found, stock)


def holes_on(sheet: Sheet, holes: Sequence[Hole]) -> tuple[Hole, ...]:
    """Those holes of a whole sheet that lie on a sheet, in its coordinates: all of them, or those of a part.

    Raises Refusal where a part line runs through one.
    """
    if not isinstance(sheet, SheetPart):
        return tuple(holes)
    lines = sheet.lines(sheet.ends[np.array([0, -1])])
    along = lines.b - lines.a
    found = []
    for hole in holes:
        here = replace(
            hole,
            controls=hole.controls @ sheet.turned.T,
            points=hole.points @ sheet.turned.T,
            tangents=hole.tangents @ sheet.turned.T,
        )
        gap = here.controls[:, None] - lines.a
        right = along[:, 1] * gap[..., 0] - along[:, 0] * gap[..., 1] > 0.0
        inside = right[:, 0] & ~right[:, 1]
        if inside.all():
            found.append(here)
        elif inside.any():
            raise Refusal(
                field="made_in",
                given="a part line runs through the opening",
                allowed="another number of parts, or a seam elsewhere",
            )
    return tuple(found)


def _goes(pattern: Pattern, lying: Lying, stock: tuple[float, float], units: str) -> Pattern:
    """The pattern with how it goes into the stock sheet."""
    turned = round(degrees(lying.angle), 1) % 180.0
    way = f"{number_text(turned)}° anticlockwise"
    if turned > 90.0:
        way = f"{number_text(round(180.0 - turned, 1))}° clockwise"
    how = f"turned {way}" if turned else "as it lies here"
    takes = _size((round(lying.wide, 1), round(lying.high, 1)), units)
    words = f"goes into stock {_size(stock, units)} {how}, of which it takes {takes}"
    return replace(pattern, facts=(*pattern.facts[:-1], words, *pattern.facts[-1:]))


def _size(sides: tuple[float, float], units: str) -> str:
    return " x ".join(size_words(each, units) for each in sides)


def _no_stock(found: Built, stock: tuple[float, float]) -> Refusal:
    """What is wrong with a stock sheet that takes no part, and one that does."""
    least = [smallest(outline_hull(pattern.cut)) for pattern in found.patterns]
    sides = [sorted((each.wide, each.high)) for each in least]
    wide, long = (ceil(max(each[i] for each in sides)) for i in (0, 1))
    count = sum(len(part.frames) for part in found.parts)
    whole = "the whole side, which is one part" if count == 1 else f"each of {count} parts"
    return Refusal(
        field="stock",
        given=f"{_size(stock, 'mm')} mm is too small for {whole}",
        allowed=f"{long} x {wide} mm or more, or a smaller piece",
    )


@dataclass(frozen=True)
class _Place:
    """One part of the side. number: as drawn, from left to right, from 1. index: in the whole, from 0.

    joints: the numbers of those at its left and its right; at: their directions at end A [rad].
    """

    number: int
    index: int
    pattern: Pattern
    joints: tuple[int, int]
    at: tuple[float, float]


def _divided(plate: Plate, lines: Place, sheet: Sheet, solid: Solid, draw: Draw) -> Built:
    """The side parted at rulings (n + 1,), the first and the last at its seam."""
    u_a, u_b = sheet.parameters(lines)
    count = len(u_a) - 1
    joints = tuple(zip(u_a[1:-1].tolist(), u_b[1:-1].tolist(), strict=True))
    whole = replace(solid, seam=float(u_a[0]), seam_b=float(u_b[0]), joints=joints)
    places = _places(plate, lines, sheet, whole, u_a, draw)
    groups: list[list[_Place]] = []
    for place in places:
        group = next((each for each in groups if alike(each[0].pattern, place.pattern)), None)
        if group is None:
            groups.append([place])
        else:
            group.append(place)
    parts = tuple(_part(group, number, count, whole) for number, group in enumerate(groups, start=1))
    at = {place.number: (g, k) for g, group in enumerate(groups) for k, place in enumerate(group)}
    found = []
    for joint in range(1, count + 1):
        after = joint % count + 1
        (part, where), (other, other_where) = at[joint], at[after]
        marks = " to ".join(parts[each].pattern.mark for each in (part, other))
        found.append(
            Joint(part, "seam_right", other, "seam_left", where, other_where, f"JOINT {after}, {marks}")
        )
    numbers = tuple(tuple(place.number for place in group) for group in groups)
    divided = Divided(
        mark=places[0].pattern.mark,
        solid=whole,
        parts=tuple(range(len(parts))),
        places=tuple(part.frames for part in parts),
        numbers=numbers,
        frames=(Frame.square(),),
    )
    return Built(parts, tuple(found), divided=(divided,))


def _places(plate: Plate, lines: Place, sheet: Sheet, whole: Solid, u_a: Array, draw: Draw) -> list[_Place]:
    """The parts from left to right as they are drawn, their lines numbered on from each to the next."""
    count = len(u_a) - 1
    section = whole.end_a.section.offset(whole.distance)
    shares = np.diff(section.arc(u_a)) / section.girth
    index = np.arange(count + 1)
    sheets = [SheetPart(sheet, lines[index[[k]]], lines[index[[k + 1]]]) for k in range(count)]
    directions = whole.end_a.section.direction(u_a).tolist()
    inside = plate.face == "inside"
    found: list[_Place] = []
    for number, k in enumerate(reversed(range(count)) if inside else range(count), start=1):
        share = Share(
            parts=count,
            first=found[-1].pattern.divisions[-1].number if found else 0,
            divisions=max(round(plate.divisions * shares[k]), 1),
            beside=(sheets[k - 1], sheets[(k + 1) % count]),
        )
        at = (directions[k + 1], directions[k]) if inside else (directions[k], directions[k + 1])
        found.append(_Place(number, k, draw(sheets[k], share), (number, number % count + 1), at))
    return found


def _part(group: Sequence[_Place], number: int, count: int, whole: Solid) -> Part:
    """The part that stands at the places of a group; what its pattern says of them."""
    first = group[0]
    pattern = first.pattern
    name = f"{pattern.mark}-{number}"
    quantity = pattern.quantity * len(group)
    rows = pattern.divisions
    if len(group) == 1:
        title = f"part {first.number} of {count}"
        where = " and ".join(
            f"JOINT {joint} at {_at(direction)}"
            for joint, direction in zip(first.joints, first.at, strict=True)
        )
        more: tuple[str, ...] = (
            f"{where} of END A",
            f"lines {rows[0].number} to {rows[-1].number}: they number on from part to part",
        )
        figures, marks = pattern.figures, pattern.marks
    else:
        title = f"parts {_listed(place.number for place in group)} of {count}, alike"
        more = (
            f"joints, directions and line numbers as for part {first.number}; those of the other parts are "
            "in the table of places",
            "a number after the word at a witness mark is that of its part",
        )
        figures = (*pattern.figures, _table(group))
        marks = marks_of([(place.number, place.pattern) for place in group])
    pattern = replace(
        pattern,
        mark=name,
        quantity=quantity,
        facts=(
            f"{name}: {pattern.kind}, {title}",
            *pattern.facts[1:4],
            *more,
            *pattern.facts[4:-1],
            f"quantity {quantity}, {pattern.face} up",
        ),
        seam_words=(_joint(place.joints[0] for place in group), _joint(place.joints[1] for place in group)),
        marks=marks,
        figures=figures,
    )
    here = whole.part(first.index)
    if pattern.openings:
        here = replace(here, openings=whole.openings)
    frames = [Frame.square(), *(motion(here, whole.part(place.index)) for place in group[1:])]
    return Part(pattern, here, tuple(frames))


def _joint(numbers: Iterable[int]) -> str:
    return "JOINT " + "/".join(map(str, numbers))


def _listed(numbers: Iterable[int]) -> str:
    *most, last = map(str, numbers)
    return f"{', '.join(most)} and {last}"


def _at(direction: float) -> str:
    """A direction [rad] in words, or in degrees to the hundredth."""
    return direction_words(float(np.radians(round(degrees(direction), 2))))


def _degrees(direction: float) -> str:
    return f"{round(degrees(direction), 2) % 360.0:.2f}"


def _table(group: Sequence[_Place]) -> Figures:
    """Where the parts that are alike stand, and which joints meet their seams there."""
    heads = (
        ("part", "no."), ("left", "JOINT"), ("at", "degrees"), ("right", "JOINT"), ("at", "degrees"),
        ("lines", "from"), ("lines", "to"),
    )  # fmt: skip
    rows = tuple(
        (
            str(place.number),
            str(place.joints[0]),
            _degrees(place.at[0]),
            str(place.joints[1]),
            _degrees(place.at[1]),
            str(place.pattern.divisions[0].number),
            str(place.pattern.divisions[-1].number),
        )
        for place in group
    )
    return Figures("Places of this part, directions at END A", heads, rows)
