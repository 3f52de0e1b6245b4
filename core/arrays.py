"""The array types of the project, and the one way to hand an array out so that nobody changes it."""

from typing import TypeAlias

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray: TypeAlias = NDArray[np.float64]
IntArray: TypeAlias = NDArray[np.int64]
BoolArray: TypeAlias = NDArray[np.bool_]

__all__ = ["ArrayLike", "BoolArray", "FloatArray", "IntArray", "frozen"]


def frozen(values: ArrayLike) -> FloatArray:
    """Return values as a float64 array that refuses to be written to (a view or a copy, never the caller's own)."""
    array = np.array(values, dtype=np.float64)
    array.flags.writeable = False
    return array
