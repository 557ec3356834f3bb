"""The fields that kinds share; a kind takes them by being derived from one of these."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from develop.pieces.field_types import (
    MARK,
    SEAM,
    TEXT,
    THICKNESS,
    Choice,
    Count,
    Number,
)
from develop.pieces.fields import Piece, about
from develop.pieces.wording import edges_words, sizes_words, wall_words

if TYPE_CHECKING:
    from develop.pieces.assemble import Wording
    from develop.sections.text import SectionSpec
    from develop.surfaces.sheet import Sheet

__all__ = ["SIZES", "Flat", "Marked", "Named", "Plate"]

# From this thickness up [mm] a sheet is treated as plate: roll lines are drawn full. Common
# practice, no source.
_PLATE = 3.0

SIZES = about(
    Choice(("inside", "outside", "mean")),
    "where sizes, lengths and cuts are measured; only a pipe's own size is always its outside",
    own=False,
)


@dataclass(frozen=True, kw_only=True)
class Named(Piece):
    """What every piece has. mark: each kind gives its own name as the default.

    thickness: of the wall [mm].
    """

    mark: str = field(metadata=about(MARK, "name of the piece and of its files", own=False))
    quantity: int = field(default=1, metadata=about(Count(), "how many to make, as drawn", own=False))
    opposite_hand: int = field(
        default=0,
        metadata=about(
            Count(least=0),
            "how many more to make mirrored, right for left, on patterns of their own",
            own=False,
        ),
    )
    thickness: float = field(default=0.0, metadata=about(THICKNESS, "thickness of the wall", own=False))


@dataclass(frozen=True, kw_only=True)
class Flat(Named):
    """What every flat plate has."""

    material: str = field(default="", metadata=about(TEXT, "stated on the pattern", own=False))


@dataclass(frozen=True, kw_only=True)
class Marked(Named):
    """What every rolled piece has. seam_at: direction [rad], or `shortest`."""

    sizes: str = field(default="mean", metadata=SIZES)
    seam_at: float | str = field(
        default="shortest", metadata=about(SEAM, "where the seam is, facing end B", own=False)
    )
    divisions: int = field(
        default=24, metadata=about(Count(least=3, most=720), "equal arcs of end A, a line at each", own=False)
    )


@dataclass(frozen=True, kw_only=True)
class Plate(Marked):
    """What every piece of sheet or plate has. neutral_line: 0 at the inside, 1 at the outside."""

    material: str = field(default="", metadata=about(TEXT, "stated on the pattern", own=False))
    neutral_line: float = field(
        default=0.5,
        metadata=about(Number(0.0, 1.0), "where the neutral line lies, 0 inside to 1 outside", own=False),
    )
    face: str = field(
        default="outside",
        metadata=about(Choice(("outside", "inside")), "which face of the sheet is up", own=False),
    )
    marks: str = field(
        default="auto",
        metadata=about(
            Choice(("auto", "ticks", "full", "pops", "pen", "none")),
            "how roll and press lines are marked: ticks at both edges, full, centre pops near both edges, "
            "full on a layer for a pen, or none; auto: press lines full, roll lines full from 3 mm "
            "thickness up",
            own=False,
        ),
    )
    flow: str = field(
        default="a to b", metadata=about(Choice(("a to b", "b to a")), "which way the air flows", own=False)
    )

    def wording(
        self,
        flat: Sheet,
        sections: tuple[SectionSpec, ...],
        *,
        sizes: str,
        place: str,
        held: str,
        units: str,
        more: tuple[str, ...] = (),
    ) -> Wording:
        """What the pattern says: the sizes in words, how the ends lie, what holds at the given sizes, and
        further lines of the kind's own."""
        from develop.pieces.assemble import Wording

        # A pipe's size is its outside, also where lengths and cuts are asked for elsewhere.
        elsewhere = self.sizes != "outside" and any(spec.outside for spec in sections)
        held_at = (
            {"mean": "mid-thickness", "inside": "the inside"}[self.sizes] if elsewhere else "the given sizes"
        )
        plate = ("edges square to the plate", f"{held} at {held_at}")
        lines_as = "full" if self.marks == "auto" and self.thickness >= _PLATE else self.marks
        return Wording(
            mark=self.mark,
            kind=self.kind,
            quantity=self.quantity,
            face=self.face,
            facts=(
                f"{self.mark}: {self.kind}" if self.mark != self.kind else self.mark,
                sizes,
                place,
                *more,
                sizes_words(self.sizes, self.thickness, *sections),
                edges_words((flat.edge_a, flat.edge_b), units),
                *wall_words(self.material, self.thickness, units),
                *(plate if self.thickness >= _PLATE else ()),
                f"quantity {self.quantity}, {self.face} up",
            ),
            datum="datum lines x = 0 and y = 0, the left and lower limits of the pattern",
            flow=self.flow,
            lines_as=lines_as,
            units=units,
        )
