"""Patterns and a solid made from elementary geometry, not by the program, to try the outputs on."""

from __future__ import annotations

import math
from dataclasses import dataclass
from itertools import pairwise

import numpy as np

from develop.pattern.curve import Array, Curve, segment
from develop.pattern.layout import lay_out
from develop.pattern.pattern import Division, Outline, Pattern, RollLine, Rulings, WitnessMark


def curve_through(points, tangents, length: float) -> Curve:
    """Cubic Hermite pieces through points with the derivatives `tangents` over equal steps of 1."""
    controls = [points[0]]
    for (p, q), (s, t) in zip(pairwise(points), pairwise(tangents), strict=True):
        controls += [p + s / 3.0, q - t / 3.0, q]
    return Curve(np.array(controls), length)


def arc(centre, radius: float, start: float, end: float, pieces: int = 32) -> Curve:
    """A circular arc by Béziers with the usual length of handle, 4/3 tan(step/4)."""
    angles = np.linspace(start, end, pieces + 1)
    handle = 4.0 / 3.0 * math.tan((end - start) / pieces / 4.0)
    points = centre + radius * np.stack([np.cos(angles), np.sin(angles)], axis=1)
    tangents = 3.0 * handle * radius * np.stack([-np.sin(angles), np.cos(angles)], axis=1)
    return curve_through(points, tangents, radius * abs(end - start))


def _pattern(
    mark, kind, net, ends_a, ends_b, directions, arcs, marks, facts, *, full, flow="a to b", openings=()
):
    divisions = tuple(
        Division(n, float(d), float(s), float(t), p, q, float(np.hypot(*(q - p))))
        for n, (p, q, d, (s, t)) in enumerate(zip(ends_a, ends_b, directions, arcs, strict=True))
    )
    lines = tuple(RollLine(p, q, 0.1, (200.0, math.inf)) for p, q in zip(ends_a, ends_b, strict=True))
    labels, arrows = lay_out(
        net,
        facts,
        left_seam=np.array([ends_a[0], ends_b[0]]),
        right_seam=np.array([ends_a[-1], ends_b[-1]]),
        mid_line=np.array([ends_a[len(ends_a) // 2], ends_b[len(ends_b) // 2]]),
        flow=flow,
        marks=marks,
        lines=lines,
        divisions=divisions,
        lines_as="full" if full else "ticks",
    )
    return Pattern(
        mark=mark, kind=kind, quantity=2, face="outside", net=net, cut=net, openings=openings, lines=lines,
        divisions=divisions, marks=marks, labels=labels, facts=facts, datum="END A, the line y = 0",
        lines_as="full" if full else "ticks", rulings=Rulings(np.array(ends_a), np.array(ends_b), *np.zeros((2, len(ends_a)))),
        arrows=arrows,
    )  # fmt: skip


def _facts(mark: str, name: str, sizes: str) -> tuple[str, ...]:
    return (f"{mark}  {name}", sizes, "sizes at the mean of the wall", "galvanised, 1 mm thick", "2 off",
            "outside face up")  # fmt: skip


_WORDS = {0: "BOTTOM", 1: "RIGHT", 2: "TOP", 3: "LEFT", 4: "BOTTOM"}


def rectangle(
    width: float = 1256.6,
    height: float = 450.0,
    *,
    full: bool = False,
    divisions: int = 24,
    flow: str = "a to b",
) -> Pattern:
    """A square-cut cylinder, unrolled."""
    corner = np.array([[0.0, 0.0], [width, 0.0], [width, height], [0.0, height]])
    names = ("a", "seam_right", "b", "seam_left")
    net = Outline(
        tuple((n, segment(corner[k], corner[(k + 1) % 4])) for k, n in enumerate(names)), width * height
    )
    x = np.linspace(0.0, width, divisions + 1)
    a, b = np.stack([x, 0 * x], axis=1), np.stack([x, 0 * x + height], axis=1)
    marks = tuple(
        WitnessMark(np.array([width * k / 4, y]), np.array([0.0, s]), word, edge, width * k / 4)
        for edge, y, s in (("a", 0.0, 1.0), ("b", height, -1.0))
        for k, word in _WORDS.items()
    )
    facts = _facts("S1", "straight", f"round {width / math.pi:.0f}, length {height:.0f}")
    directions = np.linspace(-math.pi / 2, 1.5 * math.pi, divisions + 1)
    return _pattern("S1", "straight", net, list(a), list(b), directions, np.stack([x, x], axis=1), marks, facts,
                    full=full, flow=flow)  # fmt: skip


def slanting(
    radius: float = 150.0, short: float = 60.0, slope: float = 45.0, *, full: bool = False
) -> Pattern:
    """A cylinder cut by a plane, unrolled, shortest at the seam.

    Its edge is y = short + r tan(slope) (1 - cos(x / r)), the curve of an oblique cut (common practice).
    """
    rise = radius * math.tan(math.radians(slope))
    girth = 2.0 * math.pi * radius
    u = np.linspace(0.0, 2.0 * math.pi, 65)
    step = u[1]
    top = np.stack([radius * u, short + rise * (1.0 - np.cos(u))], axis=1)
    tangent = np.stack([0 * u + radius, rise * np.sin(u)], axis=1) * step
    # The length of the edge is that of the ellipse which the plane cuts (half axes r, r / cos slope).
    dense = np.linspace(0.0, 2.0 * math.pi, 20001)
    length = float(_running(radius, rise, dense)[-1])
    edge = curve_through(top, tangent, length).reversed()
    net = Outline(
        (
            ("a", segment([0, 0], [girth, 0])),
            ("seam_right", segment([girth, 0], [girth, short])),
            ("b", edge),
            ("seam_left", segment([0, short], [0, 0])),
        ),
        girth * (short + rise),
    )
    v = np.linspace(0.0, 2.0 * math.pi, 25)
    a = np.stack([radius * v, 0 * v], axis=1)
    b = np.stack([radius * v, short + rise * (1.0 - np.cos(v))], axis=1)
    marks = []
    for k, word in _WORDS.items():
        w = k * math.pi / 2
        marks.append(WitnessMark(np.array([radius * w, 0.0]), np.array([0.0, 1.0]), word, "a", radius * w))
        normal = np.array([rise * math.sin(w), -radius]) / math.hypot(radius, rise * math.sin(w))
        at = np.array([radius * w, short + rise * (1.0 - math.cos(w))])
        running = float(np.interp(w, dense, _running(radius, rise, dense)))
        marks.append(WitnessMark(at, normal, word, "b", running))
    arcs = np.stack([radius * v, np.interp(v, dense, _running(radius, rise, dense))], axis=1)
    facts = _facts("P7", "straight", f"round {2 * radius:.0f}, cut {slope:.0f} degrees")
    return _pattern(
        "P7", "straight", net, list(a), list(b), v - math.pi / 2, arcs, tuple(marks), facts, full=full
    )


def _running(radius: float, rise: float, dense: Array) -> Array:
    speed = np.hypot(radius, rise * np.sin(dense))
    return np.concatenate([[0.0], np.cumsum((speed[1:] + speed[:-1]) / 2 * np.diff(dense))])


def fan(large: float = 300.0, small: float = 200.0, height: float = 250.0, *, full: bool = False) -> Pattern:
    """A right cone's frustum, unrolled: slant s = hypot(height, R - r), sheet angle 2 π (R - r) / s.

    large, small: radii of end A and end B; small may be 0, an apex.
    """
    slant = math.hypot(height, large - small)
    turn = 2.0 * math.pi * (large - small) / slant
    outer, inner = slant * large / (large - small), slant * small / (large - small)
    # END A is the larger end, at the bottom; the apex lies above, and angles are laid off from straight down.
    first, last = -math.pi / 2 - turn / 2, -math.pi / 2 + turn / 2
    extreme = arc(np.zeros(2), outer, first, last).polyline(0.001)
    centre = -np.vstack([extreme, arc(np.zeros(2), max(inner, 1e-9), first, last).polyline(0.001)]).min(
        axis=0
    )
    pieces = max(8, math.ceil(turn / math.radians(12)))
    edge_a = arc(centre, outer, first, last, pieces)

    def at(radius: float, angle: float) -> Array:
        return centre + radius * np.array([math.cos(angle), math.sin(angle)])

    curves = [("a", edge_a), ("seam_right", segment(edge_a.end, at(inner, last)))]
    if small:
        edge_b = arc(centre, inner, last, first, pieces)
        curves[1] = ("seam_right", segment(edge_a.end, edge_b.start))
        curves.append(("b", edge_b))
        curves.append(("seam_left", segment(edge_b.end, edge_a.start)))
    else:
        curves[1] = ("seam_right", segment(edge_a.end, centre))
        curves.append(("seam_left", segment(centre, edge_a.start)))
    net = Outline(tuple(curves), turn / 2 * (outer**2 - inner**2))
    angles = np.linspace(first, last, 25)
    a = [at(outer, t) for t in angles]
    b = [at(inner, t) for t in angles]
    a[0], a[-1], b[0], b[-1] = edge_a.start, edge_a.end, curves[1][1].reversed().start, curves[1][1].end
    b[0] = curves[-1][1].start
    marks = []
    for k, word in _WORDS.items():
        t = first + turn * k / 4
        e = np.array([math.cos(t), math.sin(t)])
        marks.append(WitnessMark(a[6 * k], -e, word, "a", turn * k / 4 * outer))
        if small:
            marks.append(WitnessMark(b[6 * k], e, word, "b", turn * k / 4 * inner))
    facts = _facts("C2", "transition", f"round {2 * large:.0f} to round {2 * small:.0f}, length {height:.0f}")
    sweep = angles - first
    return _pattern("C2", "transition", net, a, b, np.linspace(-math.pi / 2, 1.5 * math.pi, 25),
                    np.stack([sweep * outer, sweep * inner], axis=1), tuple(marks), facts, full=full)  # fmt: skip


@dataclass(frozen=True)
class Frustum:
    """A finished piece: round end A to a smaller, shifted round end B, as the pictures want it."""

    large: float = 300.0
    small: float = 200.0
    height: float = 450.0
    shift: tuple[float, float] = (0.0, 50.0)
    seam_at: float = -math.pi / 2

    def _at(self, angle, share):
        radius = self.large + share * (self.small - self.large)
        return np.stack(
            [
                radius * np.cos(angle) + share * self.shift[0],
                radius * np.sin(angle) + share * self.shift[1],
                share * self.height + 0 * angle,
            ],
            axis=-1,
        )

    def faces(self, around: int = 96, along: int = 12):
        angle = np.linspace(0.0, 2.0 * math.pi, around, endpoint=False)
        rows = [self._at(angle, share) for share in np.linspace(0.0, 1.0, along + 1)]
        k = np.arange(around)
        quads = [
            np.stack([j * around + k, j * around + (k + 1) % around,
                      (j + 1) * around + (k + 1) % around, (j + 1) * around + k], axis=1)
            for j in range(along)
        ]  # fmt: skip
        return np.vstack(rows), np.vstack(quads)

    def rim_a(self, n: int) -> Array:
        return self._at(np.linspace(0.0, 2.0 * math.pi, n, endpoint=False), 0.0)

    def rim_b(self, n: int) -> Array:
        return self._at(np.linspace(0.0, 2.0 * math.pi, n, endpoint=False), 1.0)

    @property
    def seam_line(self) -> Array:
        angle = np.array(self.seam_at)
        return np.stack([self._at(angle, 0.0), self._at(angle, 1.0)])

    @property
    def top_line(self) -> Array:
        angle = np.array(math.pi / 2)
        return np.stack([self._at(angle, 0.0), self._at(angle, 1.0)])

    @property
    def joint_lines(self) -> Array:
        return np.zeros((0, 2, 3))
