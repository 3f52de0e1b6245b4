"""The functions and the constant that a number field knows: sqrt, sin, cos, tan, min, max, pi.

sin, cos and tan take an angle with its unit, "sin(30 deg)": a plain number can be read as degrees or as radians, so
it is refused. At whole quarter turns they are exact. Roots and sines are rounded to a double.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from fractions import Fraction
from types import MappingProxyType
from typing import TYPE_CHECKING, Final, TypeAlias

from core.quantity.units import DIMENSIONS, TURN, Dimension, Kind

if TYPE_CHECKING:
    from collections.abc import Callable, Mapping, Sequence

    from core.errors import QuantityError

    # Makes the error from what is wrong and what to do; the reader adds the text and the field.
    Refuse: TypeAlias = Callable[[str, str], QuantityError]

NO_DIMENSION: Final[Dimension] = (0, 0, 0, 0)
PI: Final = TURN / 2
# What separates the values of a function: "," is a decimal mark.
SEPARATOR: Final = ";"


@dataclass(frozen=True)
class Amount:
    """An exact number with its dimension; bare while no unit has been read in it."""

    number: Fraction
    dimension: Dimension = NO_DIMENSION
    bare: bool = True


def _only(name: str, values: Sequence[Amount], refuse: Refuse) -> Amount:
    if len(values) != 1:
        raise refuse(f"{name} takes one value, and {len(values)} were given", f'Write e.g. "{_EXAMPLES[name]}"')
    return values[0]


def _root(values: Sequence[Amount], refuse: Refuse) -> Amount:
    value = _only("sqrt", values, refuse)
    if value.number < 0:
        raise refuse("a negative number has no square root", "Check what stands under the root")
    if any(power % 2 for power in value.dimension):
        raise refuse("the root of this is no kind of quantity", 'Take it of a square, as in "sqrt(a*a + b*b)"')
    length, mass, time, angle = (power // 2 for power in value.dimension)
    try:
        root = Fraction(math.sqrt(value.number))
    except OverflowError as error:
        raise refuse("the value under the root is too large to be held", "Check the exponent") from error
    return Amount(root, (length, mass, time, angle), value.bare)


def _trigonometric(name: str, quarters: tuple[int | None, ...]) -> Callable[[Sequence[Amount], Refuse], Amount]:
    """Return sin, cos or tan, with its values at 0, 1, 2 and 3 quarter turns; None where it has none."""
    of_radians = {"sin": math.sin, "cos": math.cos, "tan": math.tan}[name]

    def value_of(values: Sequence[Amount], refuse: Refuse) -> Amount:
        angle = _only(name, values, refuse)
        if angle.bare or angle.dimension != DIMENSIONS[Kind.ANGLE]:
            what = "a number without a unit, which can mean degrees or radians" if angle.bare else "something else"
            raise refuse(
                f"{name} takes an angle, and this is {what}", f'Write e.g. "{name}(30 deg)" or "{name}(0.5 rad)"'
            )
        turned = angle.number % TURN
        quarter = 4 * turned / TURN
        if quarter.denominator > 1:
            return Amount(Fraction(of_radians(float(turned))))
        exact = quarters[int(quarter)]
        if exact is None:
            raise refuse("a right angle has no tangent", "Check the angle")
        return Amount(Fraction(exact))

    return value_of


def _extreme(name: str, choose: Callable[..., Amount]) -> Callable[[Sequence[Amount], Refuse], Amount]:
    def value_of(values: Sequence[Amount], refuse: Refuse) -> Amount:
        if len(values) < 2:  # noqa: PLR2004  (one value has no least among others)
            raise refuse(
                f'{name} takes two or more values, with "{SEPARATOR}" between them',
                f'Write e.g. "{_EXAMPLES[name]}"; "," is a decimal mark',
            )
        if len({(value.dimension, value.bare) for value in values}) > 1:
            raise refuse(f"the values of {name} are of different kinds", "Give each of them a unit of the same kind")
        return choose(values, key=lambda value: value.number)

    return value_of


_EXAMPLES: Final[Mapping[str, str]] = MappingProxyType({
    "sqrt": "sqrt(9 mm^2)", "sin": "sin(30 deg)", "cos": "cos(30 deg)", "tan": "tan(30 deg)",
    "min": "min(3 mm; 5 mm)", "max": "max(3 mm; 5 mm)",
})

FUNCTIONS: Final[Mapping[str, Callable[[Sequence[Amount], Refuse], Amount]]] = MappingProxyType({
    "sqrt": _root,
    "sin": _trigonometric("sin", (0, 1, 0, -1)),
    "cos": _trigonometric("cos", (1, 0, -1, 0)),
    "tan": _trigonometric("tan", (0, None, 0, None)),
    "min": _extreme("min", min),
    "max": _extreme("max", max),
})
CONSTANTS: Final[Mapping[str, Amount]] = MappingProxyType({"pi": Amount(PI)})
