"""Drawing without OpenGL: areas, depths and hidden lines against closed forms."""

from __future__ import annotations

import numpy as np
import pytest

from app.window.view.batch import Emphasis, face_colours, packed
from app.window.view.camera import Camera
from app.window.view.palette import LIGHT
from app.window.view.picking import pick
from app.window.view.scene import SurfaceStore, scene_of
from app.window.view.shading import LIGHT_TERMS, Stand, light_on, rastered, visible_lines
from core.assembly import Assembly

SIZE = (320, 240)


def drawn(assembly, camera=None, emphasis=None):
    scene = scene_of(assembly, SurfaceStore())
    camera = camera or Camera(np.zeros(3)).looking("iso")
    camera = camera.fitted(scene.fit_points, SIZE, 10)
    stand = Stand(camera, camera.depth_range(scene.centre, scene.radius), scene.centre, *SIZE)
    pack = packed(scene, lambda bodies: bodies.surface)
    colours = face_colours(scene, emphasis or Emphasis(), LIGHT)
    return scene, stand, pack, rastered(pack, stand, colours, LIGHT.ground)


def test_a_box_seen_square_on_covers_its_area(make_solid):
    box = make_solid("box", "box", 1000.0, length_x=0.2, length_y=0.2, length_z=0.1)
    camera = Camera(np.zeros(3), parallel=True).looking("front")
    _, stand, _, raster = drawn(Assembly("one", (box,)), camera)
    covered = (raster.depth < 1).sum() * stand.camera.metres_per_pixel(SIZE) ** 2
    # Half a pixel at most is rounded away along each side.
    assert covered == pytest.approx(0.2 * 0.1, abs=0.6 * stand.camera.metres_per_pixel(SIZE) * 0.6)


def test_every_pixel_shows_what_a_ray_through_it_meets_first(dial):
    scene, stand, _, raster = drawn(dial)
    rng = np.random.default_rng(7)
    differing = 0
    for x, y in rng.integers([0, 0], SIZE, (400, 2)):
        hit = pick(scene, *stand.camera.ray((x + 0.5, y + 0.5), SIZE))
        if (hit is None) != (raster.depth[y, x] == 1):
            differing += 1
        elif hit is not None:
            start, direction = stand.camera.ray((x + 0.5, y + 0.5), SIZE)
            clip = stand.matrix @ np.append(start + hit.distance * direction - scene.centre, 1)
            assert raster.depth[y, x] == pytest.approx(clip[2] / clip[3], abs=1e-4)
    assert differing == 0


def test_empty_ground_is_plain(dial):
    *_, raster = drawn(dial)
    assert (raster.colours[raster.depth == 1] == LIGHT.ground).all()


def test_what_is_selected_is_drawn_in_blue(dial):
    *_, plain = drawn(dial)
    *_, chosen = drawn(dial, emphasis=Emphasis(frozenset({"fixture"})))
    changed = (plain.colours != chosen.colours).any(axis=-1)
    assert changed.sum() > 500
    red, _, blue = chosen.colours[changed].astype(int).T
    assert (blue > red + 40).all()


def test_a_see_through_body_lets_what_is_behind_it_show(dial):
    *_, solid = drawn(dial)
    *_, clear = drawn(dial, emphasis=Emphasis(see_through=True))
    faces = solid.depth < 1
    ground = np.array(LIGHT.ground, dtype=float)
    assert np.abs(clear.colours[faces] - ground).mean() < 0.7 * np.abs(solid.colours[faces] - ground).mean()


def test_hidden_edges_of_a_box_are_left_out(make_solid):
    box = make_solid("box", "box", 1000.0, length_x=0.2, length_y=0.2, length_z=0.2)
    scene, stand, pack, raster = drawn(Assembly("one", (box,)))
    seen = visible_lines(pack.lines.sharp.astype(float), stand, raster.depth)
    ends = stand.camera.project(pack.lines.sharp.astype(float) + scene.centre, SIZE)[..., :2]
    whole = np.linalg.norm(np.diff(ends, axis=1), axis=-1).sum()
    # Nine of twelve edges of a cube show, all about equally long from an isometric place.
    assert np.linalg.norm(np.diff(seen, axis=1), axis=-1).sum() / whole == pytest.approx(9 / 12, abs=0.03)


def test_light_depends_on_the_side_that_is_seen_alone():
    normals = np.random.default_rng(1).normal(size=(50, 3))
    np.testing.assert_allclose(light_on(normals), light_on(-2 * normals))


def test_a_face_towards_the_lamp_is_the_brightest():
    lamp = np.array(LIGHT_TERMS[3])
    assert np.linalg.norm(lamp) == pytest.approx(1, abs=1e-3)
    others = np.random.default_rng(1).normal(size=(50, 3))
    assert light_on(lamp) > light_on(others).mean()
    assert light_on(others).max() <= sum(LIGHT_TERMS[:3]) + 1e-9
