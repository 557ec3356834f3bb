"""Lines that run across the pages of a pattern and prove them: the datum lines and the long checks.

All of it is found once for the whole sheet, in the pattern's coordinates [mm], so that neighbouring pages
show the same where they overlap.
"""

from __future__ import annotations

import math
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from itertools import groupby

import numpy as np

from develop.outputs.fonts import width
from develop.outputs.ink import Ink
from develop.outputs.tiling import Tiling
from develop.pattern.curve import Array

__all__ = ["SheetMarks", "Word", "placed", "sheet_marks"]

_TEXT = 2.4  # [mm] height of capitals
_AIR = 1.2  # [mm] kept round a word
_LONG = {"mm": (1000.0, 100.0), "in": (40 * 25.4, 4 * 25.4)}  # [mm] the long check, and its parts
_LEAST = 2  # parts that are worth a check
_TICK, _END = 1.8, 4.0  # [mm] half a tick
_PLACES = 15  # tried for a word along a page, and for a check across it
_DASHES = (10.0, 2.0, 1.0, 2.0)  # [mm]


@dataclass(frozen=True)
class Word:
    """A line of text from a place of the sheet [mm], level or upright, its capitals `height` high [mm]."""

    text: str
    at: tuple[float, float]
    upright: bool
    height: float = _TEXT

    def draw(self, ink: Ink) -> None:
        """Draw it."""
        ink.text(*self.at, self.text, self.height, angle=math.pi / 2.0 if self.upright else 0.0)

    @property
    def box(self) -> Array:
        """Least and greatest coordinates that it fills, (2, 2) [mm]."""
        long, (x, y) = width(self.text, self.height), self.at
        low, high = -0.3 * self.height, 1.1 * self.height
        if self.upright:
            return np.array([[x - high, y], [x - low, y + long]])
        return np.array([[x, y + low], [x + long, y + high]])


@dataclass(frozen=True)
class _Check:
    """A scale in parts along x (0) or y (1), from `start`, at `level` of the other axis [mm]."""

    axis: int
    start: float
    length: float
    level: float
    part: float

    def at(self, way: float, off: float = 0.0) -> tuple[float, float]:
        """The place a way along it and off it [mm]."""
        along, across = self.start + way, self.level + off
        return (along, across) if self.axis == 0 else (across, along)


@dataclass(frozen=True)
class SheetMarks:
    """Datum lines, checks and their words; taken: points on these and on the pattern, (n, 2) [mm]."""

    tiling: Tiling
    checks: tuple[_Check, ...]
    words: tuple[Word, ...]
    taken: Array

    def draw(self, ink: Ink) -> None:
        """Draw all that the page of this ink shows."""
        across, down = self.tiling.across, self.tiling.down
        ink.pen(0.13, _DASHES)
        if down[-1] < 0.0 < down[0]:
            ink.line(across[0], 0.0, across[-1], 0.0)
        if across[0] < 0.0 < across[-1]:
            ink.line(0.0, down[-1], 0.0, down[0])
        for check in self.checks:
            ink.pen(0.18)
            ink.line(*check.at(0.0), *check.at(check.length))
            for n in range(round(check.length / check.part) + 1):
                way = n * check.part
                half = _END if n in (0, round(check.length / check.part)) else _TICK
                ink.line(*check.at(way, -half), *check.at(way, half))
        for word in self.words:
            word.draw(ink)


def sheet_marks(tiling: Tiling, points: Array, words: Array, units: str) -> SheetMarks:
    """The marks for the pages of a pattern. points: on all that is drawn; words: on its words (n, 2) [mm]."""
    checks = [check for axis in (0, 1) if (check := _check(tiling, axis, words, units)) is not None]
    found: list[Word] = []
    across, down = tiling.across, tiling.down
    ends = [((across[0], 0.0), (across[-1], 0.0)), ((0.0, down[-1]), (0.0, down[0]))]
    ends += [(check.at(0.0), check.at(check.length)) for check in checks]
    taken = np.vstack([points, *(_along(start, end) for start, end in ends)])
    for word in (*_check_words(tiling, checks, units), *_datum_words(tiling)):
        best = placed(word, taken)
        found.append(best)
        (left, bottom), (right, top) = best.box.tolist()
        taken = np.vstack([taken, _along((left, bottom), (right, top)), _along((left, top), (right, bottom))])
    return SheetMarks(tiling, tuple(checks), tuple(found), taken)


def _along(start: tuple[float, float], end: tuple[float, float]) -> Array:
    """Points from one place to another, (n, 2) [mm]."""
    return np.linspace(start, end, math.ceil(math.dist(start, end)) + 2)


def placed(choices: Sequence[Word], points: Array) -> Word:
    """The first of the choices that is free of points, else the one with the fewest in it."""
    boxes = np.stack([word.box for word in choices]) + np.array([[-_AIR], [_AIR]])
    low, high = boxes[:, 0].min(axis=0), boxes[:, 1].max(axis=0)
    near = points[((points > low) & (points < high)).all(axis=1)]
    inside = ((near > boxes[:, None, 0]) & (near < boxes[:, None, 1])).all(axis=2)
    return choices[int(np.argmin(inside.sum(axis=1)))]


def _check(tiling: Tiling, axis: int, words: Array, units: str) -> _Check | None:
    """The longest check that lies on pages that are there; on the datum line if that is as good."""
    full, part = _LONG[units]
    # Along x the lanes are the rows, along y the columns.
    along, across = (tiling.across, tiling.down) if axis == 0 else (tiling.down, tiling.across)
    found: list[tuple[float, bool, float, _Check]] = []
    lanes: dict[int, list[int]] = {}
    for page in tiling.pages:
        lane, place = (page.row, page.column) if axis == 0 else (page.column, page.row)
        lanes.setdefault(lane, []).append(place)
    for lane, places in lanes.items():
        edges = sorted(across[lane : lane + 2])
        for _, run in groupby(enumerate(sorted(places)), key=lambda pair: pair[1] - pair[0]):
            held = [place for _, place in run]
            low, high = sorted((along[held[0]], along[held[-1] + 1]))
            low, high = low + _END, high - _END
            length = min(full, part * math.floor((high - low) / part + 1e-9))
            if length < _LEAST * part:
                continue
            start = 0.0 if low <= 0.0 and length <= high else (low + high - length) / 2.0
            on_datum = edges[0] + _END < 0.0 < edges[1] - _END
            level = 0.0 if on_datum else _quiet(edges, (start, start + length), words, axis)
            found.append((length, on_datum, -abs(level), _Check(axis, start, length, level, part)))
    return max(found, key=lambda each: each[:3])[3] if found else None


def _quiet(edges: Sequence[float], reach: tuple[float, float], words: Array, axis: int) -> float:
    """The level between two edges at which a line meets the fewest words, the nearer to the middle."""
    room = 0.15 * (edges[1] - edges[0])
    levels = np.linspace(edges[0] + room, edges[1] - room, _PLACES)
    along, across = words[:, axis], words[:, 1 - axis]
    level_words = across[(along > reach[0]) & (along < reach[1])]
    met = (np.abs(level_words[:, None] - levels) < 2.5).sum(axis=0)
    middle = np.abs(levels - (edges[0] + edges[1]) / 2.0)
    return float(levels[np.lexsort((middle, met))[0]])


def _check_words(tiling: Tiling, checks: Iterable[_Check], units: str) -> Iterable[list[Word]]:
    for check in checks:
        size = f"{check.length:.0f} mm" if units == "mm" else f"{check.length / 25.4:.0f} in"
        for way, text in ((0.0, f"CHECK {size} FROM HERE"), (check.length, f"CHECK {size} TO HERE")):
            long = width(text, _TEXT)
            choices = []
            for off in (2.0, -2.0 - _TEXT, 5.0, -5.0 - _TEXT):
                for shift in (2.0, 12.0, 30.0, 50.0, 70.0):
                    place = way + shift if way == 0.0 else way - shift - long
                    # Upright words stand to the left of where they start.
                    choices.append(
                        Word(text, check.at(place, off if check.axis == 0 else -off), check.axis == 1)
                    )
            yield _uncut(choices, tiling)


def _datum_words(tiling: Tiling) -> Iterable[list[Word]]:
    """`y = 0` and `x = 0`, on each page that the line crosses."""
    for page in tiling.pages:
        left, bottom, right, top = tiling.cell(page)
        for axis, (low, high), (first, last) in (
            (0, (bottom, top), (left, right)),
            (1, (left, right), (bottom, top)),
        ):
            if not low < 0.0 < high:
                continue
            text = "y = 0" if axis == 0 else "x = 0"
            clear = tiling.overlap[axis] / 2.0 + 3.0  # so that the neighbour does not show a part of it
            long = width(text, _TEXT)
            choices = []
            for off in (-1.5 - _TEXT, 1.5):
                for at in np.linspace(first + clear, last - long - clear, _PLACES).tolist():
                    choices.append(Word(text, (at, off) if axis == 0 else (-off, at), axis == 1))
            yield _uncut(choices, tiling)


def _uncut(choices: list[Word], tiling: Tiling) -> list[Word]:
    """Those that are not cut at a joint of pages; all if every one is."""

    def whole(word: Word) -> bool:
        (left, bottom), (right, top) = word.box
        inside = tiling.across[0] < left and right < tiling.across[-1]
        inside &= tiling.down[-1] < bottom and top < tiling.down[0]
        joints = any(left - _AIR < x < right + _AIR for x in tiling.across[1:-1])
        return bool(
            inside and not joints and not any(bottom - _AIR < y < top + _AIR for y in tiling.down[1:-1])
        )

    return [word for word in choices if whole(word)] or choices
