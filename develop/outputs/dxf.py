"""DXF for cutting tables: mm, 1:1, one closed contour for each edge, a layer for each operation."""

from __future__ import annotations

import io
import math
import re
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from develop.outputs.biarcs import arcs_of
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
from develop.pattern.layout import lettered
from develop.pattern.lettering import text_height
from develop.pattern.pattern import Label, Outline, Pattern

if TYPE_CHECKING:
    from ezdxf.document import Drawing

__all__ = ["Dxf", "dxf"]

_COLOURS = {
    OPENINGS: 30,
    CUT: 1,
    NET: 6,
    ROLL_LINES: 5,
    PRESS_LINES: 134,
    FOLD_LINES: 130,
    PEN_LINES: 150,
    WITNESS_MARKS: 3,
    DASHED: 54,
    TEXT: 7,
}
"""Numbers of the format's own table of colours, one a layer."""
_IN_DASHES = (NET, FOLD_LINES, DASHED)
_DASHES = [9.0, 6.0, -3.0]  # [mm] the whole, a dash, a gap
_MM, _METRIC = 4, 1  # values of $INSUNITS and $MEASUREMENT (DXF reference)
_DIGITS, _BULGE_DIGITS = 6, 12
_BEZIERS = 0.001  # [mm] by which the Béziers themselves may be off the true curve
_IN_MM = "drawing in mm, 1:1"
# What a header may say of when, where and by whom a file was made.
_PERSONAL = (
    "TDCREATE", "TDUCREATE", "TDUPDATE", "TDUUPDATE", "TDINDWG", "TDUSRTIMER",
    "FINGERPRINTGUID", "VERSIONGUID", "LASTSAVEDBY",
)  # fmt: skip


@dataclass(frozen=True)
class Dxf:
    """A DXF file. arcs: how many it has. deviation: of arcs from the pattern's curves, at most [mm]."""

    data: bytes
    arcs: int
    deviation: float


def dxf(
    pattern: Pattern,
    *,
    version: str = "R2010",
    curves: str = "arcs",
    tolerance: float = 0.01,
    text: bool = True,
) -> Dxf:
    """The pattern as a DXF file, in the pattern's own coordinates.

    version: `R2010` or `R12`. curves: as `arcs` or `polylines` within the tolerance [mm] of the true
    curve, or as `splines`, which R12 has not. text: whether the words are drawn too.
    """
    from ezdxf.document import Drawing

    old = version == "R12"
    document = Drawing.new(version)  # as `ezdxf.new`, which warns that R12 takes no units
    if not old:
        document.units = _MM  # also of the model space
        document.header["$MEASUREMENT"] = _METRIC
    elif text:
        pattern = _saying(pattern, _IN_MM)
    if not text:
        pattern = replace(pattern, labels=(), arrows=())
    document.linetypes.add("DASHED", pattern=_DASHES, description="dashed __ __ __")
    document.styles.get("Standard").dxf.font = "txt" if old else "DejaVuSans.ttf"
    pen = _DxfPen(document, old, curves, max(tolerance - 1.5 * _BEZIERS, 0.5 * tolerance))
    draw(pattern, pen)
    bounds = np.vstack([curve.bounds() for _, curve in pattern.cut.curves])
    low, high = bounds.min(axis=0).tolist(), bounds.max(axis=0).tolist()
    document.modelspace().reset_extents((*low, 0.0), (*high, 0.0))
    # Beside the model space itself: a corner at (0, 0) counts as none there.
    document.header["$EXTMIN"], document.header["$EXTMAX"] = (*low, 0.0), (*high, 0.0)
    middle = ((low[0] + high[0]) / 2.0, (low[1] + high[1]) / 2.0)
    document.set_modelspace_vport(1.1 * max(high[1] - low[1], 0.6 * (high[0] - low[0])), middle)
    return Dxf(_written(document, pattern), pen.arcs, pen.deviation)


def _saying(pattern: Pattern, words: str) -> Pattern:
    """The pattern with one more fact in its text; below the outline where there is no room inside."""
    if not pattern.labels:
        return pattern
    said = lettered(replace(pattern, facts=(*pattern.facts, words), labels=(), arrows=()))
    if any(label.text == words for label in said.labels):
        return said
    height = text_height(pattern.net)
    bounds = np.vstack([curve.bounds() for _, curve in pattern.cut.curves])
    at = np.array([bounds[:, 0].mean(), bounds[:, 1].min() - 2.0 * height])
    return replace(pattern, labels=(*pattern.labels, Label(words, at, 0.0, height)))


def _written(document: Drawing, pattern: Pattern) -> bytes:
    """The file without date, user, version or chance numbers; the facts as comments at its head."""
    # The library adds its classes in the order of a set, which changes from run to run.
    classes = document.classes
    classes.add_required_classes(document.dxfversion)
    classes.classes = dict(sorted(classes.classes.items()))
    stream = io.StringIO()
    document.write(stream)
    text = stream.getvalue()
    text = re.sub(rf"  9\n\$(?:{'|'.join(_PERSONAL)})\n *\d+\n[^\n]*\n", "", text)
    for name in ("CREATED_BY_EZDXF", "WRITTEN_BY_EZDXF"):
        text = text.replace(f"\n{document.ezdxf_metadata()[name]}\n", "\nin mm\n")
    comments = (re.sub(r"\s*[\r\n]\s*", " ", line) for line in (*pattern.facts, "units: mm, 1:1"))
    head = "".join(f"999\n{line}\n" for line in comments)
    return document.encode(head + text)


class _DxfPen:
    """Draws into the model space; arcs and deviation [mm]: of all that was drawn so far."""

    def __init__(self, document: Drawing, old: bool, curves: str, limit: float) -> None:
        self._document = document
        self._space = document.modelspace()
        self._old = old
        self._curves = curves
        self._limit = limit
        self._layer = {"layer": "0"}
        self.arcs = 0
        self.deviation = 0.0

    def layer(self, name: str) -> None:
        dashes = "DASHED" if name in _IN_DASHES else "CONTINUOUS"
        self._document.layers.add(name, color=_COLOURS[name], linetype=dashes, lineweight=0)
        self._layer = {"layer": name}

    def contour(self, outline: Outline) -> None:
        self._chain([curve for _, curve in outline.curves], closed=True)

    def line(self, start: Array, end: Array) -> None:
        self._space.add_line(_point(start), _point(end), self._layer)

    def curve(self, curve: Curve, *, dashed: bool) -> None:
        self._chain([curve], closed=False)

    def pop(self, at: Array) -> None:
        self._space.add_point(_point(at), self._layer)

    def text(self, label: Label) -> None:
        from ezdxf.enums import TextEntityAlignment

        words = self._space.add_text(
            label.text,
            height=round(label.height, _DIGITS),
            rotation=round(math.degrees(label.angle), _DIGITS) + 0.0,
            dxfattribs=self._layer,
        )
        words.set_placement(_point(label.at), align=TextEntityAlignment.CENTER)

    def _chain(self, curves: list[Curve], *, closed: bool) -> None:
        """Curves head to tail; closed: the last ends where the first starts."""
        if not closed and len(curves) == 1 and curves[0].straight:
            self.line(curves[0].start, curves[0].end)
            return
        if self._curves == "splines":
            self._splines(curves)
            return
        points: list[Array] = []
        bulges: list[Array] = []
        for curve in curves:
            if self._curves == "polylines":
                line = curve.polyline(self._limit)
                points.append(line[:-1])
                bulges.append(np.zeros(len(line) - 1))
                continue
            arcs = arcs_of(curve, limit=self._limit)
            self.deviation = max(self.deviation, arcs.deviation)
            if arcs.circle is not None and closed and len(curves) == 1:
                x, y, radius = arcs.circle
                self.arcs += 1
                self._space.add_circle(_point(np.array([x, y])), round(radius, _DIGITS), self._layer)
                return
            self.arcs += arcs.count
            points.append(arcs.points[:-1])
            bulges.append(arcs.bulges)
        if not closed:
            points.append(curves[-1].end[None])
            bulges.append(np.zeros(1))
        vertices = [
            (*_point(point), round(bulge, _BULGE_DIGITS))
            for point, bulge in zip(np.vstack(points), np.concatenate(bulges).tolist(), strict=True)
        ]
        add = self._space.add_polyline2d if self._old else self._space.add_lwpolyline
        add(vertices, format="xyb", close=closed, dxfattribs=self._layer)

    def _splines(self, curves: list[Curve]) -> None:
        """Each curve as one cubic B-spline with its Béziers' control points, every knot three times."""
        for curve in curves:
            if curve.straight:
                self.line(curve.start, curve.end)
                continue
            count = (len(curve.controls) - 1) // 3
            knots = np.repeat(np.arange(count + 1.0), 3)
            spline = self._space.add_spline(degree=3, dxfattribs=self._layer)
            spline.control_points = [(*_point(point), 0.0) for point in curve.controls]
            spline.knots = [0.0, *knots.tolist(), float(count)]


def _point(point: Array) -> tuple[float, float]:
    x, y = point.tolist()
    return round(x, _DIGITS) + 0.0, round(y, _DIGITS) + 0.0
