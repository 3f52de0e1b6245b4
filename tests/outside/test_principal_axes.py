"""Principal moments and axes as printed."""

from __future__ import annotations

import numpy as np
import pytest

from core.moments import Moments, principal_axes
from core.placement import Pose, matrix_of_turns, turn_about
from core.shapes import Box

# Curtis, Orbital Mechanics for Engineering Students, rigid-body chapter (kg·m²).
CURTIS = np.array([[100.0, -20, -100], [-20, 300, -50], [-100, -50, 500]])
CURTIS_PRINTED = (72.1083, 295.840, 532.052)


def test_the_tensor_of_a_satellite():
    principal = principal_axes(CURTIS)
    for got, printed, half_digit in zip(principal.moments, CURTIS_PRINTED, (0.00005, 0.0005, 0.0005), strict=True):
        assert got == pytest.approx(printed, abs=half_digit)
    # The directions were recomputed to four digits; their signs are free.
    directions = np.array([[0.9609, 0.1371, 0.2406], [0.1767, -0.9725, -0.1516], [0.2132, 0.1882, -0.9587]])
    along = np.sign(np.einsum("ij,ij->i", directions, principal.axes))
    np.testing.assert_allclose(principal.axes, along[:, None] * directions, rtol=0, atol=0.00005)


def test_the_three_moments_of_a_tensor_turned_about_two_axes():
    # P. Junglas, course notes on rigid bodies, node 41: diag(1, 3, 5), the frame turned 30° about x, then 45° about z
    # (so the body turns the other way).
    printed = np.array([[2.2500, 1.2500, 0.6124], [1.2500, 2.2500, 0.6124], [0.6124, 0.6124, 4.5000]])
    turn = matrix_of_turns((-np.pi / 6, 0, -np.pi / 4))
    np.testing.assert_allclose(turn @ np.diag([1, 3, 5]) @ turn.T, printed, rtol=0, atol=0.00005)
    # Four printed digits carry the eigenvalues to 1.5e-4 at most (the norm of the rounding, Weyl's theorem).
    np.testing.assert_allclose(principal_axes(printed).moments, [1, 3, 5], rtol=0, atol=1.5e-4)


@pytest.mark.parametrize("side", [0.02, 1.0, 35.0])
def test_a_cube_about_its_corner(side):
    # Cline, Variational Principles in Classical Mechanics, ch. 13: M a²/6 along the diagonal, 11 M a²/12 twice.
    cube = Pose(position=(side / 2, side / 2, 0)).placement.place(Box(side, side, side).moments().times(2700.0))
    unit = float(cube.mass) * side**2
    tensor = cube.inertia_about_point([0, 0, 0])
    np.testing.assert_allclose(tensor, unit * (np.full((3, 3), -1 / 4) + np.eye(3) * (2 / 3 + 1 / 4)), rtol=1e-13)
    principal = principal_axes(tensor)
    np.testing.assert_allclose(principal.moments, unit * np.array([1 / 6, 11 / 12, 11 / 12]), rtol=1e-13)
    assert principal.tie == "23"
    np.testing.assert_allclose(principal.axes[0], np.full(3, 3**-0.5), rtol=0, atol=1e-14)


def test_a_cube_about_its_centre_has_no_axis_of_its_own():
    turn = turn_about([3, 1, 2], 0.9)
    assert Box(0.1, 0.1, 0.1).moments().mapped(turn, [0, 0, 0]).principal.tie == "123"


def lamina(rectangles: list[tuple[float, float, float, float]]) -> Moments:
    """A plane figure of rectangles (width, height, x, y): sheets 1e-8 thick, of unit mass per area."""
    sheets = [
        Pose(position=(x, y, 0)).placement.place(Box(width, height, 1e-8).moments().with_mass(width * height))
        for width, height, x, y in rectangles
    ]
    return sum(sheets, Moments.nothing())


# Figures as rectangles; Ix, Iy, ∫xy dA about the centroid; largest and smallest principal moment in the plane; the
# angle between x and a principal axis (0: of the smallest, 1: of the largest moment); each with half a unit of its
# last digit, as re-keyed from the books.
FIGURES = {
    # Tayal, Example 12-15, cm⁴.
    "Z of flanges 12 × 3 and web 2 × 6": (
        [(12, 3, -5, 4.5), (12, 3, 5, -4.5), (2, 6, 0, 0)],
        ([1548, 2668, -1620], 0.5),
        ([3822, 394], 0.5),
        (0, 35.47, 0.005),
    ),
    # Hibbeler, Examples 10.6 and 10.8, 1e9 mm⁴; principal values from memory of the printed answer.
    "Z of three rectangles": (
        [(100, 300, -250, 200), (600, 100, 0, 0), (100, 300, 250, -200)],
        ([2.90e9, 5.60e9, -3.00e9], 0.005e9),
        ([7.54e9, 0.960e9], 0.005e9),
        (1, 57.1, 0.05),
    ),
    # Pytel & Kiusalaas, Example A.4, mm⁴: printed with centroids rounded, hence 1e-4 on the principal values.
    "L 200 × 160 × 30": (
        [(30, 200, 15, 100), (130, 30, 95, 15)],
        ([37.37e6, 21.07e6, -16.07e6], 0.005e6),
        ([47_240_734, 11_198_811], 2_000),
        (1, 31.6, 0.05),
    ),
}


@pytest.mark.parametrize(("rectangles", "plane", "principal", "angle"), FIGURES.values(), ids=FIGURES)
def test_a_plane_figure_has_the_printed_principal_moments(rectangles, plane, principal, angle):
    tensor = lamina(rectangles).inertia_about_centre
    got = [tensor[0, 0], tensor[1, 1], -tensor[0, 1]]
    np.testing.assert_allclose(got, plane[0], rtol=0, atol=plane[1])
    found = principal_axes(tensor)
    np.testing.assert_allclose(found.moments[[1, 0]], principal[0], rtol=0, atol=principal[1])
    row, degrees, half_digit = angle
    x, y, _ = found.axes[row]
    assert np.degrees(np.arctan2(abs(y), abs(x))) == pytest.approx(degrees, abs=half_digit)


def test_a_lamina_given_by_its_rounded_moments():
    # Beer & Johnston, Sample 9.7, in⁴: Ix 10.38, Iy 6.97, Ixy −6.56.
    tensor = np.array([[10.38, 6.56, 0], [6.56, 6.97, 0], [0, 0, 17.35]])
    found = principal_axes(tensor)
    assert found.moments[1] == pytest.approx(15.45, abs=0.005)
    assert found.moments[0] == pytest.approx(1.897, abs=0.0005)
    x, y, _ = found.axes[1]
    assert np.degrees(np.arctan2(y, x)) == pytest.approx(37.7, abs=0.05)
