"""Vectors (3, n) and symmetric tensors (6, n) with their components first: long rows are what NumPy is fast at."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray

# Elements of a symmetric tensor in the order of its six numbers.
PAIRS: Final = ((0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2))


def gathered(rows: FloatArray, index: IntArray) -> FloatArray:
    """Return rows (p, c) at index (n,) with their components first, (c, n)."""
    return np.ascontiguousarray(rows.take(index, axis=0).T)


def dot(a: FloatArray, b: FloatArray) -> FloatArray:
    """Return the scalar products (n,)."""
    return np.asarray(a[0] * b[0] + a[1] * b[1] + a[2] * b[2])


def length(a: FloatArray) -> FloatArray:
    """Return the lengths (n,)."""
    return np.asarray(np.sqrt(dot(a, a)))


def cross(a: FloatArray, b: FloatArray) -> FloatArray:
    """Return the vector products (3, n)."""
    return np.stack([a[1] * b[2] - a[2] * b[1], a[2] * b[0] - a[0] * b[2], a[0] * b[1] - a[1] * b[0]])


def applied(tensors: FloatArray, vectors: FloatArray) -> FloatArray:
    """Return T·v (3, n) for symmetric tensors (6, n) and vectors (3, n)."""
    xx, yy, zz, xy, xz, yz = tensors
    x, y, z = vectors
    return np.stack([xx * x + xy * y + xz * z, xy * x + yy * y + yz * z, xz * x + yz * y + zz * z])


def determinant(tensors: FloatArray) -> FloatArray:
    """Return the determinants (n,) of symmetric tensors (6, n)."""
    xx, yy, zz, xy, xz, yz = tensors
    return np.asarray(xx * (yy * zz - yz * yz) - xy * (xy * zz - xz * yz) + xz * (xy * yz - xz * yy))


def cofactors(tensors: FloatArray) -> FloatArray:
    """Return the cofactors (6, n) of symmetric tensors (6, n): the inverse times the determinant."""
    xx, yy, zz, xy, xz, yz = tensors
    return np.stack([
        yy * zz - yz * yz, xx * zz - xz * xz, xx * yy - xy * xy, xz * yz - xy * zz, xy * yz - xz * yy, xy * xz - xx * yz
    ])
