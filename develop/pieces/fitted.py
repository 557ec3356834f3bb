"""Ends that go into their neighbour or over it, and the parallel collars of tapered pieces."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from typing import TYPE_CHECKING

from develop.errors import InputError, Refusal
from develop.pieces.common import Plate
from develop.pieces.field_types import Choice, Length
from develop.pieces.fields import about
from develop.pieces.wording import direction_words, section_words, size_words
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.built import Built, Part
    from develop.pieces.cutting import Cutting
    from develop.sections.section import Section
    from develop.sections.text import SectionSpec
    from develop.solid import Rim
    from develop.surfaces.band import Band

__all__ = ["Fit", "Fitted", "Tapered", "left_clear"]

_FIT = Choice(("flush", "into", "over"))
# Clearance on each side when none is given [mm], in sheet and from 3 mm up. Common practice, no source.
_CLEAR, _CLEAR_PLATE, _PLATE = 0.5, 1.0, 3.0
# A mouth that tapers by more than this [degrees] does not slip. Common practice, no source.
_SLIPS = 2.0


def left_clear(clearance: float | None, thickness: float) -> float:
    """Clearance on each side of a fitted end [mm]: as given, or by the thickness [mm]."""
    if clearance is not None:
        return clearance
    return _CLEAR_PLATE if thickness >= _PLATE else _CLEAR


@dataclass(frozen=True)
class Fit:
    """An end that is not flush. end: `a` or `b`. fit: `into` or `over`. moved: outward, all round [mm]."""

    end: str
    fit: str
    thickness: float
    clearance: float

    @property
    def moved(self) -> float:
        """How far the wall is moved out, less than 0 for in [mm]: by its own thickness and the clearance."""
        by = self.thickness + self.clearance
        return -by if self.fit == "into" else by

    def words(self, units: str) -> tuple[str, ...]:
        """What the sheets say of it."""
        way = "into" if self.fit == "into" else "over"
        size = size_words(abs(self.moved), units)
        return (
            f"END {self.end.upper()} goes {way} its neighbour: {size} "
            f"{'smaller' if self.moved < 0.0 else 'larger'} on each side",
            f"({size_words(self.thickness, units)} thick, {size_words(self.clearance, units)} clear)",
        )


@dataclass(frozen=True, kw_only=True)
class Fitted(Plate):
    """A piece whose ends may go into their neighbours or over them. clearance: on each side [mm]."""

    fit_a: str = field(default="flush", metadata=about(_FIT, "how END A meets a neighbour of the same size"))
    fit_b: str = field(default="flush", metadata=about(_FIT, "how END B meets a neighbour of the same size"))
    clearance: float | None = field(
        default=None,
        metadata=about(
            Length(least=0.0, most=100.0),
            "left on each side of an end that goes into its neighbour or over it; when left out, 0.5 mm in "
            "sheet and 1 mm in plate of 3 mm and more",
        ),
    )

    @property
    def fits(self) -> tuple[Fit, ...]:
        """The ends that are not flush. Raises Refusal where there is nothing to be fitted."""
        found = tuple(
            Fit(end, fit, self.thickness, self.left_clear)
            for end, fit in (("a", self.fit_a), ("b", self.fit_b))
            if fit != "flush"
        )
        if self.clearance is not None and not found:
            raise Refusal(
                field="clearance",
                given=f"{number_text(self.clearance)} mm, and both ends are flush",
                allowed="fit_a or fit_b = into or over with it",
            )
        return found

    @property
    def left_clear(self) -> float:
        """Clearance on each side of a fitted end [mm]."""
        return left_clear(self.clearance, self.thickness)

    def fitted(self, section: Section, end: str) -> Section:
        """A section of end `a` or `b`, smaller or larger as its fit wants it. Raises Refusal."""
        from develop.pieces.wall import PLACES

        moved = next((fit.moved for fit in self.fits if fit.end == end), 0.0)
        if not moved:
            return section
        try:
            found = section.offset(moved)
            found.offset(-self.thickness * PLACES[self.sizes])
        except InputError:
            raise Refusal(
                field=f"fit_{end}",
                given=f"into needs a wall {number_text(round(-moved, 3))} mm farther in, where the tightest "
                f"radius is {section.least_radius:.4g} mm",
                allowed="over or flush, a smaller clearance, or a rounder section",
            ) from None
        return found


@dataclass(frozen=True, kw_only=True)
class Tapered(Fitted):
    """A tapered piece: how its edges are cut, and the collars at its ends. collar_a, collar_b [mm]."""

    edge_cut: str = field(
        default="square",
        metadata=about(
            Choice(("square", "level")),
            "edges of thick plate cut square to the plate, as it leaves the shear, or level with the plane "
            "of the end",
        ),
    )
    collar_a: float | None = field(
        default=None,
        metadata=about(Length(), "length of a parallel collar on END A, a part of its own"),
    )
    collar_b: float | None = field(
        default=None,
        metadata=about(Length(), "length of a parallel collar on END B, a part of its own"),
    )

    @property
    def level(self) -> bool:
        """Whether the edges are level with the planes of their ends."""
        return self.edge_cut == "level"

    @property
    def collared(self) -> str:
        """The ends, `a` and `b`, that have a collar."""
        return "".join(end for end in "ab" if getattr(self, f"collar_{end}") is not None)

    def level_words(self, band: Band) -> tuple[str, ...]:
        """How level edges are cut: by how much off square, which changes round the section."""
        if not self.level or not self.thickness:
            return ()
        said = []
        for end, low, high in _slants(band):
            degrees = number_text(round(low, 1))
            if round(high, 1) != round(low, 1):
                degrees += f" to {number_text(round(high, 1))}"
            said.append(f"END {end} {degrees}°")
        return "edges level with the planes of the ends", f"off square by: {', '.join(said)}"

    def cautioned(self, cutting: Cutting, band: Band) -> Cutting:
        """What is cut, with a warning for each fitted end that tapers too much to slip."""
        most = {end.lower(): high for end, _, high in _slants(band)}
        found = tuple(
            f"END {fit.end.upper()} tapers by up to {number_text(round(most[fit.end], 1))}° and does not "
            f"slip {fit.fit} a parallel neighbour: give it a collar_{fit.end}"
            for fit in self.fits
            if fit.end not in self.collared and most.get(fit.end, 0.0) > _SLIPS
        )
        return replace(cutting, warnings=(*cutting.warnings, *found))

    def with_collars(
        self,
        built: Built,
        band: Band,
        *,
        specs: dict[str, SectionSpec],
        seam: float,
        seam_b: float,
        units: str,
    ) -> Built:
        """The piece with its collars.

        specs: the sections of its ends as they were given. seam, seam_b: parameters of the seam on both ends.
        """
        from develop.pieces.built import Joint

        parts, joints = list(built.parts), list(built.joints)
        for end, rim, at in (("a", band.rim_a, seam), ("b", band.rim_b, seam_b)):
            if end not in self.collared:
                continue
            parts.append(self._collar(end, rim, at, specs.get(end), units))
            mine, theirs = ("b", "a") if end == "a" else ("a", "b")
            (part, place), *also = built.copies(0)
            joint = Joint(
                len(parts) - 1, mine, part, theirs, 0, place, f"collar {end} to side", other_also=tuple(also)
            )
            joints.append(joint)
        own = tuple(range(len(built.parts)))
        further = tuple(range(len(own), len(parts)))
        order = (*further[:1], *own, *further[1:]) if "a" in self.collared else (*own, *further)
        return replace(built, parts=tuple(parts), joints=tuple(joints), order=order)

    def _collar(self, end: str, rim: Rim, seam: float, spec: SectionSpec | None, units: str) -> Part:
        """The collar of an end: a cylinder on its rim, square to its plane, seamed opposite the side."""
        import numpy as np

        from develop.pieces.assemble import pattern_of
        from develop.pieces.built import Part
        from develop.pieces.cuts import cylinder_between, cylinder_solid
        from develop.solid import Frame

        length = float(getattr(self, f"collar_{end}"))
        section = rim.section
        distance = self.distance(section)
        wall = cylinder_between(section, None, None, length=length, distance=distance)
        opposite = float(section.direction(np.array([seam]))[0]) + np.pi
        own = float(section.at_direction(np.array([opposite]))[0])
        sheet = wall.sheet(own)
        mark = f"{self.mark}-collar-{end}"
        free, joined = ("A", "B") if end == "a" else ("B", "A")
        wording = self.wording(
            sheet,
            (spec,) if spec else (),
            sizes=f"collar on END {end.upper()} of {self.mark}, length {size_words(length, units)}",
            place=f"parallel, END {joined} on the taper, END {free} free",
            held="length",
            units=units,
            around=section,
            more=(
                *((f"{section_words(spec, units)}",) if spec else ()),
                f"seam at {direction_words(round(opposite, 9))}, opposite that of the taper",
            ),
            fits=tuple(fit for fit in self.fits if fit.end == end),
        )
        pattern = pattern_of(
            sheet,
            section,
            section,
            wording=replace(wording, mark=mark, facts=(mark, *wording.facts[1:])),
            divisions=self.divisions,
            distance=distance,
            cutting=self.cutting(sheet, joints=joined.lower(), units=units),
        )
        frame = rim.frame
        if end == "a":
            frame = Frame(frame.origin - length * frame.normal, frame.axes)
        return Part(pattern, cylinder_solid(wall, own), (frame,))


def _slants(band: Band) -> list[tuple[str, float, float]]:
    """Of each end the least and the greatest angle [degrees] between the side and square to its plane."""
    import numpy as np

    section = band.rim_a.section
    start, step = section.breaks[:-1, None], np.diff(section.breaks)[:, None]
    u = (start + step * (np.arange(24) + 0.5) / 24).ravel()
    normals = band.normals(np.concatenate([section.at_direction(np.radians(np.arange(360.0))), u]))
    found = []
    for end, rim, cut in (("A", band.rim_a, band.cut_a), ("B", band.rim_b, band.cut_b)):
        if cut is None and rim.section.girth == 0.0:
            continue
        plane = rim.frame.normal
        if cut is not None:
            plane = np.array([-cut.rise[0], -cut.rise[1], 1.0])
            plane = plane / np.linalg.norm(plane)
        slant = np.degrees(np.arcsin(np.clip(np.abs(normals @ plane), 0.0, 1.0)))
        found.append((end, float(slant.min()), float(slant.max())))
    return found
