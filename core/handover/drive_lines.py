"""The lines about a drive: each value with its symbol, shaft, what it counts, unit and basis in words of its own.

Torques are what the drive has to give, positive where they turn their shaft forwards; angles are of the load shaft,
0 where the document stands; a power below 0 is braking.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.drive.axis import keys_turning
from core.handover.lines import Entry, LineMaker, joint_basis
from core.quantity.units import UNITS, Kind

if TYPE_CHECKING:
    from core.drive import DriveAnswer, GravityWave, Needs, Stop, TurningBody
    from core.machine import Machine
    from core.quantity import UnitSet

REFLECTED: Final = "Drive: inertia"
BY_ROW: Final = "Drive: inertia reflected to the motor shaft, part by part"
CYCLE: Final = "Drive: duty"
STANDING: Final = "Drive: at rest"
STOPPING: Final = "Drive: stops"
LIMITS: Final = "Drive: limits of the motor"

_PERCENT: Final = UNITS["%"]
_ENTERED: Final = "the duty, the train and what acts on it as entered"
# Symbol and words of each of TERMS.
_TERMS: Final = (
    ("T_acc", "acceleration"), ("T_grav", "gravity"), ("T_appl", "applied loads"), ("T_fric", "friction"),
    ("T_loss", "losses"),
)


def duty_section(shaft: str) -> str:
    """Return the heading over what the duty asks at a shaft."""
    return f"{CYCLE} at the {shaft} shaft"


def turning_basis(machine: Machine) -> str:
    """Return where the values of what turns came from: the one basis, or all of them."""
    turning = set(keys_turning(machine.assembly, machine.drive.turning))
    return joint_basis(part.basis for part in machine.assembly.table.parts if part.key in turning)


def drive_lines(machine: Machine, units: UnitSet) -> tuple[Entry, ...]:
    """Return every line about torque: inertia, what the duty asks at both shafts, at rest, stops, limits.

    Raises:
        ValueRefused, EditRefused: as `core.drive.drive_answer`.
    """
    lines = _Lines(machine.drive_answer, units, turning_basis(machine))
    return *lines.inertia(), *lines.rows(), *lines.cycle(), *lines.at_rest(), *lines.stops(), *lines.limits()


def drive_notes(machine: Machine, units: UnitSet) -> tuple[str, ...]:
    """Return the sentences that belong beside those lines.

    Raises:
        ValueRefused, EditRefused: as `core.drive.drive_answer`.
    """
    return _Lines(machine.drive_answer, units, "").notes()


def needs_lines(needs: Needs, units: UnitSet, basis: str) -> tuple[Entry, ...]:
    """Return what a duty asks at one shaft: peak with its moment and terms, RMS, speeds, powers, energies."""
    shaft = f"at the {needs.shaft} shaft"
    make = LineMaker(duty_section(needs.shaft), units, basis, "")
    peak = needs.peak
    return (
        make.of(Kind.TORQUE, "T_peak", f"Peak torque {shaft} over the duty, the largest of either sign", peak.torque),
        make.of(Kind.TIME, "t_peak", f"Time of the peak torque {shaft}, from the start of the duty", peak.time),
        make.of(Kind.ANGLE, "θ_peak", f"Angle of the load in the moment of the peak torque {shaft}", peak.angle),
        make.of(Kind.SPEED, "n_peak", f"Speed in the moment of the peak torque {shaft}", peak.speed),
        *(
            make.of(Kind.TORQUE, symbol, f"Part of {words} in the peak torque {shaft}", torque)
            for (symbol, words), torque in zip(_TERMS, peak.terms, strict=True)
        ),
        make.of(Kind.TORQUE, "T_max", f"Highest torque {shaft} over the duty", needs.highest.torque),
        make.of(Kind.TORQUE, "T_min", f"Lowest torque {shaft} over the duty", needs.lowest.torque),
        make.of(Kind.TORQUE, "T_rms", f"RMS torque {shaft} over the whole duty, rests counted", needs.rms),
        make.of(Kind.SPEED, "n_mean", f"Mean speed {shaft} over the whole duty, of either sense", needs.mean_speed),
        make.of(Kind.SPEED, "n_max", f"Highest speed {shaft} over the duty, of either sense", needs.peak_speed),
        make.of(Kind.POWER, "P_mean", f"Mean power {shaft} over the whole duty, braking taken off", needs.mean_power),
        make.of(Kind.POWER, "P_peak", f"Peak power {shaft} in driving", needs.peak_power.power),
        make.of(Kind.POWER, "P_brake", f"Peak power {shaft} in braking, below 0", needs.peak_braking.power),
        make.of(Kind.ENERGY, "E_drive", f"Energy {shaft} in driving, each cycle", needs.energy.driving),
        make.of(Kind.ENERGY, "E_back", f"Energy {shaft} that braking gives back, each cycle", needs.energy.returned),
    )


@dataclass(frozen=True, eq=False)
class _Lines:
    """The lines of each section."""

    answer: DriveAnswer
    units: UnitSet
    parts: str

    def inertia(self) -> list[Entry]:
        """Return what everything that moves adds up to at either end of the train, and gravity's torque on it."""
        answer, make = self.answer, self._of_train(REFLECTED, "nothing that has mass turns with it")
        at_motor, at_load = answer.reflected_motor.inertia, answer.reflected_load.inertia
        everything = "of everything that moves, the rotor of the motor counted"
        turning = "of what turns with the load shaft, about the drive axis"
        ratio = self._of_train(REFLECTED, "no inertia of the motor's rotor is entered")
        lines = [
            make.of(Kind.INERTIA, "J_mot", f"Inertia reflected to the motor shaft, {everything}", at_motor),
            make.line("GD²_mot", f"GD² = 4·J reflected to the motor shaft, {everything}", at_motor, self.units.gd2),
            make.line("WR²_mot", f"WR² = J reflected to the motor shaft, {everything}", at_motor, self.units.wr2),
            make.of(Kind.INERTIA, "J_load", f"Inertia reflected to the load shaft, {everything}", at_load),
            make.of(Kind.INERTIA, "J_turn", f"Inertia {turning}", answer.at_load.inertia),
            make.of(Kind.LENGTH, "k_turn", f"Radius of gyration {turning}", answer.at_load.radius_of_gyration),
            ratio.of(
                Kind.NUMBER, "J_ratio", "Inertia ratio at the motor shaft: everything but the rotor, per rotor",
                answer.ratio.ratio,
            ),
        ]
        for body, wave in zip(answer.bodies, answer.gravity, strict=True):
            lines += self._wave(body, wave)
        return lines

    def _of_train(self, section: str, reason: str = "") -> LineMaker:
        return LineMaker(section, self.units, f"parts: {self.parts}; motor, train and gravity as entered", reason)

    def _wave(self, body: TurningBody, wave: GravityWave) -> list[Entry]:
        if wave.amplitude == 0:
            return []
        make, shaft = self._of_train(REFLECTED), f"the {body.shaft} shaft"
        return [
            make.of(Kind.TORQUE, "T_grav", f"Largest torque of gravity on {body.name} at {shaft}", wave.amplitude),
            make.of(Kind.ANGLE, "θ_hang", f"Angle of {shaft} at which {body.name} hangs", wave.hangs_at),
        ]

    def rows(self) -> list[Entry]:
        """Return what each part of the train adds to the inertia at the motor shaft."""
        rows, make = self.answer.reflected_motor.rows, self._of_train(BY_ROW)
        return [
            make.of(
                Kind.INERTIA, f"J_{at}",
                f"{row.name}, on the {row.shaft} shaft: its inertia reflected to the motor shaft", row.reflected,
            )
            for at, row in enumerate(rows, 1)
        ]

    def cycle(self) -> list[Entry]:
        """Return what the duty asks at both ends of the train; nothing without a duty."""
        answer = self.answer
        if answer.study is None or answer.load is None or answer.motor is None:
            return []
        make = self._maker(CYCLE)
        shafts = (answer.motor, answer.load) if answer.study.demand.train.stages else (answer.motor,)
        return [
            make.of(Kind.TIME, "t_cycle", "Time of one cycle of the duty", answer.study.timeline.length),
            make.of(
                Kind.ENERGY, "E_max", "Energy ½·J·ω² of everything that moves, at the highest speed entered",
                answer.stored_energy,
            ),
            *(line for needs in shafts for line in needs_lines(needs, self.units, make.basis)),
        ]

    def at_rest(self) -> list[Entry]:
        """Return what holds the load at its rests, and what moves it when the drive is off."""
        worst, make = self.answer.worst, self._maker(STANDING)
        hardest = max(self.answer.standstills, key=lambda rest: abs(rest.holding))
        at_rest = f"at rest at {self._angle(hardest.angle)}, friction not counted on"
        label = f"Torque that turns the load, at the load shaft, with the drive off at {self._angle(worst.angle)}"
        return [
            make.of(Kind.TORQUE, "T_h,load", f"Holding torque at the load shaft, {at_rest}", hardest.holding),
            make.of(Kind.TORQUE, "T_h,mot", f"Holding torque at the motor shaft, {at_rest}", hardest.holding_at_motor),
            make.of(Kind.TORQUE, "T_push", f"{label}, where it is largest", worst.push),
            make.of(Kind.TORQUE, "T_fric", "Dry friction of the train, at the load shaft", worst.friction),
            make.of(Kind.TORQUE, "T_brakes", "Brakes of the train, all applied, at the load shaft", worst.brakes),
        ]

    def stops(self) -> list[Entry]:
        """Return time, angle and heat of each stop."""
        return [line for at, one in enumerate(self.answer.stops, 1) for line in self._stop(at, one)]

    def _stop(self, at: int, one: Stop) -> list[Entry]:
        what = f"Stop {at} from {self.units.text(one.case.speed, Kind.SPEED)} of the load shaft"
        make = self._maker(STOPPING)
        return [
            make.of(Kind.TIME, f"t_stop{at}", f"{what}: time", one.time),
            make.of(Kind.ANGLE, f"θ_stop{at}", f"{what}: angle that the load turns meanwhile", one.angle),
            make.of(Kind.ENERGY, f"E_stop{at}", f"{what}: heat that the brake takes up", one.heat),
        ]

    def limits(self) -> list[Entry]:
        """Return how much of the motor's limits the duty uses."""
        make = self._maker(LIMITS, "the motor has no torque at that speed")
        return [
            make.line(
                f"use_{one.what[:4]}", f"{one.what.capitalize()} torque at the motor shaft, per your limit", one.use,
                _PERCENT,
            )
            for one in self.answer.judged
        ]

    def notes(self) -> tuple[str, ...]:
        """Return what belongs beside the values and is no value."""
        answer, worst = self.answer, self.answer.worst
        braked = f"; with every brake applied it {worst.drift_braked}" if worst.brakes else ""
        where = f"at {self._angle(worst.angle)}, where it is pushed hardest"
        said = [f"With the drive off {where}, the load {worst.drift}{braked}."]
        if answer.study is None:
            said.insert(0, "No duty is entered: there is no peak, no RMS, no speed and no power.")
        if not all(one.holds for one in answer.stops):
            said.append("After a stop the brake and friction do not hold the load everywhere.")
        return tuple(said)

    def _maker(self, section: str, reason: str = "") -> LineMaker:
        return LineMaker(section, self.units, f"parts: {self.parts}; {_ENTERED}", reason)

    def _angle(self, angle: float) -> str:
        return self.units.text(angle, Kind.ANGLE)
