"""Seams that lie too near to an opening or to each other are named, with distances from geometry."""

from __future__ import annotations

import re
from math import asin, cos, pi, radians, sin

import numpy as np
import pytest

from develop.errors import InputError
from tests.pieces.making import make


def tee(**given: object):
    return make(
        "branch",
        **{
            "header": "round 400",
            "header_length": 1000,
            "branch": "round 250",
            "centre_to_end": 500,
            **given,
        },
    )


def bend(**given: object):
    return make("bend", **{"section": "round 400", "angle": 90, "radius": 600, "gores": 4, **given})


def apart(text: str) -> float:
    return float(re.search(r"lie ([\d.]+) mm", text).group(1))


def test_nothing_is_said_of_seams_that_keep_clear() -> None:
    assert tee(seam_clear=100).warnings == ()
    assert bend(seam_clear=100, stagger=60).warnings == ()


@pytest.mark.parametrize("at", [0, 200, 340])
def test_the_headers_seam_against_the_opening(at: float) -> None:
    # On the sheet the opening reaches 200 asin(125 / 200) to either side of the top.
    built = tee(header_seam=at, seam_clear=300, seam_at=90)
    aside = abs((at - 90 + 180) % 360 - 180) * pi / 180
    expected = 200 * (aside - asin(125 / 200))
    (text,) = [text for text in built.warnings if "opening" in text]
    assert "branch-header and its opening" in text
    assert apart(text) == pytest.approx(expected, abs=0.06)
    assert text in " ".join(built.patterns[1].facts)


def test_the_branch_s_seam_against_the_header_s() -> None:
    # The branch's seam at its right meets the header at the side, asin(125 / 200) from the top.
    built = tee(header_seam=20, seam_at=0, seam_clear=200)
    (text,) = [text for text in built.warnings if "seams of" in text]
    assert "branch-branch and branch-header" in text
    turn = pi / 2 - asin(125 / 200) - 20 * pi / 180
    assert apart(text) == pytest.approx(2 * 200 * sin(turn / 2), abs=0.06)
    for pattern in built.patterns:
        assert text in " ".join(pattern.facts)


def test_seams_of_gores_in_line_are_named_joint_by_joint() -> None:
    built = bend(seam_clear=40)
    assert [apart(text) for text in built.warnings] == [0.0, 0.0, 0.0]
    assert [re.search(r"seams of (.*) lie", text).group(1) for text in built.warnings] == [
        "gore 1 and gore 2",
        "gore 2 and gore 3",
        "gore 3 and gore 4",
    ]


def test_plate_keeps_five_thicknesses_and_sheet_nothing() -> None:
    assert bend().warnings == ()
    assert bend(thickness=2).warnings == ()
    assert all("less than the 40 mm asked for" in text for text in bend(thickness=8).warnings)
    assert bend(thickness=8).warnings
    assert bend(thickness=8, seam_clear=0).warnings == ()


def test_a_seam_through_the_opening_is_refused() -> None:
    # The opening reaches 38.7° to either side of the top.
    with pytest.raises(
        InputError, match=r"header_seam: .*runs? through.*anticlockwise from 128\.7° to 51\.3°"
    ):
        tee(header_seam=100)
    tee(header_seam=129)
    tee(header_seam=51)


def test_a_pad_and_the_joint_of_its_halves_keep_clear_too() -> None:
    """Header and plate are developed on cylinders of radius R = 200 and R' = 200, the branch of radius 100
    square to the header: the opening reaches R asin(100 / R) to either side of the middle, the plate 60 more,
    and the joints of its halves lie on the line through the header's right and left."""
    half = 200.0 * asin(0.5)
    given = {
        "kind": "branch",
        "header": "round 400",
        "header_length": 1000,
        "branch": "round 200",
        "centre_to_end": 500,
        "thickness": 8,
        "sizes": "outside",
        "neutral_line": 0.0,
        "pad": 60,
        "pad_in": "halves",
        "header_seam": "left",
        "seam_at": 10,
    }
    edge = 200.0 * 0.5 * pi - half - 60.0
    # At 10 degrees from the header's right the branch stands at asin(cos 10 / 2) round the header.
    joint = float(np.hypot(200.0 * asin(0.5 * cos(radians(10))) - half, 100.0 * sin(radians(10))))

    def said(clear: float) -> str:
        return " ".join(make(**given, seam_clear=clear).warnings)

    for words, gap in (
        ("the edge of branch-pad and the seam of branch-header", edge),
        ("the joint of the halves of branch-pad and the seam of branch-header", edge),
        ("the joint of the halves of branch-pad and the seam of branch-branch", joint),
    ):
        assert f"{words} lie {gap:.1f} mm apart" in said(gap + 0.1)
        assert words not in said(gap - 0.1)
    sheets = [
        "the edge of branch-pad" in " ".join(pattern.facts)
        for pattern in make(**given, seam_clear=edge + 0.1).patterns
    ]
    assert sheets == [False, True, True, True]
