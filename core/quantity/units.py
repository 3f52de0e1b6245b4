"""The units that are offered, each with its exact ratio to the SI unit of its kind.

The ratios are built from defined constants (inch, avoirdupois pound, standard gravity, π) as exact fractions,
so that "3/8 in + 2 mm" is 11.525 mm to the last bit, and so that showing values needs no unit library.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from enum import StrEnum
from fractions import Fraction
from functools import cached_property
from types import MappingProxyType
from typing import TYPE_CHECKING, Final, TypeAlias

if TYPE_CHECKING:
    from collections.abc import Mapping

# Defined exactly: international yard and pound agreement of 1959; CGPM 1901 for the standard gravity.
INCH: Final = Fraction(254, 10_000)
FOOT: Final = 12 * INCH
POUND: Final = Fraction(45_359_237, 100_000_000)
OUNCE: Final = POUND / 16
GRAVITY: Final = Fraction(980_665, 100_000)
POUND_FORCE: Final = POUND * GRAVITY
OUNCE_FORCE: Final = OUNCE * GRAVITY
SLUG: Final = POUND_FORCE / FOOT
# π as the nearest double: the one ratio here that no fraction can hold.
TURN: Final = Fraction(2 * math.pi)
DEGREE: Final = TURN / 360

MM: Final = Fraction(1, 1000)
CM: Final = Fraction(1, 100)
GRAM: Final = Fraction(1, 1000)
ONE: Final = Fraction(1)

# Exponents of length, mass, time and plane angle.
Dimension: TypeAlias = tuple[int, int, int, int]


class Kind(StrEnum):
    """What a quantity measures; the value is the name that sentences use."""

    LENGTH = "length"
    AREA = "area"
    VOLUME = "volume"
    MASS = "mass"
    DENSITY = "density"
    AREA_DENSITY = "mass per area"
    LINEAR_DENSITY = "mass per length"
    INERTIA = "moment of inertia"
    UNBALANCE = "unbalance"
    FORCE = "force"
    TORQUE = "torque"
    ENERGY = "energy"
    POWER = "power"
    ANGLE = "angle"
    SPEED = "speed of rotation"
    ANGULAR_ACCELERATION = "angular acceleration"
    ANGULAR_JERK = "angular jerk"
    VISCOUS_FRICTION = "viscous friction"
    VELOCITY = "velocity"
    ACCELERATION = "acceleration"
    TIME = "time"
    NUMBER = "plain number"


DIMENSIONS: Final[Mapping[Kind, Dimension]] = MappingProxyType({
    Kind.LENGTH: (1, 0, 0, 0),
    Kind.AREA: (2, 0, 0, 0),
    Kind.VOLUME: (3, 0, 0, 0),
    Kind.MASS: (0, 1, 0, 0),
    Kind.DENSITY: (-3, 1, 0, 0),
    Kind.AREA_DENSITY: (-2, 1, 0, 0),
    Kind.LINEAR_DENSITY: (-1, 1, 0, 0),
    Kind.INERTIA: (2, 1, 0, 0),
    Kind.UNBALANCE: (1, 1, 0, 0),
    Kind.FORCE: (1, 1, -2, 0),
    Kind.TORQUE: (2, 1, -2, 0),
    Kind.ENERGY: (2, 1, -2, 0),
    Kind.POWER: (2, 1, -3, 0),
    Kind.ANGLE: (0, 0, 0, 1),
    Kind.SPEED: (0, 0, -1, 1),
    Kind.ANGULAR_ACCELERATION: (0, 0, -2, 1),
    Kind.ANGULAR_JERK: (0, 0, -3, 1),
    Kind.VISCOUS_FRICTION: (2, 1, -1, -1),
    Kind.VELOCITY: (1, 0, -1, 0),
    Kind.ACCELERATION: (1, 0, -2, 0),
    Kind.TIME: (0, 0, 1, 0),
    Kind.NUMBER: (0, 0, 0, 0),
})

METRIC: Final = "metric"
INCH_POUND: Final = "inch and pound"
MASS_BASED: Final = "mass-based"
FORCE_BASED: Final = "force-based"
FLYWHEEL: Final = "flywheel effect"
PLAIN: Final = ""


@dataclass(frozen=True)
class Unit:
    """A unit of one kind.

    Attributes:
        symbol: as shown, e.g. "kg·cm²"; the parser reads it back.
        kind: what it measures.
        ratio: how many SI units of that kind it is, as an exact fraction.
        family: the heading it stands under in a menu.

    >>> UNITS["lb·in²"].factor
    0.0002926396534292
    """

    symbol: str
    kind: Kind
    ratio: Fraction
    family: str = METRIC

    @cached_property
    def factor(self) -> float:
        """How many SI units one of it is."""
        return float(self.ratio)

    def to_si(self, value: float) -> float:
        """Return value, given in this unit, in the SI unit."""
        return value * self.factor

    def from_si(self, value: float) -> float:
        """Return value, given in the SI unit, in this unit."""
        return value / self.factor


_Rows: TypeAlias = tuple[tuple[str, str, Fraction], ...]

_ROWS: Final[Mapping[Kind, _Rows]] = MappingProxyType({
    Kind.LENGTH: (
        ("mm", METRIC, MM),
        ("cm", METRIC, CM),
        ("m", METRIC, ONE),
        ("µm", METRIC, MM / 1000),
        ("in", INCH_POUND, INCH),
        ("ft", INCH_POUND, FOOT),
    ),
    Kind.AREA: (
        ("mm²", METRIC, MM**2),
        ("cm²", METRIC, CM**2),
        ("m²", METRIC, ONE),
        ("in²", INCH_POUND, INCH**2),
        ("ft²", INCH_POUND, FOOT**2),
    ),
    Kind.VOLUME: (
        ("mm³", METRIC, MM**3),
        ("cm³", METRIC, CM**3),
        ("dm³", METRIC, Fraction(1, 1000)),
        ("m³", METRIC, ONE),
        ("in³", INCH_POUND, INCH**3),
        ("ft³", INCH_POUND, FOOT**3),
    ),
    Kind.MASS: (
        ("kg", METRIC, ONE),
        ("g", METRIC, GRAM),
        ("mg", METRIC, GRAM / 1000),
        ("t", METRIC, Fraction(1000)),
        ("lb", INCH_POUND, POUND),
        ("oz", INCH_POUND, OUNCE),
        ("slug", INCH_POUND, SLUG),
    ),
    Kind.DENSITY: (
        ("kg/m³", METRIC, ONE),
        ("g/cm³", METRIC, GRAM / CM**3),
        ("kg/dm³", METRIC, Fraction(1000)),
        ("lb/in³", INCH_POUND, POUND / INCH**3),
        ("lb/ft³", INCH_POUND, POUND / FOOT**3),
        ("oz/in³", INCH_POUND, OUNCE / INCH**3),
        ("slug/ft³", INCH_POUND, SLUG / FOOT**3),
    ),
    Kind.AREA_DENSITY: (
        ("kg/m²", METRIC, ONE),
        ("g/m²", METRIC, GRAM),
        ("lb/ft²", INCH_POUND, POUND / FOOT**2),
        ("oz/ft²", INCH_POUND, OUNCE / FOOT**2),
    ),
    Kind.LINEAR_DENSITY: (
        ("kg/m", METRIC, ONE),
        ("g/m", METRIC, GRAM),
        ("lb/ft", INCH_POUND, POUND / FOOT),
        ("lb/in", INCH_POUND, POUND / INCH),
    ),
    Kind.INERTIA: (
        ("kg·m²", MASS_BASED, ONE),
        ("kg·cm²", MASS_BASED, CM**2),
        ("kg·mm²", MASS_BASED, MM**2),
        ("g·cm²", MASS_BASED, GRAM * CM**2),
        ("g·mm²", MASS_BASED, GRAM * MM**2),
        ("lb·ft²", MASS_BASED, POUND * FOOT**2),
        ("lb·in²", MASS_BASED, POUND * INCH**2),
        ("oz·in²", MASS_BASED, OUNCE * INCH**2),
        ("slug·ft²", MASS_BASED, SLUG * FOOT**2),
        ("kgf·m·s²", FORCE_BASED, GRAVITY),
        ("kgf·cm·s²", FORCE_BASED, GRAVITY * CM),
        ("lbf·ft·s²", FORCE_BASED, POUND_FORCE * FOOT),
        ("lbf·in·s²", FORCE_BASED, POUND_FORCE * INCH),
        ("ozf·in·s²", FORCE_BASED, OUNCE_FORCE * INCH),
        # The weight in GD² counts as the mass that has it: kgf·m² and kg·m² are the same number.
        ("kgf·m² GD²", FLYWHEEL, ONE / 4),
        ("kg·m² GD²", FLYWHEEL, ONE / 4),
        ("lb·ft² WR²", FLYWHEEL, POUND * FOOT**2),
        ("lb·in² WR²", FLYWHEEL, POUND * INCH**2),
    ),
    Kind.UNBALANCE: (
        ("g·mm", METRIC, GRAM * MM),
        ("kg·mm", METRIC, MM),
        ("g·cm", METRIC, GRAM * CM),
        ("kg·m", METRIC, ONE),
        ("oz·in", INCH_POUND, OUNCE * INCH),
        ("lb·in", INCH_POUND, POUND * INCH),
    ),
    Kind.FORCE: (
        ("N", METRIC, ONE),
        ("kN", METRIC, Fraction(1000)),
        ("kgf", METRIC, GRAVITY),
        ("lbf", INCH_POUND, POUND_FORCE),
        ("ozf", INCH_POUND, OUNCE_FORCE),
    ),
    Kind.TORQUE: (
        ("N·m", METRIC, ONE),
        ("N·mm", METRIC, MM),
        ("N·cm", METRIC, CM),
        ("kgf·m", METRIC, GRAVITY),
        ("kgf·cm", METRIC, GRAVITY * CM),
        ("lbf·ft", INCH_POUND, POUND_FORCE * FOOT),
        ("lbf·in", INCH_POUND, POUND_FORCE * INCH),
        ("ozf·in", INCH_POUND, OUNCE_FORCE * INCH),
    ),
    Kind.ENERGY: (
        ("J", METRIC, ONE),
        ("kJ", METRIC, Fraction(1000)),
        ("ft·lbf", INCH_POUND, POUND_FORCE * FOOT),
    ),
    Kind.POWER: (
        ("W", METRIC, ONE),
        ("kW", METRIC, Fraction(1000)),
        ("hp", INCH_POUND, 550 * POUND_FORCE * FOOT),
    ),
    Kind.ANGLE: (("°", PLAIN, DEGREE), ("rad", PLAIN, ONE), ("rev", PLAIN, TURN)),
    Kind.SPEED: (
        ("rpm", PLAIN, TURN / 60),
        ("rad/s", PLAIN, ONE),
        ("°/s", PLAIN, DEGREE),
        ("rev/s", PLAIN, TURN),
    ),
    Kind.ANGULAR_ACCELERATION: (
        ("rad/s²", PLAIN, ONE),
        ("°/s²", PLAIN, DEGREE),
        ("rev/s²", PLAIN, TURN),
    ),
    Kind.ANGULAR_JERK: (
        ("rad/s³", PLAIN, ONE),
        ("°/s³", PLAIN, DEGREE),
        ("rev/s³", PLAIN, TURN),
    ),
    Kind.VISCOUS_FRICTION: (
        ("N·m·s/rad", METRIC, ONE),
        ("N·m/rpm", METRIC, 60 / TURN),
        ("lbf·in·s/rad", INCH_POUND, POUND_FORCE * INCH),
    ),
    Kind.VELOCITY: (
        ("m/s", METRIC, ONE),
        ("mm/s", METRIC, MM),
        ("m/min", METRIC, ONE / 60),
        ("in/s", INCH_POUND, INCH),
        ("ft/min", INCH_POUND, FOOT / 60),
    ),
    Kind.ACCELERATION: (
        ("m/s²", METRIC, ONE),
        ("mm/s²", METRIC, MM),
        ("gₙ", METRIC, GRAVITY),
        ("in/s²", INCH_POUND, INCH),
        ("ft/s²", INCH_POUND, FOOT),
    ),
    Kind.TIME: (
        ("s", PLAIN, ONE),
        ("ms", PLAIN, Fraction(1, 1000)),
        ("min", PLAIN, Fraction(60)),
        ("h", PLAIN, Fraction(3600)),
    ),
    Kind.NUMBER: (("", PLAIN, ONE), ("%", PLAIN, Fraction(1, 100))),
})

# Every unit offered, by kind, in the order a menu shows them (families together).
UNITS_BY_KIND: Final[Mapping[Kind, tuple[Unit, ...]]] = MappingProxyType({
    kind: tuple(Unit(symbol, kind, ratio, family) for symbol, family, ratio in rows)
    for kind, rows in _ROWS.items()
})

# Every unit offered, by its symbol. No symbol is used twice.
UNITS: Final[Mapping[str, Unit]] = MappingProxyType({
    unit.symbol: unit for units in UNITS_BY_KIND.values() for unit in units
})


def families(kind: Kind) -> tuple[tuple[str, tuple[Unit, ...]], ...]:
    """Return the units of a kind as (family, units) pairs, in menu order.

    >>> [name for name, _ in families(Kind.INERTIA)]
    ['mass-based', 'force-based', 'flywheel effect']
    """
    names = dict.fromkeys(unit.family for unit in UNITS_BY_KIND[kind])
    return tuple(
        (name, tuple(unit for unit in UNITS_BY_KIND[kind] if unit.family == name)) for name in names
    )
