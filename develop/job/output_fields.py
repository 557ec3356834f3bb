"""What files are written and how: one declaration for the options and for `[job]` of a job file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from develop.errors import InputError, Problem
from develop.pieces.field_types import Choice, Length
from develop.pieces.fields import Declared
from develop.wording import listed, near_miss, shown

__all__ = ["FORMATS", "FORMATS_FIELD", "OUTPUT_FIELDS", "Outputs", "Words", "outputs_of"]

FORMATS = ("svg", "pdf", "dxf", "json", "png", "stl", "glb")
"""Every format, in the order in which the files are written and named; all are written if none are named."""


@dataclass(frozen=True, eq=False, repr=False)
class Words:
    """One or more of a few words, with commas between; in a job file also a list of them."""

    words: tuple[str, ...]
    metavar: str = "LIST"
    unit: str = ""

    @property
    def allowed(self) -> str:
        """What may be given."""
        return f"{listed(self.words)}, or several of them with commas between"

    def read(self, given: object, *, unit: str) -> tuple[str, ...]:
        """The words, each once and in their own order. Raises InputError."""
        parts = given if isinstance(given, list) else str(given).split(",")
        words = [str(word).strip().lower() for word in parts]
        wrong = [word for word in words if word not in self.words]
        if wrong or not words:
            first = wrong[0] if wrong else ""
            which = f"{shown(first)} is not one of them{near_miss(first, self.words)}"
            raise InputError(Problem("", which, self.allowed))
        return tuple(word for word in self.words if word in words)

    def record(self, value: object) -> object:
        """The words as they are."""
        return value

    def text(self, value: object) -> str:
        """The words with commas between."""
        return ",".join(value) if isinstance(value, tuple) else ""


@dataclass(frozen=True)
class Outputs:
    """How cutting files are drawn. tolerance: of arcs and polylines in DXF [mm]. text: `all` or `none`."""

    tolerance: float = 0.01
    dxf_version: str = "R2010"
    dxf_curves: str = "arcs"
    text: str = "all"


_PLAIN = Outputs()
FORMATS_FIELD = Declared(
    name="formats", type=Words(FORMATS), help="files to write", required=False, default=FORMATS
)
"""Which files are written."""
OUTPUT_FIELDS = (
    Declared(
        name="tolerance",
        type=Length(least=0.002, most=1.0),
        help="how far arcs and polylines in DXF may be off the true curve",
        required=False,
        default=_PLAIN.tolerance,
    ),
    Declared(
        name="dxf_version",
        type=Choice(("R2010", "R12")),
        help="version of DXF; R12 cannot state its unit but in its text",
        required=False,
        default=_PLAIN.dxf_version,
    ),
    Declared(
        name="dxf_curves",
        type=Choice(("arcs", "polylines", "splines")),
        help="what curves are in DXF",
        required=False,
        default=_PLAIN.dxf_curves,
    ),
    Declared(
        name="text",
        type=Choice(("all", "none")),
        help="words in SVG and DXF, on a layer of their own",
        required=False,
        default=_PLAIN.text,
    ),
)
"""The fields of `Outputs`, for options and job files."""


def outputs_of(values: Mapping[str, object], *, otherwise: Outputs = _PLAIN) -> Outputs:
    """What the values by name ask for; those not there or None are as `otherwise` has them.

    Raises InputError for what cannot be together.
    """
    names = [each.name for each in OUTPUT_FIELDS]
    given = {name: values[name] for name in names if values.get(name) is not None}
    outputs = replace(otherwise, **given)  # type: ignore[arg-type]
    if outputs.dxf_version == "R12" and outputs.dxf_curves == "splines":
        allowed = "arcs or polylines, or R2010"
        raise InputError(
            Problem("dxf_curves", "splines are given together with R12, which has none", allowed)
        )
    return outputs
