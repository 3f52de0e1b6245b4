"""A lighter mesh to draw: few facets, the same form, still closed."""

from __future__ import annotations

import numpy as np
import pytest

from core.mesh import survey_triangles
from core.mesh.lighter import _without_folds, lighter_facets
from core.shapes import SHAPES


def ball(steps: int) -> np.ndarray:
    return SHAPES["sphere"].of({"diameter": 2.0}).facets(steps).triangles


@pytest.mark.parametrize("most", [20_000, 5_000, 500, 20, 1])
def test_a_lighter_mesh_keeps_to_the_most_that_is_asked_for(most):
    assert len(lighter_facets(ball(200), most).corners) <= most


@pytest.mark.parametrize("most", [15_000, 5_000])
def test_a_lighter_ball_is_a_closed_ball_that_uses_a_fair_share_of_the_facets(most):
    facets = lighter_facets(ball(200), most)
    assert len(facets.corners) > 0.2 * most
    survey = survey_triangles(facets.triangles)
    assert survey.closed
    assert survey.solid.mass == pytest.approx(4 / 3 * np.pi, rel=0.05)


def test_the_points_of_a_lighter_ball_lie_close_beneath_its_surface():
    radii = np.linalg.norm(lighter_facets(ball(200), 5000).points, axis=1)
    # A mean over a cell of size h on a ball of radius 1 lies at most (√3·h)²/2 beneath it; h = 2/40 here.
    assert radii.max() <= 1 + 1e-12
    assert radii.min() >= 1 - 3 * (2 / 40) ** 2 / 2


@pytest.mark.parametrize("shift", [0.0, 1000.0])
def test_a_lighter_mesh_fills_the_same_box_wherever_it_stands(shift):
    triangles = (ball(100) + shift).astype(np.float32)
    facets = lighter_facets(triangles, 3000)
    np.testing.assert_allclose(facets.points.min(axis=0), triangles.min(axis=(0, 1)), atol=0.08)
    np.testing.assert_allclose(facets.points.max(axis=0), triangles.max(axis=(0, 1)), atol=0.08)


def test_facets_that_all_lie_in_one_point_leave_nothing():
    assert len(lighter_facets(np.ones((10, 3, 3)), 5).corners) == 0


def test_facets_back_to_back_are_dropped_and_the_others_keep_their_winding():
    corners = np.array([[0, 1, 2], [2, 1, 0], [1, 2, 3], [5, 3, 4], [4, 5, 3], [0, 4, 5], [5, 4, 0], [4, 0, 5]])
    turned = sorted(tuple(np.roll(facet, -facet.argmin()).tolist()) for facet in _without_folds(corners, 6))
    # (3, 4, 5) is there twice; of the three on 0, 4, 5 two have one winding and one the other.
    assert turned == [(0, 5, 4), (1, 2, 3), (3, 4, 5), (3, 4, 5)]
