"""Curves of a flat plate: a section, or a stretch of one, carried into the flat by a linear map."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from develop.quadrature import WEIGHTS, Array, Indices, Mask, Panels, between, resolved, running, tail
from develop.sections.section import Section
from develop.surfaces.edges import Trace, chains

__all__ = ["PlaneCurve", "plane_curve"]

_SAME = 1e-9
_LOOSE = 1e-14
_ROUNDS = 40


@dataclass(frozen=True)
class PlaneCurve:
    """A curve in the flat, walked anticlockwise.

    controls: its chain of Béziers (3 n + 1, 2) [mm]. length: exact [mm].
    swept: area swept from the origin, ½ ∫ (x dy − y dx), exact [mm²].
    """

    controls: Array
    length: float
    swept: float


def plane_curve(
    section: Section, *, into: Array | None = None, start: float | None = None, stop: float | None = None
) -> PlaneCurve:
    """The points into · p for the section's points p, from parameter start to stop, else once round.

    into: (2, 2), keeping the way round. The length is the integral of |into · p'|, the swept area
    Green's, both on panels that resolve them.
    """
    carry = np.eye(2) if into is None else into
    begin = float(section.breaks[0]) if start is None else start
    end = begin + section.period if stop is None else stop
    whole = section.girth * float(np.linalg.norm(carry, 2))

    def walked(u: Array) -> tuple[Array, Array, Array]:
        """Points and tangents (..., 2), the tangents scaled by the map, and ds/du (...)."""
        at = section.walk(u)
        point = np.stack([at.x, at.y], axis=-1) @ carry.T
        return point, np.stack([-at.ey, at.ex], axis=-1) @ carry.T, at.ds

    def rates(panels: Panels) -> Array:
        point, tangent, ds = walked(panels.nodes)
        speed = np.hypot(tangent[..., 0], tangent[..., 1]) * ds
        cross = (point[..., 0] * tangent[..., 1] - point[..., 1] * tangent[..., 0]) * ds
        return np.stack([speed, 0.5 * cross], axis=-1)

    def loose(panels: Panels, found: Array) -> Mask:
        return np.asarray(tail(found)[:, 0] * panels.half > _LOOSE * whole)

    panels, found = resolved(Panels.between(_ends(section, begin, end)), rates, loose, rounds=_ROUNDS)
    table, ends = running(found[..., :1], panels.half)

    def traces(panel: Indices, x: Array) -> tuple[Trace]:
        point, tangent, _ = walked(panels.start[panel] + panels.half[panel] * (x + 1.0))
        unit = tangent / np.hypot(tangent[:, 0], tangent[:, 1])[:, None]
        arcs = np.einsum("nk,nk->n", between(x), table[panel][..., 0])
        return (Trace(point, unit, arcs),)

    (controls,) = chains(traces, len(panels.start))
    swept = float(np.sum(panels.half * (found[..., 1] @ WEIGHTS)))
    return PlaneCurve(controls, float(ends[-1, 0]), swept)


def _ends(section: Section, start: float, stop: float) -> Array:
    """Panel ends from start to stop, at the section's breaks in between."""
    first = np.floor((start - section.breaks[0]) / section.period)
    turns = section.period * np.arange(first, first + np.ceil((stop - start) / section.period) + 2.0)
    breaks = (section.breaks[:-1] + turns[:, None]).ravel()
    near = _SAME * section.period
    inside = breaks[(breaks > start + near) & (breaks < stop - near)]
    return np.concatenate([[start], inside, [stop]])
