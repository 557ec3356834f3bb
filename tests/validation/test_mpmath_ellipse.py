"""F. Johansson and others, mpmath: a Python library for arbitrary-precision floating-point arithmetic;
`ellipe(φ, m)` after Carlson's symmetric integrals, here with 40 digits.

Girth, running length and its inverse to 1e-13 of the girth, for aspect ratios from 1 to 1:1000.
The arc from the right end over the eccentric angle u is a (E(m) − E(π/2 − u | m)) with
m = 1 − b²/a², of either sign.
"""

from __future__ import annotations

from itertools import product

import mpmath
import numpy as np
import pytest

from develop.sections.ellipse import Ellipse
from develop.solid import End, Frame

RATIOS = (1.0, 1.001, 1.5, 2.0, 5.0, 17.0, 100.0, 316.0, 1000.0)
SIZES = [(400.0, 400.0 / r) for r in RATIOS] + [(400.0 / r, 400.0) for r in RATIOS[1:]]
GOAL = 1e-13

both = pytest.mark.parametrize(("width", "height"), SIZES)


def exact_arc(width: float, height: float, u: float) -> mpmath.mpf:
    with mpmath.workdps(40):
        a, b = mpmath.mpf(width) / 2, mpmath.mpf(height) / 2
        m = 1 - (b / a) ** 2
        return a * (mpmath.ellipe(m) - mpmath.ellipe(mpmath.pi / 2 - mpmath.mpf(u), m))


def exact_girth(width: float, height: float) -> mpmath.mpf:
    with mpmath.workdps(40):
        a, b = mpmath.mpf(width) / 2, mpmath.mpf(height) / 2
        return 4 * a * mpmath.ellipe(1 - (b / a) ** 2)


def exact_turning(width: float, height: float, u: float) -> mpmath.mpf:
    """Direction of the normal, counted on over whole turns."""
    with mpmath.workdps(40):
        a, b, at = mpmath.mpf(width) / 2, mpmath.mpf(height) / 2, mpmath.mpf(u)
        turns = mpmath.nint(at / (2 * mpmath.pi))
        rest = at - 2 * mpmath.pi * turns
        return mpmath.atan2(a * mpmath.sin(rest), b * mpmath.cos(rest)) + 2 * mpmath.pi * turns


@both
def test_girth(width: float, height: float) -> None:
    section, exact = Ellipse(width=width, height=height), exact_girth(width, height)
    assert abs(section.girth / exact - 1) < 1e-15
    # By the route that the checks take, Cauchy's formula over supports.
    assert abs(End.placed(section, Frame.square()).girth / exact - 1) < GOAL


@both
def test_running_length(width: float, height: float) -> None:
    section, girth = Ellipse(width=width, height=height), exact_girth(width, height)
    # Everywhere, near the ends of the long axis too, and beyond one turn both ways.
    u = np.concatenate(
        [np.linspace(-1.0, 7.0, 12), *(k * np.pi / 2 + np.array([-1e-3, 0.0, 3e-3, 0.05]) for k in range(4))]
    )
    found = section.arc(u)
    worst = max(abs(s - exact_arc(width, height, x)) for s, x in zip(found, u, strict=True))
    assert worst / girth < GOAL


@both
def test_inverse(width: float, height: float) -> None:
    section, girth = Ellipse(width=width, height=height), exact_girth(width, height)
    shares = np.array([-0.37, 0.0, 1e-6, 1 / 24, 1 / 7, 0.2499, 0.25, 0.26, 0.5, 0.66, 0.9999, 1.0, 2.3])
    arcs = section.girth * shares
    found = section.at_arc(arcs)
    worst = max(abs(exact_arc(width, height, u) - s) for s, u in zip(arcs, found, strict=True))
    assert worst / girth < GOAL
    # The points that a girth is divided by lie on the ellipse.
    x, y = section.point(found).T
    assert np.abs((2 * x / width) ** 2 + (2 * y / height) ** 2 - 1.0).max() < 1e-14


@both
def test_inverse_of_every_tenth_of_a_percent_is_the_arc(width: float, height: float) -> None:
    section = Ellipse(width=width, height=height)
    arcs = section.girth * np.arange(1001) / 1000
    assert np.abs(section.arc(section.at_arc(arcs)) - arcs).max() < GOAL * section.girth


@pytest.mark.parametrize(
    ("size", "distance"), list(product([SIZES[0], SIZES[3], SIZES[8], SIZES[12]], [-0.0001, 2.0, 75.0]))
)
def test_running_length_and_inverse_outside(size: tuple[float, float], distance: float) -> None:
    """Moved by d, the arc gains d times the turning of the normal."""
    section = Ellipse(width=size[0], height=size[1])
    moved = section.offset(distance)
    u = np.array([-0.4, 0.003, 0.7, 1.5, 1.571, 2.2, 3.15, 4.0, 5.0, 6.2, 9.0])

    def exact(at: float) -> mpmath.mpf:
        return exact_arc(*size, at) + distance * exact_turning(*size, at)

    worst = max(abs(s - exact(x)) for s, x in zip(moved.arc(u), u, strict=True))
    assert worst / moved.girth < GOAL
    arcs = moved.girth * np.linspace(-0.3, 1.4, 11)
    worst = max(abs(exact(x) - s) for s, x in zip(arcs, moved.at_arc(arcs), strict=True))
    assert worst / moved.girth < GOAL


@pytest.mark.parametrize(("steps", "percent"), [(12, 1.138), (24, 0.285), (96, 0.0178)])
def test_girth_stepped_with_dividers_is_short(steps: int, percent: float) -> None:
    """Stepping n chords round a circle gives 2 n sin(π/n) of its radius instead of 2π."""
    section = Ellipse(width=400.0, height=400.0)
    points = section.point(section.at_arc(section.girth * np.arange(steps + 1) / steps))
    stepped = np.hypot(*np.diff(points, axis=0).T).sum()
    with mpmath.workdps(40):
        short = float(1 - steps * mpmath.sin(mpmath.pi / steps) / mpmath.pi)
    assert 1.0 - stepped / section.girth == pytest.approx(short, abs=1e-14)
    assert 100.0 * short == pytest.approx(percent, rel=3e-3)  # as printed here, to three digits
