"""Independent routes to mass properties, and the comparison to their own size; none of them uses core's formulas."""

from __future__ import annotations

from collections import Counter
from typing import TYPE_CHECKING

import numpy as np

from core.moments import Moments

if TYPE_CHECKING:
    from collections.abc import Callable

    from core.facets import Facets

# Degree-2 rule on the tetrahedron: four points of equal weight, exact for quadratics (Keast 1986; Stroud 1971).
_NEAR, _FAR = (5 + 3 * 5**0.5) / 20, (5 - 5**0.5) / 20
_RULE = _FAR + (_NEAR - _FAR) * np.eye(4)


def assert_same_body(got: Moments, expected: Moments, *, rel: float, size: float | None = None) -> None:
    """Compare two single bodies or batches: mass, centre against a length, second moment against mass × length².

    size in m is the scale of the bodies; without it their own largest radius of gyration and distance.
    """
    mass = np.abs(expected.mass).max()
    if size is None:
        gyration = np.sqrt(np.abs(expected.spread).max() / mass)
        size = float(max(gyration, np.abs(expected.centre).max()))
    np.testing.assert_allclose(got.mass, expected.mass, rtol=rel, atol=rel * mass)
    np.testing.assert_allclose(got.centre, expected.centre, rtol=0, atol=rel * size)
    np.testing.assert_allclose(got.spread, expected.spread, rtol=0, atol=rel * mass * size**2)


def tensor_of_points(masses: np.ndarray, places: np.ndarray, about: np.ndarray) -> np.ndarray:
    """Sum the inertia tensor (3, 3) of point masses about a point, element by element as textbooks write it."""
    tensor = np.zeros((3, 3))
    for mass, (x, y, z) in zip(masses, np.asarray(places) - about, strict=True):
        tensor += mass * np.array(
            [
                [y * y + z * z, -x * y, -x * z],
                [-x * y, x * x + z * z, -y * z],
                [-x * z, -y * z, x * x + y * y],
            ]
        )
    return tensor


def points_like(body: Moments) -> tuple[np.ndarray, np.ndarray]:
    """Return six equal point masses (6,) and their places (6, 3) with the same moments as a single body."""
    eigenvalues, axes = np.linalg.eigh(body.spread)
    arms = np.sqrt(3 * np.maximum(eigenvalues, 0) / body.mass)[:, None] * axes.T
    return np.full(6, float(body.mass) / 6), np.concatenate([body.centre + arms, body.centre - arms])


def moments_of_facets(facets: Facets) -> Moments:
    """Integrate a closed surface with quadrature on the tetrahedra between its facets and its mean point."""
    peak = facets.points.mean(axis=0)
    corners = facets.triangles - peak
    volumes = np.linalg.det(corners) / 6
    solids = np.concatenate([np.zeros((len(corners), 1, 3)), corners], axis=1)
    nodes = np.einsum("qk,nki->nqi", _RULE, solids)
    weights = volumes[:, None] / 4
    volume = volumes.sum()
    centre = (weights[..., None] * nodes).sum(axis=(0, 1)) / volume
    apart = nodes - centre
    return Moments(
        volume,
        peak + centre,
        np.einsum("nq,nqi,nqj->ij", np.broadcast_to(weights, nodes.shape[:2]), apart, apart),
    )


def moments_of_sheet(facets: Facets) -> Moments:
    """Integrate over the facets themselves, at 1 kg/m², with the edge midpoints rule (exact for quadratics)."""
    a, b, c = np.moveaxis(facets.triangles, 1, 0)
    weights = np.linalg.norm(np.cross(b - a, c - a), axis=1)[:, None] / 6
    nodes = np.stack([a + b, b + c, c + a], axis=1) / 2
    area = 3 * weights.sum()
    centre = (weights[..., None] * nodes).sum(axis=(0, 1)) / area
    apart = nodes - centre
    spread = np.einsum("nq,nqi,nqj->ij", np.broadcast_to(weights, nodes.shape[:2]), apart, apart)
    return Moments(area, centre, spread)


def directed_edges_cancel(facets: Facets) -> bool:
    """Return whether each directed edge is met by its reverse as often as it occurs."""
    corners = facets.corners
    edges = Counter(
        map(tuple, np.concatenate([corners[:, [0, 1]], corners[:, [1, 2]], corners[:, [2, 0]]]).tolist())
    )
    return all(edges[end, start] == number for (start, end), number in edges.items())


def revolved_by_quadrature(
    outer: Callable[[float], float],
    bottom: float,
    top: float,
    inner: Callable[[float], float] = lambda _z: 0.0,
) -> Moments:
    """Integrate a body of revolution about z slice by slice, at unit density (adaptive Gauss–Kronrod quadrature)."""
    from scipy.integrate import quad

    def integral(slice_value: Callable[[float, float, float], float]) -> float:
        return quad(lambda z: slice_value(outer(z), inner(z), z), bottom, top, epsabs=0, epsrel=1e-12)[0]

    volume = integral(lambda r, i, _z: np.pi * (r * r - i * i))
    # Heights above the bottom, so that no integral is 0 and its relative error means something.
    height = bottom + integral(lambda r, i, z: np.pi * (r * r - i * i) * (z - bottom)) / volume
    across = integral(lambda r, i, _z: np.pi / 4 * (r**4 - i**4))
    along = integral(lambda r, i, z: np.pi * (r * r - i * i) * (z - height) ** 2)
    return Moments(volume, [0, 0, height], np.diag([across, across, along]))
