"""The ball."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray, IntArray
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.round_surface import check_steps


@register
@dataclass(frozen=True)
class Sphere(Shape):
    """A solid sphere centred on the origin. Diameter (...) in m."""

    key: ClassVar[str] = "sphere"
    title: ClassVar[str] = "sphere"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "diameter", 0.06, symbol="S⌀D"),)

    diameter: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·D²/10 about every axis through the centre."""
        diameter = self.array("diameter")
        square = diameter**2 / 20
        return upright_moments(np.pi / 6 * diameter**3, np.zeros(()), (square, square, square))

    def facets(self, steps: int = 48) -> Facets:
        """Return facets of similar size, in m, corners on the sphere; steps is rounded up to n × 4."""
        check_steps(steps)
        upper, facets = _hemisphere(-(-steps // 4))
        # The lower half is the upper one's mirror image; both share the points of the equator.
        below = upper[:, 2] > 0
        image = np.where(below, len(upper) + np.cumsum(below) - 1, np.arange(len(upper)))
        points = np.concatenate([upper, upper[below] * [1, 1, -1]])
        corners = np.concatenate([facets, image[facets[:, ::-1]]])
        return Facets(points * self.single("diameter") / 2, corners)


def _hemisphere(rings: int) -> tuple[FloatArray, IntArray]:
    """Return points (n, 3) and facets (m, 3) of the upper unit half sphere.

    Ring r of `rings` lies at r/rings of the way from pole to equator and has 4·r points: so no facet is a
    sliver, neither at the pole nor at the equator.
    """
    ring = np.repeat(np.arange(1, rings + 1), 4 * np.arange(1, rings + 1))
    place = np.arange(len(ring)) - 2 * ring * (ring - 1)
    polar, around = np.pi / 2 * ring / rings, np.pi / 2 * place / ring
    height = np.where(ring == rings, 0.0, np.cos(polar))
    points = np.stack([np.sin(polar) * np.cos(around), np.sin(polar) * np.sin(around), height], axis=-1)

    quarter, row, step = (grid.ravel() for grid in np.mgrid[0:4, 0:rings, 0:rings])
    pointing_up = _corners(quarter, [(row, step), (row + 1, step), (row + 1, step + 1)])[step <= row]
    pointing_down = _corners(quarter, [(row, step), (row + 1, step + 1), (row, step + 1)])[step < row]
    return np.concatenate([[[0.0, 0.0, 1.0]], points]), np.concatenate([pointing_up, pointing_down])


def _corners(quarter: IntArray, spots: list[tuple[IntArray, IntArray]]) -> IntArray:
    """Return point numbers (m, 3) for spots (ring, step) within a quarter of the hemisphere."""
    columns = [
        np.where(ring == 0, 0, 1 + 2 * ring * (ring - 1) + (quarter * ring + step) % np.maximum(4 * ring, 1))
        for ring, step in spots
    ]
    return np.stack(columns, axis=-1)
