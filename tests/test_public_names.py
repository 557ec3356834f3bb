"""What is public: `__all__` says it, docstrings tell it, with units."""

from __future__ import annotations

import ast
import importlib
import inspect
import pkgutil
import re
from collections.abc import Iterator
from pathlib import Path
from types import ModuleType

import pytest

import develop

SOURCE = Path(develop.__file__).parent

MODULES = sorted(
    each.name
    for each in pkgutil.walk_packages(develop.__path__, "develop.")
    if each.name != "develop.__main__"  # runs the program
)

# Names of arguments and fields that are lengths, areas or angles wherever they appear.
LENGTHS = {
    "width", "height", "length", "distance", "thickness", "tolerance", "girth", "area", "least_radius", "radius",
    "arc", "half_width", "beyond", "offset", "edge_a", "edge_b", "arc_a", "arc_b", "narrowest", "paper", "lap",
}  # fmt: skip
ANGLES = {"slope", "long", "rotate", "direction", "turn", "angle"}
UNIT = re.compile(r"\bmm\b|mm²|\[1/|\[in\]|unit of|in the unit|parts of|share of")
# A turn may also be a matrix, (2, 2).
ANGLE_UNIT = re.compile(r"\brad\b|radian|degrees|\[deg\]|unit vector|\(2, 2\)")


def module(name: str) -> ModuleType:
    return importlib.import_module(name)


def tree(name: str) -> ast.Module:
    path = inspect.getsourcefile(module(name))
    assert path is not None
    return ast.parse(Path(path).read_text(encoding="utf-8"))


def defined(name: str) -> set[str]:
    """Public names that a module defines at its top: classes, functions, constants."""
    found: set[str] = set()
    for node in tree(name).body:
        if isinstance(node, ast.FunctionDef | ast.AsyncFunctionDef | ast.ClassDef):
            found.add(node.name)
        elif isinstance(node, ast.Assign):
            for target in node.targets:
                found |= {each.id for each in ast.walk(target) if isinstance(each, ast.Name)}
        elif isinstance(node, ast.AnnAssign) and isinstance(node.target, ast.Name):
            found.add(node.target.id)
    return {each for each in found if not each.startswith("_")}


def public(name: str) -> Iterator[tuple[str, object]]:
    """Public classes and functions that a module defines itself."""
    for each in module(name).__all__:
        found = getattr(module(name), each)
        if getattr(found, "__module__", None) == name:
            yield each, found


def methods(cls: type) -> Iterator[tuple[str, object]]:
    """Public methods and properties that a class defines itself."""
    for name, member in vars(cls).items():
        if name.startswith("_"):
            continue
        if isinstance(member, staticmethod | classmethod):
            yield name, member.__func__
        elif isinstance(member, property):
            yield name, member.fget
        elif inspect.isfunction(member) or type(member).__name__ == "cached_property":
            yield name, getattr(member, "func", member)


@pytest.mark.parametrize("name", [*MODULES, "develop"])
def test_all_is_what_is_defined(name: str) -> None:
    own = defined(name)
    listed = getattr(module(name), "__all__", None)
    if not own and listed is None:
        return  # a package that holds files and nothing of its own
    assert listed is not None, f"{name} has no __all__"
    assert len(set(listed)) == len(listed)
    assert own <= set(listed), f"not listed: {sorted(own - set(listed))}"
    for each in listed:
        assert hasattr(module(name), each), f"listed but not there: {each}"
        assert not each.startswith("_")
    # What is listed and not defined here comes from the package itself: a name handed on, never a library's.
    for each in set(listed) - own:
        owner = getattr(getattr(module(name), each), "__module__", "develop")
        assert owner.startswith("develop") or each == "Array"


@pytest.mark.parametrize("name", [*MODULES, "develop"])
def test_every_module_says_what_it_is(name: str) -> None:
    text = ast.get_docstring(tree(name))
    assert text
    assert text.splitlines()[0].endswith((".", ":", "?")), f"{name}: {text.splitlines()[0]}"


@pytest.mark.parametrize("name", MODULES)
def test_every_public_name_has_a_docstring(name: str) -> None:
    missing = []
    for each, found in public(name) if hasattr(module(name), "__all__") else ():
        if not (inspect.isclass(found) or inspect.isfunction(found)):
            continue
        if not (found.__doc__ or "").strip():
            missing.append(each)
        if inspect.isclass(found):
            for method, function in methods(found):
                # What a base or protocol has described need not be described again.
                if not (getattr(function, "__doc__", None) or described(found, method)):
                    missing.append(f"{each}.{method}")
    assert missing == []


def described(cls: type, method: str) -> bool:
    """Whether a base says what the method is, or the class's own text does, or that of its protocol."""
    if getattr(cls, "_is_protocol", False) and isinstance(vars(cls)[method], property):
        return True  # an attribute, told in the text of the class
    for base in cls.__mro__[1:]:
        member = vars(base).get(method)
        if member is not None and not base.__module__.startswith("develop"):
            return True  # a library's own method
        target = getattr(member, "fget", None) or getattr(member, "func", None) or member
        if target is not None and (getattr(target, "__doc__", None) or "").strip():
            return True
    if re.search(rf"\b{method}\b", cls.__doc__ or ""):
        return True
    owner = inspect.getmodule(cls)
    return any(
        inspect.isclass(other)
        and getattr(other, "_is_protocol", False)
        and method in vars(other)
        and ((getattr(vars(other)[method], "__doc__", None) or "").strip() or method in (other.__doc__ or ""))
        for scope in (owner, *(module(each) for each in _imported(owner)))
        for other in vars(scope).values()
    )


def _imported(owner: ModuleType | None) -> set[str]:
    assert owner is not None
    return {
        node.module
        for node in tree(owner.__name__).body
        if isinstance(node, ast.ImportFrom) and (node.module or "").startswith("develop.")
    } | {"develop.surfaces.sheet", "develop.pattern.drawing"}


@pytest.mark.parametrize("name", MODULES)
def test_docstrings_name_the_units(name: str) -> None:
    """A function that takes a length says mm, one that takes an angle says rad or degrees: itself, or the
    class or the module that it belongs to."""
    missing = []
    above = ast.get_docstring(tree(name)) or ""
    for each, found in public(name) if hasattr(module(name), "__all__") else ():
        if inspect.isfunction(found):
            missing += lacking(each, found, above)
        elif inspect.isclass(found):
            own = f"{above}\n{found.__doc__}\n" + "\n".join(
                base.__doc__ or "" for base in found.__mro__[1:-1]
            )
            fields = set(getattr(found, "__dataclass_fields__", {}))
            missing += wanting(each, fields, own)
            for method, function in methods(found):
                if inspect.isfunction(function):
                    missing += lacking(f"{each}.{method}", function, own + inherited(found, method))
    assert missing == []


def inherited(cls: type, method: str) -> str:
    return "\n".join((getattr(vars(base).get(method), "__doc__", None) or "") for base in cls.__mro__[1:])


def lacking(name: str, function: object, above: str) -> list[str]:
    assert inspect.isfunction(function)
    arguments = {
        each.name
        for each in inspect.signature(function).parameters.values()
        if "str" not in str(each.annotation).split(" | ") and str(each.annotation) != "str"
    }
    return wanting(name, arguments, f"{function.__doc__}\n{above}")


def wanting(name: str, arguments: set[str], text: str) -> list[str]:
    found = []
    if arguments & LENGTHS and not UNIT.search(text):
        found.append(f"{name}: mm of {sorted(arguments & LENGTHS)}")
    if arguments & ANGLES and not ANGLE_UNIT.search(text):
        found.append(f"{name}: rad of {sorted(arguments & ANGLES)}")
    return found


def test_the_walk_sees_every_file() -> None:
    files = {
        ".".join(("develop", *path.relative_to(SOURCE).with_suffix("").parts)).removesuffix(".__init__")
        for path in SOURCE.rglob("*.py")
    }
    assert files - {"develop", "develop.__main__"} == set(MODULES)


def test_dimensions_are_keyword_only() -> None:
    """Two lengths side by side can be swapped unnoticed: where there are two or more, they have names."""
    wrong = []
    for name in MODULES:
        for each, found in public(name) if hasattr(module(name), "__all__") else ():
            target = found if inspect.isfunction(found) else getattr(found, "__init__", None)
            if not inspect.isfunction(target):
                continue
            plain = [
                parameter.name
                for parameter in inspect.signature(target).parameters.values()
                if parameter.kind is parameter.POSITIONAL_OR_KEYWORD
                and parameter.name in {"width", "height", "length", "slope", "long", "thickness"}
                and not getattr(found, "__dataclass_params__", None)
            ]
            if len(plain) > 1:
                wrong.append(f"{name}.{each}: {plain}")
    assert wrong == []
