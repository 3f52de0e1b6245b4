"""Plane moments by independent routes: quadrature, fine polygons, and the ways in which areas move and add."""

from __future__ import annotations

from itertools import pairwise

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import dblquad
from strategies import ANGLES, COORDINATES, outlines

from core.shapes import Outline
from core.shapes.profile import circle_loop, rectangle_loop
from core.shapes.profile.edges import Edges
from core.shapes.profile.plane_moments import FLAT_BULGE, plane_moments

POWERS = [(2, 0), (1, 1), (0, 2), (3, 0), (2, 1), (1, 2), (0, 3)]


def listed(plane) -> np.ndarray:
    """The second and third moments in the order of POWERS."""
    return np.array([plane.second[0, 0], plane.second[0, 1], plane.second[1, 1], *plane.third])


def assert_same_area(got, expected, rel: float) -> None:
    area, size = float(expected.area), float(np.sqrt(np.trace(expected.second) / expected.area))
    assert float(got.area) == pytest.approx(area, rel=rel)
    np.testing.assert_allclose(got.centre, expected.centre, rtol=0, atol=rel * size)
    np.testing.assert_allclose(got.second, expected.second, rtol=0, atol=rel * area * size**2)
    np.testing.assert_allclose(got.third, expected.third, rtol=0, atol=rel * area * size**3)


def fine_polygon(outline: Outline, steps: int):
    return plane_moments([Edges(line, np.roll(line, -1, axis=0), np.zeros(len(line))) for line in outline.lines(steps)])


@pytest.mark.parametrize("bulge", [1e-9, 1e-4, 0.05, 0.39, 0.3999999, 0.4, 0.41, np.tan(np.pi / 8), 0.7, 1.0])
def test_a_segment_of_a_circle_has_the_moments_of_its_slices(bulge):
    # A chord from (−1, 0) to (1, 0) with the arc below it: its height at v follows from the circle's equation.
    plane = plane_moments([Edges([[-1.0, 0], [1, 0]], [[1.0, 0], [-1, 0]], [bulge, 0])])
    b = float(bulge)

    def height(v: float) -> float:
        # The root of u² + u·(1 − b²)/b = 1 − v² in the form that does not cancel.
        half = (1 - b * b) / (2 * b)
        return (1 - v * v) / (half + np.sqrt(half * half + 1 - v * v))

    def integral(p: int, q: int) -> float:
        return dblquad(lambda u, v: v**p * (-u) ** q, -1, 1, 0, height, epsabs=0, epsrel=1e-11)[0]

    area, first = integral(0, 0), integral(0, 1)
    middle = first / area
    assert float(plane.area) == pytest.approx(area, rel=1e-10)
    np.testing.assert_allclose(plane.centre, [0, middle], rtol=1e-10, atol=1e-15)
    assert float(plane.second[0, 0]) == pytest.approx(integral(2, 0), rel=1e-10)
    spread_up = integral(0, 2) - area * middle**2
    assert float(plane.second[1, 1]) == pytest.approx(spread_up, rel=1e-9)
    mixed = integral(2, 1) - middle * integral(2, 0)
    assert float(plane.third[1]) == pytest.approx(mixed, rel=1e-8)
    third = integral(0, 3) - 3 * middle * integral(0, 2) + 2 * area * middle**3
    np.testing.assert_allclose(plane.third[3], third, rtol=1e-8, atol=1e-13 * area)
    np.testing.assert_allclose([plane.third[0], plane.third[2]], 0, atol=1e-15)


def test_the_series_and_the_closed_form_meet():
    def of(bulge: float):
        return plane_moments([Edges([[-1.0, 0], [1, 0]], [[1.0, 0], [-1, 0]], [bulge, 0])])

    below, above = of(np.nextafter(FLAT_BULGE, 0)), of(FLAT_BULGE)
    assert_same_area(below, above, rel=1e-13)


def test_a_circle_an_ellipse_s_worth_of_arcs_and_a_slot_have_their_closed_forms():
    circle = Outline.of(circle_loop(0.3)).plane
    assert float(circle.area) == pytest.approx(np.pi / 4 * 0.09, rel=1e-15)
    np.testing.assert_allclose(circle.second, np.pi / 64 * 0.3**4 * np.eye(2), rtol=1e-14, atol=0)
    np.testing.assert_array_equal(circle.third, 0)
    # A slot 2a long between centres, of width 2r.
    a, r = 0.04, 0.015
    slot = Outline.of([(-a, -r), (a, -r, 0, r), (a, r), (-a, r, 0, r)]).plane
    assert float(slot.area) == pytest.approx(4 * a * r + np.pi * r * r, rel=1e-15)
    assert float(slot.second[1, 1]) == pytest.approx(2 * a * (2 * r) ** 3 / 12 + np.pi / 4 * r**4, rel=1e-14)


def test_a_rounded_rectangle_is_the_rectangle_less_its_corners():
    width, height, r = 0.08, 0.05, 0.008
    plane = Outline.of(rectangle_loop(width, height, rounding=r)).plane
    assert float(plane.area) == pytest.approx(width * height - (4 - np.pi) * r * r, rel=1e-15)
    # Each corner piece: a square r × r less a quarter disc about its inner corner.
    piece = (1 - np.pi / 4) * r * r
    from_inner = r**3 * (1 / 2 - 1 / 3)
    about_inner = r**4 * (1 / 3 - np.pi / 16)
    lever = height / 2 - r
    lost = 4 * (about_inner + 2 * lever * from_inner + lever**2 * piece)
    assert float(plane.second[1, 1]) == pytest.approx(width * height**3 / 12 - lost, rel=1e-14)


@settings(max_examples=30)
@given(outlines())
def test_fine_polygons_go_to_the_exact_moments_with_the_square_of_the_steps(outline):
    exact = outline.plane
    area, size = float(exact.area), float(np.sqrt(np.trace(exact.second) / exact.area))
    scale = np.array([1.0] * 3 + [size] * 4) * area * size**2
    gaps = []
    for steps in (48, 96, 192):
        polygon = fine_polygon(outline, steps)
        rough = np.abs(listed(polygon) - listed(exact)) / scale
        gaps.append(max(float(abs(polygon.area / exact.area - 1)), float(rough.max())))
    assert gaps[-1] < 5e-3
    for coarse, fine in pairwise(gaps):
        assert fine <= 0.3 * coarse + 1e-12


@given(outlines(), COORDINATES, COORDINATES)
def test_moving_an_outline_moves_its_centroid_and_nothing_else(outline, x, y):
    moved = outline.moved(x, y).plane
    reach = float(np.hypot(x, y)) / outline.size + 1
    np.testing.assert_allclose(moved.centre - outline.plane.centre, [x, y], atol=1e-13 * reach * outline.size)
    np.testing.assert_allclose(
        moved.second, outline.plane.second, rtol=0, atol=1e-13 * reach * np.trace(outline.plane.second)
    )


@pytest.mark.parametrize("far", [1.0, 1e3, 1e6])
def test_far_from_the_origin_the_moments_lose_only_what_the_coordinates_lose(far):
    near = Outline.of(rectangle_loop(0.08, 0.05, rounding=0.008), circle_loop(0.02, 0.03, 0.02))
    moved = near.moved(far, -2 * far).plane
    assert_same_area(
        type(moved)(moved.area, moved.centre - [far, -2 * far], moved.second, moved.third), near.plane,
        rel=1e-14 + 20 * np.spacing(2 * far) / 0.05,
    )


@settings(max_examples=50)
@given(outlines(), ANGLES)
def test_turning_an_outline_turns_its_moments(outline, angle):
    cos, sin = np.cos(angle), np.sin(angle)
    turn = np.array([[cos, -sin], [sin, cos]])
    turned = plane_moments([Edges(e.start @ turn.T, e.end @ turn.T, e.bulge) for e in outline.edges])
    plane = outline.plane
    np.testing.assert_allclose(turned.area, plane.area, rtol=1e-13)
    scale = np.trace(plane.second)
    np.testing.assert_allclose(turned.second, turn @ plane.second @ turn.T, rtol=0, atol=1e-13 * scale)
    xxx, xxy, xyy, yyy = plane.third
    tensor = np.array([[[xxx, xxy], [xxy, xyy]], [[xxy, xyy], [xyy, yyy]]])
    expected = np.einsum("ia,jb,kc,abc->ijk", turn, turn, turn, tensor)
    got = [turned.third[0], turned.third[1], turned.third[2], turned.third[3]]
    np.testing.assert_allclose(
        got, [expected[0, 0, 0], expected[0, 0, 1], expected[0, 1, 1], expected[1, 1, 1]],
        rtol=0, atol=1e-13 * scale * outline.size,
    )


@settings(max_examples=50)
@given(outlines())
def test_an_area_is_positive_and_its_second_moments_are_those_of_a_body_that_can_exist(outline):
    assert float(outline.plane.area) > 0
    assert float(outline.plane.principal[0]) > 0
    low, high = outline.bounds
    slack = outline.size / 2
    assert np.all(outline.plane.centre >= low - slack)
    assert np.all(outline.plane.centre <= high + slack)


@settings(max_examples=50)
@given(outlines().filter(lambda outline: len(outline.loops) > 1))
def test_an_outline_with_a_hole_is_the_whole_less_the_hole(outline):
    whole, hole = Outline((outline.loops[0],)).plane, Outline((outline.loops[1],)).plane
    point = outline.plane.centre
    assert float(outline.plane.area) == pytest.approx(float(whole.area - hole.area), rel=1e-13)
    np.testing.assert_allclose(
        outline.plane.second, whole.second_about(point) - hole.second_about(point),
        rtol=0, atol=1e-13 * np.trace(whole.second_about(point)),
    )


@settings(max_examples=50)
@given(outlines())
def test_which_way_round_the_points_run_does_not_matter(outline):
    def backwards(loop):
        # The arc of a point leads to the next one: run backwards, it belongs to that one and turns the other way.
        after = [*loop[1:], loop[0]]
        return tuple(p._replace(arc=-q.arc) for p, q in zip(reversed(after), reversed(loop), strict=True))

    assert_same_area(Outline(tuple(backwards(loop) for loop in outline.loops)).plane, outline.plane, rel=1e-13)


@given(st.lists(st.floats(0.5, 2.0), min_size=1, max_size=4))
def test_a_batch_gives_each_loop_its_own_moments(radii):
    batch = plane_moments([Edges.circle(np.array(radii))])
    for k, radius in enumerate(radii):
        one = plane_moments([Edges.circle(radius)])
        assert float(batch.area[k]) == float(one.area)
        np.testing.assert_array_equal(batch.second[k], one.second)
