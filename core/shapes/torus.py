"""The round ring of round section."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import FEWEST_STEPS, Dimension, Shape, register, upright_moments
from core.shapes.marks import ABOVE, SIDE, Mark, across, span
from core.shapes.round_surface import turned_surface


@register
@dataclass(frozen=True)
class Torus(Shape):
    """A ring of round section about z, centred on the origin. Diameters (...) in m.

    The hole may close to a point; a section so wide that it would pass through itself is refused.
    """

    key: ClassVar[str] = "torus"
    title: ClassVar[str] = "torus"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("mean_diameter", "mean diameter", 0.1, symbol="⌀D"),
        Dimension("section_diameter", "diameter of the section", 0.02, symbol="⌀d"),
    )

    mean_diameter: ArrayLike
    section_diameter: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a section that would pass through itself.

        Raises:
            ShapeError: the section is wider than the mean diameter.
        """
        super().check()
        refuse_spindle(self)

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·(D²/4 + 3·d²/16) about the axis."""
        a, b = self.array("mean_diameter") / 2, self.array("section_diameter") / 2
        across = (4 * a**2 + 3 * b**2) / 8
        return upright_moments(2 * np.pi**2 * a * b**2, np.zeros(()), (across, across, b**2 / 4))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return torus_marks(self.single("mean_diameter"), self.single("section_diameter"))

    def facets(self, steps: int = 48) -> Facets:
        """Return a ring, in m, its section in half as many steps, all points on the true surface."""
        return torus_surface(self.single("mean_diameter"), self.single("section_diameter"), steps)


def refuse_spindle(shape: Shape) -> None:
    """Refuse a shape whose `section_diameter` is more than its `mean_diameter`.

    Raises:
        ShapeError: it is.
    """
    section, mean = shape.array("section_diameter"), shape.array("mean_diameter")
    shape.refuse_where(
        section > mean,
        "a section of {} on a mean diameter of {} passes through itself",
        section, mean, remedy="Make the section smaller, or the mean diameter larger",
    )


def torus_surface(mean_diameter: float, section_diameter: float, steps: int) -> Facets:
    """Return the surface of a torus about z, centred on the origin; diameters in m.

    Raises:
        ShapeError: too few steps.
    """
    a, b = mean_diameter / 2, section_diameter / 2
    # An even number, so that the innermost circle is drawn: it closes to a point where a = b.
    around = max(FEWEST_STEPS + 1, 2 * -(-steps // 4))
    angle = 2 * np.pi * np.arange(around) / around
    return turned_surface(np.stack([a + b * np.cos(angle), b * np.sin(angle)], axis=-1), steps)


def torus_marks(mean_diameter: float, section_diameter: float) -> tuple[Mark, ...]:
    """Return the marks of a torus about z, centred on the origin; diameters in m."""
    ends = [tuple((mean_diameter + sign * section_diameter) / 2 * part for part in SIDE) for sign in (-1, 1)]
    return across("mean_diameter", mean_diameter, 0), span("section_diameter", ends[0], ends[1], ABOVE)
