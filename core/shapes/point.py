"""The point mass."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.measure import Measure
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import Mark, across
from core.shapes.sphere import ball


@register
@dataclass(frozen=True)
class PointMass(Shape):
    """All mass in the origin; moments of 1 kg. Its one dimension (...) in m says how large its mark is drawn."""

    key: ClassVar[str] = "point mass"
    title: ClassVar[str] = "point mass"
    measure: ClassVar[Measure] = "pieces"
    note: ClassVar[str] = "It has no size: about its own centre it has no inertia, whatever its mark is drawn like."
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("mark", "diameter of its mark", 0.01, symbol="⌀"),)

    mark: ArrayLike

    def moments(self) -> Moments:
        """Return the moments of 1 kg in the origin."""
        one, none = np.ones(np.shape(self.mark)), np.zeros(())
        return upright_moments(one, none, (none, none, none))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (across("mark", self.single("mark"), 0),)

    def facets(self, steps: int = 48) -> Facets:
        """Return a ball to draw, in m; steps is rounded up to n × 4."""
        return ball(np.full(3, self.single("mark")), steps)
