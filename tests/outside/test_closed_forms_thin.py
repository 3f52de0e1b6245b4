"""Inertia of bodies without thickness as published, and the limits that connect them to solids.

Formulas: rod, hoop, disc and spherical shell from Wikipedia, "List of moments of inertia"; shells of cylinder, cone,
frustum, hemisphere and torus from memory, with numbers found by quadrature. Each formula is held against the shape
as it stands, and again at 11.7 kg/m² or kg/m, turned and 40 m away, about the same material point and axis.
"""

from __future__ import annotations

import numpy as np
import pytest
from oracles import assert_same_body

from core.placement import Placement, turn_about
from core.shapes import (
    ConicalShell,
    Cylinder,
    CylindricalShell,
    DomedShell,
    HollowSphere,
    PointMass,
    SphericalShell,
    ThinDisc,
    ThinRing,
    ThinRod,
    ThinSheet,
    ToroidalShell,
    Torus,
    Tube,
)

R, R1, R2, H, L = 0.15, 0.06, 0.11, 0.37, 0.83
X, Z = (1.0, 0.0, 0.0), (0.0, 0.0, 1.0)
FAR = Placement(turn_about([1, -2, 0.5], 1.1), [40.0, -7.0, 12.0])
MASS_PER_MEASURE = 11.7

# body, measure (m² or m), centre of mass above z = 0, point of the axis, direction, J per unit mass
FORMS = {
    "rod about its centre": (ThinRod(L), L, L / 2, L / 2, X, L**2 / 12),
    "rod about its end": (ThinRod(L), L, L / 2, 0.0, X, L**2 / 3),
    "rod about itself": (ThinRod(L), L, L / 2, 0.0, Z, 0.0),
    "hoop, axial": (ThinRing(2 * R), 2 * np.pi * R, 0.0, 0.0, Z, R**2),
    "hoop, transverse": (ThinRing(2 * R), 2 * np.pi * R, 0.0, 0.0, X, R**2 / 2),
    "disc, axial": (ThinDisc(2 * R, 0.0), np.pi * R**2, 0.0, 0.0, Z, R**2 / 2),
    "disc, transverse": (ThinDisc(2 * R, 0.0), np.pi * R**2, 0.0, 0.0, X, R**2 / 4),
    "disc with a hole": (ThinDisc(2 * R2, 2 * R1), np.pi * (R2**2 - R1**2), 0.0, 0.0, Z, (R1**2 + R2**2) / 2),
    "sheet, axial": (ThinSheet(H, L), H * L, 0.0, 0.0, Z, (H**2 + L**2) / 12),
    "sheet about x": (ThinSheet(H, L), H * L, 0.0, 0.0, X, L**2 / 12),
    "cylinder shell, axial": (CylindricalShell(2 * R, H), 2 * np.pi * R * H, H / 2, 0.0, Z, R**2),
    "cylinder shell, transverse": (CylindricalShell(2 * R, H), 2 * np.pi * R * H, H / 2, H / 2, X, R**2 / 2 + H**2 / 12),
    "conical shell, axial": (ConicalShell(2 * R, 0.0, H), np.pi * R * np.hypot(R, H), H / 3, 0.0, Z, R**2 / 2),
    "conical shell, transverse": (
        ConicalShell(2 * R, 0.0, H), np.pi * R * np.hypot(R, H), H / 3, H / 3, X, R**2 / 4 + H**2 / 18,
    ),
    "frustum shell, axial": (
        ConicalShell(2 * R2, 2 * R1, H),
        np.pi * (R1 + R2) * np.hypot(R2 - R1, H),
        H * (R2 + 2 * R1) / (3 * (R1 + R2)),
        0.0,
        Z,
        (R1**2 + R2**2) / 2,
    ),
    "spherical shell": (SphericalShell(2 * R), 4 * np.pi * R**2, 0.0, 0.0, (1.0, 2.0, -3.0), 2 * R**2 / 3),
    "hemispherical shell, axial": (DomedShell(2 * R, R), 2 * np.pi * R**2, R / 2, 0.0, Z, 2 * R**2 / 3),
    "hemispherical shell, transverse": (DomedShell(2 * R, R), 2 * np.pi * R**2, R / 2, R / 2, X, 5 * R**2 / 12),
    "torus shell, axial": (ToroidalShell(2 * R, 2 * R1), 4 * np.pi**2 * R * R1, 0.0, 0.0, Z, R**2 + 3 * R1**2 / 2),
    "torus shell, transverse": (
        ToroidalShell(2 * R, 2 * R1), 4 * np.pi**2 * R * R1, 0.0, 0.0, X, R**2 / 2 + 5 * R1**2 / 4,
    ),
    "point about itself": (PointMass(0.01), 1.0, 0.0, 0.0, X, 0.0),
    "point at a distance": (PointMass(0.01), 1.0, 0.0, L, X, L**2),
}
columns = ("shape", "measure", "height", "point", "direction", "per_mass")


@pytest.mark.parametrize(columns, FORMS.values(), ids=FORMS)
def test_a_thin_body_has_the_published_inertia(shape, measure, height, point, direction, per_mass):
    body = shape.moments()
    assert float(body.mass) == pytest.approx(measure, rel=1e-14)
    np.testing.assert_allclose(body.centre, [0, 0, height], rtol=1e-14, atol=1e-17)
    about = float(body.inertia_about_axis([0, 0, point], direction) / body.mass)
    assert about == pytest.approx(per_mass, rel=1e-14, abs=1e-17)


@pytest.mark.parametrize(columns, FORMS.values(), ids=FORMS)
def test_so_it_has_with_mass_turned_and_forty_metres_away(shape, measure, height, point, direction, per_mass):
    body = FAR.place(shape.moments().times(MASS_PER_MEASURE))
    assert float(body.mass) == pytest.approx(MASS_PER_MEASURE * measure, rel=1e-14)
    np.testing.assert_allclose(body.centre, FAR.apply([0, 0, height]), rtol=1e-14)
    about = body.inertia_about_axis(FAR.apply([0, 0, point]), FAR.turn_only(direction))
    assert float(about / body.mass) == pytest.approx(per_mass, rel=1e-11, abs=1e-15)


# Centre, axial and transverse J per unit mass by quadrature, as printed: to half a unit of the last digit.
NUMBERS = {
    "torus shell 3, 1": (ToroidalShell(6.0, 2.0), (0.0, 10.5, 5.75), 1e-9),
    "conical shell 1, 2": (ConicalShell(2.0, 0.0, 2.0), (2 / 3, 0.5, 0.4722222), 0.5e-7),
    "frustum shell 2, 1, 3": (ConicalShell(4.0, 2.0, 3.0), (4 / 3, 2.5, 1.9722222), 0.5e-7),
}


@pytest.mark.parametrize(("shape", "numbers", "gap"), NUMBERS.values(), ids=NUMBERS)
def test_a_shell_has_the_tabulated_numbers(shape, numbers, gap):
    body = shape.moments()
    about = body.inertia_about_centre / float(body.mass)
    np.testing.assert_allclose((body.centre[2], about[2, 2], about[0, 0]), numbers, rtol=0, atol=gap)


WALL = 1e-7


@pytest.mark.parametrize(
    ("shell", "solid", "thickness"),
    [
        (ThinRod(L), Cylinder(2 * WALL, L), np.pi * WALL**2),
        (ThinDisc(2 * R2, 2 * R1), Tube(2 * R2, 2 * R1, WALL), WALL),
        (CylindricalShell(2 * R, H), Tube(2 * R + WALL, 2 * R - WALL, H), WALL),
        (SphericalShell(2 * R), HollowSphere(2 * R + WALL, 2 * R - WALL), WALL),
        (ThinRing(2 * R), Torus(2 * R, 2 * WALL), np.pi * WALL**2),
    ],
    ids=["rod", "disc", "cylindrical shell", "spherical shell", "ring"],
)
def test_a_solid_of_vanishing_thickness_tends_to_the_thin_body(shell, solid, thickness):
    # What is left is of the order of the wall over the radius; walls come out of D − d, which costs 1e-16·R/WALL.
    assert_same_body(solid.moments(), shell.moments().times(thickness), rel=2e-6)


def test_a_disc_weighed_by_area_is_the_cylinder_of_that_thickness():
    # 4 mm of steel are 31.4 kg/m²; about the axis the thickness does not count.
    disc = ThinDisc(0.3, 0.0).moments().times(7850.0 * 0.004)
    plate = Cylinder(0.3, 0.004).moments().times(7850.0)
    assert float(disc.mass) == pytest.approx(float(plate.mass), rel=1e-14)
    assert float(disc.own_inertia_along(Z)) == pytest.approx(float(plate.own_inertia_along(Z)), rel=1e-14)


@pytest.mark.parametrize("height", [1e-9, 0.01, 0.15, 0.2999999, 0.3])
def test_a_dome_of_any_height_has_the_moments_that_quadrature_finds(height):
    from scipy.integrate import quad

    diameter = 0.3
    opening = 2 * np.arcsin(np.sqrt(height / diameter))

    def integral(value):
        def ring(angle):
            radius, depth = diameter / 2 * np.sin(angle), diameter * np.sin(angle / 2) ** 2
            return value(radius, height - depth) * 2 * np.pi * radius * diameter / 2

        return quad(ring, 0, opening, epsabs=0, epsrel=1e-12)[0]

    area = integral(lambda _r, _z: 1.0)
    body = DomedShell(diameter, height).moments()
    assert float(body.mass) == pytest.approx(area, rel=1e-12)
    assert float(body.centre[2]) == pytest.approx(integral(lambda _r, z: z) / area, rel=1e-12)
    assert body.spread[0, 0] == pytest.approx(integral(lambda r, _z: r * r / 2), rel=1e-11)
    assert body.spread[2, 2] == pytest.approx(integral(lambda _r, z: (z - height / 2) ** 2), rel=1e-11)
