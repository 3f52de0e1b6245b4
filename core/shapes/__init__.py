"""Bodies given by a few dimensions: moments in closed form and a surface to draw.

Importing this package enters every shape into SHAPES (key → class).
"""

from core.shapes.base import SHAPES, Dimension, Shape
from core.shapes.box import Box
from core.shapes.cone import Cone, Frustum
from core.shapes.cylinder import Cylinder, Tube
from core.shapes.sphere import Sphere

__all__ = ["SHAPES", "Box", "Cone", "Cylinder", "Dimension", "Frustum", "Shape", "Sphere", "Tube"]
