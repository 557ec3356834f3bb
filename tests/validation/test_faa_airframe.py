"""Federal Aviation Administration, FAA-H-8083-31, Aviation Maintenance Technician Handbook: Airframe, chapter 4:
bend allowance (0.01743 R + 0.0078 T) a degree; channel with legs 1, 2, 1 of 0.04 sheet, radius 0.16. A naval
aviation training manual, p. 13-19, prints 0.0173 for 0.01743.
"""

from __future__ import annotations

from math import radians

import pytest

from develop.tables.bend_allowance import bend_allowance


def test_channel_of_0_04_sheet() -> None:
    """Setback R + T = 0.2, flats 0.8, 1.6 and 0.8, and two bends."""
    bend = bend_allowance("aircraft", radius=0.16, thickness=0.04, angle=radians(90.0))
    # 90 (0.01743 · 0.16 + 0.0078 · 0.04), worked by hand.
    assert bend == pytest.approx(0.279072, rel=1e-12)
    assert 0.8 + 1.6 + 0.8 + 2 * bend == pytest.approx(3.758144, rel=1e-12)


def test_the_naval_form_is_within_a_percent() -> None:
    naval = 90.0 * (0.0173 * 0.16 + 0.0078 * 0.04)
    assert bend_allowance("aircraft", radius=0.16, thickness=0.04, angle=radians(90.0)) == pytest.approx(
        naval, rel=0.01
    )
