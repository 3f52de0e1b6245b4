"""What every part of the schema is built of: numbers, names and texts with their limits, and entries that hold them."""

from __future__ import annotations

from typing import Annotated, TypeAlias

from pydantic import BaseModel, ConfigDict, Field, Strict

# No length, mass or inertia of a machine comes near this; the fifth power of it is still a finite number.
LARGEST_NUMBER = 1e30
LONGEST_NAME = 500
LONGEST_TEXT = 20_000
MOST_ENTRIES = 1_000

Number: TypeAlias = Annotated[float, Field(ge=-LARGEST_NUMBER, le=LARGEST_NUMBER, allow_inf_nan=False)]
Positive: TypeAlias = Annotated[float, Field(gt=0, le=LARGEST_NUMBER, allow_inf_nan=False)]
# A JSON list is the only way to write a tuple; what is in it stays strict.
Two: TypeAlias = Annotated[tuple[Number, Number], Strict(strict=False)]
Three: TypeAlias = Annotated[tuple[Number, Number, Number], Strict(strict=False)]
Four: TypeAlias = Annotated[tuple[Number, Number, Number, Number], Strict(strict=False)]
Six: TypeAlias = Annotated[tuple[Number, Number, Number, Number, Number, Number], Strict(strict=False)]
Name: TypeAlias = Annotated[str, Field(max_length=LONGEST_NAME)]
Text: TypeAlias = Annotated[str, Field(max_length=LONGEST_TEXT)]
TypedField: TypeAlias = Annotated[tuple[Name, Text], Strict(strict=False)]
Typed: TypeAlias = Annotated[list[TypedField], Field(max_length=MOST_ENTRIES)]


class Entry(BaseModel):
    """Values of exactly the kind that is named, and no entries beside them."""

    model_config = ConfigDict(strict=True, extra="forbid", frozen=True)
