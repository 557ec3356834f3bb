"""The divisions table: rounding, running lengths, inches."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from develop.pattern.table import divisions_table, marks_table


def test_running_lengths_are_rounded_from_the_start_and_not_added_up(samples):
    # 1000 / 24 = 41.6667: rounded steps of 41.7 added up would end at 1000.8.
    rows = divisions_table(samples.rectangle(width=1000.0).divisions).rows
    running = [float(row[2]) for row in rows]
    assert running[-1] == 1000.0
    assert all(abs(r - 1000.0 * n / 24) <= 0.05 + 1e-9 for n, r in enumerate(running))
    assert {round(b - a, 1) for a, b in pairwise(running)} == {41.6, 41.7}


def test_columns_of_a_square_cut_cylinder(samples):
    table = divisions_table(samples.rectangle(width=1200.0, height=450.0).divisions)
    assert table.rows[6] == ("6", "0.0", "300.0", "300.0", "450.0", "300.0", "0.0", "300.0", "450.0")
    assert table.rows[0][1] == table.rows[24][1] == "270.0"
    assert all(len(row) == len(table.heads) for row in table.rows)
    assert "mm" in table.title


def test_inches_are_whole_and_thirty_seconds(samples):
    # 3/4 of 48 in is 36 in; 1/24 of it 2 in; the height is 12-3/8 in.
    table = divisions_table(samples.rectangle(width=48 * 25.4, height=12.375 * 25.4).divisions, units="in")
    assert table.rows[1][2] == "2"
    assert table.rows[18][2] == "36"
    assert table.rows[18][4] == "12-3/8"
    assert "inches" in table.title


@pytest.mark.parametrize("direction", [2 * math.pi, -1e-12, 2 * math.pi - 1e-9])
def test_a_full_turn_is_written_as_0(samples, direction):
    from dataclasses import replace

    row = replace(samples.rectangle().divisions[0], direction=direction)
    assert divisions_table([row]).rows[0][1] == "0.0"


def test_what_lies_halfway_is_written_the_same_whatever_its_last_digits(samples):
    from dataclasses import replace

    row = samples.rectangle().divisions[3]
    lengths = {
        divisions_table([replace(row, length=length)]).rows[0][4]
        for length in (159.55, 159.55 - 3e-14, 159.55 + 3e-14)
    }
    assert len(lengths) == 1


def test_marks_by_end_and_running_length(samples):
    table = marks_table(samples.rectangle(width=48 * 25.4, height=12.375 * 25.4).marks[::-1], units="in")
    assert [row[:3] for row in table.rows[:5]] == [
        ("END A", word, str(12 * n)) for n, word in enumerate(("BOTTOM", "RIGHT", "TOP", "LEFT", "BOTTOM"))
    ]
    assert table.rows[-1] == ("END B", "BOTTOM", "48", "48", "12-3/8")
    assert "inches" in table.title
    assert all(len(row) == len(table.heads) for row in table.rows)
