"""Cone and cut-off cone (frustum)."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.round_surface import turned_surface


@register
@dataclass(frozen=True)
class Cone(Shape):
    """A right circular cone along z, its base on z = 0 and its tip above. Lengths (...) in m."""

    key: ClassVar[str] = "cone"
    title: ClassVar[str] = "cone"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("base_diameter", "base diameter", 0.08, symbol="⌀D"),
        Dimension("height", "height", 0.1, symbol="h"),
    )

    base_diameter: ArrayLike
    height: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; the centre lies at h/4, J = 3·m·D²/40 about the axis."""
        return _frustum_moments(self.array("base_diameter") / 2, np.zeros(()), self.array("height"))

    def facets(self, steps: int = 48) -> Facets:
        """Return a pyramid inscribed in the cone, in m."""
        radius, height = self.single("base_diameter") / 2, self.single("height")
        return turned_surface([(0, 0), (radius, 0), (0, height)], steps)


@register
@dataclass(frozen=True)
class Frustum(Shape):
    """A cone cut off square, its base on z = 0; the top may be wider, or a tip (0). Lengths (...) in m."""

    key: ClassVar[str] = "frustum"
    title: ClassVar[str] = "frustum"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("base_diameter", "base diameter", 0.1, symbol="⌀D"),
        Dimension("top_diameter", "top diameter", 0.06, symbol="⌀d", may_be_zero=True),
        Dimension("height", "height", 0.08, symbol="h"),
    )

    base_diameter: ArrayLike
    top_diameter: ArrayLike
    height: ArrayLike

    def moments(self) -> Moments:
        """Return the moments at unit density; equal diameters give the cylinder, a top of 0 the cone."""
        base, top = self.array("base_diameter") / 2, self.array("top_diameter") / 2
        return _frustum_moments(base, top, self.array("height"))

    def facets(self, steps: int = 48) -> Facets:
        """Return a cut-off pyramid inscribed in the frustum, in m, its ends as fans."""
        base, top, height = (self.single(name) for name in ("base_diameter", "top_diameter", "height"))
        return turned_surface([(0, 0), (base / 2, 0), (top / 2, height), (0, height)], steps)


def _frustum_moments(base: ArrayLike, top: ArrayLike, height: ArrayLike) -> Moments:
    """Return the moments for end radii a (base) and b (top).

    The usual formulas divide a⁵ − b⁵ by a³ − b³; here that division is carried out, so that equal radii are
    nothing special. All integrals are ∫ tⁱ(1−t)ʲ dt over the height.
    """
    a, b, h = np.asarray(base), np.asarray(top), np.asarray(height)
    squares = a**2 + a * b + b**2
    centre = h * (a**2 + 2 * a * b + 3 * b**2) / (4 * squares)
    across = 3 * (a**4 + a**3 * b + a**2 * b**2 + a * b**3 + b**4) / (20 * squares)
    along = 3 * h**2 * (a**4 + 4 * a**3 * b + 10 * a**2 * b**2 + 4 * a * b**3 + b**4) / (80 * squares**2)
    return upright_moments(np.pi * h * squares / 3, centre, (across, across, along))
