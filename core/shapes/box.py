"""The rectangular block."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_box, upright_moments
from core.shapes.marks import SIDE, Mark, along_x, along_y, span

# The corners of the unit block in binary order (x fastest), and its faces seen from outside.
_CORNERS = np.array([[x, y, z] for z in (0, 1) for y in (-0.5, 0.5) for x in (-0.5, 0.5)])
_FACES = ((0, 2, 3, 1), (4, 5, 7, 6), (0, 1, 5, 4), (2, 6, 7, 3), (0, 4, 6, 2), (1, 3, 7, 5))


@register
@dataclass(frozen=True)
class Box(Shape):
    """A rectangular block, centred in x and y, standing on z = 0. Lengths (...) in m."""

    key: ClassVar[str] = "box"
    title: ClassVar[str] = "box"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("length_x", "length along x", 0.1, symbol="L"),
        Dimension("length_y", "width along y", 0.06, symbol="W"),
        Dimension("length_z", "height along z", 0.04, symbol="H"),
    )

    length_x: ArrayLike
    length_y: ArrayLike
    length_z: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; mean square of each coordinate = length²/12."""
        x, y, z = self.array("length_x"), self.array("length_y"), self.array("length_z")
        return upright_moments(x * y * z, z / 2, (x**2 / 12, y**2 / 12, z**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, z = (self.single("length_x") / 2, self.single("length_y") / 2, self.single("length_z"))
        return (
            along_x("length_x", (-x, x), -y, 0),
            along_y("length_y", (-y, y), x, 0),
            span("length_z", (x, y, 0), (x, y, z), SIDE),
        )

    def box(self) -> FloatArray:
        """Return the corners of the block, (2, 3) m."""
        return upright_box(*(self.single(name) for name in ("length_x", "length_y", "length_z")))

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - a box has nothing round to divide
        """Return the twelve facets of the block, in m."""
        lengths = [self.single(name) for name in ("length_x", "length_y", "length_z")]
        corners = [corner for a, b, c, d in _FACES for corner in ((a, b, c), (a, c, d))]
        return Facets(_CORNERS * lengths, corners)
