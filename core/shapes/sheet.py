"""Disc and rectangular sheet: flat bodies that have an area and no thickness."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.measure import Measure
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import ABOVE, Mark, across, along_x, along_y
from core.shapes.round_surface import turned_sheet

FLAT_NOTE = "Its thickness is neglected."

_CORNERS = np.array([[-0.5, -0.5, 0], [0.5, -0.5, 0], [0.5, 0.5, 0], [-0.5, 0.5, 0]])


@register
@dataclass(frozen=True)
class ThinDisc(Shape):
    """A thin round disc about z in the plane z = 0, with or without a hole. Lengths (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "thin disc"
    title: ClassVar[str] = "thin disc"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = FLAT_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("diameter", "diameter", 0.2, symbol="⌀D"),
        Dimension("bore", "bore", 0.0, symbol="⌀d", may_be_zero=True),
    )

    diameter: ArrayLike
    bore: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a bore that leaves no disc.

        Raises:
            ShapeError: the bore is as wide as the disc, or wider.
        """
        super().check()
        bore, diameter = self.array("bore"), self.array("diameter")
        self.refuse_where(
            bore >= diameter,
            "the bore {} leaves nothing of the diameter {}",
            bore, diameter, remedy="Make the bore smaller, or the disc larger",
        )

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m²; J = m·(D² + d²)/8 about the axis, half of it about a diameter."""
        outer, bore = self.array("diameter"), self.array("bore")
        across, none = (outer**2 + bore**2) / 16, np.zeros(())
        return upright_moments(np.pi / 4 * (outer - bore) * (outer + bore), none, (across, across, none))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        diameter, bore = self.values().values()
        return across("diameter", diameter, 0), across("bore", bore, 0, ABOVE)

    def facets(self, steps: int = 48) -> Facets:
        """Return the disc seen from above, in m, its corners on the true circles."""
        return turned_sheet([(self.single("diameter") / 2, 0), (self.single("bore") / 2, 0)], steps)


@register
@dataclass(frozen=True)
class ThinSheet(Shape):
    """A thin rectangular sheet in the plane z = 0, centred on the origin. Lengths (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "thin sheet"
    title: ClassVar[str] = "thin rectangular sheet"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = FLAT_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("length_x", "length along x", 0.3, symbol="L"),
        Dimension("length_y", "width along y", 0.2, symbol="W"),
    )

    length_x: ArrayLike
    length_y: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m²; mean square of each coordinate = length²/12."""
        x, y, none = self.array("length_x"), self.array("length_y"), np.zeros(())
        return upright_moments(x * y, none, (x**2 / 12, y**2 / 12, none))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y = (length / 2 for length in self.values().values())
        return along_x("length_x", (-x, x), -y, 0), along_y("length_y", (-y, y), x, 0)

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - a sheet has nothing round to divide
        """Return the two facets of the sheet seen from above, in m."""
        return Facets(_CORNERS * [self.single("length_x"), self.single("length_y"), 1], [(0, 1, 2), (0, 2, 3)])
