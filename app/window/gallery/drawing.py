"""A shape as a line drawing: which of its edges are seen from the front right and above, and which are hidden."""

from __future__ import annotations

from dataclasses import dataclass
from functools import lru_cache
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.surface import surface_of

if TYPE_CHECKING:
    from app.window.view.surface import Surface
    from core.arrays import BoolArray, FloatArray
    from core.shapes import Shape
    from core.shapes.marks import Mark

# The isometric view: what lies towards the eye, to the right and upwards in the picture.
EYE = np.array([1.0, -1.0, 1.0]) / np.sqrt(3)
RIGHT = np.array([1.0, 1.0, 0.0]) / np.sqrt(2)
UP = np.array([-1.0, 1.0, 2.0]) / np.sqrt(6)

# A bar longer than so many times its width is drawn shorter: what is marked stays the same.
LONGEST, SHORTENED = 2.2, 1.5
# Facets around, and edges per picture's width, and the cells in which what hides a place is looked up.
STEPS = 64
# Lengths in m that are drawn; what is typed may pass through any number on its way.
SMALLEST, LARGEST = 1e-7, 1e5
_PIECES = 48
_CELLS = 14
# What lies less than this in front, relative to the body's size, is the edge's own face.
_SLACK = 3e-3
# Points nearer than this, relative to the size, stand for one another where room for text is looked for.
_NEAR = 0.012
_FEWEST_SIDES = 3


@dataclass(frozen=True, eq=False)
class Drawing:
    """Lines in the plane of the picture, y upwards, in m.

    Attributes:
        seen, hidden: (n, 2, 2) pieces of the body's sharp edges and outlines.
        soft: (n, 2, 2) pieces seen of a curve around a body that has no edge.
        faces: (m, 3, 2) the facets that face the eye, to be filled in one colour.
        marks: (name, style, start (2,), end (2,), away (2,)) of each dimension.
        spots: (k, 2) points along everything seen.
    """

    seen: FloatArray
    hidden: FloatArray
    soft: FloatArray
    faces: FloatArray
    marks: tuple[FlatMark, ...]
    spots: FloatArray


@dataclass(frozen=True, eq=False)
class FlatMark:
    """A mark in the plane of the picture; see `core.shapes.marks.Mark`.

    Attributes:
        within: m that each extension line runs behind the body before it comes out, and is not drawn.
    """

    name: str
    style: str
    start: FloatArray
    end: FloatArray
    away: FloatArray
    within: tuple[float, float]


@lru_cache(maxsize=128)
def drawing_of(shape: Shape) -> Drawing:
    """Return the drawing of a single shape; the same one again for the same shape."""
    shown = shortened(shape)
    facets = shown.facets(STEPS)
    surface = surface_of(facets)
    middle = surface.middle
    corners = surface.vertices[surface.faces].astype(np.float64)
    facing = surface.facet_normals @ EYE > 0
    cover = _Cover(corners[facing] if surface.closed else corners)
    size = float(np.linalg.norm(np.ptp(surface.bounds, axis=0)))
    edges = np.concatenate([surface.sharp, _outlines(surface)]).astype(np.float64)
    seen, hidden = _parted(edges, cover, size)
    soft = np.zeros((0, 2, 2))
    if not len(surface.sharp):
        soft, _ = _parted(_belt(corners), cover, size)
    faces = flat(corners[facing] if surface.closed else corners)
    marks = tuple(_flat_mark(mark, middle, cover, size) for mark in shown.marks())
    return Drawing(seen, hidden, soft, faces, marks, _spots(seen, size))


def can_be_drawn(shape: Shape) -> bool:
    """Tell whether a shape's lengths are such that a drawing of it can be worked out."""
    lengths = [shape.single(one.name) for one in shape.dimensions if one.kind == "length"]
    return all(length == 0 or SMALLEST <= length <= LARGEST for length in lengths)


def shortened(shape: Shape) -> Shape:
    """Return the shape as it is drawn: a long bar shorter, so that its section can be read."""
    length = dict(shape.values()).get("length")
    if length is None or shape.measure == "length":
        return shape
    across = float(np.ptp(shape.facets(12).points[:, :2], axis=0).max())
    return shape.resized({"length": SHORTENED * across}) if length > LONGEST * across else shape


def flat(points: FloatArray) -> FloatArray:
    """Return points (..., 3) in the plane of the picture, (..., 2): to the right and upwards."""
    return np.stack([points @ RIGHT, points @ UP], axis=-1)


def _flat_mark(mark: Mark, middle: FloatArray, cover: _Cover, size: float) -> FlatMark:
    start, end, away = mark.start - middle, mark.end - middle, mark.away
    within = (_way_out(start, away, cover, size), _way_out(end, away, cover, size))
    return FlatMark(mark.name, mark.style, flat(start), flat(end), flat(away), within)


def _way_out(start: FloatArray, away: FloatArray, cover: _Cover, size: float) -> float:
    """Return how far (m of the picture) from a hidden place a line goes before the body no longer covers it."""
    if not away.any() or not cover.hides(start[None], _SLACK * size)[0]:
        return 0.0
    steps = np.linspace(0, size, _PIECES + 1)
    covered = np.flatnonzero(cover.hides(start + steps[:, None] * away, -np.inf))
    farthest = steps[covered[-1] + 1] if len(covered) and covered[-1] < _PIECES else 0.0
    return float(farthest * np.linalg.norm(flat(away)))


def _outlines(surface: Surface) -> FloatArray:
    """Return the soft edges (n, 2, 3) where the surface turns away from the eye."""
    facing = surface.rim_normals @ EYE > 0
    return np.asarray(surface.rims[facing[:, 0] != facing[:, 1]])


def _belt(corners: FloatArray) -> FloatArray:
    """Return where a body's middle plane cuts its facets (m, 3, 3), as pieces (n, 2, 3)."""
    # A little off the middle, where no row of corners lies.
    height = corners[..., 2] - 1e-6 * float(np.ptp(corners[..., 2]))
    above = height > 0
    cut = above.any(axis=1) & ~above.all(axis=1)
    ends = []
    for first in range(_FEWEST_SIDES):
        second = (first + 1) % _FEWEST_SIDES
        a, b = height[cut, first], height[cut, second]
        x, y = corners[cut, first], corners[cut, second]
        with np.errstate(divide="ignore", invalid="ignore"):
            share = np.where((a > 0) != (b > 0), a / (a - b), np.nan)
        ends.append(x + share[:, None] * (y - x))
    three = np.stack(ends, axis=1)
    return three[~np.isnan(three[..., 0])].reshape(-1, 2, 3)


def _spots(pieces: FloatArray, size: float) -> FloatArray:
    """Return points (k, 2) along pieces (n, 2, 2), ends included, one of those that nearly coincide."""
    shares = np.linspace(0, 1, 25)[:, None, None]
    points = (pieces[:, 0] + shares * (pieces[:, 1] - pieces[:, 0])).reshape(-1, 2)
    grid = np.round(points / (size * _NEAR))
    return np.asarray(np.unique(grid, axis=0) * (size * _NEAR))


def _parted(edges: FloatArray, cover: _Cover, size: float) -> tuple[FloatArray, FloatArray]:
    """Return the edges (n, 2, 3) as pieces (k, 2, 2) in the plane that are seen, and those that are hidden."""
    if not len(edges):
        return np.zeros((0, 2, 2)), np.zeros((0, 2, 2))
    ends = flat(edges)
    reach = float(np.ptp(ends.reshape(-1, 2), axis=0).max()) or 1.0
    length = np.linalg.norm(ends[:, 1] - ends[:, 0], axis=1)
    count = np.maximum(1, np.ceil(length / reach * _PIECES).astype(int))
    owner = np.repeat(np.arange(len(edges)), count)
    place = np.arange(len(owner)) - np.repeat(np.cumsum(count) - count, count)
    low, high = place / count[owner], (place + 1) / count[owner]
    start, step = edges[owner, 0], edges[owner, 1] - edges[owner, 0]
    middle = start + (0.5 * (low + high))[:, None] * step
    covered = cover.hides(middle, _SLACK * size)
    pieces = np.stack([flat(start + low[:, None] * step), flat(start + high[:, None] * step)], axis=1)
    joined = _joined(pieces, owner, covered)
    return joined[0], joined[1]


def _joined(pieces: FloatArray, owner: np.ndarray, covered: BoolArray) -> list[FloatArray]:
    """Return runs of pieces of one edge that are all seen, then those that are all hidden, as one piece each."""
    starts = np.flatnonzero(
        np.concatenate([[True], (owner[1:] != owner[:-1]) | (covered[1:] != covered[:-1])])
    )
    ends = np.append(starts[1:], len(pieces)) - 1
    runs = np.stack([pieces[starts, 0], pieces[ends, 1]], axis=1)
    return [runs[covered[starts] == hidden] for hidden in (False, True)]


class _Cover:
    """Facets (m, 3, 3) that may hide what lies behind them, sorted into the cells of a grid over the picture."""

    def __init__(self, corners: FloatArray) -> None:
        self._a, self._b, self._c = (flat(corners[:, k]) for k in range(3))
        self._depth = corners @ EYE
        one, other = self._b - self._a, self._c - self._a
        self._area = one[:, 0] * other[:, 1] - one[:, 1] * other[:, 0]
        spots = np.stack([self._a, self._b, self._c])
        self._low, self._high = spots.min(axis=0), spots.max(axis=0)
        self._origin = self._low.min(axis=0)
        self._cell = float(np.ptp(spots.reshape(-1, 2), axis=0).max()) / _CELLS or 1.0

    def hides(self, points: FloatArray, slack: float) -> BoolArray:
        """Return for points (n, 3) whether a facet lies more than slack in front of each."""
        spots, depth = flat(points), points @ EYE
        cells = np.floor((spots - self._origin) / self._cell).astype(int)
        hidden = np.zeros(len(points), dtype=bool)
        for cell in np.unique(cells, axis=0):
            here = np.flatnonzero((cells == cell).all(axis=1))
            low = self._origin + cell * self._cell
            near = (self._high >= low).all(axis=1) & (self._low <= low + self._cell).all(axis=1)
            near &= np.abs(self._area) > 0
            hidden[here] = self._behind(spots[here], depth[here] + slack, np.flatnonzero(near))
        return hidden

    def _behind(self, spots: FloatArray, depth: FloatArray, facets: np.ndarray) -> BoolArray:
        a, b, c, area = self._a[facets], self._b[facets], self._c[facets], self._area[facets]
        to_a, to_b, to_c = (corner[None] - spots[:, None] for corner in (a, b, c))
        in_a = (to_b[..., 0] * to_c[..., 1] - to_b[..., 1] * to_c[..., 0]) / area
        in_b = (to_c[..., 0] * to_a[..., 1] - to_c[..., 1] * to_a[..., 0]) / area
        in_c = 1 - in_a - in_b
        front = in_a * self._depth[facets, 0] + in_b * self._depth[facets, 1] + in_c * self._depth[facets, 2]
        inside = (in_a > 0) & (in_b > 0) & (in_c > 0)
        return np.asarray((inside & (front > depth[:, None])).any(axis=1))
