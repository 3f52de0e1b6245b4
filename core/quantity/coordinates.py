"""Reading points and axes from the command line.

Here "," and blanks separate numbers, so the decimal mark is "." only. Each number may carry a unit and
arithmetic when commas separate: "0, 0, 3/8 in".
"""

from __future__ import annotations

from typing import Final, TypeAlias

from core.quantity.expression import parse
from core.quantity.tokens import refusal
from core.quantity.units import UNITS, Unit

Triple: TypeAlias = tuple[float, float, float]

_SIZE: Final = 3


def parse_triple(text: str, unit: Unit, *, where: str = "") -> Triple:
    """Read three numbers of the unit's kind, and return them in SI.

    Raises:
        QuantityError: there are not three of them, or one of them is no quantity.

    >>> parse_triple("0, 12.7, 1 in", UNITS["mm"])
    (0.0, 0.0127, 0.0254)
    """
    parts = text.split(",") if "," in text else text.split()
    if len(parts) != _SIZE:
        raise refusal(
            f"three numbers are wanted, and {len(parts)} were found",
            text,
            where=where,
            remedy='Separate them by commas and use "." as the decimal mark, as in "0,0,12.5"',
        )
    x, y, z = (parse(part, unit.kind, unit, where=where).value for part in parts)
    return x, y, z


def parse_axis(text: str, unit: Unit, *, where: str = "") -> tuple[Triple, Triple]:
    """Read an axis "px,py,pz;ux,uy,uz": a point on it, in a length unit, and its direction, of any length.

    Returns:
        The point in m, and the direction as typed.

    Raises:
        QuantityError: one of the two is missing or no triple, or the direction has no length.

    >>> parse_axis("0,0,10;0,0,1", UNITS["mm"])
    ((0.0, 0.0, 0.01), (0.0, 0.0, 1.0))
    """
    point, mark, direction = text.partition(";")
    if not mark:
        raise refusal(
            'there is no ";" between the point and the direction',
            text,
            where=where,
            remedy='Write "px,py,pz;ux,uy,uz"',
        )
    start = parse_triple(point, unit, where=where)
    along = parse_triple(direction, UNITS[""], where=where)
    if not any(along):
        raise refusal(
            "the direction of the axis has no length",
            text,
            where=where,
            remedy='Write e.g. "0,0,1" behind ";"',
        )
    return start, along
