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
    assert set(data) == {"section", "girth", "area", "divisions"}
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
    return [line.split() for line in text.splitlines()[4:]]


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
