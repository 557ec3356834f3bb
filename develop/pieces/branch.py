"""One duct into another: the branch, and the header with its opening."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import ceil, degrees, floor, pi
from typing import TYPE_CHECKING, ClassVar

from develop.errors import Refusal
from develop.pieces.common import Plate
from develop.pieces.field_types import ANGLE, DIRECTION, LENGTH, MARK, SECTION, Angle, Choice, Length
from develop.pieces.fields import Piece, about
from develop.pieces.header import HEADER
from develop.pieces.wording import direction_words, section_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pieces.assemble import Hole
    from develop.pieces.built import Built
    from develop.pieces.header import StraightHeader, TaperHeader
    from develop.sections.section import Section
    from develop.solid import Frame
    from develop.surfaces.band_trim import BandTrim
    from develop.surfaces.cylinder import Cylinder, CylinderSheet
    from develop.surfaces.meeting import CylinderTrim
    from develop.surfaces.sheet import Sheet

__all__ = ["Branch"]

# How far an overhang may be rounding [mm].
_TANGENT = 1e-9
_HALVINGS = 70
_TRIES = 24
_WORDS = ("RIGHT", "TOP", "LEFT", "BOTTOM")


@dataclass(frozen=True, kw_only=True)
class Branch(Plate):
    """A branch into a straight or a tapered header; lengths in mm, angles in radians.

    The header runs along its own piece frame from its end A to its end B. The branch's end A is the
    joint, its end B the free end; facing that free end, right is the header's right as its own
    end B is faced with leaves_at upward, and up is towards the header's end A.
    """

    kind: ClassVar[str] = "branch"
    example: ClassVar[dict[str, str | float]] = {
        "header": "round 400",
        "header_length": 900,
        "branch": "round 250",
        "angle": 60,
        "centre_to_end": 500,
    }

    header: SectionSpec | Piece = field(
        metadata=about(HEADER, "section of the header, or a tapered header as a table")
    )
    branch: SectionSpec = field(metadata=about(SECTION, "section of the branch"))
    centre_to_end: float = field(
        metadata=about(
            LENGTH, "along the branch's axis, from its point nearest the header's axis to the free end"
        )
    )
    header_length: float | None = field(
        default=None,
        metadata=about(LENGTH, "length of a straight header; a tapered one has its own"),
    )
    angle: float = field(
        default=0.5 * pi,
        metadata=about(
            Angle(least=10.0, most=170.0), "between the two axes; below 90 it leans to the header's end B"
        ),
    )
    leaves_at: float = field(
        default=0.5 * pi, metadata=about(DIRECTION, "direction round the header that it leaves from")
    )
    off_centre: float = field(
        default=0.0,
        metadata=about(
            Length(least=-100_000.0, most=100_000.0),
            "the branch's axis moved sideways, to the right as the header's end B is faced with leaves_at up",
            handed=True,
        ),
    )
    from_a: float | None = field(
        default=None,
        metadata=about(LENGTH, "where along the header the branch's axis passes; the middle when left out"),
    )
    rotate: float = field(
        default=0.0,
        metadata=about(
            ANGLE,
            "the branch's section about its own axis; at 0 its width lies across the header",
            handed=True,
        ),
    )
    joint: str = field(
        default="set-on",
        metadata=about(
            Choice(("set-on", "set-in")), "the branch stands on the header, or reaches through its wall"
        ),
    )
    opening: str = field(
        default="cut",
        metadata=about(
            Choice(("cut", "marked", "ties")),
            "the opening cut, only marked, or left on ties: a hole cut first distorts in rolling",
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    # ---- where the branch stands ----------------------------------------------------------

    def _header(self) -> StraightHeader | TaperHeader:
        """The header in its wall. Raises Refusal."""
        from develop.pieces.header import StraightHeader, tapered
        from develop.pieces.wall import PLACES, given_section, neutral_distance

        # Set on, the branch stands on the outside; set in, it ends flush with the inside.
        place = PLACES["outside" if self.joint == "set-on" else "inside"] - PLACES[self.sizes]
        outward = self.thickness * place
        if not isinstance(self.header, SectionSpec):
            if self.header_length is not None:
                raise Refusal(
                    field="header_length",
                    given="given together with a tapered header",
                    allowed="the length or height of the header's own table",
                )
            return tapered(self.header, thickness=self.thickness, sizes=self.sizes, outward=outward)
        if self.header_length is None:
            raise Refusal(field="header_length", given="not given", allowed="the length of the header")
        section = given_section(self.header, field="header", thickness=self.thickness, sizes=self.sizes)
        distance = neutral_distance(
            thickness=self.thickness, sizes=self.sizes, neutral_line=self.neutral_line
        )
        return StraightHeader(section, section.offset(outward), self.header_length, distance)

    def _frame(self, header: StraightHeader | TaperHeader) -> Frame:
        """The branch's frame in the header's: z along its axis to the free end."""
        from develop.pieces.header import standing

        return standing(
            header,
            angle=self.angle,
            leaves_at=self.leaves_at,
            off_centre=self.off_centre,
            rotate=self.rotate,
            from_a=self.from_a,
        )

    def surface(self) -> Cylinder:
        """The branch between its joint and its free end. Raises Refusal."""
        return self._parts()[0]

    def _parts(self) -> tuple[Cylinder, StraightHeader | TaperHeader, Frame]:
        """The branch's side, the header and the branch's place in it. Raises Refusal."""
        import numpy as np

        from develop.pieces.wall import given_section, neutral_distance
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        branch = given_section(self.branch, field="branch", thickness=self.thickness, sizes=self.sizes)
        header = self._header()
        frame = self._frame(header)
        self._overhang(branch, header, frame)
        trim: BandTrim | CylinderTrim = header.trim(frame)
        distance = neutral_distance(
            thickness=self.thickness, sizes=self.sizes, neutral_line=self.neutral_line
        )
        surface = Cylinder(
            branch, trim, Plane(self.centre_to_end, np.zeros(2)), distance, trim.breaks(branch)
        )
        shortest = float(surface.lengths(branch.at_direction(np.radians(np.arange(360.0)))).min())
        if shortest <= 0.0:
            least = ceil((self.centre_to_end - shortest) * 10.0 + 1.0) / 10.0
            raise Refusal(
                field="centre_to_end",
                given=f"{number_text(self.centre_to_end)} mm ends {-shortest:.4g} mm inside the header",
                allowed=f"{number_text(least)} mm or more",
            )
        self._reach(branch, header, frame)
        return surface, header, frame

    def _overhang(self, branch: Section, header: StraightHeader | TaperHeader, frame: Frame) -> None:
        """Raises Refusal where the branch reaches beside the header, with what works."""
        from dataclasses import replace

        over = header.overhang(branch, frame)
        if over <= _TANGENT:
            return

        def fits(off_centre: float) -> bool:
            moved = replace(self, off_centre=off_centre)
            return header.overhang(branch, moved._frame(header)) <= _TANGENT

        # The overhang is convex in off_centre: from its least place, how far either way still fits?
        best = self._least_overhang(branch, header)
        if not fits(best):
            least = header.overhang(branch, replace(self, off_centre=best)._frame(header))
            raise Refusal(
                field="branch",
                given=f"{self.branch.text} is {2.0 * least:.4g} mm wider than the header there",
                allowed="a branch at most that much less across the header, or a larger header",
            )
        limits = []
        for far in (best - 1e6, best + 1e6):
            inside, outside = best, far
            for _ in range(_HALVINGS):
                middle = 0.5 * (inside + outside)
                inside, outside = (middle, outside) if fits(middle) else (inside, middle)
            limits.append(inside)
        raise Refusal(
            field="off_centre",
            given=f"{number_text(self.off_centre)} mm leaves the branch {over:.4g} mm beside the header",
            allowed=f"from {number_text(ceil(limits[0] * 10.0 - 1e-5) / 10.0)} to "
            f"{number_text(floor(limits[1] * 10.0 + 1e-5) / 10.0)} mm",
        )

    def _least_overhang(self, branch: Section, header: StraightHeader | TaperHeader) -> float:
        """The off_centre [mm] at which the branch reaches least beside the header."""
        from dataclasses import replace

        def over(off_centre: float) -> float:
            return header.overhang(branch, replace(self, off_centre=off_centre)._frame(header))

        size = header.section.width + header.section.height
        low, high = -size, size
        for _ in range(_HALVINGS):
            a, b = low + (high - low) / 3.0, high - (high - low) / 3.0
            low, high = (low, b) if over(a) < over(b) else (a, high)
        middle = 0.5 * (low + high)
        # A symmetric header has its least place at the centre exactly.
        return 0.0 if abs(middle) < 1e-6 * size else middle

    def _reach(self, branch: Section, header: StraightHeader | TaperHeader, frame: Frame) -> None:
        """Raises Refusal where the joint runs past an end of the header."""
        from dataclasses import replace

        from develop.pieces.header import StraightHeader

        if header.fits(branch, frame):
            return
        middle = float(frame.origin[2])
        field, other = "from_a", "a longer header, or a smaller branch"
        if isinstance(header, StraightHeader):
            low, high = header.span(branch, frame)
            shortest, longest = middle - low, header.length - (high - middle)
            if shortest > longest:
                field, other = (
                    "header_length",
                    f"a header of more than {number_text(ceil(high - low + 1.0))} mm",
                )
            end = "A" if low <= 0.0 else "B"
        else:

            def fits(from_a: float) -> bool:
                try:
                    return header.fits(branch, replace(self, from_a=from_a)._frame(header))
                except Refusal:
                    return False

            tries = [header.length * (i + 0.5) / _TRIES for i in range(_TRIES)]
            good = [each for each in tries if fits(each)]
            shortest, longest = 1.0, 0.0
            if good:
                ends = []
                for inside, outside in ((good[0], 0.0), (good[-1], header.length)):
                    for _ in range(_HALVINGS // 2):
                        between = 0.5 * (inside + outside)
                        inside, outside = (between, outside) if fits(between) else (inside, between)
                    ends.append(inside)
                shortest, longest = ends
            end = "A" if middle < 0.5 * (good[0] + good[-1] if good else header.length) else "B"
        least, most = ceil(shortest * 10.0 + 1.0) / 10.0, floor(longest * 10.0 - 1.0) / 10.0
        raise Refusal(
            field=field,
            given=f"the joint reaches past the header's end {end}",
            allowed=f"from_a from {number_text(least)} to {number_text(most)} mm" if least <= most else other,
        )

    # ---- the two patterns -------------------------------------------------------------------

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from dataclasses import replace

        import numpy as np

        from develop.pattern.ties import TIES, tie_width
        from develop.pieces.assemble import pattern_of, seam_parameter
        from develop.pieces.built import Built, Part
        from develop.pieces.wall import PLACES
        from develop.solid import End, Frame, Solid
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        surface, header, frame = self._parts()
        branch_section = surface.section
        seam = seam_parameter(branch_section, surface.lengths, self.seam_at)
        sheet = surface.sheet(seam)
        leaning = f"{number_text(round(degrees(self.angle), 6))}° to the header's axis"
        off = f", {size_words(self.off_centre, units)} off centre" if self.off_centre else ""
        where = f"{leaning}, leaves at {direction_words(self.leaves_at)}{off}, {self.joint}"
        sections = tuple(each for each in (self.branch, self.header) if isinstance(each, SectionSpec))
        wording = self.wording(
            sheet,
            sections,
            sizes=f"branch {section_words(self.branch, units)}, "
            f"centre to end {size_words(self.centre_to_end, units)}",
            place=f"into header {self._header_words(units)}, {where}",
            held="lengths and joint",
            units=units,
            more=("END A: the joint; END B: the free end",),
        )
        branch = pattern_of(
            sheet,
            branch_section,
            branch_section,
            wording=replace(
                wording, mark=f"{self.mark}-branch", facts=(f"{self.mark}-branch", *wording.facts[1:])
            ),
            divisions=self.divisions,
            distance=surface.distance,
        )
        branch_solid = Solid(
            header.joint(branch_section, frame),
            End.cut(branch_section, height=self.centre_to_end, rise=np.zeros(2)),
            side="parallel",
            seam=seam,
            seam_b=seam,
            distance=surface.distance,
        )

        # The opening is the branch's bore where it stands on the header, its outside where it reaches in.
        bore = PLACES["inside" if self.joint == "set-on" else "outside"] - PLACES[self.sizes]
        hole_section = branch_section.offset(self.thickness * bore)
        through = header.through(frame)
        header_seam = float(header.section.at_direction(np.array([self.leaves_at + pi]))[0])
        header_sheet = header.sheet(header_seam)
        tie = tie_width(self.thickness)
        opening = {
            "cut": "cut",
            "marked": "only marked (dashed): cut after rolling",
            "ties": f"left on {TIES} ties {size_words(tie, units)} wide",
        }[self.opening]
        over = self.wording(
            header_sheet,
            sections,
            sizes=f"header {self._header_words(units)}",
            place=f"opening for branch {section_words(self.branch, units)}, {opening}, {where}",
            held="length and opening",
            units=units,
        )
        hole_sheet = Cylinder(
            hole_section,
            through,
            Plane(self.centre_to_end, np.zeros(2)),
            0.0,
            through.breaks(hole_section),
        ).sheet(seam)
        header_pattern = pattern_of(
            header_sheet,
            header.section,
            header.section_b,
            wording=replace(
                over,
                mark=f"{self.mark}-header",
                facts=(f"{self.mark}-header", *over.facts[1:]),
            ),
            divisions=self.divisions,
            distance=header.distance,
            turn_b=header.turn_b,
            holes=(self._hole(hole_sheet, header_sheet, through),),
        )
        header_pattern = replace(header_pattern, openings_as=self.opening, tie=tie)
        header_solid = header.solid(header_seam, header_sheet, (header.hole(hole_section, frame),))
        return Built(
            (
                Part(branch, branch_solid, (frame,)),
                Part(header_pattern, header_solid, (Frame.square(),)),
            )
        )

    def _header_words(self, units: str) -> str:
        if isinstance(self.header, SectionSpec):
            assert self.header_length is not None
            return f"{section_words(self.header, units)}, length {size_words(self.header_length, units)}"
        ends = [name for name in ("section", "end_a", "end_b") if hasattr(self.header, name)]
        sizes = " to ".join(section_words(getattr(self.header, name), units) for name in ends)
        return f"{self.header.kind} {sizes}"

    def _hole(self, branch: CylinderSheet, header: Sheet, trim: BandTrim | CylinderTrim) -> Hole:
        """The opening in the header's sheet, with the branch's four marks on it."""
        import numpy as np

        from develop.pieces.assemble import Hole
        from develop.surfaces.meeting import Opening

        opening = Opening(branch, header, trim)
        section = branch.cylinder.section
        at = branch.from_a(section.at_direction(np.radians([0.0, 90.0, 180.0, 270.0])))
        trace = opening.trace(at.panel, at.x)
        return Hole(
            opening.controls,
            opening.length,
            opening.area,
            trace.points,
            trace.tangents,
            trace.arcs,
            _WORDS,
        )
