"""Picking: rays against bodies in closed form, and there and back through the camera."""

from __future__ import annotations

import numpy as np
import pytest

from app.window.view.camera import LOOKS, Camera
from app.window.view.picking import pick, ray_surface
from app.window.view.scene import Scene, SurfaceStore, scene_of
from app.window.view.surface import surface_of
from core.assembly import Assembly
from core.shapes import SHAPES

SIZE = (640.0, 480.0)


def test_a_ray_meets_a_box_at_its_near_face(make_solid):
    box = make_solid("box", "box", 1000.0, (1.0, 2.0, 3.0), length_x=0.2, length_y=0.2, length_z=0.2)
    scene = scene_of(Assembly("one", (box,)), SurfaceStore())
    low, high = scene.bounds
    middle = 0.5 * (low + high)
    hit = pick(scene, np.array([middle[0], middle[1], 10.0]), np.array([0.0, 0.0, -1.0]))
    assert (hit.key, hit.copy) == ("box", 0)
    assert hit.distance == pytest.approx(10.0 - high[2], rel=1e-6)


def test_a_ray_through_the_bore_of_a_tube_meets_nothing(make_solid):
    tube = make_solid("tube", "tube", 1000.0, outer_diameter=0.2, bore=0.1, length=0.1)
    scene = scene_of(Assembly("one", (tube,)), SurfaceStore())
    down = np.array([0.0, 0.0, -1.0])
    assert pick(scene, np.array([0.01, 0.0, 1.0]), down) is None
    assert pick(scene, np.array([0.07, 0.0, 1.0]), down).key == "tube"


def test_what_lies_behind_the_eye_is_not_picked(make_solid):
    box = make_solid("box", "box", 1000.0, length_x=0.2, length_y=0.2, length_z=0.2)
    scene = scene_of(Assembly("one", (box,)), SurfaceStore())
    assert pick(scene, np.array([0.0, 0.0, 5.0]), np.array([0.0, 0.0, 1.0])) is None


def test_an_empty_scene_gives_nothing():
    assert pick(Scene(), np.zeros(3), np.array([0.0, 0.0, 1.0])) is None


@pytest.mark.parametrize("at", [(0.0, 0.0, 0.0), (800.0, -300.0, 50.0)])
@pytest.mark.parametrize("parallel", [True, False])
def test_each_copy_is_found_again_at_the_pixel_that_its_top_projects_to(make_dial, at, parallel):
    scene = scene_of(make_dial(at), SurfaceStore())
    fixture = next(bodies for bodies in scene.bodies if bodies.key == "fixture")
    camera = Camera(np.zeros(3), parallel=parallel).looking("iso").fitted(scene.fit_points, SIZE, 20)
    for copy, shift in enumerate(fixture.shift):
        spot = camera.project(shift + np.array([0, 0, 0.045]), SIZE)
        hit = pick(scene, *camera.ray((spot[0], spot[1]), SIZE))
        assert (hit.key, hit.copy) == ("fixture", copy)
        assert hit.distance == pytest.approx(np.linalg.norm(shift + np.array([0, 0, 0.045]) - camera.ray((spot[0], spot[1]), SIZE)[0]), rel=1e-6)


@pytest.mark.parametrize("name", LOOKS)
def test_the_nearest_of_all_hits_is_picked_from_every_side(mirrored_pair, name):
    scene = scene_of(mirrored_pair, SurfaceStore())
    camera = Camera(np.zeros(3)).looking(name).fitted(scene.fit_points, SIZE, 20)
    rng = np.random.default_rng(3)
    found = 0
    for spot in rng.uniform([0, 0], SIZE, (200, 2)):
        start, direction = camera.ray(tuple(spot), SIZE)
        hit, expected = pick(scene, start, direction), nearest(scene, start, direction)
        assert (hit is None) == (expected is None)
        if hit is not None:
            found += 1
            assert hit.distance == pytest.approx(expected, rel=1e-6)
    assert found > 3


def nearest(scene, start, direction):
    """Return the distance to the nearest triangle, each solved for as a 3 × 3 system."""
    distances = []
    for bodies in scene.bodies:
        surface = bodies.surface
        for turn, shift in zip(bodies.turn, bodies.shift, strict=True):
            a, b, c = np.moveaxis((surface.vertices[surface.faces] + surface.middle) @ turn.T + shift, 1, 0)
            matrix = np.stack([b - a, c - a, np.broadcast_to(-direction, a.shape)], axis=-1)
            sound = np.abs(np.linalg.det(matrix)) > 1e-14
            u, v, t = np.linalg.solve(matrix[sound], (start - a[sound])[..., None])[..., 0].T
            distances += t[(u >= 0) & (v >= 0) & (u + v <= 1) & (t >= 0)].tolist()
    return min(distances, default=None)


def test_a_ray_along_the_axis_of_a_sphere_meets_its_pole():
    surface = surface_of(SHAPES["sphere"].of({"diameter": 0.2}).facets(48))
    assert ray_surface(surface, np.array([0.0, 0.0, 1.0]), np.array([0.0, 0.0, -1.0])) == pytest.approx(0.9, rel=1e-6)
