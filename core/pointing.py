"""Where a ray through the picture meets what is dragged with it: an axis, a plane, an angle about an axis.

Rays, axes and planes are given by a point (3,) m and a direction (3,) of any length, all in one frame.
"""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from core.moments import unit_vector

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray

# Sine below which a ray runs along an axis, or in a plane: where they meet is then anywhere.
_ALONG = 1e-6


def nearest_on_axis(start: ArrayLike, direction: ArrayLike, point: ArrayLike, axis: ArrayLike) -> float | None:
    """Return how far along an axis from its point, in m, it passes nearest to a ray; None where they are parallel.

    The ray counts as a whole line. The common normal of two lines, as in every text on analytic geometry.

    >>> nearest_on_axis([0.3, -1, 0.5], [0, 1, 0], [0, 0, 0], [2, 0, 0])
    0.3
    """
    ray, line = unit_vector(direction), unit_vector(axis)
    normal = np.cross(line, ray)
    square = float(normal @ normal)
    if square < _ALONG**2:
        return None
    gap = np.asarray(start, dtype=float) - np.asarray(point, dtype=float)
    return float(np.cross(gap, ray) @ normal / square)


def met_on_plane(start: ArrayLike, direction: ArrayLike, point: ArrayLike, normal: ArrayLike) -> FloatArray | None:
    """Return the point (3,) m in which a ray meets a plane; None where it never does, or only behind its start.

    >>> met_on_plane([1, 2, 3], [0, 0, -1], [0, 0, 1], [0, 0, 1]).tolist()
    [1.0, 2.0, 1.0]
    """
    ray, upright = unit_vector(direction), unit_vector(normal)
    first = np.asarray(start, dtype=float)
    slope = float(ray @ upright)
    if abs(slope) < _ALONG:
        return None
    distance = float((np.asarray(point, dtype=float) - first) @ upright) / slope
    return None if distance < 0 else np.asarray(first + distance * ray)


def angle_about(point: ArrayLike, axis: ArrayLike, start: ArrayLike, end: ArrayLike) -> float | None:
    """Return the turn from −π to π rad about an axis that brings one point (3,) m over another; None from the axis.

    >>> round(math.degrees(angle_about([0, 0, 0], [0, 0, 1], [2, 0, 5], [0, 3, 0])), 9)
    90.0
    """
    foot, unit = np.asarray(point, dtype=float), unit_vector(axis)
    one, other = (_across(np.asarray(spot, dtype=float) - foot, unit) for spot in (start, end))
    if not one.any() or not other.any():
        return None
    return math.atan2(float(np.cross(one, other) @ unit), float(one @ other))


def unwound(angle: float, near: float) -> float:
    """Return an angle in rad with so many whole turns added that it lies nearest to another one.

    >>> unwound(-3.0, 3.0) == 2 * math.pi - 3
    True
    """
    return angle + 2 * math.pi * round((near - angle) / (2 * math.pi))


def snapped(value: float, step: float) -> float:
    """Return the nearest multiple of a step (same unit); the value itself where the step is 0.

    >>> snapped(0.0126, 0.005), snapped(0.0126, 0.0)
    (0.015, 0.0126)
    """
    return round(value / step) * step if step else value


def _across(lever: FloatArray, unit: FloatArray) -> FloatArray:
    """Return what of a lever (3,) is square to a unit direction; nothing where that is only round-off."""
    across = lever - (lever @ unit) * unit
    return across if np.linalg.norm(across) > _ALONG * np.linalg.norm(lever) else np.zeros(3)
