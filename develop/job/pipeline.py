"""From a piece to its files: build, check, write out, put in place."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

from develop.job.writing import write_all
from develop.pieces.fields import Piece, record_of

if TYPE_CHECKING:
    from develop.checks import Check
    from develop.pieces.built import Built

__all__ = ["FORMATS", "Outcome", "make"]

# In the order in which they are written and named.
FORMATS = ("svg", "pdf", "json", "png")
_DRAWN = {"svg", "pdf"}


@dataclass(frozen=True)
class Outcome:
    """What was written for one piece, and what the checks found.

    sheets: how many large sheets each pattern takes in the PDF, if that was written.
    """

    mark: str
    files: tuple[str, ...]
    checks: tuple[Check, ...]
    sheets: tuple[int, ...] = ()

    @property
    def failed(self) -> tuple[Check, ...]:
        """The checks that do not hold."""
        return tuple(check for check in self.checks if not check.holds)


def make(piece: Piece, *, folder: str, formats: Sequence[str] = FORMATS, units: str = "mm") -> Outcome:
    """Write the files of one piece, all or none of them; older files are replaced whole.

    units: of the figures on the sheets, `mm` or `in`; the record is always in mm. Raises Refusal
    for a piece that cannot be, WriteError for a place that cannot be written.
    """
    from develop.checks import check

    built = piece.build(units=units)
    checks = tuple(one for pattern in built.patterns for one in check(pattern, built.solid))
    files: dict[str, bytes] = {}
    sheets: tuple[int, ...] = ()
    if _DRAWN.intersection(formats):
        from develop.pattern.layout import lettered

        built = replace(built, patterns=tuple(lettered(pattern) for pattern in built.patterns))
    for each in (each for each in FORMATS if each in formats):
        if each == "pdf":
            from develop.outputs.pdf import printed

            files[f"{piece.mark}.pdf"], sheets = printed(built.patterns)
        else:
            files |= _files(each, piece, built, checks)
    write_all(folder, files)
    return Outcome(mark=piece.mark, files=tuple(files), checks=checks, sheets=sheets)


def _files(ending: str, piece: Piece, built: Built, checks: tuple[Check, ...]) -> dict[str, bytes]:
    """Files of one format by name. Each writer is imported only when its format is asked for."""
    mark = piece.mark
    if ending == "svg":
        from develop.outputs.svg import svg

        return {f"{pattern.mark}.svg": svg(pattern) for pattern in built.patterns}
    if ending == "json":
        from develop.outputs.record import record

        data = record(
            mark=mark,
            kind=piece.kind,
            fields=record_of(piece),
            patterns=built.patterns,
            checks=checks,
        )
        return {f"{mark}.json": data}
    from develop.outputs.picture import picture

    return {f"{mark}.png": picture(built.solid, built.patterns[0].facts[:4])}
