"""Picture of a flat plate with what stands on it: shaded, in perspective, as PNG."""

from __future__ import annotations

import io
import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Protocol

import numpy as np

from develop.outputs.beside import Beside, placed
from develop.pattern.curve import Array
from develop.pattern.pattern import Outline, Pattern
from develop.solid import FlatPlate, FlatRing, Frame, Made, Patch, Solid

if TYPE_CHECKING:
    from matplotlib.path import Path

__all__ = ["Part", "flat_picture"]

_SIZE = (8.0, 6.0)  # [in]
_DOTS = 150  # [1/in]
_CHORDS = 0.05  # [mm]
_FACE, _BACK = np.array([0.56, 0.64, 0.72]), np.array([0.47, 0.45, 0.43])
_EDGE = "#1b2530"
_TYPE = 11.0  # [points]
_WINDOW = (6.8, 4.8)  # [in] that the plate and its words may take
_LEVEL = 1e-9
_HERE = 1e-3  # [rad]
_LITTLE = 1.0  # [mm]
_SHARE = 0.8  # of the width of a plate, where its high side is named
_DIRECTIONS = {"RIGHT": 0.0, "TOP": 90.0, "LEFT": 180.0, "BOTTOM": 270.0}
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
    """Perspective view of points (n, 3). towards: unit vector to the eye; up: what is up in the picture."""

    def __init__(self, centre: Array, size: float, towards: Array, up: Array) -> None:
        self.towards = towards
        right = np.cross(up, towards)
        right = right / np.linalg.norm(right)
        self._axes = np.stack([right, np.cross(towards, right), towards])
        self._centre, self._size = centre, size
        self.eye = centre + towards * size * _FAR

    def project(self, points: Array) -> Array:
        """Places in the picture (..., 2) of points (..., 3)."""
        seen = (points - self._centre) @ self._axes.T / self._size
        return np.asarray(seen[..., :2] * (_FAR / (_FAR - seen[..., 2:])))


def _eye(plates: Sequence[Frame]) -> tuple[Array, Array]:
    """Where the eye is, as a unit vector, and what is up in the picture.

    Rings are looked at facing end B, from its right and from below, y up. A plate with an upright duct is
    looked at as it stands, z up, from the side along which it slopes and a little from its low side.
    """
    if not plates:
        turn, rise = math.radians(24.0), math.radians(-36.0)
        level = math.cos(rise)
        up = np.array([0.0, 1.0, 0.0])
        return np.array([math.sin(turn) * level, math.sin(rise), math.cos(turn) * level]), up
    across, uphill = (axis[:2] / np.hypot(*axis[:2]) for axis in plates[0].axes[:2])
    turn, rise = math.radians(25.0), math.radians(28.0)
    flat = math.cos(turn) * across - math.sin(turn) * uphill
    return np.array([*(math.cos(rise) * flat), math.sin(rise)]), np.array([0.0, 0.0, 1.0])


def flat_picture(parts: Sequence[Part], title: str) -> bytes:
    """PNG of flat plates, and of the sides that stand on them, equal scale in all directions.

    title: in one line, or several.
    """
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
    plates = [part.frames[0] for part in parts if isinstance(part.solid, FlatPlate)]
    level = [_level(part) for part in parts if isinstance(part.solid, FlatPlate)]
    every = np.vstack([*(ring for plate in rings for ring in plate), *(s.faces()[0] for s in sides), *level])
    low, high = every.min(axis=0), every.max(axis=0)
    camera = _Camera((low + high) / 2.0, float(np.linalg.norm(high - low)), *_eye(plates))
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
        for triangle in (camera.project(each) for each in level if len(each)):
            axes.plot(*triangle.T, color=_EDGE, linewidth=0.8, linestyle=(0, (5, 3)), zorder=1.5)
        flat = camera.project(every)
        if plates:
            words, (low_end, high_end) = _beside(parts, camera, flat)
            for word in words:
                axes.plot(*np.stack([word.start, word.end]).T, color=_EDGE, linewidth=0.8, zorder=1.0)
        else:
            words = _inside(parts, camera, 0.05 * float(np.linalg.norm(high - low)))
            for word in words:
                axes.plot(
                    *np.stack([word.start, word.end - 0.3 * (word.end - word.start)]).T,
                    color=_EDGE,
                    linewidth=0.8,
                )
            low_end, high_end = flat.min(axis=0), flat.max(axis=0)
        for word in words:
            axes.text(
                float(word.end[0]), float(word.end[1]), word.text,
                fontsize=_TYPE, weight="bold", color=_EDGE, ha="center", va="center",
                zorder=4.0, bbox={"facecolor": "white", "edgecolor": "none", "pad": 1.0},
            )  # fmt: skip
        pad = (0.03 if plates else 0.12) * float((high_end - low_end).max())
        axes.set_xlim(low_end[0] - pad, high_end[0] + pad)
        axes.set_ylim(low_end[1] - pad, high_end[1] + pad)
        size = min(14.0, 14.0 * 64.0 / max(map(len, title.splitlines()), default=1))
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


def _marks(parts: Sequence[Part]) -> list[tuple[str, Array, Array]]:
    """The marked directions: word, place on the edge (3,), and unit vector into the plate (3,)."""
    found: dict[str, tuple[str, Array, Array]] = {}
    for part in parts:
        if isinstance(part.solid, Solid | Patch):
            continue
        for frame in part.frames:
            for mark in part.pattern.marks:
                start = (mark.at - part.solid.shift) @ frame.axes[:2] + frame.origin
                # Of parts that are alike each has the word of the place where it stands.
                words = [each.split()[0] for each in mark.text.split("/")]
                word = min(words, key=lambda each: _aside(each, start))
                if not isinstance(part.solid, FlatRing) or _aside(word, start) < _HERE:
                    found.setdefault(word, (word, start, mark.inward @ frame.axes[:2]))
    return list(found.values())


def _aside(word: str, point: Array) -> float:
    """The angle [rad] between a direction, in words or degrees, and that of a point seen from the axis."""
    degrees = _DIRECTIONS[word] if word in _DIRECTIONS else float(word.rstrip("°"))
    apart = math.radians(degrees) - math.atan2(point[1], point[0])
    return abs(math.remainder(apart, 2.0 * math.pi))


def _inside(parts: Sequence[Part], camera: _Camera, reach: float) -> tuple[Beside, ...]:
    """The words of a ring, in its opening. reach [mm]."""
    found = []
    for text, start, into in _marks(parts):
        a, b = camera.project(start), camera.project(start - reach * into)
        found.append(Beside(text, a, b + 0.3 * (b - a), np.zeros(2)))
    return tuple(found)


def _level(part: Part) -> Array:
    """The triangle (3, 3) [mm] that shows how a plate slopes: from a lower corner on the eye's side level to
    below the upper one, and up to it; none (0, 3) where the plate is level."""
    assert isinstance(part.solid, FlatPlate)
    frame, (wide, high) = part.frames[0], part.solid.size
    if abs(frame.axes[1, 2]) < _LEVEL:
        return np.empty((0, 3))
    corners = np.array([[wide, 0.0], [wide, high]]) - part.solid.shift
    foot, top = corners @ frame.axes[:2] + frame.origin
    return np.stack([foot, np.array([*top[:2], foot[2]]), top])


def _beside(parts: Sequence[Part], camera: _Camera, flat: Array) -> tuple[tuple[Beside, ...], Array]:
    """The words of a plate, beside all that is shown, flat (n, 2): directions, slope and high side."""

    def seen(start: Array, way: Array) -> tuple[Array, Array]:
        a = camera.project(start)
        # So little that the direction is that at the start.
        return a, camera.project(start + _LITTLE * way) - a

    words = [(text, *seen(start, way)) for text, start, way in _marks(parts)]
    for part in parts:
        if not isinstance(part.solid, FlatPlate) or not len(triangle := _level(part)):
            continue
        frame, (wide, high) = part.frames[0], part.solid.size
        foot, below, _ = triangle
        slope = math.degrees(math.asin(frame.axes[1, 2]))
        edge = (np.array([_SHARE * wide, high]) - part.solid.shift) @ frame.axes[:2] + frame.origin
        words += [
            ("HIGH SIDE", *seen(edge, frame.axes[1])),
            (f"{slope:.1f}° to level", *seen((foot + below) / 2.0, np.array([0.0, 0.0, -1.0]))),
        ]
    return placed(words, flat, window=_WINDOW, type_size=_TYPE)
