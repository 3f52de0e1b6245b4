"""Settings and answers of a whole document: what the pages and the command line read off."""

from __future__ import annotations

import math
import pickle
import subprocess
import sys
from dataclasses import fields, is_dataclass, replace
from enum import Enum

import numpy as np
import pytest

from core.assembly import Assembly, DriveAxis, Group, Part, ShapeBody
from core.drive import (
    AppliedForce,
    AppliedTorque,
    BalanceSettings,
    Belt,
    Brake,
    ByLimits,
    ByTime,
    CorrectionPlane,
    Coupling,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LeadScrew,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    RackOrDrum,
    Repeat,
    Rest,
    ShaftInertia,
    StopCase,
    Train,
    TurnsWith,
    balance_answer,
    drive_answer,
)
from core.errors import ValueRefused
from core.material import NotSet, Weighed
from core.placement import Pose
from core.shapes import Box, Cylinder


def part(key: str, mass: float, position: tuple = (0.0, 0.0, 0.0), shape: object = None) -> Part:
    # A box stands on its base: its middle is brought to the height of the hinge.
    x, y, z = position
    return Part(key, key, ShapeBody(shape or Box(0.1, 0.1, 0.1)), Weighed(mass), Pose((x, y, z - 0.05)))


HINGE = DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0))
FLAP = Assembly("flap", (part("lid", 6.0, (0.4, 0.0, 0.0)), part("counterweight", 10.0, (-0.15, 0.05, 0.0))), (HINGE,), "Hinge")
SETTINGS = DriveSettings(
    turning=(TurnsWith(),),
    train=Train(
        Motor(2e-4, 30.0), (Brake("brake", 1e-5, 2.0), Gear("gearbox", 25.0, 0.8, 1e-4), Belt("belt", 0.02, 0.04, 0.95)),
        (LeadScrew("feed", 0.005, 3.0, shaft="motor"), RackOrDrum("rope", 0.03, 1.0, 0.2)), (ShaftInertia("hub", 1e-3),),
    ),
    duty=Duty((
        Repeat((Move(1.2, ByTime(0.8), Law.MODIFIED_SINE), Rest(0.5)), 1),
        Move(-1.2, ByLimits(4.0, 10.0, 8.0), Law.TRAPEZOIDAL), Rest(1.0),
    )),
    forces=(AppliedForce("seal", (0.0, 0.0, -15.0), (0.5, 0.0, 0.0), "part", start=0.0, end=0.2),),
    torques=(AppliedTorque("spring", 2.0),),
    frictions=(Friction("bearing", 0.2, 0.01, 0.002, 0.02),),
    limits=MotorLimits(LimitCurve(((0.0, 1.0), (300.0, 1.0))), LimitCurve(((0.0, 3.0), (300.0, 2.0)))),
    stops=(StopCase(2.0),),
    balance=BalanceSettings("load", 30.0, 6.3, (-0.1, 0.2), (CorrectionPlane(0.0, 0.1), CorrectionPlane(0.1, 0.1))),
)


def leaves(value: object) -> list[object]:
    """What a settings value is made of, down to what can be written into a file."""
    if isinstance(value, Enum):
        return [value.value]
    if is_dataclass(value):
        return [leaf for field in fields(value) for leaf in leaves(getattr(value, field.name))]
    if isinstance(value, tuple):
        return [leaf for one in value for leaf in leaves(one)]
    return [value]


def test_settings_are_plain_numbers_and_strings_all_the_way_down():
    assert {type(leaf) for leaf in leaves(SETTINGS)} <= {float, int, str, type(None)}


def test_settings_that_say_the_same_are_equal_also_after_they_were_worked_out():
    copy = pickle.loads(pickle.dumps(SETTINGS))
    drive_answer(FLAP, SETTINGS)
    assert copy == SETTINGS
    assert hash(copy) == hash(SETTINGS)
    assert replace(copy, gravity=(0.0, 0.0, -9.81)) != SETTINGS


def test_the_answer_of_a_document_holds_together():
    answer = drive_answer(FLAP, SETTINGS)
    total = FLAP.total.inertia_about_axis([0, 0, 0], [0, 1, 0])
    assert answer.at_load.inertia == pytest.approx(float(total), rel=1e-14)
    assert answer.reflected_load.inertia == pytest.approx(answer.reflected_motor.inertia * 50.0**2, rel=1e-12)
    rotor = next(row for row in answer.reflected_motor.rows if row.name == "motor")
    assert answer.ratio.ratio == pytest.approx((answer.reflected_motor.inertia - rotor.reflected) / 2e-4, rel=1e-12)
    assert {check.name for check in answer.checks} == {"inertia ratio", "peak torque of the motor", "continuous torque of the motor"}
    fastest = max(2.0, answer.load.peak_speed)
    assert answer.stored_energy == pytest.approx(answer.reflected_load.inertia * fastest**2 / 2, rel=1e-12)
    assert [stop.case for stop in answer.stops] == list(SETTINGS.stops)
    np.testing.assert_allclose(answer.curves("motor").speed, 50 * answer.curves("load").speed, rtol=1e-12)


def test_without_a_duty_the_inertia_and_the_standstill_are_answered_all_the_same():
    answer = drive_answer(FLAP, DriveSettings())
    assert answer.study is answer.load is answer.motor is answer.curves() is None
    assert answer.standstills[0].holding == pytest.approx(-(6.0 * 0.4 - 10.0 * 0.15) * 9.80665, rel=1e-9)
    # Anywhere in the turn, since no duty says where the load comes to.
    assert abs(answer.worst.push) == pytest.approx(answer.gravity[0].amplitude, rel=1e-9)


def test_a_document_without_parts_is_answered():
    answer = drive_answer(Assembly(), DriveSettings())
    assert answer.at_load.inertia == 0.0
    assert balance_answer(Assembly(), DriveSettings()) is None


def test_the_cautions_say_what_applies():
    falls, upright = drive_answer(FLAP, SETTINGS), drive_answer(replace(FLAP, axes=(DriveAxis("Hinge"),)), DriveSettings())
    assert any("Gravity can move this load" in line for line in falls.cautions)
    assert any(f"{falls.stored_energy:.3g} J" in line for line in falls.cautions)
    assert upright.cautions == (
        "Values carry no margin unless one is entered.",
        "Machine-safety standards, local codes and a responsible engineer decide.",
    )


@pytest.mark.parametrize("by_key", [True, False])
def test_a_rotor_in_the_motors_data_and_among_what_turns_is_flagged(by_key):
    rotor = part("rotor", 2.0, shape=Cylinder(0.05, 0.1))
    machine = replace(FLAP, members=(*FLAP.members, Group("drive", "drive unit", (rotor,))))
    own = float(rotor.single.own_inertia_along([0, 1, 0]))
    motor = Motor(7e-4, rotor="drive") if by_key else Motor(own)
    train = Train(motor, (Gear("gearbox", 5.0),))
    flagged = drive_answer(machine, DriveSettings(train=train)).checks
    assert [check.name for check in flagged] == ["rotor counted twice"]
    assert not flagged[0].ok
    left_out = DriveSettings(turning=(TurnsWith(), TurnsWith("drive", "fixed")), train=train)
    assert drive_answer(machine, left_out).checks == ()


def test_balance_is_answered_with_its_corrections_and_what_they_leave():
    answer = balance_answer(FLAP, SETTINGS)
    assert answer.found.amount == pytest.approx(6.0 * 0.4 - 10.0 * 0.15, rel=1e-12)
    assert answer.grade.static == pytest.approx(answer.found.eccentricity * 30.0 * 1e3, rel=1e-12)
    assert answer.keeps is False
    assert sum(answer.allowed_in_bearings) == pytest.approx(answer.allowed.unbalance, rel=1e-12)
    assert answer.left.amount <= 1e-12
    assert answer.left.couple_amount <= 1e-12
    assert answer.grade_left.worst <= 1e-9
    np.testing.assert_allclose(answer.forces.rotating, np.hypot(*answer.in_bearings.T) * 30.0**2, rtol=1e-13)


def test_balance_without_a_speed_has_no_grade_but_its_unbalance():
    answer = balance_answer(FLAP, DriveSettings())
    assert answer.grade is answer.allowed is answer.forces is answer.keeps is None
    assert answer.left is answer.found
    assert math.degrees(answer.found.angle) == pytest.approx(0.0, abs=1e-9)


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"torques": (AppliedTorque("press", 1.0, shaft="drum"),)}, "press: the train has no such shaft; read 'drum'"),
        ({"frictions": (Friction("seal", 1.0, shaft="drum"),)}, "seal: the train has no such shaft"),
        ({"stops": (StopCase(1.0, 1.0, "drum"),)}, "stop: the train has no such shaft"),
        ({"turning": (TurnsWith("", "drum"),)}, "what turns: the train has no such shaft"),
        ({"balance": BalanceSettings("drum")}, "balance: the train has no such shaft"),
        ({"gravity": (0.0, 0.0, math.inf)}, "drive: the acceleration of gravity has to be a finite number"),
    ],
)
def test_settings_that_name_what_is_not_there_are_refused(change, sentence):
    with pytest.raises(ValueRefused) as refused:
        replace(DriveSettings(), **change)
    assert sentence in str(refused.value)


def test_a_part_that_turns_and_has_no_mass_is_told_of():
    unset = replace(part("cover", 1.0), driver=NotSet())
    machine = replace(FLAP, members=(*FLAP.members, unset))
    (check,) = drive_answer(machine, DriveSettings()).checks
    assert check.text == "cover: nothing says what it weighs; torque and balance leave it out"


def test_a_rotor_about_two_axes_is_not_balanced():
    machine = replace(FLAP, axes=(HINGE, DriveAxis("Other")))
    turning = (TurnsWith("lid"), TurnsWith("counterweight", axis="Other"))
    with pytest.raises(ValueRefused, match="no one rotor; read Hinge and Other"):
        balance_answer(machine, DriveSettings(turning=turning))


def test_stages_can_be_renamed_and_taken_away_with_what_hangs_on_their_shafts():
    brake, gearbox, belt = SETTINGS.train.stages
    settings = replace(
        SETTINGS, frictions=(Friction("a", 1.0, shaft="gearbox"), Friction("b", 1.0, shaft="brake")),
        turning=(TurnsWith(), TurnsWith("lid", "gearbox")),
    )
    renamed = settings.with_stages((brake, replace(gearbox, name="worm"), belt), {"gearbox": "worm"})
    assert [one.shaft for one in renamed.frictions] == ["worm", "brake"]
    assert renamed.turning[1].shaft == "worm"
    gone = settings.with_stages((brake, belt))
    assert [one.shaft for one in gone.frictions] == ["load", "brake"]
    assert gone.train.linear == settings.train.linear


def test_a_coupling_and_a_brake_do_not_change_the_speed():
    train = Train(stages=(Coupling("coupling", 1e-4), Brake("brake", 1e-4, 5.0)))
    assert train.ratio == 1.0


def test_importing_the_drive_imports_nothing_heavy():
    program = "import sys, core.drive; print([m for m in ('scipy', 'pint', 'pydantic', 'trimesh') if m in sys.modules])"
    ran = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    assert ran.stdout.strip() == "[]"
