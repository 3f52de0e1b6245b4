"""Printed examples of torque, reflected inertia and RMS. The source stands at each test.

Books of the drive trade are read as re-keyed, with their outputs, in an open set of textbook companions. Printed
values are compared to half a unit of their last digit.
"""

from __future__ import annotations

import math

import numpy as np
import pytest
from drive_cases import RPM, UP, demand_of, moving, plain, printed, torque_at

from core.assembly import DriveAxis
from core.drive.axis import TurningBody, about_axis
from core.drive.demand import Demand
from core.drive.loads import AppliedForce, AppliedTorque
from core.drive.motion import ByLimits, ByTime, Duty, Law, Move
from core.drive.rms import rms_of_ramps
from core.drive.torque import Study
from core.drive.train import Belt, Gear, LeadScrew, Motor, RackOrDrum, ShaftInertia, Train, reflected
from core.moments import Moments

FOOT, POUND, INCH = 0.3048, 0.45359237, 0.0254


def hoist_beside_a_gear(mass: float, lift: float, rpm: float, efficiency: float, motor: float, load: float) -> Demand:
    """A gear of 10:1 (0.9) to a load, and a mass lifted by the motor's own shaft at lift (m/s) and rpm."""
    train = plain(
        10.0, motor, (Gear("gear", 10.0, 0.9),),
        linear=(RackOrDrum("hoist", lift / (rpm * RPM), mass, UP, efficiency, shaft="motor"),),
    )
    return demand_of(train, torques=(AppliedTorque("process", load, "against motion"),))


def test_a_gear_and_a_hoist_reflect_to_the_motor():
    # Dubey, Fundamentals of Electrical Drives, Ex. 2.1 p. 16: 0.4 kg·m² and 117.53 N·m.
    demand = hoist_beside_a_gear(1000.0, 1.5, 1420.0, 0.85, 0.2, 10.0)
    assert reflected(demand.train, ()).inertia == pytest.approx(0.40175, abs=5e-6)
    assert reflected(demand.train, ()).inertia == printed(0.4, 0.1)
    assert torque_at(demand, "motor", moving(142.0 * RPM)) == printed(117.53, 0.01)


def test_a_gear_alone_reflects_to_the_motor():
    # Electric Drives & Control Ex. 3.2 p. 34: 0.5 kg·m², 5.556 N·m, 814.487 W at 1400 rpm.
    demand = demand_of(
        plain(10.0, 0.4, (Gear("gear", 10.0, 0.9),)), torques=(AppliedTorque("process", 50.0, "against motion"),)
    )
    assert reflected(demand.train, ()).inertia == pytest.approx(0.5, rel=1e-14)
    torque = torque_at(demand, "motor", moving(140.0 * RPM))
    assert torque == printed(5.556, 0.001)
    assert torque * 1400 * RPM == printed(814.487, 0.001)


def test_a_gear_and_a_lighter_hoist_reflect_to_the_motor():
    # JB Gupta Ex. 4 p. 19: 0.6 kg·m² (0.59727), 90.72 N·m, 14.25 kW.
    demand = hoist_beside_a_gear(600.0, 2.0, 1500.0, 0.88, 0.4, 50.0)
    assert reflected(demand.train, ()).inertia == printed(0.59727, 1e-5)
    torque = torque_at(demand, "motor", moving(150.0 * RPM))
    assert torque == printed(90.72, 0.01)
    assert torque * 1500 * RPM / 1000 == printed(14.25, 0.01)


def test_a_haulage_drum_asks_the_torque_of_the_book_of_its_motor():
    # Khurmi & Gupta, Theory of Machines, Ex. 3.4 p. 35: 154.46 N·m (140.710 + 13.75 of the armature), 22.24 kW.
    train = Train(
        Motor(110 * 0.125**2), (Gear("gear", 40.0, 0.85),),
        linear=(RackOrDrum("truck", 0.5, 14_000.0, math.asin(1 / 20), friction=1200.0, inertia=1250 * 0.45**2),),
    )
    motion = moving(1.8 / 0.5, 0.1 / 0.5)
    torque = torque_at(demand_of(train), "motor", motion)
    assert torque == printed(154.46, 0.01)
    assert torque - 110 * 0.125**2 * 8.0 == printed(140.710, 0.001)
    assert torque * 40 * 1.8 / 0.5 / 1000 == printed(22.24, 0.01)


def free_fall(drum: float, radius: float, ratio: float, wheel: float, mass: float, efficiency: float, g: float) -> float:
    """The acceleration at which a falling mass on the first shaft needs no motor: drum, gear, wheel that it drives."""
    train = Train(
        Motor(drum), (Gear("gear", 1 / ratio, efficiency),), (RackOrDrum("mass", radius, mass, -UP, shaft="motor"),),
        (ShaftInertia("wheel", wheel),),
    )
    demand = demand_of(train, gravity=(0.0, 0.0, -g))
    at_rest, at_one = (torque_at(demand, "motor", moving(1.0, acceleration)) for acceleration in (0.0, 1.0))
    return radius / ratio * at_rest / (at_rest - at_one)


@pytest.mark.parametrize(("efficiency", "expected"), [(1.0, 0.231), (0.9, 0.216)])
def test_the_efficiency_of_a_gear_bears_on_the_inertia_it_drives(efficiency, expected):
    # Khurmi & Gupta Ex. 3.13 p. 50.
    assert free_fall(100.0, 0.3, 6.0, 5.0, 75.0, efficiency, 9.81) == printed(expected, 0.001)


@pytest.mark.parametrize(("efficiency", "expected"), [(1.0, 3.35), (0.9, 3.14)])
def test_the_same_in_feet_and_pounds(efficiency, expected):
    # Bevan, Theory of Machines, Ex. 10 p. 48, g 32.2 ft/s²; the first is 3.3455, printed as 3.35.
    square = POUND * FOOT**2
    fall = free_fall(200 * square, 8 * INCH, 5.0, 15 * square, 150 * POUND, efficiency, 32.2 * FOOT)
    assert fall / FOOT == printed(expected, 0.01)


def test_the_ratio_that_matches_the_inertias_speeds_the_load_up_best():
    # Khurmi & Gupta Ex. 3.14 p. 51: motor 2, load 32 kg·m², 100 N·m: ratio 4, 6.25 and 25 rad/s².
    def torque(ratio: float) -> float:
        return torque_at(demand_of(plain(32.0, 2.0, (Gear("gear", ratio),))), "motor", moving(1.0, 6.25))

    assert torque(4.0) == pytest.approx(100.0, rel=1e-14)
    assert torque(3.9) > 100.0
    assert torque(4.1) > 100.0
    assert 4.0 * 6.25 == 25.0


def test_a_hoist_asks_most_at_its_start():
    # Khurmi & Gupta Ex. 3.2 p. 32: cage 500 kg with 100 m of rope at 3 kg/m, drum 250 kg k 0.35 m r 0.5 m: 4615.9 N·m.
    train = Train(linear=(RackOrDrum("cage", 0.5, 500.0 + 300.0, UP, inertia=250 * 0.35**2),))
    duty = Duty((Move(100 / 0.5, ByLimits(10 / 0.5, 1.5 / 0.5, 6 / 0.5)),))
    peak = Study(demand_of(train), duty).needs("motor").peak
    assert peak.torque == printed(4615.9, 0.1)
    assert peak.time == 0.0


def test_the_reversal_of_a_rolling_mill():
    # Dubey Ex. 4.2 p. 52: 10 000 kg·m² from 200 to −200 rpm in 5 s asks 83 775.8 N·m; RMS of its cycle 45 975 N·m,
    # and 962.895 kW at 200 rpm.
    speed = 200 * RPM
    duty = Duty((
        Move(speed * 12.5, ByTime(15.0), ramp_up=1 / 6, ramp_down=1 / 6),
        Move(-speed * 12.5, ByTime(15.0), ramp_up=1 / 6, ramp_down=1 / 6),
    ))
    needs = Study(demand_of(plain(10_000.0)), duty).needs("motor")
    assert needs.peak.torque == printed(83_775.8, 0.1)
    reversing = needs.peak.torque
    torques = [25e3, 0, reversing, 0, 20e3, 0, reversing, 0]
    rms = rms_of_ramps([10, 1, 5, 1, 15, 1, 5, 1], torques, torques)
    assert rms == printed(45_975, 1)
    assert rms * speed / 1000 == printed(962.895, 0.001)
    # The same reversals on their own: 10 s of them in 30 s.
    assert needs.rms == pytest.approx(reversing * math.sqrt(10 / 30), rel=1e-9)


RMS_EXAMPLES = {
    "Dubey Ex. 4.3 p. 53, kW": (([5, 5, 4, 2], [0, 500, -400, 0], [400, 500, -400, 0], 1), 367, 1),
    "Theraja vol. III Ex. 45.6 p. 1800, hp": (([4, 2, 1, 1], [200, 300, 50, 0], [400, 300, 0, 0], 1), 263.19, 0.01),
    "Theraja Ex. 45.5 p. 1800, hp": (([5, 10, 3], [0, 50, 0], [100, 50, 0], 1), 48.11, 0.01),
    "Theraja Ex. 45.1 p. 1796, kW, at rest a third": (
        ([10, 10, 20, 20], [100, 75, 50, 0], [100, 75, 50, 0], [1, 1, 1, 1 / 3]), 66.48, 0.01,
    ),
    "Kosow Ex. 13.7 p. 466, hp, at rest a third": (
        ([5, 5, 10, 10], [200, 20, 0, 100], [200, 20, 0, 100], [1, 1, 1 / 3, 1]), 113.77, 0.01,
    ),
    "Theraja Ex. 45.4 p. 1799, hp": (([10, 5, 8, 4], [100, 0, 60, 0], [100, 0, 60, 0], 1), 69.07, 0.01),
    "public question bank, kW: 100·√2": (([10, 20], [200, 100], [200, 100], 1), 100 * math.sqrt(2), 1e-9),
}


@pytest.mark.parametrize("name", RMS_EXAMPLES)
def test_rms_of_ramps_and_steps_is_the_one_printed(name):
    inputs, expected, last_digit = RMS_EXAMPLES[name]
    assert rms_of_ramps(*inputs) == printed(expected, last_digit)


# --- OpenStax, University Physics Vol. 1, ch. 10 -------------------------------------------------------------------

UPRIGHT = DriveAxis("Spindle")


def disc(mass: float, radius: float) -> Moments:
    return Moments.from_inertia(mass, [0, 0, 0], np.diag([0.25, 0.25, 0.5]) * mass * radius**2)


def test_a_helicopter_rotor_holds_the_energy_that_the_book_prints():
    # §10.4: four blades of 50.0 kg and 4.00 m, 300 rev/min: 1067.0 kg·m² and 5.26×10⁵ J.
    blade = 50.0 * 4.0**2 / 12
    rotor = Moments.nothing()
    for way in ([2, 0, 0], [-2, 0, 0], [0, 2, 0], [0, -2, 0]):
        along = np.array(way) / 2
        rotor = rotor + Moments.from_inertia(50.0, way, blade * (np.eye(3) - np.outer(along, along)))
    inertia = about_axis(rotor, UPRIGHT).inertia
    # Printed as 4 × 266.7 with the rounded part; the exact sum is 1066.667.
    assert inertia / 4 == printed(266.7, 0.1)
    # A move that ends at that speed after half its time has given it that energy by then.
    body = TurningBody("rotor", rotor, UPRIGHT)
    duty = Duty((Move(300 * RPM * 10.0, ByTime(20.0), Law.TRIANGULAR),))
    energy = Study(Demand(Train(), (body,), UPRIGHT), duty).needs("motor").energy
    assert energy.driving == printed(5.26e5, 0.01e5)
    assert energy.returned == pytest.approx(energy.driving, rel=1e-9)


def test_a_car_drivetrain_speeds_up_as_the_book_prints():
    # §10.8 problems: 95 % of 200 N·m on two rear wheels, axle and shaft gives 64.4 rad/s²; the printed 2.94 kg·m²
    # has lost the shaft (2.952).
    wheel = 0.5 * 15 * 0.18**2 + 0.5 * 2 * (0.18**2 + 0.32**2) + 10 * 0.33**2
    train = Train(inertias=(
        ShaftInertia("left wheel", wheel), ShaftInertia("right wheel", wheel),
        ShaftInertia("axle", 0.5 * 14 * 0.02**2), ShaftInertia("shaft", 0.5 * 30 * 0.032**2),
    ))
    assert reflected(train, ()).inertia == printed(2.952, 0.001)
    assert 0.95 * 200 / torque_at(demand_of(train), "motor", moving(1.0, 1.0)) == printed(64.4, 0.1)


def test_a_tangential_force_speeds_a_disc_up_as_the_book_prints():
    # §10.7: 50.0 kg, 1.50 m, 250 N: 375.0 N·m, 56.25 kg·m², 6.67 rad/s²; with 18.0 kg at 1.25 m 84.38 and 4.44.
    push = AppliedForce("push", (0.0, 250.0, 0.0), (1.5, 0.0, 0.0), "part")
    child = Moments.of_points([18.0], [[0.0, 1.25, 0.0]])
    for rotor, inertia, acceleration in ((disc(50.0, 1.5), 56.25, 6.67), (disc(50.0, 1.5) + child, 84.38, 4.44)):
        demand = Demand(Train(), (TurningBody("disc", rotor, UPRIGHT),), UPRIGHT, forces=(push,))
        assert about_axis(rotor, UPRIGHT).inertia == printed(inertia, 0.01)
        helped = -torque_at(demand, "motor", moving(1.0, 0.0, angle=2.2))
        assert helped == printed(375.0, 0.1)
        assert helped / about_axis(rotor, UPRIGHT).inertia == printed(acceleration, 0.01)


def test_fan_flywheel_and_shaft_ask_the_torques_that_the_book_prints():
    # §10.7: fan 30 kg·m² to 20 rev/s in 10 s: 376.80 (π = 3.14; exact 376.99), stopped in 20 s: −188.50;
    # flywheel 100 kg·m² from 500 rev/min in 2.0 min: −43.6.
    fan = Study(demand_of(plain(30.0)), Duty((
        Move(20 * 2 * math.pi * 15, ByTime(30.0), ramp_up=1 / 3, ramp_down=2 / 3),
    ))).needs("motor")
    assert fan.highest.torque == pytest.approx(120 * math.pi, rel=1e-12)
    assert fan.highest.torque == pytest.approx(376.80, rel=(math.pi - 3.14) / 3.14)
    assert fan.lowest.torque == printed(-188.50, 0.01)
    wheel = demand_of(plain(100.0))
    assert torque_at(wheel, "motor", moving(1.0, -500 * RPM / 120)) == printed(-43.6, 0.1)


def test_work_of_a_constant_torque_is_the_energy_of_the_speed():
    # §10.8: 12.0 N·m over 8 rev on 30.0 kg·m²: 6.3 rad/s.
    speed = 6.34
    duty = Duty((Move(2 * 8 * 2 * math.pi, ByLimits(1e3, 12.0 / 30.0), Law.TRAPEZOIDAL),))
    needs = Study(demand_of(plain(30.0)), duty).needs("motor")
    assert needs.peak.torque == pytest.approx(12.0, rel=1e-12)
    assert needs.peak_speed == printed(6.3, 0.1)
    assert needs.peak_speed == pytest.approx(speed, abs=0.005)
    assert needs.energy.driving == pytest.approx(12.0 * 8 * 2 * math.pi, rel=1e-9)


def test_power_at_a_speed_is_the_torque_that_the_book_prints():
    # §10.8: 9.0×10⁴ W at 300 rev/min: 2864.8 N·m.
    torque = 9.0e4 / (300 * RPM)
    assert torque == printed(2864.8, 0.1)
    demand = demand_of(plain(1.0), torques=(AppliedTorque("process", torque, "against motion"),))
    duty = Duty((Move(300 * RPM * 15, ByTime(20.0), ramp_up=0.25, ramp_down=0.25),))
    cruise = Study(demand, duty).curves("motor")
    middle = int(np.searchsorted(cruise.time, 10.0))
    assert cruise.power[middle] == pytest.approx(9.0e4, rel=1e-12)


def test_a_motor_runs_up_in_the_time_that_the_book_prints():
    # JB Gupta Ex. 22 p. 80: 37.5 kW, 500 rpm, mean starting torque 1.25 T_L, J 20: 5.85 s.
    load = 37_500 / (500 * RPM)
    demand = demand_of(plain(20.0), torques=(AppliedTorque("load", load, "against motion"),))
    steady, one = (torque_at(demand, "motor", moving(1.0, acceleration)) for acceleration in (0.0, 1.0))
    assert 500 * RPM / (0.25 * load / (one - steady)) == printed(5.85, 0.01)


def test_screw_belt_and_gear_reflect_by_the_textbook_forms():
    # Forms from memory: m·(p/2π)², m·r², J/i²; 100 kg on a lead of 10 mm: 2.533030×10⁻⁴ kg·m².
    screw = Train(linear=(LeadScrew("table", 0.01, 100.0),))
    assert reflected(screw, ()).inertia == printed(2.533030e-4, 1e-10)
    belt = Train(stages=(Belt("belt", 0.02, 0.05, mass=0.4),), inertias=(ShaftInertia("drum", 3.0),))
    assert reflected(belt, ()).inertia == pytest.approx(0.4 * 0.02**2 + 3.0 / 2.5**2, rel=1e-14)
    assert reflected(belt, (), "load").inertia == pytest.approx(0.4 * 0.05**2 + 3.0, rel=1e-14)
    rack = Train(linear=(RackOrDrum("slide", 0.03, 12.0),))
    assert reflected(rack, ()).inertia == pytest.approx(12.0 * 0.03**2, rel=1e-14)


# --- common practice, no source ------------------------------------------------------------------------------------


def pull(angle: float, lever: float) -> float:
    """The torque that a force of 10 N asks, at an angle (degrees) to a lever (m) along x, axis z."""
    way = (10 * math.cos(math.radians(angle)), 10 * math.sin(math.radians(angle)), 0.0)
    force = AppliedForce("pull", way, (lever, 0.0, 0.0))
    return torque_at(Demand(Train(), (), UPRIGHT, forces=(force,)), "motor", moving())


def test_a_force_at_30_degrees_to_the_lever_gives_half_the_torque_of_one_at_90():
    assert pull(30, 0.4) == pytest.approx(pull(90, 0.4) / 2, rel=1e-14)


def test_half_the_lever_gives_half_the_torque():
    assert pull(90, 0.2) == pytest.approx(pull(90, 0.4) / 2, rel=1e-14)
    assert pull(90, 0.4) == pytest.approx(-4.0, rel=1e-14)


def test_a_hoop_needs_twice_the_torque_of_the_disc_of_equal_mass_and_radius():
    hoop = Moments.from_inertia(3.0, [0, 0, 0], np.diag([0.5, 0.5, 1.0]) * 3.0 * 0.2**2)
    torques = [
        torque_at(Demand(Train(), (TurningBody("rotor", body, UPRIGHT),), UPRIGHT), "motor", moving(1.0, 7.0))
        for body in (hoop, disc(3.0, 0.2))
    ]
    assert torques[0] == pytest.approx(2 * torques[1], rel=1e-14)


