"""Integrals over triangles whose edge middles are moved: the closed surface of six-node (quadratic) triangles.

Neighbours share the moved middle, so the surface stays closed and the divergence theorem holds exactly:
V = ⅓∫ r·N, ∫r = ¼∫ r (r·N), ∫r rᵀ = ⅕∫ r rᵀ (r·N), with N du dv = r_u × r_v du dv.
"""

from __future__ import annotations

from itertools import permutations
from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.seams import CREASED, FLAT_BESIDE_ROUND, ROUND_BESIDE_FLAT
from core.mesh.curvature.vectors import cross, dot, gathered, length

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.mesh.curvature.bulge import Dome
    from core.mesh.curvature.fit import Chunk
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import Surface

# Where a crease's two surfaces meet may lie this many times as far off as the higher of them stands.
FARTHEST_CREASE: Final = 2.5


def displacements(surface: Surface, seams: Seams, heights: FloatArray, chunk: Chunk) -> FloatArray:
    """Return how far the middles of the edges of a chunk of triangles move, (3 edges, 3 components, n)."""
    moved = np.empty((3, 3, len(chunk.triangles)))
    flat_heights = heights.ravel()
    own = chunk.normals
    for k in range(3):
        half_edges = 3 * chunk.triangles + k
        mates = surface.mates[half_edges]
        kind = seams.kinds[half_edges]
        here, there = flat_heights[half_edges], np.where(mates >= 0, flat_heights[mates], 0.0)
        other = gathered(surface.normals, mates // 3)
        # A triangle without area has no normal: nothing moves beside it, nor at an edge without a mate.
        known = (mates >= 0) & (dot(own, own) > 0) & (dot(other, other) > 0)
        between = own + other
        move = between * (0.5 * (here + there) / np.maximum(length(between), 1e-300))
        move = np.where(kind == FLAT_BESIDE_ROUND, here * own, move)
        move = np.where(kind == ROUND_BESIDE_FLAT, there * other, move)
        crease = np.flatnonzero((kind == CREASED) & known & ((here != 0) | (there != 0)))
        move[:, crease] = _meeting(own[:, crease], other[:, crease], here[crease], there[crease], move[:, crease])
        moved[k] = move * known
    return moved


def _meeting(
    own: FloatArray, other: FloatArray, here: FloatArray, there: FloatArray, between: FloatArray
) -> FloatArray:
    """Return where two surfaces meet that stand here and there above two planes: n₁·v = z₁, n₂·v = z₂."""
    cosine = dot(own, other)
    sine_squared = np.maximum(1 - cosine**2, 1e-12)
    a, b = (here - cosine * there) / sine_squared, (there - cosine * here) / sine_squared
    move = a * own + b * other
    reach = FARTHEST_CREASE * np.maximum(np.abs(here), np.abs(there))
    return np.where(dot(move, move) <= reach**2, move, between)


def flat_sums(corners: list[FloatArray]) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of the cones from the origin to flat triangles; corners three times (3, n)."""
    a, b, c = corners
    s = a + b + c
    flux = dot(a, cross(b, c))
    second = sum((_products(flux * p, p) for p in (a, b, c, s)), np.zeros((3, 3)))
    return float(flux.sum()) / 6, (s * flux).sum(axis=1) / 24, second / 120


def _products(a: FloatArray, b: FloatArray) -> FloatArray:
    """Return Σ a bᵀ (3, 3) where that is symmetric: six long dot products, faster than one matrix product."""
    found = np.empty((3, 3))
    for i in range(3):
        for j in range(i + 1):
            found[i, j] = found[j, i] = np.dot(a[i], b[j])
    return found


def _rule(orbits: tuple[tuple[float, float, float], ...]) -> list[tuple[tuple[float, ...], float]]:
    """Return barycentric nodes with their weights on a triangle of area 1/2, from (weight, λ₁, λ₂) of each orbit."""
    return [
        (node, 0.5 * weight) for weight, a, b in orbits for node in sorted(set(permutations((a, b, 1 - a - b))))
    ]


# Dunavant 1985, "High degree efficient symmetrical Gaussian quadrature rules for the triangle", degrees 6 and 4 (from
# memory; the tests integrate all monomials up to those degrees). Volumes need degree 4; second moments degree 4 to
# first order in the bend and degree 6 to second order.
FINE_RULE: Final = _rule((
    (0.116786275726379, 0.249286745170910, 0.249286745170910),
    (0.050844906370207, 0.063089014491502, 0.063089014491502),
    (0.082851075618374, 0.053145049844817, 0.310352451033784),
))
GENTLE_RULE: Final = _rule((
    (0.223381589678011, 0.445948490915965, 0.445948490915965),
    (0.109951743655322, 0.091576213509771, 0.091576213509771),
))

# Bends by less than this share of the sides need first order only: turns below about 5°.
GENTLE: Final = 5e-3


def bent_sums(corners: list[FloatArray], moved: FloatArray) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of the cones from the origin to bent triangles.

    corners three times (3, n); moved (3, 3, n) as displacements() gives it.
    """
    volume, first, second = 0.0, np.zeros(3), np.zeros((3, 3))
    a, b, c = corners
    d = 4 * moved
    side_u, side_v = b - a, c - a
    gentle = np.abs(moved).max() <= GENTLE * np.sqrt(min(dot(side_u, side_u).min(), dot(side_v, side_v).min()))
    for (p, u, v), weight in GENTLE_RULE if gentle else FINE_RULE:
        r = p * a + u * b + v * c + (u * v) * d[0] + (v * p) * d[1] + (p * u) * d[2]
        along_u = side_u + v * (d[0] - d[1]) + (p - u) * d[2]
        along_v = side_v + u * (d[0] - d[2]) + (p - v) * d[1]
        flux = weight * dot(r, cross(along_u, along_v))
        volume += float(flux.sum()) / 3
        weighted = r * flux
        first += weighted.sum(axis=1) / 4
        second += _products(weighted, r) / 5
    return volume, first, second


def dome_sums(corners: list[FloatArray], dome: Dome, heights: FloatArray) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of what lies between tapered surfaces z = q/ω and the quadratic ones over triangles.

    corners three times (3, n); heights (3, n) over the middles of the edges.
    """
    volume, first, second = 0.0, np.zeros(3), np.zeros((3, 3))
    a, b, c = corners
    tapered = [0.5 * (dome.omegas[(k + 1) % 3] + dome.omegas[(k + 2) % 3]) * heights[k] for k in range(3)]
    area = 4 * length(cross(b - a, c - a))
    for (p, u, v), weight in FINE_RULE:
        quadratic = u * v * heights[0] + v * p * heights[1] + p * u * heights[2]
        raised = u * v * tapered[0] + v * p * tapered[1] + p * u * tapered[2]
        omega = p * dome.omegas[0] + u * dome.omegas[1] + v * dome.omegas[2]
        thick = weight * area * (raised / omega - quadratic)
        r = p * a + u * b + v * c
        volume += float(thick.sum())
        first += (r * thick).sum(axis=1)
        second += _products(r * thick, r)
    return volume, first, second
