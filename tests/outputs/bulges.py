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


def length(vertices, *, closed):
    """Length of lines and arcs [mm]."""
    ends = [*vertices[1:], vertices[0]] if closed else vertices[1:]
    found = 0.0
    for (x, y, bulge), (u, v, _) in zip(vertices, ends, strict=False):
        half = 2.0 * math.atan(bulge)
        found += math.hypot(u - x, v - y) * (half / math.sin(half) if bulge else 1.0)
    return found


def distances(points, vertices, *, closed):
    """Distance (n,) of points (n, 2) from lines and arcs."""
    best = np.full(len(points), np.inf)
    ends = [*vertices[1:], vertices[0]] if closed else vertices[1:]
    for (x, y, bulge), (u, v, _) in zip(vertices, ends, strict=False):
        start, chord = np.array([x, y]), np.array([u - x, v - y])
        gap, long = points - start, float(np.hypot(*chord))
        if not bulge:
            share = np.clip(gap @ chord / max(long * long, 1e-300), 0.0, 1.0)
            best = np.minimum(best, np.hypot(*(gap - share[:, None] * chord).T))
            continue
        half = 2.0 * math.atan(bulge)
        radius = long / (2.0 * math.sin(half))  # signed
        left = np.array([-chord[1], chord[0]]) / long
        centre = start + chord / 2.0 + radius * math.cos(half) * left
        out = -left * math.copysign(1.0, bulge)  # to the middle of the arc
        from_centre = points - centre
        far = np.hypot(*from_centre.T)
        inside = from_centre @ out >= far * math.cos(half)
        ends_off = np.minimum(np.hypot(*gap.T), np.hypot(*(points - (u, v)).T))
        best = np.minimum(best, np.where(inside, np.abs(far - abs(radius)), ends_off))
    return best
