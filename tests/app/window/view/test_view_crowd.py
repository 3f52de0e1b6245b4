"""An assembly of thousands of bodies in the view: the largest whole, the others as boxes, and little done per edit."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

from app.window.view.batch import packed
from app.window.view.crowd import CROWD, WHOLE, box_surface
from app.window.view.picking import pick
from app.window.view.scene import SurfaceStore, scene_of
from core.assembly import Assembly, Group, Part, ShapeBody
from core.material import ByDensity
from core.placement import Mirrored, Pose, Ring
from core.shapes import Cylinder

COUNT = WHOLE + 300


def crowd() -> Assembly:
    """Return parts of falling size in rings, so many that they are a crowd, in a turned group."""
    draw = np.random.default_rng(3)
    parts = tuple(
        Part(
            f"p{at}", f"part {at}", ShapeBody(Cylinder(0.05 / (1 + 0.01 * at), 0.02)), ByDensity(7850.0),
            Pose(tuple(draw.uniform(-1, 1, 3)), tuple(draw.uniform(-3, 3, 3))), Mirrored() if at % 50 == 0 else Ring(6),
        )
        for at in range(COUNT)
    )
    return Assembly("crowd", (Group("g", "group", parts, Pose((5.0, -2.0, 1.0), (0.3, 0.2, 0.1))),))


@pytest.fixture(scope="module")
def assembly() -> Assembly:
    made = crowd()
    assert len(made.table.owner) > CROWD
    return made


def test_only_the_largest_parts_are_drawn_whole(assembly):
    scene = scene_of(assembly, SurfaceStore())
    assert [bodies.key for bodies in scene.bodies if bodies.whole] == [f"p{at}" for at in range(WHOLE)]
    assert len(scene.bodies) == COUNT
    assert scene.note == "The 300 smallest parts are drawn as boxes"


def test_a_box_stands_where_the_part_stands_whose_box_it_is(assembly):
    scene = scene_of(assembly, SurfaceStore())
    np.testing.assert_allclose(scene.bounds, assembly.bounds, rtol=1e-12)
    pack = packed(scene, lambda bodies: bodies.surface)
    (batch,) = pack.batches
    for at in (WHOLE, WHOLE + 50, COUNT - 1):
        part = assembly.node(f"p{at}")
        vertices = batch.vertices[batch.owner == at].astype(np.float64) + scene.centre
        rows = assembly.table.owner == at
        corners = np.array([part.bounds[list(corner), range(3)] for corner in np.ndindex(2, 2, 2)])
        turned = corners @ np.swapaxes(assembly.table.standing.turn[rows], 1, 2)
        expected = (turned + assembly.table.standing.shift[rows][:, None]).reshape(-1, 3)
        gaps = np.linalg.norm(vertices[:, None] - expected[None], axis=2)
        assert gaps.min(axis=1).max() < 1e-6
        assert gaps.min(axis=0).max() < 1e-6


def test_all_triangles_of_a_crowd_look_outwards_mirrored_ones_too(assembly):
    scene = scene_of(assembly, SurfaceStore())
    (batch,) = packed(scene, lambda bodies: bodies.surface).batches
    a, b, c = (batch.vertices[batch.faces[:, place]].astype(np.float64) for place in range(3))
    across = np.cross(b - a, c - a)
    normals = batch.normals[batch.faces].sum(axis=1)
    assert (np.einsum("ij,ij->i", across, normals) > 0).all()


def test_an_edit_leaves_every_other_body_of_a_crowd_as_it_was(assembly):
    store = SurfaceStore()
    before = scene_of(assembly, store)
    part = assembly.node("p700")
    edited = assembly.replaced(replace(part, pose=Pose((0.0, 0.0, 2.0))))
    after = scene_of(edited, store, None, before)
    assert [at for at in range(COUNT) if after.bodies[at] is not before.bodies[at]] == [700]
    again = scene_of(edited, SurfaceStore())
    np.testing.assert_allclose(after.bodies[700].bounds, again.bodies[700].bounds, rtol=1e-12)


def test_a_boxed_part_is_picked_at_its_box(assembly):
    scene = scene_of(assembly, SurfaceStore())
    bodies = scene.bodies[COUNT - 1]
    middle = bodies.turn[0] @ bodies.surface.middle + bodies.shift[0]
    out = bodies.turn[0] @ [0.0, 0.0, 1.0]
    reach = float(np.ptp(bodies.surface.bounds, axis=0)[2])
    hit = pick(scene, middle + 0.51 * reach * out, -out)
    assert hit is not None
    assert (hit.key, hit.copy) == (bodies.key, 0)
    assert hit.distance == pytest.approx(0.01 * reach, rel=1e-3)


def test_a_box_is_drawn_as_large_as_it_is():
    bounds = np.array([[1.0, 2.0, 3.0], [1.5, 2.25, 3.125]])
    surface = box_surface(bounds)
    np.testing.assert_allclose(surface.vertices.min(axis=0) + surface.middle, bounds[0], rtol=1e-6)
    np.testing.assert_allclose(surface.vertices.max(axis=0) + surface.middle, bounds[1], rtol=1e-6)
    assert surface.count == 12
