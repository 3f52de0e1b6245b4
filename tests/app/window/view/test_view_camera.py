"""The camera: closed forms of its matrices, and what each movement leaves where it is."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from app.window.view.camera import HALF_FIELD, LOOKS, Camera

SIZE = (640.0, 480.0)
numbers = st.floats(-5, 5)
cameras = st.builds(
    Camera,
    target=st.tuples(numbers, numbers, numbers).map(np.array),
    distance=st.floats(0.05, 50),
    azimuth=st.floats(-np.pi, np.pi),
    elevation=st.floats(-np.pi / 2, np.pi / 2),
    parallel=st.booleans(),
)
spots = st.tuples(st.floats(0, 640), st.floats(0, 480))
EXPECTED_AXES = {
    "front": [[1, 0, 0], [0, 0, 1], [0, -1, 0]],
    "back": [[-1, 0, 0], [0, 0, 1], [0, 1, 0]],
    "left": [[0, -1, 0], [0, 0, 1], [-1, 0, 0]],
    "right": [[0, 1, 0], [0, 0, 1], [1, 0, 0]],
    "top": [[1, 0, 0], [0, 1, 0], [0, 0, 1]],
    "bottom": [[1, 0, 0], [0, -1, 0], [0, 0, -1]],
}


@pytest.mark.parametrize("name", EXPECTED_AXES)
def test_a_named_view_looks_along_its_document_axis(name):
    np.testing.assert_allclose(Camera(np.zeros(3)).looking(name).axes, EXPECTED_AXES[name], atol=1e-15)


def test_the_isometric_view_shortens_the_three_axes_alike():
    axes = Camera(np.zeros(3)).looking("iso").axes
    # Each document axis appears at √(2/3) of its length.
    np.testing.assert_allclose(np.linalg.norm(axes[:2], axis=0), np.sqrt(2 / 3), rtol=1e-14)


@given(cameras)
def test_the_axes_of_a_camera_are_a_right_handed_set(camera):
    np.testing.assert_allclose(camera.axes @ camera.axes.T, np.eye(3), atol=1e-14)
    assert np.linalg.det(camera.axes) == pytest.approx(1, abs=1e-12)


@given(cameras)
def test_the_target_lies_in_the_middle_of_the_picture(camera):
    np.testing.assert_allclose(camera.project(camera.target, SIZE), [320, 240, camera.distance], rtol=1e-12)


def test_a_point_half_the_field_above_the_target_lies_on_the_upper_edge():
    camera = replace(Camera(np.zeros(3), 2.0), azimuth=0.3, elevation=0.0)
    for parallel in (True, False):
        spot = camera.with_parallel(parallel).project([0, 0, 2 * np.tan(HALF_FIELD)], SIZE)
        np.testing.assert_allclose(spot[:2], [320, 0], atol=1e-10)


@given(cameras, spots, st.floats(0.1, 20))
def test_every_point_on_the_ray_of_a_pixel_projects_to_that_pixel(camera, spot, far):
    start, direction = camera.ray(spot, SIZE)
    back = camera.project(start + far * camera.distance * direction, SIZE)
    np.testing.assert_allclose(back[:2], spot, atol=1e-6)


@given(cameras, st.tuples(numbers, numbers, numbers))
def test_the_matrices_and_project_agree(camera, offset):
    point = camera.target + 0.05 * camera.distance * np.array(offset)
    depths = camera.depth_range(camera.target, 0.6 * camera.distance)
    origin = camera.target + 0.1
    clip = camera.projection_matrix(SIZE, depths) @ camera.view_matrix(origin) @ np.append(point - origin, 1)
    x, y = (clip[0] / clip[3] + 1) * 320, (1 - clip[1] / clip[3]) * 240
    np.testing.assert_allclose([x, y], camera.project(point, SIZE)[:2], atol=1e-6)


@given(cameras, spots, st.floats(0.2, 5))
def test_zooming_keeps_what_lies_under_the_pointer(camera, spot, factor):
    start, direction = camera.ray(spot, SIZE)
    away = camera.distance / -(direction @ camera.axes[2])
    kept = start + away * direction
    np.testing.assert_allclose(camera.zoomed(factor, spot, SIZE).project(kept, SIZE)[:2], spot, atol=1e-6)


@given(cameras, st.tuples(st.floats(-300, 300), st.floats(-300, 300)))
def test_panning_moves_the_target_by_the_pixels_that_were_dragged(camera, step):
    moved = camera.panned(*step, SIZE).project(camera.target, SIZE)
    np.testing.assert_allclose(moved[:2], [320 + step[0], 240 + step[1]], atol=1e-6)


@given(cameras, st.floats(-1, 1), st.floats(-0.2, 0.2))
def test_orbiting_keeps_target_and_distance_and_never_tips_over(camera, turn, tilt):
    turned = camera.orbited(turn, 10 * tilt)
    assert np.linalg.norm(turned.eye - camera.target) == pytest.approx(camera.distance)
    assert abs(turned.elevation) <= np.pi / 2
    assert turned.axes[1, 2] >= -1e-15


@given(cameras, st.integers(0, 10_000), st.sampled_from([(640.0, 480.0), (200.0, 900.0), (1600.0, 300.0)]))
def test_a_fitted_camera_shows_every_point_and_touches_the_inset(camera, seed, size):
    points = np.random.default_rng(seed).normal(size=(40, 3)) * 0.3 + [3, -2, 1]
    fitted = camera.fitted(points, size, 20.0)
    spots = fitted.project(points, size)
    assert (spots[:, 2] > 0).all() or camera.parallel
    low, high = spots[:, :2].min(axis=0), spots[:, :2].max(axis=0)
    assert (low >= 20 - 1e-6).all()
    assert (high <= np.array(size) - 20 + 1e-6).all()
    gaps = np.concatenate([low - 20, np.array(size) - 20 - high])
    assert gaps.min() < 1e-6


@given(cameras)
def test_near_and_far_plane_take_in_the_ball_that_they_are_made_for(camera):
    centre = camera.target + 0.2 * camera.distance * camera.axes[0]
    radius = 0.5 * camera.distance
    near, far = camera.depth_range(centre, radius)
    assert near <= camera.distance - radius
    assert far >= camera.distance + radius
    assert camera.parallel or near > 0


def test_near_and_far_plane_follow_the_camera():
    near = [Camera(np.zeros(3), distance).depth_range(np.zeros(3), 1.0) for distance in (5.0, 500.0)]
    assert near[1][0] - near[0][0] == pytest.approx(495.0)
    assert near[1][1] - near[0][1] == pytest.approx(495.0)


def test_parallel_projection_keeps_the_scale_at_the_target():
    camera = Camera(np.zeros(3), 3.0)
    point = 0.4 * camera.axes[0]
    np.testing.assert_allclose(
        camera.project(point, SIZE)[:2], camera.with_parallel(True).project(point, SIZE)[:2], rtol=1e-12
    )


def test_every_named_view_has_a_place_of_its_own():
    assert len({Camera(np.zeros(3)).looking(name).axes.round(6).tobytes() for name in LOOKS}) == 7
