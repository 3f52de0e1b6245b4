"""A cut to begin with: a solid of sensible size that goes through the middle of a part, or through its wall."""

from __future__ import annotations

from dataclasses import replace
from typing import TYPE_CHECKING, Final

import numpy as np

from core.assembly.cuts import Cut
from core.errors import MasswrightError
from core.placement import Pose
from core.shapes import SHAPES

if TYPE_CHECKING:
    from core.assembly.assembly import Assembly
    from core.assembly.nodes import Part
    from core.shapes import Shape

# Of the part's narrowest side: small enough to leave a part, large enough to be seen.
SIZE: Final = 0.3
# What a workshop calls them.
NAMES: Final = {"cylinder": "bore", "box": "pocket"}
# Dimensions that run along z: a cut is as long as the part is high, so that it goes right through.
ALONG: Final = ("length", "height", "length_z", "width")
# Where it is tried, of the part's width in x from its middle: a part may be hollow there already.
PLACES: Final = (0.0, 0.375, 0.25, 0.45)


def first_cut(assembly: Assembly, part: Part, shape: str) -> Cut:
    """Return a cut of a registered shape that takes something out of a part and leaves something.

    Raises:
        EditRefused, ShapeError: none of the places tried would do; the last reason.
    """
    low, high = part.bounds
    solid = _sized(SHAPES[shape].of({}), high - low)
    around = solid.box()
    cut = Cut(assembly.fresh_key("c"), assembly.fresh_name(NAMES.get(shape, f"{solid.title} cut")), solid)
    refused: MasswrightError | None = None
    for place in PLACES:
        middle = 0.5 * (low + high) + [place * (high - low)[0], 0.0, 0.0]
        shift = middle - around.mean(axis=0)
        placed = replace(cut, pose=Pose((float(shift[0]), float(shift[1]), float(shift[2]))))
        try:
            _ = replace(part, cuts=(*part.cuts, placed)).solid
        except MasswrightError as error:
            refused = error
            continue
        return placed
    raise refused or MasswrightError("there is no room for a cut", where=part.name)


def _sized(shape: Shape, extent: np.ndarray) -> Shape:
    """Return the shape made smaller or larger to suit a part of this extent (3,) m, and as long as it is high."""
    lengths = {dimension.name for dimension in shape.dimensions if dimension.kind == "length"}
    values = shape.values()
    factor = SIZE * float(extent.min()) / float(np.ptp(shape.box(), axis=0).max())
    sized = {name: values[name] * factor for name in lengths}
    try:
        return shape.resized({**sized, **{name: float(extent[2]) for name in ALONG if name in lengths}})
    except MasswrightError:
        # Some shapes cannot be drawn out along z alone.
        return shape.resized(sized)
