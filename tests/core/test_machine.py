"""The document as one value: what the drive says of lines and axes follows the assembly, and its checks are findings."""

from __future__ import annotations

from dataclasses import replace

import pytest
from drives import flap_machine

from core.assembly import Assembly, DriveAxis
from core.drive import ByTime, DriveSettings, Duty, Move, Repeat, StopCase, Train
from core.errors import ValueRefused
from core.machine import LONG_DUTY, Machine


def test_a_machine_without_a_word_about_its_drive_has_no_findings_of_it():
    machine = Machine(flap_machine().assembly)
    assert not machine.has_drive
    assert all(finding.name != "drive" for finding in machine.findings())


def test_a_rotor_that_turns_with_the_train_and_is_in_the_motor_too_is_found():
    found = [finding for finding in flap_machine().findings() if finding.check.name == "rotor counted twice"]
    assert (found[0].key, found[0].name) == ("drum", "drum")
    assert "drum: it turns with the train, and the motor's data has its inertia too" in found[0].check.text


def test_a_line_that_is_deleted_turns_with_nothing_and_is_no_rotor():
    machine = flap_machine()
    after = machine.with_assembly(machine.assembly.removed(("drum",)))
    assert [entry.key for entry in after.drive.turning] == [""]
    assert after.drive.train.motor.rotor == ""
    assert machine.drive.train.motor.rotor == "drum"


def test_an_axis_named_anew_keeps_what_turns_about_it():
    machine = flap_machine()
    hinge, drum = machine.assembly.axes
    after = machine.with_assembly(replace(machine.assembly, axes=(hinge, replace(drum, name="Cable drum"))))
    assert after.drive.turning[1].axis == "Cable drum"
    assert after.drive_answer.bodies[1].axis == after.assembly.axes[1]


def test_what_turned_about_an_axis_that_is_gone_turns_about_the_drive_axis():
    machine = flap_machine()
    after = machine.with_assembly(replace(machine.assembly, axes=(machine.assembly.axes[0],)))
    assert after.drive.turning[1].axis == ""


def test_an_edit_that_changes_nothing_is_the_same_machine():
    machine = flap_machine()
    assert machine.with_assembly(machine.assembly) is machine
    assert machine.with_drive(machine.drive) is machine


def test_a_drive_that_cannot_be_worked_out_is_a_finding_and_forbids_no_part():
    machine = flap_machine()
    weak = replace(machine.drive, train=Train(), turning=machine.drive.turning[:1], stops=(StopCase(50.0, 0.01),),
                   balance=replace(machine.drive.balance, shaft="load"), frictions=())
    heavy = Machine(machine.assembly, weak)
    found = [finding.check for finding in heavy.findings() if finding.name == "drive"]
    assert [check.ok for check in found] == [False]
    assert "stop" in found[0].text


def test_the_empty_machine_is_about_the_default_axis():
    assert Machine().assembly == Assembly(axes=(DriveAxis(),))


def test_a_long_duty_is_left_out_of_what_is_known_at_once_until_it_is_worked_out():
    machine = flap_machine()
    long = machine.with_drive(replace(machine.drive, duty=Duty((Repeat(machine.drive.duty.steps[:2], LONG_DUTY // 2 + 1),))))
    assert len(long.drive.duty.flat) == LONG_DUTY + 2
    assert machine.at_once is machine
    short = long.at_once
    assert short is not long
    assert short.drive == replace(machine.drive, duty=Duty())
    known = [finding.check.text for finding in long.findings_at_once()]
    assert "The duty is long: what it asks of the drive is being worked out." in known
    assert any("the motor's data has its inertia too" in text for text in known)
    answer = long.worked_out()
    assert long.at_once is long
    assert long.drive_answer is answer
    assert long.findings_at_once() == long.findings()
    assert answer.load.peak_speed == machine.with_drive(
        replace(machine.drive, duty=Duty(machine.drive.duty.steps[:2]))
    ).drive_answer.load.peak_speed


def test_a_long_duty_that_cannot_be_worked_out_says_why_once_that_is_known():
    steps = (Repeat((Move(0.1, ByTime(0.5)), Move(-0.1, ByTime(0.5))), LONG_DUTY),)
    machine = Machine(Assembly(), DriveSettings(duty=Duty(steps), stops=(StopCase(1.0),)))
    assert machine.at_once is not machine
    with pytest.raises(ValueRefused, match="nothing that has mass turns"):
        machine.worked_out()
    assert machine.at_once is machine
    found = [finding.check.text for finding in machine.findings() if finding.name == "drive"]
    assert "nothing that has mass turns" in found[0]
