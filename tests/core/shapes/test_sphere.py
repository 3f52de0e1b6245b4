"""The sphere against quadrature, and the evenness of its facets."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from oracles import assert_same_body, revolved_by_quadrature
from strategies import spheres

from core.shapes import Sphere


@given(spheres)
def test_a_sphere_has_the_moments_of_its_slices(sphere):
    radius = sphere.single("diameter") / 2
    slices = revolved_by_quadrature(lambda z: max(radius * radius - z * z, 0.0) ** 0.5, -radius, radius)
    assert_same_body(sphere.moments(), slices, rel=1e-11)


@pytest.mark.parametrize("steps", [12, 48, 50])
def test_all_corners_lie_on_the_sphere_and_no_facet_is_a_sliver(steps):
    surface = Sphere(0.08).facets(steps)
    np.testing.assert_allclose(np.linalg.norm(surface.points, axis=1), 0.04, rtol=1e-14)
    a, b, c = np.moveaxis(surface.triangles, 1, 0)
    sides = np.stack([np.linalg.norm(end - start, axis=1) for start, end in ((a, b), (b, c), (c, a))])
    assert (sides.max(axis=0) / sides.min(axis=0)).max() < 3**0.5
    outward = np.einsum("ni,ni->n", np.cross(b - a, c - a), a + b + c)
    assert np.all(outward > 0)


def test_the_equator_is_drawn_in_the_steps_asked_for():
    assert int(np.sum(Sphere(0.08).facets(48).points[:, 2] == 0)) == 48
