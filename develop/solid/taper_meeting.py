"""Where a branch meets a tapered header with parallel ends, as an end of the branch; from sections alone."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from develop.quadrature import Array
from develop.sections.section import Section
from develop.solid.frame import Frame, Rim
from develop.solid.meeting import MeetingEnd

__all__ = ["TaperMeetingEnd"]

_HALVINGS = 60
_STEPS = 720


@dataclass(frozen=True)
class TaperMeetingEnd(MeetingEnd):
    """The end A of a branch where its lines leave the side between two parallel rims.

    Between parallel rims the lines of the side join points of equal normals φ, so that the side is
    a(φ) + λ (b(φ) − a(φ)). rim_a, rim_b: the header's ends, in its frame; header is rim A's section.
    sheet: how far outside of the rims the header's sheet is developed [mm]; outward: how far outside
        of them the face lies that is met.
    """

    rim_b: Rim | None = None
    rim_a: Rim | None = None
    outward: float = 0.0

    @staticmethod
    def between(
        section: Section, rim_a: Rim, rim_b: Rim, frame: Frame, *, sheet: float = 0.0, outward: float = 0.0
    ) -> TaperMeetingEnd:
        """The end of a branch of a section, in a header between two rims."""
        flat = np.eye(3)[:, :2]
        return TaperMeetingEnd(
            section, np.zeros(3), flat, flat.T, rim_a.section, frame, sheet, False, rim_b, rim_a, outward
        )

    def _rulings(self, phi: Array) -> tuple[Array, Array, Array]:
        """Points a, rulings R and normals N (any length), (n, 3) each, for normals φ (n,)."""
        assert self.rim_a is not None
        assert self.rim_b is not None
        e = np.stack([np.cos(phi), np.sin(phi), np.zeros_like(phi)], axis=-1)
        a, b = self.rim_a.touch(e), self.rim_b.touch(e)
        ruling = b - a
        rise = np.einsum("ni,ni->n", ruling, e) / ruling[:, 2]
        normal = e - rise[:, None] * np.array([0.0, 0.0, 1.0])
        if self.outward:
            a = a + self.outward * normal / np.linalg.norm(normal, axis=1)[:, None]
        return a, ruling, normal

    @cached_property
    def _near(self) -> tuple[float, float]:
        """Normals φ from and to which the side faces the branch's free end."""
        d = self.frame.axes[2]

        def faces(phi: Array) -> Array:
            return np.asarray(self._rulings(phi)[2] @ d > 0.0)

        phi = np.linspace(0.0, 2.0 * np.pi, _STEPS + 1)
        seen = faces(phi)
        ends = []
        for rising in (True, False):
            (i,) = np.flatnonzero((seen[1:] != seen[:-1]) & (seen[1:] == rising))
            low, high = phi[i], phi[i + 1]
            for _ in range(_HALVINGS):
                middle = 0.5 * (low + high)
                if bool(faces(np.array([middle]))[0]) == rising:
                    high = middle
                else:
                    low = middle
            ends.append(0.5 * (low + high))
        start, end = ends
        return float(start), float(end + 2.0 * np.pi * (end < start))

    def _met(self, u: Array) -> tuple[Array, Array, Array]:
        """Normal φ and share λ (n,) and point (n, 3), in the header's frame, of the joint at u (n,)."""
        axes, d = self.frame.axes, self.frame.axes[2]
        at = self.section.walk(u)
        origins = at.x[:, None] * axes[0] + at.y[:, None] * axes[1] + self.frame.origin

        def beyond(phi: Array) -> Array:
            a, ruling, _ = self._rulings(phi)
            return np.asarray(np.einsum("ni,ni->n", np.cross(ruling, d), a - origins))

        start, end = self._near
        low, high = np.full(len(u), start), np.full(len(u), end)
        first = beyond(low) > 0.0
        for _ in range(_HALVINGS):
            middle = 0.5 * (low + high)
            same = (beyond(middle) > 0.0) == first
            low, high = np.where(same, middle, low), np.where(same, high, middle)
        phi = 0.5 * (low + high)
        # A line that only grazes a silhouette has no change of sign: it meets the nearer one.
        ends = [beyond(np.full(len(u), end_)) for end_ in (start, end)]
        grazes = (ends[0] > 0.0) == (ends[1] > 0.0)
        phi = np.where(grazes, np.where(np.abs(ends[0]) < np.abs(ends[1]), start, end), phi)
        a, ruling, _ = self._rulings(phi)
        # The line and the ruling cross where their gap has no part across both.
        square = np.cross(d, ruling)
        share = np.einsum("ni,ni->n", np.cross(a - origins, d), square) / np.einsum(
            "ni,ni->n", square, square
        )
        return phi, share, a + share[:, None] * ruling

    def _swept(self, on: Array) -> Array:
        # The area is summed by `opened` itself.
        return np.zeros_like(on)

    def on_header(self, u: Array) -> tuple[Array, Array]:
        phi, _, points = self._met(u)
        return phi, points

    @property
    def breaks(self) -> Array:
        """Parameters of the branch's section where it may graze the header's silhouettes."""
        _, _, normals = self._rulings(np.array(self._near))
        found = []
        for normal in normals @ self.frame.axes[:2].T:
            found += [*self.section.parameters(normal[:1], normal[1:])]
        return np.concatenate(found)

    @property
    def opened(self) -> float:
        """Area [mm²] that the joint encloses on the header's developed sheet.

        A line R of the side sweeps |R × T| (ρ_a (1 − λ) + ρ_b λ) dλ dφ; summed round the joint by
        Green's theorem, as ∮ over φ of its integral in λ. The sheet's distance adds to the radii.
        """
        from develop.quadrature import DERIVATIVE, WEIGHTS

        assert self.rim_a is not None
        assert self.rim_b is not None
        panels, _ = self._panels
        shape = panels.nodes.shape
        phi, share, _ = self._met(panels.nodes.ravel())
        _, ruling, normal = self._rulings(phi)
        e = np.stack([np.cos(phi), np.sin(phi)])
        cos_psi = 1.0 / np.linalg.norm(normal, axis=1)
        tangent = np.stack([-e[1], e[0], np.zeros_like(phi)], axis=-1)
        across = np.linalg.norm(np.cross(ruling, tangent), axis=1)
        # Moved outward by d the side sweeps d |N'| |R| more, N' the turn of the sheet.
        turn = cos_psi * np.einsum("ni,ni->n", ruling, ruling) / across
        rho_a, rho_b = (rim.section.radius(e[0], e[1]) for rim in (self.rim_a, self.rim_b))
        swept = (
            across * (rho_a * (share - 0.5 * share**2) + rho_b * 0.5 * share**2) + self.sheet * turn * share
        )
        rate = (np.unwrap(phi).reshape(shape) @ DERIVATIVE.T) / panels.half[:, None]
        # Anticlockwise round the opening seen from outside: ∮ F dφ runs the other way.
        return -float(np.sum((swept.reshape(shape) * rate) @ WEIGHTS * panels.half))
