"""Press lines: where a press brake bends a sheet in steps that a roll would bend smoothly."""

from __future__ import annotations

from dataclasses import dataclass
from math import degrees, floor, pi

import numpy as np

from develop.errors import Refusal
from develop.pattern.pattern import Figures
from develop.quadrature import Array, Indices, Mask
from develop.sections.section import Section
from develop.surfaces.sheet import Lines, Place, Sheet
from develop.units import number_text

__all__ = ["Press", "PressLines", "press_lines"]

# Less turn [rad] than this a sheet is flat.
_FLAT = 1e-9
_POINT = 1e-6  # [mm]
_GRID = np.linspace(0.0, 1.0, 9)
_ROUNDS = 7
# Nearest that lines are drawn to a sharp corner in which they meet [mm], and in thicknesses; and the
# most of a line that is left away there. Common practice, no source.
_SHORT, _THICKNESSES, _MOST = 10.0, 3.0, 0.3


@dataclass(frozen=True)
class Press:
    """How a sheet is bent: `kicks` to every right angle that a section turns; die: the smallest spacing
    of lines that it allows [mm], 0 if that is not known; thickness [mm]."""

    kicks: int
    die: float
    thickness: float


@dataclass(frozen=True)
class PressLines:
    """The rulings to be bent, from left to right.

    place: of the n lines. angle: that each is bent by (n,) [rad]. short: what is left away of each at
    edges A and B, (n, 2) [mm].
    """

    place: Place
    angle: Array
    short: Array

    def facts(self, *, mirror: bool) -> tuple[str, str]:
        """What the pattern says of them. mirror: the inside of the sheet is up."""
        low, high = (degrees(each(self.angle)) for each in (np.min, np.max))
        count = f"{len(self.angle)} press line{'s' * (len(self.angle) != 1)}"
        same = f"{low:.1f}°" == f"{high:.1f}°"
        bent = f"{low:.1f}° each" if same else f"{low:.1f}° to {high:.1f}° each"
        # The sides of every piece are convex: all bends go the same way.
        way = "towards you: this face is the inside" if mirror else "away from you: this face is the outside"
        return f"{count}, bent {bent}", f"bend {way}"

    def figures(self, *, mirror: bool, first: int = 1) -> Figures:
        """Angles, and where the lines stop short of the edges; numbered from `first` as the lines to mark
        out."""
        step = -1 if mirror else 1
        rows = tuple(
            (str(n), f"{degrees(angle):.1f}", float(a), float(b))
            for n, (angle, (a, b)) in enumerate(
                zip(self.angle[::step], self.short[::step], strict=True), first
            )
        )
        heads = (("line", "no."), ("bent by", "degrees"), ("stops short", "of A"), ("stops short", "of B"))
        return Figures("Press lines", heads, rows)


def press_lines(sheet: Sheet, section: Section, press: Press) -> PressLines:
    """The press lines of a sheet; section: of its end A.

    Between flats the sheet turns without a break. Each such stretch is bent in equal angles, as many
    as its share of a right angle of the section asks for, each line in the middle of its part of the
    turn; a stretch that is one line only (a fold) is bent at once. Raises Refusal where lines come
    closer than the die allows on both edges.
    """
    found = _lines(sheet, section, press.kicks)
    spacing = _spacing(sheet.lines(found[0]))
    if press.die > 0.0 and spacing < press.die:
        for kicks in range(press.kicks - 1, 0, -1):
            if _spacing(sheet.lines(_lines(sheet, section, kicks)[0])) >= press.die:
                allowed = f"{kicks} or fewer, or a die of {_rounded_down(spacing)} mm"
                break
        else:
            allowed = f"a die of {_rounded_down(spacing)} mm, or a piece that is rolled: 0"
        raise Refusal(
            field="kicks",
            given=f"{press.kicks} a corner brings press lines within {spacing:.4g} mm of each other, the die "
            f"needs {number_text(press.die)} mm",
            allowed=allowed,
        )
    place, angle, folds = found
    return PressLines(place, angle, _short(sheet.lines(place), folds, press))


def _rounded_down(length: float) -> str:
    return number_text(floor(length * 10.0) / 10.0)


def _lines(sheet: Sheet, section: Section, kicks: int) -> tuple[Place, Array, Mask]:
    """Places (n,), angles (n,) [rad] and whether each is a fold (n,)."""
    at, ends = sheet.at_ends, sheet.ends
    turns = np.diff(at.turn)
    step = np.diff(at.u_a) % section.period
    step = np.where(step > section.period * (1.0 - 1e-9), 0.0, step)
    right_angles = (section.turning(at.u_a[:-1] + step) - section.turning(at.u_a[:-1])) / (0.5 * pi)
    bends = turns > _FLAT
    first = np.flatnonzero(bends & ~np.append(False, bends[:-1]))
    last = np.flatnonzero(bends & ~np.append(bends[1:], False)) + 1
    targets, angles, folds = [], [], []
    for i, j in zip(first, last, strict=True):
        turn = at.turn[j] - at.turn[i]
        fold = max(at.arc_a[j] - at.arc_a[i], at.arc_b[j] - at.arc_b[i]) < _POINT
        count = 1 if fold else max(1, round(kicks * float(right_angles[i:j].sum())))
        targets.append(at.turn[i] + (np.arange(count) + 0.5) / count * turn)
        angles.append(np.full(count, turn / count))
        folds.append(np.full(count, fold))
    wanted = np.concatenate(targets)
    panel = np.clip(np.searchsorted(at.turn, wanted, side="right") - 1, 0, len(turns) - 1)
    return _at_turn(sheet, ends.panel[panel], wanted), np.concatenate(angles), np.concatenate(folds)


def _at_turn(sheet: Sheet, panel: Indices, wanted: Array) -> Place:
    """Where on its panel (n,) the sheet has turned by so much (n,): narrowed down on a grid."""
    n = len(wanted)
    low, high = np.full(n, -1.0), np.full(n, 1.0)
    for _ in range(_ROUNDS):
        x = low[:, None] + (high - low)[:, None] * _GRID
        turn = sheet.lines(Place(np.repeat(panel, len(_GRID)), x.ravel())).turn.reshape(x.shape)
        i = np.clip((turn <= wanted[:, None]).sum(axis=1) - 1, 0, len(_GRID) - 2)
        rows = np.arange(n)
        low, high, under, over = x[rows, i], x[rows, i + 1], turn[rows, i], turn[rows, i + 1]
    gap = over - under
    share = np.where(gap > 0.0, (wanted - under) / np.where(gap > 0.0, gap, 1.0), 0.5)
    return Place(panel, low + np.clip(share, 0.0, 1.0) * (high - low))


def _apart(at: Lines) -> Array:
    """Distances (n - 1, 2) of neighbouring lines at edges A and B [mm]."""
    return np.stack([np.hypot(*np.diff(end, axis=0).T) for end in (at.a, at.b)], axis=-1)


def _spacing(at: Lines) -> float:
    """The smallest spacing of neighbouring lines, each pair where it is widest [mm]."""
    return float(_apart(at).max(axis=1).min()) if len(at.length) > 1 else np.inf


def _short(at: Lines, folds: Mask, press: Press) -> Array:
    """How far lines stop short of edges A and B (n, 2) [mm]: of a sharp corner in which they meet, and
    of where they come closer than the die allows."""
    n = len(at.length)
    sharp = np.stack([at.radius_a, at.radius_b], axis=-1) < _POINT
    least = max(_SHORT, _THICKNESSES * press.thickness)
    short = np.where(sharp & ~folds[:, None], least, 0.0)
    apart = _apart(at)
    for i, j in ((np.arange(n - 1), np.arange(1, n)), (np.arange(1, n), np.arange(n - 1))):
        gap = apart[np.minimum(i, j)]
        for end in (0, 1):
            near, far = gap[:, end], gap[:, 1 - end]
            closer = (near < press.die) & (far > near)
            share = np.where(closer, (press.die - near) / np.where(closer, far - near, 1.0), 0.0)
            short[i, end] = np.maximum(short[i, end], share * at.length[i])
    return np.minimum(short, _MOST * at.length[:, None])
