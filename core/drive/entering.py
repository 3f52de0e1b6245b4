"""What is entered about balance beside numbers: its choices, and places to begin with."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING

import numpy as np

from core.drive.answer import rotor_of
from core.drive.balance import CorrectionPlane
from core.errors import ValueRefused

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly import Assembly
    from core.drive.balance import By
    from core.drive.settings import BalanceSettings, DriveSettings

# Places are proposed to whole mm: they are there to be changed.
_DECIMALS = 3
# Of the reach from the axis: a mass or a hole needs room within the rotor.
_WITHIN = 0.8
_SMALLEST = 1e-3


def with_rotor_shaft(settings: DriveSettings, shaft: str) -> DriveSettings:
    """Return the settings with another shaft whose bodies are the rotor.

    Raises:
        ValueRefused: the train has no such shaft.
    """
    return _with(settings, replace(settings.balance, shaft=shaft))


def with_bearings(settings: DriveSettings, bearings: tuple[float, float] | None) -> DriveSettings:
    """Return the settings with the bearings at these stations, m; None for none.

    Raises:
        ValueRefused: they are at one place.
    """
    typed = tuple((path, text) for path, text in settings.typed if not path.startswith("balance.bearings."))
    return replace(_with(settings, replace(settings.balance, bearings=bearings)), typed=typed)


def with_correcting(settings: DriveSettings, by: By) -> DriveSettings:
    """Return the settings with corrections by adding masses or by removing material."""
    return _with(settings, replace(settings.balance, by=by))


def usual_bearings(assembly: Assembly, settings: DriveSettings) -> tuple[float, float]:
    """Return stations (m) to begin with: where what there is begins and ends along the axis of the rotor.

    Raises:
        ValueRefused, EditRefused: there is no rotor.
    """
    return _ends(assembly, settings)[0]


def usual_plane(assembly: Assembly, settings: DriveSettings) -> CorrectionPlane:
    """Return a correction plane to begin with, at an end that has none yet.

    Raises:
        ValueRefused, EditRefused: there is no rotor.
    """
    ends, radius = _ends(assembly, settings)
    taken = [plane.station for plane in settings.balance.planes]
    return CorrectionPlane(next(end for end in (*ends, ends[1] + _SMALLEST) if end not in taken), radius)


def _ends(assembly: Assembly, settings: DriveSettings) -> tuple[tuple[float, float], float]:
    """Return the stations of both ends of everything along the axis of the rotor, and a radius within it."""
    rotor, bounds = rotor_of(assembly, settings), assembly.bounds
    if rotor is None or bounds is None:
        raise ValueRefused(
            "nothing that has mass turns with this shaft", where="balance", read=settings.balance.shaft,
            remedy="Add parts, or choose another shaft",
        )
    axis = rotor[1]
    corners: FloatArray = np.array([bounds[list(corner), range(3)] for corner in np.ndindex(2, 2, 2)]) - axis.point
    along = corners @ axis.unit
    # The middles of the faces, since the corners of the box are further out than anything in it.
    half = np.diag(np.ptp(corners, axis=0)) / 2
    faces = corners.mean(axis=0) + np.concatenate([half, -half])
    far = np.linalg.norm(faces - np.outer(faces @ axis.unit, axis.unit), axis=1).max()
    low, high = (round(float(end), _DECIMALS) for end in (along.min(), along.max()))
    return (low, high if high > low else low + _SMALLEST), max(round(_WITHIN * float(far), _DECIMALS), _SMALLEST)


def _with(settings: DriveSettings, balance: BalanceSettings) -> DriveSettings:
    return replace(settings, balance=balance)
