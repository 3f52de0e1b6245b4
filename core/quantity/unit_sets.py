"""Sets of units to show values in: one for each kind, named by those that differ most between users."""

from __future__ import annotations

from dataclasses import dataclass, replace
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from core.quantity.formatting import significant
from core.quantity.tokens import refusal, tokens_of
from core.quantity.unit_text import read_unit, unit_named
from core.quantity.units import DIMENSIONS, INCH_POUND, UNITS, Kind, Unit

if TYPE_CHECKING:
    from collections.abc import Mapping


@dataclass(frozen=True)
class UnitSet:
    """A unit for each kind.

    >>> UNIT_SETS["mm kg kg·cm²"][Kind.INERTIA].symbol
    'kg·cm²'
    """

    name: str
    units: tuple[Unit, ...]

    def __getitem__(self, kind: Kind) -> Unit:
        return next(unit for unit in self.units if unit.kind == kind)

    def with_unit(self, unit: Unit) -> UnitSet:
        """Return this set with another unit for that unit's kind."""
        units = tuple(unit if old.kind == unit.kind else old for old in self.units)
        changed = replace(self, units=units)
        known = next((known.name for known in UNIT_SETS.values() if known.units == units), None)
        return replace(changed, name=known or " ".join(changed[kind].symbol for kind in _NAMED_BY))

    @property
    def gd2(self) -> Unit:
        """What GD² is shown in: J times 4, the number of its weight by diameter squared in kgf·m²."""
        return UNITS["kgf·m² GD²"]

    @property
    def wr2(self) -> Unit:
        """What WR² is shown in: J as weight by radius squared in pounds, in inches where J is shown in them."""
        return UNITS["lb·in² WR²" if self[Kind.INERTIA].symbol == "lb·in²" else "lb·ft² WR²"]

    def text(self, value: float, kind: Kind, digits: int = 5, *, decimal_mark: str = ".") -> str:
        """Return an SI value with its unit, by significant digits.

        >>> UNIT_SETS["mm kg kg·m²"].text(0.3103, Kind.INERTIA, 4)
        '0.3103 kg·m²'
        """
        unit = self[kind]
        number = significant(unit.from_si(value), digits, decimal_mark=decimal_mark)
        return number + ("" if unit.symbol in {"", "°", "%"} else " ") + unit.symbol


_NAMED_BY: Final = (Kind.LENGTH, Kind.MASS, Kind.INERTIA)

_METRIC: Final = (
    "mm mm² cm³ kg kg/m³ kg/m² kg/m kg·m² g·mm N N·m J W ° rpm rad/s² rad/s³ N·m·s/rad m/s m/s² s",
    "m m² m³ kg kg/m³ kg/m² kg/m kg·m² kg·m N N·m J W ° rad/s rad/s² rad/s³ N·m·s/rad m/s m/s² s",
)
_INCH: Final = (
    "in in² in³ lb lb/in³ lb/ft² lb/ft lb·in² oz·in lbf lbf·in ft·lbf hp ° rpm rad/s² rad/s³ lbf·in·s/rad in/s in/s² s"
)


def _set(name: str, symbols: str, **changed: str) -> UnitSet:
    units = [UNITS[symbol] for symbol in symbols.split()] + [UNITS[""]]
    for symbol in changed.values():
        units = [UNITS[symbol] if unit.kind == UNITS[symbol].kind else unit for unit in units]
    return UnitSet(name, tuple(units))


UNIT_SETS: Final[Mapping[str, UnitSet]] = MappingProxyType({
    known.name: known
    for known in (
        _set("mm kg kg·m²", _METRIC[0]),
        _set("mm kg kg·cm²", _METRIC[0], inertia="kg·cm²"),
        _set("SI", _METRIC[1]),
        _set("in lb lb·in²", _INCH),
        _set("in lb lb·ft²", _INCH, inertia="lb·ft²", torque="lbf·ft"),
    )
})

DEFAULT_UNITS: Final = UNIT_SETS["mm kg kg·m²"]


def parse_unit_set(text: str, *, where: str = "") -> UnitSet:
    """Read a set's name, or units separated by blanks in any order: "mm kg kg*cm^2".

    What is not named follows the length, or else the mass: inch and pound units beside theirs, else metric.

    Raises:
        QuantityError: a word is no unit, or two of them measure the same.

    >>> parse_unit_set("kg*cm^2 mm kg").name
    'mm kg kg·cm²'
    """
    name = " ".join(text.split())
    if name in UNIT_SETS:
        return UNIT_SETS[name]
    words = name.split()
    if not words:
        raise refusal("no units were named", text, where=where, remedy='Write "mm kg kg*m^2"')
    named: dict[Kind, Unit] = {}
    for word in words:
        unit = _unit_of_any_kind(word, where)
        if unit.kind in named:
            raise refusal(
                f"{named[unit.kind].symbol} and {unit.symbol} both measure {unit.kind}",
                text,
                where=where,
                remedy="Name one unit for each quantity",
            )
        named[unit.kind] = unit
    chosen = UNIT_SETS["in lb lb·in²" if _is_inch_pound(named) else "mm kg kg·m²"]
    for known in UNIT_SETS.values():
        if all(named.get(kind) == known[kind] for kind in _NAMED_BY):
            chosen = known
    for unit in named.values():
        chosen = chosen.with_unit(unit)
    return chosen


def _is_inch_pound(named: Mapping[Kind, Unit]) -> bool:
    leading = named.get(Kind.LENGTH) or named.get(Kind.MASS) or next(iter(named.values()))
    return leading.family == INCH_POUND or any(name in leading.symbol for name in ("lb", "oz", "slug"))


def _unit_of_any_kind(word: str, where: str) -> Unit:
    tokens = tokens_of(word, where=where)
    read = read_unit(tokens, 0, word, where=where)
    if tokens[read.end].what == "end" and read.symbol in UNITS:
        return UNITS[read.symbol]
    kind = next((kind for kind in Kind if DIMENSIONS[kind] == read.dimension), None)
    if kind is None or kind is Kind.NUMBER:
        raise refusal("values are not shown in this", word, where=where, remedy='Use e.g. "kg*m^2"')
    return unit_named(word, kind, where=where)
