"""The open edges of a mesh: loops with their lengths, the facets along them, and the caps that close them."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.edges import bulge_of, caps_of, loops_of

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.mesh.grouping import Labels


@dataclass(frozen=True, eq=False)
class OpenLoop:
    """The edge of a hole, file units.

    Attributes:
        points: (m, 3) once round, in the direction in which the facets beside it run.
        length: of the edge.
        area: of the flat cap that closes it.
        bulge: volume that the cap may be wrong by, see core.mesh.edges.bulge_of.
        facets: those that end on it.
        shell: which shell it belongs to.
    """

    points: FloatArray
    length: float
    area: float
    bulge: float
    facets: IntArray
    shell: int


@dataclass(frozen=True, eq=False)
class Openings:
    """All loops, and the triangles that close them: caps (c, 3, 3), the loop of each (c,)."""

    loops: tuple[IntArray, ...]
    facets: tuple[IntArray, ...]
    caps: FloatArray
    cap_loop: IntArray
    points: FloatArray

    def described(self, shell_of_facet: Labels) -> tuple[OpenLoop, ...]:
        """Return the loops with their sizes."""
        if not self.loops:
            return ()
        sides = np.linalg.norm(self.caps[:, 0] - self.caps[:, 1], axis=1)
        length = np.bincount(self.cap_loop, sides)
        area, bulge = bulge_of(self.caps, self.cap_loop)
        return tuple(
            OpenLoop(self.points[loop], float(length[i]), float(area[i]), float(bulge[i]), self.facets[i],
                     int(shell_of_facet[self.facets[i][0]]))
            for i, loop in enumerate(self.loops)
        )


def openings_of(points: FloatArray, corners: IntArray, uses: IntArray) -> Openings:
    """Return the loops that open uses (o,) of edges form; a use is 3·facet + side."""
    if len(uses) == 0:
        return Openings((), (), np.empty((0, 3, 3)), np.empty(0, np.int64), points)
    start = corners.ravel()[uses]
    stop = corners[:, [1, 2, 0]].ravel()[uses]
    loops = loops_of(np.stack([start, stop], axis=1))
    if not loops:
        return Openings((), (), np.empty((0, 3, 3)), np.empty(0, np.int64), points)
    most = int(corners.max()) + 1
    keys = start * most + stop
    order = np.argsort(keys)
    loop_of = np.repeat(np.arange(len(loops)), [len(loop) for loop in loops])
    caps = caps_of(points, loops)
    joined = np.concatenate(loops)
    last = np.flatnonzero(np.diff(loop_of, append=-1))
    after = np.roll(joined, -1)
    after[last] = joined[np.concatenate([[0], last[:-1] + 1])]
    facets = uses[order[np.searchsorted(keys[order], joined * most + after)]] // 3
    loop, beside = np.divmod(np.unique(loop_of * len(corners) + facets), len(corners))
    parts = np.split(beside, np.flatnonzero(np.diff(loop)) + 1)
    return Openings(tuple(loops), tuple(parts), caps, loop_of, points)
