"""Patterns at true scale on pages of ordinary paper, to be laid together; the first page tells how.

The pattern is written once, as its own Béziers, in a form that every page shows through its window; so
neighbours draw the same curve, and forty pages cost little more than one.
"""

from __future__ import annotations

import io
from collections.abc import Iterator, Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from develop.outputs.cover import Mapped, covers
from develop.outputs.document import canvas_of
from develop.outputs.fonts import width
from develop.outputs.ink import POINT, Ink, PatternPen
from develop.outputs.layers import MARKS, NOTES, Layers
from develop.outputs.page_marks import SheetMarks, Word, placed, sheet_marks
from develop.outputs.paper import PageSetup
from develop.outputs.tiling import HEAD, Page, Tiling, tiled
from develop.outputs.traces import traced
from develop.pattern.curve import Array
from develop.pattern.drawing import draw
from develop.pattern.pattern import Pattern

if TYPE_CHECKING:
    from reportlab.pdfgen.canvas import Canvas

__all__ = ["MOST", "TiledPages", "written"]

MOST = 500
"""Pages of one pattern that anyone would lay together."""
_CROSSES = 50.0  # [mm] from cross to cross along a joint
_ARM = 4.0  # [mm] half a cross
_WORDS = 2.0  # [mm] height of the words at a joint
_ROOM = 100.0  # [mm] beyond the pattern that its form may draw in


@dataclass(frozen=True)
class TiledPages:
    """The file, and how many pages each pattern takes in it beside the first ones that tell how.

    data: empty where that would be more than `MOST` of one pattern.
    """

    data: bytes
    counts: tuple[int, ...]


@dataclass(frozen=True)
class _Sheet:
    pattern: Pattern
    tiling: Tiling
    marks: SheetMarks
    points: Array


def written(patterns: Sequence[Pattern], setup: PageSetup, *, title: str) -> TiledPages:
    """The patterns on pages, as a PDF file. Raises WriteError if the type face is missing."""
    traces = [traced(pattern) for pattern in patterns]
    parted = [tiled(each.points, setup) for each in traces]
    counts = tuple(len(each.pages) for each in parted)
    if max(counts) > MOST:
        return TiledPages(b"", counts)
    sheets = [
        _Sheet(pattern, tiling, sheet_marks(tiling, each.points, each.words, pattern.units), each.points)
        for pattern, tiling, each in zip(patterns, parted, traces, strict=True)
    ]
    buffer = io.BytesIO()
    canvas = canvas_of(buffer, title)
    layers = Layers(canvas)
    number = 0
    maps = [Mapped(sheet.pattern, sheet.tiling) for sheet in sheets]
    for n, cover in enumerate(covers(title, maps, setup), 1):
        canvas.addPageLabel(number, prefix="how to" if n == 1 else f"how to {n}")
        _start(canvas, cover.size, setup)
        layers.open(NOTES)
        wide = (cover.size[0] - 2.0 * setup.margin) / setup.factors[0]
        cover.draw(Ink(canvas, (0.0, 0.0, wide, cover.high), setup.margin))
        layers.close()
        _end(canvas)
        number += 1
    for n, sheet in enumerate(sheets):
        form = f"pattern{n}"
        _write_form(canvas, layers, form, sheet)
        for page in sheet.tiling.pages:
            canvas.addPageLabel(
                number, prefix=page.name if len(sheets) == 1 else f"{sheet.pattern.mark} {page.name}"
            )
            _write_page(canvas, layers, form, sheet, page, setup)
            number += 1
    layers.finish()
    canvas.save()
    return TiledPages(buffer.getvalue(), counts)


def _start(canvas: Canvas, size: tuple[float, float], setup: PageSetup) -> None:
    """Begin a page on which all that follows is multiplied by the printer's factors, from the margin on."""
    canvas.setPageSize((size[0] * POINT, size[1] * POINT))
    x, y = setup.factors
    if setup.factors != (1.0, 1.0):
        shift = setup.margin * POINT
        canvas.addLiteral(f"q {x:.7f} 0 0 {y:.7f} {shift * (1 - x):.5f} {shift * (1 - y):.5f} cm")
    else:
        canvas.addLiteral("q")


def _end(canvas: Canvas) -> None:
    canvas.addLiteral("Q")
    canvas.showPage()


def _write_form(canvas: Canvas, layers: Layers, name: str, sheet: _Sheet) -> None:
    """The whole pattern once, its (0, 0) at that of the form."""
    low = (sheet.points.min(axis=0) - _ROOM).tolist()
    high = (sheet.points.max(axis=0) + _ROOM).tolist()
    canvas.beginForm(name, *(round(value * POINT) for value in (*low, *high)))
    pen = PatternPen(Ink(canvas, (0.0, 0.0, 0.0, 0.0), 0.0, everywhere=True), 0.0, 0.0, layers)
    draw(sheet.pattern, pen)
    layers.close()
    canvas.endForm(Resources=layers.resources)


def _write_page(
    canvas: Canvas, layers: Layers, form: str, sheet: _Sheet, page: Page, setup: PageSetup
) -> None:
    _start(canvas, page.size, setup)
    margin = setup.margin
    window = (page.left, page.bottom, page.wide, page.high)
    canvas.addLiteral(
        f"q {margin * POINT:.4f} {margin * POINT:.4f} {page.wide * POINT:.4f} {page.high * POINT:.4f} re W n"
    )
    x, y = ((margin - start) * POINT for start in (page.left, page.bottom))
    canvas.addLiteral(f"q 1 0 0 1 {x:.5f} {y:.5f} cm")
    canvas.doForm(form)
    canvas.addLiteral("Q")
    layers.open(MARKS)
    ink = Ink(canvas, window, margin)
    sheet.marks.draw(ink)
    _draw_joints(ink, sheet, page)
    layers.close()
    canvas.addLiteral("Q")
    layers.open(NOTES)
    _head(Ink(canvas, (0.0, 0.0, page.wide, page.high + HEAD), margin), sheet, page, setup)
    layers.close()
    _end(canvas)


def _neighbours(tiling: Tiling, page: Page) -> Iterator[tuple[str, Page]]:
    """Where each neighbour is, and the neighbour, of those that are not left out."""
    for word, column, row in (("left", -1, 0), ("right", 1, 0), ("above", 0, -1), ("below", 0, 1)):
        other = tiling.at(page.column + column, page.row + row)
        if other is not None:
            yield word, other


def _draw_joints(ink: Ink, sheet: _Sheet, page: Page) -> None:
    """In each overlap: the line at which two pages are joined, crosses on it, and what to do there."""
    tiling = sheet.tiling
    left, bottom, right, top = tiling.cell(page)
    right_end, top_end = page.left + page.wide, page.bottom + page.high
    for word, other in _neighbours(tiling, page):
        if word in ("left", "right"):
            x = left if word == "left" else right
            start, end, upright, strip = (x, page.bottom), (x, top_end), True, tiling.overlap[0] / 2.0
        else:
            y = bottom if word == "below" else top
            start, end, upright, strip = (page.left, y), (right_end, y), False, tiling.overlap[1] / 2.0
        ink.pen(0.13, (6.0, 2.0))
        ink.line(*start, *end)
        _draw_crosses(ink, start, end, upright, min(_ARM, 0.45 * strip))
        text = {
            "right": f"CUT BACK TO THIS LINE, LAY ON {other.name}",
            "below": f"CUT BACK TO THIS LINE, LAY ON {other.name}",
            "left": f"{other.name} LIES ON THIS, UP TO THE LINE",
            "above": f"{other.name} LIES ON THIS, UP TO THE LINE",
        }[word]
        long = width(text, _WORDS)
        low, high = (start[1], end[1]) if upright else (start[0], end[0])
        # Outside the line, where it is cut away or covered.
        middle = 0.72 * strip * (1.0 if word in ("right", "above") else -1.0)
        # Words stand above their baseline, and to the left of it where they are upright.
        off = middle + _WORDS / 2.0 if upright else middle - _WORDS / 2.0
        places = np.linspace(low + 12.0, max(high - long - 12.0, low + 12.0), 25).tolist()
        places.sort(key=lambda place: abs(place + long / 2.0 - (low + high) / 2.0))
        choices = [
            Word(text, (start[0] + off, place) if upright else (place, start[1] + off), upright, _WORDS)
            for place in places
        ]
        placed(choices, sheet.marks.taken).draw(ink)


def _draw_crosses(
    ink: Ink, start: tuple[float, float], end: tuple[float, float], upright: bool, arm: float
) -> None:
    """Crosses at the same places of the sheet on both pages."""
    ink.pen(0.25)
    low, high = (start[1], end[1]) if upright else (start[0], end[0])
    first = np.ceil((low + 2.0 * arm) / _CROSSES)
    last = np.floor((high - 2.0 * arm) / _CROSSES)
    for step in np.arange(first, last + 1.0).tolist():
        x, y = (start[0], step * _CROSSES) if upright else (step * _CROSSES, start[1])
        ink.line(x - arm, y, x + arm, y)
        ink.line(x, y - arm, x, y + arm)


def _head(ink: Ink, sheet: _Sheet, page: Page, setup: PageSetup) -> None:
    """The heading: the page's name, the mark, the neighbours, the factors, and a short scale."""
    tiling, top = sheet.tiling, page.high + HEAD
    # Clear of what is cut off or covered at the joints.
    sides = {word for word, _ in _neighbours(tiling, page)}
    first, last = (tiling.overlap[0] / 2.0 * (word in sides) for word in ("left", "right"))
    ink.text(first + 1.0, top - 8.0, page.name, 8.0)  # a J reaches to the left of its place
    left = first + width(page.name, 8.0) + 6.0
    short, parts, unit = (50.0, 5, "50 mm") if sheet.pattern.units == "mm" else (50.8, 2, "2 in")
    right = page.wide - last - 0.5
    room = right - short - 6.0 - left
    number = tiling.pages.index(page) + 1
    lines = [
        (f"{sheet.pattern.mark}   ·   page {number} of {len(tiling.pages)}", 3.2),
        ("PRINT AT ACTUAL SIZE (100 %)", 2.6),
        (
            "   ".join(f"{word} {other.name}" for word, other in _neighbours(tiling, page))
            or "no neighbours",
            2.4,
        ),
    ]
    if setup.factor_words:
        lines.append((setup.factor_words, 2.2))
    y = top
    for text, height in lines:
        y -= height
        ink.text(left, y, text, min(height, height * room / max(width(text, height), 1e-9)))
        y -= 1.3
    ink.pen(0.25)
    ink.line(right - short, top - 8.0, right, top - 8.0)
    for n in range(parts + 1):
        x = right - short + n * short / parts
        ink.line(x, top - 8.0, x, top - (4.5 if n in (0, parts) else 6.0))
    ink.text(right - short / 2.0, top - 3.0, f"scale: {unit}", 2.4, anchor=0.5)
    ink.pen(0.13)
    ink.line(0.0, page.high + 0.6, page.wide, page.high + 0.6)
