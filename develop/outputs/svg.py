"""SVG for cutting tables: mm, true scale, one closed path for each contour, a group for each layer."""

from __future__ import annotations

import math
from dataclasses import replace
from xml.etree import ElementTree as ET

import numpy as np

from develop.pattern.curve import Array, Curve
from develop.pattern.drawing import (
    CUT,
    DASHED,
    FOLD_LINES,
    NET,
    OPENINGS,
    PEN_LINES,
    PRESS_LINES,
    ROLL_LINES,
    TEXT,
    WITNESS_MARKS,
    draw,
)
from develop.pattern.lettering import CAPITAL
from develop.pattern.pattern import Label, Outline, Pattern

__all__ = ["svg"]

_NAMESPACE = "http://www.w3.org/2000/svg"
_EDGE = 1.0  # [mm] of empty drawing round the contour, so that no stroke is halved by the border
_HAIRLINE = "0.1"  # [mm]
_POP = 0.25  # [mm] radius of the circle that stands for a centre pop: SVG has no points
# One plain colour a layer: many machines tell operations by colour, not by group.
_COLOURS = {
    OPENINGS: "#ff8000",
    CUT: "#ff0000",
    NET: "#ff00ff",
    ROLL_LINES: "#0000ff",
    PRESS_LINES: "#00a0a0",
    PEN_LINES: "#0080ff",
    FOLD_LINES: "#00a0a0",
    WITNESS_MARKS: "#008000",
    DASHED: "#808000",
    TEXT: "#000000",
}


def svg(pattern: Pattern, *, text: bool = True) -> bytes:
    """The pattern as an SVG file, true to scale in mm.

    The drawing is shifted so that the contour starts 1 mm from the left and the upper border,
    and y runs down as SVG has it; it is not turned, scaled or mirrored. text: whether the words are
    drawn too.
    """
    if not text:
        pattern = replace(pattern, labels=(), arrows=())
    points = np.vstack(
        [curve.polyline(0.001) for outline in (pattern.cut, pattern.net) for _, curve in outline.curves]
    )
    low, high = points.min(axis=0), points.max(axis=0)
    width, height = (math.ceil((size + 2.0 * _EDGE) * 1000.0 - 1e-3) / 1000.0 for size in high - low)
    root = ET.Element(
        "svg",
        {
            "xmlns": _NAMESPACE,
            "width": f"{_number(width)}mm",
            "height": f"{_number(height)}mm",
            "viewBox": f"0 0 {_number(width)} {_number(height)}",
        },
    )
    ET.SubElement(root, "title").text = pattern.mark
    ET.SubElement(root, "desc").text = "\n".join((*pattern.facts, "units: mm, true scale"))
    draw(pattern, _SvgPen(root, np.array([_EDGE - low[0], _EDGE + high[1]])))
    ET.indent(root, space="")
    written = str(ET.tostring(root, encoding="unicode"))
    return f"<?xml version='1.0' encoding='utf-8'?>\n{written}\n".encode()


class _SvgPen:
    """Draws into groups of an SVG element; origin: where the pattern's (0, 0) lies in the drawing [mm]."""

    def __init__(self, root: ET.Element, origin: Array) -> None:
        self._root = root
        self._group = root
        self._origin = origin

    def layer(self, name: str) -> None:
        style = {"id": name, "fill": "none", "stroke": _COLOURS[name], "stroke-width": _HAIRLINE}
        if name == NET:
            style["stroke-dasharray"] = "6 3"
        self._group = ET.SubElement(self._root, "g", style)

    def contour(self, outline: Outline) -> None:
        words = [f"M{self._point(outline.curves[0][1].start)}"]
        words += [self._steps(curve) for _, curve in outline.curves]
        self._path(" ".join((*words, "Z")))

    def line(self, start: Array, end: Array) -> None:
        self._path(f"M{self._point(start)} L{self._point(end)}")

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        style = {"stroke-dasharray": "6 3"} if dashed else {}
        self._path(f"M{self._point(curve.start)} {self._steps(curve)}", style)

    def pop(self, at: Array) -> None:
        x, y = self._flip(at)
        place = {"cx": _number(x), "cy": _number(y), "r": _number(_POP)}
        ET.SubElement(self._group, "circle", place)

    def text(self, label: Label) -> None:
        x, y = self._flip(label.at)
        style = {
            "x": _number(x),
            "y": _number(y),
            "font-family": "DejaVu Sans, sans-serif",
            "font-size": _number(label.height / CAPITAL),
            "text-anchor": "middle",
            "fill": _COLOURS[TEXT],
            "stroke": "none",
        }
        turn = _number(-math.degrees(label.angle))
        if turn != "0":
            style["transform"] = f"rotate({turn} {_number(x)} {_number(y)})"
        ET.SubElement(self._group, "text", style).text = label.text

    def _path(self, words: str, style: dict[str, str] | None = None) -> None:
        ET.SubElement(self._group, "path", {"d": words, **(style or {})})

    def _steps(self, curve: Curve) -> str:
        if curve.straight:
            return f"L{self._point(curve.end)}"
        return " ".join("C" + " ".join(self._point(point) for point in piece[1:]) for piece in curve.pieces)

    def _flip(self, point: Array) -> tuple[float, float]:
        return self._origin[0] + float(point[0]), self._origin[1] - float(point[1])

    def _point(self, point: Array) -> str:
        x, y = self._flip(point)
        return f"{_number(x)} {_number(y)}"


def _number(value: float) -> str:
    """A number to 1e-6, without needless zeros."""
    text = f"{value:.6f}".rstrip("0").rstrip(".")
    return "0" if text == "-0" else text
