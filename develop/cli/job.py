"""`develop job FILE`: every piece of a job file."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import replace

import click

from develop.cli.options import OUT, OUTPUT_OPTIONS, FieldsCommand, PathOf
from develop.cli.report import report
from develop.errors import InputError, Problem
from develop.job.file import read_job
from develop.job.output_fields import outputs_of
from develop.job.pipeline import Outcome, make
from develop.job.writing import Writing
from develop.pieces.fields import Declared
from develop.units import sheet_unit

__all__ = ["command"]

_FILE = Declared(name="file", type=PathOf("a job file", "FILE"), help="the job file", required=True)


def command(summary: str) -> click.Command:
    """The command."""
    return FieldsCommand(
        "job",
        _make_all,
        # What is not given here is as the job has it.
        options=[OUT, *(replace(each, default=None) for each in OUTPUT_OPTIONS)],
        argument=_FILE,
        text=f"Make the patterns of {summary}.\n\n"
        "The file is TOML: [job] with name and units, [defaults], and "
        "[[piece]] with a kind and its fields for each piece; see develop kinds. "
        "Nothing is written unless the whole file is good.",
        epilog="\b\nFor example:\n  develop job hall.toml -o out",
    )


def _make_all(values: Mapping[str, object]) -> int:
    folder = str(values["out"])
    job = read_job(str(values["file"]))
    formats = values["formats"] or job.formats
    assert isinstance(formats, tuple)
    try:
        outputs = outputs_of(values, otherwise=job.outputs)
    except InputError as error:
        names = {each.name: each.option for each in OUTPUT_OPTIONS}
        raise InputError([replace(each, field=names[each.field]) for each in error.problems]) from None
    if job.name:
        click.echo(f"{job.name}: {len(job.pieces)} piece{'s' if len(job.pieces) != 1 else ''}")
    taken: dict[str, str] = {}
    problems: list[Problem] = []
    outcomes: list[Outcome] = []
    with Writing(folder) as writing:
        for placed in job.pieces:
            try:
                outcome = make(
                    placed.piece,
                    folder=folder,
                    formats=formats,
                    outputs=outputs,
                    units=sheet_unit(job.units),
                    taken=taken,
                    writing=writing,
                )
            except InputError as error:
                problems += [each.at(placed.place(each.field)) for each in error.problems]
            else:
                outcomes.append(outcome)
        if problems:
            raise InputError(problems)
        writing.place()
    return max(report(each, folder) for each in outcomes)
