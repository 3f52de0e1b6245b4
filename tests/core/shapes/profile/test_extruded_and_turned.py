"""Bodies from outlines against the bodies with closed forms, against quadrature, and cut up."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from oracles import assert_same_body, directed_edges_cancel, moments_of_facets
from scipy.integrate import dblquad
from strategies import LENGTHS, outlines, turned_profiles

from core.errors import ShapeError
from core.moments import Moments
from core.placement import turn_about
from core.shapes import Box, Cone, Cylinder, Extruded, Frustum, HollowSphere, Outline, Sphere, Torus, Tube, Turned
from core.shapes.profile import circle_loop, rectangle_loop

FULL = 2 * np.pi


def turned(points, *holes, angle: float = FULL) -> Moments:
    return Turned(Outline.of(points, *holes), angle).moments()


@given(LENGTHS, LENGTHS, LENGTHS)
def test_an_extruded_rectangle_is_the_box_in_its_corner(x, y, z):
    body = Extruded(Outline.of(rectangle_loop(x, y)), z).moments()
    moved = Box(x, y, z).moments().mapped(np.eye(3), [x / 2, y / 2, 0])
    assert_same_body(body, moved, rel=1e-14)


@given(LENGTHS, LENGTHS, st.floats(0.05, 0.95))
def test_an_extruded_ring_is_the_tube(diameter, length, share):
    ring = Outline.of(circle_loop(diameter), circle_loop(share * diameter))
    tube = Tube(diameter, share * diameter, length).moments()
    assert_same_body(Extruded(ring, length).moments(), tube, rel=1e-13 / (1 - share))


def test_a_batch_of_lengths_gives_a_batch_of_bodies():
    plate = Outline.of(rectangle_loop(0.08, 0.05, rounding=0.008), circle_loop(0.02, 0.03, 0.02))
    batch = Extruded(plate, np.array([0.01, 0.02])).moments()
    for k, length in enumerate((0.01, 0.02)):
        assert_same_body(
            Moments(batch.mass[k], batch.centre[k], batch.spread[k]), Extruded(plate, length).moments(), rel=1e-15
        )


@given(LENGTHS, LENGTHS, st.floats(0.05, 0.95))
def test_turned_rectangles_are_the_cylinder_and_the_tube(radius, height, share):
    cylinder = turned([(0, 0), (radius, 0), (radius, height), (0, height)])
    assert_same_body(cylinder, Cylinder(2 * radius, height).moments(), rel=1e-13)
    tube = turned([(share * radius, 0), (radius, 0), (radius, height), (share * radius, height)])
    assert_same_body(tube, Tube(2 * radius, 2 * share * radius, height).moments(), rel=1e-13)


@given(LENGTHS, LENGTHS, st.floats(0.05, 0.95))
def test_a_turned_triangle_is_the_cone_and_a_turned_trapezium_the_frustum(radius, height, share):
    cone = turned([(0, 0), (radius, 0), (0, height)])
    assert_same_body(cone, Cone(2 * radius, height).moments(), rel=1e-13)
    frustum = turned([(0, 0), (radius, 0), (share * radius, height), (0, height)])
    assert_same_body(frustum, Frustum(2 * radius, 2 * share * radius, height).moments(), rel=1e-13)


@given(LENGTHS, st.floats(0.1, 0.9))
def test_turned_arcs_are_the_sphere_and_the_hollow_sphere(radius, share):
    sphere = turned([(0, -radius, 0, radius), (0, radius)])
    assert_same_body(sphere, Sphere(2 * radius).moments(), rel=1e-13)
    inner = share * radius
    shell = turned([(0, -radius, 0, radius), (0, radius), (0, inner, 0, -inner), (0, -inner)])
    assert_same_body(shell, HollowSphere(2 * radius, 2 * inner).moments(), rel=1e-12)


@given(LENGTHS, st.floats(0.01, 1.0))
def test_a_turned_circle_is_the_torus(mean, share):
    section = share * mean
    torus = turned(circle_loop(section, mean / 2, 0.0))
    assert_same_body(torus, Torus(mean, section).moments(), rel=1e-13)


@settings(max_examples=50)
@given(turned_profiles())
def test_the_volume_is_the_area_times_the_way_of_its_centroid(body):
    # Pappus (Guldin): whatever the outline.
    way = body.single("angle") * float(body.outline.plane.centre[0])
    assert float(body.moments().mass) == pytest.approx(float(body.outline.plane.area) * way, rel=1e-13)


@pytest.mark.parametrize("angle", [1e-3, 0.5, 0.999999, 1.0, np.pi / 2, 3.0, 5.5, FULL])
def test_a_turned_triangle_has_the_moments_of_its_quadrature(angle):
    corners = [(0.03, 0.01), (0.07, 0.0), (0.05, 0.04)]
    body = turned(corners, angle=angle)

    def over_triangle(value) -> float:
        (x0, y0), (x1, y1), (x2, y2) = corners
        area = (x1 - x0) * (y2 - y0) - (x2 - x0) * (y1 - y0)

        def at(b: float, a: float) -> float:
            return value(x0 + a * (x1 - x0) + b * (x2 - x0), y0 + a * (y1 - y0) + b * (y2 - y0))

        return area * dblquad(at, 0, 1, 0, lambda a: 1 - a, epsabs=0, epsrel=1e-12)[0]

    volume = angle * over_triangle(lambda r, _z: r)
    assert float(body.mass) == pytest.approx(volume, rel=1e-12)
    cos, sin = np.sin(angle) * (angle < FULL), (1 - np.cos(angle)) * (angle < FULL)
    square = over_triangle(lambda r, _z: r * r)
    height = angle * over_triangle(lambda r, z: r * z)
    centre = np.array([cos * square, sin * square, height]) / volume
    np.testing.assert_allclose(body.centre, centre, rtol=0, atol=1e-13)
    # The second moments about the centre by quadrature of what is squared: nothing cancels.
    directions = np.array([[1.0, 0, 0], [0, 1, 0], [0, 0, 1], [1, 1, 0], [1, 0, 1], [0, 1, 1]])
    gauss, weights = np.polynomial.legendre.leggauss(40)
    angles, shares = (gauss + 1) * angle / 2, weights * angle / 2
    for direction in directions:
        def slice_value(r: float, z: float, direction=direction) -> float:
            spots = np.stack([r * np.cos(angles), r * np.sin(angles), np.full(40, z)], axis=-1)
            return float(r * shares @ ((spots - body.centre) @ direction) ** 2)

        expected = over_triangle(slice_value)
        got = float(direction @ body.spread @ direction)
        assert got == pytest.approx(expected, rel=1e-9)


@settings(max_examples=30)
@given(turned_profiles(), st.floats(0.1, 0.9))
def test_two_turns_one_after_the_other_are_the_whole(body, share):
    angle = body.single("angle")
    first = body.resized({"angle": share * angle}).moments()
    second = body.resized({"angle": angle - share * angle}).moments()
    placed = second.mapped(turn_about(np.array([0.0, 0, 1]), share * angle), np.zeros(3))
    assert_same_body(first + placed, body.moments(), rel=1e-12)


@settings(max_examples=30)
@given(outlines())
def test_a_thin_slice_far_from_the_axis_keeps_the_digits_of_its_outline(outline):
    # At ten thousand sizes from the axis the radial spread is that of the outline, but for one part in 10⁴.
    thin = Turned(outline.moved(1e4 * outline.size, 0.0), 1e-9).moments()
    spread = thin.spread[0, 0] / thin.mass
    assert float(spread) == pytest.approx(float(outline.plane.second[0, 0] / outline.plane.area), rel=1e-3)


@settings(max_examples=25)
@given(turned_profiles())
def test_the_surface_of_any_turned_profile_is_closed_and_holds_its_moments(body):
    surface = body.facets(96)
    assert directed_edges_cancel(surface)
    size = float(np.abs(surface.points).max())
    assert_same_body(moments_of_facets(surface), body.moments(), rel=0.02, size=size)


@settings(max_examples=25)
@given(st.builds(Extruded, outlines(), LENGTHS))
def test_the_surface_of_any_extruded_profile_is_closed_and_holds_its_moments(body):
    surface = body.facets(96)
    assert directed_edges_cancel(surface)
    size = float(np.abs(surface.points).max())
    assert_same_body(moments_of_facets(surface), body.moments(), rel=0.02, size=size)


def test_a_point_on_the_axis_closes_the_surface_there():
    for angle in (FULL, 2.0):
        for points in ([(0, -1, 0, 1), (0, 1)], [(0, 0), (1, 0), (0.5, 1), (0, 1)], [(0, 0), (1, -1), (1, 1)]):
            surface = Turned(Outline.of(points), angle).facets(24)
            assert directed_edges_cancel(surface)
            assert len(np.unique(surface.points.round(12), axis=0)) == len(surface.points)


@pytest.mark.parametrize(
    ("loops", "sentence"),
    [
        (
            [((-0.01, 0), (0.05, 0), (0.05, 0.05), (0, 0.05))],
            ("turned profile: the outline crosses the axis: near point 1 at (-10, 0) mm it reaches 10 mm beyond it. "
            "Keep every point at a radius of 0 or more."),
        ),
        (
            [((0.01, 0), (0.05, 0), (0.05, 0.06), (0.01, 0.06, 0, 0.035))],
            ("turned profile: the outline crosses the axis: near point 4 at (10, 60) mm it reaches 6.97224 mm beyond "
            "it. Keep every point at a radius of 0 or more."),
        ),
    ],
)
def test_an_outline_that_crosses_the_axis_is_refused(loops, sentence):
    with pytest.raises(ShapeError) as refusal:
        Turned(Outline.of(*loops), FULL)
    assert str(refusal.value) == sentence


@pytest.mark.parametrize(("angle", "read"), [(0.0, "0°"), (-1.0, "-57.2958°"), (7.0, "401.07°")])
def test_an_angle_lies_between_nothing_and_a_full_turn(angle, read):
    with pytest.raises(ShapeError, match="the angle turned has to be") as refusal:
        Turned(Turned.default_outline(), angle)
    assert refusal.value.read == read


def test_a_body_without_an_outline_is_refused():
    with pytest.raises(ShapeError) as refusal:
        Extruded(None, 0.1)  # type: ignore[arg-type] # what is refused here
    assert str(refusal.value) == "extruded profile: the outline is missing; read None. Give an outline."


def test_resizing_keeps_the_outline_and_another_outline_keeps_the_size():
    plate = Extruded(Outline.of(rectangle_loop(0.04, 0.03)), 0.01)
    assert plate.resized({"length": 0.02}) == Extruded(plate.outline, 0.02)
    other = Outline.of(circle_loop(0.05))
    assert plate.with_outline(other) == Extruded(other, 0.01)
    assert plate.values() == {"length": 0.01}
