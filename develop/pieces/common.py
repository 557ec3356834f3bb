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
    Length,
    Number,
)
from develop.pieces.fields import Piece, about
from develop.pieces.part_types import MADE_IN, STOCK
from develop.pieces.rule_types import EDGE, SEAM_RULE
from develop.pieces.wording import edges_words, sizes_words, wall_words

if TYPE_CHECKING:
    from develop.pieces.assemble import Share, Wording
    from develop.pieces.cutting import Cutting
    from develop.sections.text import SectionSpec
    from develop.surfaces.sheet import Sheet
    from develop.tables.rules import Rules

__all__ = ["SIZES", "Flat", "Jointed", "Marked", "Named", "Plate"]

# From this thickness up [mm] a sheet is treated as plate: roll lines are drawn full. Common
# practice, no source.
_PLATE = 3.0

_SMALL = Length(least=0.0, most=1000.0)

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

    material: str = field(
        default="",
        metadata=about(TEXT, "stated on the pattern; a metal that is known gives the mass", own=False),
    )


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
    """What every piece of sheet or plate has. neutral_line: 0 at the inside, 1 at the outside.

    rules: the shop's own for seams and edges, which no field gives but whoever reads the piece.
    """

    material: str = field(
        default="",
        metadata=about(TEXT, "stated on the pattern; a metal that is known gives the mass", own=False),
    )
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
            Choice(("auto", "ticks", "full")),
            "roll lines as ticks at both edges or full; auto: full from 3 mm thickness up",
            own=False,
        ),
    )
    seam: str = field(
        default="butt",
        metadata=about(SEAM_RULE, "how the seam is made: what it adds on each side", own=False),
    )
    edge_a: str = field(default="raw", metadata=about(EDGE, "what is done to the edge at end A", own=False))
    edge_b: str = field(default="raw", metadata=about(EDGE, "what is done to the edge at end B", own=False))
    gap: float = field(
        default=0.0,
        metadata=about(_SMALL, "gap left for the weld, at the seam and at joints inside", own=False),
    )
    gap_on: str = field(
        default="shared",
        metadata=about(
            Choice(("shared", "one side")),
            "half of the gap taken off each edge, or all of it off one: the right side, END B",
            own=False,
        ),
    )
    trim_a: float = field(
        default=0.0,
        metadata=about(_SMALL, "left on at end A, to be cut off after rolling", own=False),
    )
    trim_b: float = field(
        default=0.0,
        metadata=about(_SMALL, "left on at end B, to be cut off after rolling", own=False),
    )
    trim_line: float = field(
        default=50.0,
        metadata=about(
            Length(least=1.0, most=1000.0),
            "how far inside the net line the witness line of a trim lies",
            own=False,
        ),
    )
    pre_bend: float = field(
        default=0.0,
        metadata=about(
            _SMALL, "how wide the seam edges are bent before rolling, marked as guidance", own=False
        ),
    )
    weld_shrinkage: float = field(
        default=0.0,
        metadata=about(_SMALL, "added to the girth for what the welds of its seams draw in", own=False),
    )
    made_in: int | str = field(
        default=1,
        metadata=about(
            MADE_IN, "in how many parts, divided along its lines; fit: as few as go into the stock", own=False
        ),
    )
    stock: tuple[float, float] = field(
        default=(2500.0, 1250.0),
        metadata=about(STOCK, "size of the sheets in the rack, which the parts go into for fit", own=False),
    )
    rules: Rules | None = field(default=None, repr=False)
    flow: str = field(
        default="a to b", metadata=about(Choice(("a to b", "b to a")), "which way the air flows", own=False)
    )

    def check(self) -> None:
        """Raises Refusal for a piece that cannot be, or a rule that is none."""
        from develop.pieces.cutting import rules_of

        super().check()
        rules_of(self)

    def cutting(
        self, sheet: Sheet, *, joints: str = "", alone: str = "", units: str, share: Share | None = None
    ) -> Cutting:
        """What is cut beyond the net line of a sheet; see `cutting_of`. share: of a sheet that is a part."""
        from develop.pieces.cutting import cutting_of

        parts = 1 if share is None else share.parts
        return cutting_of(self, sheet, joints=joints, alone=alone, units=units, pieces_round=parts)

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
        full = self.marks == "full" or (self.marks == "auto" and self.thickness >= _PLATE)
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
            full_lines=full,
            units=units,
        )


@dataclass(frozen=True, kw_only=True)
class Jointed(Plate):
    """What every piece has whose rolled parts meet."""

    seam_clear: float | None = field(
        default=None,
        metadata=about(
            Length(least=0.0, most=10_000.0),
            "how far seams keep from openings and from each other at a joint, or a warning names both; when "
            "left out, 5 times the thickness of plate and 0 in thin sheet",
            own=False,
        ),
    )

    @property
    def clear(self) -> float:
        """How far seams keep clear [mm]; 5 times the thickness is common practice, no source."""
        if self.seam_clear is not None:
            return self.seam_clear
        return 5.0 * self.thickness if self.thickness >= _PLATE else 0.0
