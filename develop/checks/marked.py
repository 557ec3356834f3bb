"""Whether all that is drawn on the sheet is where the folded lines have it.

The closing check proves the dense lines. What a person works from is drawn beside them: the
contour, the roll lines, the table, the witness marks. Each is held to the dense lines here.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.pattern.curve import Curve
from develop.pattern.pattern import Pattern
from develop.quadrature import Array, Indices
from develop.solid.end import End
from develop.solid.solid import Solid

__all__ = ["all_places", "drawn_miss", "marks_miss", "roll_lines_miss", "table_miss"]

_STEPS = 16
_NEWTON_STEPS = 6
_WINDOW = 24
# Of the dense lines, spread evenly, so that the whole costs no more than the folding.
_MOST = 400
_TOGETHER = 1e-7  # [mm]
_DIRECTIONS = {"RIGHT": (1.0, 0.0), "TOP": (0.0, 1.0), "LEFT": (-1.0, 0.0), "BOTTOM": (0.0, -1.0)}


@dataclass(frozen=True)
class _Beside:
    """Where points lie on an edge of the dense lines: strip (k,), share of it (k,), distance (k,) [mm]."""

    strip: Indices
    share: Array
    gap: Array

    def between(self, values: Array) -> Array:
        """Values (n, ...) of the lines at those places."""
        low, high = values[self.strip], values[self.strip + 1]
        share = self.share.reshape(-1, *(1,) * (values.ndim - 1))
        return np.asarray(low + share * (high - low))


def _beside(points: Array, edge: Array) -> _Beside:
    along = np.diff(edge, axis=0)
    square = np.maximum((along * along).sum(axis=1), 1e-300)
    from_start = points[:, None] - edge[:-1]
    share = np.clip((from_start * along).sum(axis=-1) / square, 0.0, 1.0)
    gap = np.hypot(*np.moveaxis(from_start - share[..., None] * along, -1, 0))
    strip = np.argmin(gap, axis=1)
    row = np.arange(len(points))
    return _Beside(strip, share[row, strip], gap[row, strip])


def drawn_miss(pattern: Pattern) -> float:
    """Largest distance [mm] of the dense lines' ends from the drawn edges, or of corners from the seams."""
    lines, worst = pattern.rulings, 0.0
    for name, ends in (("a", lines.a), ("b", lines.b[::-1])):
        curve = pattern.net.curve(name)
        if curve is not None:
            worst = max(worst, float(np.max(_distance(ends, curve))))
        else:
            worst = max(worst, float(np.max(np.hypot(*(ends - ends[0]).T))))
    for name, line in (("seam_right", (lines.a[-1], lines.b[-1])), ("seam_left", (lines.b[0], lines.a[0]))):
        curve = pattern.net.curve(name)
        tips = np.array([curve.start, curve.end]) if curve else np.full((2, 2), np.inf)
        worst = max(worst, float(np.max(np.hypot(*(tips - np.array(line)).T))))
    return worst


def _distance(points: Array, curve: Curve) -> Array:
    """Distance (k,) [mm] from a chain of Béziers of points that follow one another along it, `_MOST` at most.

    From the nearest of the samples about the same running length, Newton steps lead to the foot.
    """
    pieces = curve.pieces
    grid = np.arange(_STEPS) / _STEPS
    samples = _bezier(np.repeat(pieces, _STEPS, axis=0), np.tile(grid, len(pieces)))[0]
    samples = np.vstack([samples, curve.end])
    drawn, given = (
        np.concatenate([[0.0], np.cumsum(np.hypot(*np.diff(each, axis=0).T))]) for each in (samples, points)
    )
    guess = np.searchsorted(drawn, given * (drawn[-1] / given[-1]))
    some = np.unique(np.linspace(0, len(points) - 1, min(len(points), _MOST)).astype(int))
    points, guess = points[some], guess[some]
    window = np.clip(guess[:, None] + np.arange(-_WINDOW, _WINDOW + 1), 0, len(samples) - 1)
    gap = samples[window] - points[:, None]
    nearest = window[np.arange(len(points)), np.argmin((gap * gap).sum(axis=-1), axis=1)]
    piece = np.minimum(nearest // _STEPS, len(pieces) - 1)
    best = _beside_corners(points, pieces, piece, nearest / _STEPS - piece)
    # Beside a fine piece the next sample of a long one is far off: then the nearest chord of all tells.
    far = np.flatnonzero(best > _TOGETHER)
    for some in np.array_split(far, max(len(far) // _WINDOW, 1)):
        found = _beside(points[some], samples)
        piece = np.minimum(found.strip // _STEPS, len(pieces) - 1)
        t = (found.strip + found.share) / _STEPS - piece
        best[some] = np.minimum(best[some], _beside_corners(points[some], pieces, piece, t))
    return best


def _beside_corners(points: Array, pieces: Array, piece: Indices, t: Array) -> Array:
    """As `_to_foot`; but beside a corner the nearest sample may lie on the wrong side of it."""
    best = _to_foot(points, pieces, piece, t)
    far = np.flatnonzero(best > _TOGETHER)
    for step, start in ((-1, 1.0), (1, 0.0)):
        other = np.clip(piece[far] + step, 0, len(pieces) - 1)
        best[far] = np.minimum(best[far], _to_foot(points[far], pieces, other, np.full(len(far), start)))
    return best


def _to_foot(points: Array, pieces: Array, piece: Indices, t: Array) -> Array:
    """Distance (k,) [mm] of points from a chain of Béziers, by Newton steps from piece (k,) at t (k,)."""
    best = np.full(len(points), np.inf)
    for _ in range(_NEWTON_STEPS):
        at, speed = _bezier(pieces[piece], t)
        best = np.minimum(best, np.hypot(*(at - points).T))
        size = np.maximum((speed * speed).sum(axis=1), 1e-300)
        t = t - ((at - points) * speed).sum(axis=1) / size
        over, under = (t > 1.0) & (piece < len(pieces) - 1), (t < 0.0) & (piece > 0)
        piece = piece + over - under
        t = np.where(over, 0.0, np.where(under, 1.0, np.clip(t, 0.0, 1.0)))
    return best


def _bezier(p: Array, t: Array) -> tuple[Array, Array]:
    """Points and derivatives (n, 2) of Béziers (n, 4, 2) at t (n,)."""
    s, t = (1.0 - t)[:, None], t[:, None]
    a, b, c = p[:, 1] - p[:, 0], p[:, 2] - p[:, 1], p[:, 3] - p[:, 2]
    at = s**3 * p[:, 0] + 3.0 * s * s * t * p[:, 1] + 3.0 * s * t * t * p[:, 2] + t**3 * p[:, 3]
    return at, 3.0 * (s * s * a + 2.0 * s * t * b + t * t * c)


def roll_lines_miss(pattern: Pattern) -> tuple[float, float]:
    """How far the roll lines are from lines of the sheet that the piece is rolled along: the largest distance
    of an end [mm], and the largest error of the turn [degrees] that one states since the line before.

    Press lines may stop short of the edges, and share out the whole turn as they like.
    """
    rulings = pattern.rulings
    press = any(line.press for line in pattern.lines)
    starts, ends = (np.array([getattr(line, tip) for line in pattern.lines]) for tip in ("start", "end"))
    from_a, from_b = (points[:, None] - edge for points, edge in ((starts, rulings.a), (ends, rulings.b)))
    if press:
        leg = rulings.b - rulings.a
        leg = leg / np.hypot(*leg.T)[:, None]
        gaps = [np.abs(leg[:, 0] * gap[..., 1] - leg[:, 1] * gap[..., 0]) for gap in (from_a, from_b)]
    else:
        gaps = [np.hypot(gap[..., 0], gap[..., 1]) for gap in (from_a, from_b)]
    off = np.maximum(*gaps)
    turned = np.cumsum(rulings.turn)
    stated = np.cumsum([line.turn for line in pattern.lines])
    if press:
        error = np.array([abs(stated[-1] - (turned[-1] - turned[0]))])
    else:
        # Folded at a corner the sheet has several lines in one place: any turn between them will do.
        there = off <= off.min(axis=1)[:, None] + _TOGETHER
        least, most = (
            limit(np.where(there, turned, fill), axis=1)
            for limit, fill in ((np.min, np.inf), (np.max, -np.inf))
        )
        start = stated - stated[0]
        error = np.maximum(np.maximum(least - most[0] - start, start - (most - least[0])), 0.0)
    return float(np.max(off.min(axis=1))), float(np.degrees(np.max(error)))


def table_miss(pattern: Pattern, solid: Solid) -> float:
    """Largest difference [mm] of the table's lengths and points from finished piece and roll lines."""
    rows = pattern.divisions
    section = solid.end_a.section
    points = np.array([(row.a, row.b) for row in rows])
    dense = np.stack([pattern.rulings.a, pattern.rulings.b], axis=1)
    # At a sharp corner many lines start in one direction: which of them a row is, its points tell.
    apart = np.abs(points[:, None] - dense[None]).max(axis=(2, 3))
    u = pattern.rulings.u[apart.argmin(axis=1)]
    strip = solid.sheet_strip(u)
    true = np.linalg.norm(strip.b - strip.a, axis=1)
    # Of a flat triangle that starts in one point all the lines belong there.
    least, most = solid.lengths(u)
    fan = most > least + _TOGETHER
    least, most = np.where(fan, least, true), np.where(fan, most, true)
    stated = section.at_direction(np.array([row.direction for row in rows]))
    aside = np.linalg.norm(solid.end_a.point(u) - solid.end_a.point(stated), axis=1)
    flat = np.linalg.norm(points[:, 1] - points[:, 0], axis=1)
    length = np.array([row.length for row in rows])
    misses = [flat - length, aside]
    if not any(line.press for line in pattern.lines):
        # Of a corner's press lines several start in one direction, and stop short of the edges.
        drawn = np.array([(line.start, line.end) for line in pattern.lines])
        misses += [np.maximum(np.maximum(least - length, length - most), 0.0), points - drawn]
    return float(max(np.max(np.abs(each)) for each in misses))


def all_places(pattern: Pattern) -> bool:
    """Whether the pattern's marks hold wherever it is used: none has words for certain places alone."""
    return all(mark.text in _DIRECTIONS for mark in pattern.marks)


def _word(text: str, place: int | None) -> str | None:
    """The word of a mark's text that holds at a place: `TOP 1/LEFT 2` says LEFT at place 2."""
    if place is None:
        return text
    found = (word.rpartition(" ") for word in text.split("/"))
    return next((word for word, _, number in found if number == str(place)), None)


def marks_miss(
    pattern: Pattern,
    folded: tuple[Array, Array, Array],
    solid: Solid,
    *,
    place: int | None = None,
) -> float:
    """Largest distance [mm] of a witness mark, on the folded sheet, from the direction that it names.

    folded: the dense lines as `develop.checks.fold.folded` returns them. place: the number of the place that
    the sheet is folded at, of a pattern whose marks name several.
    """
    a, b, normal = folded
    lines = pattern.rulings
    mirrored = pattern.face == "inside"
    worst = 0.0
    given_a, given_b = solid.on_ends(a, b, normal)
    for edge, flat, space, end in (
        ("a", lines.a, given_a, solid.end_a),
        ("b", lines.b, given_b, solid.end_b),
    ):
        marks, words = [], []
        for mark in pattern.marks:
            word = _word(mark.text, place)
            if mark.edge == edge and word is not None:
                marks.append(mark)
                words.append(word)
        if not marks:
            continue
        places = _beside(np.array([mark.at for mark in marks]), flat[::-1] if mirrored else flat)
        if edge == "b" and solid.cut_b is not None:
            # A cut across the side has no centre of its own: its marks are on end A's lines.
            space, end = given_a, solid.end_a
        at = _seen(end, places.between(space))
        to = np.array([_DIRECTIONS[word] for word in words])
        aside = np.abs(to[:, 0] * at[:, 1] - to[:, 1] * at[:, 0])
        beyond = np.where((to * at).sum(axis=1) > 0.0, aside, np.hypot(at[:, 0], at[:, 1]))
        worst = max(worst, float(np.max(np.maximum(beyond, places.gap))))
    return worst


def _seen(end: End, points: Array) -> Array:
    """Points (n, 3) as one sees them from the end's centre, right and up (n, 2), before it was tilted."""
    local = (points - end.origin) @ end.back.T
    normal = np.cross(end.spans[:, 0], end.spans[:, 1])
    normal = normal / np.linalg.norm(normal)
    across = end.spans[:, 0]
    if not np.allclose(end.back, np.eye(3)[:2]) and normal[2] < 1.0 - 1e-15:
        # Turned back about the level line that it was tilted about (Rodrigues' formula).
        axis = np.cross(normal, [0.0, 0.0, 1.0])
        sine, cosine = float(np.linalg.norm(axis)), float(normal[2])
        axis = axis / sine
        across = (
            across * cosine + np.cross(axis, across) * sine + axis * float(axis @ across) * (1.0 - cosine)
        )
    turn = np.arctan2(across[1], across[0])
    c, s = np.cos(turn), np.sin(turn)
    return np.asarray(local @ np.array([[c, s], [-s, c]]))
