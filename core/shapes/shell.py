"""Shells: curved bodies that have an area and no thickness."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.measure import Measure
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.cap import cap_line, cap_marks, refuse_high_cap
from core.shapes.marks import ABOVE, Mark, across, along_z
from core.shapes.round_surface import turned_sheet
from core.shapes.sphere import ball
from core.shapes.torus import refuse_spindle, torus_marks, torus_surface

CLOSED_NOTE = "Its thickness is neglected."
OPEN_NOTE = "Its thickness is neglected, and its ends are open."


@register
@dataclass(frozen=True)
class CylindricalShell(Shape):
    """A thin round tube about z, from z = 0 up, its ends open. Lengths (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "cylindrical shell"
    title: ClassVar[str] = "cylindrical shell"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = OPEN_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("diameter", "mean diameter", 0.1, symbol="⌀D"),
        Dimension("length", "length", 0.15, symbol="L"),
    )

    diameter: ArrayLike
    length: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m²; J = m·D²/4 about the axis."""
        diameter, length = self.array("diameter"), self.array("length")
        across = diameter**2 / 8
        return upright_moments(np.pi * diameter * length, length / 2, (across, across, length**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        diameter, length = self.values().values()
        return across("diameter", diameter, 0), along_z("length", (0, length), diameter / 2)

    def facets(self, steps: int = 48) -> Facets:
        """Return the lateral surface of an inscribed prism, in m."""
        radius, length = self.single("diameter") / 2, self.single("length")
        return turned_sheet([(radius, 0), (radius, length)], steps)


@register
@dataclass(frozen=True)
class ConicalShell(Shape):
    """A thin cone about z, whole or cut off, base on z = 0, its ends open. Lengths (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "conical shell"
    title: ClassVar[str] = "conical shell"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = OPEN_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("base_diameter", "mean diameter at the base", 0.1, symbol="⌀D"),
        Dimension("top_diameter", "mean diameter at the top", 0.04, symbol="⌀d", may_be_zero=True),
        Dimension("height", "height", 0.08, symbol="h"),
    )

    base_diameter: ArrayLike
    top_diameter: ArrayLike
    height: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m²; J = m·(D² + d²)/8 about the axis.

        The area of a slice goes with its radius a·(1−t) + b·t, so the integrals over the height are those of
        straight lines (from memory; held against quadrature in the tests).
        """
        a, b, h = self.array("base_diameter") / 2, self.array("top_diameter") / 2, self.array("height")
        slant = np.hypot(h, a - b)
        across = (a**2 + b**2) / 4
        along = h**2 * (a**2 + 4 * a * b + b**2) / (18 * (a + b) ** 2)
        return upright_moments(np.pi * (a + b) * slant, h * (a + 2 * b) / (3 * (a + b)), (across, across, along))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        base, top, height = self.values().values()
        return (
            across("base_diameter", base, 0),
            across("top_diameter", top, height, ABOVE),
            along_z("height", (0, height), top / 2),
        )

    def facets(self, steps: int = 48) -> Facets:
        """Return the lateral surface of an inscribed pyramid, in m."""
        base, top, height = self.values().values()
        return turned_sheet([(base / 2, 0), (top / 2, height)], steps)


@register
@dataclass(frozen=True)
class SphericalShell(Shape):
    """A thin hollow ball centred on the origin. Diameter (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "spherical shell"
    title: ClassVar[str] = "spherical shell"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = CLOSED_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "mean diameter", 0.1, symbol="S⌀D"),)

    diameter: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m²; J = m·D²/6 about every axis through the centre."""
        diameter = self.array("diameter")
        square = diameter**2 / 12
        return upright_moments(np.pi * diameter**2, np.zeros(()), (square, square, square))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (across("diameter", self.single("diameter"), 0),)

    def facets(self, steps: int = 48) -> Facets:
        """Return facets of similar size, in m, corners on the sphere; steps is rounded up to n × 4."""
        return ball(np.full(3, self.single("diameter")), steps)


@register
@dataclass(frozen=True)
class DomedShell(Shape):
    """A thin spherical dome about z, its open rim on z = 0, from a shallow lid to a whole ball.

    Lengths (...) in m; moments at 1 kg/m². Half as high as its sphere it is the hemispherical shell.
    """

    key: ClassVar[str] = "domed shell"
    title: ClassVar[str] = "domed shell"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = OPEN_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("sphere_diameter", "mean diameter of the sphere", 0.1, symbol="S⌀D"),
        Dimension("height", "height of the dome", 0.05, symbol="h"),
    )

    sphere_diameter: ArrayLike
    height: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a dome higher than its sphere.

        Raises:
            ShapeError: the height is more than the sphere's diameter.
        """
        super().check()
        refuse_high_cap(self)

    def moments(self) -> Moments:
        """Return the moments at 1 kg/m².

        Slices of equal height of a sphere have equal areas (Archimedes), so the mass is spread evenly over the
        height; the squared radius u below the pole is u·(D − u).
        """
        d, h = self.array("sphere_diameter"), self.array("height")
        across = h * (3 * (d - h) + h) / 12
        return upright_moments(np.pi * d * h, h / 2, (across, across, h**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return cap_marks(self.single("sphere_diameter"), self.single("height"))

    def facets(self, steps: int = 48) -> Facets:
        """Return rings from the rim to the pole, in m, all points on the true surface."""
        return turned_sheet(cap_line(self.single("sphere_diameter"), self.single("height"), steps), steps)


@register
@dataclass(frozen=True)
class ToroidalShell(Shape):
    """A thin-walled ring of round section about z, centred on the origin. Lengths (...) in m; moments at 1 kg/m²."""

    key: ClassVar[str] = "toroidal shell"
    title: ClassVar[str] = "toroidal shell"
    measure: ClassVar[Measure] = "area"
    note: ClassVar[str] = CLOSED_NOTE
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("mean_diameter", "mean diameter", 0.1, symbol="⌀D"),
        Dimension("section_diameter", "mean diameter of the section", 0.03, symbol="⌀d"),
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
        """Return the moments at 1 kg/m²; J = m·(D²/4 + 3·d²/8) about the axis."""
        a, b = self.array("mean_diameter") / 2, self.array("section_diameter") / 2
        across = (2 * a**2 + 3 * b**2) / 4
        return upright_moments(4 * np.pi**2 * a * b, np.zeros(()), (across, across, b**2 / 2))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return torus_marks(self.single("mean_diameter"), self.single("section_diameter"))

    def facets(self, steps: int = 48) -> Facets:
        """Return a ring, in m, its section in half as many steps, all points on the true surface."""
        return torus_surface(self.single("mean_diameter"), self.single("section_diameter"), steps)
