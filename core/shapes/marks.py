"""Where the dimensions of a shape are measured on its body, for a drawing of it.

The directions are chosen for a body seen from the front right and above (from +x, −y, +z), as the gallery and the
view's isometric look show it: a dimension line drawn that way stands clear of the body.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final, Literal, TypeAlias

import numpy as np

from core.arrays import ArrayLike, FloatArray, frozen

if TYPE_CHECKING:
    from collections.abc import Iterable

MarkStyle: TypeAlias = Literal["span", "radius", "leader"]
Way: TypeAlias = tuple[float, float, float]

_HALF: Final = 0.5**0.5
ABOVE: Final[Way] = (0.0, 0.0, 1.0)
BELOW: Final[Way] = (0.0, 0.0, -1.0)
FRONT: Final[Way] = (0.0, -1.0, 0.0)
BACK: Final[Way] = (0.0, 1.0, 0.0)
RIGHT: Final[Way] = (1.0, 0.0, 0.0)
LEFT: Final[Way] = (-1.0, 0.0, 0.0)
# To the right, to the left and towards the eye in the picture.
SIDE: Final[Way] = (_HALF, _HALF, 0.0)
OTHER_SIDE: Final[Way] = (-_HALF, -_HALF, 0.0)
NEAR: Final[Way] = (_HALF, -_HALF, 0.0)
# The dimension line runs on the body itself.
IN_PLACE: Final[Way] = (0.0, 0.0, 0.0)


@dataclass(frozen=True, eq=False)
class Mark:
    """Where one dimension of a single shape is measured, in its part frame.

    Attributes:
        name: of the dimension.
        start, end: (3,) m. Of a length they are as far apart as it is long. Of a radius the centre, and a point of
            the arc. Of a leader the same point twice: what it points at.
        away: (3,) unit vector in which the dimension line, or a leader's symbol, is drawn beside the body; zeros
            where it runs on the body itself.
        style: a span between two points, the radius of an arc, or a leader (for counts and angles).
    """

    name: str
    start: FloatArray
    end: FloatArray
    away: FloatArray
    style: MarkStyle = "span"

    def __post_init__(self) -> None:
        for field in ("start", "end", "away"):
            object.__setattr__(self, field, frozen(getattr(self, field)))


def span(name: str, start: ArrayLike, end: ArrayLike, away: Way) -> Mark:
    """Return the mark of a length between two points (3,) m."""
    return Mark(name, frozen(start), frozen(end), frozen(away))


def along_x(name: str, ends: tuple[float, float], y: float, z: float, away: Way = FRONT) -> Mark:
    """Return the mark of a length between two places on a line along x; all in m."""
    return span(name, (ends[0], y, z), (ends[1], y, z), away)


def along_y(name: str, ends: tuple[float, float], x: float, z: float, away: Way = RIGHT) -> Mark:
    """Return the mark of a length between two places on a line along y; all in m."""
    return span(name, (x, ends[0], z), (x, ends[1], z), away)


def along_z(name: str, ends: tuple[float, float], reach: float = 0.0, away: Way = SIDE) -> Mark:
    """Return the mark of a length along z, a distance `reach` m from the axis in the direction of `away`."""
    x, y = reach * away[0], reach * away[1]
    return span(name, (x, y, ends[0]), (x, y, ends[1]), away)


def across(name: str, diameter: float, z: float, away: Way = BELOW) -> Mark:
    """Return the mark of a diameter about z at a height, m; its ends are the outermost points of the picture."""
    x = diameter / 2 * _HALF
    return span(name, (-x, -x, z), (x, x, z), away)


def radius(name: str, centre: ArrayLike, way: ArrayLike, length: float) -> Mark:
    """Return the mark of a radius, from the centre (3,) m of its arc in a direction (3,), to the arc's point."""
    direction = np.asarray(way, dtype=float)
    start = np.asarray(centre, dtype=float)
    end = start + length * direction / np.linalg.norm(direction)
    return Mark(name, frozen(start), frozen(end), frozen(IN_PLACE), "radius")


def rounding(name: str, corners: FloatArray, at: int, length: float, z: float) -> Mark:
    """Return the mark of the radius that rounds corner `at` of a polygon (n, 2) m at height z; of the arc's middle."""
    corner = corners[at]
    before, after = (_unit(corners[(at + step) % len(corners)] - corner) for step in (-1, 1))
    middle = _unit(before + after)
    # The centre is r/sin(half the angle between the edges) from the corner.
    sine = np.sqrt((1 - float(before @ after)) / 2)
    centre = corner + middle * length / sine
    return radius(name, (*centre, z), (*-middle, 0.0), length)


def leader(name: str, at: ArrayLike, away: Way) -> Mark:
    """Return the mark of a count or an angle, that points at a place (3,) m."""
    return Mark(name, frozen(at), frozen(at), frozen(away), "leader")


def marks_by_name(marks: Iterable[Mark]) -> dict[str, Mark]:
    """Return marks by the name of their dimension."""
    return {mark.name: mark for mark in marks}


def _unit(vector: FloatArray) -> FloatArray:
    return np.asarray(vector / np.linalg.norm(vector))
