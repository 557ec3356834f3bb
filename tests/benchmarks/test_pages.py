"""Forty tiled pages beside the same pages by matplotlib, in the same run; `pytest -m benchmark -s`."""

from __future__ import annotations

import io

import numpy as np
import pytest

from develop.outputs.paper import PAPERS, PageSetup
from develop.outputs.tiled import written
from develop.outputs.tiling import tiled
from develop.outputs.traces import traced
from develop.pattern.layout import lettered
from develop.pattern.pattern import Pattern
from tests.benchmarks.timing import BUSY, best, ms, show
from tests.pieces.making import make

pytestmark = pytest.mark.benchmark

SETUP = PageSetup(PAPERS["a4"])
SECONDS, BYTES = 1.0, 1_000_000


def test_forty_pages() -> None:
    given = {
        "end_a": "ellipse 900 x 500",
        "end_b": "round 600",
        "length": 800,
        "offset": [0, 50],
        "marks": "full",
    }
    pattern = lettered(make("transition", **given).patterns[0])
    ours = written([pattern], SETUP, title="T1")
    (count,) = ours.counts
    took = best(lambda: written([pattern], SETUP, title="T1"), repeats=5)
    theirs = by_matplotlib(pattern)
    slow = best(lambda: by_matplotlib(pattern), repeats=2)
    show(
        f"A transition on {count} pages of A4, best of 5 and of 2",
        [
            ("tiled pages", ms(took), f"{ms(took * 40 / count)} for 40; goal {SECONDS:g} s"),
            ("their size", f"{len(ours.data) / 1e3:.0f} kB", f"goal {BYTES / 1e3:.0f} kB"),
            ("matplotlib, lines and words alone", ms(slow), f"{slow / took:.1f} times as long"),
            ("its size", f"{len(theirs) / 1e3:.0f} kB", f"{len(theirs) / len(ours.data):.1f} times as large"),
        ],
    )
    assert count >= 40
    assert took * 40 / count < BUSY * SECONDS
    assert len(ours.data) < BYTES
    assert took < slow


def by_matplotlib(pattern: Pattern) -> bytes:
    """The same windows of the same outline, lines and words as a figure each: no names, marks, map or layers."""
    from matplotlib.backends.backend_pdf import PdfPages
    from matplotlib.figure import Figure
    from matplotlib.patches import PathPatch
    from matplotlib.path import Path

    buffer = io.BytesIO()
    with PdfPages(buffer) as file:
        for page in tiled(traced(pattern).points, SETUP).pages:
            figure = Figure(figsize=(page.size[0] / 25.4, page.size[1] / 25.4))
            axes = figure.add_axes((0.0, 0.0, 1.0, 1.0))
            axes.set_axis_off()
            axes.set_xlim(page.left - SETUP.margin, page.left - SETUP.margin + page.size[0])
            axes.set_ylim(page.bottom - SETUP.margin, page.bottom - SETUP.margin + page.size[1])
            for _, curve in pattern.cut.curves:
                codes = [Path.MOVETO] + [Path.CURVE4] * (len(curve.controls) - 1)
                axes.add_patch(PathPatch(Path(curve.controls, codes), fill=False))
            for line in pattern.lines:
                axes.plot(*np.stack([line.start, line.end]).T, color="black", linewidth=0.5)
            for label in pattern.labels:
                axes.text(
                    *label.at,
                    label.text,
                    rotation=np.degrees(label.angle),
                    fontsize=label.height / 0.729 * 72 / 25.4,
                    clip_on=True,
                )
            file.savefig(figure)
    return buffer.getvalue()
