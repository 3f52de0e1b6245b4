"""The cut to begin with: it takes something out of any part, solid or hollow, and leaves something."""

import pytest

from core.assembly import Assembly, Part, ShapeBody
from core.assembly.first_cut import first_cut
from core.errors import MasswrightError
from core.material import ByDensity
from core.shapes import SHAPES, Box, Sphere, Tube

SOLIDS = sorted(key for key, shape in SHAPES.items() if shape.measure == "volume")
PARTS = {
    "block": Box(0.3, 0.2, 0.1), "plate": Box(0.4, 0.4, 0.01),
    "ring": Tube(outer_diameter=0.3, bore=0.2, length=0.05),
}


@pytest.mark.parametrize("body", PARTS)
@pytest.mark.parametrize("shape", SOLIDS)
def test_every_solid_can_be_taken_out_of_a_block_a_plate_and_a_ring(shape: str, body: str) -> None:
    part = Part("p1", body, ShapeBody(PARTS[body]), ByDensity(1000.0))
    assembly = Assembly("a", (part,))
    cut = first_cut(assembly, part, shape)
    left = assembly.inserted_cut(cut, "p1").node("p1").single.mass
    assert 0 < float(left) < float(part.single.mass)


def test_a_part_whose_mass_is_not_known_can_be_cut_as_well() -> None:
    part = Part("p1", "ball", ShapeBody(Sphere(0.1)))
    assert first_cut(Assembly("a", (part,)), part, "cylinder").name == "bore"


def test_where_nothing_is_left_to_cut_the_last_reason_is_given() -> None:
    part = Part("p1", "hair", ShapeBody(Tube(outer_diameter=0.3, bore=0.2999999, length=0.05)), ByDensity(1000.0))
    with pytest.raises(MasswrightError):
        first_cut(Assembly("a", (part,)), part, "cylinder")
