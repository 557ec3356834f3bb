"""From a sheet laid flat to the pattern: edges, lines, divisions, witness marks, words."""

from __future__ import annotations

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass, fields, replace
from math import pi

import numpy as np

from develop.errors import Refusal
from develop.pattern.allowance import Allowance, allowed
from develop.pattern.chain import crossings_of, place_at, point_at
from develop.pattern.curve import Array, Curve, segment
from develop.pattern.parallel import parallel
from develop.pattern.pattern import (
    Division,
    Figures,
    Outline,
    Pattern,
    RollLine,
    Rulings,
    Wall,
    WitnessMark,
)
from develop.pieces.cutting import Cutting
from develop.pieces.flat import holes_at
from develop.pieces.press import Press, PressLines, press_lines
from develop.pieces.wording import lines_of, size_words
from develop.sections.section import Section
from develop.surfaces.edges import TOLERANCE, edges
from develop.surfaces.part import SheetPart
from develop.surfaces.sheet import Lines, Place, Sheet

__all__ = ["Hole", "Share", "Wording", "dense", "pattern_of", "seam_parameter"]

_FOLD_MISS = 2.4e-3
# So close [mm] to the edges that the tangents of their parallels are good.
_FINE = 1e-6
_MOST_CHANGE = 6.0
_WORDS = ("RIGHT", "TOP", "LEFT", "BOTTOM")
_DIRECTIONS: Array = 0.5 * pi * np.arange(4.0)
_ORDER = ("a", "seam_right", "b", "seam_left")
_FLIP = np.array([-1.0, 1.0])
# A mark nearer to the seam than this, in parts of the girth, lies on it and is made on both sides.
_ON_SEAM = 1e-7
_TIE = 1e-9


@dataclass(frozen=True)
class Wording:
    """What the pattern says and how it lies.

    lines_as: how roll and press lines are marked, as the pattern has it; or `auto`: press lines full, roll
    lines as ticks. units: of the figures on the sheets, `mm` or `in`.
    """

    mark: str
    kind: str
    quantity: int
    face: str
    facts: tuple[str, ...]
    datum: str
    flow: str
    lines_as: str
    units: str = "mm"
    seam_words: tuple[str, str] = ("SEAM", "SEAM")
    wall: Wall | None = None


@dataclass(frozen=True)
class Hole:
    """An opening in a sheet: a closed chain anticlockwise, controls (3 n + 1, 2), with its exact length
    [mm] and area [mm²], and marks on it: points (k, 2), unit tangents (k, 2), running lengths (k,) [mm]
    and texts."""

    controls: Array
    length: float
    area: float
    points: Array
    tangents: Array
    arcs: Array
    texts: tuple[str, ...]


@dataclass(frozen=True)
class Share:
    """How a part of a sheet stands among the others.

    parts: how many there are. first: number of its first line, as drawn. divisions: of its own stretch of
    end A. beside: the parts left and right of it, outside up.
    """

    parts: int
    first: int
    divisions: int
    beside: tuple[SheetPart, SheetPart]


def seam_parameter(section: Section, length_at: Callable[[Array], Array], wanted: float | str) -> float:
    """Parameter of end A's section at which the seam runs.

    wanted: a direction [rad] or `shortest`, the whole degree at which the side is shortest; of
        equal ones the nearest to the bottom, then the one more to the right.
    length_at: length of the ruling at the section's parameters (n,).
    """
    if not isinstance(wanted, str):
        return float(section.at_direction(np.array([wanted]))[0])
    degrees = np.arange(360)
    lengths = length_at(section.at_direction(np.radians(degrees)))
    short = degrees[lengths <= np.min(lengths) * (1.0 + _TIE)]
    from_bottom = np.abs((short - 270 + 180) % 360 - 180)
    # Right of the bottom the direction, counted from it, is below 180.
    index = np.lexsort(((short - 270) % 360, from_bottom))[0]
    return float(section.at_direction(np.radians(short[[index]]))[0])


def pattern_of(
    sheet: Sheet,
    section_a: Section,
    section_b: Section | None,
    *,
    wording: Wording,
    divisions: int,
    distance: float,
    turn_b: float = 0.0,
    cutting: Cutting | None = None,
    holes: Sequence[Hole] = (),
    press: Press | None = None,
    share: Share | None = None,
) -> Pattern:
    """The pattern of a sheet.

    section_b: None where end B is a cut of the side, so that its marks lie on the lines of end A's.
    divisions: equal arcs of end A. distance: of the sheet outside the given surface [mm].
    turn_b: how far end B's section is turned in the piece frame [rad]. cutting: what is cut beyond the
    net line.
    holes: openings in the sheet, in the sheet's own coordinates. press: bent on a press brake, not
    rolled: the lines and the divisions are then the press lines. share: of a sheet that is a part of one.
    """
    moved = section_a.offset(distance)
    ends = sheet.ends
    divisions = divisions if share is None else share.divisions
    text_a, at_a = _directions(sheet, section_a.at_direction(_DIRECTIONS), "a")
    text_b, at_b = (
        _directions(sheet, section_b.at_direction(_DIRECTIONS - turn_b), "b") if section_b else (text_a, at_a)
    )
    # Every ruling that is asked for, in one walk.
    wanted = [_divided(sheet, moved, divisions), at_a, at_b, ends[np.array([0, -1])]]
    # Among the dense lines are all that are drawn or marked, so that the closing check folds these too.
    bends = press_lines(sheet, section_a, press) if press else None
    drawn = wanted if bends is None else [*wanted, bends.place]
    wanted.append(_merged([dense(sheet, parts=1 if share is None else share.parts), *drawn]))
    if bends is not None:
        wanted.append(bends.place)
    counts = np.cumsum([0, *(len(place.x) for place in wanted)])
    found = sheet.lines(
        Place(np.concatenate([w.panel for w in wanted]), np.concatenate([w.x for w in wanted]))
    )
    first, last = int(counts[3]), int(counts[3]) + 1

    bare = Outline(_outline(sheet), sheet.area)
    added = cutting or Cutting()
    # Only the parallels of the ends need them drawn more closely.
    edges_of: set[str] = {*added.allowances, *(e[0] for e in added.folds), *(e[0] for e in added.inner)}
    finer = bool(edges_of & {"a", "b"})
    close_by = _outline(sheet, tolerance=_FINE) if finer else bare.curves
    beside = None
    if share is not None and added.allowances:
        left, right = (_outline(each, tolerance=_FINE if finer else TOLERANCE) for each in share.beside)
        beside = left, right
    try:
        whole = allowed(bare, close_by, added.allowances, beside=beside)
    except Refusal as refusal:
        (problem,) = refusal.problems
        raise Refusal(field=_asked_by(added), given=problem.given, allowed=problem.allowed) from None
    view = _View.of(whole.curves, found.take([last]), mirror=wording.face == "inside")
    net = Outline(view.contour(bare.curves), bare.area)
    cut = net if whole is bare else Outline(view.contour(whole.curves), whole.area)
    rows_at = view.lines(found.take([*range(divisions), last]))
    close = view.lines(found.take(range(counts[4], counts[5])))
    lines = _roll_lines(rows_at)
    if bends is not None:
        # The lines to mark out are then the seams and the press lines.
        rows_at = view.lines(found.take([first, *range(counts[5], counts[6]), last]))
        lines = _bent_lines(rows_at, bends, mirror=view.mirror)
    number = 0 if share is None else share.first
    rows = _divisions(rows_at, section_a, number)
    # A part has the marks on its two seams already.
    seams = (first, last) if share is None else None
    marks = [
        mark
        for i, (edge, whole, texts) in enumerate((("a", sheet.edge_a, text_a), ("b", sheet.edge_b, text_b)))
        if net.curve(edge) is not None
        for mark in _witness(found, range(counts[i + 1], counts[i + 2]), seams, view, edge, whole, texts)
    ]
    marks += [mark for hole in holes for mark in view.hole_marks(hole)]
    more = (*(bends.facts(mirror=view.mirror) if bends else ()), *added.facts)
    more += tuple(line for each in added.warnings for line in lines_of(f"CAUTION: {each}"))
    return Pattern(
        mark=wording.mark,
        kind=wording.kind,
        quantity=wording.quantity,
        face=wording.face,
        net=net,
        cut=cut,
        openings=tuple(view.hole(hole) for hole in holes),
        lines=lines,
        divisions=rows,
        marks=tuple(marks),
        facts=(*wording.facts[:-1], *more, *wording.facts[-1:]),
        datum=wording.datum,
        lines_as=_lines_as(wording.lines_as, bent=bends is not None),
        rulings=Rulings(
            close.a,
            close.b,
            np.diff(close.turn, prepend=close.turn[0]),
            close.u_a,
            distance,
            np.stack([close.radius_a, close.radius_b], axis=-1),
        ),
        flow=wording.flow,
        figures=(
            *(() if bends is None else (bends.figures(mirror=view.mirror, first=number + 1),)),
            *view.tab_cuts(dict(close_by), added.allowances, wording.units),
        ),
        units=wording.units,
        seam_words=wording.seam_words,
        folds=view.curves([_beside(dict(close_by), name, out, whole) for name, out in added.folds]),
        dashed=view.curves([_beside(dict(close_by), name, -far, whole) for name, far, _ in added.inner]),
        lap_words=added.words[::-1] if view.mirror else added.words,
        added=added.added,
        wall=wording.wall,
        warnings=added.warnings,
        punched=view.punched(dict(close_by), added),
    )


def _asked_by(added: Cutting) -> str:
    """The field that asks for what is cut beside an end: a gap, where nothing is added there."""
    for name in "ab":
        allowance = added.allowances.get(name)
        if allowance is not None and allowance.width > 0.0:
            return f"edge_{name}"
    return "gap"


def _beside(contour: dict[str, Curve], name: str, out: float, cut: Outline) -> Curve:
    """The parallel of an edge, so far outside of its net line [mm]; of a seam, as far as the cut line."""
    line = parallel(contour[name], out)
    if not line.straight:
        return line
    along = (line.end - line.start) / line.length
    met = [
        point_at(curve, place)[0]
        for each, curve in cut.curves
        if not each.startswith("seam")
        for place in crossings_of(curve, line.start, along)
    ]
    ends = []
    for end in (line.start, line.end):
        away = [float(np.hypot(*(point - end))) for point in met]
        nearest = met[int(np.argmin(away))] if met else end
        # At an apex there is no edge to end at.
        ends.append(nearest if np.hypot(*(nearest - end)) < 4.0 * abs(out) + 1.0 else end)
    return segment(ends[0], ends[1])


def dense(sheet: Sheet, *, parts: int = 1) -> Place:
    """Rulings so close that flat strips between them miss the rolled sheet by `_FOLD_MISS` at most.

    parts: how many sheets like this one share that.

    n strips of a panel with arc s and turn t come s t² / (24 n²) too long for the bent sheet; where
    the curvature changes by e^v over the panel, their mid planes are also out by s t v / (12 n²).
    Where they fan out by an angle f in the flat, the strips' bends are out by t f² / (24 n²).
    The miss is shared out so that the fewest strips do (n as the cube root of a panel's part).
    """
    ends, at = sheet.ends, sheet.at_ends
    # Between lines of a flat these may be less than none by their rounding.
    turn = np.maximum(np.diff(at.turn), 0.0)
    arc = np.maximum(np.maximum(np.diff(at.arc_a), np.diff(at.arc_b)), 0.0)
    bend = np.log(np.clip(at.radius_a, 1e-9, 1e12))
    change = np.minimum(np.abs(np.diff(bend)), _MOST_CHANGE)
    leg = at.b - at.a
    fan = np.diff(np.unwrap(np.arctan2(leg[:, 1], leg[:, 0])))
    reach = max(float(np.max(at.length)), float(np.sum(arc)) / pi)
    part = np.cbrt((arc * turn * (turn + 2.0 * change) + reach * turn * fan * fan) / 24.0)
    counts = np.maximum(np.ceil(part * np.sqrt(np.sum(part) / (_FOLD_MISS / parts))), 1).astype(int)
    owner = np.repeat(np.arange(len(counts)), counts)
    first = np.repeat(np.cumsum(counts) - counts, counts)
    x = 2.0 * (np.arange(len(owner)) - first) / counts[owner] - 1.0
    return Place(np.append(ends.panel[:-1][owner], ends.panel[-1]), np.append(x, ends.x[-1]))


def _merged(places: Sequence[Place]) -> Place:
    """All the places from left to right, each once; the two seams stay as they are."""
    panel = np.concatenate([each.panel for each in places])
    x = np.concatenate([each.x for each in places])
    order = np.lexsort((x, panel))
    panel, x = panel[order], x[order]
    along = panel + 0.5 * (x + 1.0)
    keep = np.diff(along, prepend=-1.0) > _ON_SEAM
    keep &= along < along[-1] - _ON_SEAM
    keep[-1] = True
    return Place(panel[keep], x[keep])


def _roll_lines(at: Lines) -> tuple[RollLine, ...]:
    turns = np.diff(at.turn, prepend=at.turn[0])
    return tuple(
        RollLine(at.a[i], at.b[i], float(turns[i]), (float(at.radius_a[i]), float(at.radius_b[i])))
        for i in range(len(turns))
    )


def _bent_lines(at: Lines, bends: PressLines, *, mirror: bool) -> tuple[RollLine, ...]:
    """The press lines among the rows, the first and last of which are seams."""
    step = -1 if mirror else 1
    found = []
    for i, (angle, short) in enumerate(zip(bends.angle[::step], bends.short[::step], strict=True), start=1):
        along = (at.b[i] - at.a[i]) / at.length[i]
        radius = (float(at.radius_a[i]), float(at.radius_b[i]))
        start, end = at.a[i] + short[0] * along, at.b[i] - short[1] * along
        found.append(RollLine(start, end, float(angle), radius, press=True))
    return tuple(found)


def _directions(sheet: Sheet, u: Array, end: str) -> tuple[list[str], Place]:
    """The rulings through the points u (4,) of an end's section that have a word, and the words."""
    if isinstance(sheet, SheetPart):
        which, place = sheet.found(sheet.whole.from_a(u) if end == "a" else sheet.whole.from_b(u))
        return [_WORDS[i] for i in which], place
    return list(_WORDS), sheet.from_a(u) if end == "a" else sheet.from_b(u)


def _divided(sheet: Sheet, section: Section, divisions: int) -> Place:
    """The rulings at equal arcs of the section of end A, from the left seam on but for the right one."""
    steps = np.arange(divisions) / divisions
    start, stop = sheet.at_ends.u_a[[0]], sheet.at_ends.u_a[[-1]]
    if not isinstance(sheet, SheetPart):
        return sheet.from_a(section.at_arc(section.arc(start) + steps * section.girth))
    first = section.arc(start)
    inner = sheet.from_a(section.at_arc(first + steps[1:] * ((section.arc(stop) - first) % section.girth)))
    return Place(np.append(0, inner.panel), np.append(-1.0, inner.x))


def _divisions(at: Lines, section: Section, first: int) -> tuple[Division, ...]:
    directions = section.direction(at.u_a)
    return tuple(
        Division(
            number=first + i,
            direction=float(directions[i]),
            arc_a=float(at.arc_a[i]),
            arc_b=float(at.arc_b[i]),
            a=at.a[i],
            b=at.b[i],
            length=float(at.length[i]),
        )
        for i in range(len(at.length))
    )


def _witness(
    found: Lines,
    which: Sequence[int],
    seams: tuple[int, int] | None,
    view: _View,
    edge: str,
    whole: float,
    words: Sequence[str],
) -> list[WitnessMark]:
    """Marks at right, top, left and bottom of one edge; one on the seam is made on both its sides.

    which: the rulings of the marks among those found; words: of the marks. seams: the rulings of the left
    and right seam, None for a part, whose own seams are not one line.
    """
    arcs = getattr(found, f"arc_{edge}")
    rows: list[int] = []
    texts: list[str] = []
    for i, text in zip(which, words, strict=True):
        on_seam = seams is not None and min(arcs[i], whole - arcs[i]) <= _ON_SEAM * whole
        places = seams if seams is not None and on_seam else (i,)
        rows += places
        texts += [text] * len(places)
    if not rows:
        return []
    order = rows[::-1] if view.mirror else rows
    at = view.lines(found.take(order))
    points, tangents, arcs = (at.a, at.tangent_a, at.arc_a) if edge == "a" else (at.b, at.tangent_b, at.arc_b)
    side = 1.0 if edge == "a" else -1.0
    inward = side * np.stack([-tangents[:, 1], tangents[:, 0]], axis=-1)
    return [WitnessMark(points[i], inward[i], texts[i], edge, float(arcs[i])) for i in range(len(texts))]


def _outline(sheet: Sheet, *, tolerance: float = TOLERANCE) -> tuple[tuple[str, Curve], ...]:
    """The sheet's contour, anticlockwise, as named curves within a tolerance [mm]."""
    controls_a, controls_b = edges(sheet, tolerance=tolerance)
    a, b = Curve(controls_a, sheet.edge_a), Curve(controls_b, sheet.edge_b)
    # At an apex both seams end in one point.
    right = b.start if sheet.edge_b == 0.0 else b.end
    curves = [
        ("a", a),
        ("seam_right", segment(a.end, right)),
        ("b", b.reversed()),
        ("seam_left", segment(b.start, a.start)),
    ]
    return tuple((name, curve) for name, curve in curves if not _no_more_than_a_point(curve))


def _lines_as(wanted: str, *, bent: bool) -> str:
    if wanted != "auto":
        return wanted
    return "full" if bent else "ticks"


def _no_more_than_a_point(curve: Curve) -> bool:
    return curve.length == 0.0 or float(np.ptp(curve.controls, axis=0).max()) < 1e-9


@dataclass(frozen=True)
class _View:
    """How the sheet is put on paper: mirrored when its inside is up, then shifted to the datum lines.

    finish: the last ruling, whose running lengths are the whole ones.
    """

    mirror: bool
    shift: Array
    finish: Lines

    @staticmethod
    def of(curves: Sequence[tuple[str, Curve]], finish: Lines, *, mirror: bool) -> _View:
        bounds = np.vstack([curve.bounds() for _, curve in curves])
        if mirror:
            bounds = bounds * _FLIP
        return _View(mirror, -bounds.min(axis=0), finish)

    def contour(self, curves: Sequence[tuple[str, Curve]]) -> tuple[tuple[str, Curve], ...]:
        turn = np.diag(_FLIP) if self.mirror else np.eye(2)
        moved = [(name, curve.moved(turn=turn, shift=self.shift)) for name, curve in curves]
        if not self.mirror:
            return tuple(moved)
        # Mirrored, the contour runs clockwise and its seams have changed sides: walk it back.
        other = {"seam_left": "seam_right", "seam_right": "seam_left"}
        back = {other.get(name, name): curve.reversed() for name, curve in moved}
        return tuple((name, back[name]) for name in _ORDER if name in back)

    def curves(self, curves: Sequence[Curve]) -> tuple[Curve, ...]:
        """Curves on the sheet."""
        turn = np.diag(_FLIP) if self.mirror else np.eye(2)
        return tuple(curve.moved(turn=turn, shift=self.shift) for curve in curves)

    def tab_cuts(
        self, contour: Mapping[str, Curve], allowances: Mapping[str, Allowance], units: str
    ) -> tuple[Figures, ...]:
        """Where each end that is folded in tabs is cut in, from line 0 on, to be marked out by tape."""
        found = []
        flip = _FLIP if self.mirror else np.ones(2)
        for name, each in allowances.items():
            if not each.tabs:
                continue
            edge = contour[name]
            # The contour runs from the left seam along end A, and back along end B.
            back = (name == "b") is not self.mirror
            rows = []
            for share in each.tabs:
                at, along = point_at(edge, place_at(edge, share * edge.length))
                out = at + each.width * np.array([along[1], -along[0]])
                running = (1.0 - share if back else share) * edge.length
                rows.append((running, *(at * flip + self.shift), *(out * flip + self.shift)))
            end = f"END {name.upper()}"
            stop = f"{size_words(each.stop, units)} short of the net line" if each.stop else "the net line"
            heads = (("cut", "no."), ("running", f"along {end}"), *(
                (place, axis) for place in ("net line", "outer edge") for axis in "xy"
            ))  # fmt: skip
            numbered: list[tuple[str | float, ...]] = [
                (str(n), *map(float, row)) for n, row in enumerate(sorted(rows), 1)
            ]
            found.append(Figures(f"Cuts between the tabs at {end}, as far as {stop}", heads, tuple(numbered)))
        return tuple(found)

    def punched(self, contour: dict[str, Curve], added: Cutting) -> tuple[Outline, ...]:
        """The rivet holes in the middle of the tabs along the edges."""
        found: list[Outline] = []
        for name, diameter in added.rivets:
            allowance, curve = added.allowances[name], contour[name]
            shares = np.array([0.0, *allowance.tabs, 1.0])
            centres = []
            for share in (shares[1:] + shares[:-1]) / 2.0:
                at, along = point_at(curve, place_at(curve, float(share) * curve.length))
                centres.append(at + 0.5 * allowance.width * np.array([along[1], -along[0]]))
            flip = _FLIP if self.mirror else np.ones(2)
            found += holes_at(np.array(centres) * flip + self.shift, 0.5 * diameter)
        return tuple(found)

    def hole(self, hole: Hole) -> Outline:
        """A hole as a closed contour, anticlockwise."""
        turn = np.diag(_FLIP) if self.mirror else np.eye(2)
        curve = Curve(hole.controls, hole.length).moved(turn=turn, shift=self.shift)
        return Outline((("opening", curve.reversed() if self.mirror else curve),), hole.area)

    def hole_marks(self, hole: Hole) -> list[WitnessMark]:
        """The marks round a hole, pointing into the sheet."""
        flip = _FLIP if self.mirror else np.ones(2)
        outward = np.stack([hole.tangents[:, 1], -hole.tangents[:, 0]], axis=-1) * flip
        points = hole.points * flip + self.shift
        return [
            WitnessMark(points[i], outward[i], text, "opening", float(hole.arcs[i]))
            for i, text in enumerate(hole.texts)
        ]

    def lines(self, lines: Lines) -> Lines:
        if not self.mirror:
            return replace(lines, a=lines.a + self.shift, b=lines.b + self.shift)
        # From left to right again, so every running length counts from the other seam.
        end = self.finish
        back = Lines(*(getattr(lines, each.name)[::-1] for each in fields(Lines)))
        return replace(
            back,
            a=back.a * _FLIP + self.shift,
            b=back.b * _FLIP + self.shift,
            tangent_a=back.tangent_a * -_FLIP,
            tangent_b=back.tangent_b * -_FLIP,
            arc_a=end.arc_a - back.arc_a,
            arc_b=end.arc_b - back.arc_b,
            turn=end.turn - back.turn,
        )
