"""Tiled pages read back by pypdf, as operators, and rendered by pdfium; nothing here is shared with the writer."""

from __future__ import annotations

import io
import re
from dataclasses import replace
from itertools import product

import numpy as np
import pypdfium2
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from pypdf import PdfReader, PdfWriter
from pypdf.generic import ArrayObject, ContentStream, NameObject
from shapely import LineString, Point, Polygon

from develop.outputs.paper import PAPERS, PageSetup, Paper
from develop.outputs.pdf import pdf
from develop.outputs.tiled import written
from develop.outputs.tiling import tiled
from develop.pattern.layout import lettered
from develop.pattern.pattern import Outline
from tests.outputs.beziers import sampled
from tests.pieces.making import make

MM = 72.0 / 25.4
A4 = PAPERS["a4"]
# ISO 216; ANSI/ASME Y14.1: 8.5 x 11 and 11 x 17 in.
SIZES = {
    "A4": (210, 297), "A3": (297, 420), "A2": (420, 594), "A1": (594, 841), "A0": (841, 1189),
    "Letter": (8.5 * 25.4, 11 * 25.4), "Tabloid": (11 * 25.4, 17 * 25.4),
}  # fmt: skip


def read(patterns, setup=PageSetup(A4)):  # noqa: B008  # frozen
    return PdfReader(io.BytesIO(written(patterns, setup, title="T1").data))


@pytest.fixture(scope="module")
def transition():
    given = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "offset": [0, 50]}
    return lettered(make("transition", mark="T1", **given).patterns[0])


@pytest.fixture(scope="module")
def pages(transition):
    return read([transition])


def counts_of(patterns, setup):
    return written(patterns, setup, title="T1").counts


class Drawn:
    """What a page draws, in mm of the paper: segments with the layer, width and clip they are drawn with, and
    the words with the place of each."""

    def __init__(self, reader, page):
        self.segments, self.words = [], []
        self._reader = reader
        self._layer, self._wide = None, 0.0
        self._run(page.get_contents(), page["/Resources"], np.eye(3), None)

    def _run(self, stream, resources, now, clip):
        stack, at, rect, path = [], None, None, []
        for operands, operator in ContentStream(stream, self._reader).operations:
            v = (
                [float(each) for each in operands]
                if operator in (b"cm", b"m", b"l", b"c", b"re", b"w")
                else operands
            )
            if operator == b"q":
                stack.append((now, clip))
            elif operator == b"Q":
                now, clip = stack.pop()
            elif operator == b"cm":
                now = np.array([[v[0], v[1], 0], [v[2], v[3], 0], [v[4], v[5], 1]]) @ now
            elif operator == b"re":
                rect = placed(np.array([v[:2], [v[0] + v[2], v[1] + v[3]]]), now)
            elif operator == b"W":
                clip = rect
            elif operator == b"w":
                self._wide = v[0] / MM
            elif operator == b"BDC":
                assert operands[0] == "/OC"
                self._layer = str(resources["/Properties"][operands[1]]["/Name"])
            elif operator == b"EMC":
                self._layer = None
            elif operator == b"m":
                at, path = np.array(v), []
                first = at
            elif operator == b"l":
                path.append(np.array([at, v]))
                at = np.array(v)
            elif operator == b"c":
                path.append(np.vstack([at, np.reshape(v, (3, 2))]))
                at = path[-1][-1]
            elif operator in (b"s", b"S"):
                if operator == b"s" and np.abs(at - first).max() > 1e-9:
                    path.append(np.array([at, first]))
                self.segments += [(placed(each, now), self._layer, self._wide, clip) for each in path]
            elif operator == b"Do":
                form = resources["/XObject"][operands[0]]
                self._run(form, form["/Resources"], now, clip)
            elif operator == b"Tm":
                start = placed(np.array([[float(each) for each in operands[4:]]]), now)[0]
            elif operator == b"Tj":
                self.words.append((start, self._layer))
            assert operator not in (b"f", b"F", b"f*", b"B", b"b")

    def of(self, *layers):
        return [segment for segment, layer, _, _ in self.segments if layer in layers]


def placed(points, matrix):
    return (np.column_stack([points, np.ones(len(points))]) @ matrix)[:, :2] / MM


def size(page):
    return [float(each) / MM for each in page.mediabox]


def tiles(reader):
    """The pages that carry a pattern."""
    return [
        page
        for page in reader.pages
        if "page 1 of" in words(page) or re.search(r"page \d+ of \d+", words(page))
    ]


def words(page):
    return " ".join(page.extract_text().split())


def name_of(reader, page):
    return reader.page_labels[reader.get_page_number(page)].split()[-1]


@pytest.mark.parametrize("way", ["portrait", "landscape"])
@pytest.mark.parametrize("name", SIZES)
def test_pages_are_of_real_paper(samples, name, way):
    setup = PageSetup(PAPERS[name.lower()], orientation=way)
    reader = read([samples.rectangle(700.0, 500.0)], setup)
    expected = SIZES[name] if way == "portrait" else SIZES[name][::-1]
    for page in reader.pages:
        assert size(page) == pytest.approx([0, 0, *expected], abs=0.001)
        assert "/UserUnit" not in page
        assert page.get("/Rotate", 0) == 0
        assert "PRINT AT ACTUAL SIZE (100 %)" in words(page)
    assert reader.trailer["/Root"]["/ViewerPreferences"]["/PrintScaling"] == "/None"


@pytest.mark.parametrize("way", ["portrait", "landscape", "fewest"])
def test_pages_from_a_roll_are_as_wide_as_it_and_no_longer_than_needed(samples, way):
    reader = read([samples.rectangle(3000.0, 500.0)], PageSetup(Paper("roll", 914.0), orientation=way))
    (page,) = tiles(reader) if way != "portrait" else tiles(reader)[:1]
    across, up = size(page)[2:]
    assert 914.0 in (pytest.approx(across, abs=0.001), pytest.approx(up, abs=0.001))
    # 3000 and what stands beside it, in one strip; upright 500 high in strips of 914.
    assert max(across, up) < (3060.0 if way != "portrait" else 915.0)
    long = read([samples.rectangle(9000.0, 500.0)], PageSetup(Paper("roll", 914.0), orientation="landscape"))
    assert len(tiles(long)) == 2
    assert all(max(size(page)) <= 5080.0 for page in long.pages)


def test_the_way_that_needs_fewer_pages_is_taken(samples):
    for shape in ((1256.6, 450.0), (300.0, 800.0), (250.0, 180.0)):
        pattern = samples.rectangle(*shape)
        counts = [
            counts_of([pattern], PageSetup(A4, orientation=way))[0]
            for way in ("portrait", "landscape", "fewest")
        ]
        assert counts[2] == min(counts[:2])
        assert counts[2] == len(tiles(read([pattern])))


def test_the_check_square_on_the_first_page_and_a_short_scale_on_every_other(pages):
    first = pages.pages[0]
    frame = [
        s
        for s in Drawn(pages, first).of("notes")
        if len(s) == 2 and abs(np.hypot(*(s[1] - s[0])) - 100.0) < 0.01
    ]
    assert len(frame) == 4
    assert np.ptp(np.vstack(frame), axis=0) == pytest.approx([100.0, 100.0], abs=0.01)
    assert "100 mm x 100 mm" in words(first)
    for page in tiles(pages):
        bars = [s for s in Drawn(pages, page).of("notes") if abs(np.ptp(s[:, 0]) - 50.0) < 0.01]
        assert len(bars) == 1
        assert "scale: 50 mm" in words(page)


@pytest.mark.parametrize("margin", [5.0, 10.0, 25.0])
def test_nothing_is_printed_in_the_margin(transition, margin):
    data = written([transition], PageSetup(A4, margin=margin, overlap=30.0), title="T1").data
    document = pypdfium2.PdfDocument(data)
    for page in document:
        dark = rendered(page, 4.0) < 250
        wide, high = (side / MM * 4.0 for side in page.get_size())
        rows, columns = np.flatnonzero(dark.any(axis=1)), np.flatnonzero(dark.any(axis=0))
        edge = margin * 4.0 - 2.0  # half the width of a stroke, and a dot
        assert rows[0] >= edge
        assert columns[0] >= edge
        assert rows[-1] <= high - edge
        assert columns[-1] <= wide - edge
    document.close()


def rendered(page, dots):
    """The page as grey dots, so many a mm."""
    image = page.render(scale=dots * 25.4 / 72.0, grayscale=True)
    return image.to_numpy().reshape(image.height, image.width)


def grid(reader):
    """What each tile draws, by its column and row."""
    found = {}
    for page in tiles(reader):
        column, row = re.fullmatch(r"([A-Z]+)(\d+)", name_of(reader, page)).groups()
        assert len(column) == 1
        found[ord(column) - ord("A"), int(row) - 1] = Drawn(reader, page)
    return found


def outline(drawn):
    return sampled(drawn.of("cut"), 40)


def test_neighbours_draw_the_same_curves_and_crosses(pages):
    by_place = grid(pages)
    steps = {}
    for (column, row), drawn in by_place.items():
        clip = next(clip for *_, clip in drawn.segments if clip is not None)
        for key in ((column + 1, row), (column, row + 1)):
            if key not in by_place:
                continue
            other = by_place[key]
            shift = outline(drawn)[0] - outline(other)[0]
            steps.setdefault(key[0] - column, set()).add(tuple(np.round(shift, 4)))
            # The same Béziers, moved: all control points within a hundredth of a mm, in fact far less.
            for mine, theirs in zip(
                drawn.of("cut", "roll-lines", "witness-marks"),
                other.of("cut", "roll-lines", "witness-marks"),
                strict=True,
            ):
                assert mine - theirs == pytest.approx(np.broadcast_to(shift, mine.shape), abs=0.001)
            # Windows overlap by 20 mm.
            (low, high) = clip
            axis = 0 if key[0] > column else 1
            overlap = (high - low)[axis] - abs(shift[axis])
            assert overlap == pytest.approx(20.0, abs=0.001)
            crosses, others = (cross_centres(each) for each in (drawn, other))
            joint = (high if axis == 0 else low)[axis] + (-10.0 if axis == 0 else 10.0)
            mine = {tuple(np.round(c - shift, 2)) for c in crosses if abs(c[axis] - joint) < 0.01}
            assert len(mine) >= 3
            assert mine <= {tuple(np.round(c, 2)) for c in others}
    assert all(len(each) == 1 for each in steps.values())


def cross_centres(drawn):
    arms = [s for s in drawn.of("page-marks") if len(s) == 2 and abs(np.hypot(*(s[1] - s[0])) - 8.0) < 0.001]
    level = {tuple(np.round(s.mean(axis=0), 3)) for s in arms if s[0, 1] == pytest.approx(s[1, 1], abs=1e-6)}
    upright = {
        tuple(np.round(s.mean(axis=0), 3)) for s in arms if s[0, 0] == pytest.approx(s[1, 0], abs=1e-6)
    }
    return np.array(sorted(level & upright))


def test_the_outline_is_that_of_the_record(transition, pages):
    import json

    from develop.outputs.record import record

    data = json.loads(record("T1", "transition", {}, [transition], []))
    points = np.array(data["patterns"][0]["cut"]["outline"])
    ring = Polygon(points).exterior
    for drawn in grid(pages).values():
        corner = drawn.of("cut")[0][0]  # where END A begins, as does the record's outline
        moved = outline(drawn) - corner + points[0]
        assert max(ring.distance(Point(*point)) for point in moved) < 0.01
        ends = np.array([segment[0] for segment in drawn.of("cut")]) - corner + points[0]
        assert LineString([*ends, ends[0]]).length == pytest.approx(ring.length, rel=0.01)


def test_a_page_is_left_out_only_if_nothing_is_drawn_in_its_cell(pages):
    by_place = grid(pages)
    columns = max(column for column, _ in by_place) + 1
    rows = max(row for _, row in by_place) + 1
    assert 0 < len(by_place) < columns * rows
    drawn = by_place[0, 0]
    clip = next(clip for *_, clip in drawn.segments if clip is not None)
    step = np.array([outline(by_place[0, 0])[0][0] - outline(by_place[1, 0])[0][0],
                     outline(by_place[0, 1])[0][1] - outline(by_place[0, 0])[0][1]])  # fmt: skip
    every = sampled([s for s, layer, *_ in drawn.segments if layer not in ("notes", "page-marks", None)], 60)
    for column, row in product(range(columns), range(rows)):
        low, high = clip + np.array([column, -row]) * step
        cell = (low + 10.0 * (column > 0), high - 10.0)
        inside = ((every > cell[0] + [0.0, 10.0]) & (every < cell[1] - [0, 0])).all(axis=1)
        if (column, row) not in by_place:
            assert not inside.any()


@pytest.mark.parametrize("way", ["portrait", "landscape"])
def test_pages_round_an_opening_hang_together_with_the_rest(samples, way):
    hole = Outline(
        (("opening", samples.arc(np.array([1500.0, 1000.0]), 60.0, 0.0, 2 * np.pi)),), np.pi * 3600
    )
    pattern = replace(
        samples.rectangle(3000.0, 2000.0), openings=(hole,), labels=(), arrows=(), lines_as="none"
    )
    places = set(grid(read([pattern], PageSetup(A4, orientation=way))))
    reached, ahead = set(), [min(places)]
    while ahead:
        column, row = ahead.pop()
        reached.add((column, row))
        near = {(column + 1, row), (column - 1, row), (column, row + 1), (column, row - 1)}
        ahead += (near & places) - reached
    assert reached == places
    # A border all round, the hole, and one way to it: far from the whole grid.
    columns, rows = (max(each) + 1 for each in zip(*places, strict=True))
    assert len(places) <= 2 * (columns + rows) - 4 + 4 + min(columns, rows) // 2
    assert len(places) < 0.8 * columns * rows


def test_pages_have_names_labels_a_map_and_their_neighbours(pages):
    labels = pages.page_labels
    assert labels[0] == "how to"
    names = [name_of(pages, page) for page in tiles(pages)]
    assert len(set(names)) == len(names) == len(pages.pages) - 1
    assert names[:3] == ["A1", "B1", "C1"]
    first = words(pages.pages[0])
    for name in names:
        assert re.search(rf"\b{name}\b", first), name
    for n, (name, page) in enumerate(zip(names, tiles(pages), strict=True), 1):
        text = words(page)
        assert text.startswith(f"{name} ") or f" {name} T1 " in f" {text} "
        assert f"T1 · page {n} of {len(names)}" in text
        column, row = name[0], int(name[1:])
        for word, other in (("right", f"{chr(ord(column) + 1)}{row}"), ("below", f"{column}{row + 1}"),
                            ("left", f"{chr(ord(column) - 1)}{row}"), ("above", f"{column}{row - 1}")):  # fmt: skip
            assert (f"{word} {other}" in text) == (other in names), (name, word, other)
            if other in names and word in ("right", "below"):
                assert f"LAY ON {other}" in text


def test_the_map_shows_the_outline_of_the_pattern(transition, pages):
    drawn = Drawn(pages, pages.pages[0])
    thick = [s for s, _, wide, _ in drawn.segments if abs(wide - 0.35) < 0.001 and len(s) == 4]
    points = sampled(thick)
    wide, high = np.ptp(transition.cut.curve("a").controls, axis=0)
    bottom = points[points[:, 1] < points[:, 1].min() + 0.4 * np.ptp(points[:, 1])]
    assert len(thick) > 8
    assert np.ptp(bottom[:, 0]) / np.ptp(bottom[:, 1]) == pytest.approx(wide / high, rel=0.1)


def test_the_long_check_measures_1000_mm_over_the_pages(pages):
    by_place = grid(pages)
    text = " ".join(words(page) for page in tiles(pages))
    assert "CHECK 1000 mm FROM HERE" in text
    assert "CHECK 1000 mm TO HERE" in text
    home = outline(by_place[0, 3])[0]  # where END A begins on its page
    found = set()
    for drawn in by_place.values():
        shift = outline(drawn)[0] - home
        for segment in drawn.of("page-marks"):
            if len(segment) == 2 and abs(np.ptp(segment[:, 0]) - 1000.0) < 0.01:
                found.add(tuple(np.round((segment - shift).ravel(), 2)))
    ((x1, y1, x2, y2),) = found  # at one place of the sheet, on every page that shows it
    assert y1 == y2
    assert abs(x2 - x1) == pytest.approx(1000.0, abs=0.01)
    # It lies on the datum line y = 0 and starts from x = 0.
    low = min(sampled(by_place[0, 3].of("cut"), 100)[:, 1])
    assert y1 == pytest.approx(low, abs=0.02)
    assert min(x1, x2) == pytest.approx(min(sampled(by_place[0, 3].of("cut"))[:, 0]), abs=0.02)


@pytest.mark.parametrize(("x", "y"), [(149.5, 200.7), (155.0, 195.0), (150.0, 200.0)])
def test_factors_multiply_the_drawing_and_stand_on_every_page(transition, x, y):
    # A printer that makes 149.5 of 150 needs a drawing that is 150 / 149.5 as long.
    factors = (150.0 / x, 200.0 / y)
    plain = grid(read([transition], PageSetup(A4, orientation="portrait")))
    reader = read([transition], PageSetup(A4, orientation="portrait", factors=factors, printer="office"))
    for page in reader.pages:
        assert ("PRINTER FACTORS" in words(page)) == (factors != (1.0, 1.0))
        if factors != (1.0, 1.0):
            assert f"PRINTER FACTORS X {factors[0]:.4f}, Y {factors[1]:.4f} (office)" in words(page)
    frame = np.vstack(
        [
            s
            for s in Drawn(reader, reader.pages[0]).of("notes")
            if len(s) == 2 and np.hypot(*(s[1] - s[0])) > 90 and np.hypot(*(s[1] - s[0])) < 110
        ]
    )
    assert np.ptp(frame, axis=0) == pytest.approx(100.0 * np.array(factors), abs=0.01)
    mine, before = next(iter(grid(reader).values())), next(iter(plain.values()))
    assert np.ptp(outline(mine), axis=0) == pytest.approx(np.ptp(outline(before), axis=0) * factors, abs=0.01)
    for drawn in grid(reader).values():
        low, high = next(clip for *_, clip in drawn.segments if clip is not None)
        assert low == pytest.approx([10.0, 10.0], abs=0.001)
        assert high[0] == pytest.approx(200.0, abs=0.001)
        assert high[1] < 287.0


def test_fonts_are_embedded(pages):
    fonts = {}
    for page in pages.pages:
        fonts.update(page["/Resources"]["/Font"])
        for form in page["/Resources"].get("/XObject", {}).values():
            fonts.update(form["/Resources"]["/Font"])
    assert fonts
    for font in fonts.values():
        assert "DejaVuSans" in font["/BaseFont"]
        assert len(font["/FontDescriptor"]["/FontFile2"].get_data()) > 1000


def test_the_same_patterns_give_the_same_bytes(transition, samples, monkeypatch):
    one = written([transition, samples.fan()], PageSetup(A4), title="T1").data
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "12345")
    assert written([transition, samples.fan()], PageSetup(A4), title="T1").data == one
    assert not re.search(rb"D:[0-9]{8}", one)


def test_several_patterns_have_a_map_each_and_pages_by_their_mark():
    built = make(
        "branch", mark="B1", header="round 400", header_length=600, branch="round 150", centre_to_end=400
    )
    patterns = [lettered(pattern) for pattern in built.patterns]
    reader = read(patterns)
    first = words(reader.pages[0])
    for pattern, count in zip(patterns, counts_of(patterns, PageSetup(A4)), strict=True):
        assert f"{pattern.mark}: {count} page" in first
        assert sum(label.startswith(f"{pattern.mark} ") for label in reader.page_labels) == count


def test_many_maps_go_on_to_further_pages_and_none_is_cut(samples):
    patterns = [replace(samples.rectangle(500.0, 300.0), mark=f"S{n}") for n in range(12)]
    reader = read(patterns)
    covers = [
        page
        for page, label in zip(reader.pages, reader.page_labels, strict=True)
        if label.startswith("how to")
    ]
    assert len(covers) > 1
    assert [label for label in reader.page_labels if label.startswith("how to")] == [
        "how to",
        *(f"how to {n}" for n in range(2, len(covers) + 1)),
    ]
    text = " ".join(map(words, covers))
    for pattern in patterns:
        assert text.count(f"{pattern.mark}: ") == 1
    for page in covers:
        drawn = Drawn(reader, page)
        every = np.vstack([*drawn.of("notes"), *(at[None] for at, _ in drawn.words)])
        assert every.min() >= 10.0 - 1e-3
        assert (every.max(axis=0) <= [200.001, 287.001]).all()


@pytest.mark.parametrize("name", ["A4", "Letter"])
@pytest.mark.parametrize("way", ["portrait", "landscape"])
@pytest.mark.parametrize("margin", [5.0, 40.0])
def test_all_of_the_first_pages_lies_inside_the_margins(samples, name, way, margin):
    setup = PageSetup(PAPERS[name.lower()], way, margin, 50.0, (0.96, 1.04))
    reader = read([samples.slanting()], setup)
    for page, label in zip(reader.pages, reader.page_labels, strict=True):
        if label.startswith("how to"):
            wide, high = size(page)[2:]
            drawn = Drawn(reader, page)
            every = np.vstack([*drawn.of("notes"), *(at[None] for at, _ in drawn.words)])
            assert every.min() >= margin - 0.01
            assert every[:, 0].max() <= wide - margin + 0.01
            assert every[:, 1].max() <= high - margin + 0.01


def test_layers_have_the_names_of_those_of_the_cutting_files(transition):
    for data in (written([transition], PageSetup(A4), title="T1").data, pdf([transition])):
        reader = PdfReader(io.BytesIO(data))
        listed = reader.trailer["/Root"]["/OCProperties"]
        names = [str(group["/Name"]) for group in listed["/OCGs"]]
        assert set(names) == {"cut", "roll-lines", "witness-marks", "text", "page-marks", "notes"}
        assert [str(each["/Name"]) for each in listed["/D"]["/Order"]] == names
        for page in reader.pages:
            assert {str(each["/Name"]) for each in page["/Resources"]["/Properties"].values()} == set(names)


def shown_only(data, keep):
    """The file with every layer but these switched off."""
    writer = PdfWriter(clone_from=io.BytesIO(data))
    listed = writer._root_object["/OCProperties"]
    groups = list(listed["/D"]["/ON"])
    on = [group for group in groups if str(group.get_object()["/Name"]) in keep]
    assert len(on) == len(keep)
    listed["/D"][NameObject("/ON")] = ArrayObject(on)
    listed["/D"][NameObject("/OFF")] = ArrayObject([group for group in groups if group not in on])
    buffer = io.BytesIO()
    writer.write(buffer)
    return buffer.getvalue()


def test_a_layer_that_is_switched_off_is_not_shown(samples):
    data = written([samples.rectangle(150.0, 150.0)], PageSetup(A4), title="S1").data
    ink = {}
    for keep in (("cut",), ("text",), ("cut", "text")):
        document = pypdfium2.PdfDocument(shown_only(data, keep))
        ink[keep] = rendered(document[1], 4.0) < 128
        document.close()
    assert ink["cut",].sum() > 1000
    assert ink["text",].sum() > 1000
    # Nothing but the two together, and they do not lie on each other.
    assert (ink["cut",] | ink["text",]).sum() == pytest.approx(ink["cut", "text"].sum(), rel=0.02)
    assert (ink["cut",] & ink["text",]).sum() == 0


DOTS = 4.0  # a mm


def test_pages_laid_together_are_the_single_sheet(transition):
    """Every page cut back to its joints and laid in its place, against the large sheet, dot by dot."""
    keep = ("cut", "roll-lines", "witness-marks", "text")
    setup = PageSetup(A4)
    data = written([transition], setup, title="T1").data
    reader = PdfReader(io.BytesIO(data))
    by_place = grid(reader)
    # The sheet's corner is where the net's END A begins on either.
    single = pdf([transition])
    whole = PdfReader(io.BytesIO(single))
    drawn = Drawn(whole, whole.pages[0])
    document = pypdfium2.PdfDocument(shown_only(single, keep))
    sheet = rendered(document[0], DOTS) < 128
    document.close()
    home = outline(drawn)[0] * DOTS
    home[1] = sheet.shape[0] - home[1]
    laid = np.zeros_like(sheet)
    document = pypdfium2.PdfDocument(shown_only(data, keep))
    numbers = {name_of(reader, page): reader.get_page_number(page) for page in tiles(reader)}
    # As they are laid: the lower right first, and each that follows cut back at its right and lower joint.
    for (column, row), each in sorted(by_place.items(), key=lambda item: (-item[0][1], -item[0][0])):
        dots = rendered(document[numbers[f"{chr(ord('A') + column)}{row + 1}"]], DOTS) < 128
        low, high = next(clip for *_, clip in each.segments if clip is not None)
        right = high[0] - 10.0 * ((column + 1, row) in by_place)
        bottom = low[1] + 10.0 * ((column, row + 1) in by_place)
        left, top = low[0], high[1]
        rows = slice(round(dots.shape[0] - top * DOTS), round(dots.shape[0] - bottom * DOTS))
        columns = slice(round(left * DOTS), round(right * DOTS))
        corner = outline(each)[0] * DOTS
        corner[1] = dots.shape[0] - corner[1]
        down, along = (round(value) for value in (home - corner)[::-1])
        ys = np.arange(rows.start, rows.stop) + down
        xs = np.arange(columns.start, columns.stop) + along
        good_y, good_x = (ys >= 0) & (ys < laid.shape[0]), (xs >= 0) & (xs < laid.shape[1])
        laid[np.ix_(ys[good_y], xs[good_x])] = dots[rows, columns][np.ix_(good_y, good_x)]
    document.close()
    assert sheet.sum() > 20_000
    # Places are rounded to a dot: each dark dot has one within a dot of it on the other, both ways.
    assert missing(sheet, laid) < 0.002 * sheet.sum()
    assert missing(laid, sheet) < 0.002 * laid.sum()


def missing(these, those):
    near = np.zeros_like(those)
    for y, x in product((-1, 0, 1), repeat=2):
        near |= np.roll(those, (y, x), axis=(0, 1))
    return int((these & ~near).sum())


@settings(deadline=None, max_examples=100)
@given(
    wide=st.floats(5.0, 20_000.0),
    high=st.floats(5.0, 4_000.0),
    margin=st.floats(5.0, 40.0),
    more=st.floats(1.0, 20.0),
    paper=st.sampled_from([*PAPERS.values(), Paper("roll", 250.0), Paper("roll", 914.0)]),
    way=st.sampled_from(["portrait", "landscape", "fewest"]),
    factors=st.tuples(st.floats(0.95, 1.05), st.floats(0.95, 1.05)),
)
def test_cells_hold_every_point_and_windows_reach_half_an_overlap_beyond(
    wide, high, margin, more, paper, way, factors
):
    grid_of = np.linspace(0.0, 1.0, 40)
    points = np.array([(x * wide, y * high) for x, y in product(grid_of, (0.0, 1.0))]
                      + [(x * wide, y * high) for x, y in product((0.0, 1.0), grid_of)])  # fmt: skip
    setup = PageSetup(paper, way, margin, max(10.0, margin + more), factors)
    tiling = tiled(points, setup)
    seen = np.zeros(len(points), dtype=int)
    for page in tiling.pages:
        left, bottom, right, top = tiling.cell(page)
        seen += ((points >= (left, bottom)) & (points <= (right, top))).all(axis=1)
        reach_x, reach_y = page.left + page.wide - right, page.bottom + page.high - top
        assert (
            reach_x == pytest.approx(setup.overlap / factors[0] / 2.0, abs=1e-6)
            or page.column == len(tiling.across) - 2
        )
        assert reach_y == pytest.approx(setup.overlap / factors[1] / 2.0, abs=1e-6) or page.row == 0
        assert page.wide * factors[0] + 2.0 * margin <= page.size[0] + 1e-6
        assert page.high * factors[1] + 2.0 * margin < page.size[1]
        assert max(page.size) <= 5080.0 + 1e-6
    assert (seen >= 1).all()
