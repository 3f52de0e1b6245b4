"""A seat: one line set on another by a named place of each; what it says, not yet where that puts the line."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal, TypeAlias

Facing: TypeAlias = Literal["against", "along"]


@dataclass(frozen=True)
class Anchor:
    """A named place (datum) of a line, or an axis of the document.

    Attributes:
        key: of a part, a group or a cut; "" for an axis of the document.
        datum: the name of the place, such as "face +z"; of the document the name of the axis.
    """

    key: str
    datum: str


@dataclass(frozen=True)
class Seat:
    """What holds a line at a place of another one; the first copy of each counts.

    The frame of a datum has its third axis along the datum's direction, and its first one (u) along its part's x axis
    as seen along the direction (along z where the direction is near x).

    Attributes:
        moving: a datum of the seated line, of a part in it, or of a cut in one.
        target: a datum of a line that is not part of the seated one, or an axis of the document.
        facing: whether the directions of the two point against each other, as of faces that touch, or the same way,
            as of faces that are flush.
        offset: m, from the target along its direction.
        aside: m, from the target across its direction, along u and v = direction × u.
        turn: rad, about the target's direction; 0 where both have the same u.
    """

    moving: Anchor
    target: Anchor
    facing: Facing = "against"
    offset: float = 0.0
    aside: tuple[float, float] = (0.0, 0.0)
    turn: float = 0.0
