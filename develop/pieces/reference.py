"""The kinds as text: for the command line, and as the reference page of the documentation."""

from __future__ import annotations

from collections.abc import Sequence

from develop.pieces import KINDS, kind_of
from develop.pieces.fields import Declared, Piece, fields_of
from develop.wording import listed

__all__ = ["command_line", "job_text", "kind_text", "kinds_page", "kinds_text"]


def command_line(kind: type[Piece]) -> str:
    """The kind's example as a command."""
    words = [f"develop {kind.kind}"]
    for name, value in kind.example.items():
        text = str(value)
        quoted = f'"{text}"' if " " in text else text
        words.append(f"--{name.replace('_', '-')} {quoted}")
    return " ".join([*words, "-o out"])


def job_text(kind: type[Piece]) -> str:
    """The kind's example as a piece of a job file."""
    lines = ["[[piece]]", f'kind = "{kind.kind}"']
    for name, value in kind.example.items():
        lines.append(f'{name} = "{value}"' if isinstance(value, str) else f"{name} = {value}")
    return "\n".join(lines)


def kinds_text() -> str:
    """The kinds and what they are."""
    width = max(map(len, KINDS))
    lines = [f"  {name.ljust(width)}  {summary}" for name, (_, _, summary) in KINDS.items()]
    return "\n".join(["Kinds of piece:", *lines, "", "develop kinds KIND shows the fields of one."])


def _default(field: Declared) -> str:
    return "needed" if field.required else field.default_text or "none"


def kind_text(kind: type[Piece]) -> str:
    """A kind's fields, units, defaults and an example, for the terminal."""
    lines = [f"{kind.kind}: {KINDS[kind.kind][2]}", ""]
    for title, own in (("Its own fields", True), ("Fields it shares with other kinds", False)):
        lines.append(f"{title}:")
        for each in (each for each in fields_of(kind) if each.own is own):
            lines.append(f"  {each.name}  [{_default(each)}]  {each.help}")
            lines.append(f"      {_allowed(each)}")
        lines.append("")
    lines += ["As a command:", f"  {command_line(kind)}", "", "In a job file:"]
    lines += [f"  {line}" for line in job_text(kind).splitlines()]
    return "\n".join(lines)


def _allowed(field: Declared) -> str:
    unit = " (a bare number is in the job's unit, else mm)" if field.type.unit == "mm" else ""
    other = f"; not together with {listed(field.not_with)}" if field.not_with else ""
    only = f"; only together with {field.needs}" if field.needs else ""
    return f"{field.type.allowed}{unit}{other}{only}"


def kinds_page() -> str:
    """The reference page, Markdown."""
    parts = [
        "# Kinds of piece",
        "",
        "Made from the declarations of the kinds; `develop kinds KIND` shows the same.",
        "",
        "A field is an option of the command line with `--` in front and `-` for `_`, and a key of a",
        "`[[piece]]` in a job file. Bare lengths are in the job's unit, mm unless it says another.",
        "Directions, right and up are read facing end B, that is standing in front of it and looking in,",
        "with end A behind it: degrees anticlockwise from right. See [directions.md](directions.md).",
    ]
    for name in KINDS:
        kind = kind_of(name)
        fields = fields_of(kind)
        parts += ["", f"## {name}", "", f"{KINDS[name][2][0].upper()}{KINDS[name][2][1:]}.", ""]
        parts += [f"![The example below, drawn](kinds/{name}.png)", ""]
        parts += _rows([each for each in fields if each.own])
        parts += ["", "Shared with other kinds:", ""]
        parts += _rows([each for each in fields if not each.own])
        parts += ["", "```sh", command_line(kind), "```", "", "```toml", job_text(kind), "```"]
    return "\n".join(parts) + "\n"


def _rows(fields: Sequence[Declared]) -> list[str]:
    rows = ["| field | default | what it is | allowed |", "| --- | --- | --- | --- |"]
    for each in fields:
        cells = (f"`{each.name}`", _default(each), each.help, _allowed(each))
        rows.append("| " + " | ".join(cell.replace("|", "\\|") for cell in cells) + " |")
    return rows
