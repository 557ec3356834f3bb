"""What the common shortcut costs wherever thickness comes in: the table of docs/thickness.md.

    python docs/figures/thickness.py

writes the table inside docs/thickness.md. Every figure is the difference of two patterns that the program
makes, or of one and what the shortcut says.
"""

from __future__ import annotations

from math import pi
from pathlib import Path

from develop.pieces import kind_of
from develop.pieces.built import Built
from develop.pieces.fields import read_piece
from develop.sections.ellipse import Ellipse

DOCS = Path(__file__).resolve().parent.parent
START, END = "<!-- table: figures/thickness.py -->", "<!-- end of table -->"

ELLIPSE = {"section": "ellipse 600 x 300", "length": 800, "sizes": "inside"}
CONE = {"section": "round 2400", "height": 1120, "cut_b": "height 700", "sizes": "inside", "thickness": 16}
BOX = {"section": "rectangle 500 x 300 r 2", "length": 400, "sizes": "inside", "thickness": 2}


def built(kind: str, **given: object) -> Built:
    """A piece from its fields."""
    piece, problems = read_piece(kind_of(kind), given)
    assert piece is not None, problems
    return piece.build()


def edge(piece: Built, end: str = "a") -> float:
    """Length of an edge of the net line [mm]."""
    curve = piece.patterns[0].net.curve(end)
    assert curve is not None
    return curve.length


def ellipse(width: float, height: float) -> float:
    """Girth of an ellipse [mm]."""
    return Ellipse(width=width, height=height).girth


def rows() -> list[tuple[str, str, float]]:
    """Where, the shortcut, and what it makes the girth too long [mm], less than 0 for too short."""
    plate = edge(built("straight", **ELLIPSE, thickness=10))
    lined = edge(built("straight", **ELLIPSE, thickness=0.8, lining=25))
    square, level = (edge(built("cone", **CONE, edge_cut=cut)) for cut in ("square", "level"))
    box = edge(built("straight", **BOX, neutral_line="half-hard"))
    slip = edge(built("straight", **ELLIPSE, thickness=0.8, fit_b="into"), "b")
    plain = edge(built("straight", **ELLIPSE, thickness=0.8))
    mouth = built("cone", **CONE)
    return [
        ("ellipse 600 x 300 inside, 10 mm plate", "the inside's girth", ellipse(600.0, 300.0) - plate),
        ("the same", "an ellipse with both axes 10 longer", ellipse(610.0, 310.0) - plate),
        (
            "the same clear inside a 25 mm lining, 0.8 mm sheet",
            "an ellipse with both axes 50.8 longer",
            ellipse(650.8, 350.8) - lined,
        ),
        ("cone 2400 to 900 inside, 700 high, 16 mm, END A", "the inside's girth", 2400.0 * pi - square),
        ("the same", "thickness laid in the plane of the end", 2416.0 * pi - square),
        ("the same with level edges", "the inside's girth", 2400.0 * pi - level),
        ("the same with level edges", "thickness laid in the plane of the end", 2416.0 * pi - level),
        (
            "box 500 x 300 inside, radius 2, 2 mm, half-hard rule",
            "mid-thickness",
            edge(built("straight", **BOX)) - box,
        ),
        ("slip joint of the ellipse in 0.8 mm, END B", "both ends alike", plain - slip),
        (
            "END B of the cone made to slip, 50 mm in from its mouth",
            "no parallel collar: its girth there",
            (edge(mouth) - edge(mouth, "b")) * 50.0 / 700.0,
        ),
    ]  # fmt: skip


def table() -> str:
    """The table of docs/thickness.md."""
    lines = ["| where | the shortcut | girth out by |", "|---|---|---|"]
    for where, shortcut, out in rows():
        lines.append(f"| {where} | {shortcut} | {abs(out):.1f} mm too {'long' if out > 0.0 else 'short'} |")
    return "\n".join(lines)


def page(text: str) -> str:
    """The page with its table made anew."""
    head, rest = text.split(START)
    _, tail = rest.split(END)
    return f"{head}{START}\n{table()}\n{END}{tail}"


def main() -> None:
    """Make the page's table anew."""
    file = DOCS / "thickness.md"
    file.write_text(page(file.read_text(encoding="utf-8")), encoding="utf-8")


if __name__ == "__main__":
    main()
