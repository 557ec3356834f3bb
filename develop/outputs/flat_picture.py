"""Picture of a flat plate with what stands on it: shaded, in perspective, as PNG."""

from __future__ import annotations

import io
import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Protocol

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.pattern import Outline, Pattern
from develop.solid import Frame, Made, Patch, Solid

if TYPE_CHECKING:
    from matplotlib.path import Path

__all__ = ["Part", "flat_picture"]

_SIZE = (8.0, 6.0)  # [in]
_DOTS = 150  # [1/in]
_CHORDS = 0.05  # [mm]
_FACE, _BACK = np.array([0.56, 0.64, 0.72]), np.array([0.47, 0.45, 0.43])
_EDGE = "#1b2530"
_FAR = 3.2  # distance of the eye over the size of the piece


class Part(Protocol):
    """A pattern, the plate or side that it makes, and where that stands."""

    @property
    def pattern(self) -> Pattern: ...
    @property
    def solid(self) -> Made: ...
    @property
    def frames(self) -> tuple[Frame, ...]: ...


class _Camera:
    """Perspective view from in front of end B, from its right and from below: y of the piece is up."""

    def __init__(self, centre: Array, size: float) -> None:
        turn, rise = math.radians(24.0), math.radians(-36.0)
        level = math.cos(rise)
        self.towards = np.array([math.sin(turn) * level, math.sin(rise), math.cos(turn) * level])
        right = np.cross([0.0, 1.0, 0.0], self.towards)
        right = right / np.linalg.norm(right)
        self._axes = np.stack([right, np.cross(self.towards, right), self.towards])
        self._centre, self._size = centre, size
        self.eye = centre + self.towards * size * _FAR

    def project(self, points: Array) -> Array:
        """Places in the picture (..., 2) of points (..., 3)."""
        seen = (points - self._centre) @ self._axes.T / self._size
        return np.asarray(seen[..., :2] * (_FAR / (_FAR - seen[..., 2:])))


def flat_picture(parts: Sequence[Part], title: str) -> bytes:
    """PNG of flat plates, and of the sides that stand on them, equal scale in all directions."""
    import matplotlib
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.collections import PolyCollection
    from matplotlib.figure import Figure
    from matplotlib.patches import PathPatch

    rings = [
        [_placed(outline, part.solid.shift, frame) for outline in (part.pattern.net, *part.pattern.openings)]
        for part in parts
        if not isinstance(part.solid, Solid | Patch)
        for frame in part.frames
    ]
    sides = [part.solid for part in parts if isinstance(part.solid, Solid)]
    every = np.vstack([ring for plate in rings for ring in plate] + [solid.faces()[0] for solid in sides])
    low, high = every.min(axis=0), every.max(axis=0)
    camera = _Camera((low + high) / 2.0, float(np.linalg.norm(high - low)))
    with matplotlib.rc_context():
        matplotlib.rcdefaults()  # a user's own settings must not change the picture
        figure = Figure(figsize=_SIZE, dpi=_DOTS, facecolor="white")
        axes = figure.add_axes((0.02, 0.02, 0.96, 0.88))
        axes.set_axis_off()
        axes.set_aspect("equal")
        for plate in rings:
            outlines = [camera.project(ring) for ring in plate]
            axes.add_patch(
                PathPatch(_path(outlines), facecolor=tuple(_FACE), edgecolor=_EDGE, linewidth=1.2, zorder=0.0)
            )
        for solid in sides:
            vertices, faces = solid.faces()
            corners = vertices[faces]
            far = np.argsort(corners.mean(axis=1) @ camera.towards)
            normal = np.cross(corners[:, 2] - corners[:, 0], corners[:, 3] - corners[:, 1])
            out = (normal * (camera.eye - corners.mean(axis=1))).sum(axis=1) > 0.0
            colours = np.where(out[:, None], _FACE * 0.85, _BACK)[far]
            axes.add_collection(
                PolyCollection(
                    list(camera.project(corners)[far]),
                    facecolors=colours,
                    edgecolors=colours,
                    linewidths=0.4,
                    zorder=2.0,
                )
            )
            for rim, order in ((solid.rim_a(), 0.5), (solid.rim_b(), 3.0)):
                loop = camera.project(np.vstack([rim, rim[:1]]))
                axes.plot(*loop.T, color=_EDGE, linewidth=1.0, zorder=order)
        # Under a side that stands on the plate the words go outwards.
        away = -0.05 if not sides else 0.05
        for start, end, word in _marks(parts, away * float(np.linalg.norm(high - low))):
            a, b = camera.project(start), camera.project(end)
            axes.plot(*np.stack([a, b]).T, color=_EDGE, linewidth=0.8, zorder=1.0)
            x, y = b + 0.3 * (b - a)
            axes.text(
                x, y, word, fontsize=11, weight="bold", color=_EDGE, ha="center", va="center", zorder=1.0
            )
        flat = camera.project(every)
        (x0, y0), (x1, y1) = flat.min(axis=0), flat.max(axis=0)
        pad = 0.12 * max(x1 - x0, y1 - y0)
        axes.set_xlim(x0 - pad, x1 + pad)
        axes.set_ylim(y0 - pad, y1 + pad)
        size = min(14.0, 14.0 * 64.0 / max(len(title), 1))
        figure.text(0.5, 0.94, title, ha="center", va="center", fontsize=size, color=_EDGE, parse_math=False)
        buffer = io.BytesIO()
        FigureCanvasAgg(figure)
        figure.savefig(buffer, format="png", metadata={"Software": None})
    return buffer.getvalue()


def _placed(outline: Outline, shift: Array, frame: Frame) -> Array:
    """A contour of a plate where it stands, (n, 3) [mm]."""
    points = np.vstack([curve.polyline(_CHORDS)[:-1] for _, curve in outline.curves]) - shift
    return np.asarray(points @ frame.axes[:2] + frame.origin)


def _path(outlines: list[Array]) -> Path:
    """The outline with its openings as one path: openings run the other way round."""
    from matplotlib.path import Path

    points, codes = [], []
    for n, outline in enumerate(outlines):
        way = outline if n == 0 else outline[::-1]
        points.append(np.vstack([way, way[:1]]))
        codes += [Path.MOVETO, *[Path.LINETO] * (len(way) - 1), Path.CLOSEPOLY]
    return Path(np.vstack(points), codes)


def _marks(parts: Sequence[Part], reach: float) -> list[tuple[Array, Array, str]]:
    """The marked directions: from the edge by `reach` [mm] into the plate, with their words."""
    found = []
    for part in parts:
        if isinstance(part.solid, Solid | Patch):
            continue
        frame = part.frames[0]
        for mark in part.pattern.marks:
            ends = np.stack([mark.at, mark.at + reach * mark.inward]) - part.solid.shift
            start, end = ends @ frame.axes[:2] + frame.origin
            found.append((start, end, mark.text))
    return found
