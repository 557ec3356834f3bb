"""Width and height of an ellipse or a flat oval from its girth, area or ratio.

What is given is a pair: girth or area with one size or with the ratio, height over width. An
ellipse of given girth and size is found by a bracketed root; everything else is a closed form.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from math import isfinite, pi, sqrt

from develop.sections.spec import FLATTEST, LARGEST, SMALLEST

__all__ = ["PAIRS", "NoSuchSize", "girth_of", "root", "sizes_of"]

PAIRS = (
    *(frozenset({whole, part}) for whole in ("girth", "area") for part in ("width", "height", "ratio")),
    *(frozenset(pair) for pair in (("width", "height"), ("width", "ratio"), ("height", "ratio"))),
)
"""What may be given together."""


class NoSuchSize(ValueError):
    """No section has what was given: `word` would have to lie from `least` to `most` (mm or a ratio).

    most below least: none would do, as the girth or area itself is out of range.
    """

    def __init__(self, *, word: str, least: float, most: float) -> None:
        self.word, self.least, self.most = word, least, most
        super().__init__(f"{word} from {least:g} to {most:g}")


def girth_of(kind: str, *, width: float, height: float) -> float:
    """Girth [mm] of an `ellipse` or a `flat-oval` of two sizes [mm]."""
    if kind == "flat-oval":
        return 2.0 * max(width, height) + (pi - 2.0) * min(width, height)
    from develop.sections.ellipse import ellipse_girth

    return ellipse_girth(0.5 * width, 0.5 * height)


def _area_of(kind: str, width: float, height: float) -> float:
    if kind == "ellipse":
        return 0.25 * pi * width * height
    return width * height - (1.0 - 0.25 * pi) * min(width, height) ** 2


def sizes_of(kind: str, given: Mapping[str, float]) -> tuple[float, float]:
    """Width and height [mm] of an `ellipse` or `flat-oval` by one of `PAIRS` of values [mm, mm²].

    Both lie within SMALLEST and LARGEST and within FLATTEST of each other, else NoSuchSize says
    what range the size or the ratio would have to lie in.

    >>> sizes_of("flat-oval", {"girth": 600 + 300 * pi, "height": 300})
    (600.0, 300)
    """
    width, height = _solved(kind, given)
    if not _possible(width, height):
        raise _range(kind, given)
    return width, height


def _solved(kind: str, given: Mapping[str, float]) -> tuple[float, float]:
    if "ratio" in given:
        return _by_ratio(kind, given)
    if "width" in given and "height" in given:
        return given["width"], given["height"]
    # Both curves stay what they are when width and height change places.
    word = "width" if "width" in given else "height"
    other = _other_size(kind, given[word], girth=given.get("girth"), area=given.get("area"))
    return (given[word], other) if word == "width" else (other, given[word])


def _possible(width: float, height: float) -> bool:
    small, large = min(width, height), max(width, height)
    slack = 1.0 + 1e-12
    return small * slack >= SMALLEST and large <= LARGEST * slack and large <= FLATTEST * small * slack


def _by_ratio(kind: str, given: Mapping[str, float]) -> tuple[float, float]:
    ratio = given["ratio"]
    if "width" in given:
        return given["width"], ratio * given["width"]
    if "height" in given:
        return given["height"] / ratio, given["height"]
    if "girth" in given:
        width = given["girth"] / girth_of(kind, width=1.0, height=ratio)
    else:
        width = sqrt(given["area"] / _area_of(kind, 1.0, ratio))
    return width, ratio * width


def _other_size(kind: str, size: float, *, girth: float | None, area: float | None) -> float:
    """The other size; 0 or inf where there is none."""
    if kind == "ellipse":
        if area is not None:
            return area / (0.25 * pi * size)
        assert girth is not None
        return _ellipse_size(size, girth)
    if area is not None:
        k = 1.0 - 0.25 * pi
        if area >= (1.0 - k) * size * size:
            return area / size + k * size
        # size·x − k x² = area, its smaller root without loss.
        return 2.0 * area / (size + sqrt(size * size - 4.0 * k * area))
    assert girth is not None
    if girth >= pi * size:
        return 0.5 * (girth - pi * size) + size
    return max((girth - 2.0 * size) / (pi - 2.0), 0.0)


def _ellipse_size(size: float, girth: float) -> float:
    # The girth lies above twice either size and below twice their sum plus a half turn.
    if girth <= 2.0 * size:
        return 0.0
    return root(lambda other: girth_of("ellipse", width=size, height=other) - girth, 0.0, 0.5 * girth)


def root(function: Callable[[float], float], low: float, high: float) -> float:
    """Where a growing function changes sign between low and high, to the last digit, by halving.

    >>> root(lambda x: x * x - 2.0, 0.0, 2.0)
    1.4142135623730951
    """
    while True:
        middle = 0.5 * (low + high)
        if not low < middle < high:
            break
        if function(middle) < 0.0:
            low = middle
        else:
            high = middle
    return low if abs(function(low)) < abs(function(high)) else high


def _range(kind: str, given: Mapping[str, float]) -> NoSuchSize:
    """The range of the size or ratio that would go with the girth, area or other size given."""
    whole = next((word for word in ("girth", "area") if word in given), "")
    word = next(each for each in ("ratio", "height", "width") if each in given)
    if not whole:
        size = given["width"] if "width" in given else given["height"]
        low, high = max(SMALLEST, size / FLATTEST), min(LARGEST, size * FLATTEST)
        if word == "ratio":
            low, high = (low / size, high / size) if "width" in given else (size / high, size / low)
        return NoSuchSize(word=word, least=low, most=high)
    if word == "ratio":
        # Ratios that work lie about 1 alike in their logarithm.
        least, most = (
            _edge(lambda ratio: _fits(kind, {whole: given[whole], "ratio": ratio}), 1.0, bound)
            for bound in (1.0 / FLATTEST, FLATTEST)
        )
        return NoSuchSize(word=word, least=least, most=most)
    middle = given["girth"] / pi if whole == "girth" else sqrt(given["area"] / (0.25 * pi))
    least, most = (
        _edge(lambda size: _fits(kind, {whole: given[whole], word: size}), middle, middle * bound)
        for bound in (0.5 / FLATTEST, 2.0 * FLATTEST)
    )
    return NoSuchSize(word=word, least=least, most=most)


def _fits(kind: str, given: Mapping[str, float]) -> bool:
    return _possible(*_solved(kind, given))


def _edge(fits: Callable[[float], bool], inside: float, outside: float) -> float:
    """The last value from inside towards outside that fits; nan where not even the first does."""
    if not (isfinite(inside) and fits(inside)):
        return float("nan")
    if fits(outside):
        return outside
    for _ in range(60):
        middle = sqrt(inside * outside)
        inside, outside = (middle, outside) if fits(middle) else (inside, middle)
    return inside
