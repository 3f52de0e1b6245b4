"""What every shape is: dimensions with limits, moments in closed form, and a surface to draw.

A shape family is one file that defines one frozen dataclass per shape and registers it with `register`; the
gallery, the Part page, the document, the command line and the tests find it through `SHAPES`.
"""

from __future__ import annotations

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass
from typing import ClassVar, Literal, Self, TypeVar

import numpy as np

from core.arrays import ArrayLike, FloatArray
from core.errors import ShapeError
from core.facets import Facets
from core.moments import Moments


@dataclass(frozen=True)
class Dimension:
    """One number that a shape is made from.

    Attributes:
        name: the field of the shape's dataclass, also its key in a document.
        label: the trade's word for it, as shown ("outer diameter").
        default: in m, rad or pieces.
        kind: what it counts in.
        symbol: as on a drawing ("⌀D", "h").
        may_be_zero: whether 0 is a sensible value (the top of a frustum, the bore of a tube).
    """

    name: str
    label: str
    default: float
    kind: Literal["length", "angle", "count"] = "length"
    symbol: str = ""
    may_be_zero: bool = False


class Shape(ABC):
    """A solid of uniform density in its own frame (part frame); subclasses are frozen dataclasses of dimensions.

    Each dimension may be a number or an array (...): moments then come back as a batch of that shape.
    Solids of revolution have their axis along z. Bodies with a flat base stand on the plane z = 0.
    """

    key: ClassVar[str]
    title: ClassVar[str]
    dimensions: ClassVar[tuple[Dimension, ...]]

    @abstractmethod
    def moments(self) -> Moments:
        """Return the moments at unit density (1 kg/m³): mass is the volume in m³. Batches broadcast."""

    @abstractmethod
    def facets(self, steps: int = 48) -> Facets:
        """Return a closed surface to draw, in m; a full circle is drawn in `steps` steps. Single shapes only."""

    def check(self) -> None:
        """Refuse dimensions that make no body.

        Raises:
            ShapeError: a dimension is not finite, negative, or zero where it may not be.
        """
        for dimension in self.dimensions:
            value = self.array(dimension.name)
            good = np.isfinite(value) & (value >= 0 if dimension.may_be_zero else value > 0)
            if not np.all(good):
                least = "at least 0" if dimension.may_be_zero else "more than 0"
                raise ShapeError(
                    f"the {dimension.label} has to be {least}",
                    where=self.title,
                    read=f"{float(np.broadcast_to(value, good.shape)[~good].flat[0]) * 1e3:.6g} mm",
                    remedy="Give a positive length",
                )

    def array(self, name: str) -> FloatArray:
        """Return one dimension as a float64 array (...)."""
        return np.asarray(getattr(self, name), dtype=np.float64)

    def values(self) -> dict[str, float]:
        """Return the dimensions of a single shape by name, as plain floats (m, rad, pieces)."""
        return {dimension.name: float(self.array(dimension.name)) for dimension in self.dimensions}

    @classmethod
    def of(cls, values: Mapping[str, ArrayLike]) -> Self:
        """Return the shape with these dimensions; a missing one takes its default.

        Raises:
            ShapeError: an unknown name, or dimensions that make no body.
        """
        unknown = set(values) - {dimension.name for dimension in cls.dimensions}
        if unknown:
            known = ", ".join(dimension.name for dimension in cls.dimensions)
            raise ShapeError(
                f"a {cls.title} has no such dimension", read=", ".join(sorted(unknown)), remedy=f"It has {known}"
            )
        shape = cls(**{dimension.name: values.get(dimension.name, dimension.default) for dimension in cls.dimensions})
        shape.check()
        return shape


SHAPES: dict[str, type[Shape]] = {}

ShapeClass = TypeVar("ShapeClass", bound=type[Shape])


def register(shape: ShapeClass) -> ShapeClass:
    """Enter a shape into the table that everything else reads; used as a class decorator."""
    SHAPES[shape.key] = shape
    return shape
