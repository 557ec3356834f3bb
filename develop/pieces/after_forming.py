"""What is added to rolled work for the rolls, for the tape and for checking what was formed."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import atan2, cos, sqrt
from typing import TYPE_CHECKING

import numpy as np

from develop.pieces.built import Built, Part
from develop.pieces.common import Flat, Plate
from develop.pieces.floor import FloorEnd, floor_part
from develop.pieces.forming import forming_facts, forming_of, forming_warnings
from develop.pieces.tape_figures import Wall, closed_figures, cone_scale, cut_figures, ends_of
from develop.pieces.wall import PLACES
from develop.pieces.wording import measured_words, shift_words
from develop.quadrature import Array
from develop.solid import End, FlatTemplate, Solid

if TYPE_CHECKING:
    from develop.pattern.pattern import Figures, Pattern
    from develop.pieces.fields import Piece
    from develop.pieces.templates import Profile
    from develop.sections.section import Section
    from develop.tables.materials import Material

__all__ = ["with_forming"]

_DIRECTIONS = np.linspace(0.0, 2.0 * np.pi, 73)
_ALIKE = 1e-9  # of a section's size
_ROUND = 1e-9
_WORTH = 0.1  # [mm] by which a sloping wall may be thicker across the end, unsaid


def with_forming(built: Built, piece: Piece, *, known: Material | None, units: str) -> Built:
    """The piece with what its rolled patterns are rolled to, the figures to check by tape, and the templates
    and outlines that were asked for.

    known: its material. units: of the figures on the sheets, `mm` or `in`. Raises Refusal.
    """
    if isinstance(piece, Plate):
        wall = _wall(piece, built)
        whole = dict(built.whole_parts)
        formed = built.with_patterns(
            [
                _formed(
                    part, piece, wall, known, units, _closed(built, number, whole.get(number), piece, wall)
                )
                for number, part in enumerate(built.parts)
            ]
        )
        extra = _more(formed, piece, wall, units)
        warned = formed.warned
        if piece.templates != "none" and not any(isinstance(each.solid, FlatTemplate) for each in extra):
            warned += (
                f"{piece.mark}: no templates: every section is round; template_sections = all makes them",
            )
        return replace(formed, parts=(*formed.parts, *extra), warned=warned)
    if isinstance(piece, Flat):
        return built.with_patterns(
            [
                replace(each, taped=(cut_figures(each, tolerance=piece.tape_tolerance),))
                for each in built.patterns
            ]
        )
    return built


def _neutral(piece: Plate, patterns: Sequence[Pattern]) -> float:
    """Where the neutral line lies, 0 inside to 1 outside, also where a rule has found the place."""
    if not isinstance(piece.neutral_line, str):
        return piece.neutral_line
    return next((each.wall.neutral_line for each in patterns if each.wall is not None), 0.5)


def _wall(piece: Plate, built: Built) -> Wall:
    given, t = PLACES[piece.sizes], piece.thickness
    return Wall(-t * given, t * (1.0 - given), t * (_neutral(piece, built.patterns) - given))


def _closed(built: Built, number: int, whole: Part | None, piece: Plate, wall: Wall) -> tuple[Figures, ...]:
    """The figures after closing, once for a side: of one made in parts they stand with its first."""
    if whole is None or not isinstance(whole.solid, Solid):
        return ()
    ends = ends_of(whole.pattern, whole.solid)
    if not ends:
        return ()
    patterns = built.patterns_round(number)
    tape, tolerance = piece.tape, piece.tape_tolerance
    return (closed_figures(patterns, whole.solid, wall, tape=tape, tolerance=tolerance, ends=ends),)


def _formed(
    part: Part,
    piece: Plate,
    wall: Wall,
    known: Material | None,
    units: str,
    closed: tuple[Figures, ...],
) -> Pattern:
    """The pattern with its figures; closed: those of the side after it is closed."""
    pattern, solid = part.pattern, part.solid
    taped = (cut_figures(pattern, tolerance=piece.tape_tolerance), *closed)
    if not isinstance(solid, Solid):
        return replace(pattern, taped=taped)
    forming = forming_of(
        pattern,
        solid,
        thickness=piece.thickness,
        neutral_line=_neutral(piece, (pattern,)),
        known=known,
    )
    pattern = replace(pattern, taped=taped, forming=forming)
    if forming is None:
        return pattern
    warnings = forming_warnings(forming, thickness=piece.thickness, units=units)
    said = (*forming_facts(forming, units=units), *(f"CAUTION: {each}" for each in warnings))
    return replace(
        pattern,
        facts=(*pattern.facts[:-1], *said, *pattern.facts[-1:]),
        warnings=(*pattern.warnings, *warnings),
    )


@dataclass(frozen=True)
class _PlacedEnd:
    """An end of a side: whose, `a` or `b`, its section, how large that is there, and its turn [rad]."""

    part: Part
    name: str
    section: Section
    scale: float
    turn: float

    def alike(self, other: _PlacedEnd) -> bool:
        """Whether one template serves both."""
        c, s = np.cos(_DIRECTIONS), np.sin(_DIRECTIONS)
        mine, yours = (each.scale * each.section.support(c, s) for each in (self, other))
        return bool(
            np.abs(mine - yours).max() <= _ALIKE * mine.max()
            and abs(cos(0.5 * (self.turn - other.turn))) > 1.0 - _ALIKE
        )

    @property
    def round(self) -> bool:
        """Whether the section is a circle."""
        reach = self.section.support(np.cos(_DIRECTIONS), np.sin(_DIRECTIONS))
        return bool(np.ptp(reach) <= _ROUND * np.max(reach))

    @property
    def lopsided(self) -> bool:
        """Whether the section is not its own image, turned over."""
        c, s = np.cos(_DIRECTIONS), np.sin(_DIRECTIONS)
        return bool(
            np.abs(self.section.support(c, s) - self.section.support(c, -s)).max()
            > _ALIKE * self.section.width
        )


def _more(built: Built, piece: Plate, wall: Wall, units: str) -> tuple[Part, ...]:
    """The templates and the outlines that were asked for."""
    if piece.templates == "none" and piece.floor == "none":
        return ()
    rolled = [(number, part) for number, part in built.whole_parts if isinstance(part.solid, Solid)]
    parts: list[Part] = []
    if piece.templates != "none":
        parts += _templates([part for _, part in rolled], piece, wall, units)
    if piece.floor != "none":
        parts += _outlines(built, rolled, piece, wall, units)
    return tuple(parts)


def _ends(part: Part) -> list[_PlacedEnd]:
    """The ends of a side that are sections of it: no points, and no sloping cuts of a cone."""
    solid = part.solid
    assert isinstance(solid, Solid)
    if solid.side == "parallel":
        return [_PlacedEnd(part, name, solid.end_a.section, 1.0, 0.0) for name in "ab"]
    found = [_PlacedEnd(part, "a", solid.end_a.section, 1.0, _turn(solid.end_a))]
    if solid.cut_b is not None:
        height, rise = solid.cut_b
        if np.abs(rise).max() == 0.0:
            scale = cone_scale(solid, height)
            found.append(_PlacedEnd(part, "b", solid.end_a.section, scale, _turn(solid.end_a)))
    elif solid.end_b.section.girth:
        found.append(_PlacedEnd(part, "b", solid.end_b.section, 1.0, _turn(solid.end_b)))
    return found


def _turn(end: End) -> float:
    """How far an end's section is turned in the piece [rad]."""
    return atan2(float(end.spans[1, 0] - end.spans[0, 1]), float(end.spans[0, 0] + end.spans[1, 1]))


def _templates(rolled: list[Part], piece: Plate, wall: Wall, units: str) -> list[Part]:
    from develop.pieces.templates import template_of

    groups: list[list[_PlacedEnd]] = []
    for end in (end for part in rolled for end in _ends(part)):
        if end.round and piece.template_sections == "not round":
            continue
        same = next((group for group in groups if group[0].alike(end)), None)
        if same is None:
            groups.append([end])
        else:
            same.append(end)
    faces = {"both": ("inside", "outside")}.get(piece.templates, (piece.templates,))
    found = []
    for number, group in enumerate(groups, 1):
        for face in faces:
            which = f"-{number}" if len(groups) > 1 else ""
            profile = _profile(group, face, wall.inside if face == "inside" else wall.outside)
            share = "half" if group[0].lopsided else piece.template_share
            found.append(
                template_of(
                    profile,
                    share=share,
                    mark=f"{piece.mark}-template-{face}{which}",
                    kind=piece.kind,
                    units=units,
                    cautions=_thicker(group, profile.distance, units),
                )
            )
    return found


def _profile(group: list[_PlacedEnd], face: str, distance: float) -> Profile:
    from develop.pieces.templates import Profile

    first = group[0]
    names: dict[str, str] = {}
    for end in group:
        names[end.part.pattern.mark] = names.get(end.part.pattern.mark, "") + end.name.upper()
    words = [f"{mark} {'both ends' if ends == 'AB' else f'END {ends}'}" for mark, ends in names.items()]
    where = ", ".join(words[:3]) + (f" and {len(words) - 3} more" if len(words) > 3 else "")
    solid = first.part.solid
    assert isinstance(solid, Solid)
    held = "held square to the axis" if solid.side == "parallel" else "held in the plane of the end"
    turn = 0.0 if first.round else first.turn
    return Profile(first.section, first.scale, distance, turn, where, face, held)


def _thicker(group: list[_PlacedEnd], distance: float, units: str) -> tuple[str, ...]:
    """What a wall that slopes adds across the end to what is measured square to it."""
    end = group[0]
    solid = end.part.solid
    assert isinstance(solid, Solid)
    if solid.side == "parallel" or not distance:
        return ()
    walk = solid.strip_b if end.name == "b" and solid.cut_b is None else solid.strip
    u = end.section.at_direction(_DIRECTIONS[:-1])
    at = solid.end_b if end.name == "b" and solid.cut_b is None else solid.end_a
    lean = float(np.min(np.hypot(*(walk(u).normal @ at.spans).T)))
    more = abs(distance) * (1.0 / lean - 1.0)
    if more < _WORTH:
        return ()
    return (f"true parallel section; the sloping wall lies up to {measured_words(more, units)} beyond it",)


def _outlines(
    built: Built, rolled: list[tuple[int, Part]], piece: Plate, wall: Wall, units: str
) -> list[Part]:
    joined = {
        (part, end, place) for joint in built.joints for end, parts in joint.sides for part, place in parts
    }
    found = []
    for number, part in rolled:
        solid = part.solid
        assert isinstance(solid, Solid)
        # Of a side made in parts the first one's places come in the order of the whole side's.
        step = len(built.parts[number].frames) // len(part.frames)
        free = [
            name
            for name in ends_of(part.pattern, solid)
            if any((number, name, step * place) not in joined for place in range(len(part.frames)))
        ]
        ends = [end for name in free if (end := _floor_end(part, name)) is not None]
        groups = _drawn_together(ends, solid)
        for group in groups:
            names = " and ".join(end.name for end in group)
            own = part.pattern.mark
            which = "" if len(groups) == 1 else f"-{group[0].name.lower()}"
            mark = f"{own}-floor{which}"
            found.append(
                floor_part(
                    group,
                    wall.faces,
                    mark=mark,
                    kind=piece.kind,
                    units=units,
                    facts=_floor_facts(mark, own, names, group, solid, units),
                )
            )
    return found


def _floor_facts(
    mark: str, own: str, names: str, group: list[FloorEnd], solid: Solid, units: str
) -> tuple[str, ...]:
    view = "in its own plane" if solid.side == "parallel" else "seen along the axis of END A, facing END B"
    facts = [f"{mark}: outline for the assembly floor", f"END {names} of {own}, {view}"]
    if len(group) > 1:
        right, up = (float(each) for each in group[1].at - group[0].at)
        facts.append(shift_words(right, up, units))
    return (*facts, "to be set out, not cut: the frame is the edge of the drawing", "quantity 1")


def _drawn_together(ends: list[FloorEnd], solid: Solid) -> list[list[FloorEnd]]:
    """The ends of a taper in plan, one over the other; else each in its own plane, but once if alike."""
    if not ends:
        return []
    if solid.side == "hull":
        return [ends]
    if len(ends) == 2 and np.abs(ends[0].into - ends[1].into).max() <= _ALIKE:
        return [[replace(ends[0], name="A/B")]]
    return [[end] for end in ends]


def _floor_end(part: Part, name: str) -> FloorEnd | None:
    """An end as it is drawn: in plan for a taper, else in its own plane, its right kept to the right."""
    solid = part.solid
    assert isinstance(solid, Solid)
    inside = part.pattern.face == "inside"
    if solid.side == "hull":
        end, seams, scale = solid.end_a, _seams(solid, "a", inside=inside), 1.0
        at: Array = end.origin[:2]
        if name == "b" and solid.cut_b is not None:
            height, rise = solid.cut_b
            if np.abs(rise).max() > 0.0:
                return None
            scale = cone_scale(solid, height)
            at = (1.0 - scale) * solid.end_b.origin[:2]
        elif name == "b":
            end = solid.end_b
            at = end.origin[:2]
            seams = _seams(solid, "b", inside=inside)
        return FloorEnd(name.upper(), end.section, scale * end.spans[:2], at, seams, _turn(end))
    end = solid.end_a if name == "a" else solid.end_b
    first = end.spans[:, 0] / sqrt(float(end.spans[:, 0] @ end.spans[:, 0]))
    second = end.spans[:, 1] - first * (first @ end.spans[:, 1])
    second = second / sqrt(float(second @ second))
    into = np.stack([first, second]) @ end.spans
    return FloorEnd(name.upper(), end.section, into, np.zeros(2), _seams(solid, name, inside=inside))


def _seams(solid: Solid, name: str, *, inside: bool) -> tuple[tuple[str, float], ...]:
    """What meets an end where: its seam, or the joints of its parts by the numbers that the patterns have.

    inside: that face of the sheet is up, so that they count the other way round.
    """
    seam = solid.seam if name == "a" or solid.side == "parallel" else _seam_b(solid)
    if not solid.joints:
        return (("SEAM", seam),)
    which = 0 if name == "a" else 1
    others = [joint[which] for joint in solid.joints]
    lines = [seam, *(others[::-1] if inside else others)]
    return tuple((f"JOINT {number}", u) for number, u in enumerate(lines, 1))


def _seam_b(solid: Solid) -> float:
    """Parameter of END B's section at which the seam ends."""
    if solid.seam_b is not None:
        return solid.seam_b
    x, y = (solid.strip(np.array([solid.seam])).b[0] - solid.end_b.origin) @ solid.end_b.back.T
    return float(solid.end_b.section.at_direction(np.array([atan2(float(y), float(x))]))[0])
