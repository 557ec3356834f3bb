"""Picture of the finished piece: shaded, in perspective, both ends and the seam shown, as PNG.

The scene is projected and put in order here; matplotlib only fills the polygons. Walls are cut into
cells of much the same size, which are drawn from the farthest to the nearest; a line on a wall is
drawn with the nearest of the cells about it. So whatever lies in front hides what is behind, also
where a piece of several parts bends round in front of itself.
"""

from __future__ import annotations

import io
import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Protocol

import numpy as np
from numpy.typing import NDArray

from develop.pattern.curve import Array
from develop.pattern.lettering import CAPITAL, text_width

if TYPE_CHECKING:
    from matplotlib.axes import Axes

__all__ = ["Piece", "picture"]

_SIZE = (8.0, 6.0)  # [in]
_DOTS = 150  # [1/in]
_OUTSIDE, _INSIDE = np.array([0.56, 0.64, 0.72]), np.array([0.47, 0.45, 0.43])
_EDGE, _SEAM, _TOP = "#1b2530", "#b3261e", "#1b2530"
_RIM = 240
_BETWEEN = "  ·  "
_TYPE = 14.0  # size of the caption [points]
_FAR = 3.2  # distance of the eye over the size of the piece: a calm perspective, yet a clear one
_CELL = 1.0 / 40.0  # length of a cell along a wall over the size of the piece
_BESIDE = 0.05  # of the piece's size: how far to a side a branch ends that is looked at from there
_MARGIN = 0.01  # of the picture, clear of words
_UNDER_CAPTION = 0.89
_TRIES = 40
_ABOUT = 24  # cells that lie about a place on a wall, at least one farther along it


class Piece(Protocol):
    """What a part of a finished piece must tell to be drawn."""

    def faces(self) -> tuple[Array, NDArray[np.int64]]:
        """Vertices (n, 3) [mm] and faces (m, 4), indices into them, all the same way round.

        The first two corners of a face lie towards end A, the others towards end B.
        """

    def rim_a(self, n: int) -> Array:
        """n points round end A, (n, 3) [mm]."""

    def rim_b(self, n: int) -> Array:
        """n points round end B, (n, 3) [mm]."""

    @property
    def seam_line(self) -> Array:
        """The seam from end A to end B, (2, 3) [mm]."""

    @property
    def joint_lines(self) -> Array:
        """Further lines at which the wall is parted, (k, 2, 3) [mm]."""

    @property
    def top_line(self) -> Array:
        """The line along the top from end A to end B, (2, 3) [mm]."""


class _Camera:
    """Perspective view of points (n, 3): x to the right, y up, both in shares of the piece's size."""

    def __init__(self, centre: Array, size: float, *, aside: float) -> None:
        # Facing end B from its right or left and from above: the piece's x, y, z are right, up, towards B.
        turn, rise = math.radians(52.0) * aside, math.radians(24.0)
        level = math.cos(rise)
        self.towards = np.array([math.sin(turn) * level, math.sin(rise), math.cos(turn) * level])
        right = np.cross([0.0, 1.0, 0.0], self.towards)
        self._axes = np.stack([right / np.linalg.norm(right), np.zeros(3), self.towards])
        self._axes[1] = np.cross(self.towards, self._axes[0])
        self._centre, self._size = centre, size
        self.eye = centre + self.towards * size * _FAR

    def project(self, points: Array) -> Array:
        """Places in the picture (..., 2) of points (..., 3)."""
        seen = (points - self._centre) @ self._axes.T / self._size
        return np.asarray(seen[..., :2] * (_FAR / (_FAR - seen[..., 2:])))


def picture(
    pieces: Sequence[Piece],
    facts: Sequence[str],
    branches: Sequence[str] = (),
    on_first: Sequence[Array] = (),
) -> bytes:
    """PNG of a piece in perspective, equal scale in all directions; the same piece gives the same bytes.

    pieces: its parts where they stand, the first with END A, the last with END B; then those that
    stand on them, as many as `branches` has names, each named at its end B. facts: what stands above
    it, in one line or two. on_first: lines (n, 3) [mm] on the wall of the first, such as a plate's edge.
    """
    import matplotlib
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.collections import PolyCollection
    from matplotlib.figure import Figure

    vertices = np.vstack([piece.faces()[0] for piece in pieces])
    low, high = vertices.min(axis=0), vertices.max(axis=0)
    centre, size = (low + high) / 2.0, float(np.linalg.norm(high - low))
    camera = _Camera(centre, size, aside=_aside(pieces, len(branches), float(centre[0]), size))
    with matplotlib.rc_context():
        matplotlib.rcdefaults()  # a user's own settings must not change the picture
        figure = Figure(figsize=_SIZE, dpi=_DOTS, facecolor="white")
        axes = figure.add_axes((0.02, 0.02, 0.96, 0.86))
        axes.set_axis_off()
        axes.set_aspect("equal")
        polygons, fill, stroke, widths = _scene(camera, pieces, _CELL * size, on_first)
        axes.add_collection(
            PolyCollection(polygons, facecolors=fill, edgecolors=stroke, linewidths=widths, capstyle="round")
        )
        for piece in pieces:
            for line in (piece.seam_line, *piece.joint_lines):
                seam = camera.project(line)
                axes.plot(*seam.T, color=_SEAM, linewidth=0.8, linestyle=(0, (2, 3)))  # seen through the wall
        corners = camera.project(vertices)
        for text, start, end, colour in _words(camera, pieces, branches):
            # A leader may run beyond the limits, to where its word stands.
            axes.plot(*np.array([start, end]).T, color=colour, linewidth=0.9, clip_on=False)
            axes.plot(*start, color=colour, marker="o", markersize=3.2)
            ahead = (end - start) / np.hypot(*(end - start))
            x, y = end + 0.012 * ahead
            axes.text(
                x, y, text, fontsize=13, weight="bold", color=colour,
                ha=_side(float(ahead[0]), "right", "left"), va=_side(float(ahead[1]), "top", "bottom"),
            )  # fmt: skip
        (x0, y0), (x1, y1) = corners.min(axis=0), corners.max(axis=0)
        pad = 0.19 * max(x1 - x0, y1 - y0)
        axes.set_xlim(x0 - pad, x1 + pad)
        axes.set_ylim(y0 - pad, y1 + pad)
        title, size_of_title = _caption(facts)
        figure.text(
            0.5, 0.94, title, ha="center", va="center", fontsize=size_of_title, color=_EDGE,
            linespacing=1.4, parse_math=False,
        )  # fmt: skip
        FigureCanvasAgg(figure)
        _keep_inside(axes)
        buffer = io.BytesIO()
        figure.savefig(buffer, format="png", metadata={"Software": None})
    return buffer.getvalue()


def _aside(pieces: Sequence[Piece], branches: int, centre: float, size: float) -> float:
    """From which side to look: that of what stands on the piece, else of its seam, else the right, 1.0.

    centre: of all that is shown, to the right; size [mm].
    """
    tips = [piece.rim_b(_RIM)[:, 0].mean() for piece in pieces[len(pieces) - branches :]]
    if tips:
        body = np.vstack([pieces[0].rim_a(_RIM), pieces[0].rim_b(_RIM)])
        aside = float(np.mean(tips) - body[:, 0].mean())
        if abs(aside) > _BESIDE * size:
            return math.copysign(1.0, aside)
    return -1.0 if pieces[0].seam_line[:, 0].mean() < centre - 1e-6 * size else 1.0


def _keep_inside(axes: Axes) -> None:
    """Draw the piece smaller, or move it, until every word is whole and below the caption."""
    left, bottom, wide, high = axes.figure.bbox.bounds
    least = np.array([left + _MARGIN * wide, bottom + _MARGIN * high])
    most = np.array([left + (1.0 - _MARGIN) * wide, bottom + _UNDER_CAPTION * high])
    for _ in range(_TRIES):
        axes.apply_aspect()
        boxes = np.array([text.get_window_extent().get_points() for text in axes.texts])
        under, over = least - boxes.min(axis=(0, 1)), boxes.max(axis=(0, 1)) - most
        if max(under.max(), over.max()) <= 0.0:
            return
        origin, unit = axes.transData.transform([[0.0, 0.0], [1.0, 1.0]])
        # A dot more than is wanting, so that the tries come to an end.
        under, over = (np.where(out > 0.0, out + 1.0, 0.0) / (unit - origin) for out in (under, over))
        (x0, x1), (y0, y1) = axes.get_xlim(), axes.get_ylim()
        axes.set_xlim(x0 - under[0], x1 + over[0])
        axes.set_ylim(y0 - under[1], y1 + over[1])


def _caption(facts: Sequence[str]) -> tuple[str, float]:
    """The facts in one line or, where that is too long, two of like length; and the size of the type."""
    lines = [_BETWEEN.join(facts)]
    if _size_of(lines) < _TYPE and len(facts) > 1:
        ways = [[_BETWEEN.join(facts[:n]), _BETWEEN.join(facts[n:])] for n in range(1, len(facts))]
        lines = max(ways, key=_size_of)
    return "\n".join(lines), _size_of(lines)


def _size_of(lines: list[str]) -> float:
    """The size of type [points] at which the lines have room, at most `_TYPE`."""
    widest = max(text_width(line, CAPITAL) for line in lines)
    return min(_TYPE, 0.95 * _SIZE[0] * 72.0 / max(widest, 1.0))


def _side(way: float, back: str, ahead: str) -> str:
    """Which side of a word is tied to its leader."""
    return "center" if abs(way) < 0.5 else (ahead if way > 0.0 else back)


def _words(
    camera: _Camera, pieces: Sequence[Piece], branches: Sequence[str]
) -> list[tuple[str, Array, Array, str]]:
    """The words with their leaders: text, start and end of the leader in the picture (2,), colour."""
    words = []
    first, rims = pieces[0], [(piece.rim_a(_RIM), piece.rim_b(_RIM)) for piece in pieces]
    corners = np.vstack([camera.project(a + t * (b - a)) for a, b in rims for t in np.linspace(0.0, 1.0, 25)])
    rim_a, rim_b = rims[0]
    height = (rim_a[:, 1].mean() + rim_b[:, 1].mean()) / 2.0
    middle = corners.mean(axis=0)
    away = np.zeros(2)
    last = len(rims) - len(branches)
    tips = zip(branches, (rim for _, rim in rims[last:]), strict=True)
    for text, rim in (*tips, ("END A", rim_a), ("END B", rims[last - 1][1])):
        places = camera.project(rim)
        away = places.mean(axis=0) - middle
        away = np.array([math.copysign(0.85, away[0]), math.copysign(0.35, away[1])])
        start = places[int(np.argmax(places @ away))]
        words.append((text, start, start + 0.07 * away / np.hypot(*away), _EDGE))
    ends: list[Array] = []
    seam = first.seam_line
    lines = (
        ("TOP", first.top_line, 0.9 if branches else 0.6, _TOP, True),  # clear of a branch
        ("SEAM", seam, 0.35, _SEAM, seam[:, 1].mean() > height + 0.25 * np.ptp(rim_a[:, 1])),
    )
    for text, line, share, colour, up in lines:
        start = camera.project(line[0] + share * (line[1] - line[0]))
        column = corners[np.abs(corners[:, 0] - start[0]) < 0.04]
        edge = float(column[:, 1].max() + 0.06 if up else column[:, 1].min() - 0.06)
        end = np.array([start[0], edge])
        for other in ends:  # a seam at the top: its word beside the other
            if abs(end[0] - other[0]) < 0.2 and abs(end[1] - other[1]) < 0.2:
                end[0] = other[0] + math.copysign(0.2, end[0] - other[0])
        ends.append(end)
        words.append((text, start, end, colour))
    # Out of the picture of the piece where no other word is, and never to the left, as that would read left.
    # Of several parts only the first stands square to the view that right is read in.
    start = camera.project(_right_of(rim_b if last == 1 else rim_a))
    ways = (22, 40, 0, 60, 75, -20) if away[0] > 0.0 else (-90, -75, -60, -45, -30, -15, 0, 15, 30)
    tries = [_way_out(corners, start, math.radians(way), by) for by in (0.06, 0.12, 0.18) for way in ways]
    apart = [min(float(np.hypot(*(end - word[2]))) for word in words) for end in tries]
    clear = next((n for n, gap in enumerate(apart) if gap > 0.13), int(np.argmax(apart)))
    words.append(("RIGHT", start, tries[clear], _EDGE))
    return words


def _way_out(points: Array, start: Array, way: float, by: float) -> Array:
    """The place (2,) outside the hull of points (n, 2) `by` so much, from `start` in a direction [rad]."""
    ahead = np.array([math.cos(way), math.sin(way)])
    turn = way + np.radians(np.arange(-88.0, 89.0, 2.0))
    normal = np.stack([np.cos(turn), np.sin(turn)])
    far = ((points @ normal).max(axis=0) - start @ normal) / (ahead @ normal)
    return np.asarray(start + ahead * (max(float(far.min()), 0.0) + by))


def _right_of(rim: Array) -> Array:
    """The point (3,) of a rim (n, 3) to the right of its centre, for one who faces END B."""
    centre = (rim.max(axis=0) + rim.min(axis=0)) / 2.0
    x, y, _ = (rim - centre).T
    return np.asarray(rim[int(np.argmin(np.abs(np.arctan2(y, x))))])


def _lines(piece: Piece) -> list[tuple[Array, str, float]]:
    """Lines on the piece: points (n, 3), colour, width in points."""
    rims = [np.vstack([rim, rim[:1]]) for rim in (piece.rim_a(_RIM), piece.rim_b(_RIM))]
    share = np.linspace(0.0, 1.0, 61)[:, None]
    top, *seams = (
        line[0] + share * (line[1] - line[0])
        for line in (piece.top_line, piece.seam_line, *piece.joint_lines)
    )
    edges = [(rims[0], _EDGE, 1.8), (rims[1], _EDGE, 1.8), (top, _TOP, 0.7)]
    return [*edges, *((seam, _SEAM, 2.2) for seam in seams)]


def _scene(
    camera: _Camera, pieces: Sequence[Piece], cell: float, on_first: Sequence[Array]
) -> tuple[list[Array], Array, Array, Array]:
    """Polygons (2-D) from the back to the front, fill and stroke colours (n, 4), stroke widths (n,).

    cell: how long a cell of a wall may be [mm].
    """
    from matplotlib.colors import to_rgba

    polygons: list[Array] = []
    far, fill, stroke, widths = [], [], [], []
    for number, piece in enumerate(pieces):
        vertices, faces = piece.faces()
        corners = vertices[faces]
        corners, normal = _cells(corners, _outward(corners), cell)
        middle = corners.mean(axis=1)
        away = np.linalg.norm(middle - camera.eye, axis=1)
        outside = _faces_eye(camera, middle, normal)
        colours = np.hstack([_shades(camera, normal, outside), np.ones((len(corners), 1))])
        polygons += list(camera.project(corners))
        far.append(away)
        fill.append(colours)
        stroke.append(colours)  # closes the hair gaps between the polygons
        widths.append(np.full(len(corners), 0.4))
        others = [] if number else [(line, _EDGE, 1.4) for line in on_first]
        for points, colour, width in (*_lines(piece), *others):
            middles = (points[:-1] + points[1:]) / 2.0
            apart = (middle**2).sum(axis=1) - 2.0 * middles @ middle.T
            about = np.argpartition(apart, min(_ABOUT, len(middle) - 1), axis=1)[:, :_ABOUT]
            flat = camera.project(points)
            polygons += list(np.stack([flat[:-1], flat[1:]], axis=1))
            # After the last of the cells about it, of which the line hides a little.
            far.append(np.nextafter(away[about].min(axis=1), 0.0))
            fill.append(np.zeros((len(middles), 4)))
            stroke.append(np.tile(to_rgba(colour), (len(middles), 1)))
            widths.append(np.full(len(middles), width))
    order = np.argsort(-np.concatenate(far), kind="stable")
    inks = [np.concatenate(each)[order] for each in (fill, stroke, widths)]
    return [polygons[i] for i in order], inks[0], inks[1], inks[2]


def _cells(corners: Array, normal: Array, cell: float) -> tuple[Array, Array]:
    """Faces (m, 4, 3) cut across from end A to end B into equal cells, with their normals (n, 3)."""
    a, b = corners[:, :2], corners[:, :1:-1]  # both from left to right
    longest = float(np.linalg.norm(b - a, axis=-1).max())
    rows = max(math.ceil(longest / cell), 1)
    share = (np.arange(rows + 1) / rows)[:, None, None, None]
    cuts = a + share * (b - a)
    cells = np.concatenate([cuts[:-1], cuts[1:, :, ::-1]], axis=2)
    return cells.reshape(-1, 4, 3), np.tile(normal, (rows, 1))


def _outward(corners: Array) -> Array:
    """Unit normals (m, 3) of faces (m, 4, 3), out of the piece."""
    normal = np.cross(corners[:, 2] - corners[:, 0], corners[:, 3] - corners[:, 1])
    # The faces all wind the same way round; outward is the way that on the whole leaves the piece.
    middle = corners.mean(axis=1)
    leaves = float((normal * (middle - middle.mean(axis=0))).sum())
    length = np.linalg.norm(normal, axis=1)
    return np.asarray(math.copysign(1.0, leaves) * normal / np.where(length > 0.0, length, 1.0)[:, None])


def _faces_eye(camera: _Camera, points: Array, normal: Array) -> NDArray[np.bool_]:
    """Whether the outside of the wall is seen at each point, (n,)."""
    return np.asarray((normal * (camera.eye - points)).sum(axis=1) > 0.0)


def _shades(camera: _Camera, normal: Array, outside: NDArray[np.bool_]) -> Array:
    """Colour (m, 3) of each face: by the light on it, and by which side of the wall is seen."""
    facing = np.where(outside, 1.0, -1.0)[:, None] * normal
    light = np.array([0.25, 0.85, 0.45]) / np.linalg.norm([0.25, 0.85, 0.45])
    bright = (0.5 + 0.5 * facing @ light) ** 1.4  # softer than Lambert's law: no side is quite dark
    halfway = light + camera.towards
    gloss = np.clip(facing @ (halfway / np.linalg.norm(halfway)), 0.0, 1.0) ** 24
    base = np.where(outside[:, None], _OUTSIDE, _INSIDE)
    shade = base * (0.5 + 0.72 * bright)[:, None] + 0.2 * (gloss * outside)[:, None]
    return np.asarray(np.clip(shade, 0.0, 1.0))
