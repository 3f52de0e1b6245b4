"""Which boxes meet which, for many boxes at once: a tree over them, walked down by all askers side by side."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import FloatArray, IntArray

# Children of a node: few levels, and little is looked at in vain.
_FAN = 4
_GRID_BITS = 20
# Meetings that a block of askers should have, and pairs beyond which a block is cut smaller, for the sake of memory.
_PER_BLOCK, _MOST_IN_BLOCK = 1_000_000, 8_000_000
_SMALLEST_BLOCK, _LARGEST_BLOCK = 16, 100_000


class BoxTree:
    """Boxes, sorted along a curve that visits neighbours one after the other, under a tree of boxes around them.

    Args:
        low, high: (n, 3) lowest and highest corners, n at least 1.
    """

    def __init__(self, low: FloatArray, high: FloatArray) -> None:
        self._order = np.argsort(_along_curve(0.5 * (low + high)), kind="stable")
        low, high = low[self._order], high[self._order]
        self._levels = [(low, high)]
        while len(low) > _FAN:
            starts = np.arange(0, len(low), _FAN)
            low, high = np.minimum.reduceat(low, starts), np.maximum.reduceat(high, starts)
            self._levels.append((low, high))

    def meeting(self, low: FloatArray, high: FloatArray) -> Iterator[tuple[IntArray, IntArray]]:
        """Yield (askers, boxes), block by block: which boxes low, high (m, 3) and of the tree have a common point.

        Blocks are made so small that each needs bounded memory, however many meetings there are in all.
        """
        start, size = 0, _SMALLEST_BLOCK
        while start < len(low):
            found = self._walk(low[start : start + size], high[start : start + size])
            if found is None and size > 1:
                size = max(1, size // 8)
                continue
            # A single asker meets each box at most once.
            assert found is not None
            askers, boxes = found
            yield askers + start, boxes
            start += size
            each = max(1.0, len(askers) / size)
            size = int(np.clip(_PER_BLOCK / each, 1, min(_LARGEST_BLOCK, 4 * max(size, _SMALLEST_BLOCK))))

    def _walk(self, low: FloatArray, high: FloatArray) -> tuple[IntArray, IntArray] | None:
        """Walk down with all askers side by side; None where their pairs become too many for several askers."""
        top = len(self._levels[-1][0])
        askers, nodes = np.repeat(np.arange(len(low)), top), np.tile(np.arange(top), len(low))
        for level in range(len(self._levels) - 1, -1, -1):
            their_low, their_high = self._levels[level]
            keep = np.ones(len(askers), dtype=bool)
            for axis in range(3):
                keep &= their_low[nodes, axis] <= high[askers, axis]
                keep &= low[askers, axis] <= their_high[nodes, axis]
            askers, nodes = askers[keep], nodes[keep]
            if len(low) > 1 and len(askers) > _MOST_IN_BLOCK // _FAN:
                return None
            if level:
                below = len(self._levels[level - 1][0])
                nodes = (_FAN * nodes[:, None] + np.arange(_FAN)).ravel()
                askers = np.repeat(askers, _FAN)[nodes < below]
                nodes = nodes[nodes < below]
        return askers, self._order[nodes]


def _along_curve(points: FloatArray) -> IntArray:
    """Return a number (n,) for points (n, 3) that is near for near points (Morton 1966)."""
    low, size = points.min(axis=0), np.ptp(points, axis=0)
    cells = (points - low) / np.where(size > 0, size, 1.0) * (2**_GRID_BITS - 1)
    x, y, z = (_spread(column) for column in cells.astype(np.int64).T)
    return x | (y << 1) | (z << 2)


def _spread(values: IntArray) -> IntArray:
    """Return whole numbers below 2²⁰ with two zero bits after each bit."""
    spread = values
    for shift, mask in (
        (32, 0x1F00000000FFFF), (16, 0x1F0000FF0000FF), (8, 0x100F00F00F00F00F),
        (4, 0x10C30C30C30C30C3), (2, 0x1249249249249249),
    ):
        spread = (spread | (spread << shift)) & mask
    return spread
