"""What the census of its mesh found on a part, as checks beside the others."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

from core.assembly.bodies import MeshBody
from core.mesh.mesh_check import check_census

if TYPE_CHECKING:
    from core.assembly.nodes import Part
    from core.checks import Check
    from core.mesh.census import Census

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
