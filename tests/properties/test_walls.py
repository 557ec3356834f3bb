"""Random tapers in thick plate, level or square, fitted and collared: all checks hold, or one clear refusal."""

from __future__ import annotations

from math import pi

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.errors import InputError
from develop.job.pipeline import checks_of
from develop.pieces import kind_of
from develop.pieces.fields import read_piece

sizes = st.integers(80, 900)
sections = st.one_of(
    sizes.map(lambda d: f"round {d}"),
    st.tuples(sizes, sizes).map(lambda s: f"ellipse {s[0]} x {s[1]}"),
    st.tuples(sizes, sizes).map(lambda s: f"rectangle {s[0]} x {s[1]} r {min(s) // 4}"),
    st.tuples(sizes, sizes).map(lambda s: f"superellipse {s[0]} x {s[1]} n 3"),
)
fits = st.sampled_from(["flush", "into", "over"])
walls = {
    "thickness": st.sampled_from([0.8, 3.0, 8.0, 16.0]),
    "sizes": st.sampled_from(["inside", "mean", "outside"]),
    "neutral_line": st.sampled_from([0.5, 0.4, "half-hard", "by-radius"]),
    "fit_a": fits,
    "fit_b": fits,
    "seam_at": st.integers(0, 359),
    "face": st.sampled_from(["outside", "inside"]),
}


def held(kind: str, fields: dict[str, object]):
    """The built piece with all its checks holding, or None where it was refused in one clear message."""
    piece, problems = read_piece(kind_of(kind), fields)
    assert piece is not None, problems
    try:
        built = piece.build()
    except InputError as error:
        (problem,) = error.problems
        assert problem.given
        assert problem.allowed
        return None
    checks = checks_of(built)
    assert all(each.holds for each in checks), [each for each in checks if not each.holds]
    return built


@settings(max_examples=25)
@given(
    st.fixed_dictionaries(
        {
            **walls,
            "end_a": sections,
            "end_b": sections,
            "length": st.integers(200, 1500),
            "offset": st.tuples(st.integers(-80, 80), st.integers(-80, 80)).map(list),
            "edge_cut": st.sampled_from(["square", "level"]),
        },
        optional={"collar_a": st.integers(20, 200), "collar_b": st.integers(20, 200)},
    )
)
def test_random_transitions(fields: dict[str, object]) -> None:
    built = held("transition", fields)
    if built is not None:
        assert len(built.parts) == 1 + ("collar_a" in fields) + ("collar_b" in fields)


@settings(max_examples=15)
@given(st.fixed_dictionaries({**walls, "section": sections, "length": st.integers(200, 1500)}))
def test_random_slip_joints(fields: dict[str, object]) -> None:
    built = held("straight", fields)
    if built is None:
        return
    a, b = (built.solid.end_a.section, built.solid.end_b.section)
    fitted = [{"flush": 0.0, "into": -1.0, "over": 1.0}[str(fields[name])] for name in ("fit_a", "fit_b")]
    by = float(str(fields["thickness"])) + (1.0 if float(str(fields["thickness"])) >= 3.0 else 0.5)
    # Steiner: the given surface's girths differ by 2 π times how far the ends lie apart.
    assert b.girth - a.girth == pytest.approx(2.0 * pi * by * (fitted[1] - fitted[0]), abs=1e-8)
    one = np.ones(())
    assert float(b.support(one, 0 * one)) - float(a.support(one, 0 * one)) == pytest.approx(
        by * (fitted[1] - fitted[0]), abs=1e-9
    )
