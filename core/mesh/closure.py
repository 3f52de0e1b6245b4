"""Whether a mesh is closed, as a sum: every directed edge must meet its reverse.

Each vertex is sent, by a hash of its bits, to a point (p, q) of a plane over the integers modulo 2⁶⁴. The doubled
signed area of a triangle there is a sum over its directed edges u→v of p_u·q_v − q_u·p_v, which changes sign
when the edge is reversed. So the areas of a closed mesh add up to exactly 0, whatever the hash. For a mesh that
leaks the sum is 0 only by chance: a polynomial identity test (Schwartz 1980) with random values in place of random
arguments. Odds: two given vertices that differ fall together with at most 2⁻⁴⁹; the sum of a leaking mesh is 0 with
about 2⁻⁵⁸.

An edge that four facets share is harmless when two of them run each way, and so it is here.
"""

from __future__ import annotations

from typing import TypeAlias

import numpy as np
from numpy.typing import NDArray

Words: TypeAlias = NDArray[np.uint32]
Hashes: TypeAlias = NDArray[np.uint64]

# Odd 64-bit numbers without a pattern: one key per 32-bit word of a vertex, then one for p and one for q.
_WORD_KEYS = tuple(np.uint64(key) for key in (
    0xD5B3F0A8C1E94B7D, 0x8F2E6A4D93B70C15, 0xB46C19E7F5A2D83B,
    0x9C7D31B80E64FA29, 0xE10B57D29A8C463F, 0xA83F9D64C72B1E05,
))
_P_KEY, _Q_KEY = np.uint64(0xBF58476D1CE4E5B9), np.uint64(0x94D049BB133111EB)
_HALF, _FOLD = np.uint64(32), np.uint32(16)


class EdgeSum:
    """The sum of signed areas in the plane of hashes, chunk by chunk, in buffers made once.

    Args:
        most: how many triangles a chunk holds at most.
        words: 32-bit words per coordinate: 1 for float32, 2 for float64.
    """

    def __init__(self, most: int, words: int = 1) -> None:
        self._memory = np.empty(9 * most * words, np.uint32), np.empty(6 * most, np.uint64)
        self._count = 0

    def _arrange(self, count: int, bits: Words) -> None:
        """Lay the buffers out for chunks of count triangles; done anew only where the size changes."""
        single, double = self._memory
        self._folded = single[: bits.size].reshape(bits.shape)
        words = self._folded.reshape(3, 3, count, -1)
        self._words = [words[:, axis, :, word] for axis in range(3) for word in range(words.shape[3])]
        self._one, self._other = double[: 6 * count].reshape(2, 3, count)
        self._count = count

    def of(self, coordinates: NDArray[np.floating]) -> int:
        """Return the chunk's sum modulo 2⁶⁴; the sums of all chunks add up to 0 (mod 2⁶⁴) for a closed mesh.

        Args:
            coordinates: (9, n) rows xa ya za xb yb zb xc yc zc, contiguous, float32 or float64, without −0.0.
        """
        self._hash(coordinates)
        p, q = self._other, self._one
        _spread(q, _P_KEY, out=p)
        _spread(p, _Q_KEY, out=q)
        np.subtract(p[1:], p[0], out=p[1:])
        np.subtract(q[1:], q[0], out=q[1:])
        np.multiply(p[1], q[2], out=p[0])
        np.multiply(p[2], q[1], out=q[0])
        np.subtract(p[0], q[0], out=p[0])
        return int(np.add.reduce(p[0]))

    def vertex_hashes(self, coordinates: NDArray[np.floating]) -> Hashes:
        """Return one 64-bit number per vertex, (3, n), equal for equal bits.

        It is a view that the next call overwrites; coordinates as for of().
        """
        self._hash(coordinates)
        _spread(self._one, _P_KEY, out=self._other)
        return self._other

    def _hash(self, coordinates: NDArray[np.floating]) -> None:
        """Fill self._one (3, n) with a multilinear hash of the words of each vertex (Dietzfelbinger 1996)."""
        bits = coordinates.view(np.uint32)
        if coordinates.shape[1] != self._count:
            self._arrange(coordinates.shape[1], bits)
        # Round numbers end in many zero bits, which a product modulo 2⁶⁴ keeps: fold the upper half over them.
        np.right_shift(bits, _FOLD, out=self._folded)
        np.bitwise_xor(self._folded, bits, out=self._folded)
        total, term = self._one, self._other
        np.copyto(total, self._words[0])
        np.multiply(total, _WORD_KEYS[0], out=total)
        for word, key in zip(self._words[1:], _WORD_KEYS[1:], strict=False):
            np.copyto(term, word)
            np.multiply(term, key, out=term)
            np.add(total, term, out=total)


def _spread(values: Hashes, key: np.uint64, out: Hashes) -> None:
    """Fill out with a one-to-one, far from linear image of values: xor with the upper half, then multiply."""
    np.right_shift(values, _HALF, out=out)
    np.bitwise_xor(values, out, out=out)
    np.multiply(out, key, out=out)
