"""Meshes whose mass properties are published or closed forms; the source stands beside each."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from mesh_files import box, hull
from oracles import assert_same_body
from strategies import placements

from core.mesh import survey_triangles
from core.moments import Moments

GOLDEN = (1 + np.sqrt(5)) / 2
EVEN = [np.roll([1, 2, 3], shift) - 1 for shift in range(3)]


def tetrahedron(corners) -> np.ndarray:
    return hull(np.asarray(corners, dtype=float))


def with_turns(base) -> np.ndarray:
    """All sign changes and cyclic orders of one corner."""
    signs = np.array([[x, y, z] for x in (1, -1) for y in (1, -1) for z in (1, -1)])
    return np.unique(np.concatenate([(signs * base)[:, order] for order in EVEN]), axis=0)


class TestTonon:
    """F. Tonon, J. Math. Stat. 1(1), 8-11 (2005), doi 10.3844/jmssp.2005.8.11, as quoted in open test suites."""

    CORNERS = ((8.33220, -11.86875, 0.93355), (0.75523, 5, 16.37072), (52.61236, 5, -5.38580), (2, 5, 3))

    def test_tetrahedron_has_the_published_values(self):
        # The published figures agree with the printed corners to 7e-8, whence the limit.
        solid = survey_triangles(tetrahedron(self.CORNERS)).solid
        assert solid.mass == pytest.approx(1873.233236, rel=1e-7)
        # The mean of the printed corners is 15.9249475 in x; the published 15.92492 is off by 2.75e-5.
        assert (np.abs(solid.centre - [15.92492, 0.78281, 3.72962]) < [2.8e-5, 5e-6, 5e-6]).all()
        # The published matrix swaps the places of two products; these are named by their integrals.
        inertia = solid.inertia_about_centre
        np.testing.assert_allclose(np.diag(inertia), [43520.33257, 194711.28938, 191168.76173], rtol=1e-7)
        products = [-inertia[1, 2], -inertia[0, 2], -inertia[0, 1]]
        np.testing.assert_allclose(products, [4417.66150, -46343.16662, 11996.20119], rtol=1e-7)

    def test_tetrahedron_has_the_values_recomputed_from_the_printed_corners(self):
        solid = survey_triangles(tetrahedron(self.CORNERS)).solid
        assert solid.mass == pytest.approx(1873.233364216, rel=1e-12)
        np.testing.assert_allclose(solid.centre, [15.9249475, 0.7828125, 3.7296175], rtol=1e-13)
        expected = [
            [43520.3332854, -11996.2013932, 46343.1673814],
            [-11996.2013932, 194711.2925908, -4417.6615697],
            [46343.1673814, -4417.6615697, 191168.7648861],
        ]
        np.testing.assert_allclose(solid.inertia_about_centre, expected, rtol=0, atol=6e-8)
        np.testing.assert_allclose(solid.principal.moments, [29535.4310516, 191103.6537946, 208761.3059160], rtol=0, atol=6e-8)


class TestVolIntBodies:
    """Bodies of B. Mirtich's volInt README (1996, public domain); their values in closed form."""

    def test_cube_of_side_20(self):
        solid = survey_triangles(box(20, 20, 20, at=(-10, -10, -10))).solid
        assert_same_body(solid, Moments(8000, np.zeros(3), np.eye(3) * 8000 * 400 / 12), rel=1e-15)
        np.testing.assert_allclose(np.diag(solid.inertia_about_centre), 533333.333, rtol=1e-9)

    def test_tetrahedron_5_4_3(self):
        solid = survey_triangles(tetrahedron([(0, 0, 0), (5, 0, 0), (0, 4, 0), (0, 0, 3)])).solid
        assert solid.mass == pytest.approx(10, rel=1e-15)
        np.testing.assert_allclose(solid.centre, [1.25, 1, 0.75], rtol=1e-15)
        np.testing.assert_allclose(
            solid.inertia_about_centre, [[9.375, 2.5, 1.875], [2.5, 12.75, 1.5], [1.875, 1.5, 15.375]], rtol=1e-14
        )
        np.testing.assert_allclose(
            solid.inertia_about_point([0, 0, 0]), [[25, -10, -7.5], [-10, 34, -6], [-7.5, -6, 41]], rtol=1e-14
        )

    def test_icosahedron_in_the_unit_sphere(self):
        corners = with_turns([0, 1, GOLDEN]) / np.hypot(1, GOLDEN)
        solid = survey_triangles(hull(corners)).solid
        assert solid.mass == pytest.approx(2.53615071012, rel=1e-11)
        np.testing.assert_allclose(solid.inertia_about_centre, 0.73407035758 * np.eye(3), rtol=0, atol=6e-12)


def test_unit_corner_tetrahedron_has_a_thirtieth_about_its_corner():
    # Volume: mjoldfield.com/atelier/2011/03/tetra-moi.html; the moments from memory: 1/60 and 1/120 (Blow & Binstock).
    solid = survey_triangles(tetrahedron([(0, 0, 0), (1, 0, 0), (0, 1, 0), (0, 0, 1)])).solid
    assert solid.mass == pytest.approx(1 / 6, rel=1e-15)
    np.testing.assert_allclose(solid.centre, 0.25, rtol=1e-15)
    expected = np.full((3, 3), -1 / 120) + np.eye(3) * (1 / 30 + 1 / 120)
    np.testing.assert_allclose(solid.inertia_about_point([0, 0, 0]), expected, rtol=1e-14)


# Moment of inertia per mass and edge length squared, about any axis through the centre: OEIS A341906, which cites
# Satterly, Math. Gaz. 42 (1958) 11-13; the volumes per edge length cubed from memory, recomputed.
PLATONIC = {
    "tetrahedron": (np.array([[1, 1, 1], [1, -1, -1], [-1, 1, -1], [-1, -1, 1]]), 1 / (6 * np.sqrt(2)), 1 / 20),
    "cube": (with_turns([1, 1, 1]), 1, 1 / 6),
    "octahedron": (with_turns([1, 0, 0]), np.sqrt(2) / 3, 1 / 10),
    "icosahedron": (with_turns([0, 1, GOLDEN]), 5 * (3 + np.sqrt(5)) / 12, (3 + np.sqrt(5)) / 20),
    "dodecahedron": (
        np.concatenate([with_turns([1, 1, 1]), with_turns([0, 1 / GOLDEN, GOLDEN])]),
        (15 + 7 * np.sqrt(5)) / 4, (95 + 39 * np.sqrt(5)) / 300,
    ),
}


def shortest_side(corners: np.ndarray) -> float:
    distances = np.linalg.norm(corners[:, None] - corners, axis=-1)
    return distances[distances > 1e-9].min()


@pytest.mark.parametrize("body", PLATONIC)
@settings(max_examples=20)
@given(edge=st.floats(1e-3, 1e3), density=st.floats(0.1, 20), placement=placements())
def test_platonic_solid_has_the_published_moment_per_mass_and_edge(body, edge, density, placement):
    corners, volume, moment = PLATONIC[body]
    corners = corners * (edge / shortest_side(corners))
    survey = survey_triangles(placement.apply(hull(corners)))
    solid = survey.solid.times(density)
    mass = density * volume * edge**3
    # A small solid a metre away from the origin has corners of fewer digits than a large one.
    digits = 4e-16 * (1 + np.linalg.norm(placement.shift) / edge)
    assert survey.verdict == "closed"
    assert solid.mass == pytest.approx(mass, rel=1e-12 + 50 * digits)
    expected = moment * mass * edge**2 * np.eye(3)
    np.testing.assert_allclose(solid.inertia_about_centre, expected, rtol=0, atol=(1e-12 + 100 * digits) * mass * edge**2)
    np.testing.assert_allclose(solid.centre, placement.shift, rtol=0, atol=(1e-13 + digits) * edge)
