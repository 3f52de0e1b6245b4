"""Where the scene is seen from: a turntable camera as an immutable value, with its matrices.

Lengths in m in the document frame, angles in rad, positions on the screen in logical pixels from the upper
left corner. The camera frame has x to the right, y up and z towards the viewer, its origin at the target.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Literal, TypeAlias

import numpy as np

from core.arrays import ArrayLike, FloatArray, frozen

LookName: TypeAlias = Literal["front", "back", "left", "right", "top", "bottom", "iso"]
Size: TypeAlias = tuple[float, float]

# Half the height of the picture as an angle: a long lens, so that round parts keep their shape.
HALF_FIELD = np.radians(13.0)

# Azimuth and elevation of the camera's place, seen from the target. Front looks along +y, x to the right, z
# up.
LOOKS: dict[LookName, tuple[float, float]] = {
    "front": (-np.pi / 2, 0.0),
    "back": (np.pi / 2, 0.0),
    "left": (np.pi, 0.0),
    "right": (0.0, 0.0),
    "top": (-np.pi / 2, np.pi / 2),
    "bottom": (-np.pi / 2, -np.pi / 2),
    "iso": (-np.pi / 4, float(np.arcsin(1 / np.sqrt(3)))),
}

_NEAREST, _FARTHEST = 1e-6, 1e7
# The near plane never comes closer than this part of the distance: the depth buffer has 24 bits.
_NEAR_OF_DISTANCE = 1e-3


@dataclass(frozen=True, eq=False)
class Camera:
    """A camera on a turntable about the document's z direction.

    Attributes:
        target: (3,) m, the point in the middle of the picture.
        distance: m, from the eye to the target; in parallel projection it sets the scale alone.
        azimuth, elevation: rad, where the eye stands as seen from the target.
        parallel: whether parallel lines stay parallel.

    """

    target: FloatArray
    distance: float = 1.0
    azimuth: float = LOOKS["iso"][0]
    elevation: float = LOOKS["iso"][1]
    parallel: bool = False

    def __post_init__(self) -> None:
        object.__setattr__(self, "target", frozen(self.target))

    @property
    def axes(self) -> FloatArray:
        """Right, up and backward directions of the camera as rows, (3, 3), in the document frame."""
        ca, sa, ce, se = (
            np.cos(self.azimuth),
            np.sin(self.azimuth),
            np.cos(self.elevation),
            np.sin(self.elevation),
        )
        return np.array([[-sa, ca, 0.0], [-se * ca, -se * sa, ce], [ce * ca, ce * sa, se]])

    @property
    def eye(self) -> FloatArray:
        """Where the camera stands, (3,) m."""
        return np.asarray(self.target + self.distance * self.axes[2])

    def view_matrix(self, origin: ArrayLike) -> FloatArray:
        """Return the matrix (4, 4) from points relative to origin (3,) m to eye coordinates."""
        axes, matrix = self.axes, np.eye(4)
        matrix[:3, :3] = axes
        matrix[:3, 3] = axes @ (np.asarray(origin, dtype=float) - self.target) - [0.0, 0.0, self.distance]
        return matrix

    def projection_matrix(self, size: Size, depths: tuple[float, float]) -> FloatArray:
        """Return the matrix (4, 4) from eye coordinates to clip space (−1…1 each way) between two depths in m."""
        near, far = depths
        up = np.tan(HALF_FIELD)
        across = up * size[0] / size[1]
        matrix = np.zeros((4, 4))
        if self.parallel:
            matrix[0, 0], matrix[1, 1] = 1 / (self.distance * across), 1 / (self.distance * up)
            matrix[2, 2], matrix[2, 3], matrix[3, 3] = -2 / (far - near), -(far + near) / (far - near), 1.0
        else:
            matrix[0, 0], matrix[1, 1] = 1 / across, 1 / up
            matrix[2, 2], matrix[2, 3] = -(far + near) / (far - near), -2 * far * near / (far - near)
            matrix[3, 2] = -1.0
        return matrix

    def depth_range(self, centre: ArrayLike, radius: float) -> tuple[float, float]:
        """Return the depths of the near and far plane that take in a ball: centre (3,) and radius in m."""
        middle = self.distance - float((np.asarray(centre, dtype=float) - self.target) @ self.axes[2])
        reach = max(radius, self.distance * _NEAR_OF_DISTANCE) * 1.05
        if self.parallel:
            return middle - reach, middle + reach
        near = max(middle - reach, self.distance * _NEAR_OF_DISTANCE)
        return near, max(middle, near) + reach

    def in_camera(self, points: ArrayLike) -> FloatArray:
        """Return points (..., 3) m in the camera frame."""
        return np.asarray((np.asarray(points, dtype=float) - self.target) @ self.axes.T)

    def project(self, points: ArrayLike, size: Size) -> FloatArray:
        """Return x and y in pixels and the depth in m of points (..., 3); behind the eye it is negative."""
        local = self.in_camera(points)
        depth = self.distance - local[..., 2]
        scale = 0.5 * size[1] / np.tan(HALF_FIELD)
        away = np.full_like(depth, self.distance) if self.parallel else depth
        away = np.where(np.abs(away) < _NEAREST * self.distance, _NEAREST * self.distance, away)
        return np.stack(
            [
                0.5 * size[0] + scale * local[..., 0] / away,
                0.5 * size[1] - scale * local[..., 1] / away,
                depth,
            ],
            axis=-1,
        )

    def ray(self, spot: tuple[float, float], size: Size) -> tuple[FloatArray, FloatArray]:
        """Return the start (3,) m and the unit direction (3,) of the ray through a pixel."""
        axes, offset = self.axes, self._offset_on_target_plane(spot, size)
        if self.parallel:
            return self.target + offset + self.distance * axes[2], -axes[2]
        toward = self.target + offset - self.eye
        return self.eye, toward / np.linalg.norm(toward)

    def metres_per_pixel(self, size: Size) -> float:
        """Return the length that one pixel covers at the target."""
        return float(2 * self.distance * np.tan(HALF_FIELD) / size[1])

    def orbited(self, turn: float, tilt: float) -> Camera:
        """Return the camera turned about z and raised by tilt (rad), at most to straight above or below."""
        elevation = float(np.clip(self.elevation + tilt, -np.pi / 2, np.pi / 2))
        azimuth = float(np.remainder(self.azimuth + turn + np.pi, 2 * np.pi) - np.pi)
        return replace(self, azimuth=azimuth, elevation=elevation)

    def panned(self, right: float, down: float, size: Size) -> Camera:
        """Return the camera after the scene was dragged by so many pixels."""
        step = self.metres_per_pixel(size)
        return replace(self, target=self.target - step * (right * self.axes[0] - down * self.axes[1]))

    def zoomed(self, factor: float, spot: tuple[float, float], size: Size) -> Camera:
        """Return the camera factor times nearer; what lies under the spot at the target's depth stays there."""
        distance = float(np.clip(self.distance / factor, _NEAREST, _FARTHEST))
        kept = distance / self.distance
        return replace(
            self,
            distance=distance,
            target=self.target + (1 - kept) * self._offset_on_target_plane(spot, size),
        )

    def looking(self, name: LookName) -> Camera:
        """Return the camera turned to one of the named views, about the same target."""
        azimuth, elevation = LOOKS[name]
        return replace(self, azimuth=azimuth, elevation=elevation)

    def with_parallel(self, parallel: bool) -> Camera:
        """Return the camera in parallel or in perspective projection, at the same scale at the target."""
        return replace(self, parallel=parallel)

    def fitted(self, points: ArrayLike, size: Size, inset: float) -> Camera:
        """Return the nearest camera of this direction that shows all points (n, 3) m inside an inset in pixels.

        In the camera frame a point is inside when |x − cx| ≤ (d − z)·t for the half field t, and the same in
        y: linear in centre and distance, so the smallest distance is d = (max(x + z·t) − min(x − z·t)) / 2t.
        """
        spots = np.asarray(points, dtype=float).reshape(-1, 3)
        middle = 0.5 * (spots.min(axis=0) + spots.max(axis=0))
        local = (spots - middle) @ self.axes.T
        free = [max(1 - 2 * inset / side, 0.2) for side in size]
        half = np.tan(HALF_FIELD) * np.array([size[0] / size[1] * free[0], free[1]])
        lean = np.zeros(2) if self.parallel else half
        high = (local[:, :2] + local[:, 2:] * lean).max(axis=0)
        low = (local[:, :2] - local[:, 2:] * lean).min(axis=0)
        distance = float(((high - low) / (2 * half)).max())
        floor = float(np.ptp(spots, axis=0).max()) * 0.1 or 0.1
        if not self.parallel:
            floor += float(local[:, 2].max())
        centre = 0.5 * (high + low)
        return replace(
            self,
            distance=max(distance, floor),
            target=middle + centre[0] * self.axes[0] + centre[1] * self.axes[1],
        )

    def _offset_on_target_plane(self, spot: tuple[float, float], size: Size) -> FloatArray:
        step, axes = self.metres_per_pixel(size), self.axes
        right, up = (spot[0] - 0.5 * size[0]) * step, (0.5 * size[1] - spot[1]) * step
        return np.asarray(right * axes[0] + up * axes[1])
