"""A plane outline turned about an axis, once round or through an angle."""

from __future__ import annotations

from dataclasses import dataclass
from math import factorial
from typing import TYPE_CHECKING, ClassVar

import numpy as np

from core.errors import ShapeError
from core.moments import Moments
from core.shapes.base import Dimension, register
from core.shapes.marks import NEAR, leader
from core.shapes.profile.outline import COINCIDENT, Outline, OutlinePoint, place_of
from core.shapes.profile.outlined import OutlinedShape
from core.shapes.profile.surface import fully_turned_surface, partly_turned_surface

if TYPE_CHECKING:
    from core.arrays import ArrayLike, FloatArray
    from core.facets import Facets
    from core.shapes.marks import Mark
    from core.shapes.profile.plane_moments import PlaneMoments

FULL_TURN = 2 * np.pi

# Below this angle in rad the differences of α and its sines are summed as power series.
SMALL_ANGLE = 1.0
_TERMS = 12


@register
@dataclass(frozen=True)
class Turned(OutlinedShape):
    """A turned part: an outline turned about z. Angle (...) in rad.

    The outline's x is the distance from the axis, its y the height z. Turned through less than a full circle, the
    body goes from the half plane y = 0, x > 0 counter-clockwise about z, and has two flat ends.
    """

    key: ClassVar[str] = "turned profile"
    title: ClassVar[str] = "turned profile"
    dimensions: ClassVar[tuple[Dimension, ...]] = (
        Dimension("angle", "angle turned", FULL_TURN, "angle", "α", most=FULL_TURN),
    )
    outline_axes: ClassVar[tuple[str, str]] = ("radius r", "height z")

    angle: ArrayLike

    @classmethod
    def default_outline(cls) -> Outline:
        """Return a pulley of ⌀100 mm with a round groove and a bore of ⌀20 mm."""
        corners = ((0.01, 0.0), (0.05, 0.0), (0.05, 0.006, 0.0, -0.009), (0.05, 0.024), (0.05, 0.03), (0.01, 0.03))
        return Outline.of(corners)

    def check(self) -> None:
        """Refuse, beside single dimensions, an outline that crosses the axis.

        Raises:
            ShapeError: it does.
        """
        super().check()
        slack = COINCIDENT * self.outline.size
        for number, edges in enumerate(self.outline.edges):
            low = edges.lowest_x()
            if np.any(low < -slack):
                at = int(np.argmin(low))
                raise self._crossing(float(low[at]), number, edges.start[at])

    def moments(self) -> Moments:
        """Return the moments at unit density, exactly; Pappus's rule for the volume, and its kin for the rest."""
        return turned_moments(self.outline.plane, self.array("angle"))

    def marks(self) -> tuple[Mark, ...]:
        """Return where the dimensions are measured."""
        (_, low), (reach, high) = self.outline.bounds
        angle = self.single("angle")
        # Where it faces the eye; of a part of a turn in its middle.
        at = 1.75 * np.pi if angle == FULL_TURN else angle / 2
        return (leader("angle", (reach * np.cos(at), reach * np.sin(at), (low + high) / 2), NEAR),)

    def facets(self, steps: int = 48) -> Facets:
        """Return the turned faces, and the ends of a partial turn, in m, all points on the true surface."""
        slack = COINCIDENT * self.outline.size
        # What lies on the axis but for round-off is drawn on it, so that the surface closes there.
        lines = [line * (line > [slack, -np.inf]) for line in self.outline.lines(steps)]
        angle = self.single("angle")
        if angle == FULL_TURN:
            return fully_turned_surface(lines, steps)
        return partly_turned_surface(lines, angle, steps)

    def _crossing(self, lowest: float, number: int, start: FloatArray) -> ShapeError:
        loop = self.outline.loops[number]
        nearest = min(range(len(loop)), key=lambda i: float(np.hypot(loop[i].x - start[0], loop[i].y - start[1])))
        if any(point.x < 0 for point in loop):
            nearest = min(range(len(loop)), key=lambda i: loop[i].x)
        point: OutlinePoint = loop[nearest]
        of = f"point {nearest + 1}" + (f" of hole {number}" if number else "")
        return ShapeError(
            f"the outline crosses the axis: near {of} at {place_of(point.x, point.y)} it reaches "
            f"{-lowest * 1e3:.6g} mm beyond it",
            where=self.title, remedy="Keep every point at a radius of 0 or more",
        )


def turned_moments(plane: PlaneMoments, angle: ArrayLike) -> Moments:
    """Return the moments at unit density of an area turned about z through an angle (...) rad, up to 2π.

    The area's x is the radius, its y the height z. It turns from the half plane y = 0, x > 0 counter-clockwise.
    In the frame of its middle plane the body is symmetric, and with s = 2·sin(α/2) and the area's integrals
    R1 = ∫r, R2 = ∫r², R3 = ∫r³:  V = α·R1,  ∫x = s·R2,  ∫x² = R3·(α + sin α)/2,  ∫y² = R3·(α − sin α)/2,
    ∫z = α·∫rz,  ∫xz = s·∫r²z,  ∫z² = α·∫rz². They are taken about the area's own centroid, so that a slender
    ring far from the axis loses nothing.
    """
    alpha = np.asarray(angle, dtype=float)
    a, (r, z) = plane.area, np.moveaxis(plane.centre, -1, 0)
    rr, rz, zz = plane.second[..., 0, 0], plane.second[..., 0, 1], plane.second[..., 1, 1]
    rrr, rrz, rzz, _ = np.moveaxis(plane.third, -1, 0)
    first, second = a * r, a * r * r + rr
    third = a * r**3 + 3 * r * rr + rrr
    span, lag, sagging = _angle_factors(alpha)
    volume = alpha * first
    # R1·R3 − R2² and R1·∫r²z − R2·∫rz with the terms that cancel left out.
    radial = ((a * r * r * rr + a * r * rrr - rr * rr) * (alpha - lag) + second**2 * sagging) / first
    across = span * (a * r * r * rz + a * r * rrz - rr * rz) / first
    upright = alpha * (r * zz + rzz - rz * rz / first)
    radius = span * second / volume
    return _in_part_frame(volume, (radius, z + rz / first), (radial, third * lag, upright, across), alpha)


def _in_part_frame(
    volume: FloatArray, centre: tuple[FloatArray, FloatArray], spread: tuple[FloatArray, ...], alpha: FloatArray
) -> Moments:
    """Turn moments from the body's middle plane to the frame where it begins; spread is Sxx, Syy, Szz, Sxz."""
    xx, yy, zz, xz = spread
    full = alpha == FULL_TURN
    cos, sin = np.where(full, 1.0, np.cos(alpha / 2)), np.where(full, 0.0, np.sin(alpha / 2))
    batch = np.broadcast_shapes(np.shape(volume), np.shape(alpha))
    place, about = np.zeros((*batch, 3)), np.zeros((*batch, 3, 3))
    place[..., 0], place[..., 1], place[..., 2] = cos * centre[0], sin * centre[0], centre[1]
    about[..., 0, 0], about[..., 1, 1] = cos**2 * xx + sin**2 * yy, sin**2 * xx + cos**2 * yy
    about[..., 0, 1] = about[..., 1, 0] = cos * sin * (xx - yy)
    about[..., 0, 2] = about[..., 2, 0] = cos * xz
    about[..., 1, 2] = about[..., 2, 1] = sin * xz
    about[..., 2, 2] = zz
    return Moments(volume, place, about)


def _angle_factors(alpha: FloatArray) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return 2·sin(α/2), (α − sin α)/2 and (α + sin α)/2 − 4·sin²(α/2)/α, each (...), without cancellation."""
    full = alpha == FULL_TURN
    sine, span = np.where(full, 0.0, np.sin(alpha)), np.where(full, 0.0, 2 * np.sin(alpha / 2))
    small = alpha < SMALL_ANGLE
    x = np.where(small, alpha, 0.0) ** 2
    lag = np.where(small, alpha**3 * np.polynomial.polynomial.polyval(x, _LAG), (alpha - sine) / 2)
    sagging = alpha**5 * np.polynomial.polynomial.polyval(x, _SAGGING)
    return span, lag, np.where(small, sagging, (alpha + sine) / 2 - span**2 / alpha)


_LAG = np.array([(-1) ** k / (2 * factorial(2 * k + 3)) for k in range(_TERMS)])
_SAGGING = np.array([(-1) ** k * (k + 1) / factorial(2 * k + 6) for k in range(_TERMS)])
