"""Rays against axes, planes and angles: closed forms, least squares, and SciPy's rotations."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation
from strategies import ANGLES, directions, points

from core.pointing import angle_about, met_on_plane, nearest_on_axis, snapped, unwound


def unit(vector):
    return vector / np.linalg.norm(vector)


@given(points, directions, points, directions)
def test_the_nearest_point_of_an_axis_is_the_one_that_least_squares_finds(start, ray, point, axis):
    assume(np.linalg.norm(np.cross(unit(ray), unit(axis))) > 0.05)
    columns = np.stack([unit(axis), -unit(ray)], axis=1)
    along, _ = np.linalg.lstsq(columns, start - point, rcond=None)[0]
    assert nearest_on_axis(start, ray, point, axis) == pytest.approx(along, rel=1e-11, abs=1e-11)


def test_a_ray_far_from_the_origin_finds_the_same_place():
    far = np.array([4000.0, -3000.0, 2000.0])
    found = nearest_on_axis(far + np.array([0.25, -2, 1]), [0, 1, 0], far, [1, 0, 0])
    assert found == pytest.approx(0.25, abs=1e-12)


@given(points, directions, points)
def test_a_ray_along_the_axis_says_nothing(start, axis, point):
    assert nearest_on_axis(start, -2 * axis, point, axis) is None


@given(points, directions, points, directions)
def test_where_a_ray_meets_a_plane_lies_in_both(start, ray, point, normal):
    assume(abs(unit(ray) @ unit(normal)) > 0.05)
    met = met_on_plane(start, ray, point, normal)
    ahead = (point - start) @ normal * (ray @ normal) >= 0
    assert (met is not None) == ahead
    if met is not None:
        assert (met - point) @ unit(normal) == pytest.approx(0, abs=1e-13)
        np.testing.assert_allclose(np.cross(met - start, unit(ray)), 0, atol=1e-12)
        assert (met - start) @ ray >= 0


def test_a_ray_in_the_plane_meets_it_nowhere():
    assert met_on_plane([0, 0, 1], [1, 1, 0], [0, 0, 0], [0, 0, 1]) is None


@given(points, directions, points, ANGLES, st.floats(-2, 2), st.floats(0.1, 3))
def test_the_angle_about_an_axis_is_the_turn_that_was_made(point, axis, other, angle, along, out):
    lever = np.cross(axis, other - point)
    assume(np.linalg.norm(lever) > 1e-2)
    start = point + unit(lever)
    turned = Rotation.from_rotvec(angle * unit(axis)).apply(unit(lever))
    end = point + out * turned + along * unit(axis)
    found = angle_about(point, axis, start, end)
    assert np.remainder(found - angle + 1, 2 * np.pi) - 1 == pytest.approx(0, abs=1e-12)


def test_from_a_point_on_the_axis_there_is_no_angle():
    assert angle_about([0, 0, 0], [0, 0, 1], [0, 0, 4], [1, 0, 0]) is None
    assert angle_about([0, 0, 0], [0, 0, 1], [1, 0, 0], [1e-9, 0, 4]) is None


@given(ANGLES, st.floats(-50, 50))
def test_an_unwound_angle_differs_by_whole_turns_and_lies_within_half_a_turn(angle, near):
    found = unwound(angle, near)
    turns = (found - angle) / (2 * np.pi)
    assert turns == pytest.approx(round(turns), abs=1e-12)
    assert abs(found - near) <= np.pi + 1e-12


@given(st.floats(-10, 10), st.floats(1e-3, 2))
def test_what_is_snapped_is_a_multiple_within_half_a_step(value, step):
    found = snapped(value, step)
    assert found / step == pytest.approx(round(found / step), abs=1e-9)
    assert abs(found - value) <= step / 2 * (1 + 1e-9)
