"""Checking templates: flat plates whose one edge is the inside or the outside of a section."""

from __future__ import annotations

from dataclasses import dataclass, replace
from math import pi
from typing import TYPE_CHECKING

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.pattern import Outline, WitnessMark
from develop.pieces.built import Part
from develop.pieces.flat import DIRECTIONS, Plate, drawn, pattern_of_plate
from develop.pieces.wording import measured_words
from develop.solid import FlatTemplate, Stretch
from develop.surfaces.plane import PlaneCurve, plane_curve

if TYPE_CHECKING:
    from develop.sections.section import Section

__all__ = ["Profile", "template_of"]

# How wide a template for the outside is beyond the section: a tenth of it, within [mm]. Common practice,
# no source.
_SHARE, _LEAST, _MOST = 0.1, 40.0, 120.0
_COLUMNS = 24
_NEAR = 1e-12  # of the way round: two places are one


@dataclass(frozen=True)
class Profile:
    """What one template checks.

    section: on the surface of the given sizes, `scale` times as large here. distance: of the face
    outside of it [mm]. turn: of the section's own axes in the piece [rad]. where: the ends, in words.
    face: `inside` or `outside`. held: how the template is held.
    """

    section: Section
    scale: float
    distance: float
    turn: float
    where: str
    face: str
    held: str

    @property
    def curve(self) -> Section:
        """The section of the face, before it is scaled."""
        return self.section.offset(self.distance / self.scale)


def template_of(
    profile: Profile, *, share: str, mark: str, kind: str, units: str, cautions: tuple[str, ...]
) -> Part:
    """The template of a profile; share: `half` or `quarter` of the section.

    Every section is its own image when it is turned half round; those that lie along their axes also
    when they are turned over.
    """
    curve, scale = profile.curve, profile.scale
    reach = 0.5 if share == "quarter" else 1.0
    start = float(curve.at_direction(np.array([0.0]))[0])
    stop = float(curve.at_direction(np.array([reach * pi]))[0])
    stop += curve.period if stop <= start else 0.0
    found = plane_curve(curve, into=scale * np.eye(2), start=start, stop=stop)
    inside = profile.face == "inside"
    corners = _corners(curve, scale, share, inside=inside)
    net, sides = _outline(found, corners, inside=inside)
    centre_line = _centre_line(sides, found, share, inside=inside)
    plate = Plate(net, (), (), centre_line, _places(found, corners, inside=inside))
    plate = replace(plate, marks=_marks(profile, curve, start, stop))
    width, height = (measured_words(scale * size, units) for size in (curve.width, curve.height))
    others = (
        "quarter: turned over and turned round it checks the other three"
        if share == "quarter"
        else "half: turned half round it checks the other half"
    )
    pattern = pattern_of_plate(
        plate,
        mark=mark,
        kind=kind,
        quantity=1,
        facts=(
            f"{mark}: checking template",
            f"{profile.face.upper()} face at {profile.where}",
            f"{width} x {height} over all",
            others,
            profile.held,
            *cautions,
            "of card, ply or sheet; quantity 1",
        ),
    )
    solid = FlatTemplate(Stretch(curve, start, stop), scale, corners, inside, plate.shift)
    return Part(replace(pattern, units=units), solid, ())


def _marks(profile: Profile, curve: Section, start: float, stop: float) -> tuple[WitnessMark, ...]:
    """The directions of the piece that lie on the profile, running lengths from its start."""
    u = curve.at_direction(np.array([direction - profile.turn for direction, _ in DIRECTIONS]))
    near = _NEAR * curve.period
    past = (u - start + near) % curve.period - near
    at, arcs, first = curve.walk(u), curve.arc(start + past), float(curve.arc(np.array([start]))[0])
    sign = -1.0 if profile.face == "inside" else 1.0
    return tuple(
        WitnessMark(
            profile.scale * np.array([at.x[i], at.y[i]]),
            sign * np.array([at.ex[i], at.ey[i]]),
            word,
            "profile",
            profile.scale * float(arcs[i] - first),
        )
        for i, (_, word) in enumerate(DIRECTIONS)
        if past[i] <= stop - start + near
    )


def _corners(curve: Section, scale: float, share: str, *, inside: bool) -> Array:
    """Corners (n, 2) [mm] that the straight edges lead over, from the end of the profile to its start."""
    if inside:
        return np.zeros((1, 2)) if share == "quarter" else np.empty((0, 2))
    wide, high = 0.5 * scale * curve.width, 0.5 * scale * curve.height
    margin = min(max(_SHARE * 2.0 * max(wide, high), _LEAST), _MOST)
    x, y = wide + margin, high + margin
    if share == "quarter":
        return np.array([[0.0, y], [x, y], [x, 0.0]])
    return np.array([[-x, 0.0], [-x, y], [x, y], [x, 0.0]])


def _outline(found: PlaneCurve, corners: Array, *, inside: bool) -> tuple[Outline, Array]:
    """The contour, anticlockwise, and the ends of its straight sides in the order of their numbers."""
    curve = drawn(found)
    points = np.vstack([curve.end, corners, curve.start])
    sides = [(f"edge_{n}", segment(points[n - 1], points[n])) for n in range(1, len(points))]
    x, y = points.T
    area = found.swept + 0.5 * float(np.sum(x[:-1] * y[1:] - y[:-1] * x[1:]))
    if inside:
        return Outline((("profile", curve), *sides), area), points
    back = [(name, side.reversed()) for name, side in reversed(sides)]
    return Outline((("profile", curve.reversed()), *back), -area), points


def _centre_line(points: Array, found: PlaneCurve, share: str, *, inside: bool) -> tuple[Curve, ...]:
    """The centre line of a half, from the profile on; the edges of a quarter lie on both."""
    if share == "quarter":
        return ()
    line = drawn(found).polyline(0.01)
    top = float(np.interp(0.0, line[::-1, 0], line[::-1, 1]))
    far = 0.0 if inside else float(points[:, 1].max())
    return (segment(np.array([0.0, far]), np.array([0.0, top])),)


def _places(found: PlaneCurve, corners: Array, *, inside: bool) -> Array:
    """Upright lines that words may stand on, the longest first, off the centre line."""
    line = drawn(found).polyline(0.05)[::-1]
    low, high = (line[:, 0].min(), line[:, 0].max()) if inside else (corners[:, 0].min(), corners[:, 0].max())
    x = low + (np.arange(_COLUMNS) + 0.5) / _COLUMNS * (high - low)
    edge = np.interp(x, line[:, 0], line[:, 1], left=0.0, right=0.0)
    ends = (np.zeros_like(x), edge) if inside else (edge, np.full_like(x, corners[:, 1].max()))
    lines = np.stack([np.stack([x, each], axis=-1) for each in ends], axis=1)
    tall = np.round(lines[:, 1, 1] - lines[:, 0, 1], 6)
    # Of equal ones the farther from the middle: a centre line runs there.
    return np.asarray(lines[np.lexsort((x, -np.abs(x - x.mean()) if not inside else np.abs(x), -tall))])
