"""The numbers of the divisions at both edges, each beside the tick that it counts.

The first, the last and those at witness marks are set first, since one counts from them; the
others, or every second, third, ... of them, where they find room.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.lettering import ASCENT, DESCENT, Boxes, text_width, upright
from develop.pattern.pattern import Division, WitnessMark
from develop.pattern.placing import Sheet, label_at

__all__ = ["Numbers"]

_STRIDES = (1, 2, 3, 4, 6, 12, 24)
_SAME = 1e-6  # two points closer than this [mm] are one point of the sheet
# A number that stands aside of its tick is farther from the next one, in shares of their distance.
_NEARER = 0.45


@dataclass(frozen=True)
class _Row:
    """The divisions at one edge: ticks from `at` along `ahead`, both (n, 2) [mm]; depth of a tick (n,)."""

    numbers: tuple[int, ...]
    at: Array
    ahead: Array
    tick: Array

    @property
    def aside(self) -> Array:
        return np.stack([self.ahead[:, 1], -self.ahead[:, 0]], axis=1)

    def widths(self, size: float) -> Array:
        return np.array([text_width(str(number), size) for number in self.numbers])

    def centres(self, size: float, *, deeper: float = 0.0) -> Array:
        """Middles (n, 2) of numbers of this size, just beyond the ticks or `deeper` sizes more."""
        deep = self.tick + size * (0.4 + deeper + (ASCENT + DESCENT) / 2.0)
        return np.asarray(self.at + self.ahead * deep[:, None])

    def gaps(self, centres: Array) -> Array:
        """Distance from each middle to the nearer of its neighbours, (n,) [mm]."""
        step = np.hypot(*np.diff(centres, axis=0).T)
        return np.asarray(np.minimum(np.append(step, np.inf), np.insert(step, 0, np.inf)))

    def boxes(self, rows: Sequence[int], centres: Array, size: float) -> Boxes:
        """Boxes of these rows' numbers; their angles come from `angle`."""
        turned = np.array([self.angle(n) for n in rows])
        half = np.array([(wide, size * (ASCENT + DESCENT)) for wide in self.widths(size)[list(rows)]]) / 2.0
        return Boxes(centres, np.stack([np.cos(turned), np.sin(turned)], axis=1), half)

    def angle(self, n: int) -> float:
        """At which the number stands upright, square to its tick [rad]."""
        x, y = self.aside[n]
        return upright(math.atan2(y, x))


class Numbers:
    """The numbers of a sheet, to be written in two goes. tick, height: of ticks and numbers [mm]."""

    def __init__(
        self, divisions: Sequence[Division], marks: Sequence[WitnessMark], *, tick: float, height: float
    ) -> None:
        self._height = height
        self._rows: list[_Row] = []
        self._first: list[list[int]] = []
        self._done: list[set[int]] = [set(), set()]
        rows = [row for row in divisions if np.hypot(*(row.b - row.a)) > 0.0]
        for edge in (0, 1) if len(rows) > 1 else ():
            at = np.array([(row.a, row.b)[edge] for row in rows])
            ahead = np.array([(row.b, row.a)[edge] for row in rows]) - at
            length = np.hypot(*ahead.T)
            each = tuple(row.number for row in rows)
            self._rows.append(_Row(each, at, ahead / length[:, None], np.minimum(tick, length / 4.0)))
            places = np.array([mark.at for mark in marks if mark.edge == "ab"[edge]]).reshape(-1, 1, 2)
            marked = (np.abs(places - at).max(axis=-1) < _SAME).any(axis=0)
            marked[[0, -1]] = True
            self._first.append(np.flatnonzero(marked).tolist())

    def write_first(self, sheet: Sheet) -> None:
        """The first, the last, and those at witness marks."""
        for row, wanted, done in self._edges(sheet, self._first):
            corners = {wanted[0], wanted[-1]}
            for n in (wanted[0], wanted[-1], *(n for n in wanted if n not in corners)):
                if self._set(sheet, row, n):
                    done.add(n)

    def _edges(self, sheet: Sheet, wanted: list[list[int]]) -> list[tuple[_Row, list[int], set[int]]]:
        edges = list(zip(self._rows, wanted, self._done, strict=False))
        return edges if sheet.both_ends else edges[:1]  # at a point there is no room for numbers

    def _set(self, sheet: Sheet, row: _Row, n: int) -> bool:
        """Write one number, as large as it can be, beside its tick or farther in."""
        corner = n in (0, len(row.at) - 1)
        size = self._height
        while True:
            wide = row.widths(size)[n]
            off = wide / 2.0 + 0.45 * size
            gap = row.gaps(row.centres(size))[n]
            # The numbers at the corners cannot be taken for another line's.
            sides = [0.0, off, -off] if corner or off <= _NEARER * gap else [0.0]
            if corner:  # clear of a word along the seam
                sides += [way * (off + more * size) for more in (1.0, 2.0) for way in (1.0, -1.0)]
            turned = row.angle(n)
            ahead = np.array([math.cos(turned), math.sin(turned)])
            tries = [
                row.centres(size, deeper=deeper)[n] + side * ahead
                for deeper in (0.0, 0.6, 1.2, -0.8) for side in sides
            ]  # fmt: skip
            boxes = row.boxes([n] * len(tries), np.array(tries), size)
            good = np.flatnonzero(sheet.free(boxes, 0.2 * size))
            if len(good):
                self._write(sheet, row, n, tries[good[0]], size)
                return True
            if size <= sheet.least + 1e-9:
                return False
            size = max(sheet.least, 0.8 * size)

    def _write(self, sheet: Sheet, row: _Row, n: int, centre: Array, size: float) -> None:
        sheet.take(row.boxes([n], centre[None], size))
        sheet.labels.append(label_at(str(row.numbers[n]), centre, row.angle(n), size))

    def write_others(self, sheet: Sheet) -> None:
        """The rest; every second, third, ... where they are close, none where few would find room."""
        size = self._height
        for row, _, done in self._edges(sheet, self._first):
            centres, widths = row.centres(size), row.widths(size)
            gaps = row.gaps(centres)
            stride = next((n for n in _STRIDES if n * gaps.min() > 1.4 * widths.max()), 0)
            chosen = [n for n, number in enumerate(row.numbers) if stride and number % stride == 0]
            found: dict[int, Array] = {}
            for side in (0.0, 1.0, -1.0):  # on the line, right of it, left of it
                left = [n for n in chosen if n not in found and n not in done]
                if not left:
                    continue
                off = widths[left] / 2.0 + 0.45 * size
                moved = centres[left] + side * row.aside[left] * off[:, None]
                good = sheet.free(row.boxes(left, moved, size), 0.2 * size)
                good &= (side == 0.0) | (off <= _NEARER * gaps[left])
                found.update((left[k], moved[k]) for k in np.flatnonzero(good))
            kept: list[int] = []
            half = np.hypot(widths, size * (ASCENT + DESCENT)) / 2.0
            for n in sorted(found):
                if not kept or np.hypot(*(found[n] - found[kept[-1]])) >= half[n] + half[kept[-1]]:
                    kept.append(n)
            # A few numbers here and there would puzzle more than they help.
            if 2 * len({*kept, *done}.intersection(chosen)) > len(chosen):
                for n in kept:
                    self._write(sheet, row, n, found[n], size)
