"""The drawing and the figures of docs/touching.md: where the edges of plate touch.

    python docs/figures/touching.py

writes docs/touching.png and the table in docs/touching.md.
"""

from __future__ import annotations

import re
from math import cos, pi, radians, sin, sqrt, tan
from pathlib import Path

import numpy as np
from matplotlib.axes import Axes
from matplotlib.backends.backend_agg import FigureCanvasAgg
from matplotlib.figure import Figure
from matplotlib.patches import Polygon

from develop.pieces import kind_of
from develop.pieces.built import Built
from develop.pieces.fields import read_piece

DOCS = Path(__file__).resolve().parent.parent
_WALL, _LINE, _TOUCH, _WRONG = "#c9d2da", "#1b2530", "#b3261e", "#e6a09b"
_MITRE = radians(22.5)
# Drawn with a wall far too thick for its size, so that the corners are seen.
_RADIUS, _THICK, _LEG = 100.0, 30.0, 90.0

BEND = {"section": "round 801", "sizes": "mean", "thickness": 12, "angle": 90, "radius": 1219, "gores": 5}
TEE = {
    # Taped outside 1921 round; all sizes are at mid-thickness here.
    "header": f"round {1921.0 / pi - 9.5:.9f}",
    "header_length": 1500,
    "branch": "round 263.5",
    "sizes": "mean",
    "thickness": 9.5,
    "centre_to_end": 700,
}


def _leg(axes: Axes, place: float, length: float, colour: str = _WALL, *, slant: float = 0.0) -> None:
    """Both walls' part at a place from the axis, square at its end or slanting, below the mitre and above."""
    low, high = place - 0.5 * _THICK, place + 0.5 * _THICK
    wall = np.array(
        [
            (low, -_LEG),
            (high, -_LEG),
            (high, length + slant * 0.5 * _THICK),
            (low, length - slant * 0.5 * _THICK),
        ]
    )
    for points in (wall, _mirrored(wall)):
        axes.add_patch(Polygon(points, facecolor=colour, edgecolor=_LINE, linewidth=1.1))


def _mirrored(points: np.ndarray) -> np.ndarray:
    """The mirror image in the line y = x tan(mitre)."""
    along = np.array([cos(_MITRE), sin(_MITRE)])
    return 2.0 * (points @ along)[:, None] * along - points


def _overlap(axes: Axes, place: float) -> None:
    """What two square edges share that end at mid-thickness."""
    slope = tan(_MITRE)
    corner = (place - 0.5 * _THICK, place * slope)
    on_plane = (corner[0], corner[0] * slope)
    net = (place, place * slope)
    half = np.array([corner, net, on_plane])
    for points in (half, _mirrored(half)):
        axes.add_patch(Polygon(points, facecolor=_WRONG, edgecolor="none"))


def _plane(axes: Axes, start: float, end: float) -> None:
    axes.plot(
        [start, end], [start * tan(_MITRE), end * tan(_MITRE)], color=_LINE, linewidth=0.9, linestyle="-."
    )


def _dot(axes: Axes, x: float, y: float) -> None:
    axes.plot(x, y, "o", color=_TOUCH, markersize=6, zorder=5)


def _mitre(axes: Axes) -> None:
    slope, half = tan(_MITRE), 0.5 * _THICK
    _leg(axes, _RADIUS, (_RADIUS - half) * slope)
    _leg(axes, -_RADIUS, (-_RADIUS - half) * slope)
    _plane(axes, -_RADIUS - 45, _RADIUS + 45)
    for x in (_RADIUS - half, -_RADIUS - half):
        _dot(axes, x, x * slope)
    axes.text(_RADIUS + half + 6, -_LEG + 8, "heel", fontsize=10, ha="left")
    axes.text(-_RADIUS - half - 6, -_LEG + 8, "throat", fontsize=10, ha="right")
    axes.text(0, 78, "inside", fontsize=9, ha="center", color="0.4")
    axes.set_title(
        "square to the plate, worked out:\ninside corners at the heel, outside at the throat", fontsize=10
    )
    axes.set_xlim(-185, 185)
    axes.set_ylim(-105, 165)


def _heel(axes: Axes, how: str) -> None:
    slope, half = tan(_MITRE), 0.5 * _THICK
    length = _RADIUS * slope
    if how == "net":
        _leg(axes, _RADIUS, length)
        _overlap(axes, _RADIUS)
        axes.set_title("square, net lines at mid-thickness:\nthe plates overlap (heel)", fontsize=10)
    elif how == "bevelled":
        low = _RADIUS - half
        wall = np.array(
            [
                (low, -_LEG),
                (_RADIUS + half, -_LEG),
                (_RADIUS + half, length),
                (_RADIUS, length),
                (low, low * slope),
            ]
        )
        for points in (wall, _mirrored(wall)):
            axes.add_patch(Polygon(points, facecolor=_WALL, edgecolor=_LINE, linewidth=1.1))
        axes.set_title("bevelled, cut square at the net line:\nthe net lines meet (heel)", fontsize=10)
    else:
        _leg(axes, _RADIUS, length, slant=slope)
        axes.set_title("bevelled, cut along the joint:\nthe whole edge meets (heel)", fontsize=10)
    _plane(axes, _RADIUS - 40, _RADIUS + 45)
    if how != "net":
        _dot(axes, _RADIUS, length)
    axes.set_xlim(_RADIUS - 62, _RADIUS + 62)
    axes.set_ylim(-18, 92)


def _saddle(axes: Axes, title: str, angle: float) -> None:
    """A branch on a header, cut across the header (90) or along it."""
    header, half = 190.0, 0.5 * _THICK
    if angle == 90.0:
        turn = np.radians(np.linspace(20, 160, 120))
        for radius in (header, header - _THICK):
            axes.plot(radius * np.cos(turn), radius * np.sin(turn), color=_LINE, linewidth=1.1)
        for side in (1.0, -1.0):
            inner, outer = side * (_RADIUS - half), side * (_RADIUS + half)
            foot = sqrt(header**2 - inner**2)
            wall = np.array([(inner, foot), (outer, foot), (outer, 290), (inner, 290)])
            axes.add_patch(Polygon(wall, facecolor=_WALL, edgecolor=_LINE, linewidth=1.1))
            _dot(axes, inner, foot)
        axes.set_xlim(-185, 185)
        axes.set_ylim(70, 310)
    else:
        lean = radians(angle)
        axis, across = np.array([cos(lean), sin(lean)]), np.array([-sin(lean), cos(lean)])
        for y in (0.0, -_THICK):
            axes.plot([-190, 230], [y, y], color=_LINE, linewidth=1.1)
        for side in (1.0, -1.0):
            places = [side * (_RADIUS - half), side * (_RADIUS + half)]
            # The line at r ends on the header where its height r cos + s sin is 0; the edge at the first.
            ends = [-place * cos(lean) / sin(lean) for place in places]
            first = max(ends)
            wall = [places[0] * across + first * axis, places[1] * across + first * axis]
            wall += [places[1] * across + 200 * axis, places[0] * across + 200 * axis]
            axes.add_patch(Polygon(np.array(wall), facecolor=_WALL, edgecolor=_LINE, linewidth=1.1))
            _dot(axes, *(places[int(np.argmax(ends))] * across + first * axis))
        axes.set_xlim(-190, 230)
        axes.set_ylim(-50, 230)
    axes.set_title(title, fontsize=10)


def plot(file: Path) -> None:
    """Draw mitre and branch, and the three ways of an edge."""
    figure = Figure(figsize=(11.0, 6.6), dpi=110)
    FigureCanvasAgg(figure)
    upper, lower = figure.subplots(2, 3)
    _mitre(upper[0])
    _saddle(upper[1], "set-on branch, across the header:\ninside corners", 90.0)
    _saddle(upper[2], "set-on branch, along the header:\noutside where it leans over, inside behind", 60.0)
    for axes, how in zip(lower, ("net", "bevelled", "along"), strict=True):
        _heel(axes, how)
    for axes in (*upper, *lower):
        axes.set_aspect("equal")
        axes.axis("off")
    figure.tight_layout()
    figure.savefig(file, metadata={"Software": None})


def _made(kind: str, **given: object) -> Built:
    piece, problems = read_piece(kind_of(kind), given)
    assert piece is not None, problems
    return piece.build()


def _longer(kind: str, given: dict[str, object]) -> float:
    """By how much a line of the first pattern is longer, at most, when net lines are taken [mm]."""
    lines = [[row.length for row in _made(kind, **given, touching=how).patterns[0].divisions]
             for how in ("net", "worked out")]  # fmt: skip
    return max(a - b for a, b in zip(*lines, strict=True))


def costs() -> tuple[tuple[str, str], ...]:
    """What square edges cost that are cut to net lines at mid-thickness: in words, and as written."""
    mitre, thick = radians(11.25), 12.0
    too_long = _longer("bend", BEND)
    apart = 2.0 * too_long * cos(mitre)
    # Every joint stands off by so much along its own normal; the bend's end moves by the sum.
    away = sum(apart * cos((2 * k + 1) * mitre) for k in range(4))
    opening = 2.0 * thick * sin(mitre)
    return (
        ("bend 813 x 12, 5 gores: each edge too long, at heel and throat", f"{too_long:.2f}"),
        ("so that a joint touches there and stands open at the quarters by", f"{apart:.2f}"),
        ("and END B of the 90° bend is carried off along both axes by", f"{away:.1f}"),
        (
            "the same bend worked out: touching all round, open at the other corner by at most",
            f"{opening:.2f}",
        ),
        (
            "tee 273 x 9.5 on a header of girth 1921: edge too long at its sides",
            f"{_longer('branch', TEE):.2f}",
        ),
    )


def page(text: str) -> str:
    """The page with its table as found."""
    rows = "".join(f"| {words} | {figure} mm |\n" for words, figure in costs())
    table = f"<!-- costs -->\n| what | |\n|---|---|\n{rows}<!-- end -->"
    return re.sub(r"<!-- costs -->.*<!-- end -->", table, text, flags=re.DOTALL)


if __name__ == "__main__":
    plot(DOCS / "touching.png")
    file = DOCS / "touching.md"
    file.write_text(page(file.read_text(encoding="utf-8")), encoding="utf-8")
