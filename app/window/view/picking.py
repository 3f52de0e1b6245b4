"""What lies under the pointer, found on the CPU: the boxes of all bodies, then triangles of the near ones."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.surface import BLOCK

if TYPE_CHECKING:
    from app.window.view.scene import Bodies, Scene
    from app.window.view.surface import Surface, Uint32Array
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
    origin = start - surface.middle
    faces = _faces_near(surface, origin, direction)
    if not len(faces):
        return None
    across = _across(direction)
    corners = surface.vertices[faces].astype(np.float64) - origin
    spots = corners @ across.T
    (ax, ay), (bx, by), (cx, cy) = (spots[:, place].T for place in range(3))
    u, v, w = bx * cy - by * cx, cx * ay - cy * ax, ax * by - ay * bx
    inside: BoolArray = ((u >= 0) & (v >= 0) & (w >= 0)) | ((u <= 0) & (v <= 0) & (w <= 0))
    hit = np.flatnonzero(inside)
    total = u[hit] + v[hit] + w[hit]
    hit, total = hit[total != 0], total[total != 0]
    if not len(hit):
        return None
    depth = corners[hit] @ direction
    weights = np.stack([u[hit], v[hit], w[hit]], axis=1) / total[:, None]
    distances = np.einsum("ij,ij->i", weights, depth)
    ahead = distances[distances >= 0]
    return float(ahead.min()) if len(ahead) else None


def _faces_near(surface: Surface, origin: FloatArray, direction: FloatArray) -> Uint32Array:
    """Return the faces (m, 3) of the blocks whose boxes the ray meets."""
    low, high = surface.blocks[:, 0].astype(np.float64), surface.blocks[:, 1].astype(np.float64)
    slack = 1e-6 * float(np.ptp(surface.bounds, axis=0).max())
    near, far = _slabs(low - slack - origin, high + slack - origin, direction)
    met = np.flatnonzero((near <= far) & (far >= 0))
    if len(met) == len(surface.blocks):
        return surface.faces
    rows = (met[:, None] * BLOCK + np.arange(BLOCK)).ravel()
    return np.asarray(surface.faces[rows[rows < surface.count]])


def _across(direction: FloatArray) -> FloatArray:
    """Return two unit vectors (2, 3) square to a unit direction."""
    helper = np.eye(3)[np.abs(direction).argmin()]
    first = np.cross(direction, helper)
    first /= np.linalg.norm(first)
    return np.stack([first, np.cross(direction, first)])


def _box_span(starts: FloatArray, directions: FloatArray, bounds: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return where rays (n, 3) enter and leave a box (2, 3); for a miss the entry lies beyond the exit."""
    # A flat box gets a little thickness, relative to its size.
    slack = 1e-6 * float(np.ptp(bounds, axis=0).max())
    return _slabs(bounds[0] - slack - starts, bounds[1] + slack - starts, directions)


def _slabs(low: FloatArray, high: FloatArray, directions: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the entry and exit (n,) of rays with directions (n, 3) or (3,) into boxes relative to their starts."""
    safe = np.where(directions == 0, 1e-300, directions)
    with np.errstate(over="ignore"):
        one, two = low / safe, high / safe
    return np.minimum(one, two).max(axis=1), np.maximum(one, two).min(axis=1)
