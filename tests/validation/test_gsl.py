"""GNU Scientific Library, the values that its own test specfunc/test_sf.c holds for the incomplete
elliptic integral E(φ, k) at φ = π/3: printed there to 19 digits.
"""

from __future__ import annotations

from math import pi, sqrt

import numpy as np
import pytest

from develop.sections.ellipse import Ellipse


@pytest.mark.parametrize(("k", "expected"), [(0.99, 0.8704819220377943536), (0.5, 1.0075555551444720293)])
def test_incomplete_integral_at_60_degrees(k: float, expected: float) -> None:
    section = Ellipse(width=2.0, height=2.0 * sqrt((1.0 - k) * (1.0 + k)))
    start, end = section.arc(np.array([pi / 2, pi / 2 + pi / 3]))
    # Relative to the girth, which is below 2π, as running lengths are promised.
    assert end - start == pytest.approx(expected, rel=0, abs=1e-13 * section.girth)
