"""How far seams keep from openings and from each other, and what is said where they do not."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.pieces.built import Built, Part
from develop.pieces.wording import direction_words, lines_of
from develop.solid import Patch, Solid, TouchingEnd
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.quadrature import Array
    from develop.sections.section import Section

__all__ = ["Beside", "check_parts_uncut", "check_uncut", "seam_warnings"]

_CHORDS = 0.05  # [mm]


def check_uncut(section: Section, seam: float, on: Array, *, leaves_at: float, field: str) -> None:
    """Raises Refusal, naming the field that places the seam, where an opening reaches over it.

    section: the header's; seam: its parameter; on: parameters (n,) round the opening; leaves_at: the
    direction [rad] that the branch leaves at.
    """
    middle, low, high = _reach(section, on, leaves_at)
    if not _cut(section, np.array([seam]), middle, low, high):
        return
    ends = section.direction(middle + np.array([high, low]))
    first, last = (direction_words(float(end)) for end in np.radians(np.round(np.degrees(ends), 1)))
    raise Refusal(
        field=field,
        given="the header's seam would run through the opening",
        allowed=f"a direction outside of it: anticlockwise from {first} to {last}",
    )


def check_parts_uncut(section: Section, seam: float, count: int, on: Array, *, leaves_at: float) -> None:
    """Raises Refusal where an opening reaches over one of the lines that part a header in so many parts.

    As `check_uncut`; what works is a number of parts and a seam at which all lines keep clear.
    """
    middle, low, high = _reach(section, on, leaves_at)

    def cut(start: float, parts: int) -> bool:
        lines = section.at_arc(section.arc(np.array([start])) + np.arange(parts) / parts * section.girth)
        return _cut(section, lines, middle, low, high)

    if not cut(seam, count):
        return
    for parts in range(count, 1, -1):
        for direction in (leaves_at + np.pi, leaves_at + np.pi / parts):
            direction = float(np.radians(round(float(np.degrees(direction)), 1)))
            if not cut(float(section.at_direction(np.array([direction]))[0]), parts):
                raise Refusal(
                    field="made_in",
                    given=f"one of the {count} joints of the header would run through the opening",
                    allowed=f"{parts} with header_seam = {direction_words(direction)}",
                )
    raise Refusal(
        field="made_in",
        given=f"one of the {count} joints of the header would run through the opening",
        allowed="1",
    )


def _reach(section: Section, on: Array, leaves_at: float) -> tuple[float, float, float]:
    """The parameter at the middle of an opening, and how far it reaches before and past that."""
    middle = float(section.at_direction(np.array([leaves_at]))[0])
    half = 0.5 * section.period
    away = (on - middle + half) % section.period - half
    return middle, float(away.min()), float(away.max())


def _cut(section: Section, lines: Array, middle: float, low: float, high: float) -> bool:
    """Whether any of the lines at these parameters (n,) lies in the reach."""
    half = 0.5 * section.period
    away = (lines - middle + half) % section.period - half
    return bool(((away >= low) & (away <= high)).any())


@dataclass(frozen=True)
class Beside:
    """Two things that lie a gap [mm] apart, in words, and the marks of the parts whose sheets say so."""

    what: str
    gap: float
    marks: tuple[str, ...]


def seam_warnings(built: Built, *, clear: float, also: Sequence[Beside] = ()) -> Built:
    """The piece with a warning for every seam that lies nearer than `clear` [mm] to an opening of its part,
    or to the seam that it meets at a joint; each names both, and stands on the sheets of the parts.

    also: what the kind has measured itself.
    """
    if clear <= 0.0:
        return built
    found: list[tuple[str, tuple[int, ...]]] = []
    numbers = {part.pattern.mark: number for number, part in enumerate(built.parts)}
    found += [
        (_near(each.what, each.gap, clear), tuple(numbers[mark] for mark in each.marks))
        for each in also
        if each.gap < clear
    ]
    for number, part in enumerate(built.parts):
        if isinstance(part.solid, Solid):
            found += [(each, (number,)) for each in _at_openings(part, clear)]
    for joint in built.joints:
        if joint.end.startswith("seam"):
            continue
        one, other = built.parts[joint.part], built.parts[joint.other]
        # Of a side in parts every joint of these is a seam too.
        ends = [
            np.array([_seam_end(built.parts[part], end, place) for part, place in parts])
            for end, parts in joint.sides
        ]
        gap = float(np.linalg.norm(ends[0][:, None] - ends[1], axis=-1).min())
        if gap < clear:
            names = joint.name.split(" to ") if joint.name else [p.pattern.mark for p in (one, other)]
            where = tuple(part for _, parts in joint.sides for part, _ in parts)
            found.append((_near(f"the seams of {names[0]} and {names[1]}", gap, clear), where))
    found += _on_header(built, clear)
    if not found:
        return built
    patterns = []
    for number, pattern in enumerate(built.patterns):
        said = dict.fromkeys(text for text, where in found if number in where)
        own = tuple(line for text in said for line in lines_of(f"CAUTION: {text}"))
        patterns.append(replace(pattern, facts=(*pattern.facts[:-1], *own, *pattern.facts[-1:])))
    return replace(built.with_patterns(patterns), warned=tuple(dict.fromkeys(text for text, _ in found)))


def _near(what: str, gap: float, clear: float) -> str:
    return (
        f"{what} lie {number_text(round(gap, 1))} mm apart, less than the {number_text(clear)} mm asked for"
    )


def _beside(pattern: Pattern, points: Array, side: str) -> tuple[float, float]:
    """How far points (n, 2) lie inside the sheet from a seam's line, the least, and from the seam [mm]."""
    curve = pattern.net.curve(side)
    assert curve is not None
    along = (curve.end - curve.start) / curve.length
    gap = points - curve.start
    inward = gap @ np.array([-along[1], along[0]])
    way = np.clip(gap @ along, 0.0, curve.length)
    return float(inward.min()), float(np.hypot(*(gap - way[:, None] * along).T).min())


def _at_openings(part: Part, clear: float) -> list[str]:
    pattern = part.pattern
    found = []
    for opening in pattern.openings:
        points = np.vstack([curve.polyline(_CHORDS) for _, curve in opening.curves])
        gap = min(_beside(pattern, points, side)[1] for side in ("seam_left", "seam_right"))
        if gap < clear:
            found.append(_near(f"the seam of {pattern.mark} and its opening", gap, clear))
    return found


def _seam_end(part: Part, end: str, place: int) -> Array:
    """Where a part's seam ends at end `a` or `b`, in the piece (3,) [mm]; on what touches there."""
    solid, frame = part.solid, part.frames[place]
    assert isinstance(solid, Solid)
    point, curve = solid.seam_line[0 if end == "a" else 1], solid.end_a if end == "a" else solid.end_b
    if isinstance(curve, TouchingEnd):
        u = np.array([solid.seam])
        point = curve.across(u, curve.touching(u))[0]
    return np.asarray(point @ frame.axes + frame.origin)


def _from_line(point: Array, line: Array) -> float:
    """Distance [mm] of a point (3,) from a straight line between two ends (2, 3)."""
    start, end = line
    along = end - start
    share = float(np.clip((point - start) @ along / (along @ along), 0.0, 1.0))
    return float(np.linalg.norm(start + share * along - point))


def _on_header(built: Built, clear: float) -> list[tuple[str, tuple[int, ...]]]:
    """The seams of what stands on a header, against the header's."""
    found: list[tuple[str, tuple[int, ...]]] = []
    headers = [
        n for n, part in enumerate(built.parts) if isinstance(part.solid, Solid) and part.solid.openings
    ]
    for h in headers:
        header = built.parts[h]
        assert isinstance(header.solid, Solid)
        for n, part in enumerate(built.parts):
            if n in headers or not part.frames or isinstance(part.solid, Patch):
                continue
            points = [_seam_end(part, "a", place) for place in range(len(part.frames))]
            # Of a header in parts the one with the opening: its two seams lie nearest.
            lines = (header.solid.seam_line, header.solid.stop_line)
            gap = min(_from_line(point, line) for point in points for line in lines)
            if gap < clear:
                words = f"the seams of {part.pattern.mark} and {header.pattern.mark}"
                found.append((_near(words, gap, clear), (n, h)))
    return found
