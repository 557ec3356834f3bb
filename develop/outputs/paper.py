"""Sizes of paper, and how a pattern is laid out on pages of it."""

from __future__ import annotations

from dataclasses import dataclass

__all__ = ["LONGEST", "PAPERS", "PageSetup", "Paper"]

LONGEST = 5080.0
"""Length of a page from a roll at most [mm]: 14400 points, what every viewer takes for a page."""


@dataclass(frozen=True)
class Paper:
    """Paper by name. wide, high: upright [mm]; high is 0 for a roll, whose pages are as long as they need."""

    name: str
    wide: float
    high: float = 0.0

    @property
    def is_roll(self) -> bool:
        """Whether it comes from a roll."""
        return self.high == 0.0


# ISO 216:2007, series A; ANSI/ASME Y14.1, A (8.5 x 11 in) and B (11 x 17 in), known as Letter and Tabloid.
PAPERS = {
    paper.name.lower(): paper
    for paper in (
        Paper("A4", 210.0, 297.0),
        Paper("A3", 297.0, 420.0),
        Paper("A2", 420.0, 594.0),
        Paper("A1", 594.0, 841.0),
        Paper("A0", 841.0, 1189.0),
        Paper("Letter", 215.9, 279.4),
        Paper("Tabloid", 279.4, 431.8),
    )
}
"""The sheets by their names in small letters."""


@dataclass(frozen=True)
class PageSetup:
    """How patterns are parted over pages.

    orientation: `portrait`, `landscape` or `fewest` pages. margin: left empty along each side of a page,
    overlap: what neighbours share, both on the paper [mm]. factors: what the drawing is multiplied by in X
    and Y so that it comes out true from a printer that does not print true. printer: its name, where known.
    """

    paper: Paper
    orientation: str = "fewest"
    margin: float = 10.0
    overlap: float = 20.0
    factors: tuple[float, float] = (1.0, 1.0)
    printer: str = ""

    @property
    def factor_words(self) -> str:
        """The factors as every page states them; empty where there are none."""
        if self.factors == (1.0, 1.0):
            return ""
        x, y = (f"{factor:.4f}" for factor in self.factors)
        return f"PRINTER FACTORS X {x}, Y {y}" + (f" ({self.printer})" if self.printer else "")
