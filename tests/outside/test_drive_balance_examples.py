"""Printed examples of unbalance, permissible residuals and correction masses; the source stands at each test."""

from __future__ import annotations

import math

import numpy as np
import pytest
from drive_cases import RPM, printed

from core.assembly import Assembly, DriveAxis, Part, ShapeBody
from core.drive import BalanceSettings, DriveSettings, balance_answer
from core.drive.balance import CorrectionPlane, corrected, corrections, unbalance
from core.drive.correcting import with_masses_added
from core.drive.grade import graded, permissible, shares
from core.material import Weighed
from core.moments import Moments
from core.placement import Pose
from core.shapes import PointMass

SPINDLE = DriveAxis("Spindle")
POUND, INCH = 0.45359237, 0.0254
OUNCE_INCH = POUND / 16 * INCH
GRAM_MM = 1e-6


def masses_at(masses: list[float], radii: list[float], degrees: list[float], stations: object = 0.0) -> Moments:
    angles = np.radians(degrees)
    points = np.stack([radii * np.cos(angles), radii * np.sin(angles), np.broadcast_to(stations, len(masses))], axis=1)
    return Moments.of_points(masses, points)


def test_the_formulas_of_the_trade_hold():
    # From memory: e_per[µm] = 9549.3·G/n, U_per[g·mm] = 9549.3·G·m/n, U[oz·in] = 6.0153·G·W[lb]/n.
    one = permissible(1.0, 1.0, 1.0 * RPM)
    assert one.eccentricity * 1e6 == printed(9549.3, 0.1)
    assert one.unbalance / GRAM_MM == pytest.approx(9549.3 * 1000 / 1000, abs=0.05)
    assert permissible(1.0, POUND, 1.0 * RPM).unbalance / OUNCE_INCH == printed(6.0153, 0.0001)


def test_a_small_rotor_may_keep_what_open_test_code_prints():
    # 10 kg, 3000 rpm, G 2.5: 7.9577 µm, 79.577 g·mm.
    found = permissible(2.5, 10.0, 3000 * RPM)
    assert found.eccentricity * 1e6 == printed(7.9577, 0.0001)
    assert found.unbalance / GRAM_MM == printed(79.577, 0.001)


def test_a_turbine_rotor_splits_its_residual_as_the_standard_does():
    # ISO 1940-1 / 21940-11 worked example (inputs from memory, figures recomputed): 3600 kg, 3000 rpm, G 2.5,
    # L_A 1500, L_B 900, L 2400 mm: 7.96 µm, 28 648, 10 743 and 17 905 g·mm.
    found, split = permissible(2.5, 3600.0, 3000 * RPM), shares(1.5, (0.0, 2.4))
    assert found.eccentricity * 1e6 == printed(7.96, 0.01)
    assert found.unbalance / GRAM_MM == printed(28_648, 1)
    assert found.unbalance * split.first / GRAM_MM == printed(10_743, 1)
    assert found.unbalance * split.second / GRAM_MM == printed(17_905, 1)
    assert split.between


def test_a_rotor_of_1000_pounds_may_keep_one_ounce_inch():
    # Energy-Tech magazine, article 18389 pp. 3–4: 15 000 rpm, G 2.5: 1.0 oz·in in all, 0.5 per plane; the rule
    # 4W/N gives 0.13 oz·in on a journal of 500 lb and 0.27 on the whole.
    found, split = permissible(2.5, 1000 * POUND, 15_000 * RPM), shares(0.5, (0.0, 1.0))
    assert found.unbalance / OUNCE_INCH == printed(1.0, 0.1)
    assert found.unbalance * split.first / OUNCE_INCH == printed(0.5, 0.1)
    assert split.first == split.second == 0.5


def test_the_rule_of_four_w_over_n_is_a_grade_of_two_thirds():
    # eng-tips thread 205881: G 0.665.
    rotor = graded(1000 * POUND, 4 * 1000 / 15_000 * OUNCE_INCH, None, None, 15_000 * RPM)
    assert rotor.static == printed(0.665, 0.001)
    assert rotor.needed == 1.0


def balance_mass(rotor: Moments, radius: float) -> tuple[float, float]:
    """The one mass that balances a rotor at a radius, and its angle in degrees, 0…360."""
    (one,) = corrections(unbalance(rotor, SPINDLE), (CorrectionPlane(0.0, radius),))
    return one.mass, math.degrees(one.angle) % 360


def test_four_masses_are_balanced_by_the_mass_that_the_first_book_prints():
    # Sarkar, Theory of Machines, ch. 8 Ill. 1 p. 221: 8.1 kg at 267.5° (8.1113; 267.471).
    rotor = masses_at([12, 10, 18, 15], [0.040, 0.050, 0.060, 0.030], [0, 60, 130, 270])
    mass, angle = balance_mass(rotor, 0.100)
    assert mass == printed(8.1113, 0.0001)
    assert mass == printed(8.1, 0.1)
    assert angle == printed(267.471, 0.001)
    assert angle == printed(267.5, 0.1)


def test_four_masses_are_balanced_by_the_mass_that_the_second_book_prints():
    # Bevan, Theory of Machines, Ex. 2 p. 491: 57.9 lb at 24 in, the resultant at 23.28°.
    rotor = masses_at(
        [POUND * w for w in (200, 300, 240, 260)], [INCH * r for r in (9, 7, 10, 12)], [0, 45, 120, 255]
    )
    mass, angle = balance_mass(rotor, 24 * INCH)
    assert mass / POUND == printed(57.944, 0.001)
    assert mass / POUND == printed(57.9, 0.1)
    assert math.degrees(unbalance(rotor, SPINDLE).angle) == printed(23.2833, 0.0001)
    assert angle == printed(180 + 23.2833, 0.0001)


def test_four_masses_are_balanced_by_the_mass_that_the_third_book_prints():
    # Khurmi & Gupta ch. 21, from memory: 116 kg at 201.48°; recomputed 116.10 and 201.31.
    rotor = masses_at([200, 300, 240, 260], [0.2, 0.15, 0.25, 0.3], [0, 45, 120, 255])
    mass, angle = balance_mass(rotor, 0.2)
    assert mass == printed(116, 1)
    assert mass == printed(116.10, 0.01)
    assert angle == printed(201.31, 0.01)


@pytest.mark.parametrize(("station", "near", "far"), [(-10, 144, 24), (10, 96, 24)])
def test_a_single_mass_is_balanced_in_two_planes(station, near, far):
    # Bevan Ex. 1 p. 491: 200 lb at 9 in, planes 50 in apart, 15 in; 10 in outside or inside the first plane.
    rotor = masses_at([200 * POUND], [9 * INCH], [30], [station * INCH])
    planes = (CorrectionPlane(0.0, 15 * INCH), CorrectionPlane(50 * INCH, 15 * INCH))
    made = corrections(unbalance(rotor, SPINDLE), planes)
    assert made[0].mass / POUND == printed(near, 1)
    assert made[1].mass / POUND == printed(far, 1)
    # The near one opposite; the far one on the same side when the mass hangs outside.
    assert math.degrees(made[0].angle) % 360 == pytest.approx(210)
    assert math.degrees(made[1].angle) % 360 == pytest.approx(30 if station < 0 else 210)
    left = unbalance(corrected(rotor, SPINDLE, made), SPINDLE)
    assert left.amount <= 1e-12 * 200 * POUND * 9 * INCH
    assert left.couple_amount <= 1e-12 * 200 * POUND * 9 * INCH * INCH * 50


# --- the same as documents, corrected by parts -----------------------------------------------------------------------


def document_of(rows: list[tuple[float, float, float, float]]) -> Assembly:
    """Weights (kg, m, degrees, station m) about the spindle."""
    parts = []
    for at, (mass, radius, degrees, station) in enumerate(rows):
        angle = math.radians(degrees)
        place = (radius * math.cos(angle), radius * math.sin(angle), station)
        parts.append(Part(f"w{at}", f"w{at}", ShapeBody(PointMass(0.01)), Weighed(mass), Pose(place)))
    return Assembly("rotor", tuple(parts), (SPINDLE,), "Spindle")


def added(rows: list[tuple[float, float, float, float]], *planes: CorrectionPlane) -> list[tuple[float, float]]:
    """The masses (kg) and angles (degrees, 0…360) of the parts that correct a rotor; nothing is left then."""
    before, settings = document_of(rows), DriveSettings(balance=BalanceSettings(planes=planes))
    after, drive = with_masses_added(before, settings, "point mass")
    left = balance_answer(after, drive).found
    assert left.amount <= 1e-12 * balance_answer(before, settings).found.amount
    found = []
    for part in after.members[len(rows) :]:
        x, y, _ = part.pose.position
        found.append((part.driver.mass, math.degrees(math.atan2(y, x)) % 360))
    return found


def test_a_part_balances_the_four_masses_of_the_first_book():
    # Sarkar, Theory of Machines, ch. 8 Ill. 1 p. 221: 8.1 kg at 267.5° (8.1113; 267.471).
    rows = [(12, 0.040, 0, 0.0), (10, 0.050, 60, 0.0), (18, 0.060, 130, 0.0), (15, 0.030, 270, 0.0)]
    ((mass, angle),) = added(rows, CorrectionPlane(0.0, 0.100))
    assert mass == printed(8.1, 0.1)
    assert angle == printed(267.5, 0.1)


def test_a_part_balances_the_four_masses_of_the_third_book():
    # Khurmi & Gupta ch. 21, from memory: 116 kg at 201.48°; recomputed 116.10 and 201.31.
    rows = [(200, 0.2, 0, 0.0), (300, 0.15, 45, 0.0), (240, 0.25, 120, 0.0), (260, 0.3, 255, 0.0)]
    ((mass, angle),) = added(rows, CorrectionPlane(0.0, 0.2))
    assert mass == printed(116.10, 0.01)
    assert angle == printed(201.31, 0.01)


@pytest.mark.parametrize(("station", "near", "far"), [(-10, 144, 24), (10, 96, 24)])
def test_two_parts_balance_the_single_mass_of_the_second_book(station, near, far):
    # Bevan Ex. 1 p. 491: 200 lb at 9 in, planes 50 in apart, 15 in; 10 in outside or inside the first plane.
    planes = (CorrectionPlane(0.0, 15 * INCH), CorrectionPlane(50 * INCH, 15 * INCH))
    made = added([(200 * POUND, 9 * INCH, 30, station * INCH)], *planes)
    assert [mass / POUND for mass, _ in made] == [printed(near, 1), printed(far, 1)]
    assert [angle for _, angle in made] == pytest.approx([210, 30 if station < 0 else 210])
