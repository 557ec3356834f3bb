"""Words that stand beside what a picture shows, clear of it and of each other, each at the end of a line."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.lettering import CAPITAL, text_width

__all__ = ["Beside", "placed"]

_STEP = 0.05  # [in] by which a line is drawn out
_MOST = 400
_WAYS = np.linspace(0.0, 2.0 * np.pi, 73)[:-1]
_NORMALS = np.stack([np.cos(_WAYS), np.sin(_WAYS)], axis=1)
_ROUNDS = 3
_AIR = 0.4  # round a word, over the height of its type


@dataclass(frozen=True)
class Beside:
    """A word, and the line from what it names to its middle; start, end: (2,) in the picture.

    size: of the box that is kept for it (2,).
    """

    text: str
    start: Array
    end: Array
    size: Array


def placed(
    words: Sequence[tuple[str, Array, Array]], shown: Array, *, window: tuple[float, float], type_size: float
) -> tuple[tuple[Beside, ...], Array]:
    """The words with their places, and the least and greatest coordinates of the whole (2, 2).

    words: text, start (2,) and direction of the line (2,). shown: points (n, 2) of all that is drawn,
    whose convex hull the words keep out of. window: width and height of the picture [in]; type_size [points].
    """
    low, high = shown.min(axis=0), shown.max(axis=0)
    reach = (shown @ _NORMALS.T).max(axis=0)
    found: tuple[Beside, ...] = ()
    for _ in range(_ROUNDS):
        # How large the type is beside what is drawn depends on how far the words reach out.
        scale = float(((high - low) / window).max())
        found = ()
        for text, start, way in words:
            found = (*found, _clear(text, start, way, reach, found, scale, type_size))
        ends = np.array([each.end + sign * each.size / 2.0 for each in found for sign in (-1.0, 1.0)])
        every = np.vstack([shown, *ends])
        low, high = every.min(axis=0), every.max(axis=0)
    return found, np.stack([low, high])


def _clear(
    text: str,
    start: Array,
    way: Array,
    reach: Array,
    others: Sequence[Beside],
    scale: float,
    type_size: float,
) -> Beside:
    """The word at the first place along its line that is free."""
    tall = type_size / 72.0 * scale
    size = np.array([1.1 * text_width(text, CAPITAL * tall), tall]) + 2.0 * _AIR * tall
    ahead = way / np.hypot(*way)
    corners = size / 2.0 * np.array([[1, 1], [1, -1], [-1, 1], [-1, -1]])
    end = start
    for k in range(1, _MOST):
        end = start + k * _STEP * scale * ahead
        outside = ((end + corners) @ _NORMALS.T).min(axis=0) > reach
        off = all((np.abs(end - each.end) > (size + each.size) / 2.0).any() for each in others)
        if outside.any() and off:
            break
    return Beside(text, start, end, size)
