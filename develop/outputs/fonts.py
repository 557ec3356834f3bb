"""The one type face of the paper outputs: DejaVu Sans, embedded, found where matplotlib keeps it.

matplotlib itself is not imported; its folder is asked for, which costs nothing.
"""

from __future__ import annotations

import importlib.util
from functools import cache, lru_cache
from pathlib import Path

from develop.errors import WriteError

__all__ = ["CAPITAL", "FACE", "register", "width"]

FACE = "DejaVuSans"
CAPITAL = 0.729  # height of a capital over the size of the type


@cache
def register() -> dict[int, float]:
    """Make the face known to reportlab, once; returns the widths of its letters over the size of the type.

    Raises WriteError if the font file is missing.
    """
    from reportlab.pdfbase import pdfmetrics
    from reportlab.pdfbase.ttfonts import TTFont

    spec = importlib.util.find_spec("matplotlib")
    folders = (spec.submodule_search_locations if spec else None) or []
    files = [Path(folder, "mpl-data", "fonts", "ttf", "DejaVuSans.ttf") for folder in folders]
    found = next((file for file in files if file.is_file()), None)
    if found is None:
        raise WriteError("DejaVuSans.ttf was not found in matplotlib's data: install matplotlib again")
    font = TTFont(FACE, str(found))
    pdfmetrics.registerFont(font)
    return {letter: units / 1000.0 for letter, units in font.face.charWidths.items()}


def width(text: str, height: float) -> float:
    """Width of a line of text whose capitals are `height` high, in the unit of `height`."""
    return height / CAPITAL * _width(text)


@lru_cache(maxsize=4096)
def _width(text: str) -> float:
    """Width of a line of text over the size of the type; the cells of tables come again and again."""
    widths = register()
    return sum(widths.get(ord(letter), 0.6) for letter in text)
