"""How tightly a pattern is rolled, where, and what that asks of the sheet: information and cautions."""

from __future__ import annotations

from math import isfinite
from typing import TYPE_CHECKING

import numpy as np

from develop.pattern.pattern import Forming
from develop.pieces.wording import direction_words, measured_words
from develop.quadrature import Array, Indices, Mask

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.solid import Solid
    from develop.tables.materials import Material

__all__ = ["forming_facts", "forming_of", "forming_strain", "forming_warnings"]

# Radii that differ by less, in parts, are the same; and so little that both places are named: between
# the lines of the closing check, where radii are known, the least may be missed by as much.
_SAME, _AS_TIGHT = 1e-9, 2e-3
_ROUNDING = 1e-9  # [mm]
_STILL = 1e-12  # [rad] less turn there is none
_FLAT = 1e9  # [mm] what is rolled to no less is flat
_NAMED = 4  # places that are named one by one
# From this thickness [mm] up a sheet is plate, which codes for vessels and pipework may be about. Common
# practice, no source.
_PLATE = 3.0
# [%] Above this the pressure-vessel codes commonly ask for heat treatment of carbon steel. From memory.
_STRAIN = 5.0


def forming_strain(*, thickness: float, radius: float) -> float:
    """Strain of the outer fibre [%] of a flat plate of a thickness bent to a mean radius [mm]: 50 t / R.

    Elementary bending: a fibre t / 2 outside the middle, whose length stays, is longer by t / 2 in R.

    >>> forming_strain(thickness=10.0, radius=250.0)
    2.0
    """
    return 50.0 * thickness / radius if radius > 0.0 else float("inf")


def forming_of(
    pattern: Pattern,
    solid: Solid,
    *,
    thickness: float,
    neutral_line: float,
    known: Material | None,
) -> Forming | None:
    """Where a rolled pattern is tightest; None where it is flat all over.

    thickness [mm]. neutral_line: of the developed sheet, 0 inside to 1 outside. known: the material.
    An end that is a point is left out: there every radius runs out. Of a part of a side its own stretch
    alone is looked at.
    """
    radius = pattern.rulings.radius
    ends = "ab" if pattern.net.curve("b") is not None else "a"
    radius = radius[:, : len(ends)]
    if not len(radius):
        return None
    step = np.maximum(*(np.hypot(*np.diff(end, axis=0).T) for end in (pattern.rulings.a, pattern.rulings.b)))
    flat = np.asarray((pattern.rulings.turn[1:] < _STILL) & (step > _ROUNDING))
    # A line with flat sheet on both its sides is not bent, whatever the radius beyond.
    # What lies beyond a part's first and last lines is its neighbours' to say.
    once_round = solid.stop is None
    after, before = (flat[0], flat[-1]) if once_round else (True, True)
    bent = ~(np.append(flat, after) & np.append(before, flat))
    least = float(np.min(radius[bent], initial=_FLAT))
    if least >= _FLAT:
        return None
    tight = (radius <= least + _AS_TIGHT * abs(least) + _ROUNDING) & bent[:, None]
    at = "".join(end for k, end in enumerate(ends) if tight[:, k].any())
    lines: Mask = np.asarray(tight.any(axis=1))
    which = _tightest(radius.min(axis=1), lines, flat, once_round=once_round)
    middle = least + thickness * (0.5 - neutral_line)
    inside = max(0.0, least - thickness * neutral_line)
    pressed = any(line.press for line in pattern.lines)
    published = None
    if known is not None and thickness:
        published = known.least_bend_radius(thickness=thickness)
    return Forming(
        radius=max(0.0, middle),
        inside=inside,
        ends=at,
        directions=_directions(pattern, solid, which, at) if len(which) else (),
        strain=None
        if pressed or not thickness
        else forming_strain(thickness=thickness, radius=max(middle, 0.5 * thickness)),
        least=published,
        source=known.bend_source if known is not None and published is not None else "",
    )


_ROUND = 180  # places round a cut end that its centre is taken from


def _tightest(radius: Array, lines: Mask, flat: Mask, *, once_round: bool) -> Indices:
    """Numbers of the tightest line of each run of tight ones, the middle one where they are all the same;
    none where one run goes all round, or over a whole part.

    radius, lines: of n lines, the first and the last of which are the two sides of the seam, and so one where
    they go once round. flat: whether the sheet is flat between each and the next (n - 1,); there a run ends.
    """
    if not once_round:
        if lines.all() and not flat.any():
            return np.zeros(0, dtype=int)
        # As if a line that is not tight lay between the last and the first.
        radius, lines = np.append(radius, [np.inf, np.inf]), np.append(lines, [False, False])
        flat = np.append(flat, [False, False])
    count = len(lines) - 1
    tight = lines[:-1] | (np.arange(count) == 0) & lines[-1]
    on = tight & np.roll(tight, -1) & ~flat
    if on.all():
        return np.zeros(0, dtype=int)
    first = int(np.flatnonzero(~on)[0]) + 1
    runs: list[list[int]] = [[]]
    bent, following = tight.tolist(), on.tolist()
    for number in ((np.arange(count) + first) % count).tolist():
        if bent[number]:
            runs[-1].append(number)
        if not following[number]:
            runs.append([])
    found = []
    for run in filter(None, runs):
        least = radius[run].min()
        same = np.flatnonzero(radius[run] <= least * (1.0 + _SAME) + _ROUNDING)
        found.append(run[int(same[len(same) // 2])])
    return np.array(found)


def _directions(pattern: Pattern, solid: Solid, which: Indices, ends: str) -> tuple[float, ...]:
    """Directions [rad] in which the tight places of these lines are seen from their end's centre."""
    u = pattern.rulings.u[which]
    if "a" in ends:
        found = solid.end_a.section.direction(u)
    else:
        strip = solid.strip(u)
        # A cut end has no centre of its own: that of what is seen all round it.
        centre = solid.rim_b(_ROUND).mean(axis=0) if solid.cut_b is not None else solid.end_b.origin
        gap = strip.b - centre
        found = np.arctan2(gap[:, 1], gap[:, 0]) % (2.0 * np.pi)
    # To a tenth of a degree, so that 360 is 0.
    whole = np.radians(np.round(np.degrees(found), 1) % 360.0)
    return tuple(float(each) for each in np.unique(whole))


def _place(forming: Forming) -> str:
    """Where it is, in words."""
    end = "both ends" if forming.ends == "ab" else f"END {forming.ends.upper()}"
    if not forming.directions:
        return f"all round, {end}"
    words = [direction_words(each) for each in forming.directions]
    if len(words) > _NAMED:
        words = [*words[: _NAMED - 1], f"{len(words) - _NAMED + 1} more"]
    listed = " and ".join(filter(None, (", ".join(words[:-1]), words[-1])))
    return f"at {listed}, {end}"


def forming_facts(forming: Forming, *, units: str) -> tuple[str, ...]:
    """What the sheets say of it; units as for `build`."""
    radius = measured_words(forming.radius, units)
    facts = [f"tightest radius {radius} {_place(forming)}"]
    if forming.strain is not None and isfinite(forming.strain):
        facts.append(f"strain 50 t/R = {forming.strain:.2g} %, springback not in it")
    return tuple(facts)


def forming_warnings(forming: Forming, *, thickness: float, units: str) -> tuple[str, ...]:
    """Cautions for plate strained beyond what codes commonly allow as rolled, and for bends tighter than
    published. thickness [mm]; units as for `build`."""
    found = []
    if forming.strain is not None and forming.strain > _STRAIN and thickness >= _PLATE:
        found.append(
            f"forming strain {forming.strain:.2g} % {_place(forming)}: above {_STRAIN:g} % codes for "
            "pressure vessels commonly ask for heat treatment (from memory; the code in force decides)"
        )
    if forming.least is not None and forming.inside < forming.least:
        inside, least = (measured_words(each, units) for each in (forming.inside, forming.least))
        found.append(
            f"inside radius {inside} {_place(forming)} is below {least}, the published least for a bend in "
            "this sheet (guidance; ask the maker of the sheet)"
        )
    return tuple(found)
