"""Make a piece from its fields, as a job file would."""

from __future__ import annotations

from develop.pieces import kind_of
from develop.pieces.built import Built
from develop.pieces.fields import read_piece


def make(kind: str, **given: object) -> Built:
    """The built piece; fails on bad fields."""
    piece, problems = read_piece(kind_of(kind), given)
    assert not problems, problems
    assert piece is not None
    return piece.build()
