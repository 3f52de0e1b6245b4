"""Plane outlines of lines and arcs, their exact moments, and the bodies made from them.

- `Outline` of `OutlinePoint`s, `circle_loop`, `rectangle_loop`: described by points, checked when made.
- `PlaneMoments`: area, centroid, second and third moments of area.
- `Extruded`, `Turned`: registered shapes; both are an `OutlinedShape`.
"""

from core.shapes.profile.extruded import Extruded
from core.shapes.profile.outline import MOST_LOOPS, MOST_POINTS, Outline, OutlinePoint, circle_loop, rectangle_loop
from core.shapes.profile.outlined import OutlinedShape
from core.shapes.profile.plane_moments import PlaneMoments
from core.shapes.profile.turned import Turned

__all__ = [
    "MOST_LOOPS",
    "MOST_POINTS",
    "Extruded",
    "Outline",
    "OutlinePoint",
    "OutlinedShape",
    "PlaneMoments",
    "Turned",
    "circle_loop",
    "rectangle_loop",
]
