"""The page that a printer is measured by, and the factors that come of it."""

from __future__ import annotations

import io
import re
import shlex
from pathlib import Path

import numpy as np
import pytest
from pypdf import PdfReader
from pypdf.generic import ContentStream

from develop.cli.main import main

MM = 72.0 / 25.4
PIECE = ("straight", "--section", "round 200", "--length", "300", "--formats", "pages", "-o", "out")


@pytest.fixture(autouse=True)
def _folder(tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:
    monkeypatch.chdir(tmp_path)


def reader(name: str) -> PdfReader:
    return PdfReader(io.BytesIO(Path(name).read_bytes()))


def crosses(page) -> np.ndarray:  # type: ignore[no-untyped-def]
    """Middles of the lines of 16 mm that stand across each other [mm]."""
    lines, at = [], None
    for operands, operator in ContentStream(page.get_contents(), page.pdf).operations:
        if operator == b"m":
            at = np.array([float(each) for each in operands]) / MM
        elif operator == b"l":
            lines.append((at, np.array([float(each) for each in operands]) / MM))
    long = [np.stack(each) for each in lines if abs(np.hypot(*(each[1] - each[0])) - 16.0) < 0.001]
    middles = [tuple(np.round(each.mean(axis=0), 3)) for each in long]
    return np.array(sorted({each for each in middles if middles.count(each) == 2}))


@pytest.mark.parametrize(
    ("options", "x", "y"),
    [
        ((), 150.0, 200.0),
        (("--units", "in"), 6 * 25.4, 8 * 25.4),
        (("--orientation", "landscape"), 200.0, 150.0),
        (("--paper", "roll 914"), 150.0, 200.0),
        (("--paper", "letter", "--margin", "19"), 150.0, 200.0),
    ],
)
def test_the_crosses_are_as_far_apart_as_the_page_says(options, x, y, capsys) -> None:  # type: ignore[no-untyped-def]
    assert main(["printer-test", "-o", "out", *options]) == 0
    assert "wrote printer-test.pdf in out" in capsys.readouterr().out
    found = reader("out/printer-test.pdf")
    (page,) = found.pages
    (left, foot), (_, top), (right, level) = crosses(page)
    assert right - left == pytest.approx(x, abs=0.01)
    assert top - foot == pytest.approx(y, abs=0.01)
    assert level == foot
    assert found.trailer["/Root"]["/ViewerPreferences"]["/PrintScaling"] == "/None"
    text = " ".join(page.extract_text().split())
    named = [f"{each:.0f} mm" if "in" not in options else f"{each / 25.4:.0f} in" for each in (x, y)]
    assert f"X: {named[0]}" in text
    assert f"Y: {named[1]}" in text
    # What the page tells to give is what the program takes, as options and as a file.
    assert "PRINT AT ACTUAL SIZE (100 %)" in text
    told = re.search(r'--printer-x ".*?" --printer-y ".*?"(?: --orientation landscape)?', text)
    assert told is not None
    assert main([*PIECE, *shlex.split(told[0])]) == 0
    assert re.search(r"PRINTER FACTORS X 1\.00\d+, Y 1\.00\d+;", capsys.readouterr().out)
    by_options = Path("out/straight-pages.pdf").read_bytes()
    lines = re.findall(r'(?:name|x|y) = ".*?"', text)
    assert len(lines) == 3
    Path("office.toml").write_text("\n".join(lines), encoding="utf-8")
    way = ["--orientation", "landscape"] if "--orientation" in told[0] else []
    assert main([*PIECE, "--printer", "office.toml", *way]) == 0
    said = re.search(r"PRINTER FACTORS (.*?) \(office\);", capsys.readouterr().out)
    assert said is not None
    for each in reader("out/straight-pages.pdf").pages:
        assert f"PRINTER FACTORS {said[1]} (office)" in " ".join(each.extract_text().split())
    assert by_options != Path("out/straight-pages.pdf").read_bytes()  # it has no name


def scale(found: PdfReader) -> tuple[float, float]:
    """By how much the last page multiplies what it draws."""
    for operands, operator in ContentStream(found.pages[-1].get_contents(), found).operations:
        if operator == b"cm" and [float(each) for each in operands[:4]] != [1.0, 0.0, 0.0, 1.0]:
            return float(operands[0]), float(operands[3])
    return 1.0, 1.0


@pytest.mark.parametrize(
    ("options", "factors"),
    [
        ((), (1.0, 1.0)),
        (("--printer-x", "149.5"), (150 / 149.5, 1.0)),
        (("--printer-y", "201"), (1.0, 200 / 201)),
        (("--printer-x", "998.5 of 1000", "--printer-y", "200.2"), (1000 / 998.5, 200 / 200.2)),
        (("--printer-x", "5-31/32 of 6 in"), (6 / (5 + 31 / 32), 1.0)),
        (("--units", "in", "--printer-x", "5-31/32"), (6 / (5 + 31 / 32), 1.0)),
        (("--printer", "office.toml"), (150 / 149.6, 1.0)),
        (("--printer", "office.toml", "--printer-x", "150.3"), (150 / 150.3, 1.0)),
    ],
)
def test_measured_lengths_become_factors(options, factors) -> None:  # type: ignore[no-untyped-def]
    Path("office.toml").write_text('name = "office"\nx = 149.6\n', encoding="utf-8")
    assert main([*PIECE, *options]) == 0
    assert scale(reader("out/straight-pages.pdf")) == pytest.approx(factors, abs=1e-6)


def test_a_job_file_names_a_printer_beside_it(tmp_path: Path) -> None:
    folder = tmp_path / "jobs"
    folder.mkdir()
    (folder / "office.toml").write_text('name = "office"\nx = "149.6 of 150"\ny = 199.2\n', encoding="utf-8")
    (folder / "hall.toml").write_text(
        '[job]\nformats = ["pages"]\npaper = "A3"\noverlap = 30\nmargin = "8 mm"\norientation = "landscape"\n'
        'printer = "office.toml"\n[[piece]]\nkind = "straight"\nsection = "round 200"\nlength = 300\n',
        encoding="utf-8",
    )
    assert main(["job", "jobs/hall.toml", "-o", "out"]) == 0
    found = reader("out/straight-pages.pdf")
    assert scale(found) == pytest.approx((150 / 149.6, 200 / 199.2), abs=1e-6)
    for page in found.pages:
        assert [float(each) / MM for each in page.mediabox[2:]] == pytest.approx([420.0, 297.0], abs=0.001)
    assert main(["job", "jobs/hall.toml", "-o", "out", "--printer-x", "150", "--paper", "A4"]) == 0
    assert scale(reader("out/straight-pages.pdf")) == pytest.approx((1.0, 200 / 199.2), abs=1e-6)


@pytest.mark.parametrize(
    ("options", "said"),
    [
        (("--paper", "A5"), '--paper: "A5" is not a paper; allowed: A4, A3, A2, A1, A0, Letter, Tabloid, or roll and its width from 250 to 2000 mm, such as roll 914'),
        (("--paper", "roll"), '--paper: "roll" is a roll of no width; allowed: A4,'),
        (("--paper", "roll 100"), '--paper: "roll 100" is too narrow; allowed: A4,'),
        (("--paper", "roll 9 m"), '--paper: "roll 9 m" is too wide; allowed: A4,'),
        (("--paper", "roll x"), '--paper: "x" is not a length'),
        (("--orientation", "upside"), '--orientation: "upside" is not one of them; allowed: portrait, landscape or fewest'),
        (("--margin", "4"), '--margin: "4" is too small; allowed: a length from 5 mm to 40 mm'),
        (("--overlap", "9"), '--overlap: "9" is too small; allowed: a length from 10 mm to 60 mm'),
        (("--overlap", "12", "--margin", "12"), "--overlap: 12 mm is not more than the margin of 12 mm; allowed: more than the margin"),
        (("--printer-x", "140"), '--printer-x: "140" is 140 mm of 150 mm, a factor of 1.071: no printer is so far off; was the page fitted to the paper?; allowed: the length measured on the test page, from 142.9 to 157.9 for 150 mm'),
        (("--printer-y", "211"), '--printer-y: "211" is 211 mm of 200 mm, a factor of 0.9479: no printer'),
        (("--printer-x", "0"), '--printer-x: "0" is 0 mm of 150 mm: no printer'),
        (("--printer-x", "1 of 2 of 3"), '--printer-x: "1 of 2 of 3" is not a measured length; allowed:'),
        (("--printer-x", "wide"), '--printer-x: "wide" is not a length'),
        (("--printer", "none.toml"), "--printer: none.toml cannot be read: No such file or directory; allowed: a TOML file with name"),
        (("--printer", "bad.toml"), "--printer: bad.toml is not a TOML file: "),
        (("--printer", "empty.toml"), "--printer: empty.toml: name: not given; allowed: one line of text"),
        (("--printer", "neither.toml"), "--printer: neither.toml has neither x nor y; allowed: a TOML file"),
        (("--printer", "far.toml"), '--printer: far.toml: x: 99 is 99 mm of 150 mm, a factor of 1.515: no printer'),
        (("--printer", "binary.toml"), "--printer: binary.toml is not a TOML file: "),
        (("--printer", "."), "--printer: . cannot be read: Is a directory; allowed:"),
    ],
)  # fmt: skip
def test_bad_input_gives_one_clear_message(options, said, capsys) -> None:  # type: ignore[no-untyped-def]
    for name, text in {
        "bad": "x = = 1", "empty": "", "neither": 'name = "office"', "far": 'name = "office"\nx = 99\n',
    }.items():  # fmt: skip
        Path(f"{name}.toml").write_text(text, encoding="utf-8")
    Path("binary.toml").write_bytes(b"\xff\xfe\x00")
    assert main([*PIECE, *options]) == 2
    (line,) = capsys.readouterr().err.splitlines()
    assert line.startswith(said), line
    assert not Path("out").exists()


def test_every_mistake_of_a_printers_file_is_told_at_once(capsys) -> None:  # type: ignore[no-untyped-def]
    Path("office.toml").write_text('name = 3\nx = 99\nz = "1"\n', encoding="utf-8")
    assert main([*PIECE, "--printer", "office.toml"]) == 2
    lines = capsys.readouterr().err.splitlines()
    assert [line.split(": ")[2] for line in lines] == ["z", "name", "x"]


def test_the_mistakes_of_a_job_file_have_their_line(tmp_path: Path, capsys) -> None:  # type: ignore[no-untyped-def]
    (tmp_path / "hall.toml").write_text(
        '[job]\npaper = "A7"\nprinter = "none.toml"\nprinter_x = 100\n'
        '[[piece]]\nkind = "straight"\nsection = "round 200"\nlength = 300\n',
        encoding="utf-8",
    )
    assert main(["job", "hall.toml", "-o", "out"]) == 2
    lines = capsys.readouterr().err.splitlines()
    assert [line[: line.index(": ", 13)] for line in lines] == [
        "hall.toml:2: paper",
        "hall.toml:3: printer",
        "hall.toml:4: printer_x",
    ]


def test_a_margin_that_leaves_no_room_for_the_crosses_is_refused(capsys) -> None:  # type: ignore[no-untyped-def]
    assert main(["printer-test", "-o", "out", "--margin", "21"]) == 2
    assert capsys.readouterr().err.strip() == (
        "--margin: 21 mm leaves no room for the crosses; allowed: at most 20 mm on this paper"
    )
    assert not Path("out").exists()


def test_inches_are_printed_on_letter_unless_told(capsys) -> None:  # type: ignore[no-untyped-def]
    assert (
        main(
            [
                "straight",
                "--section",
                "round 8",
                "--length",
                "12",
                "--units",
                "in",
                "--formats",
                "pages",
                "-o",
                "out",
            ]
        )
        == 0
    )
    assert "of Letter" in capsys.readouterr().out
    found = reader("out/straight-pages.pdf")
    assert [float(each) for each in found.pages[0].mediabox[2:]] == pytest.approx(
        [612.0, 792.0], abs=0.01
    )  # 8.5 x 11 in
    assert "4 in x 4 in" in found.pages[0].extract_text()
    assert "scale: 2 in" in found.pages[1].extract_text()


def test_a_kind_with_a_field_of_that_name_has_the_paper_under_another(capsys) -> None:  # type: ignore[no-untyped-def]
    band = [
        "marking-band",
        "--section",
        "pipe DN 200",
        "--cut",
        "slope 45 long top",
        "--paper",
        "0.2",
        "--formats",
        "pages",
        "-o",
        "out",
    ]
    assert main([*band, "--pages-paper", "A3"]) == 0
    assert "of A3" in capsys.readouterr().out
    assert main([*band, "--pages-paper", "A7"]) == 2
    assert capsys.readouterr().err.startswith('--pages-paper: "A7" is not a paper')


def test_too_many_pages_are_refused_alone_and_warned_of_beside_other_files(capsys) -> None:  # type: ignore[no-untyped-def]
    large = ["straight", "--section", "round 8 m", "--length", "20 m", "-o", "out"]
    assert main([*large, "--marks", "full", "--formats", "pages"]) == 2
    (line,) = capsys.readouterr().err.splitlines()
    assert re.fullmatch(
        r"--paper: \d+ pages of A4 for one pattern are too many to lay together; allowed: larger paper, for 500 pages at most",
        line,
    )
    assert not Path("out").exists()
    assert main([*large, "--marks", "full", "--formats", "pages,json"]) == 0
    told = capsys.readouterr()
    assert re.search(r"warning: no tiled pages: \d+ pages of A4 .* give larger paper", told.err)
    assert "tiled page" not in told.out
    assert [each.name for each in Path("out").iterdir()] == ["straight.json"]
