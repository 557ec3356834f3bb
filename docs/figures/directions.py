"""The drawing of docs/directions.md: how directions, offset and rotate are read.

    python docs/figures/directions.py

writes docs/directions.png.
"""

from __future__ import annotations

from pathlib import Path

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.patches import FancyArrowPatch

from develop.sections.ellipse import Ellipse

DOCS = Path(__file__).resolve().parent.parent
_TURN = np.radians(25.0)


def _ring(width: float, height: float, *, at: tuple[float, float] = (0.0, 0.0), turn: float = 0.0):  # type: ignore[no-untyped-def]
    section = Ellipse(width=width, height=height)
    points = section.point(np.linspace(0.0, section.period, 241))
    c, s = np.cos(turn), np.sin(turn)
    return points @ np.array([[c, s], [-s, c]]) + np.array(at)


def _arrow(axes: Axes, start: tuple[float, float], end: tuple[float, float], bend: float = 0.0) -> None:
    axes.add_patch(
        FancyArrowPatch(
            start,
            end,
            arrowstyle="-|>",
            mutation_scale=12,
            color="black",
            linewidth=1.0,
            connectionstyle=f"arc3,rad={bend}",
            shrinkA=0,
            shrinkB=0,
        )
    )


def _around(axes: Axes) -> None:
    axes.plot(*_ring(600, 300).T, "k-", linewidth=1.6)
    axes.plot([-345, 345], [0, 0], color="0.7", linewidth=0.8)
    axes.plot([0, 0], [-195, 195], color="0.7", linewidth=0.8)
    for x, y, text, ha, va in (
        (355, 0, "0 right\n3:00", "left", "center"),
        (0, 205, "90 top, 12:00", "center", "bottom"),
        (-355, 0, "180 left\n9:00", "right", "center"),
        (0, -205, "270 bottom, 6:00", "center", "top"),
    ):
        axes.text(x, y, text, ha=ha, va=va, fontsize=10)
    at = Ellipse(width=600, height=300).point(
        Ellipse(width=600, height=300).at_direction(np.array([np.radians(40.0)]))
    )[0]
    axes.plot([0, at[0]], [0, at[1]], "k-", linewidth=0.9)
    axes.plot(*at, "ko", markersize=5)
    axes.text(at[0] + 14, at[1] + 12, "direction 40", fontsize=10)
    arc = np.radians(np.linspace(0, 40, 30))
    axes.plot(90 * np.cos(arc), 90 * np.sin(arc), "k-", linewidth=0.9)
    axes.text(104, 26, "40°", fontsize=10)
    axes.set_title("Directions, facing END B: standing in front of it, looking in", fontsize=11)


def _placed(axes: Axes) -> None:
    shift = (110.0, 70.0)
    axes.plot(*_ring(600, 300).T, "k--", linewidth=1.4)
    axes.plot(*_ring(380, 240, at=shift, turn=_TURN).T, "k-", linewidth=1.6)
    axes.plot(0, 0, "k+", markersize=12)
    axes.plot(*shift, "k+", markersize=12)
    _arrow(axes, (0, 0), (shift[0], 0))
    _arrow(axes, (shift[0], 0), shift)
    axes.text(30, -28, "offset right", fontsize=10, ha="left")
    axes.text(shift[0] + 10, 26, "up", fontsize=10)
    reach = 250.0
    axes.plot([shift[0], shift[0] + reach], [shift[1]] * 2, color="0.7", linewidth=0.8)
    axes.plot(
        [shift[0], shift[0] + reach * np.cos(_TURN)],
        [shift[1], shift[1] + reach * np.sin(_TURN)],
        "k-",
        linewidth=0.8,
    )
    _arrow(
        axes,
        (shift[0] + 225, shift[1]),
        (shift[0] + 225 * np.cos(_TURN), shift[1] + 225 * np.sin(_TURN)),
        0.2,
    )
    axes.text(shift[0] + 235, shift[1] + 40, "rotate", fontsize=10, ha="left")
    axes.text(-235, -140, "END A (far end)", fontsize=11, ha="right", va="top")
    axes.text(-60, 172, "END B (near end)", fontsize=11, ha="right", va="bottom")
    axes.set_title("offset and rotate, seen the same way", fontsize=11)


def plot(file: Path) -> None:
    """Draw both views side by side."""
    figure = Figure(figsize=(10.4, 4.2), dpi=110)
    FigureCanvasAgg(figure)
    for axes, draw in zip(figure.subplots(1, 2), (_around, _placed), strict=True):
        draw(axes)
        axes.set_aspect("equal")
        axes.set_xlim(-470, 470)
        axes.set_ylim(-270, 270)
        axes.axis("off")
    figure.tight_layout()
    figure.savefig(file, metadata={"Software": None})


if __name__ == "__main__":
    plot(DOCS / "directions.png")
