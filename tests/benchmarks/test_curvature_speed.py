"""How long restoring the curvature of a large mesh takes, and how much memory, beside a peer's load of the same mesh.

Run with --benchmark-only. The ratio is kept with the figures; the limit is the project's own.
"""

from __future__ import annotations

import os
import time
import tracemalloc

import numpy as np
import pytest
from round_bodies import grid

from core.mesh.curvature import restore

MILLIONS = float(os.environ.get("MASSWRIGHT_BENCH_MILLIONS", "2"))


def ring(triangles: float) -> tuple[np.ndarray, np.ndarray]:
    """Return points and corners of a torus of about so many triangles."""
    around = round(np.sqrt(triangles / 4))
    steps = 2 * around
    index = np.arange(steps * around, dtype=float).reshape(steps, around, 1)
    corners = grid(np.broadcast_to(index, (steps, around, 3)), close_u=True, close_v=True)[..., 0].astype(np.int64)
    u, v = np.meshgrid(2 * np.pi * np.arange(steps) / steps, 2 * np.pi * np.arange(around) / around, indexing="ij")
    r = 30 + 10 * np.cos(v)
    points = np.stack([r * np.cos(u), r * np.sin(u), 10 * np.sin(v)], axis=-1).reshape(-1, 3)
    return points, corners


@pytest.mark.benchmark(group="curvature")
def test_two_million_triangles_against_a_mesh_library(benchmark):
    import trimesh

    points, corners = ring(1e6 * MILLIONS)
    benchmark.pedantic(restore, args=(points, corners), rounds=1)
    start = time.perf_counter()
    mesh = trimesh.Trimesh(points[corners].reshape(-1, 3), np.arange(3 * len(corners)).reshape(-1, 3))
    peer = (mesh.is_watertight, mesh.moment_inertia)
    benchmark.extra_info["times_peer"] = round(benchmark.stats.stats.median / (time.perf_counter() - start), 2)
    benchmark.extra_info["triangles"] = len(corners)
    assert peer[0]


@pytest.mark.benchmark(group="curvature")
def test_memory_stays_below_a_kilobyte_per_triangle(benchmark):
    points, corners = ring(2e5)
    tracemalloc.start()
    benchmark.pedantic(restore, args=(points, corners), rounds=1)
    peak = tracemalloc.get_traced_memory()[1]
    tracemalloc.stop()
    benchmark.extra_info["bytes_per_triangle"] = round(peak / len(corners))
    assert peak < 1000 * len(corners)
