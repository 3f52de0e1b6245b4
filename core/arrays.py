"""The array types of the project, and the one way to hand an array out so that nobody changes it."""

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray: TypeAlias = NDArray[np.float64]
IntArray: TypeAlias = NDArray[np.int64]
BoolArray: TypeAlias = NDArray[np.bool_]

__all__ = ["ArrayLike", "BoolArray", "FloatArray", "IntArray", "frozen", "settled"]


def frozen(values: ArrayLike) -> FloatArray:
    """Return values as a float64 array that refuses to be written to (a view or a copy, never the caller's own)."""
    array = np.array(values, dtype=np.float64)
    array.flags.writeable = False
    return array


# Sums of many terms are off by some units in the last place of the largest term; this far below it, a value is 0.
ROUND_OFF = 1e-13


def settled(values: ArrayLike, scale: ArrayLike) -> FloatArray:
    """Return values with those set to 0 that are only the round-off of terms as large as scale (same unit).

    >>> settled([1e-18, 0.2], 0.15).tolist()
    [0.0, 0.2]
    """
    array = np.asarray(values, dtype=np.float64)
    return np.where(np.abs(array) <= ROUND_OFF * np.asarray(scale, dtype=np.float64), 0.0, array)
