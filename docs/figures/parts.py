"""The picture of docs/parts.md: a transition in parts, each as it goes into the stock sheet.

    python docs/figures/parts.py

writes docs/parts.png.
"""

from __future__ import annotations

from io import BytesIO
from math import atan2, degrees
from pathlib import Path

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.image import imread

from develop.outputs.picture import picture
from develop.pattern.curve import Array
from develop.pattern.pattern import Outline, Pattern
from develop.pattern.stock import lying_in, outline_hull
from develop.pieces import kind_of
from develop.pieces.fields import read_piece

DOCS = Path(__file__).resolve().parent.parent
STOCK = (3000.0, 2000.0)
PIECE = {
    "mark": "T1",
    "end_a": "ellipse 3000 x 2000",
    "end_b": "round 1600",
    "length": 1500,
    "offset": "0,200",
    "seam": "lap 25",
    "made_in": "fit",
    "stock": "3000 x 2000",
}


def points_of(outline: Outline) -> Array:
    """The contour as points (n, 2) [mm]."""
    return np.vstack([curve.polyline(0.5)[:-1] for _, curve in outline.curves])


def draw(pattern: Pattern, axes: Axes) -> None:
    """Draw one part, turned as it goes into the stock sheet, in mm."""
    lying = lying_in(outline_hull(pattern.cut), STOCK)
    assert lying is not None
    angle = lying.angle - np.pi if lying.angle > 0.5 * np.pi else lying.angle
    c, s = np.cos(angle), np.sin(angle)
    turn = np.array([[c, s], [-s, c]])
    cut = points_of(pattern.cut) @ turn
    shift = -cut.min(axis=0)

    def at(points: Array) -> Array:
        return np.asarray(points @ turn + shift)

    wide, high = STOCK
    sheet = np.array([[0.0, 0.0], [wide, 0.0], [wide, high], [0.0, high], [0.0, 0.0]])
    axes.plot(*sheet.T, color="#9aa0a6", linewidth=1.2)
    axes.plot(*(np.vstack([cut, cut[:1]]) + shift).T, color="black", linewidth=1.3)
    net = at(points_of(pattern.net))
    axes.plot(*np.vstack([net, net[:1]]).T, color="black", linewidth=0.6, linestyle=(0, (4, 3)))
    for line in pattern.lines:
        axes.plot(*at(np.stack([line.start, line.end])).T, color="#3b6fb6", linewidth=0.5)
    for name, text, side in zip(("seam_left", "seam_right"), pattern.seam_words, (-1.0, 1.0), strict=True):
        curve = pattern.net.curve(name)
        assert curve is not None
        low, up = (curve.end, curve.start) if name == "seam_left" else (curve.start, curve.end)
        along = (up - low) / np.hypot(*(up - low))
        inward = -side * np.array([along[1], -along[0]])
        place = at((0.5 * (low + up) + 75.0 * inward)[None])[0]
        way = along @ turn
        angle = (degrees(atan2(way[1], way[0])) + 90.0) % 180.0 - 90.0
        axes.text(*place, text, rotation=angle, ha="center", va="center", rotation_mode="anchor", fontsize=9)
    title = f"{pattern.mark}, quantity {pattern.quantity}"
    axes.text(*net.mean(axis=0), title, ha="center", va="center", fontsize=11, weight="bold")
    axes.set_aspect("equal")
    axes.axis("off")


def plot(file: Path) -> None:
    """Draw the finished piece and its parts."""
    piece, problems = read_piece(kind_of("transition"), PIECE)
    assert piece is not None, problems
    built = piece.build()
    count = len(built.patterns)
    figure = Figure(figsize=(11.0, 5.0 + 3.6 * ((count + 1) // 2)), dpi=110)
    FigureCanvasAgg(figure)
    rows = figure.add_gridspec(1 + (count + 1) // 2, 2, height_ratios=[5.0] + [3.6] * ((count + 1) // 2))
    above = figure.add_subplot(rows[0, :])
    image = picture(built.placed, [f"{piece.mark}: made in parts"])
    above.imshow(imread(BytesIO(image)), interpolation="lanczos")
    above.axis("off")
    for number, pattern in enumerate(built.patterns):
        draw(pattern, figure.add_subplot(rows[1 + number // 2, number % 2]))
    figure.subplots_adjust(0.01, 0.01, 0.99, 0.99, 0.03, 0.04)
    figure.savefig(file, metadata={"Software": None})


if __name__ == "__main__":
    plot(DOCS / "parts.png")
