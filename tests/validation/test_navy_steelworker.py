"""United States Navy, Steelworker, volume 2 (NAVEDTRA 14251), appendix II p. 15: the girth of a circle
of 4 in is 12.5664 in, with π = 3.1416.
"""

from __future__ import annotations

from math import pi

import pytest

from develop.sections.ellipse import Ellipse


def test_girth() -> None:
    girth = Ellipse(width=4.0, height=4.0).girth
    assert girth == pytest.approx(12.5664, abs=4.0 * (3.1416 - pi) + 5e-6)
    assert girth == pytest.approx(4.0 * pi, rel=1e-15)
