"""A paper band, wrapped round an existing pipe, for marking a slanting cut or a saddle on it."""

from __future__ import annotations

from dataclasses import dataclass, field, replace
from math import degrees, floor, pi
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import SIZES, Marked
from develop.pieces.cut_types import CUT, Cut
from develop.pieces.field_types import MARK, SECTION, Choice, Length
from develop.pieces.fields import about
from develop.pieces.onto import ONTO, Onto
from develop.pieces.wording import (
    SIDES,
    cut_words,
    measured_words,
    off_centre_words,
    section_words,
    size_words,
)
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.built import Built
    from develop.pieces.header import StraightHeader
    from develop.quadrature import Array
    from develop.sections.section import Section
    from develop.solid import Frame
    from develop.surfaces.cylinder import Cylinder

__all__ = ["MarkingBand"]

# How far beside the header may be rounding [mm].
_TANGENT = 1e-9
# Two sizes that differ by less, in parts of themselves, are one.
_ROUND = 1e-12
# On the header's band these are the pipe's, which has its own right and left.
_WORDS = ("PIPE RIGHT", "PIPE TOP", "PIPE LEFT", "PIPE BOTTOM")


@dataclass(frozen=True, kw_only=True)
class MarkingBand(Marked):
    """A paper band for marking a plane cut on an existing pipe; lengths in mm, angles in radians."""

    kind: ClassVar[str] = "marking-band"
    example: ClassVar[dict[str, str | float]] = {"section": "pipe DN 200", "cut": "slope 45 long right"}

    section: SectionSpec = field(metadata=about(SECTION, "section of the pipe"))
    cut: Cut | None = field(default=None, metadata=about(CUT, "the cut to mark", not_with="onto"))
    onto: Onto | None = field(
        default=None,
        metadata=about(
            ONTO,
            "a header that the pipe meets: its end is marked, and the hole on the header; off_centre to the "
            "right as the header's end B is faced with the pipe upward",
            not_with="cut",
        ),
    )
    joint: str = field(
        default="set-on",
        metadata=about(
            Choice(("set-on", "set-in")),
            "onto a header: the pipe stands on it and the hole is the pipe's bore, or the pipe reaches "
            "through its wall and the hole is the pipe's outside",
            only_with="onto",
        ),
    )
    paper: float = field(default=0.1, metadata=about(Length(least=0.0, most=10.0), "thickness of the paper"))
    face: str = field(
        default="outside",
        metadata=about(Choice(("outside", "inside")), "wrapped round the outside, or laid in the inside"),
    )
    lap: float = field(
        default=25.0, metadata=about(Length(least=0.0, most=1000.0), "how far the band laps over itself")
    )
    narrowest: float = field(
        default=50.0, metadata=about(Length(least=1.0, most=10_000.0), "least width of the band")
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))
    sizes: str = field(default="outside", metadata=SIZES)

    def surface(self) -> Cylinder:
        """The pipe's face from the band's square edge to the cut, the paper half its thickness off it.

        Raises Refusal.
        """
        import numpy as np

        from develop.pieces.cuts import trim
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        outside = self.face == "outside"
        if not outside and self.thickness == 0.0 and (self.section.outside or self.sizes != "inside"):
            where = "at mid-thickness" if self.sizes == "mean" else "its outside"
            raise Refusal(
                field="thickness",
                given=f"not given, but the band is laid inside a pipe whose size is {where}",
                allowed="the pipe's wall thickness" + ("" if self.section.outside else ", or sizes = inside"),
            )
        if self.onto is not None:
            self._check_hole()
        face = self._face()
        if self.lap > 0.5 * face.girth:
            raise Refusal(
                field="lap",
                given=f"{number_text(self.lap)} mm is more than half the pipe's girth",
                allowed=f"{number_text(floor(0.5 * face.girth))} mm or less",
            )
        paper = 0.5 * self.paper if outside else -0.5 * self.paper
        if self.onto is not None:
            return self._saddle(face, self.onto, paper)
        cut = trim(self.cut, height=0.0, end_b=True)
        down = float(face.support(np.array(-cut.rise[0]), np.array(-cut.rise[1])))
        # END A is the band's own square edge, so far below the cut that the band is nowhere too narrow.
        return Cylinder(face, Plane(-down - self.narrowest, np.zeros(2)), cut, paper)

    @property
    def _hole_face(self) -> str:
        """The face of the pipe that the hole in the header has."""
        return "inside" if self.joint == "set-on" else "outside"

    def _check_hole(self) -> None:
        """Raises Refusal where the wall that lies between the given size and the hole's is not known."""
        given = "outside" if self.section.outside else self.sizes
        if self.thickness > 0.0 or given == self._hole_face:
            return
        where = "at mid-thickness" if given == "mean" else f"its {given}"
        hole = "bore" if self.joint == "set-on" else "outside"
        other = {"outside": ", or joint = set-in", "inside": ", or joint = set-on"}.get(given, "")
        raise Refusal(
            field="thickness",
            given=f"not given, but the hole of a pipe {self.joint} is its {hole}, and its size is {where}",
            allowed=f"the pipe's wall thickness{other}",
        )

    def _face(self, face: str | None = None, *, mirrored: bool = False) -> Section:
        """The pipe's section at a face, at first the one that the band lies on, or its mirror image.

        Raises Refusal.
        """
        from develop.pieces.wall import PLACES, given_section

        spec = SECTION.mirrored(self.section) if mirrored else self.section
        assert isinstance(spec, SectionSpec)
        given = given_section(spec, field="section", thickness=self.thickness, sizes=self.sizes)
        return given.offset(self.thickness * (PLACES[face or self.face] - PLACES[self.sizes]))

    def _header(self, onto: Onto, length: float) -> StraightHeader:
        """The outside of the header as an existing pipe has it, with paper on it [mm]."""
        from develop.pieces.header import StraightHeader
        from develop.sections import section_of

        section = section_of(onto.header)
        return StraightHeader(section, section, length, 0.5 * self.paper)

    def _frame(self, header: StraightHeader, onto: Onto, *, from_a: float) -> Frame:
        """The pipe's place on the header: z away from it."""
        from develop.pieces.header import standing

        return standing(
            header, angle=onto.angle, leaves_at=0.5 * pi, off_centre=onto.off_centre, from_a=from_a
        )

    def _saddle(self, face: Section, onto: Onto, paper: float) -> Cylinder:
        """The pipe's face from the band's square edge to the header, facing which is END B."""
        import numpy as np

        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.meeting import CylinderTrim
        from develop.surfaces.trim import Plane

        header = self._header(onto, 1.0)
        frame = self._frame(header, onto, from_a=0.0)
        over = header.overhang(face, frame)
        if over > _TANGENT:
            raise Refusal(
                field="onto",
                given=f"the pipe reaches {over:.4g} mm beside the header",
                allowed="a pipe that lies within the header: a smaller off_centre or a larger header",
            )
        trim = CylinderTrim(header.section, _turned(frame), towards=True)
        open_ended = Cylinder(face, Plane(0.0, np.zeros(2)), trim, paper, trim.breaks(face))
        nearest = float(open_ended.sheet(0.0).at_ends.length.min())
        nearest = min(
            nearest, float(open_ended.lengths(face.at_direction(np.radians(np.arange(360.0)))).min())
        )
        return Cylinder(face, Plane(nearest - self.narrowest, np.zeros(2)), trim, paper, trim.breaks(face))

    def _facts(self, face: Section, girth: float, units: str) -> tuple[str, ...]:
        """What the sheet says; face: the pipe's face that the band lies on; girth of the band [mm]."""
        outside = self.face == "outside"
        size = _size(face, units)
        wall = f", wall {size_words(self.thickness, units)}" if self.thickness else ""
        cut = self._onto_words(units) if self.onto else cut_words(self.cut)
        return (
            f"{self.mark}: {self.kind}" if self.mark != self.kind else self.mark,
            f"{section_words(self.section, units)}, {size} {self.face}{wall}",
            "square cut" if cut == "square" else cut,
            *self._joint_words(),
            "mark along END B",
            "the pipe stays on the END A side",
            "wrap round, this side out" if outside else "lay inside, this side in towards you",
            f"girth of the band {measured_words(girth, units)}",
            f"lap {measured_words(self.lap, units)} beyond the dashed line, the edge goes on"
            if self.lap
            else "no lap",
            f"paper {size_words(self.paper, units)}{' mm' if units == 'mm' else ''} thick",
            f"quantity {self.quantity}",
        )

    def _onto_words(self, units: str) -> str:
        assert self.onto is not None
        off = f", {off_centre_words(self.onto.off_centre, units)}" if self.onto.off_centre else ""
        angle = number_text(round(degrees(self.onto.angle), 6))
        return f"meets a header {section_words(self.onto.header, units)} at {angle}°{off}"

    def _joint_words(self) -> tuple[str, ...]:
        """How the pipe goes onto its header, and where that has its right and left."""
        if self.onto is None:
            return ()
        joint = {
            "set-on": ("set-on: END B stands on the header's outside",),
            "set-in": (
                "set-in: END B is at the header's outside",
                "leave on beyond END B what goes through the wall",
            ),
        }[self.joint]
        return (*joint, SIDES) if self.onto.off_centre else joint

    def _seam_words(self) -> tuple[str, str]:
        """What the left and the right side say of how the band closes."""
        if not self.lap:
            return ("EDGES MEET", "EDGES MEET")
        words = ("THIS EDGE TO DASHED LINE", "MEETS HERE")
        # Seen from the inside the band is mirrored, its lap at the left.
        return words if self.face == "outside" else (words[1], words[0])

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pattern.allowance import Allowance
        from develop.pieces.assemble import Wording, pattern_of, seam_parameter
        from develop.pieces.built import one
        from develop.pieces.cuts import cylinder_solid
        from develop.pieces.cutting import Cutting

        surface = self.surface()
        face = surface.section
        seam = seam_parameter(face, surface.lengths, self.seam_at)
        flat = surface.sheet(seam)
        pattern = pattern_of(
            flat,
            face,
            face,
            wording=Wording(
                mark=self.mark,
                kind=self.kind,
                quantity=self.quantity,
                face=self.face,
                facts=self._facts(face, flat.edge_a, units),
                datum="datum line y = 0, the band's square edge",
                flow="",
                lines_as="ticks",
                units=units,
                seam_words=self._seam_words(),
            ),
            divisions=self.divisions,
            distance=surface.distance,
            cutting=Cutting({"seam_right": Allowance(self.lap)}),
        )
        if self.onto is None:
            return one(pattern, cylinder_solid(surface, seam))
        return self._with_hole(self.onto, replace(pattern, mark=f"{self.mark}-band"), surface, seam, units)

    def _with_hole(self, onto: Onto, pattern: Pattern, surface: Cylinder, seam: float, units: str) -> Built:
        """The saddle's band, and the band that marks the hole on the header."""
        import numpy as np

        from develop.pattern.allowance import Allowance
        from develop.pieces.assemble import Hole, Wording, pattern_of
        from develop.pieces.built import Built, Part
        from develop.pieces.cutting import Cutting
        from develop.solid import End, Frame, MeetingEnd, Solid
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.meeting import Opening
        from develop.surfaces.trim import Plane

        face, low = surface.section, surface.trim_a
        assert isinstance(low, Plane)
        frame = self._frame(self._header(onto, 1.0), onto, from_a=0.0)
        band = Solid(
            End.cut(face, height=low.height, rise=low.rise),
            MeetingEnd.of(face, self._header(onto, 1.0).section, _turned(frame), towards=True),
            side="parallel",
            seam=seam,
            seam_b=seam,
            distance=surface.distance,
        )

        # The band's z runs towards the header, the hole's away from it: right and left change places.
        pipe_face = self._face(self._hole_face, mirrored=True)

        def cut_by(header: StraightHeader, place: Frame) -> tuple[Cylinder, Opening]:
            through = header.through(place)
            pipe = Cylinder(pipe_face, through, Plane(1e3, np.zeros(2)), 0.0, through.breaks(pipe_face))
            return pipe, Opening(pipe.sheet(seam), header.sheet(opposite), through)

        # The hole first on a header of any length, then on one that leaves the band its least width.
        first = self._header(onto, 1.0)
        opposite = float(first.section.at_direction(np.array([1.5 * pi]))[0])
        _, rough = cut_by(first, frame)
        heights = rough.controls[:, 1]
        length = float(np.ptp(heights)) + 2.0 * self.narrowest
        header = self._header(onto, length)
        place = self._frame(header, onto, from_a=self.narrowest - float(heights.min()))
        pipe, opening = cut_by(header, place)
        at = pipe.sheet(seam).from_a(pipe_face.at_direction(np.radians([180.0, 90.0, 0.0, 270.0])))
        trace = opening.trace(at.panel, at.x)
        hole = Hole(
            opening.controls, opening.length, opening.area, trace.points, trace.tangents, trace.arcs, _WORDS
        )
        flat = header.sheet(opposite)
        on_header = pattern_of(
            flat,
            header.section,
            header.section,
            wording=Wording(
                mark=f"{self.mark}-hole",
                kind=self.kind,
                quantity=self.quantity,
                face="outside",
                facts=(
                    f"{self.mark}-hole: for the header",
                    f"{section_words(onto.header, units)}, its outside",
                    f"{self.joint}: the hole is the {'bore' if self.joint == 'set-on' else 'outside'} "
                    f"of the pipe, {_size(pipe_face, units)}",
                    f"for {section_words(self.section, units)}",
                    self._onto_words(units),
                    *((SIDES,) if onto.off_centre else ()),
                    "wrap round, this side out; mark the hole",
                    f"girth of the band {measured_words(flat.edge_a, units)}",
                    f"quantity {self.quantity}",
                ),
                datum="datum line y = 0, the band's square edge",
                flow="",
                lines_as="ticks",
                units=units,
                seam_words=("THIS EDGE TO DASHED LINE", "MEETS HERE") if self.lap else ("EDGES MEET",) * 2,
            ),
            divisions=self.divisions,
            distance=header.distance,
            cutting=Cutting({"seam_right": Allowance(self.lap)}),
            holes=(hole,),
        )
        solid = header.solid(opposite, flat, (header.hole(pipe_face, place),))
        square = Frame.square()
        # The hole's band is another sheet of paper: it stands nowhere in the piece.
        return Built((Part(pattern, band, (square,)), Part(on_header, solid, ())))


def _size(section: Section, units: str) -> str:
    """Width and height [mm] in words, once where they are alike."""
    words = size_words(section.width, units)
    if abs(section.width - section.height) <= _ROUND * section.width:
        return words
    return f"{words} x {size_words(section.height, units)}"


def _turned(frame: Frame) -> Frame:
    """The same place with z towards the header: turned over about its y."""
    from develop.solid import Frame

    x, y, z = frame.axes
    return Frame(frame.origin, _rows(-x, y, -z))


def _rows(*rows: Array) -> Array:
    import numpy as np

    return np.array(rows)
