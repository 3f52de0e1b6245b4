"""A stop to begin with: from the highest speed of the duty, by a torque that does stop it."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING, Final

from core.drive.stopping import StopCase

if TYPE_CHECKING:
    from core.drive.answer import DriveAnswer

# Without a duty: one turn a second. With weight out of balance: twice the torque that holds it.
SPEED: Final = 2 * math.pi
MARGIN: Final = 2.0


def first_stop(answer: DriveAnswer) -> StopCase:
    """Return a stop within about a second, of a torque rounded up to a single figure."""
    speed = answer.load.peak_speed if answer.load is not None else SPEED
    torque = MARGIN * abs(answer.worst.push) + answer.reflected_load.inertia * speed
    if torque <= 0:
        return StopCase(speed, 1.0)
    power = 10.0 ** math.floor(math.log10(torque))
    return StopCase(speed, math.ceil(torque / power) * power)
