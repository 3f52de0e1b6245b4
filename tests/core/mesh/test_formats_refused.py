"""Every way in which a file of another format can be wrong is refused in one line, and nothing of it is taken."""

import contextlib
import io
import zipfile

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
from mesh_files import box

from core.errors import MeshFileError
from core.mesh.formats import read_bodies

BOX = box(40, 30, 20)
OBJ, OFF = obj_text(("", BOX)), off_text(BOX)
PLY, TEXT_PLY = ply_bytes(BOX), ply_bytes(BOX, "ascii")
SCENE, BLOB = glb_scene(BOX)
OBJECT = f'<object id="1">{mesh_xml(BOX)}</object>'
ITEM = '<item objectid="1"/>'


def changed(**entries) -> bytes:
    """A GLB file whose description has some entries replaced."""
    return glb_bytes({**SCENE, **entries}, BLOB)


def accessor(**entries) -> bytes:
    return changed(accessors=[{**SCENE["accessors"][0], **entries}, SCENE["accessors"][1]])


def model(objects: str, items: str = ITEM, attributes: str = 'unit="millimeter"') -> bytes:
    return three_mf(model_xml(objects, items, attributes))


def packed(size: int) -> bytes:
    """A 3MF file whose model is so many blanks."""
    file = io.BytesIO()
    with zipfile.ZipFile(file, "w", zipfile.ZIP_DEFLATED) as archive:
        archive.writestr("3D/3dmodel.model", " " * size)
    return file.getvalue()


def nested(levels: int, twice: int = 1) -> bytes:
    """Objects of which each is made of the next one."""
    inner = "".join(
        f'<object id="{level}"><components>{f"""<component objectid="{level + 1}"/>""" * twice}</components></object>'
        for level in range(1, levels)
    )
    return model(inner + f'<object id="{levels}">{mesh_xml(BOX)}</object>')


REFUSED = {
    # OFF
    ("a.off", "other text"): (b"hello\n", '"OFF" or "COFF"'),
    ("a.off", "no counts"): (b"OFF\n", "the counts of vertices and faces are missing"),
    ("a.off", "counts that are none"): (b"OFF\n8 x 0\n", "the counts of vertices and faces are missing"),
    ("a.off", "cut short"): (OFF[: len(OFF) // 2], "the file is cut short"),
    ("a.off", "too many lines"): (OFF + "3 0 1 2\n", "lines follow after the last face"),
    ("a.off", "a missing coordinate"): (OFF.replace("0.0 0.0 0.0", "0.0 0.0"), "a vertex needs three coordinates"),
    ("a.off", "decimal comma"): (OFF.replace("0.0 0.0 20.0", "0,0 0,0 20,0"), "a decimal comma"),
    ("a.off", "a word"): (OFF.replace("0.0 0.0 20.0", "0.0 zero 20.0"), "a coordinate is not a number"),
    ("a.off", "not finite"): (OFF.replace("0.0 0.0 20.0", "0.0 nan 20.0"), "a coordinate is not a finite number"),
    ("a.off", "face of two"): ("OFF\n3 1 0\n0 0 0\n1 0 0\n0 1 0\n2 0 1\n", "a face needs a count of at least 3"),
    ("a.off", "face with too few"): ("OFF\n3 1 0\n0 0 0\n1 0 0\n0 1 0\n3 0 1\n", "a face needs a count of at least 3"),
    ("a.off", "negative corner"): ("OFF\n3 1 0\n0 0 0\n1 0 0\n0 1 0\n3 0 1 -1\n", "a face needs a count of at least 3"),
    ("a.off", "no such vertex"): ("OFF\n3 1 0\n0 0 0\n1 0 0\n0 1 0\n3 0 1 3\n", "names a vertex that is not there"),
    ("a.off", "no faces"): ("OFF\n3 0 0\n0 0 0\n1 0 0\n0 1 0\n", "the file holds no facets"),
    ("a.off", "absurd count"): ("OFF\n3 99999999999 0\n", "more than 20000000 facets"),
    # OBJ
    ("a.obj", "nothing in it"): (b"# nothing\n", "the file holds no facets"),
    ("a.obj", "binary"): (bytes(range(256)) * 4, "the file holds no facets"),
    ("a.obj", "points only"): ("v 0 0 0\nv 1 0 0\n", "the file holds no facets"),
    ("a.obj", "two coordinates"): ("v 0 0\n", "line 1: a vertex needs three coordinates"),
    ("a.obj", "decimal comma"): ("v 0,5 0 0\n", "a decimal comma"),
    ("a.obj", "face of two"): ("v 0 0 0\nv 1 0 0\nf 1 2\n", "line 3: a face needs three corners"),
    ("a.obj", "corner 0"): ("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 0 1 2\n", "line 4: a face names a vertex that is not there"),
    ("a.obj", "too far back"): ("v 0 0 0\nv 1 0 0\nv 0 1 0\nf -4 1 2\n", "a face names a vertex that is not there"),
    ("a.obj", "beyond the end"): ("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 4\n", "names a vertex that is not there"),
    ("a.obj", "corner in words"): ("v 0 0 0\nv 1 0 0\nv 0 1 0\nf 1 2 three\n", "a corner of a face is no vertex number"),
    ("a.obj", "not finite"): (OBJ.replace("v 0.0 0.0 0.0", "v 0.0 inf 0.0"), "a coordinate is not a finite number"),
    ("a.obj", "too large"): (OBJ.replace("v 0.0 0.0 0.0", "v 0.0 1e300 0.0"), "of the size that a mesh file can hold"),
    ("a.obj", "free form"): ("v 0 0 0\ncstype bspline\n", "free-form curves and surfaces are not read"),
    # PLY
    ("a.ply", "other text"): (b"hello\n", 'a header from "ply" to "end_header"'),
    ("a.ply", "endless header"): (b"ply\n" + b"comment\n" * 20_000, 'a header from "ply" to "end_header"'),
    ("a.ply", "unknown order"): (PLY.replace(b"binary_little_endian", b"binary_middle_endian"), "this format of PLY is not known"),
    ("a.ply", "no format"): (TEXT_PLY.replace(b"format ascii 1.0\n", b""), "does not say in which format"),
    ("a.ply", "unknown type"): (PLY.replace(b"property double x", b"property quad x"), "a property needs a type that is known"),
    ("a.ply", "property first"): (b"ply\nformat ascii 1.0\nproperty int x\nend_header\n", "before any element"),
    ("a.ply", "count in words"): (PLY.replace(b"element face 12", b"element face many"), "an element needs a name and a count"),
    ("a.ply", "no z"): (PLY.replace(b"property double z", b"property double w"), "a vertex needs x, y and z"),
    ("a.ply", "no list"): (PLY.replace(b"vertex_indices", b"something_else"), "a face needs a list of vertex numbers"),
    ("a.ply", "cut short"): (PLY[:-1], "the file is cut short"),
    ("a.ply", "cut in the vertices"): (PLY[:-300], "the file is cut short"),
    ("a.ply", "bytes after"): (PLY + b"\0", "bytes follow after the last row"),
    ("a.ply", "text cut short"): (TEXT_PLY[:-20], "cut short|a row does not fit"),
    ("a.ply", "text after"): (TEXT_PLY + b"1 2 3\n", "lines follow after the last row"),
    ("a.ply", "text row too short"): (TEXT_PLY.replace(b"0.0 0.0 0.0 7", b"0.0 0.0 0.0"), "a row does not fit"),
    ("a.ply", "text row too long"): (TEXT_PLY.replace(b"\n3 ", b"\n2 ", 1), "a row does not fit|a face needs three"),
    ("a.ply", "face of two"): (ply_bytes(BOX, faces=[[0, 1]]), "face 1: a face needs three corners"),
    ("a.ply", "no such vertex"): (ply_bytes(BOX, faces=[[0, 1, 8]]), "names a vertex that is not there"),
    ("a.ply", "no faces"): (ply_bytes(BOX, faces=[]), "the file holds no facets"),
    ("a.ply", "strips"): (PLY.replace(b"element face", b"element tristrips"), "triangle strips are not read"),
    # 3MF
    ("a.3mf", "no archive"): (b"hello", "the file is no ZIP archive, or it is cut short"),
    ("a.3mf", "cut short"): (plain_3mf(BOX)[:-30], "the file is no ZIP archive, or it is cut short"),
    ("a.3mf", "no model"): (three_mf("x").replace(b"3D/part.model", b"3D/part.other"), "the archive holds no such model"),
    ("a.3mf", "broken XML"): (three_mf("<model><resources>"), "the XML of the model is damaged"),
    ("a.3mf", "broken bytes"): (three_mf("<model/>" * 9), "the XML of the model is damaged"),
    ("a.3mf", "unknown encoding"): (three_mf(model_xml(OBJECT, ITEM).replace("UTF-8", "UTX-8")), "an encoding that nobody knows"),
    ("a.3mf", "moved contents"): (
        plain_3mf(BOX)[:-6] + (2**20).to_bytes(4, "little") + bytes(2), "damaged, cut short or encrypted|no ZIP archive"),
    ("a.3mf", "document type"): (
        three_mf('<!DOCTYPE m [<!ENTITY a "b">]>' + model_xml(OBJECT, ITEM)[38:]), "a document type is declared"),
    ("a.3mf", "unknown unit"): (model(OBJECT, attributes='unit="cubit"'), "the unit is none that a 3MF file can have"),
    ("a.3mf", "unknown extension"): (
        model(OBJECT, attributes='requiredextensions="b" xmlns:b="http://example.org/lattice/2019"'),
        "requires an extension that is not read"),
    ("a.3mf", "nothing to build"): (model(OBJECT, ""), "the file holds no facets"),
    ("a.3mf", "no such object"): (model(OBJECT, '<item objectid="9"/>'), "an object is named that is not there"),
    ("a.3mf", "no object named"): (model(OBJECT, "<item/>"), '"objectid" is missing in a item'),
    ("a.3mf", "no such part"): (
        model('<object id="1"><components><component path="/3D/no.model" objectid="1"/></components></object>'),
        "the archive holds no such model"),
    ("a.3mf", "a path out"): (
        model('<object id="1"><components><component path="../../../etc/hosts" objectid="1"/></components></object>'),
        "the archive holds no such model"),
    ("a.3mf", "no such vertex"): (model(OBJECT.replace('v1="0"', 'v1="99"')), "names a vertex that is not there"),
    ("a.3mf", "corner in words"): (model(OBJECT.replace('v1="0"', 'v1="one"')), "a corner of a triangle is no vertex number"),
    ("a.3mf", "corner too long"): (model(OBJECT.replace('v1="0"', f'v1="{"9" * 40}"')), "no vertex number"),
    ("a.3mf", "decimal comma"): (model(OBJECT.replace('x="40.0"', 'x="40,0"', 1)), "a decimal comma"),
    ("a.3mf", "not finite"): (model(OBJECT.replace('x="40.0"', 'x="inf"', 1)), "a coordinate is not a finite number"),
    ("a.3mf", "short transform"): (
        model(OBJECT, '<item objectid="1" transform="1 0 0"/>'), "a transform needs twelve finite numbers"),
    ("a.3mf", "huge transform"): (
        model(OBJECT, '<item objectid="1" transform="1e300 0 0 0 1e300 0 0 0 1e300 0 0 0"/>'),
        "of the size that a mesh file can hold"),
    ("a.3mf", "in itself"): (
        model('<object id="1"><components><component objectid="1"/></components></object>'), "components nest more than 32"),
    ("a.3mf", "deep"): (nested(40), "components nest more than 32"),
    ("a.3mf", "many times many"): (nested(30, twice=2), "or there are more than 10000"),
    ("a.3mf", "packed too tightly"): (packed(2**24), "packed tighter than any real one"),
    # GLB
    ("a.glb", "other text"): (b"hello", "does not begin as a GLB file does"),
    ("a.glb", "version 1"): (glb_bytes(SCENE, BLOB, version=1), "only version 2 of glTF is read"),
    ("a.glb", "cut short"): (glb_bytes(SCENE, BLOB)[:-4], "the file is cut short"),
    ("a.glb", "bytes after"): (glb_bytes(SCENE, BLOB) + b"tail", "bytes follow after the end"),
    ("a.glb", "no JSON"): (glb_bytes(b"{broken", BLOB), "is no JSON"),
    ("a.glb", "JSON of another kind"): (glb_bytes(b"[1, 2]", BLOB), "missing or of the wrong kind"),
    ("a.glb", "deep JSON"): (glb_bytes(b"[" * 100_000, BLOB), "is no JSON"),
    ("a.glb", "empty JSON"): (glb_bytes(b"{}", BLOB), "the file holds no facets"),
    ("a.glb", "extension"): (changed(extensionsRequired=["KHR_draco_mesh_compression"]), "requires an extension"),
    ("a.glb", "data outside"): (changed(buffers=[{"byteLength": 9, "uri": "../secret.bin"}]), "refers to data outside of it"),
    ("a.glb", "sparse"): (accessor(sparse={"count": 1}), "sparse or compressed data are not read"),
    ("a.glb", "points as bytes"): (accessor(componentType=5120), "of a kind that a mesh cannot have"),
    ("a.glb", "too many points"): (accessor(count=9_999), "the data end before its last number"),
    ("a.glb", "absurd count"): (accessor(count=10**30), "the data end before its last number"),
    ("a.glb", "count below nothing"): (accessor(count=-1), "missing or of the wrong kind"),
    ("a.glb", "fewer points"): (accessor(count=4), "names a vertex that is not there"),
    ("a.glb", "no such node"): (changed(scenes=[{"nodes": [7]}]), "missing or of the wrong kind"),
    ("a.glb", "no such mesh"): (changed(nodes=[{"mesh": 3}]), "missing or of the wrong kind"),
    ("a.glb", "in itself"): (changed(nodes=[{"children": [0]}]), "the nodes nest too deep"),
    ("a.glb", "many times many"): (
        changed(nodes=[{"children": [i + 1] * 2} for i in range(40)] + [{}]), "the nodes nest too deep, or are too many"),
    ("a.glb", "odd corners"): (
        changed(accessors=[SCENE["accessors"][0], {**SCENE["accessors"][1], "count": 35}]), "do not make whole triangles"),
    ("a.glb", "lines only"): (
        changed(meshes=[{"primitives": [{"attributes": {"POSITION": 0}, "mode": 1}]}]), "the file holds no facets"),
    ("a.glb", "unknown mode"): (
        changed(meshes=[{"primitives": [{"attributes": {"POSITION": 0}, "mode": 9}]}]), "this kind of primitive is not known"),
    ("a.glb", "a matrix of nine"): (changed(nodes=[{"mesh": 0, "matrix": [1] * 9}]), "missing or of the wrong kind"),
    ("a.glb", "a place in words"): (
        changed(nodes=[{"mesh": 0, "translation": ["a", 0, 0]}]), "missing or of the wrong kind"),
    # All
    ("a.gltf", "in several files"): (b"{}", "keeps its data in other files"),
    ("a.obj", "empty"): (b"", "the file is empty"),
    ("a.3mf", "empty"): (b"", "the file is empty"),
    ("a.step", "of another kind"): (b"ISO-10303-21;\n" * 20, "this is a STEP file, not an STL file"),
}


@pytest.mark.parametrize("case", REFUSED, ids=" ".join)
def test_a_file_that_cannot_be_read_is_refused_in_one_line(tmp_path, case):
    name, _ = case
    data, words = REFUSED[case]
    path = tmp_path / name
    path.write_bytes(data.encode() if isinstance(data, str) else data)
    with pytest.raises(MeshFileError, match=words) as refused:
        read_bodies(path)
    said = str(refused.value)
    assert said.startswith((str(path), path.name))
    assert "\n" not in said
    assert said.endswith(".")


@pytest.mark.parametrize("name", ["a.obj", "a.3mf", "a.glb", "a.ply", "a.off", "a.stl"])
def test_missing_files_and_folders_are_refused(tmp_path, name):
    with pytest.raises(MeshFileError, match="there is no such file"):
        read_bodies(tmp_path / name)
    (tmp_path / name).mkdir()
    with pytest.raises(MeshFileError, match="this is a folder"):
        read_bodies(tmp_path / name)


@pytest.mark.parametrize("name", ["a.obj", "a.3mf"])
def test_files_larger_than_any_part_are_refused_before_they_are_read(tmp_path, monkeypatch, name):
    monkeypatch.setattr("core.mesh.formats.reading.MOST_BYTES", 1000)
    path = tmp_path / name
    path.write_bytes(bytes(1001))
    with pytest.raises(MeshFileError, match="files of more than 1000 bytes are not taken in this format; read 1001 bytes"):
        read_bodies(path)


def test_a_model_larger_than_any_part_is_refused_before_it_is_unpacked(tmp_path, monkeypatch):
    monkeypatch.setattr("core.mesh.formats.three_mf.MOST_BYTES", 700)
    path = tmp_path / "a.3mf"
    path.write_bytes(plain_3mf(BOX))
    with pytest.raises(MeshFileError, match="models of more than 700 bytes are not taken"):
        read_bodies(path)


@pytest.mark.parametrize("seed", range(40))
@pytest.mark.parametrize("kind", ["a.off", "a.obj", "a.ply", "b.ply", "a.3mf", "a.glb"])
def test_damaged_bytes_are_refused_or_read_and_never_break_the_program(tmp_path, kind, seed):
    rng = np.random.default_rng(seed)
    sound = {
        "a.off": OFF.encode(), "a.obj": OBJ.encode(), "a.ply": PLY, "b.ply": TEXT_PLY, "a.3mf": plain_3mf(BOX),
        "a.glb": glb_bytes(SCENE, BLOB),
    }[kind]
    data = bytearray(sound)
    for place in rng.integers(0, len(data), rng.integers(1, 8)):
        data[place] = rng.integers(0, 256)
    path = tmp_path / kind
    path.write_bytes(data[: rng.integers(1, len(data))] if seed % 4 == 0 else data)
    # Any other exception fails the test.
    with contextlib.suppress(MeshFileError):
        assert all(asset.survey.triangles for asset in read_bodies(path))
