"""Bringing equal keys together and things that hang together, for millions of them, without a loop over them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, TypeAlias

import numpy as np
from numpy.typing import NDArray

if TYPE_CHECKING:
    from core.arrays import BoolArray, IntArray

Keys: TypeAlias = NDArray[np.uint64]
Labels: TypeAlias = NDArray[np.int32]

# Odd, without a pattern: its product brings what the low bits of a key say into the high ones.
_MIX = np.uint64(0x9E3779B97F4A7C15)
_HALF = np.uint64(32)
_PIECE = 500_000


@dataclass(frozen=True, eq=False)
class Groups:
    """Elements with equal keys side by side.

    Attributes:
        order: (n,) which element stands where; inside a group in their own order.
        first: (n,) whether a group begins at this place.
    """

    order: IntArray
    first: BoolArray

    @property
    def starts(self) -> IntArray:
        """Places (g,) at which groups begin."""
        return np.flatnonzero(self.first)

    @property
    def sizes(self) -> IntArray:
        """How many elements each group (g,) has."""
        return np.diff(self.starts, append=len(self.order))

    @property
    def numbers(self) -> IntArray:
        """The group number of each place (n,)."""
        return running_count(self.first).astype(np.int64) - 1

    @property
    def ranks(self) -> IntArray:
        """How many elements of its group stand before each place (n,)."""
        places = np.arange(len(self.order))
        return places - self.starts.take(self.numbers)

    def of_elements(self) -> IntArray:
        """Return the group number of each element (n,), in the elements' own order."""
        result = np.empty(len(self.order), np.int64)
        result[self.order] = self.numbers
        return result


def group_equal(keys: Keys) -> Groups:
    """Return elements with equal 64-bit keys side by side; the groups follow in no particular order.

    Keys are mixed, their lowest bits replaced by the element's number, and the whole sorted as plain numbers, which
    takes a third of the time of sorting an order. Different keys that then agree are told apart in a second step.
    """
    count = len(keys)
    bits = np.uint64(max(1, (count - 1).bit_length()))
    low = (np.uint64(1) << bits) - np.uint64(1)
    packed = keys >> _HALF
    packed ^= keys
    packed *= _MIX
    packed &= ~low
    packed |= np.arange(count, dtype=np.uint64)
    packed.sort()
    order = (packed & low).astype(np.int64)
    packed >>= bits
    first = np.ones(count, dtype=bool)
    new_run = packed[1:] != packed[:-1]
    ordered = keys.take(order)
    first[1:] = ordered[1:] != ordered[:-1]
    clash = first[1:] & ~new_run
    if clash.any():
        order = _told_apart(keys, order, new_run, clash)
        ordered = keys.take(order)
        first[1:] = ordered[1:] != ordered[:-1]
    return Groups(order, first)


def _told_apart(keys: Keys, order: IntArray, new_run: BoolArray, clash: BoolArray) -> IntArray:
    """Sort those runs by key in which different keys stand mixed; they are few."""
    starts = np.concatenate([[0], np.flatnonzero(new_run) + 1, [len(order)]])
    runs = np.unique(np.searchsorted(starts, np.flatnonzero(clash) + 1, side="right")) - 1
    sizes = starts[runs + 1] - starts[runs]
    run = np.repeat(runs, sizes)
    places = np.repeat(starts[runs] - (np.cumsum(sizes) - sizes), sizes) + np.arange(len(run))
    members = order[places]
    result = order.copy()
    result[places] = members[np.lexsort((members, keys[members], run))]
    return result


def hang_together(count: int, some: IntArray, others: IntArray) -> Labels:
    """Return the number (count,) of the group that each of so many things belongs to.

    Things some[i] and others[i] belong together. Groups are numbered by their first member.
    """
    roots = np.arange(count, dtype=np.int32)
    a, b = some.astype(np.int32), others.astype(np.int32)
    while len(a):
        a, b = roots.take(a), roots.take(b)
        apart = a != b
        a, b = a[apart], b[apart]
        # Of several that hang one root elsewhere the last one wins; the rest meet again in the next round.
        roots[np.maximum(a, b)] = np.minimum(a, b)
        while not np.array_equal(above := roots.take(roots), roots):
            roots = above
    numbers = running_count(roots == np.arange(count, dtype=np.int32)) - np.int32(1)
    return numbers.take(roots)


def running_count(flags: BoolArray) -> Labels:
    """Return how many of flags (n,) are set up to each place, itself included; n below 2³¹."""
    # In pieces: a running sum holds the interpreter's lock, and a window would stand still for a second.
    result = np.empty(len(flags), np.int32)
    total = np.int32(0)
    for start in range(0, len(flags), _PIECE):
        piece = result[start : start + _PIECE]
        np.cumsum(flags[start : start + _PIECE], dtype=np.int32, out=piece)
        piece += total
        total = piece[-1]
    return result
