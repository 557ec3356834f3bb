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
)
from develop.pieces.fields import Piece, about
from develop.pieces.part_types import MADE_IN, STOCK
from develop.pieces.prep_types import PREPARATION, Preparation
from develop.pieces.rule_types import EDGE, NEUTRAL, SEAM_RULE
from develop.pieces.wording import edges_words, lining_words, sizes_words, wall_words

if TYPE_CHECKING:
    from develop.pieces.assemble import Share, Wording
    from develop.pieces.cutting import Cutting
    from develop.pieces.fitted import Fit
    from develop.pieces.neutral import Neutral
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec
    from develop.surfaces.band import Band
    from develop.surfaces.sheet import Sheet
    from develop.tables.rules import Rules

__all__ = ["SIZES", "Flat", "Jointed", "Marked", "Named", "Plate"]

# From this thickness up [mm] a sheet is treated as plate: roll lines are drawn full, and the edges of joints
# worked out. Common practice, no source.
_PLATE = 3.0

_SMALL = Length(least=0.0, most=1000.0)

SIZES = about(
    Choice(("inside", "outside", "mean")),
    "where sizes, lengths and cuts are measured; only a pipe's own size is always its outside",
    own=False,
)

# Of 2 mm: common practice, no source.
_TOLERANCE = about(Length(least=0.0, most=100.0), "how far a taped figure may be out, either way", own=False)


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
    tape_tolerance: float = field(default=2.0, metadata=_TOLERANCE)


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
    """What every piece of sheet or plate has. neutral_line: 0 at the inside, 1 at the outside, or the name
    of a published rule. lining [mm].

    rules: the shop's own for seams and edges, which no field gives but whoever reads the piece.
    """

    material: str = field(
        default="",
        metadata=about(TEXT, "stated on the pattern; a metal that is known gives the mass", own=False),
    )
    lining: float = field(
        default=0.0,
        metadata=about(
            _SMALL, "thickness of a lining; sizes inside are then those that it leaves clear", own=False
        ),
    )
    neutral_line: float | str = field(
        default=0.5,
        metadata=about(
            NEUTRAL, "where the neutral line lies, 0 inside to 1 outside, or a rule that tells", own=False
        ),
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
    templates: str = field(
        default="none",
        metadata=about(
            Choice(("none", "inside", "outside", "both")),
            "checking templates (sweeps) for which face of the formed section, as patterns of their own",
            own=False,
        ),
    )
    template_sections: str = field(
        default="not round",
        metadata=about(
            Choice(("not round", "all")), "which sections templates are made for, where asked for", own=False
        ),
    )
    template_share: str = field(
        default="half",
        metadata=about(
            Choice(("half", "quarter")), "how much of the section one template reaches round", own=False
        ),
    )
    floor: str = field(
        default="none",
        metadata=about(
            Choice(("none", "outlines")),
            "full-size outlines of the ends for the assembly floor, as patterns of their own",
            own=False,
        ),
    )
    tape: float = field(
        default=0.2,
        metadata=about(
            Length(least=0.0, most=5.0),
            "thickness of the tape that girths are measured with; it reads along its middle",
            own=False,
        ),
    )
    tape_tolerance: float = field(default=2.0, metadata=_TOLERANCE)
    rivet: float = field(
        default=0.0,
        metadata=about(
            Length(least=0.0, most=50.0),
            "diameter of the rivet hole in the middle of each tab of a tap flange; 0 for none",
            own=False,
        ),
    )
    prep_a: Preparation | None = field(
        default=None, metadata=about(PREPARATION, "weld preparation of the edge at end A", own=False)
    )
    prep_b: Preparation | None = field(
        default=None, metadata=about(PREPARATION, "weld preparation of the edge at end B", own=False)
    )
    prep_seam: Preparation | None = field(
        default=None, metadata=about(PREPARATION, "weld preparation of both sides of the seam", own=False)
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

    def in_wall(self, spec: SectionSpec, *, field: str) -> Section:
        """A section on the surface that sizes are given on. Raises Refusal."""
        from develop.pieces.wall import given_section

        return given_section(
            spec, field=field, thickness=self.thickness, sizes=self.sizes, lining=self.lining
        )

    def neutral(self, around: Section | Band) -> Neutral:
        """Where the neutral line lies in a wall of this section, or of this tapered side. Raises Refusal."""
        from develop.pieces.neutral import neutral_of
        from develop.pieces.wall import PLACES

        def sheet() -> Sheet:
            from dataclasses import replace

            import numpy as np

            from develop.sections.section import Section
            from develop.surfaces.cylinder import Cylinder
            from develop.surfaces.trim import Plane

            if not isinstance(around, Section):
                return replace(around, distance=0.0).sheet(float(around.rim_a.section.breaks[0]))
            low, high = (Plane(height, np.zeros(2)) for height in (0.0, 1.0))
            return Cylinder(around, low, high).sheet(float(around.breaks[0]))

        inner = self.thickness * PLACES[self.sizes]
        return neutral_of(self.neutral_line, thickness=self.thickness, inner=inner, sheet=sheet)

    def distance(self, around: Section | Band) -> float:
        """How far outside the given surface the sheet is developed [mm]. Raises Refusal."""
        from develop.pieces.wall import PLACES

        return self.thickness * (self.neutral(around).place - PLACES[self.sizes])

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
        around: Section | Band | None = None,
        more: tuple[str, ...] = (),
        level: tuple[str, ...] = (),
        fits: tuple[Fit, ...] = (),
    ) -> Wording:
        """What the pattern says: the sizes in words, how the ends lie, what holds at the given sizes, and
        further lines of the kind's own.

        around: the section or the side whose wall it is. level: how edges are cut that are level. fits: of
        its ends that are not flush."""
        from develop.pattern.pattern import Wall
        from develop.pieces.assemble import Wording
        from develop.pieces.neutral import Neutral

        # A pipe's size is its outside, also where lengths and cuts are asked for elsewhere.
        elsewhere = self.sizes != "outside" and any(spec.outside for spec in sections)
        held_at = (
            {"mean": "mid-thickness", "inside": "the inside"}[self.sizes] if elsewhere else "the given sizes"
        )
        if self.lining:
            held_at = "the lining's inside"
        plate = (*(level or ("edges square to the plate",)), f"{held} at {held_at}")
        neutral = Neutral(self.neutral_line) if not isinstance(self.neutral_line, str) else None
        if neutral is None and around is not None:
            neutral = self.neutral(around)
        assert neutral is not None, "a rule wants to know round what"
        wall = None
        if neutral.rule or self.lining or level or fits:
            wall = Wall(
                neutral.place,
                neutral.rule,
                neutral.source,
                (neutral.least, neutral.most),
                self.lining,
                "level" if level else "square",
                tuple((fit.end, fit.fit, fit.clearance, fit.moved) for fit in fits),
            )
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
                *lining_words(self.lining, around, units),
                *neutral.words(),
                *(each for fit in fits for each in fit.words(units)),
                edges_words((flat.edge_a, flat.edge_b), units),
                *wall_words(self.material, self.thickness, units),
                *(plate if self.thickness >= _PLATE or level else ()),
                f"quantity {self.quantity}, {self.face} up",
            ),
            datum="datum lines x = 0 and y = 0, the left and lower limits of the pattern",
            flow=self.flow,
            lines_as=lines_as,
            units=units,
            wall=wall,
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

    touching: str = field(
        default="auto",
        metadata=about(
            Choice(("auto", "net", "worked out", "bevelled")),
            "how edges meet at a mitre or on a header: the net lines; square to the plate, the corner that "
            "touches worked out for each direction; or bevelled so that the net lines meet. auto: worked out "
            "from 3 mm thickness up",
            own=False,
        ),
    )
    joint_cut: str = field(
        default="square",
        metadata=about(
            Choice(("square", "along")),
            "bevelled edges cut square to the plate at the net line, or along the joint, the line then that "
            "of the face that is up",
            own=False,
        ),
    )

    def check(self) -> None:
        """Raises Refusal for a piece that cannot be."""
        from develop.pieces.joint_edge import joint_edge

        super().check()
        joint_edge(self)

    @property
    def plate(self) -> bool:
        """It is thick enough to be treated as plate."""
        return self.thickness >= _PLATE

    @property
    def clear(self) -> float:
        """How far seams keep clear [mm]; 5 times the thickness is common practice, no source."""
        if self.seam_clear is not None:
            return self.seam_clear
        return 5.0 * self.thickness if self.thickness >= _PLATE else 0.0
