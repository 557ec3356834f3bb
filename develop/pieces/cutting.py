"""What is cut beyond the net line of a piece, edge by edge, and how the sheets say it."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, field
from math import ceil, pi, radians, sqrt, tan
from typing import TYPE_CHECKING

from develop.errors import InputError, Refusal
from develop.pieces.wording import size_words

if TYPE_CHECKING:
    from develop.pattern.allowance import Allowance
    from develop.pieces.common import Plate
    from develop.pieces.prep_types import Preparation
    from develop.surfaces.sheet import Sheet
    from develop.tables.seams import EdgeRule, SeamRule

__all__ = ["Added", "Cutting", "check_rivet", "cutting_of", "rules_of", "tabs_for"]

# A tab is bent along a straight line, which leaves the edge by this much at most [mm].
# Common practice, no source: what a hammer takes up.
_SAGITTA = 1.0
_LEAST, _MOST = 0.5, 3.0  # width of a tab over that of the flange
# More than this share of stretch at a flange's edge is not for a hammer. Common practice, no source.
_STRETCH = 0.15
_LEAST_HOLE = 0.8  # a flange turned in leaves a fifth of the radius. Common practice, no source
_FOLDED_UP_TO = (
    3.0  # [mm] plate of this thickness is not folded into seams and hems. Common practice, no source
)
_SLIT = 1.0  # [mm] least opening of a cut between tabs


@dataclass(frozen=True)
class Added:
    """One line of the account of a cut pattern: the edge, why, how much [mm], and the source of the rule."""

    edge: str
    rule: str
    width: float
    source: str = ""


@dataclass(frozen=True)
class Cutting:
    """What is added to a pattern, or taken off.

    allowances: by edge, as the outside of the sheet shows them. folds: (edge, how far outside its net line
    [mm]) of each fold line. inner: (edge, how far inside its net line [mm], word) of further lines.
    words: along the left and the right seam's allowance. facts: lines for the sheet. added: the account.
    warnings: what is not reasonable. rivets: (edge, diameter [mm]) of the hole in the middle of each tab.
    """

    allowances: Mapping[str, Allowance] = field(default_factory=dict)
    folds: tuple[tuple[str, float], ...] = ()
    inner: tuple[tuple[str, float, str], ...] = ()
    words: tuple[str, str] = ("LAP", "LAP")
    facts: tuple[str, ...] = ()
    added: tuple[Added, ...] = ()
    warnings: tuple[str, ...] = ()
    rivets: tuple[tuple[str, float], ...] = ()


def rules_of(plate: Plate) -> tuple[SeamRule, dict[str, EdgeRule]]:
    """The rules of a piece's seam and of its two ends. Raises Refusal naming the field."""
    from develop.tables.seams import edge_of, seam_of

    def looked_up(name: str) -> SeamRule | EdgeRule:
        find = seam_of if name == "seam" else edge_of
        try:
            return find(getattr(plate, name), thickness=plate.thickness, rules=plate.rules)
        except InputError as error:
            (problem,) = error.problems
            raise Refusal(field=name, given=problem.given, allowed=problem.allowed) from None

    seam = looked_up("seam")
    edges = {end: looked_up(f"edge_{end}") for end in "ab"}
    return seam, edges  # type: ignore[return-value]


def tabs_for(radius: float, girth: float, width: float) -> int:
    """How many tabs a flange of a width is cut in to on an edge, all [mm].

    A tab as long as the chord of a circle of the tightest radius r with a sagitta of 1 mm is √(8 r) long,
    kept between half and three times the width.
    """
    tab = min(max(sqrt(8.0 * max(radius, 0.0) * _SAGITTA), _LEAST * width), _MOST * width)
    return max(ceil(girth / tab), 3)


def cutting_of(
    plate: Plate,
    sheet: Sheet,
    *,
    joints: str = "",
    alone: str = "",
    units: str,
    pieces_round: int = 1,
) -> Cutting:
    """What the fields of a piece add to one of its patterns.

    sheet: the developed sheet. joints: those ends, `a` or `b`, that meet a neighbour of the same piece, and
    so take its gap and no edge. alone: those of them that take the whole of a gap, as their neighbour cannot.
    pieces_round: of how many parts the girth is made.
    Raises Refusal.
    """
    from develop.pattern.allowance import Allowance

    seam, edges = rules_of(plate)
    allowances: dict[str, Allowance] = {}
    folds: list[tuple[str, float]] = []
    inner: list[tuple[str, float, str]] = []
    facts: list[str] = []
    added: list[Added] = []
    warnings: list[str] = []
    rivets: list[tuple[str, float]] = []

    def size(mm: float) -> str:
        return size_words(mm, units)

    # ---- the two sides of the seam ----
    half_gap = {"shared": (0.5, 0.5), "one side": (0.0, 1.0)}[plate.gap_on]
    shrink = plate.weld_shrinkage / pieces_round
    if plate.gap and seam.size:
        raise Refusal(field="gap", given=f"given together with seam = {seam.text}", allowed="seam = butt")
    for i, (side, rule, lines) in enumerate(
        (("left", seam.left, seam.left_folds), ("right", seam.right, seam.right_folds))
    ):
        name = f"seam_{side}"
        width = rule - half_gap[i] * plate.gap + 0.5 * shrink
        if rule:
            added.append(Added(name, seam.text, rule, seam.source))
        if plate.gap:
            added.append(Added(name, f"gap {size(plate.gap)}, {plate.gap_on}", -half_gap[i] * plate.gap))
        if shrink:
            added.append(Added(name, "weld shrinkage", 0.5 * shrink))
        if width:
            allowances[name] = Allowance(width)
        folds += [(name, each) for each in lines]
        if plate.pre_bend:
            inner.append((name, plate.pre_bend, "PRE-BEND TO HERE"))
    if seam.left or seam.right:
        facts.append(f"seam {seam.text}: {size(seam.left)} added left, {size(seam.right)} right")
    if plate.thickness >= _FOLDED_UP_TO and (seam.left_folds or seam.right_folds):
        warnings.append(f"seam {seam.text} is a seam of thin sheet: {plate.thickness:g} mm does not fold so")
    if plate.gap:
        facts.append(f"weld gap {size(plate.gap)}, {plate.gap_on}")
    if shrink:
        facts.append(f"{size(shrink)} added to the girth for weld shrinkage")
    if plate.pre_bend:
        facts.append(f"pre-bend {size(plate.pre_bend)} along each seam edge before rolling (dashed)")

    if plate.prep_seam:
        for name in ("seam_left", "seam_right"):
            inner += _prepared(plate, plate.prep_seam, name, field="prep_seam")
        facts.append(f"seam: {_prep_words(plate.prep_seam, plate.face, units)}")

    # ---- the two ends ----
    for end in "ab":
        trim, girth = float(getattr(plate, f"trim_{end}")), float(getattr(sheet, f"edge_{end}"))
        words = f"END {end.upper()}"
        if girth == 0.0:
            continue
        if end in joints:
            share = 1.0 if end in alone else half_gap["ab".index(end)]
            if plate.gap and share:
                allowances[end] = Allowance(-share * plate.gap)
                added.append(Added(end, f"gap {size(plate.gap)}", -share * plate.gap))
            continue
        edge = edges[end]
        prep: Preparation | None = getattr(plate, f"prep_{end}")
        if prep is not None:
            inner += _prepared(plate, prep, end, field=f"prep_{end}")
            facts.append(f"{words}: {_prep_words(prep, plate.face, units)}")
        if trim and edge.allowance:
            raise Refusal(
                field=f"trim_{end}",
                given=f"given together with edge_{end} = {edge.text}",
                allowed="one of the two",
            )
        shortest = float(sheet.at_ends.length.min())
        if trim and plate.trim_line >= shortest:
            raise Refusal(
                field="trim_line",
                given=f"{plate.trim_line:g} mm inside the edge lies past the other end",
                allowed=f"less than {shortest:.1f} mm",
            )
        if trim:
            allowances[end] = Allowance(trim)
            inner.append((end, plate.trim_line, "WITNESS LINE"))
            added.append(Added(end, "trim", trim))
            facts.append(
                f"{words}: {size(trim)} trim, cut to the net line after rolling; witness line "
                f"{size(plate.trim_line)} inside it"
            )
        if edge.folds and plate.thickness >= _FOLDED_UP_TO and edge.name not in ("flange", "tap-flange"):
            warnings.append(
                f"{edge.text} at {words} is for thin sheet: {plate.thickness:g} mm does not fold so"
            )
        if edge.allowance:
            allowances[end], note = _edge(edge, sheet, end, warnings)
            folds += [(end, each) for each in edge.folds]
            added.append(Added(end, edge.text, edge.allowance, edge.source))
            if plate.rivet and edge.name == "tap-flange":
                check_rivet(plate.rivet, edge.allowance, girth / (len(allowances[end].tabs) + 1))
                rivets.append((end, plate.rivet))
                note += f", a rivet hole {size(plate.rivet)} in each"
            facts.append(f"{words}: {edge.text}, {size(edge.allowance)} added{note}")
    return Cutting(
        allowances,
        tuple(folds),
        tuple(inner),
        (seam.text.upper(), seam.text.upper()) if seam.name != "lap" else ("LAP", "LAP"),
        tuple(facts),
        tuple(added),
        tuple(warnings),
        tuple(rivets),
    )


def _prepared(plate: Plate, prep: Preparation, name: str, *, field: str) -> list[tuple[str, float, str]]:
    """The line that a bevel is cut down from, on the face that is up: (thickness − root) · tan angle inside.

    A bevel from the other face shows no line. Raises Refusal for one that leaves no bevel.
    """
    if prep.root >= plate.thickness:
        raise Refusal(
            field=field,
            given=f"{prep.text} in plate of {plate.thickness:g} mm leaves nothing to bevel",
            allowed="a root face less than the thickness, and a thickness",
        )
    reach = (plate.thickness - prep.root) * tan(radians(prep.angle))
    return [(name, reach, "BEVEL FROM HERE")] if prep.face == plate.face else []


def _prep_words(prep: Preparation, up: str, units: str) -> str:
    """How the edge is prepared, and whether the line of it is drawn."""
    root = f", root face {size_words(prep.root, units)}" if prep.root else ", to a feather edge"
    where = "dashed line on this face" if prep.face == up else f"from the {prep.face}, the other face"
    return f"bevel {prep.angle:g}° from square{root}; {where}"


def check_rivet(diameter: float, width: float, tab: float) -> None:
    """Raises Refusal where a rivet hole leaves less than half its diameter of metal beside it; all in mm.

    Common practice, no source.
    """
    most = 0.5 * min(width, tab)
    if diameter > most:
        raise Refusal(
            field="rivet",
            given=f"{diameter:g} mm in tabs of {width:g} by {tab:.1f} mm",
            allowed=f"{int(most * 10.0) / 10.0:g} mm or less, or a wider flange",
        )


def _edge(edge: EdgeRule, sheet: Sheet, end: str, warnings: list[str]) -> tuple[Allowance, str]:
    """The allowance of an edge at an end of the sheet, and a note on its tabs."""
    from develop.pattern.allowance import Allowance

    width = edge.allowance
    if not edge.folds:
        return Allowance(width), ""
    girth = float(getattr(sheet, f"edge_{end}"))
    radius = float(getattr(sheet.at_ends, f"radius_{end}").min())
    if edge.name == "tap-flange" or (edge.name == "flange" and edge.turned == "in"):
        if edge.turned == "in" and width >= _LEAST_HOLE * radius > 0.0:
            raise Refusal(
                field=f"edge_{end}",
                given=f"{edge.text} closes over the end, whose tightest radius is {radius:.4g} mm",
                allowed=f"{int(_LEAST_HOLE * radius)} mm or less, or turned out",
            )
        count = tabs_for(radius, girth, width)
        # Turned in, the outer edge is shorter by width · turn: so much is taken out between the tabs.
        more = 2.0 * pi * width / count if edge.turned == "in" else 0.0
        tabs = tuple(k / count for k in range(1, count))
        return (
            Allowance(width, folded=True, tabs=tabs, opening=_SLIT + more),
            f", cut in to make {count} tabs",
        )
    stretch = width / radius if radius > 0.0 else float("inf")
    if edge.name == "flange" and stretch > _STRETCH:
        words = (
            f"stretches its edge by {100.0 * stretch:.0f} %" if radius > 0.0 else "cannot pass the corners"
        )
        warnings.append(
            f"{edge.text} at END {end.upper()} {words} where the radius is {radius:.4g} mm: make it "
            "narrower, or a tap-flange, which is cut in to tabs"
        )
    return Allowance(width, folded=True), ""
