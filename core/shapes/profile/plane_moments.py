"""Area and moments of plane outlines of straight edges and arcs, exactly, to the third order.

Green's theorem over the chords gives a polygon; between each arc and its chord lies a segment of a circle, whose
moments are known in closed form. Nothing is replaced by a polygon, and nothing cancels far from the origin: the
sums are taken about a point near the outline.
"""

from __future__ import annotations

from dataclasses import dataclass
from math import comb, gamma
from typing import TYPE_CHECKING

import numpy as np

from core.arrays import ArrayLike, FloatArray, frozen, settled
from core.shapes.profile.edges import Edges

if TYPE_CHECKING:
    from collections.abc import Sequence


# Below this bulge the closed form of a circular segment loses digits, and its power series in b² is summed.
FLAT_BULGE = 0.4
_TERMS = 30

# The powers of (along the chord, away from it) whose integrals over a segment are not 0 by symmetry.
_POWERS = ((0, 0), (0, 1), (2, 0), (0, 2), (2, 1), (0, 3))


@dataclass(frozen=True, eq=False)
class PlaneMoments:
    """Moments of a plane area, or of a batch (...) of them.

    Attributes:
        area: (...) m².
        centre: (..., 2) m, the centroid.
        second: (..., 2, 2) m⁴ about the centroid: [[∫x², ∫xy], [∫xy, ∫y²]]. The second moment of area about the
            x axis through the centroid is the element [1, 1].
        third: (..., 4) m⁵ about the centroid: ∫x³, ∫x²y, ∫xy², ∫y³.
    """

    area: FloatArray
    centre: FloatArray
    second: FloatArray
    third: FloatArray

    def second_about(self, point: ArrayLike) -> FloatArray:
        """Return the second moments (..., 2, 2) m⁴ about a point (..., 2) in m (parallel-axis theorem)."""
        lever = self.centre - np.asarray(point, dtype=float)
        return np.asarray(self.second + self.area[..., None, None] * lever[..., :, None] * lever[..., None, :])

    @property
    def principal(self) -> FloatArray:
        """Principal second moments (..., 2) m⁴ about the centroid, ascending."""
        return np.asarray(np.linalg.eigvalsh(self.second))


def plane_moments(loops: Sequence[Edges]) -> PlaneMoments:
    """Return the moments of the area that loops enclose.

    Args:
        loops: the outer loop counter-clockwise and its holes clockwise, in m; batches broadcast.

    Source: Green's theorem for the polygon of the chords (the formulas of the triangle under each chord);
    for the segments the integrals over a disc between its arc and a chord, in the half angle h.
    """
    near = loops[0].start.mean(axis=-2)
    raw = sum((_raw_moments(loop, near) for loop in loops), start=np.zeros(10))
    a, sx, sy, xx, xy, yy, xxx, xxy, xyy, yyy = np.moveaxis(raw, -1, 0)
    x, y = sx / a, sy / a
    uxx, uxy, uyy = xx - x * sx, xy - x * sy, yy - y * sy
    third = np.stack(
        [
            xxx - 3 * x * uxx - x * x * sx,
            xxy - 2 * x * uxy - y * uxx - x * x * sy,
            xyy - 2 * y * uxy - x * uyy - y * y * sx,
            yyy - 3 * y * uyy - y * y * sy,
        ],
        axis=-1,
    )
    square = np.maximum(uxx, uyy)
    uxy = settled(uxy, square)
    second = np.stack([np.stack([uxx, uxy], axis=-1), np.stack([uxy, uyy], axis=-1)], axis=-2)
    # What is 0 by symmetry comes out as 0, not as the round-off of the outline's own size.
    size = np.sqrt(square / a)[..., None]
    centre = settled(near + np.stack([x, y], axis=-1), size + np.abs(near))
    return PlaneMoments(frozen(a), frozen(centre), frozen(second), frozen(settled(third, a[..., None] * size**3)))


def signed_area(loop: Edges) -> FloatArray:
    """Return the area (...) m² of a loop, negative where it runs clockwise."""
    return np.asarray(_raw_moments(loop, loop.start.mean(axis=-2))[..., 0])


def _raw_moments(loop: Edges, near: FloatArray) -> FloatArray:
    """Return A, Sx, Sy, ∫x², ∫xy, ∫y², ∫x³, ∫x²y, ∫xy², ∫y³ (..., 10) about the point near (..., 2)."""
    polygon = _under_chords(loop.start - near[..., None, :], loop.end - near[..., None, :])
    bent = np.any(loop.bulge.reshape(-1, loop.bulge.shape[-1]) != 0, axis=0)
    if not bent.any():
        return polygon
    arcs = Edges(loop.start[..., bent, :], loop.end[..., bent, :], loop.bulge[..., bent])
    return np.asarray(polygon + _segments(arcs, near))


def _under_chords(p: FloatArray, q: FloatArray) -> FloatArray:
    """Return the ten moments (..., 10) of the triangles between the origin and the chords from p to q, (..., n, 2)."""
    (x1, y1), (x2, y2) = np.moveaxis(p, -1, 0), np.moveaxis(q, -1, 0)
    d = x1 * y2 - x2 * y1
    x, y = x1 + x2, y1 + y2
    moments = (
        d / 2, d * x / 6, d * y / 6,
        d * (x1 * x1 + x1 * x2 + x2 * x2) / 12,
        d * (2 * (x1 * y1 + x2 * y2) + x1 * y2 + x2 * y1) / 24,
        d * (y1 * y1 + y1 * y2 + y2 * y2) / 12,
        d * x * (x1 * x1 + x2 * x2) / 20,
        d * (3 * (x1 * x1 * y1 + x2 * x2 * y2) + x1 * x1 * y2 + 2 * x1 * x2 * y + x2 * x2 * y1) / 60,
        d * (3 * (y1 * y1 * x1 + y2 * y2 * x2) + y1 * y1 * x2 + 2 * y1 * y2 * x + y2 * y2 * x1) / 60,
        d * y * (y1 * y1 + y2 * y2) / 20,
    )
    return np.stack(np.broadcast_arrays(*(moment.sum(axis=-1) for moment in moments)), axis=-1)


def _segments(loop: Edges, near: FloatArray) -> FloatArray:
    """Return the ten moments (..., 10) of what lies between arcs and their chords, negative for right turns."""
    half = loop.chord / 2
    c = np.hypot(half[..., 0], half[..., 1])
    with np.errstate(invalid="ignore", divide="ignore"):
        e = np.where(c[..., None] > 0, half / c[..., None], 0.0)
    ex, ey = e[..., 0], e[..., 1]
    nx, ny = ey, -ex
    mx, my = np.moveaxis(loop.start + half - near[..., None, :], -1, 0)
    own = _own_segment(loop.bulge)
    a, j01, j20, j02, j21, j03 = (own[..., i] * c ** (p + q + 2) for i, (p, q) in enumerate(_POWERS))
    fx, fy = j01 * nx, j01 * ny
    qxx, qxy, qyy = j20 * ex * ex + j02 * nx * nx, j20 * ex * ey + j02 * nx * ny, j20 * ey * ey + j02 * ny * ny
    moments = (
        a, a * mx + fx, a * my + fy,
        a * mx * mx + 2 * mx * fx + qxx,
        a * mx * my + mx * fy + my * fx + qxy,
        a * my * my + 2 * my * fy + qyy,
        a * mx**3 + 3 * mx * (mx * fx + qxx) + 3 * j21 * ex * ex * nx + j03 * nx**3,
        mx * mx * (a * my + fy) + 2 * mx * (my * fx + qxy) + my * qxx
        + j21 * ex * (ex * ny + 2 * ey * nx) + j03 * nx * nx * ny,
        my * my * (a * mx + fx) + 2 * my * (mx * fy + qxy) + mx * qyy
        + j21 * ey * (ey * nx + 2 * ex * ny) + j03 * ny * ny * nx,
        a * my**3 + 3 * my * (my * fy + qyy) + 3 * j21 * ey * ey * ny + j03 * ny**3,
    )
    return np.stack(np.broadcast_arrays(*(moment.sum(axis=-1) for moment in moments)), axis=-1)


def _own_segment(bulge: FloatArray) -> FloatArray:
    """Return ∫ v^p u^q (..., 6) over a segment, for the _POWERS, half its chord being 1.

    v runs along the chord from its middle, u across it to the right. For a bulge to the left both u and the area
    count negative, which the odd powers of b bring about.
    """
    b = np.abs(bulge)
    own = np.zeros((*b.shape, len(_POWERS)))
    flat = (b > 0) & (b < FLAT_BULGE)
    if flat.any():
        own[flat] = _segment_by_series(b[flat])
    bent = b >= FLAT_BULGE
    if bent.any():
        own[bent] = _segment_in_closed_form(b[bent])
    sign = np.sign(bulge)
    return np.asarray(own * np.stack([sign ** (q + 1) for _, q in _POWERS], axis=-1))


def _segment_in_closed_form(b: FloatArray) -> FloatArray:
    """Return the integrals (k, 6) over segments whose half chord is 1, from those about the arc's own centre.

    With the half angle h, S = sin h, C = cos h and R = 1/S the radius, about the centre and per power of R:
    A = h − SC, ∫u = 2S³/3, ∫v² = (3(h − SC) − 2S³C)/12, ∫u² = (h − SC + 2S³C)/4, ∫v²u = 2S⁵/15,
    ∫u³ = 2S³/3 − 2S⁵/5.
    """
    h, s, cos = 2 * np.arctan(b), 2 * b / (1 + b * b), (1 - b) * (1 + b) / (1 + b * b)
    area = h - s * cos
    u1, v2u, u3 = 2 * s**3 / 3, 2 * s**5 / 15, 2 * s**3 / 3 - 2 * s**5 / 5
    v2, u2 = (3 * area - 2 * s**3 * cos) / 12, (area + 2 * s**3 * cos) / 4
    about_chord = (
        area, u1 - cos * area, v2, u2 - 2 * cos * u1 + cos**2 * area,
        v2u - cos * v2, u3 - 3 * cos * u2 + 3 * cos**2 * u1 - cos**3 * area,
    )
    return np.stack([value / s ** (p + q + 2) for value, (p, q) in zip(about_chord, _POWERS, strict=True)], axis=-1)


def _segment_by_series(b: FloatArray) -> FloatArray:
    """Return the integrals (k, 6) over flat segments whose half chord is 1, as power series in b².

    On the arc v = τ(1+b²)/(1+b²τ²) and u = b(1−τ²)/(1+b²τ²), τ from −1 to 1; ∫ v^p u^(q+1)/(q+1) dv is then
    b^(q+1)·(1+b²)^(p+1)/(q+1) times a power series whose terms are beta functions.
    """
    x = b * b
    columns = []
    for (p, q), series in zip(_POWERS, _SERIES, strict=True):
        columns.append(b ** (q + 1) * (1 + x) ** (p + 1) / (q + 1) * np.polynomial.polynomial.polyval(x, series))
    return np.stack(columns, axis=-1)


def _series_of(p: int, q: int) -> FloatArray:
    """Return the coefficients of ∫ τ^p (1−τ²)^(q+1) (1−xτ²)/(1+xτ²)^(p+q+3) dτ in powers of x."""
    n = p + q + 3

    def beta(k: int) -> float:
        a = k + (p + 1) / 2
        return gamma(a) * gamma(q + 2) / gamma(a + q + 2)

    def binomial(k: int) -> int:
        return comb(n - 1 + k, k) * (-1 if k % 2 else 1)

    return np.array([(binomial(k) - (binomial(k - 1) if k else 0)) * beta(k) for k in range(_TERMS)])


_SERIES = tuple(_series_of(p, q) for p, q in _POWERS)
