"""Whether a part goes into a rectangle, turned by any angle, and the least rectangle round it."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.pattern import Outline

__all__ = ["Lying", "hull", "lying_in", "outline_hull", "smallest"]

_CHORDS = 1e-3  # [mm]
_HALF = 0.5 * np.pi
# A sheet may be over-filled by so much: what the chords leave out [mm].
_ROUNDING = 1e-6


@dataclass(frozen=True)
class Lying:
    """How a part lies in a rectangle: turned anticlockwise by an angle [rad], from which it takes up so
    much along the rectangle's first and second side [mm]."""

    angle: float
    wide: float
    high: float


def hull(points: Array) -> Array:
    """The corners (k, 2) of the convex hull of points (n, 2), anticlockwise, by Andrew's monotone chain."""
    order = points[np.lexsort((points[:, 1], points[:, 0]))]
    chains = []
    for some in (order, order[::-1]):
        chain: list[tuple[float, float]] = []
        for x, y in some.tolist():
            while len(chain) > 1:
                (ax, ay), (bx, by) = chain[-2:]
                if (bx - ax) * (y - ay) - (by - ay) * (x - ax) > 0.0:
                    break
                chain.pop()
            chain.append((x, y))
        chains += chain[:-1]
    return np.array(chains)


def outline_hull(outline: Outline) -> Array:
    """The convex hull (k, 2) [mm] of a contour; a rectangle that holds the one holds the other."""
    return hull(np.vstack([curve.polyline(_CHORDS)[:-1] for _, curve in outline.curves]))


def lying_in(corners: Array, size: tuple[float, float]) -> Lying | None:
    """How a convex part lies in a rectangle of this size [mm], or None where it does not go in.

    corners: of the part (n, 2). Of all angles that one at which it fills the sides least, that is with the
    least greater share of the two.
    """
    found = _best(corners, lambda wide, high: np.maximum(wide / size[0], high / size[1]), size)
    goes = found.wide <= size[0] + _ROUNDING and found.high <= size[1] + _ROUNDING
    return found if goes else None


def smallest(corners: Array) -> Lying:
    """The least rectangle by area round a convex part: one of its sides lies along one of the part's."""
    return _best(corners, lambda wide, high: wide * high, None)


def _best(
    corners: Array, measure: Callable[[Array, Array], Array], size: tuple[float, float] | None
) -> Lying:
    """The angle at which a measure of the extents is least.

    While no side of the part turns past a side of the rectangle, each extent is d cos(angle − a), d a
    distance of two corners: it has no least value inside. So the greater of two shares is least where a side
    of the part lies along one of the rectangle's, or where the two shares are equal.
    """
    sides = np.roll(corners, -1, axis=0) - corners
    stops = np.unique(np.round(-np.arctan2(sides[:, 1], sides[:, 0]) % _HALF, 15))
    stops = np.concatenate([stops, stops + _HALF])
    angles = [stops]
    if size is not None:
        ends = np.append(stops, stops[0] + np.pi)
        middle = 0.5 * (ends[1:] + ends[:-1])
        across, up = (_reach(corners, middle + turn) for turn in (0.0, -_HALF))
        # d · (cos, −sin) for the extent across, d · (sin, cos) for the one up.
        even = across[:, 0] / size[0] - up[:, 1] / size[1]
        odd = -across[:, 1] / size[0] - up[:, 0] / size[1]
        equal = np.arctan2(-even, odd)
        equal = middle + (equal - middle + _HALF) % np.pi - _HALF
        angles.append(equal[np.abs(equal - middle) <= 0.5 * np.diff(ends)])
    every = np.concatenate(angles)
    c, s = np.cos(every)[:, None], np.sin(every)[:, None]
    x, y = c * corners[:, 0] - s * corners[:, 1], s * corners[:, 0] + c * corners[:, 1]
    wide, high = np.ptp(x, axis=1), np.ptp(y, axis=1)
    best = int(np.argmin(measure(wide, high)))
    return Lying(float(every[best] % np.pi), float(wide[best]), float(high[best]))


def _reach(corners: Array, angle: Array) -> Array:
    """From the least to the farthest corner along x, for each angle that the part is turned by (k, 2)."""
    x = np.cos(angle)[:, None] * corners[:, 0] - np.sin(angle)[:, None] * corners[:, 1]
    return np.asarray(corners[np.argmax(x, axis=1)] - corners[np.argmin(x, axis=1)])
