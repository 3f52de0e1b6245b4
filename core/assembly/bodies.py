"""What a part is made of: a shape, a mesh, or values from a data sheet.

Every body lives in its own part frame, in metres. Bodies with a geometry give their moments at unit density
(mass = volume; of a thin body its area or length); a data sheet gives mass and inertia themselves.
"""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property
from typing import TYPE_CHECKING, ClassVar, Literal, TypeAlias

import numpy as np

from core.arrays import FloatArray, frozen
from core.checks import Check, check_inertia_tensor
from core.errors import ValueRefused
from core.facets import Facets
from core.mesh import can_restore
from core.moments import Moments
from core.shapes import SHAPES, Shape

if TYPE_CHECKING:
    from core.measure import Measure
    from core.mesh import MeshAsset
    from core.placement import Triple

Counts: TypeAlias = Literal["faceted", "restored"]
Six: TypeAlias = tuple[float, float, float, float, float, float]


@dataclass(frozen=True)
class ShapeBody:
    """A body made from dimensions."""

    shape: Shape

    @property
    def measure(self) -> Measure:
        """What a mass per unit multiplies: its volume, or of a thin body its area or length."""
        return self.shape.measure

    @cached_property
    def solid(self) -> Moments:
        """Moments at unit mass per measure in the part frame; mass = volume in m³, or area in m², or length in m."""
        return self.shape.moments()

    @cached_property
    def surface(self) -> Facets:
        """The surface to draw, in the part frame, m."""
        return self.shape.facets()

    @cached_property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around what is drawn, (2, 3) m in the part frame."""
        return self.shape.box()


@dataclass(frozen=True)
class MeshBody:
    """A solid read from a mesh file.

    Attributes:
        asset: the file's bytes and what a survey of them found.
        metres_per_unit: the length unit of the file's coordinates.
        counts: whether the values of the facets count, or those with the curvature behind them restored.
        origin: the path of the file it was read from; "" where that is not known.

    Raises:
        ValueRefused: the restored curvature is to count, and it cannot be restored.
    """

    asset: MeshAsset
    metres_per_unit: float
    counts: Counts = "faceted"
    origin: str = ""
    measure: ClassVar[Measure] = "volume"

    def __post_init__(self) -> None:
        if self.counts == "restored" and not can_restore(self.asset.survey):
            raise ValueRefused(
                "the curvature behind these facets cannot be restored", where=self.asset.name,
                read=f"a mesh that is {self.asset.survey.verdict}", remedy="Mend the mesh, or count it as faceted",
            )

    @cached_property
    def solid(self) -> Moments | None:
        """Moments at unit density in the part frame, or None where the mesh bounds no volume."""
        return self.restored if self.counts == "restored" else self.faceted

    @cached_property
    def faceted(self) -> Moments | None:
        """The moments of the facets as they are, at unit density in the part frame; None where they bound no volume."""
        solid = self.asset.survey.solid
        return None if solid is None else solid.enlarged(self.metres_per_unit)

    @cached_property
    def restored(self) -> Moments | None:
        """The moments with curvature restored, at unit density in the part frame; None where that cannot be done."""
        body = self.asset.restored()
        return None if body is None else body.moments.enlarged(self.metres_per_unit)

    @cached_property
    def surface(self) -> Facets:
        """The surface to draw (a lighter one for a large mesh), in the part frame, m."""
        facets = self.asset.facets_for_view()
        return Facets(facets.points * self.metres_per_unit, facets.corners)

    @cached_property
    def bounds(self) -> FloatArray:
        """Lowest and highest corner of the box around the mesh, (2, 3) m in the part frame."""
        return frozen(self.asset.survey.bounds * self.metres_per_unit)


@dataclass(frozen=True)
class KnownTensor:
    """A bought-in part whose data sheet gives the full inertia tensor.

    Attributes:
        mass: kg.
        centre: of mass, in the part frame, m.
        tensor: Ixx, Iyy, Izz, Ixy, Ixz, Iyz in kg·m² along the part frame's axes, tensor elements (Ixy = −∫xy dm).
        about: the point that the tensor is quoted about: the centre of mass, or the origin of the part frame.
        source: where the values come from (document, page, date).
    """

    mass: float
    centre: Triple
    tensor: Six
    about: Literal["centre", "origin"] = "centre"
    source: str = ""

    @cached_property
    def own(self) -> Moments:
        """The moments in the part frame."""
        point = self.centre if self.about == "centre" else (0.0, 0.0, 0.0)
        return Moments.from_inertia_about_point(self.mass, self.centre, point, tensor_of_six(self.tensor))

    @property
    def entry_checks(self) -> tuple[Check, ...]:
        """The checks on the tensor as it was entered, about the point it is quoted about."""
        lever = self.centre if self.about == "origin" else (0.0, 0.0, 0.0)
        return tuple(check_inertia_tensor(self.mass, tensor_of_six(self.tensor), "data sheet", lever=lever))


@dataclass(frozen=True)
class KnownAxial:
    """A bought-in part whose data sheet gives one inertia only: about its own axis, the z axis of the part frame.

    What the sheet does not say is filled in as a uniform cylinder of the given length: across the axis it has half
    the axial inertia plus m·L²/12. Only a drive axis that is not parallel to the part's own sees that filling.

    Attributes:
        mass: kg.
        centre: of mass, in the part frame, m; the axis need not run through it.
        inertia_about_axis: kg·m², about the z axis of the part frame.
        length: m, of the cylinder that stands in along the axis.
        source: where the values come from (document, page, date).
    """

    mass: float
    centre: Triple
    inertia_about_axis: float
    length: float = 0.0
    source: str = ""

    @cached_property
    def own(self) -> Moments:
        """The moments in the part frame."""
        x, y, _ = self.centre
        across = 0.5 * (self.inertia_about_axis - self.mass * (x * x + y * y))
        return Moments(self.mass, self.centre, np.diag([across, across, self.mass * self.length**2 / 12]))

    @property
    def entry_checks(self) -> tuple[Check, ...]:
        """The check that the inertia covers at least the parallel-axis term of the centre that was given."""
        x, y, _ = self.centre
        least = self.mass * (x * x + y * y)
        ok = self.inertia_about_axis >= least * (1 - 1e-9)
        text = (
            f"J about the part's axis {self.inertia_about_axis:.4g} kg·m² covers m·d² {least:.4g} kg·m²"
            if ok
            else f"J about the part's axis {self.inertia_about_axis:.4g} kg·m² is less than m·d² {least:.4g} kg·m² of "
            "its centre; give J about the axis through the part's origin, or correct the centre"
        )
        return (Check("parallel axis", ok, text),)


GeometricBody: TypeAlias = ShapeBody | MeshBody
KnownBody: TypeAlias = KnownTensor | KnownAxial
Body: TypeAlias = GeometricBody | KnownBody


def tensor_of_six(six: Six) -> FloatArray:
    """Return the symmetric tensor (3, 3) with the elements xx, yy, zz, xy, xz, yz."""
    xx, yy, zz, xy, xz, yz = six
    return np.array([[xx, xy, xz], [xy, yy, yz], [xz, yz, zz]])


def six_of_tensor(tensor: FloatArray) -> Six:
    """Return the elements xx, yy, zz, xy, xz, yz of a symmetric tensor (3, 3)."""
    return tuple(float(tensor[i, j]) for i, j in ((0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2)))  # type: ignore[return-value] # six indices


def equal_ellipsoid(moments: Moments, steps: int = 24) -> Facets:
    """Return the uniform ellipsoid with the same mass moments, as the stand-in that is drawn for a known part.

    Its semi-axes are √(5 s/m) for the eigenvalues s of the spread; a flat direction is drawn with a little
    thickness, so that it can be seen from the side.
    """
    values, columns = np.linalg.eigh(moments.spread)
    semi = np.sqrt(np.maximum(5 * values / moments.mass, 0.0))
    semi = np.maximum(semi, 0.02 * semi.max() if semi.max() > 0 else 0.01)
    ball = SHAPES["sphere"].of({"diameter": 2.0}).facets(steps)
    axes = columns * np.sign(np.linalg.det(columns))
    return Facets(moments.centre + (ball.points * semi) @ axes.T, ball.corners)
