"""The pyramid on a rectangle, and the regular tetrahedron."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import Mark, along_x, along_y, along_z, span
from core.shapes.round_surface import turned_surface

_CORNERS = np.array([[-0.5, -0.5, 0], [0.5, -0.5, 0], [0.5, 0.5, 0], [-0.5, 0.5, 0], [0, 0, 1]])
_FACES = ((0, 2, 1), (0, 3, 2), (0, 1, 4), (1, 2, 4), (2, 3, 4), (3, 0, 4))


@register
@dataclass(frozen=True)
class Pyramid(Shape):
    """A pyramid on a rectangle, its base on z = 0 and its tip above the base's middle, on z. Lengths (...) in m."""

    key: ClassVar[str] = "pyramid"
    title: ClassVar[str] = "pyramid"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("length_x", "base along x", 0.08, symbol="L"),
        Dimension("length_y", "base along y", 0.06, symbol="W"),
        Dimension("height", "height", 0.1, symbol="h"),
    )

    length_x: ArrayLike
    length_y: ArrayLike
    height: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; the centre lies at h/4, J = m·(L² + W²)/20 about the axis."""
        x, y, h = self.array("length_x"), self.array("length_y"), self.array("height")
        return upright_moments(x * y * h / 3, h / 4, (x**2 / 20, y**2 / 20, 3 * h**2 / 80))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, height = self.values().values()
        return (
            along_x("length_x", (-x / 2, x / 2), -y / 2, 0),
            along_y("length_y", (-y / 2, y / 2), x / 2, 0),
            along_z("height", (0, height)),
        )

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - a pyramid has nothing round to divide
        """Return the six facets of the pyramid, in m."""
        return Facets(_CORNERS * [self.single(name) for name in ("length_x", "length_y", "height")], _FACES)


@register
@dataclass(frozen=True)
class Tetrahedron(Shape):
    """A tetrahedron of six equal edges, its base on z = 0 with a corner over +x, its tip on z. Edge (...) in m."""

    key: ClassVar[str] = "tetrahedron"
    title: ClassVar[str] = "regular tetrahedron"
    note: ClassVar[str] = "Stands on one face, with a corner of it over the +x axis."
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("edge", "length of an edge", 0.08, symbol="a"),)

    edge: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; J = m·a²/20 about every axis through the centre."""
        edge = self.array("edge")
        square = edge**2 / 40
        return upright_moments(edge**3 / 72**0.5, edge / 24**0.5, (square, square, square))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        edge = self.single("edge")
        reach = edge / 3**0.5
        return (span("edge", (-reach / 2, -edge / 2, 0), (reach, 0, 0), (0.5, -(0.75**0.5), 0)),)

    def facets(self, steps: int = 48) -> Facets:  # noqa: ARG002 - a tetrahedron has nothing round to divide
        """Return the surface, in m, its base as a fan about its middle."""
        edge = self.single("edge")
        return turned_surface([(0, 0), (edge / 3**0.5, 0), (0, edge * (2 / 3) ** 0.5)], 3)
