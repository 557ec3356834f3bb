"""What a branch goes into: a straight header of any section, or a transition or cone given as a table."""

from __future__ import annotations

from dataclasses import dataclass, field
from typing import TYPE_CHECKING

from develop.errors import InputError, Problem, Refusal
from develop.pieces.field_types import SECTION
from develop.pieces.fields import Piece
from develop.sections.text import SectionSpec
from develop.wording import listed, shown

if TYPE_CHECKING:
    from develop.quadrature import Array
    from develop.sections.section import Section
    from develop.solid import Frame, MeetingEnd, Solid
    from develop.surfaces.band import Band
    from develop.surfaces.band_trim import BandTrim
    from develop.surfaces.cylinder import Cylinder
    from develop.surfaces.meeting import CylinderTrim
    from develop.surfaces.sheet import Sheet

__all__ = ["HEADER", "HeaderText", "StraightHeader", "TaperHeader", "standing", "tapered"]

_TAPERED = ("transition", "cone")


@dataclass(frozen=True)
class HeaderText:
    """A section, or in a job file a table with the kind and the fields of a transition or a cone."""

    metavar: str = "SECTION"
    unit: str = "mm"

    @property
    def allowed(self) -> str:
        return f"{SECTION.allowed}; in a job file also a table of kind {listed(_TAPERED)} with its fields"

    def read(self, given: object, *, unit: str) -> SectionSpec | Piece:
        if not isinstance(given, dict):
            spec = SECTION.read(given, unit=unit)
            assert isinstance(spec, SectionSpec)
            return spec
        from develop.pieces import kind_of
        from develop.pieces.fields import read_piece

        name = given.get("kind")
        if name not in _TAPERED:
            raise InputError(Problem("kind", f"{shown(name)} is not a tapered header", listed(_TAPERED)))
        rest = {key: value for key, value in given.items() if key != "kind"}
        piece, problems = read_piece(kind_of(str(name)), rest, unit=unit)
        if piece is None:
            raise InputError(problems)
        return piece

    def record(self, value: object) -> object:
        if isinstance(value, SectionSpec):
            return value.text
        from develop.pieces.fields import record_of

        assert isinstance(value, Piece)
        return {"kind": value.kind, **record_of(value)}

    def text(self, value: object) -> str:
        return value.text if isinstance(value, SectionSpec) else str(value)

    def mirrored(self, value: object) -> object:
        """The header with right and left exchanged."""
        if isinstance(value, SectionSpec):
            return SECTION.mirrored(value)
        from develop.pieces.hand import mirrored

        assert isinstance(value, Piece)
        return mirrored(value)


HEADER = HeaderText()


@dataclass(frozen=True)
class StraightHeader:
    """A cylinder. section: on the given surface. face: the section of the face that a branch meets.

    length [mm]; distance: of the sheet outside the given surface [mm].
    """

    section: Section
    face: Section
    length: float
    distance: float

    @property
    def around(self) -> Section:
        """What its wall is round."""
        return self.section

    @property
    def section_b(self) -> Section | None:
        """Section of end B, for its marks."""
        return self.section

    turn_b: float = 0.0

    def centre(self, along: float) -> Array:
        """The point of the axis at a height [mm], (3,)."""
        import numpy as np

        return np.array([0.0, 0.0, along])

    def trim(self, frame: Frame) -> CylinderTrim:
        """Where a branch ends on the face."""
        from develop.surfaces.meeting import CylinderTrim

        return CylinderTrim(self.face, frame)

    def through(self, frame: Frame) -> CylinderTrim:
        """Where the hole goes through the developed header."""
        from develop.surfaces.meeting import CylinderTrim

        return CylinderTrim(self.section, frame)

    def joint(self, branch: Section, frame: Frame, *, sheet: float = 0.0) -> MeetingEnd:
        """The branch's end on the face, in space. sheet: how far outside of it a sheet is developed [mm]."""
        from develop.solid import MeetingEnd

        return MeetingEnd.of(branch, self.face, frame, sheet=sheet)

    def hole(self, branch: Section, frame: Frame) -> MeetingEnd:
        """The hole in the header, in space."""
        from develop.solid import MeetingEnd

        return MeetingEnd.of(branch, self.section, frame, sheet=self.distance)

    def overhang(self, branch: Section, frame: Frame) -> float:
        """How far [mm] the branch reaches beside the face; not above zero where it fits."""
        import numpy as np

        from develop.surfaces.meeting import sideways

        right = sideways(frame)
        mine, middle = frame.axes[:2, :2] @ right, float(frame.origin[:2] @ right)
        over = [
            s * middle + float(branch.support(*(s * mine))) - float(self.face.support(*(s * right)))
            for s in (1.0, -1.0)
        ]
        return float(np.max(over))

    def surface(self) -> Cylinder:
        """The header's side."""
        import numpy as np

        from develop.surfaces.cylinder import Cylinder
        from develop.surfaces.trim import Plane

        return Cylinder(self.section, Plane(0.0, np.zeros(2)), Plane(self.length, np.zeros(2)), self.distance)

    def fits(self, branch: Section, frame: Frame) -> bool:
        """Whether the joint keeps between the two ends."""
        low, high = self.span(branch, frame)
        return low > 0.0 and high < self.length

    def span(self, branch: Section, frame: Frame) -> tuple[float, float]:
        """Least and largest height [mm] of the joint."""
        import numpy as np

        trim, start = self.trim(frame), _around(branch)
        along = np.broadcast_to(np.array([0.0, 0.0, 1.0]), start.shape)
        z = (start @ frame.axes + frame.origin)[:, 2] + trim.meet(start, along) * frame.axes[2, 2]
        return float(z.min()), float(z.max())

    def sheet(self, seam: float) -> Sheet:
        """The header laid flat."""
        return self.surface().sheet(seam)

    def covered(self, *, outward: float, distance: float) -> StraightHeader:
        """The side of a plate that lies on the face `outward` [mm] of the given surface; its own sheet is
        developed `distance` [mm] outside of that."""
        face = self.section.offset(outward)
        return StraightHeader(face, face, self.length, distance)

    def solid(self, seam: float, sheet: Sheet, openings: tuple[MeetingEnd, ...]) -> Solid:
        """The finished header."""
        import numpy as np

        from develop.solid import End, Solid

        low, high = (End.cut(self.section, height=height, rise=np.zeros(2)) for height in (0.0, self.length))
        return Solid(
            low, high, side="parallel", seam=seam, seam_b=seam, distance=self.distance, openings=openings
        )


@dataclass(frozen=True)
class TaperHeader:
    """A transition or a cone. outward: of the face that a branch meets [mm]."""

    band: Band
    outward: float
    turn_b: float = 0.0
    # A branch asks again and again where it stands.
    _trims: dict[tuple[bytes, bytes, float], BandTrim] = field(
        default_factory=dict, repr=False, compare=False
    )

    @property
    def around(self) -> Band:
        """What its wall is round."""
        return self.band

    @property
    def section(self) -> Section:
        """Section of end A."""
        return self.band.rim_a.section

    @property
    def section_b(self) -> Section | None:
        """Section of end B; None where it is a cut or a point."""
        return None if self.band.cut_b or self.band.rim_b.section.girth == 0.0 else self.band.rim_b.section

    @property
    def distance(self) -> float:
        """Of the sheet outside the given surface [mm]."""
        return self.band.distance

    @property
    def length(self) -> float:
        """Height of the line of centres [mm], up to a cut."""
        from develop.surfaces.trim import Plane

        origin, cut = self.band.rim_b.frame.origin, self.band.cut_b
        if not isinstance(cut, Plane):
            return float(origin[2])
        return float(cut.height / (1.0 - cut.rise @ origin[:2] / origin[2]))

    def centre(self, along: float) -> Array:
        """The point of the line of centres at a height [mm], (3,)."""
        import numpy as np

        origin = self.band.rim_b.frame.origin
        return np.asarray(origin * (along / origin[2]))

    def trim(self, frame: Frame) -> BandTrim:
        """Where a branch ends on the face."""
        return self._trim(frame, self.outward)

    def through(self, frame: Frame) -> BandTrim:
        """Where the hole goes through the developed header."""
        return self._trim(frame, 0.0)

    def _trim(self, frame: Frame, outward: float) -> BandTrim:
        from develop.surfaces.band_trim import BandTrim

        key = frame.origin.tobytes(), frame.axes.tobytes(), outward
        if key not in self._trims:
            self._trims[key] = BandTrim(self.band, frame, outward)
        return self._trims[key]

    def joint(self, branch: Section, frame: Frame, *, sheet: float = 0.0) -> MeetingEnd:
        """The branch's end on the face, in space. sheet: how far outside of it a sheet is developed [mm]."""
        from develop.solid import TaperMeetingEnd

        band, out = self.band, self.outward
        return TaperMeetingEnd.between(branch, band.rim_a, band.rim_b, frame, outward=out, sheet=sheet)

    def hole(self, branch: Section, frame: Frame) -> MeetingEnd:
        """The hole in the header, in space."""
        from develop.solid import TaperMeetingEnd

        band = self.band
        return TaperMeetingEnd.between(branch, band.rim_a, band.rim_b, frame, sheet=band.distance)

    def overhang(self, branch: Section, frame: Frame) -> float:
        """How far [mm] the branch reaches beside the face; not above zero where it fits."""
        return self.trim(frame).overhang(branch)

    def covered(self, *, outward: float, distance: float) -> TaperHeader:
        """The side of a plate that lies on the face `outward` [mm] of the given surface; its own sheet is
        developed `distance` [mm] outside of that."""
        from dataclasses import replace

        return TaperHeader(replace(self.band, distance=outward + distance), outward, self.turn_b)

    def fits(self, branch: Section, frame: Frame) -> bool:
        """Whether the joint keeps on the side between the two ends."""
        trim = self.trim(frame)
        return trim.overhang(branch) <= 1e-9 and not bool(trim.past(_around(branch)).any())

    def sheet(self, seam: float) -> Sheet:
        """The header laid flat."""
        return self.band.sheet(seam)

    def solid(self, seam: float, sheet: Sheet, openings: tuple[MeetingEnd, ...]) -> Solid:
        """The finished header."""
        from develop.solid import End, Solid
        from develop.surfaces.band import BandSheet
        from develop.surfaces.trim import Plane

        band = self.band
        assert isinstance(sheet, BandSheet)
        cut = band.cut_b if isinstance(band.cut_b, Plane) else None
        return Solid(
            End.placed(band.rim_a.section, band.rim_a.frame),
            End.placed(band.rim_b.section, band.rim_b.frame),
            side="hull",
            seam=seam,
            seam_b=sheet.seam_b,
            distance=band.distance,
            cut_b=(cut.height, cut.rise) if cut else None,
            openings=openings,
        )


def _around(branch: Section) -> Array:
    """Points (360, 3) [mm] round a branch, in its own frame, from which its lines run along z."""
    import numpy as np

    u = branch.at_direction(np.radians(np.arange(360.0)))
    return np.hstack([branch.point(u), np.zeros((len(u), 1))])


def tapered(
    piece: Piece,
    *,
    thickness: float,
    sizes: str,
    outward: float,
    lining: float = 0.0,
    neutral_line: float | str = 0.5,
) -> TaperHeader:
    """The header that a transition or a cone makes, in the branch's wall.

    thickness, lining [mm]; neutral_line: 0 inside to 1 outside, or a rule; outward: of the face that a
    branch meets, from the given surface [mm]. Raises Refusal.
    """
    from dataclasses import replace

    from develop.pieces.cone import Cone
    from develop.pieces.transition import Transition

    assert isinstance(piece, Transition | Cone)
    if piece.edge_cut != "square" or piece.fits or piece.collar_a or piece.collar_b:
        raise Refusal(
            field="header",
            given="a tapered header with level edges, fits or collars",
            allowed="edge_cut = square, flush ends and no collars; they can be made on a piece beside it",
        )
    piece = replace(piece, thickness=thickness, sizes=sizes, lining=lining, neutral_line=neutral_line)
    band = piece.surface()
    return TaperHeader(band, outward, getattr(piece, "rotate", 0.0))


def standing(
    header: StraightHeader | TaperHeader,
    *,
    angle: float,
    leaves_at: float,
    off_centre: float = 0.0,
    rotate: float = 0.0,
    from_a: float | None = None,
) -> Frame:
    """Where a branch stands on a header, in its frame: z along the branch's axis, away from the header.

    angle, leaves_at, rotate [rad]; off_centre and from_a [mm], from_a the middle when left out.
    """
    from math import cos, sin

    import numpy as np

    from develop.solid import Frame

    def exact(value: float) -> float:
        # Quarter turns leave nothing behind, so that what should be tangent is.
        return 0.0 if abs(value) < 1e-15 else value

    along = header.centre(header.length) - header.centre(0.0)
    along = along / np.linalg.norm(along)
    out = np.array([exact(cos(leaves_at)), exact(sin(leaves_at)), 0.0])
    out = out - (out @ along) * along
    out = out / np.linalg.norm(out)
    right = np.cross(out, along)
    axis = exact(sin(angle)) * out + exact(cos(angle)) * along
    up = np.cross(axis, right)
    x = exact(cos(rotate)) * right + exact(sin(rotate)) * up
    place = 0.5 * header.length if from_a is None else from_a
    return Frame(off_centre * right + header.centre(place), np.array([x, np.cross(axis, x), axis]))
