"""How fast seated lines follow an edit, and how fast the places of a mesh are found. Run with --benchmark-only."""

from __future__ import annotations

import numpy as np
import pytest

from core.assembly import Assembly, Part, ShapeBody
from core.assembly.fields import with_value
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import seated
from core.assembly.seats.regions import regions_of
from core.facets import Facets
from core.material import ByDensity
from core.shapes import Cylinder, Torus


def plate_with(count: int, seats: int) -> Assembly:
    """Return a plate and count pins on it, the first of which are seated."""
    pin = ShapeBody(Cylinder(0.01, 0.02))

    def part(number: int) -> Part:
        key = f"p{number}"
        places = Anchor(key, "face −z"), Anchor("plate", "face +z")
        seat = Seat(*places, aside=(0.001 * number, 0.0)) if number < seats else None
        return Part(key, key, pin, ByDensity(7850.0), seat=seat)

    plate = Part("plate", "plate", ShapeBody(Cylinder(0.4, 0.02)), ByDensity(7850.0))
    return seated(Assembly("pins", (plate, *(part(number) for number in range(count)))))


@pytest.mark.parametrize("edited", ["plate", "p999"])
@pytest.mark.parametrize("seats", [0, 10, 100])
def test_seats_followed_in_a_document_of_ten_thousand_parts(benchmark, seats, edited):
    before = plate_with(10_000, seats)
    after = before.replaced(with_value(before.node(edited), "dimension.length", 0.03))
    followed = benchmark(seated, after, before)
    assert (followed is after) == (edited != "plate" or not seats)
    benchmark.extra_info["aim"] = "a small part of the 100 ms in which the edit is right on screen"


@pytest.mark.parametrize("steps", [50, 150, 270])
def test_the_places_of_a_mesh_found(benchmark, steps):
    facets = Torus(0.3, 0.05).facets(steps)
    noisy = Facets(facets.points.astype(np.float32), facets.corners)
    found = benchmark(regions_of, noisy)
    assert len(found.regions) == 1
    benchmark.extra_info["facets"] = len(facets.corners)
