"""Mesh files of other formats: their bodies, names and units."""

import gzip
import json

import numpy as np
import pytest
from format_files import (
    glb_bytes,
    glb_scene,
    mesh_xml,
    model_xml,
    obj_text,
    off_text,
    plain_3mf,
    ply_bytes,
    three_mf,
)
from mesh_files import ascii_stl, binary_stl, box, quartered
from oracles import assert_same_body

from core.errors import Cancelled
from core.mesh import MeshAsset, survey_triangles
from core.mesh.formats import FORMATS, read_bodies
from core.progress import Progress

BOX = box(40, 30, 20)
BASE = box(60, 60, 5, at=(-10, -15, -5))
# The six faces of a box as four-sided faces; corners as weld_exactly numbers them are looked up by place.
SQUARES = [[0, 1, 3, 2], [4, 6, 7, 5], [0, 4, 5, 1], [2, 3, 7, 6], [0, 2, 6, 4], [1, 5, 7, 3]]
CORNERS = [[x, y, z] for x in (0, 40) for y in (0, 30) for z in (0, 20)]

WHOLE = {
    "part.stl": binary_stl(BOX),
    "part.STL": ascii_stl(BOX).encode(),
    "part.stl.gz": gzip.compress(binary_stl(BOX)),
    "part.obj": obj_text(("", BOX)).encode(),
    "part.off": off_text(BOX).encode(),
    "part.ply": ply_bytes(BOX),
    "big.ply": ply_bytes(BOX, "binary_big_endian"),
    "text.ply": ply_bytes(BOX, "ascii"),
    "part.3mf": plain_3mf(BOX),
    "part.glb": glb_bytes(*glb_scene(BOX)),
}


def read(tmp_path, name: str, data: bytes | str) -> tuple[MeshAsset, ...]:
    path = tmp_path / name
    path.write_bytes(data.encode() if isinstance(data, str) else data)
    return read_bodies(path)


@pytest.mark.parametrize("name", WHOLE)
def test_a_box_is_the_same_box_in_every_format(tmp_path, name):
    (asset,) = read(tmp_path, name, WHOLE[name])
    assert (asset.name, asset.survey.verdict, asset.survey.triangles) == (name, "closed", 12)
    assert_same_body(asset.survey.solid, survey_triangles(BOX).solid, rel=1e-14)
    assert asset.metres_per_unit == {"3mf": 1e-3, "glb": 1.0}.get(name[-3:])


def test_every_format_that_is_named_has_been_read():
    assert set(FORMATS) == {name.lower().split(".")[1] for name in WHOLE}


def test_bodies_other_than_stl_are_held_as_binary_stl(tmp_path):
    (asset,) = read(tmp_path, "part.off", WHOLE["part.off"])
    again = MeshAsset.of_bytes(asset.data, asset.name)
    assert (again, again.survey.format) == (asset, "binary STL")


def test_objects_of_an_obj_file_are_bodies_with_their_names(tmp_path):
    lid, base = read(tmp_path, "part.obj", obj_text(("lid", BOX), ("base plate", BASE)))
    assert (lid.name, base.name) == ("part.obj: lid", "part.obj: base plate")
    assert [float(asset.survey.solid.mass) for asset in (lid, base)] == pytest.approx([24_000, 18_000])


def test_objects_of_one_name_become_one_body_and_objects_without_faces_none(tmp_path):
    (asset,) = read(tmp_path, "part.obj", obj_text(("lid", BOX[:6]), ("lid", BOX[6:])) + "o nothing\n")
    assert (asset.name, asset.survey.verdict) == ("part.obj", "closed")


def test_obj_counts_backwards_from_where_a_face_stands(tmp_path):
    # The second object's faces count from the vertices before them, not from the end of the file.
    points = "".join(f"v {x} {y} {z}\n" for x, y, z in CORNERS)
    faces = "".join("f " + " ".join(str(corner - 8) for corner in square) + "\n" for square in SQUARES)
    bodies = read(tmp_path, "part.obj", f"o a\n{points}{faces}o b\n{points.replace('40', '80')}{faces}")
    assert [float(asset.survey.solid.mass) for asset in bodies] == pytest.approx([24_000, 48_000])


def test_obj_lines_go_on_after_a_backslash(tmp_path):
    text = WHOLE["part.obj"].decode().replace("//1 ", "//1 \\\n")
    assert read(tmp_path, "part.obj", text)[0].survey.verdict == "closed"


def test_faces_with_many_corners_are_cut_into_triangles(tmp_path):
    # An L-shaped plate: its faces with six corners bulge inwards; their fans cancel outside of them.
    outline = np.array([[0, 0], [3, 0], [3, 1], [1, 1], [1, 3], [0, 3]], dtype=float)
    points = [[x, y, z] for z in (0, 2) for x, y in outline]
    faces = [list(range(5, -1, -1)), list(range(6, 12))] + [[i, (i + 1) % 6, (i + 1) % 6 + 6, i + 6] for i in range(6)]
    off = "OFF\n12 8 0\n" + "".join(f"{x} {y} {z}\n" for x, y, z in points)
    off += "".join(f"{len(face)} {' '.join(map(str, face))} 255 0 0\n" for face in faces)
    obj = "".join(f"v {x} {y} {z}\n" for x, y, z in points)
    obj += "".join("f " + " ".join(str(corner + 1) for corner in face) + "\n" for face in faces)
    for name, text in (("l.off", off), ("l.obj", obj)):
        (asset,) = read(tmp_path, name, text)
        assert (asset.survey.verdict, asset.survey.triangles) == ("closed", 20)
        assert float(asset.survey.solid.mass) == pytest.approx(10)


@pytest.mark.parametrize("order", ["ascii", "binary_little_endian", "binary_big_endian"])
def test_ply_faces_of_mixed_sizes_are_all_read(tmp_path, order):
    from core.mesh.weld import weld_exactly

    points, _ = weld_exactly(BOX)
    number = {tuple(point): index for index, point in enumerate(points.tolist())}
    faces = [[number[tuple(map(float, CORNERS[corner]))] for corner in square] for square in SQUARES]
    faces = [faces[0][:3], [faces[0][0], *faces[0][2:]], *faces[1:]]
    (asset,) = read(tmp_path, "part.ply", ply_bytes(BOX, order, faces))
    assert (asset.survey.verdict, asset.survey.triangles) == ("closed", 12)


@pytest.mark.parametrize(
    ("unit", "metres"),
    [("micron", 1e-6), ("millimeter", 1e-3), ("centimeter", 1e-2), ("inch", 0.0254), ("foot", 0.3048), ("meter", 1.0)],
)
def test_a_3mf_file_names_its_unit_and_its_numbers_stay_as_they_are(tmp_path, unit, metres):
    (asset,) = read(tmp_path, "part.3mf", plain_3mf(BOX, unit))
    assert (asset.metres_per_unit, asset.survey.bounds[1].tolist()) == (metres, [40, 30, 20])


def test_a_3mf_file_that_says_no_unit_is_in_millimetres(tmp_path):
    model = model_xml(f'<object id="1">{mesh_xml(BOX)}</object>', '<item objectid="1"/>', "")
    assert read(tmp_path, "part.3mf", three_mf(model))[0].metres_per_unit == 1e-3


def test_components_of_a_3mf_file_stand_where_their_transforms_put_them(tmp_path):
    # Rows: x → y, y → −x, then a shift; the item mirrors z and doubles all, so that the facets have to be turned.
    quarter = "0 1 0 -1 0 0 0 0 1 100 0 0"
    objects = (
        f'<object id="1" name="lid">{mesh_xml(BOX)}</object>'
        f'<object id="2" name="pair"><components><component objectid="1"/><component objectid="1" transform="{quarter}"/>'
        "</components></object>"
    )
    items = '<item objectid="2" transform="2 0 0 0 2 0 0 0 -2 0 0 7"/>'
    one, other = read(tmp_path, "part.3mf", three_mf(model_xml(objects, items)))
    assert (one.name, other.name) == ("part.3mf: lid", "part.3mf: lid (2)")
    assert [asset.survey.verdict for asset in (one, other)] == ["closed", "closed"]
    np.testing.assert_allclose(one.survey.bounds, [[0, 0, -33], [80, 60, 7]])
    np.testing.assert_allclose(other.survey.bounds, [[140, 0, -33], [200, 80, 7]])
    assert float(one.survey.solid.mass) == pytest.approx(8 * 24_000)


def test_objects_in_other_parts_of_a_3mf_archive_are_followed(tmp_path):
    space = 'xmlns:p="http://schemas.microsoft.com/3dmanufacturing/production/2015/06" requiredextensions="p"'
    there = model_xml(f'<object id="7" name="lid">{mesh_xml(BOX)}</object>', "")
    model = model_xml(
        '<object id="1"><components><component p:path="/3D/lid.model" objectid="7"/></components></object>',
        '<item objectid="1"/>', space,
    )
    (asset,) = read(tmp_path, "part.3mf", three_mf(model, **{"3D__lid.model": there}))
    assert float(asset.survey.solid.mass) == pytest.approx(24_000)


def test_nodes_of_a_glb_file_place_their_meshes(tmp_path):
    scene, blob = glb_scene(BOX)
    half = float(np.sqrt(0.5))
    scene["nodes"] = [
        {"children": [1, 2], "translation": [100, 0, 0]},
        {"mesh": 0, "rotation": [0, 0, half, half], "scale": [1, 1, -2]},
        {"mesh": 0, "matrix": [1, 0, 0, 0, 0, 1, 0, 0, 0, 0, 1, 0, 0, 0, 50, 1]},
    ]
    one, other = read(tmp_path, "part.glb", glb_bytes(scene, blob))
    assert [asset.survey.verdict for asset in (one, other)] == ["closed", "closed"]
    np.testing.assert_allclose(one.survey.bounds, [[70, 0, -40], [100, 40, 0]], atol=1e-5)
    np.testing.assert_allclose(other.survey.bounds, [[100, 0, 50], [140, 30, 70]])


@pytest.mark.parametrize("mode", [5, 6])
def test_strips_and_fans_of_a_glb_file_are_triangles(tmp_path, mode):
    # A tetrahedron: one strip of its four facets needs six corners; a fan its three sides, and a triangle the floor.
    points = np.array([[0, 0, 0], [3, 0, 0], [0, 3, 0], [0, 0, 3]], "<f4")
    strips = {5: [0, 2, 1, 3, 0, 2], 6: [3, 0, 1, 2, 0]}
    parts = [strips[mode]] + [[0, 2, 1]] * (mode == 6)
    blob = points.tobytes() + b"".join(np.array(part, "<u4").tobytes() for part in parts)
    scene, _ = glb_scene(BOX)
    scene["accessors"] = [{"bufferView": 0, "componentType": 5126, "type": "VEC3", "count": 4}]
    scene["bufferViews"] = [{"buffer": 0, "byteLength": 48}]
    primitives, place = [], 48
    for number, part in enumerate(parts, 1):
        scene["bufferViews"].append({"buffer": 0, "byteOffset": place, "byteLength": 4 * len(part)})
        scene["accessors"].append({"bufferView": number, "componentType": 5125, "type": "SCALAR", "count": len(part)})
        primitives.append({"attributes": {"POSITION": 0}, "indices": number, "mode": mode if number == 1 else 4})
        place += 4 * len(part)
    scene["meshes"][0]["primitives"] = primitives
    (asset,) = read(tmp_path, "part.glb", glb_bytes(scene, blob))
    assert (asset.survey.closed, float(asset.survey.solid.mass)) == (True, pytest.approx(4.5))


def test_numbers_of_a_glb_file_may_lie_apart(tmp_path):
    scene, _ = glb_scene(BOX)
    points = BOX.reshape(-1, 3)
    table = np.zeros(36, [("p", "<f4", 3), ("normal", "<f4", 3)])
    table["p"] = points
    scene["accessors"] = [{"bufferView": 0, "componentType": 5126, "type": "VEC3", "count": 36}]
    scene["bufferViews"] = [{"buffer": 0, "byteStride": 24, "byteLength": 864}]
    scene["meshes"][0]["primitives"] = [{"attributes": {"POSITION": 0}}, {"attributes": {"POSITION": 0}, "mode": 1}]
    (asset,) = read(tmp_path, "part.glb", glb_bytes(scene, table.tobytes()))
    assert (asset.survey.verdict, asset.survey.triangles) == ("closed", 12)


def test_names_of_bodies_are_cut_and_cleaned(tmp_path):
    long = "x" * 500
    one, other = read(tmp_path, "part.3mf", three_mf(model_xml(
        f'<object id="1" name="{long}">{mesh_xml(BOX)}</object><object id="2" name="a&#9;b">{mesh_xml(BASE)}</object>',
        '<item objectid="1"/><item objectid="2"/>',
    )))
    assert one.name == "part.3mf: " + "x" * 100
    assert other.name == "part.3mf: ab"


def test_points_that_are_one_stay_one_through_rounding(tmp_path):
    triangles = quartered(BOX, 3) / 3 + 1 / 7
    for name, data in (("a.obj", obj_text(("", triangles))), ("a.off", off_text(triangles)), ("a.ply", ply_bytes(triangles))):
        (asset,) = read(tmp_path, name, data)
        assert asset.survey.verdict == "closed"


def test_reading_can_be_cancelled(tmp_path):
    progress = Progress("reading")
    progress.cancel()
    path = tmp_path / "part.3mf"
    path.write_bytes(WHOLE["part.3mf"])
    with pytest.raises(Cancelled):
        read_bodies(path, progress)


def test_a_glb_description_may_name_no_scene(tmp_path):
    scene, blob = glb_scene(BOX)
    del scene["scenes"], scene["scene"]
    assert len(read(tmp_path, "part.glb", glb_bytes(json.dumps(scene).encode(), blob))) == 1
