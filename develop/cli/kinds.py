"""`develop kinds [KIND]`: the kinds, their fields, units, defaults, an example that runs."""

from __future__ import annotations

from collections.abc import Mapping

import click

from develop.cli.options import FieldsCommand
from develop.pieces import KINDS, kind_of
from develop.pieces.field_types import Choice
from develop.pieces.fields import Declared
from develop.pieces.reference import kind_text, kinds_text

__all__ = ["command"]

_KIND = Declared(
    name="kind", type=Choice(tuple(KINDS), metavar="[KIND]"), help="a kind of piece", required=False
)


def command(summary: str) -> click.Command:
    """The command."""
    return FieldsCommand("kinds", _show, options=[], argument=_KIND, text=f"Show {summary}.")


def _show(values: Mapping[str, object]) -> int:
    name = values["kind"]
    click.echo(kinds_text() if name is None else kind_text(kind_of(str(name))))
    return 0
