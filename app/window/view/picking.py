"""What lies under the pointer, found on the CPU: the boxes of all bodies, then triangles of the near ones."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from app.window.view.scene import Bodies, Scene
    from app.window.view.surface import Surface
    from core.arrays import BoolArray, FloatArray


@dataclass(frozen=True)
class Hit:
    """The body that a ray meets first.

    Attributes:
        key: of its part.
        copy: which of the part's copies, in the order of the assembly's table.
        distance: m along the ray.

    """

    key: str
    copy: int
    distance: float


def pick(scene: Scene, start: FloatArray, direction: FloatArray) -> Hit | None:
    """Return the first body on the ray from start (3,) m along the unit direction (3,), or None.

    What lies behind the start does not count; triangles are hit from both sides.
    """
    candidates: list[tuple[float, Bodies, int, FloatArray, FloatArray]] = []
    for bodies in scene.bodies:
        # Into the part frame: rotations and mirrors are undone by their transpose.
        starts = np.einsum("nji,nj->ni", bodies.turn, start - bodies.shift)
        directions = np.einsum("nji,j->ni", bodies.turn, direction)
        near, far = _box_span(starts, directions, bodies.surface.bounds)
        met = np.flatnonzero((near <= far) & (far >= 0)).tolist()
        candidates += [(float(near[copy]), bodies, copy, starts[copy], directions[copy]) for copy in met]
    best: Hit | None = None
    for near_, bodies, copy, local_start, local_direction in sorted(candidates, key=lambda entry: entry[0]):
        if best is not None and near_ > best.distance:
            break
        distance = ray_surface(bodies.surface, local_start, local_direction)
        if distance is not None and (best is None or distance < best.distance):
            best = Hit(bodies.key, copy, distance)
    return best


def ray_surface(surface: Surface, start: FloatArray, direction: FloatArray) -> float | None:
    """Return the distance in m to the first triangle on the ray (both (3,) in the part frame), or None.

    Seen along the ray, a triangle is hit when the ray's point lies on the same side of its three edges; only
    for those few is the distance found.
    """
    across, along = _across(direction)
    origin = start - surface.middle
    spots = surface.vertices @ across.T.astype(np.float64) - across @ origin
    a, b, c = (surface.faces[:, i] for i in range(3))
    x, y = np.ascontiguousarray(spots[:, 0]), np.ascontiguousarray(spots[:, 1])
    ax, ay, bx, by, cx, cy = x[a], y[a], x[b], y[b], x[c], y[c]
    u, v, w = bx * cy - by * cx, cx * ay - cy * ax, ax * by - ay * bx
    inside: BoolArray = ((u >= 0) & (v >= 0) & (w >= 0)) | ((u <= 0) & (v <= 0) & (w <= 0))
    hit = np.flatnonzero(inside)
    total = u[hit] + v[hit] + w[hit]
    hit, total = hit[total != 0], total[total != 0]
    if not len(hit):
        return None
    depth = (surface.vertices[surface.faces[hit]].astype(np.float64) - origin) @ along
    weights = np.stack([u[hit], v[hit], w[hit]], axis=1) / total[:, None]
    distances = np.einsum("ij,ij->i", weights, depth)
    ahead = distances[distances >= 0]
    return float(ahead.min()) if len(ahead) else None


def _across(direction: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return two unit vectors (2, 3) square to a unit direction, and the direction."""
    helper = np.eye(3)[np.abs(direction).argmin()]
    first = np.cross(direction, helper)
    first /= np.linalg.norm(first)
    return np.stack([first, np.cross(direction, first)]), direction


def _box_span(starts: FloatArray, directions: FloatArray, bounds: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return where rays (n, 3) enter and leave a box (2, 3); for a miss the entry lies beyond the exit."""
    # A flat box gets a little thickness, relative to its size.
    slack = 1e-6 * float(np.ptp(bounds, axis=0).max())
    safe = np.where(directions == 0, 1e-300, directions)
    with np.errstate(over="ignore"):
        one, two = (bounds[0] - slack - starts) / safe, (bounds[1] + slack - starts) / safe
    return np.minimum(one, two).max(axis=1), np.maximum(one, two).min(axis=1)
