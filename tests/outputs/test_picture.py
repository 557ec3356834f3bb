"""Pictures of the finished piece, decoded and looked at dot by dot."""

from __future__ import annotations

import io
import math
import struct
import subprocess
import sys

import numpy as np
import pytest
from shapely import LineString, MultiPoint, Point, Polygon

from develop.job.output_fields import Outputs
from develop.outputs import picture as module
from develop.outputs.picture import picture


@pytest.fixture(scope="module")
def solid(samples):
    return samples.Frustum()


def dots(data):
    from PIL import Image

    return np.asarray(Image.open(io.BytesIO(data)).convert("RGB")).astype(int)


def chunks(data):
    assert data[:8] == b"\x89PNG\r\n\x1a\n"
    at = 8
    while at < len(data):
        (length,) = struct.unpack(">I", data[at : at + 4])
        yield data[at + 4 : at + 8], data[at + 8 : at + 8 + length]
        at += 12 + length


def test_png_of_a_fixed_size_that_names_no_program(solid):
    found = list(chunks(picture([solid], ["T1"])))
    kinds = [kind for kind, _ in found]
    assert struct.unpack(">II", found[0][1][:8]) == (1200, 900)
    assert not {b"tEXt", b"iTXt", b"zTXt", b"tIME"} & set(kinds)


def test_the_same_piece_gives_the_same_bytes_whatever_the_user_has_set(solid):
    import matplotlib

    one = picture([solid], ["T1"])
    with matplotlib.rc_context({"savefig.dpi": 30, "figure.facecolor": "black", "font.size": 30}):
        assert picture([solid], ["T1"]) == one
    assert picture([solid], ["T2"]) != one


def test_pyplot_is_not_imported():
    code = (
        "import sys; from develop.outputs.picture import picture; import matplotlib.figure;"
        "assert 'matplotlib.pyplot' not in sys.modules"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_white_ground_and_a_piece_in_the_middle(solid):
    image = dots(picture([solid], ["T1"]))
    for corner in (image[0, 0], image[0, -1], image[-1, 0], image[-1, -1]):
        assert corner.tolist() == [255, 255, 255]
    border = np.concatenate(
        [image[:10].reshape(-1, 3), image[-10:].reshape(-1, 3), image[:, :10].reshape(-1, 3)]
    )
    assert (border == 255).all()  # nothing is cut off
    filled = (image.sum(axis=2) < 3 * 250).mean()
    assert 0.15 < filled < 0.6


def red(image):
    return (image[..., 0] > 150) & (image[..., 1] < 70) & (image[..., 2] < 70)


def test_the_seam_is_drawn_where_it_is(samples):
    # At the left side of the piece the view is from the left, so the whole seam is to be seen.
    seen = red(dots(picture([samples.Frustum(seam_at=math.pi)], [])))
    assert seen.sum() > 2000
    across = np.flatnonzero(seen.any(axis=0))
    assert np.ptp(across) > 300
    hidden = red(dots(picture([samples.Frustum(seam_at=-math.pi / 2)], [])))
    assert 300 < hidden.sum() < seen.sum()


@pytest.mark.parametrize("seam_at", [0.0, math.pi / 2, math.pi, -math.pi / 2])
@pytest.mark.parametrize("sizes", [(300.0, 200.0, 450.0), (150.0, 150.0, 1500.0), (200.0, 400.0, 150.0)])
def test_words_stand_outside_the_piece_and_apart(samples, sizes, seam_at):
    solid = samples.Frustum(*sizes, seam_at=seam_at)
    vertices, _ = solid.faces()
    middle = (vertices.min(axis=0) + vertices.max(axis=0)) / 2.0
    reach = float(np.linalg.norm(np.ptp(vertices, axis=0)))
    for aside in (1.0, -1.0):
        camera = module._Camera(middle, reach, aside=aside)
        shape = MultiPoint(camera.project(vertices)).convex_hull
        words = module._words(camera, [solid], ())
        assert [word[0] for word in words] == ["END A", "END B", "TOP", "SEAM", "RIGHT"]
        for _, _, end, _ in words:
            assert shape.distance(Point(end)) > 0.02
        for n, (_, _, end, _) in enumerate(words):
            for _, _, other, _ in words[:n]:
                assert np.hypot(*(end - other)) > 0.08


@pytest.mark.parametrize("shift", [(0.0, 0.0), (120.0, 0.0), (-250.0, -80.0)])
def test_right_is_the_right_side_of_end_b_and_its_word_is_not_to_the_left_of_it(samples, shift):
    solid = samples.Frustum(shift=shift)
    for aside in (1.0, -1.0):
        camera = module._Camera(np.zeros(3), 900.0, aside=aside)
        text, start, end, _ = module._words(camera, [solid], ())[-1]
        assert text == "RIGHT"
        # The circle of END B: radius 200 about the shift, at the height of its centre, 450 from END A.
        assert start == pytest.approx(camera.project(np.array([200.0 + shift[0], shift[1], 450.0])), abs=1e-9)
        assert end[0] >= start[0] - 1e-12


def test_a_long_caption_goes_on_two_lines_of_like_length():
    facts = ["T1: transition", "END A ellipse 800 x 360 to END B ellipse 600 x 300", "length 550, END B 120 right",
             "sizes mean (mid-thickness)"]  # fmt: skip
    text, size = module._caption(facts)
    assert text.split("\n") == [f"{facts[0]}  ·  {facts[1]}", f"{facts[2]}  ·  {facts[3]}"]
    assert 11.0 < size <= 14.0
    assert module._caption(facts[:1]) == (facts[0], 14.0)
    assert module._caption([])[0] == ""


def test_the_caption_stays_in_the_picture_and_off_the_piece(samples):
    facts = ["M" * 40, "M" * 40, "M" * 40]
    bare, full = (dots(picture([samples.Frustum()], each)) for each in ([], facts))
    changed = np.argwhere((bare != full).any(axis=2))
    assert changed[:, 0].min() > 5
    assert changed[:, 0].max() < 0.12 * 900
    assert changed[:, 1].min() > 20
    assert changed[:, 1].max() < 1180


def test_the_view_is_facing_end_b_from_above_with_x_to_the_right_and_y_up():
    camera = module._Camera(np.zeros(3), 1.0, aside=1.0)
    origin, x, y, z = camera.project(np.array([[0.0, 0, 0], [0.1, 0, 0], [0, 0.1, 0], [0, 0, 0.1]]))
    assert origin.tolist() == [0.0, 0.0]
    assert x[0] > 0.0
    assert y[0] == pytest.approx(0.0, abs=1e-12)
    assert y[1] > 0.05
    assert z[0] < 0.0  # end B comes towards the eye, on the left
    other = module._Camera(np.zeros(3), 1.0, aside=-1.0)
    assert other.project(np.array([0.0, 0.0, 0.1]))[0] > 0.0


def test_equal_scale_in_all_directions():
    # A sphere at the middle looks round in a true perspective, whatever the direction of view.
    camera = module._Camera(np.zeros(3), 1000.0, aside=1.0)
    t = np.linspace(0.0, math.pi, 181)
    p = np.linspace(0.0, 2 * math.pi, 361)
    sphere = 50.0 * np.stack(
        [np.outer(np.sin(t), np.cos(p)), np.outer(np.cos(t), 0 * p + 1), np.outer(np.sin(t), np.sin(p))],
        axis=-1,
    )
    flat = camera.project(sphere.reshape(-1, 3))
    assert np.ptp(flat, axis=0) == pytest.approx([0.1, 0.1], rel=3e-3)


def test_near_things_look_larger():
    camera = module._Camera(np.zeros(3), 100.0, aside=1.0)
    ends = np.array([[0.0, -10.0, 0.0], [0.0, 10.0, 0.0]])
    near, far = (np.ptp(camera.project(ends + z * camera.towards)[:, 1]) for z in (40.0, -40.0))
    assert near > 1.2 * far


def test_outside_and_inside_are_told_apart(samples):
    solid = samples.Frustum(150.0, 150.0, 400.0, shift=(0.0, 0.0))
    image = dots(picture([solid], []))
    bluish = (image[..., 2] - image[..., 0] > 25).sum()  # the outside
    brownish = ((image[..., 0] - image[..., 2] > 4) & (image[..., 0] < 200) & ~red(image)).sum()  # the inside
    assert bluish > 50000
    assert brownish > 20000
    assert bluish > brownish


class Moved:
    """A sample part carried elsewhere; from elementary geometry, as the samples are."""

    def __init__(self, part, by):
        self.part, self.by = part, np.asarray(by, dtype=float)

    def faces(self):
        vertices, faces = self.part.faces()
        return vertices + self.by, faces

    def rim_a(self, n):
        return self.part.rim_a(n) + self.by

    def rim_b(self, n):
        return self.part.rim_b(n) + self.by

    @property
    def seam_line(self):
        return self.part.seam_line + self.by

    @property
    def joint_lines(self):
        return self.part.joint_lines + self.by

    @property
    def top_line(self):
        return self.part.top_line + self.by


@pytest.mark.parametrize("front_first", [False, True])
def test_a_part_hides_what_lies_behind_it_in_whatever_order_they_come(samples, front_first):
    camera = module._Camera(np.zeros(3), 1000.0, aside=1.0)
    small = samples.Frustum(100.0, 100.0, 300.0, shift=(0.0, 0.0), seam_at=0.0)
    front = Moved(samples.Frustum(200.0, 200.0, 400.0, shift=(0.0, 0.0)), 400.0 * camera.towards - [0, 0, 50])
    behind = Moved(front.part, -900.0 * camera.towards)
    seam = Point(camera.project(small.seam_line.mean(axis=0)))

    def last_seen(other):
        """What is painted last on the middle of the small part's seam: a wall or a line."""
        pair = [other, small] if front_first else [small, other]
        polygons, *_ = module._scene(camera, pair, 25.0, ())
        for polygon in reversed(polygons):
            if len(polygon) == 2 and LineString(polygon).distance(seam) < 1e-9:
                return "line"
            if len(polygon) == 4 and Polygon(polygon).contains(seam):
                return "wall"
        return None

    assert last_seen(behind) == "line"
    assert last_seen(front) == "wall"


def test_ends_are_those_of_the_first_and_the_last_part(samples):
    first = samples.Frustum(100.0, 100.0, 300.0, shift=(0.0, 0.0))
    last = Moved(first, (0.0, 0.0, 300.0))
    camera = module._Camera(np.array([0.0, 0.0, 300.0]), 700.0, aside=1.0)
    words = {word: start for word, start, _, _ in module._words(camera, [first, last], ())}
    for word, rim in (("END A", first.rim_a(240)), ("END B", last.rim_b(240))):
        assert np.abs(camera.project(rim) - words[word]).sum(axis=1).min() < 1e-12


def test_a_header_keeps_its_ends_and_a_branch_has_its_mark_at_its_free_end(samples):
    header = samples.Frustum(100.0, 100.0, 300.0, shift=(0.0, 0.0))
    branch = Moved(header, (300.0, 0.0, 0.0))
    camera = module._Camera(np.array([150.0, 0.0, 150.0]), 700.0, aside=1.0)
    words = {word: start for word, start, _, _ in module._words(camera, [header, branch], ["N1-branch"])}
    assert set(words) == {"END A", "END B", "N1-branch", "TOP", "SEAM", "RIGHT"}
    rims = {"END A": header.rim_a(240), "END B": header.rim_b(240), "N1-branch": branch.rim_b(240)}
    for word, rim in rims.items():
        assert np.abs(camera.project(rim) - words[word]).sum(axis=1).min() < 1e-12


@pytest.mark.parametrize(
    "given",
    [
        {"pitch": "5 in 12", "clearance": 50, "collar": 150},
        {"slope": 35, "high_side": "2:00", "section": "ellipse 500 x 300"},
        {"slope": 45, "high_side": "bottom", "collar": 400},
        {"slope": 30, "high_side": "left", "section": "rectangle 200 x 900 r 20"},
        {"collar": 200},
    ],
)
def test_the_words_of_an_opening_are_all_there_clear_of_the_piece_and_of_each_other(given, monkeypatch):
    from shapely.geometry import MultiPoint, box

    from develop.outputs import flat_picture as module
    from tests.pieces.making import make

    found = []

    def noted(words, shown, **sizes):
        found.append((shown, *placed(words, shown, **sizes)))
        return found[0][1:]

    placed = module.placed
    monkeypatch.setattr(module, "placed", noted)
    built = make("opening", **{"section": "round 327", **given})
    module.flat_picture(built.parts, "an opening")
    ((shown, words, bounds),) = found
    expected = {"RIGHT", "TOP", "LEFT", "BOTTOM"}
    slope = given.get("slope", np.degrees(np.arctan(5 / 12)) if "pitch" in given else 0)
    if slope:
        expected |= {"HIGH SIDE", f"{slope:.1f}° to level"}
    assert {word.text for word in words} == expected
    hull = MultiPoint(shown).convex_hull
    boxes = [box(*(word.end - word.size / 2), *(word.end + word.size / 2)) for word in words]
    for n, one in enumerate(boxes):
        assert not one.intersects(hull)
        assert not any(one.overlaps(other) for other in boxes[:n])
        assert (np.array(one.bounds).reshape(2, 2)[0] >= bounds[0] - 1e-9).all()
        assert (np.array(one.bounds).reshape(2, 2)[1] <= bounds[1] + 1e-9).all()


def test_the_picture_of_an_opening_is_titled_with_its_slope(monkeypatch):
    from develop.outputs import flat_picture as module

    assert title_of(module, "flat_picture", monkeypatch, "opening", section="round 327", pitch="5 in 12") == (
        "P1: for round 327\nslope 22.62°, pitch 5 in 12, high side TOP"
    )
    assert (
        title_of(module, "flat_picture", monkeypatch, "opening", section="round 327") == "P1: for round 327"
    )


def test_the_picture_of_several_parts_is_titled_with_what_is_true_of_them_all(monkeypatch):
    from develop.outputs import picture as module

    given = {"section": "ellipse 700 x 350", "angle": 90, "throat_radius": 350}
    for gores in (2, 5):
        facts = title_of(module, "picture", monkeypatch, "bend", **given, gores=gores)
        assert facts[0] == "P1: bend"
        assert "bend of 90°" in facts[1]
        assert not any("gore" in fact for fact in facts)


def title_of(module, name, monkeypatch, kind, **given):
    from develop.job.pipeline import _files
    from develop.pieces import kind_of
    from develop.pieces.fields import read_piece
    from develop.pieces.hand import builds_of

    found = []
    monkeypatch.setattr(module, name, lambda _, facts, *rest: found.append(facts) or b"")
    piece, problems = read_piece(kind_of(kind), {**given, "mark": "P1"})
    assert not problems
    _files("png", piece, builds_of(piece), (), Outputs())
    return found[0]


@pytest.mark.parametrize("right", [700.0, -700.0])
def test_a_branch_is_looked_at_from_its_side_and_its_name_is_whole(samples, right):
    header = samples.Frustum(100.0, 100.0, 300.0, shift=(0.0, 0.0), seam_at=0.0 if right < 0 else math.pi)
    pieces = [header, Moved(header, (right, 0.0, 0.0))]
    assert module._aside(pieces, 1, 0.5 * right, 1000.0) == math.copysign(1.0, right)
    assert module._aside(pieces[:1], 0, 0.0, 1000.0) == -math.copysign(1.0, right)
    image = dots(picture(pieces, ["a piece"], ["A-very-long-mark-of-a-piece-branch"]))
    for border in (image[:, :8], image[:, -8:], image[-6:]):
        assert (border == 255).all()
