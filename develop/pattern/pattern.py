"""The pattern: everything that is marked on the sheet, as frozen values, and nothing of how it was found.

The flat lies with END A at the bottom; x runs to the right, y up, and no coordinate is
negative: the two lines x = 0 and y = 0 are the datum lines that a tape is laid from.
"""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import Protocol

import numpy as np

from develop.pattern.curve import Array, Curve

__all__ = [
    "Addition",
    "Division",
    "Figures",
    "Forming",
    "Label",
    "NumberedHole",
    "Outline",
    "Pattern",
    "RollLine",
    "Rulings",
    "Wall",
    "WitnessMark",
]


@dataclass(frozen=True)
class Outline:
    """One closed contour, anticlockwise, as named curves head to tail.

    curves: (name, curve) pairs; for a tapered or straight side `a` (left to right),
        `seam_right` (up), `b` (right to left; left out when it is a point), `seam_left` (down).
    area: the exact area inside [mm²], openings not taken off.
    """

    curves: tuple[tuple[str, Curve], ...]
    area: float

    def curve(self, name: str) -> Curve | None:
        """The curve of that name, or None."""
        return next((curve for each, curve in self.curves if each == name), None)


@dataclass(frozen=True)
class RollLine:
    """A straight line that the sheet is rolled along, from edge A to edge B.

    start, end: (2,) [mm]. turn: of the sheet from the line before [rad].
    radius: roll radius where the line meets edge A and edge B [mm], inf where flat.
    press: the line is a press line, bent by `turn` at once; it may stop short of the edges.
    """

    start: Array
    end: Array
    turn: float
    radius: tuple[float, float]
    press: bool = False


@dataclass(frozen=True)
class Division:
    """One row of the divisions table: equal arcs of end A, from the left seam to the right.

    direction: of the point on end A, seen from its centre, facing end B [rad].
    arc_a, arc_b: running lengths along the two edges from the left seam [mm].
    a, b: the line's ends (2,) [mm]. length: of the line [mm], the ordinate or true length.
    """

    number: int
    direction: float
    arc_a: float
    arc_b: float
    a: Array
    b: Array
    length: float


@dataclass(frozen=True)
class WitnessMark:
    """A short mark square to an edge that must meet the same mark of the neighbour.

    at: on the edge (2,) [mm]. inward: unit vector into the sheet (2,).
    text: what it marks, such as TOP. edge: `a` or `b`.
    arc: running length along the edge from the left seam [mm].
    """

    at: Array
    inward: Array
    text: str
    edge: str
    arc: float


@dataclass(frozen=True)
class Figures:
    """A further table of figures to mark out by. heads: two lines each, the lower may be empty.

    rows: words as they are, numbers as lengths [mm], None for what is to be written in by hand.
    """

    title: str
    heads: tuple[tuple[str, str], ...]
    rows: tuple[tuple[str | float | None, ...], ...]


@dataclass(frozen=True)
class NumberedHole:
    """A round hole with its number in the table.

    centre: (2,) [mm]. outward: unit vector square to the line that the holes stand on (2,). radius [mm].
    """

    number: int
    centre: Array
    outward: Array
    radius: float


@dataclass(frozen=True)
class Label:
    """A line of text. at: middle of its baseline (2,) [mm]; angle anticlockwise [rad];
    height of its capitals [mm]."""

    text: str
    at: Array
    angle: float
    height: float


@dataclass(frozen=True)
class Rulings:
    """Dense straight lines of the sheet, from the left seam to the right, for the closing check.

    a, b: their ends on the two edges, (n, 2) [mm]. turn: of the sheet since the line before, (n,) [rad].
    u: parameter of end A's section that the line starts at, (n,).
    distance: of the developed sheet outside the surface that the ends are given on [mm].
    radius: roll radius of the developed sheet at edges A and B, (n, 2) [mm], where it is known.
    """

    a: Array
    b: Array
    turn: Array
    u: Array
    distance: float = 0.0
    radius: Array = field(default_factory=lambda: np.empty((0, 2)))


@dataclass(frozen=True)
class Forming:
    """Where a sheet is rolled tightest, and what that asks of it.

    radius: least roll radius at mid-thickness [mm]; inside: the same on the inside face [mm].
    ends: `a`, `b`, or `ab` where it is as tight at both. directions: of the points there, facing
    end B (k,) [rad]; none where it is as tight all round.
    strain: of the outer fibre [%], None for a sheet without thickness or one that is pressed.
    least: published least inside radius of a bend [mm], None where none is known; source: of it.
    """

    radius: float
    inside: float
    ends: str
    directions: tuple[float, ...]
    strain: float | None
    least: float | None = None
    source: str = ""


class Addition(Protocol):
    """One line of the account of the cut line: which edge, by what rule, how much [mm], and its source."""

    @property
    def edge(self) -> str: ...
    @property
    def rule(self) -> str: ...
    @property
    def width(self) -> float: ...
    @property
    def source(self) -> str: ...


@dataclass(frozen=True)
class Wall:
    """How the thickness was taken, where it was not plainly by a number and with flush ends cut square.

    neutral_line: the place developed, 0 inside to 1 outside; rule, source: of the published rule that gave
    it, empty for a number; places: the least and the most that it gives round the side. lining [mm].
    edge_cut: `square` or `level`. fits: (end, fit, clearance [mm], how far the end is moved out [mm]).
    """

    neutral_line: float
    rule: str = ""
    source: str = ""
    places: tuple[float, float] = (0.0, 0.0)
    lining: float = 0.0
    edge_cut: str = "square"
    fits: tuple[tuple[str, str, float, float], ...] = ()


@dataclass(frozen=True)
class Pattern:
    """One flat part. `net` is the geometry, `cut` what leaves the shear; equal without allowances.

    face: `outside` or `inside`, the face of the finished piece that is up.
    facts: lines of text that every sheet states. The first four tell which piece it is: mark and
        kind, sizes, length or cuts, where the sizes are measured.
    units: of the figures on the sheets, `mm` or `in`; all values here are in mm.
    lines_as: how the roll and press lines are marked: `ticks` at both edges, `full`, `pops` (centre pops
        near both edges), `pen` (full, on a layer of their own) or `none`.
    openings_as: whether the openings are `cut`, only `marked` on the net line, or cut but left on `ties`.
    tie: width of a tie [mm].
    flow: `a to b`, `b to a`, or empty where nothing flows; arrow: the word at its arrow.
    places: lines (n, 2, 2) [mm] across a flat part, best first, that its words stand on square;
        a rolled part has its divisions for that.
    figures: further tables. mass: of what is cut [kg], where material and thickness are known.
    labels, arrows: words and arrows (2, 2) with their place, once the pattern is lettered.
    thin: lines to set out by, such as that of the bolt holes; they are not cut.
    holes: those of the openings that have a number.
    datum: what the ordinates of the divisions are measured from, in words.
    end_words: what the two ends of a part of a ring or of a plate are called. facing: whether it has an END B
    that its directions are read in front of.
    seam_words: what is written along the left and the right seam; lap_words: along what is cut beyond them.
    folds: lines that are folded along, beside the press lines. added: what the cut line has beyond the net.
    punched: holes beyond the net line, for rivets. warnings: of what is not reasonable.
    wall: how the thickness was taken, where it was not plainly.
    forming: where a rolled sheet is tightest, and its strain. taped: tables of what to check by tape, for the
    tape pages alone.
    """

    mark: str
    kind: str
    quantity: int
    face: str
    net: Outline
    cut: Outline
    openings: tuple[Outline, ...]
    lines: tuple[RollLine, ...]
    divisions: tuple[Division, ...]
    marks: tuple[WitnessMark, ...]
    facts: tuple[str, ...]
    datum: str
    lines_as: str
    rulings: Rulings
    openings_as: str = "cut"
    tie: float = 0.0
    flow: str = ""
    units: str = "mm"
    seam_words: tuple[str, str] = ("SEAM", "SEAM")
    end_words: tuple[str, str] = ("END 1", "END 2")
    facing: bool = True
    labels: tuple[Label, ...] = ()
    arrows: tuple[tuple[Array, str], ...] = ()
    dashed: tuple[Curve, ...] = field(default=())
    folds: tuple[Curve, ...] = ()
    lap_words: tuple[str, str] = ("LAP", "LAP")
    added: tuple[Addition, ...] = ()
    warnings: tuple[str, ...] = ()
    punched: tuple[Outline, ...] = ()
    wall: Wall | None = None
    arrow: str = "FLOW"
    places: Array = field(default_factory=lambda: np.empty((0, 2, 2)))
    figures: tuple[Figures, ...] = ()
    mass: float | None = None
    thin: tuple[Curve, ...] = ()
    holes: tuple[NumberedHole, ...] = ()
    forming: Forming | None = None
    taped: tuple[Figures, ...] = ()

    @property
    def full_lines(self) -> bool:
        """Whether roll and press lines run from edge to edge."""
        return self.lines_as in ("full", "pen")
