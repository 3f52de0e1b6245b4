"""An outline while it is being edited: loops of points that need not bound an area yet."""

from __future__ import annotations

import re
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

from core.errors import OutlineFileError
from core.shapes import Outline, OutlinePoint
from core.shapes.profile import circle_loop
from core.shapes.profile.edges import tangents
from core.shapes.profile.outline import edges_of, points_of

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.arrays import FloatArray
    from core.errors import MasswrightError

Points: TypeAlias = tuple[OutlinePoint, ...]
Loops: TypeAlias = tuple[Points, ...]
# A point as (loop, point), counted from 0.
Place: TypeAlias = tuple[int, int]

_DRAWN_STEPS = 64
_ROUND_OFF = 1 + 1e-9
# A new hole is this part of the smaller side of what is around it.
_HOLE_SHARE = 0.2
_FEWEST_POINTS = 2
# The steps of the grid: 1, 2 and 5 times a power of ten.
_STEPS = (1.0, 2.0, 5.0)
_GRID_LINES = 30

# Coordinates as the sentences of the core have them: "(40, 12.5) mm".
_PLACE = re.compile(r"\((?P<x>[-+.e0-9]+), (?P<y>[-+.e0-9]+)\) mm")


def places(loops: Loops) -> list[Place]:
    """Return every point's place, in the order of the table."""
    return [(loop, point) for loop, points in enumerate(loops) for point in range(len(points))]


def name_of_point(place: Place) -> str:
    """Return what a point is called.

    >>> name_of_point((0, 2)), name_of_point((1, 0))
    ('point 3', 'point 1 of hole 1')
    """
    loop, point = place
    return f"point {point + 1}" + (f" of hole {loop}" if loop else "")


def with_point(loops: Loops, place: Place, point: OutlinePoint) -> Loops:
    """Return the loops with one point in the place of another."""
    changed = [list(points) for points in loops]
    changed[place[0]][place[1]] = point
    return tuple(tuple(points) for points in changed)


def with_point_behind(loops: Loops, place: Place, spot: tuple[float, float] | None = None) -> Loops:
    """Return the loops with a new point behind one, half way to the next or at a spot (x, y) m."""
    changed = [list(points) for points in loops]
    points = changed[place[0]]
    here, after = points[place[1]], points[(place[1] + 1) % len(points)]
    x, y = spot or ((here.x + after.x) / 2, (here.y + after.y) / 2)
    points.insert(place[1] + 1, OutlinePoint(x, y))
    return tuple(tuple(points) for points in changed)


def without_point(loops: Loops, place: Place) -> Loops:
    """Return the loops without a point; a hole of two goes as a whole, the last point of the outer line stays."""
    changed = [list(points) for points in loops]
    del changed[place[0]][place[1]]
    left = len(changed[place[0]])
    if left < _FEWEST_POINTS and place[0]:
        del changed[place[0]]
    elif not left:
        return loops
    return tuple(tuple(points) for points in changed)


def places_with(new: Place) -> Callable[[int, int], Place]:
    """Return what gives the place of an old point once a new one has been put in at a place."""
    return lambda loop, point: (loop, point + (loop == new[0] and point >= new[1]))


def places_without(gone: Place, *, whole_loop: bool) -> Callable[[int, int], Place | None]:
    """Return what gives the place of an old point once one, or the whole loop it is in, is gone; None for that one."""

    def moved(loop: int, point: int) -> Place | None:
        if whole_loop:
            return None if loop == gone[0] else (loop - (loop > gone[0]), point)
        return None if (loop, point) == gone else (loop, point - (loop == gone[0] and point > gone[1]))

    return moved


def with_hole(loops: Loops) -> Loops:
    """Return the loops with a round hole in the middle of the outer line, as two half circles."""
    low, high = bounds_of(loops[:1])
    x, y = (low + high) / 2
    return (*loops, circle_loop(float(_HOLE_SHARE * np.min(high - low)), float(x), float(y)))


def bounds_of(loops: Loops) -> FloatArray:
    """Return the lowest and highest corner of the box around what is drawn, (2, 2) m."""
    spots = np.concatenate(lines_of(loops))
    return np.stack([spots.min(axis=0), spots.max(axis=0)])


def lines_of(loops: Loops) -> list[FloatArray]:
    """Return each loop as a polygon (k, 2) m, rounded and bent where that can be, else straight between points."""
    lines = []
    for points in loops:
        straight = points_of(points)[:, :2]
        line = edges_of(points).line(_DRAWN_STEPS) if _bends(points) else straight
        lines.append(line if len(line) and np.isfinite(line).all() else straight)
    return lines


def _bends(points: Points) -> bool:
    """Tell whether the radii of a loop fit between its points, so that it can be drawn with them."""
    x_y, rounding, arc = np.split(points_of(points), [2, 3], axis=1)
    chord = np.hypot(*(np.roll(x_y, -1, axis=0) - x_y).T)
    with np.errstate(all="ignore"):
        tangent, _ = tangents(x_y, np.maximum(rounding[:, 0], 0.0))
    fits = np.abs(arc[:, 0]) * _ROUND_OFF >= chord / 2
    return bool(
        (chord > 0).all()
        and (tangent + np.roll(tangent, -1) <= chord * _ROUND_OFF).all()
        and (fits | (arc[:, 0] == 0)).all()
    )


def outline_of(loops: Loops) -> Outline:
    """Return the outline that the loops make.

    Raises:
        ShapeError: they bound no area.

    """
    return Outline(loops)


def fault_places(error: MasswrightError) -> tuple[tuple[float, float], ...]:
    """Return the places (x, y) m that a refusal says an outline is at fault; none where it names none."""
    if isinstance(error, OutlineFileError) and error.spots:
        return error.spots
    found = _PLACE.search(error.what)
    return ((float(found["x"]) / 1e3, float(found["y"]) / 1e3),) if found else ()


def grid_step(size: float) -> float:
    """Return the step (m) of a grid that suits an outline of a size (m): about thirty lines, at a round number.

    >>> grid_step(0.1), grid_step(0.02)
    (0.005, 0.001)
    """
    wanted = size / _GRID_LINES
    power = 10.0 ** np.floor(np.log10(wanted))
    return float(next((step * power for step in _STEPS if step * power >= wanted * (1 - 1e-9)), 10 * power))


def snapped(value: float, step: float) -> float:
    """Return a coordinate (m) on the nearest line of a grid (m), as short as it can be written in mm."""
    return float(f"{round(value / step) * step * 1e3:.9g}") / 1e3 if step > 0 else value
