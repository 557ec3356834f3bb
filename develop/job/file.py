"""The job file: TOML with `[job]`, `[defaults]` and one `[[piece]]` for each piece.

Everything that is wrong is found in one reading, and each problem says the file and the line.
"""

from __future__ import annotations

from collections.abc import Callable, Mapping
from dataclasses import dataclass, field, replace

from develop.errors import InputError, Problem
from develop.job.lines import Path, lines_of
from develop.job.output_fields import FORMATS, FORMATS_FIELD, OUTPUT_FIELDS, Outputs, outputs_of
from develop.job.writing import file_key
from develop.pieces import KINDS, kind_of
from develop.pieces.field_types import Choice, Text
from develop.pieces.fields import Declared, Piece, fields_of, read_fields, read_piece
from develop.tables.rules import Rules, read_tables, shipped
from develop.units import UNITS
from develop.wording import listed, near_miss, shown

__all__ = ["Job", "Placed", "Places", "read_job", "read_rules", "with_rules"]

_LARGEST = 16_000_000
_WHAT = "a job file"
_RULES = "a file of rules"

_UNITS = Choice(tuple(UNITS))
_JOB = (
    Declared(name="name", type=Text(), help="name of the job", required=False, default=""),
    Declared(
        name="units",
        type=_UNITS,
        help="unit of lengths given as bare numbers",
        required=False,
        default="mm",
    ),
    Declared(
        name="rules",
        type=Text(),
        help="a file of the shop's own rules for seams and edges, from the folder of the job file",
        required=False,
        default="",
    ),
    FORMATS_FIELD,
    *OUTPUT_FIELDS,
)
_TABLES = ("job", "defaults", "piece")
# A mark is one piece's own.
_NEVER_DEFAULTS = ("mark",)


@dataclass(frozen=True)
class Places:
    """Where things stand: `hall.toml:12` for a path of keys, or for what holds it."""

    file: str
    lines: Mapping[Path, int]

    def of(self, *path: str | int) -> str:
        """The place of the path, or of the nearest above it that has a line."""
        for size in range(len(path), 0, -1):
            line = self.lines.get(path[:size])
            if line is not None:
                return f"{self.file}:{line}"
        return self.file


@dataclass(frozen=True)
class Placed:
    """A piece, and where in the file each of its fields was given."""

    piece: Piece
    place: Callable[[str], str]


@dataclass(frozen=True)
class Job:
    """A job as read: its name, the unit of its bare lengths, its pieces in the file's order, and which
    files are written of them, and how."""

    name: str
    units: str
    pieces: tuple[Placed, ...]
    formats: tuple[str, ...] = FORMATS
    outputs: Outputs = field(default_factory=Outputs)


def read_job(file: str) -> Job:
    """The job in a file, every piece of it known to have a surface.

    Raises InputError with every problem, each at its line.
    """
    text = _text_of(file)
    data, places = _parsed(file, text)
    problems: list[Problem] = []
    for name in data:
        if name not in _TABLES:
            hint = near_miss(name, _TABLES)
            given = f"no such table{hint}"
            problems.append(Problem(name, given, "[job], [defaults] and [[piece]]", places.of(name)))
    own = _job(data, places, problems)
    unit = str(own["units"])
    rules = _shop_rules(str(own["rules"]), places, problems)
    defaults = _table(data, "defaults", places, problems)
    raw = _pieces(data, places, problems)
    _check_defaults(defaults, unit, places, problems)
    read: list[Placed] = []
    for index, table in enumerate(raw):
        if table is not None:
            piece = _piece(index, table, defaults, unit, places, problems, rules)
            if piece is not None:
                read.append(piece)
    _check_marks(raw, places, problems)
    if problems:
        raise InputError(_once(problems))
    formats = own["formats"]
    assert isinstance(formats, tuple)
    return Job(
        name=str(own["name"]), units=unit, pieces=tuple(read), formats=formats, outputs=outputs_of(own)
    )


def _text_of(file: str, what: str = _WHAT) -> str:
    """The text of a TOML file. Raises InputError for a file that is no text or cannot be read."""
    from os import strerror

    try:
        with open(file, "rb") as opened:
            data = opened.read(_LARGEST + 1)
    except IsADirectoryError:
        raise InputError(Problem("", "is a folder", what, file)) from None
    except OSError as error:
        reason = strerror(error.errno) if error.errno else str(error)
        raise InputError(Problem("", f"cannot be read: {reason}", what, file)) from None
    if len(data) > _LARGEST:
        raise InputError(Problem("", f"is too large for {what}", "at most 16 MB", file))
    try:
        # Some editors put a byte order mark in front.
        return data.decode("utf-8-sig").replace("\r\n", "\n")
    except UnicodeDecodeError as error:
        place = f"{file}:{data[: error.start].count(bytes((10,))) + 1}"
        raise InputError(
            Problem(
                "", f"the byte 0x{data[error.start]:02x} is not UTF-8 text", "a file saved as UTF-8", place
            )
        ) from None


def _parsed(file: str, text: str, what: str = _WHAT) -> tuple[dict[str, object], Places]:
    """The tables of a TOML text, and where each key stands. Raises InputError with the line."""
    import re
    import tomllib

    try:
        return tomllib.loads(text), Places(file, lines_of(text))
    except tomllib.TOMLDecodeError as error:
        message = str(error)
        found = re.search(r" \(at line (\d+), column \d+\)$", message)
        line = int(found[1]) if found else text.rstrip().count("\n") + 1
        reason = message[: found.start()] if found else message.removesuffix(" (at end of document)")
        problem = Problem("", f"not a TOML file: {reason}", "key = value, text in quotes", f"{file}:{line}")
    except RecursionError:
        problem = Problem("", "brackets within brackets too deep to read", what, file)
    except ValueError as error:  # a whole number of thousands of digits
        problem = Problem("", f"not a TOML file: {error}", what, file)
    raise InputError(problem)


def read_rules(file: str) -> Rules:
    """The rules for seams and edges that come with the program, and over them those of a shop's own file.

    The file has tables `[seams.NAME]` and `[edges.NAME]` of the form of `seams.toml` and `edges.toml`; a
    rule of the same name is replaced whole. Raises InputError with every problem, each at its line.
    """
    data, places = _parsed(file, _text_of(file, _RULES), _RULES)
    return read_tables(data, base=shipped(), place=places.of)


def with_rules(piece: Piece, rules: Rules | None) -> Piece:
    """The piece with the shop's own rules, if its kind has a use for them."""
    if rules is None or not hasattr(piece, "rules"):
        return piece
    return replace(piece, rules=rules)  # type: ignore[type-var]


def _table(
    data: Mapping[str, object], name: str, places: Places, problems: list[Problem]
) -> dict[str, object]:
    table = data.get(name, {})
    if isinstance(table, dict):
        return table
    problems.append(Problem(name, f"{shown(table)} is not a table", f"[{name}]", places.of(name)))
    return {}


def _shop_rules(file: str, places: Places, problems: list[Problem]) -> Rules | None:
    """The shop's own rules, from the folder of the job file."""
    from os.path import dirname, join

    if not file:
        return None
    try:
        return read_rules(join(dirname(places.file), file))
    except InputError as error:
        # What is no line of the rules is a fault of the job's.
        lost = places.of("job", "rules")
        problems += [
            each if ":" in each.place.rpartition("/")[2] else replace(each, field="rules", place=lost)
            for each in error.problems
        ]
        return None


def _job(data: Mapping[str, object], places: Places, problems: list[Problem]) -> dict[str, object]:
    """The values of [job] by name; what is wrong is as if it were not given."""
    given = _table(data, "job", places, problems)
    try:
        unit = str(_UNITS.read(given.get("units", "mm"), unit=""))
    except InputError:
        unit = "mm"  # the units are one of the problems then
    if isinstance(given.get("printer"), str) and given["printer"]:
        from os.path import dirname, join

        # A path in a job file goes from the folder of that file.
        given = {**given, "printer": join(dirname(places.file), str(given["printer"]))}
    values, found = read_fields(_JOB, given, unit=unit, where="[job]")
    values = {each.name: each.default for each in _JOB} | values
    try:
        outputs_of(values)
    except InputError as error:
        found += error.problems
    problems += [problem.at(places.of("job", problem.field)) for problem in found]
    return values


def _pieces(
    data: Mapping[str, object], places: Places, problems: list[Problem]
) -> list[dict[str, object] | None]:
    """The raw tables of the pieces; None for one that is no table."""
    array = data.get("piece", [])
    if not isinstance(array, list):
        given = "[piece]" if isinstance(array, dict) else shown(array)
        problems.append(
            Problem(
                "piece", f"{given} is not a list of pieces", "[[piece]] with two brackets", places.of("piece")
            )
        )
        return []
    if not array and not problems:
        problems.append(Problem("piece", "not given", "at least one [[piece]]", places.file))
    raw: list[dict[str, object] | None] = []
    for index, each in enumerate(array):
        if isinstance(each, dict):
            raw.append(each)
        else:
            raw.append(None)
            given = f"{shown(each)} is not a piece"
            problems.append(Problem("piece", given, "[[piece]]", places.of("piece", index)))
    return raw


def _check_defaults(
    defaults: Mapping[str, object], unit: str, places: Places, problems: list[Problem]
) -> None:
    """Each default must be a field of some kind, and good for every kind that has it."""
    kinds = [fields_of(kind_of(name)) for name in KINDS]
    known = {each.name for fields in kinds for each in fields} - set(_NEVER_DEFAULTS)
    for name, given in defaults.items():
        place = places.of("defaults", name)
        if name in _NEVER_DEFAULTS:
            problems.append(Problem(name, "a default would be the same for all", "in each [[piece]]", place))
        elif name not in known:
            hint = near_miss(name, known)
            problems.append(Problem(name, f"no kind has such a field{hint}", ", ".join(sorted(known)), place))
        else:
            for each in (each for fields in kinds for each in fields if each.name == name):
                _, found = read_fields((each,), {name: given}, unit=unit)
                problems += _at(found, places, "defaults")


def _at(found: list[Problem], places: Places, *table: str | int) -> list[Problem]:
    return [problem.at(places.of(*table, *problem.field.split("."))) for problem in found]


def _piece(
    index: int,
    given: dict[str, object],
    defaults: Mapping[str, object],
    unit: str,
    places: Places,
    problems: list[Problem],
    rules: Rules | None,
) -> Placed | None:
    name = given.get("kind")
    if not isinstance(name, str) or name not in KINDS:
        hint = near_miss(name, KINDS) if isinstance(name, str) else ""
        wrong = f"{shown(name)} is not a kind{hint}" if "kind" in given else "not given"
        problems.append(Problem("kind", wrong, listed(KINDS), places.of("piece", index, "kind")))
        return None
    kind = kind_of(name)
    own = {key: value for key, value in given.items() if key != "kind"}
    # What a piece says itself goes before a default, also where the two exclude each other.
    settled = {*own, *_NEVER_DEFAULTS}
    for each in fields_of(kind):
        for other in each.not_with:
            settled |= {other} if each.name in own else set()
            settled |= {each.name} if other in own else set()
    shared = {
        each.name: defaults[each.name]
        for each in fields_of(kind)
        if each.name in defaults and each.name not in settled
    }

    def place(field: str) -> str:
        path = field.split(".")
        return places.of("defaults", *path) if path[0] in shared else places.of("piece", index, *path)

    piece, found = read_piece(kind, {**shared, **own}, unit=unit, shared=shared)
    problems += [each.at(place(each.field)) for each in found]
    if piece is None:
        return None
    piece = with_rules(piece, rules)
    try:
        piece.check()
    except InputError as error:
        problems += [each.at(place(each.field)) for each in error.problems]
        return None
    return Placed(piece, place)


def _check_marks(raw: list[dict[str, object] | None], places: Places, problems: list[Problem]) -> None:
    """Two pieces of one mark would write the same files; on some systems capitals do not tell names apart.

    As given, so that a piece with other mistakes is looked at too.
    """
    first: dict[str, int] = {}
    faulty = {problem.place for problem in problems if problem.field == "mark"}
    for index, given in enumerate(raw):
        if places.of("piece", index, "mark") in faulty:
            continue
        mark = (given or {}).get("mark", (given or {}).get("kind"))
        if given is None or not isinstance(mark, str) or ("mark" not in given and mark not in KINDS):
            continue
        mark = mark.strip()
        key = file_key(mark)
        if key not in first:
            first[key] = index
            continue
        how = "is" if "mark" in given else "is by default"
        where = places.of("piece", first[key], "mark")
        problems.append(
            Problem(
                "mark",
                f"{shown(mark)} {how} the mark of this piece, and of the one at {where}",
                "a mark of its own for each piece, such as A1 (capitals do not count)",
                places.of("piece", index, "mark"),
            )
        )


def _once(problems: list[Problem]) -> list[Problem]:
    """Each problem once, in the order of the lines."""
    return sorted(dict.fromkeys(problems), key=lambda each: _line(each.place))


def _line(place: str) -> int:
    _, _, line = place.rpartition(":")
    return int(line) if line.isdigit() else 0
