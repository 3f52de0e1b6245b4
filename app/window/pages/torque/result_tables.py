"""What the numbers of the result say: tables of values with unit, shaft and basis, straight from the answer."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

from app.window.pages.torque.result_graphs import TERM_WORDS
from core.drive import MOTOR, TERMS
from core.quantity import UNITS, Kind

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.drive import DriveAnswer, Needs, Standstill
    from core.drive.limits import Judged
    from core.machine import Machine
    from core.quantity import Unit, UnitSet

# Relative; an RMS that is off by less is shown without saying so.
EXACT, MAY_BE_OFF = 1e-6, "    it may be off by"
PERCENT, PLAIN = UNITS["%"], UNITS[""]
PARTS = "From the parts that turn, and motor, train and gravity as entered."
DUTY = "From the parts that turn, and the duty, the train and what acts on it as entered. No margin."


@dataclass(frozen=True)
class Number:
    """A value in SI, None where there is none, the unit it is shown in, and with how many decimals; None: by digits."""

    si: float | None
    unit: Unit
    decimals: int | None = None


Cell: TypeAlias = str | Number


@dataclass(frozen=True)
class Table:
    """Values under headings.

    Attributes:
        title: what they are.
        basis: where they came from.
        headings: of the columns, with the unit where all of a column has the same.
        rows: the cells.
    """

    title: str
    basis: str
    headings: tuple[str, ...]
    rows: tuple[tuple[Cell, ...], ...]


@dataclass(frozen=True, eq=False)
class Tables:
    """The tables of one answer in some units; `seen_from` is the shaft that inertia is reflected to."""

    machine: Machine
    units: UnitSet
    seen_from: str = MOTOR

    def all(self) -> tuple[Table, ...]:
        """Return every table that has something to say."""
        tables = (
            self.inertia(), self.stages(), self.duty(), self.limits(), self.rests(), self.gravity(), self.stops(),
        )
        return tuple(table for table in tables if table.rows)

    @property
    def _answer(self) -> DriveAnswer:
        return self.machine.drive_answer

    def _of(self, kind: Kind, si: float | None) -> Number:
        return Number(si, self.units[kind])

    def _row(self, words: str, kind: Kind, *values: float | None) -> tuple[Cell, ...]:
        unit = self.units[kind]
        return (words, *(Number(value, unit) for value in values), unit.symbol)

    def _headed(self, words: str, kind: Kind) -> str:
        return f"{words}\n{self.units[kind].symbol}"

    def inertia(self) -> Table:
        """Return J about the drive axis, at both ends of the train, and per rotor."""
        answer, axis = self._answer, self.machine.assembly.drive
        about, ratio, train = answer.at_load, answer.ratio, self.machine.drive.train
        turning = f"of what turns with the load shaft, about {axis}"
        rows = [
            self._row(f"J {turning}", Kind.INERTIA, about.inertia),
            self._row("    of which own J, about the centre of mass", Kind.INERTIA, about.own),
            self._row("    of which m·d²", Kind.INERTIA, about.transfer),
            ("    as GD² = 4·J", Number(about.inertia, self.units.gd2), self.units.gd2.symbol),
            ("    as WR² = J", Number(about.inertia, self.units.wr2), self.units.wr2.symbol),
            self._row("    radius of gyration", Kind.LENGTH, about.radius_of_gyration if about.mass else None),
            self._row("J of everything that moves, at the load shaft", Kind.INERTIA, answer.reflected_load.inertia),
            self._row("J of everything that moves, at the motor shaft", Kind.INERTIA, answer.reflected_motor.inertia),
        ]
        if train.motor.inertia:
            rows.append(("J of the load per J of the rotor, at the motor shaft", Number(ratio.ratio, PLAIN), ""))
        if ratio.limit is not None:
            rows.append(("    your limit of it: " + _kept(ratio.within), Number(ratio.limit, PLAIN), ""))
        if answer.stored_energy:
            rows.append(self._row("½·J·ω² of everything, at the highest speed", Kind.ENERGY, answer.stored_energy))
        return Table("Inertia", PARTS, ("Quantity", "Value", "Unit"), tuple(rows))

    def stages(self) -> Table:
        """Return what each part of the train adds to the inertia at the shaft chosen."""
        found = self._answer.reflected_at(self.seen_from)
        inertia, mass, length = (self.units[kind] for kind in (Kind.INERTIA, Kind.MASS, Kind.LENGTH))
        rows: list[tuple[Cell, ...]] = [
            (
                row.name, row.shaft, Number(row.mass, mass), Number(row.travel, length), Number(row.inertia, inertia),
                Number(row.speed_ratio, PLAIN), Number(row.reflected, inertia), Number(share, PERCENT, 2),
            )
            for row, share in zip(found.rows, found.shares, strict=True)
        ]
        if rows:
            rows.append(("Sum", self.seen_from, "", "", "", "", Number(found.inertia, inertia), ""))
        at = f"at the {self.seen_from} shaft"
        headings = (
            "Part of the train", "On shaft", self._headed("Moved\nmass m", Kind.MASS), f"v/ω\nper rad\n{length.symbol}",
            self._headed("J there, or\nm·(v/ω)²", Kind.INERTIA), f"ω per ω of\nthe {self.seen_from}",
            self._headed(f"J at the\n{self.seen_from}", Kind.INERTIA), "Share\n%",
        )
        return Table(f"Inertia stage by stage, {at}", PARTS, headings, tuple(rows))

    def duty(self) -> Table:
        """Return what the duty asks at the load and at the motor, side by side."""
        answer = self._answer
        if answer.study is None or answer.load is None or answer.motor is None:
            return Table("Duty", DUTY, (), ())
        if answer.demand.train.stages:
            shafts, names = [answer.load, answer.motor], ["At the load shaft", "At the motor shaft"]
        else:
            shafts, names = [answer.motor], ["At the motor shaft, which is the load's"]
        exact = all(needs.rms_error <= EXACT * needs.rms for needs in shafts)
        rows = [
            *(
                self._row(words, kind, *(value(needs) for needs in shafts)) for words, kind, value in _NEEDS
                if not (exact and words == MAY_BE_OFF)
            ),
            self._row("Time of one cycle", Kind.TIME, *[answer.study.timeline.length] * len(shafts)),
        ]
        return Table("What the duty asks", DUTY, ("Quantity", *names, "Unit"), tuple(rows))

    def limits(self) -> Table:
        """Return the motor's limits, kept or not."""
        rows = tuple(self._judged(one) for one in self._answer.judged)
        headings = (
            "Your limit", self._headed("Torque asked", Kind.TORQUE), self._headed("Limit there", Kind.TORQUE),
            "Used\n%", self._headed("At speed", Kind.SPEED), self._headed("At time", Kind.TIME), "Verdict",
        )
        return Table("Limits of the motor, at the motor shaft", DUTY, headings, rows)

    def _judged(self, one: Judged) -> tuple[Cell, ...]:
        whole = one.what == "continuous"
        words = "continuous: RMS torque at the mean speed" if whole else "peak: torque of every moment"
        return (
            words, self._of(Kind.TORQUE, one.torque), self._of(Kind.TORQUE, one.limit), Number(one.use, PERCENT, 1),
            self._of(Kind.SPEED, one.speed), self._of(Kind.TIME, one.time), _kept(one.within),
        )

    def rests(self) -> Table:
        """Return what holds the load where it rests and at the worst angle, and what it does with the drive off."""
        answer = self._answer
        rows = [self._rest("rest" if at else "start", rest) for at, rest in enumerate(answer.standstills)]
        rows.append(self._rest("worst angle", answer.worst))
        headings = (
            "Where", self._headed("Angle of\nthe load", Kind.ANGLE),
            self._headed("Holding\ntorque, load\nshaft", Kind.TORQUE),
            self._headed("Holding\ntorque, motor\nshaft", Kind.TORQUE),
            self._headed("Push with\ndrive off,\nload shaft", Kind.TORQUE),
            self._headed("Dry friction\nagainst it,\nload shaft", Kind.TORQUE),
            self._headed("Brakes\nagainst it,\nload shaft", Kind.TORQUE), "Drive off,\nbrakes off:\nthe load",
            "Drive off,\nbrakes on:\nthe load",
        )
        return Table("At rest, and with the drive off", DUTY, headings, tuple(rows))

    def _rest(self, where: str, rest: Standstill) -> tuple[Cell, ...]:
        torques = (rest.holding, rest.holding_at_motor, rest.push, rest.friction, rest.brakes)
        return (
            where, self._of(Kind.ANGLE, rest.angle), *(self._of(Kind.TORQUE, torque) for torque in torques), rest.drift,
            rest.drift_braked,
        )

    def gravity(self) -> Table:
        """Return the torque of gravity on each body that turns, and the angle at which it hangs."""
        answer = self._answer
        rows = tuple(
            (
                body.name, body.shaft, body.axis.name, self._of(Kind.TORQUE, wave.amplitude),
                self._of(Kind.ANGLE, wave.hangs_at if wave.amplitude else None), self._of(Kind.LENGTH, wave.offset),
            )
            for body, wave in zip(answer.bodies, answer.gravity, strict=True) if float(body.moments.mass)
        )
        headings = (
            "What turns", "With shaft", "About axis",
            self._headed("Largest torque of gravity\nat that shaft", Kind.TORQUE),
            self._headed("Angle of that shaft\nat which it hangs", Kind.ANGLE),
            self._headed("Centre of mass\nfrom the axis", Kind.LENGTH),
        )
        return Table("Gravity", PARTS, headings, rows)

    def stops(self) -> Table:
        """Return time, angle and heat of the stops asked for."""
        rows = tuple(
            (
                self._of(Kind.SPEED, one.case.speed),
                "all brakes of the train" if one.case.torque is None else f"{one.case.shaft} shaft",
                self._of(Kind.TORQUE, one.case.torque), self._of(Kind.TIME, one.time), self._of(Kind.ANGLE, one.angle),
                self._of(Kind.ENERGY, one.energy), self._of(Kind.ENERGY, one.heat),
                "holds" if one.holds else "does not hold",
            )
            for one in self._answer.stops
        )
        headings = (
            self._headed("From speed\nof the load", Kind.SPEED), "Braked by,\nor at",
            self._headed("Torque\nthere", Kind.TORQUE),
            self._headed("Time", Kind.TIME), self._headed("Angle of\nthe load", Kind.ANGLE),
            self._headed("½·J·ω²\nat first", Kind.ENERGY), self._headed("Heat in\nthe brake", Kind.ENERGY),
            "It then",
        )
        return Table("Stops", DUTY, headings, rows)


def _kept(within: bool | None) -> str:
    return {True: "kept", False: "not kept", None: "not judged, no rotor entered"}[within]


def _peak_term(at: int) -> Callable[[Needs], float]:
    return lambda needs: needs.peak.terms[at]


_NEEDS: tuple[tuple[str, Kind, Callable[[Needs], float]], ...] = (
    ("Peak torque, the largest of either sign", Kind.TORQUE, lambda needs: needs.peak.torque),
    ("    at time", Kind.TIME, lambda needs: needs.peak.time),
    ("    at angle of the load", Kind.ANGLE, lambda needs: needs.peak.angle),
    ("    at speed of the shaft", Kind.SPEED, lambda needs: needs.peak.speed),
    *((f"    of which {TERM_WORDS[term]}", Kind.TORQUE, _peak_term(at)) for at, term in enumerate(TERMS)),
    ("Highest torque", Kind.TORQUE, lambda needs: needs.highest.torque),
    ("Lowest torque", Kind.TORQUE, lambda needs: needs.lowest.torque),
    ("RMS torque over the cycle, rests counted", Kind.TORQUE, lambda needs: needs.rms),
    (MAY_BE_OFF, Kind.TORQUE, lambda needs: needs.rms_error),
    ("Mean speed over the cycle, of either sense", Kind.SPEED, lambda needs: needs.mean_speed),
    ("Highest speed, of either sense", Kind.SPEED, lambda needs: needs.peak_speed),
    ("Mean power, braking taken off", Kind.POWER, lambda needs: needs.mean_power),
    ("Peak power in driving", Kind.POWER, lambda needs: needs.peak_power.power),
    ("    at time", Kind.TIME, lambda needs: needs.peak_power.time),
    ("Peak power in braking, below 0", Kind.POWER, lambda needs: needs.peak_braking.power),
    ("    at time", Kind.TIME, lambda needs: needs.peak_braking.time),
    ("Energy in driving, each cycle", Kind.ENERGY, lambda needs: needs.energy.driving),
    ("Energy that braking gives back, each cycle", Kind.ENERGY, lambda needs: needs.energy.returned),
)
