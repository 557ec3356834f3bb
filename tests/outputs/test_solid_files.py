"""STL and GLB read back by trimesh, and measured by closed forms."""

from __future__ import annotations

import io
import json
import math
import struct

import numpy as np
import pytest
import trimesh

from develop.job.pipeline import make
from develop.outputs.solid_files import glb, meshes_of, stl
from develop.pieces import KINDS, kind_of
from develop.pieces.fields import read_piece


def built(kind, **given):
    piece, problems = read_piece(kind_of(kind), given or kind_of(kind).example)
    assert piece is not None, problems
    return piece.build()


def meshes(kind, *, thickness, **given):
    return meshes_of(built(kind, thickness=thickness, **given), thickness=thickness, neutral_line=0.5)


def read(found, form):
    data = stl(found) if form == "stl" else glb(found, "A1")
    scale = 1.0 if form == "stl" else 1000.0  # glTF 2.0 is in metres
    mesh = trimesh.load(io.BytesIO(data), file_type=form, force="mesh")
    mesh.apply_scale(scale)
    return mesh


def sound(mesh):
    return mesh.is_watertight and mesh.is_winding_consistent and mesh.volume > 0.0


@pytest.mark.parametrize("form", ["stl", "glb"])
def test_a_round_pipe(form):
    """Between radii R and r a pipe of length L holds π (R² − r²) L; n chords take sin(2π/n) / (2π/n) of it."""
    mesh = read(meshes("straight", section="round 300", length=500, thickness=10, sizes="inside"), form)
    assert sound(mesh)
    chords = 2.0 * math.pi / 360
    assert mesh.volume == pytest.approx(
        math.pi * (160.0**2 - 150.0**2) * 500.0 * math.sin(chords) / chords, rel=2e-5
    )
    assert mesh.bounds == pytest.approx(np.array([[-160.0, -160.0, 0.0], [160.0, 160.0, 500.0]]), abs=0.02)
    assert mesh.euler_number == 0  # a pipe has one hole through it


@pytest.mark.parametrize(("sizes", "outer"), [("inside", 160.0), ("mean", 155.0), ("outside", 150.0)])
def test_the_wall_lies_where_the_sizes_say(sizes, outer):
    mesh = read(meshes("straight", section="round 300", length=500, thickness=10, sizes=sizes), "stl")
    assert mesh.bounds[1] == pytest.approx([outer, outer, 500.0], abs=0.02)
    radius = np.hypot(mesh.vertices[:, 0], mesh.vertices[:, 1])
    assert radius.min() == pytest.approx(outer - 10.0, abs=0.02)


def test_the_wall_of_an_ellipse_is_between_parallels():
    """Steiner: between the parallels at ±t/2 of a curve of girth g lies g t, whatever the curve.

    The girth of 600 x 300 is 4 a E(3/4), 1453.2669 mm (scipy)."""
    from scipy.special import ellipe

    mesh = read(meshes("straight", section="ellipse 600 x 300", length=400, thickness=4), "stl")
    assert sound(mesh)
    assert mesh.volume == pytest.approx(4.0 * 300.0 * float(ellipe(0.75)) * 4.0 * 400.0, rel=2e-4)


def test_the_wall_of_a_cone_is_square_to_its_plate():
    """A right cone's frustum, R to r over H in plate t, edges square: its middle side times t (Pappus)."""
    mesh = read(meshes("transition", end_a="round 600", end_b="round 400", length=450, thickness=12), "stl")
    slant = math.hypot(450.0, 100.0)
    assert sound(mesh)
    assert mesh.volume == pytest.approx(math.pi * (300.0 + 200.0) * slant * 12.0, rel=2e-4)
    # At end A the edge is square to the plate: its corners lie 6 sin ψ above and below the plane.
    assert mesh.bounds[0][2] == pytest.approx(-6.0 * 100.0 / slant, abs=1e-3)


# Volume by the record's area times thickness: edges square, and the neutral line in the middle, so nothing
# is lost where the wall is bent (Pappus), nor where it is developed.
@pytest.mark.parametrize("kind", sorted(set(KINDS) - {"marking-band"}))
def test_every_kind_is_a_closed_solid_of_area_times_thickness(kind, tmp_path):
    piece, _ = read_piece(kind_of(kind), {**kind_of(kind).example, "thickness": 2, "mark": "A1"})
    assert piece is not None
    make(piece, folder=str(tmp_path), formats=("json", "stl", "glb"))
    record = json.loads((tmp_path / "A1.json").read_bytes())
    area = sum(each["net"]["area"] * each["quantity"] for each in record["patterns"])
    for form, scale in (("stl", 1.0), ("glb", 1000.0)):
        mesh = trimesh.load(tmp_path / f"A1.{form}", force="mesh")
        mesh.apply_scale(scale)
        assert sound(mesh)
        assert mesh.volume == pytest.approx(area * 2.0, rel=2e-3)


@pytest.mark.parametrize(
    ("kind", "given"),
    [
        ("transition", {"end_a": "rectangle 600 x 300", "end_b": "round 400", "length": 400, "sizes": "inside"}),
        ("transition", {"end_a": "rectangle 600 x 300", "end_b": "rectangle 400 x 200", "length": 400, "sizes": "inside"}),
        ("transition", {"end_a": "flat-oval 600 x 300", "end_b": "round 300", "length": 400, "tilt": "slope 15 long 70"}),
        ("branch", {"header": "rectangle 600 x 400 r 60", "header_length": 900, "branch": "ellipse 200 x 100",
                    "angle": 60, "centre_to_end": 450}),
        ("branch", {"header": {"kind": "transition", "end_a": "round 600", "end_b": "round 400", "length": 900},
                    "branch": "round 200", "angle": 60, "centre_to_end": 500}),
        ("branch", {"header": "round 400", "header_length": 900, "branch": "round 390", "angle": 90, "centre_to_end": 450}),
        ("flange", {"section": "round 300", "width": 50, "holes": 20, "hole_diameter": 12, "made_in": 5}),
        ("flange", {"section": "round 300", "width": 50, "form": "blank"}),
    ],
)  # fmt: skip
def test_corners_openings_and_parts(kind, given):
    found = meshes(kind, thickness=2, **given)
    for mesh in (read([each], form) for each in found for form in ("stl", "glb")):
        assert sound(mesh)
    assert sound(read(found, "stl"))  # also when equal points of neighbours are joined
    area = sum(
        (part.pattern.net.area - sum(hole.area for hole in part.pattern.openings)) * len(part.frames)
        for part in built(kind, thickness=2, **given).parts
    )
    assert read(found, "stl").volume == pytest.approx(2.0 * area, rel=2e-3)


def test_a_header_has_its_opening():
    header, branch = meshes("branch", header="round 400", header_length=900, branch="round 250",
                            angle=60, centre_to_end=500, thickness=2)[::-1]  # fmt: skip
    numbers = sorted(read([each], "stl").euler_number for each in (header, branch))
    assert numbers == [-2, 0]  # a pipe with a hole in its side: one handle more than a pipe


def test_a_flange_has_its_holes():
    """Each hole through takes 2 from Euler's number."""
    (mesh,) = meshes("flange", section="round 300", width=50, holes=8, hole_diameter=12, thickness=6)
    found = read([mesh], "stl")
    assert found.euler_number == 2 - 2 * (8 + 1)
    assert found.bounds == pytest.approx(np.array([[-200, -200, -3], [200, 200, 3]]), abs=0.02)
    assert found.volume == pytest.approx(6.0 * math.pi * (200.0**2 - 150.0**2 - 8 * 36.0), rel=1e-3)


def test_without_thickness_it_is_the_bare_surface():
    (mesh,) = meshes("straight", section="round 300", length=500, thickness=0)
    found = read([mesh], "stl")
    assert not found.is_watertight
    assert found.area == pytest.approx(math.pi * 300.0 * 500.0, rel=1e-4)


def test_a_band_of_paper_is_as_thick_as_the_paper(tmp_path):
    piece, _ = read_piece(kind_of("marking-band"), {**kind_of("marking-band").example, "mark": "A1"})
    assert piece is not None
    make(piece, folder=str(tmp_path), formats=("json", "stl"))
    record = json.loads((tmp_path / "A1.json").read_bytes())
    mesh = trimesh.load(tmp_path / "A1.stl", force="mesh")
    assert sound(mesh)
    assert mesh.volume == pytest.approx(0.1 * record["patterns"][0]["net"]["area"], rel=2e-3)


def test_the_opposite_hand_is_a_file_of_its_own_and_the_mirror_image(tmp_path):
    given = {"end_a": "ellipse 600 x 300", "end_b": "round 400", "length": 450, "offset": "80,40", "thickness": 2,
             "opposite_hand": 1, "mark": "A1"}  # fmt: skip
    piece, problems = read_piece(kind_of("transition"), given)
    assert piece is not None, problems
    make(piece, folder=str(tmp_path), formats=("stl",))
    one, two = (trimesh.load(tmp_path / f"{name}.stl", force="mesh") for name in ("A1", "A1-opposite-hand"))
    assert sound(one)
    assert sound(two)
    assert two.volume == pytest.approx(one.volume, rel=1e-6)
    (low, high), (other_low, other_high) = one.bounds, two.bounds
    assert [-other_high[0], -other_low[0]] == pytest.approx([low[0], high[0]], abs=0.02)


def test_the_files_are_what_their_formats_say():
    """STL: 84 bytes and 50 a triangle, not beginning with "solid". GLB: glTF 2.0, binary form."""
    found = meshes("flange", section="round 300", width=50, thickness=6)
    data = stl(found)
    count = struct.unpack("<I", data[80:84])[0]
    assert len(data) == 84 + 50 * count
    assert not data.startswith(b"solid")
    data = glb(found, "A1")
    magic, version, length = struct.unpack("<4sII", data[:12])
    assert (magic, version, length) == (b"glTF", 2, len(data))
    size, kind = struct.unpack("<I4s", data[12:20])
    assert (kind, size % 4) == (b"JSON", 0)
    text = json.loads(data[20 : 20 + size])
    assert set(text["asset"]) == {"version"}  # no program, no copyright, no date
    rest, kind = struct.unpack("<I4s", data[20 + size : 28 + size])
    assert (kind, rest) == (b"BIN\0", text["buffers"][0]["byteLength"])
    assert stl(found) == stl(meshes("flange", section="round 300", width=50, thickness=6))
