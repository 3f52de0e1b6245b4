"""Where labels go: each beside what it names, none over another, none cut off by the frame."""

from __future__ import annotations

from dataclasses import dataclass
from itertools import product
from typing import TYPE_CHECKING, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Sequence

Box: TypeAlias = tuple[float, float, float, float]

_GAPS = (4.0, 10.0, 18.0, 30.0, 46.0, 70.0)
_SWINGS = (0.0, 45.0, -45.0, 90.0, -90.0, 135.0, -135.0, 180.0)


@dataclass(frozen=True)
class Wish:
    """A label that wants a place.

    Attributes:
        anchor: x and y of the point it names, px.
        size: width and height of its text, px.
        toward: the direction (x, y down; any length) in which it would best stand off the point.

    """

    anchor: tuple[float, float]
    size: tuple[float, float]
    toward: tuple[float, float]


def places(wishes: Sequence[Wish], frame: tuple[float, float], taken: Sequence[Box] = ()) -> list[Box | None]:
    """Return a box (left, top, width, height) for each label, the first ones first; None without room.

    Boxes lie inside the frame (width, height), and touch neither each other nor the boxes taken already.
    """
    occupied = list(taken)
    found: list[Box | None] = []
    for wish in wishes:
        box = next((box for box in _candidates(wish) if _inside(box, frame) and not _touches(box, occupied)), None)
        found.append(box)
        if box is not None:
            occupied.append(box)
    return found


def _candidates(wish: Wish) -> list[Box]:
    width, height = wish.size
    length = float(np.hypot(*wish.toward))
    angle = float(np.arctan2(wish.toward[1], wish.toward[0])) if length > 0 else -np.pi / 4
    boxes = []
    for gap, swing in product(_GAPS, _SWINGS):
        dx, dy = np.cos(angle + np.radians(swing)), np.sin(angle + np.radians(swing))
        # How far the box's middle is from its rim along the direction, so that the gap is left free.
        reach = min(0.5 * width / max(abs(dx), 1e-9), 0.5 * height / max(abs(dy), 1e-9))
        x, y = wish.anchor[0] + dx * (gap + reach), wish.anchor[1] + dy * (gap + reach)
        boxes.append((float(x - width / 2), float(y - height / 2), width, height))
    return boxes


def _inside(box: Box, frame: tuple[float, float]) -> bool:
    return box[0] >= 0 and box[1] >= 0 and box[0] + box[2] <= frame[0] and box[1] + box[3] <= frame[1]


def _touches(box: Box, others: Sequence[Box]) -> bool:
    return any(
        box[0] < other[0] + other[2]
        and other[0] < box[0] + box[2]
        and box[1] < other[1] + other[3]
        and other[1] < box[1] + box[3]
        for other in others
    )
