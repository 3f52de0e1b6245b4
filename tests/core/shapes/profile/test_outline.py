"""What an outline is, and the sentence for each one that bounds no area."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from strategies import outlines

from core.errors import ShapeError
from core.shapes import Outline, OutlinePoint
from core.shapes.profile import MOST_POINTS, circle_loop, rectangle_loop

SQUARE = ((0, 0), (0.1, 0), (0.1, 0.1), (0, 0.1))

REFUSED = [
    (
        [((0, 0), (0.1, 0.1), (0.1, 0), (0, 0.1))],
        ("outline: the outer line crosses or touches itself at (50, 50) mm: the edge from point 1 to 2 meets the edge "
        "from point 3 to 4. Put the points into the order in which the line runs, and move it apart there."),
    ),
    (
        [((0, 0), (0.1, 0, 0, -0.06), (0.1, 0.1), (0.08, 0.1), (0.08, 0.01))],
        ("outline: the outer line crosses or touches itself at (80, 77.8071) mm: the edge from point 2 to 3 meets the "
        "edge from point 4 to 5. Put the points into the order in which the line runs, and move it apart there."),
    ),
    (
        [((0, 0), (0.1, 0), (0.2, 0))],
        ("outline: the outer line encloses no area; read 3 points from (0, 0) mm. "
        "Give points that do not lie on one line."),
    ),
    (
        [((0, 0), (0.1, 0))],
        ("outline: the outer line has too few points to go round anything; read 2. "
        "Give three points at least, or two with an arc between them."),
    ),
    ([()], "outline: an outline needs points. Give three points at least."),
    (
        [SQUARE, ()],
        ("outline: hole 1 has too few points to go round anything; read 0. "
        "Give three points at least, or two with an arc between them."),
    ),
    (
        [((0, 0), (0.1, 0), (0.1, 0), (0, 0.1))],
        "outline: point 2 at (100, 0) mm lies where point 3 lies. Leave one of them out.",
    ),
    (
        [((0, 0), (0.1, 0), (0, 0.1), (0, 0))],
        "outline: point 4 at (0, 0) mm lies where point 1 lies. Leave one of them out.",
    ),
    (
        [((0, 0, 0, 0.03), (0.1, 0), (0, 0.1))],
        ("outline: point 1 at (0, 0) mm has an arc of radius 30 mm to the next point, and that is 100 mm away. "
        "Give a radius of 50 mm or more."),
    ),
    (
        [((0, 0, 0.06), (0.1, 0, 0.06), (0.1, 0.1), (0, 0.1))],
        ("outline: point 1 at (0, 0) mm and point 2 are 100 mm apart, and their roundings 60 mm and 60 mm do not fit "
        "between them. Make a rounding smaller."),
    ),
    (
        [SQUARE, ((0.02, 0.02, -0.001), (0.04, 0.02), (0.04, 0.04))],
        ("outline: point 1 of hole 1 at (20, 20) mm has a rounding of -1 mm. "
        "Give a radius of 0 or more for the corner."),
    ),
    (
        [((0, 0), (0.1, 0, 0, 0.2), (0.1, 0.1, 0.01), (0, 0.1))],
        ("outline: point 3 at (100, 100) mm is rounded, and an arc begins or ends there. Round corners between "
        "straight edges only, or give the points where the rounding begins and ends."),
    ),
    (
        [((0, 0), (0.1, 0), (0.1, np.inf))],
        "outline: point 3 at (100, inf) mm has a number that is not finite. Give ordinary numbers.",
    ),
    (
        [SQUARE, circle_loop(0.02, 0.2, 0.2)],
        ("outline: hole 1 lies outside the outer line, from (210, 200) mm. "
        "Give the outer line first, and holes that lie inside it, clear of it."),
    ),
    (
        [SQUARE, ((0.05, 0.05), (0.2, 0.05), (0.05, 0.06))],
        ("outline: hole 1 crosses or touches the outer line at (100, 50) mm. "
        "Give the outer line first, and holes that lie inside it, clear of it."),
    ),
    (
        [SQUARE, ((-0.01, -0.01), (0.3, -0.01), (0.3, 0.3), (-0.01, 0.3))],
        ("outline: hole 1 goes round the outer line, from (-10, -10) mm. "
        "Give the outer line first, and holes that lie inside it, clear of it."),
    ),
    (
        [SQUARE, ((0.01, 0.01), (0.03, 0.01), (0.03, 0.03)), ((0.02, 0.015), (0.05, 0.015), (0.05, 0.02))],
        "outline: hole 1 and hole 2 meet at (30, 15) mm. Move them apart, or draw them as one hole.",
    ),
    (
        [((0, 0), (1,), (0, 1))],
        ("outline: a point of an outline is two to four numbers: x, y, rounding, arc. "
        "Give x and y, and the two radii where there are any."),
    ),
]


@pytest.mark.parametrize(("loops", "sentence"), REFUSED)
def test_a_refusal_names_the_point_its_place_and_the_remedy(loops, sentence):
    with pytest.raises(ShapeError) as refusal:
        Outline(tuple(loops))
    assert str(refusal.value) == sentence


def test_too_many_points_are_refused_before_anything_is_done_with_them():
    with pytest.raises(ShapeError, match=f"at most {MOST_POINTS} points in 1000 loops; read 10001 points in 1 loops"):
        Outline.of([(k * 1e-3, 0.0) for k in range(MOST_POINTS + 1)])


def test_a_hole_inside_a_hole_is_refused():
    with pytest.raises(ShapeError, match="hole 1 and hole 2 meet"):
        Outline.of(SQUARE, circle_loop(0.06, 0.05, 0.05), circle_loop(0.02, 0.05, 0.05))


def test_arcs_that_bulge_into_each_other_are_found_though_their_chords_do_not_cross():
    beside = [(0, 0, 0, -0.03), (0.05, 0), (0.05, 0.02, 0, -0.03), (0, 0.02)]
    with pytest.raises(ShapeError, match="crosses or touches itself"):
        Outline.of(beside)


def test_concentric_arcs_a_hundredth_of_a_percent_apart_are_a_wall():
    thin = Outline.of(circle_loop(0.1), circle_loop(0.09999))
    assert float(thin.plane.area) == pytest.approx(np.pi / 4 * (0.1**2 - 0.09999**2), rel=1e-11)


def test_equal_outlines_are_equal_and_hash_alike():
    one, other = Outline.of(SQUARE), Outline.of([list(point) for point in SQUARE])
    assert one == other
    assert hash(one) == hash(other)
    assert one != Outline.of(SQUARE[:3])


def test_numbers_of_any_kind_become_plain_floats():
    outline = Outline((np.array(SQUARE),))
    assert all(type(value) is float for point in outline.loops[0] for value in point)
    assert outline.loops[0][1] == OutlinePoint(0.1, 0.0, 0.0, 0.0)


@settings(max_examples=50)
@given(outlines())
def test_the_edges_close_and_run_left_outside_and_right_inside(outline):
    for number, edges in enumerate(outline.edges):
        np.testing.assert_array_equal(edges.end, np.roll(edges.start, -1, axis=0))
        x, y = edges.line(96).T
        area = 0.5 * np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y)
        assert (area > 0) == (number == 0)


@settings(max_examples=50)
@given(outlines())
def test_the_length_is_that_of_a_fine_polygon(outline):
    fine = sum(np.hypot(*(np.roll(line, -1, axis=0) - line).T).sum() for line in outline.lines(4800))
    assert outline.length == pytest.approx(float(fine), rel=1e-6)


@settings(max_examples=50)
@given(outlines())
def test_the_lowest_x_of_an_edge_is_that_of_its_fine_points(outline):
    for edges in outline.edges:
        shares = np.linspace(0, 1, 2001)
        for k, lowest in enumerate(edges.lowest_x()):
            fine = edges.points_at(np.full(2001, k), shares)[:, 0].min()
            assert lowest <= fine + 1e-15 * outline.size
            assert lowest == pytest.approx(fine, abs=1e-6 * outline.size)


def test_a_rounded_corner_touches_both_edges_at_its_radius():
    outline = Outline.of(rectangle_loop(0.08, 0.05, rounding=0.008))
    (edges,) = outline.edges
    arcs = edges.bulge != 0
    assert arcs.sum() == 4
    middle = edges.points_at(np.flatnonzero(arcs), np.full(4, 0.5))
    inner = np.array([[0.008, 0.008], [0.072, 0.008], [0.072, 0.042], [0.008, 0.042]])
    np.testing.assert_allclose(np.hypot(*(middle - inner).T), 0.008, rtol=1e-13)
    assert outline.length == pytest.approx(2 * (0.064 + 0.034) + 2 * np.pi * 0.008, rel=1e-14)
