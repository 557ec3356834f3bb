"""What a section's text stands for, before any curve is made of it; costs nothing to import."""

from __future__ import annotations

from dataclasses import dataclass

from develop.errors import InputError, Problem

__all__ = ["FLATTEST", "LARGEST", "SMALLEST", "SectionSpec", "Taped", "refused"]

SMALLEST = 0.1
LARGEST = 100_000.0
# Flatter than this a section is a folded sheet; results are proven down to here.
FLATTEST = 1000.0


@dataclass(frozen=True)
class Taped:
    """Diameters measured across a pipe, and the curve fitted to them; tuples of equal length (n).

    directions: of the caliper [deg, 0 to 180), growing. diameters: between its jaws [mm].
    residuals: measured less fitted [mm]. fit: `ellipse` or `smooth`.
    curve: of an ellipse its two axes [mm] and the angle [rad] by which it is turned; of a smooth
    curve the Fourier coefficients of its support [mm]: the constant, then cosine and sine of 2φ, 4φ ...
    """

    directions: tuple[float, ...]
    diameters: tuple[float, ...]
    residuals: tuple[float, ...]
    fit: str
    curve: tuple[float, ...]

    @property
    def largest_residual(self) -> float:
        """By how much the worst reading misses the curve [mm]."""
        return max(map(abs, self.residuals))


@dataclass(frozen=True)
class SectionSpec:
    """A section as its text says it.

    kind: `round`, `ellipse`, `flat-oval`, `superellipse`, `rectangle`, `pipe` or `measured`.
    width, height: overall [mm]. text: the same section in one canonical form, sizes in mm.
    outside: the size is the outside whatever the piece's `sizes` says, as for every pipe.
    r: corner radius of a rectangle [mm]. n: exponent of a superellipse. taped: of a measured one.
    """

    kind: str
    width: float
    height: float
    text: str
    outside: bool = False
    r: float = 0.0
    n: float = 2.0
    taped: Taped | None = None


def refused(given: str, allowed: str) -> InputError:
    """The error for a text that is no section."""
    return InputError(Problem(field="", given=given, allowed=allowed))
