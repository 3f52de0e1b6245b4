"""Where a mesh leaks: hairline cracks, mixed winding, holes, and what closes them."""

import numpy as np
import pytest
from mesh_files import box, quartered

from core.mesh.edges import WELD, find_leaks, loops_of
from core.mesh.weld import clusters_within, weld_exactly

BOX = box(40, 30, 20)
AREA = 5200.0


def cracked(gap: float) -> np.ndarray:
    """A box cut into quarters, whose facets on the top plane stand gap higher."""
    triangles = quartered(BOX, 2)
    on_top = (triangles[..., 2] == 20).all(axis=1)
    triangles[on_top, :, 2] += gap
    return triangles


def test_weld_makes_equal_bits_one_point_and_changes_no_triangle():
    triangles = quartered(BOX, 2)
    points, corners = weld_exactly(triangles)
    # Euler: a closed surface without handles has 2 + facets/2 vertices.
    assert len(points) == 2 + len(triangles) // 2
    np.testing.assert_array_equal(points[corners], triangles)


def test_weld_takes_minus_zero_for_zero():
    triangles = BOX.copy()
    triangles[:6][triangles[:6] == 0] = -0.0
    assert len(weld_exactly(triangles)[0]) == 8


def test_clusters_split_where_points_leave_a_gap():
    points = np.array([[0, 0, 0], [0, 0, 1], [0, 5, 1], [0, 0, 2], [9, 0, 0]], dtype=float)
    groups = clusters_within(points, 1.0)
    assert len(set(groups)) == 3
    assert groups[0] == groups[1] == groups[3]


def test_clusters_that_touch_only_in_projection_are_split():
    # Along each axis alone the points are close in pairs; together none are.
    points = np.array([[0, 0, 0], [0, 1, 1], [1, 0, 1], [1, 1, 0]], dtype=float)
    assert len(set(clusters_within(points, 0.5))) == 4


def test_cracks_that_a_weld_at_a_millionth_of_the_diagonal_closes_are_hairline():
    diagonal = np.sqrt(40**2 + 30**2 + 20**2)
    leaks = find_leaks(cracked(0.9 * WELD * diagonal), AREA)
    assert leaks.verdict == "hairline cracks"
    # Each of the four sides of the top is cut in four; both lips of the crack are open.
    assert leaks.open_edges == 2 * 16
    assert leaks.gap == pytest.approx(0.9 * WELD * diagonal, rel=1e-6)


def test_wider_cracks_are_holes():
    diagonal = np.sqrt(40**2 + 30**2 + 20**2)
    assert find_leaks(cracked(1.1 * WELD * diagonal), AREA).verdict == "open"


def test_a_flipped_facet_is_mixed_winding():
    triangles = quartered(BOX)
    triangles[5] = triangles[5, ::-1]
    leaks = find_leaks(triangles, AREA)
    assert (leaks.verdict, leaks.open_edges, leaks.fill) == ("mixed winding", 6, None)


def test_a_missing_facet_leaves_three_open_edges_which_are_shown():
    triangles = quartered(BOX)
    leaks = find_leaks(triangles[1:], AREA)
    assert (leaks.verdict, leaks.open_edges) == ("open", 3)
    assert {tuple(point) for point in leaks.edges.reshape(-1, 3)} == {tuple(point) for point in triangles[0]}


def test_facets_and_fill_together_are_closed():
    triangles = quartered(BOX, 2)
    for kept in (triangles[1:], triangles[20:], np.delete(triangles, [3, 50, 51, 100], axis=0), cracked(1e-5)):
        whole = np.concatenate([kept, find_leaks(kept, AREA).fill])
        points, corners = weld_exactly(whole)
        ends = np.concatenate([corners[:, [0, 1]], corners[:, [1, 2]], corners[:, [2, 0]]])
        balance = np.zeros((len(points), len(points)), dtype=int)
        np.add.at(balance, (ends[:, 0], ends[:, 1]), 1)
        assert (balance == balance.T).all()


def test_edges_on_which_several_facets_end_cannot_be_closed():
    fin = np.array([[[0, 0, 20], [40, 0, 20], [20, -9, 30]], [[0, 0, 20], [40, 0, 20], [20, -9, 40]]], dtype=float)
    leaks = find_leaks(np.concatenate([BOX[1:], fin]), AREA)
    assert (leaks.verdict, leaks.fill) == ("open", None)
    assert leaks.reason == "open edges on which several facets end"


def test_loops_follow_the_edges_round():
    (loop,) = loops_of(np.array([[3, 5], [7, 3], [5, 7]]))
    assert sorted(zip(loop.tolist(), np.roll(loop, -1).tolist(), strict=True)) == [(3, 5), (5, 7), (7, 3)]


def test_two_holes_that_touch_at_a_corner_are_two_loops():
    ends = np.array([[0, 1], [1, 2], [2, 0], [0, 3], [3, 4], [4, 0]])
    assert sorted(sorted(loop.tolist()) for loop in loops_of(ends)) == [[0, 1, 2], [0, 3, 4]]


def test_every_edge_ends_up_in_one_loop_that_passes_no_vertex_twice():
    rng = np.random.default_rng(7)
    cycles = [rng.permutation(30)[: rng.integers(3, 9)] for _ in range(12)]
    ends = np.unique(np.concatenate([np.stack([cycle, np.roll(cycle, -1)], axis=1) for cycle in cycles]), axis=0)
    # Without doubled edges the balance may be lost; a random walk's own reverse restores it.
    ends = np.concatenate([ends, ends[:, ::-1]])
    loops = loops_of(ends)
    walked = [(a, b) for loop in loops for a, b in zip(loop.tolist(), np.roll(loop, -1).tolist(), strict=True)]
    assert sorted(walked) == sorted(map(tuple, ends.tolist()))
    assert all(len(set(loop.tolist())) == len(loop) for loop in loops)
