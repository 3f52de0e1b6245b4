"""The same meshes by independent routes: a mesh library, hulls and cubature of SciPy, exact integrals of SymPy."""

import numpy as np
import pytest
import sympy
import trimesh
from hypothesis import given, settings
from hypothesis import strategies as st
from mesh_files import box, hull, quartered, ring_grid
from oracles import assert_same_body
from scipy.integrate import nquad
from scipy.spatial import ConvexHull, Delaunay
from strategies import rotations
from sympy.integrals.intpoly import polytope_integrate

from core.mesh import survey_triangles
from core.moments import Moments

DENSITY = 7.85
SEEDS = st.integers(0, 2**32 - 1)


def simplex_moments(points: np.ndarray) -> Moments:
    """The moments of the convex hull of points, summed over the tetrahedra of its Delaunay triangulation.

    A tetrahedron's second moment about its centroid is V/20 · Σ (r_i − c)(r_i − c)ᵀ over its corners.
    """
    corners = points[Delaunay(points).simplices]
    volumes = np.abs(np.linalg.det(corners[:, 1:] - corners[:, :1])) / 6
    centres = corners.mean(axis=1)
    levers = corners - centres[:, None]
    return Moments(volumes, centres, volumes[:, None, None] / 20 * np.einsum("nki,nkj->nij", levers, levers)).total()


def library_moments(triangles: np.ndarray) -> Moments:
    mesh = trimesh.Trimesh(**trimesh.triangles.to_kwargs(triangles), process=True)
    mesh.density = DENSITY
    return Moments.from_inertia(mesh.mass, mesh.center_mass, (mesh.moment_inertia + mesh.moment_inertia.T) / 2)


BODIES = {
    "box": quartered(box(4, 3, 2), 2),
    "ring": ring_grid(60, 30).astype(float) / 10,
    "ball": np.asarray(trimesh.creation.icosphere(subdivisions=3).triangles),
    "sleeve": np.asarray(trimesh.creation.annulus(1.0, 2.0, 3.0).triangles),
    "cone": np.asarray(trimesh.creation.cone(1.0, 2.0).triangles),
}


@pytest.mark.parametrize("body", BODIES)
@settings(max_examples=10)
@given(turn=rotations())
def test_mesh_library_finds_the_same_mass_centre_and_tensor(body, turn):
    triangles = BODIES[body] @ turn.T + (1, -2, 3)
    survey = survey_triangles(triangles)
    assert_same_body(survey.solid.times(DENSITY), library_moments(triangles), rel=1e-12)


@pytest.mark.parametrize("body", BODIES)
def test_mesh_library_finds_the_same_area_and_closedness(body):
    triangles = BODIES[body]
    mesh = trimesh.Trimesh(**trimesh.triangles.to_kwargs(triangles), process=True)
    survey = survey_triangles(triangles)
    assert (survey.verdict, mesh.is_watertight) == ("closed", True)
    assert survey.area == pytest.approx(mesh.area, rel=1e-13)
    np.testing.assert_array_equal(survey.bounds, mesh.bounds)


@settings(max_examples=25)
@given(SEEDS, rotations())
def test_turned_hulls_agree_with_the_sum_of_their_tetrahedra(seed, turn):
    points = np.random.default_rng(seed).normal(size=(25, 3)) * (3, 1, 0.3) @ turn.T
    survey = survey_triangles(hull(points))
    assert survey.verdict == "closed"
    assert survey.solid.mass == pytest.approx(ConvexHull(points).volume, rel=1e-12)
    assert survey.area == pytest.approx(ConvexHull(points).area, rel=1e-12)
    assert_same_body(survey.solid.times(DENSITY), simplex_moments(points).times(DENSITY), rel=1e-12)


@settings(max_examples=25)
@given(SEEDS)
def test_hulls_a_hundred_thousand_sizes_away_lose_nothing(seed):
    # Corners on a grid of 2⁻²⁰ stay exact in doubles at this distance, so only the kernel could lose digits.
    rng = np.random.default_rng(seed)
    points = np.round(rng.normal(size=(25, 3)) * 2**20) / 2**20
    far = np.array([1e5, -1e5, 1e5])
    expected = simplex_moments(points).times(DENSITY)
    solid = survey_triangles(hull(points) + far).solid.times(DENSITY)
    # The centre itself is a number near 1e5 and rounds there; mass and tensor do not.
    assert_same_body(Moments(solid.mass, solid.centre - far, solid.spread), expected, rel=3e-11)
    assert solid.mass == pytest.approx(expected.mass, rel=1e-13)
    np.testing.assert_allclose(solid.spread, expected.spread, rtol=0, atol=1e-12 * np.abs(expected.spread).max())


@settings(max_examples=25)
@given(SEEDS)
def test_hulls_are_the_same_whichever_way_their_facets_are_given(seed):
    rng = np.random.default_rng(seed)
    triangles = hull(rng.normal(size=(25, 3)))
    survey = survey_triangles(triangles)
    permuted = survey_triangles(rng.permutation(triangles))
    flipped = survey_triangles(triangles[:, ::-1])
    finer = survey_triangles(quartered(triangles))
    for other, verdict in ((permuted, "closed"), (flipped, "inside out")):
        assert other.verdict == verdict
        assert_same_body(other.solid, survey.solid, rel=1e-13)
    # Middles of sides are rounded alike on both facets, which keeps the surface closed and moves it by a last bit.
    assert finer.verdict == "closed"
    assert_same_body(finer.solid, survey.solid, rel=1e-13)


def test_a_tetrahedron_agrees_with_exact_rational_integrals():
    corners = [(1, 2, 3), (7, 1, 2), (2, 9, 1), (3, 2, 11)]
    faces = [[0, 2, 1], [0, 1, 3], [1, 2, 3], [0, 3, 2]]
    x, y, z = sympy.symbols("x y z")

    def integral(integrand):
        # polytope_integrate takes corners and faces whose signed sum may be negative with its own winding.
        return polytope_integrate([corners, *faces], integrand)

    sign = 1 if integral(1) > 0 else -1
    volume = sign * integral(1)
    first = [sign * integral(axis) for axis in (x, y, z)]
    second = [[sign * integral(one * other) for other in (x, y, z)] for one in (x, y, z)]
    centre = [value / volume for value in first]
    spread = [[float(second[i][j] - volume * centre[i] * centre[j]) for j in range(3)] for i in range(3)]
    expected = Moments(float(volume), [float(value) for value in centre], spread)
    solid = survey_triangles(hull(np.array(corners, dtype=float))).solid
    assert_same_body(solid.times(DENSITY), expected.times(DENSITY), rel=1e-14)


def test_a_wedge_agrees_with_nested_quadrature():
    # The body 0 ≤ z ≤ 2, z/4 ≤ x ≤ 1 + z/2, x ≤ y ≤ 4 − z, integrated limit by limit.
    limits = [lambda x, z: (x, 4 - z), lambda z: (z / 4, 1 + z / 2), (0, 2)]

    def integral(function):
        return nquad(lambda y, x, z: function(np.array([x, y, z])), limits, opts={"epsabs": 1e-12, "epsrel": 1e-12})[0]

    corners = [(x, y, z) for z in (0.0, 2.0) for x in limits[1](z) for y in limits[0](x, z)]
    volume = integral(lambda _: 1.0)
    centre = np.array([integral(lambda r, i=i: r[i]) for i in range(3)]) / volume
    spread = [[integral(lambda r, i=i, j=j: (r - centre)[i] * (r - centre)[j]) for j in range(3)] for i in range(3)]
    solid = survey_triangles(hull(np.array(corners))).solid
    assert_same_body(solid.times(DENSITY), Moments(volume, centre, spread).times(DENSITY), rel=1e-11)
