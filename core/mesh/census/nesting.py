"""Which shells lie in which, and which only meet: by boxes first, then by rays.

A point lies in a closed shell when a ray from it leaves the shell once more often than it enters. All is turned askew
first, so that no ray runs along the faces of a part; then the rays run along z. Whether a ray meets a facet is decided
in the x-y plane, edge by edge, each edge seen from the same end by both of its facets, so that no ray slips between two
facets or meets both.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.boxes import BoxTree
from core.mesh.edges import WELD

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.census.shells import Sizes
    from core.mesh.grouping import Labels
    from core.progress import Progress

# Pairs of shells with meeting boxes beyond which nobody could read the findings, and memory would run out.
MOST_PAIRS = 2_000_000
# Points tried per shell: at least, at most, and for all shells together.
_FEWEST, _MOST, _ALL = 3, 24, 20_000
# Of a facet's corners: inside it, and never in line with other corners of a drawing made of round numbers.
_WEIGHTS = np.array([0.4317, 0.3129, 0.2554])
# A rotation about no axis that a part has, so that rays do not run along its faces; columns are unit vectors.
_TURN = np.linalg.qr(np.array([[0.81, -0.37, 0.23], [0.29, 0.73, -0.41], [-0.19, 0.47, 0.89]]))[0]
# Facets that rays have to be held against, in all.
MOST_RAYS = 20_000_000


@dataclass(frozen=True, eq=False)
class Nesting:
    """How shells lie to one another.

    Attributes:
        inside: (k,) innermost shell around each, or −1.
        depth: (k,) how many shells lie around each.
        crossing: (p, 2) pairs of shells that may cut into each other: boxes overlap, neither lies in the other.
        complete: False where too many shells share one room to look at; nothing is then said about any pair.
    """

    inside: IntArray
    depth: IntArray
    crossing: IntArray
    complete: bool


def nesting_of(
    points: FloatArray, corners: IntArray, label: Labels, sizes: Sizes, closed: BoolArray, progress: Progress | None
) -> Nesting:
    """Return how the shells lie to one another; only those that are closed (k,) take part."""
    count = len(closed)
    nobody = np.full(count, -1), np.zeros(count, np.int64)
    nothing = np.empty((0, 2), np.int64)
    shells = np.flatnonzero(closed)
    if len(shells) <= 1:
        return Nesting(*nobody, nothing, complete=True)
    pairs = _meeting(sizes.bounds[shells], progress)
    if pairs is None:
        return Nesting(*nobody, nothing, complete=False)
    pairs = shells[pairs]
    inner, outer = np.concatenate([pairs, pairs[:, ::-1]]).T
    low, high = sizes.bounds[:, 0], sizes.bounds[:, 1]
    fits = ((low[outer] <= low[inner]) & (high[inner] <= high[outer])).all(axis=1)
    inner, outer = inner[fits], outer[fits]
    share = _share_inside(points, corners, label, sizes, inner, outer, progress)
    if share is None:
        return Nesting(*nobody, nothing, complete=False)
    wholly = share == 1
    depth = np.bincount(inner[wholly], minlength=count)
    inside = _innermost(inner[wholly], outer[wholly], depth)
    nested = np.concatenate([inner[wholly] * count + outer[wholly], outer[wholly] * count + inner[wholly]])
    overlap = np.minimum(high[pairs[:, 0]], high[pairs[:, 1]]) - np.maximum(low[pairs[:, 0]], low[pairs[:, 1]])
    crossing = (overlap > 0).all(axis=1) & ~np.isin(pairs[:, 0] * count + pairs[:, 1], nested)
    return Nesting(inside, depth, pairs[crossing], complete=True)


def _meeting(bounds: FloatArray, progress: Progress | None) -> IntArray | None:
    """Return the pairs (p, 2), lower number first, of boxes (k, 2, 3) that meet; None where they are too many."""
    low, high = bounds[:, 0], bounds[:, 1]
    found, total = [], 0
    for askers, boxes in BoxTree(low, high).meeting(low, high):
        found.append(np.stack([askers, boxes], axis=1)[askers < boxes])
        total += len(found[-1])
        if total > MOST_PAIRS:
            return None
        if progress is not None:
            progress.advance(0)
    return np.concatenate(found)


def _innermost(inner: IntArray, outer: IntArray, depth: IntArray) -> IntArray:
    """Return the deepest of the shells around each (k,), or −1."""
    result = np.full(len(depth), -1)
    order = np.argsort(depth[outer], kind="stable")
    # Of several values for one place the last one, the deepest, stays.
    result[inner[order]] = outer[order]
    return result


def _share_inside(
    points: FloatArray, corners: IntArray, label: Labels, sizes: Sizes, inner: IntArray, outer: IntArray,
    progress: Progress | None,
) -> FloatArray | None:
    """Return which share of some points on shell inner (p,) lie in shell outer (p,); None for too many rays."""
    if len(inner) == 0:
        return np.empty(0)
    points = points @ _TURN
    asking, ask = np.unique(inner, return_inverse=True)
    places, owner = _points_on(points, corners, sizes, asking)
    around = np.zeros(len(sizes.area), dtype=bool)
    around[outer] = True
    facets = np.flatnonzero(around[label])
    tally = _Tally(ask * len(sizes.area) + outer, owner, ask)
    film = WELD * float(np.linalg.norm(np.ptp(points, axis=0)))
    triangles = points[corners[facets]]
    low, high = triangles.min(axis=1), triangles.max(axis=1)
    low[:, 2] = -np.inf
    rays = 0
    for facet, point in BoxTree(places, places).meeting(low, high):
        rays += len(facet)
        if rays > MOST_RAYS:
            return None
        turns, touches = _stabs(points, corners[facets[facet]], places[point], film)
        tally.add(owner[point] * len(sizes.area) + label[facets[facet]], point, turns, touches)
        if progress is not None:
            progress.advance(0)
    return tally.share()


class _Tally:
    """Winding numbers, one for each point of a shell and each other shell that it is held against.

    Args:
        wanted: (p,) a number for each pair of shells.
        owner: (q,) which asking shell each point is on, ascending.
        ask: (p,) the asking shell of each pair.
    """

    def __init__(self, wanted: IntArray, owner: IntArray, ask: IntArray) -> None:
        self._order = np.argsort(wanted)
        self._wanted = wanted[self._order]
        per_shell = np.bincount(owner)
        self._first_point = (np.cumsum(per_shell) - per_shell)[owner]
        self._room = per_shell[ask[self._order]]
        self._first_row = np.cumsum(self._room) - self._room
        self._winding = np.zeros(int(self._room.sum()), np.int64)
        self._touching = np.zeros(len(self._winding), dtype=bool)

    def add(self, keys: IntArray, point: IntArray, turns: IntArray, touches: BoolArray) -> None:
        """Count rays from points that meet a facet of the other shell of a pair; pairs not wanted are passed over."""
        place = np.minimum(np.searchsorted(self._wanted, keys), len(self._wanted) - 1)
        hit = (self._wanted[place] == keys) & ((turns != 0) | touches)
        row = self._first_row[place[hit]] + point[hit] - self._first_point[point[hit]]
        np.add.at(self._winding, row, turns[hit])
        self._touching[row[touches[hit]]] = True

    def share(self) -> FloatArray:
        """Return which share of the points of each pair (p,) lie inside.

        A point on the other shell's surface says nothing; where no point says anything, half is as good a guess as any.
        """
        told = np.add.reduceat((~self._touching).astype(float), self._first_row)
        within = np.add.reduceat(((self._winding != 0) & ~self._touching).astype(float), self._first_row)
        result = np.empty(len(told))
        result[self._order] = np.divide(within, told, out=np.full(len(told), 0.5), where=told > 0)
        return result


def _points_on(
    points: FloatArray, corners: IntArray, sizes: Sizes, shells: IntArray
) -> tuple[FloatArray, IntArray]:
    """Return points (q, 3) on facets of shells (s,) spread over their lists, and which shell (of s) each is on."""
    begin = sizes.starts[shells]
    count = np.diff(sizes.starts, append=len(sizes.order))[shells]
    tried = np.minimum(count, int(np.clip(_ALL // len(shells), _FEWEST, _MOST)))
    owner = np.repeat(np.arange(len(shells)), tried)
    step = np.arange(len(owner)) - np.repeat(np.cumsum(tried) - tried, tried)
    facets = sizes.order[begin[owner] + step * count[owner] // tried[owner]]
    return np.einsum("c,ncx->nx", _WEIGHTS, points[corners[facets]]), owner


def _stabs(points: FloatArray, corner: IntArray, at: FloatArray, film: float) -> tuple[IntArray, BoolArray]:
    """Return how rays up from places (n, 3) meet facets corner (n, 3): leaving +1, entering −1, missing 0.

    With it comes whether a ray begins on its facet, no farther from it than film.
    """
    turns = np.zeros(len(at), np.int64)
    for side in range(3):
        turns += _crossing(points, corner[:, side], corner[:, (side + 1) % 3], at)
    met = np.flatnonzero(turns)
    a, b, c = (points[corner[met, i]] for i in range(3))
    normal = np.cross(b - a, c - a)
    # The distance to the facet's plane, times the normal's length and the sign of its z component.
    above = np.einsum("ni,ni->n", a - at[met], normal) * np.sign(normal[:, 2])
    touches = np.zeros(len(at), dtype=bool)
    touches[met] = np.abs(above) <= film * np.linalg.norm(normal, axis=1)
    turns[met[above <= 0]] = 0
    return turns, touches


def _crossing(points: FloatArray, start: IntArray, stop: IntArray, at: FloatArray) -> IntArray:
    """Return how the edges start→stop wind round places (n, 3) in the x-y plane: +1, −1 or 0.

    An edge counts where it crosses the line from the place towards +x, its lower end included, its upper one not.
    """
    # Seen from the same end by both facets of the edge, so that rounding is the same for both.
    swap = start > stop
    one, other = points[np.where(swap, stop, start)], points[np.where(swap, start, stop)]
    up = (one[:, 1] <= at[:, 1]) & (at[:, 1] < other[:, 1])
    down = (other[:, 1] <= at[:, 1]) & (at[:, 1] < one[:, 1])
    left = (other[:, 0] - one[:, 0]) * (at[:, 1] - one[:, 1]) - (at[:, 0] - one[:, 0]) * (other[:, 1] - one[:, 1])
    winds = np.where(up & (left > 0), 1, 0) - np.where(down & (left < 0), 1, 0)
    return np.where(swap, -winds, winds)
