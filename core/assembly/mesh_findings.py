"""What the census of its mesh found on a part, as checks beside the others."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.assembly.bodies import MeshBody
from core.mesh.mesh_check import check_census

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Part
    from core.checks import Check
    from core.mesh.census import Census, MeshFinding

# Up to this many facets the census takes no time that anybody notices; above, whoever wants it takes it beforehand.
CENSUS_AT_ONCE: Final = 5_000


def census_checks(part: Part) -> tuple[Check, ...]:
    """Return the findings on a mesh part that make its values wrong or doubtful, as failed checks.

    Of a large mesh only what is known: nothing until somebody has taken its census (MeshAsset.census).
    """
    if not isinstance(part.body, MeshBody):
        return ()
    census = census_of(part.body)
    if census is None:
        return ()
    return check_census(census, part.name)


def census_of(body: MeshBody) -> Census | None:
    """Return the census of a mesh body where it is at hand or costs next to nothing."""
    if body.asset.survey.triangles <= CENSUS_AT_ONCE:
        return body.asset.census()
    return body.asset.census_at_hand


@dataclass(frozen=True)
class Surplus:
    """What a mesh part counts too much because of a finding, of one copy.

    Attributes:
        volume: m³.
        mass: kg; None while nothing says what the part weighs, and where it was weighed.
        share: of the part's own inertia parallel to the drive axis.
    """

    volume: float
    mass: float | None
    share: float


def surplus_of(assembly: Assembly, part: Part, finding: MeshFinding) -> Surplus | None:
    """Return what a finding says is counted too much; None where it says nothing of the kind, or nobody can tell."""
    body = part.body
    if not isinstance(body, MeshBody) or finding.extra is None or body.faceted is None:
        return None
    extra = finding.extra.enlarged(body.metres_per_unit)
    if float(extra.mass) <= 0:
        return None
    # The extra material turns about the whole part's centre of mass, along the drive axis as the part stands.
    along = part.standing.turn[0].T @ assembly.drive_axis.unit
    share = extra.inertia_about_axis(body.faceted.centre, along) / body.faceted.own_inertia_along(along)
    mass = None
    if part.single is not None and part.basis != "weighed":
        mass = float(extra.mass) * float(part.single.mass / body.faceted.mass)
    return Surplus(float(extra.mass), mass, float(share))


def facet_edges(assembly: Assembly, key: str, facets: IntArray) -> FloatArray:
    """Return the edges (3·k, 2, 3) m of facets (k,) of a mesh part, on its first copy, in the document frame."""
    table = assembly.table
    index = next((at for at, part in enumerate(table.parts) if part.key == key), -1)
    body = table.parts[index].body if index >= 0 else None
    if not isinstance(body, MeshBody):
        return np.zeros((0, 2, 3))
    corners = np.asarray(body.asset.triangles[facets], dtype=np.float64) * body.metres_per_unit
    edges = np.stack([corners, np.roll(corners, -1, axis=1)], axis=2).reshape(-1, 2, 3)
    row = int(np.flatnonzero(table.owner == index)[0])
    return np.asarray(edges @ table.standing.turn[row].T + table.standing.shift[row])
