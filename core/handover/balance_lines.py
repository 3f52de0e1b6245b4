"""The lines about balance: each value with its symbol, axis, place, unit and basis in words of its own.

Angles are 0…360° from the zero mark about the axis, right-handed; stations are along the axis from its point.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.drive.axis import shafts_by_key, zero_mark
from core.handover.lines import Entry, LineMaker, joint_basis
from core.quantity.units import UNITS, Kind, Unit

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly import Assembly, DriveAxis
    from core.drive import BalanceAnswer, BalanceSettings, DriveSettings, Unbalance
    from core.quantity import UnitSet

ROTOR: Final = "Rotor"
UNBALANCE: Final = "Unbalance"
IN_PLANES: Final = "Unbalance in two planes"
IN_SERVICE: Final = "At the service speed"
PERMITTED: Final = "Permissible residual unbalance"
CORRECTIONS: Final = "Corrections"
LEFT: Final = "Left after the corrections"

NO_ANGLE: Final = "there is no unbalance, so no angle"
_GRADE_UNIT: Final = UNITS["mm/s"]
_MM: Final = 1e-3


def angle_note(axis: DriveAxis) -> str:
    """Return the sentence that says where angles and stations count from."""
    return (
        f"Angles count from the zero mark, the document's {zero_mark(axis)} as seen along {axis.name}, right-handed "
        f"about its direction, and name the heavy side; stations count along {axis.name} from its point."
    )


def rotor_basis(assembly: Assembly, settings: DriveSettings) -> str:
    """Return where the values of what turns with the rotor's shaft came from: the one basis, or all of them."""
    train = settings.train
    shafts, at = shafts_by_key(assembly, settings.turning), train.index(settings.balance.shaft)
    turning = (part for part in assembly.table.parts if part.key in shafts and train.index(shafts[part.key]) == at)
    return joint_basis(part.basis for part in turning)


def balance_lines(
    answer: BalanceAnswer, drive: DriveSettings, units: UnitSet, basis: str
) -> tuple[Entry, ...]:
    """Return every line about the balance of a rotor.

    Args:
        answer: of the document.
        drive: what it is judged by, and the shafts.
        units: in which the values are shown.
        basis: of what turns; see `rotor_basis`.
    """
    lines = _Lines(answer, drive, units, basis)
    return (
        *lines.rotor(), *lines.unbalance(), *lines.in_planes(), *lines.in_service(), *lines.permitted(),
        *lines.corrections(), *lines.left(),
    )


def couple_unit(units: UnitSet) -> Unit:
    """Return the unit of a couple unbalance that goes with that of an unbalance: g·mm² with g·mm."""
    return UNITS[f"{units[Kind.UNBALANCE].symbol}²"]


def eccentricity_unit(units: UnitSet) -> Unit:
    """Return the unit of an eccentricity: µm beside mm, otherwise that of lengths."""
    return UNITS["µm"] if units[Kind.LENGTH].symbol == "mm" else units[Kind.LENGTH]


def angle_of(vector: FloatArray) -> float | None:
    """Return the angle 0…2π rad of a pair from the zero mark; None where it has no length."""
    return math.atan2(vector[1], vector[0]) % (2 * math.pi) if np.any(vector) else None


@dataclass(frozen=True, eq=False)
class _Lines:
    """The lines of each section."""

    answer: BalanceAnswer
    drive: DriveSettings
    units: UnitSet
    basis: str

    @property
    def wanted(self) -> BalanceSettings:
        """What it is judged by."""
        return self.drive.balance

    @property
    def _axis(self) -> str:
        return self.answer.axis.name

    def _maker(self, section: str, reason: str = "") -> LineMaker:
        return LineMaker(section, self.units, self.basis, reason)

    def _vector(
        self, section: str, symbol: str, what: str, vector: FloatArray, unit: Unit, formula: str = ""
    ) -> list[Entry]:
        size, make = float(np.hypot(*vector)), self._maker(section, NO_ANGLE)
        angle = f"Angle of the {what} about {self._axis}, heavy side"
        return [
            make.line(symbol, f"{what[:1].upper()}{what[1:]} about {self._axis}{formula}", size, unit),
            make.of(Kind.ANGLE, f"φ_{symbol}", angle, angle_of(vector)),
        ]

    def rotor(self) -> list[Entry]:
        """Return what turns, and how fast."""
        make, found = self._maker(ROTOR, "no service speed is entered"), self.answer.found
        shaft = self.drive.train.words_of(self.wanted.shaft)
        return [
            make.of(Kind.MASS, "m", f"Mass of what turns with the shaft: {shaft}", found.mass),
            make.of(Kind.LENGTH, "z", f"Station of its centre of mass along {self._axis}", found.station),
            make.of(Kind.SPEED, "n", "Service speed", self.wanted.speed),
        ]

    def unbalance(self) -> list[Entry]:
        """Return eccentricity, static and couple unbalance."""
        found = self.answer.found
        return [
            self._maker(UNBALANCE).line(
                "e", f"Eccentricity of the centre of mass from {self._axis}", found.eccentricity,
                eccentricity_unit(self.units),
            ),
            *self._vector(UNBALANCE, "U", "static unbalance", found.static, self.units[Kind.UNBALANCE], ", m·e"),
            *self._vector(
                UNBALANCE, "C", "couple unbalance", found.couple, couple_unit(self.units),
                ", +∫ρz dm at its centre of mass",
            ),
        ]

    def in_planes(self) -> list[Entry]:
        """Return the unbalance in planes at the bearings, and in the correction planes where there are two."""
        lines: list[Entry] = []
        unit = self.units[Kind.UNBALANCE]
        if self.answer.in_bearings is not None:
            for at, vector in enumerate(self.answer.in_bearings, 1):
                label = f"dynamic unbalance in the plane of bearing {at}"
                lines += self._vector(IN_PLANES, f"U_B{at}", label, vector, unit)
        if len(self.wanted.planes) == 2:  # noqa: PLR2004  # two planes take all of it
            stations = [plane.station for plane in self.wanted.planes]
            for at, vector in enumerate(self.answer.found.in_planes(*stations), 1):
                label = f"dynamic unbalance in correction plane {at}"
                lines += self._vector(IN_PLANES, f"U_{at}", label, vector, unit)
        return lines

    def in_service(self) -> list[Entry]:
        """Return the grade that it has, and the forces on the bearings."""
        answer, lines = self.answer, list[Entry]()
        if answer.grade is None:
            return lines
        make = self._maker(IN_SERVICE, "it is worse than every grade of the standard")
        lines.append(make.line("G", "Balance quality grade that it has, e·ω", answer.grade.static * _MM, _GRADE_UNIT))
        for at, grade in enumerate(answer.grade.planes or (), 1):
            label = f"Grade that the plane of bearing {at} has by its share"
            lines.append(make.line(f"G_B{at}", label, grade * _MM, _GRADE_UNIT))
        needed = None if answer.grade.needed is None else answer.grade.needed * _MM
        label = "Lowest grade of ISO 21940-11 that it keeps to"
        lines.append(make.line("G_ISO", label, needed, _GRADE_UNIT))
        if answer.forces is None:
            return lines
        for at in range(2):
            rotating, angle = float(answer.forces.rotating[at]), float(answer.forces.angles[at]) % (2 * math.pi)
            make = self._maker(IN_SERVICE, NO_ANGLE)
            where = f"bearing {at + 1}"
            lines += [
                make.of(Kind.FORCE, f"F_B{at + 1}", f"Rotating force of unbalance on {where}", rotating),
                make.of(
                    Kind.ANGLE, f"φ_F_B{at + 1}", f"Angle of the rotating force on {where} from the zero mark",
                    angle if rotating else None,
                ),
                make.of(
                    Kind.FORCE, f"W_B{at + 1}", f"Standing share of the weight across {self._axis} on {where}",
                    float(answer.forces.weight[at]),
                ),
            ]
        return lines

    def permitted(self) -> list[Entry]:
        """Return what the grade wanted permits."""
        answer, allowed = self.answer, self.answer.allowed
        if allowed is None:
            return []
        make, unit = self._maker(PERMITTED), self.units[Kind.UNBALANCE]
        of = f"of G {allowed.grade:g}"
        lines = [
            make.line("e_per", f"Permissible eccentricity {of}", allowed.eccentricity, eccentricity_unit(self.units)),
            make.line("U_per", f"Permissible residual unbalance {of}, whole rotor", allowed.unbalance, unit),
        ]
        if answer.split is not None and answer.allowed_in_bearings is not None:
            shares = (answer.split.first, answer.split.second)
            for at, (share, value) in enumerate(zip(shares, answer.allowed_in_bearings, strict=True), 1):
                label = f"Permissible residual unbalance {of}, plane of bearing {at} ({share:.1%} of it)"
                lines.append(make.line(f"U_per_B{at}", label, value, unit))
        return lines

    def corrections(self) -> list[Entry]:
        """Return the masses that correct it, each with its angle."""
        lines: list[Entry] = []
        mass = UNITS["g"] if self.units[Kind.MASS].symbol == "kg" else UNITS["oz"]
        what = "Mass to add" if self.wanted.by == "adding" else "Mass to remove"
        for at, one in enumerate(self.answer.made, 1):
            make, where = self._maker(CORRECTIONS, NO_ANGLE), f"in correction plane {at}"
            radius = self.units.text(one.plane.radius, Kind.LENGTH)
            lines += [
                make.line(f"m_{at}", f"{what} {where}, at radius {radius}", abs(one.mass), mass),
                make.of(
                    Kind.ANGLE, f"φ_m_{at}", f"Angle of that mass from the zero mark {where}",
                    one.angle % (2 * math.pi) if one.mass else None,
                ),
            ]
        return lines

    def left(self) -> list[Entry]:
        """Return what the corrections leave."""
        if not self.answer.made:
            return []
        left: Unbalance = self.answer.left
        lines = [
            *self._vector(LEFT, "U_r", "residual static unbalance", left.static, self.units[Kind.UNBALANCE]),
            *self._vector(LEFT, "C_r", "residual couple unbalance", left.couple, couple_unit(self.units)),
        ]
        if self.answer.grade_left is not None:
            label = "Balance quality grade that it has then, the largest of all planes"
            lines.append(self._maker(LEFT).line("G_r", label, self.answer.grade_left.worst * _MM, _GRADE_UNIT))
        return lines
