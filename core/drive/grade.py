"""Balance quality grades of rigid rotors: what is permissible for a grade, and which grade a rotor has.

Source of the rules: ISO 21940-11:2016 as told by third-party pages; the standard's own text was not read. A grade G
is the permissible speed e·ω of the centre of mass in mm/s.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.drive.balance import refuse_unless_apart
from core.drive.refusals import refuse_unless_positive
from core.errors import ValueRefused

if TYPE_CHECKING:
    from core.arrays import FloatArray

# The grades of the standard, mm/s.
GRADES = (0.4, 1.0, 2.5, 6.3, 16.0, 40.0, 100.0, 250.0, 630.0, 1600.0, 4000.0)

# No bearing is allowed less or more than this share of the whole.
SMALLEST_SHARE, LARGEST_SHARE = 0.3, 0.7

_MM = 1e-3

# A rotor that has just what a grade permits keeps to it; relative.
_SLACK = 1e-9


@dataclass(frozen=True)
class Permissible:
    """What a grade permits.

    Attributes:
        grade: mm/s.
        eccentricity: e_per, m.
        unbalance: U_per, kg·m, of the whole rotor.
    """

    grade: float
    eccentricity: float
    unbalance: float


def permissible(grade: float, mass: float, speed: float | None) -> Permissible:
    """Return e_per = G/ω and U_per = m·e_per for a grade (mm/s), a mass (kg) and the service speed (rad/s).

    Raises:
        ValueRefused: no service speed, or a grade or mass that is not above 0.
    """
    omega = _service_speed(speed)
    refuse_unless_positive(grade, "balance quality grade", "balance")
    refuse_unless_positive(mass, "mass of the rotor", "balance")
    eccentricity = grade * _MM / omega
    return Permissible(grade, eccentricity, mass * eccentricity)


@dataclass(frozen=True)
class Shares:
    """How the permissible residual unbalance is split over two planes at the bearings.

    Attributes:
        first, second: 0.3…0.7, their sum 1.
        between: whether the centre of mass lies between the bearings, as the rule takes for granted.
    """

    first: float
    second: float
    between: bool

    def of(self, whole: float) -> tuple[float, float]:
        """Return what of a whole each plane gets."""
        return whole * self.first, whole * self.second


def shares(station: float, bearings: tuple[float, float]) -> Shares:
    """Return the split for a centre of mass at a station: by the lever rule, each kept within 0.3…0.7.

    Raises:
        ValueRefused: the bearings are at one place.
    """
    refuse_unless_apart(*bearings, "the two bearings")
    far = (station - bearings[0]) / (bearings[1] - bearings[0])
    second = min(max(far, SMALLEST_SHARE), LARGEST_SHARE)
    return Shares(1 - second, second, 0 <= far <= 1)


@dataclass(frozen=True)
class Graded:
    """The grade that a rotor has at its service speed, mm/s.

    Attributes:
        static: e·ω, as if all its unbalance were in one plane.
        planes: what each of two planes at the bearings would have the grade be, its share taken into account; None
            without bearings.
        needed: the lowest grade of the standard that the rotor keeps to; None above the last.
    """

    static: float
    planes: tuple[float, float] | None
    needed: float | None

    @property
    def worst(self) -> float:
        """The grade that counts: the largest of them."""
        return max(self.static, *(self.planes or (0.0,)))

    def keeps_to(self, grade: float) -> bool:
        """Return whether the rotor keeps to a grade (mm/s), in whole and in each plane."""
        return self.worst <= grade * (1 + _SLACK)


def graded(
    mass: float, static: float, in_planes: FloatArray | None, split: Shares | None, speed: float | None
) -> Graded:
    """Return the grade of a rotor.

    Args:
        mass: kg.
        static: size of its static unbalance, kg·m.
        in_planes: (2, 2) kg·m, its unbalance in planes at the two bearings; None without bearings.
        split: the shares of those planes.
        speed: rad/s, in service.

    Raises:
        ValueRefused: no service speed, or no mass.
    """
    omega = _service_speed(speed)
    refuse_unless_positive(mass, "mass of the rotor", "balance")
    alone = static / mass * omega / _MM
    planes = None
    if in_planes is not None and split is not None:
        sizes = np.hypot(in_planes[:, 0], in_planes[:, 1]) * omega / (mass * _MM)
        planes = (float(sizes[0]) / split.first, float(sizes[1]) / split.second)
    worst = max(alone, *(planes or (0.0,)))
    return Graded(alone, planes, next((grade for grade in GRADES if worst <= grade * (1 + _SLACK)), None))


def _service_speed(speed: float | None) -> float:
    if speed is None or not math.isfinite(speed) or speed == 0:
        raise ValueRefused(
            "a balance grade needs a service speed", where="balance", read="none" if speed is None else f"{speed:g}",
            remedy="Give the speed that the rotor runs at",
        )
    return abs(speed)
