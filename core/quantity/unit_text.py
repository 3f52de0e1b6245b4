"""Reading unit text: "kg*m^2", "lbf·in·s²", "kgf m2 GD2".

A unit is a product of names with whole exponents. Names may be joined by "*", "·", a blank or a hyphen; "/"
divides by the name that follows, and only further divisions may follow it: "kg/m*s" is read in two ways.

The flywheel effect is written as an inertia unit with GD2 (or GD²) behind it, "1.788 kgf*m^2 GD2", and means
J = GD²/4; WR2 and WK2 (or WR², WK²) mean J = WR². The weight in them counts as the mass that has this weight.
"""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction
from typing import TYPE_CHECKING, Final

from core.quantity.spelling import RUN_TOGETHER, TWO_MEANINGS, Meaning, meaning_of, nearest
from core.quantity.tokens import Token, quoted, refusal, tokens_of
from core.quantity.units import DIMENSIONS, FLYWHEEL, GRAVITY, PLAIN, UNITS_BY_KIND, Dimension, Kind, Unit

if TYPE_CHECKING:
    from core.errors import QuantityError

_LARGEST_POWER: Final = 4
_INERTIA: Final = DIMENSIONS[Kind.INERTIA]
_WEIGHT_INERTIA: Final = (3, 1, -2, 0)
_FORCE_OF_MASS: Final = {"kg": "kgf", "g": "gf", "lb": "lbf", "oz": "ozf"}
_MASS_OF_FORCE: Final = {force: mass for mass, force in _FORCE_OF_MASS.items()}
_SUPERSCRIPTS: Final = str.maketrans("0123456789-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁻")

# Effect name: what divides it to give J, and how the relation is written.
_EFFECTS: Final = {"GD": (4, "J = GD²/4"), "WR": (1, "J = WR²"), "WK": (1, "J = WK²")}


@dataclass(frozen=True)
class ReadUnit:
    """A unit as it was read.

    Attributes:
        symbol: as shown.
        ratio: exact ratio to SI.
        dimension: exponents of length, mass, time and angle.
        factors: its names with their exponents.
        relation: "J = GD²/4" and the like for a flywheel effect, else nothing.
        end: the first token behind it.
    """

    symbol: str
    ratio: Fraction
    dimension: Dimension
    factors: tuple[tuple[str, int], ...]
    relation: str
    end: int


def unit_named(text: str, kind: Kind, *, where: str = "") -> Unit:
    """Return the unit that text names, from the catalogue where it is in it.

    Raises:
        QuantityError: the text names no unit, or one of another kind.

    >>> unit_named("kg*cm^2", Kind.INERTIA).symbol
    'kg·cm²'
    """
    tokens = tokens_of(text, where=where)
    read = read_unit(tokens, 0, text, where=where)
    if tokens[read.end].what != "end":
        raise refusal(
            f"{quoted(text)} is not a unit and nothing else", text, where=where, remedy='Write e.g. "kg*m^2"'
        )
    check_dimension(read.dimension, kind, text, where=where, read=read)
    for known in UNITS_BY_KIND[kind]:
        if known.ratio == read.ratio and known.symbol == read.symbol:
            return known
    return Unit(read.symbol, kind, read.ratio, FLYWHEEL if read.relation else PLAIN)


def is_effect(name: str) -> bool:
    """Return whether a name, with its square or without, is that of a flywheel effect."""
    return name.removesuffix("2") in _EFFECTS


def read_unit(tokens: tuple[Token, ...], start: int, text: str, *, where: str) -> ReadUnit:
    """Read the unit that begins at token start.

    Raises:
        QuantityError: a name that is no unit of mechanics, an exponent out of range, a product behind "/".
    """
    factors: list[tuple[Meaning, int]] = []
    effect = ""
    place, sign = start, 1
    while True:
        names, power, place = _power(tokens, place, text, where)
        if names[0] in _EFFECTS and power * sign == 2:  # noqa: PLR2004  (the square in GD², WR², WK²)
            effect = names[0]
            break
        *before, last = (_meaning(name, text, where) for name in names)
        factors += [*((meaning, sign) for meaning in before), (last, sign * power)]
        following = _next_factor(tokens, place)
        if following is None:
            break
        place, divides = following
        if sign < 0 and not divides:
            raise refusal(
                f'a product behind "/" in {quoted(text)} can be read in two ways',
                text,
                where=where,
                remedy='Write the division last, as in "kg*m/s^2"',
            )
        sign = -1 if divides else 1
    return _assembled(factors, effect, place, text, where)


def check_dimension(
    dimension: Dimension, kind: Kind, text: str, *, where: str, read: ReadUnit | None = None, named: str = ""
) -> None:
    """Refuse a dimension that is not that of kind, and name what a loose spelling may have meant.

    Args:
        dimension: what was read.
        kind: what is wanted.
        text: what was typed.
        where: the field, for the error's sentence.
        read: the one unit in the text, where it is only one.
        named: the one named value in the text, where it says the dimension.

    Raises:
        QuantityError: it is another dimension.
    """
    if dimension == DIMENSIONS[kind]:
        return
    found = next((name for name, known in DIMENSIONS.items() if known == dimension), None)
    if read is not None:
        loose = _loose_spelling(read, kind, text, where)
        if loose is not None:
            raise loose
    symbol = f'"{read.symbol}"' if read is not None else f'"{named}"' if named else "this"
    what = f"{symbol} measures {_with_article(found)}" if found else f"{symbol} is another kind of quantity"
    examples = " or ".join(f'"{offered.symbol}"' for offered in UNITS_BY_KIND[kind][:2] if offered.symbol)
    remedy = f"Use a unit such as {examples}" if kind is not Kind.NUMBER else "Leave the unit out"
    raise refusal(f"{what}, but {_with_article(kind)} is wanted", text, where=where, remedy=remedy)


def _with_article(kind: Kind) -> str:
    return str(kind) if kind.startswith("mass per") or kind in _UNCOUNTED else f"{_article(kind)} {kind}"


_UNCOUNTED: Final = frozenset({Kind.UNBALANCE, Kind.ENERGY, Kind.POWER, Kind.TIME})


def _article(word: str) -> str:
    return "an" if word[0] in "aeiou" else "a"


def _power(
    tokens: tuple[Token, ...], place: int, text: str, where: str
) -> tuple[tuple[str, ...], int, int]:
    name = tokens[place]
    if name.what != "name":
        raise refusal("a unit is missing", text, where=where, remedy='Write e.g. "12.5 mm"')
    names = RUN_TOGETHER.get(name.text, (name.text,))
    power, place = 1, place + 1
    if tokens[place].what == "exponent":
        power, place = int(tokens[place].text.replace("−", "-")), place + 1
        if not 1 <= abs(power) <= _LARGEST_POWER:
            raise refusal(
                f'the exponent {power} of "{name.text}" is out of range',
                text,
                where=where,
                remedy=f"Use exponents from 1 to {_LARGEST_POWER}",
            )
    return names, power, place


def _next_factor(tokens: tuple[Token, ...], place: int) -> tuple[int, bool] | None:
    """Return where the next name of the unit stands and whether it divides, or None behind the last one."""
    here = tokens[place]
    if here.what == "name":
        return place, False
    if here.what != "sign" or tokens[place + 1].what != "name":
        return None
    if here.text in "*/":
        return place + 1, here.text == "/"
    touches = tokens[place - 1].end == here.start and here.end == tokens[place + 1].start
    return (place + 1, False) if here.text == "-" and touches else None


def _meaning(name: str, text: str, where: str) -> Meaning:
    meaning = meaning_of(name)
    if meaning is None and name in TWO_MEANINGS:
        raise refusal(f'"{name}" has two meanings', text, where=where, remedy=TWO_MEANINGS[name])
    if meaning is None:
        near = nearest(name)
        hint = f'Write "{near}" if that is meant' if near else "Use a unit such as mm, in, kg, lb, N or s"
        raise refusal(f'"{name}" is no unit that is known here', text, where=where, remedy=hint)
    return meaning


def _assembled(
    factors: list[tuple[Meaning, int]], effect: str, end: int, text: str, where: str
) -> ReadUnit:
    ratio = Fraction(1)
    for meaning, power in factors:
        ratio *= meaning.ratio**power
    length, mass, time, angle = (
        sum(meaning.dimension[axis] * power for meaning, power in factors) for axis in range(4)
    )
    dimension = (length, mass, time, angle)
    names = tuple((meaning.symbol, power) for meaning, power in factors)
    symbol = _symbol(names)
    if not effect:
        return ReadUnit(symbol, ratio, dimension, names, "", end)
    if dimension == _WEIGHT_INERTIA:
        ratio, dimension = ratio / GRAVITY, _INERTIA
    if dimension != _INERTIA:
        raise refusal(
            f"{effect}² needs a weight or a mass times a length squared before it",
            text,
            where=where,
            remedy=f'Write e.g. "1.788 kgf*m^2 {effect}2"',
        )
    divisor, relation = _EFFECTS[effect]
    return ReadUnit(f"{symbol} {effect}²", ratio / divisor, dimension, names, relation, end)


def _symbol(factors: tuple[tuple[str, int], ...]) -> str:
    over = "·".join(_raised(name, power) for name, power in factors if power > 0)
    under = "".join(f"/{_raised(name, -power)}" for name, power in factors if power < 0)
    return f"{over or 1}{under}"


def _raised(name: str, power: int) -> str:
    return name if power == 1 else name + str(power).translate(_SUPERSCRIPTS)


def _loose_spelling(read: ReadUnit, kind: Kind, text: str, where: str) -> QuantityError | None:
    """Return the refusal of a mass written for a force, or the other way round, or None."""
    if kind is Kind.INERTIA:
        return _loose_inertia(read, text, where)
    swaps = _FORCE_OF_MASS | _MASS_OF_FORCE
    swapped = tuple((swaps.get(name, name), power) for name, power in read.factors)
    meant = _reading(swapped)
    if swapped == read.factors or meant.dimension != DIMENSIONS[kind]:
        return None
    wrong, right = ("mass", "force") if meant.dimension[2] < read.dimension[2] else ("force", "mass")
    name = next(before[0] for before, after in zip(read.factors, swapped, strict=True) if before != after)
    return refusal(
        f'"{name}" is a unit of {wrong}, but {_with_article(kind)} needs one of {right}'
        if read.symbol != name
        else f'"{name}" is a unit of {wrong}, but {_with_article(kind)} is wanted',
        text,
        where=where,
        remedy=f'Write "{_typed(swapped)}" if that is meant',
    )


def _loose_inertia(read: ReadUnit, text: str, where: str) -> QuantityError | None:
    masses = tuple((_MASS_OF_FORCE.get(name, name), power) for name, power in read.factors)
    mass = next((name for name, power in masses if name in _FORCE_OF_MASS and power == 1), "")
    length = next((n for n, power in masses if power in (1, 2) and _is_length(n)), "")
    if not (mass and length) or len(masses) > 3:  # noqa: PLR2004  (mass or force, length, time)
        return None
    if read.dimension == _WEIGHT_INERTIA:
        force = _FORCE_OF_MASS[mass]
        return refusal(
            f'"{read.symbol}" is a weight times a length squared: a flywheel effect or a loose inertia',
            text,
            where=where,
            remedy=f'Write "{force}*{length}^2 GD2" for J = GD²/4, "{force}*{length}^2 WR2" for J = WR², '
            f'or "{mass}*{length}^2"',
        )
    by_mass = _reading(((mass, 1), (length, 2)))
    by_force = _reading(((_FORCE_OF_MASS[mass], 1), (length, 1), ("s", 2)))
    return refusal(
        f'"{read.symbol}" can be read as {by_force.symbol} (force-based) or {by_mass.symbol} (mass-based), '
        f"which differ by a factor of {float(by_force.ratio / by_mass.ratio):.6g}",
        text,
        where=where,
        remedy=f'Write "{_typed(by_force.factors)}" or "{_typed(by_mass.factors)}"',
    )


def _is_length(name: str) -> bool:
    meaning = meaning_of(name)
    return meaning is not None and meaning.dimension == DIMENSIONS[Kind.LENGTH]


def _reading(factors: tuple[tuple[str, int], ...]) -> ReadUnit:
    return read_unit(tokens_of(_typed(factors)), 0, _typed(factors), where="")


def _typed(factors: tuple[tuple[str, int], ...]) -> str:
    raised = [(name if abs(power) == 1 else f"{name}^{abs(power)}", power) for name, power in factors]
    over = "*".join(text for text, power in raised if power > 0)
    return over + "".join(f"/{text}" for text, power in raised if power < 0)
