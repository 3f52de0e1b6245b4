"""Exact solid operations on closed shells: what two have in common, and what several are together."""

from __future__ import annotations

from typing import TYPE_CHECKING, Any

import numpy as np

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray


def solid_of(points: FloatArray, corners: IntArray, origin: FloatArray) -> Any | None:
    """Return a closed shell that faces outwards as a solid of the boolean library, or None where that refuses it.

    Args:
        points: (m, 3).
        corners: (n, 3) indices into points.
        origin: (3,) that the solid is seen from, near it for the sake of its digits.
    """
    import manifold3d

    used, local = np.unique(corners, return_inverse=True)
    mesh = manifold3d.Mesh64(
        np.ascontiguousarray(points[used] - origin), np.ascontiguousarray(local.reshape(corners.shape), dtype=np.uint64)
    )
    solid = manifold3d.Manifold(mesh)
    return solid if solid.status() == manifold3d.Error.NoError and not solid.is_empty() else None


def facets_of_solid(solid: Any) -> FloatArray:
    """Return the facets (n, 3, 3) of a solid."""
    mesh = solid.to_mesh64()
    triangles: FloatArray = mesh.vert_properties[:, :3][mesh.tri_verts.astype(np.int64)]
    return triangles


def united(solids: list[Any]) -> Any:
    """Return all that lies in one solid or another."""
    import manifold3d

    return manifold3d.Manifold.batch_boolean(solids, manifold3d.OpType.Add)
