"""Parts of one side that are alike: one pattern that serves several places."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.pattern.pattern import Pattern, WitnessMark
from develop.solid import Frame, Solid

__all__ = ["alike", "marks_of", "motion"]

# So far [mm] may points lie apart that are one: of drawn chains, and of exact places.
_DRAWN, _EXACT = 1e-3, 1e-6
_TURN = 1e-9  # [rad]
_SAME = 1e-9  # parts of a radius
_FLAT = 1e9  # [mm]
_POINTS = 33
# So near [mm] must a corner be, and so near [rad] the turn between dense lines, which differ.
_NEAR, _BETWEEN = 1e-2, 1e-2


def alike(one: Pattern, other: Pattern) -> bool:
    """Whether two patterns of one side are the same but for the words on them: cut, lines and bends."""
    if len(one.lines) != len(other.lines) or len(one.divisions) != len(other.divisions):
        return False
    if one.openings or other.openings:
        return False
    for mine, yours in ((one.net, other.net), (one.cut, other.cut)):
        if [name for name, _ in mine.curves] != [name for name, _ in yours.curves]:
            return False
        pairs = zip(mine.curves, yours.curves, strict=True)
        if any(_apart(_along(a), _along(b)) > _DRAWN for (_, a), (_, b) in pairs):
            return False
    # From the first of them on: drawn chains differ, and with them where the patterns lie.
    rows = [np.array([(row.a, row.b) for row in each.divisions]) for each in (one, other)]
    rows = [each - each[0, 0] for each in rows]
    turns = [np.array([line.turn for line in each.lines]) for each in (one, other)]
    radii = [np.array([line.radius for line in each.lines]) for each in (one, other)]
    bent = [1.0 / np.clip(each, _EXACT, _FLAT) for each in radii]
    return (
        _apart(*rows) <= _EXACT
        and float(np.abs(turns[0] - turns[1]).max(initial=0.0)) <= _TURN
        and bool(np.allclose(bent[0], bent[1], rtol=1e-6, atol=_SAME))
        and _turn_alike(one, other)
        and _turn_alike(other, one)
    )


def _turn_alike(one: Pattern, other: Pattern) -> bool:
    """Whether the other sheet has turned as far as the one at each of its dense lines.

    Between two divisions a corner may lie anywhere: within `_NEAR` of a place any turn that the other has
    there will do, as at a corner it turns at once.
    """
    (along, turned), (other_along, other_turned) = (_turned(each) for each in (one, other))
    least, most = (np.interp(along + step, other_along, other_turned) for step in (-_NEAR, _NEAR))
    return bool(((turned >= least - _BETWEEN) & (turned <= most + _BETWEEN)).all())


def _turned(pattern: Pattern) -> tuple[Array, Array]:
    """How far along both edges dense lines lie (n,) [mm], and how far the sheet has turned there [rad]."""
    lines = pattern.rulings
    steps = [np.hypot(*np.diff(end, axis=0).T) for end in (lines.a, lines.b)]
    return np.append(0.0, np.cumsum(steps[0] + steps[1])), np.cumsum(lines.turn)


def _apart(one: Array, other: Array) -> float:
    return float(np.abs(one - other).max())


def _along(curve: Curve) -> Array:
    """Points at equal shares of a curve's length (_POINTS, 2) [mm]."""
    points = curve.polyline(0.1 * _DRAWN)
    sums = np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(points, axis=0).T))])
    at = np.linspace(0.0, sums[-1], _POINTS)
    return np.stack([np.interp(at, sums, points[:, k]) for k in (0, 1)], axis=1)


def marks_of(places: Sequence[tuple[int, Pattern]]) -> tuple[WitnessMark, ...]:
    """The witness marks of one pattern for several places, each its number and its own pattern.

    What is marked at one point for several of them is one mark; each word has the number of its place.
    """
    found: list[tuple[WitnessMark, list[str]]] = []
    for number, pattern in places:
        for mark in pattern.marks:
            words = next(
                (
                    words
                    for each, words in found
                    if each.edge == mark.edge and _apart(each.at, mark.at) < _DRAWN
                ),
                None,
            )
            if words is None:
                words = []
                found.append((mark, words))
            words.append(f"{mark.text} {number}")
    return tuple(replace(mark, text="/".join(words)) for mark, words in found)


def motion(part: Solid, other: Solid) -> Frame:
    """Where the frame of one part of a side goes when the part is laid on another that is like it."""
    here, there = _stand(part), _stand(other)
    turn = there[1].T @ here[1]
    return Frame(there[0] - turn @ here[0], turn.T)


def _stand(part: Solid) -> tuple[Array, Array]:
    """The foot of a part's first line (3,) [mm] and unit rows (3, 3): along it, across, outward."""
    line = part.seam_line
    along = (line[1] - line[0]) / np.linalg.norm(line[1] - line[0])
    up = part.strip(np.array([part.seam])).normal[0]
    return line[0], np.stack([along, np.cross(along, up), up])
