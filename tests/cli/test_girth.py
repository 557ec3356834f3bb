"""`develop girth` against closed forms and against what a tape can show."""

from __future__ import annotations

import json
import math
from fractions import Fraction

import pytest

from develop.cli.main import main
from develop.units import parse_length


def shown(capsys: pytest.CaptureFixture[str], *words: str) -> str:
    assert main(["girth", *words]) == 0
    out, err = capsys.readouterr()
    assert err == ""
    return out


def test_json_of_a_round(capsys: pytest.CaptureFixture[str]) -> None:
    data = json.loads(shown(capsys, "round 400", "--divisions", "8", "--json"))
    assert set(data) == {"section", "width", "height", "girth", "area", "hydraulic_diameter", "divisions"}
    assert (data["width"], data["height"]) == (400, 400)
    assert data["hydraulic_diameter"] == pytest.approx(400, rel=1e-15)
    assert data["section"] == "round 400"
    assert data["girth"] == pytest.approx(400 * math.pi, rel=1e-15)
    assert data["area"] == pytest.approx(200**2 * math.pi, rel=1e-15)
    assert len(data["divisions"]) == 8
    for k, row in enumerate(data["divisions"]):
        assert set(row) == {"arc", "x", "y"}
        assert row["arc"] == pytest.approx(k * 400 * math.pi / 8, rel=1e-15)
        assert row["x"] == pytest.approx(200 * math.cos(k * math.pi / 4), abs=1e-11)
        assert row["y"] == pytest.approx(200 * math.sin(k * math.pi / 4), abs=1e-11)


def test_json_of_an_ellipse(capsys: pytest.CaptureFixture[str]) -> None:
    data = json.loads(shown(capsys, "ellipse", "600", "x", "400", "--json"))
    # Semi-axes 3 and 2 have the perimeter 15.86543958929058979: OEIS A334849.
    assert data["girth"] == pytest.approx(15.86543958929058979 * 100, rel=1e-14)
    assert data["area"] == pytest.approx(math.pi * 300 * 200, rel=1e-15)
    assert len(data["divisions"]) == 24
    for row, expected in zip(data["divisions"][::6], [(300, 0), (0, 200), (-300, 0), (0, -200)], strict=True):
        assert (row["x"], row["y"]) == pytest.approx(expected, abs=1e-10)
    for row in data["divisions"]:
        assert (row["x"] / 300) ** 2 + (row["y"] / 200) ** 2 == pytest.approx(1, abs=1e-13)


def test_json_is_always_in_mm(capsys: pytest.CaptureFixture[str]) -> None:
    data = json.loads(shown(capsys, "round 10", "--units", "in", "--json", "--divisions", "1"))
    assert data["section"] == "round 254"
    assert data["girth"] == pytest.approx(254 * math.pi, rel=1e-15)
    assert data["divisions"] == [{"arc": 0.0, "x": 127.0, "y": 0.0}]


def rows_of(text: str) -> list[list[str]]:
    lines = text.splitlines()
    (head,) = (n for n, line in enumerate(lines) if line.split()[:2] == ["point", "running"])
    return [line.split() for line in lines[head + 1 :]]


@pytest.mark.parametrize(
    ("unit", "size", "half"), [("mm", 1.0, Fraction(1, 20)), ("in", 25.4, Fraction(254, 640))]
)
def test_running_lengths_gather_no_rounding_error(
    capsys: pytest.CaptureFixture[str], unit: str, size: float, half: Fraction
) -> None:
    text = shown(capsys, "round 400 mm", "--divisions", "97", "--units", unit)
    rows = rows_of(text)
    assert len(rows) == 98
    for k, row in enumerate(rows):
        exact = k * 400 * math.pi / 97
        assert abs(parse_length(row[1], unit=unit) - exact) <= half + 1e-9
    assert [row[0] for row in rows] == [*map(str, range(97)), "0"]
    assert rows[-1][2:] == rows[0][2:]


def test_the_table_in_mm(capsys: pytest.CaptureFixture[str]) -> None:
    text = shown(capsys, "ellipse 600 x 300", "--divisions", "4")
    lines = text.splitlines()
    # Girth by the arithmetic-geometric mean with mpmath: 2 x 9.6884482205476761984 x 150 / 2 (OEIS A138500, a = 2 b).
    girth = 9.6884482205476761984 * 150
    assert lines[0] == f"ellipse 600 x 300 mm: girth {girth:.1f} mm, area {math.pi * 300 * 150:.0f} mm²"
    assert "anticlockwise from the right, facing end B" in lines[1]
    assert rows_of(text) == [
        ["0", "0.0", "0.0", "300.0", "0.0"],
        ["1", f"{girth / 4:.1f}", "90.0", "0.0", "150.0"],
        ["2", f"{girth / 2:.1f}", "180.0", "-300.0", "0.0"],
        ["3", f"{girth * 3 / 4:.1f}", "270.0", "0.0", "-150.0"],
        ["0", f"{girth:.1f}", "0.0", "300.0", "0.0"],
    ]


def test_the_table_in_inches(capsys: pytest.CaptureFixture[str]) -> None:
    text = shown(capsys, "pipe NPS 4", "--divisions", "2", "--units", "in")
    # 4.5 in outside: ASME B36.10M; 4.5 pi = 14.137 in, nearest 1/32: 14-1/8; half: 7.0686, 7-1/16.
    assert text.splitlines()[0] == (
        f"pipe NPS 4: girth 14-1/8 in, area {math.pi * 4.5**2 / 4:.2f} square inches"
    )
    assert rows_of(text) == [
        ["0", "0", "0.0", "2-1/4", "0"],
        ["1", "7-1/16", "180.0", "-2-1/4", "0"],
        ["0", "14-1/8", "0.0", "2-1/4", "0"],
    ]


def test_flat_oval_and_rectangle_have_a_round_of_equal_friction(capsys: pytest.CaptureFixture[str]) -> None:
    data = json.loads(shown(capsys, "flat-oval 500 x 250", "--json"))
    same = data["equal_friction"]
    area, girth = 250 * 250 + math.pi * 125**2, 500 + math.pi * 250
    assert (data["area"], data["girth"]) == pytest.approx((area, girth), rel=1e-15)
    assert same["diameter"] == pytest.approx(1.55 * area**0.625 / girth**0.25, rel=1e-14)
    assert same["formula"] == "1.55 A^0.625 / P^0.25"
    assert "Heyt and Diaz" in same["source"]
    text = shown(capsys, "flat-oval 500 x 250")
    assert f"Hydraulic diameter, 4 area / girth: {4 * area / girth:.1f} mm" in text
    assert "Round duct of equal friction: 369.7 mm, 1.55 A^0.625 / P^0.25 (Heyt and Diaz" in text
    text = shown(capsys, "rectangle 500 x 300")
    assert "Round duct of equal friction: 420.0 mm" in text
    assert "for sharp corners only" in text


@pytest.mark.parametrize(
    "section",
    [
        "round 400", "ellipse 500 x 250", "superellipse 500 x 250 n 3", "rectangle 500 x 250 r 1", "pipe DN 150",
        "rectangle 500 x 250 r 125", "measured 0:322 45:326 90:327 135:323",
    ],
)  # fmt: skip
def test_no_rule_for_friction_where_none_was_published(
    section: str, capsys: pytest.CaptureFixture[str]
) -> None:
    data = json.loads(shown(capsys, section, "--json", "--divisions", "1"))
    assert "equal_friction" not in data
    assert data["hydraulic_diameter"] == 4 * data["area"] / data["girth"]
    text = shown(capsys, section)
    assert "friction" not in text
    assert "Hydraulic diameter" in text


def test_readings_are_shown_with_what_they_miss(capsys: pytest.CaptureFixture[str]) -> None:
    words = ("measured", "0:322", "45:326", "90:327", "135:325")
    data = json.loads(shown(capsys, *words, "--json"))["measured"]
    assert data["fit"] == "ellipse"
    assert [row["direction"] for row in data["readings"]] == [0, 45, 90, 135]
    assert [row["diameter"] for row in data["readings"]] == [322, 326, 327, 325]
    # Opposite diagonals of an ellipse's diameters: equal sums to first order, here 649 and 651.
    residuals = [row["residual"] for row in data["readings"]]
    assert residuals == pytest.approx([-0.5, 0.5, -0.5, 0.5], abs=0.02)
    assert data["largest_residual"] == max(map(abs, residuals))
    lines = shown(capsys, *words).splitlines()
    assert lines[0].startswith("measured, 4 readings, ellipse, overall 322.")
    at = next(n for n, line in enumerate(lines) if "less fitted" in line)
    assert lines[at + 1].split() == ["0.0", "322.0", f"{residuals[0]:.2f}"]
    assert lines[at + 5].startswith(f"Largest difference: {data['largest_residual']:.2f} mm")
    inch = ("measured", "0:12", "45:12", "90:12", "135:12-1/16", "--units", "in")
    assert [line.split()[1] for line in shown(capsys, *inch).splitlines()[5:9]] == [
        "12",
        "12",
        "12",
        "12-1/16",
    ]


@pytest.mark.parametrize(
    ("section", "unit", "first"),
    [
        ("ellipse girth 1256.6 height 300", "mm", "ellipse 488.6535 x 300 mm: girth 1256.6 mm"),
        ("round girth 1921 mm", "in", "round 24-1/16 in: girth 75-5/8 in"),
        ("rectangle 500 x 300 r 40", "mm", "rectangle 500 x 300 mm r 40 mm: girth"),
        ("superellipse 24 x 12 n 2.5", "in", "superellipse 24 in x 12 in n 2.5: girth"),
        ("rectangle 20 x 12 r 1", "in", "rectangle 20 in x 12 in r 1 in: girth"),
    ],
)
def test_the_section_is_named_with_its_sizes(
    section: str, unit: str, first: str, capsys: pytest.CaptureFixture[str]
) -> None:
    assert shown(capsys, section, "--units", unit).startswith(first)
