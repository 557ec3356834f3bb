"""The text form of a section: `round 400`, `ellipse 600 x 300`, `flat-oval girth 1256 height 200`."""

from __future__ import annotations

import re
from collections.abc import Callable, Mapping
from math import pi, sqrt

from develop.errors import InputError
from develop.sections.measured_text import read_measured
from develop.sections.pipe_text import read_pipe
from develop.sections.sizes import PAIRS, NoSuchSize, sizes_of
from develop.sections.spec import FLATTEST, LARGEST, SMALLEST, SectionSpec, refused
from develop.sections.words import Words, read_words
from develop.units import number_text
from develop.wording import listed, near_miss, shown

__all__ = ["ALLOWED", "FLATTEST", "LARGEST", "SMALLEST", "SectionSpec", "parse_section"]

_FORMS = {
    "round": "round 400",
    "ellipse": "ellipse 600 x 300",
    "flat-oval": "flat-oval 600 x 300",
    "superellipse": "superellipse 600 x 300 n 2.5",
    "rectangle": "rectangle 500 x 300 r 40",
    "pipe": "pipe DN 150",
    "measured": "measured 0:322 45:326 90:327 135:323",
}
ALLOWED = (
    f"{listed(_FORMS.values())}; sizes from 0.1 mm to 100 m; round, ellipse and flat-oval also by girth, "
    "area or ratio: ellipse girth 1256.6 height 300"
)
"""What a section may be, as messages and the help say it."""
_SIZE_TEXT = r"[0-9][^xX×]{0,20}"
# Ways in which people write a section that are not forms of their own.
_DIAMETER = re.compile(
    rf"(?:circle|circular|dia(?:m(?:eter)?)?\.?|[Øø⌀∅])?\s*({_SIZE_TEXT}?)\s*(?:dia(?:m(?:eter)?)?\.?|[Øø⌀∅])?",
    re.IGNORECASE,
)
_TWO_SIZES = re.compile(rf"(?:oval\s*)?({_SIZE_TEXT}[xX×]\s*{_SIZE_TEXT})", re.IGNORECASE)

_ROUND = "round 400, round girth 1257 or round area 125000"
_SIZED = "width x height; or two of girth, area, width, height, ratio (height over width)"
_LEAST_N, _MOST_N = 1.2, 20.0
# Words that people say for one of the kinds and that no spelling is near to.
_OTHER_NAMES = {"square": "rectangle", "circle": "round", "circular": "round", "oval": "flat-oval"}
# `ellipse600x300` and `flat oval 600 x 300` are clear enough to be taken for what they are.
_NAME = re.compile(
    r"\s*(round|ellipse|flat[- ]oval|superellipse|rectangle|pipe|measured)(?![^\W\d_])\s*(.*)",
    re.IGNORECASE | re.DOTALL,
)
# Sizes that follow from others are written to this many decimals of a mm.
_DECIMALS = 4


def parse_section(text: object, *, unit: str = "mm") -> SectionSpec:
    """The section that a text names; bare numbers in `unit`. Raises InputError with what is allowed.

    >>> parse_section("ellipse 24 in × 300").text
    'ellipse 609.6 x 300'
    >>> parse_section("ellipse height 300 girth 1256.6").text
    'ellipse 488.6535 x 300 (girth 1256.6, height 300)'
    """
    if not isinstance(text, str):
        raise refused(f"{shown(text)} is not a section", ALLOWED)
    found = _NAME.fullmatch(text)
    if found is None:
        raise refused(f"{shown(text)} is not a section{_hint(text.strip())}", ALLOWED)
    name = found[1].lower().replace(" ", "-")
    return _READERS[name](text, found[2].strip(), unit)


def _hint(text: str) -> str:
    """What a text that is no section was meant for, as far as it can be known."""
    diameter, two = _DIAMETER.fullmatch(text), _TWO_SIZES.fullmatch(text)
    if diameter:
        return f"; did you mean {shown(f'round {diameter[1]}')}?"
    if two:
        kinds = ("ellipse", "flat-oval") if text[0].isalpha() else ("ellipse", "flat-oval", "rectangle")
        return f"; did you mean {listed([shown(f'{kind} {two[1]}') for kind in kinds])}?"
    name = text.partition(" ")[0]
    other = _OTHER_NAMES.get(name.lower(), "")
    return f'; did you mean "{other}"?' if other else near_miss(name, _FORMS) if name else ""


def _round(text: str, rest: str, unit: str) -> SectionSpec:
    words = read_words(text, rest, ("girth", "area"), unit=unit, form=_ROUND)
    given = words.values
    if len(words.sizes) > 1:
        raise refused(
            f"{shown(text)} has two sizes; a round section has one, its diameter",
            f"{_ROUND}; or ellipse 600 x 300",
        )
    if len(given) > 1 or (given and words.sizes and not words.bracketed):
        raise refused(f"{shown(text)} is given more than once", _ROUND)
    if not given:
        if not words.sizes:
            raise refused(f"{shown(text)} has no diameter", f"{_ROUND}; 0.1 mm to 100 m")
        (size,) = words.sizes
        return SectionSpec("round", size, size, f"round {number_text(size)}")
    size = given["girth"] / pi if "girth" in given else 2.0 * sqrt(given["area"] / pi)
    if not SMALLEST <= size <= LARGEST:
        raise refused(
            f"{shown(text)} makes a diameter of {number_text(float(f'{size:.4g}'))} mm", "0.1 mm to 100 m"
        )
    _agree(text, words, (size,))
    # A tape goes round the outside, whatever the piece's `sizes` says of its other sections.
    name = f"round {_short(size)} ({_canonical(given)})"
    return SectionSpec("round", size, size, name, outside="girth" in given)


def _two_sized(kind: str) -> Callable[[str, str, str], SectionSpec]:
    keys = ("girth", "area", "width", "height", "ratio")

    def read(text: str, rest: str, unit: str) -> SectionSpec:
        words = read_words(text, rest, keys, unit=unit, form=f"{_FORMS[kind]}; {_SIZED}")
        given = words.values
        if not given:
            width, height = _two(text, words, kind)
            return SectionSpec(kind, width, height, f"{kind} {number_text(width)} x {number_text(height)}")
        if words.sizes and not words.bracketed:
            raise refused(f"{shown(text)} has sizes and more that would set them", _SIZED)
        if frozenset(given) not in PAIRS:
            if set(given) >= {"girth", "area"}:
                said = "girth and area together fit two sections, one wide and one high"
            else:
                said = f"has {listed(given)} alone" if len(given) == 1 else "has more than two of them"
            raise refused(f"{shown(text)}: {said}", f"{kind} with {_SIZED}")
        try:
            width, height = sizes_of(kind, given)
        except NoSuchSize as error:
            raise _impossible(text, kind, given, error) from None
        _agree(text, words, (width, height))
        if "girth" in given or "area" in given or "ratio" in given:
            name = f"{kind} {_short(width)} x {_short(height)} ({_canonical(given)})"
        else:
            name = f"{kind} {number_text(width)} x {number_text(height)}"
        return SectionSpec(kind, width, height, name)

    return read


def _two(text: str, words: Words, kind: str) -> tuple[float, float]:
    """Width and height where they are given as such."""
    if len(words.sizes) != 2:
        raise refused(f"{shown(text)} does not have two sizes", f"{_FORMS[kind]}; width, then height")
    width, height = words.sizes
    if max(width, height) > FLATTEST * min(width, height):
        raise refused(
            f"{shown(text)} is flatter than 1 to {FLATTEST:g}",
            f"width and height within 1 to {FLATTEST:g} of each other",
        )
    return width, height


def _impossible(text: str, kind: str, given: Mapping[str, float], error: NoSuchSize) -> InputError:
    whole = next((word for word in ("girth", "area", "width", "height") if word in given), "")
    unit = "mm²" if whole == "area" else "mm"
    article = "an" if kind[0] == "e" else "a"
    what = f"{article} {kind} of {whole} {number_text(given[whole])} {unit}"
    if not error.least <= error.most:
        return refused(
            f"{shown(text)}: there is no {what.partition(' ')[2]} within the limits of size",
            f"sizes from 0.1 mm to 100 m, within 1 to {FLATTEST:g} of each other",
        )
    length = "" if error.word == "ratio" else " mm"
    return refused(
        f"{shown(text)}: {what} cannot have the {error.word} {number_text(given[error.word])}{length}",
        f"{error.word} from {_inward(error.least, 1)} to {_inward(error.most, -1)}{length}",
    )


def _inward(value: float, side: int) -> str:
    """A bound to five digits, rounded to the side on which it still works."""
    text = f"{value:.5g}"
    if side * (float(text) - value) < 0:
        step = 10.0 ** (int(f"{value:e}".partition("e")[2]) - 4)
        text = f"{value + side * step:.5g}"
    return number_text(float(text))


def _superellipse(text: str, rest: str, unit: str) -> SectionSpec:
    words = read_words(text, rest, ("n",), unit=unit, form=_FORMS["superellipse"])
    width, height = _two(text, words, "superellipse")
    allowed = "n from 1.2 to 20: 2 is an ellipse, more is squarer"
    if "n" not in words.values:
        raise refused(f"{shown(text)} has no exponent", f"{_FORMS['superellipse']}; {allowed}")
    n = words.values["n"]
    if not _LEAST_N <= n <= _MOST_N:
        raise refused(f"{shown(text)} has the exponent {number_text(n)}", allowed)
    name = f"superellipse {number_text(width)} x {number_text(height)} n {number_text(n)}"
    return SectionSpec("superellipse", width, height, name, n=n)


def _rectangle(text: str, rest: str, unit: str) -> SectionSpec:
    words = read_words(text, rest, ("r",), unit=unit, form=_FORMS["rectangle"])
    width, height = _two(text, words, "rectangle")
    r = words.values.get("r", 0.0)
    half = 0.5 * min(width, height)
    if r > half:
        raise refused(
            f"{shown(text)}: corners of radius {number_text(r)} mm do not fit",
            f"r from 0 to {number_text(half)} mm, half the smaller size",
        )
    name = f"rectangle {number_text(width)} x {number_text(height)}"
    return SectionSpec("rectangle", width, height, f"{name} r {number_text(r)}" if r else name, r=r)


def _short(size: float) -> str:
    return number_text(round(size, _DECIMALS))


def _canonical(given: Mapping[str, float]) -> str:
    order = ("girth", "area", "width", "height", "ratio")
    return ", ".join(f"{word} {number_text(given[word])}" for word in order if word in given)


def _agree(text: str, words: Words, sizes: tuple[float, ...]) -> None:
    """Refuse sizes that do not follow from what stands in brackets behind them."""
    if not words.bracketed:
        return
    near = 0.6 * 10.0**-_DECIMALS
    if len(words.sizes) != len(sizes) or any(
        abs(said - size) > near + 1e-12 * size for said, size in zip(words.sizes, sizes, strict=True)
    ):
        made = " x ".join(map(_short, sizes))
        raise refused(
            f"{shown(text)}: what stands in brackets makes {made} mm",
            "sizes that follow from it, or one of the two alone",
        )


_READERS: dict[str, Callable[[str, str, str], SectionSpec]] = {
    "round": _round,
    "ellipse": _two_sized("ellipse"),
    "flat-oval": _two_sized("flat-oval"),
    "superellipse": _superellipse,
    "rectangle": _rectangle,
    "pipe": read_pipe,
    "measured": read_measured,
}
