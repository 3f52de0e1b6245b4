"""Parts to seat on one another, and where they stand then."""

from __future__ import annotations

import math

import numpy as np
from hypothesis import strategies as st
from scipy.spatial.transform import Rotation

from core.assembly import Assembly, Part, ShapeBody
from core.assembly.fields import with_value
from core.assembly.seat import Anchor, Seat
from core.assembly.seats import datum_named, seated, with_seat
from core.material import ByDensity
from core.placement import Placement, Pose
from core.shapes import Box, Cylinder

ANGLES = st.floats(-math.pi, math.pi)
OFFSETS = st.floats(-0.5, 0.5)


def part(key, shape, pose=Pose(), **more):
    return Part(key, key, ShapeBody(shape), ByDensity(2700.0), pose, **more)


def plate_and_hub(plate=Pose(), hub=Pose()):
    return Assembly("t", (part("plate", Cylinder(0.4, 0.02), plate), part("hub", Cylinder(0.1, 0.05), hub)))


BELOW, ABOVE = Anchor("hub", "face −z"), Anchor("plate", "face +z")


def standing(assembly, key):
    """Return where the first copy of a part stands in the document, from its table."""
    table = assembly.table
    row = int(np.flatnonzero([table.parts[owner].key == key for owner in table.owner])[0])
    return Placement(table.standing.turn[row], table.standing.shift[row])


def spot(assembly, key, name):
    """Return a datum's point and direction in the document, by SciPy's rotation."""
    datum = datum_named(assembly.line(key), name)
    tf = standing(assembly, key)
    turn = Rotation.from_matrix(tf.turn)
    return turn.apply(datum.point.copy()) + tf.shift, turn.apply(datum.direction.copy())


def resized(assembly, key, **sizes):
    line = assembly.node(key)
    for name, value in sizes.items():
        line = with_value(line, f"dimension.{name}", value)
    return seated(assembly.replaced(line), assembly)


def chain():
    """Base 20 mm, column on it, table on the column, lamp under the table: the last three seated."""
    members = (
        part("base", Box(0.4, 0.3, 0.02), Pose((0.1, 0.2, 0.3), (0.4, -0.5, 0.6))),
        part("column", Cylinder(0.05, 0.2)), part("table", Box(0.2, 0.2, 0.01)), part("lamp", Cylinder(0.03, 0.04)),
    )
    seats = (
        ("column", Seat(Anchor("column", "face −z"), Anchor("base", "face +z"))),
        ("table", Seat(Anchor("table", "face −z"), Anchor("column", "rim +z"))),
        ("lamp", Seat(Anchor("lamp", "face +z"), Anchor("table", "face −z"), "against", 0.002, (0.05, 0.0))),
    )
    assembly = Assembly("chain", members)
    for key, seat in seats:
        assembly = with_seat(assembly, key, seat)
    return assembly
