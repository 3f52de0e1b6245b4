"""Reading what is typed into a number field: "3/8 in + 2 mm", "2*25.4", "1,5e-3", "1.788 kgf*m^2 GD2".

    sum     = term { ("+" | "−") term }
    term    = factor { ("*" | "/") factor } with one unit behind any of its factors
    factor  = { "+" | "−" } ( number | "(" sum ")" )
    number  = digits with "." or "," as the decimal mark, a power of ten, or a mixed fraction "1 3/8"

A unit applies to the whole term before it: "3/8 in" is three eighths of an inch. Text without any unit means
the field's own unit. A bare number beside one with a unit is refused ("25 + 2 mm"): it has two readings.
Everything is exact fractions until the last step, so the result is the nearest double.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

from core.quantity.formatting import compact
from core.quantity.tokens import Token, quoted, refusal, tokens_of
from core.quantity.unit_text import ReadUnit, check_dimension, read_unit
from core.quantity.units import FLYWHEEL, UNITS, UNITS_BY_KIND, Dimension, Kind, Unit

if TYPE_CHECKING:
    from fractions import Fraction

    from core.errors import QuantityError

DEEPEST_NESTING: Final = 20
_SHOWN_DIGITS: Final = 9
_NO_DIMENSION: Final = (0, 0, 0, 0)


@dataclass(frozen=True)
class Understood:
    """What a text was taken to mean.

    Attributes:
        value: in the SI unit of its kind.
        text: as it was typed.
        shown: the value in the field's unit, e.g. "11.525 mm"; flywheel effect: "J = GD²/4 = 0.447 kg·m²".
    """

    value: float
    text: str
    shown: str


def parse(text: str, kind: Kind, unit: Unit | None = None, *, where: str = "") -> Understood:
    """Read a quantity.

    Args:
        text: what was typed.
        kind: what it must measure.
        unit: what a text without a unit is in, and what the answer is shown in; None: a unit must be typed
            (except for a plain number).
        where: the field, for the error's sentence.

    Raises:
        QuantityError: the text is no quantity, or one of another kind, or out of a double's range.

    >>> parse("3/8 in + 2 mm", Kind.LENGTH, UNITS["mm"]).shown
    '11.525 mm'
    """
    reader = _Reader(text, where)
    amount = reader.whole()
    if amount.bare:
        unit = unit or (UNITS[""] if kind is Kind.NUMBER else None)
        if unit is None:
            remedy = f'Write one behind it, such as "{UNITS_BY_KIND[kind][0].symbol}"'
            raise refusal("a unit is missing", text, where=where, remedy=remedy)
        exact = amount.number * unit.ratio
    else:
        check_dimension(amount.dimension, kind, text, where=where, read=reader.only_unit())
        exact = amount.number
    value = _double(exact, text, where)
    return Understood(value, text, _shown(value, unit or UNITS_BY_KIND[kind][0], amount, reader))


def parse_number(text: str, *, where: str = "") -> float:
    """Read a plain number, with arithmetic, and with "%" as the only unit.

    Raises:
        QuantityError: the text is no number.

    >>> parse_number("2*25,4")
    50.8
    """
    return parse(text, Kind.NUMBER, where=where).value


@dataclass(frozen=True)
class _Amount:
    """An exact number with its dimension; bare while no unit has been read in it."""

    number: Fraction
    dimension: Dimension = _NO_DIMENSION
    bare: bool = True


class _Reader:
    """One pass over the tokens of one text."""

    def __init__(self, text: str, where: str) -> None:
        self._text = text
        self._where = where
        self._tokens = tokens_of(text, where=where)
        self._place = 0
        self._depth = 0
        self.units: list[ReadUnit] = []

    def whole(self) -> _Amount:
        amount = self._sum()
        if self._here.what != "end":
            raise self._unexpected()
        return amount

    def only_unit(self) -> ReadUnit | None:
        """Return the unit that was read, if it was one and it says the dimension of the whole."""
        return self.units[0] if len(self.units) == 1 else None

    @property
    def _here(self) -> Token:
        return self._tokens[self._place]

    def _take(self, signs: str) -> str:
        """Step over one of the signs, and return it, or nothing."""
        here = self._here
        if here.what != "sign" or here.text not in signs:
            return ""
        self._place += 1
        return here.text

    def _sum(self) -> _Amount:
        total = self._term()
        while sign := self._take("+-"):
            term = self._term()
            if term.bare != total.bare:
                raise self._refused(
                    "a number without a unit stands beside one with a unit",
                    "Write the unit behind both, as in 25 mm + 2 mm",
                )
            if term.dimension != total.dimension:
                raise self._refused("different kinds of quantity are added", "Check the units on both sides")
            number = total.number + (term.number if sign == "+" else -term.number)
            total = _Amount(number, total.dimension, total.bare)
        return total

    def _term(self) -> _Amount:
        amount = self._with_unit(self._factor())
        while sign := self._take("*/"):
            if sign == "/" and self._here.mixed:
                raise self._refused('a mixed fraction behind "/" is read in two ways', "Use parentheses")
            amount = self._with_unit(self._combined(amount, sign, self._factor()))
        return amount

    def _with_unit(self, amount: _Amount) -> _Amount:
        if self._here.what != "name":
            return amount
        read = read_unit(self._tokens, self._place, self._text, where=self._where)
        if not amount.bare:
            raise self._refused(
                f'"{read.symbol}" is a second unit in one term',
                "Put each number with its unit in parentheses",
            )
        self._place = read.end
        self.units.append(read)
        return _Amount(amount.number * read.ratio, read.dimension, bare=False)

    def _factor(self) -> _Amount:
        negative = False
        while sign := self._take("+-"):
            negative ^= sign == "-"
        if self._here.what == "number":
            amount = _Amount(self._here.number)
            self._place += 1
        elif self._take("("):
            amount = self._parenthesis()
        else:
            raise self._unexpected()
        return _Amount(-amount.number, amount.dimension, amount.bare) if negative else amount

    def _parenthesis(self) -> _Amount:
        self._depth += 1
        if self._depth > DEEPEST_NESTING:
            raise self._refused(
                f"parentheses are nested more than {DEEPEST_NESTING} deep", "Write it more simply"
            )
        amount = self._sum()
        self._depth -= 1
        if not self._take(")"):
            if self._here.what == "end":
                raise self._refused('a "(" is not closed', 'Add the missing ")"')
            raise self._unexpected()
        return amount

    def _combined(self, left: _Amount, sign: str, right: _Amount) -> _Amount:
        if sign == "/" and right.number == 0:
            raise self._refused("this divides by zero", "Check the divisor")
        direction = 1 if sign == "*" else -1
        number = left.number * right.number if sign == "*" else left.number / right.number
        length, mass, time, angle = (
            a + direction * b for a, b in zip(left.dimension, right.dimension, strict=True)
        )
        return _Amount(number, (length, mass, time, angle), left.bare and right.bare)

    def _unexpected(self) -> QuantityError:
        here, before = self._here, self._tokens[self._place - 1]
        if here.what == "end":
            return self._refused("the text ends too early", "Finish it, or take the last sign away")
        if here.what == "number" and self._place and before.what == "number":
            return self._refused(
                f"{quoted(f'{before.text} {here.text}')} are two numbers without a sign between them",
                "Write thousands without blanks, or put + − * or / between the numbers",
            )
        if here.what == "number" and self._place:
            return self._refused(f'"{here.text}" stands without a sign before it', "Put + − * or / before it")
        if here.what == "exponent":
            return self._refused("only units are raised to a power", "Multiply instead")
        return self._refused(f'"{here.text}" was not expected here', 'Write e.g. "3/8 in + 2 mm"')

    def _refused(self, what: str, remedy: str) -> QuantityError:
        return refusal(what, self._text, where=self._where, remedy=remedy)


def _double(exact: Fraction, text: str, where: str) -> float:
    try:
        value = float(exact)
    except OverflowError:
        value = math.inf
    if math.isinf(value) or (value == 0.0 and exact != 0):
        size = "large" if value else "small"
        raise refusal(f"the value is too {size} to be held", text, where=where, remedy="Check the exponent")
    return value


def _shown(value: float, unit: Unit, amount: _Amount, reader: _Reader) -> str:
    relations = dict.fromkeys(read.relation for read in reader.units if read.relation)
    if unit.family == FLYWHEEL:
        if amount.bare:
            own = read_unit(tokens_of(unit.symbol), 0, unit.symbol, where="")
            relations[own.relation] = None
        unit = UNITS["kg·m²"]
    joint = "" if unit.symbol in {"", "°", "%"} else " "
    shown = f"{compact(unit.from_si(value), _SHOWN_DIGITS)}{joint}{unit.symbol}"
    if not relations:
        return shown
    if len(relations) == 1 and len(reader.units) <= 1:
        return f"{next(iter(relations))} = {shown}"
    return f"{shown}, with {' and '.join(relations)}"
