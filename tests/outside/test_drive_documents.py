"""Printed examples of drives all the way: a document, saved to a file, answered by the command line as JSON.

The source stands at each test; the books are read as re-keyed in an open set of textbook companions. What the examples
give as inertia is entered as a known part of that inertia, on an upright axis through its centre.
"""

from __future__ import annotations

import csv
import io
import json
import math
from typing import TYPE_CHECKING, Any

import pytest
from drive_cases import G_OF_THE_BOOKS, RPM, printed

from app.cli import main
from core.assembly import Assembly, DataSheet, KnownAxial, Part, ShapeBody
from core.document import save_document
from core.drive import (
    AppliedTorque,
    BalanceSettings,
    ByLimits,
    ByTime,
    CorrectionPlane,
    DriveSettings,
    Duty,
    Gear,
    Motor,
    Move,
    RackOrDrum,
    Train,
    TurnsWith,
)
from core.machine import Machine
from core.material import Weighed
from core.placement import Pose
from core.shapes import PointMass

if TYPE_CHECKING:
    from collections.abc import Callable

POUND, INCH = 0.45359237, 0.0254
OUNCE_INCH, GRAM_MM = POUND / 16 * INCH, 1e-6


@pytest.fixture
def weigh(tmp_path, capsys) -> Callable[..., str]:
    """Save a machine and return what `masswright weigh` prints about the file."""

    def call(machine: Machine, *options: str) -> str:
        path = tmp_path / "example.masswright"
        save_document(machine, path)
        assert main(("weigh", str(path), *options)) == 0
        return capsys.readouterr().out

    return call


@pytest.fixture
def answer(weigh) -> Callable[[Machine], dict[str, Any]]:
    return lambda machine: json.loads(weigh(machine, "--format", "json"))


def known(inertia: float, mass: float = 1000.0) -> Part:
    return Part("load", "load", KnownAxial(mass, (0.0, 0.0, 0.0), inertia, 0.1, "the book"), DataSheet())


def loaded(inertia: float, **drive: Any) -> Machine:
    return Machine(Assembly("example", (known(inertia),)), DriveSettings(**drive))


def test_a_motor_turns_its_load_through_a_gear_as_the_book_prints(answer):
    # Electric Drives & Control Ex. 3.2 p. 34: 0.4 and 10 kg·m², 10:1 (0.9), 50 N·m: 0.5 kg·m², 5.556 N·m and
    # 814.487 W at 1400 rpm. Brought to speed so slowly that speeding up asks nothing.
    slow = 1e8
    found = answer(loaded(
        10.0, train=Train(Motor(0.4), (Gear("gear", 10.0, 0.9),)),
        torques=(AppliedTorque("process", 50.0, "against motion"),),
        duty=Duty((Move(140 * RPM * 2 * slow, ByTime(3 * slow)),)),
    ))["drive"]
    assert found["reflected"]["motor"]["inertia_kgm2"] == pytest.approx(0.5, rel=1e-14)
    motor = found["duty"]["motor"]
    assert motor["peak"]["torque_Nm"] == printed(5.556, 0.001)
    assert motor["peak_speed_rad_s"] == pytest.approx(1400 * RPM, rel=1e-12)
    assert motor["peak_power"]["power_W"] == printed(814.487, 0.001)


def test_a_haulage_drum_asks_of_its_motor_what_the_book_prints(answer):
    # Khurmi & Gupta, Theory of Machines, Ex. 3.4 p. 35: 14 t up 1 in 20 at 0.1 m/s², 1.2 kN of friction, drum of 1 m
    # and 1.25 t (k 0.45 m), armature of 110 kg (k 0.125 m), 40:1 (0.85), up to 1.8 m/s: 154.46 N·m and 22.24 kW.
    train = Train(
        Motor(110 * 0.125**2), (Gear("gear", 40.0, 0.85),),
        (RackOrDrum("truck", 0.5, 14_000.0, math.asin(1 / 20), friction=1200.0),),
    )
    duty = Duty((Move(100.0, ByLimits(speed=1.8 / 0.5, acceleration=0.1 / 0.5)),))
    motor = answer(loaded(1250 * 0.45**2, train=train, duty=duty, gravity=G_OF_THE_BOOKS))["drive"]["duty"]["motor"]
    assert motor["peak"]["torque_Nm"] == printed(154.46, 0.01)
    assert motor["peak_power"]["power_W"] / 1000 == printed(22.24, 0.01)


def test_a_fan_is_run_up_and_stopped_by_the_torques_that_the_book_prints(answer):
    # OpenStax, University Physics vol. 1, §10.7: 30 kg·m² to 20 rev/s in 10 s and down in 20 s: 376.80 and −188.50 N·m
    # (with π, 376.99 and −188.50).
    turned = 20 * 2 * math.pi * (10 + 20) / 2
    duty = Duty((Move(turned, ByTime(30.0), ramp_up=10 / 30, ramp_down=20 / 30),))
    load = answer(loaded(30.0, duty=duty))["drive"]["duty"]["load"]
    assert load["highest"]["torque_Nm"] == printed(376.99, 0.01)
    assert load["lowest"]["torque_Nm"] == printed(-188.50, 0.01)
    # A constant torque for a third of the time and half of it, braking, for two thirds.
    assert load["rms_Nm"] == pytest.approx(600 * math.pi * 0.2 * math.sqrt((1 + 2 / 4) / 3), rel=1e-9)


def test_a_rolling_mill_is_reversed_by_the_torque_that_the_book_prints(answer):
    # Dubey, Fundamentals of Electrical Drives, Ex. 4.2 p. 52: 10 000 kg·m² from 200 to −200 rpm in 5 s: 83 775.8 N·m.
    moves = [Move(sign * 200 * RPM * 12.5, ByTime(15.0), ramp_up=1 / 6, ramp_down=1 / 6) for sign in (1, -1)]
    load = answer(loaded(10_000.0, duty=Duty(tuple(moves))))["drive"]["duty"]["load"]
    assert load["peak"]["torque_Nm"] == printed(83_775.8, 0.1)
    # Over the cycle of 30 s that torque stands for 10 s, driving as long as braking.
    assert load["rms_Nm"] == pytest.approx(load["peak"]["torque_Nm"] / math.sqrt(3), rel=1e-9)
    assert load["energy"]["driving_J"] == pytest.approx(load["energy"]["returned_J"], rel=1e-9)


def test_a_flywheel_effect_in_kilogram_force_is_one_in_pounds_as_a_forum_works_it_out(weigh, answer):
    # control.com, post 1271961278: GD² 1.788 kgf·m² is WR² 1527.49 lb·in²; by exact factors 1527.476.
    machine = loaded(1.788 / 4, train=Train(Motor(0.0, 5.0)))
    assert answer(machine)["drive"]["at_load"]["gd2_kgm2"] == pytest.approx(1.788, rel=1e-14)
    table = csv.reader(io.StringIO(weigh(machine, "--format", "tsv", "--show-units", "in lb lb*in^2")), delimiter="\t")
    rows = {row[0]: row[1:3] for row in table}
    value, unit = rows["WR² = J reflected to the motor shaft, of everything that moves, the rotor of the motor counted"]
    assert float(value) == printed(1527.476, 0.001)
    assert float(value) == pytest.approx(1527.49, rel=1e-5)
    assert unit == "lb·in² WR²"
    value, unit = rows["GD² = 4·J reflected to the motor shaft, of everything that moves, the rotor of the motor counted"]
    assert (float(value), unit) == (pytest.approx(1.788, rel=1e-14), "kgf·m² GD²")


@pytest.mark.parametrize(("station", "near", "far"), [(-10, 144, 24), (10, 96, 24)])
def test_a_single_mass_is_balanced_in_two_planes_as_the_book_prints(answer, station, near, far):
    # Bevan, Theory of Machines, Ex. 1 p. 491: 200 lb at 9 in, planes 50 in apart, 15 in; 10 in outside or inside.
    mass = Part(
        "mass", "mass", ShapeBody(PointMass(0.01)), Weighed(200 * POUND), Pose((9 * INCH, 0.0, station * INCH))
    )
    planes = (CorrectionPlane(0.0, 15 * INCH), CorrectionPlane(50 * INCH, 15 * INCH))
    found = answer(Machine(Assembly("shaft", (mass,)), DriveSettings(balance=BalanceSettings(planes=planes))))["balance"]
    assert found["static_kgm"] == pytest.approx(200 * POUND * 9 * INCH, rel=1e-12)
    made = [one["mass_kg"] / POUND for one in found["corrections"]]
    assert made == [printed(near, 1), printed(far, 1)]
    assert abs(math.degrees(found["corrections"][0]["angle_rad"])) == pytest.approx(180)
    assert abs(math.degrees(found["corrections"][1]["angle_rad"])) == pytest.approx(0 if station < 0 else 180, abs=1e-9)
    assert found["left"]["static_kgm"] <= 1e-12 * found["static_kgm"]


def test_four_masses_are_balanced_by_the_mass_that_the_book_prints(answer):
    # Sarkar, Theory of Machines, ch. 8 Ill. 1 p. 221: 12, 10, 18, 15 kg at 40, 50, 60, 30 mm and 0, 60, 130, 270°:
    # 8.1 kg at 267.5° and 100 mm (8.1113 kg, 267.471°).
    rows = zip((12, 10, 18, 15), (0.04, 0.05, 0.06, 0.03), (0, 60, 130, 270), strict=True)
    masses = tuple(
        Part(
            f"m{at}", f"mass {at}", ShapeBody(PointMass(0.01)), Weighed(mass),
            Pose((radius * math.cos(math.radians(angle)), radius * math.sin(math.radians(angle)), 0.3)),
        )
        for at, (mass, radius, angle) in enumerate(rows)
    )
    settings = DriveSettings(balance=BalanceSettings(planes=(CorrectionPlane(0.3, 0.1),)))
    (made,) = answer(Machine(Assembly("disc", masses), settings))["balance"]["corrections"]
    assert made["mass_kg"] == printed(8.1113, 0.0001)
    assert math.degrees(made["angle_rad"]) % 360 == printed(267.471, 0.001)


def test_a_turbine_rotor_may_keep_what_the_standards_example_permits(answer):
    # ISO 1940-1 / 21940-11 worked example (inputs from memory, figures recomputed): 3600 kg, 3000 rpm, G 2.5, bearings
    # 1500 and 900 mm from the centre of mass: 28 648 g·mm, of which 10 743 and 17 905 in the planes of the bearings.
    rotor = Part("rotor", "rotor", KnownAxial(3600.0, (0.0, 0.0, 1.5), 500.0, 2.0, "the standard"), DataSheet())
    wanted = BalanceSettings(speed=3000 * RPM, grade=2.5, bearings=(0.0, 2.4))
    settings = DriveSettings(turning=(TurnsWith("rotor"),), balance=wanted)
    found = answer(Machine(Assembly("turbine", (rotor,)), settings))["balance"]
    assert found["permissible"]["unbalance_kgm"] / GRAM_MM == printed(28_648, 1)
    assert [one["permissible_kgm"] / GRAM_MM for one in found["bearings"]] == [printed(10_743, 1), printed(17_905, 1)]
    assert found["grade"] == {
        "worst_mm_s": 0.0, "static_mm_s": 0.0, "bearings_mm_s": [0.0, 0.0], "needed_mm_s": 0.4, "keeps": True,
    }


def test_a_rotor_of_a_thousand_pounds_may_keep_one_ounce_inch(answer):
    # Energy-Tech magazine, article 18389 pp. 3–4: 1000 lb, 15 000 rpm, G 2.5: 1.0 oz·in, 0.5 in each plane.
    rotor = Part("rotor", "rotor", KnownAxial(1000 * POUND, (0.0, 0.0, 0.5), 9.0, 1.0, "the article"), DataSheet())
    wanted = BalanceSettings(speed=15_000 * RPM, grade=2.5, bearings=(0.0, 1.0))
    found = answer(Machine(Assembly("rotor", (rotor,)), DriveSettings(balance=wanted)))["balance"]
    assert found["permissible"]["unbalance_kgm"] / OUNCE_INCH == printed(1.0, 0.1)
    assert [one["permissible_kgm"] / OUNCE_INCH for one in found["bearings"]] == [printed(0.5, 0.1)] * 2
