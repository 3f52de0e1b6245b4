"""Worked examples of textbooks, put together from shapes and placements; printed answers to half their last digit.

Thin things of the books (rods, hoops, plates) are solids of vanishing width: with HAIR = 1e-8 m against lengths of
about 1 m the width's own share of J is 1e-16 for a rod or plate, and 2e-8 for a hoop of that wall.

Sources: OpenStax, University Physics Vol. 1 (sections named at the tests); Hibbeler, McLean (Schaum's Engineering
Mechanics), and Meriam & Kraige as re-keyed with their inputs in an open set of textbook companions.
"""

from __future__ import annotations

import numpy as np
import pytest

from core.moments import Moments
from core.placement import Placement, Pose, Ring, turn_about
from core.shapes import Box, Cone, Cylinder, Sphere, Tube

ORIGIN, X, Z = (0.0, 0.0, 0.0), (1.0, 0.0, 0.0), (0.0, 0.0, 1.0)
HAIR = 1e-8
RPM = 2 * np.pi / 60
ALONG_X = turn_about([0, 1, 0], np.pi / 2)


def rod(mass: float, length: float) -> Moments:
    """A slender rod from the origin along x."""
    return Placement(ALONG_X, ORIGIN).place(Cylinder(HAIR, length).moments().with_mass(mass))


def disc(mass: float, radius: float) -> Moments:
    return Cylinder(2 * radius, HAIR).moments().with_mass(mass)


def annulus(mass: float, inner: float, outer: float) -> Moments:
    return Tube(2 * outer, 2 * inner, HAIR).moments().with_mass(mass)


def moved(body: Moments, x: float, y: float = 0.0, z: float = 0.0) -> Moments:
    return Pose(position=(x, y, z)).placement.place(body)


def about_z(body: Moments) -> float:
    return float(body.inertia_about_axis(ORIGIN, Z))


def test_six_washers_on_a_rod():
    # OpenStax, section 10.4: 20 g each at ±0.25, ±0.15, ±0.05 m, 5 rev/s.
    places = np.array([-0.25, -0.15, -0.05, 0.05, 0.15, 0.25])
    washers = Moments.of_points([0.020] * 6, np.outer(places, X))
    outer = Moments.of_points([0.020] * 4, np.outer(places[[0, 1, 4, 5]], X))
    assert about_z(washers) == pytest.approx(0.0035, abs=0.00005)
    assert about_z(outer) == pytest.approx(0.0034, abs=0.00005)
    assert 0.5 * about_z(washers) * (5 * 2 * np.pi) ** 2 == pytest.approx(1.73, abs=0.005)


def test_the_rotor_of_a_helicopter():
    # OpenStax, section 10.4: four blades of 50.0 kg and 4.00 m, 300 rev/min. Printed 1067.0 (4·50·16/3 = 1066.7).
    rotor = Ring(4).placements(Placement.identity()).place(rod(50.0, 4.00)).total()
    assert about_z(rotor) == pytest.approx(1067, abs=0.5)
    assert about_z(rotor) == pytest.approx(4 * 50.0 * 4.00**2 / 3, rel=1e-14)
    assert 0.5 * about_z(rotor) * (300 * RPM) ** 2 == pytest.approx(5.26e5, abs=0.005e5)


def test_a_disc_with_an_annulus():
    # OpenStax, section 10.4, problems.
    assert about_z(disc(2.0, 0.50) + moved(annulus(1.0, 0.20, 0.30), 0, 0, 0.1)) == pytest.approx(0.315, rel=1e-13)


def test_a_child_on_a_merry_go_round():
    # OpenStax, section 10.5.
    child = Moments.of_points([25.0], [[1.0, 0, 0]])
    assert about_z(disc(500.0, 2.0) + child) == pytest.approx(1025, rel=1e-13)


@pytest.mark.parametrize(("axis", "printed"), [(0.0, 0.673), (0.5, 0.223)], ids=["a free end", "b sphere's end"])
def test_a_rod_with_a_sphere_at_its_end(axis, printed):
    # OpenStax, section 10.5: rod 0.5 m, 2.0 kg; sphere 1.0 kg, R 0.20 m, touching its end.
    body = rod(2.0, 0.5) + moved(Sphere(0.40).moments().with_mass(1.0), 0.70)
    about = float(body.inertia_about_axis((axis, 0, 0), Z))
    assert about == pytest.approx(printed, abs=0.0005)
    assert about == pytest.approx(2.0 * 0.25 / 3 + 0.4 * 0.04 + (0.70 - axis) ** 2, rel=1e-13)


def test_a_rod_about_an_axis_a_third_of_its_length_from_its_centre():
    # OpenStax, section 10.5, problems: 7 m L²/36.
    assert float(rod(3.0, 1.2).inertia_about_axis((0.2, 0, 0), Z)) == pytest.approx(7 * 3.0 * 1.2**2 / 36, rel=1e-13)


def test_a_skater_with_arms_drawn_in_and_stretched_out():
    # OpenStax, chapter 10, problems.
    arms = Ring(2).placements(Placement.identity()).place(rod(3.75, 0.900)).total()
    assert about_z(disc(60.0, 0.110)) == pytest.approx(0.363, abs=0.0005)
    assert about_z(disc(52.5, 0.110) + arms) == pytest.approx(2.34, abs=0.005)


def test_the_drive_train_of_a_car():
    # OpenStax, section 10.8, problems: the printed 2.94 leaves the shaft out, the printed 64.4 rad/s² does not.
    hoop = annulus(10.0, 0.330 - HAIR, 0.330)
    wheel = disc(15.0, 0.180) + annulus(2.00, 0.180, 0.320) + hoop
    axle = Cylinder(0.0400, 1.5).moments().with_mass(14.0)
    shaft = Cylinder(0.0640, 2.0).moments().with_mass(30.0)
    wheels_and_axle = wheel + moved(wheel, 0, 0, 1.5) + axle
    assert about_z(wheels_and_axle) == pytest.approx(2.94, abs=0.005)
    whole = about_z(wheels_and_axle + shaft)
    assert 0.95 * 200 / whole == pytest.approx(64.4, abs=0.05)
    per_wheel = 7.5 * 0.180**2 + 1.00 * (0.180**2 + 0.320**2) + 10.0 * 0.330**2
    assert whole == pytest.approx(2 * per_wheel + 7.0 * 0.0200**2 + 15.0 * 0.0320**2, rel=1e-7)


def test_a_plate_bent_at_a_right_angle_has_all_three_products_of_inertia():
    # Meriam & Kraige, Dynamics, Sample Problem 7/6: 70 kg/m². Inputs as re-keyed, tensor recomputed from them to
    # the digits shown, H and T from memory of the printed answer.
    one = moved(Box(HAIR, 0.125, 0.100).moments().with_mass(70 * 0.125 * 0.100), 0, 0.0625, 0)
    other = moved(Box(0.075, HAIR, 0.150).moments().with_mass(70 * 0.075 * 0.150), 0.0375, 0.125, 0)
    assert float(one.mass) == pytest.approx(0.875, rel=1e-14)
    assert float(other.mass) == pytest.approx(0.7875, rel=1e-14)
    tensor = (one + other).inertia_about_point(ORIGIN)
    xy, xz, yz = 0.00369141, 0.00221484, 0.01011719
    expected = [[0.02568490, -xy, -xz], [-xy, 0.01029948, -yz], [-xz, -yz, 0.01833854]]
    np.testing.assert_allclose(tensor, expected, rtol=0, atol=0.5e-8)
    spin = np.array([0, 0, 30.0])
    momentum = tensor @ spin
    assert momentum[0] == pytest.approx(-0.0664, abs=0.00005)
    assert momentum[1] == pytest.approx(-0.304, abs=0.0005)
    assert momentum[2] == pytest.approx(0.550, abs=0.0005)
    assert 0.5 * spin @ tensor @ spin == pytest.approx(8.25, abs=0.005)


def test_a_disc_with_a_hole_about_an_axis_on_its_rim():
    # Hibbeler, Example 10.11 / 17.3: 8000 kg/m³, 10 mm thick, R 0.25 m, hole 0.125 m.
    plate, hole = Cylinder(0.50, 0.01).moments().times(8000.0), Cylinder(0.25, 0.01).moments().times(8000.0)
    assert float(plate.mass) == pytest.approx(15.71, abs=0.005)
    assert float(hole.mass) == pytest.approx(3.93, abs=0.005)
    about = float((plate - hole).inertia_about_axis((0.25, 0, 0), Z))
    assert about == pytest.approx(1.20, abs=0.005)
    assert about == pytest.approx(1.1965, abs=0.00005)


def test_a_pendulum_of_two_rods_in_the_form_of_a_t():
    # Hibbeler, Example 17.4: two rods of 10 kg and 1 m.
    crossbar = Pose(position=(1.0, -0.5, 0.0), turns=(0.0, 0.0, np.pi / 2)).placement.place(rod(10.0, 1.0))
    pendulum = rod(10.0, 1.0) + crossbar
    np.testing.assert_allclose(pendulum.centre, [0.75, 0, 0], rtol=0, atol=1e-15)
    assert about_z(pendulum) == pytest.approx(14.167, abs=0.0005)
    assert float(pendulum.own_inertia_along(Z)) == pytest.approx(2.917, abs=0.0005)


def test_a_wheel_with_six_elliptical_spokes():
    # McLean, Example 15-37, in feet and slugs: 450 lb/ft³, g 32.2 ft/s². The spokes' printed share takes them for
    # slender rods; the semi-axis in the wheel's plane adds 0.011 (not printed), and the total stays 38.1.
    density, inch = 450 / 32.2, 1 / 12
    hub = Tube(8 * inch, 4 * inch, 9 * inch).moments().times(density)
    rim = Tube(36 * inch, 32 * inch, 10 * inch).moments().times(density)
    assert about_z(hub) == pytest.approx(0.19056, abs=0.5e-5)
    assert about_z(rim) == pytest.approx(34.7942, abs=0.5e-4)
    # A bar of unit diameter and length stretched to the ellipse: volume π·a·b·L.
    ellipse = Cylinder(1.0, 1.0).moments().mapped(np.diag([2 * 1.75, 2 * 1.25, 12.0]) * inch, ORIGIN)
    mass = density * np.pi * 1.25 * 1.75 * 12 * inch**3
    spoke = Placement(ALONG_X, (4 * inch, 0, 0)).place(ellipse.with_mass(mass))
    spokes = Ring(6).placements(Placement.identity()).place(spoke).total()
    own_width = 6 * mass * (1.25 * inch) ** 2 / 4
    assert about_z(spokes) - own_width == pytest.approx(3.1124, abs=0.5e-4)
    assert about_z(hub + rim + spokes) == pytest.approx(38.1, abs=0.05)


def test_a_cone_about_its_apex():
    # McLean, Example 15-36: 500 kg, R 0.25 m, h 0.5 m. Printed 9.38 and 79.7, which are 9.375 and 79.6875 rounded.
    cone = Cone(0.5, 0.5).moments().with_mass(500.0)
    assert about_z(cone) == pytest.approx(9.375, rel=1e-14)
    assert float(cone.inertia_about_axis((0, 0, 0.5), X)) == pytest.approx(79.6875, rel=1e-14)


def test_a_thin_disc_about_its_diameter():
    # McLean, Example 15-30, in feet and slugs: 490 lb/ft³, 0.02 in thick, 4 in wide.
    plate = Cylinder(4 / 12, 0.02 / 12).moments().times(490 / 32.2)
    assert float(plate.own_inertia_along(X)) == pytest.approx(1.5e-5, abs=0.05e-5)
