"""One look at a mesh: whether it is closed, and what its volume, centre and second moment are.

All numbers are in the file's own length unit, at unit density: Moments.enlarged changes the unit, Moments.times
gives it a density.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import FloatArray, frozen
from core.errors import MeshFileError
from core.mesh.edges import Leaks, find_leaks
from core.mesh.integrals import CHUNK, Integrator, Sums
from core.mesh.shells import shells_of
from core.mesh.source import ArraySource, TriangleSource
from core.mesh.stl import AsciiStl, open_stl
from core.mesh.stl_faults import AGAIN
from core.mesh.summing import sum_up

if TYPE_CHECKING:
    from collections.abc import Iterator
    from pathlib import Path

    from numpy.typing import ArrayLike, NDArray

    from core.moments import Moments
    from core.progress import Progress

CLOSED, CRACKED, OPEN, INSIDE_OUT, MIXED = "closed", "hairline cracks", "open", "inside out", "mixed winding"
# Verdicts on a surface that bounds a volume, exactly or within what its cracks leave open.
SOUND = frozenset({CLOSED, CRACKED, INSIDE_OUT})
COMPUTED, ESTIMATED, SEWN = "computed", "estimated: holes closed flat", "estimated: cracks closed"

# Volume over area × diagonal below which a mesh encloses nothing but round-off.
FLAT = 1e-13
# Distance from the origin over size beyond which the digits of an STL file's coordinates round the shape.
FAR = 1e3


@dataclass(frozen=True, eq=False)
class MeshSurvey:
    """What one look at a mesh tells, in file units and at unit density.

    Attributes:
        triangles: how many facets the file holds.
        format: "binary STL", "ASCII STL" or "triangles".
        area: of the facets.
        solid: volume as mass, with centre and central second moment; None where no honest number exists.
        verdict: "closed", "hairline cracks", "open", "inside out" or "mixed winding".
        closed: whether every directed edge meets its reverse, bit for bit.
        open_edges: how many directed edges meet none.
        basis: "computed", "estimated: holes closed flat", "estimated: cracks closed" (open edges too far apart for
            hairline cracks that still meet), or "no volume: " and the reason.
        bounds: (2, 3) lowest and highest coordinates.
        degenerate: facets without area; they are harmless.
        notes: sentences that belong beside the numbers.
        crack_volume: how much cracks can change the volume, at most; 0 without cracks.
        crack_centre: how far they can move the centre, at most.
        crack_inertia: how much they can change the inertia about any axis through the centre, at most.
        open_volume: how much the volume of an open mesh may be off because its holes were closed flat: what would
            bulge out of them like a hemisphere on a round hole of equal area A, the sum of 2/3·A·√(A/π). An
            estimate, not a bound; 0 for other verdicts.
        open_centre: how far that can move the centre.
        open_inertia: how much it can change the inertia about any axis through the centre.
    """

    triangles: int
    format: str
    area: float
    solid: Moments | None
    verdict: str
    closed: bool
    open_edges: int
    basis: str
    bounds: FloatArray
    degenerate: int
    notes: tuple[str, ...] = ()
    crack_volume: float = 0.0
    crack_centre: float = 0.0
    crack_inertia: float = 0.0
    open_volume: float = 0.0
    open_centre: float = 0.0
    open_inertia: float = 0.0

    @property
    def diagonal(self) -> float:
        """Length of the bounding box's diagonal, file units."""
        return float(np.linalg.norm(self.bounds[1] - self.bounds[0]))


def survey_file(path: str | Path, progress: Progress | None = None) -> MeshSurvey:
    """Return the survey of an STL file; see MeshSurvey for units.

    Raises:
        MeshFileError: no sound STL file.
        Cancelled: progress was cancelled.
    """
    return survey_source(open_stl(path), progress)


def survey_triangles(triangles: ArrayLike, name: str = "mesh") -> MeshSurvey:
    """Return the survey of triangles (n, 3, 3), counter-clockwise seen from outside, any length unit.

    >>> faces = [[0, 2, 1], [0, 1, 3], [1, 2, 3], [0, 3, 2]]
    >>> corners = np.array([[0, 0, 0], [3, 0, 0], [0, 3, 0], [0, 0, 3]])
    >>> survey = survey_triangles(corners[faces])
    >>> survey.verdict, float(survey.solid.mass), survey.solid.centre.tolist()
    ('closed', 4.5, [0.75, 0.75, 0.75])
    >>> survey_triangles(corners[faces[:1]]).basis
    'no volume: the facets enclose none'

    Raises:
        ValueRefused: another shape, or no triangle.
        MeshFileError: a coordinate that is not finite.
    """
    return survey_source(ArraySource(triangles, name))


def count_shells(path: str | Path, progress: Progress | None = None) -> int:
    """Return of how many separate surfaces an STL file consists: facets that share no vertex with one another.

    Raises:
        MeshFileError: no sound STL file.
        Cancelled: progress was cancelled.
    """
    return shells_of(open_stl(path), progress)


def survey_source(source: TriangleSource, progress: Progress | None = None) -> MeshSurvey:
    """Return the survey of whatever hands out triangles in chunks.

    Raises:
        MeshFileError: as the source, or a coordinate that is not finite.
        Cancelled: progress was cancelled.
    """
    sums, reference = sum_up(source, progress)
    if sums.edge_sum == 0:
        return _judged(source, sums, reference, leaks=None)
    if isinstance(source, AsciiStl) and not source.ends_as_it_should():
        raise MeshFileError(
            'the text ends without "endsolid", and edges are open: it is cut short', where=source.name,
            read=f"{sums.triangles} facets", remedy=f"It was not copied or written to its end. {AGAIN}",
        )
    leaks = find_leaks(gathered(source, sums.triangles), sums.area)
    if leaks.fill is not None:
        sums = _closed_with(sums, reference, leaks.fill)
    return _judged(source, sums, reference, leaks)


def gathered(source: TriangleSource, count: int) -> NDArray[np.floating]:
    """Return all count triangles (n, 3, 3) of a source in memory, in the type they are stored in."""
    triangles = np.empty((count, 3, 3), source.dtype)
    done = 0
    for part, _ in source.chunks(CHUNK):
        triangles[done : done + len(part)] = part
        done += len(part)
    return triangles


def _closed_with(sums: Sums, reference: FloatArray, fill: FloatArray) -> Sums:
    """Return the sums with the integrals of fill (m, 3, 3) added; area, bounds and counts stay the file's."""
    integrator = Integrator(reference, np.dtype(np.float64))
    parts = [sums]
    for triangles, _ in ArraySource(fill).chunks(CHUNK):
        part = integrator.sums_of(triangles)
        # Fill lies between finite vertices.
        assert part is not None
        parts.append(part)
    whole = Sums.total(parts)
    return replace(sums, volume=whole.volume, first=whole.first, second=whole.second)


def _judged(source: TriangleSource, sums: Sums, reference: FloatArray, leaks: Leaks | None) -> MeshSurvey:
    size = float(np.linalg.norm(sums.bounds[1] - sums.bounds[0]))
    notes = list(_far_note(sums.bounds, size))
    verdict = leaks.verdict if leaks else CLOSED
    basis = COMPUTED
    if verdict == OPEN:
        basis = SEWN if leaks is not None and leaks.gap else ESTIMATED
    solid = None
    if leaks is not None and leaks.fill is None:
        basis = f"no volume: {leaks.reason}"
    elif abs(sums.volume) <= FLAT * sums.area * size:
        basis = "no volume: the facets enclose none"
    else:
        solid = sums.moments(reference)
        if sums.volume < 0:
            solid = -solid
            verdict = INSIDE_OUT if leaks is None else verdict
            notes.append("The facets faced inwards; they were turned to face outwards.")
    crack = _bounds(leaks.gap * sums.area if leaks else 0.0, sums, size)
    bulge = _bounds(leaks.bulge if leaks else 0.0, sums, size)
    return MeshSurvey(
        sums.triangles, source.format, sums.area, solid, verdict, leaks is None, leaks.open_edges if leaks else 0,
        basis, frozen(sums.bounds), sums.degenerate, tuple(notes), *crack, *bulge,
    )


def _far_note(bounds: FloatArray, size: float) -> Iterator[str]:
    offset = float(np.abs(bounds).max())
    if size > 0 and offset / size > FAR:
        yield (
            f"The part lies {offset / size:.0f} times its own size away from the origin: coordinates of about 7"
            " digits round its shape. Export it nearer to the origin."
        )


def _bounds(volume: float, sums: Sums, size: float) -> tuple[float, float, float]:
    """Return how much a volume whose place is not known can change volume, centre and inertia.

    Of cracks it is gap × area: no point of the true surface is farther than the gap from the facets. None of it lies
    farther from the centre than the diagonal.
    """
    if volume == 0 or sums.volume == 0:
        return 0.0, 0.0, 0.0
    return volume, volume * size / abs(sums.volume), volume * size**2
