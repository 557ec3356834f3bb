"""The finished piece: two ends and the side between them, found from the sections alone.

Nothing here knows how the side is unrolled; it is what the pattern is checked against.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property
from typing import Literal

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Indices, Mask, Panels, resolved, tail
from develop.solid.end import End
from develop.solid.level import EndPlane, level_area, level_girth
from develop.solid.meeting import MeetingEnd
from develop.solid.straights import paired
from develop.solid.touching import TouchingEnd

__all__ = ["Measures", "Solid", "Strip"]

_BISECTIONS = 56
_SAME = 1e-9
# Panels are halved until what their nodes leave out is less than this part of the whole. Smaller
# would only add the rounding of ever shorter panels.
_LOOSE = 5e-12
_ROUNDS = 16
# Less than this [mm, mm²] an edge is a point.
_LEAST = 1e-3
# The nodes' places are exact to a few parts in 1e16 of the whole piece, and their derivatives amplify that.
_NOISE = 1e-13


@dataclass(frozen=True)
class Strip:
    """Straight lines of the side: ends a, b (n, 3) [mm] and outward unit normals (n, 3)."""

    a: Array
    b: Array
    normal: Array


@dataclass(frozen=True)
class Measures:
    """What the finished side measures: edge lengths [mm] and area [mm²]."""

    edge_a: float
    edge_b: float
    area: float


@dataclass(frozen=True)
class Solid:
    """A piece between two ends.

    side: `parallel`, lines along +z between two cuts of one section, or `hull`, the side of the
        convex hull of the two ends.
    seam, seam_b: parameters of the two ends' sections between which the seam runs; left out, seam_b is
        where the straight line from the seam leads.
    distance: of the developed sheet outside the surface that carries the ends [mm].
    openings: where branches meet this side, placed in its frame.
    cut_b: a plane z = height + rise · (x, y) that cuts the side off before end B, as (height, rise).
    level: the sheet's edges lie in the planes of the ends; else the plate is cut square to itself there.
    stop: of a part of the side, which runs from the seam to the line between these parameters of both
        ends' sections, each at or beyond the seam's; None for the whole side.
    joints: of a side made in parts, the lines beside the seam at which it is parted, given likewise.
    """

    end_a: End
    end_b: End
    side: Literal["parallel", "hull"]
    seam: float
    seam_b: float | None = None
    distance: float = 0.0
    cut_b: tuple[float, Array] | None = None
    openings: tuple[MeetingEnd, ...] = ()
    level: bool = False
    stop: tuple[float, float] | None = None
    joints: tuple[tuple[float, float], ...] = ()

    @cached_property
    def planes(self) -> tuple[EndPlane | None, EndPlane | None]:
        """The planes that the sheet's edges lie in, where they are level: a point has none."""
        if not self.level or self.distance == 0.0:
            return None, None
        far = EndPlane.of_cut(*self.cut_b) if self.cut_b else EndPlane.of(self.end_b)
        return EndPlane.of(self.end_a), far

    def part(self, number: int) -> Solid:
        """The part of that number, counted from 0 at the seam, of a side made in parts."""
        start = (self.seam, self._seam_b)
        lines = (start, *self.joints, self._once_round(start))
        (seam, seam_b), stop = lines[number], lines[number + 1]
        return replace(self, seam=seam, seam_b=seam_b, stop=stop, joints=(), openings=())

    @property
    def _seam_b(self) -> float:
        assert self.seam_b is not None, "a side made in parts knows both ends of its seam"
        return self.seam_b

    def _once_round(self, line: tuple[float, float]) -> tuple[float, float]:
        return line[0] + self.end_a.section.period, line[1] + self.end_b.section.period

    def strip(self, u: Array) -> Strip:
        """The side's straight lines through end A at its section's parameter u (n,)."""
        if self.side == "parallel":
            at = self.end_a.section.walk(u)
            normal = np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1)
            return Strip(self.end_a.point(u), self.end_b.point(u), normal)
        normal = self.touching(self.end_a, self.end_b, u)
        a = self.end_a.point(u)
        b = paired(self.end_a, self.end_b, u, normal, self.end_b.touch(normal))
        return Strip(a, self._cut(a, b), normal)

    def lengths(self, u: Array) -> tuple[Array, Array]:
        """Least and largest lengths (n,) [mm] of the side's straight lines from end A's parameters u (n,).

        They differ only where a plane touches end B along a straight side and end A in one point: all the
        lines of that flat triangle start there.
        """
        strip = self.strip(u)
        length = np.linalg.norm(strip.b - strip.a, axis=1)
        least, most = length.copy(), length.copy()
        if self.side == "parallel":
            return least, most
        (first, last), (low, high) = (
            end.section.parameters(*(strip.normal @ end.spans).T) for end in (self.end_a, self.end_b)
        )
        fan = np.flatnonzero((last <= first) & (high > low))
        if len(fan):
            a = strip.a[fan]
            start, end = (self._cut(a, self.end_b.point(each[fan])) for each in (low, high))
            along = end - start
            share = -np.einsum("ni,ni->n", start - a, along) / np.einsum("ni,ni->n", along, along)
            near = start + np.clip(share, 0.0, 1.0)[:, None] * along
            ends = [np.linalg.norm(each - a, axis=1) for each in (start, end, near)]
            least[fan], most[fan] = ends[2], np.maximum(*ends[:2])
        return least, most

    def _cut(self, a: Array, b: Array) -> Array:
        """The far ends (n, 3) of lines from a to b, at the cut where there is one."""
        if self.cut_b is None:
            return b
        height, rise = self.cut_b
        over_a, over_b = (p[:, 2] - height - p[:, :2] @ rise for p in (a, b))
        return np.asarray(a + (over_a / (over_a - over_b))[:, None] * (b - a))

    def sheet_strip(self, u: Array) -> Strip:
        """What of those lines the sheet reaches over: from level edges, the parts below them."""
        return self._reached(self.strip(u))

    def sheet_strip_b(self, u: Array) -> Strip:
        """The same through end B at its section's parameter u (n,)."""
        return self._reached(self.strip_b(u))

    def _reached(self, strip: Strip) -> Strip:
        lift = self.distance * strip.normal
        ends = [
            end if plane is None else plane.along(end + lift, strip.b - strip.a) - lift
            for end, plane in zip((strip.a, strip.b), self.planes, strict=True)
        ]
        return Strip(ends[0], ends[1], strip.normal)

    def on_ends(self, a: Array, b: Array, normal: Array) -> tuple[Array, Array]:
        """Where lines of the sheet from a to b (n, 3), with outward normals (n, 3), have the ends of the
        given surface: below them, and below level edges where the surface meets the plane."""
        ends = [end - self.distance * normal for end in (a, b)]
        return tuple(
            end if plane is None else plane.along(end, b - a)
            for end, plane in zip(ends, self.planes, strict=True)
        )  # type: ignore[return-value]

    def plane_miss(self, a: Array, b: Array) -> float:
        """Largest distance [mm] of the sheet's edges, a and b (n, 3), from the planes that they lie in."""
        misses = [
            float(np.max(np.abs(plane.over(end))))
            for end, plane in zip((a, b), self.planes, strict=True)
            if plane
        ]
        return max(misses, default=0.0)

    def girths(self) -> tuple[float, float]:
        """Lengths [mm] of the sheet's two edges, from the ends alone where it lies on them."""
        if self.distance == 0.0 and self.cut_b is None:
            if self.stop is None:
                return self.end_a.girth, self.end_b.girth
            if type(self.end_a) is End and type(self.end_b) is End:
                return (
                    self.end_a.stretch(self.seam, self.stop[0]),
                    self.end_b.stretch(self._seam_b, self.stop[1]),
                )
        return self.measures.edge_a, self.measures.edge_b

    def misses(self, a: Array, b: Array, u: Array) -> float:
        """Largest distance [mm] of points a, b (n, 3), on the given surface, from the two ends.

        u: (n,) parameters of end A's section that the points belong to, for an end that is a cut, or one
        that stands at a sharp corner while its height changes.
        """
        far = self._off(self.end_b, b, u)
        if self.cut_b is not None:
            far = np.linalg.norm(b - self.strip(u).b, axis=1)
        return float(max(np.max(self._off(self.end_a, a, u)), np.max(far)))

    @staticmethod
    def _off(end: End, points: Array, u: Array) -> Array:
        """Distance (n,) [mm] of points (n, 3) from an end, never understated."""
        if isinstance(end, TouchingEnd):
            return np.asarray(np.minimum(end.distance(points), np.linalg.norm(points - end.point(u), axis=1)))
        return np.asarray(end.distance(points))

    def strip_b(self, u: Array) -> Strip:
        """The side's straight lines through end B at its section's parameter u (n,)."""
        if self.side == "parallel":
            return self.strip(u)
        normal = self.touching(self.end_b, self.end_a, u)
        return Strip(self.end_a.touch(normal), self.end_b.point(u), normal)

    def touching(self, on: End, other: End, u: Array) -> Array:
        """Unit normals (n, 3) of the planes through the tangents of one end that touch the other.

        As the plane turns about the tangent, the other end lies wholly outside of it, then wholly
        inside: halving the angle finds where it touches, from supports alone.
        """
        at = on.section.walk(u)
        e = np.stack([at.ex, at.ey], axis=-1) @ on.spans.T
        up = np.cross(on.spans[:, 0], on.spans[:, 1])
        above = float((other.origin - on.origin) @ up) > 0.0
        point = on.point(u)
        low = np.full(len(u), -0.5 * np.pi)
        high = -low
        for _ in range(_BISECTIONS):
            middle = 0.5 * (low + high)
            normal = np.cos(middle)[:, None] * e + np.sin(middle)[:, None] * up
            beyond = other.support(normal) - np.einsum("ni,ni->n", normal, point)
            less = (beyond > 0.0) == above
            high = np.where(less, middle, high)
            low = np.where(less, low, middle)
        angle = 0.5 * (low + high)
        return np.asarray(np.cos(angle)[:, None] * e + np.sin(angle)[:, None] * up)

    @cached_property
    def measures(self) -> Measures:
        """Lengths of the two edges of the sheet and its area, by quadrature in space.

        Between lines a→b and their neighbours the area is ½ |R × a'| + ½ |R × b'|, as one plane
        touches the side all along a line. Each part is taken round its own end, so that a straight
        side of one end, where the other stands, is counted once.
        """
        if any(self.planes):
            edges = [
                level_girth(self, end_b=bool(end_b))
                if plane
                else self._swept(self.strip_b, (self.end_b, self.end_a), "b")[0]
                for end_b, plane in enumerate(self.planes)
            ]
            return Measures(edges[0], edges[1], level_area(self))
        if self.cut_b is not None:
            # Both parts round end A: a cut side has no line on which end A stands.
            both = [self._swept(self.strip, (self.end_a, self.end_b), edge) for edge in "ab"]
            return Measures(both[0][0], both[1][0], both[0][1] + both[1][1])
        (edge_a, area_a), (edge_b, area_b) = (
            self._swept(walk, ends, edge)
            for walk, ends, edge in (
                (self.strip, (self.end_a, self.end_b), "a"),
                (self.strip_b, (self.end_b, self.end_a), "b"),
            )
        )
        return Measures(edge_a, edge_b, area_a + area_b)

    def _swept(self, walk: Callable[[Array], Strip], ends: tuple[End, End], edge: str) -> tuple[float, float]:
        """Length of one edge of the sheet and its half of the area, walked round that end."""

        def speeds(panels: Panels) -> Array:
            u, half = panels.nodes, panels.half
            strip = walk(u.ravel())
            ruling = (strip.b - strip.a).reshape(*u.shape, 3)
            if type(ends[0]) is End and (edge == "a" or self.cut_b is None):
                # Differentiating positions would only add rounding: the end's tangent is known.
                at = ends[0].section.walk(u.ravel())
                along = np.stack([-at.ey, at.ex], axis=-1) @ ends[0].spans.T
                velocity = (at.ds[:, None] * along).reshape(*u.shape, 3)
                if self.distance:
                    turn = (DERIVATIVE @ strip.normal.reshape(*u.shape, 3)) / half[:, None, None]
                    velocity = velocity + self.distance * turn
            else:
                points = (getattr(strip, edge) + self.distance * strip.normal).reshape(*u.shape, 3)
                velocity = (DERIVATIVE @ points) / half[:, None, None]
            length = np.linalg.norm(velocity, axis=-1)
            return np.stack([length, 0.5 * np.linalg.norm(np.cross(ruling, velocity), axis=-1)], axis=-1)

        panel_ends = self.clipped(self.panel_ends(*ends), on_b=ends[0] is self.end_b)
        if len(panel_ends) < 2:
            return 0.0, 0.0
        first = Panels.between(panel_ends)
        whole = np.maximum(((WEIGHTS @ speeds(first)) * first.half[:, None]).sum(axis=0), _LEAST)

        size = float(max(np.abs(end.point(end.section.breaks)).max() for end in ends))
        allowed = np.maximum(_LOOSE * whole, _NOISE * np.array([size, size * size]))

        def loose(panels: Panels, found: Array) -> Mask:
            return np.asarray((tail(found) * panels.half[:, None] > allowed).any(axis=1))

        panels, found = resolved(first, speeds, loose, rounds=_ROUNDS)
        edge_length, area = ((WEIGHTS @ found) * panels.half[:, None]).sum(axis=0)
        return float(edge_length), float(area)

    def panel_ends(self, mine: End, yours: End) -> Array:
        """Panels of one end's parameter that end at the breaks of both ends."""
        section = mine.section
        start, period = section.breaks[0], section.period
        ends = section.breaks - start
        if self.side == "hull":
            flat = self.touching(yours, mine, yours.section.breaks[:-1]) @ mine.spans
            past = (section.parameter(flat[:, 0], flat[:, 1]) - start) % period
            ends = np.sort(np.concatenate([ends, past]))
            ends = ends[np.concatenate([[True], np.diff(ends) > _SAME * period])]
            ends[-1] = period
        else:
            corners = np.concatenate([end.breaks for end in (mine, yours)])
            ends = np.sort(np.concatenate([ends, (corners - start) % period]))
            ends = ends[np.concatenate([[True], np.diff(ends) > _SAME * period])]
            ends[-1] = period
        return np.asarray(start + ends)

    @property
    def breaks(self) -> Array:
        """Parameters (n,) of end A's section between which the side is smooth."""
        return self.panel_ends(self.end_a, self.end_b)[:-1]

    def clipped(self, ends: Array, *, on_b: bool) -> Array:
        """Panel ends (m + 1,) of one turn of an end, carried on round and cut to the stretch that a part has
        of it, of which only a point may be left (1,); of a whole side as they are."""
        if self.stop is None:
            return ends
        start, stop = (self._seam_b, self.stop[1]) if on_b else (self.seam, self.stop[0])
        period = float(ends[-1] - ends[0])
        turns = np.floor((start - ends[0]) / period)
        round_twice = np.concatenate([ends[:-1], ends + period]) + turns * period
        near = _SAME * period
        inner = round_twice[(round_twice > start + near) & (round_twice < stop - near)]
        return np.concatenate([[start], inner, [stop]]) if stop > start + near else np.array([start])

    # ---- for pictures and meshes -----------------------------------------------------------

    def around(self, count: int) -> Array:
        """Parameters (count,) of end A spread evenly by arc and turn together, from the seam on."""
        section = self.end_a.section
        fine = self.seam + np.linspace(0.0, section.period, 16 * count + 1)
        at = section.walk(fine)
        girth = max(section.girth, 1e-300)
        growth = np.hypot(at.ds / girth, at.dphi / (2.0 * np.pi))
        total = np.concatenate([[0.0], np.cumsum(0.5 * (growth[1:] + growth[:-1]))])
        return np.asarray(np.interp(np.arange(count) / count * total[-1], total, fine))

    def faces(self, count: int = 240) -> tuple[Array, Indices]:
        """The side as a mesh: vertices (2 count, 3) [mm] and quads (count, 4), outward."""
        strip = self.strip(self.around(count))
        i = np.arange(count)
        j = (i + 1) % count
        return np.vstack([strip.a, strip.b]), np.stack([i, j, j + count, i + count], axis=1)

    def rim_a(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end A."""
        return self.strip(self.around(count)).a

    def rim_b(self, count: int = 240) -> Array:
        """Points (count, 3) [mm] round end B."""
        return self.strip(self.around(count)).b

    def line_at(self, direction: float) -> Array:
        """The straight line (2, 3) [mm] of the side at a direction [rad] of end A."""
        strip = self.strip(self.end_a.section.at_direction(np.array([direction])))
        return np.vstack([strip.a, strip.b])

    @property
    def sheet_seam(self) -> Array:
        """The sheet's seam (2, 3) [mm], from end A to end B; of a part its left one."""
        return self._in_sheet(self.seam_line, self.seam)

    @property
    def sheet_stop(self) -> Array:
        """The sheet's line (2, 3) [mm] at which it ends: the seam, or the right one of a part."""
        return self.sheet_seam if self.stop is None else self._in_sheet(self.stop_line, self.stop[0])

    def _in_sheet(self, line: Array, u: float) -> Array:
        """What of a line (2, 3) [mm] of the side the sheet reaches over, through end A's parameter u."""
        along = (line[1] - line[0])[None]
        lift = self.distance * self.strip(np.array([u])).normal
        return np.vstack(
            [
                end + lift if plane is None else plane.along(end + lift, along)
                for end, plane in zip(line, self.planes, strict=True)
            ]
        )

    @property
    def seam_line(self) -> Array:
        """The seam (2, 3) [mm], from end A to end B; of a part its left one."""
        if self.seam_b is None:
            return np.vstack([self.end_a.point(np.array([self.seam])), self.strip(np.array([self.seam])).b])
        return self._line(self.seam, self.seam_b)

    @property
    def stop_line(self) -> Array:
        """The line (2, 3) [mm] at which the sheet ends: the seam, or the right one of a part."""
        return self.seam_line if self.stop is None else self._line(*self.stop)

    @property
    def joint_lines(self) -> Array:
        """The lines beside the seam at which the side is parted (k, 2, 3) [mm]."""
        return np.array([self._line(*joint) for joint in self.joints]).reshape(-1, 2, 3)

    def _line(self, u_a: float, u_b: float) -> Array:
        """The line (2, 3) [mm] from end A to end B between these parameters of their sections."""
        a = self.end_a.point(np.array([u_a]))
        return np.vstack([a, self._cut(a, self.end_b.point(np.array([u_b])))])

    @property
    def top_line(self) -> Array:
        """The line (2, 3) [mm] at the top of end A."""
        return self.line_at(0.5 * np.pi)
