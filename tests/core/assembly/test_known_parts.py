"""A bought-in part is one body, whichever point or axis its data sheet speaks of."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from oracles import assert_same_body
from strategies import COORDINATES, LENGTHS, MASSES, realisable_moments

from core.assembly import KnownAxial, KnownTensor, ShapeBody, six_of_tensor, tensor_of_six
from core.assembly.bodies import equal_ellipsoid
from core.moments import Moments
from core.shapes import Cylinder

# A steel rotor 60 mm across and 110 mm long, as three data sheets would have it.
RADIUS, LENGTH, HEIGHT = 0.03, 0.11, 0.2
MASS = 7850.0 * np.pi * RADIUS**2 * LENGTH
AXIAL, ACROSS = MASS * RADIUS**2 / 2, MASS * (3 * RADIUS**2 + LENGTH**2) / 12
ROTOR = Moments(MASS, [0, 0, HEIGHT], np.diag([MASS * RADIUS**2 / 4, MASS * RADIUS**2 / 4, MASS * LENGTH**2 / 12]))


def test_a_rotor_quoted_about_its_centre_its_frames_origin_or_its_axis_is_the_same_body():
    about_origin = ACROSS + MASS * HEIGHT**2
    sheets = [
        KnownTensor(MASS, (0.0, 0.0, HEIGHT), (ACROSS, ACROSS, AXIAL, 0.0, 0.0, 0.0)),
        KnownTensor(MASS, (0.0, 0.0, HEIGHT), (about_origin, about_origin, AXIAL, 0.0, 0.0, 0.0), "origin"),
        KnownAxial(MASS, (0.0, 0.0, HEIGHT), AXIAL, LENGTH),
    ]
    solid = ShapeBody(Cylinder(2 * RADIUS, LENGTH)).solid.times(7850.0)
    assert_same_body(ROTOR, solid.mapped(np.eye(3), [0, 0, HEIGHT - LENGTH / 2]), rel=1e-14)
    for sheet in sheets:
        assert_same_body(sheet.own, ROTOR, rel=1e-14)
        assert all(check.ok for check in sheet.entry_checks)


@given(realisable_moments())
def test_the_same_tensor_about_the_centre_and_about_the_origin_is_the_same_body(body):
    centre = tuple(float(value) for value in body.centre)
    about_centre = KnownTensor(float(body.mass), centre, six_of_tensor(body.inertia_about_centre))
    about_origin = KnownTensor(
        float(body.mass), centre, six_of_tensor(body.inertia_about_point(np.zeros(3))), "origin"
    )
    assert_same_body(about_centre.own, body, rel=1e-13)
    assert_same_body(about_origin.own, about_centre.own, rel=1e-13, size=2.0)
    assert all(check.ok for check in (*about_centre.entry_checks, *about_origin.entry_checks))


@given(MASSES, st.tuples(COORDINATES, COORDINATES, COORDINATES), LENGTHS, LENGTHS, st.tuples(COORDINATES, COORDINATES))
def test_a_rotor_known_about_its_axis_has_the_parallel_axis_inertia_about_every_other(mass, centre, radius, length, other):
    x, y, _ = centre
    own = mass * radius**2
    known = KnownAxial(mass, centre, own + mass * (x * x + y * y), length).own
    expected = own + mass * ((x - other[0]) ** 2 + (y - other[1]) ** 2)
    assert float(known.inertia_about_axis((*other, 0.0), (0, 0, 1))) == pytest.approx(expected, rel=1e-12, abs=1e-12 * mass)


def test_a_tensor_read_about_the_wrong_point_is_noticed():
    # A thin arm 1 m from the origin: its tensor about its own centre, quoted as if it were about the origin.
    tensor = (1e-4, 8e-3, 8e-3, 0.0, 0.0, 0.0)
    wrong = KnownTensor(1.0, (1.0, 0.0, 0.0), tensor, "origin")
    right = replace(wrong, about="centre")
    assert all(check.ok for check in right.entry_checks)
    failed = [check.text for check in wrong.entry_checks if not check.ok]
    assert len(failed) == 1
    assert "the tensor is about the centre of mass" in failed[0]


def test_an_inertia_smaller_than_the_offset_of_its_centre_asks_for_is_noticed():
    known = KnownAxial(2.0, (0.1, 0.0, 0.0), 0.019)
    (check,) = known.entry_checks
    assert not check.ok
    assert "0.019" in check.text
    assert "0.02" in check.text
    assert all(check.ok for check in KnownAxial(2.0, (0.1, 0.0, 0.0), 0.02).entry_checks)


@given(realisable_moments())
def test_six_numbers_and_the_tensor_are_the_same_thing(body):
    tensor = body.inertia_about_centre
    np.testing.assert_allclose(tensor_of_six(six_of_tensor(tensor)), tensor, rtol=0, atol=1e-15 * np.abs(tensor).max())


def test_the_ellipsoid_that_stands_in_has_the_moments_of_the_rotor():
    # A uniform ellipsoid has ∫x² dm = m·a²/5 along each semi-axis.
    points = equal_ellipsoid(ROTOR).points - ROTOR.centre
    np.testing.assert_allclose(points.max(axis=0), np.sqrt(5 * np.diag(ROTOR.spread) / MASS), rtol=1e-12)
