"""Flat parts as they should be: what their edges and areas measure, from sections alone.

Nothing here knows how the outline is drawn; it is what the pattern is checked against.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property
from math import pi

import numpy as np

from develop.quadrature import WEIGHTS, Array, Mask, Panels, resolved, tail
from develop.sections.section import Parallel, Section
from develop.solid.end import End
from develop.solid.frame import Frame

__all__ = ["FlatPlate", "FlatRing", "Holes", "Stretch"]

_LOOSE = 1e-15
_ROUNDS = 30
_SAME = 1e-9


def _integral(values: Callable[[Array], Array], ends: Array) -> float:
    """The integral of a function of the direction [rad] between ends, on panels that resolve it."""

    def sampled(panels: Panels) -> Array:
        return values(panels.nodes)[..., None]

    def loose(panels: Panels, found: Array) -> Mask:
        return np.asarray((tail(found)[:, 0] * panels.half) > _LOOSE * np.max(np.abs(found)))

    panels, found = resolved(Panels.between(ends), sampled, loose, rounds=_ROUNDS)
    return float(np.sum((found[..., 0] @ WEIGHTS) * panels.half))


@dataclass(frozen=True)
class Stretch:
    """A stretch of a section from parameter start to stop, anticlockwise; less than once round."""

    section: Section
    start: float
    stop: float

    @cached_property
    def turn(self) -> float:
        """By how much the normal turns on it [rad]."""
        first, last = self._directions
        return last - first

    @cached_property
    def _directions(self) -> tuple[float, float]:
        at = self.section.walk(np.array([self.start, self.stop]))
        first, last = np.arctan2(at.ey, at.ex)
        turn = (last - first) % (2.0 * pi)
        # Two places on one straight side have the same normal, but for rounding.
        return float(first), float(first + (0.0 if turn > 2.0 * pi - _SAME else turn))

    @cached_property
    def length(self) -> float:
        """Its length [mm] from the support function h: ∫ h dφ between the normals of its ends, plus by
        how much farther the last point lies along its tangent than the first.

        As ds = (h + h″) dφ with h′ the point's place along the tangent: Cauchy's formula, for an
        open stretch. It shares nothing with the arc lengths of the sections.
        """
        first, last = self._directions
        at = self.section.walk(np.array([self.start, self.stop]))
        along = at.y * at.ex - at.x * at.ey
        kinks = self.section.kinks
        if last == first:
            return float(along[1] - along[0])
        between = (first + (kinks - first) % (2.0 * pi)) if len(kinks) else np.zeros(0)
        between = np.sort(between[(between > first + _SAME) & (between < last - _SAME)])
        ends = np.concatenate([[first], between, [last]])

        def support(phi: Array) -> Array:
            return self.section.support(np.cos(phi), np.sin(phi))

        return _integral(support, ends) + float(along[1] - along[0])

    @cached_property
    def swept(self) -> float:
        """Area [mm²] between it and the lines from the section's centre to its ends.

        ½ ∫ h ds with ds = (h + h″) dφ, in parts: ½ ∫ (h² − h′²) dφ + ½ [h h′] (Green's formula in terms
        of the support h), where h′ is the place of the touching point along its tangent.
        """
        first, last = self._directions
        at = self.section.walk(np.array([self.start, self.stop]))
        reach, along = at.x * at.ex + at.y * at.ey, at.y * at.ex - at.x * at.ey
        ends = 0.5 * float(reach[1] * along[1] - reach[0] * along[0])
        if last == first:
            return ends
        kinks = self.section.kinks
        between = (first + (kinks - first) % (2.0 * pi)) if len(kinks) else np.zeros(0)
        between = np.sort(between[(between > first + _SAME) & (between < last - _SAME)])

        def values(phi: Array) -> Array:
            c, s = np.cos(phi), np.sin(phi)
            x, y = self.section.touch(c, s)
            return np.asarray((x * c + y * s) ** 2 - (y * c - x * s) ** 2)

        return 0.5 * _integral(values, np.concatenate([[first], between, [last]])) + ends


@dataclass(frozen=True)
class Holes:
    """Round holes of a radius [mm], their centres on a pitch line.

    count: on the whole pitch line, at equal arcs of it. here: how many of them on this part.
    """

    pitch: Section
    count: int
    here: int
    radius: float

    @cached_property
    def spacing(self) -> float:
        """From one centre to the next along the pitch line [mm], by Cauchy's formula."""
        return End.placed(self.pitch, Frame.square()).girth / self.count


@dataclass(frozen=True)
class FlatRing:
    """A ring from a curve to its parallel, or a part of it, or the whole plate inside the parallel.

    inner: the curve. width [mm]. span: parameters of the curve between which the part lies, None
    for a whole ring. blank: the ring is not opened. shift: from the curve's plane to the pattern (2,) [mm].
    """

    inner: Section
    width: float
    shift: Array
    span: tuple[float, float] | None = None
    blank: bool = False
    holes: Holes | None = None

    @cached_property
    def _inner(self) -> tuple[float, float]:
        """Length of the inner edge [mm] and the turn of its normal [rad]."""
        if self.span is None:
            return End.placed(self.inner, Frame.square()).girth, 2.0 * pi
        stretch = Stretch(self.inner, *self.span)
        return stretch.length, stretch.turn

    def lengths(self) -> dict[str, float]:
        """Lengths of the edges by name [mm]: a parallel is longer by width times turn (Steiner)."""
        length, turn = self._inner
        found = {"outer": length + self.width * turn}
        if not self.blank:
            found["inner"] = length
        if self.span is not None:
            found |= {"end_1": self.width, "end_2": self.width}
        if self.holes is not None and self.holes.here:
            found["holes"] = self.holes.here * 2.0 * pi * self.holes.radius
        return found

    @property
    def area(self) -> float:
        """Area less all openings [mm²]: length · width + ½ width² turn (Steiner), holes taken off."""
        length, turn = self._inner
        area = length * self.width + 0.5 * self.width**2 * turn
        if self.blank:
            area += self.inner.area
        if self.holes is not None:
            area -= self.holes.here * pi * self.holes.radius**2
        return area

    def end(self, name: str) -> End:
        """The closed curve that the edge `inner` or `outer` lies on, in the curve's own plane."""
        section = self.inner if name == "inner" else Parallel(self.inner, self.width)
        return End.placed(section, Frame.square())

    @property
    def rims(self) -> tuple[End, ...]:
        """The closed curves of its edges."""
        return self.end("inner"), self.end("outer")


@dataclass(frozen=True)
class FlatPlate:
    """A rectangular plate with one opening.

    opening: the closed curve, in the plate's plane z = 0. size: width and height [mm].
    shift: from the plane to the pattern (2,) [mm].
    """

    opening: End
    size: tuple[float, float]
    shift: Array
    holes: None = None

    def lengths(self) -> dict[str, float]:
        """Lengths of the edges by name [mm]."""
        wide, high = self.size
        return {
            "opening": self.opening.girth,
            "lower_edge": wide,
            "right_edge": high,
            "upper_edge": wide,
            "left_edge": high,
        }

    @property
    def area(self) -> float:
        """Area less the opening [mm²]: a plane carried linearly keeps areas but for the determinant."""
        carried = float(np.linalg.norm(np.cross(self.opening.spans[:, 0], self.opening.spans[:, 1])))
        return self.size[0] * self.size[1] - carried * self.opening.section.area

    def end(self, name: str) -> End:
        """The closed curve of the opening."""
        return self.opening

    @property
    def rims(self) -> tuple[End, ...]:
        """The closed curves of its edges."""
        return (self.opening,)
