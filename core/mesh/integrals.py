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


# Of the three products that make up the second moment; see Integrator._area.
_FACTORS = np.array([4 / 3, 1 / 2, 1 / 6])


@dataclass(frozen=True, eq=False)
class Sums:
    """What a chunk of triangles (or all of them) adds up to, in file units about a reference point.

    Attributes:
        volume: signed; only the sum over a closed mesh is one.
        first: (3,) ∫r dV. second: (3, 3) ∫r rᵀ dV. Both about the reference point.
        area: of the triangles.
        low, high: (3, 3) lowest and highest coordinates of each corner (row), as in the file.
        degenerate: triangles without area.
        edge_sum: modulo 2⁶⁴; 0 for a closed mesh.
        triangles: how many.
    """

    volume: float
    first: FloatArray
    second: FloatArray
    area: float
    low: NDArray[np.floating]
    high: NDArray[np.floating]
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
            low=np.min([part.low for part in all_parts], axis=0),
            high=np.max([part.high for part in all_parts], axis=0),
            degenerate=sum(part.degenerate for part in all_parts),
            edge_sum=sum(part.edge_sum for part in all_parts) % 2**64,
            triangles=sum(part.triangles for part in all_parts),
        )

    @property
    def bounds(self) -> FloatArray:
        """Lowest and highest coordinates (2, 3)."""
        return np.stack([self.low.min(axis=0), self.high.max(axis=0)]).astype(np.float64)

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
        self._memory = np.empty(9 * most, dtype), np.empty(29 * most)
        self._edges = EdgeSum(most, words=dtype.itemsize // 4)
        self._arrange(most)

    def _arrange(self, count: int) -> None:
        """Lay the buffers out for chunks of count triangles; done anew only where the size changes."""
        single, double = self._memory
        self._stored = single[: 9 * count].reshape(3, 3, count)
        corners, forms, weighted, rows = np.split(double[: 29 * count].reshape(29, count), (9, 18, 27))
        self._corners, self._forms = corners.reshape(3, 3, count), forms.reshape(3, 3, count)
        self._weighted = weighted.reshape(3, 3, count)
        self._weights, self._row = rows
        self._count = count

    def sums_of(self, triangles: NDArray[np.floating]) -> Sums | None:
        """Return the sums of one chunk (n, 3, 3), n ≥ 1, or None where a coordinate is not finite."""
        if len(triangles) != self._count:
            self._arrange(len(triangles))
        stored = self._stored
        np.copyto(stored, triangles.transpose(1, 2, 0))
        low, high = np.minimum.reduce(stored, axis=2), np.maximum.reduce(stored, axis=2)
        if not (np.isfinite(low).all() and np.isfinite(high).all()):
            return None
        # Adding +0.0 makes −0.0 the same vertex as 0.0 and leaves every other number alone.
        np.add(stored, 0.0, out=stored)
        area, degenerate = self._area()
        volume, first, second = self._integrals()
        edge_sum = self._edges.of(stored.reshape(9, self._count))
        return Sums(volume, first, second, area, low, high, degenerate, edge_sum, self._count)

    def first_not_finite(self) -> tuple[int, int, int, float]:
        """Return the first coordinate of the last chunk that is not finite: facet, corner, axis and what it is."""
        stored = self._stored.transpose(2, 0, 1)
        facet, corner, axis = np.argwhere(~np.isfinite(stored))[0].tolist()
        return facet, corner, axis, float(stored[facet, corner, axis])

    def _area(self) -> tuple[float, int]:
        """Fill the forms s, p, f and the weights s·n; return the area and how many triangles have none.

        With e = b−a and g = c−a these are s = a+b+c, p = e−g, f = e+g, and then
        aaᵀ + bbᵀ + ccᵀ + ssᵀ = 4/3·ssᵀ + 1/2·ppᵀ + 1/6·ffᵀ: three products in place of four.
        """
        corners, (s, p, f), normals, row = self._corners, self._forms, self._weighted[0], self._row
        first, e, g = corners
        np.subtract(self._stored, self._reference, out=corners)
        np.add(first, e, out=s)
        np.add(s, g, out=s)
        np.subtract(corners[1:], first, out=corners[1:])
        for axis, after, last in ((0, 1, 2), (1, 2, 0), (2, 0, 1)):
            normal = normals[axis]
            np.multiply(e[after], g[last], out=normal)
            np.multiply(e[last], g[after], out=row)
            np.subtract(normal, row, out=normal)
        np.subtract(e, g, out=p)
        np.add(e, g, out=f)
        np.einsum("in,in->n", normals, s, out=self._weights)
        np.einsum("in,in->n", normals, normals, out=row)
        np.sqrt(row, out=row)
        return 0.5 * float(np.add.reduce(row)), self._count - int(np.count_nonzero(row))

    def _integrals(self) -> tuple[float, FloatArray, FloatArray]:
        """Return V, ∫r and ∫r rᵀ of the cones from the reference point to the triangles; s·n is 3·d."""
        forms, weighted = self._forms, self._weighted
        np.multiply(forms, self._weights, out=weighted)
        # Dot products by rows: a matrix product of this shape takes three times as long.
        xx, yy, zz = _FACTORS @ np.vecdot(weighted, forms)
        xy, yz = _FACTORS @ np.vecdot(weighted[:, 1:], forms[:, :2])
        xz = _FACTORS @ np.vecdot(weighted[:, 2], forms[:, 0])
        second = np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]])
        volume, first = float(np.add.reduce(self._weights)), np.add.reduce(weighted[0], axis=1)
        return volume / 18, first / 72, second / 360


def _fsum_arrays(arrays: list[FloatArray]) -> FloatArray:
    columns = np.stack(arrays).reshape(len(arrays), -1).T.tolist()
    return np.array([fsum(column) for column in columns]).reshape(arrays[0].shape)
