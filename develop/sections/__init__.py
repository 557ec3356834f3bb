"""Sections: one file a curve, one protocol, and the text form that names them.

Importing this package costs nothing; `section_of` brings numpy in when a curve is made.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.sections.section import Section
    from develop.sections.spec import SectionSpec

__all__ = ["section_of"]


def section_of(spec: SectionSpec) -> Section:
    """The curve that a section's text stands for.

    Round and pipe are ellipses of equal axes, a flat oval is the roundest rectangle.
    """
    if spec.kind in ("rectangle", "flat-oval"):
        from develop.sections.rectangle import Rectangle

        r = spec.r if spec.kind == "rectangle" else 0.5 * min(spec.width, spec.height)
        return Rectangle(width=spec.width, height=spec.height, r=r)
    if spec.kind == "superellipse":
        from develop.sections.superellipse import Superellipse

        return Superellipse(width=spec.width, height=spec.height, n=spec.n)
    if spec.taped is not None:
        from develop.sections.measured import curve_of

        return curve_of(spec.taped)
    from develop.sections.ellipse import Ellipse

    return Ellipse(width=spec.width, height=spec.height)
