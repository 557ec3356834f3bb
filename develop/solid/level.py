"""Edges of thick plate that lie in the planes of their ends: the planes, girths and the area between them.

The developed sheet is the parallel of the given side at a distance d. Its plane sections are convex
curves again, and what is wanted of them follows from their supports.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from develop.quadrature import DERIVATIVE, WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.solid.end import End
from develop.solid.straights import contact, straights

if TYPE_CHECKING:
    from develop.solid.solid import Solid

__all__ = ["EndPlane", "level_area", "level_girth"]

_LOOSE = 5e-12
_ROUNDS = 16
_LEAST = 1e-3
# Normals nearer than this are those of one flat face.
_ONE_FACE = 1e-9


@dataclass(frozen=True)
class EndPlane:
    """The plane of an end: a point (3,) [mm] and the unit rows x, y, normal (3, 3)."""

    origin: Array
    axes: Array

    @staticmethod
    def of(end: End) -> EndPlane | None:
        """The plane of an end; None for a point."""
        if end.section.girth == 0.0:
            return None
        return EndPlane._across(end.origin, np.cross(end.spans[:, 0], end.spans[:, 1]))

    @staticmethod
    def of_cut(height: float, rise: Array) -> EndPlane:
        """The plane z = height + rise · (x, y) [mm]."""
        return EndPlane._across(np.array([0.0, 0.0, height]), np.array([-rise[0], -rise[1], 1.0]))

    @staticmethod
    def _across(origin: Array, normal: Array) -> EndPlane:
        z = normal / np.linalg.norm(normal)
        x = np.cross(np.eye(3)[np.argmin(np.abs(z))], z)
        x = x / np.linalg.norm(x)
        return EndPlane(origin, np.array([x, np.cross(z, x), z]))

    def over(self, points: Array) -> Array:
        """Heights (n,) [mm] of points (n, 3) over the plane."""
        return np.asarray((points - self.origin) @ self.axes[2])

    def along(self, points: Array, lines: Array) -> Array:
        """Points (n, 3) carried along lines (n, 3) into the plane."""
        return np.asarray(points - (self.over(points) / (lines @ self.axes[2]))[:, None] * lines)


def level_girth(solid: Solid, *, end_b: bool) -> float:
    """Length [mm] of a level edge, by Cauchy's formula ∮ H dφ over the normals in its plane.

    A plane with the outward unit normal N that touches the given side at the distance S from the
    origin touches the sheet at S + d, and in a plane through o, where N's part has the length cos ψ,
    the support about o is H = (S + d − N·o) / cos ψ. Where the plane is that of the end's own section,
    that is h + d / cos ψ. Of a part it is an open stretch, so that the places of its ends along their
    tangents are added, as for `End.stretch`.
    """
    plane = solid.planes[int(end_b)]
    assert plane is not None
    mine, yours = (solid.end_b, solid.end_a) if end_b and solid.cut_b is None else (solid.end_a, solid.end_b)

    def rates(panels: Panels) -> Array:
        u, half = panels.nodes, panels.half
        normal = solid.touching(mine, yours, u.ravel())
        flat = normal @ plane.axes[:2].T
        cos_psi = np.hypot(flat[:, 0], flat[:, 1])
        reach = mine.support(normal) + solid.distance - normal @ plane.origin
        if end_b and solid.cut_b is not None:
            phi = np.unwrap(np.arctan2(flat[:, 1], flat[:, 0]).reshape(u.shape), axis=1)
            turn = (phi @ DERIVATIVE.T) / half[:, None]
        else:
            turn = mine.section.walk(u.ravel()).dphi.reshape(u.shape)
        return np.asarray(((reach / cos_psi).reshape(u.shape) * turn)[..., None])

    length = float(_summed(solid, (mine, yours), rates)[0])
    if solid.stop is None:
        return length
    first, last = (solid.seam_b, solid.stop[1]) if mine is solid.end_b else (solid.seam, solid.stop[0])
    assert first is not None
    flat = solid.touching(mine, yours, np.array([first, last])) @ plane.axes[:2].T
    tangent = np.stack([-flat[:, 1], flat[:, 0]], axis=-1) / np.hypot(*flat.T)[:, None]
    ends = np.stack([line[int(end_b)] for line in (solid.sheet_seam, solid.sheet_stop)])
    along = (((ends - plane.origin) @ plane.axes[:2].T) * tangent).sum(axis=1)
    return length + float(along[1] - along[0])


def level_area(solid: Solid) -> float:
    """Area [mm²] of the sheet between its edges, of which one is level at least.

    Where the touching plane turns, ½ |R × a'| + ½ |R × b'| round one end; flat faces, over which it
    stands, are polygons. Near a loose spot of a section only its own end is walked smoothly.
    """
    from_b = bool(len(solid.end_b.section.loose_spots)) and not len(solid.end_a.section.loose_spots)
    walk = solid.sheet_strip_b if from_b else solid.sheet_strip
    mine, yours = (solid.end_b, solid.end_a) if from_b else (solid.end_a, solid.end_b)

    def rates(panels: Panels) -> Array:
        u, half = panels.nodes, panels.half
        strip = walk(u.ravel())
        turns = mine.section.walk(u.ravel()).dphi.reshape(u.shape) != 0.0
        ruling = (strip.b - strip.a).reshape(*u.shape, 3)
        total = np.zeros(u.shape)
        for edge in (strip.a, strip.b):
            points = (edge + solid.distance * strip.normal).reshape(*u.shape, 3)
            velocity = (DERIVATIVE @ points) / half[:, None, None]
            total += 0.5 * np.linalg.norm(np.cross(ruling, velocity), axis=-1)
        return np.asarray(np.where(turns, total, 0.0)[..., None])

    return float(_summed(solid, (mine, yours), rates)[0]) + sum(
        _face(solid, normal) for normal in _faces(solid)
    )


def _summed(solid: Solid, ends: tuple[End, End], rates: object) -> Array:
    """Integrals of rates round an end, on panels that resolve them."""
    assert callable(rates)
    panel_ends = solid.clipped(solid.panel_ends(*ends), on_b=ends[0] is solid.end_b)
    if len(panel_ends) < 2:
        return np.zeros(1)
    first = Panels.between(panel_ends)
    whole = np.maximum(((WEIGHTS @ rates(first)) * first.half[:, None]).sum(axis=0), _LEAST)

    def loose(panels: Panels, found: Array) -> Mask:
        return np.asarray((tail(found) * panels.half[:, None] > _LOOSE * whole).any(axis=1))

    panels, found = resolved(first, rates, loose, rounds=_ROUNDS)
    return np.asarray(((WEIGHTS @ found) * panels.half[:, None]).sum(axis=0))


def _faces(solid: Solid) -> list[Array]:
    """Normals (3,) of the flat faces of the side, each once."""
    found: list[Array] = []
    for mine, yours in ((solid.end_a, solid.end_b), (solid.end_b, solid.end_a)):
        for normal in solid.touching(mine, yours, straights(mine).mean(axis=1)):
            if all(np.abs(normal - other).max() > _ONE_FACE for other in found):
                found.append(normal)
    return found


def _face(solid: Solid, normal: Array) -> float:
    """Area [mm²] of the sheet over a flat face, or over what a part has of it."""
    on_a, on_b = (contact(end, normal) for end in (solid.end_a, solid.end_b))
    if solid.stop is None:
        return _flat_between(solid, normal, on_a, on_b)
    assert solid.seam_b is not None
    periods = solid.end_a.section.period, solid.end_b.section.period
    starts = solid.seam, solid.seam_b
    # In turns from the part's start, of both ends the same.
    past_a, past_b = (
        float(on.mean() - start) / period
        for on, start, period in zip((on_a, on_b), starts, periods, strict=True)
    )
    turns = np.floor(past_a)
    turns_b = turns + np.round(past_b - past_a)
    total = 0.0
    for turn in (-1.0, 0.0, 1.0):
        here = (
            np.clip(on + (turn - back) * period, start, stop)
            for on, back, period, start, stop in zip(
                (on_a, on_b), (turns, turns_b), periods, starts, solid.stop, strict=True
            )
        )
        total += _flat_between(solid, normal, *here)
    return total


def _flat_between(solid: Solid, normal: Array, on_a: Array, on_b: Array) -> float:
    """Area [mm²] of the sheet over a flat face between two lines, through parameters (2,) of both ends."""
    a, b = solid.end_a.point(on_a), solid.end_b.point(on_b)
    lift = solid.distance * normal
    plane_a, plane_b = solid.planes
    cut = EndPlane.of_cut(*solid.cut_b) if solid.cut_b else None
    corners_a, corners_b = a + lift, b + lift
    if cut is not None and plane_b is None:
        corners_b = cut.along(b, b - a) + lift
    if plane_a is not None:
        corners_a = plane_a.along(a + lift, b - a)
    if plane_b is not None:
        corners_b = plane_b.along(b + lift, b - a)
    across = np.cross(corners_b[1] - corners_a[0], corners_b[0] - corners_a[1])
    return 0.5 * float(np.linalg.norm(across))
