"""Bodies given by a few dimensions: moments in closed form and a surface to draw.

Importing this package enters every shape into SHAPES (key → class). A new family is one file with classes marked
`@register`, and its import below; everything else finds it in SHAPES.
"""

from core.shapes.base import SHAPES, Dimension, Shape
from core.shapes.box import Box
from core.shapes.cap import Hemisphere, SphericalCap
from core.shapes.cone import Cone, Frustum, HollowFrustum
from core.shapes.cylinder import Cylinder, Tube
from core.shapes.ellipsoid import Ellipsoid
from core.shapes.point import PointMass
from core.shapes.prism import RegularPrism
from core.shapes.profile import Extruded, Outline, OutlinedShape, OutlinePoint, PlaneMoments, Turned
from core.shapes.pyramid import Pyramid, Tetrahedron
from core.shapes.sections import (
    AngleSection,
    ChannelSection,
    CircularHollowSection,
    FlatBar,
    ISection,
    RectangularHollowSection,
    RoundBar,
    Section,
    SquareBar,
    SquareHollowSection,
    TaperedISection,
    TSection,
)
from core.shapes.sheet import ThinDisc, ThinSheet
from core.shapes.shell import ConicalShell, CylindricalShell, DomedShell, SphericalShell, ToroidalShell
from core.shapes.sphere import HollowSphere, Sphere
from core.shapes.spoked_wheel import SpokedWheel
from core.shapes.toothed_wheel import ToothedWheel
from core.shapes.torus import Torus
from core.shapes.wedge import Wedge
from core.shapes.wire import ThinRing, ThinRod

__all__ = [
    "SHAPES",
    "AngleSection",
    "Box",
    "ChannelSection",
    "CircularHollowSection",
    "Cone",
    "ConicalShell",
    "Cylinder",
    "CylindricalShell",
    "Dimension",
    "DomedShell",
    "Ellipsoid",
    "Extruded",
    "FlatBar",
    "Frustum",
    "Hemisphere",
    "HollowFrustum",
    "HollowSphere",
    "ISection",
    "Outline",
    "OutlinePoint",
    "OutlinedShape",
    "PlaneMoments",
    "PointMass",
    "Pyramid",
    "RectangularHollowSection",
    "RegularPrism",
    "RoundBar",
    "Section",
    "Shape",
    "Sphere",
    "SphericalCap",
    "SphericalShell",
    "SpokedWheel",
    "SquareBar",
    "SquareHollowSection",
    "TSection",
    "TaperedISection",
    "Tetrahedron",
    "ThinDisc",
    "ThinRing",
    "ThinRod",
    "ThinSheet",
    "ToothedWheel",
    "ToroidalShell",
    "Torus",
    "Tube",
    "Turned",
    "Wedge",
]
