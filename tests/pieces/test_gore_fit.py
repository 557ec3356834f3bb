"""Gores that go into each other: girths by Steiner's formula and elliptic integrals."""

from __future__ import annotations

from math import cos, pi, radians

import mpmath as mp
import pytest

from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.sections import section_of
from develop.sections.carried import Carried
from develop.sections.text import parse_section
from tests.pieces.making import make


def bend(**given: object):
    return make(
        "bend",
        **{"section": "round 400", "angle": 90, "radius": 600, "gores": 4, "gore_fit": "into", **given},
    )


def oval(a: float, b: float) -> float:
    return float(4 * a * mp.ellipe(1 - mp.mpf(b) ** 2 / mp.mpf(a) ** 2))


def test_the_end_that_goes_in_is_smaller_by_thickness_and_clearance() -> None:
    # No thickness: 0.5 clear on each side. The mitre plane, 15 degrees aslant, cuts ellipses.
    first, full, last = (each.net for each in bend().patterns)
    lean = cos(radians(15.0))
    into, over = oval(199.5 / lean, 199.5), oval(200.0 / lean, 200.0)
    assert first.curve("a").length == pytest.approx(400 * pi, rel=1e-11)
    assert first.curve("b").length == pytest.approx(into, rel=1e-11)
    assert full.curve("a").length == pytest.approx(over, rel=1e-11)
    assert full.curve("b").length == pytest.approx(into, rel=1e-11)
    assert last.curve("a").length == pytest.approx(over, rel=1e-11)
    assert last.curve("b").length == pytest.approx(400 * pi, rel=1e-11)


@pytest.mark.parametrize(
    "given",
    [
        {"thickness": 0.8, "sizes": "inside"},
        {"section": "ellipse 700 x 350", "turns_to": "right", "stagger": 30, "thickness": 1},
        {"section": "flat-oval 600 x 300", "gores": 2, "angle": 45, "clearance": 1},
        {"section": "rectangle 500 x 400 r 30", "turns_to": "top", "seams": "alternate"},
        {"thickness": 0.8, "made_in": 2, "face": "inside", "seam": "lap 15", "edge_b": "lap 20"},
    ],
)
def test_every_check_holds(given: dict[str, object]) -> None:
    built = bend(**given)
    failed = [each for each in checks_of(built) if not each.holds]
    assert not failed, failed
    assert all(joint.apart for joint in built.joints if joint.end == "b")
    assert any("goes into the next gore" in line for line in built.patterns[0].facts)


def test_the_end_that_goes_in_has_its_lap_and_only_that() -> None:
    first, full, last = bend(gore_lap=20).patterns
    for pattern in (first, full):
        assert [(each.edge, each.width) for each in pattern.added] == [("b", 20.0)]
        assert pattern.cut.area == pytest.approx(
            pattern.net.area + 20.0 * pattern.net.curve("b").length, rel=1e-3
        )
    assert last.added == ()
    assert bend(gore_lap=0).patterns[0].added == ()


def test_clearance_all_round_on_the_mitre_plane() -> None:
    # Outside of the one against the inside of the other: thickness and clearance apart, square to the wall.
    built = bend(thickness=0.8, sizes="inside", clearance=0.7)
    solids = [part.solid for part in built.parts]
    into, over = solids[0].end_b.section, solids[1].end_a.section
    round_ = section_of(parse_section("round 400"))
    assert isinstance(into, Carried)
    assert isinstance(over, Carried)
    assert over.base.girth == pytest.approx(round_.girth, rel=1e-14)
    # Steiner: 2 π times what it is smaller on each side.
    assert over.base.girth - into.base.girth == pytest.approx(2 * pi * 1.5, rel=1e-10)


@pytest.mark.parametrize(
    ("given", "named"),
    [
        ({"gore_fit": "flush", "clearance": 1}, "clearance: .*gores are flush"),
        ({"thickness": 8}, "gore_fit: .*touching = net"),
        ({"section": "superellipse 500 x 400 n 3"}, "gore_fit: .*flat spots"),
        (
            {"section": "rectangle 500 x 400 r 0.3", "thickness": 0.5, "sizes": "inside"},
            "gore_fit: into needs",
        ),
    ],
)
def test_what_cannot_be_is_refused(given: dict[str, object], named: str) -> None:
    with pytest.raises(InputError, match=named):
        bend(**given)
