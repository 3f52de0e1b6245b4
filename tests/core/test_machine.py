"""The document as one value: what the drive says of lines and axes follows the assembly, and its checks are findings."""

from __future__ import annotations

from dataclasses import replace

from drives import flap_machine

from core.assembly import Assembly, DriveAxis
from core.drive import StopCase, Train
from core.machine import Machine


def test_a_machine_without_a_word_about_its_drive_has_no_findings_of_it():
    machine = Machine(flap_machine().assembly)
    assert not machine.has_drive
    assert all(finding.name != "drive" for finding in machine.findings())


def test_a_rotor_that_turns_with_the_train_and_is_in_the_motor_too_is_found():
    found = [finding for finding in flap_machine().findings() if finding.name == "drive" and not finding.check.ok]
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
