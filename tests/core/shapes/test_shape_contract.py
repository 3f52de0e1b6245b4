"""What every registered shape keeps, whoever added it."""

from __future__ import annotations

import dataclasses
import re
from typing import TYPE_CHECKING

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from oracles import assert_same_body, directed_edges_cancel, moments_of_facets, moments_of_sheet
from strategies import shapes_of

from core.checks import check_body
from core.errors import ShapeError
from core.moments import Moments
from core.shapes import SHAPES, OutlinedShape, Shape
from core.shapes.base import said

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.facets import Facets

def each(*measures: str) -> pytest.MarkDecorator:
    keys = sorted(key for key in SHAPES if not measures or SHAPES[key].measure in measures)
    return pytest.mark.parametrize("shape", [SHAPES[key].of({}) for key in keys], ids=keys)


every_shape, every_solid, every_sheet = each(), each("volume"), each("area")
every_line_or_point = each("length", "pieces")
every_key = pytest.mark.parametrize("key", sorted(SHAPES))

# How many lengths are multiplied in a measure: mass scales with that power, the second moment with two more.
POWERS = {"volume": 3, "area": 2, "length": 1, "pieces": 0}


def enlarged(shape: Shape, factor: float) -> Shape:
    """Return the shape with every length multiplied; angles and counts stay."""
    values = shape.values()
    resized = shape.resized(
        {one.name: values[one.name] * (factor if one.kind == "length" else 1.0) for one in shape.dimensions}
    )
    return resized.with_outline(resized.outline.enlarged(factor)) if isinstance(resized, OutlinedShape) else resized


@every_solid
def test_the_surface_is_closed(shape: Shape):
    for steps in (3, 4, 7, 24, 48):
        assert directed_edges_cancel(shape.facets(steps)), steps


@every_sheet
def test_no_edge_of_a_sheet_is_met_twice_in_one_direction(shape: Shape):
    for steps in (3, 4, 7, 24, 48):
        corners = shape.facets(steps).corners
        edges = np.concatenate([corners[:, [0, 1]], corners[:, [1, 2]], corners[:, [2, 0]]])
        assert len(np.unique(edges, axis=0)) == len(edges), steps


@every_shape
def test_the_surface_has_no_double_point_and_no_unused_one(shape: Shape):
    surface = shape.facets(24)
    assert len(np.unique(surface.points.round(12), axis=0)) == len(surface.points)
    np.testing.assert_array_equal(np.unique(surface.corners), np.arange(len(surface.points)))


def assert_second_order(shape: Shape, integrate: Callable[[Facets], Moments]) -> None:
    """Hold the integral over ever finer surfaces against the closed form: halving the step quarters the gap."""
    exact = shape.moments()
    size = float(np.sqrt(np.trace(exact.spread) / exact.mass))
    gaps = []
    for steps in (24, 48, 96):
        faceted = integrate(shape.facets(steps))
        gaps.append(
            [
                float(abs(faceted.mass / exact.mass - 1)),
                float(np.abs(faceted.centre - exact.centre).max() / size),
                float(np.abs(faceted.spread - exact.spread).max() / (exact.mass * size**2)),
            ]
        )
    coarse, middle, fine = np.array(gaps)
    round_off = 1e-12
    assert np.all(fine < 0.01)
    # What is flat has no gap at all.
    np.testing.assert_array_less(middle, coarse * 0.27 + round_off)
    np.testing.assert_array_less(fine, middle * 0.27 + round_off)


@every_solid
def test_the_integral_over_the_facets_goes_to_the_closed_form_with_the_square_of_the_steps(shape: Shape):
    assert_second_order(shape, moments_of_facets)


@every_sheet
def test_so_does_the_integral_over_the_facets_of_a_sheet(shape: Shape):
    assert_second_order(shape, moments_of_sheet)


@every_line_or_point
def test_what_is_drawn_for_a_line_or_a_point_has_its_moments_but_for_its_own_thickness(shape: Shape):
    exact, surface = shape.moments(), shape.facets(96)
    drawn = moments_of_facets(surface).with_mass(exact.mass)
    reach = float(np.ptp(surface.points, axis=0).max())
    thickness = reach if shape.measure == "pieces" else 0.02 * reach
    assert_same_body(drawn, exact, rel=1.0, size=thickness)


@every_shape
def test_a_mass_per_measure_scales_with_its_power_of_length_and_inertia_with_two_more(shape: Shape):
    exact, power = shape.moments(), POWERS[shape.measure]
    expected = Moments(exact.mass * 2.5**power, exact.centre * 2.5, exact.spread * 2.5 ** (power + 2))
    assert_same_body(enlarged(shape, 2.5).moments(), expected, rel=1e-13)


@every_key
@settings(max_examples=20)
@given(data=st.data(), factor=st.floats(0.01, 20))
def test_any_body_can_exist_and_scales(key: str, data: st.DataObject, factor: float):
    shape = data.draw(shapes_of(key))
    moments, power = shape.moments(), POWERS[shape.measure]
    volume = float(moments.mass) if shape.measure == "volume" else None
    checks = check_body(moments.times(7850.0), name=shape.title, volume=volume)
    assert [check.text for check in checks if not check.ok] == []
    least = float(np.linalg.eigvalsh(moments.spread)[0])
    assert least >= -1e-15 * float(np.abs(moments.spread).max())
    scaled = Moments(moments.mass * factor**power, moments.centre * factor, moments.spread * factor ** (power + 2))
    assert_same_body(enlarged(shape, factor).moments(), scaled, rel=1e-12)


@pytest.mark.parametrize("key", list(SHAPES))
@given(data=st.data())
@settings(max_examples=5)
def test_the_box_of_a_body_is_that_of_its_surface(key: str, data: st.DataObject):
    shape = data.draw(shapes_of(key))
    points = shape.facets().points
    size = float(np.ptp(points, axis=0).max())
    np.testing.assert_allclose(shape.box(), [points.min(axis=0), points.max(axis=0)], rtol=0, atol=1e-15 * size)



@every_key
@settings(max_examples=10)
@given(data=st.data())
def test_any_body_lies_within_what_is_drawn_for_it(key: str, data: st.DataObject):
    shape = data.draw(shapes_of(key))
    moments, surface = shape.moments(), shape.facets(96)
    low, high = surface.points.min(axis=0), surface.points.max(axis=0)
    slack = 1e-12 * float(np.abs(surface.points).max())
    assert np.all(moments.centre >= low - slack)
    assert np.all(moments.centre <= high + slack)
    about = np.sqrt(np.diagonal(moments.spread) / moments.mass)
    farthest = np.maximum(moments.centre - low, high - moments.centre)
    # The corners lie on the true surface: with 96 steps the box around them is short of a round body by 1e-3.
    assert np.all(about <= farthest * 1.001 + slack)


@every_shape
def test_the_body_can_exist_at_any_density(shape: Shape):
    moments = shape.moments().times(7850.0)
    volume = float(shape.moments().mass) if shape.measure == "volume" else None
    checks = check_body(moments, name=shape.title, volume=volume)
    assert [check.text for check in checks if not check.ok] == []


@every_shape
def test_a_batch_of_dimensions_gives_a_batch_of_bodies(shape: Shape):
    factors = np.array([1.0, 0.99, 0.98])
    names = {one.name: one.kind for one in shape.dimensions}
    varied = "length" if "length" in names.values() else "angle"
    batch = type(shape).of(
        {name: shape.single(name) * (factors if kind == varied else 1.0) for name, kind in names.items()}
    )
    for k, factor in enumerate(factors):
        one = (
            type(shape)
            .of(
                {
                    name: shape.single(name) * (factor if kind == varied else 1.0)
                    for name, kind in names.items()
                }
            )
            .moments()
        )
        moments = batch.moments()
        assert float(moments.mass[k]) == pytest.approx(float(one.mass), rel=1e-14)
        np.testing.assert_allclose(
            moments.spread[k], one.spread, rtol=1e-13, atol=1e-14 * np.abs(one.spread).max()
        )
        np.testing.assert_allclose(moments.centre[k], one.centre, rtol=1e-13, atol=1e-15)


@every_shape
def test_values_make_the_same_shape_again(shape: Shape):
    again = type(shape).of(shape.values())
    assert again == shape
    assert hash(again) == hash(shape)
    assert shape.resized({}) == shape


@every_shape
def test_the_table_of_dimensions_names_the_fields_of_the_class(shape: Shape):
    fields = [field.name for field in dataclasses.fields(shape)]
    outline = ["outline"] if isinstance(shape, OutlinedShape) else []
    assert outline + [one.name for one in shape.dimensions] == fields
    assert all(one.label for one in shape.dimensions)


@every_shape
def test_every_dimension_refuses_a_negative_and_an_infinite_value(shape: Shape):
    for dimension in shape.dimensions:
        for bad in (-1.0, np.nan, np.inf):
            with pytest.raises(ShapeError, match=re.escape(dimension.label)) as refusal:
                type(shape).of({**shape.values(), dimension.name: bad})
            assert str(refusal.value).startswith(f"{shape.title}: ")


@every_shape
def test_a_surface_needs_a_single_shape(shape: Shape):
    first = shape.dimensions[0]
    batch = type(shape).of({**shape.values(), first.name: np.full(2, shape.single(first.name))})
    with pytest.raises(ShapeError) as refusal:
        batch.single(first.name)
    assert str(refusal.value) == (
        f"{shape.title}: a batch of shapes has no single surface or set of dimensions; "
        f"read {first.name} of shape (2,). Take one of them."
    )


@pytest.mark.parametrize(
    ("make", "text"),
    [
        (
            lambda: SHAPES["box"].of({"length_y": -0.05}),
            "box: the width along y has to be more than 0; read -50 mm. Give a positive length.",
        ),
        (
            lambda: SHAPES["tube"].of({"bore": -0.001}),
            "tube: the bore has to be at least 0; read -1 mm. Give 0 or more.",
        ),
        (
            lambda: SHAPES["box"].of({"depth": 0.1}),
            "box: there is no such dimension; read depth. Choose from length_x, length_y, length_z.",
        ),
        (
            lambda: SHAPES["sphere"].of({"diameter": "wide"}),
            "sphere: the diameter is no number; read 'wide'. Give a number.",
        ),
        (
            lambda: SHAPES["cylinder"].of({}).facets(2),
            "a circle cannot be drawn in so few steps; read 2. Take at least 3.",
        ),
        (
            lambda: SHAPES["sphere"].of({}).facets(2),
            "a circle cannot be drawn in so few steps; read 2. Take at least 3.",
        ),
    ],
)
def test_a_refusal_names_shape_dimension_value_and_remedy(make, text):
    with pytest.raises(ShapeError) as refusal:
        make()
    assert str(refusal.value) == text


def test_a_caller_cannot_change_a_shape_through_its_own_array():
    lengths = np.array([0.1, 0.2])
    box = SHAPES["box"].of({"length_x": lengths})
    lengths[0] = 9.0
    np.testing.assert_array_equal(box.array("length_x"), [0.1, 0.2])


def test_a_dimension_is_said_in_the_unit_of_its_kind():
    assert (said(0.0125), said(np.pi / 4, "angle"), said(8, "count")) == ("12.5 mm", "45°", "8")
