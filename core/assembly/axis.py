"""An axis that something turns about: by point and direction, through two points, or the own axis of a part."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.errors import ValueRefused
from core.moments import unit_vector

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.placement import Triple


@dataclass(frozen=True)
class DriveAxis:
    """A named axis in the document frame.

    Attributes:
        name: as shown.
        point: that it runs through, m.
        direction: of any length; of an axis through two points the way from the first to the second.
        second: the other of two points, m, which then says the direction; None: the direction was given.
        part: key of the part whose own axis it is; an assembly keeps such an axis where the part's first copy
            stands. "" for an axis by itself.
        toward: in the frame of that part, of any length: which way its axis points, and which of its axes it is
            where none stands out.
        typed: what the user typed for a number, by field, where that says more than the number.

    Raises:
        ValueRefused: a direction of no length, two points that are one.
    """

    name: str = "Spindle"
    point: Triple = (0.0, 0.0, 0.0)
    direction: Triple = (0.0, 0.0, 1.0)
    second: Triple | None = None
    part: str = ""
    toward: Triple = (0.0, 0.0, 1.0)
    typed: tuple[tuple[str, str], ...] = ()

    def __post_init__(self) -> None:
        if self.second is not None:
            x, y, z = (there - here for here, there in zip(self.point, self.second, strict=True))
            if not any((x, y, z)):
                raise ValueRefused(
                    "an axis needs two points that differ", read=f"{self.point} m twice", remedy="Move one of them"
                )
            object.__setattr__(self, "direction", (x, y, z))
        unit_vector(self.direction)
        unit_vector(self.toward)

    @property
    def unit(self) -> FloatArray:
        """The direction at length one, (3,)."""
        return unit_vector(self.direction)
