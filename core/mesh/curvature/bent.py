"""Integrals over triangles whose edge middles are moved: the closed surface of six-node (quadratic) triangles.

Neighbours share the moved middle, so the surface stays closed and the divergence theorem holds exactly:
V = ⅓∫ r·N, ∫r = ¼∫ r (r·N), ∫r rᵀ = ⅕∫ r rᵀ (r·N), with N du dv = r_u × r_v du dv.
"""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.curvature.seams import CREASED, FLAT_BESIDE_ROUND, ROUND_BESIDE_FLAT

if TYPE_CHECKING:
    from core.arrays import FloatArray, IntArray
    from core.mesh.curvature.bulge import Dome
    from core.mesh.curvature.seams import Seams
    from core.mesh.curvature.surface import Surface

# Where a crease's two surfaces meet may lie this many times as far off as the higher of them stands.
FARTHEST_CREASE: Final = 2.5


def displacements(surface: Surface, seams: Seams, heights: FloatArray, chunk: IntArray) -> FloatArray:
    """Return how far the middles of the edges of a chunk of triangles move, (n, 3, 3)."""
    moved = np.empty((len(chunk), 3, 3))
    flat_heights = heights.ravel()
    own = surface.normals[chunk]
    for k in range(3):
        half_edges = 3 * chunk + k
        mates = surface.mates[half_edges]
        kind = seams.kinds[half_edges]
        here, there = flat_heights[half_edges], np.where(mates >= 0, flat_heights[mates], 0.0)
        other = surface.normals[mates // 3]
        known = (mates >= 0) & (own != 0).any(1) & (other != 0).any(1)
        between = own + other
        length = np.sqrt(np.einsum("ni,ni->n", between, between))
        np.divide(between, length[:, None], out=between, where=length[:, None] > 0)
        move = 0.5 * (here + there)[:, None] * between
        move = np.where((kind == FLAT_BESIDE_ROUND)[:, None], here[:, None] * own, move)
        move = np.where((kind == ROUND_BESIDE_FLAT)[:, None], there[:, None] * other, move)
        crease = (kind == CREASED) & known
        move[crease] = _meeting(own[crease], other[crease], here[crease], there[crease], move[crease])
        move[~known] = 0.0
        moved[:, k] = move
    return moved


def _meeting(
    own: FloatArray, other: FloatArray, here: FloatArray, there: FloatArray, between: FloatArray
) -> FloatArray:
    """Return where two surfaces meet that stand here and there above two planes: n₁·v = z₁, n₂·v = z₂."""
    cosine = np.einsum("ni,ni->n", own, other)
    sine_squared = np.maximum(1 - cosine**2, 1e-12)
    a, b = (here - cosine * there) / sine_squared, (there - cosine * here) / sine_squared
    move = a[:, None] * own + b[:, None] * other
    reach = FARTHEST_CREASE * np.maximum(np.abs(here), np.abs(there))
    near = np.einsum("ni,ni->n", move, move) <= reach**2
    return np.where(near[:, None], move, between)


def flat_sums(corners: FloatArray) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of the cones from the origin to flat triangles; corners (n, 3, 3)."""
    a, b, c = corners.transpose(1, 2, 0)
    s = a + b + c
    flux = _triple(a, b, c)
    second = sum(((flux * p) @ p.T for p in (a, b, c, s)), np.zeros((3, 3)))
    return float(flux.sum()) / 6, (s * flux).sum(axis=1) / 24, second / 120


def _rule() -> tuple[FloatArray, FloatArray]:
    """Return barycentric nodes (16, 3) and weights (16,) on a triangle of area 1/2, exact to degree 6."""
    nodes, weights = np.polynomial.legendre.leggauss(4)
    nodes, weights = 0.5 * (nodes + 1), 0.5 * weights
    u = np.repeat(nodes, 4)
    v = np.tile(nodes, 4) * (1 - u)
    return np.stack([1 - u - v, u, v], axis=1), np.repeat(weights, 4) * np.tile(weights, 4) * (1 - u)


def bent_sums(corners: FloatArray, moved: FloatArray) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of the cones from the origin to bent triangles; corners and moved (n, 3, 3)."""
    volume, first, second = 0.0, np.zeros(3), np.zeros((3, 3))
    a = np.ascontiguousarray(corners.transpose(1, 2, 0))
    d = np.ascontiguousarray(4 * moved.transpose(1, 2, 0))
    side_u, side_v = a[1] - a[0], a[2] - a[0]
    for (p, u, v), weight in zip(*_rule(), strict=True):
        r = p * a[0] + u * a[1] + v * a[2] + (u * v) * d[0] + (v * p) * d[1] + (p * u) * d[2]
        along_u = side_u + v * d[0] - v * d[1] + (p - u) * d[2]
        along_v = side_v + u * d[0] + (p - v) * d[1] - u * d[2]
        flux = weight * _triple(r, along_u, along_v)
        volume += float(flux.sum()) / 3
        weighted = r * flux
        first += weighted.sum(axis=1) / 4
        second += weighted @ r.T / 5
    return volume, first, second


def dome_sums(corners: FloatArray, dome: Dome, heights: FloatArray) -> tuple[float, FloatArray, FloatArray]:
    """Return V, ∫r and ∫r rᵀ of what lies between tapered surfaces z = q/ω and the quadratic ones over triangles.

    corners (n, 3, 3); heights (n, 3) over the middles of the edges.
    """
    volume, first, second = 0.0, np.zeros(3), np.zeros((3, 3))
    a = np.ascontiguousarray(corners.transpose(1, 2, 0))
    quadratics = [0.5 * (dome.omegas[(k + 1) % 3] + dome.omegas[(k + 2) % 3]) * heights[:, k] for k in range(3)]
    normal = np.cross(a[1] - a[0], a[2] - a[0], axis=0)
    for (p, u, v), weight in zip(*_rule(), strict=True):
        tapered = u * v * quadratics[0] + v * p * quadratics[1] + p * u * quadratics[2]
        quadratic = u * v * heights[:, 0] + v * p * heights[:, 1] + p * u * heights[:, 2]
        omega = p * dome.omegas[0] + u * dome.omegas[1] + v * dome.omegas[2]
        thick = 4 * weight * np.sqrt(np.einsum("in,in->n", normal, normal)) * (tapered / omega - quadratic)
        r = p * a[0] + u * a[1] + v * a[2]
        volume += float(thick.sum())
        first += r @ thick
        second += (r * thick) @ r.T
    return volume, first, second


def _triple(r: FloatArray, u: FloatArray, v: FloatArray) -> FloatArray:
    return np.asarray(
        r[0] * (u[1] * v[2] - u[2] * v[1]) + r[1] * (u[2] * v[0] - u[0] * v[2]) + r[2] * (u[0] * v[1] - u[1] * v[0])
    )
