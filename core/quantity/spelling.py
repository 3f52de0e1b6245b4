"""What each single unit name means: the spellings people type, and behind them everything that pint knows."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from functools import cache, lru_cache
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from core.quantity.units import (
    DEGREE,
    FOOT,
    GRAM,
    GRAVITY,
    INCH,
    MM,
    ONE,
    OUNCE,
    OUNCE_FORCE,
    POUND,
    POUND_FORCE,
    SLUG,
    TURN,
    Dimension,
)

if TYPE_CHECKING:
    from collections.abc import Mapping

    import pint

_LENGTH: Final = (1, 0, 0, 0)
_MASS: Final = (0, 1, 0, 0)
_TIME: Final = (0, 0, 1, 0)
_ANGLE: Final = (0, 0, 0, 1)
_FORCE: Final = (1, 1, -2, 0)
_TORQUE: Final = (2, 1, -2, 0)

_PINT_BASES: Final = ("meter", "gram", "second", "radian")
_LONGEST_NAME: Final = 40


@dataclass(frozen=True)
class Meaning:
    """What a unit name stands for: symbol as shown, exact ratio to SI, dimension."""

    symbol: str
    ratio: Fraction
    dimension: Dimension


# symbol: (ratio, dimension, other spellings)
_NAMES: Final[Mapping[str, tuple[Fraction, Dimension, str]]] = MappingProxyType({
    "mm": (MM, _LENGTH, "millimetre millimetres millimeter millimeters"),
    "cm": (10 * MM, _LENGTH, "centimetre centimetres centimeter centimeters"),
    "dm": (100 * MM, _LENGTH, ""),
    "m": (ONE, _LENGTH, "metre metres meter meters"),
    "µm": (MM / 1000, _LENGTH, "μm um micron microns"),
    "mil": (INCH / 1000, _LENGTH, "mils thou"),  # the machinist's: pint's is an angle
    "in": (INCH, _LENGTH, 'inch inches " ″'),
    "ft": (FOOT, _LENGTH, "foot feet ' ′"),
    "kg": (ONE, _MASS, "Kg KG kilogram kilograms"),
    "g": (GRAM, _MASS, "gram grams"),
    "mg": (GRAM / 1000, _MASS, "milligram milligrams"),
    "t": (Fraction(1000), _MASS, "tonne tonnes"),
    "lb": (POUND, _MASS, "lbs lbm LB pound pounds"),
    "oz": (OUNCE, _MASS, "ozm OZ ounce ounces"),
    "slug": (SLUG, _MASS, "slugs"),
    "N": (ONE, _FORCE, "newton newtons"),
    "kN": (Fraction(1000), _FORCE, "kilonewton kilonewtons"),
    "gf": (GRAM * GRAVITY, _FORCE, ""),
    "kgf": (GRAVITY, _FORCE, "kp"),
    "lbf": (POUND_FORCE, _FORCE, ""),
    "ozf": (OUNCE_FORCE, _FORCE, ""),
    "J": (ONE, _TORQUE, "joule joules"),
    "kJ": (Fraction(1000), _TORQUE, ""),
    "W": (ONE, (2, 1, -3, 0), "watt watts"),
    "kW": (Fraction(1000), (2, 1, -3, 0), ""),
    "hp": (550 * POUND_FORCE * FOOT, (2, 1, -3, 0), ""),
    "rad": (ONE, _ANGLE, "radian radians"),
    "°": (DEGREE, _ANGLE, "deg degree degrees"),
    "rev": (TURN, _ANGLE, "turn turns revolution revolutions"),
    "s": (ONE, _TIME, "sec second seconds"),
    "ms": (Fraction(1, 1000), _TIME, ""),
    "min": (Fraction(60), _TIME, "minute minutes"),
    "h": (Fraction(3600), _TIME, "hour hours"),
    "rpm": (TURN / 60, (0, 0, -1, 1), "RPM"),
    "gₙ": (GRAVITY, (1, 0, -2, 0), "gn g_n"),
    "%": (Fraction(1, 100), (0, 0, 0, 0), "percent"),
})

_BY_SPELLING: Final[Mapping[str, Meaning]] = MappingProxyType({
    spelling: Meaning(symbol, ratio, dimension)
    for symbol, (ratio, dimension, others) in _NAMES.items()
    for spelling in (symbol, *others.split())
})

# Products that are usually written in one word.
RUN_TOGETHER: Final[Mapping[str, tuple[str, str]]] = MappingProxyType({
    **{f"N{length}": ("N", length) for length in ("m", "cm", "mm")},
    **{f"kg{length}": ("kg", length) for length in ("m", "cm", "mm")},
    **{f"g{length}": ("g", length) for length in ("cm", "mm")},
})

# Names with two meanings in daily use, of which pint would silently take one.
TWO_MEANINGS: Final[Mapping[str, str]] = MappingProxyType({
    "gr": 'Write "g" for gram or "grain" for grain',
    **dict.fromkeys(("ton", "tons"), 'Write "t" (1000 kg), "short_ton" (2000 lb) or "long_ton" (2240 lb)'),
    "mt": 'Write "t" (1000 kg) or "kg" (its thousandth)',
    **dict.fromkeys(
        ("cwt", "hundredweight"), 'Write "short_hundredweight" (100 lb) or "long_hundredweight" (112 lb)'
    ),
})


def meaning_of(name: str) -> Meaning | None:
    """Return what a single unit name stands for, or None if it is no unit of mechanics."""
    if name in TWO_MEANINGS:
        return None
    return _BY_SPELLING.get(name) or _from_pint(name)


def is_unit_spelling(name: str) -> bool:
    """Return whether people write a unit like this: one in the list above, or one with two meanings."""
    return name in _BY_SPELLING or name in RUN_TOGETHER or name in TWO_MEANINGS


def nearest(name: str) -> str:
    """Return the known spelling that looks most like name, or nothing."""
    import difflib  # only for an error

    folded = {spelling.casefold(): spelling for spelling in _BY_SPELLING}
    close = difflib.get_close_matches(name.casefold(), folded, n=1, cutoff=0.75)
    return folded[close[0]] if close else ""


@cache
def _registry() -> pint.UnitRegistry[float]:
    import pint  # 0.6 s: only for a unit that is not in the list above

    return pint.UnitRegistry()


@lru_cache(maxsize=256)
def _from_pint(name: str) -> Meaning | None:
    words = name.split("_")
    if len(name) > _LONGEST_NAME or not all(word.isascii() and word.isalpha() for word in words):
        return None
    registry = _registry()
    if name not in registry:
        return None
    one = registry.Quantity(1.0, name).to_root_units()
    if registry.Quantity(0.0, name).to_root_units().magnitude != 0.0:
        return None  # decibels, degrees Celsius: no ratio says what they are
    powers = dict(one.unit_items())
    exponents = [
        int(power)
        for base in _PINT_BASES
        if isinstance(power := powers.pop(base, 0), int | float) and power == int(power)
    ]
    if powers or len(exponents) != len(_PINT_BASES):
        return None
    length, mass, time, angle = exponents
    return Meaning(name, Fraction(float(one.magnitude)) / 1000**mass, (length, mass, time, angle))
