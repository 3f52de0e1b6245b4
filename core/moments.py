"""One value for any body: mass, centre of mass and central second moment of mass, with their algebra.

The second moment S = ∫ (r−c)(r−c)ᵀ dm ("spread") adds, moves, mirrors and scales by one rule each, and a body
can exist if and only if its eigenvalues are not negative. The inertia tensor about the centre is
I = tr(S)·1 − S, and back S = ½ tr(I)·1 − I.

The inertia tensor has the elements Ixx = ∫(y²+z²)dm and Ixy = −∫xy dm throughout: products of inertia carry the
minus sign of the tensor. Whoever shows the product integral +∫xy dm changes the sign and says so.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Self

import numpy as np

from core.arrays import ArrayLike, FloatArray, frozen, settled
from core.errors import ValueRefused

_IDENTITY = np.eye(3)

# Two principal moments this close (relative to the largest) are shown as one: any axis in their plane is principal.
PRINCIPAL_TIE = 1e-6


@dataclass(frozen=True, eq=False)
class Moments:
    """Mass, centre of mass and central second moment of mass of a body, or of a batch of bodies.

    Attributes:
        mass: (...) kg; negative for material that is taken away.
        centre: (..., 3) m, in the frame of the body's coordinates.
        spread: (..., 3, 3) kg·m², ∫ (r−c)(r−c)ᵀ dm along the axes of that frame.

    The leading axes (...) are a batch and broadcast against each other. All arrays are read-only.

    >>> pair = Moments.of_points([2.0, 2.0], [[0.1, 0, 0], [-0.1, 0, 0]])
    >>> float(pair.mass), round(float(pair.inertia_about_axis([0, 0, 0], [0, 0, 5])), 12)
    (4.0, 0.04)
    """

    mass: FloatArray
    centre: FloatArray
    spread: FloatArray

    def __init__(self, mass: ArrayLike, centre: ArrayLike, spread: ArrayLike) -> None:
        object.__setattr__(self, "mass", frozen(mass))
        object.__setattr__(self, "centre", frozen(centre))
        object.__setattr__(self, "spread", frozen(spread))
        if self.centre.shape[-1:] != (3,) or self.spread.shape[-2:] != (3, 3):
            raise ValueRefused(
                "a centre needs 3 numbers and a second moment 3 × 3",
                read=f"shapes {self.centre.shape} and {self.spread.shape}",
            )

    @classmethod
    def nothing(cls) -> Self:
        """Return the empty body: adding it changes nothing."""
        return cls(0.0, np.zeros(3), np.zeros((3, 3)))

    @classmethod
    def of_points(cls, masses: ArrayLike, points: ArrayLike) -> Self:
        """Return the moments of point masses together; masses (n,) in kg, points (n, 3) in m."""
        masses, points = np.asarray(masses, dtype=float), np.asarray(points, dtype=float)
        return cls(masses, points, np.zeros((*points.shape, 3))).total()

    @classmethod
    def from_inertia(cls, mass: ArrayLike, centre: ArrayLike, inertia_about_centre: ArrayLike) -> Self:
        """Return the moments of a body whose inertia tensor about its centre is known.

        Args:
            mass: (...) kg.
            centre: (..., 3) m.
            inertia_about_centre: (..., 3, 3) kg·m², tensor elements (off-diagonal = −∫xy dm), symmetric.

        Raises:
            ValueRefused: the tensor is not symmetric.
        """
        return cls(mass, centre, spread_of_inertia(_symmetric(inertia_about_centre)))

    @classmethod
    def from_inertia_about_point(cls, mass: ArrayLike, centre: ArrayLike, point: ArrayLike, inertia: ArrayLike) -> Self:
        """Return the moments of a body whose inertia tensor about some point (..., 3) in m is known.

        The tensor (..., 3, 3) in kg·m² lies along the axes of the frame in which point and centre are given.

        Raises:
            ValueRefused: the tensor is not symmetric.
        """
        mass_, lever = np.asarray(mass, dtype=float), np.asarray(centre, dtype=float) - np.asarray(point, dtype=float)
        # Judged before the transfer term is taken off: what is then left of a point mass is round-off.
        return cls(mass, centre, spread_of_inertia(_symmetric(inertia) - _transfer(mass_, lever)))

    @property
    def inertia_about_centre(self) -> FloatArray:
        """Inertia tensor about the centre of mass, (..., 3, 3) kg·m², along the axes of the frame."""
        return inertia_of_spread(self.spread)

    def inertia_about_point(self, point: ArrayLike) -> FloatArray:
        """Return the inertia tensor (..., 3, 3) kg·m² about a point (..., 3) in m (parallel-axis theorem)."""
        return self.inertia_about_centre + _transfer(self.mass, self.centre - np.asarray(point, dtype=float))

    def own_inertia_along(self, direction: ArrayLike) -> FloatArray:
        """Return the inertia (...) kg·m² about the axis through the centre of mass along direction (any length)."""
        unit = unit_vector(direction)
        trace = np.trace(self.spread, axis1=-2, axis2=-1)
        return np.asarray(trace - np.einsum("...i,...ij,...j->...", unit, self.spread, unit))

    def offset_from_axis(self, point: ArrayLike, direction: ArrayLike) -> FloatArray:
        """Return the distance (...) m of the centre of mass from the axis through point along direction."""
        lever = self.centre - np.asarray(point, dtype=float)
        unit = np.broadcast_to(unit_vector(direction), lever.shape)
        return np.asarray(np.linalg.norm(np.cross(lever, unit), axis=-1))

    def transfer_to_axis(self, point: ArrayLike, direction: ArrayLike) -> FloatArray:
        """Return the parallel-axis term m·d² (...) kg·m² for the axis through point along direction."""
        return np.asarray(self.mass * self.offset_from_axis(point, direction) ** 2)

    def inertia_about_axis(self, point: ArrayLike, direction: ArrayLike) -> FloatArray:
        """Return the inertia (...) kg·m² about the axis through point (..., 3) m along direction (any length)."""
        return np.asarray(self.own_inertia_along(direction) + self.transfer_to_axis(point, direction))

    def __add__(self, other: Moments) -> Moments:
        return Moments(
            np.stack([self.mass, other.mass]), np.stack([self.centre, other.centre]),
            np.stack([self.spread, other.spread]),
        ).total()

    def __neg__(self) -> Moments:
        return Moments(-self.mass, self.centre, -self.spread)

    def __sub__(self, other: Moments) -> Moments:
        """Return what is left when other is cut out of this body."""
        return self + (-other)

    def total(self) -> Self:
        """Return the moments of the whole batch together, added over its first axis.

        A batch whose masses cancel has no centre of mass; the mean of its centres stands in for it, and the
        spread is then taken about that point. What is only the round-off of larger terms comes out as 0.
        """
        batch = np.broadcast_shapes(self.mass.shape, self.centre.shape[:-1], self.spread.shape[:-2])
        masses = np.broadcast_to(self.mass, batch)
        mass = masses.sum(axis=0)
        centres = np.broadcast_to(self.centre, (*batch, 3))
        if centres.shape[0] == 0:
            return type(self)(mass, np.zeros(centres.shape[1:]), np.zeros((*centres.shape[1:], 3)))
        # About the mean of the centres: far from the origin nothing cancels.
        mean = settled(centres.mean(axis=0), np.abs(centres).mean(axis=0))
        lever = centres - mean
        weight = masses[..., None]
        first = settled((weight * lever).sum(axis=0), np.abs(weight * lever).sum(axis=0))
        shift = np.divide(first, mass[..., None], out=np.zeros_like(first), where=mass[..., None] != 0)
        lever = lever - shift
        spreads = np.broadcast_to(self.spread, (*centres.shape, 3))
        apart = weight[..., None] * lever[..., :, None] * lever[..., None, :]
        size = np.abs(spreads).sum(axis=0) + np.abs(apart).sum(axis=0)
        centre = settled(mean + shift, np.abs(mean) + np.abs(shift))
        return type(self)(mass, centre, settled(spreads.sum(axis=0) + apart.sum(axis=0), size))

    def mapped(self, linear: ArrayLike, shift: ArrayLike) -> Self:
        """Return the moments after every point r has become linear·r + shift, the mass staying what it is.

        Args:
            linear: (..., 3, 3) any matrix: a turn, a mirror, a stretch.
            shift: (..., 3) m.
        """
        matrix = np.asarray(linear, dtype=float)
        centre = np.einsum("...ij,...j->...i", matrix, self.centre) + np.asarray(shift, dtype=float)
        spread = matrix @ self.spread @ np.swapaxes(matrix, -1, -2)
        return type(self)(self.mass, centre, spread)

    def with_mass(self, mass: ArrayLike) -> Self:
        """Return the same body with its density scaled so that it weighs mass (...) kg; its own mass is not 0."""
        return self.times(np.asarray(mass, dtype=float) / self.mass)

    def times(self, factor: ArrayLike) -> Self:
        """Return the body with its density multiplied by factor (...), a pure number or kg/m³ for a volume."""
        scale = np.asarray(factor, dtype=float)
        return type(self)(self.mass * scale, self.centre, self.spread * scale[..., None, None])

    def enlarged(self, length_factor: float) -> Self:
        """Return a volume (unit density) read in another length unit: mass ~ f³, centre ~ f, spread ~ f⁵."""
        f = length_factor
        return type(self)(self.mass * f**3, self.centre * f, self.spread * f**5)

    @property
    def radii_of_gyration(self) -> FloatArray:
        """Radii of gyration (..., 3) m about the frame's directions through the centre; nan where there is no mass."""
        about = np.diagonal(self.inertia_about_centre, axis1=-2, axis2=-1)
        return radius_of_gyration(about, self.mass[..., None])

    @property
    def principal(self) -> Principal:
        """Principal moments and axes about the centre of mass, of a single body (no batch)."""
        return principal_axes(self.inertia_about_centre)


@dataclass(frozen=True)
class Principal:
    """Principal moments of inertia and their axes.

    Attributes:
        moments: (3,) kg·m², ascending.
        axes: (3, 3) rows are unit vectors, right-handed; those of 1 and 2 have their largest component positive.
        tie: which moments agree within PRINCIPAL_TIE: "" (none), "12", "23" or "123"; in the plane (or space) of
            a tie every axis is principal, and the ones given are those nearest to the frame's own.
    """

    moments: FloatArray
    axes: FloatArray
    tie: str


def radius_of_gyration(inertia: ArrayLike, mass: ArrayLike) -> FloatArray:
    """Return √(J/m) (...) m for inertia (...) kg·m² about an axis and mass (...) kg; nan where there is no mass."""
    about, masses = np.asarray(inertia, dtype=float), np.asarray(mass, dtype=float)
    square = np.divide(about, masses, out=np.full(np.broadcast(about, masses).shape, np.nan), where=masses != 0)
    # A body without extent across the axis comes out a round-off below 0.
    return np.asarray(np.sqrt(np.maximum(square, 0.0)))


def spread_of_inertia(inertia_about_centre: ArrayLike) -> FloatArray:
    """Return S = ½ tr(I)·1 − I (..., 3, 3) for an inertia tensor about the centre of mass."""
    inertia = np.asarray(inertia_about_centre, dtype=float)
    half_trace = 0.5 * np.trace(inertia, axis1=-2, axis2=-1)
    return np.asarray(half_trace[..., None, None] * _IDENTITY - inertia)


def _symmetric(inertia: ArrayLike) -> FloatArray:
    """Return an inertia tensor (..., 3, 3) as an array, or refuse it."""
    tensor = np.asarray(inertia, dtype=float)
    skew = np.abs(tensor - np.swapaxes(tensor, -1, -2)).max()
    if skew > 1e-9 * np.abs(tensor).max():
        raise ValueRefused("an inertia tensor is symmetric", read=f"elements that differ by {skew:.3g} kg·m²")
    return tensor


def inertia_of_spread(spread: ArrayLike) -> FloatArray:
    """Return I = tr(S)·1 − S (..., 3, 3) for a second moment of mass about the same point."""
    second = np.asarray(spread, dtype=float)
    return np.asarray(np.trace(second, axis1=-2, axis2=-1)[..., None, None] * _IDENTITY - second)


def unit_vector(direction: ArrayLike) -> FloatArray:
    """Return direction (..., 3) at length one.

    Raises:
        ValueRefused: a direction of no length, or one that is not finite.
    """
    vector = np.asarray(direction, dtype=float)
    # Scaled by the largest component first, so that tiny and huge vectors neither vanish nor overflow.
    largest = np.abs(vector).max(axis=-1, keepdims=True)
    if not np.all(np.isfinite(vector)) or not np.all(largest > 0):
        raise ValueRefused(
            "a direction needs a length", read=f"{vector.tolist()}", remedy="Give three numbers that are not all zero"
        )
    scaled = vector / largest
    return np.asarray(scaled / np.linalg.norm(scaled, axis=-1, keepdims=True))


def principal_axes(inertia: ArrayLike) -> Principal:
    """Return the principal moments and axes of one symmetric inertia tensor (3, 3), about the tensor's own point."""
    tensor = np.asarray(inertia, dtype=float)
    moments, columns = np.linalg.eigh(0.5 * (tensor + tensor.T))
    axes = columns.T.copy()
    size = np.abs(moments).max()
    low, high = moments[1] - moments[0] <= PRINCIPAL_TIE * size, moments[2] - moments[1] <= PRINCIPAL_TIE * size
    tie = {(False, False): "", (True, False): "12", (False, True): "23", (True, True): "123"}[bool(low), bool(high)]
    if tie == "123":
        axes = _IDENTITY.copy()
    elif tie:
        axes = _settled_pair(axes, single=2 if tie == "12" else 0)
    for row in (0, 1):
        axes[row] *= np.sign(axes[row, np.abs(axes[row]).argmax()])
    axes[2] = np.cross(axes[0], axes[1])
    return Principal(frozen(moments), frozen(axes), tie)


def _settled_pair(axes: FloatArray, single: int) -> FloatArray:
    """Turn the two tied axes in their plane until one lies as near to a frame axis as it can."""
    normal = axes[single]
    nearest = _IDENTITY[np.abs(normal).argmin()]
    first = unit_vector(nearest - (nearest @ normal) * normal)
    second = np.cross(normal, first)
    settled = axes.copy()
    settled[[row for row in range(3) if row != single]] = first, second
    return settled


def _transfer(mass: FloatArray, lever: FloatArray) -> FloatArray:
    """Return the parallel-axis tensor m(|d|²·1 − d dᵀ) (..., 3, 3) for levers (..., 3) m."""
    return inertia_of_spread(mass[..., None, None] * lever[..., :, None] * lever[..., None, :])
