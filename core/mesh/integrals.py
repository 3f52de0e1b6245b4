"""Volume, first and second moments and area of a mesh, as sums over its triangles.

For a triangle (a, b, c) seen from a reference point near the body, with d = a·(b×c) and s = a + b + c:
V = Σ d/6, ∫r = Σ d·s/24, ∫r rᵀ = Σ d·(aaᵀ + bbᵀ + ccᵀ + ssᵀ)/120. (Blow & Binstock 2004; Tonon 2004;
Eberly, "Polyhedral Mass Properties (Revisited)".) Here 3·d comes as s·n with n = (b−a)×(c−a), which is twice the
area vector too.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import fsum
from typing import TYPE_CHECKING

import numpy as np

from core.mesh.closure import EdgeSum
from core.moments import Moments

if TYPE_CHECKING:
    from collections.abc import Iterable

    from numpy.typing import NDArray

    from core.arrays import FloatArray

# Triangles per chunk: enough that NumPy's cost per call is small, few enough that the buffers (about 350 bytes a
# triangle) stay in the cache, and no dot product longer than 10,000, from where the linear-algebra library starts
# threads that cost more here than they give.
CHUNK = 10_000


@dataclass(frozen=True, eq=False)
class Sums:
    """What a chunk of triangles (or all of them) adds up to, in file units about a reference point.

    Attributes:
        volume: signed; only the sum over a closed mesh is one.
        first: (3,) ∫r dV. second: (3, 3) ∫r rᵀ dV. Both about the reference point.
        area: of the triangles.
        bounds: (2, 3) lowest and highest coordinates, as in the file.
        degenerate: triangles without area.
        edge_sum: modulo 2⁶⁴; 0 for a closed mesh.
        triangles: how many.
    """

    volume: float
    first: FloatArray
    second: FloatArray
    area: float
    bounds: FloatArray
    degenerate: int
    edge_sum: int
    triangles: int

    @classmethod
    def total(cls, parts: Iterable[Sums]) -> Sums:
        """Return the parts added up, each number with a single rounding; at least one part."""
        all_parts = list(parts)
        return cls(
            volume=fsum(part.volume for part in all_parts),
            first=_fsum_arrays([part.first for part in all_parts]),
            second=_fsum_arrays([part.second for part in all_parts]),
            area=fsum(part.area for part in all_parts),
            bounds=np.stack([
                np.min([part.bounds[0] for part in all_parts], axis=0),
                np.max([part.bounds[1] for part in all_parts], axis=0),
            ]),
            degenerate=sum(part.degenerate for part in all_parts),
            edge_sum=sum(part.edge_sum for part in all_parts) % 2**64,
            triangles=sum(part.triangles for part in all_parts),
        )

    def moments(self, reference: FloatArray) -> Moments:
        """Return the volume (not 0) as mass with its centre and central second moment, in the file's frame."""
        lever = self.first / self.volume
        return Moments(self.volume, reference + lever, self.second - self.volume * np.outer(lever, lever))


class Integrator:
    """The sums over chunks of triangles about one reference point, in buffers made once.

    Args:
        reference: (3,) a point near the body, such as its first vertex.
        dtype: float32 or float64, as the coordinates are stored.
        most: how many triangles a chunk holds at most.
    """

    def __init__(self, reference: FloatArray, dtype: np.dtype[np.floating], most: int = CHUNK) -> None:
        self._reference = np.asarray(reference, dtype=np.float64)[:, None]
        self._stored = np.empty(9 * most, dtype)
        self._corners = np.empty((3, 3 * most))
        self._forms = np.empty((3, 3 * most))
        self._spare = np.empty(3 * most)
        self._rows = np.empty((2, most))
        self._edges = EdgeSum(most, words=dtype.itemsize // 4)

    def take(self, triangles: NDArray[np.floating]) -> Sums | None:
        """Return the sums of one chunk (n, 3, 3), n ≥ 1, or None where a coordinate is not finite."""
        count = len(triangles)
        stored = self._stored[: 9 * count].reshape(9, count)
        np.copyto(stored, triangles.reshape(count, 9).T)
        low, high = stored.min(axis=1), stored.max(axis=1)
        if not (np.isfinite(low).all() and np.isfinite(high).all()):
            return None
        # Adding +0.0 makes −0.0 the same vertex as 0.0 and leaves every other number alone.
        np.add(stored, 0.0, out=stored)
        corners = self._corners[:, : 3 * count].reshape(3, 3, count)
        np.subtract(stored.reshape(3, 3, count), self._reference, out=corners)
        area, degenerate = self._area(corners)
        volume, first, second = self._integrals(count)
        return Sums(
            volume, first, second, area,
            bounds=np.stack([low.reshape(3, 3).min(axis=0), high.reshape(3, 3).max(axis=0)]).astype(float),
            degenerate=degenerate, edge_sum=self._edges.of(stored), triangles=count,
        )

    def _area(self, corners: FloatArray) -> tuple[float, int]:
        """Fill the forms s, p, f and the weights s·n; return the area and how many triangles have none.

        With e = b−a and g = c−a these are s = a+b+c, p = e−g, f = e+g, and then
        aaᵀ + bbᵀ + ccᵀ + ssᵀ = 4/3·ssᵀ + 1/2·ppᵀ + 1/6·ffᵀ: three products in place of four.
        """
        count = corners.shape[2]
        s, p, f = self._forms[:, : 3 * count].reshape(3, 3, count)
        first, second, third = corners
        normals = self._spare[: 3 * count].reshape(3, count)
        weights, row = self._rows[:, :count]
        np.add(first, second, out=s)
        np.add(s, third, out=s)
        np.subtract(second, first, out=second)
        np.subtract(third, first, out=third)
        for axis in range(3):
            after, last = (axis + 1) % 3, (axis + 2) % 3
            np.multiply(second[after], third[last], out=normals[axis])
            np.multiply(second[last], third[after], out=row)
            np.subtract(normals[axis], row, out=normals[axis])
        np.subtract(second, third, out=p)
        np.add(second, third, out=f)
        np.einsum("in,in->n", normals, normals, out=row)
        np.sqrt(row, out=row)
        np.einsum("in,in->n", normals, s, out=weights)
        return 0.5 * float(row.sum()), count - int(np.count_nonzero(row))

    def _integrals(self, count: int) -> tuple[float, FloatArray, FloatArray]:
        """Return V, ∫r and ∫r rᵀ of the cones from the reference point to the triangles; s·n is 3·d."""
        weights = self._rows[0, :count]
        weighted = self._spare[: 3 * count].reshape(3, count)
        first, second = np.empty(3), np.zeros((3, 3))
        forms = self._forms[:, : 3 * count].reshape(3, 3, count)
        for form, factor in zip(forms, (4 / 3, 1 / 2, 1 / 6), strict=True):
            np.multiply(form, weights, out=weighted)
            if factor > 1:
                first = weighted.sum(axis=1)
            for row in range(3):
                for column in range(row + 1):
                    # Dot products: a matrix product of this shape takes three times as long.
                    second[row, column] += factor * np.dot(weighted[row], form[column])
        second[np.triu_indices(3, 1)] = second.T[np.triu_indices(3, 1)]
        return float(weights.sum()) / 18, first / 72, second / 360


def _fsum_arrays(arrays: list[FloatArray]) -> FloatArray:
    columns = np.stack(arrays).reshape(len(arrays), -1).T.tolist()
    return np.array([fsum(column) for column in columns]).reshape(arrays[0].shape)
