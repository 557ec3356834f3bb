"""A compensation plate: it lies on the header round a branch, as wide as it is asked for all round."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from math import floor, pi
from typing import TYPE_CHECKING

import numpy as np

from develop.errors import Refusal
from develop.pattern.chain import area_of, crossings_of, joined, place_at, point_at, stretch
from develop.pattern.curve import Array, Curve, segment
from develop.pattern.parallel import arc_about, parallel, room, turns_of
from develop.pattern.pattern import Outline, Pattern, RollLine, Rulings, WitnessMark
from develop.pieces.assemble import dense
from develop.pieces.built import Part
from develop.pieces.clearance import Beside
from develop.pieces.flat import Plate, holes_at, pattern_of_plate
from develop.pieces.wording import SIDES
from develop.solid import Patch
from develop.surfaces.cylinder import Cylinder
from develop.surfaces.edges import Trace, edges
from develop.surfaces.meeting import Opening
from develop.surfaces.trim import Plane
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.header import StraightHeader, TaperHeader
    from develop.sections.section import Section
    from develop.solid import Frame
    from develop.surfaces.sheet import Lines, Sheet

__all__ = ["Pad", "pad_parts"]

_FINE = 1e-6  # [mm] so close that the tangents of parallels are good
_COARSE = 0.5  # [mm]
# As on the header's opening.
_WORDS = ("BRANCH RIGHT", "BRANCH TOP", "BRANCH LEFT", "BRANCH BOTTOM")
_ENDS = ("HEADER'S RIGHT", "HEADER'S LEFT")
_FLAT = 1e-9  # [rad]
_PLACES = 48
_ROLL_LINES = 12
_SCRAP = 1.0  # [mm] a roll line shorter than this is left out
_CLEAR = 1e-3  # [mm]
_CLEAR_EDGE = 1.0  # [mm] that a plate keeps from what it may not reach
_KINK = 1e-6  # [rad]
# The tell-tale hole stands this far along a part, clear of the four marks.
_TELL_TALE = 0.625


@dataclass(frozen=True)
class Pad:
    """What is asked of a compensation plate.

    width [mm]; halves: made in two, parted at the header's right and left; tell_tale: diameter of a hole
    through each part [mm], 0 for none.
    """

    width: float
    halves: bool
    tell_tale: float


def pad_parts(
    pad: Pad,
    *,
    branch: Section,
    header: StraightHeader | TaperHeader,
    frame: Frame,
    lift: float,
    seams: tuple[float, float],
    rotate: float,
    mark: str,
    quantity: int,
    leaning: str,
    facts: tuple[str, ...],
    units: str,
    beside: tuple[str, str],
) -> tuple[tuple[Part, ...], tuple[Beside, ...]]:
    """The plate, whole or in its two halves, and how near it lies to the seams.

    branch: its outside. header: the side as the plate lies on it, on the given surface that is the header's
    outside. frame: the branch's. lift: of the plate's own sheet outside the header's [mm]. seams: parameters
    at which the branch and the header have theirs. rotate: of the branch's section [rad]. beside: the
    marks of the branch and the header.
    Raises Refusal where the plate has no room.
    """
    trim = header.trim(frame)
    pipe = Cylinder(branch, trim, Plane(1e3, np.zeros(2)), 0.0, trim.breaks(branch)).sheet(seams[0])
    sheet = header.sheet(seams[1])
    opening = Opening(pipe, sheet, trim)
    inner = Curve(opening.chain(_FINE), opening.length)
    _check_room(pad, inner, sheet)

    def on_opening(directions: list[float]) -> Trace:
        at = pipe.from_a(branch.at_direction(np.array(directions)))
        return opening.trace(at.panel, at.x)

    marks = on_opening([0.0, 0.5 * pi, pi, 1.5 * pi])
    right, left = (float(arc) for arc in on_opening([-rotate, pi - rotate]).arcs)
    whole = inner.length
    right_on = right + whole
    spans = [(right, left + whole * (left < right)), (left, right + whole * (right < left))]
    lines = sheet.lines(dense(sheet))
    under = header.solid(seams[1], sheet, ())
    joint = header.joint(branch, frame, sheet=lift)
    parts = []
    plates: list[Outline] = []
    for k, span in enumerate(spans if pad.halves else [(right, right_on)]):
        stretched = stretch(inner, *span)
        outer = _outer(inner, stretched, span, pad.width)
        if pad.halves:
            net, openings = _half(stretched, outer), []
        else:
            area = opening.area + pad.width * whole + pi * pad.width**2
            net = Outline((("outer", outer),), area)
            openings = [Outline((("opening", Curve(opening.controls, whole)),), opening.area)]
        if pad.tell_tale:
            at, along = point_at(stretched, place_at(stretched, _TELL_TALE * stretched.length))
            centre = at + 0.5 * pad.width * _right_of(along)
            _check_tell_tale(pad, centre, net, openings)
            openings += holes_at(centre[None], 0.5 * pad.tell_tale)
        shown = [i for i in range(4) if not pad.halves or _between(float(marks.arcs[i]), span, whole)]
        witness = tuple(
            WitnessMark(
                marks.points[i],
                _right_of(marks.tangents[i]),
                _WORDS[i],
                "inner" if pad.halves else "opening",
                float(marks.arcs[i]),
            )
            for i in shown
        )
        plates.append(net)
        plate = Plate(net, tuple(openings), witness, (), _places(stretched, pad.width))
        # Anticlockwise from the right, the first half lies towards the header's end A.
        which = ("-towards-a", "-towards-b")[k] if pad.halves else ""
        title = "compensation plate"
        if pad.halves:
            title += f", the half towards the header's END {'AB'[k]}"
        moved = replace(lines, a=lines.a + plate.shift, b=lines.b + plate.shift)
        pattern = pattern_of_plate(
            plate,
            mark=f"{mark}{which}",
            kind="branch",
            quantity=quantity,
            facts=(),
        )
        bent = _bent(pattern, moved)
        pattern = replace(
            pattern,
            facts=(
                f"{mark}{which}",
                title,
                f"{'rolled to lie' if bent else 'lies flat'} on the header, {leaning}",
                *facts,
                *((SIDES,) if pad.halves else ()),
                f"quantity {quantity}, outside up",
            ),
            units=units,
            lines_as="full",
            lines=_roll_lines(pattern, moved) if bent else (),
            end_words=((_ENDS if k == 0 else _ENDS[::-1]) if pad.halves else pattern.end_words),
            facing=False,
            rulings=Rulings(moved.a, moved.b, np.diff(moved.turn, prepend=0.0), moved.u_a, lift),
        )
        solid = Patch(under, joint, pad.width, lift, 0.5 * pad.tell_tale, not pad.halves)
        parts.append(Part(pattern, solid, (frame,)))
    marks_of = tuple(part.pattern.mark for part in parts)
    return tuple(parts), _beside_seams(plates, inner, sheet, (mark, *beside), marks_of)


def _beside_seams(
    plates: Sequence[Outline], inner: Curve, sheet: Sheet, names: tuple[str, str, str], marks: tuple[str, ...]
) -> tuple[Beside, ...]:
    """How far [mm] the plate, laid flat, lies from the header's seam, and the joints between its halves
    from that and from the branch's, which ends where the opening's edge begins.

    names: of the plate, the branch and the header. marks: of the plate's parts.
    """
    at = sheet.at_ends
    seams = [np.array([at.a[i], at.b[i]]) for i in (0, -1)]
    pad, branch, header = names

    def gap(curves: Sequence[Curve]) -> float:
        points = np.vstack([curve.polyline(_COARSE) for curve in curves])
        # A joint is straight: its ends alone might pass a seam by.
        return min(
            *(_distance(points, seam) for seam in seams),
            *(_distance(seam, curve.polyline(_COARSE)) for seam in seams for curve in curves),
        )

    outer = [curve for net in plates for name, curve in net.curves if name == "outer"]
    ends = [curve for net in plates for name, curve in net.curves if name.startswith("end_")]
    found = [Beside(f"the edge of {pad} and the seam of {header}", gap(outer), (*marks, header))]
    if ends:
        joints = f"the joint of the halves of {pad} and the seam of"
        to_branch = min(_distance(inner.start[None], end.polyline(_COARSE)) for end in ends)
        found += [
            Beside(f"{joints} {header}", gap(ends), (*marks, header)),
            Beside(f"{joints} {branch}", to_branch, (*marks, branch)),
        ]
    return tuple(found)


def _right_of(along: Array) -> Array:
    """The unit vector (2,) square to another, to its right: out of an opening that runs anticlockwise."""
    return np.array([along[1], -along[0]])


def _between(arc: float, span: tuple[float, float], whole: float) -> bool:
    """Whether a place lies within a span of the way round, clear of its ends [mm]."""
    past = (arc - span[0]) % whole
    return _CLEAR < past < span[1] - span[0] - _CLEAR


def _check_room(pad: Pad, inner: Curve, sheet: Sheet) -> None:
    """Raises Refusal where the plate would fold over itself or reach past the header's sheet."""
    at = sheet.at_ends
    contour = [Curve(each, 0.0).polyline(_COARSE) for each in edges(sheet)]
    contour += [np.array([at.a[i], at.b[i]]) for i in (0, -1)]
    points = inner.polyline(_COARSE)
    most = min(room(inner), *(_distance(points, line) for line in contour))
    most += _CLEAR
    if pad.width + _CLEAR_EDGE <= most:
        return
    allowed = int(most - _CLEAR_EDGE)
    raise Refusal(
        field="pad",
        given=f"{number_text(pad.width)} mm reaches past an end or the seam of the header, or into itself",
        allowed=f"{allowed} mm or less" if allowed > 0 else "no compensation plate there",
    )


def _check_tell_tale(pad: Pad, centre: Array, net: Outline, openings: list[Outline]) -> None:
    """Raises Refusal where the hole would reach an edge of its part."""
    curves = [curve for outline in (net, *openings) for _, curve in outline.curves]
    reach = min(_distance(centre[None], curve.polyline(_CLEAR)) for curve in curves)
    # Chords lie a little inside.
    most = floor((2.0 * (reach - _CLEAR_EDGE + _CLEAR) + _CLEAR) * 10.0) / 10.0
    if pad.tell_tale <= most:
        return
    raise Refusal(
        field="tell_tale",
        given=f"{number_text(pad.tell_tale)} mm has no room in a plate {number_text(pad.width)} mm wide",
        allowed=f"{number_text(most)} mm or less, or 0 for none" if most > 0.0 else "0 for none",
    )


def _distance(points: Array, line: Array) -> float:
    """Least distance [mm] of points (n, 2) from a polyline (m, 2)."""
    start, along = line[:-1], np.diff(line, axis=0)
    square = np.maximum((along * along).sum(axis=1), 1e-300)
    gap = points[:, None] - start
    share = np.clip((gap * along).sum(axis=-1) / square, 0.0, 1.0)
    gap = gap - share[..., None] * along
    return float(np.hypot(gap[..., 0], gap[..., 1]).min())


def _outer(inner: Curve, stretched: Curve, span: tuple[float, float], width: float) -> Curve:
    """The parallel of a stretch of the opening, with half the arc about a corner at either end of it."""
    outer = parallel(stretched, width)
    parts = [outer]
    for k, way in enumerate(span):
        round_ = stretch(inner, way, way + inner.length).pieces
        (turn,) = 0.5 * turns_of(round_[[-1, 0]])
        if turn < _KINK:
            continue
        if k:
            parts.append(arc_about(stretched.end, outer.end, turn))
        else:
            arm = outer.start - stretched.start
            c, s = np.cos(-turn), np.sin(-turn)
            start = stretched.start + np.array([c * arm[0] - s * arm[1], s * arm[0] + c * arm[1]])
            parts.insert(0, arc_about(stretched.start, start, turn))
    return joined(parts)


def _half(stretched: Curve, outer: Curve) -> Outline:
    """The contour of a half between two ends square to the opening."""
    back = stretched.reversed()
    end_2, end_1 = segment(outer.end, back.start), segment(back.end, outer.start)
    curves = (("outer", outer), ("end_2", end_2), ("inner", back), ("end_1", end_1))
    return Outline(curves, area_of([curve for _, curve in curves]))


def _places(stretched: Curve, width: float) -> Array:
    """Lines from the opening to the outer edge that words may stand on, the middle ones first."""
    shares = (np.arange(_PLACES) + 0.5) / _PLACES
    order = np.argsort(np.abs(shares - 0.5), kind="stable")
    found = []
    for share in shares[order]:
        at, along = point_at(stretched, place_at(stretched, float(share) * stretched.length))
        found.append((at, at + width * _right_of(along)))
    return np.array(found)


def _strips(pattern: Pattern, lines: Lines) -> tuple[int, int]:
    """The first and the last of the strips between the header's lines that the plate lies on."""
    points = np.vstack([curve.polyline(_COARSE) for _, curve in pattern.net.curves])
    along = (lines.b - lines.a) / lines.length[:, None]
    gap = points[:, None] - lines.a
    strips = (along[:, 1] * gap[..., 0] - along[:, 0] * gap[..., 1] > 0.0).sum(axis=1)
    return int(strips.min()), int(strips.max())


def _bent(pattern: Pattern, lines: Lines) -> bool:
    """Whether the header's face turns anywhere under the plate."""
    first, last = _strips(pattern, lines)
    turned = lines.turn[min(last, len(lines.turn) - 1)] - lines.turn[max(first - 1, 0)]
    return bool(turned > _FLAT)


def _roll_lines(pattern: Pattern, lines: Lines) -> tuple[RollLine, ...]:
    """Lines of the header over the plate, evenly through its width, without what the opening takes away."""
    curves = [curve for outline in (pattern.net, *pattern.openings[:1]) for _, curve in outline.curves]
    along = (lines.b - lines.a) / lines.length[:, None]
    first, last = _strips(pattern, lines)
    picked = np.unique(np.linspace(first, last - 1, _ROLL_LINES + 2).astype(int))
    found = []
    turned = None
    for i in picked:
        reach = sorted(
            float((point_at(curve, place)[0] - lines.a[i]) @ along[i])
            for curve in curves
            for place in crossings_of(curve, lines.a[i], along[i])
        )
        for low, high in zip(reach[::2], reach[1::2], strict=False):
            if high - low < _SCRAP:
                continue
            shares = np.array([low, high]) / lines.length[i]
            radii = lines.radius_a[i] + shares * (lines.radius_b[i] - lines.radius_a[i])
            turn = 0.0 if turned is None else float(lines.turn[i] - turned)
            turned = lines.turn[i]
            found.append(
                RollLine(
                    lines.a[i] + low * along[i],
                    lines.a[i] + high * along[i],
                    turn,
                    (float(radii[0]), float(radii[1])),
                )
            )
    return tuple(found)
