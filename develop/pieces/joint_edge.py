"""How the edges of plate meet at a mitre or on a header: which corner touches, and the bevel that is left."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, TypeVar

from develop.errors import Refusal

if TYPE_CHECKING:
    from develop.pattern.pattern import Figures, Pattern
    from develop.pieces.common import Jointed
    from develop.solid import TouchingEnd
    from develop.surfaces.square_edge import Face, SquareEdge
    from develop.surfaces.trim import Trim

    _F = TypeVar("_F", bound=Face)

__all__ = ["JointEdge", "joint_edge", "trims_of", "with_bevels"]

# Less than this [mm] a corner is not open.
_CLOSED = 5e-3
# Less than this [degrees] there is no bevel to set.
_NO_BEVEL = 5e-3


@dataclass(frozen=True)
class JointEdge:
    """How the edges at the joints of a piece are made.

    how: `net`, `worked out` or `bevelled`. along: cut along the other part and not square to the plate.
    inside, outside: where the wall's faces lie, from the given surface along the normal [mm]. up: that of the
    face that is up on the sheet.
    """

    how: str = "net"
    along: bool = False
    inside: float = 0.0
    outside: float = 0.0
    up: float = 0.0

    @property
    def corners(self) -> tuple[float, float] | None:
        """The places of the edge that are held to the other part [mm]; None for the given surface."""
        if self.how == "worked out":
            return self.inside, self.outside
        return (self.up, self.up) if self.along else None

    def trim(self, face: _F, *, upper: bool = False) -> _F | SquareEdge:
        """The trim of an edge that meets a face; upper: at end B."""
        from develop.surfaces.square_edge import SquareEdge

        return SquareEdge(face, *self.corners, upper) if self.corners else face

    def at(self, inward: bool) -> float:
        """The place [mm] on the wall that ends first where the other part climbs outward, or falls."""
        if self.corners is None:
            return 0.0
        return self.corners[0] if inward else self.corners[1]

    def held(self, lengths: str, joint: str) -> str:
        """What is held at the given sizes, in words: lengths and, where net lines meet there, the joint."""
        return lengths if self.corners else f"{lengths} and {joint}"

    def words(self, *, mitre: bool) -> tuple[str, ...]:
        """What the sheets say of it."""
        if self.how == "worked out":
            where = (
                "inside corners touch at the heel, outside corners at the throat"
                if mitre
                else "the corner that touches changes round the joint: see the table"
            )
            return ("joint edges cut square to the plate and worked out to touch", where)
        if self.how == "bevelled":
            if self.along:
                return ("joint edges cut along the joint: line of the face that is up, bevels in the table",)
            return ("joint edges cut square at the net line, then bevelled: bevels in the table",)
        return ()


def joint_edge(piece: Jointed) -> JointEdge:
    """How the edges at the joints of a piece are made. Raises Refusal."""
    from develop.pieces.wall import PLACES

    how = piece.touching
    if how == "auto":
        how = "bevelled" if piece.joint_cut == "along" else "worked out" if piece.plate else "net"
    if piece.joint_cut == "along" and how != "bevelled":
        raise Refusal(
            field="joint_cut",
            given=f"along is given together with touching = {how}, whose edges are square to the plate",
            allowed="joint_cut = square, or touching = bevelled",
        )
    if piece.thickness == 0.0:
        return JointEdge()
    inside, outside = (
        piece.thickness * (PLACES[face] - PLACES[piece.sizes]) for face in ("inside", "outside")
    )
    up = outside if piece.face == "outside" else inside
    return JointEdge(how, piece.joint_cut == "along", inside, outside, up)


def trims_of(trims: Sequence[Trim | SquareEdge]) -> tuple[Trim, ...]:
    """What trims of any kind are cut by."""
    from develop.surfaces.square_edge import SquareEdge

    return tuple(each.face if isinstance(each, SquareEdge) else each for each in trims)


def with_bevels(pattern: Pattern, edge: JointEdge, ends: dict[str, TouchingEnd], *, plates: int) -> Pattern:
    """The pattern with a table of its joint edges.

    ends: by `a` or `b`, each with the places of the edge that are held to the other part. plates: how many
    of the two plates at the joint have such an edge: both at a mitre, one on a header.
    """
    if edge.how == "net" or not ends:
        return pattern
    tables = {name: _table(pattern, end, edge, plates=plates) for name, end in ends.items()}
    figures = []
    for name, table in tables.items():
        others = [other for other, each in tables.items() if each.rows == table.rows]
        if name == others[0]:
            words = " and ".join(f"END {other.upper()}" for other in others)
            figures.append(replace(table, title=f"{words}: {table.title}"))
    return replace(pattern, figures=(*pattern.figures, *figures))


def _table(pattern: Pattern, end: TouchingEnd, edge: JointEdge, *, plates: int) -> Figures:
    """One row a division: what touches, the bevel, the angle between the plates, and what stays open.

    With N the other part's unit normal and e the wall's, a square edge leans by asin |N · e| to the joint, in
    the plane square to the joint line, as both are square to that line. Outside, the two plates are
    180° + 2 asin(N · e) apart at a mitre, whose plane halves it, and 180° − acos(N · e) on a header.
    """
    import numpy as np

    from develop.pattern.pattern import Figures

    section = end.section
    rows = pattern.divisions
    u = section.at_direction(np.array([row.direction for row in rows]))
    at = section.walk(u)
    out = np.stack([at.ex, at.ey, np.zeros_like(at.ex)], axis=-1)
    place = end.touching(u)
    normal = end.clear(end.across(u, place))[1]
    lean = np.einsum("ni,ni->n", normal, out)
    bevel = np.degrees(np.arcsin(np.clip(np.abs(lean), 0.0, 1.0)))
    if plates == 2:
        between = 180.0 + 2.0 * np.degrees(np.arcsin(np.clip(lean, -1.0, 1.0)))
    else:
        between = 180.0 - np.degrees(np.arccos(np.clip(lean, -1.0, 1.0)))
    angles = [(f"{bevel[i]:.2f}°", f"{between[i]:.2f}°") for i in range(len(rows))]
    heads = [("line", "no."), ("bevel", "angle"), ("angle between", "plates, outside")]
    cells: list[tuple[str | float, ...]]
    if edge.how == "worked out":
        apart = [plates * end.clear(end.across(u, corner))[0] for corner in (edge.inside, edge.outside)]
        opened = np.maximum(np.max(apart, axis=0), 0.0)
        touch = [
            "both"
            if opened[i] < _CLOSED
            else "inside"
            if place[i] == edge.inside
            else "outside"
            if place[i] == edge.outside
            else "between"
            for i in range(len(rows))
        ]
        heads[1:1] = [("touches", "at corner")]
        heads += [("open at the", "other corner")]
        cells = [
            (str(row.number), touch[i], *angles[i], round(float(opened[i]), 9) + 0.0)
            for i, row in enumerate(rows)
        ]
        return Figures("edge square to the plate, before the weld gap", tuple(heads), tuple(cells))
    # Where the other part falls away outward, the outside face is longer, and a square edge stands beyond the
    # joint at its inside.
    faces = [("inside", "outside")[:: 1 if each > 0.0 else -1] for each in lean]
    beyond, longer = (
        ["" if bevel[i] < _NO_BEVEL else face[which] for i, face in enumerate(faces)] for which in (0, 1)
    )
    if not edge.along:
        heads[1:1] = [("bevelled", "on the face")]
        cells = [(str(row.number), beyond[i], *angles[i]) for i, row in enumerate(rows)]
        return Figures("bevels", tuple(heads), tuple(cells))
    low, high = (replace(end, inner=face, outer=face).point(u)[:, 2] for face in (edge.inside, edge.outside))
    more = np.abs(high - low)
    heads[1:1] = [("longer", "on the face")]
    heads += [("longer by,", "along the line")]
    cells = [
        (str(row.number), longer[i], *angles[i], round(float(more[i]), 9) + 0.0) for i, row in enumerate(rows)
    ]
    return Figures("edge along the joint", tuple(heads), tuple(cells))
