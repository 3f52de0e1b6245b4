from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from oracles import points_like, tensor_of_points
from strategies import assemblies, mass_drivers

from core.assembly import Assembly, Cut, DataSheet, DriveAxis, Group, KnownTensor, Part, ShapeBody, ledger_of
from core.assembly.selection import selected
from core.errors import EditRefused
from core.handover import SheetChoice, sheet_of_assembly
from core.handover.lines import FOR_THE_DRIVE
from core.material import ByDensity
from core.placement import Pose, Ring, Row
from core.quantity import UNIT_SETS, Kind
from core.shapes import SHAPES, Box, Cylinder

METRIC = UNIT_SETS["mm kg kg·m²"]
SI = UNIT_SETS["SI"]


def disc(key: str = "disc", diameter: float = 0.4, length: float = 0.02, density: float = 7850.0, **rest: object) -> Part:
    body = ShapeBody(SHAPES["cylinder"].of({"diameter": diameter, "length": length}))
    return Part(key, key, body, ByDensity(density), **rest)


def values(sheet) -> dict[str, float | None]:
    return {entry.symbol: entry.si for entry in sheet.entries}


def test_a_disc_on_its_axis_has_half_m_r_squared_about_it_and_no_offset():
    sheet = values(sheet_of_assembly(Assembly(members=(disc(),)), SheetChoice(), METRIC))
    mass = 7850 * np.pi * 0.2**2 * 0.02
    assert sheet["J"] == pytest.approx(mass * 0.2**2 / 2, rel=1e-12)
    assert sheet["k"] == pytest.approx(0.2 / np.sqrt(2), rel=1e-12)
    assert (sheet["d"], sheet["m·d²"]) == (0.0, 0.0)


def test_own_j_and_parallel_axis_term_add_up_to_j_about_the_drive_axis():
    assembly = Assembly(members=(disc(pose=Pose((0.3, -0.1, 0.5), (0.3, 0.2, 0.1))),))
    sheet = values(sheet_of_assembly(assembly, SheetChoice(), METRIC))
    assert sheet["J_own"] + sheet["m·d²"] == pytest.approx(sheet["J"], rel=1e-12)
    assert sheet["J"] == pytest.approx(ledger_of(assembly).total.inertia, rel=1e-12)


def test_round_off_is_shown_as_nothing_however_the_part_is_turned():
    ring = disc("pin", 0.02, 0.1, pose=Pose((0.1, 0.0, 0.0)), copies=Ring(7))
    sheet = values(sheet_of_assembly(Assembly(members=(ring,)), SheetChoice(), METRIC))
    assert [sheet[symbol] for symbol in ("x_c", "y_c", "d", "m·d²", "Ixy", "Ixz")] == [0.0] * 6


def test_gd2_is_four_times_j_and_wr2_is_j():
    sheet = sheet_of_assembly(Assembly(members=(disc(),)), SheetChoice(), METRIC)
    shown = {entry.symbol: (entry.value, entry.unit.symbol) for entry in sheet.entries}
    inertia = shown["J"][0]
    assert shown["GD²"] == (pytest.approx(4 * inertia), "kgf·m² GD²")
    # One lb·ft² is 0.45359237 kg times (0.3048 m)².
    assert shown["WR²"] == (pytest.approx(inertia / (0.45359237 * 0.3048**2)), "lb·ft² WR²")


@given(assemblies(drivers=mass_drivers))
def test_every_tensor_on_a_sheet_is_that_of_point_masses_with_the_same_moments(assembly: Assembly):
    masses, places = points_like(assembly.total) if assembly.table.parts else (np.zeros(1), np.zeros((1, 3)))
    point = (0.3, -0.2, 0.7)
    for about, place in (("centre", assembly.total.centre), ("origin", np.zeros(3)), (point, np.array(point))):
        sheet = values(sheet_of_assembly(assembly, SheetChoice(about), SI))
        if not assembly.table.parts:
            assert sheet["Ixx"] is None
            continue
        expected = tensor_of_points(masses, places, place)
        got = [sheet[f"I{pair}"] for pair in ("xx", "yy", "zz", "xy", "xz", "yz")]
        six = [expected[i, j] for i, j in ((0, 0), (1, 1), (2, 2), (0, 1), (0, 2), (1, 2))]
        size = np.abs(places).max() + np.abs(place).max()
        np.testing.assert_allclose(got, six, rtol=0, atol=1e-12 * masses.sum() * size**2)


def test_products_change_sign_and_name_with_the_convention():
    # The 5-4-3 corner tetrahedron of unit density as four points: its tensor is known in closed form.
    six = (9.375, 12.75, 15.375, 2.5, 1.875, 1.5)
    body = KnownTensor(10.0, (1.25, 1.0, 0.75), six)
    assembly = Assembly(members=(Part("t", "t", body, DataSheet()),))
    tensor = values(sheet_of_assembly(assembly, SheetChoice(products="tensor"), SI))
    integral = values(sheet_of_assembly(assembly, SheetChoice(products="integral"), SI))
    assert [tensor[f"I{pair}"] for pair in ("xy", "xz", "yz")] == pytest.approx([2.5, 1.875, 1.5], rel=1e-12)
    assert [integral[f"P{pair}"] for pair in ("xy", "xz", "yz")] == pytest.approx([-2.5, -1.875, -1.5], rel=1e-12)
    about_origin = values(sheet_of_assembly(assembly, SheetChoice("origin"), SI))
    expected = [25, 34, 41, -10, -7.5, -6]
    got = [about_origin[f"I{pair}"] for pair in ("xx", "yy", "zz", "xy", "xz", "yz")]
    assert got == pytest.approx(expected, rel=1e-12)


def test_along_the_principal_axes_the_tensor_about_the_centre_is_diagonal():
    assembly = Assembly(members=(disc(pose=Pose((0.3, -0.1, 0.5), (0.3, 0.2, 0.1))), disc("b", 0.1, 0.5)))
    sheet = values(sheet_of_assembly(assembly, SheetChoice(along="principal"), SI))
    assert [sheet["I12"], sheet["I13"], sheet["I23"]] == pytest.approx([0, 0, 0], abs=1e-12 * sheet["I3"])
    assert [sheet[f"I{n}{n}"] for n in "123"] == pytest.approx([sheet[f"I{n}"] for n in "123"], rel=1e-9)


def test_principal_moments_ascend_and_a_tie_is_said():
    sheet = sheet_of_assembly(Assembly(members=(disc(),)), SheetChoice(), METRIC)
    found = values(sheet)
    assert found["I1"] == pytest.approx(found["I2"], rel=1e-9)
    assert found["I2"] < found["I3"]
    assert any("1 and 2 agree" in note for note in sheet.notes)


@pytest.mark.parametrize("choice", [SheetChoice(), SheetChoice("origin", "principal", "integral"), SheetChoice((0, 1, 2))])
def test_every_inertia_label_names_its_point_or_axis(choice: SheetChoice):
    sheet = sheet_of_assembly(Assembly(members=(disc(),)), choice, METRIC)
    labels = [entry.label for entry in sheet.entries if entry.kind is Kind.INERTIA]
    assert len(labels) == 14
    assert all(" about " in label or " to the drive axis Spindle" in label for label in labels)
    products = [entry.label for entry in sheet.entries if "dm" in entry.label]
    assert len(products) == 3
    assert all(("−∫" in label) == (choice.products == "tensor") for label in products)


def test_the_label_of_a_point_gives_it_in_the_shown_unit():
    sheet = sheet_of_assembly(Assembly(members=(disc(),)), SheetChoice((0.0254, 0.0, 0.5)), UNIT_SETS["in lb lb·in²"])
    assert any("the point (1; 0; 19.6850394) in" in entry.label for entry in sheet.entries)


def test_one_line_gives_all_copies_of_a_part_in_the_document_frame():
    pin = disc("pin", 0.02, 0.1, pose=Pose((0.1, 0.0, 0.0)), copies=Ring(6))
    group = Group("g", "g", (disc("plate"), pin), Pose((0.0, 0.0, 0.3), (0.2, 0.0, 0.0)), Row(2, (0.0, 0.0, 0.4)))
    assembly = Assembly(members=(group, disc("far", pose=Pose((1.0, 0.0, 0.0)))))
    sheet = sheet_of_assembly(assembly, SheetChoice(), SI, "pin")
    line = next(line for line in ledger_of(assembly).lines if line.key == "pin")
    found = values(sheet)
    assert sheet.title == "pin"
    assert found["m"] == pytest.approx(line.mass, rel=1e-12)
    assert found["J"] == pytest.approx(line.inertia, rel=1e-12)
    assert [found[f"{axis}_c"] for axis in "xyz"] == pytest.approx(line.centre, abs=1e-12)


@given(assemblies())
def test_the_outermost_nodes_together_are_the_whole(assembly: Assembly):
    masses = [float(selected(assembly, node.key).table.moments.total().mass) for node in assembly.members]
    assert sum(masses) == pytest.approx(float(assembly.total.mass), rel=1e-12)


def test_an_unknown_line_is_refused():
    with pytest.raises(EditRefused, match="no such line"):
        sheet_of_assembly(Assembly(), SheetChoice(), METRIC, "nothing")


def test_parts_without_a_mass_are_named_and_left_out():
    blank = Part("blank", "blank", ShapeBody(SHAPES["sphere"].of({"diameter": 0.1})))
    sheet = sheet_of_assembly(Assembly(members=(disc(), blank)), SheetChoice(), METRIC)
    assert values(sheet)["m"] == pytest.approx(7850 * np.pi * 0.2**2 * 0.02)
    assert any("1 part is left out" in caution and "blank" in caution for caution in sheet.cautions)
    assert [check.name for check in sheet.failed] == ["mass"]
    assert sheet.checks[0] is sheet.failed[0]


@pytest.mark.parametrize("members", [(), (Part("b", "b", ShapeBody(SHAPES["sphere"].of({"diameter": 0.1}))),)])
def test_without_any_mass_every_value_is_missing_and_says_why(members: tuple[Part, ...]):
    sheet = sheet_of_assembly(Assembly(members=members), SheetChoice(), METRIC)
    assert all(entry.si is None and "mass" in entry.reason for entry in sheet.entries)


def test_the_sheet_says_where_values_came_from_and_that_they_carry_no_margin():
    motor = Part("m", "rotor", KnownTensor(2.0, (0, 0, 0), (1, 1, 1, 0, 0, 0), source="catalogue 7, page 12"), DataSheet())
    sheet = sheet_of_assembly(Assembly(members=(disc(), motor)), SheetChoice(), METRIC)
    assert [(source.basis, source.text) for source in sheet.sources] == [
        ("computed", "7850 kg/m³: disc"), ("data sheet", "catalogue 7, page 12: rotor"),
    ]
    assert sheet.basis == "mixed: computed, data sheet"
    assert "responsible engineer" in sheet.cautions[-1]


def test_the_drive_section_follows_the_drive_axis():
    axes = (DriveAxis(), DriveAxis("Tilt", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0)))
    assembly = Assembly(members=(disc(),), axes=axes, drive="Tilt")
    sheet = sheet_of_assembly(assembly, SheetChoice(), SI)
    drive = dict(sheet.sections)[FOR_THE_DRIVE]
    mass = values(sheet)["m"]
    assert all("Tilt" in entry.label for entry in drive)
    # A cylinder that stands on the axis: m(3r² + L²)/12 and the transfer of half its length.
    assert drive[0].si == pytest.approx(mass * (3 * 0.2**2 + 0.02**2) / 12 + mass * 0.01**2, rel=1e-12)


def test_a_cut_that_sticks_out_of_its_part_is_said_on_the_sheet():
    hole = Cut("c1", "edge hole", Cylinder(0.02, 0.05), Pose((0.05, 0.0, -0.01)))
    plate = Part("p1", "plate", ShapeBody(Box(0.1, 0.1, 0.02)), ByDensity(7850.0), cuts=(hole,))
    sheet = sheet_of_assembly(Assembly("a", (plate,)), SheetChoice(), UNIT_SETS["mm kg kg·m²"])
    assert any("edge hole" in note and "outside" in note for note in sheet.notes)
