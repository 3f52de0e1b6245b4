"""In which length unit a mesh file is, told from one thing that is known about the part."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

if TYPE_CHECKING:
    from collections.abc import Sequence

# How far a known value may be off: a dimension is read off a drawing, a mass off a scale and a guessed alloy. Units
# differ by factors of 2.54 and more in length, so of 16 and more in mass: no two of them fit at once.
LENGTH_OFF: Final = 0.05
MASS_OFF: Final = 0.5


def unit_of_known_length(sides: Sequence[float], length: float, factors: Sequence[float]) -> int | None:
    """Return the index of the unit in which one side is nearest to a known length; None where none is within 5 %.

    Args:
        sides: of the box around the part, in file units.
        length: known, m.
        factors: metres per unit of the units in question.

    >>> unit_of_known_length((2.0, 3.0, 4.0), 0.0762, (1e-3, 1e-2, 1.0, 0.0254))
    3
    """
    if length <= 0:
        return None
    return _nearest([min(abs(side * factor / length - 1) for side in sides) for factor in factors], LENGTH_OFF)


def unit_of_known_volume(mass_in_metres: float, mass: float, factors: Sequence[float]) -> int | None:
    """Return the index of the unit in which the part weighs nearest to what is known; None where none is within half.

    Args:
        mass_in_metres: what it would weigh were the file in metres, kg.
        mass: known, kg.
        factors: metres per unit of the units in question.

    >>> unit_of_known_volume(7850e3, 0.0079, (1e-3, 1e-2, 1.0, 0.0254))
    0
    """
    if mass <= 0:
        return None
    return _nearest([abs(mass_in_metres * factor**3 / mass - 1) for factor in factors], MASS_OFF)


def _nearest(off: list[float], allowed: float) -> int | None:
    best = min(range(len(off)), key=off.__getitem__)
    return best if off[best] <= allowed else None
