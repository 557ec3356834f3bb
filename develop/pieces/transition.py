"""A change from one section to another, the ends parallel or end B tilted."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from math import ceil, degrees, floor
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.cut_types import CUT, Cut
from develop.pieces.field_types import ANGLE, LENGTH, MARK, OFFSET, SECTION, Choice, Count, Length
from develop.pieces.fields import about
from develop.pieces.fitted import Tapered
from develop.pieces.wording import direction_words, section_words, shift_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

# Shorter than this part of its largest size, a transition is a flat ring and not a side to be rolled.
_FLATTEST = 1000.0
# What a tilted end must leave between itself and the other's plane, in parts of their sizes: nearer, a
# side is left that is too short there to be bent.
_CLEAR = 1e-3
_HALVINGS = 50

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Share
    from develop.pieces.built import Built
    from develop.sections.section import Section
    from develop.solid import Rim
    from develop.surfaces.band import Band
    from develop.surfaces.sheet import Sheet

__all__ = ["Transition"]


@dataclass(frozen=True, kw_only=True)
class Transition(Tapered):
    """A change from one section to another; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "transition"
    example: ClassVar[dict[str, str | float]] = {
        "end_a": "ellipse 600 x 300",
        "end_b": "round 400",
        "length": 450,
        "offset": "0,50",
    }

    end_a: SectionSpec = field(metadata=about(SECTION, "section of end A"))
    end_b: SectionSpec = field(metadata=about(SECTION, "section of end B"))
    length: float = field(
        metadata=about(LENGTH, "on the axis, from the plane of end A to the centre of end B")
    )
    offset: tuple[float, float] = field(
        default=(0.0, 0.0), metadata=about(OFFSET, "centre of end B, right of and above that of end A")
    )
    flush: str | None = field(
        default=None,
        metadata=about(
            Choice(("bottom", "top", "left", "right")),
            "the side on which both ends are level",
            not_with="offset",
        ),
    )
    rotate: float = field(
        default=0.0,
        metadata=about(ANGLE, "end B turned anticlockwise about its own centre, facing end B", handed=True),
    )
    tilt: Cut | None = field(
        default=None,
        metadata=about(
            CUT, "end B turned about its centre, so that the piece is longest at `long`; after it is rotated"
        ),
    )
    kicks: int = field(
        default=0,
        metadata=about(
            Count(least=0, most=90),
            "bent on a press brake: so many bends to every right angle that the section turns; 0: rolled",
        ),
    )
    die: float = field(
        default=0.0,
        metadata=about(
            Length(least=0.0, most=1000.0),
            "smallest spacing of press lines that the die allows; 0: not known",
        ),
    )
    swing: float = field(
        default=10_000.0,
        metadata=about(
            Length(), "longest radius that can be swung; beyond it the pattern gives offsets from a chord"
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    def surface(self) -> Band:
        """The band between the two ends. Raises Refusal."""
        from develop.pieces.wall import check_bend, check_level
        from develop.solid import Frame, Rim
        from develop.surfaces.band import Band

        a, b = self.in_wall(self.end_a, field="end_a"), self.in_wall(self.end_b, field="end_b")
        size = max(a.width, a.height, b.width, b.height)
        if self.length < size / _FLATTEST:
            raise Refusal(
                field="length",
                given=f"{number_text(self.length)} mm between ends of up to {number_text(round(size, 1))} mm "
                "makes a side as good as flat",
                allowed=f"{number_text(ceil(size / _FLATTEST * 10.0) / 10.0)} mm or more; "
                "for less, a flat ring",
            )
        rim = Rim(a, Frame.square())
        slope = self.tilt.slope if self.tilt else 0.0
        if slope and not self._clear(rim, b, slope):
            self._refuse_tilt(rim, b)
        # Fits change what is placed, not where.
        band = Band(
            Rim(self.fitted(a, "a"), rim.frame),
            Rim(self.fitted(b, "b"), self._end_b(a, b, slope).frame),
            level=self.level,
        )
        band = replace(band, distance=self.distance(band))
        check_bend(band, thickness=self.thickness, sizes=self.sizes, instead="a longer piece")
        check_level(band)
        if self.collar_b is not None and self.rotate:
            # Its marks are those of its own section, which would not be the piece's.
            raise Refusal(
                field="collar_b",
                given=f"given with END B rotated {number_text(round(degrees(self.rotate), 6))}°",
                allowed="rotate 0, which for a round end is the same; else none, and a straight piece that "
                "is turned with the end",
            )
        return band

    def _end_b(self, a: Section, b: Section, slope: float) -> Rim:
        """End B, tilted by a slope [rad] in the direction asked for; flush or offset."""
        import numpy as np

        from develop.solid import Frame, Rim

        def placed(right: float, up: float) -> Rim:
            frame = Frame.square(at=(right, up, self.length), rotate=self.rotate)
            return Rim(b, frame.tilted(slope=slope, long=self.tilt.long) if self.tilt and slope else frame)

        if self.flush is None:
            return placed(*self.offset)
        x, y = {"right": (1.0, 0.0), "top": (0.0, 1.0), "left": (-1.0, 0.0), "bottom": (0.0, -1.0)}[
            self.flush
        ]
        reach_b = float(placed(0.0, 0.0).support(np.array([x, y, 0.0])))
        more = float(a.support(np.array(x), np.array(y))) - reach_b
        return placed(more * x, more * y)

    def _clear(self, rim_a: Rim, b: Section, slope: float) -> bool:
        """Whether each end lies on one side of the other's plane, end B tilted by a slope [rad]."""
        rim_b = self._end_b(rim_a.section, b, slope)
        size = sum(each.width + each.height for each in (rim_a.section, b))
        low_b = -rim_b.highest_over(rim_a.frame, sign=-1.0)
        low_a = -rim_a.highest_over(rim_b.frame, sign=1.0)
        return min(low_a, low_b) > _CLEAR * size

    def _refuse_tilt(self, rim_a: Rim, b: Section) -> None:
        """Raises Refusal with the largest tilt that works, and the least length."""
        from math import radians

        assert self.tilt is not None
        low, high = 0.0, self.tilt.slope
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + high)
            low, high = (middle, high) if self._clear(rim_a, b, middle) else (low, middle)
        most = floor(degrees(low) * 10.0 - 1e-6) / 10.0
        works = most > 0.0 and self._clear(rim_a, b, radians(most))
        short, long = (
            self.length,
            self.length
            + 2.0 * (max(rim_a.section.width, rim_a.section.height) + 2.0 * max(b.width, b.height)),
        )
        longer = replace(self, length=long)
        while not longer._clear(rim_a, b, self.tilt.slope) and long < 1e6:
            long *= 2.0
            longer = replace(self, length=long)
        for _ in range(_HALVINGS):
            middle = 0.5 * (short + long)
            fits = replace(self, length=middle)._clear(rim_a, b, self.tilt.slope)
            short, long = (short, middle) if fits else (middle, long)
        tilt = f"slope {number_text(most)} or less, or a " if works else "a "
        raise Refusal(
            field="tilt",
            given=f"slope {number_text(round(degrees(self.tilt.slope), 6))} makes the ends cross, or nearly",
            allowed=f"{tilt}length of {number_text(ceil(long * 10.0 + 1e-6) / 10.0)} mm or more",
        )

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.chord import with_chords
        from develop.pieces.cuts import band_solid
        from develop.pieces.parting import parted
        from develop.pieces.press import Press

        surface = self.surface()
        a, b = surface.rim_a, surface.rim_b
        seam = seam_parameter(a.section, surface.lengths, self.seam_at)
        right, up, _ = (float(each) for each in b.frame.origin)
        sheet = surface.sheet(seam)
        place = [f"length {size_words(self.length, units)}"]
        if self.flush:
            place.append(f"flush at the {self.flush}")
        place.append(shift_words(right, up, units))
        if self.rotate and self.end_b.width != self.end_b.height:  # a round end looks the same turned
            place.append(f"rotated {number_text(round(degrees(self.rotate), 6))}°")

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            cutting = self.cutting(flat, joints=self.collared, units=units, share=share)
            pattern = pattern_of(
                flat,
                a.section,
                b.section,
                wording=self.wording(
                    flat,
                    (self.end_a, self.end_b),
                    sizes=f"END A {section_words(self.end_a, units)} to END B "
                    f"{section_words(self.end_b, units)}",
                    place=", ".join([*place, *self._tilt_words()]),
                    held="length",
                    units=units,
                    around=surface,
                    level=self.level_words(surface),
                    fits=self.fits,
                ),
                divisions=self.divisions,
                distance=surface.distance,
                turn_b=self.rotate,
                cutting=self.cautioned(cutting, surface),
                press=Press(self.kicks, self.die, self.thickness) if self.kicks else None,
                share=share,
            )
            return with_chords(pattern, self.swing)

        solid = band_solid(surface, sheet, seam)
        return self.with_collars(
            parted(self, sheet, solid, drawn, units=units, opposite=True),
            surface,
            specs={"a": self.end_a, "b": self.end_b},
            seam=seam,
            seam_b=sheet.seam_b,
            units=units,
        )

    def _tilt_words(self) -> tuple[str, ...]:
        if self.tilt is None or self.tilt.slope == 0.0:
            return ()
        slope = number_text(round(degrees(self.tilt.slope), 6))
        return (f"END B tilted {slope}°, the piece longest at {direction_words(self.tilt.long)}",)
