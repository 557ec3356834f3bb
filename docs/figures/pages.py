"""The picture of tiled pages for docs/printing.md: the first page, and two neighbours as they are laid."""

from __future__ import annotations

import sys
from pathlib import Path

import matplotlib

matplotlib.use("agg")
import matplotlib.pyplot as plt
import numpy as np
import pypdfium2

from develop.outputs.paper import PAPERS, PageSetup
from develop.outputs.tiled import written
from develop.pattern.layout import lettered
from develop.pieces import kind_of
from develop.pieces.fields import read_piece

__all__ = ["plot"]

FILE = Path(__file__).parent.parent / "pages.png"
DOTS = 150 / 25.4  # a mm
PIECE = {
    "mark": "T1", "end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "flush": "bottom",
    "thickness": 0.8, "sizes": "inside", "material": "galvanised",
}  # fmt: skip


def plot(file: Path) -> None:
    """Draw the picture into a file."""
    piece, problems = read_piece(kind_of("transition"), PIECE)
    assert piece is not None, problems
    setup = PageSetup(PAPERS["a4"])
    data = written([lettered(piece.build().patterns[0])], setup, title="T1").data
    document = pypdfium2.PdfDocument(data)
    first, left, right = (
        document[n].render(scale=DOTS * 25.4 / 72.0, grayscale=True).to_numpy().squeeze() for n in (0, 1, 2)
    )
    document.close()
    # The left page, cut back by its margin and half the overlap, lies on the right one.
    cut = round((setup.margin + setup.overlap / 2.0) * DOTS)
    laid = np.hstack([left[:, :-cut], right[:, cut:]])
    figure, axes = plt.subplots(
        2, 1, figsize=(9.0, 11.0), gridspec_kw={"height_ratios": (1.55, 1.0)}, facecolor="0.85"
    )
    for axis, image, words in (
        (axes[0], first, "The first page of T1-pages.pdf"),
        (axes[1], laid, "A1, cut back at the right, laid on B1: line on line, cross on cross"),
    ):
        axis.imshow(image, cmap="gray", vmin=0, vmax=255, interpolation="antialiased")
        axis.set_axis_off()
        axis.set_title(words, fontsize=10)
    figure.tight_layout()
    figure.savefig(file, dpi=130, metadata={"Software": None})
    plt.close(figure)


if __name__ == "__main__":
    plot(Path(sys.argv[1]) if len(sys.argv) > 1 else FILE)
