"""Triangles as the bytes of a binary STL file."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from core.errors import MeshFileError
from core.mesh.stl_faults import COARSER, HEADER, MOST_FACETS, RECORD

if TYPE_CHECKING:
    from numpy.typing import NDArray

_LAYOUT = np.dtype([("normal", "<f4", 3), ("corners", "<f4", (3, 3)), ("attribute", "<u2")])
_LARGEST = float(np.finfo(np.float32).max)


def stl_of_triangles(triangles: NDArray[np.floating], name: str) -> bytes:
    """Return triangles (n, 3, 3) as a binary STL file with stored normals of zero.

    Coordinates are rounded to float32, about seven digits. What was one point stays one, so that no cracks open;
    points closer together than that fall together, and facets between them lose their area.

    Raises:
        MeshFileError: more facets than are taken, or coordinates that are not finite or too large for the format.
    """
    if len(triangles) > MOST_FACETS:
        what = f"more than {MOST_FACETS} facets are not taken"
        raise MeshFileError(what, where=name, read=f"{len(triangles)} facets", remedy=COARSER)
    if not (np.abs(triangles) <= _LARGEST).all():
        raise MeshFileError(
            "a coordinate is not a finite number of the size that a mesh file can hold", where=name,
            remedy="Export the part again",
        )
    data = bytearray(HEADER + RECORD * len(triangles))
    data[80:HEADER] = len(triangles).to_bytes(4, "little")
    np.frombuffer(data, _LAYOUT, offset=HEADER)["corners"] = triangles
    return bytes(data)
