"""Cone, cut-off cone (frustum), and the frustum with a tapered bore."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from core.arrays import ArrayLike
from core.facets import Facets
from core.moments import Moments
from core.shapes.base import Dimension, Shape, register, upright_moments
from core.shapes.marks import ABOVE, Mark, across, along_z
from core.shapes.round_surface import turned_surface

NO_BORE = (0.0, 0.0)


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
        return _hollow_moments((self.array("base_diameter") / 2, 0.0), NO_BORE, self.array("height"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        diameter, height = self.values().values()
        return across("base_diameter", diameter, 0), along_z("height", (0, height))

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
        outer = self.array("base_diameter") / 2, self.array("top_diameter") / 2
        return _hollow_moments(outer, NO_BORE, self.array("height"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        base, top, height = self.values().values()
        return (
            across("base_diameter", base, 0),
            across("top_diameter", top, height, ABOVE),
            along_z("height", (0, height), top / 2),
        )

    def facets(self, steps: int = 48) -> Facets:
        """Return a cut-off pyramid inscribed in the frustum, in m, its ends as fans."""
        base, top, height = (self.single(name) for name in ("base_diameter", "top_diameter", "height"))
        return turned_surface([(0, 0), (base / 2, 0), (top / 2, height), (0, height)], steps)


@register
@dataclass(frozen=True)
class HollowFrustum(Shape):
    """A frustum with a tapered bore along its axis, its base on z = 0. Lengths (...) in m.

    At one end, not at both, the wall may run out to an edge.
    """

    key: ClassVar[str] = "hollow frustum"
    title: ClassVar[str] = "hollow frustum"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("base_diameter", "base diameter", 0.1, symbol="⌀D"),
        Dimension("top_diameter", "top diameter", 0.06, symbol="⌀d", may_be_zero=True),
        Dimension("base_bore", "bore at the base", 0.08, symbol="⌀B", may_be_zero=True),
        Dimension("top_bore", "bore at the top", 0.04, symbol="⌀b", may_be_zero=True),
        Dimension("height", "height", 0.08, symbol="h"),
    )

    base_diameter: ArrayLike
    top_diameter: ArrayLike
    base_bore: ArrayLike
    top_bore: ArrayLike
    height: ArrayLike

    def check(self) -> None:
        """Refuse, beside single dimensions, a bore that leaves no wall.

        Raises:
            ShapeError: a bore is wider than the body at its end, or as wide at both ends.
        """
        super().check()
        base, top = self.array("base_diameter"), self.array("top_diameter")
        base_bore, top_bore = self.array("base_bore"), self.array("top_bore")
        remedy = "Make the bore smaller, or the diameter larger"
        for end, bore, around in (("base", base_bore, base), ("top", top_bore, top)):
            sentence = f"the bore {{}} at the {end} is wider than the {end} diameter {{}}"
            self.refuse_where(bore > around, sentence, bore, around, remedy=remedy)
        self.refuse_where(
            (base_bore == base) & (top_bore == top), "the bores {} and {} leave no wall", base, top, remedy=remedy
        )

    def moments(self) -> Moments:
        """Return the moments at unit density; nothing cancels but the wall's own D − B and d − b."""
        outer = self.array("base_diameter") / 2, self.array("top_diameter") / 2
        bore = self.array("base_bore") / 2, self.array("top_bore") / 2
        return _hollow_moments(outer, bore, self.array("height"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        base, top, base_bore, top_bore, height = self.values().values()
        return (
            across("base_diameter", base, 0),
            across("top_diameter", top, height, ABOVE),
            across("base_bore", base_bore, 0),
            across("top_bore", top_bore, height, ABOVE),
            along_z("height", (0, height), top / 2),
        )

    def facets(self, steps: int = 48) -> Facets:
        """Return two nested pyramids with ring-shaped ends, in m, all points on the true surface."""
        base, top, base_bore, top_bore, height = self.values().values()
        outline = [(base_bore / 2, 0), (base / 2, 0), (top / 2, height), (top_bore / 2, height)]
        return turned_surface(outline, steps)


def _hollow_moments(
    outer: tuple[ArrayLike, ArrayLike], bore: tuple[ArrayLike, ArrayLike], height: ArrayLike
) -> Moments:
    """Return the moments for radii of outside and bore, each at base and top.

    The area of a slice is π·(A − i)·(A + i), and Σx² over it π/4·(A − i)·(A + i)·(A² + i²), with A and i straight
    lines over the height. As Bernstein polynomials all their coefficients are positive, and so is every term of
    the integrals, which are means of these coefficients: a thin wall loses no digits, and equal ends are nothing
    special.
    """
    a, b, i, j, h = (np.asarray(length) for length in (*outer, *bore, height))
    c0, c2 = (a - i) * (a + i), (b - j) * (b + j)
    c1 = ((a - i) * (b + j) + (b - j) * (a + i)) / 2
    q0, q1, q2 = a**2 + i**2, a * b + i * j, b**2 + j**2
    area = c0 + c1 + c2
    centre = h * (c0 + 2 * c1 + 3 * c2) / (4 * area)
    along = 3 * c0**2 + 12 * c0 * c1 + 26 * c0 * c2 + 4 * c1**2 + 12 * c1 * c2 + 3 * c2**2
    fourth = c0 * (6 * q0 + 3 * q1 + q2) + c1 * (3 * q0 + 4 * q1 + 3 * q2) + c2 * (q0 + 3 * q1 + 6 * q2)
    across = fourth / (40 * area)
    return upright_moments(np.pi * h * area / 3, centre, (across, across, along * h**2 / (80 * area**2)))
