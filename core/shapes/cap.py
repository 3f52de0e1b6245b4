"""Half a ball, and the cap that a plane cuts off a ball."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import OTHER_SIDE, Mark, across, along_z, span
from core.shapes.round_surface import check_steps, turned_surface


@register
@dataclass(frozen=True)
class Hemisphere(Shape):
    """Half a ball, its flat side on z = 0 and the dome above. Diameter (...) in m."""

    key: ClassVar[str] = "hemisphere"
    title: ClassVar[str] = "hemisphere"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "diameter", 0.06, symbol="S⌀D"),)

    diameter: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; the centre lies at 3·D/16, J = m·D²/10 about the axis."""
        diameter = self.array("diameter")
        across, along = diameter**2 / 20, 19 * diameter**2 / 1280
        return upright_moments(np.pi / 12 * diameter**3, 3 * diameter / 16, (across, across, along))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (across("diameter", self.single("diameter"), 0),)

    def facets(self, steps: int = 48) -> Facets:
        """Return rings from the pole to the flat side, in m, all points on the true surface."""
        diameter = self.single("diameter")
        return turned_surface([(0, 0), *cap_line(diameter, diameter / 2, steps)], steps)


@register
@dataclass(frozen=True)
class SphericalCap(Shape):
    """What a plane cuts off a ball, its flat side on z = 0 and the dome above. Lengths (...) in m.

    The height runs from a thin lens to the whole ball, which then stands on z = 0.
    """

    key: ClassVar[str] = "spherical cap"
    title: ClassVar[str] = "spherical cap"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("sphere_diameter", "diameter of the sphere", 0.1, symbol="S⌀D"),
        Dimension("height", "height of the cap", 0.03, symbol="h"),
    )

    sphere_diameter: ArrayLike
    height: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a cap higher than its sphere.

        Raises:
            ShapeError: the height is more than the sphere's diameter.
        """
        super().check()
        refuse_high_cap(self)

    def moments(self) -> Moments:
        """Return the moments at unit density.

        With s = D − h, what the plane leaves below it, the squared radius u below the pole is u·(s + h − u), and
        every term of the integrals over u is positive: from the thinnest cap to the whole ball nothing cancels.
        """
        h = self.array("height")
        s = self.array("sphere_diameter") - h
        part = 3 * s + h
        across = h * (10 * s**2 + 5 * s * h + h**2) / (20 * part)
        along = h**2 * (10 * s**2 + 8 * s * h + h**2) / (20 * part**2)
        return upright_moments(np.pi * h**2 * part / 6, h * (2 * s + h) / (2 * part), (across, across, along))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return cap_marks(self.single("sphere_diameter"), self.single("height"))

    def facets(self, steps: int = 48) -> Facets:
        """Return rings from the pole to the flat side, in m, all points on the true surface."""
        line = cap_line(self.single("sphere_diameter"), self.single("height"), steps)
        return turned_surface([(0, 0), *line], steps)


def refuse_high_cap(shape: Shape) -> None:
    """Refuse a shape whose `height` is more than its `sphere_diameter`.

    Raises:
        ShapeError: it is.
    """
    height, diameter = shape.array("height"), shape.array("sphere_diameter")
    shape.refuse_where(
        height > diameter,
        "the height {} is more than the sphere's diameter {}",
        height, diameter, remedy="Make the cap lower, or the sphere larger",
    )


def cap_line(diameter: float, height: float, steps: int) -> FloatArray:
    """Return radius and z (n, 2) in m along the dome of a cap on z = 0, from its rim up to the pole.

    Raises:
        ShapeError: too few steps.
    """
    check_steps(steps)
    half_opening = np.arcsin(np.sqrt(height / diameter))
    angle = half_opening * np.linspace(1, 0, -(-steps // 4) + 1)
    radius, z = diameter * np.sin(angle) * np.cos(angle), height - diameter * np.sin(angle) ** 2
    z[0] = 0.0
    if height == diameter:
        radius[0] = 0.0
    return np.stack([radius, z], axis=-1)


def cap_marks(diameter: float, height: float) -> tuple[Mark, ...]:
    """Return the marks of a cap on z = 0: its sphere's diameter, m, from the pole down, and its height."""
    pole = (0.0, 0.0, height)
    return (
        span("sphere_diameter", (0, 0, height - diameter), pole, OTHER_SIDE),
        along_z("height", (0, height)),
    )
