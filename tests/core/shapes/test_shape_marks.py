"""The marks of every shape: each dimension is measured where the body has it."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from strategies import shapes_of

from core.shapes import SHAPES, Box, Shape
from core.shapes.marks import marks_by_name

every_key = pytest.mark.parametrize("key", sorted(SHAPES))


def assert_marks_measure(shape: Shape) -> None:
    """Hold the distance of a mark's ends against the dimension itself."""
    marks, values = marks_by_name(shape.marks()), shape.values()
    size = float(np.abs(shape.facets(24).points).max())
    for dimension in shape.dimensions:
        mark = marks[dimension.name]
        apart = float(np.linalg.norm(mark.end - mark.start))
        if dimension.kind == "length":
            assert mark.style != "leader", dimension.name
            assert apart == pytest.approx(values[dimension.name], rel=1e-9, abs=1e-12 * size), dimension.name
        else:
            assert (mark.style, apart) == ("leader", 0.0), dimension.name


@every_key
def test_every_dimension_has_one_mark(key: str):
    shape = SHAPES[key].of({})
    assert sorted(mark.name for mark in shape.marks()) == sorted(one.name for one in shape.dimensions)


@every_key
@settings(max_examples=15)
@given(data=st.data())
def test_the_ends_of_a_mark_are_as_far_apart_as_the_dimension_is_long(key: str, data: st.DataObject):
    assert_marks_measure(data.draw(shapes_of(key)))


@every_key
def test_marks_lie_on_or_beside_the_body_as_the_gallery_shows_it(key: str):
    shape = SHAPES[key].of({})
    points = shape.facets(96).points
    low, high = points.min(axis=0), points.max(axis=0)
    # A dome's sphere reaches below it; everything else is measured within the box around the body.
    beside = float(shape.values().get("sphere_diameter", 0.0))
    slack = 1e-3 * float(np.ptp(points, axis=0).max())
    for mark in shape.marks():
        for end in (mark.start, mark.end):
            assert np.all(end >= low - slack - [0, 0, beside]), mark.name
            assert np.all(end <= high + slack), mark.name


@every_key
def test_a_dimension_line_is_drawn_square_to_what_it_measures(key: str):
    for mark in SHAPES[key].of({}).marks():
        assert float(np.linalg.norm(mark.away)) == pytest.approx(float(np.any(mark.away)))
        assert float(mark.away @ (mark.end - mark.start)) == pytest.approx(0, abs=1e-12), mark.name


@every_key
def test_every_dimension_has_a_symbol_to_stand_in_the_drawing(key: str):
    symbols = [one.symbol for one in SHAPES[key].dimensions]
    assert all(symbols)
    assert len(set(symbols)) == len(symbols)


def test_marks_follow_the_dimensions():
    marks = marks_by_name(Box(0.2, 0.06, 0.04).marks())
    np.testing.assert_allclose(marks["length_x"].start, (-0.1, -0.03, 0))
    np.testing.assert_allclose(marks["length_x"].end, (0.1, -0.03, 0))
