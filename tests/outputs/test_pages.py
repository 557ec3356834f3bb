"""Where large sheets are parted, and how tables are parted over the pages for the tape."""

from __future__ import annotations

from dataclasses import replace
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from develop.outputs.pages import count, parted
from develop.outputs.pdf import _arranged, _reaches
from develop.outputs.tape import tape_pages
from develop.pattern.layout import lettered
from tests.pieces.making import make

LARGEST, OVERLAP = 5046.0, 60.0


def cut(pages, labels):
    """The labels that are whole on no page."""
    return [
        (low, high)
        for low, high in labels
        if not any(start <= low and high <= start + length for start, length in pages)
    ]


def test_a_joint_moves_off_a_label_to_the_nearest_place() -> None:
    even = parted(9000.0, LARGEST, OVERLAP, [])
    assert even == ((0.0, 4530.0), (4470.0, 4530.0))
    label = (4400.0, 4700.0)
    assert cut(even, [label]) == [label]
    moved = parted(9000.0, LARGEST, OVERLAP, [label])
    assert moved == ((0.0, 4460.0), (4400.0, 4600.0))
    assert not cut(moved, [label])


@settings(deadline=None, max_examples=200)
@given(
    size=st.floats(100.0, 40000.0),
    labels=st.lists(st.tuples(st.floats(0.0, 1.0), st.floats(1.0, 900.0)), max_size=6),
)
def test_pages_cover_the_sheet_overlap_and_are_not_too_long(size, labels) -> None:
    reaches = [(share * size, min(share * size + length, size)) for share, length in labels]
    pages = parted(size, LARGEST, OVERLAP, reaches)
    assert len(pages) == count(size, LARGEST, OVERLAP)
    assert pages[0][0] == 0.0
    assert pages[-1][0] + pages[-1][1] >= size
    for (start, length), (following, _) in pairwise(pages):
        assert start + length - following == pytest.approx(OVERLAP)
    assert all(length <= LARGEST + 1.0 for _, length in pages)


@pytest.mark.parametrize("girth", [5200, 9000, 9600])
def test_every_label_of_a_large_sheet_is_whole_on_one_page(girth: int) -> None:
    pattern = lettered(make("straight", section=f"round girth {girth}", length=1500).patterns[0])
    sheet = _arranged(pattern)
    reaches = _reaches(pattern, sheet)
    assert pattern.arrows
    assert len(reaches) > len(sheet.panel.blocks) + len(pattern.labels)
    pages = parted(sheet.wide, LARGEST, OVERLAP, reaches[:, :, 0].tolist())
    assert len(pages) > 1
    assert not cut(pages, reaches[:, :, 0].tolist())


@pytest.mark.parametrize("divisions", range(3, 90))
def test_no_page_for_the_tape_has_a_single_line_of_a_table(divisions: int) -> None:
    pattern = make("straight", section="round 300", length=400, divisions=3).patterns[0]
    row = pattern.divisions[1]
    pattern = replace(pattern, divisions=tuple(replace(row, number=n) for n in range(divisions)))
    for page in tape_pages(pattern):
        for rows in rows_of(page):
            assert rows >= min(3, divisions)


def rows_of(page) -> list[int]:
    """How many rows each part of the divisions table has on a page: its lines of nine numbers."""

    class Listening:
        def __init__(self) -> None:
            self.rows: set[float] = set()
            self.tables = 0

        def text(self, x, y, text, height, *, angle=0.0, anchor=0.0) -> None:
            self.tables += "Lines to mark out" in text
            if anchor == 1.0 and text.replace(".", "").isdigit():
                self.rows.add(round(y, 3))

        def line(self, *_) -> None: ...
        def pen(self, *_) -> None: ...
        def rectangle(self, *_) -> None: ...

    found = []
    for block, left, down in page.blocks:
        ink = Listening()
        block.draw(ink, left, 300.0 - down)
        if ink.tables:
            found.append(len(ink.rows))
    return found


def test_a_label_longer_than_any_page_leaves_the_joint_in_the_middle() -> None:
    assert parted(6000.0, LARGEST, OVERLAP, [(0.0, 6000.0)]) == parted(6000.0, LARGEST, OVERLAP, [])
