"""What the mass of a body is reckoned by."""

from typing import Literal, TypeAlias

# A solid by its volume (m³); of a body without thickness a sheet or shell by its area (m²), a rod or ring by its
# length (m), a point mass by the piece.
Measure: TypeAlias = Literal["volume", "area", "length", "pieces"]
