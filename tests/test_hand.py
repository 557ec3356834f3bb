"""Which hand a pattern is, in the world: the written SVG is rolled up and looked at.

Nothing of the program is used but the files it writes. The sheet lies on a table, seen from above,
as on paper: x to the right, y away, z up. END A is at the bottom of the page. With the outside up it
is rolled downwards, with the inside up, upwards. Then a man stands in front of END B, looks into it,
has TOP upwards, and tells right from left by vectors alone: right = (where he looks) × (up).
"""

from __future__ import annotations

import json
import re
from math import cos, pi, sin
from pathlib import Path
from xml.etree import ElementTree

import numpy as np
import pytest

from develop.cli.main import main


def run(folder: Path, *words: str) -> None:
    assert main([*words, "--mark", "H", "-o", str(folder), "--formats", "svg,json"]) == 0


def cut_corners(folder: Path) -> np.ndarray:
    """End points of the cut contour's curves in page coordinates, y up."""
    root = ElementTree.parse(folder / "H.svg").getroot()
    (path,) = root.find("{*}g[@id='cut']")
    height = float(root.get("viewBox").split()[3])
    numbers = []
    for letter, rest in re.findall(r"([MLC])([^MLCZ]*)", path.get("d")):
        values = np.array(rest.replace(",", " ").split(), dtype=float).reshape(-1, 2)
        numbers.append(values[-1] if letter == "C" else values[0])
    return np.array(numbers) * [1, -1] + [0, height]


def rolled(points: np.ndarray, radius: float, *, outside_up: bool) -> np.ndarray:
    """The flat points (n, 2) rolled to a cylinder whose axis is the page's y; up is away from the table."""
    # Rolling downwards bends the right half down and round underneath; the outside stays outside.
    sign = -1.0 if outside_up else 1.0
    return np.array([(radius * sin(x / radius), y, sign * radius * (1 - cos(x / radius))) for x, y in points])


def seen_from_end_b(point: np.ndarray, centre: np.ndarray, top: np.ndarray) -> tuple[float, float]:
    """How far right and up a point lies for a man in front of END B (far along +y) who looks at -y."""
    looks = np.array([0.0, -1.0, 0.0])
    up = (top - centre) * [1, 0, 1]
    up /= np.linalg.norm(up)
    right = np.cross(looks, up)
    return float((point - centre) @ right), float((point - centre) @ up)


def words_at(folder: Path) -> dict[str, np.ndarray]:
    """Where the words of the witness marks stand on the page, by word, nearest to END A."""
    root = ElementTree.parse(folder / "H.svg").getroot()
    height = float(root.get("viewBox").split()[3])
    found: dict[str, np.ndarray] = {}
    for text in root.findall(".//{*}text"):
        word = "".join(text.itertext()).strip()
        if word not in ("RIGHT", "TOP", "LEFT", "BOTTOM"):
            continue
        x, y = text.get("x"), text.get("y")
        if x is None:
            x, y = re.findall(r"-?[\d.]+", text.get("transform"))[-2:]
        at = np.array([float(x), height - float(y)])
        if word not in found or at[1] < found[word][1]:
            found[word] = at
    return found


@pytest.mark.parametrize("face", ["outside", "inside"])
def test_right_is_on_the_right_for_a_man_in_front_of_end_b(face: str, tmp_path: Path) -> None:
    # Longest at the right: 500 there, 300 at the left.
    run(
        tmp_path, "straight", "--section", "round 200", "--length", "400", "--face", face,
        "--cut-b", "slope 45 long right", "--seam-at", "bottom",
    )  # fmt: skip
    points = cut_corners(tmp_path)
    x0 = points[:, 0].min()
    at = rolled(points - [x0, 0], 100.0, outside_up=face == "outside")
    centre = np.array([0.0, 0.0, -100.0 if face == "outside" else 100.0])
    # The seam is at the bottom, so TOP lies half a girth on.
    top = rolled(np.array([[pi * 100.0, 0.0]]), 100.0, outside_up=face == "outside")[0]
    far = at[points[:, 1].argmax()]
    right, _ = seen_from_end_b(far, centre, top)
    assert right == pytest.approx(100.0, abs=0.5)
    assert points[:, 1].max() - points[:, 1].min() == pytest.approx(500.0, abs=1e-3)
    # The words on the sheet say the same.
    words = words_at(tmp_path)
    for word, sign in (("RIGHT", 1), ("LEFT", -1)):
        place = rolled(np.array([words[word] - [x0, 0]]), 100.0, outside_up=face == "outside")[0]
        assert seen_from_end_b(place, centre, top)[0] * sign > 90.0


def test_offset_right_moves_end_b_to_that_mans_right(tmp_path: Path) -> None:
    # An oblique round: the side with the longer lines at the left is the one that leans to the right.
    run(
        tmp_path, "transition", "--end-a", "round 200", "--end-b", "round 100", "--length", "300",
        "--offset", "50,0", "--seam-at", "bottom",
    )  # fmt: skip
    record = json.loads((tmp_path / "H.json").read_text(encoding="utf-8"))
    rows = record["patterns"][0]["divisions"]
    # Flush at the right (100 - 50 = 50): there the line is square, 300; at the left it is longest.
    lengths = {round(row["direction"]) % 360: row["length"] for row in rows}
    assert lengths[0] == pytest.approx(300.0, abs=1e-9)
    assert lengths[180] == pytest.approx(np.hypot(300.0, 100.0), abs=1e-9)
    # And direction 0 is on that man's right: outside up, END A at the bottom, it comes right of the
    # seam at the bottom, so that rolled down it is on the right of TOP as seen from END B.
    a = {round(row["direction"]) % 360: row["a"][0] for row in rows[1:-1]}
    assert a[0] < a[90] < a[180]
