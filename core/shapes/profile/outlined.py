"""What shapes have in common whose one field is a plane outline."""

from __future__ import annotations

from abc import abstractmethod
from dataclasses import dataclass, replace
from typing import TYPE_CHECKING, Any, ClassVar, Self

from core.errors import ShapeError
from core.shapes.base import Shape
from core.shapes.profile.outline import Outline

if TYPE_CHECKING:
    from collections.abc import Mapping

    from core.arrays import ArrayLike


@dataclass(frozen=True)
class OutlinedShape(Shape):
    """A body made from a plane outline and a few dimensions.

    Its field `outline` comes before those that `dimensions` names. `values` gives the numbers alone;
    `of` takes the outline beside them, and `resized` and `with_outline` keep what they are not told.

    Attributes:
        outline: one outline for the whole batch.
        outline_axes: what the columns x and y of the outline mean in this body, for the heads of a table.
    """

    outline: Outline
    outline_axes: ClassVar[tuple[str, str]] = ("x", "y")

    @classmethod
    @abstractmethod
    def default_outline(cls) -> Outline:
        """Return the outline that a new body starts from."""

    @classmethod
    def of(cls, values: Mapping[str, ArrayLike], outline: Outline | None = None) -> Self:
        """Return the body with these dimensions; a missing one, or a missing outline, takes its default.

        Raises:
            ShapeError: an unknown name, or dimensions or an outline that make no body.
        """
        cls.refuse_unknown(values)
        fields: dict[str, Any] = {one.name: values.get(one.name, one.default) for one in cls.dimensions}
        fields["outline"] = cls.default_outline() if outline is None else outline
        return cls(**fields)

    def resized(self, values: Mapping[str, ArrayLike]) -> Self:
        """Return the body with some dimensions changed and the same outline."""
        return type(self).of({**self.values(), **values}, self.outline)

    def with_outline(self, outline: Outline) -> Self:
        """Return the body with another outline and the same dimensions.

        Raises:
            ShapeError: this body cannot be made from it.
        """
        return replace(self, outline=outline)

    def check(self) -> None:
        """Refuse, beside single dimensions, an outline that is none.

        Raises:
            ShapeError: the outline is no Outline.
        """
        super().check()
        if not isinstance(self.outline, Outline):
            raise ShapeError(
                "the outline is missing", where=self.title, read=repr(self.outline), remedy="Give an outline"
            )
