"""Parts without thickness: what weighs them, what they add to a total, and their way through a document."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from oracles import assert_same_body
from strategies import THIN_DRIVERS, placements, shapes_of

from core.assembly import Assembly, Part, ShapeBody, ledger_of
from core.document import read_document, save_document
from core.errors import MaterialError
from core.machine import Machine
from core.material import ByDensity, ByMaterial, NotSet, PerArea, PerLength, Weighed
from core.placement import Pose, Ring
from core.shapes import SHAPES, Box, PointMass, Shape, ThinDisc, ThinRod

THIN = sorted(key for key in SHAPES if SHAPES[key].measure != "volume")


def part_of(shape: Shape, driver: object = NotSet(), **rest: object) -> Part:
    return Part("p", "cover", ShapeBody(shape), driver, **rest)


@pytest.mark.parametrize("key", THIN)
@given(data=st.data(), placement=placements())
def test_a_thin_part_weighs_its_measure_times_what_says_so(key: str, data: st.DataObject, placement):
    shape = data.draw(shapes_of(key))
    driver = data.draw(THIN_DRIVERS[shape.measure])
    part = part_of(shape, driver)
    own = shape.moments()
    expected = own.times(driver.mass_of(float(own.mass)) / float(own.mass))
    assert_same_body(placement.place(part.single), placement.place(expected), rel=1e-14)
    assert part.extent == float(own.mass)
    assert part.volume is None
    assert [check.text for check in part.checks if not check.ok] == []


@pytest.mark.parametrize("key", THIN)
def test_a_thin_part_that_was_weighed_weighs_that(key: str):
    part = part_of(SHAPES[key].of({}), Weighed(1.7))
    assert float(part.single.mass) == pytest.approx(1.7, rel=1e-15)
    assert all(check.ok for check in part.checks)


@pytest.mark.parametrize(
    ("shape", "driver"),
    [
        (ThinDisc(0.2, 0.0), ByMaterial.named("steel")),
        (ThinDisc(0.2, 0.0), ByDensity(7850.0)),
        (ThinDisc(0.2, 0.0), PerLength(0.8)),
        (ThinRod(0.2), PerArea(12.0)),
        (PointMass(0.01), PerArea(12.0)),
        (Box(0.1, 0.1, 0.1), PerArea(12.0)),
    ],
)
def test_a_part_refuses_what_its_body_has_nothing_for(shape, driver):
    with pytest.raises(MaterialError, match=r"^cover: a "):
        part_of(shape, driver)


def test_a_solid_of_steel_does_not_become_a_sheet_of_steel():
    solid = part_of(Box(0.1, 0.1, 0.1), ByMaterial.named("steel"))
    with pytest.raises(MaterialError, match="the thickness of this body is not given"):
        replace(solid, body=ShapeBody(ThinDisc(0.2, 0.0)))


@pytest.mark.parametrize(
    ("key", "missing"),
    [
        ("thin disc", "mass per area or weighed mass"),
        ("thin rod", "mass per length or weighed mass"),
        ("point mass", "weighed mass"),
        ("box", "material, density or weighed mass"),
    ],
)
def test_the_check_of_a_part_without_mass_says_what_can_be_set(key, missing):
    (check,) = part_of(SHAPES[key].of({})).checks
    assert not check.ok
    assert check.text == f"cover: no {missing} is set, so the totals leave it out. Choose one on the Part page"


def test_point_masses_on_a_pitch_circle_have_m_d_squared_and_no_inertia_of_their_own():
    washers = part_of(PointMass(0.01), Weighed(0.02), pose=Pose((0.25, 0.0, 0.0)), copies=Ring(6))
    line = ledger_of(Assembly("a", (washers,))).total
    assert line.mass == pytest.approx(0.12, rel=1e-14)
    assert line.own_inertia == 0.0
    assert line.inertia == pytest.approx(0.12 * 0.25**2, rel=1e-13)


def test_a_rotor_of_four_rods_has_the_inertia_printed_for_it():
    # OpenStax, University Physics Vol. 1, section 10.4: four blades of 50.0 kg and 4.00 m; printed 1067.0 kg·m².
    blade = part_of(ThinRod(4.0), PerLength(12.5), pose=Pose(turns=(0.0, np.pi / 2, 0.0)), copies=Ring(4))
    total = ledger_of(Assembly("rotor", (blade,))).total
    assert total.mass == pytest.approx(200.0, rel=1e-14)
    assert total.inertia == pytest.approx(4 * 50.0 * 4.0**2 / 3, rel=1e-13)


@pytest.mark.parametrize("key", THIN)
@given(data=st.data())
def test_a_thin_part_comes_back_from_a_document(tmp_path_factory, key: str, data: st.DataObject):
    shape = data.draw(shapes_of(key))
    assembly = Assembly("a", (part_of(shape, data.draw(THIN_DRIVERS[shape.measure])),))
    path = tmp_path_factory.mktemp("thin") / "thin.masswright"
    save_document(Machine(assembly), path)
    assert read_document(path).assembly == assembly


def test_a_bent_plate_of_two_sheets_has_all_three_products_of_inertia():
    # Meriam & Kraige, Dynamics, Sample Problem 7/6: 70 kg/m²; tensor recomputed from its inputs to the digits shown.
    sheet = SHAPES["thin sheet"]
    one = part_of(
        sheet.of({"length_x": 0.1, "length_y": 0.125}), PerArea(70.0), pose=Pose((0, 0.0625, 0.05), (0, np.pi / 2, 0))
    )
    other = part_of(
        sheet.of({"length_x": 0.075, "length_y": 0.15}), PerArea(70.0), pose=Pose((0.0375, 0.125, 0.075), (np.pi / 2, 0, 0))
    )
    placed = one.standing.place(one.single).total() + other.standing.place(other.single).total()
    assert float(one.single.mass) == pytest.approx(0.875, rel=1e-14)
    assert float(other.single.mass) == pytest.approx(0.7875, rel=1e-14)
    xy, xz, yz = 0.00369141, 0.00221484, 0.01011719
    expected = [[0.02568490, -xy, -xz], [-xy, 0.01029948, -yz], [-xz, -yz, 0.01833854]]
    np.testing.assert_allclose(placed.inertia_about_point([0, 0, 0]), expected, rtol=0, atol=0.5e-8)
