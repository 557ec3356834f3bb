"""Where the words stand on the sheet.

Every word has a list of places that would do, best first. It takes the first whose box lies
whole inside the outline, off the ticks and witness marks and off the words placed before;
failing all, the next smaller size. Places are found along the sheet (`_Strip`): at a share of
the way along both edges, so that a fan, a slanting cut and a narrow strip need no case each.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass, replace

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.lettering import ASCENT, DESCENT, Boxes, arrow_box, text_height, text_width, upright
from develop.pattern.numbering import Numbers
from develop.pattern.pattern import Division, Label, NumberedHole, Outline, Pattern, RollLine, WitnessMark
from develop.pattern.placing import SMALLEST, Sheet, Word, boxes_at, label_at, left_of, rows_of

__all__ = ["lay_out", "lettered"]

_FLOW = "FLOW"
_TINIEST = 0.02  # [mm]
_AT_ARMS_LENGTH = 4.0  # [mm] height of capitals that are read so; common practice, no source
_LINE = 1.75  # from baseline to baseline over the height of capitals
_MOST_OF_SEAM = 0.6  # share of a seam that a word along it takes, if it is legible so
_SHARES = np.array([0.5, 0.44, 0.56, 0.38, 0.62, 0.31, 0.69, 0.25, 0.75, 0.18, 0.82, 0.12, 0.88])


def lettered(pattern: Pattern) -> Pattern:
    """The pattern with its words, as every drawing of it needs them."""
    rows = pattern.divisions
    across = np.array([(row.a, row.b) for row in rows]) if rows else pattern.places
    middle = across[len(rows) // 2]
    bent = any(line.press for line in pattern.lines)
    if bent:
        # Between press lines the widest flat has the most room.
        between = (across[1:] + across[:-1]) / 2.0
        wide = np.hypot(*np.moveaxis(np.diff(across, axis=0), -1, 0)).sum(axis=1).round(3)
        from_middle = np.abs(np.arange(len(wide)) - (len(wide) - 1) / 2.0)
        middle = between[np.lexsort((from_middle, -wide))[0]]
    seams = across[[0, 0, -1]].copy()
    seams[1] = middle
    parted = [curve for curve in map(pattern.net.curve, ("end_1", "end_2")) if curve is not None]
    if parted:
        seams[0], seams[2] = ((curve.start, curve.end) for curve in parted)
    labels, arrows = lay_out(
        pattern.net,
        pattern.facts,
        left_seam=seams[0],
        mid_line=seams[1],
        right_seam=seams[2],
        flow=pattern.flow,
        marks=pattern.marks,
        lines=pattern.lines,
        divisions=rows,
        lines_as=pattern.lines_as,
        openings=pattern.openings,
        places=None if rows else pattern.places,
        # The line that holes stand on may run behind words; other thin lines are the drawing itself.
        avoid=(*pattern.dashed, *(() if pattern.holes else pattern.thin)),
        arrow=pattern.arrow,
        seam_words=pattern.seam_words if rows else pattern.end_words if parted else ("", ""),
        cut=pattern.cut,
        lap_words=pattern.lap_words,
        holes=pattern.holes,
    )
    return replace(pattern, labels=labels, arrows=arrows)


def lay_out(
    net: Outline,
    facts: Sequence[str],
    *,
    left_seam: Array,
    right_seam: Array,
    mid_line: Array,
    flow: str,
    marks: Sequence[WitnessMark] = (),
    lines: Sequence[RollLine] = (),
    divisions: Sequence[Division] = (),
    avoid: Sequence[Curve] = (),
    seam_words: tuple[str, str] = ("SEAM", "SEAM"),
    lines_as: str = "ticks",
    openings: Sequence[Outline] = (),
    places: Array | None = None,
    arrow: str = _FLOW,
    cut: Outline | None = None,
    lap_words: tuple[str, str] = ("LAP", "LAP"),
    holes: Sequence[NumberedHole] = (),
) -> tuple[tuple[Label, ...], tuple[tuple[Array, str], ...]]:
    """Labels and arrows of a sheet, none over another, over a mark or over the outline.

    net: the outline. facts: lines of text that go together in one block, first the most
    needed. left_seam, right_seam, mid_line: straight lines (2, 2) [mm] from edge a to edge b.
    flow: `a to b`, `b to a`, or empty for none. marks: their words are placed. lines: only
    their ticks or pops are kept clear; full lines are interrupted by whoever draws them. lines_as:
    how they are marked, as the pattern has it. divisions: numbered at the edges where that stays
    clear. avoid: further curves to be kept clear. openings: no word stands in them. places: lines
    (n, 2, 2) [mm] that words may stand on, where there are no divisions. arrow: the word at the
    arrow of the flow. seam_words: along the left and the right seam. cut: what leaves the shear;
    where it goes on beyond a seam, lap_words say what that is. holes: numbered beside each.

    What cannot be placed at a legible size is left out, but for the facts, which shrink on.
    """
    height = text_height(net)
    words = max(SMALLEST, 0.8 * height)
    sheet = Sheet(net, marks, lines, avoid, lines_as, openings)
    # First what has one place: along a short seam the words for its corners can stand farther off.
    sheet.write(_seam_words((left_seam, right_seam), seam_words, words))
    sheet.write(_witness_words(marks, sheet.lengths, height, words))
    fans = any(line.press for line in lines)
    numbers = Numbers(divisions, marks, tick=height, height=max(SMALLEST, 0.5 * height), fans=fans)
    numbers.write_first(sheet)
    sheet.write(_end_words(net, height))
    sheet.write(_hole_numbers(holes, max(SMALLEST, 0.5 * height)))
    if places is not None and not divisions:
        strip = _Strip(places[:, 0], places[:, 1])
    else:
        strip = _Strip.of(net, np.asarray(mid_line, dtype=float), divisions)
    flat = not divisions and places is not None
    block = _facts(sheet, strip, tuple(facts), height, least=_AT_ARMS_LENGTH if flat else _TINIEST)
    if flat and block is None:
        # On a narrow ring the mark is worth more than all the facts too small to be read.
        taken, count = sheet.taken, len(sheet.labels)
        _facts(sheet, strip, tuple(facts[1:]), height, least=sheet.least)
        large = max(height, _AT_ARMS_LENGTH)
        block = _facts(sheet, strip, tuple(facts[:1]), large, least=_AT_ARMS_LENGTH)
        if block is None:
            sheet.taken = taken
            del sheet.labels[count:]
            block = _facts(sheet, strip, tuple(facts[:1]), large)
            _facts(sheet, strip, tuple(facts[1:]), height, least=sheet.least)
    arrows = _flow(sheet, strip, block, flow, height, arrow)
    sheet.write(_press_words(lines, max(SMALLEST, 0.5 * height)))
    numbers.write_others(sheet)
    return tuple(sheet.labels) + _lap_words(net, cut, words, lap_words), arrows


@dataclass(frozen=True)
class _Strip:
    """The sheet as a run of straight lines from edge a to edge b. shares: (n,); a, b: (n, 2) [mm]."""

    a: Array
    b: Array

    @classmethod
    def of(cls, net: Outline, mid_line: Array, divisions: Sequence[Division]) -> _Strip:
        """From the divisions where there are enough, else from equal shares of both edges."""
        if len(divisions) > 4:
            ends = np.array([(row.a, row.b) for row in divisions])
            # Between the lines, where full roll lines leave the most room.
            ends = (ends[1:] + ends[:-1]) / 2.0
            far = np.hypot(*(ends.mean(axis=1) - mid_line.mean(axis=0)).T)
            ends = ends[np.argsort(far, kind="stable")[: len(_SHARES)]]
            return cls(np.vstack([mid_line[:1], ends[:, 0]]), np.vstack([mid_line[1:], ends[:, 1]]))
        edge_a, edge_b = net.curve("a"), net.curve("b")
        if edge_a is None:  # a plain plate: no ends to run between
            return cls(mid_line[:1], mid_line[1:])
        a, _ = _along(edge_a, _SHARES)
        b = np.repeat(mid_line[1:], len(a), axis=0) if edge_b is None else _along(edge_b, 1.0 - _SHARES)[0]
        a[0], b[0] = mid_line
        return cls(a, b)

    @property
    def angle(self) -> Array:
        """Reading direction square to each line, upright, (n,) [rad]."""
        ahead = self.b - self.a
        return np.array([upright(math.atan2(-x, y)) for x, y in ahead])

    def at(self, share: float) -> Array:
        """Points at a share of the way from a to b, (n, 2)."""
        return self.a + share * (self.b - self.a)


def _along(curve: Curve, shares: Array) -> tuple[Array, Array]:
    """Points and unit tangents at shares of a curve's length, (n, 2) each."""
    points = curve.polyline(max(1e-9, curve.length * 1e-4))
    step = np.diff(points, axis=0)
    size = np.hypot(*step.T)
    sums = np.concatenate([[0.0], np.cumsum(size)])
    where = np.clip(shares, 0.0, 1.0) * sums[-1]
    k = np.clip(np.searchsorted(sums, where, side="right") - 1, 0, len(step) - 1)
    tangent = step[k] / size[k, None]
    return points[k] + tangent * (where - sums[k])[:, None], tangent


def _witness_words(marks: Sequence[WitnessMark], lengths: Array, height: float, size: float) -> list[Word]:
    """The word of each witness mark: beyond its inner end, or beside it."""

    def word(mark: WitnessMark, length: float) -> Word:
        aside = np.array([mark.inward[1], -mark.inward[0]])
        angle = upright(math.atan2(aside[1], aside[0]))

        def places(size: float) -> tuple[Array, Array]:
            tall, beside = size * (ASCENT + DESCENT) / 2.0, text_width(mark.text, size) / 2.0 + 0.5 * size
            # A corner's word stands in one row with the others, beyond the ticks and their numbers.
            beyond = (length or 2.0 * height) + 0.4 * size + tall
            deeper = height + 0.4 * size + tall
            farther = beside + 2.0 * size  # clear of a word along the seam
            on = np.array(
                [(x, y) for y in (beyond, deeper) for x in (0.0, beside, -beside, farther, -farther)]
            )
            return mark.at + on[:, :1] * aside + on[:, 1:] * mark.inward, np.full(len(on), angle)

        return Word(mark.text, size, places)

    return [word(mark, float(length)) for mark, length in zip(marks, lengths, strict=True)]


def _end_words(net: Outline, height: float) -> list[Word]:
    """END A and END B, along their edges."""

    def word(text: str, curve: Curve, shares: Array) -> Word:
        points, tangent = _along(curve, shares)
        inward = left_of(tangent)  # the outline runs anticlockwise
        angle = np.array([upright(math.atan2(y, x)) for x, y in tangent])

        def places(size: float) -> tuple[Array, Array]:
            tall = size * (ASCENT + DESCENT) / 2.0
            depths = (height + 1.2 * size + tall, 0.5 * size + tall, 2.6 * height + size + tall)
            return np.vstack([points + inward * depth for depth in depths]), np.tile(angle, len(depths))

        return Word(text, height, places)

    # Edge b runs from right to left; so both words come to stand on the same side of the middle.
    ends = (("END A", net.curve("a"), _SHARES), ("END B", net.curve("b"), 1.0 - _SHARES))
    return [word(text, curve, shares) for text, curve, shares in ends if curve is not None]


def _hole_numbers(holes: Sequence[NumberedHole], size: float) -> list[Word]:
    """The number of each hole, beside it."""

    def word(hole: NumberedHole) -> Word:
        out, along = hole.outward, np.array([hole.outward[1], -hole.outward[0]])
        text = str(hole.number)

        def places(size: float) -> tuple[Array, Array]:
            tall, wide = size * (ASCENT + DESCENT) / 2.0, text_width(text, size) / 2.0
            off, beside = hole.radius + 0.5 * size + tall, hole.radius + 0.5 * size + wide
            on = [s * off * out for s in (1.0, -1.0)]
            on += [s * beside * along + t * tall * out for s in (1.0, -1.0) for t in (1.5, -1.5, 0.0)]
            return hole.centre + np.array(on), np.full(len(on), upright(math.atan2(along[1], along[0])))

        return Word(text, size, places)

    return [word(hole) for hole in holes]


def _facts(
    sheet: Sheet, strip: _Strip, facts: tuple[str, ...], height: float, *, least: float = _TINIEST
) -> Boxes | None:
    """The block of facts, in text of `least` [mm] or more; returns its box."""
    if not facts:
        return None
    square = strip.angle
    lengthwise = np.array([upright(math.atan2(y, x)) for x, y in strip.b - strip.a])
    centres = np.vstack([strip.at(share) for share in (0.5, 0.4, 0.6)])
    # Share of the height wanted, and whether the lines run along the roll lines; the other
    # way of reading is worth a loss of a third in height, not less.
    steps = [(1.0, 0), (0.8, 0), (0.65, 0), (1.0, 1), (0.8, 1), (0.5, 0), (0.65, 1), (0.4, 0), (0.5, 1)]
    while steps[-1][0] * height > _TINIEST:
        steps += [(0.8 * share, way) for share, way in steps[-2:]]
    steps = [step for step in steps if step[0] * height >= least]
    for share, way in steps:
        size = share * height
        for lines in _wrapped(facts, narrow=share > 0.6):
            wide, tall = _block_size(lines, size)
            angles = np.tile((square, lengthwise)[way], 3)
            boxes = boxes_at(centres, angles, width=wide, height=tall)
            good = np.flatnonzero(sheet.free(boxes, 0.4 * size))
            if len(good):
                best = rows_of(boxes, good[:1])
                sheet.take(best)
                centre, angle = best.centre[0], float(angles[good[0]])
                up = np.array([-math.sin(angle), math.cos(angle)])
                top = tall / 2.0 - size * (ASCENT + DESCENT) / 2.0
                for n, line in enumerate(lines):
                    sheet.labels.append(label_at(line, centre + up * (top - n * _LINE * size), angle, size))
                return best
    return None


def _block_size(lines: tuple[str, ...], size: float) -> tuple[float, float]:
    wide = max(text_width(line, size) for line in lines)
    return wide, size * ((len(lines) - 1) * _LINE + ASCENT + DESCENT)


def _wrapped(facts: tuple[str, ...], *, narrow: bool) -> list[tuple[str, ...]]:
    """The facts a line each, then two a line, and if not `narrow` also more."""
    ways = []
    for each in (1, 2) if narrow else (1, 2, 3, len(facts)):
        lines = tuple("  ·  ".join(facts[n : n + each]) for n in range(0, len(facts), each))
        if lines not in ways:
            ways.append(lines)
    return ways


def _flow(
    sheet: Sheet, strip: _Strip, block: Boxes | None, flow: str, height: float, word: str
) -> tuple[tuple[Array, str], ...]:
    """The arrow of the flow: beside the block of facts, else where there is room."""
    if not flow:
        return ()
    centre, ahead = strip.at(0.5), strip.b - strip.a
    length = np.hypot(*ahead.T)
    centre, ahead = centre[length > 0.0], ahead[length > 0.0] / length[length > 0.0, None]
    if block is not None:
        # Beside the block the roll lines still run as they do at the nearest place of the strip.
        near = int(np.argmin(np.hypot(*(centre - block.centre[0]).T)))
        across = np.array([ahead[near, 1], -ahead[near, 0]])
        lengthwise = abs(float(block.along[0] @ ahead[near])) > 0.7
        side = block.half[0, 1 if lengthwise else 0] + 2.5 * height
        centre = np.vstack([block.centre[0] + across * side, block.centre[0] - across * side, centre])
        ahead = np.vstack([ahead[[near, near]], ahead])
    for share in (1.0, 0.7, 0.5, 0.35):
        size = 5.0 * height * share
        if size < 2.5 * SMALLEST:
            break
        tips = np.stack([centre - ahead * 0.33 * size, centre + ahead * 0.67 * size], axis=1)
        if flow == "b to a":
            tips = np.stack([centre + ahead * 0.33 * size, centre - ahead * 0.67 * size], axis=1)
        each = [arrow_box(arrow, word) for arrow in tips]
        boxes = Boxes(*(np.vstack(part) for part in zip(*each, strict=True)))
        good = np.flatnonzero(sheet.free(boxes, 0.08 * size))
        if len(good):
            sheet.take(rows_of(boxes, good[:1]))
            return ((tips[good[0]], word),)
    return ()


def _seam_words(seams: tuple[Array, Array], texts: tuple[str, str], height: float) -> list[Word]:
    """The words along both seams, just inside."""
    shares = np.array([0.5, 0.4, 0.6, 0.3, 0.7, 0.2, 0.8])[:, None]

    def word(text: str, start: Array, end: Array) -> Word:
        length = float(np.hypot(*(end - start)))
        ahead = (end - start) / length
        aside, angle = np.array([-ahead[1], ahead[0]]), upright(math.atan2(ahead[1], ahead[0]))
        on = start + shares * (end - start)

        def places(size: float) -> tuple[Array, Array]:
            off = aside * size * (0.6 + (ASCENT + DESCENT) / 2.0)
            return np.vstack([on - off, on + off]), np.full(2 * len(on), angle)  # one side is outside

        # Much longer, it would take the place of what belongs into the corners.
        fitting = _MOST_OF_SEAM * length / text_width(text, 1.0)
        return Word(text, min(height, max(SMALLEST, fitting)), places)

    lines = [np.asarray(seam, dtype=float) for seam in seams]
    return [
        word(text, *line)
        for text, line in zip(texts, lines, strict=True)
        if text and np.ptp(line, axis=0).any()
    ]


def _press_words(lines: Sequence[RollLine], height: float) -> list[Word]:
    """The angle of each press line, on the line."""

    def word(line: RollLine) -> Word:
        ahead = line.end - line.start
        angle = upright(math.atan2(ahead[1], ahead[0]))
        on = line.start + np.array([0.62, 0.7, 0.55, 0.78, 0.48])[:, None] * ahead

        def places(size: float) -> tuple[Array, Array]:
            return on, np.full(len(on), angle)

        return Word(f"{math.degrees(line.turn):.1f}°", height, places)

    return [word(line) for line in lines if line.press]


def _lap_words(net: Outline, cut: Outline | None, height: float, said: tuple[str, str]) -> tuple[Label, ...]:
    """What the allowance is, along the middle of what is cut beyond each seam."""
    labels: list[Label] = []
    for side, text in zip(("seam_left", "seam_right"), said, strict=True):
        inner, outer = net.curve(side), cut.curve(side) if cut else None
        if inner is None or outer is None:
            continue
        corners = [inner.start, inner.end, outer.end, outer.start]
        wide = float(np.hypot(*(outer.start + outer.end - inner.start - inner.end))) / 2.0
        size = min(height, 0.4 * wide)
        if size < 1.0:  # nothing that could be read
            continue
        steps = zip(corners, [*corners[1:], corners[0]], strict=True)
        lap = Outline(tuple((str(n), segment(*ends)) for n, ends in enumerate(steps)), wide * wide)
        start, end = (inner.start + outer.start) / 2.0, (inner.end + outer.end) / 2.0
        angle = upright(math.atan2(end[1] - start[1], end[0] - start[0]))
        on = start + np.array([[0.5], [0.4], [0.6], [0.3], [0.7]]) * (end - start)
        strip = Sheet(lap, (), (), (), "ticks")
        strip.write([Word(text, size, lambda _, on=on, angle=angle: (on, np.full(len(on), angle)))])  # type: ignore[misc]
        labels += strip.labels
    return tuple(labels)
