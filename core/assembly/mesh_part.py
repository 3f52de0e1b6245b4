"""A mesh part's two sets of values side by side: as faceted, and with the curvature behind the facets restored."""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from core.assembly.bodies import MeshBody
from core.assembly.nodes import DataSheet

if TYPE_CHECKING:
    from core.arrays import FloatArray
    from core.assembly.nodes import Part
    from core.moments import Moments


@dataclass(frozen=True)
class Comparison:
    """One quantity of one piece.

    Attributes:
        faceted, restored: in SI; the inertia at the part's mass, at unit density where that is not known.
        difference: restored over faceted, less one.
        left: how far the restored value may still be off, relative (an estimate).
    """

    faceted: float
    restored: float
    left: float

    @property
    def difference(self) -> float:
        """How much larger the restored value is, relative to the faceted one."""
        return self.restored / self.faceted - 1.0


@dataclass(frozen=True)
class MeshComparison:
    """Volume, m³, and inertia about the piece's own centre of mass parallel to a direction, kg·m², of one piece."""

    volume: Comparison
    inertia: Comparison


def compare_mesh(part: Part, direction: FloatArray) -> MeshComparison | None:
    """Return both sets of values of one piece of a mesh part; None where the curvature cannot be restored.

    Args:
        part: its body is a mesh.
        direction: (3,) in the frame that the part stands in, of any length.

    Raises:
        Cancelled: the work was stopped.
    """
    body = part.body
    if not isinstance(body, MeshBody) or body.faceted is None or body.restored is None:
        return None
    restored = body.asset.restored()
    before, after = part.after_cuts(body.faceted), part.after_cuts(body.restored)
    if restored is None or before is None or after is None:
        return None
    own = np.asarray(part.standing.turn)[0].T @ np.asarray(direction, dtype=float)
    left = restored.left
    return MeshComparison(
        Comparison(float(before.mass), float(after.mass), left.volume),
        Comparison(_inertia(part, before, own), _inertia(part, after, own), left.inertia),
    )


def _inertia(part: Part, solid: Moments, direction: FloatArray) -> float:
    mass = None if isinstance(part.driver, DataSheet) else part.driver.mass_of(float(solid.mass))
    return float((solid if mass is None else solid.with_mass(mass)).own_inertia_along(direction))
