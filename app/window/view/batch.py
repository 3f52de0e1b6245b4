"""A scene packed for drawing: few large arrays in single precision, relative to the middle of the scene.

Small surfaces are laid out copy by copy into one batch, so that an assembly of a thousand parts is one draw
call; a large surface is a batch of its own that is drawn once for each of its placements.
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import TYPE_CHECKING

import numpy as np

from app.window.view.carried import CarriedScene

if TYPE_CHECKING:
    from collections.abc import Callable

    from numpy.typing import NDArray

    from app.window.view.camera import Camera
    from app.window.view.palette import Theme
    from app.window.view.scene import Bodies, Scene
    from app.window.view.surface import Float32Array, Surface, Uint32Array
    from core.arrays import BoolArray, FloatArray, IntArray

# A surface of more triangles than this is drawn from one buffer for all its copies.
LARGE = 20_000
OPAQUE = 255
_SEE_THROUGH, _SELECTED_THROUGH, _GHOST = 96, 150, 110
# Rims are looked for among at most so many edges.
MOST_RIMS = 600_000

_NO_LINES = np.zeros((0, 2, 3), dtype=np.float32)


@dataclass(frozen=True, eq=False)
class Batch:
    """Triangles of one or many bodies.

    Attributes:
        vertices, normals: (k, 3), m relative to the scene's middle after a placement is applied.
        faces: (m, 3) indices into vertices.
        owner: (k,) which body of the scene (scene.everybody) a vertex is of.
        placements: (n, 4, 4).
        closed: whether only the outside of its surfaces can be seen.

    """

    vertices: Float32Array
    normals: Float32Array
    faces: Uint32Array
    owner: IntArray
    placements: FloatArray
    closed: bool


@dataclass(frozen=True, eq=False)
class Lines:
    """Edges of all bodies, in m relative to the scene's middle.

    Attributes:
        sharp: (e, 2, 3); sharp_owner: (e,) which body each is of.
        rims: (s, 2, 3), rim_normals: (s, 2, 3), rim_owner: (s,): edges that are drawn only where the surface
            turns away from the viewer in them.

    """

    sharp: Float32Array
    sharp_owner: IntArray
    rims: Float32Array
    rim_normals: Float32Array
    rim_owner: IntArray

    def rims_seen(self, camera: Camera, centre: FloatArray) -> BoolArray:
        """Return which rims (s,) part a side that faces the viewer from one that does not."""
        if camera.parallel:
            toward = np.broadcast_to(camera.axes[2].astype(np.float32), (len(self.rims), 3))
        else:
            toward = (camera.eye - centre).astype(np.float32) - self.rims[:, 0]
        one = np.einsum("ij,ij->i", self.rim_normals[:, 0], toward)
        two = np.einsum("ij,ij->i", self.rim_normals[:, 1], toward)
        return np.asarray((one > 0) != (two > 0))


@dataclass(frozen=True, eq=False)
class Packed:
    """A scene ready to draw: batches of triangles and the lines on them."""

    batches: tuple[Batch, ...]
    lines: Lines

    @property
    def count(self) -> int:
        """How many triangles one picture draws."""
        return sum(len(batch.faces) * len(batch.placements) for batch in self.batches)


@dataclass(frozen=True)
class Emphasis:
    """What stands out: parts that are selected, the one the pointer is on, and whether all is see-through."""

    selected: frozenset[str] = frozenset()
    hovered: str | None = None
    see_through: bool = False


def packed(scene: Scene, surface_for: Callable[[Bodies], Surface]) -> Packed:
    """Return the scene packed; surface_for chooses the surface that is drawn for a body.

    Of a scene in which parts are dragged, what stays is packed once.
    """
    if not isinstance(scene, CarriedScene):
        return _packed(scene, surface_for)
    packs = scene.still.packs
    if surface_for not in packs:
        packs[surface_for] = _packed(scene.still, surface_for)
    return _joined(packs[surface_for], _packed(scene.moved, surface_for), len(scene.still.everybody))


def _joined(still: Packed, moved: Packed, count: int) -> Packed:
    """Return two pieces of a scene as one; the bodies of the second come after so many of the first."""
    one, other = still.lines, moved.lines
    lines = Lines(
        np.concatenate([one.sharp, other.sharp]),
        np.concatenate([one.sharp_owner, other.sharp_owner + count]),
        np.concatenate([one.rims, other.rims]),
        np.concatenate([one.rim_normals, other.rim_normals]),
        np.concatenate([one.rim_owner, other.rim_owner + count]),
    )
    return Packed((*still.batches, *(replace(batch, owner=batch.owner + count) for batch in moved.batches)), lines)


def _packed(scene: Scene, surface_for: Callable[[Bodies], Surface]) -> Packed:
    small: list[tuple[int, Bodies, Surface]] = []
    batches: list[Batch] = []
    for index, bodies in enumerate(scene.everybody):
        surface = surface_for(bodies)
        if surface.count > LARGE:
            batches.append(_own_batch(index, bodies, surface, scene.centre))
        else:
            small.append((index, bodies, surface))
    # The ghost is see-through, so it never shares a batch with what is not.
    solid = [entry for entry in small if entry[1] is not scene.ghost]
    ghost = [entry for entry in small if entry[1] is scene.ghost]
    batches[:0] = [_merged(entries, scene.centre) for entries in (solid, ghost) if entries]
    return Packed(tuple(batches), _lines(scene, surface_for))


def face_colours(scene: Scene, emphasis: Emphasis, theme: Theme) -> NDArray[np.uint8]:
    """Return the colour of each body of scene.everybody, (b, 4) red, green, blue and opacity."""
    colours = np.empty((len(scene.everybody), 4), dtype=np.uint8)
    for index, bodies in enumerate(scene.everybody):
        colour, opacity = (
            theme.parts[bodies.tint % len(theme.parts)],
            _SEE_THROUGH if emphasis.see_through else OPAQUE,
        )
        if bodies is scene.ghost:
            colour, opacity = theme.ghost, _GHOST
        elif bodies.key in emphasis.selected:
            colour, opacity = theme.selected, _SELECTED_THROUGH if emphasis.see_through else OPAQUE
        elif bodies.key == emphasis.hovered:
            colour = theme.hovered
        colours[index] = (*colour, opacity)
    return colours


def line_ranks(scene: Scene, emphasis: Emphasis) -> IntArray:
    """Return how each body's edges are drawn, (b,): 0 plain, 1 the pointer is on it, 2 selected."""
    ranks = [
        2 if bodies.key in emphasis.selected else int(bodies.key == emphasis.hovered or bodies is scene.ghost)
        for bodies in scene.everybody
    ]
    return np.array(ranks, dtype=np.int64)


def _own_batch(index: int, bodies: Bodies, surface: Surface, centre: FloatArray) -> Batch:
    placements = np.zeros((len(bodies.shift), 4, 4))
    placements[:, :3, :3], placements[:, 3, 3] = bodies.turn, 1.0
    placements[:, :3, 3] = bodies.turn @ surface.middle + (bodies.shift - centre)
    owner = np.full(len(surface.vertices), index, dtype=np.int64)
    return Batch(surface.vertices, surface.normals, surface.faces, owner, placements, surface.closed)


def _merged(entries: list[tuple[int, Bodies, Surface]], centre: FloatArray) -> Batch:
    alike = [entry for entry in entries if not entry[1].whole]
    entries = [entry for entry in entries if entry[1].whole]
    batches = [_joined_batch(entries, centre)] if entries else []
    return _one_batch([*batches, _alike(alike, centre)]) if alike else batches[0]


def _one_batch(batches: list[Batch]) -> Batch:
    starts = np.cumsum([0, *(len(batch.vertices) for batch in batches[:-1])]).astype(np.uint32)
    return Batch(
        np.concatenate([batch.vertices for batch in batches]), np.concatenate([batch.normals for batch in batches]),
        np.concatenate([batch.faces + start for batch, start in zip(batches, starts, strict=True)]),
        np.concatenate([batch.owner for batch in batches]), np.eye(4)[None], all(batch.closed for batch in batches),
    )


def _alike(entries: list[tuple[int, Bodies, Surface]], centre: FloatArray) -> Batch:
    """Return bodies whose surfaces share their faces and normals, all laid out at once."""
    first = entries[0][2]
    copies = np.array([len(bodies.shift) for _, bodies, _ in entries])
    turn = np.concatenate([bodies.turn for _, bodies, _ in entries])
    shift = np.concatenate([bodies.shift for _, bodies, _ in entries]) - centre
    middles = np.repeat(np.array([surface.middle for _, _, surface in entries]), copies, axis=0)
    places = (np.einsum("nij,nj->ni", turn, middles) + shift).astype(np.float32)
    back = np.swapaxes(turn, 1, 2).astype(np.float32)
    corners = np.repeat(np.array([surface.vertices for _, _, surface in entries]), copies, axis=0)
    mirrored = np.linalg.det(turn) < 0
    faces = np.broadcast_to(first.faces, (len(turn), *first.faces.shape)).copy()
    faces[mirrored] = faces[mirrored][:, :, ::-1]
    faces += (len(first.vertices) * np.arange(len(turn), dtype=np.uint32))[:, None, None]
    owner = np.repeat(np.array([index for index, _, _ in entries]), copies * len(first.vertices))
    return Batch(
        (corners @ back + places[:, None]).reshape(-1, 3), (first.normals @ back).reshape(-1, 3),
        faces.reshape(-1, 3), owner, np.eye(4)[None], first.closed,
    )


def _joined_batch(entries: list[tuple[int, Bodies, Surface]], centre: FloatArray) -> Batch:
    laid = [bodies.faces_of(surface) for _, bodies, surface in entries]
    sizes = np.array([len(piece.vertices) for piece in laid])
    counts = np.array([len(piece.faces) for piece in laid])
    indices = np.array([index for index, _, _ in entries])
    starts = (np.cumsum(sizes) - sizes).astype(np.uint32)
    return Batch(
        np.concatenate([piece.vertices for piece in laid]) + _offsets(entries, sizes, centre),
        np.concatenate([piece.normals for piece in laid]),
        np.concatenate([piece.faces for piece in laid]) + np.repeat(starts, counts)[:, None],
        np.repeat(indices, sizes),
        np.eye(4)[None],
        all(surface.closed for _, _, surface in entries),
    )


def _lines(scene: Scene, surface_for: Callable[[Bodies], Surface]) -> Lines:
    whole = ((index, bodies) for index, bodies in enumerate(scene.everybody) if bodies.whole)
    entries = [(index, bodies, surface_for(bodies)) for index, bodies in whole]
    left, rimmed = MOST_RIMS, []
    for entry in entries:
        count = len(entry[2].rims) * len(entry[1].shift)
        if count <= left:
            left -= count
            rimmed.append(entry)
    sharp, sharp_owner = _joined_lines(
        [bodies.lines_of(surface).sharp for _, bodies, surface in entries], entries, scene
    )
    rims, rim_owner = _joined_lines([bodies.lines_of(surface).rims for _, bodies, surface in rimmed], rimmed, scene)
    normals = [bodies.lines_of(surface).rim_normals for _, bodies, surface in rimmed]
    return Lines(sharp, sharp_owner, rims, np.concatenate([_NO_LINES, *normals]), rim_owner)


def _joined_lines(
    pieces: list[Float32Array], entries: list[tuple[int, Bodies, Surface]], scene: Scene
) -> tuple[Float32Array, IntArray]:
    """Return all lines (e, 2, 3) relative to the scene's middle, and which body each is of."""
    sizes = np.array([len(piece) for piece in pieces], dtype=np.int64)
    joined = np.concatenate([_NO_LINES, *pieces]) + _offsets(entries, sizes, scene.centre)[:, None]
    return joined, np.repeat(np.array([index for index, _, _ in entries], dtype=np.int64), sizes)


def _offsets(entries: list[tuple[int, Bodies, Surface]], sizes: IntArray, centre: FloatArray) -> Float32Array:
    """Return how far each body's anchor is from the scene's middle, repeated sizes times, (Σ sizes, 3) m."""
    anchors = np.array([bodies.anchor for _, bodies, _ in entries]).reshape(-1, 3)
    return np.repeat((anchors - centre).astype(np.float32), sizes, axis=0)
