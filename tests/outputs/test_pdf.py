"""PDF files read back by pypdf, by operators of the page, and as pixels by poppler."""

from __future__ import annotations

import io
import math
import re
import subprocess
import sys
from dataclasses import replace

import numpy as np
import pypdfium2
import pytest
from pypdf import PdfReader
from pypdf.generic import ContentStream
from shapely import LineString, Point, Polygon

from develop.outputs.fonts import width
from develop.outputs.pdf import pdf, printed
from develop.pattern.table import divisions_table
from tests.outputs.beziers import sampled

MM = 72.0 / 25.4
LARGEST = 14400.0  # [points] the largest page that PDF 1.6 allows without UserUnit (its Annex C)


def read(*patterns):
    return PdfReader(io.BytesIO(pdf(patterns)))


def large(reader):
    """The pages that carry a pattern."""
    return [page for page in reader.pages if "PRINT AT ACTUAL SIZE" in page.extract_text().split("\n")[0]]


def tape(reader):
    """The pages that a pattern is marked out from by tape; they come last."""
    count = len(large(reader))
    assert not any("PRINT AT ACTUAL SIZE" in page.extract_text() for page in reader.pages[count:])
    return reader.pages[count:]


def contents(reader, page):
    """Paths [mm] of a page, each (Bézier or line segments, closed), and texts as (x, y) [mm]."""
    paths, texts, at, now = [], [], None, []
    for operands, operator in ContentStream(page.get_contents(), reader).operations:
        numbers = [float(v) / MM for v in operands] if operator in (b"m", b"l", b"c") else operands
        if operator == b"m":
            now, at = [], np.array(numbers)
        elif operator == b"l":
            now.append(np.array([at, numbers]))
            at = now[-1][-1]
        elif operator == b"c":
            now.append(np.vstack([at, np.reshape(numbers, (3, 2))]))
            at = now[-1][-1]
        elif operator in (b"s", b"S"):
            paths.append((now, operator == b"s"))
        elif operator == b"Tm":
            place = np.array([float(v) for v in operands[4:6]]) / MM
        elif operator == b"Tj":
            texts.append(place)
        # Nothing moves, scales, clips or fills the drawing.
        assert operator not in (b"W", b"W*", b"f", b"F", b"f*", b"B", b"b", b"Do")
        if operator == b"cm":
            assert [float(v) for v in operands] == [1, 0, 0, 1, 0, 0]
    return paths, texts


def squares(paths, side):
    found = []
    for segments, closed in paths:
        points = np.array([*(s[0] for s in segments), segments[-1][-1]])
        if closed and len(points) == 4 and all(len(s) == 2 for s in segments):
            across = np.ptp(points, axis=0)
            if abs(across - side).max() < 1.0:
                found.append(across)
    return found


def contour(paths):
    """The contour of the pattern: the closed path of the greatest reach that itself comes back to its start."""
    closed = [s for s, is_closed in paths if is_closed and np.allclose(s[0][0], s[-1][-1], atol=1e-4)]
    return max(closed, key=lambda segments: np.ptp(np.vstack(segments), axis=0).max())


def size(page):
    return [float(v) / MM for v in page.mediabox[2:]]


def test_one_page_for_each_pattern_at_full_size(samples):
    reader = read(samples.rectangle(), samples.fan())
    assert len(large(reader)) == 2
    assert large(reader) == list(reader.pages[:2])
    assert printed([samples.rectangle(), samples.fan()])[1] == (1, 1)
    for page in reader.pages:
        assert "/UserUnit" not in page
        assert page.mediabox[:2] == [0, 0]
        assert page.get("/Rotate", 0) == 0
    assert reader.trailer["/Root"]["/ViewerPreferences"]["/PrintScaling"] == "/None"


@pytest.mark.parametrize(("shape", "side"), [((1256.6, 450.0), 100.0), ((60.0, 40.0), 50.0)])
def test_check_square_measures_what_it_says(samples, shape, side):
    reader = read(samples.rectangle(*shape))
    (found,) = squares(contents(reader, reader.pages[0])[0], side)
    assert found == pytest.approx([side, side], abs=0.01)
    text = reader.pages[0].extract_text()
    assert f"{side:.0f} mm x {side:.0f} mm" in text
    assert "measure both ways" in text


def test_contour_is_true_to_scale_and_made_of_curves(samples):
    reader = read(samples.fan(300.0, 200.0, 250.0))
    segments = contour(contents(reader, reader.pages[0])[0])
    slant = math.hypot(250.0, 100.0)
    curved = [s for s in segments if len(s) == 4]
    assert len(segments) - len(curved) == 2
    assert segments[-1][-1] == pytest.approx(segments[0][0], abs=1e-4)
    points = sampled(curved)
    left, right = points[:, 0].min(), points[:, 0].max()
    centre = np.array([(left + right) / 2, points[:, 1].min() + 3 * slant])
    radius = np.hypot(*(points - centre).T)
    miss = np.minimum(np.abs(radius - 3 * slant), np.abs(radius - 2 * slant))
    assert miss.max() < 2e-3
    assert (radius > 2.9 * slant).any()


def test_nothing_is_near_the_paper_edge_nor_over_the_pattern(samples):
    for pattern in (samples.rectangle(), samples.slanting(), samples.fan(), samples.rectangle(60.0, 30.0)):
        reader = read(pattern)
        page = reader.pages[0]
        paths, texts = contents(reader, page)
        every = np.vstack([*(s for segments, _ in paths for s in segments), *texts])
        wide, high = size(page)
        assert every.min() >= 10.0 - 1e-6
        assert every[:, 0].max() <= wide - 10.0 + 1e-6
        assert every[:, 1].max() <= high - 10.0 + 1e-6
        sheet = Polygon(sampled(contour(paths)))
        inside = [point for point in texts if sheet.buffer(1.0).contains(Point(point))]
        assert len(inside) == len(pattern.labels) + len(pattern.arrows)
        found = [p for p in paths if squares([p], 100.0) or squares([p], 50.0)]
        (square,) = (np.vstack(segments) for segments, _ in found)
        assert not sheet.intersects(LineString(square).convex_hull)


def test_words_on_the_sheet(samples):
    pattern = samples.slanting()
    text = read(pattern).pages[0].extract_text()
    plain = " ".join(text.split())
    for fact in pattern.facts:
        assert " ".join(fact.split()) in plain
    for words in (
        "PRINT AT ACTUAL SIZE",
        "sheet 1 of 1",
        "Facing END B: in front of it, looking in",
        "anticlockwise",
        "0 RIGHT",
        "90 TOP",
        "180 LEFT",
        "270 BOTTOM",
        "x = 0",
        "y = 0",
        "END A, the line y = 0",
        "at END A",
        "sharp edges",
        "gloves and eye protection",
        "Local codes and licensed practice",
    ):
        assert words in plain, words


def test_divisions_table_is_printed(samples):
    lines = read(samples.slanting(150.0, 60.0, 45.0)).pages[0].extract_text().split("\n")
    numbers = " ".join(lines)
    for n in range(25):
        # Ordinate of an oblique cut at equal divisions: 60 + 150 (1 - cos); the figure is in the table.
        ordinate = 60.0 + 150.0 * (1.0 - math.cos(2 * math.pi * n / 24))
        assert f"{ordinate:.1f}" in numbers
        assert f"{300.0 * math.pi * n / 24:.1f}" in numbers


def test_inches(samples):
    reader = read(replace(samples.rectangle(48 * 25.4, 12.375 * 25.4), units="in"))
    for page in (reader.pages[0], reader.pages[-1]):
        plain = page.extract_text()
        assert "12-3/8" in plain
        assert "(inches; directions in degrees anticlockwise)" in plain
        assert "All figures in mm" not in plain


def test_the_cut_line_is_the_heaviest(samples):
    """Strokes of the pattern as they stand in the page, widths in mm, by what they draw."""
    reader = read(samples.rectangle(1256.6, 450.0))
    widths, now, wide = {}, None, 0.0
    for operands, operator in ContentStream(reader.pages[0].get_contents(), reader).operations:
        if operator == b"w":
            wide = round(float(operands[0]) / MM, 3)
        elif operator == b"m":
            now = [np.array([float(v) for v in operands]) / MM]
        elif operator == b"l":
            now.append(np.array([float(v) for v in operands]) / MM)
        elif operator == b"s" and len(now) in (4, 5) and np.ptp(np.vstack(now), axis=0)[0] > 1000.0:
            widths["cut"] = wide
        elif operator == b"S" and len(now) == 2 and now[0][0] == now[1][0]:
            # The sheet's capitals, 0.018 of the root of its area but at most 12, are a tick's length and half a mark's.
            length = float(np.ptp(np.vstack(now), axis=0)[1])
            name = {12.0: "tick", 24.0: "mark"}.get(round(length, 2))
            if name:
                widths.setdefault(name, set()).add(wide)
    assert widths == {"cut": 0.5, "mark": {0.25}, "tick": {0.18}}


@pytest.mark.parametrize(("units", "sides"), [("mm", (210.0, 297.0)), ("in", (215.9, 279.4))])
def test_pages_for_the_tape_are_of_office_paper_and_numbered(samples, units, sides):
    # A4 is 210 x 297 mm (ISO 216), Letter 8.5 x 11 in (ANSI Y14.1).
    pages = tape(read(replace(samples.rectangle(divisions=180), units=units)))
    assert len(pages) > 3
    for n, page in enumerate(pages, 1):
        assert size(page) == pytest.approx(sides, abs=0.01)
        assert f"page {n} of {len(pages)}" in page.extract_text()
        assert "S1" in page.extract_text()


@pytest.mark.parametrize("units", ["mm", "in"])
def test_pages_for_the_tape_say_all_that_is_needed(samples, units):
    pattern = replace(samples.slanting(150.0, 60.0, 45.0), units=units)
    plain = " ".join(" ".join(page.extract_text().split()) for page in tape(read(pattern)))
    for words in (
        *(" ".join(fact.split()) for fact in pattern.facts), "Facing END B: in front of it, looking in", "90 TOP",
        "Witness marks", "Lines to mark out", "at END A", "check square", "smooth curve", "sharp edges",
        "Local codes and licensed practice", "END A, the line y = 0",
    ):  # fmt: skip
        assert words in plain, words


def test_the_check_across_is_that_of_the_corners(samples):
    plain = " ".join(
        " ".join(page.extract_text().split()) for page in tape(read(samples.rectangle(1200.0, 350.0)))
    )
    # 1200 and 350 are the sides of a triangle whose long side is 1250 (24, 7, 25).
    assert plain.count("1250.0 mm") == 2
    assert "from line 0 at END A straight to line 24 at END B is 1250.0 mm" in plain


def test_rows_of_the_tables_stand_whole_on_their_page_under_heads(samples):
    pattern = samples.slanting(150.0, 60.0, 45.0)
    rows = divisions_table(pattern.divisions).rows
    dense = replace(
        pattern, divisions=tuple(replace(d, number=n) for n, d in enumerate(pattern.divisions * 8))
    )
    reader = read(dense)
    seen = []
    for page in tape(reader):
        lines = rows_of(reader, page)
        numbered = [line for line in lines if len(line) == len(rows[0]) and line[0].isdigit()]
        if numbered:
            assert any(line[:2] == ["line", "direction"] for line in lines)
        seen += numbered
        paths, texts = contents(reader, page)
        every = np.vstack([*(s for segments, _ in paths for s in segments), *texts])
        assert every.min() >= 12.0 - 1e-4
        assert every[:, 0].max() <= 198.0 + 1e-6
    assert [line[0] for line in seen] == [str(n) for n in range(200)]
    assert [tuple(line[1:]) for line in seen] == [row[1:] for row in rows] * 8


def rows_of(reader, page):
    """The words of a page by the height they stand at, from the left."""
    found = {}

    def visit(text, cm, tm, font, size):
        if text.strip():
            found.setdefault(round(tm[5], 2), []).append((tm[4], text.strip()))

    page.extract_text(visitor_text=visit)
    return [[text for _, text in sorted(line)] for _, line in sorted(found.items(), reverse=True)]


def test_witness_marks_are_in_a_table_with_their_running_lengths(samples):
    reader = read(samples.rectangle(1256.0, 450.0))
    lines = [line for page in tape(reader) for line in rows_of(reader, page)]
    words = ("BOTTOM", "RIGHT", "TOP", "LEFT", "BOTTOM")
    for end, y in (("END A", "0.0"), ("END B", "450.0")):
        found = [line[-5:] for line in lines if end in line and line[-4:-3] and line[-4] in words]
        assert found == [[end, word, f"{314 * n}.0", f"{314 * n}.0", y] for n, word in enumerate(words)]


def test_every_font_is_embedded(samples):
    reader = read(samples.rectangle(), samples.fan())
    fonts = {}
    for page in reader.pages:
        fonts.update(page["/Resources"]["/Font"])
    assert fonts
    for font in fonts.values():
        font = font.get_object()
        assert "DejaVuSans" in font["/BaseFont"]
        assert len(font["/FontDescriptor"]["/FontFile2"].get_data()) > 1000


@pytest.fixture(scope="module")
def parted(samples):
    """A sheet of 11 m by 6.4 m, of 3 columns and 2 rows."""
    reader = read(samples.rectangle(11000.0, 6400.0))
    return reader, [contents(reader, page) for page in large(reader)]


def test_a_sheet_over_5080_mm_goes_on_to_further_pages(parted):
    reader, pages = parted
    assert len(pages) == 6
    for page in reader.pages:
        assert max(float(v) for v in page.mediabox[2:]) <= LARGEST
    heads = [" ".join(page.extract_text().split()) for page in large(reader)]
    for n, head in enumerate(heads):
        assert f"sheet {n + 1} of 6" in head
        assert "PRINT AT ACTUAL SIZE" in head
    assert "right: sheet 2" in heads[0]
    assert "below: sheet 4" in heads[0]
    assert "left:" not in heads[0]
    assert "left: sheet 4 · right: sheet 6 · above: sheet 2" in heads[4]
    # The check square and the table are whole on the first page, and there alone.
    assert [len(squares(paths, 100.0)) for paths, _ in pages] == [1, 0, 0, 0, 0, 0]
    assert ["Lines to mark out" in head for head in heads] == [True, False, False, False, False, False]


def test_pages_lay_the_same_contour_over_each_other(parted):
    reader, pages = parted
    corners = [contour(paths)[0][0] for paths, _ in pages]  # the pattern's (0, 0) on each page
    wide, high = size(reader.pages[0])
    steps = {tuple(np.round(corners[k] - corners[k + 1], 3)) for k in (0, 1, 3, 4)}
    ((step, level),) = steps
    assert level == 0.0
    overlap = wide - 24.0 - step  # 12 mm margins
    assert overlap == pytest.approx(60.0, abs=0.01)
    down = corners[3] - corners[0]
    assert down[0] == pytest.approx(0.0, abs=1e-3)
    # The pages' windows together cover the sheet: the pattern ends before the last one does.
    assert corners[2][0] + 11000.0 < wide - 12.0
    assert 12.0 < corners[3][1] < high
    assert 0.0 < corners[0][1] + 6400.0 < high - 12.0
    assert 0.0 < down[1] < high - 24.0


def test_crosses_of_neighbours_lie_on_each_other(parted):
    reader, pages = parted

    def crosses(paths, corner):
        lines = [np.vstack(segments) for segments, closed in paths if not closed and len(segments) == 1]
        arms = [s for s in lines if s.shape == (2, 2) and abs(np.ptp(s, axis=0).max() - 16.0) < 1e-3]
        level = {
            tuple(np.round(s.mean(axis=0) - corner, 2)) for s in arms if abs(np.ptp(s, axis=0)[1]) < 1e-3
        }
        upright = {
            tuple(np.round(s.mean(axis=0) - corner, 2)) for s in arms if abs(np.ptp(s, axis=0)[0]) < 1e-3
        }
        return level & upright

    found = [crosses(paths, contour(paths)[0][0]) for paths, _ in pages]
    wide, _ = size(reader.pages[0])
    for left, right in ((0, 1), (1, 2), (3, 4), (4, 5)):
        corner = contour(pages[left][0])[0][0]
        shared = wide - 12.0 - 30.0 - corner[0]  # the middle of the overlap, from the pattern's corner
        mine = {c for c in found[left] if abs(c[0] - shared) < 0.02}
        assert len(mine) > 10
        assert mine <= found[right]


def test_what_is_wholly_off_a_page_is_not_written(samples):
    reader = read(samples.rectangle(11000.0, 400.0))
    assert len(large(reader)) == 3
    for page in large(reader):
        wide, _ = size(page)
        for segments, closed in contents(reader, page)[0]:
            if not closed:
                low, top = np.vstack(segments).min(axis=0), np.vstack(segments).max(axis=0)
                assert low[0] <= wide
                assert top[0] >= 0.0


def test_a_page_just_small_enough_stays_one(samples):
    page, *more = large(read(samples.rectangle(4950.0, 400.0)))
    assert more == []
    assert float(page.mediabox[2]) <= LARGEST


def test_the_same_patterns_give_the_same_bytes(samples):
    one, other = (pdf([samples.fan(), samples.rectangle()]) for _ in range(2))
    assert one == other
    assert pdf([samples.fan()]) != one


def test_no_date_version_or_user_in_the_file(samples, monkeypatch):
    one = pdf([samples.rectangle()])
    assert read(samples.rectangle()).metadata == {
        "/Title": "S1",
        "/Subject": "flat pattern, true scale: print at actual size",
        "/Creator": "develop",
        "/Producer": "develop",
    }
    assert not re.search(rb"D:[0-9]{8}", one)
    monkeypatch.setenv("SOURCE_DATE_EPOCH", "12345")
    monkeypatch.setenv("TZ", "Asia/Tokyo")
    assert pdf([samples.rectangle()]) == one


def test_heavy_libraries_are_not_imported():
    code = (
        "import sys, develop.outputs.svg, develop.outputs.record, develop.outputs.pdf, develop.outputs.tiled;"
        "import develop.outputs.fonts as f; f.register();"
        "heavy = {'matplotlib', 'scipy', 'shapely', 'trimesh', 'pydantic'} & set(sys.modules);"
        "assert not heavy, heavy; assert 'reportlab' in sys.modules"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_width_of_text_is_that_of_the_face():
    # Digits of DejaVu Sans are 1303 units of 2048 wide, its capitals 1493 high (its hmtx and OS/2 tables).
    assert width("8", 1493.0) == pytest.approx(1303.0, abs=4.0)
    assert width("88", 3.0) == pytest.approx(2 * width("8", 3.0))


def test_rendered_at_its_size_the_pattern_measures_true(samples):
    document = pypdfium2.PdfDocument(pdf([samples.rectangle(600.0, 300.0)]))
    page = document[0].render(scale=127 / 72, grayscale=True)
    dark = page.to_numpy().reshape(page.height, page.width) < 128
    document.close()
    # 127 dots an inch are 5 dots a mm; the line's width and a dot at either end are 0.75 mm. Longest runs of dark dots: the pattern's sides.
    assert longest(dark) / 5.0 == pytest.approx(600.0, abs=0.75)
    assert longest(dark.T) / 5.0 == pytest.approx(300.0, abs=0.75)


def longest(dark):
    best = 0
    for row in dark[dark.sum(axis=1) > 250]:
        steps = np.flatnonzero(np.diff(np.concatenate([[0], row.astype(np.int8), [0]])))
        best = max(best, int((steps[1::2] - steps[::2]).max()))
    return best


def test_flat_parts_are_not_told_of_a_line_0():
    from tests.pieces.making import make

    given = {"section": "ellipse 600 x 300", "width": 40, "holes": 8, "hole_diameter": 11}
    flat = [make("flange", **given), make("flange", **given, made_in=4), make("opening", section="round 300")]
    for built in flat:
        words = " ".join(page.extract_text() for page in read(*built.patterns).pages)
        assert "line 0" not in " ".join(words.split())
    rolled = " ".join(
        read(*make("straight", section="round 300", length=400).patterns).pages[0].extract_text().split()
    )
    assert "running lengths along END A and END B from line 0" in rolled
