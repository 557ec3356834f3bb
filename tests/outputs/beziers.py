"""Béziers as a reader of the written files draws them; shares nothing with the writers."""

from __future__ import annotations

import numpy as np


def sampled(segments, count=17):
    points = []
    for s in segments:
        t = np.linspace(0.0, 1.0, count)[:, None]
        if len(s) == 2:
            points.append(s[0] + t * (s[1] - s[0]))
        else:
            points.append(
                (1 - t) ** 3 * s[0] + 3 * (1 - t) ** 2 * t * s[1] + 3 * (1 - t) * t**2 * s[2] + t**3 * s[3]
            )
    return np.vstack(points)
