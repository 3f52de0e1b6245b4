"""The surface of a plate with teeth around it, as facets."""

import numpy as np

from core.arrays import FloatArray, IntArray
from core.facets import Facets


def toothed_surface(
    radii: FloatArray, halves: FloatArray, *, teeth: int, across: int, hole: float, width: float
) -> Facets:
    """Return the closed surface of a toothed plate about z from z = 0 to z = width, the middle of a tooth over +x.

    The flat sides are a grid over each tooth, from the root to the tip and from flank to flank, and a ring between
    the hole and the root circle; so no facet crosses the outline.

    Args:
        radii: (n,) m along a flank, from root to tip, each at least as large as the one before.
        halves: (n,) rad, half the angle of the tooth at these radii.
        teeth: how many.
        across: steps from flank to flank, and along the root circle between two teeth.
        hole: radius of the bore, m; 0 for none.
        width: m.
    """
    plane, ends, outline, rim = _plane(radii, halves, teeth, across, hole)
    count = len(plane)
    lower = np.column_stack([plane, np.zeros(count)])
    upper = np.column_stack([plane, np.full(count, width)])
    walls = [_wall(outline, count)]
    if hole > 0:
        walls.append(_wall(rim[::-1], count))
    return Facets(np.concatenate([lower, upper]), np.concatenate([ends[:, ::-1], ends + count, *walls]))


def _plane(
    radii: FloatArray, halves: FloatArray, teeth: int, across: int, hole: float
) -> tuple[FloatArray, IntArray, IntArray, IntArray]:
    """Return the points (k, 2) of a flat side, its facets, and the numbers of its outline and of the hole's rim."""
    levels, pitch = len(radii), 2 * np.pi / teeth
    fraction = np.linspace(-1, 1, across + 1)
    middle = pitch * np.arange(teeth)
    # Points on teeth, by tooth, level and place from flank to flank; then those of the gaps; then those of the hole.
    on_teeth = middle[:, None, None] + halves[:, None] * fraction
    gap = middle[:, None] + halves[0] + (pitch - 2 * halves[0]) * np.arange(1, across) / across
    grid = np.arange(on_teeth.size).reshape(on_teeth.shape)
    gaps = on_teeth.size + np.arange(gap.size).reshape(gap.shape)
    root = np.concatenate([grid[:, 0], gaps], axis=1).ravel()
    ring = np.concatenate([on_teeth[:, 0], gap], axis=1).ravel()
    first = on_teeth.size + gap.size
    rim = first + (np.arange(len(ring)) if hole > 0 else np.zeros(len(ring), dtype=np.int64))

    radius = np.concatenate([
        np.broadcast_to(radii[:, None], on_teeth.shape).ravel(),
        np.full(gap.size, radii[0]),
        np.full(len(ring) if hole > 0 else 1, hole),
    ])
    angle = np.concatenate([on_teeth.ravel(), gap.ravel(), ring if hole > 0 else np.zeros(1)])
    plane = np.stack([radius * np.cos(angle), radius * np.sin(angle)], axis=-1)

    below, above = grid[:, :-1], grid[:, 1:]
    ends = [_quads(below[..., :-1], above[..., :-1], above[..., 1:], below[..., 1:])]
    ahead, rim_ahead = np.roll(root, -1), np.roll(rim, -1)
    ends.append(_quads(rim, root, ahead, rim_ahead) if hole > 0 else np.stack([rim, root, ahead], axis=-1))
    rising, falling = grid[:, :, 0], grid[:, ::-1, -1]
    tips = grid[:, levels - 1, 1:-1]
    outline = np.concatenate([rising, tips, falling, gaps], axis=1).ravel()
    return plane, np.concatenate(ends), outline, rim


def _quads(a: IntArray, b: IntArray, c: IntArray, d: IntArray) -> IntArray:
    """Return two facets for each quadrilateral a, b, c, d, counter-clockwise seen from above."""
    corners = np.stack([np.stack([a, c, d], axis=-1), np.stack([a, b, c], axis=-1)])
    return corners.reshape(-1, 3)


def _wall(loop: IntArray, count: int) -> IntArray:
    """Return the facets between a loop on the lower side and the same loop on the upper, its outside to the right."""
    ahead = np.roll(loop, -1)
    return _quads(loop, ahead, ahead + count, loop + count)
