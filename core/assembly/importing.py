"""Meshes on their way into an assembly: one line per file, standing where asked, and noticed when it changes."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.assembly.bodies import Counts, MeshBody
from core.assembly.nodes import Driver, Group, Node, Part
from core.placement import Pose

if TYPE_CHECKING:
    from collections.abc import Sequence

    from core.arrays import FloatArray
    from core.assembly.assembly import Assembly
    from core.assembly.axis import DriveAxis
    from core.mesh import MeshAsset

# At the file's own origin; the middle of the box around it on the drive axis; its centre of mass on the drive axis.
Standing: TypeAlias = Literal["file", "middle", "mass"]


@dataclass(frozen=True)
class Import:
    """How a file's bodies are to become a line.

    Attributes:
        name: of the line.
        metres_per_unit: the length unit of the file.
        driver: what says the mass of each body.
        counts: as faceted, or with curvature restored where that can be done.
        standing: where the line stands.
        origin: the path it was read from, so that a change of the file can be noticed.
    """

    name: str
    metres_per_unit: float
    driver: Driver
    counts: Counts = "faceted"
    standing: Standing = "file"
    origin: str = ""


def imported(assembly: Assembly, assets: Sequence[MeshAsset], how: Import) -> Node:
    """Return the line for the bodies of one file: a part, or a group of parts where there are several.

    Raises:
        EditRefused, MaterialError: the driver does not fit.
    """
    from core.mesh import can_restore

    bodies = [
        MeshBody(asset, how.metres_per_unit, how.counts if can_restore(asset.survey) else "faceted", how.origin)
        for asset in assets
    ]
    key = assembly.fresh_key()
    name = assembly.fresh_name(how.name)
    pose = Pose(_shift(bodies, how.standing, assembly.drive_axis))
    if len(bodies) == 1:
        return Part(key, name, bodies[0], how.driver, pose)
    parts = tuple(
        Part(f"{key}.{number}", body.asset.name, body, how.driver) for number, body in enumerate(bodies, start=1)
    )
    return Group(key, name, parts, pose)


def _shift(bodies: list[MeshBody], standing: Standing, axis: DriveAxis) -> tuple[float, float, float]:
    """Return by how much, m, the bodies are moved across the drive axis to stand as asked."""
    if standing == "file":
        return (0.0, 0.0, 0.0)
    unit = axis.unit
    away = _middle(bodies, standing) - np.asarray(axis.point)
    across = away - (away @ unit) * unit
    return (-float(across[0]), -float(across[1]), -float(across[2]))


def _middle(bodies: list[MeshBody], standing: Standing) -> FloatArray:
    solids = [body.solid for body in bodies if body.solid is not None]
    if standing == "mass" and solids:
        whole = solids[0]
        for solid in solids[1:]:
            whole = whole + solid
        return whole.centre
    low = np.min([body.bounds[0] for body in bodies], axis=0)
    high = np.max([body.bounds[1] for body in bodies], axis=0)
    return np.asarray(0.5 * (low + high))


@dataclass(frozen=True)
class Change:
    """A mesh part whose file holds something else than when it was imported.

    Attributes:
        key, name: of the part.
        asset: the file's mesh as it is now.
        volume, inertia: new over old, less one, as faceted; None where one of them bounds no volume. The inertia is
            about the part's own centre of mass, parallel to the drive axis, at equal density.
        shift: how far the centre of volume has moved, m.
    """

    key: str
    name: str
    asset: MeshAsset
    volume: float | None
    inertia: float | None
    shift: float | None


def change_of(assembly: Assembly, part: Part, asset: MeshAsset) -> Change | None:
    """Return what a newly read mesh changes of a mesh part; None where it is the same file."""
    body = part.body
    if not isinstance(body, MeshBody) or asset.sha256 == (body.asset.source or body.asset.sha256):
        return None
    old, new = body.faceted, MeshBody(asset, body.metres_per_unit).faceted
    if old is None or new is None:
        return Change(part.key, part.name, asset, None, None, None)
    along = part.standing.turn[0].T @ assembly.drive_axis.unit
    return Change(
        part.key, part.name, asset, float(new.mass / old.mass) - 1,
        float(new.own_inertia_along(along) / old.own_inertia_along(along)) - 1,
        float(np.linalg.norm(new.centre - old.centre)),
    )


def taken_anew(assembly: Assembly, change: Change) -> Assembly:
    """Return the assembly with a part's mesh replaced by the one its file holds now; what was mended is not."""
    from core.mesh import can_restore

    part = assembly.node(change.key)
    if not isinstance(part, Part) or not isinstance(part.body, MeshBody):
        return assembly
    counts: Counts = part.body.counts if can_restore(change.asset.survey) else "faceted"
    return assembly.replaced(replace(part, body=replace(part.body, asset=change.asset, counts=counts)))
