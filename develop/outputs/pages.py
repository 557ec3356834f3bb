"""Where a sheet that is larger than a page is parted: so that no label is cut on both pages of a joint."""

from __future__ import annotations

import math
from collections.abc import Sequence

__all__ = ["count", "parted"]


def count(size: float, largest: float, overlap: float) -> int:
    """How many pages of at most `largest` a sheet of this size takes in one direction, all in mm."""
    return 1 if size <= largest else math.ceil((size - overlap) / (largest - overlap))


def parted(
    size: float, largest: float, overlap: float, labels: Sequence[tuple[float, float]]
) -> tuple[tuple[float, float], ...]:
    """Start and length of each page [mm] along one direction of a sheet, as few as `count` says.

    Neighbours share `overlap`. labels: from where to where each reaches [mm]. Pages are of equal length
    but where a joint would cut a label: it then moves to the nearest place at which every label lies
    whole on one of the two pages, if the pages may be so long.
    """
    n = count(size, largest, overlap)
    each = math.ceil((size + (n - 1) * overlap) / n)
    starts = [0.0]
    for k in range(1, n):
        even = k * (each - overlap)
        least = max(size - (n - k) * (largest - overlap) - overlap, starts[-1])
        most = starts[-1] + largest - overlap
        # Just before a label, or just so that it ends with the overlap.
        places = [even, *(low for low, _ in labels), *(high - overlap for _, high in labels)]
        free = [
            place
            for place in places
            if least <= place <= most
            and not any(low < place and high > place + overlap for low, high in labels)
        ]
        starts.append(
            float(min(free, key=lambda place: abs(place - even), default=min(max(even, least), most)))
        )
    ends = [*(start + overlap for start in starts[1:]), max(float(math.ceil(size)), starts[-1] + overlap)]
    return tuple((start, end - start) for start, end in zip(starts, ends, strict=True))
