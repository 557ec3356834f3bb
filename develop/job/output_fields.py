"""What files are written and how: one declaration for the options and for `[job]` of a job file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass, replace

from develop.errors import InputError, Problem
from develop.job.printer import Measured, MeasuredLength, Printer, PrinterFile
from develop.outputs.paper import PAPERS, PageSetup, Paper
from develop.pieces.field_types import Choice, Length
from develop.pieces.fields import Declared
from develop.units import number_text, parse_length
from develop.wording import listed, near_miss, shown

__all__ = [
    "FORMATS", "FORMATS_FIELD", "OUTPUT_FIELDS", "PAGE_FIELDS", "Outputs", "PaperSize", "Words", "outputs_of",
    "page_setup",
]  # fmt: skip

FORMATS = ("svg", "pdf", "pages", "dxf", "json", "png", "stl", "glb")
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


@dataclass(frozen=True, eq=False, repr=False)
class PaperSize:
    """A sheet of paper by its name, or a roll of some width."""

    metavar: str = "PAPER"
    unit: str = ""
    least: float = 250.0
    most: float = 2000.0

    @property
    def allowed(self) -> str:
        """What may be given."""
        sheets = ", ".join(paper.name for paper in PAPERS.values())
        return f"{sheets}, or roll and its width from {self.least:g} to {self.most:g} mm, such as roll 914"

    def read(self, given: object, *, unit: str) -> Paper:
        """The paper. Raises InputError."""
        words = given.split(maxsplit=1) if isinstance(given, str) else []
        first = words[0].lower() if words else ""
        if first == "roll" and len(words) == 2:
            wide = parse_length(words[1], unit=unit, allowed=self.allowed)
            if not self.least <= wide <= self.most:
                raise InputError(
                    Problem(
                        "", f"{shown(given)} is too {'narrow' if wide < self.least else 'wide'}", self.allowed
                    )
                )
            return Paper("roll", wide)
        if len(words) != 1 or first not in PAPERS:
            what = "is a roll of no width" if first == "roll" else "is not a paper"
            hint = "" if first == "roll" else near_miss(first, PAPERS)
            raise InputError(Problem("", f"{shown(given)} {what}{hint}", self.allowed))
        return PAPERS[first]

    def record(self, value: object) -> object:
        """The paper as one would give it."""
        return self.text(value)

    def text(self, value: object) -> str:
        """The paper as one would give it."""
        if not isinstance(value, Paper):
            return ""
        return f"roll {number_text(value.wide)} mm" if value.is_roll else value.name


@dataclass(frozen=True)
class Outputs:
    """How cutting files are drawn, and how patterns are parted over pages.

    tolerance: of arcs and polylines in DXF [mm]. text: `all` or `none`. paper: None where none was
    asked for. margin, overlap: on the paper [mm]. printer_x and printer_y go before what printer has.
    """

    tolerance: float = 0.01
    dxf_version: str = "R2010"
    dxf_curves: str = "arcs"
    text: str = "all"
    paper: Paper | None = None
    orientation: str = "fewest"
    margin: float = 10.0
    overlap: float = 20.0
    printer: Printer | None = None
    printer_x: Measured | None = None
    printer_y: Measured | None = None


_PLAIN = Outputs()
FORMATS_FIELD = Declared(
    name="formats", type=Words(FORMATS), help="files to write", required=False, default=FORMATS
)
"""Which files are written."""
PAGE_FIELDS = (
    Declared(
        name="paper",
        type=PaperSize(),
        help="paper of the tiled pages; A4 if none is given, Letter with inches",
        required=False,
    ),
    Declared(
        name="orientation",
        type=Choice(("portrait", "landscape", "fewest")),
        help="how the tiled pages lie; fewest: whichever needs fewer, with printer factors portrait",
        required=False,
        default=_PLAIN.orientation,
    ),
    Declared(
        name="margin",
        type=Length(least=5.0, most=40.0),
        help="what is left empty along each side of a tiled page",
        required=False,
        default=_PLAIN.margin,
    ),
    Declared(
        name="overlap",
        type=Length(least=10.0, most=60.0),
        help="what neighbouring tiled pages share; more than the margin",
        required=False,
        default=_PLAIN.overlap,
    ),
    Declared(
        name="printer",
        type=PrinterFile(),
        help="settings of a printer that is not true, for the tiled pages; see develop printer-test",
        required=False,
    ),
    Declared(
        name="printer_x",
        type=MeasuredLength("x"),
        help="length measured in X on the printer's test page",
        required=False,
    ),
    Declared(
        name="printer_y",
        type=MeasuredLength("y"),
        help="length measured in Y on the printer's test page",
        required=False,
    ),
)
"""Those of the fields of `Outputs` that part patterns over pages."""
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
    *PAGE_FIELDS,
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
    if outputs.overlap <= outputs.margin:
        lengths = (f"{number_text(each)} mm" for each in (outputs.overlap, outputs.margin))
        which = "{} is not more than the margin of {}".format(*lengths)
        raise InputError(Problem("overlap", which, "more than the margin, so that pages can be taped"))
    return outputs


def page_setup(outputs: Outputs, *, units: str) -> PageSetup:
    """How patterns are parted over pages. units: of the figures on them, `mm` or `in`."""
    paper = outputs.paper or PAPERS["letter" if units == "in" else "a4"]
    own = outputs.printer
    x, y = outputs.printer_x or (own.x if own else None), outputs.printer_y or (own.y if own else None)
    factors = (x.factor if x else 1.0, y.factor if y else 1.0)
    orientation = outputs.orientation
    if factors != (1.0, 1.0) and orientation == "fewest":
        orientation = "portrait"  # as the test page lies: turned, the paper would feed along the other axis
    return PageSetup(paper, orientation, outputs.margin, outputs.overlap, factors, own.name if own else "")
