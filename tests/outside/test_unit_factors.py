"""Unit factors against published tables, and against pint's own definitions."""

import math

import pint
import pytest

from core.quantity import UNITS, UNITS_BY_KIND, Kind, Unit, parse, unit_named

# NIST SP 811 (2008) Appendix B.8 as coded in the R package NISTunits 1.0.1: seven digits, or exact.
NIST = [
    ("lb·ft²", 4.214011e-2),
    ("lb·in²", 2.926397e-4),
    ("slug", 14.59390),
    ("slug/ft³", 515.3788),
    ("lb", 0.4535924),
    ("oz", 0.02834952),
    ("lb/ft", 1.488164),
    ("lb/in", 17.85797),
    ("lbf", 4.448222),
    ("ozf", 0.2780139),
    ("lbf·ft", 1.355818),
    ("lbf·in", 0.1129848),
    ("ozf·in", 7.061552e-3),
    ("lb/in³", 2.767990e4),
    ("lb/ft³", 16.01846),
    ("oz/in³", 1729.994),
    ("rpm", 0.1047198),
    ("hp", 745.6999),
]
EXACT = [("in", 0.0254), ("ft", 0.3048), ("lb", 0.45359237), ("kgf", 9.80665), ("kgf·m", 9.80665), ("gₙ", 9.80665)]

# Not in B.8. Worked out from the defined constants by hand: slug·ft² = lbf·ft·s² and so on; more digits than shown.
COMPUTED = [
    ("slug·ft²", 1.35581794833),
    ("lbf·ft·s²", 1.35581794833),
    ("lbf·in·s²", 0.1129848290276),
    ("ozf·in·s²", 7.061551814e-3),
    ("oz·in²", 1.82899783393e-5),
    ("kgf·m·s²", 9.80665),
    ("kgf·cm·s²", 0.0980665),
]

# What pint calls a unit where its name is not the symbol without dots; for a flywheel effect, its J.
PINT_NAMES = {
    "°": "degree", "rev": "turn", "rev/s": "turn/second", "rev/s²": "turn/second**2", "°/s": "degree/second",
    "°/s²": "degree/second**2", "°/s³": "degree/second**3", "rev/s³": "turn/second**3",
    "N·m/rpm": "N*m/(revolution/minute)", "rpm": "revolution/minute", "gₙ": "standard_gravity", "%": "percent",
    "hp": "horsepower", "kgf·m² GD²": "kg*m**2/4", "kg·m² GD²": "kg*m**2/4", "lb·ft² WR²": "lb*ft**2",
    "lb·in² WR²": "lb*inch**2",
}
BASE = {
    Kind.LENGTH: "m", Kind.AREA: "m**2", Kind.VOLUME: "m**3", Kind.MASS: "kg", Kind.DENSITY: "kg/m**3",
    Kind.AREA_DENSITY: "kg/m**2", Kind.LINEAR_DENSITY: "kg/m", Kind.INERTIA: "kg*m**2", Kind.UNBALANCE: "kg*m",
    Kind.FORCE: "N", Kind.TORQUE: "N*m", Kind.ENERGY: "J", Kind.POWER: "W", Kind.ANGLE: "radian",
    Kind.SPEED: "radian/s", Kind.ANGULAR_ACCELERATION: "radian/s**2", Kind.ANGULAR_JERK: "radian/s**3",
    Kind.VISCOUS_FRICTION: "N*m*s/radian", Kind.VELOCITY: "m/s",
    Kind.ACCELERATION: "m/s**2", Kind.TIME: "s", Kind.NUMBER: "dimensionless",
}
OFFERED = [unit for units in UNITS_BY_KIND.values() for unit in units if unit.symbol]


@pytest.fixture(scope="module")
def registry():
    return pint.UnitRegistry()


@pytest.mark.parametrize(("symbol", "printed"), NIST)
def test_factor_equals_the_seven_digits_that_nist_prints(symbol: str, printed: float) -> None:
    last_digit = 10.0 ** (math.floor(math.log10(printed)) - 6)
    assert abs(UNITS[symbol].factor - printed) <= 0.5001 * last_digit


@pytest.mark.parametrize(("symbol", "exact"), EXACT)
def test_factor_is_exact_where_it_is_defined_so(symbol: str, exact: float) -> None:
    assert UNITS[symbol].factor == exact


@pytest.mark.parametrize(("symbol", "computed"), COMPUTED)
def test_factor_follows_from_the_defined_constants(symbol: str, computed: float) -> None:
    assert UNITS[symbol].factor == pytest.approx(computed, rel=1e-11 if symbol != "ozf·in·s²" else 1e-9)


@pytest.mark.parametrize("unit", OFFERED, ids=lambda unit: unit.symbol)
def test_factor_of_every_unit_offered_equals_that_of_pint(unit: Unit, registry) -> None:
    name = PINT_NAMES.get(unit.symbol) or unit.symbol.replace("·", "*").replace("in", "inch").replace("minch", "min")
    theirs = registry.parse_expression(name)
    assert unit.factor == pytest.approx((1.0 * theirs).to(BASE[unit.kind]).magnitude, rel=4e-15)


def test_mass_based_and_force_based_units_of_like_names_differ_by_gravity_in_their_length_unit() -> None:
    assert UNITS["lbf·in·s²"].ratio / UNITS["lb·in²"].ratio == pytest.approx(386.0886, rel=1e-6)
    assert UNITS["kgf·cm·s²"].ratio / UNITS["kg·cm²"].ratio == pytest.approx(980.665, rel=1e-15)


def test_flywheel_effect_of_the_published_example() -> None:
    """GD² 1.788 kgf·m² and WR² 1527.49 lb·in² in a post on a controls forum; exact factors give 1527.476."""
    value = parse("1.788 kgf*m^2 GD2", Kind.INERTIA).value
    assert value == pytest.approx(0.447, rel=1e-15)
    assert UNITS["lb·in² WR²"].from_si(value) == pytest.approx(1527.476, abs=5e-4)
    assert UNITS["lb·in² WR²"].from_si(value) == pytest.approx(1527.49, rel=1e-5)


def test_flywheel_effects_convert_as_published() -> None:
    """The same post: WR² [lb·ft²] = 5.933 GD² [kgf·m²]; its inverse, 0.166 in print, is 0.16856."""
    ratio = UNITS["kgf·m² GD²"].factor / UNITS["lb·ft² WR²"].factor
    assert ratio == pytest.approx(5.933, abs=5e-4)
    assert 1 / ratio == pytest.approx(0.16856, abs=5e-6)


def test_flywheel_effect_of_a_solid_cylinder_is_half_its_weight_times_its_diameter_squared() -> None:
    """GD² = ½·W·D² (from memory); the cylinder's J = m D²/8 by closed form."""
    mass, diameter = 12.5, 0.4
    assert parse(f"{0.5 * mass * diameter**2} kgf*m^2 GD2", Kind.INERTIA).value == pytest.approx(mass * diameter**2 / 8)


def test_a_flywheel_effect_in_newtons_counts_the_mass_of_that_weight() -> None:
    assert unit_named("N*m^2 GD2", Kind.INERTIA).factor == pytest.approx(1 / (4 * 9.80665), rel=1e-15)
