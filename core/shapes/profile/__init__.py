"""Plane outlines of lines and arcs, their exact moments, and the bodies made from them.

- `Outline` of `OutlinePoint`s, `circle_loop`, `rectangle_loop`: described by points, checked when made.
- `PlaneMoments`: area, centroid, second and third moments of area.
- `outline_of_text`, `outline_of_rows`, `text_of_outline`: as a table, pasted or typed, and copied back.
- `Extruded`, `Turned`: registered shapes; both are an `OutlinedShape`.
"""

from core.shapes.profile.extruded import Extruded
from core.shapes.profile.outline import MOST_LOOPS, MOST_POINTS, Outline, OutlinePoint, circle_loop, rectangle_loop
from core.shapes.profile.outlined import OutlinedShape
from core.shapes.profile.plane_moments import PlaneMoments
from core.shapes.profile.table import outline_of_rows, outline_of_text, text_of_outline
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
    "outline_of_rows",
    "outline_of_text",
    "rectangle_loop",
    "text_of_outline",
]
