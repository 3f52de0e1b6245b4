"""I sections: with parallel flanges, and with flanges that taper towards their tips."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.shapes.base import Dimension, register
from core.shapes.marks import ABOVE, BACK, IN_PLACE, LEFT, along_x, along_y, leader, rounding
from core.shapes.sections.section import LENGTH, CorneredSection, radii_of, stacked

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.shapes.marks import Mark

# Flanges steeper than this are no flanges; standard ones taper by 5 to 14 %.
STEEPEST = np.pi / 6


@register
@dataclass(frozen=True)
class ISection(CorneredSection):
    """An I or H section with parallel flanges, centred on the z axis, its web along y. Lengths (...) in m."""

    key: ClassVar[str] = "I section"
    title: ClassVar[str] = "I section"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("height", "height", 0.1, symbol="h"),
        Dimension("width", "width of the flanges", 0.055, symbol="b"),
        Dimension("web", "web thickness", 0.0041, symbol="tw"),
        Dimension("flange", "flange thickness", 0.0057, symbol="tf"),
        Dimension("root_radius", "root radius", 0.007, symbol="r", may_be_zero=True),
        LENGTH,
    )

    height: ArrayLike
    width: ArrayLike
    web: ArrayLike
    flange: ArrayLike
    root_radius: ArrayLike
    length: ArrayLike

    def check_proportions(self) -> None:
        """Refuse a web as wide as the flanges, and flanges that leave no web.

        Raises:
            ShapeError: there are such.
        """
        refuse_no_web(self)

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        return i_marks(self, self.single("flange"), self.single("width") / 2)

    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the twelve corners (..., 12, 2) and their radii (..., 12), m."""
        flange, none = self.array("flange"), np.zeros(())
        return _i_corners(self, flange, flange, self.array("root_radius"), none)


@register
@dataclass(frozen=True)
class TaperedISection(CorneredSection):
    """An I section with tapered flanges, centred on the z axis, its web along y. Lengths (...) in m, slope in rad.

    The flange thickness is measured half way between the middle of the web and the flange's tip.
    """

    key: ClassVar[str] = "tapered I section"
    title: ClassVar[str] = "I section with tapered flanges"
    note: ClassVar[str] = "The flange thickness is measured at a quarter of the width from the tip. 14 % is 7.97°."
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("height", "height", 0.1, symbol="h"),
        Dimension("width", "width of the flanges", 0.05, symbol="b"),
        Dimension("web", "web thickness", 0.0045, symbol="tw"),
        Dimension("flange", "mean flange thickness", 0.0068, symbol="tf"),
        Dimension("root_radius", "root radius", 0.0045, symbol="r1", may_be_zero=True),
        Dimension("toe_radius", "toe radius", 0.0027, symbol="r2", may_be_zero=True),
        Dimension(
            "slope", "slope of the flanges", float(np.arctan(0.14)), "angle", "α", may_be_zero=True, most=STEEPEST
        ),
        LENGTH,
    )

    height: ArrayLike
    width: ArrayLike
    web: ArrayLike
    flange: ArrayLike
    root_radius: ArrayLike
    toe_radius: ArrayLike
    slope: ArrayLike
    length: ArrayLike

    def check_proportions(self) -> None:
        """Refuse a web as wide as the flanges, flanges that leave no web, and a taper that leaves no tip.

        Raises:
            ShapeError: there are such.
        """
        refuse_no_web(self)
        tip, root = self._tip_and_root()
        refuse_taper(self, tip, root)

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        corners, _ = self.corners()
        length, half = self.single("length"), self.single("width") / 2
        taper = (corners[4] + corners[5]) / 2
        return (
            *i_marks(self, self.single("flange"), half / 2),
            rounding("toe_radius", corners, 5, self.single("toe_radius"), length),
            leader("slope", (*taper, length), ABOVE),
        )

    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the twelve corners (..., 12, 2) and their radii (..., 12), m."""
        return _i_corners(self, *self._tip_and_root(), self.array("root_radius"), self.array("toe_radius"))

    def _tip_and_root(self) -> tuple[FloatArray, FloatArray]:
        width, flange, fall = self.array("width"), self.array("flange"), np.tan(self.array("slope"))
        return flange - fall * width / 4, flange + fall * (width / 4 - self.array("web") / 2)


def refuse_no_web(section: CorneredSection) -> None:
    """Refuse a section whose web is as wide as it is, or whose two flanges leave no web between them.

    Raises:
        ShapeError: it is so.
    """
    height, width = section.array("height"), section.array("width")
    web, flange = section.array("web"), section.array("flange")
    section.refuse_where(
        web >= width, "the web thickness {} is as wide as the flanges of {}, or wider",
        web, width, remedy="Make the web thinner, or the flanges wider",
    )
    section.refuse_where(
        2 * flange >= height, "two flanges of {} leave no web in a height of {}",
        flange, height, remedy="Make the flanges thinner, or the section higher",
    )


def refuse_taper(section: CorneredSection, tip: FloatArray, root: FloatArray) -> None:
    """Refuse flanges (...) that taper to nothing at the tip, or meet at the web; thicknesses in m.

    Raises:
        ShapeError: they do.
    """
    height, flange = section.array("height"), section.array("flange")
    remedy = "Make the slope smaller"
    section.refuse_where(
        tip <= 0, "with this slope nothing is left of a flange of {} at its tip", flange, remedy=remedy
    )
    section.refuse_where(
        2 * root >= height, "with this slope flanges of {} meet at the web", flange, remedy=remedy
    )


def _i_corners(
    section: CorneredSection, tip: FloatArray, root: FloatArray, root_radius: FloatArray, toe_radius: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return the corners (..., 12, 2) of an I whose flanges are tip and root (...) thick, and their radii."""
    y, x, w = section.array("height") / 2, section.array("width") / 2, section.array("web") / 2
    tip, root = y - tip, y - root
    points = stacked(
        (-x, -y), (x, -y), (x, -tip), (w, -root), (w, root), (x, tip),
        (x, y), (-x, y), (-x, tip), (-w, root), (-w, -root), (-x, -tip),
    )
    r, toe, none = root_radius, toe_radius, np.zeros(())
    return points, radii_of(none, none, toe, r, r, toe, none, none, toe, r, r, toe)


def i_marks(section: CorneredSection, flange: float, at: float) -> tuple[Mark, ...]:
    """Return the marks of an I whose flanges are `flange` thick at the distance `at` from the web's middle; m."""
    height, width, length = (section.single(name) for name in ("height", "width", "length"))
    x, y, web = width / 2, height / 2, section.single("web") / 2
    corners, _ = section.corners()
    return (
        along_y("height", (-y, y), -x, length, LEFT),
        along_x("width", (-x, x), y, length, BACK),
        along_x("web", (-web, web), 0, length, IN_PLACE),
        along_y("flange", (y - flange, y), -at, length, LEFT if at == x else IN_PLACE),
        rounding("root_radius", corners, 4, section.single("root_radius"), length),
        section.length_mark(x, y),
    )
