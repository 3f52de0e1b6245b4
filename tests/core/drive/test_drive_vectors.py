"""What is drawn of an unbalance, and what the Balance page proposes: vectors with their places, bearings, planes."""

from __future__ import annotations

import numpy as np
import oracles
import pytest
import strategies
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, DriveAxis, Part, ShapeBody
from core.drive import BalanceSettings, CorrectionPlane, DriveSettings, TurnsWith, balance_answer
from core.drive.axis import across, zero_mark
from core.drive.cautions import STANDARDS, balance_cautions
from core.drive.entering import usual_bearings, usual_plane, with_bearings, with_correcting, with_rotor_shaft
from core.drive.fields import with_number
from core.drive.items import with_item
from core.drive.vectors import UnbalanceVector, arrow_of, vectors_of
from core.errors import ValueRefused
from core.material import ByMaterial, Weighed
from core.placement import Pose
from core.shapes import Box, Cylinder, PointMass

BRASS = ByMaterial("brass", 8500.0)
SHAFT = DriveAxis("Shaft", (1.0, 2.0, 3.0), (0.0, 3.0, 0.0))


def rotor() -> Assembly:
    """A brass bar of 0.5 m along y with a weight of 0.2 kg, 0.1 m from the axis, 0.4 m along it."""
    bar = Part("bar", "bar", ShapeBody(Cylinder(0.06, 0.5)), BRASS, Pose((1.0, 2.0, 3.0), (-np.pi / 2, 0.0, 0.0)))
    weight = Part("weight", "weight", ShapeBody(PointMass(0.01)), Weighed(0.2), Pose((1.0, 2.4, 2.9)))
    return Assembly("rotor", (bar, weight), (SHAFT,), "Shaft")


def settings(**balance: object) -> DriveSettings:
    return DriveSettings(balance=BalanceSettings(**balance))


def vectors(assembly: Assembly, drive: DriveSettings) -> dict[str, UnbalanceVector]:
    answer = balance_answer(assembly, drive)
    return {vector.name: vector for vector in vectors_of(answer, drive.balance)}


def test_the_static_vector_alone_is_there_without_bearings_and_planes():
    found = vectors(rotor(), settings(planes=(CorrectionPlane(0.1, 0.1),)))
    assert list(found) == ["static"]
    assert found["static"].amount == pytest.approx(0.2 * 0.1, rel=1e-13)
    assert found["static"].permitted is None


def test_a_weight_between_the_bearings_is_shared_by_the_lever_rule():
    # 0.4 of 0.5 m from the first bearing.
    found = vectors(rotor(), settings(bearings=(0.0, 0.5), planes=(CorrectionPlane(0.4, 0.1), CorrectionPlane(0.3, 0.1))))
    assert list(found) == ["static", "bearing 1", "bearing 2", "plane 1", "plane 2"]
    assert found["bearing 1"].amount == pytest.approx(0.2 * 0.02, rel=1e-12)
    assert found["bearing 2"].amount == pytest.approx(0.8 * 0.02, rel=1e-12)
    # The weight is in the first plane.
    assert found["plane 1"].amount == pytest.approx(0.02, rel=1e-12)
    assert found["plane 2"].amount == pytest.approx(0.0, abs=1e-14)
    assert found["plane 2"].station == 0.3


def test_what_is_permitted_stands_with_the_vector_that_it_limits():
    drive = settings(speed=100.0, grade=2.5, bearings=(0.0, 0.5))
    answer, found = balance_answer(rotor(), drive), vectors(rotor(), drive)
    assert found["static"].permitted == pytest.approx(2.5e-3 / 100 * answer.found.mass, rel=1e-13)
    assert (found["bearing 1"].permitted, found["bearing 2"].permitted) == answer.allowed_in_bearings


def test_an_arrow_points_from_the_axis_to_the_heavy_side():
    start, end = arrow_of(vectors(rotor(), settings())["static"], SHAFT, 10.0)
    centre = rotor().total.centre
    np.testing.assert_allclose(start, [1.0, centre[1], 3.0], rtol=1e-14)
    # The weight hangs at −z of the axis; 0.02 kg·m times 10 m for each.
    np.testing.assert_allclose(end - start, [0.0, 0.0, -0.2], rtol=0, atol=1e-13)


@given(strategies.realisable_moments(), strategies.points, strategies.directions, st.floats(0.1, 10.0))
def test_arrows_lie_across_the_axis_and_are_as_long_as_they_should_be(moments, point, direction, scale):
    axis = DriveAxis("a", tuple(point.tolist()), tuple(direction.tolist()))
    masses, places = oracles.points_like(moments)
    lever = masses @ (places - point)
    away = lever - (lever @ axis.unit) * axis.unit
    vector = UnbalanceVector("static", 0.3, np.stack(across(axis)) @ lever)
    start, end = arrow_of(vector, axis, scale)
    size = float(masses.sum()) * 10 * scale
    np.testing.assert_allclose(end - start, scale * away, rtol=0, atol=1e-12 * size)
    assert (start - point) @ axis.unit == pytest.approx(0.3, abs=1e-11)


@pytest.mark.parametrize(("direction", "letter"), [
    ((0, 0, 1), "x"), ((0, 1, 0), "x"), ((1, 0, 0), "z"), ((-1, 0, 0), "z"), ((1, 1.01, 0), "x"), ((1.01, 1, 0), "z"),
])
def test_the_zero_mark_is_the_documents_x_but_for_an_axis_along_it(direction, letter):
    axis = DriveAxis("a", (0.0, 0.0, 0.0), direction)
    mark = np.eye(3)["xyz".index(letter)]
    assert zero_mark(axis) == letter
    first, second = across(axis)
    assert first @ mark > 0.7
    np.testing.assert_allclose(np.cross(first, second), axis.unit, atol=1e-15)


# --- proposals -------------------------------------------------------------------------------------------------------


def test_bearings_and_planes_begin_at_the_ends_of_what_there_is():
    assembly, drive = rotor(), settings()
    # The weight's mark reaches no further along than the bar.
    assert usual_bearings(assembly, drive) == (0.0, 0.5)
    first = usual_plane(assembly, drive)
    drive = with_item(drive, "balance.planes", first)
    second = usual_plane(assembly, drive)
    assert (first.station, second.station) == (0.0, 0.5)
    assert 0 < first.radius < 0.11


def test_a_flat_rotor_has_bearings_and_planes_apart_all_the_same():
    thin = Part("disc", "disc", ShapeBody(Box(0.3, 0.3, 0.0001)), BRASS)
    assembly, drive = Assembly("disc", (thin,)), settings()
    first, second = usual_bearings(assembly, drive)
    assert second > first
    drive = with_item(with_item(drive, "balance.planes", usual_plane(assembly, drive)), "balance.planes", CorrectionPlane(0.5, 1.0))
    with pytest.raises(ValueRefused, match="in one plane or in two"):
        with_item(drive, "balance.planes", usual_plane(assembly, drive))


def test_without_a_rotor_nothing_is_proposed():
    with pytest.raises(ValueRefused, match="nothing that has mass turns with this shaft"):
        usual_bearings(Assembly(), settings())


def test_choices_are_put_in_and_bearings_taken_away_lose_their_texts():
    drive = with_bearings(settings(), (0.0, 0.2))
    drive = with_number(drive, "balance.bearings.1", 0.0508, "2 in")
    assert with_bearings(drive, None).typed == ()
    assert with_bearings(drive, None).balance.bearings is None
    assert with_correcting(drive, "removing").balance.by == "removing"
    assert with_rotor_shaft(drive, "motor").balance.shaft == "motor"
    with pytest.raises(ValueRefused, match="the train has no such shaft"):
        with_rotor_shaft(drive, "mast")


def test_the_cautions_beside_a_balance_name_what_the_numbers_leave_out():
    said = " ".join(balance_cautions())
    for words in ("rigid", "balancing machine", "burst", "no margin", STANDARDS):
        assert words in said


def test_two_parts_of_one_shaft_about_two_axes_are_no_rotor():
    other = DriveAxis("Other", (0.0, 0.0, 0.0), (0.0, 0.0, 1.0))
    assembly = Assembly("rotor", rotor().members, (SHAFT, other), "Shaft")
    with pytest.raises(ValueRefused, match="so it is no one rotor"):
        balance_answer(assembly, DriveSettings((TurnsWith(), TurnsWith("weight", "load", "Other"))))
