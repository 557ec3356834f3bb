"""The page to print and measure: crosses at known distances in X and Y, and what to do with what is found."""

from __future__ import annotations

import io
import math

from develop.outputs.blocks import notes
from develop.outputs.document import canvas_of
from develop.outputs.ink import POINT, Ink
from develop.outputs.paper import PageSetup

__all__ = ["ROOM", "printer_page"]

_ARM = 8.0  # [mm] half a cross
_FOOT, _TOP = 10.0, 10.0  # [mm] below the lowest crosses, and above the highest
_TEXT = 2.8
ROOM = 20.0
"""What the page needs beyond the distance of the crosses, either way [mm]."""


def printer_page(setup: PageSetup, *, across: float, up: float, units: str) -> bytes:
    """The page as a PDF file, never with factors. across, up: distances of the crosses [mm]. units: of the
    words, `mm` or `in`. Raises WriteError if the type face is missing."""
    paper, margin = setup.paper, setup.margin
    sides = (paper.wide, paper.high or up + 2.0 * margin + _FOOT + _TOP)
    size = sides if setup.orientation == "portrait" else sides[::-1]
    wide, high = (side - 2.0 * margin for side in size)
    buffer = io.BytesIO()
    canvas = canvas_of(buffer, "printer-test")
    canvas.setPageSize((size[0] * POINT, size[1] * POINT))
    ink = Ink(canvas, (0.0, 0.0, wide, high), margin)
    left, bottom = (wide - across) / 2.0, _FOOT
    named = {axis: _named(value, units) for axis, value in (("X", across), ("Y", up))}
    # X along the foot, Y along the left side: three crosses.
    ink.pen(0.13)
    for x, y in ((left, bottom), (left + across, bottom), (left, bottom + up)):
        ink.line(x - _ARM, y, x + _ARM, y)
        ink.line(x, y - _ARM, x, y + _ARM)
    for at, sign in ((left, 1.0), (left + across, -1.0)):
        ink.line(at + sign * 12.0, bottom, at + sign * (across / 2.0 - 22.0), bottom)
    ink.text(left + across / 2.0, bottom - 2.0, f"X: {named['X']}", 4.0, anchor=0.5)
    for at, sign in ((bottom, 1.0), (bottom + up, -1.0)):
        ink.line(left, at + sign * 12.0, left, at + sign * (up / 2.0 - 22.0))
    ink.text(left + 2.0, bottom + up / 2.0, f"Y: {named['Y']}", 4.0, angle=math.pi / 2.0, anchor=0.5)
    room = across - 16.0
    top = bottom + up + 4.0
    for text, height in (
        ("Printer test", 6.0),
        ("PRINT AT ACTUAL SIZE (100 %), NOT FITTED TO THE PAPER", 3.4),
    ):
        top -= height
        ink.text(left + 12.0, top, text, height)
        top -= 0.8 * height
    landscape = setup.orientation == "landscape"
    notes(_texts(across, up, units, landscape=landscape), room, _TEXT).draw(ink, left + 12.0, top - 2.0)
    canvas.showPage()
    canvas.save()
    return buffer.getvalue()


def _named(length: float, units: str) -> str:
    return f"{length:.0f} mm" if units == "mm" else f"{length / 25.4:.0f} in"


def _texts(across: float, up: float, units: str, *, landscape: bool) -> list[str]:
    """What to do, with an example of a printer that is 0.25 % short both ways."""
    x, y = _named(across, units), _named(up, units)
    scale, digits = (1.0, 1) if units == "mm" else (25.4, 2)
    near_x, near_y = (f"{0.9975 * length / scale:.{digits}f}" for length in (across, up))
    way = " --orientation landscape" if landscape else ""
    return [
        "1. Print this page as you will print a pattern: the same printer, paper and tray, at actual size."
        " Let the paper lie for some minutes.",
        f"2. With a steel rule measure from cross to cross, X along the foot and Y along the left side:"
        f" {x} and {y} if the printer is true. Measure each three times, to 0.2 mm or 0.01 in, and take the"
        " middle one.",
        f"3. Found:   X = ..............  of {x}      Y = ..............  of {y}",
        "4. Both within 0.1 %, which is 0.15 mm in 150 mm: use no factors. Out by more than 5 %: the page was"
        " fitted to the paper. Look for that in the printer's settings, and print it again.",
        "5. Else give what you found to the tiled pages, such as",
        f'--printer-x "{near_x} of {x}" --printer-y "{near_y} of {y}"{way}',
        f"or keep it in a file, such as office.toml, and give --printer office.toml{way}:",
        'name = "office"',
        f'x = "{near_x} of {x}"',
        f'y = "{near_y} of {y}"',
        "6. Measure the check square on the first page of the pattern. The factors are printed on every page:"
        " they are right for this printer, this paper and this way of feeding it, and wrong for any other."
        " Paper changes with the damp: measure again on another day.",
    ]
