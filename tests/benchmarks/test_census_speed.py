"""How long a census takes beside a mesh library's own load and split, from ten thousand facets upwards.

Run with --benchmark-only. Processor time, since the machine may be shared; the ratio is printed and, for the largest
mesh, asserted.
"""

import io
import os
import time

import numpy as np
import pytest
from mesh_files import binary_stl, box, ring_grid

from core.mesh import MeshAsset
from core.mesh.census import census

MILLIONS = int(os.environ.get("MASSWRIGHT_BENCH_MILLIONS", "2"))


def seconds(function, *arguments) -> float:
    start = time.process_time()
    function(*arguments)
    return time.process_time() - start


def peer(data: bytes) -> int:
    import trimesh

    mesh = trimesh.load(io.BytesIO(data), file_type="stl")
    return len(mesh.split(only_watertight=False))


@pytest.mark.timeout(900)
def test_census_beside_a_mesh_library(benchmark, capsys):
    data = binary_stl(ring_grid(1000 * MILLIONS, 500))
    asset = MeshAsset.of_bytes(data, "ring.stl")
    peer(binary_stl(box()))
    ours = min(seconds(census, asset.triangles) for _ in range(2))
    library = seconds(peer, data)
    benchmark.pedantic(census, (asset.triangles,), rounds=1)
    with capsys.disabled():
        print(  # noqa: T201  # the ratios are what the run is for
            f"\n{asset.survey.triangles} facets: census {ours:.2f} s of processor time, mesh library's load and split"
            f" {library:.2f} s = {library / ours:.1f} times as long"
        )
    assert ours <= library / 2


@pytest.mark.timeout(900)
@pytest.mark.parametrize("count", [10_000, 100_000, 1_000_000])
def test_census_by_size(benchmark, count):
    triangles = ring_grid(count // 200, 100)
    found = benchmark.pedantic(census, (triangles,), rounds=1)
    assert (found.triangles, len(found.shells)) == (count, 1)


@pytest.mark.timeout(900)
@pytest.mark.parametrize("where", ["apart", "in a block"])
def test_census_of_a_hundred_thousand_shells(benchmark, where):
    side = 46
    places = np.stack(np.meshgrid(*[2.0 * np.arange(side)] * 3, indexing="ij"), axis=-1).reshape(-1, 3)
    triangles = (box()[None] + places[:, None, None]).reshape(-1, 3, 3)
    if where == "in a block":
        around = box(2 * side + 2, 2 * side + 2, 2 * side + 2, at=(-1, -1, -1))
        triangles = np.concatenate([around, triangles[:, ::-1]])
    found = benchmark.pedantic(census, (triangles,), rounds=1)
    assert found.findings == ()
    assert len(found.shells) == len(places) + (where == "in a block")
