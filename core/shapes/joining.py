"""Several surfaces as one."""

from collections.abc import Sequence

import numpy as np

from core.facets import Facets


def together(surfaces: Sequence[Facets]) -> Facets:
    """Return surfaces, which share no point, as one."""
    first = np.cumsum([0, *(len(surface.points) for surface in surfaces[:-1])])
    corners = [surface.corners + start for surface, start in zip(surfaces, first, strict=True)]
    return Facets(np.concatenate([surface.points for surface in surfaces]), np.concatenate(corners))


def inside_out(surface: Facets) -> Facets:
    """Return a surface with its outside turned in: the wall of a cavity."""
    return Facets(surface.points, surface.corners[:, ::-1])
