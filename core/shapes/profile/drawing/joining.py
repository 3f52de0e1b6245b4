"""Strands joined end to end into the loops of an outline."""

from __future__ import annotations

from collections import defaultdict
from typing import TYPE_CHECKING

import numpy as np

from core.errors import OutlineFileError
from core.shapes.profile.drawing.strands import Strand
from core.shapes.profile.outline import Outline, OutlinePoint, place_of

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.arrays import BoolArray, FloatArray, IntArray
    from core.quantity import Unit

# Relative to the drawing's size: ends nearer than this are one point, and pieces shorter than this are none.
JOINED_WITHIN = 1e-6

_MOST_SAID = 5


def joined_outline(strands: Sequence[Strand], unit: Unit) -> Outline:
    """Return the outline that strands make: the loop of the largest area, and the others as its holes.

    Args:
        strands: in the file's unit.
        unit: that unit.

    Raises:
        OutlineFileError: ends stay open, or more than two meet; `spots` says where.
        ShapeError: the loops make no outline.
    """
    spots = np.concatenate([strand.points for strand in strands])
    slack = JOINED_WITHIN * float(np.hypot(*np.ptp(spots, axis=0)))
    kept = [short for short in (_without_short(strand, slack) for strand in strands) if len(short.bulge)]
    if not kept:
        raise OutlineFileError("the drawing holds only points", remedy="Export the outline as lines and arcs")
    node = _nodes(np.concatenate([strand.points[[0, -1]] for strand in kept]), slack).reshape(-1, 2)
    _check_nodes(kept, node, unit)
    loops = [_loop(walk, kept, unit) for walk in _walks(node)]
    areas = [abs(_rough_area(loop)) for loop in loops]
    largest = int(np.argmax(areas))
    return Outline((loops[largest], *(loop for k, loop in enumerate(loops) if k != largest)))


def _without_short(strand: Strand, slack: float) -> Strand:
    """Return a strand without pieces that are shorter than the slack; a closed one keeps its ends."""
    chord = np.hypot(*np.diff(strand.points, axis=0).T)
    keep: BoolArray = chord > slack
    points = np.concatenate([strand.points[:-1][keep], strand.points[-1:]])
    return Strand(points, strand.bulge[keep])


def _nodes(ends: FloatArray, slack: float) -> IntArray:
    """Return for each end (n, 2) the number of the first end that is one point with it."""
    import shapely

    places = shapely.points(ends)
    one, other = shapely.STRtree(places).query(places, predicate="dwithin", distance=slack)
    first = np.arange(len(ends))
    # Chains of near ends settle on their first one; each round at least halves what is left to do.
    while True:
        lower = first.copy()
        np.minimum.at(lower, one, first[other])
        lower = lower[lower]
        if np.array_equal(lower, first):
            return first
        first = lower


def _check_nodes(strands: Sequence[Strand], node: IntArray, unit: Unit) -> None:
    """Refuse ends that meet no other one, or several.

    Raises:
        OutlineFileError: there are such.
    """
    ends = np.concatenate([strand.points[[0, -1]] for strand in strands])
    number = np.bincount(node.ravel(), minlength=len(ends))
    for wrong, what, remedy in (
        (number == 1, "open ends: no other line goes on at", "Close the outline in the drawing, and export it anew"),
        (number > 2, "more than two lines meet at", "Leave only the outline, each line once"),  # noqa: PLR2004 - a pair
    ):
        if wrong.any():
            spots = tuple((unit.to_si(float(x)), unit.to_si(float(y))) for x, y in ends[wrong])
            said = ", ".join(place_of(*spot) for spot in spots[:_MOST_SAID])
            more = f" and {len(spots) - _MOST_SAID} more" if len(spots) > _MOST_SAID else ""
            raise OutlineFileError(f"{what} {said}{more}", remedy=remedy, spots=spots)


def _walks(node: IntArray) -> list[list[tuple[int, bool]]]:
    """Return the loops as strands in order, each with whether it is run backwards; two ends meet at each node."""
    at: dict[int, list[int]] = defaultdict(list)
    for strand, (start, end) in enumerate(node.tolist()):
        at[start].append(strand)
        at[end].append(strand)
    left = set(range(len(node)))
    walks = []
    for first in range(len(node)):
        if first not in left:
            continue
        walk, strand, backwards = [], first, False
        while strand in left:
            left.discard(strand)
            walk.append((strand, backwards))
            here = int(node[strand, 0 if backwards else 1])
            strand = next((other for other in at[here] if other in left), strand)
            backwards = int(node[strand, 0]) != here
        walks.append(walk)
    return walks


def _loop(walk: list[tuple[int, bool]], strands: Sequence[Strand], unit: Unit) -> tuple[OutlinePoint, ...]:
    runs = [strands[k].reversed() if backwards else strands[k] for k, backwards in walk]
    points = np.concatenate([run.points[:-1] for run in runs]) * unit.factor
    bulge = np.concatenate([run.bulge for run in runs])
    chord = np.hypot(*(np.roll(points, -1, axis=0) - points).T)
    with np.errstate(divide="ignore"):
        arc = np.where(bulge == 0, 0.0, chord * (1 + bulge**2) / (4 * bulge))
    # Arcs flatter than round-off are straight edges.
    arc = np.where(np.isfinite(arc) & (np.abs(bulge) > np.finfo(float).eps), arc, 0.0)
    return tuple(OutlinePoint(*map(float, row)) for row in np.column_stack([points, np.zeros(len(points)), arc]))


def _rough_area(loop: tuple[OutlinePoint, ...]) -> float:
    """Return the area of the polygon of a loop's points and the middles of its arcs, enough to find the largest."""
    x, y, _, arc = np.array(loop).T
    dx, dy = np.roll(x, -1) - x, np.roll(y, -1) - y
    half = np.hypot(dx, dy) / 2
    radius = np.maximum(np.abs(arc), half)
    rise = np.where(arc == 0, 0.0, np.sign(arc) * (radius - np.sqrt(radius**2 - half**2)))
    polygon = 0.5 * np.sum(x * (y + dy) - (x + dx) * y)
    return float(polygon + np.sum(rise * half * 4 / 3))
