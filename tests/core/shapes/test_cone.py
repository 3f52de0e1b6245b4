"""Cone and frustum against adaptive quadrature, and the frustum's two limits."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from oracles import assert_same_body, revolved_by_quadrature
from strategies import LENGTHS, cones, frusta

from core.shapes import Cone, Cylinder, Frustum


@given(cones)
def test_a_cone_has_the_moments_of_its_slices(cone):
    radius, height = cone.single("base_diameter") / 2, cone.single("height")
    assert_same_body(
        cone.moments(), revolved_by_quadrature(lambda z: radius * (1 - z / height), 0, height), rel=1e-12
    )


@given(frusta)
def test_a_frustum_has_the_moments_of_its_slices(frustum):
    base, top, height = frustum.values().values()
    expected = revolved_by_quadrature(lambda z: (base + (top - base) * z / height) / 2, 0, height)
    assert_same_body(frustum.moments(), expected, rel=1e-12)


@given(LENGTHS, LENGTHS)
def test_a_frustum_of_equal_diameters_is_the_cylinder(diameter, height):
    assert_same_body(
        Frustum(diameter, diameter, height).moments(), Cylinder(diameter, height).moments(), rel=1e-15
    )


@given(LENGTHS, LENGTHS, st.floats(-1e-7, 1e-7))
def test_a_frustum_of_nearly_equal_diameters_is_as_near_to_the_cylinder(diameter, height, difference):
    nearly = Frustum(diameter, diameter * (1 + difference), height).moments()
    assert_same_body(nearly, Cylinder(diameter, height).moments(), rel=3 * abs(difference) + 1e-14)


@given(LENGTHS, LENGTHS)
def test_a_frustum_without_a_top_is_the_cone(diameter, height):
    assert_same_body(Frustum(diameter, 0.0, height).moments(), Cone(diameter, height).moments(), rel=0)
    assert (
        len(Frustum(diameter, 0.0, height).facets(12).corners)
        == len(Cone(diameter, height).facets(12).corners)
        == 24
    )


@given(LENGTHS, LENGTHS, st.floats(0.05, 0.95))
def test_a_cone_is_the_frustum_and_the_small_cone_above_it(diameter, height, share):
    cut = share * height
    stump = Frustum(diameter, diameter * (1 - share), cut).moments()
    tip = Cone(diameter * (1 - share), height - cut).moments().mapped(np.eye(3), [0, 0, cut])
    assert_same_body(stump + tip, Cone(diameter, height).moments(), rel=1e-13)


@given(frusta.filter(lambda frustum: frustum.single("top_diameter") > 0))
def test_a_frustum_put_on_its_head_is_the_one_with_its_diameters_exchanged(frustum):
    base, top, height = frustum.values().values()
    turned = frustum.moments().mapped(np.diag([1.0, -1.0, -1.0]), [0, 0, height])
    assert_same_body(turned, Frustum(top, base, height).moments(), rel=1e-14)


def test_half_way_up_a_cone_the_frustum_holds_seven_eighths():
    assert float(Frustum(0.2, 0.1, 0.05).moments().mass / Cone(0.2, 0.1).moments().mass) == pytest.approx(
        7 / 8, rel=1e-15
    )
