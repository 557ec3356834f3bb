"""What the sheets say of a piece, in the words of the shop.

units: `mm` or `in`. In mm a size stands bare, in inches with its unit, as a fraction where it is one.
"""

from __future__ import annotations

from math import degrees
from typing import TYPE_CHECKING, Any

from develop.tables.gauges import Gauge
from develop.tables.materials import material_of
from develop.units import format_length, number_text

if TYPE_CHECKING:
    from develop.pieces.cut_types import Cut
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec
    from develop.surfaces.band import Band

__all__ = [
    "SIDES",
    "cut_words",
    "direction_words",
    "edges_words",
    "lines_of",
    "lining_words",
    "mass_words",
    "measured_words",
    "off_centre_words",
    "plate_words",
    "section_words",
    "shift_words",
    "size_words",
    "sizes_words",
    "wall_words",
]

SIDES = "right and left as the header's END B is faced, leaving direction up"
"""How a person at the header tells the side that `off_centre_words` names."""

_WORDS = {0.0: "right", 90.0: "top", 180.0: "left", 270.0: "bottom"}
_INCH = 25.4
_FOOT = 304.8
# [kg] International yard and pound agreement, 1959.
_POUND = 0.45359237
# Nearer than this to a sixty-fourth of an inch [mm] a size is that fraction.
_SAME = 1e-3
# A line of facts is not to be much longer than the others, or all are written small.
_LONGEST_LINE = 44


def direction_words(direction: float) -> str:
    """A direction [rad] as a word where it has one, else in degrees."""
    angle = round(degrees(direction) % 360.0, 6)
    return _WORDS.get(angle % 360.0, f"{number_text(angle)}°")


def cut_words(cut: Cut | None) -> str:
    """How an end is cut."""
    if cut is None or cut.slope == 0.0:
        return "square"
    return f"cut {number_text(round(degrees(cut.slope), 6))}°, longest at {direction_words(cut.long)}"


def size_words(mm: float, units: str) -> str:
    """A size as it was given [mm]: a decimal, or in inches a fraction where it is one to the 64th.

    >>> size_words(314.325, "mm"), size_words(314.325, "in"), size_words(0.8, "in")
    ('314.325', '12-3/8 in', '0.031 in')
    """
    if units == "mm":
        return number_text(round(mm, 3))
    if abs(mm - round(mm / _INCH * 64) * _INCH / 64) < _SAME:
        return format_length(mm, unit="in", fraction=64)
    return f"{mm / _INCH:.3f} in"


def measured_words(mm: float, units: str) -> str:
    """A length [mm] to be measured with a tape: to 0.1 mm or 1/32 in.

    >>> measured_words(1455.817, "mm"), measured_words(1455.817, "in")
    ('1455.8', '57-5/16 in')
    """
    return format_length(mm, unit=units, suffix=units != "mm")


def off_centre_words(mm: float, units: str) -> str:
    """How far and to which side of a header's centre a branch stands [mm], positive to the right.

    >>> off_centre_words(20.0, "mm"), off_centre_words(-25.4, "in")
    ('20 off centre to the right', '1 in off centre to the left')
    """
    return f"{size_words(abs(mm), units)} off centre to the {'right' if mm > 0.0 else 'left'}"


def section_words(spec: SectionSpec, units: str) -> str:
    """A section with its sizes; a pipe by its name."""
    if spec.kind == "pipe":
        return spec.text
    if spec.taped is not None:
        name = f"measured, {len(spec.taped.directions)} readings, {spec.taped.fit}, overall"
    else:
        name = spec.kind
    sizes = [spec.width] if spec.kind == "round" else [spec.width, spec.height]
    words = f"{name} {' x '.join(size_words(round(size, 4), units) for size in sizes)}"
    if spec.kind == "rectangle" and spec.r:
        words += f" r {size_words(spec.r, units)}"
    if spec.kind == "superellipse":
        words += f" n {number_text(spec.n)}"
    return words


def shift_words(right: float, up: float, units: str) -> str:
    """Where the centre of END B lies [mm], facing it.

    >>> shift_words(50.0, -50.8, "mm"), shift_words(0.0, 0.0, "mm")
    ('END B 50 right, 50.8 down', 'END B centred')
    """
    ways = ((right, "right", "left"), (up, "up", "down"))
    parts = [f"{size_words(abs(by), units)} {on if by > 0.0 else back}" for by, on, back in ways
             if abs(by) > _SAME / 2.0]  # fmt: skip
    return f"END B {', '.join(parts) or 'centred'}"


def sizes_words(sizes: str, thickness: float, *sections: SectionSpec) -> str:
    """Where the given sizes are measured. thickness [mm]."""
    if thickness == 0.0:
        return "net, no thickness"
    pipes = [spec.outside for spec in sections]
    if pipes and all(pipes):
        return "sizes outside"
    words = {"mean": "sizes mean (mid-thickness)"}.get(sizes, f"sizes {sizes}")
    return f"{words}, the pipe's outside" if any(pipes) and sizes != "outside" else words


def lining_words(lining: float, around: Section | Band | None, units: str) -> tuple[str, ...]:
    """What a lining [mm] makes of the sizes, and what the duct itself then measures inside."""
    if not lining:
        return ()
    size = ""
    if around is not None:
        rim = getattr(around, "rim_a", None)
        section: Any = around if rim is None else rim.section
        wide, tall = (size_words(round(each, 4), units) for each in (section.width, section.height))
        size = f", {'END A of the ' if rim else ''}duct {wide} x {tall} inside"
    return (f"clear inside the lining of {size_words(lining, units)}{size}",)


def edges_words(edges: tuple[float, float], units: str) -> str:
    """The stretch-outs of END A and END B as developed [mm]."""
    a, b = (measured_words(edge, units) for edge in edges)
    return f"edges: END A {a}, END B {b}"


def wall_words(material: str, thickness: float, units: str) -> tuple[str, ...]:
    """Material and thickness [mm], in as many lines as that takes."""
    wall = f"{size_words(thickness, units)}{' mm' if units == 'mm' else ''} thick" if thickness else ""
    if isinstance(thickness, Gauge) and units == "in":
        wall = f"{thickness / _INCH:.4f} in thick"  # as gauges are published
    return lines_of(", ".join(part for part in (material, _gauge(material, thickness), wall) if part))


def _gauge(material: str, thickness: float) -> str:
    """The gauge that a thickness was given by; without its material, where that is stated anyway."""
    if not isinstance(thickness, Gauge):
        return ""
    stated = material_of(material)
    if stated and thickness.material in stated.family:
        return " ".join(thickness.name.split()[:2])
    return thickness.name


def mass_words(area: float, mass: float | None, density: float | None, units: str, *, each: bool) -> str:
    """Area [mm²] of one pattern, and its mass [kg] where the density [kg/m³] is known.

    >>> mass_words(565486.7, 3.5511, 7850.0, "mm", each=False)
    'area 0.5655 m², 3.551 kg at 7850 kg/m³'
    >>> mass_words(929030.4, 4.5359237, 7850.0, "in", each=True)
    'area 10 ft² each, 10 lb at 490.1 lb/ft³'
    """
    metric = units == "mm"
    square, unit = (1e6, "m²") if metric else (_FOOT**2, "ft²")
    of_each = " each" if each else ""
    words = f"area {number_text(float(f'{area / square:.4g}'))} {unit}{of_each}"
    if mass is None or density is None:
        return words
    if metric:
        return f"{words}, {number_text(float(f'{mass:.4g}'))} kg at {number_text(density)} kg/m³"
    dense = density / _POUND * (_FOOT * 1e-3) ** 3
    return f"{words}, {number_text(float(f'{mass / _POUND:.4g}'))} lb at {dense:.1f} lb/ft³"


def lines_of(text: str) -> tuple[str, ...]:
    """The text in lines of about equal length, none much over 44 letters."""
    count = -(-len(text) // _LONGEST_LINE)
    lines: list[str] = []
    for word in text.split():
        if lines and len(lines[-1]) + len(word) / 2.0 < len(text) / count:
            lines[-1] += f" {word}"
        else:
            lines.append(word)
    return tuple(lines)


def plate_words(material: str, thickness: float) -> str:
    """Material and thickness of a flat plate, whose pattern they do not change."""
    plate = f"{number_text(round(thickness, 3))} mm thick" if thickness else "thickness not stated"
    return ", ".join(part for part in (material, _gauge(material, thickness), plate) if part)
