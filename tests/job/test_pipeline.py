"""From a piece to its files: all of them or none, and always the same bytes."""

from __future__ import annotations

import json
from collections.abc import Mapping
from pathlib import Path

import pytest

import develop.checks
from develop.checks import Check
from develop.errors import WriteError
from develop.job.output_fields import FORMATS
from develop.job.pipeline import make
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import Piece, read_piece, record_of

# The first bytes of each format, as its own standard has them.
STARTS = {
    "svg": b"<?xml",
    "pdf": b"%PDF-",
    "dxf": b"999\n",  # a comment
    "json": b"{",
    "png": b"\x89PNG\r\n\x1a\n",
    "stl": b"finished piece",  # of 80 bytes of any text
    "glb": b"glTF\x02\0\0\0",
}


def example(name: str, **more: object) -> Piece:
    given: Mapping[str, object] = {**kind_of(name).example, **more}
    piece, problems = read_piece(kind_of(name), given)
    assert problems == []
    assert piece is not None
    return piece


@pytest.mark.parametrize("name", KINDS)
def test_the_example_of_a_kind_gives_all_its_files(tmp_path: Path, name: str) -> None:
    piece = example(name, mark="A1")
    outcome = make(piece, folder=str(tmp_path))
    assert outcome.mark == "A1"
    record = json.loads((tmp_path / "A1.json").read_bytes())
    marks = [pattern["mark"] for pattern in record["patterns"]]
    assert marks == ["A1"] or (len(marks) > 1 and all(mark.startswith("A1-") for mark in marks))
    svgs, dxfs = ([f"{mark}.{each}" for mark in marks] for each in ("svg", "dxf"))
    assert outcome.files == (*svgs, "A1.pdf", "A1-pages.pdf", *dxfs, "A1.json", "A1.png", "A1.stl", "A1.glb")
    assert {each.name for each in tmp_path.iterdir()} == set(outcome.files)
    for file in tmp_path.iterdir():
        assert file.read_bytes().startswith(STARTS[file.suffix[1:]])
    assert (record["mark"], record["kind"]) == ("A1", name)
    assert record["fields"] == record_of(piece)
    assert len(outcome.checks) == len(record["checks"]) > 0
    assert outcome.failed == ()


@pytest.mark.parametrize("name", KINDS)
def test_the_same_piece_gives_the_same_bytes(tmp_path: Path, name: str) -> None:
    one, two = (make(example(name), folder=str(tmp_path / folder)) for folder in ("one", "two"))
    assert one.files == two.files
    endings = {"pages" if file.endswith("-pages.pdf") else file.rpartition(".")[2] for file in one.files}
    assert endings == set(FORMATS)
    for file in one.files:
        assert (tmp_path / "one" / file).read_bytes() == (tmp_path / "two" / file).read_bytes()


def test_only_the_formats_asked_for_are_written(tmp_path: Path) -> None:
    outcome = make(example("straight"), folder=str(tmp_path), formats=("json", "svg"))
    assert outcome.files == ("straight.svg", "straight.json")
    assert {each.name for each in tmp_path.iterdir()} == {"straight.svg", "straight.json"}


def test_the_record_and_the_cutting_file_do_not_depend_on_the_units_of_the_sheets(tmp_path: Path) -> None:
    for units in ("mm", "in"):
        make(example("transition"), folder=str(tmp_path / units), formats=("json",), units=units)
    mm, inches = (tmp_path / units / "transition.json" for units in ("mm", "in"))
    assert mm.read_bytes() == inches.read_bytes()


def test_a_check_that_does_not_hold_is_told_and_recorded(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    good = Check(name="good", expected=1.0, got=1.0, limit=0.0, unit="mm")
    bad = Check(name="bad", expected=1.0, got=2.0, limit=0.5, unit="mm")
    monkeypatch.setattr(develop.checks, "check_part", lambda pattern, solid: (good, bad))
    outcome = make(example("straight"), folder=str(tmp_path), formats=("json",))
    assert outcome.checks == (good, bad)
    assert outcome.failed == (bad,)
    assert [each["holds"] for each in json.loads((tmp_path / "straight.json").read_bytes())["checks"]] == [
        True,
        False,
    ]


@pytest.mark.parametrize(
    "writer",
    [
        "svg.svg",
        "pdf.printed",
        "tiled.written",
        "dxf.dxf",
        "record.record",
        "picture.picture",
        "solid_files.glb",
    ],
)
def test_when_a_format_fails_nothing_is_written(
    tmp_path: Path, monkeypatch: pytest.MonkeyPatch, writer: str
) -> None:
    def fails(*_: object, **__: object) -> bytes:
        raise RuntimeError("no such luck")

    (tmp_path / "straight.svg").write_bytes(b"old")
    monkeypatch.setattr(f"develop.outputs.{writer}", fails)
    with pytest.raises(RuntimeError, match="no such luck"):
        make(example("straight"), folder=str(tmp_path))
    assert [(each.name, each.read_bytes()) for each in tmp_path.iterdir()] == [("straight.svg", b"old")]


def test_a_folder_that_cannot_be_written(tmp_path: Path) -> None:
    (tmp_path / "out").write_bytes(b"in the way")
    with pytest.raises(WriteError, match="out: cannot be written: "):
        make(example("straight"), folder=str(tmp_path / "out"), formats=("svg",))
