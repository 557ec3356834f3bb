"""How fast it is, beside what it is measured against in the same run; `pytest -m benchmark -s`.

Prints a table of medians, ratios and goals. The goals are for a quiet machine; what is asserted here is
wide enough for a busy one, so that a failure means a change in kind.
"""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pytest
from numpy.typing import NDArray
from scipy.integrate import quad
from scipy.optimize import brentq

from develop.pieces.transition import Transition
from develop.sections.ellipse import Ellipse
from develop.sections.text import parse_section
from develop.solid import Frame, Rim
from develop.surfaces.band import Band
from tests.benchmarks.timing import BUSY, median, ms, show

pytestmark = pytest.mark.benchmark

Array = NDArray[np.float64]

# The trial of the design: shifted 80 and 40, 400 high.
A, B, SHIFT, HEIGHT = (300.0, 150.0), (200.0, 200.0), np.array([80.0, 40.0]), 400.0


# ---- one transition -----------------------------------------------------------------------


def triangulated(n: int) -> tuple[Array, Array, float]:
    """The usual way: n points on each end at equal normals, quads cut in two, triangles laid side by side.

    Returns the flat points of both edges (n + 1, 2) and the area. All distances at once, then one turn
    after another, summed.
    """
    phi = np.linspace(-np.pi / 2, 1.5 * np.pi, n + 1)
    c, s = np.cos(phi), np.sin(phi)
    (a, b), (p, q) = A, B
    low = np.stack([a * a * c, b * b * s, 0.0 * c], axis=1)
    low[:, :2] /= np.hypot(a * c, b * s)[:, None]
    high = np.stack([p * p * c, q * q * s, 0.0 * c], axis=1)
    high[:, :2] /= np.hypot(p * c, q * s)[:, None]
    high += np.array([*SHIFT, HEIGHT])
    length = np.linalg.norm(high - low, axis=1)
    step_a = np.linalg.norm(np.diff(low, axis=0), axis=1)
    step_b = np.linalg.norm(np.diff(high, axis=0), axis=1)
    across = np.linalg.norm(high[1:] - low[:-1], axis=1)

    def angle(x: Array, y: Array, opposite: Array) -> Array:
        return np.asarray(np.arccos(np.clip((x * x + y * y - opposite * opposite) / (2 * x * y), -1.0, 1.0)))

    # At the foot of each line: from the line to the diagonal, from the diagonal to the next foot.
    open_ = angle(length[:-1], across, step_b)
    foot = angle(across, step_a, length[1:])
    last = angle(length[1:], step_a, across)
    # Direction of each line in the flat: turned by the quad's angles, half a turn less.
    turn = open_ + foot + last - np.pi
    line = np.pi / 2 - np.concatenate([[0.0], np.cumsum(turn)])
    edge = line[:-1] - open_ - foot
    flat_a = np.concatenate(
        [[[0.0, 0.0]], np.cumsum(step_a[:, None] * np.stack([np.cos(edge), np.sin(edge)], 1), 0)]
    )
    flat_b = flat_a + length[:, None] * np.stack([np.cos(line), np.sin(line)], axis=1)
    area = 0.5 * np.sum(length[:-1] * across * np.sin(open_) + across * step_a * np.sin(foot))
    return flat_a, flat_b, float(area)


def chord(points: Array) -> float:
    """Distance of the two corners of an edge, which no turning of the flat changes [mm]."""
    return float(np.hypot(*(points[-1] - points[0])))


def test_transition() -> None:
    a, b = Ellipse(width=600.0, height=300.0), Ellipse(width=400.0, height=400.0)
    rims = Rim(a, Frame.square()), Rim(b, Frame.square(at=(80.0, 40.0, 400.0)))
    seam = 1.5 * np.pi
    piece = Transition(
        end_a=parse_section("ellipse 600 x 300"),
        end_b=parse_section("round 400"),
        length=400.0,
        offset=(80.0, 40.0),
    )
    geometry = median(lambda: Band(*rims).sheet(seam), repeats=101)
    whole = median(piece.build)
    sheet = Band(*rims).sheet(seam)
    corners = sheet.lines(sheet.ends[np.array([0, -1])])
    rows = [
        ("geometry to 1e-9 mm", ms(geometry), "goal 1.5 ms"),
        ("whole net pattern", ms(whole), "goal 4 ms"),
    ]
    for n in (12, 24, 96, 10_000):
        took = median(lambda n=n: triangulated(n), repeats=11)
        flat_a, _, area = triangulated(n)
        off = abs(chord(flat_a) - chord(corners.a))
        rows.append(
            (
                f"plain triangulation, {n} divisions",
                ms(took),
                f"corner out by {off:.2g} mm, area by {area / sheet.area - 1:.1e}",
            )
        )
    show("One transition, ellipse 600 x 300 to round 400", rows)
    # The exact sheet is where triangulation goes as it is refined, and it is not reached by it.
    flat_a, _, area = triangulated(10_000)
    assert abs(chord(flat_a) - chord(corners.a)) < 1e-3
    assert area == pytest.approx(sheet.area, rel=1e-6)
    assert geometry < BUSY * 1.5e-3
    assert whole < BUSY * 4e-3


# ---- dividing a girth ---------------------------------------------------------------------


def point_by_point(a: float, b: float, count: int) -> Array:
    """The usual way: the arc by `quad`, each point by `brentq`."""

    def speed(u: float) -> float:
        return float(np.hypot(a * np.sin(u), b * np.cos(u)))

    def arc(u: float) -> float:
        return float(quad(speed, 0.0, u, epsabs=1e-12, epsrel=1e-13, limit=200)[0])

    girth = arc(2.0 * np.pi)
    return np.array(
        [
            brentq(lambda u, s=k * girth / count: arc(u) - s, 0.0, 2.0 * np.pi, xtol=1e-13)
            for k in range(count)
        ]
    )


def test_dividing_a_girth() -> None:
    def ours() -> Array:
        section = Ellipse(width=600.0, height=300.0)
        return section.at_arc(section.girth * np.arange(24) / 24)

    known = Ellipse(width=600.0, height=300.0)
    fast = median(ours, repeats=201)
    again = median(lambda: known.at_arc(known.girth * np.arange(24) / 24), repeats=201)
    slow = median(lambda: point_by_point(300.0, 150.0, 24), repeats=3)
    show(
        "24 equal arcs of an ellipse 600 x 300",
        [
            ("from the two sizes on, all at once", ms(fast), ""),
            ("again on the same section", ms(again), f"quad and brentq {slow / again:.0f} times as long"),
            ("scipy quad and brentq, point by point", ms(slow), f"{slow / fast:.0f} times as long; goal 200"),
        ],
    )
    assert np.abs(ours() - point_by_point(300.0, 150.0, 24)).max() < 1e-9
    assert slow / fast > 200.0 / BUSY


# ---- cold starts --------------------------------------------------------------------------


def cold(codes: dict[str, str], *, cache: Path, repeats: int = 9) -> dict[str, float]:
    """Median time [s] of each in a fresh process, taken in turns so that a busy moment hits all alike."""
    times: dict[str, list[float]] = {name: [] for name in codes}
    # As installed, with compiled files kept from one run to the next, ours in a place of their own.
    environment = {key: value for key, value in os.environ.items() if key != "PYTHONDONTWRITEBYTECODE"}
    environment["PYTHONPYCACHEPREFIX"] = str(cache)
    for _ in range(repeats + 1):
        for name, code in codes.items():
            start = time.perf_counter()
            subprocess.run([sys.executable, "-c", code], check=True, capture_output=True, env=environment)
            times[name].append(time.perf_counter() - start)
    return {name: float(np.median(each[1:])) for name, each in times.items()}  # the first fills the caches


def run(*arguments: str) -> str:
    return f"import sys; sys.argv = ['develop', *{arguments!r}]\nfrom develop.cli.main import run; run()"


def test_cold_starts(tmp_path: Path) -> None:
    transition = (
        "transition", "--end-a", "ellipse 600 x 300", "--end-b", "round 400", "--length", "450", "--offset", "0,50",
        "--formats", "svg,pdf,json", "-o", str(tmp_path / "out"),
    )  # fmt: skip
    cases = [
        ("develop --help", run("--help"), "import click", 1.5),
        ("develop girth", run("girth", "ellipse 600 x 300"), "import click, numpy", 2.0),
        ("develop transition to SVG, PDF, record", run(*transition), "import click, numpy, reportlab", 3.0),
    ]
    codes = {name: code for name, code, _, _ in cases} | {floor: floor for _, _, floor, _ in cases}
    took = cold(codes | {"python": ""}, cache=tmp_path / "compiled")
    rows = [("python alone", ms(took["python"]), "")]
    for name, _, floor, goal in cases:
        rows.append((floor, ms(took[floor]), ""))
        rows.append((name, ms(took[name]), f"{took[name] / took[floor]:.2f} times; goal {goal:g}"))
    show("Cold starts, each beside the floor of its imports", rows)
    for name, _, floor, goal in cases:
        assert took[name] / took[floor] < 2.0 * goal, name
    assert {each.suffix for each in (tmp_path / "out").iterdir()} == {".svg", ".pdf", ".json"}
