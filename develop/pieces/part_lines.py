"""Where a side is parted: at lines that share the girth of end A, or on the flats between bends."""

from __future__ import annotations

import numpy as np

from develop.errors import Refusal
from develop.quadrature import Array
from develop.sections.section import Section
from develop.surfaces.sheet import Place, Sheet

__all__ = ["part_lines"]

# Less turn [rad] than this a sheet is flat; less of both edges [mm] a stretch is one line.
_FLAT, _LINE = 1e-9, 1e-6
# Nearer to a bend than this share of its flat a part line is moved to the middle of the flat.
_CLEAR = 0.05


def part_lines(sheet: Sheet, section: Section, count: int, *, opposite: bool, bent: bool) -> Place:
    """The rulings at which a whole sheet is parted, from its left seam to its right one (count + 1,).

    section: of end A, as developed. They share its girth equally; of two parts, where `opposite`, the one
    line lies opposite the seam, seen from the centre of end A. bent: on a press brake, so that every line
    comes to lie on the flat that is nearest to its share. Raises Refusal where there are too few flats.
    """
    start = sheet.at_ends.u_a[:1]
    if opposite and count == 2:
        u = section.at_direction(section.direction(start) + np.pi)
    else:
        shares = np.arange(1, count) / count
        u = section.at_arc(section.arc(start) + shares * section.girth)
    inner = sheet.from_a(u)
    if bent:
        inner = _on_flats(sheet, inner)
    ends = sheet.ends
    return Place(
        np.concatenate([ends.panel[:1], inner.panel, ends.panel[-1:]]),
        np.concatenate([ends.x[:1], inner.x, ends.x[-1:]]),
    )


def _on_flats(sheet: Sheet, wanted: Place) -> Place:
    """The rulings (k,) moved to the flats nearest to them, to each but one. Raises Refusal."""
    flats = _flats(sheet)
    if len(flats) < len(wanted.panel):
        raise Refusal(
            field="made_in",
            given=f"{len(wanted.panel) + 1} parts meet at {len(wanted.panel)} lines besides the seam, and "
            f"the side has {len(flats)} flats for them: a part line must not fall on a bend",
            allowed=f"{len(flats) + 1} or fewer",
        )
    at, ends = sheet.at_ends, sheet.ends
    gone = at.arc_a + at.arc_b
    lines = sheet.lines(wanted)
    targets = lines.arc_a + lines.arc_b
    panel, x = [], []
    free = list(flats)
    for k, target in enumerate(targets.tolist()):
        # Those that are left for the lines that follow stay free.
        choice = free[: len(free) - (len(targets) - k - 1)]
        apart = [max(gone[i] - target, target - gone[j], 0.0) for i, j in choice]
        n = int(np.argmin(apart))
        i, j = choice[n]
        free = free[n + 1 :]
        clear = _CLEAR * (gone[j] - gone[i])
        place = target if gone[i] + clear <= target <= gone[j] - clear else 0.5 * (gone[i] + gone[j])
        p = int(np.clip(np.searchsorted(gone, place, side="right") - 1, i, j - 1))
        panel.append(int(ends.panel[p]))
        x.append(2.0 * (place - gone[p]) / (gone[p + 1] - gone[p]) - 1.0)
    return Place(np.array(panel, dtype=np.int64), np.array(x))


def _flats(sheet: Sheet) -> list[tuple[int, int]]:
    """Flat stretches from panel end to panel end (i, j), but for the one that the seam lies on."""
    at = sheet.at_ends
    turns: Array = np.diff(at.turn)
    moves = np.diff(at.arc_a + at.arc_b) > _LINE
    flat = (np.abs(turns) <= _FLAT) & moves
    last = len(flat) - 1
    found = []
    for i in np.flatnonzero(flat & ~np.append(False, flat[:-1])).tolist():
        bends = np.flatnonzero(~flat[i:])
        j = i + int(bends[0]) if len(bends) else last + 1
        if i > 0 and j <= last:
            found.append((i, j))
    return found
