"""A shop's own rules for seams and edges, from a TOML file."""

from __future__ import annotations

from develop.job.file import parsed, text_of
from develop.tables.rules import Rules, read_tables, shipped

__all__ = ["read_rules"]

_WHAT = "a file of rules"


def read_rules(file: str) -> Rules:
    """The rules that come with the program, and over them those of a file.

    The file has tables `[seams.NAME]` and `[edges.NAME]` of the form of `seams.toml` and `edges.toml`; a
    rule of the same name is replaced whole. Raises InputError with every problem, each at its line.
    """
    data, places = parsed(file, text_of(file, _WHAT), _WHAT)
    return read_tables(data, base=shipped(), place=places.of)
