"""Points of a motor's limits, gravity by size and direction, and a stop to begin with."""

from __future__ import annotations

import math

import pytest
from drives import flap_machine
from hypothesis import given
from hypothesis import strategies as st

from core.drive import DriveSettings
from core.drive.fields import typed_at, with_number
from core.drive.first_stop import first_stop
from core.drive.gravity import DOWN, direction_of_gravity, size_of_gravity, with_gravity_along, with_gravity_size
from core.drive.items import with_item
from core.drive.limit_points import points_at, points_of_block, with_point, with_points, without_points
from core.errors import EditRefused, QuantityError, ValueRefused
from core.quantity import UNITS


@given(st.lists(st.floats(0.0, 900.0), min_size=1, max_size=8, unique=True))
def test_points_are_put_in_by_their_speed_with_what_was_typed(speeds):
    drive = DriveSettings()
    for speed in speeds:
        drive = with_point(drive, "peak", (speed, speed / 7), (f"{speed!r} rad/s", ""))
    assert points_at(drive, "peak") == tuple((speed, speed / 7) for speed in sorted(speeds))
    for at, speed in enumerate(sorted(speeds)):
        assert typed_at(drive, f"limits.peak.points.{at}.0") == f"{speed!r} rad/s"
    assert without_points(drive, "peak", range(len(speeds))) == DriveSettings()


def test_two_points_of_one_speed_are_refused_and_so_are_speeds_that_fall():
    drive = with_points(DriveSettings(), "continuous", ((0.0, 2.0), (100.0, 1.0)))
    with pytest.raises(ValueRefused, match="continuous limit of the motor: there is a point of this speed"):
        with_point(drive, "continuous", (100.0, 3.0))
    with pytest.raises(ValueRefused, match="the speeds rising"):
        with_points(drive, "continuous", ((5.0, 2.0), (1.0, 1.0)))
    assert points_at(without_points(drive, "continuous", [0]), "continuous") == ((100.0, 1.0),)


def test_a_block_of_points_is_read_in_the_units_shown_or_its_own():
    read = points_of_block("speed;torque\n0;4,5\n3000;4,5 N·m\n\n80 rev/s;1200 N·mm", UNITS["rpm"], UNITS["N·m"])
    assert read == (
        (0.0, 4.5), (pytest.approx(100 * math.pi, rel=1e-15), 4.5),
        (pytest.approx(160 * math.pi, rel=1e-15), pytest.approx(1.2, rel=1e-15)),
    )


@pytest.mark.parametrize(
    ("text", "sentence"),
    [
        ("0\t4\n3000", "row 2: a row has a speed and a torque"),
        ("0\t4\n3000\tmuch", "row 2, torque"),
        ("  \n", "there is nothing to paste"),
        ("0\t4.250", "cannot be told whether"),
    ],
)
def test_a_block_that_is_no_limit_is_refused_with_the_row(text, sentence):
    with pytest.raises((ValueRefused, QuantityError), match=sentence):
        points_of_block(text, UNITS["rpm"], UNITS["N·m"])


def test_gravity_is_turned_without_changing_its_size_and_sized_without_being_turned():
    drive = DriveSettings()
    assert (size_of_gravity(drive), direction_of_gravity(drive)) == (9.80665, "−z")
    for words, direction in DOWN.items():
        turned = with_gravity_along(drive, words)
        assert turned.gravity == tuple(9.80665 * each for each in direction)
        assert direction_of_gravity(turned) == words
        assert direction_of_gravity(with_gravity_size(turned, 1.625)) == words
        assert size_of_gravity(with_gravity_size(turned, 1.625)) == 1.625
    skew = with_number(drive, "gravity.0", 9.80665)
    assert direction_of_gravity(skew) == ""
    halved = with_gravity_size(skew, size_of_gravity(skew) / 2)
    assert halved.gravity == pytest.approx((9.80665 / 2, 0.0, -9.80665 / 2), rel=1e-15)


def test_no_gravity_has_no_direction_and_gets_one_with_its_size():
    none = with_gravity_size(DriveSettings(), 0.0)
    assert none.gravity == (0.0, 0.0, 0.0)
    with pytest.raises(EditRefused, match="gravity of no size has no direction"):
        with_gravity_along(none, "+x")
    assert with_gravity_size(none, 9.0).gravity == (0.0, 0.0, -9.0)
    with pytest.raises(ValueRefused, match="cannot be less than 0"):
        with_gravity_size(none, -1.0)


def test_the_first_stop_comes_about_also_where_gravity_pulls():
    machine = flap_machine()
    case = first_stop(machine.drive_answer)
    after = machine.with_drive(with_item(machine.drive, "stops", case))
    stop = after.drive_answer.stops[-1]
    assert stop.holds
    assert case.torque > 2 * abs(machine.drive_answer.worst.push)
