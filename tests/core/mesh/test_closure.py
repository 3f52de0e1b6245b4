"""Closed as a sum: the hashed edges cancel if and only if every directed edge meets its reverse."""

from collections import Counter

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from mesh_files import box, hull, quartered, ring_grid

from core.mesh.closure import EdgeSum

RNG = np.random.default_rng(20260)


def edge_sum(triangles: np.ndarray, most: int = 50) -> int:
    triangles = np.asarray(triangles)
    edges = EdgeSum(most, words=triangles.dtype.itemsize // 4)
    chunks = (triangles[start : start + most] for start in range(0, len(triangles), most))
    return sum(edges.of(np.ascontiguousarray(part.reshape(len(part), 9).T) + triangles.dtype.type(0)) for part in chunks) % 2**64


def unmatched(triangles: np.ndarray) -> int:
    """Count directed edges without their reverse, edge by edge: the definition, in Python."""
    balance: Counter[tuple] = Counter()
    for corners in (triangles + 0.0).tolist():
        a, b, c = map(tuple, corners)
        for start, stop in ((a, b), (b, c), (c, a)):
            if start != stop:
                balance[(start, stop)] += 1
                balance[(stop, start)] -= 1
    return sum(count for count in balance.values() if count > 0)


def both_precisions(triangles):
    return [np.asarray(triangles, dtype=np.float32), np.asarray(triangles, dtype=np.float64)]


@pytest.mark.parametrize("triangles", both_precisions(quartered(box(4, 3, 2), 3)) + both_precisions(ring_grid(40, 24)))
def test_a_closed_mesh_sums_to_nothing_in_any_order_of_facets_and_corners(triangles):
    assert edge_sum(triangles) == 0
    mixed = RNG.permutation(triangles)
    mixed[::2] = np.roll(mixed[::2], 1, axis=1)
    assert edge_sum(mixed) == 0
    assert edge_sum(mixed[:, ::-1]) == 0


@pytest.mark.parametrize("triangles", both_precisions(quartered(box(4, 3, 2), 2)))
def test_any_one_facet_missing_flipped_or_doubled_shows(triangles):
    for facet in range(len(triangles)):
        assert edge_sum(np.delete(triangles, facet, axis=0)) != 0
        flipped = triangles.copy()
        flipped[facet] = flipped[facet, ::-1]
        assert edge_sum(flipped) != 0
        assert edge_sum(np.concatenate([triangles, triangles[facet : facet + 1]])) != 0


def test_an_edge_shared_by_four_facets_that_balance_is_closed():
    two = np.concatenate([box(), box(at=(1, 1, 0))])
    assert edge_sum(two) == 0


def test_a_mesh_with_every_facet_twice_is_closed():
    assert edge_sum(np.concatenate([box(), box()])) == 0


def test_facets_without_area_cancel():
    needle = [[[0, 0, 0], [1, 0, 0], [0, 0, 0]], [[5, 5, 5], [5, 5, 5], [5, 5, 5]]]
    assert edge_sum(np.concatenate([box(), needle])) == 0


def test_a_sliver_that_fills_a_t_junction_closes_it():
    left = [[[0, 0, 0], [0, 2, 0], [-1, 1, 0]]]
    right = [[[0, 1, 0], [0, 0, 0], [1, 1, 0]], [[0, 2, 0], [0, 1, 0], [1, 1, 0]]]
    back = [[[-1, 1, 0], [0, 2, 0], [1, 1, 0]], [[-1, 1, 0], [1, 1, 0], [0, 0, 0]]]
    leaking = np.array(left + right + back, dtype=float)
    sliver = np.array([[[0, 0, 0], [0, 1, 0], [0, 2, 0]]], dtype=float)
    assert edge_sum(leaking) != 0
    assert edge_sum(np.concatenate([leaking, sliver])) == 0


@pytest.mark.parametrize("precision", [np.float32, np.float64])
def test_minus_zero_is_the_same_vertex_as_zero(precision):
    triangles = box().astype(precision)
    signed = triangles.copy()
    signed[::2][signed[::2] == 0] = -0.0
    assert np.signbit(signed).any()
    assert edge_sum(signed) == edge_sum(triangles) == 0


@pytest.mark.parametrize("precision", [np.float32, np.float64])
def test_a_coordinate_off_by_its_last_bit_shows(precision):
    triangles = quartered(box(4, 3, 2)).astype(precision)
    for corner in range(3):
        for axis in range(3):
            moved = triangles.copy()
            moved[7, corner, axis] = np.nextafter(moved[7, corner, axis], precision(9))
            assert edge_sum(moved) != 0


def test_hashes_of_a_million_round_coordinates_are_all_different():
    steps = np.arange(100, dtype=np.float32)
    grid = np.stack(np.meshgrid(steps, steps / 8, steps * 4, indexing="ij"), axis=-1).reshape(-1, 3)[:999_999]
    hashes = EdgeSum(333_333).vertex_hashes(np.ascontiguousarray(grid.reshape(-1, 9).T))
    assert len(np.unique(hashes)) == 999_999


@given(st.lists(st.tuples(*[st.integers(0, 5)] * 3), min_size=1, max_size=30), st.booleans())
def test_the_sum_is_nothing_exactly_where_counting_every_edge_finds_none_unmatched(facets, closing):
    places = np.array([[0, 0, 0], [1, 0, 0], [0, 2, 0], [0, 0, 4], [0.5, 0.5, 0.5], [-1, 8, 16]])
    triangles = places[np.array(facets)]
    if closing:
        triangles = np.concatenate([triangles, triangles[:, ::-1]])
    assert (edge_sum(triangles) == 0) == (unmatched(triangles) == 0)
    assert edge_sum(triangles.astype(np.float32)) == 0 or unmatched(triangles) > 0


def test_the_hull_of_random_points_is_closed_and_leaks_without_a_facet():
    triangles = hull(RNG.normal(size=(200, 3)))
    assert edge_sum(triangles) == 0
    assert unmatched(triangles) == 0
    assert edge_sum(triangles[1:]) != 0
    assert unmatched(triangles[1:]) == 3
