"""Circular, square and rectangular hollow sections."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.shapes.base import Dimension, register
from core.shapes.marks import ABOVE, BACK, SIDE, across, along_x, along_y, along_z, radius, span
from core.shapes.profile.edges import Edges
from core.shapes.sections.section import LENGTH, Section, stacked

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.shapes.marks import Mark

_RADII = (
    Dimension("outer_radius", "outer corner radius", 0.006, symbol="ro", may_be_zero=True),
    Dimension("inner_radius", "inner corner radius", 0.004, symbol="ri", may_be_zero=True),
)


@register
@dataclass(frozen=True)
class CircularHollowSection(Section):
    """A round tube about the z axis, given by its wall. Lengths (...) in m."""

    key: ClassVar[str] = "circular hollow section"
    title: ClassVar[str] = "circular hollow section"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("diameter", "outer diameter", 0.0483, symbol="⌀D"),
        Dimension("wall", "wall thickness", 0.0032, symbol="t"),
        LENGTH,
    )

    diameter: ArrayLike
    wall: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a wall that leaves nothing hollow.

        Raises:
            ShapeError: the wall is as thick as the radius, or thicker.
        """
        super().check()
        refuse_wall(self, self.array("diameter"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        outer, wall, length = self.values().values()
        ends = [(x * SIDE[0], x * SIDE[1], length) for x in (outer / 2 - wall, outer / 2)]
        return (
            across("diameter", outer, 0),
            span("wall", ends[0], ends[1], ABOVE),
            along_z("length", (0, length), outer / 2),
        )

    def loops(self) -> tuple[Edges, ...]:
        """Return both circles, (..., 2) edges each, m."""
        outer = self.array("diameter") / 2
        return Edges.circle(outer), Edges.circle(outer - self.array("wall")).reversed()


@register
@dataclass(frozen=True)
class RectangularHollowSection(Section):
    """A rectangular tube centred on the z axis, its height along y. Lengths (...) in m."""

    key: ClassVar[str] = "rectangular hollow section"
    title: ClassVar[str] = "rectangular hollow section"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("height", "height", 0.08, symbol="h"),
        Dimension("width", "width", 0.04, symbol="b"),
        Dimension("wall", "wall thickness", 0.004, symbol="t"),
        *_RADII,
        LENGTH,
    )

    height: ArrayLike
    width: ArrayLike
    wall: ArrayLike
    outer_radius: ArrayLike
    inner_radius: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a wall that leaves nothing hollow, and radii that do not fit.

        Raises:
            ShapeError: there are such.
        """
        super().check()
        _refuse_hollow(self, np.minimum(self.array("height"), self.array("width")))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y = self.single("width") / 2, self.single("height") / 2
        return along_y("height", (-y, y), x, 0), *_box_marks(self, "width", x, y)

    def loops(self) -> tuple[Edges, ...]:
        """Return both rounded rectangles, (..., 8) edges each, m."""
        return _box_loops(self, self.array("width"), self.array("height"))


@register
@dataclass(frozen=True)
class SquareHollowSection(Section):
    """A square tube centred on the z axis. Lengths (...) in m."""

    key: ClassVar[str] = "square hollow section"
    title: ClassVar[str] = "square hollow section"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("side", "side", 0.05, symbol="b"),
        Dimension("wall", "wall thickness", 0.004, symbol="t"),
        *_RADII,
        LENGTH,
    )

    side: ArrayLike
    wall: ArrayLike
    outer_radius: ArrayLike
    inner_radius: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a wall that leaves nothing hollow, and radii that do not fit.

        Raises:
            ShapeError: there are such.
        """
        super().check()
        _refuse_hollow(self, self.array("side"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x = self.single("side") / 2
        return _box_marks(self, "side", x, x)

    def loops(self) -> tuple[Edges, ...]:
        """Return both rounded squares, (..., 8) edges each, m."""
        return _box_loops(self, self.array("side"), self.array("side"))


def rounded_box(width: FloatArray, height: FloatArray, radius: FloatArray) -> Edges:
    """Return a rectangle (..., 8 edges) about the origin, counter-clockwise, its corners rounded; m."""
    x, y = width / 2, height / 2
    corners = stacked((-x, -y), (x, -y), (x, y), (-x, y))
    return Edges.of_corners(corners, np.broadcast_to(radius[..., None], (*radius.shape, 4)))


def refuse_wall(section: Section, across: FloatArray) -> None:
    """Refuse a section whose wall leaves nothing of its width across (...) m hollow.

    Raises:
        ShapeError: it is so.
    """
    wall = section.array("wall")
    section.refuse_where(
        2 * wall >= across, "a wall of {} leaves nothing hollow in a width of {}",
        wall, across, remedy="Make the wall thinner, or take a solid bar",
    )


def _refuse_hollow(section: Section, across: FloatArray) -> None:
    refuse_wall(section, across)
    wall, outer, inner = section.array("wall"), section.array("outer_radius"), section.array("inner_radius")
    section.refuse_where(
        2 * outer > across, "two outer corner radii of {} do not fit on a width of {}",
        outer, across, remedy="Make the outer corner radius smaller",
    )
    section.refuse_where(
        2 * inner > across - 2 * wall, "two inner corner radii of {} do not fit on an inner width of {}",
        inner, across - 2 * wall, remedy="Make the inner corner radius smaller",
    )
    # Along the diagonal: beyond this the sharper corner of the hole breaks through the rounder one outside.
    section.refuse_where(
        np.sqrt(2) * wall <= (np.sqrt(2) - 1) * (outer - inner),
        "with corner radii of {} outside and {} inside nothing is left of a wall of {} at the corners",
        outer, inner, wall, remedy="Make the inner corner radius larger, or the outer one smaller",
    )


def _box_loops(section: Section, width: FloatArray, height: FloatArray) -> tuple[Edges, ...]:
    twice = 2 * section.array("wall")
    hole = rounded_box(width - twice, height - twice, section.array("inner_radius"))
    return rounded_box(width, height, section.array("outer_radius")), hole.reversed()


def _box_marks(section: Section, width: str, x: float, y: float) -> tuple[Mark, ...]:
    """Return the marks of a rectangular tube that is 2·x wide, under the name `width`, and 2·y high; m."""
    wall, length = section.single("wall"), section.single("length")
    inner = x - wall, y - wall
    return (
        along_x(width, (-x, x), -y, 0),
        along_x("wall", (-x, wall - x), y, length, BACK),
        box_rounding("outer_radius", 2 * x, 2 * y, section.single("outer_radius"), length),
        box_rounding("inner_radius", 2 * inner[0], 2 * inner[1], section.single("inner_radius"), length, (1, 1)),
        section.length_mark(x, y),
    )


def box_rounding(
    name: str, width: float, height: float, length: float, z: float, corner: tuple[int, int] = (1, -1)
) -> Mark:
    """Return the mark of the radius `length` at one corner of a rectangle about z, at a height z; all in m."""
    right, up = corner
    centre = (right * (width / 2 - length), up * (height / 2 - length), z)
    return radius(name, centre, (right, up, 0), length)
