"""The shells of a mesh: facets that hang together over their edges, what each encloses, and what it is for."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.moments import Moments

if TYPE_CHECKING:
    from core.arrays import BoolArray, FloatArray, IntArray
    from core.mesh.grouping import Labels

SOLID, VOID, VOID_OUTWARD, INSIDE_OUT = "solid", "void", "void wound outward", "inside out"
OPEN, FLAT = "open", "flat"

# Volume over area × diagonal below which a shell encloses nothing but the round-off of stored coordinates.
THIN = 1e-9
_CHUNK = 16_000


@dataclass(frozen=True, eq=False)
class Shells:
    """Shells by number, each a row; all in file units.

    Attributes:
        label: (n,) the shell of each facet.
        bodies: a batch (k,) of what each encloses at unit density: its signed volume as mass, with centre and
            central second moment; of an open shell with its loops closed flat.
        area: (k,).
        bounds: (k, 2, 3) lowest and highest corners.
        inside: (k,) the innermost shell around each, or −1.
        depth: (k,) how many shells lie around each.
        role: what each is: "solid", "void", "void wound outward", "inside out", "open" (its edges do not balance) or
            "flat" (it encloses nothing). Where the mesh as a whole is inside out, as if it were turned.
        order, starts: facets shell by shell, and where each shell begins among them.
    """

    label: Labels
    bodies: Moments
    area: FloatArray
    bounds: FloatArray
    inside: IntArray
    depth: IntArray
    role: tuple[str, ...]
    order: IntArray
    starts: IntArray

    def __len__(self) -> int:
        return len(self.area)

    @property
    def volume(self) -> FloatArray:
        """Signed volumes (k,), negative where a shell's facets face inwards."""
        return self.bodies.mass

    def facets_of(self, shell: int) -> IntArray:
        """Return the facets of one shell, ascending."""
        stop = self.starts[shell + 1] if shell + 1 < len(self.starts) else len(self.order)
        return self.order[self.starts[shell] : stop]

    def body(self, shell: int) -> Moments:
        """Return what one shell encloses, signed as its facets wind."""
        return Moments(self.bodies.mass[shell], self.bodies.centre[shell], self.bodies.spread[shell])


@dataclass(frozen=True, eq=False)
class Sizes:
    """What the facets of each shell add up to; bodies, area, bounds, order and starts as of Shells."""

    bodies: Moments
    area: FloatArray
    bounds: FloatArray
    order: IntArray
    starts: IntArray


def sizes_of(points: FloatArray, corners: IntArray, label: Labels, caps: FloatArray, cap_label: IntArray) -> Sizes:
    """Return what the shells enclose.

    Args:
        points: (m, 3).
        corners: (n, 3).
        label: (n,) shell of each facet; no number is left out.
        caps: (c, 3, 3) triangles that close open shells; they count for the volume, not for area and bounds.
        cap_label: (c,) their shells.
    """
    order = np.argsort(label, kind="stable")
    starts = np.flatnonzero(np.diff(label[order], prepend=-1))
    # Each shell is seen from one of its own corners, so that small ones far away keep their digits.
    reference = points[corners[order[starts], 0]]
    sums = np.zeros((11, len(starts)))
    low, high = np.empty((len(corners), 3)), np.empty((len(corners), 3))
    # Adding up costs as much as there are shells, so that a chunk has no fewer facets than that.
    size = max(_CHUNK, len(starts))
    for start in range(0, len(corners), size):
        part = slice(start, start + size)
        a, b, c = (points.take(column, axis=0) for column in corners[part].T)
        low[part], high[part] = np.minimum(np.minimum(a, b), c), np.maximum(np.maximum(a, b), c)
        seen_from = reference.take(label[part], axis=0)
        _add(sums, a - seen_from, b - seen_from, c - seen_from, label[part])
    area = sums[10].copy()
    if len(caps):
        seen_from = reference[cap_label]
        _add(sums, caps[:, 0] - seen_from, caps[:, 1] - seen_from, caps[:, 2] - seen_from, cap_label)
    if len(starts) > 1:
        low, high = low[order], high[order]
    bounds = np.stack([np.minimum.reduceat(low, starts, axis=0), np.maximum.reduceat(high, starts, axis=0)], axis=1)
    return Sizes(_bodies(sums, reference), area, bounds, order, starts)


def _add(sums: FloatArray, a: FloatArray, b: FloatArray, c: FloatArray, label: IntArray | Labels) -> None:
    """Add the integrals over the cones to triangles with corners a, b, c (n, 3); see core.mesh.integrals."""
    # Rows by axis: products of whole rows take half the time of products of columns.
    a, b, c = (np.ascontiguousarray(corner.T) for corner in (a, b, c))
    e, g = b - a, c - a
    normal = np.stack([e[i] * g[j] - e[j] * g[i] for i, j in ((1, 2), (2, 0), (0, 1))])
    d = (a * normal).sum(axis=0)
    s = a + b + c
    weighted = d / 120
    rows = [d / 6, *(5 * weighted * s)]
    for i, j in ((0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)):
        rows.append(weighted * (a[i] * a[j] + b[i] * b[j] + c[i] * c[j] + s[i] * s[j]))
    rows.append(0.5 * np.sqrt((normal * normal).sum(axis=0)))
    if sums.shape[1] == 1:
        sums[:, 0] += [row.sum() for row in rows]
    else:
        sums += np.stack([np.bincount(label, row, minlength=sums.shape[1]) for row in rows])


def _bodies(sums: FloatArray, reference: FloatArray) -> Moments:
    volume, first = sums[0], sums[1:4]
    lever = np.divide(first, volume, out=np.zeros_like(first), where=volume != 0).T
    xx, yy, zz, xy, xz, yz = sums[4:10]
    second = np.moveaxis(np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]]), 2, 0)
    spread = second - volume[:, None, None] * lever[:, :, None] * lever[:, None, :]
    return Moments(volume, reference + lever, spread)


def roles_of(volume: FloatArray, is_open: BoolArray, is_flat: BoolArray, depth: IntArray) -> tuple[str, ...]:
    """Return what each shell is, from its signed volume and how many shells lie around it.

    The outermost is solid, what lies in it a void, what lies in the void solid again; its winding either says the
    same or it does not.
    """
    choice = np.where(
        depth % 2 == 0,
        np.where(volume > 0, 0, 3),
        np.where(volume < 0, 1, 2),
    )
    choice[is_flat] = 5
    choice[is_open] = 4
    names = (SOLID, VOID, VOID_OUTWARD, INSIDE_OUT, OPEN, FLAT)
    return tuple(names[number] for number in choice.tolist())
