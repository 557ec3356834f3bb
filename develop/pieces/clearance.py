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

__all__ = ["Beside", "check_uncut", "seam_warnings"]

_CHORDS = 0.05  # [mm]


def check_uncut(section: Section, seam: float, on: Array, *, leaves_at: float, field: str) -> None:
    """Raises Refusal, naming the field that places the seam, where an opening reaches over it.

    section: the header's; seam: its parameter; on: parameters (n,) round the opening; leaves_at: the
    direction [rad] that the branch leaves at.
    """
    middle = float(section.at_direction(np.array([leaves_at]))[0])
    half = 0.5 * section.period
    away = (np.append(on, seam) - middle + half) % section.period - half
    low, high = float(away[:-1].min()), float(away[:-1].max())
    if not low <= away[-1] <= high:
        return
    ends = section.direction(middle + np.array([high, low]))
    first, last = (direction_words(float(end)) for end in np.radians(np.round(np.degrees(ends), 1)))
    raise Refusal(
        field=field,
        given="the header's seam would run through the opening",
        allowed=f"a direction outside of it: anticlockwise from {first} to {last}",
    )


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
        one, other = built.parts[joint.part], built.parts[joint.other]
        ends = [
            _seam_end(part, end, place)
            for part, end, place in (
                (one, joint.end, joint.place),
                (other, joint.other_end, joint.other_place),
            )
        ]
        gap = float(np.linalg.norm(ends[0] - ends[1]))
        if gap < clear:
            names = joint.name.split(" to ") if joint.name else [p.pattern.mark for p in (one, other)]
            found.append(
                (_near(f"the seams of {names[0]} and {names[1]}", gap, clear), (joint.part, joint.other))
            )
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
            point = _seam_end(part, "a", 0)
            start, end = header.solid.seam_line
            along = end - start
            share = float(np.clip((point - start) @ along / (along @ along), 0.0, 1.0))
            gap = float(np.linalg.norm(start + share * along - point))
            if gap < clear:
                words = f"the seams of {part.pattern.mark} and {header.pattern.mark}"
                found.append((_near(words, gap, clear), (n, h)))
    return found
