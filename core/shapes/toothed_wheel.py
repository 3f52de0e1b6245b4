"""The spur toothed wheel with involute teeth."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.errors import ShapeError
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, first_where, register, said, upright_moments
from core.shapes.marks import ABOVE, FRONT, NEAR, Mark, across, along_x, along_z, leader
from core.shapes.round_surface import check_steps
from core.shapes.toothed_surface import toothed_surface

# Of a full-depth tooth, in modules above and below the pitch circle (ISO 53, from memory).
ADDENDUM, DEDENDUM = 1.0, 1.25


@dataclass(frozen=True)
class ToothForm:
    """The outline of a wheel's teeth; every value may be a batch (...).

    Attributes:
        tip, root, base: radii of the circles, m; the involute starts from the base circle.
        tip_half, root_half: half the angle of a tooth at the tip and where its flank ends below, rad.
        tip_roll, root_roll: tan of the pressure angle at both ends of the involute.
    """

    tip: FloatArray
    root: FloatArray
    base: FloatArray
    tip_half: FloatArray
    root_half: FloatArray
    tip_roll: FloatArray
    root_roll: FloatArray


@register
@dataclass(frozen=True)
class ToothedWheel(Shape):
    """A spur wheel with involute teeth about z, standing on z = 0, the middle of a tooth over +x; lengths in m.

    Full-depth teeth without profile shift: tip circle m·(z + 2), root circle m·(z − 2.5), tooth and space equally
    wide on the pitch circle m·z. The flank is the involute from the tip down to the root circle, or to the base
    circle and from there a straight line towards the axis.
    """

    key: ClassVar[str] = "toothed wheel"
    title: ClassVar[str] = "toothed wheel"
    note: ClassVar[str] = (
        "Standard full-depth teeth: addendum 1 m, dedendum 1.25 m, no profile shift, no backlash. Root fillets, "
        "undercut and tip relief are left out; below the base circle the flank is a straight radial line."
    )
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("module", "module", 0.003, symbol="m"),
        Dimension("teeth", "number of teeth", 24, "count", "z", least=6, most=2000),
        Dimension("pressure_angle", "pressure angle", np.radians(20), "angle", "α", least=np.radians(10),
                  most=np.radians(30)),
        Dimension("width", "width", 0.03, symbol="b"),
        Dimension("bore", "bore", 0.02, symbol="⌀d", may_be_zero=True),
    )

    module: ArrayLike
    teeth: ArrayLike
    pressure_angle: ArrayLike
    width: ArrayLike
    bore: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a bore that reaches the teeth, and teeth that come to no outline.

        Raises:
            ShapeError: the bore is as wide as the root circle, the teeth run to a point below the tip circle, or
                they meet at the root.
        """
        super().check()
        form = self.form()
        bore, root = self.array("bore"), 2 * form.root
        self.refuse_where(
            bore >= root,
            "the bore {} leaves nothing within the root circle {}",
            bore, root, remedy="Make the bore smaller, or the wheel larger",
        )
        space = np.pi / self.array("teeth") - form.root_half
        self._refuse_teeth(form.tip_half <= 0, "run to a point below the tip circle")
        self._refuse_teeth(space <= 0, "meet at the root")

    def _refuse_teeth(self, bad: ArrayLike, words: str) -> None:
        broken = np.asarray(bad)
        if np.any(broken):
            teeth, angle = first_where(broken, self.array("teeth"), self.array("pressure_angle"))
            raise ShapeError(
                f"{said(teeth, 'count')} teeth of full depth at a pressure angle of {said(angle, 'angle')} {words}",
                where=self.title,
                remedy="Take another number of teeth, or a smaller pressure angle",
            )

    def form(self) -> ToothForm:
        """Return the outline of the teeth.

        Half the angle of a tooth at radius r is π/(2·z) + inv α − inv α_r, with cos α_r = r_b/r and inv the
        involute function tan x − x (its definition).
        """
        m, z, alpha = self.array("module"), self.array("teeth"), self.array("pressure_angle")
        pitch = m * z / 2
        tip, root, base = pitch + ADDENDUM * m, pitch - DEDENDUM * m, pitch * np.cos(alpha)
        lowest = np.maximum(root, base)
        tip_roll, root_roll = (np.sqrt((r - base) * (r + base)) / base for r in (tip, lowest))
        at_base = np.pi / (2 * z) + np.tan(alpha) - alpha
        tip_half, root_half = (at_base - (roll - np.arctan(roll)) for roll in (tip_roll, root_roll))
        return ToothForm(tip, root, base, tip_half, root_half, tip_roll, root_roll)

    def moments(self) -> Moments:
        """Return the moments at unit density, exact for the outline.

        Green's theorem turns the area into ½∮r² dφ and the polar second moment into ¼∮r⁴ dφ. On the circles r is
        constant; on the involute, with t = tan α_r, r² = r_b²·(1 + t²) and r²·dφ = r_b²·t²·dt; straight lines
        towards the axis give nothing. Several teeth make the second moment the same along x and y.
        """
        form, z = self.form(), self.array("teeth")
        width, hole = self.array("width"), self.array("bore") / 2
        start, rise = form.root_roll, _rise(form)
        end = start + rise
        high, low, mixed = end**2, start**2, end * start
        cubes = rise * (high + mixed + low) / 3
        fifths = rise * (high**2 + mixed * (high + low) + high * low + low**2) / 5
        space = np.pi / z - form.root_half
        tip, root, base, bore = form.tip**2, form.root**2, form.base**2, hole**2
        area = z * (tip * form.tip_half + root * space + base * cubes) - np.pi * bore
        fourths = tip**2 * form.tip_half + root**2 * space + base**2 * (cubes + fifths)
        polar = z / 2 * fourths - np.pi / 2 * bore**2
        across = polar / (2 * area)
        return upright_moments(area * width, width / 2, (across, across, width**2 / 12))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        form, value = self.form(), self.values()
        tip, width, pitch = float(form.tip), value["width"], value["module"] * value["teeth"] / 2
        counted, flank = (2 * np.pi / value["teeth"] * round(value["teeth"] * share) for share in (0.875, 0.7))
        flank += np.pi / (2 * value["teeth"])
        return (
            along_x("module", (pitch, tip), 0, width, ABOVE),
            leader("teeth", (tip * np.cos(counted), tip * np.sin(counted), width), NEAR),
            leader("pressure_angle", (pitch * np.cos(flank), pitch * np.sin(flank), width), FRONT),
            along_z("width", (0, width), tip),
            across("bore", value["bore"], width, ABOVE),
        )

    def facets(self, steps: int = 48) -> Facets:
        """Return the wheel, in m, all points on the true surface; a flank is divided into steps/8."""
        check_steps(steps)
        teeth, bore = int(self.single("teeth")), self.single("bore")
        across = -(-steps // min(24, 2 * teeth))
        radii, halves = _flank(self.form(), -(-steps // 8))
        return toothed_surface(
            radii, halves, teeth=teeth, across=across, hole=bore / 2, width=self.single("width")
        )


def _rise(form: ToothForm) -> FloatArray:
    """Return how far the roll rises along the involute, from the difference of the squares of the radii."""
    lowest = np.maximum(form.root, form.base)
    return np.asarray((form.tip - lowest) * (form.tip + lowest) / (form.base**2 * (form.tip_roll + form.root_roll)))


def _flank(form: ToothForm, steps: int) -> tuple[FloatArray, FloatArray]:
    """Return radius (n,) m and half angle (n,) rad of the tooth from the root to the tip, of a single wheel."""
    roll = np.linspace(float(form.root_roll), float(form.tip_roll), steps + 1)
    unrolled = (roll - np.arctan(roll)) - (form.root_roll - np.arctan(form.root_roll))
    radii, halves = form.base * np.hypot(1, roll), form.root_half - unrolled
    if form.root < form.base:
        return np.concatenate([[form.root], radii]), np.concatenate([[form.root_half], halves])
    radii[0] = form.root
    return radii, halves
