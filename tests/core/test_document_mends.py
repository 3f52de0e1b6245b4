"""A mended mesh in a document: the bytes, what was done, and what it was made of come back."""

import json
import zipfile
from hashlib import sha256

import numpy as np
from mesh_files import binary_stl, box

from core.assembly import Assembly, MeshBody, Part
from core.document import read_document, save_document
from core.machine import Machine
from core.mesh import MeshAsset

OVERLAPPING = binary_stl(np.concatenate([box(40, 30, 20), box(40, 30, 20, at=(20, 0, 0))]))


def saved_and_read(asset: MeshAsset, path) -> MeshAsset:
    part = Part("a", "bracket", MeshBody(asset, 1e-3))
    save_document(Machine(Assembly("dial", (part,))), path)
    return read_document(path).assembly.members[0].body.asset


def test_mends_and_the_source_of_a_mesh_come_back(tmp_path):
    mended = MeshAsset.of_bytes(OVERLAPPING, "bracket.stl").mended("unite")
    again = saved_and_read(mended, tmp_path / "dial.masswright")
    assert again == mended
    assert again.mends == ("shells united (24 facets became 28)",)
    assert again.source == sha256(OVERLAPPING).hexdigest()
    assert float(again.survey.solid.mass) == 36_000


def test_a_mesh_that_was_never_mended_says_nothing_of_mends(tmp_path):
    path = tmp_path / "dial.masswright"
    again = saved_and_read(MeshAsset.of_bytes(OVERLAPPING, "bracket.stl"), path)
    assert (again.mends, again.source) == ((), "")
    with zipfile.ZipFile(path) as archive:
        body = json.loads(archive.read("assembly.json"))["members"][0]["body"]
    assert {"mends", "source"}.isdisjoint(body)


def test_equal_bytes_with_and_without_mends_stay_two_meshes(tmp_path):
    asset = MeshAsset.of_bytes(binary_stl(box()), "box.stl")
    turned_twice = asset.mended("turn").mended("turn")
    assert turned_twice.sha256 == asset.sha256
    assert turned_twice != asset
    parts = tuple(Part(key, key, MeshBody(one, 1e-3)) for key, one in (("a", asset), ("b", turned_twice)))
    path = tmp_path / "dial.masswright"
    save_document(Machine(Assembly("dial", parts)), path)
    assert [part.body.asset for part in read_document(path).assembly.members] == [asset, turned_twice]


def test_a_part_says_what_was_mended():
    mended = MeshAsset.of_bytes(OVERLAPPING, "bracket.stl").mended("unite")
    checks = {check.name: check for check in Part("a", "bracket", MeshBody(mended, 1e-3)).checks}
    assert checks["mends"].ok
    assert checks["mends"].text == (
        "bracket: the mesh was mended after it was read: shells united (24 facets became 28)."
    )
