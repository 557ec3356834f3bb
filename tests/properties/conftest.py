"""Random pieces, the same ones in every run: a failure here is a failure everywhere."""

from __future__ import annotations

from hypothesis import HealthCheck, settings

settings.register_profile(
    "pieces",
    deadline=None,
    derandomize=True,
    database=None,
    max_examples=60,
    suppress_health_check=[HealthCheck.too_slow],
)
settings.load_profile("pieces")
