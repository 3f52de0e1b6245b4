"""The bytes of mesh files of other formats, written out by hand so that each can be damaged where a test needs it."""

from __future__ import annotations

import io
import json
import zipfile

import numpy as np

from core.mesh.weld import weld_exactly

SPACE = "http://schemas.microsoft.com/3dmanufacturing/core/2015/02"
RELATIONS = (
    '<?xml version="1.0"?><Relationships xmlns="http://schemas.openxmlformats.org/package/2006/relationships">'
    '<Relationship Target="/3D/part.model" Id="r" Type="http://schemas.microsoft.com/3dmanufacturing/2013/01/3dmodel"/>'
    "</Relationships>"
)


def indexed(triangles: np.ndarray) -> tuple[list[list[float]], list[list[int]]]:
    points, corners = weld_exactly(np.asarray(triangles, dtype=float))
    return points.tolist(), corners.tolist()


def obj_text(*bodies: tuple[str, np.ndarray]) -> str:
    lines, before = ["# a part", "mtllib part.mtl"], 1
    for name, triangles in bodies:
        points, corners = indexed(triangles)
        lines += [f"o {name}"] * bool(name)
        lines += [f"v {x!r} {y!r} {z!r}" for x, y, z in points]
        lines += ["vn 0 0 1", "usemtl steel"]
        lines += ["f " + " ".join(f"{corner + before}//1" for corner in facet) for facet in corners]
        before += len(points)
    return "\n".join([*lines, ""])


def off_text(triangles: np.ndarray) -> str:
    points, corners = indexed(triangles)
    lines = ["OFF", "# a part", f"{len(points)} {len(corners)} 0"]
    lines += [f"{x!r} {y!r} {z!r}" for x, y, z in points] + [f"3 {a} {b} {c}" for a, b, c in corners]
    return "\n".join([*lines, ""])


def ply_bytes(triangles: np.ndarray, order: str = "binary_little_endian", faces: list[list[int]] | None = None) -> bytes:
    points, corners = indexed(triangles)
    corners = corners if faces is None else faces
    header = (
        f"ply\nformat {order} 1.0\ncomment a part\nelement vertex {len(points)}\nproperty double x\nproperty double y\n"
        f"property double z\nproperty uchar red\nelement face {len(corners)}\nproperty list uchar int vertex_indices\n"
        "end_header\n"
    )
    if order == "ascii":
        rows = [f"{x!r} {y!r} {z!r} 7" for x, y, z in points]
        rows += [" ".join(map(str, [len(facet), *facet])) for facet in corners]
        return (header + "\n".join([*rows, ""])).encode()
    sign = "<" if order == "binary_little_endian" else ">"
    table = np.zeros(len(points), [("p", f"{sign}f8", 3), ("red", "u1")])
    table["p"] = points
    body = b"".join(
        np.array([len(facet)], "u1").tobytes() + np.array(facet, f"{sign}i4").tobytes() for facet in corners
    )
    return header.encode() + table.tobytes() + body


def mesh_xml(triangles: np.ndarray) -> str:
    points, corners = indexed(triangles)
    vertices = "".join(f'<vertex x="{x!r}" y="{y!r}" z="{z!r}"/>' for x, y, z in points)
    facets = "".join(f'<triangle v1="{a}" v2="{b}" v3="{c}"/>' for a, b, c in corners)
    return f"<mesh><vertices>{vertices}</vertices><triangles>{facets}</triangles></mesh>"


def model_xml(objects: str, items: str, attributes: str = 'unit="millimeter"') -> str:
    return (
        f'<?xml version="1.0" encoding="UTF-8"?><model {attributes} xmlns="{SPACE}"><resources>{objects}</resources>'
        f"<build>{items}</build></model>"
    )


def three_mf(model: str, **others: str) -> bytes:
    """An archive with a model, and further parts by path ("__" for "/")."""
    file = io.BytesIO()
    with zipfile.ZipFile(file, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("_rels/.rels", RELATIONS)
        archive.writestr("3D/part.model", model)
        for path, text in others.items():
            archive.writestr(path.replace("__", "/"), text)
    return file.getvalue()


def plain_3mf(triangles: np.ndarray, unit: str = "millimeter") -> bytes:
    return three_mf(model_xml(f'<object id="1" name="lid">{mesh_xml(triangles)}</object>', '<item objectid="1"/>', f'unit="{unit}"'))


def glb_scene(triangles: np.ndarray) -> tuple[dict, bytes]:
    """The description and the bytes of a scene with one mesh on one node; in metres."""
    points, corners = indexed(triangles)
    place = np.array(points, "<f4").tobytes()
    index = np.array(corners, "<u2").ravel().tobytes()
    scene = {
        "asset": {"version": "2.0"},
        "scene": 0,
        "scenes": [{"nodes": [0]}],
        "nodes": [{"mesh": 0, "name": "lid"}],
        "meshes": [{"name": "lid", "primitives": [{"attributes": {"POSITION": 0}, "indices": 1}]}],
        "accessors": [
            {"bufferView": 0, "componentType": 5126, "type": "VEC3", "count": len(points)},
            {"bufferView": 1, "componentType": 5123, "type": "SCALAR", "count": 3 * len(corners)},
        ],
        "bufferViews": [
            {"buffer": 0, "byteOffset": 0, "byteLength": len(place)},
            {"buffer": 0, "byteOffset": len(place), "byteLength": len(index)},
        ],
        "buffers": [{"byteLength": len(place) + len(index)}],
    }
    return scene, place + index


def glb_bytes(scene: dict | bytes, blob: bytes, length: int | None = None, version: int = 2) -> bytes:
    text = scene if isinstance(scene, bytes) else json.dumps(scene).encode()
    text += b" " * (-len(text) % 4)
    blob += b"\0" * (-len(blob) % 4)
    body = b"".join([
        len(text).to_bytes(4, "little"), b"JSON", text, len(blob).to_bytes(4, "little"), b"BIN\0", blob,
    ])
    whole = 12 + len(body) if length is None else length
    return b"glTF" + version.to_bytes(4, "little") + whole.to_bytes(4, "little") + body
