"""Handles for placing a line by hand: where they stand in the picture, and which of them the pointer is on. No Qt.

Three lines to move along, three squares to move in a plane, three arcs to turn about an axis. They keep their size on
the screen; one that is seen end on, or edge on, is left out, since dragging it would say nothing.
"""

from __future__ import annotations

from dataclasses import dataclass
from itertools import permutations, product
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

if TYPE_CHECKING:
    from collections.abc import Mapping

    from app.window.view.camera import Camera, Size
    from core.arrays import FloatArray
    from core.placement import Placement

GripKind: TypeAlias = Literal["along", "in", "about"]

# Length of the lines and of the frame's own marks, px; the rest relative to it.
REACH, FRAME_REACH = 104.0, 28.0
_START, _SQUARE, _ARC = 0.14, (0.34, 0.54), 0.8
_ARC_STEPS, _ARC_GAP = 16, 0.16
# A grip is met this near, px.
_NEAR = 7.0
# A line as short as this on the screen, px, and a plane that is seen as flat as this (sine) are left out.
_SHORTEST, _FLATTEST = 20.0, 0.2
AXES = (0, 1, 2)


@dataclass(frozen=True)
class Grip:
    """One handle: to move along an axis, to move in the plane square to it, or to turn about it (0, 1, 2: x, y, z)."""

    kind: GripKind
    axis: int

    @property
    def moves(self) -> tuple[int, ...]:
        """The axes whose amounts it changes."""
        return tuple(each for each in AXES if each != self.axis) if self.kind == "in" else (self.axis,)


KINDS: tuple[GripKind, ...] = ("in", "along", "about")
GRIPS: tuple[Grip, ...] = tuple(Grip(kind, axis) for kind, axis in product(KINDS, AXES))


@dataclass(frozen=True, eq=False)
class Handles:
    """What is placed: its own frame, and where handles stand for it.

    Attributes:
        frame: tf_document_line, of the first copy.
        middle: (3,) m, document frame; where the handles stand and what turns go about.
        directions: (3, 3) rows, unit, document frame: what the handles run along.
        own: whether those are the line's own.
    """

    frame: Placement
    middle: FloatArray
    directions: FloatArray
    own: bool = False

    def carried(self, motion: Placement) -> Handles:
        """Return the handles after the line was carried along."""
        turned = motion.turn_only(self.directions) if self.own else self.directions
        return Handles(motion @ self.frame, motion.apply(self.middle), turned, self.own)


def metres_at(camera: Camera, size: Size, point: FloatArray) -> float:
    """Return the length in m that a pixel covers at a point (3,); not positive behind the eye."""
    depth = float(camera.project(point, size)[2])
    return camera.metres_per_pixel(size) * (1.0 if camera.parallel else depth / camera.distance)


def paths_of(handles: Handles, camera: Camera, size: Size) -> dict[Grip, FloatArray]:
    """Return the handles that can be seen and dragged, as lines (k, 2) in pixels; those of squares are closed."""
    reach = REACH * metres_at(camera, size, handles.middle)
    if reach <= 0:
        return {}
    toward = camera.axes[2] if camera.parallel else camera.eye - handles.middle
    sines = np.abs(handles.directions @ toward) / np.linalg.norm(toward)
    found: dict[Grip, FloatArray] = {}
    for grip in GRIPS:
        points = handles.middle + reach * _line(grip, handles.directions)
        spots = camera.project(points, size)
        flat = grip.kind != "along" and sines[grip.axis] < _FLATTEST
        short = grip.kind == "along" and np.linalg.norm(spots[-1, :2] - spots[0, :2]) < _SHORTEST
        if not (flat or short or (spots[:, 2] <= 0).any()):
            found[grip] = spots[:, :2]
    return found


def _line(grip: Grip, directions: FloatArray) -> FloatArray:
    """Return a handle (k, 3) from its middle, relative to the reach."""
    first, second = directions[(grip.axis + 1) % 3], directions[(grip.axis + 2) % 3]
    if grip.kind == "along":
        return np.outer([_START, 1.0], directions[grip.axis])
    if grip.kind == "about":
        angles = np.linspace(_ARC_GAP, np.pi / 2 - _ARC_GAP, _ARC_STEPS + 1)[:, None]
        return np.asarray(_ARC * (np.cos(angles) * first + np.sin(angles) * second))
    low, high = _SQUARE
    corners = np.array([[low, low], [high, low], [high, high], [low, high], [low, low]])
    return np.asarray(corners @ np.stack([first, second]))


def grip_at(paths: Mapping[Grip, FloatArray], spot: tuple[float, float]) -> Grip | None:
    """Return the handle that a place in the picture (px) is on, the nearest of several; None where there is none."""
    there = np.array(spot)
    distances = {grip: _distance(path, there, filled=grip.kind == "in") for grip, path in paths.items()}
    nearest = min(distances, key=lambda grip: distances[grip], default=None)
    return nearest if nearest is not None and distances[nearest] <= _NEAR else None


def _distance(path: FloatArray, spot: FloatArray, *, filled: bool) -> float:
    """Return the distance in px from a line (k, 2), or from the area in it; there it is 0."""
    if filled and _inside(path, spot):
        return 0.0
    start, run = path[:-1], np.diff(path, axis=0)
    square = np.maximum((run * run).sum(axis=1), np.finfo(float).tiny)
    share = np.clip(((spot - start) * run).sum(axis=1) / square, 0.0, 1.0)
    return float(np.linalg.norm(start + share[:, None] * run - spot, axis=1).min())


def _inside(path: FloatArray, spot: FloatArray) -> bool:
    """Return whether a point lies in a convex closed line."""
    run, lever = np.diff(path, axis=0), spot - path[:-1]
    sides = run[:, 0] * lever[:, 1] - run[:, 1] * lever[:, 0]
    return bool((sides >= 0).all() or (sides <= 0).all())


def nearest_to_view(camera: Camera, directions: FloatArray) -> tuple[tuple[int, float], ...]:
    """Return for right, up and toward the viewer which of three directions (3, 3) is nearest, and its sign.

    Each direction is given once, so that the six keys of a picture reach all three.
    """
    cosines = camera.axes @ directions.T
    # Rounded, so that of directions equally near the first is taken.
    best = max(permutations(AXES), key=lambda order: round(sum(np.abs(cosines[AXES, order])), 9))
    return tuple((column, 1.0 if cosines[row, column] >= 0 else -1.0) for row, column in enumerate(best))
