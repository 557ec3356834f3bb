"""What must hold of every section, whatever its curve: its many descriptions agree with each other."""

from __future__ import annotations

from math import pi

import numpy as np
import pytest

from develop.sections.section import Section

NODES, WEIGHTS = np.polynomial.legendre.leggauss(40)


def places(section: Section, count: int = 7) -> np.ndarray:
    """Parameters inside every panel, none at a break."""
    share = (np.arange(count) + 0.37) / count
    return (section.breaks[:-1, None] + np.diff(section.breaks)[:, None] * share).ravel()


def assert_agrees(section: Section) -> None:
    """Walk, support, touch, parameters, within, radius, girth, area and arcs are of one curve."""
    girth, period = section.girth, section.period
    u = places(section)
    at = section.walk(u)
    point, normal = np.stack([at.x, at.y], -1), np.stack([at.ex, at.ey], -1)
    assert np.abs(np.hypot(at.ex, at.ey) - 1.0).max() < 1e-14
    assert (at.ds >= 0.0).all()
    assert (at.dphi >= 0.0).all()

    # The tangent lines: h = p·e, and touching where they should.
    assert np.abs(section.support(at.ex, at.ey) - (point * normal).sum(-1)).max() < 1e-13 * girth
    longer = section.support(3.0 * at.ex, 3.0 * at.ey)
    assert np.abs(longer - 3.0 * section.support(at.ex, at.ey)).max() < 1e-12 * girth
    # (5e-4 off a break, a normal on a nearly flat side tells the place to fewer digits.)
    turns = at.dphi > 1e-6
    touched = np.stack(section.touch(at.ex[turns], at.ey[turns]), -1)
    near = np.minimum(1e-12 * girth + 1e-15 * at.ds[turns] / at.dphi[turns], 1e-6 * girth)
    assert (np.abs(touched - point[turns]).max(-1) <= near).all()

    # Where the normal is: within the ends of a straight side, and only there on an arc.
    first, last = section.parameters(at.ex, at.ey)
    assert (last >= first).all()
    past = (u - first + 0.5 * period) % period - 0.5 * period
    loose = 1e-6 * period
    assert (past[turns] > -loose).all()
    assert (past[turns] < (last - first)[turns] + loose).all()
    straight = at.dphi == 0.0
    assert ((u - first) % period < last - first)[straight].all()
    assert (section.parameters(at.ex, at.ey)[0] >= section.breaks[0]).all()
    assert (section.parameters(at.ex, at.ey)[0] <= section.breaks[-1]).all()
    for shift in (0.0, period):
        low, high = u + shift - 1e-3, u + shift + 1e-3
        within = section.within(at.ex, at.ey, low, high)
        assert (np.abs(within - (u + shift)) <= loose).all()
        foot = np.stack(section.foot(at.ex, at.ey, low, high), -1)
        assert np.abs(foot - point).max() < 1e-6 * girth

    # Rates: dp/du = ds T, and ρ = ds / dφ.
    step = 1e-6 * np.repeat(np.diff(section.breaks), len(u) // (len(section.breaks) - 1))
    ahead, behind = section.walk(u + step), section.walk(u - step)
    assert np.abs((ahead.x - behind.x) / (2 * step) + at.ds * at.ey).max() < 1e-5 * girth
    assert np.abs((ahead.y - behind.y) / (2 * step) - at.ds * at.ex).max() < 1e-5 * girth
    spin = (ahead.ey * behind.ex - ahead.ex * behind.ey) / (2 * step)
    assert np.abs(spin - at.dphi).max() < 1e-5 * max(1.0, at.dphi.max())
    solid = at.dphi > 1e-9
    radius = section.radius(at.ex[solid], at.ey[solid])
    assert (np.abs(radius * at.dphi[solid] - at.ds[solid]) <= 1e-7 * girth).all()
    assert radius.min() >= section.least_radius * (1.0 - 1e-12)

    # Sums over the whole curve, by another quadrature.
    half = 0.5 * np.diff(section.breaks)
    nodes = 0.5 * (section.breaks[1:] + section.breaks[:-1])[:, None] + half[:, None] * NODES
    on = section.walk(nodes)
    assert (half * (on.ds @ WEIGHTS)).sum() == pytest.approx(girth, rel=1e-14)
    assert (half * (on.dphi @ WEIGHTS)).sum() == pytest.approx(2.0 * pi, rel=1e-14)
    h = on.x * on.ex + on.y * on.ey
    assert 0.5 * (half * ((h * on.ds) @ WEIGHTS)).sum() == pytest.approx(section.area, rel=1e-13)
    # Cauchy: the girth is the integral of the support over all directions.
    assert (half * ((h * on.dphi) @ WEIGHTS)).sum() == pytest.approx(girth, rel=1e-13)

    # Arcs begin in direction 0, close, and invert.
    ends = section.walk(section.breaks[[0, -1]])
    assert np.ptp(ends.x) < 1e-13 * girth
    assert np.abs(ends.y).max() < 1e-13 * girth
    assert ends.x[0] > 0.0
    assert section.turning(section.breaks[-1:])[0] == pytest.approx(2.0 * pi, rel=1e-14)
    arcs = girth * (np.arange(97) / 97.0)
    for turn in (0.0, girth):
        back = section.arc(section.at_arc(arcs + turn))
        assert np.abs(back - (arcs + turn)).max() < 4e-15 * girth
    direction = np.linspace(0.0, 2.0 * pi, 60)[1:-1]
    seen = section.direction(section.at_direction(direction))
    assert np.abs(seen - direction).max() < 1e-9


def assert_parallel(section: Section, distance: float) -> None:
    """Moved by a distance, every point goes along its normal and the girth gains 2πd (Steiner)."""
    moved = section.offset(distance)
    assert moved.girth - section.girth == pytest.approx(2.0 * pi * distance, abs=2e-15 * moved.girth)
    area = section.girth * distance + pi * distance**2
    assert moved.area - section.area == pytest.approx(area, abs=4e-15 * max(moved.area, section.area))
    phi = np.linspace(0.0, 2.0 * pi, 101) + 0.003
    n = np.cos(phi), np.sin(phi)
    assert np.abs(moved.support(*n) - section.support(*n) - distance).max() < 1e-13 * section.girth
    for new, old, e in zip(moved.touch(*n), section.touch(*n), n, strict=True):
        assert np.abs(new - old - distance * e).max() < 1e-12 * section.girth
    assert moved.least_radius == pytest.approx(section.least_radius + distance, abs=1e-12 * section.girth)
