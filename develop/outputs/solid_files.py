"""The finished piece as a solid, for printers and viewers: STL in mm, and GLB, which is in metres.

Each part is a closed body of its own where it stands in the piece. Bodies that meet are not made one:
neighbours differ by a hair in thickness, so that a reader that joins equal points keeps them apart.
"""

from __future__ import annotations

import json
import struct
from collections.abc import Sequence
from itertools import pairwise

import numpy as np

from develop.pattern.curve import Array
from develop.pattern.pattern import Outline, Pattern
from develop.pieces.built import Built, Part
from develop.solid import Mesh, Patch, Solid, plate, wall

__all__ = ["glb", "meshes_of", "stl"]

_CHORDS = 0.01  # [mm] of the edges of flat parts
_APART = 0.0005  # [mm] by which the faces of neighbours differ
# Not beginning with "solid", which is how the text form begins.
_HEADER = b"finished piece, in mm".ljust(80, b" ")
_FLOAT, _UINT = 5126, 5125  # component types of glTF 2.0
_VERTICES, _INDICES = 34962, 34963  # targets of its buffer views
_GREY = [0.56, 0.64, 0.72, 1.0]


def meshes_of(built: Built, *, thickness: float, neutral_line: float) -> tuple[Mesh, ...]:
    """Every part where it stands in the piece, as often as it is used, a side made in parts as one body; no
    plates that only lie on one.

    thickness: of the wall [mm]; without any, a part is its bare surface, which is not closed.
    neutral_line: where in the wall the sheet lies, 0 inside to 1 outside, but for a part that tells.
    """
    found: list[Mesh] = []
    for _, part in built.whole_parts:
        if isinstance(part.solid, Patch):
            continue
        made: dict[float, Mesh] = {}
        for frame in part.frames:
            number = len(found)
            # Rolled parts stand in a row; those of a ring may lie beside any other.
            step = number % 2 if isinstance(part.solid, Solid) else number
            inset = min(step * _APART, thickness / 8.0)
            if inset not in made:
                made[inset] = _body(part, thickness, neutral_line, inset)
            found.append(made[inset].placed(frame.origin, frame.axes))
    return tuple(found)


def _body(part: Part, thickness: float, neutral_line: float, inset: float) -> Mesh:
    """A part in its own frame, both faces `inset` further in than they are."""
    if isinstance(part.solid, Solid):
        told = part.pattern.wall
        inside = part.solid.distance - (told.neutral_line if told else neutral_line) * thickness
        return wall(part.solid, inside=inside + inset, outside=inside + thickness - inset)
    assert not isinstance(part.solid, Patch)
    return _flat(part.pattern, part.solid.shift, thickness - 2.0 * inset)


def _flat(pattern: Pattern, shift: Array, thickness: float) -> Mesh:
    """A flat part in its own plane, its openings cut."""
    from ezdxf.math import Vec2
    from ezdxf.math.triangulation import mapbox_earcut_2d

    rings = [_ring(pattern.net) - shift, *(_ring(opening)[::-1] - shift for opening in pattern.openings)]
    points = np.vstack(rings)
    place = {(float(x), float(y)): n for n, (x, y) in enumerate(points)}
    outline, *holes = ([Vec2(*point) for point in ring.tolist()] for ring in rings)
    triangles = np.array(
        [[place[each.x, each.y] for each in found] for found in mapbox_earcut_2d(outline, holes)]
    )
    a, b, c = points[triangles].transpose(1, 0, 2)
    swept = (b[:, 0] - a[:, 0]) * (c[:, 1] - a[:, 1]) - (b[:, 1] - a[:, 1]) * (c[:, 0] - a[:, 0])
    if swept.sum() < 0.0:
        triangles = triangles[:, ::-1]
    ends = np.cumsum([0, *(len(ring) for ring in rings)])
    rims = [np.arange(low, high) for low, high in pairwise(ends)]
    return plate(points, triangles, rims, thickness=thickness)


def _ring(outline: Outline) -> Array:
    return np.vstack([curve.polyline(_CHORDS)[:-1] for _, curve in outline.curves])


def stl(meshes: Sequence[Mesh]) -> bytes:
    """Binary STL, in mm: a head of 80 bytes, the number of triangles, then for each its normal, corners
    and two bytes of nothing, all little-endian (3D Systems' format, in common use)."""
    corners = np.vstack([mesh.vertices[mesh.triangles] for mesh in meshes])
    across = np.cross(corners[:, 1] - corners[:, 0], corners[:, 2] - corners[:, 0])
    normal = across / np.maximum(np.linalg.norm(across, axis=1), 1e-300)[:, None]
    rows = np.zeros(len(corners), dtype=[("floats", "<f4", 12), ("nothing", "<u2")])
    rows["floats"] = np.hstack([normal, corners.reshape(-1, 9)])
    return _HEADER + struct.pack("<I", len(rows)) + rows.tobytes()


def glb(meshes: Sequence[Mesh], name: str) -> bytes:
    """Binary glTF 2.0, in metres, y up as the piece has it; a mesh for each body."""
    binary = b""
    views: list[dict[str, int]] = []
    accessors: list[dict[str, object]] = []

    def add(data: bytes, target: int, **about: object) -> int:
        nonlocal binary
        views.append({"buffer": 0, "byteOffset": len(binary), "byteLength": len(data), "target": target})
        accessors.append({"bufferView": len(views) - 1, **about})
        binary += data
        return len(accessors) - 1

    bodies = []
    for mesh in meshes:
        points = (mesh.vertices * 0.001).astype("<f4")
        low, high = (each.astype(float).tolist() for each in (points.min(axis=0), points.max(axis=0)))
        at = add(
            points.tobytes(), _VERTICES,
            componentType=_FLOAT, count=len(points), type="VEC3", min=low, max=high,
        )  # fmt: skip
        which = mesh.triangles.astype("<u4").ravel()
        order = add(which.tobytes(), _INDICES, componentType=_UINT, count=len(which), type="SCALAR")
        bodies.append({"primitives": [{"attributes": {"POSITION": at}, "indices": order, "material": 0}]})
    content = {
        "asset": {"version": "2.0"},
        "scene": 0,
        "scenes": [{"name": name, "nodes": list(range(len(bodies)))}],
        "nodes": [{"mesh": n} for n in range(len(bodies))],
        "meshes": bodies,
        "materials": [
            {
                "pbrMetallicRoughness": {
                    "baseColorFactor": _GREY,
                    "metallicFactor": 0.2,
                    "roughnessFactor": 0.6,
                },
                "doubleSided": True,
            }
        ],
        "accessors": accessors,
        "bufferViews": views,
        "buffers": [{"byteLength": len(binary)}],
    }
    text = json.dumps(content, ensure_ascii=False, separators=(",", ":")).encode()
    text += b" " * (-len(text) % 4)
    length = 12 + 8 + len(text) + 8 + len(binary)
    head = b"glTF" + struct.pack("<II", 2, length)
    return (
        head
        + struct.pack("<I", len(text))
        + b"JSON"
        + text
        + struct.pack("<I", len(binary))
        + b"BIN\0"
        + binary
    )
