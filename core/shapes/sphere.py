"""The ball, solid and with a cavity."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray, IntArray
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.joining import inside_out, together
from core.shapes.marks import ABOVE, Mark, across
from core.shapes.round_surface import check_steps


@register
@dataclass(frozen=True)
class Sphere(Shape):
    """A solid sphere centred on the origin. Diameter (...) in m."""

    key: ClassVar[str] = "sphere"
    title: ClassVar[str] = "sphere"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "diameter", 0.06, symbol="S⌀D"),)

    diameter: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·D²/10 about every axis through the centre."""
        diameter = self.array("diameter")
        square = diameter**2 / 20
        return upright_moments(np.pi / 6 * diameter**3, np.zeros(()), (square, square, square))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return (across("diameter", self.single("diameter"), 0),)

    def facets(self, steps: int = 48) -> Facets:
        """Return facets of similar size, in m, corners on the sphere; steps is rounded up to n × 4."""
        return ball(np.full(3, self.single("diameter")), steps)


@register
@dataclass(frozen=True)
class HollowSphere(Shape):
    """A sphere with a concentric spherical cavity, centred on the origin. Diameters (...) in m."""

    key: ClassVar[str] = "hollow sphere"
    title: ClassVar[str] = "hollow sphere"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("outer_diameter", "outer diameter", 0.06, symbol="S⌀D"),
        Dimension("inner_diameter", "inner diameter", 0.05, symbol="S⌀d", may_be_zero=True),
    )

    outer_diameter: ArrayLike
    inner_diameter: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a cavity that leaves no wall.

        Raises:
            ShapeError: the inner diameter is not less than the outer one.
        """
        super().check()
        outer, inner = self.array("outer_diameter"), self.array("inner_diameter")
        self.refuse_where(
            inner >= outer,
            "the inner diameter {} leaves no wall within the outer diameter {}",
            inner, outer, remedy="Make the inner diameter smaller, or the outer one larger",
        )

    def moments(self) -> Moments:
        """Return the moments at unit density; D³ − d³ and D⁵ − d⁵ are divided by D − d, which alone may be small."""
        a, b = self.array("outer_diameter"), self.array("inner_diameter")
        cubes = a**2 + a * b + b**2
        square = (a**4 + a**3 * b + a**2 * b**2 + a * b**3 + b**4) / (20 * cubes)
        return upright_moments(np.pi / 6 * (a - b) * cubes, np.zeros(()), (square, square, square))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        outer, inner = self.values().values()
        return across("outer_diameter", outer, 0), across("inner_diameter", inner, 0, ABOVE)

    def facets(self, steps: int = 48) -> Facets:
        """Return the outer surface and that of the cavity, in m; steps is rounded up to n × 4."""
        outer, inner = self.single("outer_diameter"), self.single("inner_diameter")
        surface = ball(np.full(3, outer), steps)
        return together([surface, inside_out(ball(np.full(3, inner), steps))]) if inner > 0 else surface


def ball(diameters: FloatArray, steps: int) -> Facets:
    """Return the surface of a ball stretched to three diameters (3,) in m along the axes, centred on the origin.

    Raises:
        ShapeError: too few steps; they are rounded up to n × 4.
    """
    check_steps(steps)
    upper, facets = _hemisphere(-(-steps // 4))
    # The lower half is the upper one's mirror image; both share the points of the equator.
    below = upper[:, 2] > 0
    image = np.where(below, len(upper) + np.cumsum(below) - 1, np.arange(len(upper)))
    points = np.concatenate([upper, upper[below] * [1, 1, -1]])
    return Facets(points * diameters / 2, np.concatenate([facets, image[facets[:, ::-1]]]))


def _hemisphere(rings: int) -> tuple[FloatArray, IntArray]:
    """Return points (n, 3) and facets (m, 3) of the upper unit half sphere.

    Ring r of `rings` lies at r/rings of the way from pole to equator and has 4·r points: so no facet is a
    sliver, neither at the pole nor at the equator.
    """
    ring = np.repeat(np.arange(1, rings + 1), 4 * np.arange(1, rings + 1))
    place = np.arange(len(ring)) - 2 * ring * (ring - 1)
    polar, around = np.pi / 2 * ring / rings, np.pi / 2 * place / ring
    height = np.where(ring == rings, 0.0, np.cos(polar))
    points = np.stack([np.sin(polar) * np.cos(around), np.sin(polar) * np.sin(around), height], axis=-1)

    quarter, row, step = (grid.ravel() for grid in np.mgrid[0:4, 0:rings, 0:rings])
    pointing_up = _corners(quarter, [(row, step), (row + 1, step), (row + 1, step + 1)])[step <= row]
    pointing_down = _corners(quarter, [(row, step), (row + 1, step + 1), (row, step + 1)])[step < row]
    return np.concatenate([[[0.0, 0.0, 1.0]], points]), np.concatenate([pointing_up, pointing_down])


def _corners(quarter: IntArray, spots: list[tuple[IntArray, IntArray]]) -> IntArray:
    """Return point numbers (m, 3) for spots (ring, step) within a quarter of the hemisphere."""
    columns = [
        np.where(ring == 0, 0, 1 + 2 * ring * (ring - 1) + (quarter * ring + step) % np.maximum(4 * ring, 1))
        for ring, step in spots
    ]
    return np.stack(columns, axis=-1)
