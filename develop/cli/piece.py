"""`develop straight`, `develop transition` and so on: one piece, its fields as options."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import click

from develop.cli.options import OUT, OUTPUT_OPTIONS, RULES_OPTION, FieldsCommand, units_option
from develop.cli.report import report
from develop.errors import InputError
from develop.job.output_fields import OUTPUT_FIELDS, outputs_of
from develop.job.pipeline import make
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import fields_of
from develop.pieces.reference import command_line
from develop.units import sheet_unit

__all__ = ["piece_command"]


def piece_command(name: str) -> click.Command:
    """The command of a kind."""
    kind = kind_of(name)
    fields = fields_of(kind)
    own = {each.name for each in fields}
    # A kind may have a field of such a name: a marking band is of paper.
    outputs = [
        replace(each, name=f"pages_{each.name}") if each.name in own else each for each in OUTPUT_OPTIONS
    ]
    names = {each.name: other.name for each, other in zip(OUTPUT_OPTIONS, outputs, strict=True)}
    options = {each.name: each.option for each in fields}
    options |= {
        each.name: f"--{names[each.name].replace('_', '-')}" for each in OUTPUT_FIELDS if each.name not in own
    }

    def action(values: Mapping[str, object]) -> int:
        piece = kind(**{each.name: values[each.name] for each in fields})
        if values.get("rules"):
            from develop.job.file import read_rules, with_rules

            piece = with_rules(piece, read_rules(str(values["rules"])))
        formats = values["formats"]
        assert isinstance(formats, tuple)
        try:
            outcome = make(
                piece,
                folder=str(values["out"]),
                formats=formats,
                outputs=outputs_of({name: values[other] for name, other in names.items()}),
                units=sheet_unit(str(values["units"])),
            )
        except InputError as error:
            raise InputError(
                [replace(each, field=options.get(each.field, each.field)) for each in error.problems]
            ) from None
        return report(outcome, str(values["out"]))

    return FieldsCommand(
        name,
        action,
        options=[
            *fields,
            OUT,
            *((RULES_OPTION,) if hasattr(kind, "rules") else ()),
            *outputs,
            units_option("unit of bare numbers; in and ft give sheets in inches"),
        ],
        text=f"Make the pattern of {KINDS[name][2]}.\n\nLengths take mm, cm, m, in or ft, and fractions: "
        "12-3/8 in, 1' 6\". Directions are read facing end B (in front of it, looking in): degrees "
        "anticlockwise from right, a word, or a clock time.",
        epilog=f"\b\nFor example:\n  {command_line(kind)}",
    )
