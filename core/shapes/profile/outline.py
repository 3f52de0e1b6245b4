"""A plane outline as people describe it: points, corner roundings, arcs by their radius, and holes."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, NamedTuple, Self

import numpy as np

from core.errors import ShapeError
from core.shapes.base import said
from core.shapes.profile.edges import Edges, tangents
from core.shapes.profile.plane_moments import PlaneMoments, plane_moments, signed_area

if TYPE_CHECKING:
    from collections.abc import Iterable, Sequence

    from core.arrays import FloatArray

MOST_POINTS = 10_000
MOST_LOOPS = 1_000

# Relative to the outline's size: points nearer than this are the same point, and what is this thin has no area.
COINCIDENT = 1e-9

# An arc whose radius differs from half its chord by the round-off of its ends' coordinates is a half circle: this
# many units in their last place, and no less than so many in that of the radius.
HALF_CIRCLE_UNITS = 40


class OutlinePoint(NamedTuple):
    """A point of an outline, and how the outline goes on from it. Lengths in m.

    Attributes:
        x: across; in a turned profile the distance from the axis.
        y: up; in a turned profile the height along the axis.
        rounding: the radius that rounds the corner at this point; 0 leaves it sharp.
        arc: the radius of the arc to the next point, of half a circle at most: positive where it turns left
            (counter-clockwise) on its way, negative where it turns right; 0 is a straight edge.
    """

    x: float
    y: float
    rounding: float = 0.0
    arc: float = 0.0


Loop = tuple[OutlinePoint, ...]


@dataclass(frozen=True)
class Outline:
    """An area in the plane, bounded by one outer loop, less its holes. Which way round loops run does not matter.

    Attributes:
        loops: the outer loop first, then the holes, each a tuple of OutlinePoint; a loop closes by itself.

    Making one checks it: see `check_outline` for what is refused.

    Raises:
        ShapeError: the loops bound no area; the sentence names the point and its coordinates in mm.

    >>> washer = Outline((circle_loop(0.05), circle_loop(0.02)))
    >>> round(float(washer.plane.area) / 3.141592653589793, 12)
    0.000525
    """

    loops: tuple[Loop, ...]

    def __post_init__(self) -> None:
        object.__setattr__(self, "loops", tuple(_loop(points) for points in self.loops))
        check_points(self)
        from core.shapes.profile.checking import check_outline

        check_outline(self)

    @classmethod
    def of(cls, outer: Iterable[Sequence[float]], *holes: Iterable[Sequence[float]]) -> Self:
        """Return the outline through points (x, y), (x, y, rounding) or (x, y, rounding, arc), in m."""
        return cls(tuple(tuple(OutlinePoint(*point) for point in loop) for loop in (outer, *holes)))

    @cached_property
    def edges(self) -> tuple[Edges, ...]:
        """The edges of each loop, without those of no length: the outer one counter-clockwise, holes clockwise."""
        made = []
        for number, loop in enumerate(self.loops):
            edges = edges_of(loop)
            edges = edges.kept(np.any(edges.start != edges.end, axis=-1))
            runs_left = bool(signed_area(edges) > 0)
            made.append(edges if runs_left == (number == 0) else edges.reversed())
        return tuple(made)

    @cached_property
    def plane(self) -> PlaneMoments:
        """Area, centroid, and second and third moments of area."""
        return plane_moments(self.edges)

    @cached_property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around the points, (2, 2) m; arcs may reach beyond it."""
        spots = np.concatenate([points_of(loop)[:, :2] for loop in self.loops])
        return np.stack([spots.min(axis=0), spots.max(axis=0)])

    @cached_property
    def size(self) -> float:
        """The diagonal of the box around the points, m."""
        return float(np.hypot(*(self.bounds[1] - self.bounds[0])))

    @property
    def length(self) -> float:
        """The length of all loops together, m."""
        return float(sum(edges.length.sum() for edges in self.edges))

    def lines(self, steps: int) -> tuple[FloatArray, ...]:
        """Return each loop as a polygon (k, 2) m to draw, a full circle in `steps` steps or a few more."""
        return tuple(edges.line(steps) for edges in self.edges)

    def enlarged(self, factor: float) -> Self:
        """Return the outline with every length multiplied by a positive factor."""
        return type(self)(tuple(tuple(OutlinePoint(*(factor * v for v in p)) for p in loop) for loop in self.loops))

    def moved(self, x: float, y: float) -> Self:
        """Return the outline shifted by x and y in m."""
        return type(self)(
            tuple(tuple(p._replace(x=p.x + x, y=p.y + y) for p in loop) for loop in self.loops)
        )


def circle_loop(diameter: float, x: float = 0.0, y: float = 0.0) -> Loop:
    """Return a circle about (x, y) as two half circles; all in m."""
    r = diameter / 2
    return OutlinePoint(x + r, y, 0.0, r), OutlinePoint(x - r, y, 0.0, r)


def rectangle_loop(width: float, height: float, x: float = 0.0, y: float = 0.0, rounding: float = 0.0) -> Loop:
    """Return a rectangle with its lower left corner at (x, y), its corners rounded; all in m."""
    corners = ((x, y), (x + width, y), (x + width, y + height), (x, y + height))
    return tuple(OutlinePoint(cx, cy, rounding) for cx, cy in corners)


def points_of(loop: Loop) -> FloatArray:
    """Return the points of a loop as an array (n, 4): x, y, rounding, arc in m."""
    return np.array(loop, dtype=np.float64).reshape(-1, 4)


def edges_of(loop: Loop) -> Edges:
    """Return the edges of a loop as its points run, with the roundings between them; some may have no length."""
    x_y, rounding, arc = np.split(points_of(loop), [2, 3], axis=1)
    return Edges.of_corners(x_y, rounding[:, 0], _bulges(x_y, arc[:, 0]))


def name_of(loop: int) -> str:
    """Return what a loop is called in a sentence.

    >>> name_of(0), name_of(2)
    ('the outer line', 'hole 2')
    """
    return "the outer line" if loop == 0 else f"hole {loop}"


def place_of(x: float, y: float) -> str:
    """Return coordinates in m as a sentence shows them.

    >>> place_of(0.01, -0.0025)
    '(10, -2.5) mm'
    """
    return f"({x * 1e3:.6g}, {y * 1e3:.6g}) mm"


def check_points(outline: Outline) -> None:
    """Refuse what is wrong with single points, or between neighbours.

    Raises:
        ShapeError: no loop, too many points, a loop too short, a number that is not finite, a negative rounding,
            equal neighbours, an arc whose radius is too small for its ends, a rounding beside an arc, or one that
            does not fit.
    """
    if not outline.loops or not outline.loops[0]:
        raise ShapeError("an outline needs points", where="outline", remedy="Give three points at least")
    points = sum(len(loop) for loop in outline.loops)
    if points > MOST_POINTS or len(outline.loops) > MOST_LOOPS:
        raise ShapeError(
            f"an outline has at most {MOST_POINTS} points in {MOST_LOOPS} loops", where="outline",
            read=f"{points} points in {len(outline.loops)} loops", remedy="Leave out points that matter little",
        )
    for number, loop in enumerate(outline.loops):
        _check_numbers(loop, number)
    for number, loop in enumerate(outline.loops):
        _check_neighbours(loop, number, outline.size)


def _loop(points: Iterable[Sequence[float]]) -> Loop:
    try:
        return tuple(OutlinePoint(*(float(value) for value in point)) for point in points)
    except (TypeError, ValueError) as error:
        raise ShapeError(
            "a point of an outline is two to four numbers: x, y, rounding, arc", where="outline",
            remedy="Give x and y, and the two radii where there are any",
        ) from error


def _check_numbers(loop: Loop, number: int) -> None:
    points = points_of(loop)
    fewest = 2 if np.any(points[:, 3]) else 3
    if len(points) < fewest:
        raise ShapeError(
            f"{name_of(number)} has too few points to go round anything", where="outline", read=f"{len(points)}",
            remedy="Give three points at least, or two with an arc between them",
        )
    good = np.isfinite(points).all(axis=1)
    if not good.all():
        raise _fault("has a number that is not finite", loop, number, int(np.argmin(good)), "Give ordinary numbers")
    if np.any(points[:, 2] < 0):
        at = int(np.argmax(points[:, 2] < 0))
        raise _fault(
            f"has a rounding of {said(points[at, 2])}", loop, number, at, "Give a radius of 0 or more for the corner",
        )


def _check_neighbours(loop: Loop, number: int, size: float) -> None:
    points = points_of(loop)
    x_y, rounding, arc = points[:, :2], points[:, 2], points[:, 3]
    chord = np.hypot(*(np.roll(x_y, -1, axis=0) - x_y).T)
    if np.any(chord <= COINCIDENT * size):
        at = int(np.argmax(chord <= COINCIDENT * size))
        raise _fault(
            f"lies where point {(at + 1) % len(loop) + 1} lies", loop, number, at, "Leave one of them out",
        )
    short = (arc != 0) & (chord / 2 > np.abs(arc) * (1 + COINCIDENT))
    if short.any():
        at = int(np.argmax(short))
        raise _fault(
            f"has an arc of radius {said(abs(arc[at]))} to the next point, and that is {said(chord[at])} away",
            loop, number, at, f"Give a radius of {said(chord[at] / 2)} or more",
        )
    beside = (rounding > 0) & ((arc != 0) | (np.roll(arc, 1) != 0))
    if beside.any():
        raise _fault(
            "is rounded, and an arc begins or ends there", loop, number, int(np.argmax(beside)),
            "Round corners between straight edges only, or give the points where the rounding begins and ends",
        )
    if np.any(rounding > 0):
        _check_roundings(loop, number, x_y, chord)


def _check_roundings(loop: Loop, number: int, x_y: FloatArray, chord: FloatArray) -> None:
    rounding = np.array([point.rounding for point in loop])
    tangent, _ = tangents(x_y, rounding)
    spare = chord - tangent - np.roll(tangent, -1)
    # A line that runs back on itself cannot be rounded at all: its tangent length is not finite.
    bad = ~(spare >= -COINCIDENT * chord)
    if bad.any():
        at = int(np.argmax(bad))
        after = (at + 1) % len(loop)
        raise _fault(
            f"and point {after + 1} are {said(chord[at])} apart, and their roundings "
            f"{said(rounding[at])} and {said(rounding[after])} do not fit between them",
            loop, number, at, "Make a rounding smaller",
        )


def _bulges(x_y: FloatArray, arc: FloatArray) -> FloatArray:
    """Return the bulges (n) of the edges from each point (n, 2) to the next, from the arcs' signed radii (n)."""
    half = np.hypot(*(np.roll(x_y, -1, axis=0) - x_y).T) / 2
    with np.errstate(divide="ignore", invalid="ignore"):
        sine = np.where(arc == 0, 0.0, half / np.abs(arc))
    last_place = np.spacing(np.abs(x_y).max(initial=0.0)) / np.where(half > 0, half, 1.0) + np.finfo(float).eps
    full = sine > 1 - HALF_CIRCLE_UNITS * last_place
    sine = np.where(full, 1.0, sine)
    return np.asarray(np.sign(arc) * sine / (1 + np.sqrt((1 - sine) * (1 + sine))))


def _fault(what: str, loop: Loop, number: int, at: int, remedy: str) -> ShapeError:
    place = place_of(loop[at].x, loop[at].y)
    of = "" if number == 0 else f" of hole {number}"
    return ShapeError(f"point {at + 1}{of} at {place} {what}", where="outline", remedy=remedy)
