"""Rod and ring: bodies that have a length and no thickness."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.measure import Measure
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import Mark, across, along_z
from core.shapes.round_surface import turned_surface
from core.shapes.torus import torus_surface

# How thick a rod or ring is drawn, relative to its length or diameter.
DRAWN_THICKNESS = 0.02


@register
@dataclass(frozen=True)
class ThinRod(Shape):
    """A slender straight rod along z, from z = 0 up. Length (...) in m; moments at 1 kg/m."""

    key: ClassVar[str] = "thin rod"
    title: ClassVar[str] = "thin rod"
    measure: ClassVar[Measure] = "length"
    note: ClassVar[str] = "Its thickness is neglected, so it has no inertia about its own axis."
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("length", "length", 0.2, symbol="L"),)

    length: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m; J = m·L²/12 across the rod through its middle."""
        length, none = self.array("length"), np.zeros(())
        return upright_moments(length, length / 2, (none, none, length**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (along_z("length", (0, self.single("length"))),)

    def facets(self, steps: int = 48) -> Facets:
        """Return a bar to draw, in m, DRAWN_THICKNESS of its length thick."""
        length = self.single("length")
        radius = DRAWN_THICKNESS * length / 2
        return turned_surface([(0, 0), (radius, 0), (radius, length), (0, length)], steps)


@register
@dataclass(frozen=True)
class ThinRing(Shape):
    """A slender round ring about z in the plane z = 0. Diameter (...) in m; moments at 1 kg/m."""

    key: ClassVar[str] = "thin ring"
    title: ClassVar[str] = "thin ring"
    measure: ClassVar[Measure] = "length"
    note: ClassVar[str] = "Its thickness is neglected: all of it lies at the diameter given."
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "mean diameter", 0.2, symbol="⌀D"),)

    diameter: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m; J = m·D²/4 about the axis, half of it about a diameter."""
        diameter, none = self.array("diameter"), np.zeros(())
        return upright_moments(np.pi * diameter, none, (diameter**2 / 8, diameter**2 / 8, none))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (across("diameter", self.single("diameter"), 0),)

    def facets(self, steps: int = 48) -> Facets:
        """Return a torus to draw, in m, DRAWN_THICKNESS of its diameter thick."""
        diameter = self.single("diameter")
        return torus_surface(diameter, DRAWN_THICKNESS * diameter, steps)
