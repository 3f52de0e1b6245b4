"""How fast cuts are taken out, inside and crossing, and how fast an assembly of many cut parts answers an edit.

Times on two cores shared with other work are printed, and only held against limits far above what is usual.
"""

from __future__ import annotations

from dataclasses import replace
from itertools import count

import numpy as np
import pytest

from core.assembly import Assembly, Cut, MeshBody, Part, ShapeBody, ledger_of
from core.material import ByMaterial
from core.mesh import MeshAsset
from core.mesh.stl_writing import stl_of_triangles
from core.placement import Pose, Ring
from core.shapes import Box, Cylinder, Torus

STEEL = ByMaterial("steel", 7850.0)
ACROSS = (-np.pi / 2, 0.0, 0.0)
CUTS = {
    "a bore through a plate": (Box(0.1, 0.06, 0.02), Cylinder(0.02, 0.03), Pose((0.0, 0.0, -0.005))),
    "a slot in a block, turned": (Box(0.1, 0.06, 0.02), Box(0.02, 0.01, 0.01), Pose((0.0, 0.0, 0.005), (0.1, 0.2, 0.3))),
    "a hole half over an edge": (Box(0.1, 0.06, 0.02), Cylinder(0.02, 0.03), Pose((0.05, 0.0, -0.005))),
    "a hole across a shaft": (Cylinder(0.04, 0.2), Cylinder(0.01, 0.1), Pose((0.0, -0.05, 0.1), ACROSS)),
}


def part_of(body, shape, pose, key="p", copies=None):
    cut = Cut(f"{key} cut", "cut", shape, pose) if copies is None else Cut(f"{key} cut", "cut", shape, pose, copies)
    return Part(key, key, body, STEEL, cuts=(cut,))


@pytest.mark.parametrize("name", CUTS)
def test_a_cut_taken_out(benchmark, name):
    body, shape, pose = CUTS[name]
    benchmark(lambda: part_of(ShapeBody(body), shape, pose).solid)
    benchmark.extra_info["aim"] = "1 ms for a bore that lies inside"


@pytest.mark.parametrize("facets", [100_000, 400_000])
def test_a_bore_out_of_a_large_mesh(benchmark, facets):
    triangles = Torus(0.2, 0.08).facets(round(np.sqrt(facets))).triangles * 1e3
    asset = MeshAsset.of_bytes(stl_of_triangles(triangles.astype(np.float32), "t.stl"), "t.stl")
    shape, pose = Cylinder(0.02, 0.2), Pose((0.1, 0.0, -0.1))
    benchmark.pedantic(lambda: part_of(MeshBody(asset, 1e-3), shape, pose).solid, rounds=2)
    benchmark.extra_info["facets"] = asset.survey.triangles


def test_a_dimension_edited_in_an_assembly_of_1000_cut_parts(benchmark):
    holes = Cylinder(0.01, 0.03), Pose((0.15, 0.0, -0.005))
    parts = [part_of(ShapeBody(Cylinder(0.4 + at * 1e-5, 0.02)), *holes, f"p{at}", Ring(6)) for at in range(1000)]
    assembly = Assembly("many", tuple(parts))
    ledger_of(assembly)
    numbers = count(1)

    def edit() -> None:
        body = ShapeBody(Cylinder(0.5 + next(numbers) * 1e-5, 0.02))
        after = assembly.replaced(replace(assembly.node("p7"), body=body))
        _ = after.total
        ledger_of(after)

    benchmark(edit)
    benchmark.extra_info["aim"] = "30 ms"
