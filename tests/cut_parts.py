"""Parts with cuts, and what textbooks say of what is cut out."""

from __future__ import annotations

import numpy as np

from core.assembly import Cut, Part, ShapeBody
from core.material import ByDensity
from core.moments import Moments
from core.placement import Pose, Several
from core.shapes import Cylinder

DENSITY = 2700.0
# What faceted solids leave of a cut's own moments after extrapolation, relative to them; see core.assembly.solid_cuts.
CROSSING = 1e-6
DOUBLY_CURVED = 1e-5


def part(shape, *cuts, driver=None):
    return Part("p", "plate", ShapeBody(shape), ByDensity(DENSITY) if driver is None else driver, cuts=cuts)


def bore(diameter, length, at=(0.0, 0.0, 0.0), turns=(0.0, 0.0, 0.0), copies=Several(1), key="bore"):
    return Cut(key, key, Cylinder(diameter, length), Pose(at, turns), copies)


def cylinder_moments(radius, length, centre, axis=2):
    """Return a full cylinder as textbooks have it, at unit density: m·r²/4 and m·L²/12."""
    mass = np.pi * radius**2 * length
    spread = np.full(3, mass * radius**2 / 4)
    spread[axis] = mass * length**2 / 12
    return Moments(mass, centre, np.diag(spread))
