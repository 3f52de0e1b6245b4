"""What must hold for every mesh: closed and open surfaces, turned, shifted far away, with edges split."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mesh_files import hull
from strategies import rotations

from core.mesh import MeshSurvey, survey_triangles
from core.mesh.weld import weld_exactly

SEEDS = st.integers(0, 2**32 - 1)
COORDINATES = st.floats(-1e6, 1e6, width=32)
FACETS = st.lists(st.tuples(*[st.tuples(*[COORDINATES] * 3)] * 3), min_size=1, max_size=20)


def dyadic_hull(seed: int) -> np.ndarray:
    """A hull about 4 across, in multiples of 2⁻²⁰: shifted by a whole number below 2³², each corner is exact."""
    points = np.random.default_rng(seed).normal(size=(24, 3))
    return hull(np.round(points * 2**20) / 2**20)


def assert_same_survey(survey: MeshSurvey, mass, centre, spread, lost_by_distance=0.0):
    """Compare a closed mesh's numbers; its centre may lose what a double so far away cannot hold."""
    assert (survey.verdict, survey.closed, survey.open_edges) == ("closed", True, 0)
    size = survey.diagonal
    assert survey.solid.mass == pytest.approx(mass, rel=1e-12)
    np.testing.assert_allclose(survey.solid.centre, centre, rtol=0, atol=1e-12 * size + lost_by_distance)
    np.testing.assert_allclose(survey.solid.spread, spread, rtol=0, atol=1e-12 * mass * size**2)


@pytest.mark.parametrize("precision", [np.float32, np.float64])
@given(facets=FACETS, seed=SEEDS)
def test_any_triangles_with_their_reverse_are_closed_and_enclose_nothing(precision, facets, seed):
    soup = np.array(facets, dtype=precision)
    both = np.random.default_rng(seed).permutation(np.concatenate([soup, soup[:, ::-1]]))
    survey = survey_triangles(both)
    assert (survey.verdict, survey.closed, survey.open_edges) == ("closed", True, 0)
    assert survey.solid is None


@given(SEEDS)
@settings(max_examples=20)
def test_a_closed_mesh_is_open_without_any_one_of_its_facets(seed):
    triangles = dyadic_hull(seed)
    assert survey_triangles(triangles).closed
    for facet in range(len(triangles)):
        survey = survey_triangles(np.delete(triangles, facet, axis=0))
        assert (survey.closed, survey.open_edges) == (False, 3)


@given(SEEDS, rotations())
def test_turning_a_mesh_turns_its_numbers_and_nothing_else(seed, turn):
    triangles = dyadic_hull(seed)
    solid = survey_triangles(triangles).solid
    turned = survey_triangles(triangles @ turn.T)
    assert_same_survey(turned, solid.mass, turn @ solid.centre, turn @ solid.spread @ turn.T)


@given(SEEDS, st.tuples(*[st.integers(-4_000_000, 4_000_000)] * 3))
def test_shifting_a_mesh_by_a_million_times_its_size_shifts_its_centre_and_nothing_else(seed, shift):
    triangles, far = dyadic_hull(seed), np.array(shift, dtype=float)
    solid = survey_triangles(triangles).solid
    rounding = 2 * np.spacing(np.abs(far).max())
    assert_same_survey(survey_triangles(triangles + far), solid.mass, solid.centre + far, solid.spread, rounding)


def split_edge(triangles: np.ndarray, edge: int) -> np.ndarray:
    """The same surface with one edge, and the two facets on it, cut in two at the edge's middle."""
    points, corners = weld_exactly(triangles)
    start, stop = corners[edge // 3, edge % 3], corners[edge // 3, (edge + 1) % 3]
    middle = (points[start] + points[stop]) / 2
    on_edge = (corners == start).any(axis=1) & (corners == stop).any(axis=1)
    halves = []
    for end in (start, stop):
        half = triangles[on_edge].copy()
        half[corners[on_edge] == end] = middle
        halves.append(half)
    return np.concatenate([triangles[~on_edge], *halves])


@given(SEEDS, st.lists(st.integers(0, 10**6), min_size=1, max_size=12))
def test_splitting_edges_changes_nothing(seed, edges):
    triangles = dyadic_hull(seed)
    survey = survey_triangles(triangles)
    finer = triangles
    for edge in edges:
        finer = split_edge(finer, edge % (3 * len(finer)))
    assert len(finer) == len(triangles) + 2 * len(edges)
    split = survey_triangles(finer)
    assert_same_survey(split, survey.solid.mass, survey.solid.centre, survey.solid.spread)
    assert split.area == pytest.approx(survey.area, rel=1e-12)
