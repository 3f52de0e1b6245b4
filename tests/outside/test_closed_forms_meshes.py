"""Every solid against a mesh library: at the density of steel, turned and shifted, each finer mesh nearer by its order.

The library (trimesh) integrates the mesh drawn for the shape by its own code; about the mesh's own centre of mass,
along the frame's axes. Slow: importing it takes a second or two.
"""

from __future__ import annotations

import numpy as np
import pytest
from oracles import assert_same_body

from core.moments import Moments
from core.placement import Placement, turn_about
from core.shapes import SHAPES, Shape

STEEL = 7850.0
PLACED = Placement(turn_about([1, -2, 0.5], 1.1), [0.4, -0.7, 1.2])
# The library integrates about the origin, 1.4 m away: for a body of 20 mm that costs (1.4/0.02)² × 1e-15 and more.
ROUND_OFF = 1e-9
SOLIDS = sorted(key for key in SHAPES if SHAPES[key].measure == "volume")


def by_library(shape: Shape, steps: int) -> Moments:
    """The mass properties that the library finds for the placed mesh of a shape in steel."""
    import trimesh

    surface = shape.facets(steps)
    mesh = trimesh.Trimesh(PLACED.apply(surface.points), surface.corners, process=False)
    mesh.density = STEEL
    found = mesh.mass_properties
    return Moments.from_inertia(found.mass, found.center_mass, found.inertia)


def gap(one: Moments, other: Moments) -> float:
    """The largest relative difference of two bodies, lengths against their own size."""
    size = float(np.sqrt(np.trace(other.spread) / other.mass))
    return max(
        float(abs(one.mass / other.mass - 1)),
        float(np.abs(one.centre - other.centre).max() / size),
        float(np.abs(one.spread - other.spread).max() / (other.mass * size**2)),
    )


@pytest.mark.parametrize("key", SOLIDS)
def test_the_mesh_of_a_solid_in_steel_goes_to_its_closed_form_with_the_square_of_the_steps(key: str):
    shape = SHAPES[key].of({})
    exact = PLACED.place(shape.moments().times(STEEL))
    coarse, middle, fine = (gap(by_library(shape, steps), exact) for steps in (24, 48, 96))
    assert fine < 5e-3
    assert middle <= 0.27 * coarse + ROUND_OFF
    assert fine <= 0.27 * middle + ROUND_OFF


@pytest.mark.parametrize("key", SOLIDS)
def test_the_mesh_of_a_solid_is_watertight_wound_one_way_and_outside_out(key: str):
    import trimesh

    surface = SHAPES[key].of({}).facets(48)
    mesh = trimesh.Trimesh(surface.points, surface.corners, process=False)
    assert mesh.is_watertight
    assert mesh.is_winding_consistent
    assert mesh.volume > 0
    # No facet without area: a viewer has no normal for it.
    assert float(mesh.area_faces.min()) > 1e-9 * float(mesh.area_faces.max())


FLAT_FACED = ["box", "pyramid", "regular prism", "tetrahedron", "wedge"]


@pytest.mark.parametrize("key", FLAT_FACED)
def test_of_a_solid_with_flat_faces_the_mesh_is_exact(key: str):
    shape = SHAPES[key].of({})
    assert_same_body(by_library(shape, 3), PLACED.place(shape.moments().times(STEEL)), rel=1e-12)


@pytest.mark.parametrize(
    ("key", "solid", "dimensions"),
    [
        ("tetrahedron", "tetrahedron", {"edge": 2 * 2**0.5}),
        ("box", "cube", {"length_x": 2.0, "length_y": 2.0, "length_z": 2.0}),
    ],
)
def test_a_platonic_solid_has_the_volume_and_moments_of_its_corners(key: str, solid: str, dimensions: dict[str, float]):
    from scipy.spatial import ConvexHull

    corners = {
        "tetrahedron": [[1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]],
        "cube": [[x, y, z] for x in (-1, 1) for y in (-1, 1) for z in (-1, 1)],
    }[solid]
    hull = ConvexHull(np.array(corners, dtype=float))
    body = SHAPES[key].of(dimensions).moments()
    assert float(body.mass) == pytest.approx(hull.volume, rel=1e-13)
    # All corners of a Platonic solid are alike: I/m is 1/20 and 1/6 of the edge squared (OEIS A341906).
    edge = min(np.linalg.norm(np.subtract(corners[0], other)) for other in corners[1:])
    about = body.inertia_about_centre / float(body.mass)
    np.testing.assert_allclose(about, np.eye(3) * edge**2 / (20 if solid == "tetrahedron" else 6), rtol=1e-13, atol=1e-15)
