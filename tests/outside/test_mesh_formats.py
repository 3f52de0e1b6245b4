"""Files of other formats as another library writes them, and shells as it splits them."""

import numpy as np
import pytest
import trimesh
from mesh_files import hull, quartered, ring_grid
from oracles import assert_same_body

from core.mesh import survey_triangles
from core.mesh.census import census
from core.mesh.formats import read_bodies


def library_mesh(triangles: np.ndarray):
    mesh = trimesh.Trimesh(**trimesh.triangles.to_kwargs(triangles.astype(float)))
    mesh.merge_vertices()
    return mesh


@pytest.mark.parametrize("seed", range(3))
@pytest.mark.parametrize(("suffix", "options"), [
    ("obj", {}), ("off", {}), ("ply", {}), ("ply", {"encoding": "ascii"}), ("glb", {}), ("stl", {}), ("stl", {"file_type": "stl_ascii"}),
])
def test_a_hull_that_another_library_wrote_is_read_as_it_was(tmp_path, suffix, options, seed):
    rng = np.random.default_rng(seed)
    triangles = quartered(hull(rng.normal(size=(40, 3)).astype(np.float32)), 1).astype(np.float32)
    path = tmp_path / f"hull.{suffix}"
    library_mesh(triangles).export(path, **options)
    (asset,) = read_bodies(path)
    assert (asset.survey.verdict, asset.survey.triangles) == ("closed", len(triangles))
    # Some writers print eight decimals, not eight digits.
    assert_same_body(asset.survey.solid, survey_triangles(triangles).solid, rel=1e-6)


@pytest.mark.parametrize("suffix", ["obj", "glb"])
def test_bodies_of_a_scene_that_another_library_wrote_stand_where_they_were(tmp_path, suffix):
    rng = np.random.default_rng(5)
    scene, expected = trimesh.Scene(), {}
    for number in range(4):
        triangles = hull(rng.normal(size=(20, 3)))
        turn, _ = np.linalg.qr(rng.normal(size=(3, 3)))
        turn *= np.linalg.det(turn)
        shift = 10 * rng.normal(size=3)
        matrix = np.eye(4)
        matrix[:3, :3], matrix[:3, 3] = turn, shift
        scene.add_geometry(library_mesh(triangles), geom_name=f"body{number}", node_name=f"body{number}", transform=matrix)
        expected[number] = survey_triangles(triangles @ turn.T + shift).solid
    path = tmp_path / f"scene.{suffix}"
    scene.export(path)
    assets = read_bodies(path)
    assert len(assets) == 4
    for asset in assets:
        body = expected[int(asset.name.partition("body")[2][0])]
        assert_same_body(asset.survey.solid, body, rel=1e-5, size=10)


@pytest.mark.parametrize("seed", range(4))
def test_shells_are_those_that_another_library_splits_a_mesh_into(seed):
    rng = np.random.default_rng(seed)
    bodies = [quartered(hull(rng.normal(size=(15, 3))), 1) + 8 * np.array([step, 0, 0]) for step in range(9)]
    bodies.append(ring_grid(30, 12) + np.array([0.0, 0.0, 500.0]))
    triangles = rng.permutation(np.concatenate(bodies))
    ours = np.sort(census(triangles).shells.volume)
    theirs = np.sort([part.volume for part in library_mesh(triangles).split(only_watertight=False)])
    np.testing.assert_allclose(ours, theirs, rtol=1e-9)
