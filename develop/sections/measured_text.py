"""The text form of a measured section: `measured 0:322 45:326 90:327 135:323 ellipse`."""

from __future__ import annotations

import re
from math import ceil, floor, inf

from develop.sections.spec import FLATTEST, SectionSpec, Taped, refused
from develop.sections.words import size_of
from develop.units import number_text, parse_number
from develop.wording import near_miss, shown

__all__ = ["FITS", "MOST_BY_ELLIPSE", "read_measured"]

FITS = ("ellipse", "smooth")
MOST_BY_ELLIPSE = 4
"""Up to so many readings an ellipse is fitted unless the text says otherwise."""

_FEWEST, _MOST = 3, 72
_WIDEST_GAP = 90.0
# Nearer than this two readings [deg] are one direction measured twice.
_SAME = 0.5
_FORM = (
    "direction of the caliper in degrees and the diameter across there, three or more times: "
    "measured 0:322 45:326 90:327 135:323, perhaps with ellipse or smooth"
)
_READING = re.compile(r"(?:^|(?<=[\s,;]))([-+]?[0-9]+(?:\.[0-9]*)?)\s*(?:°|deg|degrees)?\s*:")
_FIT = re.compile(r"(?:^|[\s,;])([^\W\d_]+)\s*$")
_UNIT_WORDS = ("mm", "cm", "m", "in", "ft")


def read_measured(text: str, rest: str, unit: str) -> SectionSpec:
    """The curve fitted to the diameters in `rest`; bare lengths in `unit`. Raises InputError.

    Directions are degrees anticlockwise from the right, facing end B; one half turn is enough.
    """
    readings, fit = _split(text, rest)
    taped = _sorted(text, [(_direction(text, d), size_of(text, s, unit)) for d, s in readings])
    directions, diameters = tuple(d for d, _ in taped), tuple(s for _, s in taped)
    _check_spread(text, directions)
    return _fitted(
        text, directions, diameters, fit or ("ellipse" if len(taped) <= MOST_BY_ELLIPSE else "smooth")
    )


def _split(text: str, rest: str) -> tuple[list[tuple[str, str]], str]:
    """Direction and diameter of each reading as text, and the word for the fit if there is one."""
    fit = ""
    last = _FIT.search(rest)
    if last and last[1].lower() not in _UNIT_WORDS:
        fit, rest = last[1].lower(), rest[: last.start()]
        if fit not in FITS:
            raise refused(f"{shown(text)} has the word {shown(last[1])}{near_miss(fit, FITS)}", _FORM)
    parts = _READING.split(rest)
    if parts[0].strip() or len(parts) < 2:
        raise refused(f"{shown(text)} is not a list of diameters", _FORM)
    return [
        (direction, size.strip(" \t,;")) for direction, size in zip(parts[1::2], parts[2::2], strict=True)
    ], fit


def _direction(text: str, direction: str) -> float:
    degrees = parse_number(direction, what="a direction", allowed=_FORM)
    if abs(degrees) > 360.0:
        raise refused(f"{shown(text)}: {direction} degrees is more than a full turn", _FORM)
    return degrees % 180.0 if degrees % 180.0 < 180.0 else 0.0


def _sorted(text: str, readings: list[tuple[float, float]]) -> list[tuple[float, float]]:
    if not _FEWEST <= len(readings) <= _MOST:
        raise refused(
            f"{shown(text)} has {len(readings)} reading{'s' * (len(readings) != 1)}",
            f"{_FEWEST} to {_MOST} readings; for two sizes along the axes: ellipse 600 x 300",
        )
    return sorted(readings)


def _check_spread(text: str, directions: tuple[float, ...]) -> None:
    following = (*directions[1:], directions[0] + 180.0)
    for one, other in zip(directions, following, strict=True):
        if other - one < _SAME:
            raise refused(
                f"{shown(text)} has two readings at {number_text(one)} degrees",
                "each direction once; one half turn away it is the same diameter",
            )
        if other - one > _WIDEST_GAP + 1e-9:
            raise refused(
                f"{shown(text)} leaves {number_text(other - one)} degrees from {number_text(one)} to "
                f"{number_text(other % 180.0)} without a reading",
                f"readings at most {_WIDEST_GAP:g} degrees apart round a half turn",
            )


def _fitted(text: str, directions: tuple[float, ...], diameters: tuple[float, ...], fit: str) -> SectionSpec:
    from develop.sections.measured import NotConvex, curve_of, fitted
    from develop.sections.odd_reading import odd_reading

    try:
        curve, residuals = fitted(directions, diameters, fit)
    except NotConvex as error:
        found = odd_reading(directions, diameters)
        if found is None:
            raise refused(
                f"{shown(text)}: {error}", "the diameters of a section without hollows; measure again"
            ) from None
        at, low, high = found
        size = diameters[at]
        off = f"{low - size:.4g} mm less" if size < low else f"{size - high:.4g} mm more"
        raise refused(
            f"{shown(text)} makes a hollow: the reading {number_text(directions[at])}:{number_text(size)} is "
            f"{off} than its neighbours allow",
            f"the diameters of a section without hollows, there {_between(low, high)}; measure again at "
            f"{number_text(directions[at])} degrees",
        ) from None
    taped = Taped(directions, diameters, residuals, fit, curve)
    section = curve_of(taped)
    width, height = section.width, section.height
    if max(diameters) > FLATTEST * min(diameters):
        raise refused(f"{shown(text)} is flatter than 1 to {FLATTEST:g}", "rounder sections")
    pairs = (f"{number_text(d)}:{number_text(s)}" for d, s in zip(directions, diameters, strict=True))
    return SectionSpec("measured", width, height, f"measured {' '.join(pairs)} {fit}", taped=taped)


def _between(low: float, high: float) -> str:
    """A range of sizes [mm], rounded inwards."""
    least, most = number_text(ceil(low * 10.0) / 10.0), number_text(floor(high * 10.0) / 10.0)
    if low <= 0.0:
        return f"{most} mm or less"
    return f"{least} mm or more" if high == inf else f"from {least} to {most} mm"
