"""The numbers of the divisions at both edges, each beside the tick that it counts.

The first, the last and those at witness marks are set first, since one counts from them; the
others, or every second, third, ... of them, where they find room.
"""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.lettering import ASCENT, DESCENT, Boxes, text_width, upright
from develop.pattern.pattern import Division, WitnessMark
from develop.pattern.placing import Sheet, label_at, overlaps, rows_of

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

    @cached_property
    def turned(self) -> Array:
        """At which angles the numbers stand upright, square to their ticks, (n,) [rad]."""
        return np.array([upright(math.atan2(-x, y)) for x, y in self.ahead])

    @cached_property
    def along(self) -> Array:
        """Unit vectors along the numbers, (n, 2)."""
        return np.stack([np.cos(self.turned), np.sin(self.turned)], axis=1)

    @cached_property
    def _unit_widths(self) -> Array:
        return np.array([text_width(str(number), 1.0) for number in self.numbers])

    def widths(self, size: float) -> Array:
        """Widths of the numbers, (n,) [mm]."""
        return size * self._unit_widths

    def centres(self, size: float, *, deeper: float = 0.0) -> Array:
        """Middles (n, 2) of numbers of this size, just beyond the ticks or `deeper` sizes more."""
        deep = self.tick + size * (0.4 + deeper + (ASCENT + DESCENT) / 2.0)
        return np.asarray(self.at + self.ahead * deep[:, None])

    def gaps(self, centres: Array) -> Array:
        """Distance from each middle to the nearer of its neighbours, (n,) [mm]."""
        step = np.hypot(*np.diff(centres, axis=0).T)
        return np.asarray(np.minimum(np.append(step, np.inf), np.insert(step, 0, np.inf)))

    def boxes(self, rows: Sequence[int] | Array, centres: Array, size: float) -> Boxes:
        """Boxes of these rows' numbers at centres (k, 2) [mm]."""
        which = np.asarray(rows, dtype=int)
        wide = self.widths(size)[which]
        half = np.stack([wide, np.full(len(wide), size * (ASCENT + DESCENT))], axis=1) / 2.0
        return Boxes(centres, self.along[which], half)


class Numbers:
    """The numbers of a sheet, to be written in two goes. tick, height: of ticks and numbers [mm]."""

    def __init__(
        self,
        divisions: Sequence[Division],
        marks: Sequence[WitnessMark],
        *,
        tick: float,
        height: float,
        fans: bool = False,
    ) -> None:
        self._height = height
        self._rows: list[_Row] = []
        self._first: list[list[int]] = []
        self._done: list[set[int]] = [set(), set()]
        rows = [row for row in divisions if np.hypot(*(row.b - row.a)) > 0.0]
        edges: tuple[int, ...] = (0, 1) if len(rows) > 1 else ()
        if fans and edges:
            # Lines that meet in corners are numbered only at the edge where they lie farther apart.
            ends = np.array([(row.a, row.b) for row in rows])
            gaps = np.hypot(*np.moveaxis(np.diff(ends, axis=0), -1, 0))
            edges = (int(np.argmax(np.median(gaps, axis=0))),)
        for edge in edges:
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
        """The first, the last, and those at witness marks: as large as they can be, beside their ticks."""
        sizes = [self._height]
        while sizes[-1] > sheet.least + 1e-9:
            sizes.append(max(sheet.least, 0.8 * sizes[-1]))
        for row, wanted, done in self._edges(sheet, self._first):
            corners = [wanted[0], wanted[-1]]
            order = [*corners, *wanted[1:-1]]
            for size in sizes:
                self._try(sheet, row, [n for n in order if n not in done], size, most=_NEARER, done=done)
            # In a corner a number is not likely to be taken for another line's.
            for size in sizes:
                self._try(sheet, row, [n for n in corners if n not in done], size, most=math.inf, done=done)

    def _try(
        self, sheet: Sheet, row: _Row, rows: list[int], size: float, *, most: float, done: set[int]
    ) -> None:
        """Write numbers in this size where that is free, at `most` so far aside in shares of the gap."""
        if not rows:
            return
        off = row.widths(size)[rows] / 2.0 + 0.45 * size
        # On the line, right of it, left of it; the farther ones are clear of a word along the seam.
        sides = np.stack(
            [0.0 * off, *(way * (off + more * size) for more in (0.0, 1.0, 2.0) for way in (1.0, -1.0))]
        )
        tries, near = [], []
        for deeper in (0.0, 0.6, 1.2, -0.8):
            centres = row.centres(size, deeper=deeper)
            tries.append(centres[rows] + sides[..., None] * row.along[rows])
            near.append(np.abs(sides) <= most * row.gaps(centres)[rows])
        places = np.concatenate(tries).swapaxes(0, 1)  # (numbers, places, 2)
        count = places.shape[1]
        boxes = row.boxes(np.repeat(rows, count), places.reshape(-1, 2), size)
        good = np.concatenate(near).T.ravel()
        some = np.flatnonzero(good)
        good[some] = sheet.clear(rows_of(boxes, some), 0.2 * size)
        for k, n in enumerate(rows):
            some = k * count + np.flatnonzero(good[k * count : (k + 1) * count])
            some = some[~overlaps(rows_of(boxes, some, 0.2 * size), sheet.taken)]
            if len(some):
                self._write(sheet, row, [n], boxes.centre[some[:1]], size)
                done.add(n)

    def _edges(self, sheet: Sheet, wanted: list[list[int]]) -> list[tuple[_Row, list[int], set[int]]]:
        edges = list(zip(self._rows, wanted, self._done, strict=False))
        return edges if sheet.both_ends else edges[:1]  # at a point there is no room for numbers

    def _write(self, sheet: Sheet, row: _Row, rows: list[int], centres: Array, size: float) -> None:
        sheet.take(row.boxes(rows, centres, size))
        sheet.labels += [
            label_at(str(row.numbers[n]), centre, float(row.turned[n]), size)
            for n, centre in zip(rows, centres, strict=True)
        ]

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
                moved = centres[left] + side * row.along[left] * off[:, None]
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
                self._write(sheet, row, kept, np.array([found[n] for n in kept]).reshape(-1, 2), size)
