"""The rules for bends: their place of the neutral line, and what is refused."""

from __future__ import annotations

from math import pi, radians

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.errors import InputError
from develop.tables.bend_allowance import bend_allowance, bend_rules, neutral_line


@pytest.mark.parametrize(
    ("rule", "expected"),
    [
        # Machinery's Handbook, p. 1421: .64 T in a quarter turn is 0.4074 T off the inside; .55 and .71 from memory.
        ("half-hard", 0.4074),
        ("soft", 0.3501),
        ("hard", 0.4520),
        # (.0173 R + .0078 T) N: 0.0078 · 180/π.
        ("aircraft", 0.4469),
    ],
)
def test_the_neutral_line_that_a_published_length_means(rule: str, expected: float) -> None:
    for radius in (0.0, 3.0, 5000.0):
        assert neutral_line(rule, radius=radius, thickness=2.5) == pytest.approx(expected, abs=5e-5)


def test_the_rule_by_radius_changes_at_two_thicknesses() -> None:
    # From memory: 0.33 below 2 T, 0.5 from there.
    assert [neutral_line("By radius", radius=r, thickness=2) for r in (0, 3.99, 4, 400)] == [
        0.33,
        0.33,
        0.5,
        0.5,
    ]
    length = bend_allowance("by-radius", radius=10, thickness=2, angle=radians(90))
    assert length == pytest.approx(pi / 2 * 11, rel=1e-14)


@given(st.sampled_from(list(bend_rules())), st.floats(0, 1e4), st.floats(0.1, 100), st.floats(0, 2 * pi))
def test_the_arc_at_the_neutral_line_is_the_printed_length(
    rule: str, radius: float, thickness: float, angle: float
) -> None:
    place = neutral_line(rule, radius=radius, thickness=thickness)
    assert 0 <= place <= 1
    arc = angle * (radius + place * thickness)
    # 1.57 and 0.01743 are π/2 and π/180 short by 0.05 % and 0.13 %.
    assert bend_allowance(rule, radius=radius, thickness=thickness, angle=angle) == pytest.approx(
        arc, rel=1.4e-3
    )


def test_every_rule_says_where_it_was_read() -> None:
    for name, each in bend_rules().items():
        assert each.name == name
        assert each.about
        assert each.source
        assert "memory" in each.read or "seen" in each.read


def test_what_is_wrong_is_refused_all_at_once() -> None:
    with pytest.raises(InputError, match='"hrad" is not a rule for bends; did you mean "hard"'):
        neutral_line("hrad", radius=1, thickness=1)
    with pytest.raises(InputError) as caught:
        bend_allowance("hard", radius=-1, thickness=float("nan"), angle=1)
    assert [each.field for each in caught.value.problems] == ["radius", "thickness"]
    with pytest.raises(TypeError):
        bend_rules()["own"] = bend_rules()["hard"]  # type: ignore[index]
