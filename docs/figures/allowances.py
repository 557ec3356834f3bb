"""What each allowance does to one pattern: the table and the picture of docs/allowances.md.

    python docs/figures/allowances.py

rewrites the table in docs/allowances.md and writes docs/allowances.png.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure

from develop.pattern.pattern import Pattern
from develop.pieces import kind_of
from develop.pieces.fields import read_piece

DOCS = Path(__file__).resolve().parent.parent
_PIECE = {
    "end_a": "ellipse 600 x 300",
    "end_b": "round 400",
    "length": 450,
    "flush": "bottom",
    "seam_at": "left",
}
# What is asked for, and the words of its row.
ROWS: tuple[tuple[dict[str, str | float], str], ...] = (
    ({}, "nothing: the net line"),
    ({"seam": "lap 25"}, '`seam = "lap 25"`'),
    ({"seam": "grooved 6"}, '`seam = "grooved 6"`'),
    ({"seam": "standing 20"}, '`seam = "standing 20"`'),
    ({"edge_a": "flange 12 out"}, '`edge_a = "flange 12 out"`'),
    ({"edge_b": "lap 20"}, '`edge_b = "lap 20"`'),
    ({"edge_b": "tap-flange 20"}, '`edge_b = "tap-flange 20"`'),
    ({"edge_a": "flange 12 out", "seam": "lap 25"}, "the flange and the lap together"),
    ({"gap": 3}, "`gap = 3`"),
    ({"trim_a": 25}, "`trim_a = 25`"),
    ({"weld_shrinkage": 2}, "`weld_shrinkage = 2`"),
)
_SHOWN = (1, 2, 4, 6, 7, 9)
_START, _END = "<!-- table: docs/figures/allowances.py -->", "<!-- end of table -->"


def pattern_with(**given: str | float) -> Pattern:
    """The pattern of the example with some allowances."""
    piece, problems = read_piece(kind_of("transition"), {**_PIECE, **given})
    assert piece is not None, problems
    return piece.build().patterns[0]


def rows() -> list[tuple[str, str, float, float, float]]:
    """Words, what is added by edge, overall length and height of the cut line [mm], its area [mm²]."""
    found = []
    for given, words in ROWS:
        pattern = pattern_with(**given)
        names = {"a": "END A", "b": "END B", "seam_left": "left", "seam_right": "right"}
        added = ", ".join(f"{names[each.edge]} {each.width:+g}" for each in pattern.added) or "none"
        size = np.ptp(np.vstack([curve.bounds() for _, curve in pattern.cut.curves]), axis=0)
        found.append((words, added, float(size[0]), float(size[1]), pattern.cut.area))
    return found


def page(text: str) -> str:
    """The page with its table made new."""
    lines = ["| asked for | added, mm | overall length | height | area, m² |", "|---|---|---|---|---|"]
    lines += [
        f"| {words} | {added} | {wide:.1f} | {high:.1f} | {area / 1e6:.4f} |"
        for words, added, wide, high, area in rows()
    ]
    before, rest = text.split(_START)
    return f"{before}{_START}\n\n" + "\n".join(lines) + f"\n\n{_END}{rest.split(_END)[1]}"


def _draw(axes: Axes, pattern: Pattern, title: str) -> None:
    cut = np.vstack([curve.polyline(0.05) for _, curve in pattern.cut.curves])
    axes.fill(*cut.T, color="#e8edf2", zorder=0)
    axes.plot(*cut.T, color="black", linewidth=1.2)
    for _, curve in pattern.net.curves:
        axes.plot(*curve.polyline(0.05).T, color="#b3261e", linewidth=0.9, linestyle=(0, (5, 3)))
    for curve in (*pattern.folds, *pattern.dashed):
        axes.plot(*curve.polyline(0.05).T, color="#1f5fa8", linewidth=0.8, linestyle=(0, (2, 2)))
    axes.set_title(title, fontsize=11)
    axes.set_aspect("equal")
    axes.axis("off")


def plot(file: Path) -> None:
    """Draw some of the rows, left end and all."""
    figure = Figure(figsize=(11.0, 7.6), dpi=110)
    FigureCanvasAgg(figure)
    for n, row in enumerate(_SHOWN):
        given, words = ROWS[row]
        axes = figure.add_subplot(3, 2, n + 1)
        _draw(axes, pattern_with(**given), words.replace("`", ""))
    figure.text(
        0.5,
        0.015,
        "black: cut line    red, dashed: net line    blue, dotted: fold lines, witness line of a trim",
        ha="center",
        fontsize=10,
    )
    figure.subplots_adjust(left=0.02, right=0.98, top=0.95, bottom=0.05, hspace=0.25, wspace=0.05)
    figure.savefig(file, metadata={"Software": None})


if __name__ == "__main__":
    target = DOCS / "allowances.md"
    target.write_text(page(target.read_text(encoding="utf-8")), encoding="utf-8")
    plot(DOCS / "allowances.png")
