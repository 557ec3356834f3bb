"""Lettering on the sheet: how wide a line of text is, and the box that it needs.

The widths are those of DejaVu Sans by classes of letters, each class as wide as its widest
member, so that a box from here is never too small for the text in it.
"""

from __future__ import annotations

import math
from typing import NamedTuple

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.pattern import Label, Outline

__all__ = [
    "ASCENT",
    "CAPITAL",
    "DESCENT",
    "Boxes",
    "arrow_box",
    "arrow_label",
    "boxes_of",
    "text_height",
    "text_width",
    "upright",
]

CAPITAL = 0.729
"""Height of a capital over the size of the type, DejaVu Sans (its OS/2 table)."""
DESCENT = 0.34
"""What a letter needs below its baseline, over the height of a capital."""
ASCENT = 1.06
"""What a letter needs above its baseline, over the height of a capital."""

_WIDE = 1.38
_CLASSES = (
    (" ilj.,'IJ·", 0.45),
    (":;|!()[]-/\\ft", 0.56),
    ('rcsz*?_`–"°L', 0.77),
    ("0123456789abdeghknopquvxyFETPYZSVXKAB$äöüß", 0.965),
    ("CDGHNOQRUw=+<>×±&ÄÖÜ", 1.16),
)
_WIDTHS = {letter: width for letters, width in _CLASSES for letter in letters}


class Boxes(NamedTuple):
    """n turned rectangles: centres [mm], unit vectors along their width, half sizes [mm], (n, 2) each."""

    centre: Array
    along: Array
    half: Array


def text_width(text: str, height: float) -> float:
    """Width of a line of text whose capitals are `height` high [mm]; never less than it is in DejaVu Sans."""
    return height * sum(_WIDTHS.get(letter, _WIDE) for letter in text)


def text_height(net: Outline) -> float:
    """Height of the capitals that suits a sheet of this size, 2 to 12 [mm]."""
    return min(12.0, max(2.0, 0.018 * math.sqrt(abs(net.area))))


def upright(angle: float) -> float:
    """The angle, or its opposite, at which a line of text can be read without turning one's head [rad]."""
    turned = math.remainder(angle, 2.0 * math.pi)
    if turned <= -math.pi / 2 + 1e-9:
        return turned + math.pi
    return turned - math.pi if turned > math.pi / 2 + 1e-9 else turned


def boxes_of(labels: tuple[Label, ...]) -> Boxes:
    """The rectangles that the labels fill."""
    at = np.array([label.at for label in labels]).reshape(-1, 2)
    angle = np.array([label.angle for label in labels])
    height = np.array([label.height for label in labels])
    width = np.array([text_width(label.text, label.height) for label in labels])
    along = np.stack([np.cos(angle), np.sin(angle)], axis=1)
    up = np.stack([-along[:, 1], along[:, 0]], axis=1)
    middle = at + up * (height * (ASCENT - DESCENT) / 2.0)[:, None]
    return Boxes(middle, along, np.stack([width, height * (ASCENT + DESCENT)], axis=1) / 2.0)


def arrow_label(arrow: Array, text: str) -> Label:
    """The word of an arrow (2, 2) [mm], set across its tail."""
    length = float(np.hypot(*(arrow[1] - arrow[0])))
    ahead = (arrow[1] - arrow[0]) / length
    height = length / 5.0
    angle = upright(math.atan2(-ahead[0], ahead[1]))
    up = np.array([-math.sin(angle), math.cos(angle)])
    return Label(text, arrow[0] - ahead * height - up * height / 2.0, angle, height)


def arrow_box(arrow: Array, text: str) -> Boxes:
    """The rectangle that an arrow (2, 2) [mm] and its word fill."""
    length = float(np.hypot(*(arrow[1] - arrow[0])))
    ahead = (arrow[1] - arrow[0]) / length
    tail = arrow[0] - ahead * length / 5.0 * 1.7
    size = np.array([[1.34 * length, max(text_width(text, length / 5.0), 0.3 * length)]])
    return Boxes((tail + arrow[1])[None] / 2.0, ahead[None], size / 2.0)
