"""The block against its own eighths."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from oracles import assert_same_body, moments_of_facets
from strategies import LENGTHS, boxes, placements

from core.moments import Moments
from core.shapes import Box


@given(boxes)
def test_a_box_is_the_sum_of_eight_boxes_of_half_its_lengths(box):
    x, y, z = box.values().values()
    small = Box(x / 2, y / 2, z / 2).moments()
    total = Moments.nothing()
    for side_x in (-1, 1):
        for side_y in (-1, 1):
            for level in (0, 1):
                total = total + small.mapped(np.eye(3), [side_x * x / 4, side_y * y / 4, level * z / 2])
    assert_same_body(total, box.moments(), rel=1e-14)


@given(boxes, placements())
def test_the_facets_of_a_placed_box_hold_exactly_its_moments(box, placement):
    surface = box.facets()
    placed = type(surface)(placement.apply(surface.points), surface.corners)
    assert_same_body(moments_of_facets(placed), placement.place(box.moments()), rel=1e-12, size=3.0)


@given(LENGTHS, LENGTHS)
def test_a_box_stands_on_its_base_and_is_centred_over_the_origin(across, height):
    surface = Box(across, across, height).facets()
    np.testing.assert_allclose(surface.points.min(axis=0), [-across / 2, -across / 2, 0], rtol=1e-15)
    np.testing.assert_allclose(surface.points.max(axis=0), [across / 2, across / 2, height], rtol=1e-15)
