"""What dragging a handle comes to: an amount along or about the handles' directions, and the motion it is. No Qt."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.placement import Placement, Triple
from core.pointing import angle_about, met_on_plane, nearest_on_axis, snapped, unwound

if TYPE_CHECKING:
    from app.window.view.camera import Camera, Size
    from app.window.view.handles import Grip, Handles
    from core.arrays import FloatArray

NOTHING: Triple = (0.0, 0.0, 0.0)


@dataclass(frozen=True)
class Amount:
    """How far a line is moved along the handles' directions, m, or turned about them, rad."""

    turning: bool
    values: Triple = NOTHING

    def motion(self, handles: Handles) -> Placement:
        """Return the motion in the document frame; turns go about the handles' middle, x first, then y, then z."""
        if not self.turning:
            return Placement(np.eye(3), np.array(self.values) @ handles.directions)
        motion = Placement.identity()
        for direction, angle in zip(handles.directions, self.values, strict=True):
            if angle:
                motion = Placement.about(handles.middle, direction, angle) @ motion
        return motion


@dataclass(frozen=True, eq=False)
class Drag:
    """A handle taken at a place in the picture (px), and what the pointer then says.

    Attributes:
        handles: as they stood.
        grip: the one that was taken.
        camera, size: of the picture.
        start: x and y in px.
    """

    handles: Handles
    grip: Grip
    camera: Camera
    size: Size
    start: tuple[float, float]

    def values(self, spot: tuple[float, float], before: Triple) -> Triple:
        """Return the amounts for the pointer's place now, not snapped; those from before where it says nothing.

        A turn goes on from the one before, so that it can be more than half a turn.
        """
        handles, axis = self.handles, self.grip.axis
        if self.grip.kind == "along":
            begun, now = (self._on_axis(place) for place in (self.start, spot))
            return before if begun is None or now is None else _alone(axis, now - begun)
        first, last = (self._on_plane(place) for place in (self.start, spot))
        if first is None or last is None:
            return before
        if self.grip.kind == "in":
            x, y, z = np.where(np.arange(3) == axis, 0.0, handles.directions @ (last - first)).tolist()
            return x, y, z
        angle = angle_about(handles.middle, handles.directions[axis], first, last)
        return before if angle is None else _alone(axis, unwound(angle, before[axis]))

    def amount(self, values: Triple, step: float) -> Amount:
        """Return the amounts (m or rad) in whole steps of the same unit; 0: as they are."""
        x, y, z = (snapped(value, step) for value in values)
        return Amount(self.grip.kind == "about", (x, y, z))

    def _on_axis(self, spot: tuple[float, float]) -> float | None:
        handles, axis = self.handles, self.grip.axis
        start, direction = self.camera.ray(spot, self.size)
        along = nearest_on_axis(start, direction, handles.middle, handles.directions[axis])
        if along is None:
            return None
        # Past the point where the axis vanishes in perspective, it is met behind the eye.
        depth = self.camera.project(handles.middle + along * handles.directions[axis], self.size)[2]
        return along if self.camera.parallel or depth > 0 else None

    def _on_plane(self, spot: tuple[float, float]) -> FloatArray | None:
        start, direction = self.camera.ray(spot, self.size)
        return met_on_plane(start, direction, self.handles.middle, self.handles.directions[self.grip.axis])


def _alone(axis: int, value: float) -> Triple:
    x, y, z = (value if each == axis else 0.0 for each in range(3))
    return x, y, z
