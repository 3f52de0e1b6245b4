"""Worked examples of textbooks built as documents, saved, read again, and read off the ledger.

Thin things of the books are bodies without thickness, so nothing is a limit. Printed answers are compared to half a
unit of their last digit. Sources: OpenStax, University Physics Vol. 1 (sections named at the tests); McLean (Schaum's
Engineering Mechanics), Hibbeler, and Meriam & Kraige with their inputs as re-keyed in an open set of textbook
companions.
"""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np
import pytest

from core.assembly import Assembly, DriveAxis, Group, Line, Part, ShapeBody, ledger_of
from core.document import read_document, save_document
from core.machine import Machine
from core.material import ByDensity, PerArea, PerLength, Weighed
from core.placement import Copies, Mirrored, Pose, Ring, Row, Several
from core.shapes import SHAPES

if TYPE_CHECKING:
    from collections.abc import Callable
    from pathlib import Path

    from core.assembly import Driver, Node

QUARTER = np.pi / 2
# Exact factors of the units, and the g of the books that print slugs.
POUND, FOOT, INCH, G_OF_THE_BOOK = 0.45359237, 0.3048, 0.0254, 32.2
SLUG_FOOT_SQUARED = POUND * G_OF_THE_BOOK * FOOT**2


@pytest.fixture
def read_off(tmp_path: Path) -> Callable[..., dict[str, Line]]:
    """Save the nodes as a document, read it, and return its lines by name; the foot is "total"."""

    def lines_of(*members: Node, point: tuple = (0.0, 0.0, 0.0), direction: tuple = (0.0, 0.0, 1.0)) -> dict[str, Line]:
        assembly = Assembly("example", members, (DriveAxis("Axis", point, direction),), "Axis")
        save_document(Machine(assembly), tmp_path / "example.masswright")
        back = read_document(tmp_path / "example.masswright").assembly
        assert back == assembly
        ledger = ledger_of(back)
        return {**{line.name: line for line in ledger.lines}, "total": ledger.total}

    return lines_of


def part(
    name: str, shape: str, driver: Driver, position: tuple = (0.0, 0.0, 0.0), turns: tuple = (0.0, 0.0, 0.0), *,
    copies: Copies = Several(1), **dimensions: float,
) -> Part:
    body = ShapeBody(SHAPES[shape].of(dimensions))
    return Part(name, name, body, driver, Pose(position, turns), copies)


def rod(name: str, mass: float, length: float, x: float, copies: Copies = Several(1)) -> Part:
    """A slender rod along x, its middle at x."""
    lying = part(name, "thin rod", Weighed(mass), turns=(0.0, QUARTER, 0.0), copies=copies, length=length)
    # Whatever end the shape stands on, its middle is put where it is wanted.
    middle = lying.pose.placement.apply(lying.body.solid.centre)
    return replace(lying, pose=replace(lying.pose, position=(float(x - middle[0]), 0.0, 0.0)))


def printed(value: float, last_digit: float) -> object:
    return pytest.approx(value, rel=0, abs=last_digit / 2)


# --- OpenStax ---------------------------------------------------------------------------------------------------


def washer(name: str, x: float, copies: Copies) -> Part:
    return part(name, "point mass", Weighed(0.020), (x, 0.0, 0.0), copies=copies)


WASHERS = {
    "a row of six": (washer("all", -0.25, Row(6, (0.1, 0.0, 0.0))),),
    "three pairs, two at each place": tuple(washer(f"pair {x}", x, Several(2)) for x in (0.05, 0.15, 0.25)),
    "three mirrored pairs": tuple(washer(f"pair {x}", x, Mirrored()) for x in (0.05, 0.15, 0.25)),
    "three half-turn rings": tuple(washer(f"pair {x}", x, Ring(2)) for x in (0.05, 0.15, 0.25)),
    "a mirrored row in a group": (
        Group("half", "half", (washer("row", 0.05, Row(3, (0.1, 0.0, 0.0))),), copies=Mirrored()),
    ),
}


@pytest.mark.parametrize("way", WASHERS)
def test_six_washers_on_a_rod_however_they_are_counted(read_off, way):
    # Section 10.4: 20 g each at ±0.25, ±0.15, ±0.05 m; printed 0.0035 kg·m², and 1.73 J at 5 rev/s.
    total = read_off(*WASHERS[way])["total"]
    assert total.mass == pytest.approx(0.120, rel=1e-14)
    assert total.inertia == printed(0.0035, 0.0001)
    assert total.inertia == pytest.approx(2 * 0.020 * (0.05**2 + 0.15**2 + 0.25**2), rel=1e-13)
    assert 0.5 * total.inertia * (2 * np.pi * 5) ** 2 == printed(1.73, 0.01)


def test_the_four_outer_washers_are_nearly_all_of_it(read_off):
    # Section 10.4: printed 0.0034 kg·m².
    lines = read_off(*WASHERS["three mirrored pairs"])
    assert lines["pair 0.15"].inertia + lines["pair 0.25"].inertia == printed(0.0034, 0.0001)
    assert lines["pair 0.15"].share + lines["pair 0.25"].share == pytest.approx(34 / 35, rel=1e-12)


def test_the_blades_of_a_rotor_in_a_ring(read_off):
    # Section 10.4: four blades of 50.0 kg and 4.00 m at 300 rev/min; printed 1067 kg·m² and 5.26e5 J.
    blades = read_off(rod("blade", 50.0, 4.00, 2.0, Ring(4)))["blade"]
    assert blades.count == 4
    assert blades.inertia == printed(1067.0, 1)
    assert 0.5 * blades.inertia * (300 * 2 * np.pi / 60) ** 2 == printed(5.26e5, 0.01e5)
    assert blades.own_inertia == pytest.approx(4 * 50 * 16 / 12, rel=1e-13)
    assert blades.transfer == pytest.approx(4 * 50 * 4, rel=1e-13)


def test_a_disc_and_an_annular_cylinder_on_one_axis(read_off):
    # Section 10.4, problems: disc 2.0 kg, R 0.50 m; annular cylinder 1.0 kg, 0.20/0.30 m; printed 0.315 kg·m².
    lines = read_off(
        part("disc", "thin disc", Weighed(2.0), diameter=1.0),
        part("annulus", "tube", Weighed(1.0), outer_diameter=0.60, bore=0.40, length=0.25),
    )
    assert lines["total"].inertia == printed(0.315, 0.001)
    assert lines["total"].transfer == 0


@pytest.mark.parametrize(
    ("end", "figures"), [(0.0, (0.673, 0.167, 0.016, 0.490)), (0.5, (0.223, 0.167, 0.016, 0.04))], ids=["a", "b"]
)
def test_a_rod_with_a_sphere_fixed_to_its_end(read_off, end, figures):
    # Section 10.5: rod 0.5 m, 2.0 kg; sphere 1.0 kg, R 0.20 m. (a) about the free end, (b) about the sphere's end.
    ball = part("sphere", "sphere", Weighed(1.0), (0.70, 0.0, 0.0), diameter=0.40)
    ball = replace(ball, pose=Pose((0.70, 0.0, -float(ball.body.solid.centre[2]))))
    lines = read_off(rod("rod", 2.0, 0.5, 0.25), ball, point=(end, 0.0, 0.0))
    whole, of_rod, own, transfer = figures
    assert lines["total"].inertia == printed(whole, 0.001)
    assert lines["rod"].inertia == printed(of_rod, 0.001)
    assert lines["sphere"].own_inertia == printed(own, 0.001)
    assert lines["sphere"].transfer == printed(transfer, 0.001)


def test_a_child_on_a_merry_go_round(read_off):
    # Section 10.5: disc 500 kg, r 2.0 m; child 25 kg at 1.0 m; printed 1025 kg·m².
    lines = read_off(
        part("disc", "cylinder", Weighed(500.0), diameter=4.0, length=0.1),
        part("child", "point mass", Weighed(25.0), (1.0, 0.0, 0.0)),
    )
    assert (lines["disc"].inertia, lines["child"].inertia) == (printed(1000, 1), printed(25, 1))
    assert lines["total"].inertia == printed(1025, 1)


def test_a_skater_with_arms_drawn_in_and_stretched_out(read_off):
    # Chapter 10, problems: 60.0 kg, r 0.110 m; then 52.5 kg with two rods 0.900 m, 3.75 kg each: 0.363 and 2.34.
    drawn_in = read_off(part("body", "cylinder", Weighed(60.0), diameter=0.220, length=1.7))
    stretched = read_off(
        part("body", "cylinder", Weighed(52.5), diameter=0.220, length=1.7), rod("arm", 3.75, 0.900, 0.450, Mirrored())
    )
    assert drawn_in["total"].inertia == printed(0.363, 0.001)
    assert stretched["total"].inertia == printed(2.34, 0.01)
    assert stretched["total"].mass == pytest.approx(60.0, rel=1e-14)


def test_the_drive_train_of_a_car_as_two_groups(read_off):
    # Section 10.8, problems. The printed 2.94 kg·m² leaves the shaft out, the printed 64.4 rad/s² does not.
    wheel = Group("wheel", "wheel", (
        part("disc", "thin disc", Weighed(15.0), diameter=0.360),
        part("tyre wall", "thin disc", Weighed(2.00), diameter=0.640, bore=0.360),
        part("tread", "thin ring", Weighed(10.0), diameter=0.660),
    ), Pose((0.0, 0.0, 0.75)), Mirrored(normal=(0.0, 0.0, 1.0)))
    axle = part("axle", "cylinder", Weighed(14.0), diameter=0.0400, length=1.5)
    shaft = part("shaft", "cylinder", Weighed(30.0), diameter=0.0640, length=2.0)
    lines = read_off(wheel, axle, shaft)
    assert (lines["wheel"].times, lines["tread"].times) == (2, 2)
    assert lines["wheel"].inertia + lines["axle"].inertia == printed(2.94, 0.01)
    assert 0.95 * 200 / lines["total"].inertia == printed(64.4, 0.1)


# --- McLean -----------------------------------------------------------------------------------------------------


def test_a_wheel_with_six_elliptical_spokes(read_off):
    # Example 15-37: 450 lb/ft³; hub ⌀8/⌀4 × 9 in, rim R 18/16 × 10 in, spokes 1.25 × 1.75 in (semi-axes), 12 in long,
    # middle at 10 in, taken as slender. Printed 38.1 lb·s²·ft, its shares as recomputed.
    density = 450 * POUND / FOOT**3
    iron = ByDensity(density)
    per_length = PerLength(density * np.pi * 1.25 * 1.75 * INCH**2)
    spoke = rod("spoke", 1.0, 12 * INCH, 10 * INCH, Ring(6))
    lines = read_off(
        part("hub", "tube", iron, outer_diameter=8 * INCH, bore=4 * INCH, length=9 * INCH),
        part("rim", "tube", iron, outer_diameter=36 * INCH, bore=32 * INCH, length=10 * INCH),
        replace(spoke, driver=per_length),
    )
    in_slugs = {name: line.inertia / SLUG_FOOT_SQUARED for name, line in lines.items()}
    assert in_slugs["hub"] == printed(0.19056, 0.00001)
    assert in_slugs["rim"] == printed(34.7942, 0.0001)
    assert in_slugs["spoke"] == printed(3.1124, 0.0001)
    assert in_slugs["total"] == printed(38.1, 0.1)


@pytest.mark.parametrize(
    ("direction", "answer", "digit"), [((0.0, 0.0, 1.0), 9.38, 0.01), ((1.0, 0.0, 0.0), 79.7, 0.1)]
)
def test_a_cone_hung_from_its_apex(read_off, direction, answer, digit):
    # Example 15-36: 500 kg, R 0.25 m, h 0.5 m, about its axis and across it through the apex (9.375 and 79.6875).
    cone = part("cone", "cone", Weighed(500.0), (0.0, 0.0, -0.5), base_diameter=0.5, height=0.5)
    total = read_off(cone, direction=direction)["total"]
    # 9.375 lies half way between two printed figures.
    assert total.inertia == pytest.approx(answer, rel=0, abs=digit / 2 * (1 + 1e-9))


def test_a_thin_disc_about_its_diameter(read_off):
    # Example 15-30: 490 lb/ft³, 0.02 in thick, ⌀4 in; printed 1.5e-5 slug·ft².
    sheet = PerArea(490 * POUND / FOOT**3 * 0.02 * INCH)
    total = read_off(part("disc", "thin disc", sheet, diameter=4 * INCH), direction=(1.0, 0.0, 0.0))["total"]
    assert total.inertia / SLUG_FOOT_SQUARED == printed(1.5e-5, 0.1e-5)


# --- Hibbeler, Meriam & Kraige ----------------------------------------------------------------------------------


def test_a_disc_with_a_hole_about_an_axis_on_its_rim(read_off):
    # Hibbeler, Example 10.11 / 17.3: 8000 kg/m³, 10 mm, R 0.25 m, hole 0.125 m: 15.71 − 3.93 kg, 1.20 kg·m².
    disc = part("disc", "tube", ByDensity(8000.0), outer_diameter=0.5, bore=0.25, length=0.01)
    total = read_off(disc, point=(0.25, 0.0, 0.0))["total"]
    assert total.mass == printed(15.71 - 3.93, 0.02)
    assert total.inertia == printed(1.20, 0.01)
    assert total.inertia == printed(1.1965, 0.0001)


def test_a_pendulum_in_the_form_of_a_t(read_off):
    # Hibbeler, Example 17.4: two rods of 10 kg and 1 m: I_O 14.167, I_G 2.917 kg·m².
    crossbar = Group("cross", "crossbar", (rod("bar", 10.0, 1.0, 0.0),), Pose((1.0, 0.0, 0.0), (0.0, 0.0, QUARTER)))
    about_pin = read_off(rod("stem", 10.0, 1.0, 0.5), crossbar)
    assert about_pin["total"].inertia == printed(14.167, 0.001)
    np.testing.assert_allclose(about_pin["total"].centre, [0.75, 0, 0], rtol=0, atol=1e-15)
    about_centre = read_off(rod("stem", 10.0, 1.0, 0.5), crossbar, point=(0.75, 0.0, 0.0))
    assert about_centre["total"].inertia == printed(2.917, 0.001)


def test_a_plate_bent_at_a_right_angle_has_all_three_products_of_inertia(tmp_path):
    # Meriam & Kraige, Dynamics, Sample Problem 7/6: 70 kg/m², A in the plane x = 0, B in the plane y = 0.125 m.
    # Tensor recomputed from the inputs to the digits shown; H and T from memory of the printed answer.
    metal = PerArea(70.0)
    a = part("A", "thin sheet", metal, (0.0, 0.0625, 0.050), (0.0, QUARTER, 0.0), length_x=0.100, length_y=0.125)
    b = part("B", "thin sheet", metal, (0.0375, 0.125, 0.075), (QUARTER, 0.0, 0.0), length_x=0.075, length_y=0.150)
    save_document(Machine(Assembly("bent plate", (Group("p", "plate", (a, b)),))), tmp_path / "bent.masswright")
    back = read_document(tmp_path / "bent.masswright").assembly
    lines = {line.name: line for line in ledger_of(back).lines}
    assert (lines["A"].mass, lines["B"].mass) == (pytest.approx(0.875), pytest.approx(0.7875))
    tensor = back.total.inertia_about_point((0, 0, 0))
    xy, xz, yz = 0.00369141, 0.00221484, 0.01011719
    expected = [[0.02568490, -xy, -xz], [-xy, 0.01029948, -yz], [-xz, -yz, 0.01833854]]
    np.testing.assert_allclose(tensor, expected, rtol=0, atol=0.5e-8)
    spin = np.array([0, 0, 30.0])
    assert list(tensor @ spin) == [printed(-0.0664, 0.0001), printed(-0.304, 0.001), printed(0.550, 0.001)]
    assert 0.5 * spin @ tensor @ spin == printed(8.25, 0.01)
    assert lines["plate"].inertia == printed(0.01833854, 1e-8)
