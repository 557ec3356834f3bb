"""The layers: what may import what. The imports are read from the source, also those inside functions.

A file imports from layers before its own in `LAYERS`, or from its own without a circle. The code that
checks never reaches the code that unrolls, not even through others, and needs numpy only.
"""

from __future__ import annotations

import ast
import json
import subprocess
import sys
from collections.abc import Iterator
from functools import cache
from importlib.metadata import packages_distributions
from pathlib import Path

import pytest

PACKAGE = Path(__file__).parent.parent / "develop"

# Each file belongs to the first of these that its name starts with.
LAYERS = (
    ("develop.errors", "develop.units", "develop.wording"),
    ("develop.tables",),
    ("develop.quadrature",),
    ("develop.sections",),
    ("develop.solid",),
    ("develop.surfaces",),
    ("develop.pattern",),
    ("develop.pieces",),
    ("develop.checks",),
    ("develop.outputs",),
    ("develop.shop",),
    ("develop.job",),
    ("develop.cli", "develop.__main__"),
)


@cache
def modules() -> dict[str, Path]:
    """Every module of the package by name; a package by its own."""
    found = {}
    for path in sorted(PACKAGE.rglob("*.py")):
        parts = [PACKAGE.name, *path.relative_to(PACKAGE).with_suffix("").parts]
        found[".".join(parts[:-1] if parts[-1] == "__init__" else parts)] = path
    return found


def layer(module: str) -> int:
    for number, names in enumerate(LAYERS):
        if any(module == name or module.startswith(name + ".") for name in names):
            return number
    raise AssertionError(f"{module} belongs to no layer")


def statements(tree: ast.AST, *, typing: bool) -> Iterator[ast.Import | ast.ImportFrom | ast.Call]:
    """Import statements and calls of import_module, anywhere; those for types only if asked for."""
    for node in ast.iter_child_nodes(tree):
        if isinstance(node, ast.If) and ast.unparse(node.test) in ("TYPE_CHECKING", "typing.TYPE_CHECKING"):
            if typing:
                yield from statements(node, typing=typing)
            for other in node.orelse:
                yield from statements(other, typing=typing)
            continue
        if isinstance(node, ast.Import | ast.ImportFrom):
            yield node
        if isinstance(node, ast.Call) and ast.unparse(node.func).endswith("import_module"):
            yield node
        yield from statements(node, typing=typing)


@cache
def imports(module: str, *, typing: bool = True) -> frozenset[str]:
    """The package's own modules that a module names in its imports."""
    known = modules()
    found: set[str] = set()
    for node in statements(ast.parse(known[module].read_text(encoding="utf-8")), typing=typing):
        if isinstance(node, ast.Call):
            found |= by_name(node)
        elif isinstance(node, ast.Import):
            found |= {alias.name for alias in node.names}
        else:
            assert node.level == 0, f"{module}: a relative import"
            base = node.module or ""
            # `from develop.solid import Frame` or `from develop import units`.
            found |= {
                f"{base}.{alias.name}" if f"{base}.{alias.name}" in known else base for alias in node.names
            }
    return frozenset(name for name in found if name in known and name != module)


def by_name(call: ast.Call) -> set[str]:
    """Modules that a call of import_module may mean: all that fit what is fixed of the name."""
    (name,) = call.args
    if isinstance(name, ast.Constant):
        return {str(name.value)}
    assert isinstance(name, ast.JoinedStr), "a module's name must be written out or begin with a fixed part"
    first = name.values[0]
    assert isinstance(first, ast.Constant)
    return {each for each in modules() if each.startswith(str(first.value))}


def parents(module: str) -> set[str]:
    """The packages that are imported on the way to a module."""
    parts = module.split(".")
    return {".".join(parts[:n]) for n in range(1, len(parts))}


def reached(start: set[str], *, typing: bool) -> set[str]:
    """All modules that these lead to, through others and through the packages on the way."""
    found: set[str] = set()
    ahead = set(start)
    while ahead:
        module = ahead.pop()
        found.add(module)
        ahead |= (imports(module, typing=typing) | parents(module)) - found
    return found


def test_every_module_is_seen_and_has_a_layer() -> None:
    assert "develop.checks.fold" in modules()
    assert "develop.surfaces.band" in modules()
    for module in modules():
        if module != "develop":
            layer(module)
    assert imports("develop") == frozenset()


def test_the_reader_of_imports_sees_them_all() -> None:
    assert "develop.surfaces.band" in imports("develop.pieces.transition")  # inside a function
    assert "develop.surfaces.band" not in imports("develop.checks.check")
    assert "develop.pieces.fields" in imports("develop.pieces")  # for types only
    assert "develop.pieces.straight" in imports("develop.pieces")  # by its name, when asked for
    assert "develop.pieces.fields" not in imports("develop.pieces.built", typing=False)


def test_files_import_from_layers_before_their_own() -> None:
    wrong = [
        f"{module} imports {other}"
        for module in modules()
        if module != "develop"
        for other in sorted(imports(module))
        if other != "develop" and layer(other) > layer(module)
    ]
    assert wrong == []


def test_no_circles() -> None:
    """When the modules run; a package's list of its own kinds, imported by name, is no circle."""
    state: dict[str, int] = {}
    circles: list[str] = []

    def visit(module: str, trail: tuple[str, ...]) -> None:
        if state.get(module) == 2:
            return
        if state.get(module) == 1:
            circles.append(" > ".join((*trail[trail.index(module) :], module)))
            return
        state[module] = 1
        for other in sorted(_runtime(module)):
            visit(other, (*trail, module))
        state[module] = 2

    for module in modules():
        visit(module, ())
    assert circles == []


def _runtime(module: str) -> frozenset[str]:
    named = {
        name
        for node in ast.walk(ast.parse(modules()[module].read_text(encoding="utf-8")))
        if isinstance(node, ast.Call) and ast.unparse(node.func).endswith("import_module")
        for name in by_name(node)
    }
    return imports(module, typing=False) - named


def test_checks_never_reach_what_unrolls() -> None:
    """Not for types, not inside functions, not through others."""
    start = {module for module in modules() if module.startswith("develop.checks")}
    seen = reached(start, typing=True)
    assert {each for each in seen if layer_of(each) == "develop.surfaces"} == set()
    assert {each for each in seen if layer_of(each) == "develop.pieces"} == set()
    # What they stand on, so that the test cannot pass by seeing nothing.
    assert {"develop.pattern.pattern", "develop.solid.solid", "develop.sections.section"} <= seen


def test_the_solid_and_the_sections_never_reach_what_unrolls() -> None:
    """The checks' own routes: the finished piece is found without the surfaces, and their panels aside."""
    start = {module for module in modules() if module.startswith(("develop.solid", "develop.sections"))}
    assert {each for each in reached(start, typing=True) if layer_of(each) == "develop.surfaces"} == set()


def layer_of(module: str) -> str:
    return "develop" if module == "develop" else LAYERS[layer(module)][0]


def loaded(code: str) -> set[str]:
    """Distributions, other than the standard library, that are loaded once this has run; and modules of our own."""
    script = f"{code}\nimport sys, json\nprint(json.dumps(sorted(sys.modules)))"
    done = subprocess.run(
        [sys.executable, "-c", script], capture_output=True, text=True, check=True, cwd=PACKAGE.parent
    )
    names = set(json.loads(done.stdout.splitlines()[-1]))
    before = subprocess.run(
        [sys.executable, "-c", "import sys, json; print(json.dumps(sorted(sys.modules)))"],
        capture_output=True,
        text=True,
        check=True,
        cwd=PACKAGE.parent,
    )
    names -= set(json.loads(before.stdout))
    owners = packages_distributions()
    found = {owner for name in names for owner in owners.get(name.split(".")[0], ())}
    return {owner.lower() for owner in found - {PACKAGE.name}} | {
        name for name in names if name.startswith("develop.")
    }


def third_party(names: set[str]) -> set[str]:
    return {name for name in names if not name.startswith("develop.")}


@pytest.mark.parametrize(
    ("code", "allowed"),
    [
        ("import develop.checks, develop.checks.check, develop.checks.fold", {"numpy"}),
        ("import develop.pieces.assemble, develop.surfaces.band, develop.surfaces.cylinder", {"numpy"}),
        ("import develop.cli.main", {"click"}),
        ("import develop.pieces, develop.sections, develop.sections.text", set()),
        (
            "from develop.pieces import kind_of\nfrom develop.pieces.fields import fields_of\n"
            "[fields_of(kind_of(name)) for name in ('straight', 'transition', 'marking-band')]",
            set(),
        ),
    ],
    ids=["checks", "geometry", "help", "texts", "declarations"],
)
def test_at_run_time_no_more_is_loaded_than_is_needed(code: str, allowed: set[str]) -> None:
    assert third_party(loaded(code)) <= allowed


def test_running_every_check_needs_numpy_only() -> None:
    """A whole piece, built and checked: whatever is imported late is imported by then."""
    code = (
        "from develop.pieces.transition import Transition\n"
        "from develop.sections.text import parse_section\n"
        "from develop.checks import check\n"
        "piece = Transition(end_a=parse_section('round 400'), end_b=parse_section('ellipse 300 x 200'), length=300)\n"
        "built = piece.build()\n"
        "assert all(each.holds for each in check(built.patterns[0], built.solid))"
    )
    seen = loaded(code)
    assert third_party(seen) == {"numpy"}
    assert "develop.checks.fold" in seen


def test_one_transition_to_svg_pdf_and_record_leaves_the_heavy_libraries_alone(tmp_path: Path) -> None:
    code = (
        "from develop.cli.main import main\n"
        "code = main(['transition', '--end-a', 'ellipse 600 x 300', '--end-b', 'round 400', '--length', '450',\n"
        f"             '--formats', 'svg,pdf,json', '-o', {str(tmp_path)!r}])\n"
        "assert code == 0, code"
    )
    seen = third_party(loaded(code))
    assert {"numpy", "click", "reportlab"} <= seen
    assert seen.isdisjoint({"scipy", "matplotlib", "ezdxf", "shapely", "trimesh", "pydantic"})
    assert sorted(each.suffix for each in tmp_path.iterdir()) == [".json", ".pdf", ".svg"]
