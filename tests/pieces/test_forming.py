"""Roll radii, strains and their cautions, against elementary geometry and scipy."""

from __future__ import annotations

import json
from math import atan2, cos, degrees, hypot, pi, sin
from pathlib import Path

import numpy as np
import pytest
from scipy.optimize import minimize_scalar

from develop.outputs.record import record
from develop.pieces import kind_of
from develop.pieces.fields import read_piece, record_of
from develop.pieces.forming import forming_strain
from develop.pieces.hand import builds_of


def built(kind: str, **given: object):
    piece, problems = read_piece(kind_of(kind), given)
    assert not problems
    assert piece is not None
    return builds_of(piece)[0]


def forming(kind: str, **given: object):
    return built(kind, **given).patterns[0].forming


def in_degrees(found) -> list[float]:
    return [round(degrees(each), 1) for each in found.directions]


def test_a_round_is_as_tight_all_round() -> None:
    found = forming("straight", section="round 400", length=500, thickness=10, sizes="inside")
    assert (found.ends, found.directions) == ("ab", ())
    assert found.radius == pytest.approx(205, rel=1e-12)
    assert found.inside == pytest.approx(200, rel=1e-12)
    assert found.strain == pytest.approx(50 * 10 / 205, rel=1e-12)


@pytest.mark.parametrize("neutral", [0.0, 0.3, 1.0])
def test_the_mean_radius_does_not_follow_the_neutral_line(neutral: float) -> None:
    found = forming(
        "straight", section="round 400", length=500, thickness=10, sizes="outside", neutral_line=neutral
    )
    assert found.radius == pytest.approx(195, rel=1e-12)
    assert found.inside == pytest.approx(190, rel=1e-12)


def test_an_ellipse_is_tightest_where_b_squared_over_a() -> None:
    found = forming("straight", section="ellipse 600 x 300", length=500, thickness=2)
    assert found.radius == pytest.approx(150**2 / 300, rel=1e-9)
    assert in_degrees(found) == [0.0, 180.0]
    upright = forming("straight", section="ellipse 300 x 600", length=500, thickness=2)
    assert in_degrees(upright) == [90.0, 270.0]


def test_rounded_corners_are_named_by_their_middles() -> None:
    found = forming("straight", section="rectangle 600 x 300 r 50", length=500)
    assert found.radius == pytest.approx(50, rel=1e-12)
    assert len(found.directions) == 4
    assert found.strain is None  # without thickness there is none
    # The middle of a corner's arc, by its centre and radius.
    middle = degrees(atan2(100 + 50 * sin(pi / 4), 250 + 50 * cos(pi / 4)))
    assert in_degrees(found)[0] == pytest.approx(middle, abs=3.0)


def test_a_superellipse_against_scipy() -> None:
    found = forming("straight", section="superellipse 600 x 300 n 2.5", length=500)

    def radius(t: float) -> float:
        # Lamé's curve x = a cos^(2/n) t, y = b sin^(2/n) t: (x'² + y'²)^1.5 / |x' y'' − y' x''| in differences.
        h = 1e-4
        x, y = (
            np.array([size * f(t + k * h) ** 0.8 for k in (-1, 0, 1)]) for size, f in ((300, cos), (150, sin))
        )
        x1, y1, x2, y2 = (
            d for d in ((x[2] - x[0]) / (2 * h), (y[2] - y[0]) / (2 * h),
                        (x[2] - 2 * x[1] + x[0]) / h**2, (y[2] - 2 * y[1] + y[0]) / h**2)
        )  # fmt: skip
        return hypot(x1, y1) ** 3 / abs(x1 * y2 - y1 * x2)

    best = minimize_scalar(radius, bounds=(0.05, 1.0), method="bounded", options={"xatol": 1e-8})
    assert found.radius == pytest.approx(best.fun, rel=2e-3)
    assert found.radius >= best.fun * (1 - 1e-5)
    place = degrees(atan2(150 * sin(best.x) ** 0.8, 300 * cos(best.x) ** 0.8))
    assert in_degrees(found)[0] == pytest.approx(place, abs=2.0)
    assert len(found.directions) == 4


def test_a_cone_is_rolled_by_the_radius_square_to_its_side() -> None:
    # Over an ellipse at the end of its long axis: b² / a over the cosine of the side's lean.
    found = forming("cone", section="ellipse 500 x 300", height=600, thickness=3)
    assert found.radius == pytest.approx(150**2 / 250 * hypot(600, 250) / 600, rel=1e-9)
    assert (found.ends, in_degrees(found)) == ("a", [0.0, 180.0])
    cut = forming("cone", section="round 2400", height=1120, cut_b="height 700", thickness=16, sizes="inside")
    assert (cut.ends, cut.directions) == ("b", ())
    assert cut.inside == pytest.approx(450 * hypot(1200, 1120) / 1120, rel=1e-9)
    assert cut.strain == pytest.approx(50 * 16 / (cut.inside + 8), rel=1e-12)


def test_the_tight_end_of_a_transition_is_named_where_it_lies() -> None:
    # Upright at the tight end, right of END A by 300: the direction is that from END B's own centre.
    found = forming("transition", end_a="round 800", end_b="ellipse 400 x 200", length=600, offset="200,0")
    assert found.ends == "b"
    assert in_degrees(found) == [0.0]


def test_strain_of_the_outer_fibre() -> None:
    # Elementary bending: lengths of the outer and the middle fibre of an arc.
    t, radius, angle = 12.0, 150.0, 0.7
    outer, middle = (radius + t / 2) * angle, radius * angle
    assert forming_strain(thickness=t, radius=radius) == pytest.approx(100 * (outer / middle - 1), rel=1e-12)


def test_cautions_of_strain_and_of_bend_radius() -> None:
    given = {"section": "round 120", "length": 300, "sizes": "inside"}
    mild = built("straight", **given, thickness=6, material="steel")  # 4.8 %
    assert mild.warnings == ()
    hard = built("straight", **given, thickness=8, material="steel")  # 6.3 %
    (text,) = hard.warnings
    assert "forming strain 6.3 %" in text
    assert "all round, both ends" in text
    assert "the code in force decides" in text
    assert any(fact.startswith("CAUTION: forming strain") for fact in hard.patterns[0].facts)
    # Published for 6 mm plate is more than the 4 mm asked for here.
    tight = built(
        "straight",
        section="rectangle 200 x 100 r 4",
        length=300,
        thickness=6,
        sizes="inside",
        material="steel",
    )
    found = tight.patterns[0].forming
    assert found.least is not None
    assert found.inside == pytest.approx(4, abs=1e-9)
    assert any(f"below {found.least:.1f}" in text for text in tight.warnings)
    assert "EN 10025-2" in found.source
    unknown = built("straight", section="rectangle 200 x 100 r 4", length=300, thickness=2, sizes="inside")
    assert unknown.patterns[0].forming.least is None
    assert unknown.warnings == ()  # thin sheet is none of a vessel code's


def test_pressed_work_has_no_strain_of_rolling() -> None:
    found = forming(
        "transition", end_a="rectangle 600 x 400 r 5", end_b="round 400", length=450, kicks=3, thickness=1
    )
    assert found.strain is None


def test_what_is_flat_all_over_is_not_rolled_and_a_sharp_fold_is() -> None:
    found = forming("straight", section="rectangle 600 x 300 r 0", length=500, thickness=2, sizes="inside")
    assert found.inside == 0.0
    assert found.radius == pytest.approx(1.0)
    assert found.strain == pytest.approx(100.0)


def test_the_page_shows_what_its_command_gives() -> None:
    page = (Path(__file__).parents[2] / "docs" / "after_forming.md").read_text(encoding="utf-8")
    given = {
        "end_a": "ellipse 600 x 300",
        "end_b": "round 400",
        "length": 450,
        "thickness": 6,
        "material": "steel",
    }
    facts = built("transition", **given).patterns[0].facts
    (fact,) = (fact for fact in facts if fact.startswith("tightest radius"))
    assert f"`{fact}`" in page


def test_the_record_and_the_facts_say_it() -> None:
    piece, _ = read_piece(
        kind_of("straight"), {"section": "ellipse 600 x 300", "length": 500, "thickness": 2}
    )
    made = builds_of(piece)[0]
    data = json.loads(record(piece.mark, piece.kind, record_of(piece), made.patterns, ()))
    found = data["patterns"][0]["forming"]
    assert found["radius"] == pytest.approx(75)
    assert found["ends"] == "ab"
    assert found["directions"] == [0.0, 180.0]
    assert found["strain"] == pytest.approx(100 / 75)
    assert found["least_inside_radius"] is None
    facts = made.patterns[0].facts
    assert "tightest radius 75.0 at right and left, both ends" in facts
    assert "strain 50 t/R = 1.3 %, springback not in it" in facts


def test_the_tightest_place_of_a_slanting_cone_is_where_its_radius_is_least() -> None:
    # Longest at the top: there the cut is nearest the apex, and the cone is rolled tightest.
    from math import degrees

    from develop.pieces import kind_of
    from develop.pieces.fields import read_piece
    from develop.pieces.hand import builds_of

    piece, problems = read_piece(
        kind_of("cone"),
        {
            "section": "round 1000",
            "height": 900,
            "cut_b": "height 500 slope 15 long top",
            "thickness": 6,
            "sizes": "outside",
        },
    )
    assert piece is not None, problems
    forming = builds_of(piece)[0].patterns[0].forming
    assert [round(degrees(each)) for each in forming.directions] == [90]
