"""Where the neutral line lies: a number, or a published rule evaluated on the side that is rolled."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from typing import TYPE_CHECKING

from develop.errors import Refusal
from develop.units import number_text

if TYPE_CHECKING:
    from develop.quadrature import Array, Indices
    from develop.surfaces.sheet import Sheet

__all__ = ["Neutral", "neutral_of"]

_HALVINGS = 50
# Places on each panel at which the radius is looked at; between two that differ the change is found.
_BETWEEN = 16


@dataclass(frozen=True)
class Neutral:
    """The place of the neutral line, 0 inside to 1 outside.

    rule, source: of a published rule, empty for a number. least, most: what the rule gives round the side.
    """

    place: float
    rule: str = ""
    source: str = ""
    least: float = 0.0
    most: float = 0.0

    def words(self) -> tuple[str, ...]:
        """What the sheets say of a place that a rule has given."""
        if not self.rule:
            return ()
        said = f"neutral line {number_text(round(self.place, 3))} from the inside, by the rule {self.rule}"
        if self.least == self.most:
            return (said,)
        return (
            said,
            f"({number_text(round(self.least, 3))} to {number_text(round(self.most, 3))} round the section: "
            "their mean by turn)",
        )


def neutral_of(line: float | str, *, thickness: float, inner: float, sheet: Callable[[], Sheet]) -> Neutral:
    """The place of the neutral line.

    line: the place itself, or the name of a rule in `tables/bends.toml`. inner: how far the inside of the
    wall lies inside the given surface [mm], like thickness. sheet: the given surface laid flat.

    The girth along a line at the places p(φ) of the thickness t is that of the inside and t ∫ p dφ, so
    one place, the mean of the rule's by turn, gives the girth that the rule gives with a place of its own
    for each bend. On tapered work it is the mean over both ends. Raises Refusal.
    """
    if not isinstance(line, str):
        return Neutral(line)
    from develop.tables.bend_allowance import bend_rules, neutral_line

    if thickness == 0.0:
        raise Refusal(
            field="neutral_line",
            given=f"the rule {line} needs a thickness, and none is given",
            allowed="a thickness, or a number from 0 to 1",
        )
    rule = bend_rules()[line]
    if not rule.steps:
        place = neutral_line(line, radius=0.0, thickness=thickness)
        return Neutral(place, line, rule.source, place, place)
    bounds = [bound * thickness for bound, _ in rule.steps[:-1]]
    places = [place for _, place in rule.steps]
    turns = _turns(sheet(), inner, bounds)
    used = [place for place, turn in zip(places, turns, strict=True) if turn > 0.0]
    mean = sum(place * turn for place, turn in zip(places, turns, strict=True)) / sum(turns)
    return Neutral(used[0] if len(used) == 1 else mean, line, rule.source, min(used), max(used))


def _turns(sheet: Sheet, inner: float, bounds: list[float]) -> list[float]:
    """How far the sheet turns [rad], of both ends, at inside radii below each bound [mm], and above all."""
    import numpy as np

    from develop.surfaces.sheet import Place

    panels = len(sheet.ends.panel) - 1
    x = np.linspace(-1.0, 1.0, _BETWEEN + 1)
    middles = 0.5 * (x[1:] + x[:-1])

    def steps(panel: Indices, at: Array) -> Array:
        lines = sheet.lines(Place(panel, at))
        radii = np.stack([lines.radius_a, lines.radius_b]) - inner
        # A hair more counts as the bound, so that rounding decides nothing.
        return np.asarray(np.searchsorted(bounds, radii * (1.0 + 1e-12), side="right"))

    def turned(at: Array) -> Array:
        return sheet.lines(Place(owner, at)).turn

    owner = np.repeat(np.arange(panels), _BETWEEN)
    at = np.tile(middles, panels)
    found = steps(owner, at)
    ends = np.tile(x[1:], panels)
    # Ends of the stretches that have one step: middles whose neighbour in the panel differs are moved to
    # where the radius passes the bound.
    totals = np.zeros(len(bounds) + 1)
    for side in (0, 1):
        until = ends.copy()
        (change,) = np.nonzero((found[side][1:] != found[side][:-1]) & (owner[1:] == owner[:-1]))
        low, high = at[change], at[change + 1]
        for _ in range(_HALVINGS if len(change) else 0):
            middle = 0.5 * (low + high)
            before = steps(owner[change], middle)[side] == found[side][change]
            low, high = np.where(before, middle, low), np.where(before, high, middle)
        until[change] = 0.5 * (low + high)
        start = np.where(np.arange(len(until)) % _BETWEEN == 0, -1.0, np.roll(until, 1))
        share = turned(until) - turned(start)
        np.add.at(totals, found[side], np.maximum(share, 0.0))
    return [float(each) for each in totals]
