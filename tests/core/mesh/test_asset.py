"""A mesh as a document holds it: bytes, their name and hash, and what one look at them told."""

import gzip
from dataclasses import FrozenInstanceError
from hashlib import sha256

import numpy as np
import pytest
from mesh_files import ascii_stl, binary_stl, box, ring_grid

import core.mesh
from core.mesh import MeshAsset

BOX = box(40, 30, 20)


def test_an_asset_holds_the_files_bytes_and_their_hash(tmp_path):
    path = tmp_path / "box.stl"
    path.write_bytes(binary_stl(BOX))
    asset = MeshAsset.read(path)
    assert (asset.data, asset.name, asset.sha256) == (path.read_bytes(), "box.stl", sha256(path.read_bytes()).hexdigest())
    assert (asset.survey.verdict, asset.survey.triangles) == ("closed", 12)


def test_assets_are_equal_where_their_bytes_are():
    one, other = MeshAsset.of_bytes(binary_stl(BOX), "a.stl"), MeshAsset.of_bytes(binary_stl(BOX), "b.stl")
    assert one == other
    assert len({one, other}) == 1
    assert one != MeshAsset.of_bytes(binary_stl(BOX, header=b"x"), "a.stl")
    assert one != "a.stl"


def test_triangles_of_a_binary_file_are_a_view_of_its_bytes():
    asset = MeshAsset.of_bytes(binary_stl(BOX), "box.stl")
    np.testing.assert_array_equal(asset.triangles, BOX.astype(np.float32), strict=True)
    assert np.shares_memory(asset.triangles, np.frombuffer(asset.data, np.uint8))
    with pytest.raises(ValueError, match="read-only"):
        asset.triangles[0, 0, 0] = 1


def test_triangles_of_a_text_file_are_in_double_precision_and_read_only():
    asset = MeshAsset.of_bytes(ascii_stl(BOX / 3).encode(), "box.stl")
    np.testing.assert_array_equal(asset.triangles, BOX / 3, strict=True)
    with pytest.raises(ValueError, match="read-only"):
        asset.triangles[0, 0, 0] = 1


def test_a_packed_file_is_held_unpacked(tmp_path):
    path = tmp_path / "box.stl.gz"
    path.write_bytes(gzip.compress(binary_stl(BOX)))
    assert MeshAsset.read(path) == MeshAsset.of_bytes(binary_stl(BOX), "box.stl")


def test_an_asset_cannot_be_changed():
    asset = MeshAsset.of_bytes(binary_stl(BOX), "box.stl")
    with pytest.raises(FrozenInstanceError):
        asset.name = "other.stl"


def test_facets_for_view_share_their_points():
    facets = MeshAsset.of_bytes(binary_stl(BOX), "box.stl").facets_for_view()
    assert facets.points.shape == (8, 3)
    np.testing.assert_array_equal(facets.triangles, BOX)


def test_facets_for_view_keep_to_the_most_that_is_asked_for():
    asset = MeshAsset.of_bytes(binary_stl(ring_grid(50, 20)), "ring.stl")
    assert len(asset.facets_for_view().corners) == 2000
    for most in (1999, 700, 1):
        assert len(asset.facets_for_view(most).corners) <= most


def test_a_mesh_that_is_drawn_lighter_says_so_and_is_computed_whole():
    asset = MeshAsset.of_bytes(binary_stl(ring_grid(500, 310)), "ring.stl")
    assert asset.survey.triangles == 310_000
    assert asset.drawn_lighter
    assert len(asset.facets_for_view().corners) <= 300_000
    assert not MeshAsset.of_bytes(binary_stl(BOX), "box.stl").drawn_lighter


def test_the_package_offers_what_its_list_says():
    assert core.mesh.__all__ == [
        "AT_ONCE", "MeshAsset", "MeshSurvey", "can_restore", "count_shells", "restored", "survey_file",
        "survey_triangles",
    ]
    assert all(hasattr(core.mesh, name) for name in core.mesh.__all__)
