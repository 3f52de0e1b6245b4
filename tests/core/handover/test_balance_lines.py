"""The lines about balance: each with the value of the core, and words that say of what, about which axis, in which unit."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np
import pytest

from core.assembly import Assembly, DriveAxis, Part, ShapeBody
from core.drive import BalanceSettings, CorrectionPlane, DriveSettings, TurnsWith, balance_answer
from core.handover.balance_lines import NO_ANGLE, angle_note, angle_of, balance_lines, couple_unit, rotor_basis
from core.material import ByDensity, Weighed
from core.placement import Pose
from core.quantity import UNIT_SETS, Kind
from core.shapes import Cylinder, PointMass

if TYPE_CHECKING:
    from core.handover.lines import Entry

OMEGA = 100.0
AXIS = DriveAxis("Shaft", (0.5, 0.0, 0.0), (0.0, 0.0, 1.0))
METRIC, INCH = UNIT_SETS["mm kg kg·m²"], UNIT_SETS["in lb lb·in²"]


def rotor(*more: Part) -> Assembly:
    """A drum of 10 kg and 0.2 m about the axis, with 0.1 kg on it 0.15 m out at 240°, at station 0.05 m."""
    volume = math.pi / 4 * 0.3**2 * 0.2
    drum = Part("drum", "drum", ShapeBody(Cylinder(0.3, 0.2)), ByDensity(10.0 / volume), Pose((0.5, 0.0, 0.0)))
    angle = math.radians(240)
    place = (0.5 + 0.15 * math.cos(angle), 0.15 * math.sin(angle), 0.05)
    weight = Part("weight", "weight", ShapeBody(PointMass(0.01)), Weighed(0.1), Pose(place))
    return Assembly("reel", (drum, weight, *more), (AXIS,), "Shaft")


def lines(units=METRIC, assembly: Assembly | None = None, **balance: object) -> dict[str, Entry]:
    drive = DriveSettings(balance=BalanceSettings(**balance))
    document = assembly or rotor()
    answer = balance_answer(document, drive)
    return {one.symbol: one for one in balance_lines(answer, drive, units, rotor_basis(document, drive))}


EVERYTHING = {
    "speed": OMEGA, "grade": 2.5, "bearings": (-0.1, 0.4),
    "planes": (CorrectionPlane(0.0, 0.12), CorrectionPlane(0.2, 0.12)),
}


def test_the_static_unbalance_has_the_size_and_angle_of_the_weight():
    found = lines()
    assert found["U"].value == pytest.approx(0.1 * 0.15 * 1e6, rel=1e-13)
    assert found["U"].unit.symbol == "g·mm"
    assert found["φ_U"].value == pytest.approx(240.0, rel=1e-13)
    assert found["e"].value == pytest.approx(0.1 * 0.15 / 10.1 * 1e6, rel=1e-13)
    assert found["e"].unit.symbol == "µm"
    assert found["U"].label == "Static unbalance about Shaft, m·e"


def test_the_couple_is_the_product_of_inertia_about_the_centre_of_mass():
    found = lines()
    # ∫ρ(z − z̄)dm = m·r·(z_weight − z̄): the drum is balanced about the axis.
    station = (10 * 0.1 + 0.1 * 0.05) / 10.1
    assert found["z"].si == pytest.approx(station, rel=1e-13)
    assert found["C"].value == pytest.approx(0.1 * 0.15 * (station - 0.05) * 1e9, rel=1e-12)
    assert found["C"].unit.symbol == "g·mm²"
    assert found["φ_C"].value == pytest.approx(60.0, rel=1e-12)


def test_bearings_share_the_unbalance_its_force_and_the_weight():
    found = lines(**EVERYTHING)
    near, far = 0.1 * 0.15 * 0.7, 0.1 * 0.15 * 0.3  # the weight is 0.15 of 0.5 m from the first
    assert found["U_B1"].si == pytest.approx(near, rel=1e-12)
    assert found["U_B2"].si == pytest.approx(far, rel=1e-12)
    assert found["F_B1"].si == pytest.approx(near * OMEGA**2, rel=1e-12)
    assert found["φ_F_B2"].value == pytest.approx(240.0, rel=1e-12)
    # The axis is upright: no weight across it.
    assert found["W_B1"].si == pytest.approx(0.0, abs=1e-12)


def test_grade_and_what_it_permits_are_in_mm_per_second_and_split():
    found = lines(**EVERYTHING)
    assert found["G"].unit.symbol == "mm/s"
    assert found["G"].value == pytest.approx(0.1 * 0.15 / 10.1 * OMEGA * 1e3, rel=1e-12)
    assert found["G_ISO"].value == pytest.approx(250.0)
    assert found["U_per"].si == pytest.approx(10.1 * 2.5e-3 / OMEGA, rel=1e-13)
    assert found["U_per_B1"].si + found["U_per_B2"].si == pytest.approx(found["U_per"].si, rel=1e-13)
    assert "of G 2.5" in found["U_per"].label


def test_corrections_have_mass_angle_and_radius_and_leave_nothing():
    found = lines(**EVERYTHING)
    # The weight is 0.05 of 0.2 m from the first plane; masses at 0.12 m, opposite.
    assert found["m_1"].value == pytest.approx(100 * 0.15 / 0.12 * 0.75, rel=1e-12)
    assert found["m_2"].value == pytest.approx(100 * 0.15 / 0.12 * 0.25, rel=1e-12)
    assert found["m_1"].unit.symbol == "g"
    assert found["φ_m_1"].value == pytest.approx(60.0, rel=1e-12)
    assert found["m_1"].label == "Mass to add in correction plane 1, at radius 120.00 mm"
    assert found["U_r"].si == 0.0
    assert found["φ_U_r"].si is None
    assert found["φ_U_r"].reason == NO_ANGLE
    assert found["G_r"].value == pytest.approx(0.0, abs=1e-9)
    removed = lines(by="removing", planes=EVERYTHING["planes"])
    assert removed["φ_m_1"].value == pytest.approx(240.0, rel=1e-12)
    assert removed["m_1"].label.startswith("Mass to remove")


def test_without_speed_bearings_and_planes_their_lines_are_not_there():
    found = lines()
    assert found["n"].si is None
    assert found["n"].reason == "no service speed is entered"
    assert not {"G", "U_B1", "U_1", "m_1", "U_r", "U_per", "F_B1"} & set(found)


def test_a_rotor_worse_than_every_grade_says_so():
    found = lines(speed=1e6)
    assert found["G_ISO"].si is None
    assert found["G_ISO"].reason == "it is worse than every grade of the standard"


def test_inch_units_go_through():
    found = lines(INCH, **EVERYTHING)
    units = {symbol: found[symbol].unit.symbol for symbol in ("U", "C", "e", "m_1", "F_B1")}
    assert units == {"U": "oz·in", "C": "oz·in²", "e": "in", "m_1": "oz", "F_B1": "lbf"}
    assert found["U"].value == pytest.approx(0.1 * 0.15 / (0.028349523125 * 0.0254), rel=1e-13)


@pytest.mark.parametrize("name", list(UNIT_SETS))
def test_every_set_has_a_unit_for_a_couple_that_is_its_unit_of_unbalance_times_a_length(name):
    units = UNIT_SETS[name]
    length = {"g·mm": 1e-3, "kg·m": 1.0, "oz·in": 0.0254}[units[Kind.UNBALANCE].symbol]
    assert couple_unit(units).factor == pytest.approx(units[Kind.UNBALANCE].factor * length, rel=1e-15)


def test_the_basis_is_that_of_what_turns():
    base = Part("base", "base", ShapeBody(Cylinder(0.3, 0.2)), ByDensity(1000.0), Pose((0.0, 0.0, -1.0)))
    drive = DriveSettings((TurnsWith(), TurnsWith("base", "fixed"), TurnsWith("drum", "fixed")))
    assert rotor_basis(rotor(base), drive) == "weighed"
    assert rotor_basis(rotor(base), DriveSettings()) == "mixed: computed, weighed"
    assert all(one.basis == "mixed: computed, weighed" for one in lines(**EVERYTHING).values())


def test_the_note_names_the_zero_mark_of_the_axis():
    assert "the document's x as seen along Shaft" in angle_note(AXIS)
    assert "the document's z as seen along X" in angle_note(DriveAxis("X", (0.0, 0.0, 0.0), (1.0, 0.0, 0.0)))
    assert angle_of(np.array([0.0, -2.0])) == pytest.approx(1.5 * math.pi)
    assert angle_of(np.zeros(2)) is None
