"""One duct into another: the branch, and the header with its opening."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import ceil, degrees, floor, pi
from typing import TYPE_CHECKING, ClassVar

from develop.errors import InputError, Refusal
from develop.pieces.common import Jointed
from develop.pieces.field_types import (
    ANGLE,
    DIRECTION,
    LENGTH,
    MARK,
    SECTION,
    Angle,
    Choice,
    Direction,
    Length,
)
from develop.pieces.fields import Piece, about
from develop.pieces.header import HEADER
from develop.pieces.wording import SIDES, direction_words, off_centre_words, section_words, size_words
from develop.sections.text import SectionSpec
from develop.units import number_text

if TYPE_CHECKING:
    from develop.pattern.pattern import Pattern
    from develop.pieces.assemble import Hole, Share
    from develop.pieces.built import Built, Part
    from develop.pieces.clearance import Beside
    from develop.pieces.header import StraightHeader, TaperHeader
    from develop.pieces.joint_edge import JointEdge
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
# Less than this over its length a line of centres does not slope.
_SLOPING = 1e-9
_TRIES = 24
# On the header's sheets these are the branch's, which has its own right and left.
_WORDS = ("BRANCH RIGHT", "BRANCH TOP", "BRANCH LEFT", "BRANCH BOTTOM")


@dataclass(frozen=True, kw_only=True)
class Branch(Jointed):
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
            Choice(("set-on", "set-in", "tap")),
            "the branch stands on the header, reaches through its wall, or lies on it with a lap flange",
        ),
    )
    lap: float = field(
        default=20.0,
        metadata=about(
            Length(least=1.0, most=1000.0), "width of the lap flange of a tap", only_with=("joint", "tap")
        ),
    )
    opening: str = field(
        default="cut",
        metadata=about(
            Choice(("cut", "marked", "ties")),
            "the opening cut, only marked, or left on ties: a hole cut first distorts in rolling",
        ),
    )
    header_seam: float | str = field(
        default="opposite",
        metadata=about(Direction(words=("opposite",)), "where the header's own seam is: opposite the branch"),
    )
    pad: float = field(
        default=0.0,
        metadata=about(
            Length(least=0.0, most=10_000.0),
            "width of a compensation plate on the header all round a branch that is set on or in; 0 for none",
        ),
    )
    pad_thickness: float | None = field(
        default=None,
        metadata=about(
            Length(least=0.1, most=1000.0),
            "thickness of that plate; the header's when left out",
            only_with="pad",
        ),
    )
    pad_in: str = field(
        default="one",
        metadata=about(
            Choice(("one", "halves")),
            "the plate in one piece, or in halves that meet at the header's right and left",
            only_with="pad",
        ),
    )
    tell_tale: float = field(
        default=6.0,
        metadata=about(
            Length(least=0.0, most=100.0),
            "diameter of the tell-tale hole in each part of it; 0 for none",
            only_with="pad",
        ),
    )
    mark: str = field(default=kind, metadata=about(MARK, "name of the piece and of its files", own=False))

    # ---- where the branch stands ----------------------------------------------------------

    def _header(self) -> StraightHeader | TaperHeader:
        """The header in its wall. Raises Refusal."""
        from develop.pieces.header import StraightHeader, tapered
        from develop.pieces.wall import PLACES

        # Set on, the branch stands on the outside; set in, it ends flush with the inside.
        place = PLACES["inside" if self.joint == "set-in" else "outside"] - PLACES[self.sizes]
        outward = self.thickness * place
        if not isinstance(self.header, SectionSpec):
            if self.header_length is not None:
                raise Refusal(
                    field="header_length",
                    given="given together with a tapered header",
                    allowed="the length or height of the header's own table",
                )
            return tapered(
                self.header,
                thickness=self.thickness,
                sizes=self.sizes,
                lining=self.lining,
                neutral_line=self.neutral_line,
                outward=outward,
            )
        if self.header_length is None:
            raise Refusal(field="header_length", given="not given", allowed="the length of the header")
        section = self.in_wall(self.header, field="header")
        return StraightHeader(section, section.offset(outward), self.header_length, self.distance(section))

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

    def _edge(self) -> JointEdge:
        """How the branch's edge on the header is made: only set on does plate touch plate with it."""
        from develop.pieces.joint_edge import JointEdge, joint_edge

        return joint_edge(self) if self.joint == "set-on" else JointEdge()

    def surface(self) -> Cylinder:
        """The branch between its joint and its free end. Raises Refusal."""
        return self._parts()[0]

    def _parts(self) -> tuple[Cylinder, StraightHeader | TaperHeader, Frame]:
        """The branch's side, the header and the branch's place in it. Raises Refusal."""
        import numpy as np

        if self.pad and self.joint == "tap":
            raise Refusal(
                field="pad",
                given=f"{number_text(self.pad)} mm, but the lap flange of a tap lies where the plate would",
                allowed="joint = set-on or set-in with a compensation plate, or no pad",
            )

        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        branch = self.in_wall(self.branch, field="branch")
        header = self._header()
        frame = self._frame(header)
        made = self._edge()
        # Cut along the header the line of one face is laid on it; else the corner that touches has room.
        self._overhang(branch.offset(made.up) if made.along else branch, header, frame)
        trim: BandTrim | CylinderTrim = header.trim(frame)
        edge = made.trim(trim)
        surface = Cylinder(
            branch, edge, Plane(self.centre_to_end, np.zeros(2)), self.distance(branch), edge.breaks(branch)
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
            largest = self._largest(header, replace(self, off_centre=best)._frame(header))
            raise Refusal(
                field="branch",
                given=f"{self.branch.text} is {2.0 * least:.4g} mm wider than the header there",
                allowed=f"{largest}, or a larger header",
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

    def _largest(self, header: StraightHeader | TaperHeader, frame: Frame) -> str:
        """The largest branch of its kind and proportions that stays within the header, in words."""
        from dataclasses import replace

        from develop.pieces.wall import given_section

        spec = self.branch
        if spec.kind in ("pipe", "measured"):
            return "a branch that is at most that much less across the header"

        def scaled(width: float) -> SectionSpec:
            share = width / spec.width
            return replace(spec, width=width, height=spec.height * share, r=spec.r * share)

        def fits(width: float) -> bool:
            try:
                section = given_section(
                    scaled(width), field="branch", thickness=self.thickness, sizes=self.sizes
                )
            except InputError:
                return False
            return header.overhang(section, frame) <= _TANGENT

        inside, outside = 0.0, spec.width
        for _ in range(_HALVINGS // 2):
            middle = 0.5 * (inside + outside)
            inside, outside = (middle, outside) if fits(middle) else (inside, middle)
        width = floor(inside * 10.0 + 1e-5) / 10.0
        if width <= 0.0:
            return "another branch"
        # Both sizes are rounded down, for what is named has to work.
        largest = scaled(width)
        return (
            f"{section_words(replace(largest, height=floor(largest.height * 10.0 + 1e-5) / 10.0), 'mm')} "
            "or less"
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

    # ---- the patterns -----------------------------------------------------------------------

    def build(self, *, units: str = "mm") -> Built:
        """Raises Refusal."""
        from develop.pieces.built import Built
        from develop.pieces.clearance import seam_warnings

        surface, header, frame = self._parts()
        seam = self._branch_seam(surface)
        header_seam = self._header_seam(surface.section, header, frame)
        branch = self._branch_part(surface, header, frame, seam, units)
        over = self._header_part(
            surface.section, header, frame, (seam, header_seam), units, first=len(branch.parts)
        )
        pads: tuple[Part, ...] = ()
        beside: tuple[Beside, ...] = ()
        if self.pad:
            pads, beside = self._pads(surface.section, header, frame, (seam, header_seam), units)
        built = Built(
            (*branch.parts, *over.parts, *pads),
            (*branch.joints, *over.joints),
            divided=(*branch.divided, *over.divided),
        )
        return seam_warnings(built, clear=self.clear, also=beside)

    def check(self) -> None:
        """Raises Refusal also for a header's seam, a lap flange or a pad that has no room."""
        from develop.pieces.tap import lap_flange

        super().check()
        surface, header, frame = self._parts()
        seam = self._branch_seam(surface)
        header_seam = self._header_seam(surface.section, header, frame)
        if self.joint == "tap":
            lap_flange(surface, surface.sheet(seam), lap=self.lap, thickness=self.thickness)
        if self.pad:
            self._pads(surface.section, header, frame, (seam, header_seam), "mm")

    def _branch_seam(self, surface: Cylinder) -> float:
        from develop.pieces.assemble import seam_parameter

        return seam_parameter(surface.section, surface.lengths, self.seam_at)

    def _header_seam(self, branch: Section, header: StraightHeader | TaperHeader, frame: Frame) -> float:
        """Parameter of the header's section at its seam. Raises Refusal where it runs through the opening."""
        import numpy as np

        from develop.pieces.clearance import check_parts_uncut, check_uncut

        section = header.section
        opposite = float(section.at_direction(np.array([self.leaves_at + pi]))[0])
        parts = self.made_in if isinstance(self.made_in, int) else 1
        if not isinstance(self.header_seam, str):
            direction = self.header_seam
        elif parts == 1:
            return opposite
        else:
            # Of an even number of parts one would else meet its neighbour in the opening.
            direction = self.leaves_at + (pi / parts if parts % 2 == 0 else pi)
        seam = float(section.at_direction(np.array([direction]))[0])
        # On the sheet that is slit opposite the branch its opening lies in one piece.
        u = branch.at_direction(np.radians(np.arange(360.0)))
        sheet = header.sheet(opposite)
        place, _ = header.trim(frame).on_sheet(np.hstack([branch.point(u), np.zeros((len(u), 1))]), sheet)
        on = sheet.lines(place).u_a
        check_uncut(section, seam, on, leaves_at=self.leaves_at, field="header_seam")
        if parts > 1:
            check_parts_uncut(section, seam, parts, on, leaves_at=self.leaves_at)
        return seam

    @property
    def _specs(self) -> tuple[SectionSpec, ...]:
        return tuple(each for each in (self.branch, self.header) if isinstance(each, SectionSpec))

    def _leaning(self) -> str:
        line = "axis" if isinstance(self.header, SectionSpec) else self._centre_line()
        return f"{number_text(round(degrees(self.angle), 6))}° to the header's {line}"

    def _centre_line(self) -> str:
        """What the angle is measured to, on a tapered header."""
        import numpy as np

        header = self._header()
        sloping = float(np.abs(header.centre(header.length)[:2]).max()) > _SLOPING * header.length
        return "sloping line of centres" if sloping else "axis"

    @property
    def _sides(self) -> tuple[str, ...]:
        return (SIDES,) if self.off_centre else ()

    def _where(self, units: str) -> str:
        """How the branch stands on the header, in words."""
        off = f", {off_centre_words(self.off_centre, units)}" if self.off_centre else ""
        return f"{self._leaning()}, leaves at {direction_words(self.leaves_at)}{off}, {self.joint}"

    def _branch_part(
        self,
        surface: Cylinder,
        header: StraightHeader | TaperHeader,
        frame: Frame,
        seam: float,
        units: str,
    ) -> Built:
        """The branch; seam: parameter of its section."""
        from dataclasses import replace

        import numpy as np

        from develop.pieces.assemble import pattern_of
        from develop.pieces.cutting import check_rivet
        from develop.pieces.joint_edge import with_bevels
        from develop.pieces.parting import parted
        from develop.pieces.tap import lap_flange
        from develop.solid import End, Solid, StandingEnd

        section = surface.section
        joint = ("END A: the joint; END B: the free end",)
        edge, met = self._edge(), header.joint(section, frame)
        inner, outer = edge.corners or (0.0, 0.0)
        stands = StandingEnd.of(met, inner=inner, outer=outer)

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            # The header cannot give way: the whole gap of the joint is the branch's.
            cutting = self.cutting(flat, joints="a", alone="a", units=units, share=share)
            words: tuple[str, ...] = joint
            if self.joint == "tap":
                flange = lap_flange(surface, flat, lap=self.lap, thickness=self.thickness)
                cutting = replace(cutting, allowances={**cutting.allowances, "a": flange})
                if self.rivet:
                    check_rivet(self.rivet, self.lap, flat.edge_a / (len(flange.tabs) + 1))
                    cutting = replace(cutting, rivets=(*cutting.rivets, ("a", self.rivet)))
                words = (
                    f"END A: the joint, a lap flange {size_words(self.lap, units)} wide beyond the net line, "
                    f"cut in to make {len(flange.tabs) + 1} tabs, turned out",
                    "END B: the free end",
                )
            wording = self.wording(
                flat,
                self._specs,
                sizes=f"branch {section_words(self.branch, units)}, "
                f"centre to end {size_words(self.centre_to_end, units)}",
                place=f"into header {self._header_words(units)}, {self._where(units)}",
                held=edge.held("lengths", "joint"),
                units=units,
                around=section,
                more=(*words, *edge.words(mitre=False), *self._sides),
            )
            pattern = pattern_of(
                flat,
                section,
                section,
                wording=replace(
                    wording, mark=f"{self.mark}-branch", facts=(f"{self.mark}-branch", *wording.facts[1:])
                ),
                divisions=self.divisions,
                distance=surface.distance,
                cutting=cutting,
                share=share,
            )
            return with_bevels(pattern, edge, {"a": stands}, plates=1)

        solid = Solid(
            stands if edge.corners else met,
            End.cut(section, height=self.centre_to_end, rise=np.zeros(2)),
            side="parallel",
            seam=seam,
            seam_b=seam,
            distance=surface.distance,
        )
        return parted(self, surface.sheet(seam), solid, drawn, units=units).placed_at((frame,))

    def _header_part(
        self,
        branch: Section,
        header: StraightHeader | TaperHeader,
        frame: Frame,
        seams: tuple[float, float],
        units: str,
        *,
        first: int,
    ) -> Built:
        """The header with its opening. branch: its section as given; seams: of the branch and the header.
        first: the number of its first part in the piece."""
        from dataclasses import replace

        import numpy as np

        from develop.pattern.ties import TIES, tie_width
        from develop.pieces.assemble import pattern_of
        from develop.pieces.parting import holes_on, parted
        from develop.pieces.wall import PLACES
        from develop.solid import Frame
        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        # The opening is the branch's bore where it stands on the header, its outside where it reaches in.
        bore = PLACES["outside" if self.joint == "set-in" else "inside"] - PLACES[self.sizes]
        section = branch.offset(self.thickness * bore)
        through = header.through(frame)
        sheet = header.sheet(seams[1])
        tie = tie_width(self.thickness)
        opening = {
            "cut": "cut",
            "marked": "only marked (dashed): cut after rolling",
            "ties": f"left on {TIES} ties {size_words(tie, units)} wide",
        }[self.opening]
        end = Plane(self.centre_to_end, np.zeros(2))
        cutter = Cylinder(section, through, end, 0.0, through.breaks(section)).sheet(seams[0])
        hole = self._hole(cutter, sheet, through)

        def drawn(flat: Sheet, share: Share | None) -> Pattern:
            over = self.wording(
                flat,
                self._specs,
                sizes=f"header {self._header_words(units)}",
                place=f"opening for branch {section_words(self.branch, units)}, {opening}, "
                f"{self._where(units)}",
                held="length and opening",
                units=units,
                around=header.around,
                more=self._sides,
            )
            pattern = pattern_of(
                flat,
                header.section,
                header.section_b,
                wording=replace(
                    over, mark=f"{self.mark}-header", facts=(f"{self.mark}-header", *over.facts[1:])
                ),
                divisions=self.divisions,
                distance=header.distance,
                turn_b=header.turn_b,
                cutting=self.cutting(flat, units=units, share=share),
                holes=holes_on(flat, (hole,)),
                share=share,
            )
            return replace(pattern, openings_as=self.opening, tie=tie)

        solid = header.solid(seams[1], sheet, (header.hole(section, frame),))
        made = parted(self, sheet, solid, drawn, units=units)
        return made.placed_at((Frame.square(),), first=first)

    def _pads(
        self,
        branch: Section,
        header: StraightHeader | TaperHeader,
        frame: Frame,
        seams: tuple[float, float],
        units: str,
    ) -> tuple[tuple[Part, ...], tuple[Beside, ...]]:
        """The compensation plate, round the outside of the branch on the outside of the header, and how
        near it lies to the seams."""
        from develop.pieces.neutral import neutral_of
        from develop.pieces.pad import Pad, pad_parts
        from develop.pieces.wall import PLACES
        from develop.pieces.wording import plate_words

        thickness = self.thickness if self.pad_thickness is None else self.pad_thickness
        outward = self.thickness * (PLACES["outside"] - PLACES[self.sizes])
        face = header.covered(outward=outward, distance=0.0)
        lift = (
            thickness
            * neutral_of(
                self.neutral_line,
                thickness=thickness,
                inner=0.0,
                sheet=lambda: face.sheet(float(face.section.breaks[0])),
            ).place
        )
        hole = f"tell-tale hole {size_words(self.tell_tale, units)} in each part" if self.tell_tale else ""
        return pad_parts(
            Pad(self.pad, self.pad_in == "halves", self.tell_tale),
            branch=branch.offset(outward),
            header=header.covered(outward=outward, distance=lift),
            frame=frame,
            lift=lift,
            seams=seams,
            rotate=self.rotate,
            mark=f"{self.mark}-pad",
            beside=(f"{self.mark}-branch", f"{self.mark}-header"),
            quantity=self.quantity,
            units=units,
            leaning=self._leaning(),
            facts=(
                f"{size_words(self.pad, units)} wide all round branch {section_words(self.branch, units)}",
                *(() if self.rotate else ("BRANCH TOP towards the header's END A",)),
                *((hole,) if hole else ()),
                plate_words(self.material, thickness),
                "its size as given: what is needed is for the pressure code to say",
            ),
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
