"""Unbalance against sums over points, bearing forces against equilibrium, corrections that leave nothing."""

from __future__ import annotations

import math

import numpy as np
import oracles
import pytest
import strategies
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import DriveAxis
from core.drive import BalanceSettings, CorrectionPlane, across, corrected, corrections, permissible, shares, unbalance
from core.drive.balance import bearing_forces
from core.drive.grade import GRADES, graded
from core.errors import ValueRefused
from core.moments import Moments

G = 9.80665
STATIONS = st.floats(-1.0, 1.0)
RADII = st.floats(0.01, 1.0)


@st.composite
def axes(draw: st.DrawFn) -> DriveAxis:
    return DriveAxis("a", tuple(draw(strategies.points).tolist()), tuple(draw(strategies.directions).tolist()))


@given(strategies.realisable_moments(), axes())
def test_unbalance_is_the_sum_over_points_with_the_same_moments(moments, axis):
    masses, places = oracles.points_like(moments)
    unit, lever = axis.unit, places - np.asarray(axis.point)
    station = lever @ unit
    across_axis = lever - station[:, None] * unit
    found = unbalance(moments, axis)
    frame = np.stack(across(axis))
    size = float(moments.mass) * 4
    assert found.station == pytest.approx(float(masses @ station / masses.sum()), abs=1e-12)
    np.testing.assert_allclose(found.static, frame @ (masses @ across_axis), rtol=0, atol=1e-12 * size)
    moment = frame @ ((masses * station) @ across_axis)
    np.testing.assert_allclose(found.couple + found.static * found.station, moment, rtol=0, atol=1e-12 * size)
    assert found.eccentricity == pytest.approx(float(moments.offset_from_axis(axis.point, axis.direction)), abs=1e-12)


@given(strategies.realisable_moments(), axes(), STATIONS, st.floats(0.05, 2.0))
def test_two_planes_have_the_force_and_the_moment_of_the_rotor(moments, axis, first, apart):
    found = unbalance(moments, axis)
    near, far = found.in_planes(first, first + apart)
    size = float(moments.mass) * 10 / apart
    np.testing.assert_allclose(near + far, found.static, rtol=0, atol=1e-12 * size)
    moment = found.couple + found.static * found.station
    np.testing.assert_allclose(near * first + far * (first + apart), moment, rtol=0, atol=1e-11 * size)


@given(strategies.realisable_moments(), axes(), st.tuples(STATIONS, RADII, st.floats(0.05, 2.0), RADII),
       st.sampled_from(["adding", "removing"]))
def test_correction_in_two_planes_leaves_nothing(moments, axis, planes, by):
    station, near, apart, far = planes
    found = unbalance(moments, axis)
    made = corrections(found, (CorrectionPlane(station, near), CorrectionPlane(station + apart, far)), by)
    left = unbalance(corrected(moments, axis, made), axis)
    size = max(float(moments.mass), *(abs(one.mass) for one in made)) * 10
    assert left.amount <= 1e-11 * size
    np.testing.assert_allclose(left.couple + left.static * left.station, 0.0, rtol=0, atol=1e-11 * size)
    assert all((one.mass >= 0) == (by == "adding") or one.mass == 0 for one in made)


@given(strategies.realisable_moments(), axes(), STATIONS, RADII)
def test_correction_in_one_plane_leaves_no_static_unbalance(moments, axis, station, radius):
    found = unbalance(moments, axis)
    (made,) = corrections(found, (CorrectionPlane(station, radius),))
    left = unbalance(corrected(moments, axis, (made,)), axis)
    assert left.amount <= 1e-11 * (float(moments.mass) + made.mass) * 4
    assert made.mass * radius == pytest.approx(found.amount, rel=1e-12)


def test_a_rotor_turned_by_an_angle_has_its_heavy_side_turned_by_it():
    found = unbalance(Moments.of_points([2.0], [[0.1 * math.cos(0.7), 0.1 * math.sin(0.7), 0.3]]), DriveAxis())
    assert found.angle == pytest.approx(0.7, rel=1e-14)
    assert found.amount == pytest.approx(0.2, rel=1e-14)
    assert found.station == pytest.approx(0.3, rel=1e-14)


def test_two_equal_masses_opposite_and_apart_are_a_pure_couple():
    pair = Moments.of_points([1.0, 1.0], [[0.1, 0.0, 0.2], [-0.1, 0.0, -0.2]])
    found = unbalance(pair, DriveAxis())
    assert found.amount == 0.0
    assert found.couple_amount == pytest.approx(2 * 0.1 * 0.2, rel=1e-14)
    assert found.couple_angle == pytest.approx(0.0, abs=1e-14)


def test_a_balanced_body_far_from_the_origin_has_no_unbalance():
    axis = DriveAxis("a", (1e3, 2e3, 3e3), (1.0, 2.0, 2.0))
    body = Moments.from_inertia(5.0, axis.point, np.eye(3) * 0.1)
    found = unbalance(body, axis)
    assert found.amount == 0.0
    assert found.couple_amount == 0.0


# --- bearings --------------------------------------------------------------------------------------------------------


def test_a_mass_between_the_bearings_loads_them_by_the_lever_rule():
    body = Moments.of_points([4.0], [[0.01, 0.0, 0.75]])
    axis = DriveAxis("a", (0.0, 0.0, 0.0), (0.0, 0.0, 1.0))
    forces = bearing_forces(unbalance(body, axis), axis, (0.0, 1.0), 100.0, (0.0, -G, 0.0))
    np.testing.assert_allclose(forces.rotating, np.array([0.25, 0.75]) * 4.0 * 0.01 * 100.0**2, rtol=1e-13)
    np.testing.assert_allclose(forces.weight, np.array([0.25, 0.75]) * 4.0 * G, rtol=1e-13)
    np.testing.assert_allclose(forces.angles, 0.0, atol=1e-14)


def test_an_overhung_mass_lifts_the_far_bearing():
    body = Moments.of_points([4.0], [[0.0, 0.01, 1.5]])
    forces = bearing_forces(unbalance(body, DriveAxis()), DriveAxis(), (0.0, 1.0), 10.0, (G, 0.0, 0.0))
    np.testing.assert_allclose(forces.weight, [-0.5 * 4 * G, 1.5 * 4 * G], rtol=1e-13)
    np.testing.assert_allclose(np.abs(forces.angles), [math.pi / 2] * 2, rtol=1e-13)
    assert forces.angles[0] == pytest.approx(-forces.angles[1])


def test_an_upright_rotor_puts_no_weight_across_its_bearings():
    forces = bearing_forces(unbalance(Moments.of_points([4.0], [[0, 0, 0.5]]), DriveAxis()), DriveAxis(), (0, 1), 1, (0, 0, -G))
    np.testing.assert_allclose(forces.weight, 0.0, atol=1e-14)


# --- grades ----------------------------------------------------------------------------------------------------------


@given(st.sampled_from(GRADES), st.floats(0.1, 1e4), st.floats(1.0, 1e4))
def test_a_rotor_that_has_what_a_grade_permits_has_that_grade(grade, mass, speed):
    allowed = permissible(grade, mass, speed)
    found = graded(mass, allowed.unbalance, None, None, speed)
    assert found.static == pytest.approx(grade, rel=1e-12)
    assert found.needed == grade
    assert found.keeps_to(grade)
    assert not graded(mass, allowed.unbalance * 1.001, None, None, speed).keeps_to(grade)


@given(STATIONS, STATIONS, st.floats(0.05, 2.0))
def test_the_shares_of_the_bearings_add_up_and_stay_within_the_rule(station, first, apart):
    split = shares(station, (first, first + apart))
    assert split.first + split.second == pytest.approx(1.0, rel=1e-15)
    assert min(split.first, split.second) >= 0.3 - 1e-15
    assert split.between == (first <= station <= first + apart)


def test_a_plane_counts_by_its_share():
    # All of U at the bearing that may have 0.3 of it: the grade is 1/0.3 of the static one.
    split = shares(0.0, (0.0, 1.0))
    found = graded(10.0, 1e-3, np.array([[1e-3, 0.0], [0.0, 0.0]]), split, 100.0)
    assert found.planes == pytest.approx((found.static / 0.7, 0.0))
    assert found.worst == pytest.approx(found.static / 0.7)


def test_a_rotor_worse_than_every_grade_needs_none_of_them():
    assert graded(1.0, 1.0, None, None, 100.0).needed is None


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: permissible(2.5, 10.0, None), "balance: a balance grade needs a service speed; read none."),
        (lambda: permissible(2.5, 10.0, 0.0), "balance: a balance grade needs a service speed; read 0"),
        (lambda: permissible(0.0, 10.0, 1.0), "the balance quality grade has to be more than 0"),
        (lambda: BalanceSettings(grade=2.5), "a balance grade needs a service speed; read G 2.5 alone."),
        (lambda: BalanceSettings(bearings=(1.0, 1.0)), "the two bearings: the two stations are one and the same"),
        (lambda: BalanceSettings(speed=-1.0), "the service speed has to be more than 0"),
        (lambda: BalanceSettings(planes=(CorrectionPlane(0.0, 1.0),) * 2), "the two correction planes"),
        (lambda: BalanceSettings(planes=(CorrectionPlane(0.0, 1.0),) * 3), "in one plane or in two; read 3"),
        (lambda: CorrectionPlane(0.0, 0.0), "correction plane: the radius has to be more than 0"),
        (lambda: corrections(unbalance(Moments.nothing(), DriveAxis()), ()), "in one plane or in two; read 0"),
    ],
)
def test_balance_that_cannot_be_judged_is_refused(make, sentence):
    with pytest.raises(ValueRefused) as refused:
        make()
    assert sentence in str(refused.value)
