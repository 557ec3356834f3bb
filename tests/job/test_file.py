"""The job file: what is read, and every error at its line."""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from develop.errors import InputError
from develop.job.file import Job, read_job
from develop.pieces.fields import record_of

GOOD = """\
[job]
name = "pump house"
units = "in"

[defaults]
thickness = "1 mm"   # only some kinds have a material
material = "steel"
offset = [0, 2]

[[piece]]
kind = "straight"
mark = "A1"
section = "round 16"
length = "1' 6\\""
cut_b = { slope = 30, long = "top" }

[[piece]]
kind = "transition"
mark = "A2"
thickness = 0
end_a = "ellipse 24 x 12"
end_b = "round 16"
length = 18

[[piece]]
kind = "marking-band"
section = "pipe DN 200"
cut.slope = 45
cut.long = 0

[[piece]]
kind = "transition"
mark = "A4"
end_a = "round 20"
end_b = "round 16"
length = 18
flush = "bottom"
"""


def job_of(folder: Path, text: str | bytes) -> Job:
    file = folder / "hall.toml"
    file.write_bytes(text.encode() if isinstance(text, str) else text)
    return read_job(str(file))


def problems_of(folder: Path, text: str | bytes) -> list[str]:
    """The problems, each with its place less the folder."""
    with pytest.raises(InputError) as error:
        job_of(folder, text)
    said = [str(problem) for problem in error.value.problems]
    assert all(each.startswith(f"{folder}/hall.toml") and "\n" not in each for each in said)
    return [each.removeprefix(f"{folder}/") for each in said]


@pytest.mark.parametrize("ends", ["\n", "\r\n"])
@pytest.mark.parametrize("mark", [b"", b"\xef\xbb\xbf"])
def test_a_job_is_read(tmp_path: Path, ends: str, mark: bytes) -> None:
    job = job_of(tmp_path, mark + GOOD.replace("\n", ends).encode())
    assert job.name == "pump house"
    one, two, three, four = (record_of(placed.piece) for placed in job.pieces)
    assert [each.piece.kind for each in job.pieces] == [
        "straight",
        "transition",
        "marking-band",
        "transition",
    ]
    assert (one["section"], one["length"], one["thickness"], one["material"]) == (
        "round 406.4",
        457.2,
        1.0,
        "steel",
    )
    assert one["cut_b"] == {"slope": 30.0, "long": 90.0}
    assert (two["thickness"], two["offset"], two["length"]) == (0.0, [0.0, 50.8], 457.2)
    assert (three["mark"], three["thickness"], three["cut"]) == (
        "marking-band",
        1.0,
        {"slope": 45.0, "long": 0.0},
    )
    # What the piece says goes before a default that it excludes.
    assert (four["flush"], four["offset"]) == ("bottom", [0.0, 0.0])


def test_every_field_knows_its_line(tmp_path: Path) -> None:
    placed = job_of(tmp_path, GOOD).pieces[0]
    assert placed.place("length") == f"{tmp_path}/hall.toml:14"
    assert placed.place("cut_b.slope") == f"{tmp_path}/hall.toml:15"
    assert placed.place("material") == f"{tmp_path}/hall.toml:7"
    assert placed.place("rotate") == f"{tmp_path}/hall.toml:10"


def test_every_error_comes_at_once_with_its_line(tmp_path: Path) -> None:
    said = problems_of(
        tmp_path,
        '''[job]
name = 5
unit = "mm"
[defaults]
thikness = 1
neutral_line = 2
mark = "A"
[[piece]]
kind = "strait"
[[piece]]
section = "round 400"
[[piece]]
kind = "straight"
mark = "a/b"
section = """
round 400 kg"""
length = nan
cut_a = { slope = 95, long = "tpo" }
[[piece]]
kind = "transition"
end_a = "round 400"
lenght = 450
offset = [ 0,
  inf ]
[pieces]
''',
    )
    starts = [
        "hall.toml:2: name: 5 is not text",
        'hall.toml:3: unit: no such field of [job]; did you mean "units"?',
        'hall.toml:5: thikness: no kind has such a field; did you mean "thickness"?',
        "hall.toml:6: neutral_line: 2 is out of range",
        "hall.toml:7: mark: a default would be the same for all",
        'hall.toml:9: kind: "strait" is not a kind; did you mean "straight"?',
        "hall.toml:10: kind: not given",
        'hall.toml:14: mark: "a/b" has the character "/"',
        'hall.toml:15: section: "round 400 kg": "400 kg" has the unit "kg"',
        "hall.toml:17: length: nan is not a length",
        "hall.toml:18: cut_a.slope: 95 is out of range",
        'hall.toml:18: cut_a.long: "tpo" is not a direction; did you mean "top"?',
        "hall.toml:19: end_b: not given",
        'hall.toml:22: lenght: no such field of transition; did you mean "length"?',
        "hall.toml:23: offset: inf is not a length",
        'hall.toml:25: pieces: no such table; did you mean "piece"?',
    ]
    assert len(said) == len(starts)
    for each, start in zip(said, starts, strict=True):
        assert each.startswith(start)
        assert "; allowed: " in each


PIECE = '[[piece]]\nkind = "straight"\nsection = "round 400"\nlength = 100\n'


def test_a_bad_default_is_told_once_where_it_stands(tmp_path: Path) -> None:
    second = PIECE + 'mark = "B"\n'
    (said,) = problems_of(tmp_path, f"[defaults]\ndivisions = 0\n{PIECE}{second}")
    assert said.startswith("hall.toml:2: divisions: 0 is out of range; allowed: a whole number from 3 to 720")


def test_a_default_that_no_piece_uses_is_still_read(tmp_path: Path) -> None:
    (said,) = problems_of(tmp_path, f'[defaults]\npaper = "wide"\n{PIECE}')
    assert said.startswith('hall.toml:2: paper: "wide" is not a length')


def test_a_shape_that_cannot_be_is_refused_at_its_line_before_anything_is_made(tmp_path: Path) -> None:
    text = PIECE + 'cut_b = "slope 60 long 0"\n' + PIECE + 'mark = "B"\ncut_a = "slope 60 long 0"\n'
    first, second = problems_of(tmp_path, text)
    # The plane falls by 200 tan 60 from the axis to the wall, and there are 100 to fall.
    past = f"{200 * math.tan(math.radians(60)) - 100:.1f}"
    works = f"{math.floor(10 * math.degrees(math.atan(100 / 200))) / 10:g}"
    assert first.startswith(
        f"hall.toml:5: cut_b: slope 60 runs {past} mm past the other end; allowed: slope {works} "
    )
    assert second.startswith(
        f"hall.toml:11: cut_a: slope 60 runs {past} mm past the other end; allowed: slope {works} "
    )


def test_two_pieces_need_two_marks(tmp_path: Path) -> None:
    (said,) = problems_of(tmp_path, PIECE + PIECE)
    assert said.startswith(
        'hall.toml:5: mark: "straight" is by default the mark of this piece, and of the one at '
    )
    assert "hall.toml:1; allowed: a mark of its own for each piece" in said


def test_the_message_points_to_the_line_of_the_other_mark(tmp_path: Path) -> None:
    text = PIECE + 'mark = "A"\n'
    (said,) = problems_of(tmp_path, text + text)
    lines = [n for n, line in enumerate((text + text).splitlines(), 1) if line == 'mark = "A"']
    assert said.startswith(f'hall.toml:{lines[1]}: mark: "A" is the mark of this piece, and of the one at ')
    assert f"hall.toml:{lines[0]}; allowed:" in said


def test_the_job_knows_its_units(tmp_path: Path) -> None:
    assert job_of(tmp_path, PIECE.encode()).units == "mm"
    assert job_of(tmp_path, b'[job]\nunits = "in"\n' + PIECE.encode()).units == "in"


@pytest.mark.parametrize(("one", "other"), [("A1", "a1"), ("Ä", "A\u0308"), ("straße", "STRASSE")])
def test_marks_that_some_systems_do_not_tell_apart_are_one_mark(tmp_path: Path, one: str, other: str) -> None:
    marks = [f'mark = "{each}"\n' for each in (one, "B", other)]
    (said,) = problems_of(tmp_path, "".join(PIECE + mark for mark in marks))
    assert said.startswith("hall.toml:15: mark: ")


@pytest.mark.parametrize(
    ("text", "said"),
    [
        ("", "hall.toml: piece: not given; allowed: at least one [[piece]]"),
        ("# nothing\n", "hall.toml: piece: not given; allowed: at least one [[piece]]"),
        ("piece = []", "hall.toml: piece: not given; allowed: at least one [[piece]]"),
        ("\n[piece]\nkind = 'straight'", "hall.toml:2: piece: [piece] is not a list of pieces; allowed: [[piece]]"),
        ("piece = 5", "hall.toml:1: piece: 5 is not a list of pieces; allowed: [[piece]]"),
        ("\npiece = [5]", "hall.toml:2: piece: 5 is not a piece; allowed: [[piece]]"),
        (PIECE + "[[job]]", "hall.toml:5: job: [{  }] is not a table; allowed: [job]"),
        ("job = 1\n" + PIECE, "hall.toml:1: job: 1 is not a table; allowed: [job]"),
        ("defaults = 1\n" + PIECE, "hall.toml:1: defaults: 1 is not a table; allowed: [defaults]"),
        ("[job]\nunits = 'furlong'\n" + PIECE, 'hall.toml:2: units: "furlong" is not one of them; allowed: mm, cm'),
        ("[[piece]]\nkind = 5\n", "hall.toml:2: kind: 5 is not a kind; allowed: straight, bend, "),
        ("[[piece]]\nkind straight\n", "hall.toml:2: not a TOML file: Expected '=' after a key"),
        ("[[piece]]\nkind = \"straight\n", "hall.toml:2: not a TOML file: Illegal character"),
        ("a = [\n1,\n", "hall.toml:2: not a TOML file: "),
        ("a = 1\na = 2\n", "hall.toml:2: not a TOML file: Cannot overwrite a value"),
        ("a = " + "[" * 5000 + "]" * 5000, "hall.toml: brackets within brackets"),
        ("a = " + "9" * 5000, "hall.toml: not a TOML file: "),
        (b"[job]\nname = \"h\xff\"\n", "hall.toml:2: the byte 0xff is not UTF-8 text; allowed: a file saved as UTF-8"),
        (b"\x00", "hall.toml:1: not a TOML file: "),
        (PIECE + "length = 5", "hall.toml:5: not a TOML file: Cannot overwrite a value"),
        (PIECE + "material = 2024-01-01", "hall.toml:5: material: 2024-01-01 is not text"),
        (PIECE + 'mark = "\\u0000"', 'hall.toml:5: mark: "\\x00" has the character "\\x00"'),
        (PIECE + "x.y.z = 1", "hall.toml:5: x: no such field of straight"),
    ],
)  # fmt: skip
def test_a_file_that_is_no_job_has_one_message(tmp_path: Path, text: str | bytes, said: str) -> None:
    (problem,) = problems_of(tmp_path, text)
    assert problem.startswith(said)


def test_files_that_cannot_be_read(tmp_path: Path) -> None:
    with pytest.raises(InputError, match="is a folder; allowed: a job file"):
        read_job(str(tmp_path))
    with pytest.raises(
        InputError, match=r"missing\.toml: cannot be read: No such file or directory; allowed: a job"
    ):
        read_job(str(tmp_path / "missing.toml"))
    (tmp_path / "file").write_text("")
    with pytest.raises(InputError, match="cannot be read: Not a directory"):
        read_job(str(tmp_path / "file" / "hall.toml"))


def test_a_file_too_large_for_a_job_is_not_read(tmp_path: Path) -> None:
    with (tmp_path / "hall.toml").open("wb") as file:
        file.truncate(20_000_000)
    with pytest.raises(InputError, match="is too large for a job file; allowed: at most 16 MB"):
        read_job(str(tmp_path / "hall.toml"))


def test_equal_marks_are_told_beside_other_mistakes(tmp_path) -> None:
    file = tmp_path / "hall.toml"
    file.write_text(
        '[[piece]]\nmark = "A"\nkind = "straight"\nsection = "round 200"\nlenght = 100\n'
        '[[piece]]\nmark = "a"\nkind = "strait"\n',
        encoding="utf-8",
    )
    with pytest.raises(InputError) as caught:
        read_job(str(file))
    said = [str(problem) for problem in caught.value.problems]
    assert any("lenght" in each for each in said)
    assert any("is not a kind" in each for each in said)
    assert any("is the mark of this piece" in each for each in said)


def test_every_bad_piece_is_told_with_its_line(tmp_path: Path) -> None:
    """A wall that leaves no inside, a seam through the opening, a flange and a pad without room."""
    branch = """[[piece]]
kind = "branch"
header = "round 600"
header_length = 700
branch = "round 250"
centre_to_end = 600
"""
    file = tmp_path / "hall.toml"
    file.write_text(
        """[[piece]]
kind = "transition"
mark = "A"
end_a = "rectangle 600 x 400"
end_b = "round 400"
length = 500
thickness = 2
"""
        + branch
        + 'mark = "B"\nheader_seam = 80\n'
        + branch
        + 'mark = "C"\npad = 300\n'
        + branch
        + 'mark = "D"\njoint = "tap"\nlap = 900\n'
    )
    with pytest.raises(InputError) as caught:
        read_job(str(file))
    said = [str(each).removeprefix(str(file)) for each in caught.value.problems]
    assert [each.split(": ")[:2] for each in said] == [
        [":7", "thickness"],
        [":15", "header_seam"],
        [":23", "pad"],
        [":32", "lap"],
    ]
    assert said[0] == (
        ":7: thickness: 2 mm leaves no inside to end_a, rectangle 600 x 400, sizes mean: the corners are "
        "sharp; allowed: for end_a r 1 mm or more, or sizes = inside"
    )
    # As the message says.
    file.write_text(file.read_text().split(branch)[0] + 'sizes = "inside"\n')
    assert len(read_job(str(file)).pieces) == 1
