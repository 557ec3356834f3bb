"""Sections: one file a curve, one protocol, and the text form that names them.

Importing this package costs nothing; `section_of` brings numpy in when a curve is made.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec

__all__ = ["section_of"]


def section_of(spec: SectionSpec) -> Section:
    """The curve that a section's text stands for; round and pipe are ellipses of equal axes."""
    from develop.sections.ellipse import Ellipse

    return Ellipse(width=spec.width, height=spec.height)
