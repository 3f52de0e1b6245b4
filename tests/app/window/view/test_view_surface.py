"""Surfaces made ready for drawing: edges counted by hand, normals against the true surface."""

from __future__ import annotations

import numpy as np
import pytest

from app.window.view.surface import LIGHT_COUNT, _in_chains, lighter, surface_of
from core.facets import Facets
from core.shapes import SHAPES


def facets_of(key, steps=48, **dimensions):
    return SHAPES[key].of(dimensions).facets(steps)


def test_a_box_has_its_twelve_edges_and_no_others():
    surface = surface_of(facets_of("box", length_x=0.1, length_y=0.2, length_z=0.3))
    assert len(surface.sharp) == 12
    assert len(surface.rims) == 0
    assert np.linalg.norm(np.diff(surface.sharp, axis=1), axis=-1).sum() == pytest.approx(4 * 0.6, rel=1e-6)


def test_a_box_keeps_three_normals_at_each_corner():
    surface = surface_of(facets_of("box", length_x=0.1, length_y=0.2, length_z=0.3))
    assert len(surface.vertices) == 24
    assert set(np.abs(surface.normals).max(axis=1)) == {1.0}


def test_a_cylinder_has_two_circles_of_sharp_edges_and_its_generators_as_rims():
    surface = surface_of(facets_of("cylinder", diameter=0.1, length=0.2))
    assert len(surface.sharp) == 2 * 48
    assert len(surface.rims) == 48


def test_the_normals_on_a_cylinder_point_away_from_its_axis():
    surface = surface_of(facets_of("cylinder", diameter=0.1, length=0.2))
    side = np.abs(surface.normals[:, 2]) < 0.5
    outward = surface.vertices[side] * [1, 1, 0] / 0.05
    np.testing.assert_allclose(surface.normals[side], outward, atol=1e-6)


def test_the_normals_on_a_sphere_are_its_radii():
    surface = surface_of(facets_of("sphere", diameter=0.2))
    np.testing.assert_allclose(surface.normals, surface.vertices / 0.1, atol=0.03)
    assert len(surface.sharp) == 0


def test_the_tip_of_a_cone_keeps_the_normals_of_its_facets():
    surface = surface_of(facets_of("cone", base_diameter=0.02, height=0.1))
    tip = surface.vertices[:, 2] > surface.vertices[:, 2].max() - 1e-6
    # A slim cone's normals are nearly level; a single averaged one would point straight up.
    assert np.abs(surface.normals[tip, 2]).max() < 0.2


def test_a_cylinder_is_closed_and_a_cylinder_without_a_facet_is_not():
    whole = facets_of("cylinder", diameter=0.1, length=0.2)
    assert surface_of(whole).closed
    cut = surface_of(Facets(whole.points, whole.corners[1:]))
    assert not cut.closed
    assert len(cut.sharp) > len(surface_of(whole).sharp)


def test_loose_facets_are_drawn_like_welded_ones():
    welded = facets_of("tube", outer_diameter=0.1, bore=0.05, length=0.2)
    loose = Facets(welded.triangles.reshape(-1, 3), np.arange(3 * len(welded.corners)).reshape(-1, 3))
    one, two = surface_of(welded), surface_of(loose)
    assert two.closed
    assert (len(one.sharp), len(one.rims), len(one.vertices)) == (len(two.sharp), len(two.rims), len(two.vertices))


def test_a_facet_turned_over_does_not_part_a_flat_face():
    whole = facets_of("box", length_x=0.1, length_y=0.2, length_z=0.3)
    corners = np.array(whole.corners)
    corners[0] = corners[0][::-1]
    turned = surface_of(Facets(whole.points, corners))
    assert len(turned.sharp) == 12
    assert not turned.closed


def test_single_precision_holds_for_a_part_a_kilometre_away():
    near = facets_of("box", length_x=0.1, length_y=0.2, length_z=0.3)
    far = surface_of(Facets(near.points + np.array([1000.0, -1000.0, 500.0]), near.corners))
    lengths = np.linalg.norm(np.diff(far.sharp, axis=1), axis=-1).ravel()
    np.testing.assert_allclose(np.sort(lengths), np.repeat([0.1, 0.2, 0.3], 4), rtol=1e-6)


def test_a_facet_without_area_adds_no_edge():
    box = facets_of("box", length_x=0.1, length_y=0.2, length_z=0.3)
    points = np.concatenate([box.points, [0.5 * (box.points[0] + box.points[1])]])
    with_sliver = Facets(points, np.concatenate([box.corners, [[0, 1, 8]]]))
    assert np.isfinite(surface_of(with_sliver).normals).all()


def test_a_lighter_surface_has_few_triangles_and_the_same_extent():
    surface = surface_of(facets_of("sphere", steps=240, diameter=0.2))
    light = lighter(surface)
    assert surface.count > LIGHT_COUNT > light.count
    np.testing.assert_allclose(light.bounds, surface.bounds, atol=0.2 / 36 * 1.5)


def test_a_small_surface_is_its_own_lighter_one():
    surface = surface_of(facets_of("sphere", diameter=0.2))
    assert surface.light is surface


def test_the_rim_of_a_fine_bar_stays_whole():
    bar = facets_of("cylinder", steps=20_000, diameter=0.1, length=0.2)
    assert len(surface_of(bar).sharp) == 2 * 20_000


def test_edges_that_lead_nowhere_are_left_out_of_chains():
    square, lone, tail = [[0, 1], [1, 2], [2, 3], [3, 0]], [[4, 5]], [[3, 6], [6, 7]]
    assert _in_chains(np.array(square + lone + tail), 8).tolist() == square
