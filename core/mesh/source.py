"""Where triangles come from: something that hands them out in chunks, as often as it is asked."""

from __future__ import annotations

from typing import TYPE_CHECKING, Protocol

import numpy as np

from core.errors import ValueRefused

if TYPE_CHECKING:
    from collections.abc import Iterator

    from numpy.typing import ArrayLike, NDArray


class TriangleSource(Protocol):
    """Triangles in chunks.

    Attributes:
        name: what messages call it, such as a file's name.
        format: "binary STL", "ASCII STL" or "triangles".
        dtype: of the coordinates, float32 or float64.
        steps: how many progress steps a pass over it takes.
    """

    @property
    def name(self) -> str:
        """What messages call it."""
        ...

    @property
    def format(self) -> str:
        """What kind of file it is."""
        ...

    @property
    def dtype(self) -> np.dtype[np.floating]:
        """Type of the coordinates."""
        ...

    @property
    def steps(self) -> int:
        """Progress steps of one pass."""
        ...

    def chunks(self, most: int) -> Iterator[tuple[NDArray[np.floating], int]]:
        """Yield (triangles (n, 3, 3) with n ≤ most, progress steps they took).

        Each array is valid until the next one is asked for.
        """
        ...


class ArraySource:
    """Triangles that are already in memory.

    Args:
        triangles: (n, 3, 3) corners; float32 is kept, anything else becomes float64.
        name: what messages call it.
        kind: of file that they were read from.

    Raises:
        ValueRefused: another shape, or no triangle.
    """

    def __init__(self, triangles: ArrayLike, name: str = "mesh", kind: str = "triangles") -> None:
        self.name = name
        self.format = kind
        self._triangles = triangles_of(triangles, name)

    @property
    def dtype(self) -> np.dtype[np.floating]:
        """Type of the coordinates."""
        return self._triangles.dtype

    @property
    def steps(self) -> int:
        """Progress steps of one pass: one per triangle."""
        return len(self._triangles)

    def chunks(self, most: int) -> Iterator[tuple[NDArray[np.floating], int]]:
        """Yield (triangles (n, 3, 3), n) in order."""
        for start in range(0, len(self._triangles), most):
            part = self._triangles[start : start + most]
            yield part, len(part)


def triangles_of(triangles: ArrayLike, name: str = "mesh") -> NDArray[np.floating]:
    """Return triangles (n, 3, 3) as an array; float32 is kept, anything else becomes float64.

    Raises:
        ValueRefused: another shape, or no triangle.
    """
    array = np.asarray(triangles)
    if array.shape[1:] != (3, 3) or len(array) == 0:
        raise ValueRefused(
            "a mesh needs triangles of three points", where=name, read=f"an array of shape {array.shape}",
            remedy="Give an array of shape (n, 3, 3) with n of at least 1",
        )
    return array if array.dtype == np.float32 else array.astype(np.float64)
