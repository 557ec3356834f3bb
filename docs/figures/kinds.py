"""The reference page docs/kinds.md and a picture of each kind's example, made from the declarations.

python docs/figures/kinds.py
"""

from __future__ import annotations

from pathlib import Path
from tempfile import TemporaryDirectory

from develop.job.pipeline import make
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import read_piece
from develop.pieces.reference import kinds_page

DOCS = Path(__file__).resolve().parent.parent


def draw(name: str, file: Path) -> None:
    """Write the picture of a kind's example."""
    piece, problems = read_piece(kind_of(name), kind_of(name).example)
    assert piece is not None, problems
    with TemporaryDirectory() as folder:
        make(piece, folder=folder, formats=("png",))
        (made,) = Path(folder).iterdir()
        file.write_bytes(made.read_bytes())


def main() -> None:
    """Make the page and its pictures anew."""
    (DOCS / "kinds.md").write_text(kinds_page(), encoding="utf-8")
    (DOCS / "kinds").mkdir(exist_ok=True)
    for name in KINDS:
        draw(name, DOCS / "kinds" / f"{name}.png")


if __name__ == "__main__":
    main()
