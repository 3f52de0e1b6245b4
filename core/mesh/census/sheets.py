"""Which facets join on to which over their edges, and the sheets that they form.

An edge with one use each way joins its two facets. What hangs together by such edges alone is a patch. On an edge with
more uses those one way are paired with those the other way: first within a patch, so that bodies that share an edge or
cut through each other's edges stay apart; then in the order of the facets, where one that occurs again comes after all
that occur for the first time, so that a mesh that lies in the file twice falls into its two copies. A sheet in which
every edge is paired is closed, however the pairs were chosen, and the sheets together add up to the mesh.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.grouping import group_equal, hang_together

if TYPE_CHECKING:
    from core.arrays import BoolArray, IntArray
    from core.mesh.grouping import Groups, Keys, Labels

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
    collapsed = collapsed_of(listed)
    if collapsed.any():
        # Their edges cancel one another, whatever lies beside them.
        proper = (~collapsed[:, None] & np.ones(3, dtype=bool)).ravel()
        starts, stops, uses = starts[proper], stops[proper], uses[proper]
    most = np.uint64(int(corners.max()) + 1)
    keys = np.minimum(starts, stops).astype(np.uint64) * most + np.maximum(starts, stops).astype(np.uint64)
    if len(keys) == 0:
        return Seams(np.empty((0, 2), np.int64), np.empty((0, 2), np.int64), np.empty(0, np.int64))
    groups = group_equal(keys)
    upward = (starts < stops).take(groups.order)
    uses = uses.take(groups.order)
    if _all_simple(groups.first, upward):
        pairs = uses.reshape(-1, 2)
        return Seams(pairs, np.empty((0, 2), np.int64), np.empty(0, np.int64))
    simple = _simple(groups, upward)
    joined = uses[simple].reshape(-1, 2)
    patch = hang_together(len(corners), joined[:, 0] // 3, joined[:, 1] // 3)
    rest = ~simple
    more = _paired(uses[rest], upward[rest], groups.numbers[rest], patch)
    return Seams(np.concatenate([joined, more.along]), more.against, more.open)


def _all_simple(first: BoolArray, upward: BoolArray) -> bool:
    """Tell whether every edge has just two uses, one each way."""
    return len(first) % 2 == 0 and bool(
        first[::2].all() and not first[1::2].any() and (upward[::2] != upward[1::2]).all()
    )


def _simple(groups: Groups, upward: BoolArray) -> BoolArray:
    """Return which places (n,) belong to edges with two uses, one each way."""
    starts = groups.starts
    two = starts[groups.sizes == 2]  # noqa: PLR2004  # one each way
    two = two[upward[two] != upward[two + 1]]
    simple = np.zeros(len(upward), dtype=bool)
    simple[two] = simple[two + 1] = True
    return simple


def _paired(uses: IntArray, upward: BoolArray, edge: IntArray, patch: Labels) -> Seams:
    """Pair uses (n,) of edges (n,) that have more than two, or both the same way."""
    if len(uses) == 0:
        return Seams(np.empty((0, 2), np.int64), np.empty((0, 2), np.int64), np.empty(0, np.int64))
    edge = np.unique(edge, return_inverse=True)[1]
    within = edge * (int(patch.max()) + 1) + patch[uses // 3]
    up, down = np.flatnonzero(upward), np.flatnonzero(~upward)
    pairs = []
    for group in (within, edge):
        one, other = _matched(group[up], group[down])
        pairs.append(np.stack([uses[up[one]], uses[down[other]]], axis=1))
        up, down = np.delete(up, one), np.delete(down, other)
    left = np.sort(np.concatenate([up, down]))
    # Of what is left on an edge all runs one way: two and two of it join, if there is an even number.
    even = np.bincount(edge[left], minlength=int(edge[-1]) + 1)[edge[left]] % 2 == 0
    return Seams(np.concatenate(pairs), uses[left[even]].reshape(-1, 2), uses[left[~even]])


def _matched(some: IntArray, others: IntArray) -> tuple[IntArray, IntArray]:
    """Return which of some go with which of others: in each group the first with the first, and so on."""
    both = np.union1d(some, others)
    places = [np.searchsorted(both, groups) for groups in (some, others)]
    least = np.minimum(*(np.bincount(place, minlength=len(both)) for place in places))
    found = []
    for place in places:
        order, rank = _ranked(place)
        found.append(order[rank < least[place[order]]])
    return found[0], found[1]


def _ranked(groups: IntArray) -> tuple[IntArray, IntArray]:
    """Return an order by group that keeps the members' own, and how many of its group stand before each."""
    order = np.argsort(groups, kind="stable")
    first = np.flatnonzero(np.diff(groups[order], prepend=-1))
    sizes = np.diff(first, append=len(groups))
    return order, np.arange(len(groups)) - np.repeat(first, sizes)


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


def sheets_of(corners: IntArray, seams: Seams) -> Labels:
    """Return the sheet number (n,) of each facet; facets belong together where they meet over an edge.

    A facet with coinciding corners belongs to a sheet that has one of its corners.
    """
    joined = np.concatenate([seams.along, seams.against]) // 3
    collapsed = np.flatnonzero(collapsed_of(corners))
    if len(collapsed):
        owner = np.empty(int(corners.max()) + 1, np.int64)
        owner[corners[collapsed].ravel()] = np.repeat(collapsed, 3)
        whole = np.flatnonzero(~collapsed_of(corners))
        owner[corners[whole].ravel()] = np.repeat(whole, 3)
        # The corner that all of a sheet's facets would most likely share: any of the three will do.
        beside = owner[corners[collapsed]]
        is_whole = ~collapsed_of(corners[beside])
        best = np.where(is_whole[:, 0], beside[:, 0], np.where(is_whole[:, 1], beside[:, 1], beside[:, 2]))
        joined = np.concatenate([joined, np.stack([collapsed, best], axis=1)])
    return hang_together(len(corners), joined[:, 0], joined[:, 1])


def collapsed_of(corners: IntArray) -> BoolArray:
    """Return which facets (n, 3) have two corners in one place."""
    a, b, c = (corners[..., i] for i in range(3))
    return np.asarray((a == b) | (b == c) | (c == a))


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
