"""The command line, run in this process: exit codes, messages, and where they go."""

from __future__ import annotations

import errno
import json
import re
import shlex
from dataclasses import dataclass
from pathlib import Path

import pytest
from pypdf import PdfReader

import develop.checks
import develop.job.pipeline
from develop.checks import Check
from develop.cli.main import main
from develop.errors import Refusal
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import fields_of, read_piece, record_of
from develop.pieces.reference import command_line


@dataclass(frozen=True)
class Ran:
    code: int
    out: str
    err: str

    @property
    def said(self) -> list[str]:
        return self.err.splitlines()


@pytest.fixture(name="run")
def fixture_run(capsys: pytest.CaptureFixture[str], tmp_path: Path, monkeypatch: pytest.MonkeyPatch):  # type: ignore[no-untyped-def]
    monkeypatch.chdir(tmp_path)

    def run(*words: str) -> Ran:
        code = main(words)
        out, err = capsys.readouterr()
        assert "Traceback" not in out + err
        return Ran(code, out, err)

    return run


STRAIGHT = ("straight", "--section", "round 400", "--length", "600", "-o", "out", "--formats", "svg,json")
TRANSITION = (
    "transition", "--end-a", "ellipse 600 x 300", "--end-b", "round 400", "--length", "450", "-o", "out",
    "--formats", "json",
)  # fmt: skip


@pytest.mark.parametrize("name", KINDS)
def test_the_example_in_the_help_runs(run, tmp_path: Path, name: str) -> None:  # type: ignore[no-untyped-def]
    shown = run("kinds", name)
    assert shown.code == 0
    assert shown.err == ""
    line = next(line for line in shown.out.splitlines() if line.startswith("  develop "))
    assert line.strip() == command_line(kind_of(name))
    assert line.strip() in " ".join(run(name, "--help").out.split())
    done = run(*shlex.split(line)[1:])
    assert done.code == 0
    assert done.err == ""
    # One drawing of each format for each pattern, the rest once.
    svgs, dxfs = (rf"(?:{name}.{end}|{name}-\w+.{end}(?:, {name}-\w+.{end})+)" for end in ("svg", "dxf"))
    assert re.fullmatch(
        rf"{name}: wrote {svgs}, {name}.pdf, {name}-pages.pdf, {dxfs}, {name}.json, {name}.png, {name}.stl, {name}.glb in out; "
        r"\d+ tiled pages? of A4; "
        r"\d+ arcs in the DXF, within 0\.00\d\d mm of the curve; all \d+ checks hold\n",
        done.out,
    )
    assert len(list((tmp_path / "out").iterdir())) == 6 + 2 * done.out.count(".svg")
    piece, _ = read_piece(kind_of(name), kind_of(name).example)
    assert piece is not None
    assert json.loads((tmp_path / "out" / f"{name}.json").read_bytes())["fields"] == record_of(piece)


@pytest.mark.parametrize("name", KINDS)
def test_every_field_is_an_option_in_the_help(run, name: str) -> None:  # type: ignore[no-untyped-def]
    shown = run(name, "--help")
    assert shown.code == 0
    for each in fields_of(kind_of(name)):
        assert re.search(rf"^  {each.option} ", shown.out, re.MULTILINE)
        assert each.help in " ".join(shown.out.split())
    for option in ("-o, --out DIR", "--formats", "--units"):
        assert option in shown.out


def test_values_may_begin_with_a_minus_sign(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    words = (*TRANSITION, "--offset", "-20,50", "--rotate", "-30", "--seam-at=-90")
    assert run(*words).code == 0
    fields = json.loads((tmp_path / "out" / "transition.json").read_bytes())["fields"]
    assert (fields["offset"], fields["rotate"], fields["seam_at"]) == ([-20.0, 50.0], -30.0, 270.0)


def test_bare_numbers_are_in_the_units_given(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    words = (
        "straight",
        "--section",
        "round 16",
        "--length",
        "24 mm",
        "--units",
        "in",
        "-oout",
        "--formats=json",
    )
    assert run(*words, "--thickness=0.1").code == 0
    fields = json.loads((tmp_path / "out" / "straight.json").read_bytes())["fields"]
    assert (fields["section"], fields["length"], fields["thickness"]) == ("round 406.4", 24.0, 2.54)


def test_units_are_those_of_a_job_in_any_case(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    for unit, mm in (("mm", 6.0), ("CM", 60.0), ("m", 6000.0), ("In", 152.4), ("ft", 1828.8)):
        words = ("straight", "--section", "round 100 mm", "--length", "6", "--units", unit, "-o", "out")
        assert run(*words, "--formats", "json").code == 0
        record = json.loads((tmp_path / "out" / "straight.json").read_bytes())
        assert record["fields"]["length"] == pytest.approx(mm, rel=1e-15)
        assert record["units"] == "mm"


@pytest.mark.parametrize(
    ("unit", "said"), [("mm", "round 16, length 24"), ("cm", "round 160, length 240"),
                       ("in", "round 16 in, length 24 in"), ("ft", "round 192 in, length 288 in")]
)  # fmt: skip
def test_sheets_are_in_the_units_of_the_command(run, tmp_path: Path, unit: str, said: str) -> None:  # type: ignore[no-untyped-def]
    words = (
        "straight",
        "--section",
        "round 16",
        "--length",
        "24",
        "--units",
        unit,
        "-o",
        "out",
        "--formats",
        "svg",
    )
    assert run(*words).code == 0
    assert said in (tmp_path / "out" / "straight.svg").read_text(encoding="utf-8")


def test_a_job_in_inches_gives_sheets_in_inches(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    piece = '[[piece]]\nkind = "straight"\nsection = "round 16"\nlength = "24-3/8"\nthickness = "1/4"\n'
    (tmp_path / "hall.toml").write_text(f'[job]\nunits = "in"\n{piece}')
    assert run("job", "hall.toml", "-o", "out", "--formats", "svg,pdf,json").code == 0
    said = (tmp_path / "out" / "straight.svg").read_text(encoding="utf-8")
    # 16 pi = 50.2655 in, to the nearest 1/32 (0.03125): 50-1/4.
    for words in ("round 16 in, length 24-3/8 in", "1/4 in thick", "edges: END A 50-1/4 in, END B 50-1/4 in"):
        assert words in said
    pages = PdfReader(tmp_path / "out" / "straight.pdf").pages
    assert "(inches; directions in degrees anticlockwise)" in pages[0].extract_text()
    # Letter: 8.5 x 11 in of 72 points.
    assert [float(side) for side in pages[1].mediabox[2:]] == pytest.approx([612.0, 792.0], abs=0.01)
    assert json.loads((tmp_path / "out" / "straight.json").read_bytes())["fields"]["length"] == 619.125


def test_more_than_one_large_sheet_is_told(run) -> None:  # type: ignore[no-untyped-def]
    # The girth, 6283 mm, takes two sheets of at most 5080 mm.
    words = ("straight", "--section", "round 2000", "--length", "300", "-o", "out", "--formats", "pdf")
    assert "; 2 large sheets in the PDF, to be laid together; all " in run(*words).out
    assert "large sheets" not in run(*words[:2], "round 400", *words[3:]).out


def test_all_bad_options_are_told_at_once(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    done = run(
        "transition", "--end-a", "ellipse 600", "--lenght", "450", "--offset", "0,x", "--flush", "top", "--rotate", "1",
        "--rotate", "2", "--mark", "a/b", "--formats", "svg,dxff", "--units", "furlong", "--quantity", "--neutral-line=2",
        "stray", "-x", "--colour=red", "-o", "out",
    )  # fmt: skip
    assert done.code == 2
    assert done.out == ""
    starts = [
        '--lenght: no such option; did you mean "--length"?; allowed: see develop transition --help',
        "--rotate: given twice; allowed: each option once",
        "--quantity: no value given; allowed: a whole number from 1 to 100000",
        "-x: no such option; allowed: see",
        "--colour: no such option; allowed: see",
        '"stray" belongs to no option; allowed: options only',
        '--end-a: "ellipse 600" does not have two sizes; allowed: ellipse 600 x 300',
        "--end-b: not given; allowed: round 400",
        '--offset: "x" is not a length; allowed: right and up, such as 0,50',
        '--flush: "top" is given together with offset; allowed: one of the two',
        '--mark: "a/b" has the character "/"; allowed: letters',
        '--neutral-line: "2" is out of range; allowed: a number from 0 to 1',
        '--formats: "dxff" is not one of them; did you mean "dxf"?; allowed: svg, pdf, pages, dxf, json, png, stl or glb',
        '--units: "furlong" is not one of them; allowed: mm, cm, m, in or ft',
    ]
    assert len(done.said) == len(starts)
    for start in starts:
        assert any(each.startswith(start) for each in done.said), start
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize(
    ("words", "said"),
    [
        (["strait"], '"strait": no such command; did you mean "straight"?; allowed: straight, bend'),
        (["--hepl"], '"--hepl": no such option; did you mean "--help"?; allowed: see develop --help'),
        (["-x", "straight"], '"-x": no such option'),
        ([""], '"": no such command; allowed: straight'),
        (["kinds", "strait"], 'KIND: "strait" is not one of them; did you mean "straight"?; allowed: straight'),
        (["kinds", "--json"], "--json: no such option; allowed: see develop kinds --help"),
        (["girth"], "SECTION: not given; allowed: round 400"),
        (["girth", "round"], 'SECTION: "round" has no diameter; allowed: round 400'),
        (["girth", "round", "-5"], 'SECTION: "round -5": "-5" is not above zero; allowed: '),
        (["girth", "--", "round", "-5"], 'SECTION: "round -5": "-5" is not above zero; allowed: '),
        (["girth", "round 4", "--divisions", "0"], '--divisions: "0" is out of range; allowed: a whole number from 1'),
        (["girth", "round 4", "--json=1"], '--json: "1" is given; allowed: the option alone'),
        (["girth", "round 4", "--units", "yd"], '--units: "yd" is not one of them; allowed: mm, cm, m, in or ft'),
        (["girth", "dia", "300"], 'SECTION: "dia 300" is not a section; did you mean "round 300"?; allowed: '),
        ([*STRAIGHT, "--cut-b", "slope 5 long top,"], '--cut-b: "slope 5 long top," is not a cut; allowed: square, or'),
        (["job", "-o", "out"], "FILE: not given; allowed: a job file"),
        (["job", "", "-o", "out"], 'FILE: "" is not a path; allowed: a job file'),
        (["job", "none.toml", "-o", "out"], "none.toml: cannot be read: No such file or directory; allowed: a job"),
        (["job", ".", "-o", "out"], ".: is a folder; allowed: a job file"),
        (["job", "none.toml", "-o"], "--out: no value given; allowed: a folder"),
        ([*STRAIGHT, "--cut-b", "slope 85 long top"], "--cut-b: slope 85 runs "),
        ([*STRAIGHT, "--cut-b", "slope 95 long top"], '--cut-b: slope: "95" is out of range; allowed: degrees'),
    ],
)  # fmt: skip
def test_bad_input_has_one_message_and_ends_with_2(run, tmp_path: Path, words: list[str], said: str) -> None:  # type: ignore[no-untyped-def]
    done = run(*words)
    assert done.code == 2
    assert done.out == ""
    (message,) = done.said
    assert message.startswith(said)
    assert "; allowed: " in message
    assert list(tmp_path.iterdir()) == []


def test_without_a_command_the_help_is_shown_and_it_is_bad_input(run) -> None:  # type: ignore[no-untyped-def]
    done = run()
    assert done.code == 2
    assert done.out == ""
    assert done.err == run("--help").out


def test_the_help_names_every_command(run) -> None:  # type: ignore[no-untyped-def]
    shown = run("--help")
    assert shown.code == 0
    for name in (*KINDS, "job", "girth", "kinds"):
        assert re.search(rf"^  {name} ", shown.out, re.MULTILINE)
        assert run(name, "--help").code == 0
    kinds = run("kinds")
    assert kinds.code == 0
    assert all(name in kinds.out for name in KINDS)


def test_a_check_that_does_not_hold_ends_with_1(run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch) -> None:  # type: ignore[no-untyped-def]
    bad = Check(name="closing check", expected=0.0, got=2.0, limit=0.01, unit="mm")
    monkeypatch.setattr(develop.checks, "check_part", lambda pattern, solid: (bad,))
    done = run(*STRAIGHT)
    assert done.code == 1
    assert done.out == (
        "straight: wrote straight.svg, straight.json in out; DO NOT CUT, 1 of 1 checks do not hold: "
        "closing check: expected 0, got 2, limit 0.01 mm\n"
    )
    assert (tmp_path / "out" / "straight.json").exists()


def test_what_cannot_be_written_ends_with_3(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    (tmp_path / "out").write_text("in the way")
    done = run(*STRAIGHT)
    assert done.code == 3
    assert done.out == ""
    assert done.said == [
        "out: cannot be written: File exists; a file is in its place: give another folder, or move the file away"
    ]
    assert (tmp_path / "out").read_text() == "in the way"


def test_a_defect_is_owned_up_to_and_ends_with_70(run, monkeypatch: pytest.MonkeyPatch) -> None:  # type: ignore[no-untyped-def]
    def fails(*_: object) -> None:
        raise ZeroDivisionError("two\nlines")

    monkeypatch.setattr(develop.checks, "check_part", fails)
    done = run(*STRAIGHT)
    assert done.code == 70
    assert done.out == ""
    (message,) = done.said
    assert message.startswith(
        "This is a defect of the program, not of your input: ZeroDivisionError: two lines."
    )
    monkeypatch.setenv("DEVELOP_TRACEBACK", "1")
    with pytest.raises(ZeroDivisionError):
        main(STRAIGHT)


def test_output_that_cannot_be_written_ends_with_3(run, monkeypatch: pytest.MonkeyPatch) -> None:  # type: ignore[no-untyped-def]
    def full(*_: object, **__: object) -> None:
        raise OSError(errno.ENOSPC, "No space left on device")

    monkeypatch.setattr("develop.cli.main._let_go_of_output", lambda: None)
    monkeypatch.setattr("develop.cli.main.commands.invoke", full)
    done = run("kinds")
    assert done.code == 3
    assert done.said == ["the output could not be written: No space left on device"]


JOB = """\
[[piece]]
kind = "straight"
mark = "S1"
section = "round 400"
length = 600
[[piece]]
kind = "transition"
mark = "T1"
end_a = "round 400"
end_b = "round 300"
length = 200
"""


def test_a_job_makes_every_piece(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    (tmp_path / "hall.toml").write_text(JOB)
    done = run("job", "hall.toml", "-o", "out", "--formats", "json,svg")
    assert done.code == 0
    assert done.err == ""
    assert [line.partition(";")[0] for line in done.out.splitlines()] == [
        "S1: wrote S1.svg, S1.json in out",
        "T1: wrote T1.svg, T1.json in out",
    ]
    assert {each.name for each in (tmp_path / "out").iterdir()} == {"S1.svg", "S1.json", "T1.svg", "T1.json"}


@pytest.mark.parametrize(("place", "mark"), [("after", "N1-Header"), ("before", "N1-header")])
def test_a_piece_is_never_written_over_the_part_of_another(run, tmp_path: Path, place, mark) -> None:  # type: ignore[no-untyped-def]
    branch = """[[piece]]
kind = "branch"
mark = "N1"
header = "round 400"
header_length = 1000
branch = "round 200"
centre_to_end = 500
"""
    straight = f'[[piece]]\nkind = "straight"\nmark = "{mark}"\nsection = "round 300"\nlength = 500\n'
    text, line = (branch + straight, 10) if place == "after" else (straight + branch, 8)
    (tmp_path / "hall.toml").write_text(text)
    done = run("job", "hall.toml", "-o", "out", "--formats", "svg")
    assert done.code == 2
    (said,) = done.said
    assert said.startswith(f"hall.toml:{line}: mark: "), said
    assert f"{mark}.svg" in said or "N1-header.svg" in said
    assert said.endswith("allowed: a mark that no part of N1 has")
    assert not (tmp_path / "out").exists()


def test_a_job_with_an_error_makes_nothing(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    (tmp_path / "hall.toml").write_text(JOB + 'rotate = "x"\n[defaults]\nquantity = 0\n')
    done = run("job", "hall.toml", "-o", "out")
    assert done.code == 2
    assert done.out == ""
    assert [each.partition(";")[0] for each in done.said] == [
        'hall.toml:12: rotate: "x" is not an angle',
        "hall.toml:14: quantity: 0 is out of range",
    ]
    assert not (tmp_path / "out").exists()


def test_a_job_writes_nothing_unless_every_piece_is_good(run, tmp_path: Path, monkeypatch) -> None:  # type: ignore[no-untyped-def]
    """A piece that is refused only when it is made takes the files of those before it away again."""
    (tmp_path / "hall.toml").write_text(JOB)
    (tmp_path / "kept").mkdir()
    (tmp_path / "kept" / "S1.svg").write_bytes(b"older")

    def refuse(self: object, **_: object) -> None:
        raise Refusal(field="rotate", given="cannot be made", allowed="another")

    monkeypatch.setattr("develop.pieces.transition.Transition.build", refuse)
    for folder in ("deep/out", "kept"):
        done = run("job", "hall.toml", "-o", folder)
        assert done.code == 2
        assert done.out == ""
        assert [each.partition(";")[0] for each in done.said] == ["hall.toml:6: rotate: cannot be made"]
    assert not (tmp_path / "deep").exists()
    assert [each.read_bytes() for each in (tmp_path / "kept").iterdir()] == [b"older"]


def test_one_failed_check_of_a_job_is_the_exit_code_of_all(
    run, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:  # type: ignore[no-untyped-def]
    def check(pattern, solid):  # type: ignore[no-untyped-def]
        return (Check(name="x", expected=0.0, got=float(pattern.mark == "S1"), limit=0.5, unit=""),)

    monkeypatch.setattr(develop.checks, "check_part", check)
    (tmp_path / "hall.toml").write_text(JOB)
    done = run("job", "hall.toml", "-o", "out", "--formats", "svg")
    assert done.code == 1
    first, second = done.out.splitlines()
    assert "DO NOT CUT" in first
    assert second.endswith("the check holds")


OUTPUTS_JOB = '[job]\n{}\n[[piece]]\nkind = "straight"\nsection = "round 300"\nlength = 500\ncut_b = "slope 30 long top"\n'


def test_a_job_says_which_files_are_written_and_how_and_an_option_goes_before_it(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    said = 'formats = ["dxf", "json"]\ndxf_version = "R12"\ndxf_curves = "polylines"\ntolerance = "0.1 mm"\ntext = "none"\n'
    (tmp_path / "hall.toml").write_text(OUTPUTS_JOB.format(said))
    assert run("job", "hall.toml", "-o", "out").code == 0
    assert {each.name for each in (tmp_path / "out").iterdir()} == {"straight.dxf", "straight.json"}
    coarse = (tmp_path / "out" / "straight.dxf").read_text(encoding="cp1252")
    assert "AC1009" in coarse
    assert "\nTEXT\n" not in coarse
    assert (
        run("job", "hall.toml", "-o", "out", "--tolerance", "0.01", "--text", "all", "--formats", "dxf").code
        == 0
    )
    fine = (tmp_path / "out" / "straight.dxf").read_text(encoding="cp1252")
    assert "AC1009" in fine
    assert "\nTEXT\n" in fine
    # Chords of a tenth of the rise are √10 times as many, but for those that must be there anyhow.
    assert fine.count("VERTEX") > 2.0 * coarse.count("VERTEX") > 0


def test_a_tolerance_without_a_unit_is_in_that_of_the_job(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    for name, said in (
        ("a", 'units = "in"\ntolerance = 0.001'),
        ("b", 'units = "in"\ntolerance = "0.0254 mm"'),
    ):
        (tmp_path / "hall.toml").write_text(
            OUTPUTS_JOB.format(said).replace("500", '"500 mm"').replace("300", "300 mm")
        )
        assert run("job", "hall.toml", "-o", name, "--formats", "dxf").code == 0
    assert (tmp_path / "a" / "straight.dxf").read_bytes() == (tmp_path / "b" / "straight.dxf").read_bytes()


@pytest.mark.parametrize(
    ("said", "problem"),
    [
        ('formats = "svg,dxff"', 'hall.toml:2: formats: "dxff" is not one of them; did you mean "dxf"?'),
        ("formats = []", 'hall.toml:2: formats: "" is not one of them'),
        ("formats = [3]", 'hall.toml:2: formats: "3" is not one of them'),
        ("tolerance = 0", 'hall.toml:2: tolerance: 0 is zero; allowed: a length from 0.002 mm to 1 mm'),
        ('dxf_version = "R14"', 'hall.toml:2: dxf_version: "R14" is not one of them; did you mean "R12"?; allowed: R2010 or R12'),
        ('dxf_curves = "splines"\ndxf_version = "r12"', "hall.toml:2: dxf_curves: splines are given together with R12"),
        ("text = false", "hall.toml:2: text: false is not one of them; allowed: all or none"),
    ],
)  # fmt: skip
def test_what_a_job_cannot_ask_for(run, tmp_path: Path, said: str, problem: str) -> None:  # type: ignore[no-untyped-def]
    (tmp_path / "hall.toml").write_text(OUTPUTS_JOB.format(said))
    done = run("job", "hall.toml", "-o", "out")
    assert done.code == 2
    assert len(done.said) == 1
    assert done.said[0].startswith(problem)
    assert not (tmp_path / "out").exists()


def test_splines_and_r12_are_refused_by_their_option(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    said = "--dxf-curves: splines are given together with R12, which has none; allowed: arcs or polylines, or R2010"
    assert run(*STRAIGHT, "--dxf-curves", "splines", "--dxf-version", "R12").said == [said]
    (tmp_path / "hall.toml").write_text(OUTPUTS_JOB.format('dxf_version = "R12"'))
    assert run("job", "hall.toml", "-o", "out", "--dxf-curves", "splines").said == [said]
    assert not (tmp_path / "out").exists()


def test_text_none_leaves_the_words_out_of_svg_and_dxf_alone(run, tmp_path: Path) -> None:  # type: ignore[no-untyped-def]
    words = (*STRAIGHT[:-1], "svg,dxf,pdf")
    assert run(*words, "--text", "none").code == 0
    assert "<text" not in (tmp_path / "out" / "straight.svg").read_text()
    assert "\nTEXT\n" not in (tmp_path / "out" / "straight.dxf").read_text()
    assert "END A" in PdfReader(tmp_path / "out" / "straight.pdf").pages[0].extract_text()
    assert run(*words).code == 0
    assert "<text" in (tmp_path / "out" / "straight.svg").read_text()
    assert "\nTEXT\n" in (tmp_path / "out" / "straight.dxf").read_text()
