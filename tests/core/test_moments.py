"""The algebra of Moments against sums over point masses written out element by element."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from oracles import assert_same_body, points_like, tensor_of_points
from strategies import boxes, directions, mirrored_placements, placements, points, realisable_moments

from core.errors import ValueRefused
from core.moments import Moments, inertia_of_spread, principal_axes, spread_of_inertia, unit_vector
from core.placement import Placement, turn_about

# Every drawn body lies within about 2 m of the origin, so moment differences are judged against mass × (2 m)².
SIZE = 2.0
ORIGIN = np.zeros(3)


def scale(body: Moments) -> float:
    return float(body.mass) * SIZE**2


@given(realisable_moments(), points)
def test_the_inertia_tensor_about_a_point_is_that_of_equivalent_point_masses(body, point):
    expected = tensor_of_points(*points_like(body), point)
    np.testing.assert_allclose(
        body.inertia_about_point(point), expected, rtol=0, atol=1e-13 * 4 * scale(body)
    )


@given(realisable_moments(), points)
def test_the_inertia_tensor_about_every_point_is_symmetric(body, point):
    tensor = body.inertia_about_point(point)
    np.testing.assert_allclose(tensor, tensor.T, rtol=0, atol=1e-15 * 4 * scale(body))


@given(realisable_moments(), points)
def test_no_principal_moment_about_any_point_is_more_than_the_sum_of_the_others(body, point):
    low, middle, high = np.linalg.eigvalsh(body.inertia_about_point(point))
    assert high <= low + middle + 1e-13 * scale(body)


@given(realisable_moments(), points, directions)
def test_inertia_about_an_axis_is_the_sum_of_mass_times_distance_squared(body, point, direction):
    masses, places = points_like(body)
    unit = direction / np.linalg.norm(direction)
    distances = np.linalg.norm(np.cross(places - point, unit), axis=1)
    expected = float(masses @ distances**2)
    assert body.inertia_about_axis(point, direction) == pytest.approx(expected, abs=1e-13 * 4 * scale(body))
    assert body.inertia_about_axis(point, 7.5 * direction) == pytest.approx(
        expected, abs=1e-13 * 4 * scale(body)
    )


@given(realisable_moments(), points, directions)
def test_own_inertia_and_transfer_term_add_up_to_the_inertia_about_the_axis(body, point, direction):
    unit = direction / np.linalg.norm(direction)
    whole = unit @ body.inertia_about_point(point) @ unit
    parts = body.own_inertia_along(direction) + body.transfer_to_axis(point, direction)
    assert parts == pytest.approx(whole, abs=1e-13 * 4 * scale(body))
    assert body.transfer_to_axis(point, direction) >= 0
    arm = body.offset_from_axis(point, direction)
    assert body.transfer_to_axis(point, direction) == pytest.approx(float(body.mass) * arm**2, rel=1e-14)


@given(realisable_moments(), points)
def test_the_parallel_axis_theorem_leads_there_and_back(body, point):
    back = Moments.from_inertia_about_point(body.mass, body.centre, point, body.inertia_about_point(point))
    assert_same_body(back, body, rel=1e-14, size=4.0)


@given(realisable_moments())
def test_second_moment_and_inertia_tensor_say_the_same(body):
    again = spread_of_inertia(inertia_of_spread(body.spread))
    np.testing.assert_allclose(again, body.spread, rtol=0, atol=1e-15 * scale(body))
    assert_same_body(
        Moments.from_inertia(body.mass, body.centre, body.inertia_about_centre), body, rel=1e-15, size=SIZE
    )


@given(realisable_moments(), st.one_of(placements(), mirrored_placements()))
def test_neither_a_turn_nor_a_mirror_changes_the_principal_moments(body, placement):
    moved = body.mapped(placement.turn, placement.shift)
    before, after = np.linalg.eigvalsh(body.spread), np.linalg.eigvalsh(moved.spread)
    np.testing.assert_allclose(after, before, rtol=0, atol=1e-14 * scale(body))


@given(realisable_moments(), st.one_of(placements(), mirrored_placements()), points, directions)
def test_an_axis_that_moves_with_the_body_keeps_its_inertia(body, placement, point, direction):
    moved = body.mapped(placement.turn, placement.shift)
    about_moved_axis = moved.inertia_about_axis(placement.apply(point), placement.turn_only(direction))
    assert about_moved_axis == pytest.approx(
        body.inertia_about_axis(point, direction), abs=1e-13 * 4 * scale(body)
    )


@given(realisable_moments(), placements())
def test_a_body_moved_and_moved_back_is_as_it_was(body, placement):
    moved = body.mapped(placement.turn, placement.shift)
    back = moved.mapped(placement.turn.T, -placement.turn.T @ placement.shift)
    assert_same_body(back, body, rel=1e-14, size=2 * SIZE)


@given(realisable_moments(), realisable_moments())
def test_the_order_of_adding_does_not_matter(one, other):
    assert_same_body(one + other, other + one, rel=1e-14, size=SIZE)


@given(realisable_moments(), realisable_moments(), realisable_moments())
def test_the_grouping_of_adding_does_not_matter(one, two, three):
    assert_same_body((one + two) + three, one + (two + three), rel=1e-14, size=2 * SIZE)


@given(realisable_moments(), realisable_moments(), points)
def test_inertia_about_one_point_adds_up(one, other, point):
    together = (one + other).inertia_about_point(point)
    apart = one.inertia_about_point(point) + other.inertia_about_point(point)
    np.testing.assert_allclose(together, apart, rtol=0, atol=1e-13 * (scale(one) + scale(other)))


@given(realisable_moments(), realisable_moments())
def test_what_is_added_can_be_cut_out_again(body, piece):
    left = (body + piece) - piece
    # The piece may be a million times heavier: what is left can be no better than the sum's own round-off.
    share = float((body.mass + piece.mass) / body.mass)
    assert_same_body(left, body, rel=1e-14 * share, size=SIZE)


@given(realisable_moments())
def test_adding_nothing_changes_nothing(body):
    assert_same_body(body + Moments.nothing(), body, rel=1e-14, size=SIZE)


@given(boxes, boxes, placements())
def test_far_from_the_origin_a_sum_keeps_its_own_inertia(one, other, placement):
    far = np.array([3e5, -1e5, 2e5])
    near = one.moments() + placement.place(other.moments())
    moved = one.moments().mapped(np.eye(3), far) + placement.place(other.moments()).mapped(np.eye(3), far)
    # Coordinates of 3e5 m carry 6e-11 m of round-off; the second moment feels it once per lever.
    np.testing.assert_allclose(moved.spread, near.spread, rtol=0, atol=2e-10 * float(near.mass) * SIZE)
    np.testing.assert_allclose(moved.centre, near.centre + far, rtol=0, atol=2e-10)


@given(st.lists(realisable_moments(), min_size=1, max_size=5), points, directions)
def test_a_batch_gives_what_a_loop_gives(bodies, point, direction):
    batch = Moments(
        [body.mass for body in bodies], [body.centre for body in bodies], [body.spread for body in bodies]
    )
    turn = turn_about(direction, 0.7)
    summed = Moments.nothing()
    for body in bodies:
        summed = summed + body
    assert_same_body(batch.total(), summed, rel=1e-13, size=2 * SIZE)
    for k, body in enumerate(bodies):
        np.testing.assert_array_equal(batch.inertia_about_centre[k], body.inertia_about_centre)
        np.testing.assert_allclose(
            batch.inertia_about_axis(point, direction)[k],
            body.inertia_about_axis(point, direction),
            rtol=1e-14,
        )
        np.testing.assert_allclose(
            batch.mapped(turn, point).spread[k], body.mapped(turn, point).spread, atol=1e-15 * scale(body)
        )
        np.testing.assert_array_equal(batch.radii_of_gyration[k], body.radii_of_gyration)


def test_one_body_at_many_places_is_added_as_often():
    places = np.array([[0.1, 0, 0], [-0.1, 0, 0], [0, 0.2, 0]])
    copies = Moments(2.0, ORIGIN, np.zeros((3, 3))).mapped(np.eye(3), places)
    total = copies.total()
    assert total.mass == 6.0
    np.testing.assert_allclose(
        total.inertia_about_point(ORIGIN), tensor_of_points([2.0] * 3, places, ORIGIN), atol=1e-16
    )


def test_the_total_of_no_bodies_is_nothing():
    total = Moments(np.zeros(0), np.zeros((0, 3)), np.zeros((0, 3, 3))).total()
    assert_same_body(
        total + Moments.of_points([1.0], [[1, 2, 3]]), Moments.of_points([1.0], [[1, 2, 3]]), rel=0
    )


def test_masses_that_cancel_leave_the_second_moment_about_the_mean_of_their_centres():
    couple = Moments.of_points([1.0, -1.0], [[0.5, 0, 0], [0.1, 0, 0]])
    assert couple.mass == 0
    np.testing.assert_allclose(couple.centre, [0.3, 0, 0], rtol=1e-15)


@given(realisable_moments(), st.floats(1e-3, 1e3))
def test_weighing_a_body_scales_its_tensor_and_leaves_its_centre(body, mass):
    weighed = body.with_mass(mass)
    assert weighed.mass == pytest.approx(mass, rel=1e-15)
    np.testing.assert_array_equal(weighed.centre, body.centre)
    np.testing.assert_allclose(weighed.radii_of_gyration, body.radii_of_gyration, rtol=1e-14, atol=1e-9)


@given(boxes)
def test_inches_read_as_millimetres_are_off_by_their_ratio_to_the_fifth(box):
    in_mm = box.moments()
    in_inches = type(box)(*(25.4 * value for value in box.values().values())).moments()
    assert_same_body(in_mm.enlarged(25.4), in_inches, rel=1e-14)
    assert np.trace(in_inches.spread) / np.trace(in_mm.spread) == pytest.approx(25.4**5, rel=1e-13)


def test_a_thin_ring_has_its_radius_as_radius_of_gyration():
    angles = 2 * np.pi * np.arange(12) / 12
    ring = Moments.of_points(
        np.full(12, 0.25), 0.3 * np.stack([np.cos(angles), np.sin(angles), 0 * angles], axis=1)
    )
    np.testing.assert_allclose(ring.radii_of_gyration, [0.3 / 2**0.5, 0.3 / 2**0.5, 0.3], rtol=1e-15)


def test_a_body_without_mass_has_no_radius_of_gyration():
    assert np.isnan(Moments.nothing().radii_of_gyration).all()


@given(realisable_moments())
def test_principal_axes_are_right_handed_ascending_and_diagonalise_the_tensor(body):
    principal = body.principal
    assert np.all(np.diff(principal.moments) >= 0)
    np.testing.assert_allclose(principal.axes @ principal.axes.T, np.eye(3), rtol=0, atol=1e-14)
    assert np.linalg.det(principal.axes) == pytest.approx(1, rel=1e-14)
    # Axes of a tie are exact only to the width of the tie, 1e-6 of the largest moment.
    limit = 2e-6 if principal.tie else 1e-14
    diagonal = principal.axes @ body.inertia_about_centre @ principal.axes.T
    np.testing.assert_allclose(
        diagonal, np.diag(principal.moments), rtol=0, atol=limit * principal.moments[2]
    )
    for axis in principal.axes[:2]:
        assert axis[np.abs(axis).argmax()] > 0


@pytest.mark.parametrize(
    ("moments", "tie"),
    [
        ([1.0, 2.0, 2.5], ""),
        ([1.0, 1.0 + 1e-7, 1.5], "12"),
        ([1.0, 2.0, 2.0 + 1e-7], "23"),
        ([1.0, 1.0 + 4e-7, 1.0 + 8e-7], "123"),
        ([1.0, 1.0 + 1e-5, 1.5], ""),
        ([0.0, 0.0, 0.0], "123"),
    ],
)
def test_moments_within_a_millionth_are_called_a_tie(moments, tie):
    turn = turn_about([1, 2, 3], 0.4)
    assert principal_axes(turn @ np.diag(moments) @ turn.T).tie == tie


@given(placements())
def test_the_axes_of_a_round_body_are_its_own_axis_and_two_across_it(placement):
    principal = principal_axes(placement.turn @ np.diag([1.0, 1.0, 1.5]) @ placement.turn.T)
    assert principal.tie == "12"
    assert abs(principal.axes[2] @ placement.turn[:, 2]) == pytest.approx(1, rel=1e-14)


def test_a_body_with_equal_moments_about_all_axes_keeps_the_axes_of_its_frame():
    principal = principal_axes(0.3 * np.eye(3))
    np.testing.assert_array_equal(principal.axes, np.eye(3))


@pytest.mark.parametrize("size", [1e-300, 1e-20, 1.0, 1e20, 1e300])
def test_a_direction_of_any_length_becomes_a_unit_vector(size):
    np.testing.assert_allclose(unit_vector([3 * size, 0, -4 * size]), [0.6, 0, -0.8], rtol=1e-15)


@pytest.mark.parametrize("direction", [[0, 0, 0], [np.nan, 0, 1], [np.inf, 0, 0]])
def test_a_direction_without_a_length_is_refused(direction):
    with pytest.raises(ValueRefused) as refusal:
        unit_vector(direction)
    assert str(refusal.value) == (
        f"a direction needs a length; read {[float(x) for x in direction]}. Give three numbers that are not all zero."
    )


def test_a_point_mass_quoted_about_a_point_beside_it_is_no_unsymmetric_tensor():
    mass, centre = 0.7, np.array([0.1, 0.2, 0.3])
    about_origin = tensor_of_points(np.array([mass]), centre[None], np.zeros(3))
    body = Moments.from_inertia_about_point(mass, centre, np.zeros(3), about_origin)
    np.testing.assert_allclose(body.spread, 0, rtol=0, atol=1e-15 * np.abs(about_origin).max())


def test_an_unsymmetric_tensor_is_refused():
    tensor = [[1, 0.25, 0], [0.5, 1, 0], [0, 0, 1]]
    with pytest.raises(ValueRefused) as refusal:
        Moments.from_inertia(1.0, ORIGIN, tensor)
    assert str(refusal.value) == "an inertia tensor is symmetric; read elements that differ by 0.25 kg·m²."


def test_a_centre_of_two_numbers_is_refused():
    with pytest.raises(ValueRefused) as refusal:
        Moments(1.0, [0, 0], np.zeros((3, 3)))
    assert (
        str(refusal.value)
        == "a centre needs 3 numbers and a second moment 3 × 3; read shapes (2,) and (3, 3)."
    )


def test_moments_are_read_only_and_keep_their_own_copy():
    centre = np.zeros(3)
    body = Moments(1.0, centre, np.zeros((3, 3)))
    centre[0] = 9.0
    assert body.centre[0] == 0
    for array in (body.mass, body.centre, body.spread):
        with pytest.raises(ValueError, match="read-only"):
            array[...] = 1.0


@given(realisable_moments())
def test_placing_where_it_stands_changes_no_bit(body):
    placed = Placement.identity().place(body)
    np.testing.assert_array_equal(placed.centre, body.centre)
    np.testing.assert_array_equal(placed.spread, body.spread)
