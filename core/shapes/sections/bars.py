"""Flat, square and round bars."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.shapes.base import Dimension, register
from core.shapes.marks import across, along_x, along_y, along_z
from core.shapes.profile.edges import Edges
from core.shapes.sections.hollow_sections import box_rounding, rounded_box
from core.shapes.sections.section import LENGTH, Section

if TYPE_CHECKING:
    from core.arrays import ArrayLike
    from core.shapes.marks import Mark

_CORNER = Dimension("corner_radius", "corner radius", 0.0, symbol="r", may_be_zero=True)


@register
@dataclass(frozen=True)
class FlatBar(Section):
    """A flat bar centred on the z axis, its width along x. Lengths (...) in m."""

    key: ClassVar[str] = "flat bar"
    title: ClassVar[str] = "flat bar"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("width", "width", 0.04, symbol="b"),
        Dimension("thickness", "thickness", 0.008, symbol="t"),
        _CORNER,
        LENGTH,
    )

    width: ArrayLike
    thickness: ArrayLike
    corner_radius: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, corner radii that do not fit.

        Raises:
            ShapeError: there are such.
        """
        super().check()
        radius, across = self.array("corner_radius"), np.minimum(self.array("width"), self.array("thickness"))
        self.refuse_where(
            2 * radius > across, "two corner radii of {} do not fit on a side of {}",
            radius, across, remedy="Make the corner radius smaller",
        )

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, length = self.single("width") / 2, self.single("thickness") / 2, self.single("length")
        return (
            along_x("width", (-x, x), -y, 0),
            along_y("thickness", (-y, y), x, 0),
            box_rounding("corner_radius", 2 * x, 2 * y, self.single("corner_radius"), length),
            self.length_mark(x, y),
        )

    def loops(self) -> tuple[Edges, ...]:
        """Return the rounded rectangle, (..., 8) edges, m."""
        return (rounded_box(self.array("width"), self.array("thickness"), self.array("corner_radius")),)


@register
@dataclass(frozen=True)
class SquareBar(Section):
    """A square bar centred on the z axis. Lengths (...) in m."""

    key: ClassVar[str] = "square bar"
    title: ClassVar[str] = "square bar"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("side", "side", 0.02, symbol="a"), _CORNER, LENGTH)

    side: ArrayLike
    corner_radius: ArrayLike
    length: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, corner radii that do not fit.

        Raises:
            ShapeError: there are such.
        """
        super().check()
        radius, side = self.array("corner_radius"), self.array("side")
        self.refuse_where(
            2 * radius > side, "two corner radii of {} do not fit on a side of {}",
            radius, side, remedy="Make the corner radius smaller",
        )

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, length = self.single("side") / 2, self.single("length")
        return (
            along_x("side", (-x, x), -x, 0),
            box_rounding("corner_radius", 2 * x, 2 * x, self.single("corner_radius"), length),
            self.length_mark(x, x),
        )

    def loops(self) -> tuple[Edges, ...]:
        """Return the rounded square, (..., 8) edges, m."""
        return (rounded_box(self.array("side"), self.array("side"), self.array("corner_radius")),)


@register
@dataclass(frozen=True)
class RoundBar(Section):
    """A round bar about the z axis. Lengths (...) in m."""

    key: ClassVar[str] = "round bar"
    title: ClassVar[str] = "round bar"
    dimensions: ClassVar[tuple[Dimension, ...]] = (Dimension("diameter", "diameter", 0.02, symbol="⌀d"), LENGTH)

    diameter: ArrayLike
    length: ArrayLike

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        diameter, length = self.values().values()
        return across("diameter", diameter, 0), along_z("length", (0, length), diameter / 2)

    def loops(self) -> tuple[Edges, ...]:
        """Return the circle, (..., 2) edges, m."""
        return (Edges.circle(self.array("diameter") / 2),)
