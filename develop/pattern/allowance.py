"""From the net line to the cut line: what is added along each edge, or taken off."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from dataclasses import dataclass

import numpy as np

from develop.pattern.chain import (
    area_of,
    between,
    crossing,
    curvature_at,
    joined,
    place_at,
    point_at,
    rates_of,
)
from develop.pattern.curve import Array, Curve, segment
from develop.pattern.parallel import parallel
from develop.pattern.pattern import Outline

__all__ = ["Allowance", "allowed"]

_NONE = 1e-9  # [mm]


@dataclass(frozen=True)
class Allowance:
    """What is added along one edge. width: outward of the net line [mm], negative where it is taken off.

    folded: turned along the net line, so that it ends square to it at the seams, whose laps stop there.
        Else the sheet simply goes on: past a seam as its other side does.
    tabs: shares (k,) of the way along the edge at which a folded edge is cut in as far as `stop` [mm] from
        the net line, so that it can be turned; each cut is `opening` [mm] wide at the outer edge.
    """

    width: float
    folded: bool = False
    tabs: tuple[float, ...] = ()
    opening: float = 1.0
    stop: float = 0.0


_Contour = Sequence[tuple[str, Curve]]


def allowed(
    net: Outline,
    fine: _Contour,
    allowances: Mapping[str, Allowance],
    *,
    beside: tuple[_Contour, _Contour] | None = None,
) -> Outline:
    """The cut line of a contour that runs `a`, `seam_right`, `b`, `seam_left`; `b` may be missing at an apex.

    fine: the same contour, drawn closely enough for its parallels to be good. allowances: by edge; an edge
    without one stays on the net line. beside: the contours that join it at its left and its right seam,
    wherever they lie; left out, it joins itself.
    """
    given = {name: each for name, each in allowances.items() if each.width}
    if not given:
        return net
    flat = {name: each.width for name, each in given.items() if not each.folded}
    left, right = (fine, fine) if beside is None else beside
    whole = _Whole(dict(net.curves), dict(fine), flat, dict(left), dict(right))
    curves: dict[str, Curve] = {}
    for name in whole.ends:
        curves[name] = whole.end(name, given.get(name))
    order = [name for name, _ in net.curves]
    cut = []
    for k, name in enumerate(order):
        if name in curves:
            cut.append((name, curves[name]))
            continue
        before, after = order[k - 1], order[(k + 1) % len(order)]
        start = curves[before].end if before in curves else whole.apex(before, name)[1]
        end = curves[after].start if after in curves else whole.apex(name, after)[0]
        cut.append((name, segment(start, end)))
        if after not in curves and np.hypot(*(whole.apex(name, after)[1] - end)) > _NONE:
            cut.append(("b", segment(end, whole.apex(name, after)[1])))
    more = area_of([curve for _, curve in cut]) - area_of([curve for _, curve in net.curves])
    return Outline(tuple(cut), net.area + more)


@dataclass(frozen=True)
class _Whole:
    """The net contour and how far its edges are moved, `by` [mm], those that are not folded.

    left, right: the contours that join it at its seams.
    """

    net: dict[str, Curve]
    fine: dict[str, Curve]
    by: dict[str, float]
    left: dict[str, Curve]
    right: dict[str, Curve]

    @property
    def ends(self) -> list[str]:
        """The edges that are no seams."""
        return [name for name in self.net if not name.startswith("seam")]

    def line(self, seam: str) -> tuple[Array, Array]:
        """A point of a moved seam and its direction (2,), up from end A."""
        curve = self.net[seam]
        along = (curve.end - curve.start) / curve.length
        outward = np.array([along[1], -along[0]])
        return curve.start + self.by.get(seam, 0.0) * outward, along

    def apex(self, one: str, other: str) -> tuple[Array, Array]:
        """Where two seams that meet in a point end: square to each, beside the point."""
        point = self.net[one].end
        ends = []
        for seam in (one, other):
            start, along = self.line(seam)
            ends.append(start + ((point - start) @ along) * along)
        return ends[0], ends[1]

    def end(self, name: str, allowance: Allowance | None) -> Curve:
        """An edge at end A or B as it is cut, from the one moved seam to the other."""
        first, last = ("seam_left", "seam_right") if name == "a" else ("seam_right", "seam_left")
        by = self.by.get(name, 0.0)
        source = self.fine[name] if by else self.net[name]
        moved = [bool(by or self.by.get(seam, 0.0)) for seam in (first, last)]
        if not any(moved):
            run, start, end = source, (0, 0.0), (len(source.controls) // 3 - 1, 1.0)
            net_start, net_end = start, end
        else:
            further = 4.0 * (abs(by) + max(abs(self.by.get(seam, 0.0)) for seam in (first, last))) + 1.0
            before, after = self._beyond(name, source, further)
            count = len(before.controls) // 3 if before else 0
            net_start, net_end = (count, 0.0), (count + len(source.controls) // 3 - 1, 1.0)
            run = joined([each for each in (before, source, after) if each is not None])
            if by:
                run = parallel(run, by)
            start, end = (
                self._corner(run, seam, corner) if by or self.by.get(seam, 0.0) else place
                for seam, corner, place in (
                    (first, source.start, net_start),
                    (last, source.end, net_end),
                )
            )
        if allowance is None or not allowance.folded:
            return run if not any(moved) else between(run, start, end)
        # A folded strip stands on the net edge alone; beside it the laps go on.
        middle = between(run, max(start, net_start), min(end, net_end))
        source = between(
            self.fine[name], *(_same(self.fine[name], point) for point in (middle.start, middle.end))
        )
        strip = _folded(source, allowance)
        parts = [
            *([between(run, start, net_start)] if start < net_start else []),
            segment(middle.start, strip.start),
            strip,
            segment(strip.end, middle.end),
            *([between(run, net_end, end)] if end > net_end else []),
        ]
        return joined(parts)

    def _beyond(self, name: str, source: Curve, length: float) -> tuple[Curve | None, Curve | None]:
        """What the sheet goes on with before and after an edge: its neighbours' edges, moved to the seams."""
        if not {"seam_left", "seam_right"} <= self.net.keys():
            return None, None
        backward = (self.left, _onto(self.left["seam_right"], self.net["seam_left"].reversed()))
        onward = (self.right, _onto(self.right["seam_left"].reversed(), self.net["seam_right"]))
        before, after = (backward, onward) if name == "a" else (onward, backward)
        found = []
        for (contour, motion), head in ((before, False), (after, True)):
            # Of a sheet that joins itself the edge as it is drawn here, to the last bit.
            own = name in contour and contour[name] is self.fine[name]
            beside = source if own else contour.get(name)
            found.append(_gone_on(source, beside, motion, length, head=head))
        return found[0], found[1]

    def _corner(self, run: Curve, seam: str, near: Array) -> tuple[int, float]:
        """Where an edge meets a moved seam."""
        point, along = self.line(seam)
        found = crossing(run, point, along, near)
        assert found is not None, "an edge that goes on meets its seam"
        return found


def _gone_on(
    source: Curve, beside: Curve | None, motion: tuple[Array, Array], length: float, *, head: bool
) -> Curve:
    """What an edge goes on with, a length [mm] of it: with the edge beside it, moved, and from there straight
    on; None where the sheet beside it stands on a point there.

    head: after the end of the edge, else before its start.
    """
    parts: list[Curve] = []
    rest = length
    if beside is not None:
        # Whole Béziers, as many as reach so far: their chords are no longer than they are.
        reach = np.cumsum(np.hypot(*(beside.pieces[:, 3] - beside.pieces[:, 0]).T))
        last_piece = len(reach) - 1
        start, end = (0, 0.0), (last_piece, 1.0)
        if head:
            end = (min(int(np.searchsorted(reach, length)), last_piece), 1.0)
        else:
            start = (max(int(np.searchsorted(reach, reach[-1] - length)), 0), 0.0)
        parts.append(between(beside, start, end).moved(turn=motion[0], shift=motion[1]))
        rest = length - float(reach[-1])
    if rest > _NONE:
        last = parts[0] if parts else source
        point, *steps = last.controls[::-1] if head else last.controls
        ahead = next(point - each for each in steps if np.hypot(*(point - each)) > _NONE)
        far = point + rest * ahead / np.hypot(*ahead)
        parts = [*parts, segment(point, far)] if head else [segment(far, point), *parts]
    return joined(parts)


def _onto(seam: Curve, other: Curve) -> tuple[Array, Array]:
    """The motion, turn (2, 2) and shift (2,) [mm], that lays a seam on another; both lead up from end A."""
    one, two = (np.arctan2(*(curve.end - curve.start)[::-1]) for curve in (seam, other))
    c, s = np.cos(two - one), np.sin(two - one)
    turn = np.array([[c, -s], [s, c]])
    return turn, other.start - turn @ seam.start


def _same(curve: Curve, point: Array) -> tuple[int, float]:
    """The place of a curve that lies nearest to a point on it."""
    ends = np.array([curve.start, curve.end])
    near = np.hypot(*(ends - point).T)
    if near.min() <= _NONE:
        return (0, 0.0) if near[0] <= near[1] else (len(curve.controls) // 3 - 1, 1.0)
    pieces = curve.pieces
    t = np.tile(np.linspace(0.0, 1.0, 33), (len(pieces), 1))
    gap = np.hypot(*np.moveaxis(rates_of(pieces, t)[0] - point, -1, 0))
    i, k = np.unravel_index(np.argmin(gap), gap.shape)
    place = float(t[i, k])
    for _ in range(8):
        at, speed, _ = rates_of(pieces[[i]], np.array([[place]]))
        place -= float((at[0, 0] - point) @ speed[0, 0] / (speed[0, 0] @ speed[0, 0]))
        place = min(max(place, 0.0), 1.0)
    return int(i), place


def _folded(net: Curve, allowance: Allowance) -> Curve:
    """The outer edge of a folded strip, cut in at its tabs."""
    if not allowance.tabs:
        return parallel(net, allowance.width)
    cuts = [share * net.length for share in allowance.tabs]
    # As wide at the outer edge as asked for: that is longer than the net by 1 + width · curvature.
    halves = [
        0.5 * allowance.opening / (1.0 + allowance.width * curvature_at(net, place_at(net, cut)))
        for cut in cuts
    ]
    starts = [0.0, *(cut + half for cut, half in zip(cuts, halves, strict=True))]
    ends = [*(cut - half for cut, half in zip(cuts, halves, strict=True)), net.length]
    parts: list[Curve] = []
    for k, (start, end) in enumerate(zip(starts, ends, strict=True)):
        tab = parallel(between(net, place_at(net, start), place_at(net, end)), allowance.width)
        if parts:
            at, along = point_at(net, place_at(net, cuts[k - 1]))
            bottom = at + allowance.stop * np.array([along[1], -along[0]])
            parts += [segment(parts[-1].end, bottom), segment(bottom, tab.start)]
        parts.append(tab)
    return joined(parts)
