"""When the curvature behind a mesh's facets can be restored, and doing it for a mesh that was surveyed."""

from __future__ import annotations

from typing import TYPE_CHECKING, Final

import numpy as np

from core.mesh.survey import INSIDE_OUT, SOUND
from core.mesh.weld import weld_exactly

if TYPE_CHECKING:
    from numpy.typing import NDArray

    from core.mesh.curvature import Restored
    from core.mesh.survey import MeshSurvey
    from core.progress import Progress

# Up to this many triangles it takes no time that anybody notices.
AT_ONCE: Final = 200_000


def can_restore(survey: MeshSurvey) -> bool:
    """Return whether the curvature behind the facets of a surveyed mesh can be restored.

    An open mesh has edges that nothing is known beyond, and facets that wind both ways have no outside.
    """
    return survey.verdict in SOUND and survey.solid is not None


def restored(
    triangles: NDArray[np.floating], survey: MeshSurvey, progress: Progress | None = None
) -> Restored | None:
    """Return the restored body of triangles (n, 3, 3), in their unit at unit density; None where it cannot be.

    Raises:
        Cancelled: progress was cancelled.
    """
    from core.mesh.curvature import restore

    if not can_restore(survey):
        return None
    points, corners = weld_exactly(np.ascontiguousarray(triangles))
    return restore(points, corners[:, ::-1] if survey.verdict == INSIDE_OUT else corners, progress)
