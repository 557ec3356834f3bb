"""Polylines with bulges as a reader of DXF draws them; shares nothing with the writer."""

from __future__ import annotations

import math

import numpy as np


def drawn(vertices, *, closed, rise=1e-5):
    """Points along vertices (x, y, bulge), arcs in chords that lie within `rise` [mm] of them.

    The bulge is the tangent of a quarter of the sweep, positive anticlockwise (DXF reference).
    """
    ends = [*vertices[1:], vertices[0]] if closed else vertices[1:]
    points = []
    for (x, y, bulge), (u, v, _) in zip(vertices, ends, strict=False):
        points.append((x, y))
        if bulge:
            sweep = 4.0 * math.atan(bulge)
            chord = math.hypot(u - x, v - y)
            radius = chord / (2.0 * math.sin(sweep / 2.0))  # signed
            toward = math.atan2(v - y, u - x) + math.pi / 2.0 - sweep / 2.0
            cx, cy = x + radius * math.cos(toward), y + radius * math.sin(toward)
            start = math.atan2(y - cy, x - cx)
            count = max(2, math.ceil(abs(sweep) * math.sqrt(abs(radius) / (8.0 * rise))))
            points += [
                (cx + abs(radius) * math.cos(start + sweep * k / count),
                 cy + abs(radius) * math.sin(start + sweep * k / count))
                for k in range(1, count)
            ]  # fmt: skip
    if not closed:
        points.append(tuple(vertices[-1][:2]))
    return np.array(points)
