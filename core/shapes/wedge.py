"""The ramp."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register
from core.shapes.marks import OTHER_SIDE, Mark, along_x, along_y, span

# The base's corners, then the upper edge; the steep face looks to −x.
_CORNERS = np.array([[-0.5, -0.5, 0], [0.5, -0.5, 0], [0.5, 0.5, 0], [-0.5, 0.5, 0], [-0.5, -0.5, 1], [-0.5, 0.5, 1]])
_FACES = ((0, 2, 1), (0, 3, 2), (0, 4, 5), (0, 5, 3), (1, 2, 5), (1, 5, 4), (0, 1, 4), (3, 5, 2))


@register
@dataclass(frozen=True)
class Wedge(Shape):
    """A ramp: a right-angled triangle in the x-z plane, drawn out along y. Lengths (...) in m.

    Its rectangular base lies on z = 0, centred in x and y. The upright face stands at the end of lowest x, and the
    slope runs down from its top to the edge of highest x.
    """

    key: ClassVar[str] = "wedge"
    title: ClassVar[str] = "wedge"
    note: ClassVar[str] = "The upright face stands at the end of lowest x, and the slope runs down towards +x."
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("length_x", "length along x", 0.1, symbol="L"),
        Dimension("length_y", "width along y", 0.05, symbol="W"),
        Dimension("height", "height of the upright face", 0.04, symbol="H"),
    )

    length_x: ArrayLike
    length_y: ArrayLike
    height: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density.

        The triangle's centre lies a third of each leg from the right angle; the means of squares about it are
        L²/18 and H²/18, and that of the product is −L·H/36 (from memory; held against quadrature in the tests).
        """
        x, y, h = np.broadcast_arrays(self.array("length_x"), self.array("length_y"), self.array("height"))
        volume = np.asarray(x * y * h / 2)
        centre = np.stack([-x / 6, np.zeros_like(x), h / 3], axis=-1)
        spread = np.zeros((*volume.shape, 3, 3))
        for axis, square in enumerate((x**2 / 18, y**2 / 12, h**2 / 18)):
            spread[..., axis, axis] = volume * square
        spread[..., 0, 2] = spread[..., 2, 0] = -volume * x * h / 36
        return Moments(volume, centre, spread)

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, height = self.single("length_x") / 2, self.single("length_y") / 2, self.single("height")
        return (
            along_x("length_x", (-x, x), -y, 0),
            along_y("length_y", (-y, y), x, 0),
            span("height", (-x, -y, 0), (-x, -y, height), OTHER_SIDE),
        )

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - a wedge has nothing round to divide
        """Return the eight facets of the wedge, in m."""
        return Facets(_CORNERS * [self.single(name) for name in ("length_x", "length_y", "height")], _FACES)
