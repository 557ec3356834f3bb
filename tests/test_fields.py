"""The declarations of the kinds, and what is read through them."""

from __future__ import annotations

import json
import math
import tomllib

import pytest
from hypothesis import given
from hypothesis import strategies as st

from develop.errors import InputError
from develop.pieces import KINDS, kind_of
from develop.pieces.cut_types import CUT, Cut
from develop.pieces.field_types import (
    ANGLE,
    DIRECTION,
    LENGTH,
    MARK,
    OFFSET,
    SEAM,
    TEXT,
    THICKNESS,
    Choice,
    Count,
    FieldType,
    Length,
    Number,
)
from develop.pieces.fields import fields_of, read_piece, record_of
from develop.pieces.reference import command_line, job_text, kind_text, kinds_page, kinds_text

COMMON = {
    "mark", "quantity", "opposite_hand", "material", "thickness", "sizes", "neutral_line", "seam_at", "divisions",
    "face", "marks", "flow", "seam", "edge_a", "edge_b", "gap", "gap_on", "trim_a", "trim_b", "trim_line",
    "pre_bend", "weld_shrinkage", "lining", "made_in", "stock", "rivet", "prep_a", "prep_b", "prep_seam",
    "templates", "template_sections", "template_share", "floor", "tape", "tape_tolerance",
}  # fmt: skip
OWN = {
    "straight": {"section", "length", "cut_a", "cut_b", "fit_a", "fit_b", "clearance"},
    "transition": {
        "end_a", "end_b", "length", "offset", "flush", "rotate", "tilt", "kicks", "die", "swing", "fit_a", "fit_b",
        "clearance", "edge_cut", "collar_a", "collar_b",
    },
}  # fmt: skip


def test_the_list_of_kinds_and_the_classes_agree() -> None:
    assert set(KINDS) == {
        "straight", "bend", "branch", "offset", "cone", "transition", "marking-band", "opening", "flange",
    }  # fmt: skip
    for name in KINDS:
        assert kind_of(name).kind == name
    with pytest.raises(KeyError):
        kind_of("elbow")


@pytest.mark.parametrize("name", OWN)
def test_a_kind_has_its_own_fields_first_and_then_the_common_ones(name: str) -> None:
    fields = fields_of(kind_of(name))
    assert {each.name for each in fields if each.own} == OWN[name]
    assert {each.name for each in fields if not each.own} == COMMON
    assert [each.own for each in fields] == sorted((each.own for each in fields), reverse=True)


def test_a_marking_band_has_no_plate_fields() -> None:
    assert {each.name for each in fields_of(kind_of("marking-band"))} == {
        "section", "cut", "onto", "joint", "paper", "face", "lap", "narrowest", "mark", "quantity", "opposite_hand", "thickness",
        "sizes", "seam_at", "divisions",
    }  # fmt: skip


@pytest.mark.parametrize("name", KINDS)
def test_defaults_are_those_of_the_design(name: str) -> None:
    given = {
        each.name: kind_of(name).example[each.name] for each in fields_of(kind_of(name)) if each.required
    }
    piece, problems = read_piece(kind_of(name), given)
    assert problems == []
    assert piece is not None
    record = record_of(piece)
    expected = {"mark": name, "quantity": 1, "opposite_hand": 0, "thickness": 0.0}
    if name in ("opening", "flange"):
        assert record["material"] == ""
        assert {key: record[key] for key in expected} == expected
        return
    expected |= {"sizes": "mean", "seam_at": "shortest", "divisions": 24, "face": "outside"}
    if name == "marking-band":
        expected |= {"sizes": "outside"}  # an existing pipe is taped on its outside
    else:
        expected |= {"material": "", "neutral_line": 0.5, "flow": "a to b"}
    if name == "straight":
        expected |= {"cut_a": "square", "cut_b": "square"}
    if name == "transition":
        expected |= {"offset": [0.0, 0.0], "flush": None, "rotate": 0.0}
    assert {key: record[key] for key in expected} == expected


@pytest.mark.parametrize("name", KINDS)
def test_every_default_is_read_back_from_its_text(name: str) -> None:
    for each in fields_of(kind_of(name)):
        assert each.help
        assert each.type.allowed
        if each.default_text:
            assert each.type.read(each.default_text, unit="in") == each.default


def test_the_record_is_in_mm_and_degrees_and_is_json() -> None:
    given = {
        "end_a": "ellipse 24 x 12",
        "end_b": "pipe DN 125 en",
        "length": "1' 6\"",
        "offset": "-2,1 mm",
        "rotate": -30,
        "seam_at": "2:30",
        "thickness": "3/32 in",
    }
    piece, problems = read_piece(kind_of("transition"), given, unit="in")
    assert problems == []
    assert piece is not None
    record = record_of(piece)
    assert json.loads(json.dumps(record, allow_nan=False)) == record
    assert record["end_a"] == "ellipse 609.6 x 304.8"
    assert record["end_b"] == "pipe DN 125 en"
    assert record["length"] == 457.2
    assert record["offset"] == [-50.8, 1.0]
    assert record["rotate"] == -30.0
    assert record["seam_at"] == 15.0
    assert record["thickness"] == 2.38125


@given(st.integers(-36000, 36000))
def test_degrees_survive_the_way_through_radians(hundredths: int) -> None:
    degrees = hundredths / 100
    assert ANGLE.record(ANGLE.read(degrees, unit="mm")) == degrees
    assert DIRECTION.record(DIRECTION.read(degrees, unit="mm")) == pytest.approx(degrees % 360, abs=1e-11)


def test_every_error_is_found_in_one_reading() -> None:
    given: dict[str, object] = {
        "end_a": "elipse 600 x 300",
        "lenght": 450,
        "offset": [1, "x"],
        "flush": "botom",
        "rotate": True,
        "mark": "a/b",
        "neutral_line": 2,
        "quantity": 0,
        "divisions": 2.5,
        "thickness": -1,
        "colour": "red",
    }
    piece, problems = read_piece(kind_of("transition"), given)
    assert piece is None
    said = {problem.field: str(problem) for problem in problems}
    assert set(said) == set(given) | {"end_b"}
    assert 'did you mean "length"?' in said["lenght"]
    assert "length" not in said  # it was meant, so it is not missed as well
    assert "did you mean" not in said["colour"]
    assert "end_a, end_b, length" in said["colour"]
    assert said["end_b"].startswith("end_b: not given; allowed: round 400")
    assert all("; allowed: " in each for each in said.values())


def test_offset_and_flush_exclude_each_other() -> None:
    given = {"end_a": "round 400", "end_b": "round 300", "length": 300, "offset": "0,0", "flush": "top"}
    _, problems = read_piece(kind_of("transition"), given)
    (problem,) = problems
    assert (problem.field, problem.allowed) == ("flush", "one of the two")
    assert "offset" in problem.given


LARGE: list[object] = ["1e300", 1e300, 10**300, "101 m"]
NO_NUMBER: list[object] = [
    "nan",
    "inf",
    "-inf",
    math.nan,
    math.inf,
    -math.inf,
    True,
    False,
    None,
    [],
    {},
    "",
    " ",
    "x",
]


@pytest.mark.parametrize("wrong", [0, "0", -5, "-5 mm", 0.09, "450 kg", *LARGE, *NO_NUMBER])
def test_lengths_refused(wrong: object) -> None:
    refused(LENGTH, wrong, "0.1 mm to 100 m")


@pytest.mark.parametrize("wrong", [-1e-9, 1000.1, "2 m", *LARGE, *NO_NUMBER])
def test_thicknesses_refused(wrong: object) -> None:
    refused(THICKNESS, wrong, "0 mm to 1000 mm")


def test_the_ends_of_the_ranges_are_allowed() -> None:
    assert LENGTH.read("0.1 mm", unit="mm") == 0.1
    assert LENGTH.read("100 m", unit="mm") == 100_000
    assert THICKNESS.read(0, unit="mm") == 0
    assert Length(least=1).read("1", unit="mm") == 1
    assert Number(0, 1).read("1", unit="mm") == 1
    assert Number(0, 1).read("1/2", unit="mm") == 0.5
    assert Count(3, 720).read("720", unit="mm") == 720
    assert ANGLE.read(-360, unit="mm") == -2 * math.pi


@pytest.mark.parametrize("wrong", [-0.01, 1.01, "50 %", "1 mm", *LARGE, *NO_NUMBER])
def test_numbers_refused(wrong: object) -> None:
    refused(Number(0, 1), wrong, "a number from 0 to 1")


@pytest.mark.parametrize("wrong", [0, -1, 2.5, "2-1/2", "12 mm", 1001, *LARGE, *NO_NUMBER])
def test_counts_refused(wrong: object) -> None:
    refused(Count(1, 1000), wrong, "a whole number from 1 to 1000")


@pytest.mark.parametrize("wrong", [361, "-361", "30 mm", *LARGE, *NO_NUMBER])
def test_angles_refused(wrong: object) -> None:
    refused(ANGLE, wrong, "degrees from -360 to 360")


@pytest.mark.parametrize("wrong", ["shortets", 361, "13:00", *LARGE, *NO_NUMBER])
def test_seams_refused(wrong: object) -> None:
    refused(SEAM, wrong, "shortest, right, top, left, bottom")


def test_a_seam_is_a_direction_or_the_shortest() -> None:
    assert SEAM.read("Shortest", unit="mm") == "shortest"
    assert SEAM.read("left", unit="mm") == math.pi
    with pytest.raises(InputError, match='did you mean "shortest"'):
        SEAM.read("shortets", unit="mm")


@pytest.mark.parametrize(
    ("given", "cut"),
    [
        ("slope 30 long 90", Cut(slope=math.radians(30), long=math.radians(90))),
        ("Long top, Slope 30", Cut(slope=math.radians(30), long=math.radians(90))),
        ({"slope": 30, "long": "top"}, Cut(slope=math.radians(30), long=math.radians(90))),
        ({"slope": "22.5", "long": "3:00"}, Cut(slope=math.radians(22.5), long=0.0)),
        ("square", None),
    ],
)
def test_cuts(given: object, cut: Cut | None) -> None:
    assert CUT.read(given, unit="mm") == cut
    assert CUT.read(CUT.text(cut), unit="mm") == cut


@pytest.mark.parametrize(
    ("wrong", "fields"),
    [
        ("slope 30 long 90,", {""}), (", slope 30 long 90", {""}), ("slope 30,, long 90", {""}),
        ("slope, 30 long, 90", {""}), ("slope 30 long 90 ,", {""}), (",", {""}),
        ("slope", {""}), ("slope 30", {""}), ("slope 30 long", {""}), ("slope 30 slope 30", {""}), (30, {""}),
        ("", {""}), ("slope 30 long 90 deep 3", {""}), ("slope 90 long 0", {"slope"}), ("slope -1 long 0", {"slope"}),
        ("slope nan long nan", {"slope", "long"}), ({}, {"slope", "long"}), ({"slope": 30}, {"long"}),
        ({"slop": 30, "long": 0}, {"slop", "slope"}), ({"slope": 30, "long": "tpo"}, {"long"}), (True, {""}),
    ],
)  # fmt: skip
def test_cuts_refused(wrong: object, fields: set[str]) -> None:
    with pytest.raises(InputError) as error:
        CUT.read(wrong, unit="mm")
    assert {problem.field for problem in error.value.problems} == fields
    assert all(problem.allowed for problem in error.value.problems)


@pytest.mark.parametrize(
    ("given", "pair"),
    [("0,50", (0, 50)), ("-20, 50", (-20, 50)), ([0, "2 in"], (0, 50.8)), ("1' 6\",-1 in", (457.2, -25.4))],
)
def test_offsets(given: object, pair: tuple[float, float]) -> None:
    assert OFFSET.read(given, unit="mm") == pair


@pytest.mark.parametrize(
    "wrong",
    [
        "",
        "5",
        "5,",
        "1,2,3",
        "a,b",
        "0,101 m",
        [1],
        [1, 2, 3],
        [1, None],
        [True, 1],
        {"x": 1},
        5,
        "nan,0",
        "0;5",
    ],
)
def test_offsets_refused(wrong: object) -> None:
    refused(OFFSET, wrong, "such as 0,50 or -20,50")


def test_words() -> None:
    words = Choice(("a to b", "b to a"))
    assert words.read(" A  to B", unit="mm") == "a to b"
    for wrong in ("", "a", 5, None, ["a to b"]):
        refused(words, wrong, "a to b or b to a")


@pytest.mark.parametrize("good", ["A1", "straight", "P-3.2 (left)", "Kanal_ä", "7", "_x", "a+b=c"])
def test_marks(good: str) -> None:
    assert MARK.read(good, unit="mm") == good


@pytest.mark.parametrize(
    "wrong",
    [
        "", " ", ".", "..", ".hidden", "a/b", "/a", "a\\b", "../a", "a:b", "a*", "a?", 'a"', "a<b", "a|b", "a\nb", "a\0",
        "-o", "a.", "CON", "nul", "com1.x", "x" * 61, "äöü" * 40, "\ud800", 12, True, None, "a\u202eb", "a\tb",
    ],
)  # fmt: skip
def test_marks_refused(wrong: object) -> None:
    refused(MARK, wrong, "as in a file's name")


@given(st.text(st.characters(), max_size=70))
def test_a_mark_that_is_read_is_the_name_of_a_file(text: str) -> None:
    try:
        mark = MARK.read(text, unit="mm")
    except InputError:
        return
    assert isinstance(mark, str)
    assert mark == mark.strip() != ""
    assert not set(mark) & set('/\\:*?"<>|\0')
    assert not mark.startswith((".", "-"))
    assert len(f".{mark}.json.1234567.new".encode()) < 255


@pytest.mark.parametrize("wrong", ["a\nb", "a\x1b[31m", "x" * 121, 5, None, "\ud800"])
def test_texts_refused(wrong: object) -> None:
    refused(TEXT, wrong, "one line of text")


def refused(kind: FieldType, wrong: object, allowed: str) -> None:
    """The value is refused by one problem that says what is allowed, on one line."""
    with pytest.raises(InputError) as error:
        kind.read(wrong, unit="mm")
    (problem,) = error.value.problems
    assert problem.field == ""
    assert allowed in problem.allowed
    assert problem.given
    assert str(problem).isprintable()


@pytest.mark.parametrize("name", KINDS)
def test_the_texts_tell_every_field_and_an_example(name: str) -> None:
    kind = kind_of(name)
    shown, page = kind_text(kind), kinds_page()
    for each in fields_of(kind):
        assert f"  {each.name}  [" in shown
        assert each.help in shown
        assert f"| `{each.name}` | " in page
    assert command_line(kind) in shown
    assert command_line(kind) in page
    (example,) = tomllib.loads(job_text(kind))["piece"]
    assert example.pop("kind") == name
    assert read_piece(kind, example)[1] == []
    assert name in kinds_text()
