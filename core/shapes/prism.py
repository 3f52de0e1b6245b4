"""The bar of regular polygonal section."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import Mark, along_z, leader, span
from core.shapes.round_surface import turned_surface


@register
@dataclass(frozen=True)
class RegularPrism(Shape):
    """A bar with n equal sides along z, standing on z = 0, one edge over the +x axis. Lengths (...) in m.

    Its width is the diameter of the circle that touches all sides from within: across flats where n is even.
    """

    key: ClassVar[str] = "regular prism"
    title: ClassVar[str] = "regular prism"
    note: ClassVar[str] = "Where the number of sides is odd, the width is the diameter of the inscribed circle."
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("sides", "number of sides", 6, "count", "n", least=3, most=1000),
        Dimension("across_flats", "width across flats", 0.05, symbol="S"),
        Dimension("length", "length", 0.1, symbol="L"),
    )

    sides: ArrayLike
    across_flats: ArrayLike
    length: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·S²·(3 + tan²(π/n))/24 about the axis."""
        n, width, length = self.array("sides"), self.array("across_flats"), self.array("length")
        lean = np.tan(np.pi / n)
        across = width**2 * (3 + lean**2) / 48
        return upright_moments(n * lean * width**2 / 4 * length, length / 2, (across, across, length**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        n, width, length = self.values().values()
        turn = np.pi / n
        out, beside = (float(np.cos(turn)), float(np.sin(turn)), 0.0), (float(np.sin(turn)), -float(np.cos(turn)), 0.0)
        flat = width / 2 * np.array(out)
        facing = (out[0], -out[1], 0.0)
        return (
            leader("sides", width / 2 * np.array(facing) + [0, 0, length / 2], facing),
            span("across_flats", -flat, flat, beside),
            along_z("length", (0, length), width / 2),
        )

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - the sides are as many as they are
        """Return the sides, and the ends as fans, in m."""
        n, length = int(self.single("sides")), self.single("length")
        corner = self.single("across_flats") / 2 / np.cos(np.pi / n)
        return turned_surface([(0, 0), (corner, 0), (corner, length), (0, length)], n)
