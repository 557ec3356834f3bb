"""The finished wall as a closed mesh with its thickness: from sections alone.

Both faces of a developed wall lie along its normals, which do not change along a straight line of the
side: so each face is the side itself moved along them, and its edges are square to the plate.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from develop.quadrature import Array, Indices, Mask
from develop.solid.meeting import MeetingEnd
from develop.solid.solid import Solid
from develop.solid.taper_meeting import TaperMeetingEnd

__all__ = ["Mesh", "plate", "wall"]

_ALIKE = 1e-4  # [mm] vertices closer than this are one, so that no format's rounding parts or pinches them
_SAME = 1e-5  # [mm], and of a unit normal: neighbours closer than this differ by rounding, or by _BESIDE
_BESIDE = 1e-9  # of the period: how far beside a break a line is taken
_ROUND_OPENING = 240


@dataclass(frozen=True)
class Mesh:
    """Triangles, anticlockwise seen from outside. vertices (n, 3) [mm]; triangles (m, 3), indices."""

    vertices: Array
    triangles: Indices

    def placed(self, origin: Array, axes: Array) -> Mesh:
        """The mesh in the frame that its own stands in: origin (3,) [mm], axes (3, 3) unit rows."""
        turned = self.triangles if np.linalg.det(axes) > 0.0 else self.triangles[:, ::-1]
        return Mesh(self.vertices @ axes + origin, turned)


def wall(solid: Solid, *, inside: float, outside: float, count: int = 360) -> Mesh:
    """The wall between two faces `inside` and `outside` of the surface that carries the ends [mm].

    Where both are the same it is that one face alone, which is not closed. count: of straight lines
    round the side, beside those at its breaks and at openings.
    """
    holes = [_hole(solid, opening) for opening in solid.openings]
    u = _lines(solid, holes, count)
    strip = solid.strip(u)
    # Places on the lines as (number of the line, share of the way from end A to end B), each once.
    places: dict[tuple[int, float], int] = {}

    def at(line: int, share: float) -> int:
        return places.setdefault((line, share), len(places))

    faces: list[tuple[int, int, int]] = []
    rim: list[tuple[int, int]] = []
    at_a = [at(n, 0.0) for n in range(len(u))]
    at_b = [at(n, 1.0) for n in range(len(u))]
    cuts = [_levels(holes, each, solid.end_a.section.period) for each in u]
    for n in range(len(u)):
        m = (n + 1) % len(u)
        rim += [(at_a[n], at_a[m]), (at_b[m], at_b[n])]
        here, there = cuts[n], cuts[m]
        open_ = [k for k in here if k in there and _between(holes[k], u[n], u[m], solid)]
        open_.sort(key=lambda k: sum(here[k]) + sum(there[k]))
        left = [0.0, *(share for k in open_ for share in here[k]), 1.0]
        right = [0.0, *(share for k in open_ for share in there[k]), 1.0]
        points = [sorted({0.0, 1.0}.union(*each.values())) for each in (here, there)]
        for band in range(0, len(left), 2):
            chains = [
                [at(line, share) for share in shares if low <= share <= high]
                for line, shares, low, high in (
                    (n, points[0], left[band], left[band + 1]),
                    (m, points[1], right[band], right[band + 1]),
                )
            ]
            faces += _zipped(*chains)
        for k in open_:
            rim += [(at(m, there[k][0]), at(n, here[k][0])), (at(n, here[k][1]), at(m, there[k][1]))]
    line, share = (np.array(each) for each in zip(*places, strict=True))
    a, b, normal = (_joined(each) for each in (strip.a, strip.b, strip.normal))
    on = np.where((share == 1.0)[:, None], b[line], a[line] + share[:, None] * (b - a)[line])
    return _thick(on, normal[line], np.array(faces), np.array(rim), inside, outside)


def plate(points: Array, triangles: Indices, rims: Sequence[Indices], *, thickness: float) -> Mesh:
    """A flat plate, half its thickness [mm] on each side of the plane z = 0.

    points (n, 2) [mm] and triangles (m, 3), anticlockwise; rims: the indices round its outline,
    anticlockwise, and round each opening, clockwise.
    """
    flat = np.column_stack([points, np.zeros(len(points))])
    normal = np.tile([0.0, 0.0, 1.0], (len(points), 1))
    edges = np.vstack([np.column_stack([rim, np.roll(rim, -1)]) for rim in rims])
    return _thick(flat, normal, triangles, edges, -0.5 * thickness, 0.5 * thickness)


def _thick(points: Array, normal: Array, faces: Indices, rim: Indices, inside: float, outside: float) -> Mesh:
    """Two faces of a surface moved along its normals, joined along its rim (k, 2).

    faces (m, 3): anticlockwise seen from outside, as the edges of the rim run round them.
    """
    outer = points + outside * normal
    if inside == outside:
        return _welded(outer, faces)
    n = len(points)
    start, end = rim.T
    sides = np.vstack([np.column_stack([end, start, start + n]), np.column_stack([end, start + n, end + n])])
    inner = faces[:, ::-1] + n
    return _welded(np.vstack([outer, points + inside * normal]), np.vstack([faces, inner, sides]))


def _joined(rows: Array) -> Array:
    """Rows (n, 3) round the side, those that differ from the one before by next to nothing made the same."""
    found = rows.copy()
    for n in np.flatnonzero(np.abs(np.diff(rows, axis=0)).max(axis=1) < _SAME) + 1:
        found[n] = found[n - 1]
    last = len(rows) - 1
    while last > 0 and np.abs(found[last] - found[0]).max() < _SAME:
        found[last] = found[0]
        last -= 1
    return found


def _welded(vertices: Array, triangles: Indices) -> Mesh:
    """Vertices at one place made one, and triangles that are nothing then left out."""
    grid, first, own = np.unique(
        np.round(vertices / _ALIKE).astype(np.int64), axis=0, return_index=True, return_inverse=True
    )
    del grid
    joined = own.reshape(-1)[triangles]
    a, b, c = joined.T
    return Mesh(vertices[first], joined[(a != b) & (b != c) & (c != a)])


@dataclass(frozen=True)
class _Hole:
    """An opening on the side: from parameter start to stop of end A's section, growing, and the shares
    of the way to end B at which its two edges lie: u (k,) and share (k,) each."""

    low: tuple[Array, Array]
    high: tuple[Array, Array]

    @property
    def start(self) -> float:
        return float(self.low[0][0])

    @property
    def stop(self) -> float:
        return float(self.low[0][-1])


def _hole(solid: Solid, opening: MeetingEnd) -> _Hole:
    """Where a branch meets the side, in the side's own parameter and share of its lines."""
    section = solid.end_a.section
    mine = opening.section
    u = np.sort(
        np.concatenate(
            [
                mine.breaks[0] + np.arange(_ROUND_OPENING) / _ROUND_OPENING * mine.period,
                mine.breaks[0] + (opening.breaks - mine.breaks[0]) % mine.period,
            ]
        )
    )
    on, points = opening.on_header(u)
    if isinstance(opening, TaperMeetingEnd):
        on = section.parameter(np.cos(on), np.sin(on))
    # Round about its own middle, so that it is in one piece.
    period = section.period
    angle = on * (2.0 * np.pi / period)
    middle = np.arctan2(np.sin(angle).mean(), np.cos(angle).mean()) * period / (2.0 * np.pi)
    on = middle + (on - middle + 0.5 * period) % period - 0.5 * period
    strip = solid.strip(on)
    ruling = strip.b - strip.a
    share = ((points - strip.a) * ruling).sum(axis=1) / (ruling * ruling).sum(axis=1)
    first, last = int(np.argmin(on)), int(np.argmax(on))
    count = len(on)
    way = (first + np.arange((last - first) % count + 1)) % count
    back = (first - np.arange((first - last) % count + 1)) % count
    sides = []
    for chain in (way, back):
        grows = np.concatenate([[True], np.diff(np.maximum.accumulate(on[chain])) > _BESIDE * period])
        grows[-1] = True
        kept = chain[grows]
        sides.append((on[kept], share[kept]))
    low, high = sorted(sides, key=lambda side: float(np.interp(0.5 * (on[first] + on[last]), *side)))
    return _Hole(low, high)


def _lines(solid: Solid, holes: Sequence[_Hole], count: int) -> Array:
    """Parameters (n,) of the lines, growing, within one period that starts beside every opening."""
    section = solid.end_a.section
    period = section.period
    start = holes[0].stop if holes else solid.seam
    breaks = solid.breaks
    beside = _BESIDE * period
    u = np.concatenate([solid.around(count), breaks - beside, breaks + beside])
    u = start + (u - start) % period
    for hole in holes:
        own = np.concatenate([hole.low[0], hole.high[0]])
        u = u[~_within(u, hole, period)]
        u = np.concatenate([u, start + (own - start) % period])
    u = np.unique(u)
    return np.asarray(u[np.diff(u, prepend=-np.inf) > 1e-3 * beside])


def _within(u: Array, hole: _Hole, period: float) -> Mask:
    past = (u - hole.start) % period
    return np.asarray(past <= hole.stop - hole.start)


def _levels(holes: Sequence[_Hole], u: float, period: float) -> dict[int, tuple[float, float]]:
    """The shares at which a line enters and leaves each opening that it meets."""
    found = {}
    for k, hole in enumerate(holes):
        past = (u - hole.start) % period
        long = hole.stop - hole.start
        if min(past, abs(past - period)) < 1e-12 * period:
            past = 0.0
        if past <= long * (1.0 + 1e-12):
            place = hole.start + min(past, long)
            low, high = (float(np.interp(place, *side)) for side in (hole.low, hole.high))
            found[k] = (low, max(low, high))
    return found


def _between(hole: _Hole, u: float, v: float, solid: Solid) -> bool:
    """Whether the stretch from one line to the next lies in the opening."""
    period = solid.end_a.section.period
    middle = u + 0.5 * ((v - u) % period)
    return bool(_within(np.array([middle]), hole, period)[0])


def _zipped(left: Sequence[int], right: Sequence[int]) -> list[tuple[int, int, int]]:
    """Triangles between two chains that run side by side, left one and right one upwards."""
    i = j = 0
    found = []
    while i < len(left) - 1 or j < len(right) - 1:
        # On by the side that is less far along.
        if j == len(right) - 1 or (i < len(left) - 1 and i * (len(right) - 1) <= j * (len(left) - 1)):
            found.append((left[i], right[j], left[i + 1]))
            i += 1
        else:
            found.append((left[i], right[j], right[j + 1]))
            j += 1
    return found
