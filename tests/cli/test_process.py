"""The command line as a process: what it imports, how it ends, and never a traceback."""

from __future__ import annotations

import json
import os
import signal
import subprocess
import sys
import time
from pathlib import Path

import pytest

HEAVY = {
    "numpy",
    "scipy",
    "matplotlib",
    "ezdxf",
    "reportlab",
    "shapely",
    "trimesh",
    "tomllib",
    "json",
    "fractions",
    "dataclasses",
}


def run(
    *words: str | bytes, cwd: Path | None = None, **environment: str
) -> subprocess.CompletedProcess[bytes]:
    return subprocess.run(
        [sys.executable, "-m", "develop", *words],
        cwd=cwd,
        env={**os.environ, **environment, "PYTHONPATH": str(Path(__file__).parents[2])},
        capture_output=True,
        timeout=60,
        check=False,
    )


def modules(code: str) -> set[str]:
    """The modules that are loaded when the code has run."""
    code += "\nimport sys, json; print(json.dumps(sorted(sys.modules)))"
    done = subprocess.run([sys.executable, "-c", code], capture_output=True, timeout=60, check=True)
    names: list[str] = json.loads(done.stdout.splitlines()[-1])
    return set(names)


def test_help_imports_little_more_than_click() -> None:
    click = modules("import click, gettext, shutil")
    ours = modules("from develop.cli.main import main; assert main(['--help']) == 0")
    own = {name for name in ours if name.split(".")[0] == "develop"}
    assert own == {"develop", "develop.cli", "develop.cli.main", "develop.pieces"}
    assert not {name.split(".")[0] for name in ours - click} & HEAVY


@pytest.mark.parametrize("words", [["transition", "--help"], ["kinds"], ["kinds", "straight"], ["straight"]])
def test_what_computes_nothing_imports_no_arrays(words: list[str]) -> None:
    ours = modules(f"from develop.cli.main import main; main({words!r})")
    assert not {name.split(".")[0] for name in ours} & {"numpy", "matplotlib", "reportlab", "scipy", "ezdxf"}


def test_one_transition_to_svg_pdf_and_record_imports_no_more_than_it_needs(tmp_path: Path) -> None:
    words = [
        "transition", "--end-a", "ellipse 600 x 300", "--end-b", "round 400", "--length", "450", "-o", str(tmp_path),
        "--formats", "svg,pdf,json",
    ]  # fmt: skip
    ours = modules(f"from develop.cli.main import main; assert main({words!r}) == 0")
    assert not {name.split(".")[0] for name in ours} & {
        "scipy",
        "matplotlib",
        "ezdxf",
        "shapely",
        "trimesh",
        "pydantic",
    }


NASTY: list[list[str | bytes]] = [
    ["straight", "--section", "round 400", "--length", length, "-o", "out", "--formats", "svg"]
    for length in (
        "0",
        "-1",
        "nan",
        "inf",
        "1e308",
        "1e999",
        "9" * 5000,
        "",
        "\u0663",
        b"\xff\xfe",
        "1/0",
        "0x1",
        "1_0",
    )
]
NASTY += [
    ["straight", "--section", section, "--length", "600", "-o", "out", "--formats", "svg"]
    for section in (
        "round",
        "round nan",
        "ellipse 1e-9 x 1",
        "pipe DN " + "9" * 5000,
        "\x1b[31m",
        b"\xff",
        "x" * 99999,
    )
]
NASTY += [
    ["straight", "--section", "round 400", "--length", "600", "--mark", mark, "-o", "out", "--formats", "svg"]
    for mark in ("", ".", "..", "/", "a/b", "../../a", "a\nb", "-o", "CON", "é" * 300, b"\xff", " ")
]
NASTY += [
    [],
    ["--"],
    ["-"],
    [b"\xff"],
    ["straight"],
    ["straight", "--", "-o"],
    ["straight", "-o"],
    ["straight", "="],
    ["straight", "--=5"],
    ["straight", "--section", "round 400", "--length", "600", "-o", "/dev/null/x", "--formats", "svg"],
    ["straight", "--section", "round 400", "--length", "600", "-o", "/proc", "--formats", "svg"],
    ["straight", "--section", "round 400", "--length", "600", "-o", "x" * 300, "--formats", "svg"],
    ["straight", "--section", "round 400", "--length", "600", "-o", "", "--formats", ""],
    [
        "straight",
        "--section",
        "round 400",
        "--length",
        "0.1",
        "--thickness",
        "500",
        "--sizes",
        "outside",
        "-o",
        "out",
    ],
    [
        "transition",
        "--end-a",
        "round 400",
        "--end-b",
        "round 400",
        "--length",
        "1",
        "--offset",
        "1e9,0",
        "-o",
        "out",
    ],
    ["girth", "round 400", "--divisions", "1e999"],
    ["girth", "round 400", "--divisions", "-5"],
    ["job", "/", "-o", "out"],
    ["job", "/dev/null", "-o", "out"],
    ["job", "/proc/self/mem", "-o", "out"],
    ["job", b"\xff.toml", "-o", "out"],
    ["kinds", "x", "y", "z"],
]


@pytest.mark.parametrize("words", NASTY, ids=range(len(NASTY)))
def test_nasty_input_has_clear_messages_and_never_a_traceback(
    tmp_path: Path, words: list[str | bytes]
) -> None:
    done = run(*words, cwd=tmp_path)
    assert done.returncode in (2, 3)
    assert done.stdout == b""
    said = done.stderr.decode("utf-8")
    assert "Traceback" not in said
    assert "defect" not in said
    assert said.strip()
    assert not any(each.is_file() for each in tmp_path.rglob("*"))
    if words not in ([], ["--"]):  # these show the help
        assert all(len(line) < 700 for line in said.splitlines())
        assert done.returncode == 3 or all("; allowed: " in line for line in said.splitlines())


def test_messages_can_be_written_in_any_encoding() -> None:
    done = run("girth", "ellipse 600 × 300", "--divisions", "1", PYTHONIOENCODING="cp1251")
    assert done.returncode == 0
    assert b"mm\\xb2" in done.stdout  # Cyrillic code page: it has no raised two
    done = run("girth", "ellipse 600 × ×", PYTHONIOENCODING="cp1251")
    assert done.returncode == 2


def test_when_the_reader_goes_away_nothing_is_said() -> None:
    read, write = os.pipe()
    os.close(read)
    done = subprocess.run(
        [sys.executable, "-m", "develop", "girth", "round 400", "--divisions", "10000"],
        stdout=write, stderr=subprocess.PIPE, timeout=60, check=False,
    )  # fmt: skip
    os.close(write)
    assert done.stderr == b""
    assert done.returncode == 141


def test_a_full_disk_under_the_output_ends_with_3() -> None:
    with Path("/dev/full").open("wb") as full:
        done = subprocess.run(
            [sys.executable, "-m", "develop", "girth", "round 400"],
            stdout=full, stderr=subprocess.PIPE, timeout=60, check=False,
        )  # fmt: skip
    assert done.stderr == b"the output could not be written: No space left on device\n"
    assert done.returncode == 3


def test_stopped_by_the_user(tmp_path: Path) -> None:
    os.mkfifo(tmp_path / "hall.toml")
    process = subprocess.Popen(
        [sys.executable, "-m", "develop", "job", str(tmp_path / "hall.toml"), "-o", str(tmp_path / "out")],
        stdout=subprocess.PIPE, stderr=subprocess.PIPE,
    )  # fmt: skip
    # Opening the other end waits until the program has opened this one, so it is reading when it is stopped.
    with (tmp_path / "hall.toml").open("wb"):
        time.sleep(0.1)
        process.send_signal(signal.SIGINT)
        out, err = process.communicate(timeout=60)
    assert process.returncode == 130
    assert out == b""
    assert err == b"stopped\n"
    assert not (tmp_path / "out").exists()


def test_the_shell_can_ask_for_options() -> None:
    done = run(_DEVELOP_COMPLETE="bash_complete", COMP_WORDS="develop transition --end", COMP_CWORD="2")
    assert done.stdout.decode().split() == ["plain,--end-a", "plain,--end-b"]
