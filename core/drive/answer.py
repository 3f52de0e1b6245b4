"""The one call behind the Torque and Balance pages and the command line: everything a document says of its drive."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.assembly import Finding
from core.checks import Check
from core.drive.axis import AboutAxis, TurningBody, about_axis, bodies_of, keys_turning
from core.drive.balance import (
    BearingForces,
    Correction,
    Unbalance,
    bearing_forces,
    corrected,
    corrections,
    unbalance,
)
from core.drive.cautions import cautions
from core.drive.demand import Demand, GravityWave, gravity_wave
from core.drive.drawing import OverTurn, over_a_turn
from core.drive.grade import Graded, Permissible, Shares, graded, permissible, shares
from core.drive.limits import Judged, judge_continuous, judge_peak
from core.drive.standstill import Standstill, standstill, standstills_of, worst_standstill
from core.drive.stopping import Stop, stop
from core.drive.torque import Curves, Needs, Study
from core.drive.train import LOAD, MOTOR, InertiaRatio, Reflected, inertia_ratio, reflected
from core.errors import ValueRefused
from core.moments import Moments
from core.once import Once

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly import Assembly, DriveAxis, Node
    from core.drive.settings import BalanceSettings, DriveSettings

# A turning part whose J is this near to the rotor's, relative, may be the rotor itself.
SAME_INERTIA = 1e-3


@dataclass(frozen=True, eq=False)
class DriveAnswer:
    """What the drive has to move, and what that asks.

    Attributes:
        demand: all that asks torque of the drive.
        bodies: what turns, with which shaft, about which axis.
        at_load: inertia about the drive axis of what turns with the load shaft.
        reflected_motor, reflected_load: everything that moves, seen from the motor and from the load, row by row.
        gravity: torque of gravity over the angle, of each of the bodies.
        ratio: inertia of the load per inertia of the rotor.
        study: for the curves; None without a duty.
        load, motor: what the duty asks at the load shaft and at the motor; None without a duty.
        standstills: at the start and the rests of the duty; without a duty as the document stands.
        worst: the standstill, anywhere that the load comes to, from which it is pushed hardest.
        stops: the stops asked for.
        judged: the motor's limits kept or not.
        stored_energy: J, ½·J·ω² of everything at the highest speed of the duty.
        findings: parts without mass, a rotor counted twice, limits kept or not; with the line they are about.
        cautions: the sentences that belong in every output.
    """

    demand: Demand
    bodies: tuple[TurningBody, ...]
    at_load: AboutAxis
    reflected_motor: Reflected
    reflected_load: Reflected
    gravity: tuple[GravityWave, ...]
    ratio: InertiaRatio
    study: Study | None
    load: Needs | None
    motor: Needs | None
    standstills: tuple[Standstill, ...]
    worst: Standstill
    stops: tuple[Stop, ...]
    judged: tuple[Judged, ...]
    stored_energy: float
    findings: tuple[Finding, ...]
    cautions: tuple[str, ...]

    @property
    def checks(self) -> tuple[Check, ...]:
        """The checks of the findings."""
        return tuple(finding.check for finding in self.findings)

    def curves(self, shaft: str = LOAD) -> Curves | None:
        """Return the curves at a shaft; None without a duty."""
        return None if self.study is None else self.study.curves(shaft)

    def reflected_at(self, shaft: str) -> Reflected:
        """Return everything that moves, seen from any shaft of the train, row by row.

        Raises:
            ValueRefused: the train has no such shaft.
        """
        return reflected(self.demand.train, self.bodies, shaft)

    @Once
    def over_turn(self) -> OverTurn:
        """What holds the load at rest over a full turn, with its standstills marked."""
        return over_a_turn(self.demand, self.standstills)


def demand_of(assembly: Assembly, settings: DriveSettings) -> Demand:
    """Return all that asks torque of the drive of a document.

    Raises:
        ValueRefused, EditRefused: the settings name an axis or a line that the document has not.
    """
    bodies = bodies_of(assembly, settings.turning)
    return Demand(
        settings.train, bodies, assembly.drive_axis, settings.forces, settings.torques, settings.frictions,
        settings.gravity,
    )


def drive_answer(assembly: Assembly, settings: DriveSettings) -> DriveAnswer:
    """Return everything about torque; balance is balance_answer's.

    Raises:
        ValueRefused, EditRefused: the settings name what the document has not, or a stop does not come about.
    """
    demand, train = demand_of(assembly, settings), settings.train
    study = Study(demand, settings.duty) if settings.duty.flat else None
    load, motor = (None, None) if study is None else (study.needs(LOAD), study.needs(MOTOR))
    rests = (standstill(demand, settings.duty.start),) if study is None else standstills_of(study)
    worst = worst_standstill(demand, *_passed(study))
    stops = tuple(stop(demand, case) for case in settings.stops)
    judged = _judged(settings, study, motor)
    speeds = [abs(case.speed) for case in settings.stops] + ([load.peak_speed] if load else [])
    energy = demand.inertia_at_load * max(speeds, default=0.0) ** 2 / 2
    ratio = inertia_ratio(train, demand.bodies)
    return DriveAnswer(
        demand, demand.bodies, about_axis(_moments_on(demand.bodies, LOAD, settings), assembly.drive_axis),
        reflected(train, demand.bodies, MOTOR), reflected(train, demand.bodies, LOAD),
        tuple(gravity_wave(body, settings.gravity) for body in demand.bodies), ratio, study, load, motor, rests,
        worst, stops, judged, energy,
        (*_weightless(assembly, settings), *_rotor_findings(assembly, settings), *_limit_findings(ratio, judged)),
        cautions(energy, load_can_move=worst.drift != "stays"),
    )


@dataclass(frozen=True, eq=False)
class BalanceAnswer:
    """How well what turns with a shaft is balanced.

    Attributes:
        axis: the axis of the rotor.
        found: its unbalance.
        in_bearings: (2, 2) kg·m, unbalance in planes at the two bearings; None without bearings.
        forces: on the bearings at the service speed; None without either.
        grade: what it has at its service speed; None without one.
        allowed: what the grade wanted permits; None without one.
        split: how that is split over the bearings.
        allowed_in_bearings: (2,) kg·m.
        keeps: whether it keeps to the grade wanted, in whole and in each plane; None without one.
        made: the corrections worked out.
        left: the unbalance with them; equal to found where none were.
        grade_left: the grade with them.
    """

    axis: DriveAxis
    found: Unbalance
    in_bearings: FloatArray | None
    forces: BearingForces | None
    grade: Graded | None
    allowed: Permissible | None
    split: Shares | None
    allowed_in_bearings: tuple[float, float] | None
    keeps: bool | None
    made: tuple[Correction, ...]
    left: Unbalance
    grade_left: Graded | None


def balance_answer(assembly: Assembly, settings: DriveSettings) -> BalanceAnswer | None:
    """Return everything about balance; None where nothing that has mass turns with the shaft.

    Raises:
        ValueRefused, EditRefused: the settings name what the document has not.
    """
    wanted, rotor = settings.balance, rotor_of(assembly, settings)
    if rotor is None:
        return None
    moments, axis = rotor
    found = unbalance(moments, axis)
    made = corrections(found, wanted.planes, wanted.by) if wanted.planes else ()
    taken = -sum(one.mass for one in made)
    if taken >= found.mass:
        raise ValueRefused(
            "the corrections would take away more than the rotor weighs", where="balance",
            read=f"{taken:.4g} kg of {found.mass:.4g} kg", remedy="Correct farther out, or by adding",
        )
    left = unbalance(corrected(moments, axis, made), axis) if made else found
    split = None if wanted.bearings is None else shares(found.station, wanted.bearings)
    forces = None
    if wanted.bearings is not None and wanted.speed is not None:
        forces = bearing_forces(found, axis, wanted.bearings, wanted.speed, settings.gravity)
    grade, allowed = _grade_of(found, wanted), None
    if wanted.grade is not None:
        allowed = permissible(wanted.grade, found.mass, wanted.speed)
    in_bearings = None if wanted.bearings is None else found.in_planes(*wanted.bearings)
    return BalanceAnswer(
        axis, found, in_bearings, forces, grade, allowed, split,
        None if allowed is None or split is None else split.of(allowed.unbalance),
        None if grade is None or wanted.grade is None else grade.keeps_to(wanted.grade),
        made, left, _grade_of(left, wanted),
    )


def rotor_of(assembly: Assembly, settings: DriveSettings) -> tuple[Moments, DriveAxis] | None:
    """Return what turns with the shaft of the rotor, document frame, and the axis it turns about; None without mass.

    Raises:
        ValueRefused, EditRefused: as balance_answer.
    """
    shaft, train = settings.balance.shaft, settings.train
    bodies = bodies_of(assembly, settings.turning)
    moments = _moments_on(bodies, shaft, settings)
    if float(moments.mass) <= 0:
        return None
    axes = [body.axis for body in bodies if train.index(body.shaft) == train.index(shaft)]
    if any(one != axes[0] for one in axes):
        raise ValueRefused(
            "what turns with one shaft turns about different axes, so it is no one rotor", where="balance",
            read=" and ".join(one.name for one in axes), remedy="Choose another shaft, or one axis for all of it",
        )
    return moments, axes[0]


def _grade_of(found: Unbalance, wanted: BalanceSettings) -> Graded | None:
    if wanted.speed is None:
        return None
    planes = split = None
    if wanted.bearings is not None:
        planes, split = found.in_planes(*wanted.bearings), shares(found.station, wanted.bearings)
    return graded(found.mass, found.amount, planes, split, wanted.speed)


def _moments_on(bodies: tuple[TurningBody, ...], shaft: str, settings: DriveSettings) -> Moments:
    """Return all that turns with a shaft as one body, document frame."""
    at = settings.train.index(shaft)
    there = [body.moments for body in bodies if settings.train.index(body.shaft) == at]
    if not there:
        return Moments.nothing()
    return Moments(
        np.stack([one.mass for one in there]), np.stack([one.centre for one in there]),
        np.stack([one.spread for one in there]),
    ).total()


def _passed(study: Study | None) -> tuple[float, float]:
    """Return the lowest and highest angle that the load comes to; a full turn where no duty says."""
    if study is None:
        return -math.pi, math.pi
    return min(study.duty.positions), max(study.duty.positions)


def _judged(settings: DriveSettings, study: Study | None, motor: Needs | None) -> tuple[Judged, ...]:
    if study is None or motor is None:
        return ()
    judged = []
    if settings.limits.peak is not None:
        judged.append(judge_peak(settings.limits.peak, study.curves(MOTOR)))
    if settings.limits.continuous is not None:
        judged.append(judge_continuous(settings.limits.continuous, motor))
    return tuple(judged)


def _limit_findings(ratio: InertiaRatio, judged: tuple[Judged, ...]) -> list[Finding]:
    checks = []
    if ratio.within is not None:
        text = f"load inertia is {ratio.ratio:.4g} times the motor's; your limit is {ratio.limit:.4g}"
        checks.append(Check("inertia ratio", ok=ratio.within, text=text))
    for one in judged:
        whole = "RMS torque at the mean speed" if one.what == "continuous" else "torque"
        text = f"{whole}: {one.torque:.4g} N·m at {one.speed:.4g} rad/s; your limit there is {one.limit:.4g} N·m"
        checks.append(Check(f"{one.what} torque of the motor", ok=one.within, text=text))
    return [Finding("", "drive", check) for check in checks]


def _weightless(assembly: Assembly, settings: DriveSettings) -> list[Finding]:
    """Tell of parts that turn and of which nothing says what they weigh."""
    turning = set(keys_turning(assembly, settings.turning))
    return [
        _failed(
            part, "mass of what turns", f"{part.name}: nothing says what it weighs; torque and balance leave it out"
        )
        for part in assembly.without_mass if part.key in turning
    ]


def _rotor_findings(assembly: Assembly, settings: DriveSettings) -> list[Finding]:
    """Tell of a rotor that is in the motor's data and also among what turns."""
    motor = settings.train.motor
    if motor.inertia == 0:
        return []
    turning = set(keys_turning(assembly, settings.turning))
    if motor.rotor and motor.rotor in assembly:
        inside = {part.key for part in assembly.node(motor.rotor).table.parts} & turning
        if inside:
            rotor = assembly.node(motor.rotor)
            text = "it turns with the train, and the motor's data has its inertia too; it is counted twice"
            return [_failed(rotor, "rotor counted twice", f"{rotor.name}: {text}")]
    found = []
    table = assembly.table
    # About its own centre: the rotor may stand beside the drive axis.
    own = np.bincount(table.owner, table.moments.own_inertia_along(assembly.drive_axis.direction), len(table.parts))
    for part, inertia in zip(table.parts, own.tolist(), strict=True):
        if part.key in turning and math.isclose(inertia, motor.inertia, rel_tol=SAME_INERTIA):
            text = f"{part.name}: its J {inertia:.4g} kg·m² is that of the motor's rotor; is the rotor counted twice?"
            found.append(_failed(part, "rotor counted twice", text))
    return found


def _failed(line: Node, name: str, text: str) -> Finding:
    return Finding(line.key, line.name, Check(name, ok=False, text=text))
