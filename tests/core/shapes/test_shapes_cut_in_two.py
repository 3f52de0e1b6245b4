"""Every shape is the sum of its parts: cut by a plane, taken apart by symmetry, or filled up to a simpler one."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from oracles import assert_same_body
from strategies import LENGTHS, placements, shapes_of

from core.moments import Moments
from core.placement import turn_about
from core.shapes import (
    Box,
    Cone,
    ConicalShell,
    Cylinder,
    CylindricalShell,
    DomedShell,
    Ellipsoid,
    Frustum,
    Hemisphere,
    HollowFrustum,
    HollowSphere,
    PointMass,
    Pyramid,
    RegularPrism,
    Sphere,
    SphericalCap,
    SphericalShell,
    Tetrahedron,
    ThinDisc,
    ThinRing,
    ThinRod,
    ThinSheet,
    ToothedWheel,
    ToroidalShell,
    Torus,
    Tube,
    Wedge,
)

SHARES = st.floats(0.05, 0.95)
NOT_TURNED, HEAD_DOWN = np.eye(3), np.diag([1.0, -1.0, -1.0])


def lifted(body: Moments, height: float) -> Moments:
    return body.mapped(NOT_TURNED, [0, 0, height])


def on_its_head(body: Moments, height: float) -> Moments:
    """Turn a body upside down and set its old z = 0 on a height."""
    return body.mapped(HEAD_DOWN, [0, 0, height])


@given(shapes_of("hollow frustum"), SHARES)
def test_a_hollow_frustum_is_the_two_between_which_a_level_cut_passes(whole: HollowFrustum, share: float):
    base, top, base_bore, top_bore, height = whole.values().values()
    middle, middle_bore = base + (top - base) * share, base_bore + (top_bore - base_bore) * share
    lower = HollowFrustum(base, middle, base_bore, min(middle_bore, middle), share * height)
    upper = HollowFrustum(middle, top, min(middle_bore, middle), top_bore, (1 - share) * height)
    total = lower.moments() + lifted(upper.moments(), share * height)
    # A cut through a wall of 1e-3 of the width loses as many digits in the two widths that meet there.
    thinnest = max(middle - middle_bore, 1e-9 * middle) / middle
    assert_same_body(total, whole.moments(), rel=1e-12 / min(1.0, thinnest), size=max(base, top, height))


@given(shapes_of("hollow frustum"))
def test_a_hollow_frustum_with_its_bore_filled_is_the_frustum(whole: HollowFrustum):
    base, top, base_bore, top_bore, height = whole.values().values()
    core = Moments.nothing()
    if base_bore > 0:
        core = Frustum(base_bore, top_bore, height).moments()
    elif top_bore > 0:
        core = on_its_head(Cone(top_bore, height).moments(), height)
    assert_same_body(whole.moments() + core, Frustum(base, top, height).moments(), rel=1e-13)


@given(LENGTHS, st.floats(1e-12, 0.3), LENGTHS)
def test_a_hollow_frustum_that_does_not_taper_is_the_tube_however_thin_its_wall(diameter, wall, height):
    bore = diameter * (1 - wall)
    tube = Tube(diameter, bore, height).moments()
    assert_same_body(HollowFrustum(diameter, diameter, bore, bore, height).moments(), tube, rel=1e-14)


@given(LENGTHS, st.floats(1e-12, 1e-9), LENGTHS, SHARES)
def test_a_hollow_frustum_of_hair_thin_equal_walls_tends_to_the_conical_shell(diameter, wall, height, taper):
    # With equal walls across the axis the mass of a slice goes with its diameter, as that of the shell does.
    top, hair = diameter * taper, diameter * wall
    hollow = HollowFrustum(diameter, top, diameter - hair, top - hair, height).moments()
    shell = ConicalShell(diameter, top, height).moments()
    size = float(np.sqrt(np.trace(shell.spread) / shell.mass))
    # D − d keeps as many digits as the wall is of the diameter.
    left = 3 * wall / taper + 4e-16 / wall / taper
    np.testing.assert_allclose(hollow.centre, shell.centre, rtol=0, atol=left * size)
    np.testing.assert_allclose(hollow.spread / hollow.mass, shell.spread / shell.mass, rtol=0, atol=left * size**2)


@given(LENGTHS, st.one_of(st.just(0.0), st.floats(1e-3, 0.99)))
def test_a_hollow_sphere_with_its_cavity_filled_is_the_sphere(diameter, share):
    hollow = HollowSphere(diameter, diameter * share).moments()
    core = Sphere(diameter * share).moments() if share else Moments.nothing()
    assert_same_body(hollow + core, Sphere(diameter).moments(), rel=1e-14)


@given(LENGTHS, st.floats(1e-12, 1e-9))
def test_a_hair_thin_hollow_sphere_tends_to_the_spherical_shell(diameter, wall):
    inner = diameter * (1 - wall)
    hollow, shell = HollowSphere(diameter, inner).moments(), SphericalShell(diameter).moments()
    # D − d is exact for neighbouring numbers: the body is what it says it is, however thin.
    assert float(hollow.mass) == pytest.approx(float(shell.mass) * (diameter - inner) / 2, rel=2 * wall + 1e-15)
    np.testing.assert_allclose(hollow.spread / hollow.mass, shell.spread / shell.mass, rtol=2 * wall + 1e-14, atol=0)


@given(LENGTHS, st.floats(1e-6, 1 - 1e-6))
def test_a_sphere_is_the_two_caps_between_which_a_plane_passes(diameter, share):
    height = diameter * share
    upper, lower = SphericalCap(diameter, height), SphericalCap(diameter, diameter - height)
    total = lifted(upper.moments(), diameter - height) + on_its_head(lower.moments(), diameter - height)
    assert_same_body(total, lifted(Sphere(diameter).moments(), diameter / 2), rel=1e-13)


@given(LENGTHS)
def test_a_cap_as_high_as_its_sphere_is_the_sphere_and_half_as_high_the_hemisphere(diameter):
    whole = lifted(Sphere(diameter).moments(), diameter / 2)
    assert_same_body(SphericalCap(diameter, diameter).moments(), whole, rel=1e-15)
    assert_same_body(SphericalCap(diameter, diameter / 2).moments(), Hemisphere(diameter).moments(), rel=1e-15)


@given(LENGTHS, st.floats(1e-12, 1e-6))
def test_a_thin_lens_tends_to_the_paraboloid(diameter, share):
    # Paraboloid of rim radius a = √(D·h): V = π·a²·h/2, centre h/3, Σx² = a²/6 and Σz² = h²/18 of its volume (quadrature).
    height = diameter * share
    lens, square = SphericalCap(diameter, height).moments(), diameter * height
    assert float(lens.mass) == pytest.approx(np.pi * square * height / 2, rel=share)
    assert float(lens.centre[2]) == pytest.approx(height / 3, rel=share)
    about = np.diagonal(lens.spread) / lens.mass
    np.testing.assert_allclose(about, [square / 6, square / 6, height**2 / 18], rtol=2 * share)


@given(LENGTHS, LENGTHS, LENGTHS)
def test_an_ellipsoid_is_the_stretched_sphere(a, b, c):
    stretched = Sphere(1.0).moments().mapped(np.diag([a, b, c]), np.zeros(3)).times(a * b * c)
    assert_same_body(Ellipsoid(a, b, c).moments(), stretched, rel=1e-14)


@given(LENGTHS, st.floats(0.01, 1.0), SHARES)
def test_a_torus_is_the_thinner_one_within_it_and_the_shells_around(diameter, share, inner):
    # Added up by Gauss's rule, which is exact for these polynomials; all lie about the origin, so that moments add.
    nodes, weights = np.polynomial.legendre.leggauss(4)
    low, high = share * inner * diameter, share * diameter
    sections, walls = (low + high) / 2 + (high - low) / 2 * nodes, (high - low) / 4 * weights
    shells = ToroidalShell(diameter, sections).moments().times(walls).total()
    core = Torus(diameter, low).moments()
    assert_same_body(core + shells, Torus(diameter, high).moments(), rel=1e-13)


@given(shapes_of("regular prism"), SHARES)
def test_a_prism_is_the_two_between_which_a_square_cut_passes(whole: RegularPrism, share: float):
    n, width, length = whole.values().values()
    lower, upper = RegularPrism(n, width, share * length), RegularPrism(n, width, (1 - share) * length)
    assert_same_body(lower.moments() + lifted(upper.moments(), share * length), whole.moments(), rel=1e-14)


@given(LENGTHS, LENGTHS)
def test_a_prism_of_four_sides_is_the_square_bar(width, length):
    assert_same_body(RegularPrism(4, width, length).moments(), Box(width, width, length).moments(), rel=1e-14)


@given(LENGTHS, LENGTHS)
def test_a_prism_of_many_sides_tends_to_the_bar_that_it_touches(width, length):
    assert_same_body(RegularPrism(1000, width, length).moments(), Cylinder(width, length).moments(), rel=2e-5)


@given(LENGTHS, LENGTHS)
def test_a_hexagonal_bar_is_six_triangular_ones(width, length):
    # A regular triangle's side is 2·r·tan 60° for its inscribed radius r; that of the hexagon is S/√3.
    triangle = RegularPrism(3, width / 3, length).moments()
    arms = [turn_about([0, 0, 1], np.pi / 3 * k) for k in range(6)]
    middle = width / 3
    parts = [triangle.mapped(turn @ turn_about([0, 0, 1], np.pi / 2 + np.pi / 6), turn @ [0, middle, 0]) for turn in arms]
    total = parts[0]
    for part in parts[1:]:
        total = total + part
    assert_same_body(total, RegularPrism(6, width, length).moments(), rel=1e-13)


@given(LENGTHS)
def test_a_cube_is_six_pyramids_with_their_tips_in_its_middle(side):
    pyramid = on_its_head(Pyramid(side, side, side / 2).moments(), side / 2)
    turns = [turn_about(axis, angle) for axis, angle in (([1, 0, 0], 0), ([1, 0, 0], np.pi))]
    turns += [turn_about(axis, angle) for axis in ([1, 0, 0], [0, 1, 0]) for angle in (np.pi / 2, -np.pi / 2)]
    total = Moments.nothing()
    for turn in turns:
        total = total + pyramid.mapped(turn, np.zeros(3))
    assert_same_body(total, lifted(Box(side, side, side).moments(), -side / 2), rel=1e-13)


@given(LENGTHS)
def test_a_tetrahedron_has_the_moments_of_its_corners(edge):
    # Of any tetrahedron: S = V/20·Σ (v − c)(v − c)ᵀ over its corners v (from memory).
    corners = np.array([[1, 0, 0], [-0.5, 0.75**0.5, 0], [-0.5, -(0.75**0.5), 0], [0, 0, 2**0.5]]) * edge / 3**0.5
    centre, volume = corners.mean(axis=0), np.linalg.det(corners[:3] - corners[3]) / 6
    apart = corners - centre
    expected = Moments(abs(volume), centre, abs(volume) / 20 * apart.T @ apart)
    assert_same_body(Tetrahedron(edge).moments(), expected, rel=1e-14)


@given(LENGTHS, LENGTHS, LENGTHS)
def test_two_wedges_make_the_box(x, y, z):
    wedge = Wedge(x, y, z).moments()
    turned = wedge.mapped(np.diag([-1.0, 1.0, -1.0]), [0, 0, z])
    assert_same_body(wedge + turned, Box(x, y, z).moments(), rel=1e-14)


@given(LENGTHS, LENGTHS, LENGTHS, SHARES)
def test_a_wedge_is_the_two_wedges_and_the_box_that_a_step_leaves(x, y, z, share):
    flat = Wedge(x * (1 - share), y, z * (1 - share)).moments().mapped(NOT_TURNED, [-x * share / 2, 0, z * share])
    front = Wedge(x * share, y, z * share).moments().mapped(NOT_TURNED, [x * (1 - share) / 2, 0, 0])
    block = Box(x * (1 - share), y, z * share).moments().mapped(NOT_TURNED, [-x * share / 2, 0, 0])
    assert_same_body(flat + front + block, Wedge(x, y, z).moments(), rel=1e-13)


@given(shapes_of("toothed wheel"), SHARES)
def test_a_toothed_wheel_is_the_two_between_which_a_square_cut_passes(whole: ToothedWheel, share: float):
    values = whole.values()
    lower = ToothedWheel.of({**values, "width": values["width"] * share})
    upper = ToothedWheel.of({**values, "width": values["width"] * (1 - share)})
    assert_same_body(lower.moments() + lifted(upper.moments(), values["width"] * share), whole.moments(), rel=1e-13)


@given(shapes_of("toothed wheel"))
def test_a_toothed_wheel_with_its_bore_filled_is_the_one_without(whole: ToothedWheel):
    values = whole.values()
    core = Cylinder(values["bore"], values["width"]).moments() if values["bore"] else Moments.nothing()
    assert_same_body(whole.moments() + core, ToothedWheel.of({**values, "bore": 0.0}).moments(), rel=1e-13)


@given(LENGTHS, SHARES)
def test_a_rod_is_its_two_pieces(length, share):
    total = ThinRod(share * length).moments() + lifted(ThinRod((1 - share) * length).moments(), share * length)
    assert_same_body(total, ThinRod(length).moments(), rel=1e-14)


@given(LENGTHS)
def test_a_ring_is_many_short_rods_laid_around(diameter):
    # A polygon of n sides about the circle's mean: its moments are off by π²/(3·n²) and less.
    n, radius = 400, diameter / 2
    side = 2 * radius * np.tan(np.pi / n)
    angle = 2 * np.pi * np.arange(n) / n
    along = np.stack([-np.sin(angle), np.cos(angle), np.zeros(n)], axis=-1)
    places = radius * np.stack([np.cos(angle), np.sin(angle), np.zeros(n)], axis=-1)
    sides = Moments(np.full(n, side), places, side**3 / 12 * along[:, :, None] * along[:, None])
    assert_same_body(sides.total(), ThinRing(diameter).moments(), rel=5e-5)


@given(LENGTHS, SHARES)
def test_a_disc_is_its_ring_and_what_fills_it(diameter, share):
    total = ThinDisc(diameter, share * diameter).moments() + ThinDisc(share * diameter, 0.0).moments()
    assert_same_body(total, ThinDisc(diameter, 0.0).moments(), rel=1e-14)


@given(LENGTHS, LENGTHS, SHARES)
def test_a_sheet_is_the_two_between_which_a_straight_cut_passes(x, y, share):
    left = ThinSheet(share * x, y).moments().mapped(NOT_TURNED, [-(1 - share) * x / 2, 0, 0])
    right = ThinSheet((1 - share) * x, y).moments().mapped(NOT_TURNED, [share * x / 2, 0, 0])
    assert_same_body(left + right, ThinSheet(x, y).moments(), rel=1e-14)


@given(LENGTHS, LENGTHS, SHARES)
def test_a_cylindrical_shell_is_its_two_pieces(diameter, length, share):
    lower, upper = CylindricalShell(diameter, share * length), CylindricalShell(diameter, (1 - share) * length)
    total = lower.moments() + lifted(upper.moments(), share * length)
    assert_same_body(total, CylindricalShell(diameter, length).moments(), rel=1e-14)


@given(LENGTHS, st.one_of(st.just(0.0), LENGTHS), LENGTHS, SHARES)
def test_a_conical_shell_is_its_two_pieces(base, top, height, share):
    middle = base + (top - base) * share
    lower, upper = ConicalShell(base, middle, share * height), ConicalShell(middle, top, (1 - share) * height)
    total = lower.moments() + lifted(upper.moments(), share * height)
    assert_same_body(total, ConicalShell(base, top, height).moments(), rel=1e-13)


@given(LENGTHS, LENGTHS)
def test_a_conical_shell_of_equal_ends_is_the_cylindrical_one(diameter, height):
    shell = CylindricalShell(diameter, height).moments()
    assert_same_body(ConicalShell(diameter, diameter, height).moments(), shell, rel=1e-14)


@given(LENGTHS, st.floats(1e-6, 1 - 1e-6))
def test_a_spherical_shell_is_its_two_domes(diameter, share):
    height = diameter * share
    upper, lower = DomedShell(diameter, height), DomedShell(diameter, diameter - height)
    total = lifted(upper.moments(), diameter - height) + on_its_head(lower.moments(), diameter - height)
    assert_same_body(total, lifted(SphericalShell(diameter).moments(), diameter / 2), rel=1e-13)


@given(placements(), st.floats(0.01, 100))
def test_a_point_mass_anywhere_is_a_mass_in_one_point(placement, mass):
    placed = placement.place(PointMass(0.01).moments().with_mass(mass))
    expected = Moments.of_points([mass], [placement.shift])
    assert_same_body(placed, expected, rel=1e-14, size=1.0)
