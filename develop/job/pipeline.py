"""From a piece to its files: build, check, write out, put in place."""

from __future__ import annotations

from collections.abc import Iterable, Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from develop.errors import Refusal
from develop.job.output_fields import FORMATS, Outputs, PaperSize, page_setup
from develop.job.writing import Writing, file_key, write_all
from develop.pieces.fields import Piece, record_of
from develop.pieces.hand import OPPOSITE, builds_of

if TYPE_CHECKING:
    from develop.checks import Check, Side
    from develop.outputs.paper import PageSetup
    from develop.pattern.pattern import Pattern
    from develop.pieces.built import Built

__all__ = ["Outcome", "checks_of", "checks_of_all", "make"]

_DRAWN = {"svg", "pdf", "pages", "dxf"}


@dataclass(frozen=True)
class Outcome:
    """What was written for one piece, and what the checks found.

    sheets: how many large sheets each pattern takes in the PDF, if that was written. pages: how many of
    paper each takes in the tiled one, and paper and printer's factors in words. arcs: how many the
    DXF files have in all; deviation: of them from the pattern's curves, at most [mm]. warnings: of what is
    no fault of the pattern, but of the piece as it was asked for.
    """

    mark: str
    files: tuple[str, ...]
    checks: tuple[Check, ...]
    sheets: tuple[int, ...] = ()
    warnings: tuple[str, ...] = ()
    arcs: int = 0
    deviation: float = 0.0
    pages: tuple[int, ...] = ()
    paper: str = ""

    @property
    def failed(self) -> tuple[Check, ...]:
        """The checks that do not hold."""
        return tuple(check for check in self.checks if not check.holds)


def make(
    piece: Piece,
    *,
    folder: str,
    formats: Sequence[str] = FORMATS,
    outputs: Outputs = Outputs(),  # noqa: B008  # frozen
    units: str = "mm",
    taken: dict[str, str] | None = None,
    writing: Writing | None = None,
) -> Outcome:
    """Write the files of one piece, all or none of them; older files are replaced whole.

    outputs: how cutting files are drawn. units: of the figures on the sheets, `mm` or `in`; the record
    and the cutting files are always in mm. taken: the files of this job's other pieces, each with its mark;
    those of this piece are added. writing: takes the files in, to be put in place later with those of the
    other pieces. Raises Refusal for a piece that cannot be, or whose files are another's, WriteError for a
    place that cannot be written.
    """
    builds = builds_of(piece, units=units)
    checks = checks_of_all(builds)
    files: dict[str, bytes] = {}
    told = Outcome(mark=piece.mark, files=(), checks=checks)
    if _DRAWN.intersection(formats):
        from develop.pattern.layout import lettered

        builds = tuple(
            built.with_patterns([lettered(pattern) for pattern in built.patterns]) for built in builds
        )
    patterns = [pattern for built in builds for pattern in built.patterns]
    for each in (each for each in FORMATS if each in formats):
        if each == "pdf":
            from develop.outputs.pdf import printed

            files[f"{piece.mark}.pdf"], sheets = printed(patterns)
            told = replace(told, sheets=sheets)
        elif each == "pages":
            told = _pages(piece.mark, patterns, page_setup(outputs, units=units), files, told,
                          alone=set(formats) == {"pages"})  # fmt: skip
        elif each == "dxf":
            from develop.outputs.dxf import dxf

            drawn = [
                dxf(
                    pattern,
                    version=outputs.dxf_version,
                    curves=outputs.dxf_curves,
                    tolerance=outputs.tolerance,
                    text=outputs.text == "all",
                )
                for pattern in patterns
            ]
            names = [f"{pattern.mark}.dxf" for pattern in patterns]
            files |= {name: found.data for name, found in zip(names, drawn, strict=True)}
            told = replace(
                told,
                arcs=sum(found.arcs for found in drawn),
                deviation=max(found.deviation for found in drawn),
            )
        else:
            files |= _files(each, piece, builds, checks, outputs)
    _take(files, piece.mark, {} if taken is None else taken)
    if writing is None:
        write_all(folder, files)
    else:
        writing.add(files)
    warnings = tuple(dict.fromkeys(each for built in builds for each in built.warnings))
    return replace(told, files=tuple(files), warnings=(*warnings, *told.warnings))


def _pages(
    mark: str,
    patterns: Sequence[Pattern],
    setup: PageSetup,
    files: dict[str, bytes],
    told: Outcome,
    *,
    alone: bool,
) -> Outcome:
    """The tiled pages into the files; or a warning that they would be too many, a Refusal if nothing else is
    asked for."""
    from develop.outputs.tiled import MOST, written

    paper = PaperSize().text(setup.paper)
    found = written(patterns, setup, title=mark)
    if found.data:
        files[f"{mark}-pages.pdf"] = found.data
        words = f"{paper}, {setup.factor_words}" if setup.factor_words else paper
        return replace(told, pages=found.counts, paper=words)
    given = f"{max(found.counts)} pages of {paper} for one pattern are too many to lay together"
    if alone:
        raise Refusal(field="paper", given=given, allowed=f"larger paper, for {MOST} pages at most")
    return replace(told, warnings=(f"no tiled pages: {given}; give larger paper",))


def _take(files: Iterable[str], mark: str, taken: dict[str, str]) -> None:
    """Parts add a word to their piece's mark, which may be the mark of another. Raises Refusal."""
    for name in files:
        other = taken.get(file_key(name))
        if other is not None:
            raise Refusal(
                field="mark",
                given=f"{name} would be written for {mark} and is a file of {other}",
                allowed=f"a mark that no part of {min(other, mark, key=len)} has",
            )
    taken.update((file_key(name), mark) for name in files)


def checks_of_all(builds: Sequence[Built]) -> tuple[Check, ...]:
    """Every check of a piece as built and of its opposite hand, if it has one."""
    from develop.checks import check_hand

    found = list(checks_of(builds[0]))
    if builds[0].both_hands:
        found.append(check_hand("both hands", builds[0].wholes, builds[0].wholes))
    for other in builds[1:]:
        mark = other.patterns[0].mark
        found += [replace(each, name=f"{mark}: {each.name}") for each in checks_of(other)]
        found.append(check_hand(mark, builds[0].wholes, other.wholes))
    return tuple(found)


def checks_of(built: Built) -> tuple[Check, ...]:
    """Every check of a piece: of each part, named by its mark where there are several, and of the joints."""
    from develop.checks import check_divided, check_joint, check_part
    from develop.solid import Solid

    found: list[Check] = []
    for part in built.parts:
        own = check_part(part.pattern, part.solid)
        if len(built.parts) > 1:
            own = tuple(replace(each, name=f"{part.pattern.mark}: {each.name}") for each in own)
        found += own
    for joint in built.joints:
        if joint.apart:
            continue
        sides = [[_side(built, part, place, end) for part, place in parts] for end, parts in joint.sides]
        name = joint.name or " to ".join(side[0].pattern.mark for side in sides)
        found += check_joint(name, *sides)
    for side in built.divided:
        parts = [built.parts[number] for number in side.parts]
        used = [
            (part.pattern, part.solid, places, numbers)
            for part, places, numbers in zip(parts, side.places, side.numbers, strict=True)
            if isinstance(part.solid, Solid)
        ]
        name = "all parts" if len(built.divided) == 1 else f"all parts of {side.mark}"
        found += check_divided(name, used, side.solid)
    return tuple(found)


def _side(built: Built, part: int, place: int, end: str) -> Side:
    """One part's side of a joint, at one of its places."""
    from develop.checks import Side

    own = built.parts[part]
    return Side(own.pattern, own.solid, own.frames[place], end, built.stands(part, place))


def _plate_title(mark: str, facts: Sequence[str]) -> str:
    """The mark with the size, and how a plate slopes where it does."""
    return "\n".join((f"{mark}: {facts[0]}", *(each for each in facts if each.startswith("slope "))))


def _files(
    ending: str, piece: Piece, builds: Sequence[Built], checks: tuple[Check, ...], outputs: Outputs
) -> dict[str, bytes]:
    """Files of one format by name. Each writer is imported only when its format is asked for."""
    mark = piece.mark
    patterns = [pattern for built in builds for pattern in built.patterns]
    if ending == "svg":
        from develop.outputs.svg import svg

        return {f"{pattern.mark}.svg": svg(pattern, text=outputs.text == "all") for pattern in patterns}
    if ending == "json":
        from develop.outputs.record import record

        data = record(
            mark=mark,
            kind=piece.kind,
            fields=record_of(piece),
            patterns=patterns,
            checks=checks,
            warnings=[each for built in builds for each in built.warnings],
        )
        return {f"{mark}.json": data}
    if ending in ("stl", "glb"):
        return _solids(ending, piece, builds)
    from develop.solid import Patch, Solid

    solid = builds[0].solid
    if not isinstance(solid, Solid):
        from develop.outputs.flat_picture import flat_picture

        return {f"{mark}.png": flat_picture(builds[0].parts, _plate_title(mark, patterns[0].facts[1:]))}
    title = f"{mark}: {piece.kind}" if mark != piece.kind else mark
    from develop.checks import folded_on
    from develop.outputs.picture import picture

    sides = builds[0].sides
    headers = [placed for _, placed in sides if placed.solid.openings]
    if not headers:
        own = [part.pattern for part in builds[0].parts if isinstance(part.solid, Solid)]
        facts = patterns[0].facts[1:4]
        if own[0].mark != mark:
            # Of several parts only what all say is true of the piece.
            facts = tuple(each for each in own[0].facts[1:] if all(each in one.facts for one in own))[:2]
        return {f"{mark}.png": picture(builds[0].placed, (title, *facts))}
    # What stands on a header has ends of its own: A and B are the header's, the others have their mark.
    others = [(name, placed) for name, placed in sides if not placed.solid.openings]
    placed = [*headers, *(each for _, each in others)]
    names = [name for name, _ in others]
    # Plates that lie on a header are shown by their edges on its wall.
    plates = [
        folded_on(part.pattern, part.solid.under, curve.polyline(0.2))
        for part in builds[0].parts
        if isinstance(part.solid, Patch)
        for name, curve in part.pattern.net.curves
        if name != "inner"
    ]
    return {f"{mark}.png": picture(placed, (title, *patterns[0].facts[1:3]), names, plates)}


def _solids(ending: str, piece: Piece, builds: Sequence[Built]) -> dict[str, bytes]:
    """The finished piece as a solid, and its opposite hand as another."""
    from develop.outputs.solid_files import glb, meshes_of, stl

    # A band of paper is no thicker than the paper is, and lies with its middle where it is developed.
    thickness = float(getattr(piece, "paper", getattr(piece, "thickness", 0.0)))
    place = 0.5 if hasattr(piece, "paper") else getattr(piece, "neutral_line", 0.5)
    # Where a rule has found the place, each pattern tells its own.
    neutral_line = 0.5 if isinstance(place, str) else float(place)
    files = {}
    for built, ends in zip(builds, ("", OPPOSITE), strict=False):
        meshes = meshes_of(built, thickness=thickness, neutral_line=neutral_line)
        mark = f"{piece.mark}{ends}"
        files[f"{mark}.{ending}"] = stl(meshes) if ending == "stl" else glb(meshes, mark)
    return files
