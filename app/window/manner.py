"""How lines are placed by hand: the frame of the numbers, how a turn is given, the steps, where the handles stand."""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import Final, Literal, TypeAlias, get_args

NumbersIn: TypeAlias = Literal["holder", "document"]
TurnGiven: TypeAlias = Literal["turns", "axis"]
Along: TypeAlias = Literal["document", "own"]
Pivot: TypeAlias = Literal["origin", "centre"]

# By the name of a choice below, what it may be.
CHOICES: Final[dict[str, tuple[str, ...]]] = {
    "numbers_in": get_args(NumbersIn), "turn_given": get_args(TurnGiven), "along": get_args(Along),
    "pivot": get_args(Pivot),
}


@dataclass(frozen=True)
class Manner:
    """The user's choices, kept from one session to the next; they change no document.

    Attributes:
        numbers_in: whether the Part page gives a placement in the frame that holds the line, or in the document's.
        turn_given: as turns about x, y and z, or as one turn about an axis.
        along: whether handles and nudges run along the document's directions or along the line's own.
        pivot: whether handles stand at the line's origin or at its centre of mass, and turns go about that.
        length_step: m, by which lines are moved; 0: dragging moves freely.
        angle_step: rad, by which lines are turned; 0: dragging turns freely.
        handles: whether the view shows handles at the selected line.
    """

    numbers_in: NumbersIn = "holder"
    turn_given: TurnGiven = "turns"
    along: Along = "document"
    pivot: Pivot = "origin"
    length_step: float = 0.001
    angle_step: float = math.radians(5)
    handles: bool = True
