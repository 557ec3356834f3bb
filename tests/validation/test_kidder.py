"""F. S. Kidder, Elbow Patterns, 1918, part I: an elbow of 4 pieces is made as three elbows of 30 degrees,
so that its cut is 15 degrees.
"""

from __future__ import annotations

from math import atan, degrees

import pytest

from tests.pieces.making import make


def test_an_elbow_of_4_pieces_is_three_of_30_degrees() -> None:
    built = make("bend", section="round 813", sizes="outside", angle=90, radius=1220, gores=4)
    part = make("bend", section="round 813", sizes="outside", angle=30, radius=1220, gores=2)
    (first, full, last), (half, other) = built.patterns, part.patterns
    lengths = [row.length for row in first.divisions]
    assert degrees(atan((max(lengths) - min(lengths)) / 813.0)) == pytest.approx(15.0, abs=1e-9)
    # Its end pieces are those of an elbow of 30 degrees, its middle ones two of them in one.
    for mine, theirs in ((first, half), (last, other)):
        assert [row.length for row in mine.divisions] == pytest.approx(
            [row.length for row in theirs.divisions]
        )
    assert full.quantity == 2
    assert full.net.area == pytest.approx(half.net.area + other.net.area, rel=1e-12)
