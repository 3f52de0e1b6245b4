"""Of how many separate surfaces a mesh consists, in bounded memory and one more pass over its file.

Facets belong to one shell where they share a vertex, bit for bit. Vertices are told apart by 64-bit hashes alone: ten
million of them hold two equal hashes with a chance of about 3 in a million.

A batch of facets falls into patches that hang together; each vertex of the batch carries the label of its patch. The
same vertex met again with another label makes two patches one. Facets that follow each other in a file are mostly
neighbours, so that few labels are needed.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, TypeAlias

import numpy as np
from numpy.typing import NDArray

from core.mesh.closure import EdgeSum, Hashes

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.mesh.source import TriangleSource
    from core.progress import Progress

Labels: TypeAlias = NDArray[np.int32]

_CHUNK = 10_000
_BATCH = 4 * _CHUNK
# Vertices are kept in this many ranges of their hashes, so that sorting one range takes little memory.
_RANGES = 16
# Vertices that wait, over all ranges, before they are sorted in.
_MOST_WAITING = 1_500_000


def shells_of(source: TriangleSource, progress: Progress | None = None) -> int:
    """Return how many shells the triangles of a source form.

    Raises:
        MeshFileError: as the source.
        Cancelled: progress was cancelled.
    """
    if progress is not None:
        progress.begin(source.steps)
    census = _Census()
    for hashes in _batches(source, progress):
        census.add(hashes)
    return census.count()


class _Census:
    """The vertices met so far, each with the label of a patch, and which patches hang together."""

    def __init__(self) -> None:
        self._roots: Labels = np.empty(1024, np.int32)
        self._labels = 0
        self._known: list[tuple[Hashes, Labels]] = [(np.empty(0, np.uint64), np.empty(0, np.int32))] * _RANGES
        self._waiting: list[list[tuple[Hashes, Labels]]] = [[] for _ in range(_RANGES)]
        self._waiting_count = 0
        width = 2**64 // _RANGES
        self._borders = np.array([width * number for number in range(1, _RANGES)], np.uint64)

    def add(self, hashes: Hashes) -> None:
        """Take in the facets with these vertex hashes (3, n)."""
        vertices, corners = np.unique(hashes, return_inverse=True)
        first, second, third = corners.reshape(hashes.shape).astype(np.int32)
        everyone = np.arange(len(vertices), dtype=np.int32)
        roots = everyone.copy()
        _join(roots, first, second)
        _join(roots, first, third)
        roots = _root(roots, everyone)
        numbers = np.cumsum(roots == everyone, dtype=np.int32)
        labels = self._labels + numbers[roots] - np.int32(1)
        self._grow(int(numbers[-1]))
        cuts = [0, *np.searchsorted(vertices, self._borders).tolist(), len(vertices)]
        for waiting, start, stop in zip(self._waiting, cuts[:-1], cuts[1:], strict=True):
            waiting.append((vertices[start:stop], labels[start:stop]))
        self._waiting_count += len(vertices)
        if self._waiting_count > _MOST_WAITING:
            self._sort_in()

    def count(self) -> int:
        """Return how many shells there are."""
        self._sort_in()
        return int(np.count_nonzero(self._roots[: self._labels] == np.arange(self._labels, dtype=np.int32)))

    def _grow(self, more: int) -> None:
        """Make room for more labels, each of which is a patch of its own."""
        now = self._labels + more
        if now > len(self._roots):
            grown = np.empty(2 * now, np.int32)
            grown[: self._labels] = self._roots[: self._labels]
            self._roots = grown
        self._roots[self._labels : now] = np.arange(self._labels, now, dtype=np.int32)
        self._labels = now

    def _sort_in(self) -> None:
        for number, waiting in enumerate(self._waiting):
            parts = [self._known[number], *waiting]
            vertices = np.concatenate([part[0] for part in parts])
            labels = np.concatenate([part[1] for part in parts])
            order = np.argsort(vertices)
            vertices, labels = vertices[order], labels[order]
            again = np.flatnonzero(vertices[1:] == vertices[:-1])
            _join(self._roots, labels[again], labels[again + 1])
            keep = np.ones(len(vertices), dtype=bool)
            keep[again + 1] = False
            self._known[number] = vertices[keep], labels[keep]
            waiting.clear()
        self._waiting_count = 0


def _batches(source: TriangleSource, progress: Progress | None) -> Iterator[Hashes]:
    """Yield the vertex hashes (3, n) of up to _BATCH triangles at a time, in an array that is used again."""
    edges = EdgeSum(_CHUNK, words=source.dtype.itemsize // 4)
    batch = np.empty((3, _BATCH), np.uint64)
    held = 0
    for triangles, steps in source.chunks(_CHUNK):
        count = len(triangles)
        if held + count > _BATCH:
            yield batch[:, :held]
            held = 0
        columns = np.ascontiguousarray(triangles.reshape(count, 9).T) + 0.0
        batch[:, held : held + count] = edges.vertex_hashes(columns)
        held += count
        if progress is not None:
            progress.advance(steps)
    yield batch[:, :held]


def _join(roots: Labels, some: Labels, others: Labels) -> None:
    """Make each of some and the one of others beside it hang from one root; roots are changed in place."""
    while len(some):
        some, others = _root(roots, some), _root(roots, others)
        apart = some != others
        some, others = some[apart], others[apart]
        # Of several that hang one root elsewhere the last one wins; the rest meet again in the next round.
        roots[np.maximum(some, others)] = np.minimum(some, others)


def _root(roots: Labels, members: Labels) -> Labels:
    """Return the root of each member, and hang the members from it straight."""
    found = roots[members]
    while not np.array_equal(above := roots[found], found):
        found = above
    roots[members] = found
    return found
