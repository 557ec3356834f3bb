"""The superellipse against mpmath's quadrature of its own equation, 30 digits.

Girth and arcs are integrals of √(dx² + dy²) from |x/a|^n + |y/b|^n = 1 solved for one coordinate,
each eighth from its own axis. The area is the classical 4 a b Γ(1 + 1/n)² / Γ(1 + 2/n).
"""

from __future__ import annotations

from functools import cache
from math import cos, pi, sin

import mpmath as mp
import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.errors import Refusal
from develop.sections.ellipse import Ellipse
from develop.sections.superellipse import Superellipse
from tests.sections.agreement import assert_agrees, assert_parallel

CASES = [
    (600.0, 300.0, 2.5), (300.0, 600.0, 2.5), (600.0, 300.0, 1.2), (600.0, 300.0, 1.5), (600.0, 300.0, 2.0),
    (600.0, 300.0, 4.0), (600.0, 300.0, 20.0), (300.0, 300.0, 3.0), (1000.0, 1.0, 1.2), (1.0, 1000.0, 20.0),
]  # fmt: skip


@cache
def arc(a: float, b: float, n: float, v: float):
    """Arc from (a, 0) up to y = v b, for v up to 2^(−1/n), where x is steepest in y."""
    with mp.workdps(30):
        a, b, n, v = map(mp.mpf, (a, b, n, v))

        def speed(t):
            return mp.sqrt(b * b + (a * t ** (n - 1) * (1 - t**n) ** (1 / n - 1)) ** 2)

        return mp.quad(speed, [0, v / 16, v / 8, v / 4, v / 2, v])


@pytest.mark.parametrize(("width", "height", "n"), CASES)
def test_girth_area_arcs_and_their_inverse(width: float, height: float, n: float) -> None:
    section = Superellipse(width=width, height=height, n=n)
    a, b = 0.5 * width, 0.5 * height
    with mp.workdps(30):
        corner = mp.mpf(2) ** (-1 / mp.mpf(n))
        first, second = arc(a, b, n, corner), arc(b, a, n, corner)
        girth = float(4 * (first + second))
        area = float(4 * mp.mpf(a) * b * mp.gamma(1 + 1 / mp.mpf(n)) ** 2 / mp.gamma(1 + 2 / mp.mpf(n)))
    assert section.girth == pytest.approx(girth, rel=2e-15)
    assert section.area == pytest.approx(area, rel=4e-15)
    # Points at y = v b in the first eighth, and mirrored at the top of the curve in the second.
    for share in (0.03, 0.4, 0.8, 1.0):
        v = corner * share
        up, across = float(arc(a, b, n, v)), float(arc(b, a, n, v))
        with mp.workdps(30):
            other = float((1 - v ** mp.mpf(n)) ** (1 / mp.mpf(n)))
        points = section.point(section.at_arc(np.array([up, 0.25 * girth - across, 0.25 * girth + across])))
        near = 1e-13 * girth
        assert points[0] == pytest.approx([a * other, b * float(v)], abs=near)
        assert points[1] == pytest.approx([a * float(v), b * other], abs=near)
        assert points[2] == pytest.approx([-a * float(v), b * other], abs=near)
        direction = np.arctan2(points[:, 1], points[:, 0])
        assert section.arc(section.at_direction(direction)) == pytest.approx(
            [up, 0.25 * girth - across, 0.25 * girth + across], abs=1e-12 * girth
        )


@pytest.mark.parametrize(("width", "height", "n"), CASES)
def test_all_descriptions_agree(width: float, height: float, n: float) -> None:
    assert_agrees(Superellipse(width=width, height=height, n=n))


@pytest.mark.parametrize(("width", "height", "n"), CASES)
def test_moved_outward(width: float, height: float, n: float) -> None:
    assert_parallel(Superellipse(width=width, height=height, n=n), 12.5)


@settings(derandomize=True, deadline=None, max_examples=40)
@given(st.floats(0.1, 1e5), st.floats(0.001, 1000.0), st.floats(1.2, 20.0))
def test_points_satisfy_the_equation(width: float, ratio: float, n: float) -> None:
    height = width * ratio
    section = Superellipse(width=width, height=height, n=n)
    points = section.point(section.at_arc(section.girth * np.linspace(0.0, 1.0, 50)))
    left = np.abs(2.0 * points[:, 0] / width) ** n + np.abs(2.0 * points[:, 1] / height) ** n
    assert np.abs(left - 1.0).max() < 2e-14 * n
    # Hölder: |n·p| is at most the dual norm, so no point passes a tangent line.
    phi = np.linspace(0.0, 2.0 * pi, 61)
    h = section.support(np.cos(phi), np.sin(phi))
    reach = points @ np.stack([np.cos(phi), np.sin(phi)])
    assert (reach <= h * (1.0 + 1e-14) + 1e-14 * section.girth).all()


def test_with_exponent_2_it_is_the_ellipse() -> None:
    section, ellipse = Superellipse(width=600.0, height=300.0, n=2.0), Ellipse(width=600.0, height=300.0)
    assert section.girth == pytest.approx(ellipse.girth, rel=1e-15)
    arcs = ellipse.girth * np.linspace(0.0, 1.0, 100)
    assert section.point(section.at_arc(arcs)) == pytest.approx(
        ellipse.point(ellipse.at_arc(arcs)), abs=1e-12
    )
    assert section.least_radius == pytest.approx(75.0, rel=1e-12)


@pytest.mark.parametrize("n", [2.5, 4.0, 10.0])
def test_the_tightest_radius(n: float) -> None:
    """Against the radius of the curve y(x) from its derivatives, smallest by mpmath's root of its slope."""
    section = Superellipse(width=600.0, height=300.0, n=n)
    with mp.workdps(30):

        def log_radius(t):
            c, s = mp.cos(t), mp.sin(t)  # x = a c^(2/n), y = b s^(2/n)
            p = 2 / mp.mpf(n)
            x1, y1 = -300 * p * c ** (p - 1) * s, 150 * p * s ** (p - 1) * c
            x2 = 300 * p * ((p - 1) * c ** (p - 2) * s * s - c**p)
            y2 = 150 * p * ((p - 1) * s ** (p - 2) * c * c - s**p)
            return mp.log((x1**2 + y1**2) ** 1.5 / abs(x1 * y2 - y1 * x2))

        grid = [mp.mpf(k) * mp.pi / 400 for k in range(1, 200)]
        start = min(grid, key=log_radius)
        least = mp.exp(log_radius(mp.findroot(lambda t: mp.diff(log_radius, t), start)))
    assert section.least_radius == pytest.approx(float(least), rel=1e-12)
    with pytest.raises(Refusal, match="tightest radius"):
        section.offset(-1.0001 * float(least))
    assert_parallel(section, -0.9999 * float(least))


def test_below_2_the_ends_of_the_axes_are_too_sharp_to_move_inward() -> None:
    section = Superellipse(width=600.0, height=300.0, n=1.5)
    assert section.least_radius == 0.0
    with pytest.raises(Refusal, match="tightest radius is 0 mm"):
        section.offset(-0.001)
    n = np.array([cos(0.2)]), np.array([sin(0.2)])
    assert section.offset(5.0).radius(*n)[0] == pytest.approx(section.radius(*n)[0] + 5.0, rel=1e-15)
