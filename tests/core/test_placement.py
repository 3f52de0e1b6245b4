"""Placements and copies against SciPy's rotations and against copies written out one by one."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import example, given
from hypothesis import strategies as st
from oracles import assert_same_body
from scipy.spatial.transform import Rotation
from strategies import ANGLES, directions, mirrored_placements, placements, points, realisable_moments

from core.errors import ValueRefused
from core.moments import Moments
from core.placement import (
    MOST_COPIES,
    Mirrored,
    Placement,
    Pose,
    Ring,
    Row,
    Several,
    axis_and_angle_of,
    matrix_of_turns,
    smallest_turn,
    turn_about,
    turns_of_matrix,
)

TURNS = st.tuples(ANGLES, ANGLES, ANGLES)
CLOSE = {"rtol": 0, "atol": 1e-14}


def written_out(body: Moments, turns: list[np.ndarray], shifts: list[np.ndarray]) -> Moments:
    """The sum of copies, each placed and added on its own."""
    total = Moments.nothing()
    for turn, shift in zip(turns, shifts, strict=True):
        total = total + Moments(body.mass, turn @ body.centre + shift, turn @ body.spread @ turn.T)
    return total


def test_a_quarter_turn_about_z_carries_x_to_y():
    np.testing.assert_allclose(turn_about([0, 0, 2], np.pi / 2) @ [1, 0, 0], [0, 1, 0], **CLOSE)


@given(directions, ANGLES)
def test_a_turn_about_an_axis_is_the_rotation_vector(direction, angle):
    expected = Rotation.from_rotvec(angle * direction / np.linalg.norm(direction)).as_matrix()
    np.testing.assert_allclose(turn_about(direction, angle), expected, **CLOSE)


@given(TURNS)
def test_turns_go_about_the_fixed_axes_x_then_y_then_z(turns):
    np.testing.assert_allclose(matrix_of_turns(turns), Rotation.from_euler("xyz", turns).as_matrix(), **CLOSE)


@given(TURNS)
def test_the_turns_read_from_a_matrix_make_that_matrix_again(turns):
    matrix = Rotation.from_euler("xyz", turns).as_matrix()
    np.testing.assert_allclose(matrix_of_turns(turns_of_matrix(matrix)), matrix, rtol=0, atol=5e-15)


@pytest.mark.parametrize("away", [0.0, 1e-13, 1e-11, 1e-9, 1e-6, 1e-3])
@pytest.mark.parametrize("side", [-1, 1])
@given(ANGLES, ANGLES)
def test_turns_are_read_back_at_and_near_the_upright_position(side, away, about_x, about_z):
    matrix = matrix_of_turns((about_x, side * (np.pi / 2 - away), about_z))
    np.testing.assert_allclose(matrix_of_turns(turns_of_matrix(matrix)), matrix, rtol=0, atol=2e-12)


def test_in_the_upright_position_the_turn_about_x_is_read_as_none():
    about_x, about_y, about_z = turns_of_matrix(matrix_of_turns((0.25, np.pi / 2, 1.0)))
    assert (about_x, about_y) == (0.0, pytest.approx(np.pi / 2, rel=1e-15))
    assert about_z == pytest.approx(0.75, rel=1e-14)


@example(np.array([0.0, 0.0, 1.0]), 5e-157)
@given(directions, st.one_of(ANGLES, st.sampled_from([0.0, 1e-12, 1e-9, 1e-6, 1.0]).map(lambda gap: np.pi - gap)))
def test_axis_and_angle_are_those_of_the_rotation_vector(direction, angle):
    matrix = Rotation.from_rotvec(angle * direction / np.linalg.norm(direction)).as_matrix()
    axis, found = axis_and_angle_of(matrix)
    assert 0 <= found <= np.pi
    assert np.linalg.norm(axis) == pytest.approx(1, abs=1e-15)
    np.testing.assert_allclose(Rotation.from_rotvec(found * axis).as_matrix(), matrix, rtol=0, atol=2e-15)


@pytest.mark.parametrize("angle", [1e-15, 1e-12, 1e-9, 1e-6, 1e-3])
def test_a_tiny_angle_is_read_to_its_last_digits(angle):
    axis, found = axis_and_angle_of(turn_about([3, 0, -4], angle))
    assert found == pytest.approx(angle, rel=1e-15)
    np.testing.assert_allclose(axis, [0.6, 0, -0.8], **CLOSE)


@pytest.mark.parametrize("gap", [1e-12, 1e-9, 1e-6])
def test_an_angle_just_short_of_half_a_turn_keeps_its_gap(gap):
    axis, found = axis_and_angle_of(turn_about([-1, 2, 2], np.pi - gap))
    assert np.pi - found == pytest.approx(gap, abs=2e-15)
    np.testing.assert_allclose(axis, [-1 / 3, 2 / 3, 2 / 3], rtol=0, atol=1e-14)


@pytest.mark.parametrize("direction", [(1, 0, 0), (0, -1, 0), (0, 0, -5), (1, -1, 0), (-1, -2, -2), (0, 3, -4)])
def test_of_half_a_turn_the_axis_has_its_largest_component_positive(direction):
    unit = np.array(direction) / np.linalg.norm(direction)
    axis, angle = axis_and_angle_of(2 * np.outer(unit, unit) - np.eye(3))
    assert angle == pytest.approx(np.pi, rel=1e-15)
    assert axis[np.abs(axis).argmax()] > 0
    np.testing.assert_allclose(np.outer(axis, axis), np.outer(unit, unit), **CLOSE)


def test_no_turn_is_about_z():
    axis, angle = axis_and_angle_of(np.eye(3))
    assert (axis.tolist(), angle) == ([0, 0, 1], 0)


@given(directions, directions)
def test_the_smallest_turn_carries_one_direction_to_another_and_turns_no_further_than_between_them(one, other):
    turn = smallest_turn(one, other)
    units = [vector / np.linalg.norm(vector) for vector in (one, other)]
    np.testing.assert_allclose(turn @ units[0], units[1], rtol=0, atol=5e-15)
    between = np.arctan2(np.linalg.norm(np.cross(*units)), units[0] @ units[1])
    assert Rotation.from_matrix(turn).magnitude() == pytest.approx(between, abs=5e-15)
    assert np.linalg.det(turn) == pytest.approx(1, rel=1e-14)


@given(directions)
def test_the_smallest_turn_to_the_opposite_direction_is_half_a_turn(direction):
    turn = smallest_turn(direction, -3 * direction)
    np.testing.assert_allclose(turn @ direction, -direction, **CLOSE)
    assert Rotation.from_matrix(turn).magnitude() == pytest.approx(np.pi, rel=1e-14)


def test_a_direction_needs_no_turn_to_itself():
    np.testing.assert_array_equal(smallest_turn([1, 2, 3], [2, 4, 6]), np.eye(3))


@given(points, directions, ANGLES, points)
def test_a_turn_about_an_axis_in_space_leaves_the_axis_and_turns_the_rest(point, direction, angle, other):
    about = Placement.about(point, direction, angle)
    np.testing.assert_allclose(about.apply(point + 3 * direction), point + 3 * direction, **CLOSE)
    turned = Rotation.from_rotvec(angle * direction / np.linalg.norm(direction)).apply(other - point) + point
    np.testing.assert_allclose(about.apply(other), turned, **CLOSE)


@given(placements())
def test_a_pose_read_from_a_placement_stands_as_that_does(placement):
    read = Pose.of(placement).placement
    np.testing.assert_allclose(read.turn, placement.turn, rtol=0, atol=2e-12)
    np.testing.assert_allclose(read.shift, placement.shift, rtol=0, atol=1e-12)


def test_a_pose_leaves_out_round_off():
    pose = Pose.of(Placement(turn_about([0, 0, 1], np.pi / 2), [0.3, 1e-17, 0.0]))
    assert pose == Pose((0.3, 0.0, 0.0), (0.0, 0.0, np.pi / 2))


@given(placements(), placements(), points)
def test_a_product_of_placements_does_the_inner_one_first(outer, inner, point):
    np.testing.assert_allclose((outer @ inner).apply(point), outer.apply(inner.apply(point)), **CLOSE)


@given(st.one_of(placements(), mirrored_placements()), points)
def test_the_inverse_carries_every_point_back(placement, point):
    np.testing.assert_allclose(placement.inverse().apply(placement.apply(point)), point, rtol=0, atol=1e-14)
    np.testing.assert_allclose((placement @ placement.inverse()).matrix, np.eye(4), rtol=0, atol=1e-14)


@given(placements(), points)
def test_the_homogeneous_matrix_carries_points_as_the_placement_does(placement, point):
    np.testing.assert_allclose((placement.matrix @ [*point, 1.0])[:3], placement.apply(point), **CLOSE)


@given(placements(), points, points)
def test_a_direction_is_turned_like_the_difference_of_two_points(placement, start, end):
    difference = placement.apply(end) - placement.apply(start)
    np.testing.assert_allclose(placement.turn_only(end - start), difference, **CLOSE)


@given(placements(), mirrored_placements())
def test_only_a_placement_that_turns_left_into_right_mirrors(rigid, mirrored):
    assert not rigid.mirrors
    assert mirrored.mirrors
    assert not (mirrored @ mirrored).mirrors


@given(realisable_moments(), placements())
def test_a_placed_body_moves_and_moves_back(body, placement):
    there_and_back = placement.inverse().place(placement.place(body))
    assert_same_body(there_and_back, body, rel=1e-13, size=4.0)


def test_a_pose_turns_first_and_shifts_then():
    pose = Pose(position=(1.0, 2.0, 3.0), turns=(0.0, 0.0, np.pi / 2))
    np.testing.assert_allclose(pose.placement.apply([1, 0, 0]), [1, 3, 3], **CLOSE)
    np.testing.assert_array_equal(Pose().placement.matrix, np.eye(4))


@given(realisable_moments(), placements(), st.tuples(directions, points), st.integers(1, 9), ANGLES)
def test_a_full_ring_is_the_sum_of_its_copies_written_out(body, first, axis, count, start):
    direction, point = axis
    ring = Ring(count, tuple(point), tuple(direction), start)
    unit = direction / np.linalg.norm(direction)
    turns = [Rotation.from_rotvec((start + 2 * np.pi * k / count) * unit).as_matrix() for k in range(count)]
    shifts = [point + turn @ (first.shift - point) for turn in turns]
    expected = written_out(body, [turn @ first.turn for turn in turns], shifts)
    assert_same_body(ring.placements(first).place(body).total(), expected, rel=1e-13, size=4.0)


@given(realisable_moments(), placements(), st.integers(2, 9), st.floats(0.1, 5.0))
def test_a_part_ring_has_a_copy_at_both_of_its_ends(body, first, count, span):
    ring = Ring(count, span=span)
    turns = [Rotation.from_rotvec([0, 0, angle]).as_matrix() for angle in np.linspace(0, span, count)]
    expected = written_out(
        body, [turn @ first.turn for turn in turns], [turn @ first.shift for turn in turns]
    )
    assert_same_body(ring.placements(first).place(body).total(), expected, rel=1e-13, size=4.0)


@given(realisable_moments(), placements(), st.integers(1, 9))
def test_copies_that_do_not_turn_with_the_ring_keep_the_first_orientation(body, first, count):
    turns = [Rotation.from_rotvec([0, 0, 2 * np.pi * k / count]).as_matrix() for k in range(count)]
    expected = written_out(body, [first.turn] * count, [turn @ first.shift for turn in turns])
    ring = Ring(count, turning=False)
    assert_same_body(ring.placements(first).place(body).total(), expected, rel=1e-13, size=4.0)


@given(realisable_moments(), placements(), st.integers(1, 9), points)
def test_a_row_is_the_sum_of_its_copies_written_out(body, first, count, step):
    shifts = [first.shift + k * step for k in range(count)]
    expected = written_out(body, [first.turn] * count, shifts)
    row = Row(count, tuple(step))
    assert_same_body(row.placements(first).place(body).total(), expected, rel=1e-13, size=10.0)


@given(realisable_moments(), placements(), st.integers(1, 9))
def test_several_at_one_place_are_the_body_times_their_number(body, first, count):
    total = Several(count).placements(first).place(body).total()
    assert_same_body(total, first.place(body).times(count), rel=1e-13, size=3.0)


@given(realisable_moments(), placements(), points, directions)
def test_a_mirrored_pair_balances_about_its_plane(body, first, point, normal):
    pair = Mirrored(tuple(point), tuple(normal))
    copies = pair.placements(first).place(body)
    unit = normal / np.linalg.norm(normal)
    np.testing.assert_allclose((copies.centre - point) @ unit @ [1, 1], 0, atol=1e-13)
    total = copies.total()
    # The mirror plane's normal is a principal axis of the pair.
    across = total.spread @ unit - (unit @ total.spread @ unit) * unit
    np.testing.assert_allclose(across, 0, atol=1e-13 * float(total.mass) * 16)
    np.testing.assert_allclose(
        np.linalg.eigvalsh(copies.spread[1]),
        np.linalg.eigvalsh(copies.spread[0]),
        atol=1e-13 * float(body.mass),
    )


def test_a_mirrored_pair_counts_two():
    assert Mirrored().count == len(Mirrored().placements(Placement.identity()).shift) == 2


@pytest.mark.parametrize("copies", [Several, Ring, Row])
@pytest.mark.parametrize("count", [0, -1, MOST_COPIES + 1, 2.5])
def test_a_quantity_that_nobody_means_is_refused_with_its_limits(copies, count):
    with pytest.raises(ValueRefused) as refusal:
        copies(count)
    assert str(refusal.value) == (
        f"a quantity lies between 1 and 100000; read {count}. Give a whole number of equal parts."
    )


@pytest.mark.parametrize("make", [lambda: Ring(direction=(0, 0, 0)), lambda: Mirrored(normal=(0, 0, 0))])
def test_a_ring_or_mirror_without_a_direction_is_refused(make):
    with pytest.raises(
        ValueRefused, match=r"^a direction needs a length; read .*\. Give three numbers that are not all"
    ):
        make()


def test_placements_cannot_be_changed_in_place():
    placement = Placement.identity()
    with pytest.raises(ValueError, match="read-only"):
        placement.shift[0] = 1.0
