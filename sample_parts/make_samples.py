"""Make the sample documents and meshes of this folder, always with the same bytes.

    python sample_parts/make_samples.py [FOLDER]

The scenario is invented: a dial under a filling head indexes six tea tins by a sixth of a turn. Each tin stands in a
fixture whose export from the drawing office is a mesh in mm; plate, hub and shaft are still dimensions on a sketch;
the motor sits on the shaft without a gearbox, and only its data sheet is known; the tins were weighed.
"""

from __future__ import annotations

import math
import struct
import sys
from pathlib import Path

from core.assembly import Assembly, DataSheet, DriveAxis, Group, KnownAxial, MeshBody, Part, ShapeBody
from core.assembly.assembly import MeantOverlap
from core.document import save_document
from core.machine import Machine
from core.material import ByMaterial, Weighed
from core.mesh import MeshAsset
from core.placement import Pose, Ring
from core.shapes import SHAPES

Point = tuple[float, float, float]
Loop = list[Point]

HERE = Path(__file__).resolve().parent
FIXTURE = "fixture.stl"
DIAL = "indexing_dial.masswright"

# The fixture, mm: a block along x and y with round corners, chamfered at the top; a pocket for the tin with a round
# between wall and floor; a drain through the floor.
BLOCK = (70.0, 90.0, 40.0)
CORNER, CHAMFER = 12.0, 1.5
POCKET, FLOOR, FLOOR_ROUND = 25.0, 15.0, 4.0
DRAIN = 9.0

# Points on every loop, four corners alike, and steps of the round on the pocket's floor.
AROUND, ROUND_STEPS = 96, 8

# Coordinates are rounded to this many digits of a mm, so that every computer writes the same bytes.
DIGITS = 4


def fixture_stl() -> bytes:
    """Return the fixture as a binary STL in mm: loops of equal many points, each stitched to the next, in a ring."""
    loops = fixture_loops()
    pairs = zip(loops, [*loops[1:], loops[0]], strict=True)
    facets = [facet for loop, following in pairs for facet in _band(loop, following)]
    header = b"Fixture of the sample dial, in mm".ljust(80)
    return header + struct.pack("<I", len(facets)) + b"".join(_record(facet) for facet in facets)


def fixture_loops() -> list[Loop]:
    """Return the loops from the bottom's rim over the outside, the pocket and the drain back to the bottom."""
    width, depth, height = BLOCK
    fillet = [math.pi / 2 * step / ROUND_STEPS for step in range(ROUND_STEPS + 1)]
    return [
        _block_outline(width, depth, CORNER, 0.0),
        _block_outline(width, depth, CORNER, height - CHAMFER),
        _block_outline(width - 2 * CHAMFER, depth - 2 * CHAMFER, CORNER - CHAMFER, height),
        _circle(POCKET, height),
        *(
            _circle(POCKET - FLOOR_ROUND * (1 - math.cos(turn)), FLOOR + FLOOR_ROUND * (1 - math.sin(turn)))
            for turn in fillet
        ),
        _circle(DRAIN, FLOOR),
        _circle(DRAIN, 0.0),
    ]


def indexing_dial(fixture: MeshAsset) -> Assembly:
    """Return the dial: z is the spindle, pointing up; z = 0 is the underside of the plate."""
    plate = Part(
        "plate", "plate", _shape("tube", outer_diameter=0.5, bore=0.04, length=0.02),
        ByMaterial.named("aluminium EN AW-6082"),
        note="Counted without the holes of the hub screws: their shanks fill them. About 5 g a screw too little.",
    )
    hub = Part(
        "hub", "hub", _shape("tube", outer_diameter=0.13, bore=0.04, length=0.03), ByMaterial.named("steel, C45"),
        Pose((0.0, 0.0, -0.03)),
    )
    shaft = Part(
        "shaft", "shaft", _shape("cylinder", diameter=0.04, length=0.24), ByMaterial.named("steel, 42CrMo4"),
        Pose((0.0, 0.0, -0.22)),
    )
    dial = Group("dial", "dial", (plate, hub, shaft, _screws(), _stations(fixture), _flag()))
    edge = MeantOverlap("fixture", "tin", "fixture", "The tin's lower edge is round in truth, like the pocket's floor.")
    return Assembly("indexing dial", (dial, _rotor()), (DriveAxis("Spindle"),), meant=(edge,))


def _screws() -> Group:
    steel = ByMaterial.named("steel")
    head = Part("head", "head", _shape("cylinder", diameter=0.013, length=0.008), steel, Pose((0.0, 0.0, 0.02)))
    nut = Part("nut", "nut", _shape("cylinder", diameter=0.0138, length=0.0065), steel, Pose((0.0, 0.0, -0.0365)))
    return Group("screws", "hub screws", (head, nut), Pose((0.052, 0.0, 0.0)), Ring(8))


def _stations(fixture: MeshAsset) -> Group:
    holder = Part(
        "fixture", "fixture", MeshBody(fixture, 1e-3), ByMaterial.named("aluminium EN AW-7075"), Pose((0.0, 0.0, 0.02)),
        note="Export of the drawing office, in mm.",
    )
    tin = Part(
        "tin", "tin, full", _shape("cylinder", diameter=0.048, length=0.09), Weighed(0.138), Pose((0.0, 0.0, 0.035)),
        note="Mean of ten tins on the packing scale, with 100 g of tea. Counted as if the filling were solid.",
    )
    return Group("stations", "stations", (holder, tin), Pose((0.18, 0.0, 0.0)), Ring(6))


def _flag() -> Part:
    angle = math.radians(30)
    return Part(
        "flag", "flag of the sensor", _shape("box", length_x=0.03, length_y=0.012, length_z=0.025),
        ByMaterial.named("stainless steel"),
        Pose((round(0.23 * math.cos(angle), 6), round(0.23 * math.sin(angle), 6), -0.025), (0.0, 0.0, angle)),
        note="The one part that has no counterpart: it moves the centre of mass off the spindle.",
    )


def _rotor() -> Part:
    known = KnownAxial(
        mass=1.9, centre=(0.0, 0.0, 0.0), inertia_about_axis=0.0021, length=0.09,
        source="data sheet of the drive (invented), page 3, rotor without brake",
    )
    return Part(
        "rotor", "motor rotor", known, DataSheet(), Pose((0.0, 0.0, -0.27)),
        note="No gearbox: it turns with the spindle.",
    )


def _shape(key: str, **dimensions: float) -> ShapeBody:
    return ShapeBody(SHAPES[key].of(dimensions))


def _circle(radius: float, z: float) -> Loop:
    return [_point(radius, 2 * math.pi * (at + 0.5) / AROUND, 0.0, 0.0, z) for at in range(AROUND)]


def _block_outline(width: float, depth: float, corner: float, z: float) -> Loop:
    """Return the outline of a block with round corners, anticlockwise from the side that x points to."""
    a_corner = AROUND // 4
    loop = []
    for quarter, (sign_x, sign_y) in enumerate([(1, 1), (-1, 1), (-1, -1), (1, -1)]):
        x, y = sign_x * (width / 2 - corner), sign_y * (depth / 2 - corner)
        turns = [math.pi / 2 * (quarter + at / (a_corner - 1)) for at in range(a_corner)]
        loop += [_point(corner, turn, x, y, z) for turn in turns]
    return loop


def _point(radius: float, turn: float, x: float, y: float, z: float) -> Point:
    # Adding 0 makes a plain 0 of a −0.
    return tuple(  # type: ignore[return-value]  # three coordinates
        round(value, DIGITS) + 0.0 for value in (x + radius * math.cos(turn), y + radius * math.sin(turn), z)
    )


def _band(loop: Loop, following: Loop) -> list[tuple[Point, Point, Point]]:
    """Return the facets between two loops, anticlockwise seen from outside."""
    facets = []
    for at in range(len(loop)):
        to = (at + 1) % len(loop)
        facets += [(loop[at], loop[to], following[to]), (loop[at], following[to], following[at])]
    return facets


def _record(facet: tuple[Point, Point, Point]) -> bytes:
    a, b, c = facet
    u, v = [[q - p for p, q in zip(a, other, strict=True)] for other in (b, c)]
    cross = (u[1] * v[2] - u[2] * v[1], u[2] * v[0] - u[0] * v[2], u[0] * v[1] - u[1] * v[0])
    length = math.sqrt(sum(value * value for value in cross))
    normal = [round(value / length, 6) + 0.0 for value in cross]
    return struct.pack("<12fH", *normal, *a, *b, *c, 0)


def main(folder: Path) -> None:
    """Write the samples into a folder."""
    stl = fixture_stl()
    (folder / FIXTURE).write_bytes(stl)
    save_document(Machine(indexing_dial(MeshAsset.of_bytes(stl, FIXTURE))), folder / DIAL)
    print(f"{FIXTURE} and {DIAL} are in {folder}")


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE)
