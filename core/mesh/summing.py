"""One pass over the triangles of a source, which tells whether they are closed and what they enclose."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.errors import MeshFileError
from core.mesh.integrals import CHUNK, Integrator, Sums
from core.mesh.stl_faults import MEND

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.mesh.source import TriangleSource
    from core.progress import Progress


def sum_up(source: TriangleSource, progress: Progress | None = None) -> tuple[Sums, FloatArray]:
    """Return the sums over all triangles of a source and the reference point (3,) they are about.

    One thread: with two, most calls wait for the interpreter's lock, and a file took longer.

    Raises:
        MeshFileError: as the source, or a coordinate that is not finite.
        Cancelled: progress was cancelled.
    """
    if progress is not None:
        progress.begin(source.steps)
    parts: list[Sums] = []
    integrator, reference, done = None, np.zeros(3), 0
    for triangles, steps in source.chunks(CHUNK):
        if integrator is None:
            reference = triangles[0, 0].astype(np.float64)
            integrator = Integrator(reference, source.dtype)
        part = integrator.sums_of(triangles)
        if part is None:
            raise _not_finite(source.name, done, integrator.first_not_finite())
        parts.append(part)
        done += part.triangles
        if progress is not None:
            progress.advance(steps)
    return Sums.total(parts), reference


def _not_finite(name: str, before: int, first: tuple[int, int, int, float]) -> MeshFileError:
    facet, corner, axis, value = first
    return MeshFileError(
        "a coordinate is not a finite number", where=f"{name}, facet {before + facet + 1}",
        read=f"{'xyz'[axis]} of corner {corner + 1} = {value}", remedy=MEND,
    )
