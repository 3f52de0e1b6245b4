"""Unbalance about an axis, the forces it puts on two bearings, and the masses that correct it.

Stations are positions along the axis, in m from its point. Vectors across it are pairs along the two directions of
`axis.across`: the zero mark and 90° on from it, right-handed; angles count the same way.

A rotor is described by U = ∫ρ dm (kg·m, static) and by M = ∫ρ·z dm (kg·m²) about station 0; two planes z₁ and z₂
take the unbalances U₁ + U₂ = U with U₁·z₁ + U₂·z₂ = M.
"""

from __future__ import annotations

import math
from dataclasses import dataclass
from typing import TYPE_CHECKING, Literal, TypeAlias

import numpy as np

from core.arrays import FloatArray, frozen, settled
from core.drive.axis import across
from core.drive.refusals import refuse_unless_finite, refuse_unless_positive
from core.errors import ValueRefused
from core.moments import Moments

if TYPE_CHECKING:
    from core.arrays import ArrayLike
    from core.assembly import DriveAxis

By: TypeAlias = Literal["adding", "removing"]


@dataclass(frozen=True, eq=False)
class Unbalance:
    """The unbalance of a body about an axis.

    Attributes:
        mass: kg.
        station: m, of the centre of mass.
        static: U (2,) kg·m, m·e.
        couple: (2,) kg·m², ∫ρ·(z − station) dm: the product of inertia with the axis, about the centre of mass.
    """

    mass: float
    station: float
    static: FloatArray
    couple: FloatArray

    @property
    def eccentricity(self) -> float:
        """Distance e of the centre of mass from the axis, m; 0 where there is no mass."""
        return self.amount / self.mass if self.mass else 0.0

    @property
    def amount(self) -> float:
        """Size of the static unbalance, kg·m."""
        return float(np.hypot(*self.static))

    @property
    def angle(self) -> float:
        """Angle of the heavy side from the zero mark, rad in −π…π; 0 where there is no static unbalance."""
        return math.atan2(self.static[1], self.static[0])

    @property
    def couple_amount(self) -> float:
        """Size of the couple unbalance, kg·m²."""
        return float(np.hypot(*self.couple))

    @property
    def couple_angle(self) -> float:
        """Angle of the heavy side of the end that lies ahead along the axis, rad in −π…π."""
        return math.atan2(self.couple[1], self.couple[0])

    def in_planes(self, first: float, second: float) -> FloatArray:
        """Return the unbalances (2, 2) kg·m, a row for each of two planes at these stations.

        Raises:
            ValueRefused: the planes are one.
        """
        refuse_unless_apart(first, second, "the two planes")
        moment = self.couple + self.static * self.station
        far = (moment - self.static * first) / (second - first)
        return frozen(np.stack([self.static - far, far]))


def unbalance(moments: Moments, axis: DriveAxis) -> Unbalance:
    """Return the unbalance of a single body (no batch) about an axis of the same frame."""
    frame, unit = np.stack(across(axis)), axis.unit
    lever = moments.centre - np.asarray(axis.point)
    mass = float(moments.mass)
    reach = float(np.abs(lever).max()) + float(np.abs(axis.point).max())
    static = settled(mass * (frame @ lever), abs(mass) * reach)
    size = float(np.abs(moments.spread).max())
    return Unbalance(
        mass, float(unit @ lever), frozen(static), frozen(settled(frame @ moments.spread @ unit, size))
    )


@dataclass(frozen=True, eq=False)
class BearingForces:
    """Forces on two bearings, N.

    Attributes:
        rotating: (2,) amplitude of the force of unbalance on each, turning with the rotor.
        angles: (2,) rad from the zero mark, of the way it points.
        weight: (2,) share of the weight across the axis on each, standing; negative: it lifts the shaft there.
    """

    rotating: FloatArray
    angles: FloatArray
    weight: FloatArray


def bearing_forces(
    found: Unbalance, axis: DriveAxis, bearings: tuple[float, float], speed: float, gravity: ArrayLike
) -> BearingForces:
    """Return what a rigid rotor puts on two bearings.

    Args:
        found: its unbalance.
        axis: the axis it turns about.
        bearings: their stations, m.
        speed: rad/s.
        gravity: (3,) m/s², of the frame of the axis.

    Raises:
        ValueRefused: the bearings are at one place.
    """
    refuse_unless_finite(speed, "speed", "bearing forces")
    planes = found.in_planes(*bearings)
    forces = planes * speed**2
    unit, pull = axis.unit, np.asarray(gravity, dtype=float)
    weight = found.mass * float(np.linalg.norm(pull - (pull @ unit) * unit))
    far = (found.station - bearings[0]) / (bearings[1] - bearings[0])
    return BearingForces(
        frozen(np.hypot(forces[:, 0], forces[:, 1])), frozen(np.arctan2(planes[:, 1], planes[:, 0])),
        frozen([weight * (1 - far), weight * far]),
    )


@dataclass(frozen=True)
class CorrectionPlane:
    """Where a correction can be made: station along the axis and radius from it, m."""

    station: float
    radius: float

    def __post_init__(self) -> None:
        refuse_unless_finite(self.station, "station", "correction plane")
        refuse_unless_positive(self.radius, "radius", "correction plane")


@dataclass(frozen=True)
class Correction:
    """A mass that is added or taken away.

    Attributes:
        mass: kg; negative where material is taken away.
        plane: where along the axis, and how far out.
        angle: rad from the zero mark.
    """

    mass: float
    plane: CorrectionPlane
    angle: float

    def point(self, axis: DriveAxis) -> FloatArray:
        """Return its place (3,) m in the frame of the axis."""
        first, second = across(axis)
        out = math.cos(self.angle) * first + math.sin(self.angle) * second
        return frozen(np.asarray(axis.point) + self.plane.station * axis.unit + self.plane.radius * out)


def corrections(found: Unbalance, planes: tuple[CorrectionPlane, ...], by: By = "adding") -> tuple[Correction, ...]:
    """Return the masses that correct an unbalance: one plane the static part, two planes all of it.

    Raises:
        ValueRefused: none or more than two planes, or two at one station.
    """
    if len(planes) not in (1, 2):
        raise ValueRefused(
            "an unbalance is corrected in one plane or in two", where="correction planes", read=f"{len(planes)}"
        )
    stations = [plane.station for plane in planes]
    there = found.static[None] if len(planes) == 1 else found.in_planes(*stations)
    return tuple(_against(one, plane, by) for one, plane in zip(there, planes, strict=True))


def corrected(moments: Moments, axis: DriveAxis, made: tuple[Correction, ...]) -> Moments:
    """Return the body with the corrections made; they count as points."""
    # Added one by one: corrections whose masses cancel have no centre of mass of their own.
    total = moments
    for one in made:
        total = total + Moments.of_points([one.mass], [one.point(axis)])
    return total


def _against(there: FloatArray, plane: CorrectionPlane, by: By) -> Correction:
    mass, heavy = float(np.hypot(*there)) / plane.radius, math.atan2(there[1], there[0])
    if by == "removing":
        return Correction(-mass, plane, heavy)
    light = heavy - math.pi if heavy > 0 else heavy + math.pi
    return Correction(mass, plane, light)


def refuse_unless_apart(first: float, second: float, what: str) -> None:
    """Refuse two stations that are one.

    Raises:
        ValueRefused: they are, or one is no finite number.
    """
    refuse_unless_finite(first, "station", what)
    refuse_unless_finite(second, "station", what)
    if first == second:
        raise ValueRefused(
            "the two stations are one and the same", where=what, read=f"{first:g} m twice", remedy="Move one of them"
        )
