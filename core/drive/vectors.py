"""The unbalance of a rotor as vectors to draw: where each stands along the axis, and as arrows in space."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, Final

import numpy as np

from core.arrays import FloatArray, frozen
from core.drive.axis import across

if TYPE_CHECKING:
    from core.assembly import DriveAxis
    from core.drive.answer import BalanceAnswer
    from core.drive.settings import BalanceSettings

TWO_PLANES: Final = 2


@dataclass(frozen=True, eq=False)
class UnbalanceVector:
    """One unbalance that has a place along the axis.

    Attributes:
        name: "static", "bearing 1", "plane 2".
        station: m along the axis from its point.
        unbalance: (2,) kg·m, across the axis; it points to the heavy side.
        permitted: kg·m; None where nothing says.
    """

    name: str
    station: float
    unbalance: FloatArray
    permitted: float | None = None

    @property
    def amount(self) -> float:
        """Its size, kg·m."""
        return float(np.hypot(*self.unbalance))


def vectors_of(answer: BalanceAnswer, wanted: BalanceSettings) -> tuple[UnbalanceVector, ...]:
    """Return the static unbalance at the centre of mass, and that in planes at the bearings and for corrections."""
    whole = None if answer.allowed is None else answer.allowed.unbalance
    found = [UnbalanceVector("static", answer.found.station, answer.found.static, whole)]
    if wanted.bearings is not None and answer.in_bearings is not None:
        each = answer.allowed_in_bearings or (None, None)
        for at, station in enumerate(wanted.bearings):
            found.append(UnbalanceVector(f"bearing {at + 1}", station, answer.in_bearings[at], each[at]))
    if len(wanted.planes) == TWO_PLANES:
        stations = [plane.station for plane in wanted.planes]
        for at, there in enumerate(answer.found.in_planes(*stations)):
            found.append(UnbalanceVector(f"plane {at + 1}", stations[at], there))
    return tuple(found)


def arrow_of(vector: UnbalanceVector, axis: DriveAxis, metres_per_unbalance: float) -> tuple[FloatArray, FloatArray]:
    """Return start and end (3,) m of an arrow from the axis to the heavy side, in the frame of the axis.

    Args:
        vector: what it stands for.
        axis: the axis of the rotor.
        metres_per_unbalance: length of the arrow, m for each kg·m.
    """
    start = np.asarray(axis.point) + vector.station * axis.unit
    return frozen(start), frozen(start + metres_per_unbalance * (vector.unbalance @ np.stack(across(axis))))
