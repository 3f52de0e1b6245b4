"""Make the sample documents and meshes of this folder, always with the same bytes.

    python sample_parts/make_samples.py [FOLDER]

The scenario is invented: a line that fills tea into tins.

- Indexing dial: under the filling head it indexes six tins by a sixth of a turn. Each tin stands in a fixture whose
  export from the drawing office is a mesh in mm; plate, hub and shaft are still dimensions on a sketch; the motor sits
  on the shaft without a gearbox, and only its data sheet is known; the tins were weighed.
- Winding reel: behind the labeller it winds up the ribbon that the labels came on, label by label, through brake,
  gearbox and belt.
- Tilting flap: in front of the packer it lets tins that weigh too little drop out of the line. Its own weight would
  open it; a counterweight holds nearly all of it.
"""

from __future__ import annotations

import math
import struct
import sys
from pathlib import Path

from core.assembly import Assembly, Cut, DataSheet, DriveAxis, Group, KnownAxial, MeshBody, Part, ShapeBody
from core.assembly.assembly import MeantOverlap
from core.assembly.names import NameEntry, evaluated, values_of
from core.document import save_document
from core.drive import (
    FIXED,
    AppliedForce,
    AppliedTorque,
    BalanceSettings,
    Belt,
    Brake,
    ByLimits,
    ByTime,
    CorrectionPlane,
    Coupling,
    DriveSettings,
    Duty,
    Friction,
    Gear,
    Law,
    LimitCurve,
    Motor,
    MotorLimits,
    Move,
    Repeat,
    Rest,
    ShaftInertia,
    StopCase,
    Train,
    TurnsWith,
)
from core.drive.fields import kind_at, with_numbers
from core.machine import Machine
from core.material import ByDensity, ByMaterial, Weighed
from core.mesh import MeshAsset
from core.placement import Pose, Ring, Row
from core.quantity import parse
from core.shapes import SHAPES

Point = tuple[float, float, float]
Loop = list[Point]

HERE = Path(__file__).resolve().parent
FIXTURE = "fixture.stl"
DIAL = "indexing_dial.masswright"
REEL = "winding_reel.masswright"
FLAP = "tilting_flap.masswright"

RPM = 2 * math.pi / 60
TURN = 2 * math.pi
# Lays a part's z axis on the document's y, and on its x.
ALONG_Y, ALONG_X = (-math.pi / 2, 0.0, 0.0), (0.0, math.pi / 2, 0.0)

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


def winding_reel() -> Machine:
    """Return the reel: y is its axle, from the belt to the front; y = 0 is the inner face of the back flange."""
    names = evaluated((
        NameEntry("coil_d", "300 mm", "of the full coil"), NameEntry("ribbon_w", "120 mm"),
        NameEntry("pull", "18 N", "of the labeller on the ribbon"),
    ))
    reel = Group("reel", "reel", (*_axle(), *_flanges(), *_coil()), Pose(turns=ALONG_Y))
    small = Part(
        "small_wheel", "belt wheel, small", _shape("tube", outer_diameter=0.06, bore=0.014, length=0.024),
        ByMaterial.named("steel, C45"), Pose((-0.25, -0.09, -0.18), ALONG_Y),
    )
    blocks = Part(
        "blocks", "bearing blocks", _shape("tube", outer_diameter=0.07, bore=0.025, length=0.015),
        ByMaterial.named("grey cast iron"), Pose((0.0, -0.045, 0.0), ALONG_Y), Row(2, (0.0, -0.065, 0.0)),
        note="They stand still, and count in the mass of the whole only.",
    )
    axes = (
        DriveAxis("Axle", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0)),
        DriveAxis("Gear shaft", (-0.25, 0.0, -0.18), (0.0, 1.0, 0.0)),
    )
    assembly = Assembly(
        "winding reel", (reel, small, blocks), axes, "Axle", names=names, variants=("coil full", "coil empty"),
        variant="coil full",
    )
    return _with_typed(assembly, _reel_drive(), {"torques.0.torque": "pull*coil_d/2"})


def _axle() -> tuple[Part, ...]:
    thread = Cut(
        "thread", "threaded hole", SHAPES["cylinder"].of({"diameter": 0.0068, "length": 0.02}), Pose((0.0, 0.0, 0.13))
    )
    return (
        Part(
            "axle", "axle", _shape("cylinder", diameter=0.025, length=0.26), ByMaterial.named("steel, C45"),
            Pose((0.0, 0.0, -0.11)), cuts=(thread,),
        ),
        Part(
            "large_wheel", "belt wheel, large", _shape("tube", outer_diameter=0.12, bore=0.025, length=0.024),
            ByMaterial.named("aluminium EN AW-6082"), Pose((0.0, 0.0, -0.09)),
        ),
        Part(
            "chuck", "expanding chuck",
            KnownAxial(
                mass=1.6, centre=(0.0, 0.0, 0.06), inertia_about_axis=0.00085, length=0.11,
                source="data sheet of the chuck (invented), page 1, without the core",
            ),
            DataSheet(),
        ),
    )


def _flanges() -> tuple[Part, ...]:
    windows = Cut(
        "windows", "windows", SHAPES["cylinder"].of({"diameter": 0.06, "length": 0.005}), Pose((0.11, 0.0, 0.0)),
        Ring(6),
    )
    return (
        Part(
            "flanges", "flanges", _shape("tube", outer_diameter=0.34, bore=0.025, length=0.005),
            ByMaterial.named("aluminium EN AW-6082"), Pose((0.0, 0.0, -0.005)), Row(2, (0.0, 0.0, 0.125)),
            cuts=(windows,),
        ),
        Part(
            "pins", "driving pins", _shape("cylinder", diameter=0.008, length=0.018), ByMaterial.named("steel"),
            Pose((0.05, 0.0, -0.023)), Ring(3),
        ),
        Part(
            "flag", "flag of the sensor", _shape("box", length_x=0.02, length_y=0.012, length_z=0.006), Weighed(0.008),
            Pose((0.155, 0.0, 0.125)), note="The one part that has no counterpart: it makes the unbalance.",
        ),
    )


def _coil() -> tuple[Part, ...]:
    ribbon = Part(
        "coil", "coil of ribbon", _shape("tube", outer_diameter=0.3, bore=0.076, length=0.12), Weighed(7.2),
        typed=(("dimension.outer_diameter", "coil_d"), ("dimension.length", "ribbon_w")), only_in=("coil full",),
        note="A full coil on the packing scale, without its core.",
    )
    core = Part(
        "core", "core of cardboard", _shape("tube", outer_diameter=0.076, bore=0.07, length=0.12), ByDensity(700.0),
        typed=(("dimension.length", "ribbon_w"),),
    )
    return ribbon, core


def _reel_drive() -> DriveSettings:
    train = Train(
        Motor(3.1e-4, 6.0),
        (
            Brake("brake", 1.8e-5, 1.2), Coupling("coupling", 2.4e-5), Gear("gearbox", 5.0, 0.95, 4.5e-5),
            Belt("belt", 0.03, 0.06, 0.97, mass=0.18),
        ),
        inertias=(ShaftInertia("encoder", 2e-6, "motor"),),
    )
    label = Move(2.5 * TURN, ByLimits(speed=150 * RPM, acceleration=20.0, deceleration=25.0))
    slack = Move(-0.25 * TURN, ByTime(0.5), Law.CYCLOIDAL)
    duty = Duty((
        Repeat((label, Rest(0.8)), 4), Move(TURN, ByTime(1.2), Law.S_CURVE, smoothing=1.0), Rest(6.0), slack, Rest(1.0),
    ))
    return DriveSettings(
        turning=(TurnsWith(), TurnsWith("small_wheel", "gearbox", "Gear shaft"), TurnsWith("blocks", FIXED)),
        train=train, duty=duty, torques=(AppliedTorque("pull of the ribbon", 2.7),),
        frictions=(
            Friction("axle bearings", 0.08, coefficient=0.0018, radius=0.0125),
            Friction("seals of the gearbox", 0.02, 5e-5, shaft="motor"),
        ),
        limits=MotorLimits(
            LimitCurve(((0.0, 0.64), (3000 * RPM, 0.58))),
            LimitCurve(((0.0, 1.9), (2400 * RPM, 1.9), (3000 * RPM, 1.2))),
        ),
        stops=(StopCase(150 * RPM),),
        balance=BalanceSettings(
            speed=150 * RPM, grade=16.0, bearings=(-0.1025, -0.0375),
            planes=(CorrectionPlane(-0.0025, 0.16), CorrectionPlane(0.1225, 0.16)),
        ),
    )


def tilting_flap() -> Machine:
    """Return the flap, shut: y is its hinge, x points along the blade, and turning forwards lets it drop."""
    names = evaluated((
        NameEntry("blade_l", "450 mm"), NameEntry("blade_w", "500 mm"), NameEntry("opening", "70 deg"),
        NameEntry("shaft_d", "30 mm"),
    ))
    flap = Group("flap", "flap", (*_blade(), *_hinge(), _counterweight()))
    blocks = Part(
        "blocks", "bearing blocks", _shape("tube", outer_diameter=0.06, bore=0.03, length=0.02),
        ByMaterial.named("grey cast iron"), Pose((0.0, -0.318, 0.0), ALONG_Y), Row(2, (0.0, 0.616, 0.0)),
        typed=(("dimension.bore", "shaft_d"),), note="They stand still, and count in the mass of the whole only.",
    )
    assembly = Assembly(
        "tilting flap", (flap, blocks), (DriveAxis("Hinge", (0.0, 0.0, 0.0), (0.0, 1.0, 0.0)),), "Hinge", names=names,
        variants=("balanced", "bare"), variant="balanced",
    )
    return _with_typed(assembly, _flap_drive(), {
        "duty.steps.0.angle": "opening", "duty.steps.2.angle": "-opening", "stops.0.angle": "opening/2",
        "frictions.0.radius": "shaft_d/2",
    })


def _blade() -> tuple[Part, ...]:
    aluminium = ByMaterial.named("aluminium EN AW-5083")
    holes = Cut(
        "holes", "holes for the air", SHAPES["cylinder"].of({"diameter": 0.05, "length": 0.006}),
        Pose((0.06, -0.15, 0.0)), Row(4, (0.0, 0.1, 0.0)),
    )
    return (
        Part(
            "blade", "blade", _shape("box", length_x=0.45, length_y=0.5, length_z=0.006), aluminium,
            Pose((0.195, 0.0, 0.015)), typed=(("dimension.length_x", "blade_l"), ("dimension.length_y", "blade_w")),
            cuts=(holes,),
        ),
        Part(
            "ribs", "ribs", _shape("flat bar", width=0.02, thickness=0.004, corner_radius=0.0, length=0.36), aluminium,
            Pose((0.05, -0.1, 0.005), ALONG_X), Row(2, (0.0, 0.2, 0.0)),
        ),
        Part(
            "screws", "screws", _shape("cylinder", diameter=0.01, length=0.006), Weighed(0.009),
            Pose((0.0, -0.2, 0.021)), Row(6, (0.0, 0.08, 0.0)), note="Head and shank, as weighed.",
        ),
        Part(
            "lip", "rubber lip", _shape("box", length_x=0.012, length_y=0.5, length_z=0.01), Weighed(0.065),
            Pose((0.414, 0.0, 0.021)), typed=(("dimension.length_y", "blade_w"),),
        ),
    )


def _hinge() -> tuple[Part, ...]:
    shaft = Part(
        "shaft", "shaft", _shape("cylinder", diameter=0.03, length=0.68), ByMaterial.named("steel, C45"),
        Pose((0.0, -0.34, 0.0), ALONG_Y), typed=(("dimension.diameter", "shaft_d"),),
    )
    cam = Part(
        "cam", "cam of the end switch",
        KnownAxial(
            mass=0.22, centre=(0.004, 0.0, 0.008), inertia_about_axis=6.5e-5, length=0.016,
            source="data sheet of the cam (invented), page 2",
        ),
        DataSheet(), Pose((0.0, 0.34, 0.0), ALONG_Y),
    )
    return shaft, cam


def _counterweight() -> Group:
    arms = Part(
        "arms", "arms", _shape("box", length_x=0.24, length_y=0.012, length_z=0.03), ByMaterial.named("steel, S235"),
        Pose((-0.14, -0.28, -0.015)), Row(2, (0.0, 0.56, 0.0)),
    )
    threads = Cut(
        "threads", "threaded holes", SHAPES["cylinder"].of({"diameter": 0.0068, "length": 0.02}), Pose(),
        Row(2, (0.0, 0.0, 0.528)),
    )
    bar = Part(
        "bar", "bar", _shape("round bar", diameter=0.028, length=0.548), ByMaterial.named("steel, S235"),
        Pose((-0.24, -0.274, 0.0), ALONG_Y), cuts=(threads,),
    )
    return Group("counterweight", "counterweight", (arms, bar), only_in=("balanced",))


def _flap_drive() -> DriveSettings:
    opening = math.radians(70)
    train = Train(
        Motor(4.2e-5, 10.0),
        (Brake("spring brake", 6e-6, 0.9), Gear("worm gear", 40.0, 0.72, 1.1e-5, braking_efficiency=0.45)),
    )
    duty = Duty((
        Move(opening, ByTime(0.6), Law.MODIFIED_SINE), Rest(1.2), Move(-opening, ByTime(0.8), Law.POLYNOMIAL_345),
        Rest(3.4),
    ))
    return DriveSettings(
        turning=(TurnsWith(), TurnsWith("blocks", FIXED)), train=train, duty=duty,
        forces=(
            AppliedForce("tin on the blade", (0.0, 0.0, -2.3), (0.3, 0.0, 0.021), start=0.0, end=math.radians(25)),
        ),
        torques=(AppliedTorque("lip on its seat", 0.15, "against motion", start=0.0, end=math.radians(4)),),
        frictions=(Friction("hinge bearings", coefficient=0.08, radius=0.015),),
        limits=MotorLimits(
            LimitCurve(((0.0, 0.35), (2000 * RPM, 0.3))), LimitCurve(((0.0, 1.1), (2000 * RPM, 0.9)))
        ),
        stops=(StopCase(3.5, angle=opening / 2),),
        balance=BalanceSettings(bearings=(-0.308, 0.308), planes=(CorrectionPlane(0.0, 0.24),)),
    )


def _with_typed(assembly: Assembly, drive: DriveSettings, texts: dict[str, str]) -> Machine:
    """Return the machine whose drive says some of its numbers, by path, with named dimensions."""
    names = values_of(assembly.names)
    numbers = {path: parse(text, kind_at(path), names=names).value for path, text in texts.items()}
    return Machine(assembly, with_numbers(drive, numbers, texts))


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
    save_document(winding_reel(), folder / REEL)
    save_document(tilting_flap(), folder / FLAP)
    print(f"{FIXTURE}, {DIAL}, {REEL} and {FLAP} are in {folder}")


if __name__ == "__main__":
    main(Path(sys.argv[1]) if len(sys.argv) > 1 else HERE)
