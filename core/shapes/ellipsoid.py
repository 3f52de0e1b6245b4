"""The ellipsoid."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import Mark, along_x, along_y, along_z
from core.shapes.sphere import ball


@register
@dataclass(frozen=True)
class Ellipsoid(Shape):
    """A solid ellipsoid centred on the origin, its axes along x, y and z. Full lengths (...) in m."""

    key: ClassVar[str] = "ellipsoid"
    title: ClassVar[str] = "ellipsoid"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("length_x", "axis along x", 0.1, symbol="A"),
        Dimension("length_y", "axis along y", 0.07, symbol="B"),
        Dimension("length_z", "axis along z", 0.05, symbol="C"),
    )

    length_x: ArrayLike
    length_y: ArrayLike
    length_z: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; mean square of each coordinate = axis²/20."""
        x, y, z = self.array("length_x"), self.array("length_y"), self.array("length_z")
        return upright_moments(np.pi / 6 * x * y * z, np.zeros(()), (x**2 / 20, y**2 / 20, z**2 / 20))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, z = (length / 2 for length in self.values().values())
        return along_x("length_x", (-x, x), 0, 0), along_y("length_y", (-y, y), 0, 0), along_z("length_z", (-z, z))

    def facets(self, steps: int = 48) -> Facets:
        """Return the facets of a sphere, stretched, in m; steps is rounded up to n × 4."""
        return ball(np.array([self.single(name) for name in ("length_x", "length_y", "length_z")]), steps)
