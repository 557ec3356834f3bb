"""The checks of a plate that lies on a rolled side round a joint: its edges, its width, its area."""

from __future__ import annotations

from math import pi

import numpy as np

from develop.checks.check import Check
from develop.checks.crossings import crossings, meet, within
from develop.checks.drawn import drawn_area, drawn_length
from develop.checks.openings import opening_miss
from develop.pattern.curve import Curve
from develop.pattern.pattern import Outline, Pattern
from develop.quadrature import Array
from develop.solid.patch import Patch

__all__ = ["check_patch"]

_CLOSING = 0.01
_WIDTH = 1e-3
# A strip of the chains' tolerance along the edges [mm].
_STRIP = 1e-3
_CHORDS = 1e-4
# Of the outer edge, spread evenly, so that measuring stays cheap.
_MOST = 400


def check_patch(pattern: Pattern, part: Patch) -> tuple[Check, ...]:
    """Every check of a patch [mm, mm²].

    Its inner edge is folded with the side that it lies on and held to the joint in space. Its outer edge
    is a parallel: everywhere as far from the inner one as the patch is wide, and longer than that by
    width times turn; its area is length · width + ½ width² · turn (Steiner).
    """
    names = dict(pattern.net.curves)
    inner = names.get("inner") or pattern.openings[0].curves[0][1]
    outer = names["outer"]
    turn = 2.0 * pi if part.whole else _turn(names["end_1"], names["end_2"])
    # Whole patches turn once; a part has its ends, and the angle is known but for whole turns.
    length = drawn_length(inner)
    some = outer.polyline(_CHORDS)
    some = some[np.unique(np.linspace(0, len(some) - 1, min(len(some), _MOST)).astype(int))]
    gaps = _gaps(some, inner.polyline(_CHORDS))
    holes = pattern.openings if part.tell_tale == 0.0 else pattern.openings[:-1]
    ring = drawn_area(pattern.net) - sum(drawn_area(each) for each in holes)
    expected = length * part.width + 0.5 * part.width**2 * turn
    checks = [
        Check(
            "inner edge, largest distance from the joint",
            0.0,
            opening_miss(pattern, part.under, inner, part.joint, lift=part.lift),
            _CLOSING,
            "mm",
        ),
        Check("width, least", part.width, float(gaps.min()), _WIDTH, "mm"),
        Check("width, greatest", part.width, float(gaps.max()), _WIDTH, "mm"),
        Check(
            "outer edge against the inner", length + part.width * turn, drawn_length(outer), _CLOSING, "mm"
        ),
        Check("area against length and width", expected, ring, _STRIP * length, "mm²"),
    ]
    if part.whole:
        area = part.joint.opened
        got = pattern.openings[0].area
        checks.append(Check("opening, area against the joint", area, got, max(1e-6, 1e-10 * area), "mm²"))
    if part.tell_tale:
        hole = _points(pattern.openings[-1])
        centre = 0.5 * (hole.min(axis=0) + hole.max(axis=0))
        rest = [_points(pattern.net), *(_points(each) for each in holes)]
        clear = within(hole, rest[0]) and not any(meet(hole, each) for each in rest)
        clear = clear and not any(within(hole[:1], each) for each in rest[1:])
        checks += [
            Check("tell-tale hole not clear of the edges", 0.0, float(not clear), 0.0, "times"),
            Check(
                "tell-tale hole from the inner edge",
                0.5 * part.width,
                float(_gaps(centre[None], inner.polyline(_CHORDS))[0]),
                _WIDTH,
                "mm",
            ),
        ]
    outlines = (pattern.cut, *pattern.openings)
    checks.append(Check("outlines cross themselves", 0.0, float(sum(map(crossings, outlines))), 0.0, "times"))
    return tuple(checks)


def _points(outline: Outline) -> Array:
    return np.vstack([curve.polyline(0.01)[:-1] for _, curve in outline.curves])


def _turn(start: Curve, end: Curve) -> float:
    """From one square end to the other, both walked outward or inward, anticlockwise [rad]."""
    # end_1 runs outward from the inner edge, end_2 back inward.
    a, b = start.end - start.start, end.start - end.end
    return float(np.arctan2(a[0] * b[1] - a[1] * b[0], a @ b) % (2.0 * pi))


def _gaps(points: Array, line: Array) -> Array:
    """Distance (k,) [mm] of points (k, 2) from a polyline (n, 2)."""
    start, along = line[:-1], np.diff(line, axis=0)
    square = np.maximum((along * along).sum(axis=1), 1e-300)
    best = np.empty(len(points))
    for i in range(0, len(points), 256):
        from_start = points[i : i + 256, None] - start
        share = np.clip((from_start * along).sum(axis=-1) / square, 0.0, 1.0)
        gap = from_start - share[..., None] * along
        best[i : i + 256] = np.hypot(gap[..., 0], gap[..., 1]).min(axis=1)
    return best
