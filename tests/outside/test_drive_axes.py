"""Documents from print, about the axes that the print is about: J, radius of gyration, GD² and WR².

Sources: OpenStax, University Physics Vol. 1 (sections named at the tests); a controls forum's worked example of GD²
and WR² (post 1271961278 on control.com, exact factors beside the printed ones).
"""

from __future__ import annotations

import math

import pytest

from core.assembly import Assembly, DataSheet, DriveAxis, KnownAxial, Part, ShapeBody, ledger_of
from core.assembly.axes import driven_about, driven_about_part, with_axis_added
from core.handover import SheetChoice, sheet_of_assembly
from core.handover.answer import answer_of_machine
from core.machine import Machine
from core.material import PerLength, Weighed
from core.placement import Pose
from core.quantity import UNIT_SETS
from core.shapes import SHAPES, Sphere


def thin_rod(length: float, mass: float, pose: Pose = Pose()) -> Part:
    return Part("rod", "rod", ShapeBody(SHAPES["thin rod"].of({"length": length})), PerLength(mass / length), pose)


# A rod along x of the document, its free end in the origin; the shape stands on its own origin along z.
ALONG_X = Pose((0.0, 0.0, 0.0), (0.0, math.pi / 2, 0.0))


def about(assembly: Assembly, name: str) -> dict[str, float]:
    return next(axis for axis in answer_of_machine(Machine(assembly), "a")["axes"] if axis["name"] == name)


def test_a_rod_about_its_end_and_about_its_middle():
    # OpenStax, section 10.4: M·L²/3 and M·L²/12.
    rod = thin_rod(1.5, 3.0, ALONG_X)
    assembly = Assembly(members=(rod,), axes=(DriveAxis("End"), DriveAxis("Middle", (0.75, 0.0, 0.0))), drive="Middle")
    assert about(assembly, "End")["inertia_kgm2"] == pytest.approx(3.0 * 1.5**2 / 3, rel=1e-14)
    assert about(assembly, "Middle")["inertia_kgm2"] == pytest.approx(3.0 * 1.5**2 / 12, rel=1e-14)
    assert about(assembly, "End")["radius_of_gyration_m"] == pytest.approx(1.5 / math.sqrt(3), rel=1e-14)
    line = ledger_of(assembly).lines[0]
    assert (line.own_inertia, line.transfer) == pytest.approx((0.5625, 0.0), abs=1e-15)
    assert line.radius_of_gyration == pytest.approx(1.5 / math.sqrt(12), rel=1e-14)
    at_end = ledger_of(driven_about(assembly, "End")).lines[0]
    assert (at_end.own_inertia, at_end.transfer) == pytest.approx((0.5625, 3.0 * 0.75**2), rel=1e-14)


def test_a_rod_with_a_sphere_about_either_end_of_the_rod():
    # OpenStax, section 10.5: rod 0.5 m, 2.0 kg, sphere 1.0 kg, R 0.20 m at its end; 0.673 and 0.223 kg·m².
    rod = thin_rod(0.5, 2.0, ALONG_X)
    sphere = Part("ball", "ball", ShapeBody(Sphere(0.4)), Weighed(1.0), Pose((0.7, 0.0, 0.0)))
    free = DriveAxis("Free end", (0.0, 0.0, 0.0), second=(0.0, 0.0, 0.1))
    assembly = Assembly(members=(rod, sphere), axes=(free, DriveAxis("Ball's end", (0.5, 0.0, 9.0))), drive="Free end")
    assert about(assembly, "Free end")["inertia_kgm2"] == pytest.approx(0.673, abs=5e-4)
    assert about(assembly, "Ball's end")["inertia_kgm2"] == pytest.approx(0.223, abs=5e-4)
    assert answer_of_machine(Machine(assembly), "a")["axis"] == about(assembly, "Free end")


def test_the_axis_of_the_ball_gives_its_own_inertia_and_moves_with_it():
    # OpenStax, section 10.4: 2·m·R²/5 about a diameter.
    ball = Part("ball", "ball", ShapeBody(Sphere(0.4)), Weighed(1.0), Pose((0.7, -0.2, 0.4), (0.3, 0.2, 0.1)))
    assembly = driven_about_part(Assembly(members=(ball,)), "ball")
    total = ledger_of(assembly).total
    assert total.inertia == pytest.approx(0.4 * 0.2**2, rel=1e-13)
    assert total.transfer == pytest.approx(0.0, abs=1e-16)
    moved = assembly.replaced(Part("ball", "ball", ball.body, ball.driver, Pose((5.0, 0.0, 0.0))))
    assert ledger_of(moved).total.inertia == pytest.approx(0.4 * 0.2**2, rel=1e-13)
    assert ledger_of(driven_about(moved, "Spindle")).total.transfer == pytest.approx(25.0, rel=1e-14)


def test_the_sheet_gives_the_flywheel_effect_of_the_printed_example():
    # GD² 1.788 kgf·m² is J 0.447 kg·m² and WR² 1527.49 lb·in² (1527.476 with exact factors).
    rotor = Part("r", "rotor", KnownAxial(10.0, (0.0, 0.0, 0.0), 0.447), DataSheet())
    assembly = with_axis_added(Assembly(members=(rotor,)), DriveAxis("Aside", (1.0, 0.0, 0.0)))
    entries = {entry.symbol: entry for entry in sheet_of_assembly(
        assembly, SheetChoice(), UNIT_SETS["in lb lb·in²"]
    ).entries}
    assert entries["GD²"].value == pytest.approx(1.788, rel=1e-14)
    assert entries["GD²"].unit.symbol == "kgf·m² GD²"
    assert entries["WR²"].value == pytest.approx(1527.476, abs=5e-4)
    assert entries["WR²"].value == pytest.approx(1527.49, rel=1e-5)
    assert entries["k"].si == pytest.approx(math.sqrt(0.0447), rel=1e-14)
    assert [entries[symbol].label for symbol in ("GD²", "WR²")] == [
        "Flywheel effect GD² = 4·J about the drive axis Spindle", "Flywheel effect WR² = J about the drive axis Spindle"
    ]
    feet = sheet_of_assembly(assembly, SheetChoice(), UNIT_SETS["mm kg kg·m²"]).entries
    # The same post: WR² in lb·ft² is 5.933 times GD² in kgf·m² (exact 5.93259).
    ratio = next(entry.value for entry in feet if entry.symbol == "WR²") / 1.788
    assert ratio == pytest.approx(5.93259, abs=1e-5)
