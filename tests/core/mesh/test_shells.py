"""Of how many separate surfaces a mesh consists."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import ascii_stl, binary_stl, box, quartered, ring_grid

from core.mesh import MeshAsset, count_shells
from core.mesh.shells import shells_of
from core.mesh.source import ArraySource
from core.progress import Progress


@pytest.mark.parametrize("count", [1, 2, 115])
def test_boxes_apart_are_as_many_shells(tmp_path, count):
    triangles = np.concatenate([quartered(box(at=(2 * step, 0, 0))) for step in range(count)])
    triangles = np.random.default_rng(count).permutation(triangles)
    path = tmp_path / "boxes.stl"
    path.write_bytes(binary_stl(triangles))
    assert count_shells(path) == count
    path.write_text(ascii_stl(triangles))
    assert count_shells(path) == count
    assert MeshAsset.read(path).count_shells() == count


def test_a_void_is_a_shell_of_its_own():
    assert shells_of(ArraySource(np.concatenate([box(3, 3, 3), box(at=(1, 1, 1))[:, ::-1]]))) == 2


def test_bodies_that_share_an_edge_or_a_corner_are_one_shell():
    assert shells_of(ArraySource(np.concatenate([box(), box(at=(1, 1, 0))]))) == 1
    assert shells_of(ArraySource(np.concatenate([box(), box(at=(1, 1, 1))]))) == 1


def test_a_mesh_larger_than_a_batch_is_counted_whole(monkeypatch):
    monkeypatch.setattr("core.mesh.shells._BATCH", 10_000)
    monkeypatch.setattr("core.mesh.shells._MOST_WAITING", 20_000)
    one = ring_grid(300, 60)
    triangles = np.concatenate([one, one + np.float32(200), one - np.float32(200)])
    triangles = np.random.default_rng(3).permutation(triangles)
    assert shells_of(ArraySource(triangles)) == 3


def test_progress_counts_every_facet():
    progress = Progress()
    shells_of(ArraySource(box()), progress)
    assert (progress.done, progress.total) == (12, 12)


@given(st.lists(st.tuples(*[st.integers(0, 30)] * 3), min_size=1, max_size=25))
def test_shells_are_the_groups_that_a_walk_from_facet_to_facet_finds(facets):
    groups: list[set[int]] = []
    for facet in facets:
        touching = [group for group in groups if group & set(facet)]
        groups = [group for group in groups if not group & set(facet)] + [set(facet).union(*touching)]
    places = np.random.default_rng(0).normal(size=(31, 3))
    assert shells_of(ArraySource(places[np.array(facets)])) == len(groups)
