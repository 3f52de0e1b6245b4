"""Channel, angle and T section."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.shapes.base import Dimension, register
from core.shapes.marks import ABOVE, BACK, IN_PLACE, LEFT, along_x, along_y, leader, rounding
from core.shapes.sections.i_sections import STEEPEST, refuse_no_web, refuse_taper
from core.shapes.sections.section import LENGTH, CorneredSection, radii_of, stacked

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.shapes.marks import Mark


@register
@dataclass(frozen=True)
class ChannelSection(CorneredSection):
    """A channel with the outer face of its web on the plane x = 0, its flanges towards +x. Lengths (...) in m.

    Its middle lies on y = 0. The flange thickness is measured at half the width of the flanges.
    """

    key: ClassVar[str] = "channel section"
    title: ClassVar[str] = "channel section"
    note: ClassVar[str] = (
        "The flange thickness is measured at half the width. 8 % is 4.57°, 5 % is 2.86°; parallel flanges have 0."
    )
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("height", "height", 0.1, symbol="h"),
        Dimension("width", "width of the flanges", 0.05, symbol="b"),
        Dimension("web", "web thickness", 0.006, symbol="tw"),
        Dimension("flange", "mean flange thickness", 0.0085, symbol="tf"),
        Dimension("root_radius", "root radius", 0.0085, symbol="r1", may_be_zero=True),
        Dimension("toe_radius", "toe radius", 0.0045, symbol="r2", may_be_zero=True),
        Dimension(
            "slope", "slope of the flanges", float(np.arctan(0.08)), "angle", "α", may_be_zero=True, most=STEEPEST
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
        refuse_taper(self, *self._tip_and_root())

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        height, width, length = (self.single(name) for name in ("height", "width", "length"))
        corners, _ = self.corners()
        y = height / 2
        return (
            along_y("height", (-y, y), 0, length, LEFT),
            along_x("width", (0, width), y, length, BACK),
            along_x("web", (0, self.single("web")), 0, length, IN_PLACE),
            along_y("flange", (y - self.single("flange"), y), width / 2, length, IN_PLACE),
            rounding("root_radius", corners, 3, self.single("root_radius"), length),
            rounding("toe_radius", corners, 2, self.single("toe_radius"), length),
            leader("slope", (*(0.3 * corners[4] + 0.7 * corners[5]), length), ABOVE),
            self.length_mark(width, y),
        )

    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the eight corners (..., 8, 2) and their radii (..., 8), m."""
        y, b, w = self.array("height") / 2, self.array("width"), self.array("web")
        tip, root = (y - thickness for thickness in self._tip_and_root())
        x, none = np.zeros(()), np.zeros(())
        points = stacked((x, -y), (b, -y), (b, -tip), (w, -root), (w, root), (b, tip), (b, y), (x, y))
        r, toe = self.array("root_radius"), self.array("toe_radius")
        return points, radii_of(none, none, toe, r, r, toe, none, none)

    def _tip_and_root(self) -> tuple[FloatArray, FloatArray]:
        width, flange, fall = self.array("width"), self.array("flange"), np.tan(self.array("slope"))
        return flange - fall * width / 2, flange + fall * (width / 2 - self.array("web"))


@register
@dataclass(frozen=True)
class AngleSection(CorneredSection):
    """An angle, its heel on the z axis, its legs along +x and +y. Lengths (...) in m."""

    key: ClassVar[str] = "angle section"
    title: ClassVar[str] = "angle section"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("leg_y", "leg along y", 0.05, symbol="a"),
        Dimension("leg_x", "leg along x", 0.05, symbol="b"),
        Dimension("thickness", "thickness", 0.005, symbol="t"),
        Dimension("root_radius", "root radius", 0.007, symbol="r1", may_be_zero=True),
        Dimension("toe_radius", "toe radius", 0.0035, symbol="r2", may_be_zero=True),
        LENGTH,
    )

    leg_y: ArrayLike
    leg_x: ArrayLike
    thickness: ArrayLike
    root_radius: ArrayLike
    toe_radius: ArrayLike
    length: ArrayLike

    def check_proportions(self) -> None:
        """Refuse a thickness that leaves no leg.

        Raises:
            ShapeError: there is one.
        """
        thickness = self.array("thickness")
        leg = np.minimum(self.array("leg_x"), self.array("leg_y"))
        self.refuse_where(
            thickness >= leg, "the thickness {} leaves nothing of a leg of {}",
            thickness, leg, remedy="Make the thickness smaller, or the legs longer",
        )

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        x, y, length = (self.single(name) for name in ("leg_x", "leg_y", "length"))
        corners, _ = self.corners()
        return (
            along_y("leg_y", (0, y), 0, length, LEFT),
            along_x("leg_x", (0, x), 0, 0),
            along_x("thickness", (0, self.single("thickness")), y, length, BACK),
            rounding("root_radius", corners, 3, self.single("root_radius"), length),
            rounding("toe_radius", corners, 2, self.single("toe_radius"), length),
            self.length_mark(x, 0),
        )

    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the six corners (..., 6, 2) and their radii (..., 6), m."""
        x, y, t, none = self.array("leg_x"), self.array("leg_y"), self.array("thickness"), np.zeros(())
        points = stacked((none, none), (x, none), (x, t), (t, t), (t, y), (none, y))
        r, toe = self.array("root_radius"), self.array("toe_radius")
        return points, radii_of(none, none, toe, r, toe, none)


@register
@dataclass(frozen=True)
class TSection(CorneredSection):
    """A T with the outer face of its flange on the plane y = 0, its stem towards +y. Lengths (...) in m.

    Its middle lies on x = 0. Flange and stem have parallel faces.
    """

    key: ClassVar[str] = "T section"
    title: ClassVar[str] = "T section"
    note: ClassVar[str] = "Flange and stem have parallel faces; rolled ones may taper by 2 %."
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("height", "height", 0.05, symbol="h"),
        Dimension("width", "width of the flange", 0.05, symbol="b"),
        Dimension("web", "stem thickness", 0.006, symbol="tw"),
        Dimension("flange", "flange thickness", 0.006, symbol="tf"),
        Dimension("root_radius", "root radius", 0.006, symbol="r1", may_be_zero=True),
        Dimension("toe_radius", "toe radius of the flange", 0.003, symbol="r2", may_be_zero=True),
        LENGTH,
    )

    height: ArrayLike
    width: ArrayLike
    web: ArrayLike
    flange: ArrayLike
    root_radius: ArrayLike
    toe_radius: ArrayLike
    length: ArrayLike

    def check_proportions(self) -> None:
        """Refuse a stem as wide as the flange, and a flange as thick as the section is high.

        Raises:
            ShapeError: there is one.
        """
        web, width = self.array("web"), self.array("width")
        flange, height = self.array("flange"), self.array("height")
        self.refuse_where(
            web >= width, "the stem thickness {} is as wide as the flange of {}, or wider",
            web, width, remedy="Make the stem thinner, or the flange wider",
        )
        self.refuse_where(
            flange >= height, "a flange of {} leaves no stem in a height of {}",
            flange, height, remedy="Make the flange thinner, or the section higher",
        )

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        height, width, length = (self.single(name) for name in ("height", "width", "length"))
        corners, _ = self.corners()
        x, web, flange = width / 2, self.single("web") / 2, self.single("flange")
        return (
            along_y("height", (0, height), -x, length, LEFT),
            along_x("width", (-x, x), 0, 0),
            along_x("web", (-web, web), height, length, BACK),
            along_y("flange", (0, flange), -x, length, LEFT),
            rounding("root_radius", corners, 3, self.single("root_radius"), length),
            rounding("toe_radius", corners, 2, self.single("toe_radius"), length),
            self.length_mark(x, flange),
        )

    def corners(self) -> tuple[FloatArray, FloatArray]:
        """Return the eight corners (..., 8, 2) and their radii (..., 8), m."""
        y, x = self.array("height"), self.array("width") / 2
        w, f, none = self.array("web") / 2, self.array("flange"), np.zeros(())
        points = stacked((-x, none), (x, none), (x, f), (w, f), (w, y), (-w, y), (-w, f), (-x, f))
        r, toe = self.array("root_radius"), self.array("toe_radius")
        return points, radii_of(none, none, toe, r, none, none, r, toe)
