"""Sheet and plate metals, from `materials.toml`, which says where each density comes from."""

from __future__ import annotations

import re
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cache
from types import MappingProxyType

__all__ = ["Material", "find_materials", "material_of", "material_words", "materials"]


# [mm] Published bend radii begin above this.
_BENDS_FROM = 1.0


@dataclass(frozen=True)
class Material:
    """One material.

    family: its own name, then those it is a grade or a coating of. density [kg/m³].
    scribing: `yes`, `cut lines` or `no`. marking: what the sheets say of it, empty where nothing is special.
    source: of the density. bend_radii: (thickness up to which, least inside radius) [mm], where a source
    gives them, from more than 1 mm thickness up; bend_source: that source.
    """

    name: str
    family: tuple[str, ...]
    words: tuple[str, ...]
    density: float
    source: str
    scribing: str
    marking: str
    bend_radii: tuple[tuple[float, float], ...] = ()
    bend_source: str = ""

    def least_bend_radius(self, *, thickness: float) -> float | None:
        """Published least inside radius [mm] of a bend in sheet of a thickness [mm]; None where not known.

        Guidance only: the maker's own figure for the sheet at hand goes before it.

        >>> materials()["steel"].least_bend_radius(thickness=6.0)
        10.0
        """
        if thickness <= _BENDS_FROM:
            return None
        return next((radius for most, radius in self.bend_radii if thickness <= most), None)


@cache
def materials() -> Mapping[str, Material]:
    """Every material by name, in the order of the file.

    >>> materials()["stainless-316"].density, materials()["stainless-316"].family
    (8000.0, ('stainless-316', 'stainless', 'steel'))
    """
    import tomllib
    from os.path import dirname, join

    with open(join(dirname(__file__), "materials.toml"), "rb") as file:
        data = tomllib.load(file)
    found = {}
    for name, table in data.items():
        family, above = [name], table.get("of")
        while above:
            family.append(above)
            above = data[above].get("of")
        found[name] = Material(
            name=name,
            family=tuple(family),
            words=tuple(table["words"]),
            density=float(table["density"]),
            source=table["source"],
            scribing=table["scribing"],
            marking=table["marking"],
            bend_radii=tuple((float(most), float(radius)) for most, radius in table.get("bend_radii", ())),
            bend_source=table.get("bend_source", ""),
        )
    return MappingProxyType(found)


@cache
def _by_word() -> tuple[Mapping[str, str], re.Pattern[str]]:
    """Names by word, and a pattern that finds the longest word first."""
    names = {_plain(word): each.name for each in materials().values() for word in each.words}
    parts = "|".join(re.escape(word) for word in sorted(names, key=len, reverse=True))
    return names, re.compile(rf"(?<![\w.]){'(?:' + parts + ')'}(?![\w])")


def _plain(text: str) -> str:
    """Small letters with every mark that only parts words as a space; as long as the text."""
    return re.sub(r"[-_,;:()\s]", " ", text.lower())


def material_words() -> tuple[str, ...]:
    """Every word that names a material, from the file."""
    return tuple(_by_word()[0])


def find_materials(text: str) -> list[tuple[str, int, int]]:
    """Names of the materials that the text speaks of, in its order, each with where its words stand.

    Capitals and hyphens do not matter; of words within longer ones the longer count.

    >>> find_materials("Galvanised sheet, DX51D")
    [('galvanised', 0, 10), ('galvanised', 18, 23)]
    """
    if not text.strip():
        return []
    names, pattern = _by_word()
    plain = _plain(text)
    if len(plain) != len(text):  # a few capitals are longer when small
        return []
    return [(names[each[0]], *each.span()) for each in pattern.finditer(plain)]


def material_of(text: str) -> Material | None:
    """The material that a text names; None where it names none, or several that are not one family.

    A grade counts before its family: `stainless steel 316L` is the grade, `steel, galvanised` the
    coated sheet.

    >>> material_of("Stainless steel 316L").density, material_of("cardboard") is None
    (8000.0, True)
    """
    found = {name for name, _, _ in find_materials(text)}
    for name in found:
        material = materials()[name]
        if found <= set(material.family):
            return material
    return None
