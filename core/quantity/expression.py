"""Reading what is typed into a number field: "3/8 in + 2 mm", "2*25.4", "1,5e-3", "1.788 kgf*m^2 GD2".

    sum     = term { ("+" | "−") term }
    term    = factor { ("*" | "/") factor } with one unit behind any of its factors
    factor  = { "+" | "−" } ( number | "(" sum ")" | "pi" | name | function "(" sum { ";" sum } ")" )
    number  = digits with "." or "," as the decimal mark, a power of ten, or a mixed fraction "1 3/8"

A unit applies to the whole term before it: "3/8 in" is three eighths of an inch. Text without any unit means
the field's own unit. A bare number beside one with a unit is refused ("25 + 2 mm"): it has two readings.
Names stand for values that are known beside the text, such as a document's named dimensions; a text with one is
read again when they change, so it needs its unit typed. The functions are those of core.quantity.functions.
Everything but those is exact fractions until the last step, so the result is the nearest double.
"""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Final, TypeAlias

from core.quantity.formatting import compact
from core.quantity.functions import CONSTANTS, FUNCTIONS, NO_DIMENSION, SEPARATOR, Amount
from core.quantity.spelling import is_unit_spelling
from core.quantity.tokens import IDENTIFIER, Token, quoted, refusal, tokens_of
from core.quantity.unit_text import ReadUnit, check_dimension, read_unit
from core.quantity.units import FLYWHEEL, UNITS, UNITS_BY_KIND, Dimension, Kind, Unit

if TYPE_CHECKING:
    from core.errors import QuantityError

# Name → its value in the SI unit, and its dimension.
Names: TypeAlias = Mapping[str, tuple[float, Dimension]]

DEEPEST_NESTING: Final = 20
_SHOWN_DIGITS: Final = 9


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


def parse(
    text: str, kind: Kind, unit: Unit | None = None, *, where: str = "", names: Names | None = None
) -> Understood:
    """Read a quantity.

    Args:
        text: what was typed.
        kind: what it must measure.
        unit: what a text without a unit is in, and what the answer is shown in; None: a unit must be typed
            (except for a plain number).
        where: the field, for the error's sentence.
        names: values that may be used by name; None where there are none to speak of.

    Raises:
        QuantityError: the text is no quantity, or one of another kind, or out of a double's range.

    >>> parse("3/8 in + 2 mm", Kind.LENGTH, UNITS["mm"]).shown
    '11.525 mm'
    """
    reader = _Reader(text, where, names)
    amount = reader.whole()
    if amount.bare and reader.used and kind is not Kind.NUMBER:
        symbol = (unit or UNITS_BY_KIND[kind][0]).symbol
        remedy = f'Write one behind it, such as "{symbol}": the text is read again when a named dimension changes'
        raise refusal("a unit is missing", text, where=where, remedy=remedy)
    if amount.bare:
        unit = unit or (UNITS[""] if kind is Kind.NUMBER else None)
        if unit is None:
            remedy = f'Write one behind it, such as "{UNITS_BY_KIND[kind][0].symbol}"'
            raise refusal("a unit is missing", text, where=where, remedy=remedy)
        exact = amount.number * unit.ratio
    else:
        named = reader.only_name()
        check_dimension(amount.dimension, kind, text, where=where, read=reader.only_unit(), named=named)
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


def measure(text: str, *, where: str = "", names: Names | None = None) -> tuple[float, Dimension]:
    """Read a quantity of whatever kind; without a unit it is a plain number.

    Returns:
        Its value in the SI unit, and its dimension.

    Raises:
        QuantityError: the text is no quantity, or out of a double's range.

    >>> measure("2*d", names={"d": (0.4, (1, 0, 0, 0))})
    (0.8, (1, 0, 0, 0))
    """
    amount = _Reader(text, where, names).whole()
    return _double(amount.number, text, where), amount.dimension


class _Reader:
    """One pass over the tokens of one text."""

    def __init__(self, text: str, where: str, names: Names | None = None) -> None:
        self._text = text
        self._where = where
        self._names = names
        self._tokens = tokens_of(text, where=where, names=names or ())
        self._place = 0
        self._depth = 0
        self.units: list[ReadUnit] = []
        self.used: list[str] = []

    def whole(self) -> Amount:
        amount = self._sum()
        if self._here.what != "end":
            raise self._unexpected()
        return amount

    def only_unit(self) -> ReadUnit | None:
        """Return the unit that was read, if it was one and it says the dimension of the whole."""
        return self.units[0] if len(self.units) == 1 and not self.used else None

    def only_name(self) -> str:
        """Return the name that was read, if it was one and it says the dimension of the whole."""
        return self.used[0] if len(self.used) == 1 and not self.units else ""

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

    def _sum(self) -> Amount:
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
            total = Amount(number, total.dimension, total.bare)
        return total

    def _term(self) -> Amount:
        amount = self._with_unit(self._factor())
        while sign := self._take("*/"):
            if sign == "/" and self._here.mixed:
                raise self._refused('a mixed fraction behind "/" is read in two ways', "Use parentheses")
            amount = self._with_unit(self._combined(amount, sign, self._factor()))
        return amount

    def _with_unit(self, amount: Amount) -> Amount:
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
        return Amount(amount.number * read.ratio, read.dimension, bare=False)

    def _factor(self) -> Amount:
        negative = False
        while sign := self._take("+-"):
            negative ^= sign == "-"
        if self._here.what == "number":
            amount = Amount(self._here.number)
            self._place += 1
        elif self._here.what == "reference":
            amount = self._named()
        elif self._here.what == "name":
            amount = self._constant_or_function()
        elif self._take("("):
            amount = self._parenthesis()[0]
        else:
            raise self._unexpected()
        return Amount(-amount.number, amount.dimension, amount.bare) if negative else amount

    def _named(self) -> Amount:
        name = self._here.text
        value, dimension = (self._names or {})[name]
        self._place += 1
        self.used.append(name)
        return Amount(Fraction(value), dimension, bare=dimension == NO_DIMENSION)

    def _constant_or_function(self) -> Amount:
        name = self._here.text
        if name in CONSTANTS:
            self._place += 1
            return CONSTANTS[name]
        following = self._tokens[self._place + 1]
        if name in FUNCTIONS and following.what == "sign" and following.text == "(":
            self._place += 2
            return FUNCTIONS[name](self._parenthesis(SEPARATOR), self._refused)
        if name in FUNCTIONS and not is_unit_spelling(name):
            raise self._refused(f"the value of {name} is missing", f'Write it in parentheses, as in "{name}( )"')
        if self._names is None or is_unit_spelling(name):
            raise self._unexpected()
        raise self._unknown()

    def _unknown(self) -> QuantityError:
        found = IDENTIFIER.match(self._text, self._here.start)
        name = found.group() if found else self._here.text
        remedy = "Check the spelling, or add it to the named dimensions"
        return self._refused(f'there is no named dimension "{name}"', remedy)

    def _parenthesis(self, separator: str = "") -> list[Amount]:
        """Read sums behind "(", up to and with the ")" that closes it."""
        self._depth += 1
        if self._depth > DEEPEST_NESTING:
            raise self._refused(
                f"parentheses are nested more than {DEEPEST_NESTING} deep", "Write it more simply"
            )
        amounts = [self._sum()]
        while separator and self._take(separator):
            amounts.append(self._sum())
        self._depth -= 1
        if not self._take(")"):
            if self._here.what == "end":
                raise self._refused('a "(" is not closed', 'Add the missing ")"')
            raise self._unexpected()
        return amounts

    def _combined(self, left: Amount, sign: str, right: Amount) -> Amount:
        if sign == "/" and right.number == 0:
            raise self._refused("this divides by zero", "Check the divisor")
        direction = 1 if sign == "*" else -1
        number = left.number * right.number if sign == "*" else left.number / right.number
        length, mass, time, angle = (
            a + direction * b for a, b in zip(left.dimension, right.dimension, strict=True)
        )
        return Amount(number, (length, mass, time, angle), left.bare and right.bare)

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
        if here.what == "reference":
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


def _shown(value: float, unit: Unit, amount: Amount, reader: _Reader) -> str:
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
