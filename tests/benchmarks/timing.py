"""How the benchmarks time and print."""

from __future__ import annotations

import time
from collections.abc import Callable

import numpy as np

__all__ = ["BUSY", "best", "median", "ms", "show"]

BUSY = 5.0
"""Times the goal that a busy machine may take."""


def _times(action: Callable[[], object], repeats: int) -> list[float]:
    action()
    times = []
    for _ in range(repeats):
        start = time.perf_counter()
        action()
        times.append(time.perf_counter() - start)
    return times


def median(action: Callable[[], object], *, repeats: int = 41) -> float:
    """Median time [s] of an action that has been run before."""
    return float(np.median(_times(action, repeats)))


def best(action: Callable[[], object], *, repeats: int = 41) -> float:
    """Least time [s] of an action that has been run before: what it costs when nothing disturbs it."""
    return min(_times(action, repeats))


def show(title: str, rows: list[tuple[str, str, str]]) -> None:
    """Print a table of names, values and notes."""
    width = max(len(row[0]) for row in rows)
    print(f"\n\n{title}")
    for name, value, note in rows:
        print(f"  {name:<{width}}  {value:>12}  {note}")


def ms(seconds: float) -> str:
    """A time in milliseconds."""
    return f"{seconds * 1e3:.3f} ms"
