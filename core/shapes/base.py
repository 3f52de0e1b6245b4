"""What every shape is: dimensions with limits, moments in closed form, and a surface to draw.

A shape family is one file that defines one frozen dataclass per shape and registers it with `register`; the
gallery, the Part page, the document, the command line and the tests find it through `SHAPES`.
"""

from abc import ABC, abstractmethod
from collections.abc import Mapping
from dataclasses import dataclass
from typing import TYPE_CHECKING, ClassVar, Literal, Self, TypeAlias, TypeVar

import numpy as np

from core.arrays import ArrayLike, BoolArray, FloatArray, frozen
from core.errors import ShapeError
from core.facets import Facets
from core.measure import Measure
from core.moments import Moments

if TYPE_CHECKING:
    from core.shapes.marks import Mark

DimensionKind: TypeAlias = Literal["length", "angle", "count"]

# Fewer steps than this make no closed surface of a round body.
FEWEST_STEPS = 3


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
        least, most: where the value has to lie, ends included; None where only the sign matters.
    """

    name: str
    label: str
    default: float
    kind: DimensionKind = "length"
    symbol: str = ""
    may_be_zero: bool = False
    least: float | None = None
    most: float | None = None


class Shape(ABC):
    """A uniform body in its own frame (part frame); each one is a frozen dataclass of dimensions.

    Each dimension may be a number or an array (...): moments then come back as a batch of that shape.
    Bodies of revolution have their axis along z. Bodies with a flat base stand on the plane z = 0.
    Making one refuses dimensions that make no body (see `check`).

    Attributes:
        key: its name in documents.
        title: the trade's word for it.
        measure: what a mass per unit multiplies: a volume, or of a body without thickness its area, its
            length, or nothing but the piece itself.
        note: what is idealised, as a sentence to show; "" where nothing is.
        dimensions: in the order in which a form asks for them.
    """

    key: ClassVar[str]
    title: ClassVar[str]
    measure: ClassVar[Measure] = "volume"
    note: ClassVar[str] = ""
    dimensions: ClassVar[tuple[Dimension, ...]]

    @abstractmethod
    def moments(self) -> Moments:
        """Return the moments at 1 kg per unit of `measure`: mass is m³, m², m or 1. Batches broadcast."""

    @abstractmethod
    def facets(self, steps: int = 48) -> Facets:
        """Return a surface to draw, in m, a full circle in `steps` steps; for a single shape only.

        It is closed around a solid. A sheet or shell is drawn as it is, open where it ends; a rod, a ring and
        a point mass as slender solids of a width of their own.
        """

    def box(self) -> FloatArray:
        """Return the lowest and highest corner of the box around what is drawn, (2, 3) m; for a single shape only.

        The shapes that machines hold thousands of know theirs without drawing themselves.
        """
        return self.facets().box

    @abstractmethod
    def marks(self) -> tuple["Mark", ...]:
        """Return where each dimension is measured on the body (part frame, m); for a single shape only."""

    def __post_init__(self) -> None:
        for dimension in self.dimensions:
            try:
                value = frozen(getattr(self, dimension.name))
            except (TypeError, ValueError) as error:
                raise ShapeError(
                    f"the {dimension.label} is no number",
                    where=self.title,
                    read=repr(getattr(self, dimension.name)),
                    remedy="Give a number",
                ) from error
            # The copy keeps a caller's array from changing the shape later.
            object.__setattr__(self, dimension.name, value if value.ndim else float(value))
        self.check()

    def check(self) -> None:
        """Refuse dimensions that make no body; a shape with a rule between its dimensions adds it here.

        Raises:
            ShapeError: a dimension is negative or not finite, 0 where it may not be, outside its limits, or
                a count not whole.
        """
        for dimension in self.dimensions:
            value = self.array(dimension.name)
            good = np.isfinite(value) & (value >= 0 if dimension.may_be_zero else value > 0)
            if dimension.least is not None:
                good &= value >= dimension.least
            if dimension.most is not None:
                good &= value <= dimension.most
            if dimension.kind == "count":
                good &= value == np.round(value)
            if not good.all():
                (bad,) = first_where(~good, value)
                raise ShapeError(
                    f"the {dimension.label} has to be {_limit(dimension)}",
                    where=self.title,
                    read=said(bad, dimension.kind),
                    remedy=_remedy(dimension),
                )

    def refuse_where(self, bad: ArrayLike, sentence: str, *lengths: ArrayLike, remedy: str) -> None:
        """Refuse the shape where bad (...) holds anywhere, with the lengths of that place in the sentence.

        Args:
            bad: (...) whether a rule between dimensions is broken.
            sentence: what is wrong, with a {} for each of the lengths.
            lengths: each (...) m.
            remedy: what to do.

        Raises:
            ShapeError: bad holds somewhere.
        """
        broken = np.asarray(bad)
        if np.any(broken):
            shown = [said(value) for value in first_where(broken, *lengths)]
            raise ShapeError(sentence.format(*shown), where=self.title, remedy=remedy)

    def array(self, name: str) -> FloatArray:
        """Return one dimension as a float64 array (...)."""
        return np.asarray(getattr(self, name), dtype=np.float64)

    def single(self, name: str) -> float:
        """Return one dimension of a single shape, as a plain float (m, rad, pieces).

        Raises:
            ShapeError: the shape is a batch.
        """
        value = self.array(name)
        if value.ndim:
            raise ShapeError(
                "a batch of shapes has no single surface or set of dimensions",
                where=self.title,
                read=f"{name} of shape {value.shape}",
                remedy="Take one of them",
            )
        return float(value)

    def values(self) -> dict[str, float]:
        """Return the dimensions of a single shape by name, as plain floats (m, rad, pieces)."""
        return {dimension.name: self.single(dimension.name) for dimension in self.dimensions}

    @classmethod
    def of(cls, values: Mapping[str, ArrayLike]) -> Self:
        """Return the shape with these dimensions; a missing one takes its default.

        Raises:
            ShapeError: an unknown name, or dimensions that make no body.
        """
        cls.refuse_unknown(values)
        return cls(**{one.name: values.get(one.name, one.default) for one in cls.dimensions})

    def resized(self, values: Mapping[str, ArrayLike]) -> Self:
        """Return a single shape with some dimensions changed, everything else as it is.

        Raises:
            ShapeError: an unknown name, or dimensions that make no body.
        """
        return type(self).of({**self.values(), **values})

    @classmethod
    def refuse_unknown(cls, values: Mapping[str, ArrayLike]) -> None:
        """Refuse names that no dimension has.

        Raises:
            ShapeError: there is one.
        """
        unknown = set(values) - {dimension.name for dimension in cls.dimensions}
        if unknown:
            known = ", ".join(dimension.name for dimension in cls.dimensions)
            raise ShapeError(
                "there is no such dimension",
                where=cls.title,
                read=", ".join(sorted(unknown)),
                remedy=f"Choose from {known}",
            )


SHAPES: dict[str, type[Shape]] = {}

ShapeClass = TypeVar("ShapeClass", bound=type[Shape])


def register(shape: ShapeClass) -> ShapeClass:
    """Enter a shape into the table that everything else reads; used as a class decorator."""
    SHAPES[shape.key] = shape
    return shape


def upright_moments(
    measure: ArrayLike, centre_height: ArrayLike, mean_squares: tuple[ArrayLike, ArrayLike, ArrayLike]
) -> Moments:
    """Return the moments of a body that is symmetric in the planes x = 0 and y = 0, at unit mass per measure.

    Args:
        measure: (...) m³; m² or m of a thin body.
        centre_height: (...) m, z of the centre of mass.
        mean_squares: three of (...) m², the means of x², y² and (z − centre height)² over the body.
    """
    batch = np.broadcast(measure, centre_height, *mean_squares).shape
    centre = np.zeros((*batch, 3))
    centre[..., 2] = centre_height
    spread = np.zeros((*batch, 3, 3))
    for axis, square in enumerate(mean_squares):
        np.multiply(measure, square, out=spread[..., axis, axis])
    return Moments(np.broadcast_to(measure, batch) if batch else measure, centre, spread)


def upright_box(length_x: float, length_y: float, length_z: float) -> FloatArray:
    """Return the corners (2, 3) of the box of these sizes that is centred in x and y and stands on z = 0; m."""
    return frozen([(-length_x / 2, -length_y / 2, 0.0), (length_x / 2, length_y / 2, length_z)])


def said(value: float, kind: DimensionKind = "length") -> str:
    """Return a dimension as an error sentence shows it: mm, degrees or a plain count.

    >>> said(0.042), said(0.5235987755982988, "angle"), said(6, "count")
    ('42 mm', '30°', '6')
    """
    if kind == "length":
        return f"{value * 1e3:.6g} mm"
    return f"{np.degrees(value):.6g}°" if kind == "angle" else f"{value:.6g}"


def first_where(bad: BoolArray, *values: ArrayLike) -> tuple[float, ...]:
    """Return the values at the first place of a batch where bad (...) holds; values broadcast against it."""
    place = int(np.argmax(bad))
    return tuple(float(np.broadcast_to(value, np.shape(bad)).flat[place]) for value in values)


_WANTED = {"length": "a length", "angle": "an angle", "count": "a whole number"}
_REMEDY = {
    "length": "Give a positive length",
    "angle": "Give a positive angle",
    "count": "Give a whole number",
}


def _remedy(dimension: Dimension) -> str:
    if dimension.least is not None or dimension.most is not None:
        return f"Give {_WANTED[dimension.kind]} within these limits"
    return "Give 0 or more" if dimension.may_be_zero else _REMEDY[dimension.kind]


def _limit(dimension: Dimension) -> str:
    whole = "a whole number " if dimension.kind == "count" else ""
    least, most = dimension.least, dimension.most
    if whole and least is None:
        least = 0.0 if dimension.may_be_zero else 1.0
    if least is not None and most is not None:
        return f"{whole}from {said(least, dimension.kind)} to {said(most, dimension.kind)}"
    if least is not None:
        return f"{whole}of at least {said(least, dimension.kind)}"
    return "at least 0" if dimension.may_be_zero else "more than 0"
