"""A surface laid out copy by copy, in single precision from an anchor: what a scene is packed from."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from app.window.view.surface import Float32Array, Surface, Uint32Array
    from core.arrays import FloatArray


@dataclass(frozen=True, eq=False)
class LaidFaces:
    """Triangles of all copies: vertices (k, 3) m from the anchor, normals (k, 3), faces (m, 3) into them."""

    vertices: Float32Array
    normals: Float32Array
    faces: Uint32Array


@dataclass(frozen=True, eq=False)
class LaidLines:
    """Edges of all copies, (e, 2, 3) m from the anchor: sharp ones, and rims with the normals at both sides."""

    sharp: Float32Array
    rims: Float32Array
    rim_normals: Float32Array


def laid_faces(surface: Surface, turn: FloatArray, shift: FloatArray) -> LaidFaces:
    """Return the triangles at placements turn (n, 3, 3) and shift (n, 3) m from the anchor."""
    copies, size = len(shift), len(surface.vertices)
    faces = np.broadcast_to(surface.faces, (copies, surface.count, 3)).copy()
    # A mirror image runs the other way round.
    mirrored = np.linalg.det(turn) < 0
    faces[mirrored] = faces[mirrored][:, :, ::-1]
    faces += (size * np.arange(copies, dtype=np.uint32))[:, None, None]
    return LaidFaces(
        _placed(surface.vertices, surface, turn, shift), _turned(surface.normals, turn), faces.reshape(-1, 3)
    )


def laid_lines(surface: Surface, turn: FloatArray, shift: FloatArray) -> LaidLines:
    """Return the edges at placements turn (n, 3, 3) and shift (n, 3) m from the anchor."""
    sharp, rims, normals = (lines.reshape(-1, 3) for lines in (surface.sharp, surface.rims, surface.rim_normals))
    return LaidLines(
        _placed(sharp, surface, turn, shift).reshape(-1, 2, 3),
        _placed(rims, surface, turn, shift).reshape(-1, 2, 3),
        _turned(normals, turn).reshape(-1, 2, 3),
    )


def _placed(points: Float32Array, surface: Surface, turn: FloatArray, shift: FloatArray) -> Float32Array:
    middles = (turn @ surface.middle + shift).astype(np.float32)
    return np.asarray(points @ np.swapaxes(turn.astype(np.float32), 1, 2) + middles[:, None]).reshape(-1, 3)


def _turned(directions: Float32Array, turn: FloatArray) -> Float32Array:
    return np.asarray(directions @ np.swapaxes(turn.astype(np.float32), 1, 2)).reshape(-1, 3)
