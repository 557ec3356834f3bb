"""Rings of plate round a curve, whole or in parts, with holes along a pitch line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import replace

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.pattern import Figures, NumberedHole, Outline, WitnessMark
from develop.pieces.built import Part
from develop.pieces.flat import Plate, closed, direction_marks, drawn, holes_at, pattern_of_plate
from develop.sections.section import Parallel, Section
from develop.solid import FlatRing, Frame, Holes
from develop.surfaces.plane import PlaneCurve, plane_curve

__all__ = ["parts_of"]

# Number of a part in the ring, its span, and where the first of those alike lies when it covers this one.
_Place = tuple[int, tuple[float, float] | None, Frame]
_PLACES = 48
_ALIKE = 1e-6  # [mm]
_ALONG = 1e-12  # of the way round: two places are one
_SAMPLES = 33


def parts_of(
    inner: Section,
    *,
    width: float,
    line: Parallel,
    holes: Array,
    radius: float,
    ends: Array | None,
    blank: bool,
    others: Sequence[tuple[float, str]],
    mark: str,
    kind: str,
    quantity: int,
    facts: tuple[str, ...],
) -> tuple[Part, ...]:
    """The parts of a ring from the curve `inner` to its parallel at `width` [mm], or of a blank.

    line: the pitch line; holes: parameters of their centres (n,), radius [mm]. ends: parameters
    (m + 1,) at which the ring is parted, None for a whole one. others: directions [rad] that are
    marked beside the four, with their words. Parts that are alike, also when turned over, are one
    pattern with a quantity.
    """
    spans = [None] if ends is None else list(zip(ends[:-1].tolist(), ends[1:].tolist(), strict=True))
    groups: list[list[int]] = []
    shapes = [
        None if span is None else _Shape(inner, line, span, _here(inner, holes, span)) for span in spans
    ]
    for i, shape in enumerate(shapes):
        alike = next((g for g in groups if shape is not None and shape.like(shapes[g[0]]) is not None), None)
        if alike is None:
            groups.append([i])
        else:
            alike.append(i)
    parts = []
    for number, group in enumerate(groups, start=1):
        span, first = spans[group[0]], shapes[group[0]]
        here = holes if span is None else _here(inner, holes, span)
        plate = _plate(inner, width, line, here, radius, span, blank, others)
        name = mark if len(groups) == 1 else f"{mark}-{number}"
        count = quantity * len(group)
        which = f", {len(group)} alike of the {len(spans)} parts of the ring" if ends is not None else ""
        title = f"{name}: {kind}" if name != kind else name
        solid = FlatRing(
            inner,
            width,
            plate.shift,
            span,
            blank,
            Holes(line, len(holes), len(here), radius) if len(holes) else None,
        )
        frames = [Frame.square()]
        for i in group[1:]:
            other = shapes[i]
            assert first is not None
            assert other is not None
            frame = first.like(other)
            assert frame is not None
            frames.append(frame)
        every = [(i + 1, spans[i], frame) for i, frame in zip(group, frames, strict=True)]
        if span is not None:
            plate = replace(plate, marks=_part_marks(inner, every, others))
        over = sum(float(np.linalg.det(frame.axes[:2, :2])) < 0.0 for frame in frames)
        turned = f"; {over * quantity} of them turned over" if over else ""
        pattern = pattern_of_plate(
            plate,
            mark=name,
            kind=kind,
            quantity=count,
            facts=(
                f"{title}{which}",
                *facts,
                *(("marks of all places of this part: see their table",) if len(group) > 1 else ()),
                f"quantity {count}, drawn facing END B{turned}",
            ),
            figures=(
                *_figures(line, here, plate.shift, None if span is None else span[0]),
                *_places_of(inner, every),
            ),
        )
        parts.append(Part(pattern, solid, tuple(frames)))
    return tuple(parts)


def _here(inner: Section, holes: Array, span: tuple[float, float]) -> Array:
    """The holes (k,) between the ends of a part, in its own turn of the parameter."""
    past = (holes - span[0]) % inner.period
    return np.sort(span[0] + past[past < span[1] - span[0]])


class _Shape:
    """The shape of a part: points of its two edges and its holes, to be compared with another's."""

    def __init__(self, inner: Section, line: Parallel, span: tuple[float, float], holes: Array) -> None:
        arcs = line.arc(np.array(span))
        u = line.at_arc(np.linspace(arcs[0], arcs[1], _SAMPLES))
        u[[0, -1]] = span
        self.points = np.vstack([inner.point(u), line.point(u), line.point(holes)])
        self.back = np.vstack([inner.point(u[::-1]), line.point(u[::-1]), line.point(holes[::-1])])

    def like(self, other: _Shape | None) -> Frame | None:
        """Where this shape lies when it covers the other one: turned, or turned over and turned; or None."""
        if other is None or len(self.points) != len(other.points):
            return None
        for mirror in (1.0, -1.0):
            mine = self.points * [1.0, mirror]
            target = other.points if mirror > 0.0 else other.back
            a, b = mine - mine.mean(axis=0), target - target.mean(axis=0)
            # The turn that brings one set of points nearest to the other.
            angle = np.arctan2((a[:, 0] * b[:, 1] - a[:, 1] * b[:, 0]).sum(), (a * b).sum())
            c, s = np.cos(angle), np.sin(angle)
            turn = np.array([[c, -s], [s, c]])
            if np.abs(a @ turn.T - b).max() > _ALIKE:
                continue
            shift = target.mean(axis=0) - turn @ mine.mean(axis=0)
            axes = np.zeros((3, 3))
            axes[:2, :2] = (turn @ np.diag([1.0, mirror])).T
            axes[2, 2] = mirror
            return Frame(np.array([*shift, 0.0]), axes)
        return None


def _plate(
    inner: Section,
    width: float,
    line: Parallel,
    holes: Array,
    radius: float,
    span: tuple[float, float] | None,
    blank: bool,
    others: Sequence[tuple[float, str]],
) -> Plate:
    """A ring in the plane of the curve, or a part of one, which has no marks yet."""
    outside = Parallel(inner, width)
    openings = holes_at(line.point(holes), radius) if len(holes) else ()
    thin, numbered = _set_out(line, holes, radius, span)
    low, high = (float(inner.breaks[0]), float(inner.breaks[-1])) if span is None else span
    places = _places(inner, outside, line, low, high)
    if span is not None:
        curves = [plane_curve(each, start=low, stop=high) for each in (inner, outside)]
        return Plate(_segment(*curves), openings, (), (), places, thin, numbered)
    rim = plane_curve(outside)
    if blank:
        cross = tuple(
            segment(*(outside.point(outside.at_direction(np.array([d, d + np.pi])))))
            for d in (0.0, 0.5 * np.pi)
        )
        # In the quarters between the centre lines.
        low_high = np.array([[[x, y], [x, y + 0.4]] for y in (0.05, -0.45) for x in (-0.22, 0.22)])
        flat = low_high * [inner.width, inner.height]
        return Plate(
            closed("outer", rim), openings, (), cross, np.concatenate([flat, places]), thin, numbered
        )
    marks = tuple(m for _, m in direction_marks(inner, "inner", outward=True, others=_new(others)))
    openings = (closed("inner", plane_curve(inner)), *openings)
    return Plate(closed("outer", rim), openings, marks, (), places, thin, numbered)


def _set_out(
    line: Parallel, holes: Array, radius: float, span: tuple[float, float] | None
) -> tuple[tuple[Curve, ...], tuple[NumberedHole, ...]]:
    """The pitch line and the holes on it, numbered as in their table."""
    if not len(holes):
        return (), ()
    start, stop = (None, None) if span is None else span
    at, centres = line.walk(holes), line.point(holes)
    return (drawn(plane_curve(line, start=start, stop=stop)),), tuple(
        NumberedHole(n + 1, centres[n], np.array([at.ex[n], at.ey[n]]), radius) for n in range(len(holes))
    )


def _part_marks(
    inner: Section,
    places: Sequence[_Place],
    others: Sequence[tuple[float, str]],
) -> tuple[WitnessMark, ...]:
    """The marks of a part, their running lengths from its end 1.

    What is marked at one point of several of the places is one mark with all their different words; where
    it holds for some of the places alone their numbers stand after it.
    """
    marked = direction_marks(inner, "inner", outward=True, others=_new(others))
    near = _ALONG * inner.period
    found: list[tuple[WitnessMark, list[tuple[str, int]]]] = []
    for number, span, frame in places:
        assert span is not None
        arcs = inner.arc(np.array(span))
        length = float(arcs[1] - arcs[0])
        turn, shift = frame.axes[:2, :2], frame.origin[:2]
        over = float(np.linalg.det(turn)) < 0.0
        for u, mark in marked:
            past = (u - span[0] + near) % inner.period - near
            if past > span[1] - span[0] + near:
                continue
            arc = float(inner.arc(np.array([span[0] + max(past, 0.0)]))[0] - arcs[0])
            at = turn @ (mark.at - shift)
            arc = length - arc if over else arc
            words = next((words for each, words in found if np.abs(each.at - at).max() < _ALIKE), None)
            if words is None:
                words = []
                found.append((WitnessMark(at, turn @ mark.inward, "", mark.edge, arc), words))
            words.append((mark.text, number))
    return tuple(replace(mark, text=_joined(words, len(places))) for mark, words in found)


def _joined(words: Sequence[tuple[str, int]], places: int) -> str:
    """The words at a mark, each with the numbers of its places unless all places have one there."""
    if len(words) == places:
        return "/".join(dict.fromkeys(word for word, _ in words))
    return "/".join(f"{word} {number}" for word, number in words)


def _places_of(inner: Section, places: Sequence[_Place]) -> tuple[Figures, ...]:
    """Where the parts that are alike stand in the ring, in degrees anticlockwise facing END B."""
    if len(places) < 2:
        return ()
    rows = []
    for number, span, frame in places:
        assert span is not None
        over = float(np.linalg.det(frame.axes[:2, :2])) < 0.0
        ends = np.degrees(inner.direction(np.array(span[::-1] if over else span)))
        rows.append(
            (str(number), *(f"{round(d, 1) % 360.0:.1f}" for d in ends.tolist()), "yes" if over else "no")
        )
    heads = (("place", "no."), ("END 1", "degrees"), ("END 2", "degrees"), ("turned", "over"))
    return (Figures("Places of the part", heads, tuple(rows)),)


def _new(others: Sequence[tuple[float, str]]) -> list[tuple[float, str]]:
    """Those directions that are none of the four which are marked anyhow."""
    return [(d, word) for d, word in others if abs((d / (0.5 * np.pi) + 0.5) % 1.0 - 0.5) > 1e-9]


def _segment(inner: PlaneCurve, outer: PlaneCurve) -> Outline:
    """A part of a ring between two square ends."""
    out, back = drawn(outer), drawn(inner).reversed()
    end_2, end_1 = segment(out.end, back.start), segment(back.end, out.start)
    swept = outer.swept - inner.swept
    for straight in (end_2, end_1):
        swept += 0.5 * float(straight.start[0] * straight.end[1] - straight.start[1] * straight.end[0])
    curves: tuple[tuple[str, Curve], ...] = (
        ("outer", out),
        ("end_2", end_2),
        ("inner", back),
        ("end_1", end_1),
    )
    return Outline(curves, swept)


def _places(inner: Section, outside: Parallel, line: Parallel, low: float, high: float) -> Array:
    """Lines from edge to edge that words may stand on, where the ring is straightest first."""
    arcs = line.arc(np.array([low, high]))
    shares = (np.arange(_PLACES) + 0.5) / _PLACES
    u = line.at_arc(arcs[0] + shares * (arcs[1] - arcs[0]))
    at = line.walk(u)
    bent = 1.0 / np.maximum(line.radius(at.ex, at.ey), 1.0)
    order = np.lexsort((np.abs(shares - 0.5), np.round(bent / bent.max(), 2)))
    return np.stack([inner.point(u), outside.point(u)], axis=1)[order]


def _figures(line: Parallel, holes: Array, shift: Array, start: float | None) -> tuple[Figures, ...]:
    """The holes' centres, to be marked out by tape. start: parameter of the part's end 1, None for a ring."""
    if not len(holes):
        return ()
    arcs = line.arc(holes) - line.arc(holes[:1] if start is None else np.array([start]))
    rows = [
        (str(n + 1), float(arcs[n]), float(x), float(y)) for n, (x, y) in enumerate(line.point(holes) + shift)
    ]
    origin = "hole 1" if start is None else "END 1"
    heads = (("hole", "no."), ("along pitch line", f"from {origin}"), ("centre", "x"), ("centre", "y"))
    return (Figures("Centres of the holes", heads, tuple(rows)),)
