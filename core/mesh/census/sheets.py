"""Which facets join on to which over their edges, and the sheets that they form.

The uses of an edge one way are paired with its uses the other way, in the order of the facets. A facet that occurs
again comes after all that occur for the first time, so that a mesh that lies in the file twice falls into its two
copies, and bodies that share an edge stay apart where their facets follow each other in the file. A sheet in which
every edge is paired is closed.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.grouping import group_equal, hang_together

if TYPE_CHECKING:
    from core.arrays import BoolArray, IntArray
    from core.mesh.grouping import Keys, Labels

_KEYS = tuple(np.uint64(key) for key in (0xD6E8FEB86659FD93, 0xA0761D6478BD642F, 0xE7037ED1A0B428DB))
_FOLD = np.uint64(29)


@dataclass(frozen=True, eq=False)
class Seams:
    """How facets meet over their edges. A use of an edge is 3·facet + side, with side 0 from corner 0 to 1.

    Attributes:
        along: (m, 2) uses that run opposite ways along one edge, as they do between facets that agree.
        against: (k, 2) uses that run the same way, of which one facet must be turned.
        open: (o,) uses that no other use balances.
    """

    along: IntArray
    against: IntArray
    open: IntArray


@dataclass(frozen=True, eq=False)
class Doubles:
    """Facets with the same three corners.

    Attributes:
        copy: (n,) how many facets before this one have the same corners and winding; 0 nearly everywhere.
        opposed: facets that lie back to back with another one, ascending; both of each pair.
        spare: (n,) facets that can go: of equal ones all but the first, and whole pairs that lie back to back.
    """

    copy: IntArray
    opposed: IntArray
    spare: BoolArray


def seams_of(corners: IntArray, copy: IntArray) -> Seams:
    """Return how facets corners (n, 3) meet; copy (n,) as of Doubles."""
    by_copy = np.argsort(copy, kind="stable") if copy.any() else None
    listed = corners if by_copy is None else corners[by_copy]
    uses = np.arange(3 * len(corners)) if by_copy is None else (3 * by_copy[:, None] + np.arange(3)).ravel()
    starts, stops = listed.ravel(), listed[:, [1, 2, 0]].ravel()
    proper = starts != stops
    if not proper.all():
        starts, stops, uses = starts[proper], stops[proper], uses[proper]
    most = np.uint64(int(corners.max()) + 1)
    keys = np.minimum(starts, stops).astype(np.uint64) * most + np.maximum(starts, stops).astype(np.uint64)
    groups = group_equal(keys)
    upward = (starts < stops).take(groups.order)
    uses = uses.take(groups.order)
    if _all_simple(groups.first, upward):
        pairs = uses.reshape(-1, 2)
        return Seams(pairs, np.empty((0, 2), np.int64), np.empty(0, np.int64))
    return _paired(uses, upward, groups.numbers)


def _all_simple(first: BoolArray, upward: BoolArray) -> bool:
    """Tell whether every edge has just two uses, one each way."""
    return len(first) % 2 == 0 and bool(
        first[::2].all() and not first[1::2].any() and (upward[::2] != upward[1::2]).all()
    )


def _paired(uses: IntArray, upward: BoolArray, edge: IntArray) -> Seams:
    edges = int(edge[-1]) + 1
    up, down = np.flatnonzero(upward), np.flatnonzero(~upward)
    ups, downs = np.bincount(edge[up], minlength=edges), np.bincount(edge[down], minlength=edges)
    both = np.minimum(ups, downs)
    up_rank = np.arange(len(up)) - (np.cumsum(ups) - ups)[edge[up]]
    down_rank = np.arange(len(down)) - (np.cumsum(downs) - downs)[edge[down]]
    up_taken, down_taken = up_rank < both[edge[up]], down_rank < both[edge[down]]
    along = np.stack([uses[up[up_taken]], uses[down[down_taken]]], axis=1)
    left = np.sort(np.concatenate([up[~up_taken], down[~down_taken]]))
    # Of what is left on an edge all runs one way: two and two of it join, if there is an even number.
    size = np.bincount(edge[left], minlength=edges)
    even = size[edge[left]] % 2 == 0
    return Seams(along, uses[left[even]].reshape(-1, 2), uses[left[~even]])


def doubles_of(corners: IntArray) -> Doubles:
    """Return which facets corners (n, 3) occur several times; facets with coinciding corners count for none."""
    a, b, c = corners.T
    low, high = np.minimum(np.minimum(a, b), c), np.maximum(np.maximum(a, b), c)
    groups = group_equal(_mixed(low, a + b + c - low - high, high))
    copy = np.zeros(len(corners), np.int64)
    again = ~groups.first
    if not again.any():
        return Doubles(copy, np.empty(0, np.int64), copy > 0)
    # Only the facets of groups with more than one member are looked at.
    number = groups.numbers
    shared = groups.sizes[number] > 1
    facets, number = groups.order[shared], number[shared]
    real = (a[facets] != b[facets]) & (b[facets] != c[facets]) & (c[facets] != a[facets])
    facets, number = facets[real], number[real]
    side = 2 * number + is_even(corners[facets])
    order = np.lexsort((facets, side))
    facets, side = facets[order], side[order]
    first = np.diff(side, prepend=-1) != 0
    starts = np.flatnonzero(first)
    sizes = np.diff(starts, append=len(side))
    rank = np.arange(len(side)) - np.repeat(starts, sizes)
    copy[facets] = rank
    others = np.bincount(side, minlength=2 * len(groups.starts))[side ^ 1]
    spare = np.zeros(len(corners), dtype=bool)
    spare[facets[rank != others]] = True
    return Doubles(copy, np.sort(facets[rank < others]), spare)


def is_even(corners: IntArray) -> IntArray:
    """Return 1 where the corners (n, 3), turned until the lowest is first, ascend, else 0."""
    a, b, c = corners.T
    return np.asarray(((a < b).astype(np.int64) + (b < c) + (c < a)) // 2)


def sheets_of(count: int, seams: Seams) -> Labels:
    """Return the sheet number (count,) of each facet; facets belong together where they meet over an edge."""
    joined = np.concatenate([seams.along, seams.against]) // 3
    return hang_together(count, joined[:, 0], joined[:, 1])


def facet_hashes(corners: IntArray) -> Keys:
    """Return one 64-bit number (n,) per facet, the same whichever corner comes first, another one when turned."""
    turn = np.argmin(corners, axis=1)
    rows = np.arange(len(corners))
    return _mixed(*(corners[rows, (turn + step) % 3] for step in range(3)))


def _mixed(*columns: IntArray) -> Keys:
    total = np.zeros(len(columns[0]), np.uint64)
    for column, key in zip(columns, _KEYS, strict=True):
        term = column.astype(np.uint64)
        term += np.uint64(1)
        term *= key
        total += term
        # Between the terms, so that no sum of one facet's terms is another's by their small whole numbers.
        total ^= total >> _FOLD
        total *= _KEYS[0]
    return total
