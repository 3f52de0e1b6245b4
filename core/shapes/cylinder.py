"""Round bar and tube."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.errors import ShapeError
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, first_where, register, said, upright_box, upright_moments
from core.shapes.marks import ABOVE, Mark, across, along_z
from core.shapes.round_surface import turned_surface


@register
@dataclass(frozen=True)
class Cylinder(Shape):
    """A solid round bar or disc along z, standing on z = 0. Lengths (...) in m."""

    key: ClassVar[str] = "cylinder"
    title: ClassVar[str] = "cylinder"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("diameter", "diameter", 0.08, symbol="⌀D"),
        Dimension("length", "length", 0.1, symbol="L"),
    )

    diameter: ArrayLike
    length: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·D²/8 about the axis."""
        return _ring_moments(self.array("diameter"), np.zeros(()), self.array("length"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        diameter, length = self.values().values()
        return across("diameter", diameter, 0), along_z("length", (0, length), diameter / 2)

    def box(self) -> FloatArray:
        """Return the corners of the box around the bar, (2, 3) m."""
        return upright_box(self.single("diameter"), self.single("diameter"), self.single("length"))

    def facets(self, steps: int = 48) -> Facets:
        """Return a prism inscribed in the bar, in m, its ends as fans."""
        radius, length = self.single("diameter") / 2, self.single("length")
        return turned_surface([(0, 0), (radius, 0), (radius, length), (0, length)], steps)


@register
@dataclass(frozen=True)
class Tube(Shape):
    """A round tube or ring along z, standing on z = 0; without a bore the cylinder. Lengths (...) in m."""

    key: ClassVar[str] = "tube"
    title: ClassVar[str] = "tube"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("outer_diameter", "outer diameter", 0.08, symbol="⌀D"),
        Dimension("bore", "bore", 0.05, symbol="⌀d", may_be_zero=True),
        Dimension("length", "length", 0.1, symbol="L"),
    )

    outer_diameter: ArrayLike
    bore: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a bore that leaves no wall.

        Raises:
            ShapeError: the bore is as wide as the outer diameter, or wider.
        """
        super().check()
        outer, bore = self.array("outer_diameter"), self.array("bore")
        too_wide = np.asarray(bore >= outer)
        if np.any(too_wide):
            hole, around = first_where(too_wide, bore, outer)
            relation = "as wide as" if hole == around else "wider than"
            raise ShapeError(
                f"the bore {said(hole)} is {relation} the tube's outer diameter {said(around)}",
                where=self.title,
                remedy="Make the bore smaller, or the outer diameter larger",
            )

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·(D² + d²)/8 about the axis."""
        return _ring_moments(self.array("outer_diameter"), self.array("bore"), self.array("length"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        outer, bore, length = self.values().values()
        return (
            across("outer_diameter", outer, 0),
            across("bore", bore, length, ABOVE),
            along_z("length", (0, length), outer / 2),
        )

    def box(self) -> FloatArray:
        """Return the corners of the box around the tube, (2, 3) m."""
        return upright_box(self.single("outer_diameter"), self.single("outer_diameter"), self.single("length"))

    def facets(self, steps: int = 48) -> Facets:
        """Return two nested prisms with ring-shaped ends, in m, all points on the true surface."""
        outer, bore, length = (self.single(name) for name in ("outer_diameter", "bore", "length"))
        return turned_surface([(bore / 2, 0), (outer / 2, 0), (outer / 2, length), (bore / 2, length)], steps)


def _ring_moments(outer: ArrayLike, bore: ArrayLike, length: ArrayLike) -> Moments:
    """Return the moments of a tube; for a thin wall nothing cancels but D − d itself."""
    outer, bore, length = np.asarray(outer), np.asarray(bore), np.asarray(length)
    across = (outer**2 + bore**2) / 16
    volume = np.pi / 4 * (outer - bore) * (outer + bore) * length
    return upright_moments(volume, length / 2, (across, across, length**2 / 12))
