"""Drawing without OpenGL: flat-shaded triangles into a depth buffer, and the lines that are not hidden.

All triangles are laid out at once into rows and the rows into pixels; of the pixels that fall on one spot the
nearest wins. Depth is the projected one (−1 near … 1 far), which is linear across a triangle on the screen.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.batch import OPAQUE, Batch, Packed

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from app.window.view.camera import Camera, Size
    from core.arrays import BoolArray, FloatArray, IntArray

# Light from everywhere, from a lamp, and from above; and where the lamp stands in the camera frame (unit).
LIGHT_TERMS: tuple[float, float, float, tuple[float, float, float]] = (
    0.56,
    0.34,
    0.14,
    (-0.337, 0.529, 0.779),
)
# Line widths in logical pixels: plain, under the pointer, selected.
EDGE_WIDTHS = (1.1, 1.9, 2.8)
# A scene of more triangles than this is drawn lighter while the camera moves.
MOST_MOVING = 60_000

# Lines are tested for being hidden in pieces of this many pixels.
_PIECE = 4.0
# Of more lines than this, those shorter than a pixel are left out.
_MANY_LINES = 20_000
_MOST_PIECES = 400_000


@dataclass(frozen=True, eq=False)
class Raster:
    """A finished picture.

    Attributes:
        colours: (height, width, 3) red, green, blue 0…255.
        depth: (height, width) −1…1; 1 where there is only ground.

    """

    colours: NDArray[np.uint8]
    depth: NDArray[np.float32]


@dataclass(frozen=True, eq=False)
class Stand:
    """From where and how large a picture is drawn.

    Attributes:
        camera, depths: where it is seen from, and the depths of its near and far plane, m.
        centre: the middle of the scene, (3,) m.
        width, height: px.

    """

    camera: Camera
    depths: tuple[float, float]
    centre: FloatArray
    width: int
    height: int

    @property
    def matrix(self) -> FloatArray:
        """From points relative to the scene's middle to clip space, (4, 4)."""
        size: Size = (self.width, self.height)
        return self.camera.projection_matrix(size, self.depths) @ self.camera.view_matrix(self.centre)

    @property
    def depth_of_pixel(self) -> float:
        """How much depth, of the 2 from near to far, is as long as one pixel is wide at the target."""
        step = self.camera.metres_per_pixel((self.width, self.height))
        return 2 * step / (self.depths[1] - self.depths[0])


def light_on(normals: FloatArray) -> FloatArray:
    """Return how bright faces with normals (..., 3) in the camera frame are; both sides alike."""
    base, key, sky, direction = LIGHT_TERMS
    length = np.linalg.norm(normals, axis=-1, keepdims=True)
    unit = np.divide(normals, length, out=np.zeros_like(normals), where=length > 0)
    unit = np.where(unit[..., 2:] < 0, -unit, unit)
    return np.asarray(base + key * np.maximum(unit @ np.asarray(direction), 0.0) + sky * (0.5 + 0.5 * unit[..., 1]))


def rastered(pack: Packed, stand: Stand, of_bodies: NDArray[np.uint8], ground: tuple[int, int, int]) -> Raster:
    """Return the picture of all batches; of_bodies (b, 4) is the colour and opacity of each body."""
    pixels = stand.width * stand.height
    colours = np.empty((pixels, 3), dtype=np.float32)
    colours[:] = ground
    sheet = _Sheet(colours, np.ones(pixels, dtype=np.float32))
    solid = [bool((of_bodies[batch.owner, 3] == OPAQUE).all()) for batch in pack.batches]
    for batch, is_solid in zip(pack.batches, solid, strict=True):
        if is_solid:
            _draw_batch(batch, stand, of_bodies, sheet)
    # Of what is see-through, the nearest face of each batch is blended over the solid picture.
    for batch, is_solid in zip(pack.batches, solid, strict=True):
        if not is_solid:
            _draw_batch(batch, stand, of_bodies, _Sheet(sheet.colours, sheet.depth.copy()))
    shape = (stand.height, stand.width)
    whole = np.clip(sheet.colours, 0, 255).astype(np.uint8)
    return Raster(whole.reshape(*shape, 3), sheet.depth.reshape(shape))


def visible_lines(segments: FloatArray, stand: Stand, depth: NDArray[np.float32]) -> FloatArray:
    """Return the parts of segments (e, 2, 3) m that no face hides, as (r, 2, 2) pixels."""
    if not len(segments):
        return np.zeros((0, 2, 2))
    spots, ahead = _projected(segments.reshape(-1, 3), stand.matrix, stand)
    spots, kept = spots.reshape(-1, 2, 3), ahead.reshape(-1, 2).all(axis=1)
    frame = np.array([stand.width, stand.height])
    kept &= (spots[..., :2].max(axis=1) >= 0).all(axis=1) & (spots[..., :2].min(axis=1) <= frame).all(axis=1)
    spots = spots[kept]
    if len(spots) > _MANY_LINES:
        spots = spots[np.abs(spots[:, 1, :2] - spots[:, 0, :2]).max(axis=1) > 1.0]
    length = np.abs(spots[:, 1, :2] - spots[:, 0, :2]).max(axis=1)
    pieces = np.clip(np.ceil(length / _PIECE), 1, 4000).astype(np.int64)
    if pieces.sum() > _MOST_PIECES:
        return np.asarray(spots[..., :2])
    owner = np.repeat(np.arange(len(spots)), pieces)
    step = np.arange(len(owner)) - np.repeat(np.cumsum(pieces) - pieces, pieces)
    start, run = spots[:, 0][owner], (spots[:, 1] - spots[:, 0])[owner]
    middle = start + run * ((step + 0.5) / pieces[owner])[:, None]
    column, row = middle[:, 0].astype(np.int64), middle[:, 1].astype(np.int64)
    inside = (column >= 0) & (row >= 0) & (column < stand.width) & (row < stand.height)
    seen = np.zeros(len(owner), dtype=bool)
    behind = _farthest_around(depth)
    seen[inside] = middle[inside, 2] <= behind[row[inside], column[inside]] + stand.depth_of_pixel
    return _runs(seen, owner, step, pieces, spots)


def _runs(seen: BoolArray, owner: IntArray, step: IntArray, pieces: IntArray, spots: FloatArray) -> FloatArray:
    """Return the ends (r, 2, 2) of the unbroken runs of seen pieces."""
    before = np.concatenate([[False], seen[:-1]]) & (step > 0)
    after = np.concatenate([seen[1:], [False]]) & (step < pieces[owner] - 1)
    first, last = np.flatnonzero(seen & ~before), np.flatnonzero(seen & ~after)
    line = owner[first]
    start, run = spots[line, 0, :2], spots[line, 1, :2] - spots[line, 0, :2]
    count = pieces[line][:, None]
    return np.stack(
        [start + run * step[first][:, None] / count, start + run * (step[last][:, None] + 1) / count], axis=1
    )


def _farthest_around(depth: NDArray[np.float32]) -> NDArray[np.float32]:
    """Return the largest depth among each pixel and its eight neighbours."""
    wide = np.pad(depth, 1, mode="edge")
    rows = np.maximum(np.maximum(wide[:-2], wide[1:-1]), wide[2:])
    return np.asarray(np.maximum(np.maximum(rows[:, :-2], rows[:, 1:-1]), rows[:, 2:]))


def _projected(points: FloatArray, matrix: FloatArray, stand: Stand) -> tuple[FloatArray, BoolArray]:
    """Return x, y in pixels and depth −1…1 of points (n, 3), and which of them lie beyond the near plane."""
    clip = points @ matrix[:, :3].T + matrix[:, 3]
    away = clip[:, 3]
    ahead = clip[:, 2] >= -away
    away = np.where(ahead, away, 1.0)
    x = (clip[:, 0] / away + 1) * (0.5 * stand.width)
    y = (1 - clip[:, 1] / away) * (0.5 * stand.height)
    return np.stack([x, y, clip[:, 2] / away], axis=1), ahead


@dataclass(frozen=True, eq=False)
class _Sheet:
    """What is drawn on: colours (pixels, 3) and depth (pixels,), both written to."""

    colours: NDArray[np.float32]
    depth: NDArray[np.float32]


def _draw_batch(batch: Batch, stand: Stand, of_bodies: NDArray[np.uint8], sheet: _Sheet) -> None:
    for placement in batch.placements:
        _draw(batch, placement, stand, of_bodies, sheet)


def _draw(batch: Batch, placement: FloatArray, stand: Stand, of_bodies: NDArray[np.uint8], sheet: _Sheet) -> None:
    """Draw one batch at one placement."""
    spots, ahead = _projected(batch.vertices.astype(np.float64), stand.matrix @ placement, stand)
    corners = spots[batch.faces]
    x, y = corners[..., 0], corners[..., 1]
    area = (x[:, 1] - x[:, 0]) * (y[:, 2] - y[:, 0]) - (x[:, 2] - x[:, 0]) * (y[:, 1] - y[:, 0])
    kept = ahead[batch.faces].all(axis=1) & (area != 0)
    if batch.closed:
        # y runs down, so an outside seen from the front has negative area; a mirror image turns that round.
        kept &= (area < 0) == (np.linalg.det(placement[:3, :3]) > 0)
    kept &= (x.max(axis=1) >= 0) & (x.min(axis=1) <= stand.width)
    kept &= (y.max(axis=1) >= 0) & (y.min(axis=1) <= stand.height)
    corners, faces, area = corners[kept], batch.faces[kept], area[kept]
    if not len(faces):
        return
    turn = stand.camera.axes @ placement[:3, :3]
    light = light_on(batch.normals[faces].sum(axis=1).astype(np.float64) @ turn.T)
    body = of_bodies[batch.owner[faces[:, 0]]]
    paint = (body[:, :3] * light[:, None]).astype(np.float32)
    spot, owner, near = _pixels(corners, area, stand)
    np.minimum.at(sheet.depth, spot, near)
    won = near == sheet.depth[spot]
    spot, owner = spot[won], owner[won]
    if (body[:, 3] == OPAQUE).all():
        sheet.colours[spot] = paint[owner]
    else:
        opacity = (body[owner, 3] / np.float32(OPAQUE))[:, None]
        sheet.colours[spot] += opacity * (paint[owner] - sheet.colours[spot])


def _pixels(corners: FloatArray, area: FloatArray, stand: Stand) -> tuple[IntArray, IntArray, NDArray[np.float32]]:
    """Return spot, triangle and depth of every pixel whose middle lies in a triangle (m, 3, 3)."""
    x, y, z = corners[..., 0], corners[..., 1], corners[..., 2]
    top = np.clip(np.ceil(y.min(axis=1) - 0.5), 0, stand.height).astype(np.int64)
    bottom = np.clip(np.floor(y.max(axis=1) - 0.5) + 1, 0, stand.height).astype(np.int64)
    rows = np.maximum(bottom - top, 0)
    of_row = np.repeat(np.arange(len(rows)), rows)
    row = np.arange(len(of_row)) - np.repeat(np.cumsum(rows) - rows, rows) + top[of_row]
    left, right = _row_ends(x, y, of_row, row + 0.5)
    first = np.clip(np.ceil(left - 0.5), 0, stand.width).astype(np.int64)
    beyond = np.clip(np.floor(right - 0.5) + 1, 0, stand.width).astype(np.int64)
    length = np.maximum(beyond - first, 0)
    # The depth is a plane over the screen.
    slope_x = ((z[:, 1] - z[:, 0]) * (y[:, 2] - y[:, 0]) - (z[:, 2] - z[:, 0]) * (y[:, 1] - y[:, 0])) / area
    slope_y = ((x[:, 1] - x[:, 0]) * (z[:, 2] - z[:, 0]) - (x[:, 2] - x[:, 0]) * (z[:, 1] - z[:, 0])) / area
    start = z[of_row, 0] + slope_x[of_row] * (first + 0.5 - x[of_row, 0]) + slope_y[of_row] * (row + 0.5 - y[of_row, 0])
    of_pixel = np.repeat(np.arange(len(length)), length)
    step = np.arange(len(of_pixel)) - np.repeat(np.cumsum(length) - length, length)
    spot = (row * stand.width + first)[of_pixel] + step
    near = start.astype(np.float32)[of_pixel] + slope_x[of_row].astype(np.float32)[of_pixel] * step.astype(np.float32)
    return spot, of_row[of_pixel], near


def _row_ends(x: FloatArray, y: FloatArray, owner: IntArray, level: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Return the x at which each row enters and leaves its triangle."""
    left, right = np.full(len(owner), np.inf), np.full(len(owner), -np.inf)
    for one, two in ((0, 1), (1, 2), (2, 0)):
        run = y[:, two] - y[:, one]
        lean = np.divide(x[:, two] - x[:, one], run, out=np.zeros_like(run), where=run != 0)
        low, high = np.minimum(y[:, one], y[:, two])[owner], np.maximum(y[:, one], y[:, two])[owner]
        crosses = (level >= low) & (level <= high) & (run != 0)[owner]
        at = x[owner, one] + (level - y[owner, one]) * lean[owner]
        left = np.where(crosses, np.minimum(left, at), left)
        right = np.where(crosses, np.maximum(right, at), right)
    # A row that only grazes a corner crosses nothing: its ends are given the wrong way round, and it has no
    # pixels.
    missed = right < left
    return np.where(missed, 1.0, left), np.where(missed, 0.0, right)
