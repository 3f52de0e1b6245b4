"""Inertia of solids as published: formulas per unit mass, and numbers found by quadrature.

Formulas: Wikipedia, "List of moments of inertia" and "List of moment of inertia tensors"; the centroidal form of
the cone, the frustum's formulas, those of cap and pyramid, the torus across its axis and the isotropic cylinder are
from memory; cube and tetrahedron are also in OEIS A341906 (notes, citing Satterly, Math. Gazette 42 (1958) 11–13);
the hemisphere's are those of an open question-and-answer page, put to their right axes. Each formula is held against the shape as it
stands, and again at the density of steel, turned and 40 m away, about the same material point and axis.
"""

from __future__ import annotations

import numpy as np
import pytest
from oracles import assert_same_body, revolved_by_quadrature

from core.placement import Placement, turn_about
from core.shapes import (
    Box,
    Cone,
    Cylinder,
    Ellipsoid,
    Frustum,
    Hemisphere,
    HollowFrustum,
    HollowSphere,
    Pyramid,
    RegularPrism,
    Sphere,
    SphericalCap,
    Tetrahedron,
    Torus,
    Tube,
    Wedge,
)

R, R1, R2, H = 0.15, 0.06, 0.11, 0.37
W, D, L = 0.12, 0.31, 0.05
CAP = 0.07
X, Z = (1.0, 0.0, 0.0), (0.0, 0.0, 1.0)
FAR = Placement(turn_about([1, -2, 0.5], 1.1), [40.0, -7.0, 12.0])

# body, centre of mass above the base, point of the axis, direction, J per unit mass
FORMS = {
    "cuboid about h": (Box(W, D, H), H / 2, H / 2, Z, (W**2 + D**2) / 12),
    "cuboid about w": (Box(W, D, H), H / 2, H / 2, X, (D**2 + H**2) / 12),
    "cube about an edge's direction": (Box(L, L, L), L / 2, L / 2, X, L**2 / 6),
    "cube about its diagonal": (Box(L, L, L), L / 2, L / 2, (1.0, 1.0, 1.0), L**2 / 6),
    "cylinder, axial": (Cylinder(2 * R, H), H / 2, 0.0, Z, R**2 / 2),
    "cylinder, transverse": (Cylinder(2 * R, H), H / 2, H / 2, X, (3 * R**2 + H**2) / 12),
    "tube, axial": (Tube(2 * R2, 2 * R1, H), H / 2, 0.0, Z, (R1**2 + R2**2) / 2),
    "tube, transverse": (Tube(2 * R2, 2 * R1, H), H / 2, H / 2, X, (3 * (R1**2 + R2**2) + H**2) / 12),
    "cone, axial": (Cone(2 * R, H), H / 4, 0.0, Z, 3 * R**2 / 10),
    "cone about its apex": (Cone(2 * R, H), H / 4, H, X, 3 * H**2 / 5 + 3 * R**2 / 20),
    "cone about its centroid": (Cone(2 * R, H), H / 4, H / 4, X, 3 * R**2 / 20 + 3 * H**2 / 80),
    "frustum, axial": (
        Frustum(2 * R2, 2 * R1, H),
        H * (R2**2 + 2 * R1 * R2 + 3 * R1**2) / (4 * (R1**2 + R1 * R2 + R2**2)),
        0.0,
        Z,
        3 * (R2**5 - R1**5) / (10 * (R2**3 - R1**3)),
    ),
    "sphere": (Sphere(2 * R), 0.0, 0.0, (1.0, 2.0, -3.0), 2 * R**2 / 5),
    "hollow sphere": (
        HollowSphere(2 * R2, 2 * R1), 0.0, 0.0, (1.0, 2.0, -3.0), 2 * (R2**5 - R1**5) / (5 * (R2**3 - R1**3)),
    ),
    "hemisphere, axial": (Hemisphere(2 * R), 3 * R / 8, 0.0, Z, 2 * R**2 / 5),
    "hemisphere, transverse": (Hemisphere(2 * R), 3 * R / 8, 3 * R / 8, X, 83 * R**2 / 320),
    "cap, axial": (
        SphericalCap(2 * R, CAP),
        3 * (2 * R - CAP) ** 2 / (4 * (3 * R - CAP)) - (R - CAP),
        0.0,
        Z,
        CAP * (20 * R**2 - 15 * R * CAP + 3 * CAP**2) / (10 * (3 * R - CAP)),
    ),
    "ellipsoid about c": (Ellipsoid(2 * R, 2 * R1, 2 * R2), 0.0, 0.0, Z, (R**2 + R1**2) / 5),
    "ellipsoid about a": (Ellipsoid(2 * R, 2 * R1, 2 * R2), 0.0, 0.0, X, (R1**2 + R2**2) / 5),
    "torus, axial": (Torus(2 * R, 2 * R1), 0.0, 0.0, Z, (4 * R**2 + 3 * R1**2) / 4),
    "torus, transverse": (Torus(2 * R, 2 * R1), 0.0, 0.0, X, (4 * R**2 + 5 * R1**2) / 8),
    "square pyramid, axial": (Pyramid(W, W, H), H / 4, 0.0, Z, W**2 / 10),
    "square pyramid, transverse": (Pyramid(W, W, H), H / 4, H / 4, X, W**2 / 20 + 3 * H**2 / 80),
    "tetrahedron": (Tetrahedron(L), L / 24**0.5, L / 24**0.5, (1.0, 2.0, -3.0), L**2 / 20),
    "square prism": (RegularPrism(4, W, H), H / 2, 0.0, Z, W**2 / 6),
}


@pytest.mark.parametrize(("shape", "height", "point", "direction", "per_mass"), FORMS.values(), ids=FORMS)
def test_a_solid_has_the_published_inertia(shape, height, point, direction, per_mass):
    body = shape.moments()
    np.testing.assert_allclose(body.centre, [0, 0, height], rtol=1e-14, atol=1e-17)
    assert body.inertia_about_axis([0, 0, point], direction) == pytest.approx(float(body.mass) * per_mass, rel=1e-14)


@pytest.mark.parametrize(("shape", "height", "point", "direction", "per_mass"), FORMS.values(), ids=FORMS)
def test_so_it_has_in_steel_turned_and_forty_metres_away(shape, height, point, direction, per_mass):
    body = FAR.place(shape.moments().times(7850.0))
    np.testing.assert_allclose(body.centre, FAR.apply([0, 0, height]), rtol=1e-14)
    about = body.inertia_about_axis(FAR.apply([0, 0, point]), FAR.turn_only(direction))
    # The lever is a difference of coordinates near 40 m: its square costs 1e-14 × 40 m / 0.05 m at most.
    assert float(about / body.mass) == pytest.approx(per_mass, rel=1e-11)


# Volume, centre above z = 0, axial and transverse J per unit mass: by quadrature, as many digits as stand here.
NUMBERS = {
    "frustum of radii 2 and 1": (Frustum(4.0, 2.0, 3.0), (21.9911485751, 1.1785714286, 1.3285714286, 1.3323979592), 10),
    "cap of height 0.6": (SphericalCap(2.0, 0.6), (0.9047786842, 0.6125 - 0.4, 0.302, None), 10),
    "torus of 3 and 1": (Torus(6.0, 2.0), (None, 0, 9.75, 5.125), 10),
    "pyramid on 2 by 2": (Pyramid(2.0, 2.0, 3.0), (4, 0.75, 0.4, 0.5375), 10),
    "hemisphere": (Hemisphere(2.0), (None, 0.375, 0.4, 0.259375), 10),
}


@pytest.mark.parametrize(("shape", "numbers", "digits"), NUMBERS.values(), ids=NUMBERS)
def test_a_solid_has_the_tabulated_numbers(shape, numbers, digits):
    body = shape.moments()
    about = body.inertia_about_centre / float(body.mass)
    got = (float(body.mass), float(body.centre[2]), float(about[2, 2]), float(about[0, 0]))
    pairs = [(one, number) for one, number in zip(got, numbers, strict=True) if number is not None]
    np.testing.assert_allclose(*zip(*pairs, strict=True), rtol=0, atol=0.5 * 10**-digits)


# Volume over L³ of the Platonic solids that are shapes here (from memory): 1/(6·√2) for the tetrahedron.
def test_the_regular_tetrahedron_has_its_volume_and_is_isotropic():
    body = Tetrahedron(1.0).moments()
    assert float(body.mass) == pytest.approx(0.1178511302, abs=0.5e-10)
    assert body.principal.tie == "123"


@pytest.mark.parametrize("density", [1.0, 7850.0])
@pytest.mark.parametrize(
    ("shape", "slices"),
    [
        (Cylinder(2 * R, H), revolved_by_quadrature(lambda _z: R, 0, H)),
        (Tube(2 * R2, 2 * R1, H), revolved_by_quadrature(lambda _z: R2, 0, H, inner=lambda _z: R1)),
        (Cone(2 * R, H), revolved_by_quadrature(lambda z: R * (1 - z / H), 0, H)),
        (Frustum(2 * R2, 2 * R1, H), revolved_by_quadrature(lambda z: R2 + (R1 - R2) * z / H, 0, H)),
        (Sphere(2 * R), revolved_by_quadrature(lambda z: max(R * R - z * z, 0) ** 0.5, -R, R)),
        (
            HollowSphere(2 * R2, 2 * R1),
            revolved_by_quadrature(
                lambda z: max(R2 * R2 - z * z, 0) ** 0.5, -R2, R2, inner=lambda z: max(R1 * R1 - z * z, 0) ** 0.5
            ),
        ),
        (
            HollowFrustum(2 * R2, 2 * R1, R2, 0.5 * R1, H),
            revolved_by_quadrature(
                lambda z: R2 + (R1 - R2) * z / H, 0, H, inner=lambda z: R2 / 2 + (R1 / 4 - R2 / 2) * z / H
            ),
        ),
        (Hemisphere(2 * R), revolved_by_quadrature(lambda z: max(R * R - z * z, 0) ** 0.5, 0, R)),
        (
            SphericalCap(2 * R, CAP),
            revolved_by_quadrature(lambda z: max(R * R - (z + R - CAP) ** 2, 0) ** 0.5, 0, CAP),
        ),
        (
            Torus(2 * R, 2 * R1),
            revolved_by_quadrature(
                lambda z: R + max(R1 * R1 - z * z, 0) ** 0.5, -R1, R1, inner=lambda z: R - max(R1 * R1 - z * z, 0) ** 0.5
            ),
        ),
    ],
    ids=["cylinder", "tube", "cone", "frustum", "sphere", "hollow sphere", "hollow frustum", "hemisphere", "cap", "torus"],
)
def test_quadrature_over_slices_gives_the_same_turned_and_shifted(shape, slices, density):
    placement = Placement(turn_about([1, 1, 3], 0.8), [0.4, -0.2, 0.7])
    placed = placement.place(slices.times(density))
    # Where a wall runs out (sphere, torus) the integrand has a vertical end, and quadrature loses a digit.
    assert_same_body(placement.place(shape.moments().times(density)), placed, rel=1e-12)


def test_a_box_has_the_tensor_that_triple_quadrature_finds_about_its_corner():
    from scipy.integrate import tplquad

    density = 2700.0

    def integral(value):
        return density * tplquad(value, 0, L, 0, D, 0, W, epsabs=0, epsrel=1e-9)[0]

    expected = [
        [integral(lambda _x, y, z: y * y + z * z), -integral(lambda x, y, _z: x * y), -integral(lambda x, _y, z: x * z)],
        [0, integral(lambda x, _y, z: x * x + z * z), -integral(lambda _x, y, z: y * z)],
        [0, 0, integral(lambda x, y, _z: x * x + y * y)],
    ]
    body = Box(W, D, L).moments().times(density)
    about_corner = body.inertia_about_point([-W / 2, -D / 2, 0])
    np.testing.assert_allclose(np.triu(about_corner), expected, rtol=1e-13, atol=1e-15)


def test_a_wedge_has_the_tensor_that_triple_quadrature_finds_about_its_right_angle():
    from scipy.integrate import tplquad

    density = 2700.0

    def integral(value):
        def top(x, _y):
            return H * (1 - x / W)

        # The order of tplquad: z innermost, then y, then x.
        whole = tplquad(lambda z, y, x: value(x, y, z), 0, W, 0, D, lambda x, y: 0 * (x + y), top, epsabs=0, epsrel=1e-9)
        return density * whole[0]

    expected = [
        [integral(lambda _x, y, z: y * y + z * z), -integral(lambda x, y, _z: x * y), -integral(lambda x, _y, z: x * z)],
        [0, integral(lambda x, _y, z: x * x + z * z), -integral(lambda _x, y, z: y * z)],
        [0, 0, integral(lambda x, y, _z: x * x + y * y)],
    ]
    body = Wedge(W, D, H).moments().times(density)
    about_corner = body.inertia_about_point([-W / 2, -D / 2, 0])
    np.testing.assert_allclose(np.triu(about_corner), expected, rtol=1e-12, atol=1e-14)


@pytest.mark.parametrize("radius", [0.01, 0.3])
def test_a_cylinder_of_height_root_three_radii_is_isotropic(radius):
    about = Cylinder(2 * radius, radius * 3**0.5).moments().inertia_about_centre
    np.testing.assert_allclose(about, about[0, 0] * np.eye(3), rtol=1e-14, atol=0)


def test_the_cube_of_side_twenty_has_the_inertia_printed_for_it():
    # B. Mirtich, volInt README (1996), names the body; V and I by closed form.
    body = Box(20.0, 20.0, 20.0).moments()
    assert float(body.mass) == pytest.approx(8000, rel=1e-15)
    np.testing.assert_allclose(np.diagonal(body.inertia_about_centre), 533333.333, rtol=0, atol=0.5e-3)
