"""What a document says of its drive and its balance, as objects for JSON: SI units, full precision.

A value that there is none of, because it was not entered or cannot be, is None. Torques are what the drive has to
give, positive where they turn their shaft forwards; an angle is of the load shaft unless its shaft is said.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from core.drive import TERMS
from core.drive.axis import zero_mark
from core.drive.cautions import balance_cautions
from core.errors import MasswrightError
from core.handover.answer import Answer, check_answer, plain

if TYPE_CHECKING:
    from core.drive import (
        BalanceAnswer,
        BalanceSettings,
        Correction,
        DriveAnswer,
        GravityWave,
        Needs,
        Peak,
        Standstill,
        Stop,
        TurningBody,
        Unbalance,
    )
    from core.drive.axis import AboutAxis
    from core.drive.limits import Judged
    from core.drive.train import Reflected
    from core.machine import Machine

def answer_of_drive(machine: Machine) -> Answer | None:
    """Return everything about torque; None where it cannot be worked out: a failed check of the machine says why.

    Where nothing is entered about the drive it is what follows from the parts alone: everything turns with one shaft.
    """
    try:
        answer = machine.drive_answer
    except MasswrightError:
        return None
    train = machine.drive.train
    return {
        "entered": machine.has_drive,
        "axis": machine.assembly.drive,
        "gravity_m_s2": list(machine.drive.gravity),
        "ratio": train.ratio,
        "shafts": [
            {"name": name, "speed_ratio": float(speed)} for name, speed in zip(train.shafts, train.speeds, strict=True)
        ],
        "bodies": [_body(*pair) for pair in zip(answer.bodies, answer.gravity, strict=True)],
        "at_load": _about(answer.at_load),
        "reflected": {"motor": _reflected(answer.reflected_motor), "load": _reflected(answer.reflected_load)},
        "inertia_ratio": {
            "ratio": answer.ratio.ratio, "limit": answer.ratio.limit, "within": answer.ratio.within,
        },
        "duty": _duty(answer),
        "standstills": [_standstill(one) for one in answer.standstills],
        "worst_standstill": _standstill(answer.worst),
        "stops": [_stop(one) for one in answer.stops],
        "limits": [_judged(one) for one in answer.judged],
        "stored_energy_J": answer.stored_energy,
        "checks": [check_answer(check) for check in answer.checks],
        "cautions": list(answer.cautions),
    }


def answer_of_balance(machine: Machine) -> Answer | None:
    """Return everything about balance; None where no mass turns with the shaft, or it cannot be worked out."""
    try:
        answer = machine.balance_answer
    except MasswrightError:
        return None
    if answer is None:
        return None
    wanted = machine.drive.balance
    return {
        "shaft": wanted.shaft,
        "axis": answer.axis.name,
        "zero_mark": zero_mark(answer.axis),
        "speed_rad_s": wanted.speed,
        "mass_kg": answer.found.mass,
        "station_m": answer.found.station,
        **_unbalance(answer.found),
        "bearings": _bearings(answer, wanted),
        "grade": _grade(answer),
        "permissible": _permissible(answer),
        "corrections": [_correction(one, answer) for one in answer.made],
        "left": _left(answer) if answer.made else None,
        "cautions": list(balance_cautions()),
    }


def _body(body: TurningBody, wave: GravityWave) -> Answer:
    return {
        "name": body.name,
        "shaft": body.shaft,
        "axis": body.axis.name,
        "mass_kg": float(body.moments.mass),
        "centre_m": plain(body.moments.centre.tolist()),
        "inertia_kgm2": body.inertia,
        "gravity": {"amplitude_Nm": wave.amplitude, "hangs_at_rad": wave.hangs_at, "offset_m": wave.offset},
    }


def _about(about: AboutAxis) -> Answer:
    return {
        "mass_kg": about.mass,
        "inertia_kgm2": about.inertia,
        "own_inertia_kgm2": about.own,
        "transfer_kgm2": about.transfer,
        "offset_m": about.offset,
        "radius_of_gyration_m": plain(about.radius_of_gyration),
        **_flywheel(about.inertia),
    }


def _flywheel(inertia: float) -> Answer:
    """Return the two flywheel effects, in kg·m²: GD² = 4·J and WR² = J."""
    return {"gd2_kgm2": 4 * inertia, "wr2_kgm2": inertia}


def _reflected(found: Reflected) -> Answer:
    return {
        "inertia_kgm2": found.inertia,
        **_flywheel(found.inertia),
        "rows": [
            {
                "name": row.name,
                "shaft": row.shaft,
                "inertia_kgm2": row.inertia,
                "mass_kg": row.mass,
                "travel_m_rad": row.travel,
                "speed_ratio": row.speed_ratio,
                "reflected_kgm2": row.reflected,
            }
            for row in found.rows
        ],
    }


def _duty(answer: DriveAnswer) -> Answer | None:
    if answer.study is None or answer.load is None or answer.motor is None:
        return None
    duty = answer.study.duty
    return {
        "cycle_s": answer.study.timeline.length,
        "steps": len(duty.flat),
        "start_rad": duty.start,
        "end_rad": duty.positions[-1],
        "comes_back": duty.comes_back,
        "load": _needs(answer.load),
        "motor": _needs(answer.motor),
    }


def _needs(needs: Needs) -> Answer:
    return {
        "peak": _peak(needs.peak),
        "highest": _peak(needs.highest),
        "lowest": _peak(needs.lowest),
        "rms_Nm": needs.rms,
        "rms_error_Nm": needs.rms_error,
        "mean_speed_rad_s": needs.mean_speed,
        "peak_speed_rad_s": needs.peak_speed,
        "mean_power_W": needs.mean_power,
        "peak_power": _peak(needs.peak_power),
        "peak_braking": _peak(needs.peak_braking),
        "energy": {
            "driving_J": needs.energy.driving,
            "returned_J": needs.energy.returned,
            "error_J": needs.energy.error,
            "by_term_J": _by_term(needs.energy.by_term),
        },
    }


def _peak(peak: Peak) -> Answer:
    return {
        "time_s": peak.time,
        "angle_rad": peak.angle,
        "speed_rad_s": peak.speed,
        "torque_Nm": peak.torque,
        "terms_Nm": _by_term(peak.terms),
        "power_W": peak.power,
    }


def _by_term(values: tuple[float, ...]) -> Answer:
    return dict(zip(TERMS, values, strict=True))


def _standstill(rest: Standstill) -> Answer:
    return {
        "angle_rad": rest.angle,
        "holding_Nm": rest.holding,
        "holding_at_motor_Nm": rest.holding_at_motor,
        "push_Nm": rest.push,
        "friction_Nm": rest.friction,
        "brakes_Nm": rest.brakes,
        "drift": rest.drift,
        "drift_braked": rest.drift_braked,
    }


def _stop(one: Stop) -> Answer:
    case = one.case
    return {
        "speed_rad_s": case.speed,
        "torque_Nm": case.torque,
        "shaft": case.shaft,
        "start_rad": case.angle,
        "time_s": one.time,
        "angle_rad": one.angle,
        "energy_J": one.energy,
        "heat_J": one.heat,
        "holds": one.holds,
    }


def _judged(one: Judged) -> Answer:
    return {
        "what": one.what,
        "within": one.within,
        "use": plain(one.use),
        "speed_rad_s": one.speed,
        "torque_Nm": one.torque,
        "limit_Nm": one.limit,
        "time_s": one.time,
    }


def _unbalance(found: Unbalance) -> Answer:
    return {
        "eccentricity_m": found.eccentricity,
        "static_kgm": found.amount,
        "static_angle_rad": found.angle,
        "couple_kgm2": found.couple_amount,
        "couple_angle_rad": found.couple_angle,
    }


def _bearings(answer: BalanceAnswer, wanted: BalanceSettings) -> list[Answer] | None:
    if wanted.bearings is None or answer.in_bearings is None:
        return None
    forces, allowed, split = answer.forces, answer.allowed_in_bearings, answer.split
    return [
        {
            "station_m": station,
            "unbalance_kgm": float(np.hypot(*vector)),
            "unbalance_angle_rad": math.atan2(vector[1], vector[0]),
            "rotating_force_N": None if forces is None else float(forces.rotating[at]),
            "rotating_force_angle_rad": None if forces is None else float(forces.angles[at]),
            "weight_N": None if forces is None else float(forces.weight[at]),
            "share": None if split is None else (split.first, split.second)[at],
            "permissible_kgm": None if allowed is None else allowed[at],
        }
        for at, (station, vector) in enumerate(zip(wanted.bearings, answer.in_bearings, strict=True))
    ]


def _grade(answer: BalanceAnswer) -> Answer | None:
    if answer.grade is None:
        return None
    return {
        "worst_mm_s": answer.grade.worst,
        "static_mm_s": answer.grade.static,
        "bearings_mm_s": None if answer.grade.planes is None else list(answer.grade.planes),
        "needed_mm_s": answer.grade.needed,
        "keeps": answer.keeps,
    }


def _permissible(answer: BalanceAnswer) -> Answer | None:
    if answer.allowed is None:
        return None
    return {
        "grade_mm_s": answer.allowed.grade,
        "eccentricity_m": answer.allowed.eccentricity,
        "unbalance_kgm": answer.allowed.unbalance,
        "centre_between_bearings": None if answer.split is None else answer.split.between,
    }


def _correction(one: Correction, answer: BalanceAnswer) -> Answer:
    return {
        "mass_kg": one.mass,
        "station_m": one.plane.station,
        "radius_m": one.plane.radius,
        "angle_rad": one.angle,
        "point_m": plain(one.point(answer.axis).tolist()),
    }


def _left(answer: BalanceAnswer) -> Answer:
    grade = None if answer.grade_left is None else answer.grade_left.worst
    return {"mass_kg": answer.left.mass, **_unbalance(answer.left), "grade_mm_s": grade}
