"""`develop printer-test`: a page to print and measure, for a printer that is not true."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import click

from develop.cli.options import OUT, FieldsCommand, units_option
from develop.errors import InputError, Problem
from develop.job.output_fields import PAGE_FIELDS, Outputs, page_setup
from develop.job.printer import nominal
from develop.outputs.paper import LONGEST, Paper
from develop.pieces.field_types import Choice
from develop.units import number_text, sheet_unit

__all__ = ["command"]

_NAME = "printer-test.pdf"


def command(summary: str) -> click.Command:
    """The command."""
    own = {each.name: each for each in PAGE_FIELDS}
    return FieldsCommand(
        "printer-test",
        _write,
        options=[
            OUT,
            replace(own["paper"], help="paper of the page; A4 if none is given, Letter with inches"),
            replace(
                own["orientation"],
                type=Choice(("portrait", "landscape")),
                help="how the pages will lie that the factors are for",
                default="portrait",
            ),
            own["margin"],
            units_option("unit of bare numbers; in and ft give 6 and 8 in instead of 150 and 200 mm"),
        ],
        text=f"Write {summary}.\n\nThe page has crosses at known distances in X and Y and tells what to do. "
        "What is measured is then given to --printer-x and --printer-y, or kept in a file for --printer.",
        epilog="\b\nFor example:\n  develop printer-test -o out",
    )


def _write(values: Mapping[str, object]) -> int:
    from develop.job.writing import write_all
    from develop.outputs.printer_page import ROOM, printer_page

    paper, margin, units = values["paper"], values["margin"], sheet_unit(str(values["units"]))
    assert paper is None or isinstance(paper, Paper)
    assert isinstance(margin, float)
    setup = page_setup(
        Outputs(paper=paper, margin=margin, orientation=str(values["orientation"])), units=units
    )
    x, y = nominal("x", units), nominal("y", units)
    sheet = setup.paper
    most = min(sheet.wide - x, (sheet.high or LONGEST) - y) / 2.0 - ROOM / 2.0
    if margin > most:
        which = f"{number_text(margin)} mm leaves no room for the crosses"
        raise InputError(
            Problem("--margin", which, f"at most {number_text(round(most, 1))} mm on this paper")
        )
    if setup.orientation == "landscape":
        x, y = y, x
    write_all(str(values["out"]), {_NAME: printer_page(setup, across=x, up=y, units=units)})
    click.echo(f"wrote {_NAME} in {values['out']}; print it at actual size and measure it")
    return 0
