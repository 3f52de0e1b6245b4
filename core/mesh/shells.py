"""Of how many separate surfaces a mesh consists, in bounded memory and two more passes over its file.

Facets belong to one shell where they share a vertex, bit for bit. Vertices are told apart by 64-bit hashes alone: ten
million of them hold two equal hashes with a chance of about 3 in a million.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.mesh.closure import EdgeSum

if TYPE_CHECKING:
    from collections.abc import Iterator

    from core.arrays import BoolArray
    from core.mesh.closure import Hashes
    from core.mesh.source import TriangleSource
    from core.progress import Progress

    Labels = np.ndarray[tuple[int, ...], np.dtype[np.int32]]

_CHUNK = 10_000
# Triangles sorted at once: large enough that few sorted runs need merging, small beside the vertices of a large mesh.
_BATCH = 400_000


def shells_of(source: TriangleSource, progress: Progress | None = None) -> int:
    """Return how many shells the triangles of a source form.

    Raises:
        MeshFileError: as the source.
        Cancelled: progress was cancelled.
    """
    if progress is not None:
        progress.begin(2 * source.steps)
    vertices = _vertices(source, progress)
    roots = np.arange(len(vertices), dtype=np.int32)
    for hashes in _batches(source, progress):
        known, places = np.unique(hashes, return_inverse=True)
        corners = np.searchsorted(vertices, known).astype(np.int32)[places.reshape(hashes.shape)]
        _join(roots, corners[0], corners[1])
        _join(roots, corners[0], corners[2])
    return int(np.count_nonzero(roots == np.arange(len(roots), dtype=np.int32)))


def _vertices(source: TriangleSource, progress: Progress | None) -> Hashes:
    """Return the sorted hashes of all vertices, each once."""
    runs: list[Hashes] = []
    for hashes in _batches(source, progress):
        runs.append(np.unique(hashes))
        # Runs of like length are merged, so that each hash is sorted again only a few times.
        while len(runs) > 1 and len(runs[-2]) < 2 * len(runs[-1]):
            runs.append(_merged(runs.pop(), runs.pop()))
    while len(runs) > 1:
        runs.append(_merged(runs.pop(), runs.pop()))
    return runs[0]


def _merged(one: Hashes, other: Hashes) -> Hashes:
    both = np.concatenate([one, other])
    both.sort()
    keep: BoolArray = np.empty(len(both), dtype=bool)
    keep[0] = True
    np.not_equal(both[1:], both[:-1], out=keep[1:])
    return both[keep]


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
