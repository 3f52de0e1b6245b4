"""The peak coefficients of the motion laws against published tables, and printed examples of moves.

Cv, Ca and Cj are the peaks of speed, acceleration and jerk for unit stroke and unit time. Ca of the five-zone
family: R. L. Norton's table, as coded in open source; the other figures are from memory and were integrated
numerically elsewhere. RMS of the acceleration and the peak of speed × acceleration: numerical integration elsewhere,
with √(120/7) and √(280/11) for the polynomials.
"""

from __future__ import annotations

import math
from itertools import pairwise

import numpy as np
import pytest
from scipy.integrate import quad

from core.drive.laws import RAMPED, Law, unit_peaks
from core.drive.motion import ByLimits, ByTime, Duty, Move

PRINTED = {
    Law.TRIANGULAR: (2, 4, math.inf, 4, 8),
    Law.TRAPEZOIDAL: (1.5, 4.5, math.inf, 3.6742, None),
    Law.HARMONIC: (1.570796, 4.934802, math.inf, 3.4894, 3.876),
    Law.MODIFIED_TRAPEZOID: (2.0, 4.888124, 61.426, 4.2332, 8.090),
    Law.MODIFIED_SINE: (1.759603, 5.527957, 69.466, 3.9089, 5.458),
    Law.CYCLOIDAL: (2, 6.283185, 39.478, 4.4429, 8.162),
    Law.POLYNOMIAL_345: (1.875, 5.773503, 60, 4.1404, 6.694),
    Law.POLYNOMIAL_4567: (2.1875, 7.513188, 52.5, 5.0452, None),
}
CLOSED_FORMS = {
    Law.MODIFIED_TRAPEZOID: (2.0, 8 * math.pi / (math.pi + 2)),
    Law.MODIFIED_SINE: (4 * math.pi / (4 + math.pi), math.pi**2 / (1 + math.pi / 4)),
    Law.CYCLOIDAL: (2.0, 2 * math.pi),
    Law.HARMONIC: (math.pi / 2, math.pi**2 / 2),
    Law.POLYNOMIAL_345: (1.875, 10 / math.sqrt(3)),
}
# Last digits that the table prints: Cv and Ca to 6 decimals, Cj to 3, RMS to 4, power to 3.
HALF_DIGITS = (5e-7, 5e-7, 5e-4, 5e-5, 5e-4)


def unit_move(law: Law, angle: float = 1.0, time: float = 1.0) -> Duty:
    return Duty((Move(angle, ByTime(time), law),))


def rms_by_quadrature(duty: Duty) -> float:
    timeline = duty.timeline
    edges = [*timeline.time, timeline.length]
    squares = sum(
        quad(lambda t: float(timeline.at([t]).acceleration[0]) ** 2, low, high, epsabs=0, epsrel=1e-10)[0]
        for low, high in pairwise(edges)
    )
    return math.sqrt(squares / timeline.length)


@pytest.mark.parametrize("law", PRINTED)
def test_a_law_has_the_peaks_that_the_tables_print(law):
    duty = unit_move(law)
    motion = duty.timeline.at(np.linspace(0, 1, 400_001))
    speed, acceleration, jerk, _, power = PRINTED[law]
    assert motion.speed.max() == pytest.approx(speed, rel=0, abs=HALF_DIGITS[0])
    assert np.abs(motion.acceleration).max() == pytest.approx(acceleration, rel=0, abs=HALF_DIGITS[1])
    if law not in (Law.TRIANGULAR, Law.TRAPEZOIDAL, Law.HARMONIC):
        assert np.abs(motion.jerk).max() == pytest.approx(jerk, rel=0, abs=HALF_DIGITS[2])
    if power is not None:
        # At a jump the sample may lie one step short of the peak.
        assert (motion.speed * motion.acceleration).max() == pytest.approx(power, rel=0, abs=HALF_DIGITS[4])


@pytest.mark.parametrize("law", PRINTED)
def test_a_law_has_the_rms_acceleration_that_was_integrated_elsewhere(law):
    assert rms_by_quadrature(unit_move(law)) == pytest.approx(PRINTED[law][3], rel=0, abs=HALF_DIGITS[3])


@pytest.mark.parametrize("law", [law for law in PRINTED if law not in RAMPED])
def test_the_peaks_that_limits_are_kept_by_are_those_of_the_tables(law):
    speed, acceleration, jerk, *_ = PRINTED[law]
    peaks = unit_peaks(law)
    assert peaks.speed == pytest.approx(speed, rel=0, abs=HALF_DIGITS[0])
    assert peaks.acceleration == pytest.approx(acceleration, rel=0, abs=HALF_DIGITS[1])
    assert peaks.jerk == jerk if math.isinf(jerk) else peaks.jerk == pytest.approx(jerk, rel=0, abs=HALF_DIGITS[2])


@pytest.mark.parametrize("law", CLOSED_FORMS)
def test_the_closed_forms_of_the_peaks_hold_to_round_off(law):
    assert (unit_peaks(law).speed, unit_peaks(law).acceleration) == pytest.approx(CLOSED_FORMS[law], rel=1e-13)


def test_the_modified_sine_has_its_cross_over_jerk_and_the_harmonic_its_jerk_inside():
    # 23.155 and 15.50, of the same table.
    assert unit_move(Law.MODIFIED_SINE).timeline.at([0.5]).jerk[0] == pytest.approx(-23.155, rel=0, abs=5e-4)
    inside = unit_move(Law.HARMONIC).timeline.at(np.linspace(0, 1, 1001)).jerk
    assert np.abs(inside).max() == pytest.approx(15.50, rel=0, abs=5e-3)


@pytest.mark.parametrize("law", PRINTED)
def test_the_coefficients_scale_with_stroke_and_time(law):
    motion = unit_move(law, angle=-0.3, time=0.2).timeline.at(np.linspace(0, 0.2, 100_001))
    speed, acceleration, *_ = PRINTED[law]
    assert -motion.speed.min() == pytest.approx(speed * 0.3 / 0.2, rel=1e-6)
    assert np.abs(motion.acceleration).max() == pytest.approx(acceleration * 0.3 / 0.2**2, rel=1e-6)


def test_a_hoist_takes_the_time_that_the_book_prints():
    # Khurmi & Gupta, Theory of Machines, Ex. 3.2 p. 32 (as re-keyed in an open companion): 100 m at 10 m/s,
    # 1.5 m/s² up and 6 m/s² down: 14.17 s.
    assert Move(100.0, ByLimits(10.0, 1.5, 6.0)).time == pytest.approx(14.17, rel=0, abs=0.005)
