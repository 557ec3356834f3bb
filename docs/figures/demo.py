"""The picture of the README: the demo's transition T2, finished and flat.

    python docs/figures/demo.py

writes docs/transition.png.
"""

from __future__ import annotations

from io import BytesIO
from pathlib import Path

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.image import imread

from develop.job.file import read_job
from develop.outputs.picture import picture
from develop.pattern.curve import Array, Curve
from develop.pattern.drawing import CUT, ROLL_LINES, draw
from develop.pattern.layout import lettered
from develop.pattern.pattern import Label, Outline

DOCS = Path(__file__).resolve().parent.parent
_CAPITALS = 0.73  # height of capitals over the size of DejaVu Sans


class PlotPen:
    """Draws a pattern on axes of matplotlib, in mm."""

    def __init__(self, axes: Axes, points_per_mm: float) -> None:
        self._axes, self._scale = axes, points_per_mm
        self._style: dict[str, object] = {}

    def layer(self, name: str) -> None:
        width = {CUT: 1.4, ROLL_LINES: 0.7}.get(name, 0.9)
        self._style = {"color": "black", "linewidth": width}

    def contour(self, outline: Outline) -> None:
        points = np.vstack([curve.polyline(0.05) for _, curve in outline.curves])
        self._axes.plot(*np.vstack([points, points[:1]]).T, **self._style)

    def line(self, start: Array, end: Array) -> None:
        self._axes.plot(*np.stack([start, end], axis=1), **self._style)

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        style = {**self._style, "linestyle": "--" if dashed else "-"}
        self._axes.plot(*curve.polyline(0.05).T, **style)

    def text(self, label: Label) -> None:
        self._axes.text(
            *label.at,
            label.text,
            fontsize=label.height / _CAPITALS * self._scale,
            rotation=float(np.degrees(label.angle)),
            rotation_mode="anchor",
            ha="center",
            va="baseline",
        )


def plot(file: Path) -> None:
    """Draw T2 of the demo job."""
    job = read_job(str(DOCS.parent / "patterns" / "swimming_hall.toml"))
    piece = next(placed.piece for placed in job.pieces if placed.piece.mark == "T2")
    built = piece.build()
    pattern = lettered(built.patterns[0])
    low, high = np.array([0.0, 0.0]), np.vstack([c.bounds()[1] for _, c in pattern.cut.curves]).max(axis=0)

    width, dpi = 11.0, 120
    inches_per_mm = width / (high[0] * 1.02)
    flat = high[1] * 1.06 * inches_per_mm
    solid = 5.2
    figure = Figure(figsize=(width, flat + solid), dpi=dpi)
    FigureCanvasAgg(figure)
    above = figure.add_axes((0.0, flat / (flat + solid), 1.0, solid / (flat + solid)))
    above.imshow(imread(BytesIO(picture(built.placed, pattern.facts[:4]))), interpolation="lanczos")
    above.axis("off")
    below = figure.add_axes((0.0, 0.0, 1.0, flat / (flat + solid)))
    draw(pattern, PlotPen(below, inches_per_mm * 72.0))
    margin = 0.01 * high[0]
    below.set_xlim(low[0] - margin, high[0] + margin)
    below.set_ylim(low[1] - 0.03 * high[1], high[1] * 1.03)
    below.axis("off")
    figure.savefig(file, metadata={"Software": None})


if __name__ == "__main__":
    plot(DOCS / "transition.png")
