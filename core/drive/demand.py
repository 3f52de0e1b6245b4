"""The torque that a motion asks for, term by term, on each shaft of a train, and what of it reaches another shaft.

Equation of motion of shaft i at its own speed: what the drive has to deliver is J·α − (torques of the surroundings),
so a weight that helps is negative. Through a stage of ratio r and efficiency η the torque T of the load side asks
T/(r·η) of the motor side while the motor drives it (T·ω > 0), and T·η'/r while the load drives the motor.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import FloatArray, IntArray, frozen, settled
from core.drive.train import LOAD, LinearLoad, Stage, Train, inertias_of_shafts
from core.once import Once

if TYPE_CHECKING:
    from core.arrays import ArrayLike
    from core.assembly import DriveAxis
    from core.drive.axis import TurningBody
    from core.drive.loads import AppliedForce, AppliedTorque, Friction
    from core.drive.motion import Kinematics
    from core.placement import Triple

# The rows of every array of terms, in this order.
TERMS = ("acceleration", "gravity", "applied", "friction", "losses")
ACCELERATION, GRAVITY, APPLIED, FRICTION, LOSSES = range(len(TERMS))

# m/s²: standard gravity, down along the document's z.
STANDARD_GRAVITY: Triple = (0.0, 0.0, -9.80665)

_TURN = 2 * math.pi


@dataclass(frozen=True, eq=False)
class Waves:
    """Torques a + b·cos θ + c·sin θ that the surroundings ask of shafts, θ the angle of the shaft.

    Attributes:
        shaft: (h,) which shaft.
        term: (h,) GRAVITY or APPLIED.
        constant, cosine, sine: (h,) N·m, a, b and c, at the shaft.
        against: (h,) 1 where the torque goes against the motion, 0 where its sense is fixed.
        start: (h,) rad, angle of the load where it begins to act.
        span: (h,) rad, how far it acts from there, in every turn; a full turn or more: always.
    """

    shaft: IntArray
    term: IntArray
    constant: FloatArray
    cosine: FloatArray
    sine: FloatArray
    against: FloatArray
    start: FloatArray
    span: FloatArray

    def at(
        self, angle: FloatArray, speeds: FloatArray, direction: FloatArray, ranged: FloatArray | None = None
    ) -> FloatArray:
        """Return the torques (h, m) N·m for angles (m,) of the load, shaft speeds (k,) per load speed.

        `ranged` (m,) rad says whether a load over a range of angles acts; None: the angle does.
        """
        turn = speeds[self.shaft][:, None]
        theta = turn * angle
        torque = self.constant[:, None] + self.cosine[:, None] * np.cos(theta) + self.sine[:, None] * np.sin(theta)
        torque = np.where(self.against[:, None] > 0, torque * direction * np.sign(turn), torque)
        limited = self.span < _TURN
        if limited.any():
            inside = ((angle if ranged is None else ranged) - self.start[:, None]) % _TURN <= self.span[:, None]
            torque = np.where(inside | ~limited[:, None], torque, 0.0)
        return np.asarray(torque)


@dataclass(frozen=True, eq=False)
class Demand:
    """All that asks torque of a drive.

    Attributes:
        train: the stages and what hangs on its shafts.
        bodies: what the document has turning with the shafts.
        axis: the drive axis, which applied forces act about.
        forces, torques, frictions: as entered.
        gravity: (3,) m/s², document frame.
    """

    train: Train
    bodies: tuple[TurningBody, ...]
    axis: DriveAxis
    forces: tuple[AppliedForce, ...] = ()
    torques: tuple[AppliedTorque, ...] = ()
    frictions: tuple[Friction, ...] = ()
    gravity: Triple = STANDARD_GRAVITY

    @Once
    def weight_factor(self) -> float:
        """Size of the acceleration of gravity, m/s²."""
        return float(np.linalg.norm(self.gravity))

    @Once
    def inertia(self) -> FloatArray:
        """J (k,) kg·m² on each shaft, with masses moved along a line and the rotor."""
        return inertias_of_shafts(self.train, self.bodies)

    @Once
    def turning_inertia(self) -> FloatArray:
        """J (k,) kg·m² on each shaft without the masses moved along a line."""
        moved = np.zeros(len(self.inertia))
        for load in self.train.linear:
            moved[self.train.index(load.shaft)] += load.mass * load.travel**2
        return frozen(self.inertia - moved)

    @Once
    def inertia_at_load(self) -> float:
        """Everything that moves, seen from the load shaft, kg·m²."""
        return float(self.inertia @ self.train.speeds**2)

    @Once
    def waves(self) -> Waves:
        """Gravity of the turning bodies, applied forces and applied torques."""
        rows: list[tuple[float, ...]] = []
        for body in self.bodies:
            pull = float(body.moments.mass) * np.asarray(self.gravity)
            wave = wave_of_force(body.axis, pull, body.moments.centre, "space", "part")
            rows.append((self.train.index(body.shaft), GRAVITY, *wave, 0.0, 0.0, math.inf))
        for force in self.forces:
            wave = wave_of_force(self.axis, force.force, force.point, force.direction_in, force.point_in)
            rows.append((self.train.index(LOAD), APPLIED, *wave, 0.0, *_range(force)))
        for torque in self.torques:
            at = self.train.index(torque.shaft, torque.name)
            against = float(torque.sense == "against motion")
            rows.append((at, APPLIED, torque.torque, 0.0, 0.0, against, *_range(torque)))
        table = np.array(rows, dtype=float).reshape(-1, 8)
        whole = table[:, :2].astype(np.int64)
        return Waves(whole[:, 0], whole[:, 1], *(frozen(column) for column in table[:, 2:].T))

    @Once
    def dry(self) -> FloatArray:
        """Friction (k,) N·m on each shaft that does not depend on speed."""
        dry = np.zeros(len(self.inertia))
        for friction in self.frictions:
            at = self.train.index(friction.shaft, friction.name)
            mass = sum(float(body.moments.mass) for body in self.bodies if self.train.index(body.shaft) == at)
            dry[at] += friction.dry(mass * self.weight_factor)
        return frozen(dry)

    @Once
    def viscous(self) -> FloatArray:
        """Friction (k,) N·m·s/rad on each shaft."""
        viscous = np.zeros(len(self.inertia))
        for friction in self.frictions:
            viscous[self.train.index(friction.shaft, friction.name)] += friction.viscous
        return frozen(viscous)

    def terms(self, motion: Kinematics) -> FloatArray:
        """Return what each shaft itself asks, (5, k, m) N·m at that shaft, TERMS by shafts by times."""
        speeds = self.train.speeds
        terms = np.zeros((len(TERMS), len(speeds), len(motion.time)))
        terms[ACCELERATION] = (self.turning_inertia * speeds)[:, None] * motion.acceleration
        terms[FRICTION] = (self.dry * np.sign(speeds))[:, None] * motion.direction
        terms[FRICTION] += (self.viscous * speeds)[:, None] * motion.speed
        waves = self.waves
        for row, torque in enumerate(waves.at(motion.angle, speeds, motion.direction, motion.ranged)):
            terms[waves.term[row], waves.shaft[row]] += torque
        for load in self.train.linear:
            at = self.train.index(load.shaft)
            terms[:, at] += _terms_of_linear(load, float(speeds[at]), self.weight_factor, motion)
        return terms

    def at_shaft(self, terms: FloatArray, direction: FloatArray, shaft: str) -> FloatArray:
        """Return what a shaft has to be given, (5, m) N·m, for itself and all that it drives.

        Args:
            terms: (5, k, m) as terms() gives them.
            direction: (m,) sense of the load's move; 0 at rest, where no losses are counted.
            shaft: its name.
        """
        total = terms[:, -1].copy()
        for number in range(len(self.train.stages) - 1, self.train.index(shaft) - 1, -1):
            total = self._through(number, total, direction) + terms[:, number]
        return total

    def passed_on(self, motion: Kinematics) -> FloatArray:
        """Return what each shaft and each moved mass is given, (s, m) N·m, positive in driving, negative in braking.

        Where one changes its sign, losses change sides: torque and power have a kink there.
        """
        terms, given = self.terms(motion), []
        for load in self.train.linear:
            speed = float(self.train.speeds[self.train.index(load.shaft)])
            net, sense = _net_of_linear(load, speed, self.weight_factor, motion)
            given.append(net.sum(axis=0) * sense)
        total = terms[:, -1]
        given.append(total.sum(axis=0) * motion.direction)
        for number in range(len(self.train.stages) - 1, -1, -1):
            total = self._through(number, total, motion.direction) + terms[:, number]
            given.append(total.sum(axis=0) * motion.direction * np.sign(self.train.speeds[number]))
        return np.array(given)

    def _through(self, number: int, total: FloatArray, direction: FloatArray) -> FloatArray:
        """Return what the motor side of a stage has to be given, (5, m) N·m, for a total (5, m) on its load side."""
        stage = self.train.stages[number]
        power = total.sum(axis=0) * direction * np.sign(self.train.speeds[number + 1])
        passed = total / stage.ratio
        passed[LOSSES] += total.sum(axis=0) / stage.ratio * _loss(stage, power)
        return passed


@dataclass(frozen=True)
class GravityWave:
    """The torque of gravity on a body that turns: amplitude·sin(θ − hangs_at) is asked of the drive.

    Attributes:
        amplitude: m·g·d N·m, g counted across the axis; 0 for an upright axis or a balanced body.
        hangs_at: rad in −π…π, the angle θ at which the centre of mass is lowest; 0 where there is no torque.
        offset: d, m, of the centre of mass from the axis.
    """

    amplitude: float
    hangs_at: float
    offset: float


def gravity_wave(body: TurningBody, gravity: Triple = STANDARD_GRAVITY) -> GravityWave:
    """Return the torque of gravity (m/s², document frame) on a body over the angle of its shaft."""
    pull = float(body.moments.mass) * np.asarray(gravity)
    _, cosine, sine = wave_of_force(body.axis, pull, body.moments.centre, "space", "part")
    offset = float(body.moments.offset_from_axis(body.axis.point, body.axis.direction))
    return GravityWave(math.hypot(cosine, sine), math.atan2(-cosine, sine), offset)


def wave_of_force(
    axis: DriveAxis, force: ArrayLike, point: ArrayLike, direction_in: str, point_in: str
) -> tuple[float, float, float]:
    """Return (a, b, c) N·m of the torque a + b·cos θ + c·sin θ that a force (3,) N asks of the drive.

    The torque is −u·(r × F), r from the axis to the point (3,) m as the document stands, u the axis's direction;
    what turns with the part turns by θ.
    """
    unit, pull = axis.unit, np.asarray(force, dtype=float)
    # Taken from the axis, a lever or force along it leaves round-off, which is no torque.
    lever = np.asarray(point, dtype=float) - np.asarray(axis.point)
    lever = settled(lever - (lever @ unit) * unit, np.linalg.norm(point) + np.linalg.norm(axis.point))
    pull = settled(pull - (pull @ unit) * unit, np.linalg.norm(pull))
    aligned = -float(unit @ np.cross(lever, pull))
    if direction_in == point_in:
        return aligned, 0.0, 0.0
    # A quarter turn of the lever or of the force makes a cross product of their dot product.
    quarter = float(lever @ pull)
    return 0.0, aligned, quarter if point_in == "part" else -quarter


def _range(load: AppliedForce | AppliedTorque) -> tuple[float, float]:
    if load.start is None or load.end is None:
        return 0.0, math.inf
    return load.start, load.end - load.start


def _terms_of_linear(load: LinearLoad, speed: float, gravity: float, motion: Kinematics) -> FloatArray:
    """Return what a mass moved along a line asks of its shaft, (5, m) N·m; speed is the shaft's per load speed."""
    terms, sense = _net_of_linear(load, speed, gravity, motion)
    net = terms.sum(axis=0)
    terms[LOSSES] = net * _loss(load, net * sense)
    return terms


def _net_of_linear(
    load: LinearLoad, speed: float, gravity: float, motion: Kinematics
) -> tuple[FloatArray, FloatArray]:
    """Return the same before losses, and the sense (m,) in which its shaft turns."""
    terms = np.zeros((len(TERMS), len(motion.time)))
    weight = load.mass * gravity
    sense = motion.direction * math.copysign(1.0, speed)
    terms[ACCELERATION] = load.mass * load.travel**2 * speed * motion.acceleration
    terms[GRAVITY] = weight * math.sin(load.slope) * load.travel
    terms[FRICTION] = (load.friction + load.friction_coefficient * weight * math.cos(load.slope)) * load.travel * sense
    return terms, sense


def _loss(stage: Stage | LinearLoad, power: FloatArray) -> FloatArray:
    """Return what is added per torque that is passed on: 1/η − 1 in driving, η' − 1 in braking, 0 at rest."""
    back = stage.efficiency if stage.braking_efficiency is None else stage.braking_efficiency
    return np.where(power > 0, 1 / stage.efficiency - 1, np.where(power < 0, back - 1, 0.0))
