"""Gravity as it is entered: a direction of the document and a size."""

from __future__ import annotations

import math
from types import MappingProxyType
from typing import TYPE_CHECKING, Final

from core.drive.fields import with_numbers
from core.drive.refusals import refuse_if_negative
from core.errors import EditRefused

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.drive.settings import DriveSettings
    from core.placement import Triple

# Which way things fall, by the words that are shown.
DOWN: Final[Mapping[str, Triple]] = MappingProxyType({
    "−z": (0.0, 0.0, -1.0), "+z": (0.0, 0.0, 1.0), "−y": (0.0, -1.0, 0.0),
    "+y": (0.0, 1.0, 0.0), "−x": (-1.0, 0.0, 0.0), "+x": (1.0, 0.0, 0.0),
})


def size_of_gravity(settings: DriveSettings) -> float:
    """Return how strong gravity is, m/s²."""
    return math.hypot(*settings.gravity)


def direction_of_gravity(settings: DriveSettings) -> str:
    """Return which way things fall, in the words of DOWN; "" for any other way, or without gravity."""
    size = size_of_gravity(settings)
    for words, direction in DOWN.items():
        if size and settings.gravity == tuple(size * each for each in direction):
            return words
    return ""


def with_gravity_along(settings: DriveSettings, words: str) -> DriveSettings:
    """Return the settings with gravity of the same size another way, in the words of DOWN.

    Raises:
        EditRefused: there is no gravity that could be turned.
    """
    size = size_of_gravity(settings)
    if not size:
        raise EditRefused("gravity of no size has no direction", where="gravity", remedy="Give its size first")
    return _with_gravity(settings, tuple(size * each for each in DOWN[words]))


def with_gravity_size(settings: DriveSettings, size: float) -> DriveSettings:
    """Return the settings with gravity of another size (m/s²) the same way; down −z where there was none.

    Raises:
        ValueRefused: the size is less than 0.
    """
    refuse_if_negative(size, "size", "gravity")
    before = size_of_gravity(settings)
    way = tuple(each / before for each in settings.gravity) if before else DOWN["−z"]
    return _with_gravity(settings, tuple(size * each for each in way))


def _with_gravity(settings: DriveSettings, gravity: tuple[float, ...]) -> DriveSettings:
    # A component of −0.0 would be written as such.
    return with_numbers(settings, {f"gravity.{at}": value + 0.0 for at, value in enumerate(gravity)})

