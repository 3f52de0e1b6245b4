"""The census of a mesh: its shells and what each is for, its open edges, and all that is wrong with it.

census takes it, of triangles in memory; it looks at each facet a handful of times and holds the mesh several times
over (about 350 bytes a facet), so it belongs into the background. Every finding names its facets and the mends of
core.mesh.mend that fit.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

from core.mesh.census.findings import FINDINGS, MeshFinding, findings_of
from core.mesh.census.openings import OpenLoop
from core.mesh.census.shells import Shells
from core.mesh.census.taking import evidence_of
from core.mesh.source import triangles_of

if TYPE_CHECKING:
    from numpy.typing import ArrayLike

    from core.progress import Progress

__all__ = ["FINDINGS", "Census", "MeshFinding", "OpenLoop", "Shells", "census"]


@dataclass(frozen=True, eq=False)
class Census:
    """What a mesh consists of, file units.

    Attributes:
        triangles: how many facets it has.
        shells: see Shells. Bodies that share an edge or a corner only are shells of their own.
        loops: its open edges, in no particular order.
        findings: what its reader should know; empty for a sound mesh.
        turned: whether all of it faces inwards; roles and findings are then those of the mesh turned.
    """

    triangles: int
    shells: Shells
    loops: tuple[OpenLoop, ...]
    findings: tuple[MeshFinding, ...]
    turned: bool

    @property
    def sound(self) -> bool:
        """Whether nothing was found that makes the values wrong or doubtful."""
        return all(finding.harmless for finding in self.findings)


def census(triangles: ArrayLike, progress: Progress | None = None) -> Census:
    """Return the census of triangles (n, 3, 3), counter-clockwise seen from outside, any length unit.

    Raises:
        ValueRefused: another shape, or no triangle.
        MeshFileError: a coordinate that is not finite.
        Cancelled: progress was cancelled.
    """
    evidence = evidence_of(triangles_of(triangles), progress)
    return Census(len(evidence.corners), evidence.shells, evidence.loops, findings_of(evidence), evidence.turned)
