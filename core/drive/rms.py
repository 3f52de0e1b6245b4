"""RMS of torques or powers that are given as they are, stretch by stretch, not worked out from a motion."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from core.errors import ValueRefused

if TYPE_CHECKING:
    from core.arrays import ArrayLike


def rms_of_ramps(times: ArrayLike, first: ArrayLike, last: ArrayLike, weights: ArrayLike = 1.0) -> float:
    """Return √(Σ t·(a² + a·b + b²)/3 / Σ w·t), exact for values that go straight from a to b.

    Args:
        times: (n,) of the stretches, any unit.
        first: (n,) value at the start of each stretch, any unit.
        last: (n,) value at its end.
        weights: (n,) or one: how much of its time a stretch counts for cooling; below 1 for a motor that cools less
            while it stands.

    Raises:
        ValueRefused: no stretches, or one of no time.

    >>> round(rms_of_ramps([10, 20], [200, 100], [200, 100]), 3)
    141.421
    """
    t, a, b = (np.asarray(values, dtype=float) for values in (times, first, last))
    if not t.size or not (t > 0).all():
        raise ValueRefused("a stretch of a duty takes some time", where="RMS", read=f"{t.tolist()}")
    squares = float((t * (a * a + a * b + b * b)).sum()) / 3
    return math.sqrt(squares / float((np.asarray(weights, dtype=float) * t).sum()))
