"""How long the search for overlaps takes. Run with --benchmark-only; the times are printed, none is asserted.

Cells of a plate with six pins, a bush and a bar that stands through it, no two alike, side by side as in a machine:
nearly all bodies touch others, and one cell in ten has a pin that sticks into its plate. And the worst case: bodies
strewn at random, of which most penetrate several others.
"""

from __future__ import annotations

import numpy as np
import pytest

from core.assembly import Assembly, Part, ShapeBody
from core.assembly.overlaps import MOST_TOLD, overlaps_of
from core.material import ByMaterial
from core.placement import Pose, Ring, Several
from core.shapes import Box, Cylinder, Tube

STEEL = ByMaterial("steel", 7850.0)
IN_A_CELL = 4
PITCH = 0.2


def cell_of(number: int, side: int, draw: np.random.Generator) -> tuple[Part, ...]:
    x, y, z = (PITCH * float(at) for at in np.unravel_index(number, (side, side, side)))
    thick, bore, pin = draw.uniform(0.01, 0.02), draw.uniform(0.02, 0.04), draw.uniform(0.005, 0.02)
    sunk = 0.5 * thick if number % 10 == 0 else 0.0
    shapes = (
        ("plate", Tube(PITCH, 2 * bore, thick), (x, y, z), Several(1)),
        ("bush", Tube(2 * bore, bore, thick), (x, y, z), Several(1)),
        ("bar", Cylinder(bore, 0.15), (x, y, z), Several(1)),
        ("pins", Box(pin, pin, 0.03), (x + 0.08, y, z + thick - sunk), Ring(6, (x, y, z))),
    )
    return tuple(
        Part(f"{name}{number}", f"{name} {number}", ShapeBody(shape), STEEL, Pose(at), copies)
        for name, shape, at, copies in shapes
    )


def machine_of(parts: int, seed: int = 5) -> Assembly:
    draw = np.random.default_rng(seed)
    side = int(np.ceil((parts / IN_A_CELL) ** (1 / 3)))
    cells = [cell_of(number, side, draw) for number in range(parts // IN_A_CELL)]
    return Assembly(f"{parts} parts", tuple(part for cell in cells for part in cell))


def heap_of(parts: int, seed: int = 5) -> Assembly:
    draw = np.random.default_rng(seed)
    return Assembly("heap", tuple(
        Part(
            f"p{at}", f"part {at}", ShapeBody(Cylinder(*draw.uniform(0.02, 0.1, 2))), STEEL,
            Pose(tuple(draw.uniform(-0.5, 0.5, 3)), tuple(draw.uniform(-3, 3, 3))),
        )
        for at in range(parts)
    ))


@pytest.mark.parametrize("parts", [100, 1000, 10_000])
def test_overlaps_in_a_machine(benchmark, parts):
    found = benchmark.pedantic(lambda: overlaps_of(machine_of(parts)), rounds=1)
    assert len(found.found) == min(-(-(parts // IN_A_CELL) // 10), MOST_TOLD)
    benchmark.extra_info.update({"aim": "5 s for 1,000 parts", "bodies": found.bodies, "overlaps": len(found.found)})


@pytest.mark.parametrize("parts", [100, 1000])
def test_overlaps_in_a_heap(benchmark, parts):
    found = benchmark.pedantic(lambda: overlaps_of(heap_of(parts)), rounds=1)
    benchmark.extra_info.update({"bodies": found.bodies, "overlaps": len(found.found)})
