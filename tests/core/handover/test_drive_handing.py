"""What is handed over about a drive: as JSON, in the sheet, and in the tables made of it."""

from __future__ import annotations

import json
import re
from dataclasses import replace
from math import pi
from pathlib import Path

import numpy as np
import pytest
from drives import flap, flap_machine, settings
from hypothesis import given
from strategies import assemblies, mass_drivers

from core.assembly import Assembly, Part, ShapeBody
from core.drive import (
    AppliedTorque,
    BalanceSettings,
    ByTime,
    CorrectionPlane,
    DriveSettings,
    Duty,
    Gear,
    Law,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    Rest,
    StopCase,
    Train,
    TurnsWith,
)
from core.handover import SheetChoice, csv_of_sheet, sheet_of_assembly, tsv_of_sheet
from core.handover.answer import answer_of_machine, json_text
from core.handover.drive_lines import BY_ROW
from core.handover.machine_sheet import sheet_of_machine
from core.handover.text import text_of_sheet
from core.machine import Machine
from core.material import ByDensity, Weighed
from core.placement import Pose
from core.quantity import UNIT_SETS, Kind
from core.shapes import Cylinder, PointMass

ROOT = Path(__file__).parents[3]
SI, METRIC = UNIT_SETS["SI"], UNIT_SETS["mm kg kg·m²"]


def disc_machine(**changed: object) -> Machine:
    """A disc of density 2700 that a motor with a gear of 5:1 (80 %) turns a quarter forwards and back in 2 × 0.5 s."""
    disc = Part("disc", "disc", ShapeBody(Cylinder(0.6, 0.05)), ByDensity(2700.0))
    duty = Duty((
        Move(pi / 2, ByTime(0.5), Law.TRIANGULAR), Rest(0.25), Move(-pi / 2, ByTime(0.5), Law.TRIANGULAR), Rest(0.75)
    ))
    drive = DriveSettings(train=Train(Motor(0.02), (Gear("gearbox", 5.0, 0.8),)), duty=duty)
    return Machine(Assembly("disc", (disc,)), replace(drive, **changed))


DISC_J = 2700 * pi * 0.3**2 * 0.05 * 0.3**2 / 2


def answer(machine: Machine) -> dict:
    """The answer as a script of the user reads it."""
    return json.loads(json_text(answer_of_machine(machine, "disc.masswright")))


def keys_of(value: object) -> set[str]:
    if isinstance(value, dict):
        return set(value) | {key for inner in value.values() for key in keys_of(inner)}
    return {key for inner in value for key in keys_of(inner)} if isinstance(value, list) else set()


def values(machine: Machine) -> dict[str, float | None]:
    return {f"{entry.section}|{entry.symbol}": entry.si for entry in sheet_of_machine(machine, SheetChoice(), SI).entries}


def test_the_torque_of_a_triangular_move_is_j_alpha_at_both_ends_of_a_gear():
    found = answer(disc_machine())["drive"]
    # Half the time up, half down: α = 4·φ/t²; forwards from rest the motor drives, and η is in the denominator.
    alpha, top = 4 * (pi / 2) / 0.5**2, 2 * (pi / 2) / 0.5
    load, motor = found["duty"]["load"], found["duty"]["motor"]
    assert abs(load["peak"]["torque_Nm"]) == pytest.approx(DISC_J * alpha, rel=1e-12)
    assert load["peak"]["time_s"] == 0.0
    assert motor["peak"]["torque_Nm"] == pytest.approx(DISC_J * alpha / 5 / 0.8 + 0.02 * 5 * alpha, rel=1e-12)
    assert motor["peak"]["terms_Nm"]["losses"] == pytest.approx(DISC_J * alpha / 5 * (1 / 0.8 - 1), rel=1e-12)
    assert load["rms_Nm"] == pytest.approx(DISC_J * alpha * np.sqrt(1.0 / 2.0), rel=1e-9)
    assert (load["peak_speed_rad_s"], motor["peak_speed_rad_s"]) == pytest.approx((top, 5 * top), rel=1e-12)
    assert load["mean_speed_rad_s"] == pytest.approx(pi / 2.0, rel=1e-9)
    assert load["peak_power"]["power_W"] == pytest.approx(DISC_J * alpha * top, rel=1e-12)
    assert load["energy"]["returned_J"] == pytest.approx(2 * DISC_J * top**2 / 2, rel=1e-9)
    assert (found["duty"]["cycle_s"], found["duty"]["steps"], found["duty"]["comes_back"]) == (2.0, 4, True)
    assert found["stored_energy_J"] == pytest.approx((DISC_J + 0.02 * 25) * top**2 / 2, rel=1e-12)


def test_inertia_is_reflected_by_the_square_of_the_ratio_and_given_as_both_flywheel_effects():
    found = answer(disc_machine())["drive"]
    at_motor, at_load = found["reflected"]["motor"], found["reflected"]["load"]
    assert at_motor["inertia_kgm2"] == pytest.approx(0.02 + DISC_J / 25, rel=1e-12)
    assert at_load["inertia_kgm2"] == pytest.approx(0.02 * 25 + DISC_J, rel=1e-12)
    assert [row["name"] for row in at_motor["rows"]] == ["motor", "disc"]
    assert sum(row["reflected_kgm2"] for row in at_load["rows"]) == pytest.approx(at_load["inertia_kgm2"], rel=1e-14)
    assert (at_motor["gd2_kgm2"], at_motor["wr2_kgm2"]) == (4 * at_motor["inertia_kgm2"], at_motor["inertia_kgm2"])
    assert found["inertia_ratio"]["ratio"] == pytest.approx(DISC_J / 25 / 0.02, rel=1e-12)
    assert found["at_load"]["radius_of_gyration_m"] == pytest.approx(0.3 / np.sqrt(2), rel=1e-12)
    assert [one["speed_ratio"] for one in found["shafts"]] == [5.0, 1.0]


def test_the_energy_of_every_term_adds_up_to_driving_less_returned():
    for shaft in ("load", "motor"):
        energy = answer(flap_machine())["drive"]["duty"][shaft]["energy"]
        whole = energy["driving_J"] - energy["returned_J"]
        assert sum(energy["by_term_J"].values()) == pytest.approx(whole, abs=1e-9 * energy["driving_J"])


def test_everything_that_is_answered_stands_in_the_readme_by_its_key():
    wanted = BalanceSettings("load", 3.0, 6.3, (-0.2, 0.2), (CorrectionPlane(0.0, 0.1),))
    found = answer(flap_machine().with_drive(replace(settings(), balance=wanted)))
    readme = (ROOT / "README.md").read_text(encoding="utf-8")
    for name in ("drive", "balance"):
        section = readme.split(f"\n#### {name}\n")[1].split("\n###")[0]
        told = set(re.findall(r"`([a-zA-Z_0-9]+)`", section))
        assert found[name] is not None
        assert keys_of(found[name]) - told - {"name", "ok", "text"} == set()


def test_what_is_not_entered_is_null_and_an_empty_document_turns_nothing():
    found = answer(Machine(Assembly("bare", (Part("d", "d", ShapeBody(Cylinder(0.1, 0.1)), Weighed(2.0)),))))
    drive = found["drive"]
    assert (drive["entered"], drive["duty"], drive["stops"], drive["limits"]) == (False, None, [], [])
    assert drive["inertia_ratio"] == {"ratio": None, "limit": None, "within": None}
    assert [found["balance"][key] for key in ("bearings", "grade", "permissible", "left")] == [None] * 4
    empty = answer(Machine())
    assert empty["balance"] is None
    assert empty["drive"]["at_load"]["radius_of_gyration_m"] is None
    assert empty["drive"]["reflected"]["motor"] == {"inertia_kgm2": 0.0, "gd2_kgm2": 0.0, "wr2_kgm2": 0.0, "rows": [
        {"name": "untitled", "shaft": "motor", "inertia_kgm2": 0.0, "mass_kg": None, "travel_m_rad": None,
         "speed_ratio": 1.0, "reflected_kgm2": 0.0},
    ]}


@given(assemblies(drivers=mass_drivers))
def test_every_document_without_entries_about_its_drive_has_an_answer_about_it(assembly: Assembly):
    found = answer(Machine(assembly))
    assert found["drive"] is not None
    assert not [check for check in found["checks"] if check["part"] == "drive"]


def test_a_drive_that_cannot_be_worked_out_is_null_and_a_check_says_why():
    machine = disc_machine(stops=(StopCase(0.5, 0.0),))
    found = answer(machine)
    assert found["drive"] is None
    failed = [check for check in found["checks"] if check["name"] == "drive" and not check["ok"]]
    assert "nothing stops the load" in failed[0]["text"]
    sheet = sheet_of_machine(machine, SheetChoice(), SI)
    (line,) = [entry for entry in sheet.entries if entry.section.startswith("Drive")]
    assert (line.si, line.reason) == (None, failed[0]["text"])
    assert "drive" in [check.name for check in sheet.failed]


def test_a_balance_that_cannot_be_worked_out_is_null_and_a_check_says_why():
    turning = (TurnsWith(), TurnsWith("drum", "load", "Drum"))
    found = answer(Machine(flap(), replace(settings(), turning=turning)))
    assert found["balance"] is None
    (failed,) = [check for check in found["checks"] if check["name"] == "balance"]
    assert not failed["ok"]
    assert "turns about different axes" in failed["text"]


def test_corrections_that_take_away_more_than_there_is_are_refused_in_so_many_words():
    balance = answer(flap_machine())["checks"][-1]
    assert (balance["name"], balance["ok"]) == ("balance", False)
    # 18.84 kg at √(0.3² + 0.005²) m are held against by three times as much at 0.1 m.
    assert "take away more than the rotor weighs; read 56.53 kg of 18.84 kg" in balance["text"]


def test_the_sheet_says_whether_the_rotor_keeps_to_the_grade_wanted_and_warns_about_rotors():
    settings_of = [BalanceSettings(speed=3.0, grade=grade) for grade in (16.0, 1600.0)]
    for wanted, words in zip(settings_of, ("does not keep to G 16: it has G 900", "keeps to G 1600"), strict=True):
        sheet = sheet_of_machine(flap_machine().with_drive(replace(settings(), balance=wanted)), SheetChoice(), SI)
        assert any(f"The rotor {words}" in note for note in sheet.notes)
        assert any("balancing machine" in caution for caution in sheet.cautions)


def test_a_limit_that_is_zero_where_the_motor_runs_is_used_without_end_which_json_cannot_say():
    limits = MotorLimits(peak=LimitCurve(((0.0, 100.0), (1.0, 100.0))))
    (one,) = answer(disc_machine(limits=limits))["drive"]["limits"]
    assert (one["use"], one["within"], one["limit_Nm"]) == (None, False, 0.0)


def test_two_planes_leave_nothing_and_the_bearings_share_what_the_grade_permits():
    rim = Part("rim", "rim", ShapeBody(PointMass(0.01)), Weighed(0.2), Pose((0.0, 0.3, 0.4)))
    disc = Part("disc", "disc", ShapeBody(Cylinder(0.6, 0.05)), ByDensity(2700.0))
    planes = (CorrectionPlane(0.0, 0.25), CorrectionPlane(0.05, 0.25))
    wanted = BalanceSettings("load", 30.0, 16.0, (-0.1, 0.4), planes)
    found = answer(Machine(Assembly("rotor", (disc, rim)), DriveSettings(balance=wanted)))["balance"]
    assert found["static_kgm"] == pytest.approx(0.2 * 0.3, rel=1e-12)
    assert found["static_angle_rad"] == pytest.approx(pi / 2, rel=1e-12)
    assert found["left"]["static_kgm"] <= 1e-12 * found["static_kgm"]
    assert found["left"]["couple_kgm2"] <= 1e-12 * found["couple_kgm2"]
    # The lever rule of two planes: station 0.4 m is the second bearing itself, which takes all of it.
    near, far = found["bearings"]
    assert (near["unbalance_kgm"], far["unbalance_kgm"]) == pytest.approx((0.0, 0.06), abs=1e-14)
    assert far["rotating_force_N"] == pytest.approx(0.06 * 30**2, rel=1e-12)
    permitted = found["permissible"]["unbalance_kgm"]
    assert permitted == pytest.approx(found["mass_kg"] * 16e-3 / 30, rel=1e-12)
    assert near["permissible_kgm"] + far["permissible_kgm"] == pytest.approx(permitted, rel=1e-14)
    assert (near["share"] + far["share"], found["zero_mark"]) == (1.0, "x")


# The sheet


def test_the_sheet_is_that_of_the_assembly_as_long_as_nothing_is_entered_about_the_drive():
    machine = Machine(flap())
    assert sheet_of_machine(machine, SheetChoice(), METRIC) == sheet_of_assembly(flap(), SheetChoice(), METRIC)


def test_the_lines_of_the_drive_stand_behind_the_others_so_that_those_keep_their_rows():
    plain = sheet_of_assembly(flap(), SheetChoice(), METRIC).entries
    machine = flap_machine().with_drive(replace(settings(), balance=BalanceSettings(speed=3.0, grade=16.0)))
    with_drive = sheet_of_machine(machine, SheetChoice(), METRIC).entries
    assert with_drive[: len(plain)] == plain
    assert all(entry.section.startswith(("Drive: ", "Balance: ")) for entry in with_drive[len(plain) :])
    assert sheet_of_machine(machine, SheetChoice(), METRIC, "leaf").entries == sheet_of_assembly(
        flap(), SheetChoice(), METRIC, "leaf"
    ).entries


def test_the_sheet_shows_what_json_says():
    found, lines = answer(disc_machine())["drive"], values(disc_machine())
    assert lines["Drive: inertia|J_mot"] == found["reflected"]["motor"]["inertia_kgm2"]
    for shaft in ("load", "motor"):
        needs, section = found["duty"][shaft], f"Drive: duty at the {shaft} shaft"
        assert lines[f"{section}|T_peak"] == needs["peak"]["torque_Nm"]
        assert lines[f"{section}|T_rms"] == needs["rms_Nm"]
        assert lines[f"{section}|n_max"] == needs["peak_speed_rad_s"]
        assert lines[f"{section}|P_peak"] == needs["peak_power"]["power_W"]
        assert lines[f"{section}|P_brake"] == needs["peak_braking"]["power_W"]
        assert lines[f"{section}|E_back"] == needs["energy"]["returned_J"]
        terms = [lines[f"{section}|{symbol}"] for symbol in ("T_acc", "T_grav", "T_appl", "T_fric", "T_loss")]
        assert terms == list(needs["peak"]["terms_Nm"].values())


def test_every_torque_speed_power_and_reflected_inertia_names_its_shaft_and_its_basis():
    sheet = sheet_of_machine(flap_machine(), SheetChoice(), METRIC)
    lines = [entry for entry in sheet.entries if entry.section.startswith("Drive: ")]
    about = {Kind.TORQUE, Kind.SPEED, Kind.POWER, Kind.INERTIA}
    assert {entry.kind for entry in lines} >= about
    assert [entry.label for entry in lines if entry.kind in about and " shaft" not in entry.label] == []
    assert all((entry.basis and entry.unit.symbol) or entry.kind is Kind.NUMBER for entry in lines)
    labels = [entry.label for entry in lines]
    assert len(set(labels)) == len(labels)


def test_gravity_that_can_move_the_load_and_stored_energy_are_cautions_of_every_form_of_the_sheet():
    sheet = sheet_of_machine(flap_machine(), SheetChoice(), METRIC)
    for text in (text_of_sheet(sheet), tsv_of_sheet(sheet), csv_of_sheet(sheet)):
        plain = " ".join(text.split())
        assert "Gravity can move this load when the drive is off" in plain
        assert "let it run down before reaching in" in plain
        assert "a responsible engineer decide" in plain
        assert "the load turns forwards; with every brake applied it stays." in plain


def test_without_a_duty_the_sheet_says_so_and_leaves_out_what_only_a_duty_gives():
    sheet = sheet_of_machine(disc_machine(duty=Duty()), SheetChoice(), METRIC)
    assert "No duty is entered: there is no peak, no RMS, no speed and no power." in sheet.notes
    assert not [entry for entry in sheet.entries if entry.section.startswith("Drive: duty")]


def test_the_parts_of_the_reflected_inertia_add_up_to_it():
    lines = sheet_of_machine(flap_machine(), SheetChoice(), SI).entries
    whole = next(entry.si for entry in lines if entry.symbol == "J_mot")
    assert sum(entry.si for entry in lines if entry.section == BY_ROW) == pytest.approx(whole, rel=1e-14)


def test_the_holding_torque_is_the_hardest_of_the_rests():
    # A spring that pushes with 3 N·m wherever it stands, and nothing else: the motor holds a fifth of it.
    lines = values(disc_machine(torques=(AppliedTorque("spring", 3.0),)))
    assert lines["Drive: at rest|T_h,load"] == pytest.approx(3.0, rel=1e-14)
    assert lines["Drive: at rest|T_h,mot"] == pytest.approx(0.6, rel=1e-14)
    assert lines["Drive: at rest|T_push"] == pytest.approx(-3.0, rel=1e-14)


def test_parts_that_count_in_the_whole_but_do_not_turn_with_the_load_are_named_beside_it():
    machine = disc_machine()
    stand = Part("stand", "stand", ShapeBody(Cylinder(0.2, 0.1)), Weighed(4.0))
    both = replace(machine, assembly=machine.assembly.inserted(stand))
    apart = replace(both, drive=replace(both.drive, turning=(TurnsWith(), TurnsWith("stand", "fixed"))))
    sheet = sheet_of_machine(apart, SheetChoice(), SI)
    assert "The values of the whole count these too, which do not turn with the load: stand (stands still)." in sheet.notes
    assert not any("do not turn with the load" in note for note in sheet_of_machine(both, SheetChoice(), SI).notes)
    found = {entry.symbol: entry.si for entry in sheet.entries}
    # m r²/2 of the stand is in the first, not in the second.
    assert found["J"] - found["J_turn"] == pytest.approx(4.0 * 0.1**2 / 2, rel=1e-9)
