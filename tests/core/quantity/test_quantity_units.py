"""The catalogue of units and the sets of them."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import QuantityError
from core.quantity import (
    DEFAULT_UNITS,
    UNIT_SETS,
    UNITS,
    UNITS_BY_KIND,
    Kind,
    Unit,
    families,
    parse_unit_set,
    unit_named,
)
from tests.strategies import READABLE_SIZES

ALL_UNITS = [unit for units in UNITS_BY_KIND.values() for unit in units]


def test_every_kind_has_units_and_no_symbol_is_used_twice() -> None:
    assert set(UNITS_BY_KIND) == set(Kind)
    assert len(UNITS) == len(ALL_UNITS)


@pytest.mark.parametrize("unit", [unit for unit in ALL_UNITS if unit.symbol], ids=lambda unit: unit.symbol)
def test_the_parser_reads_the_symbol_of_every_unit_as_that_unit(unit: Unit) -> None:
    read = unit_named(unit.symbol, unit.kind)
    assert read.ratio == unit.ratio
    assert read is unit


def test_the_menu_of_inertia_units_keeps_the_families_apart() -> None:
    menu = dict(families(Kind.INERTIA))
    assert list(menu) == ["mass-based", "force-based", "flywheel effect"]
    assert UNITS["lb·in²"] in menu["mass-based"]
    assert UNITS["lbf·in·s²"] in menu["force-based"]
    assert sum(len(units) for units in menu.values()) == len(UNITS_BY_KIND[Kind.INERTIA])


@given(READABLE_SIZES, st.sampled_from(ALL_UNITS))
def test_a_value_returns_from_any_unit(value: float, unit: Unit) -> None:
    assert math.isclose(unit.to_si(unit.from_si(value)), value, rel_tol=4e-16)


def test_a_unit_of_ones_own_making_is_taken() -> None:
    own = unit_named("t*mm^2", Kind.INERTIA)
    assert (own.symbol, own.factor) == ("t·mm²", 0.001)
    with pytest.raises(QuantityError, match="not a unit and nothing else"):
        unit_named("mm 3", Kind.LENGTH)
    with pytest.raises(QuantityError, match="measures a length, but a mass is wanted"):
        unit_named("mm", Kind.MASS)


def test_every_set_has_one_unit_of_every_kind() -> None:
    assert list(UNIT_SETS) == ["mm kg kg·m²", "mm kg kg·cm²", "SI", "in lb lb·in²", "in lb lb·ft²"]
    for known in UNIT_SETS.values():
        assert sorted(unit.kind for unit in known.units) == sorted(Kind)
        assert known[Kind.ANGLE].symbol == "°"
    si = UNIT_SETS["SI"]
    assert {unit.symbol for unit in si.units if unit.factor != 1.0} == {"°"}


@pytest.mark.parametrize("name", UNIT_SETS)
def test_a_set_is_found_by_its_name_and_by_its_units_in_any_order(name: str) -> None:
    assert parse_unit_set(name) is UNIT_SETS[name]
    if name != "SI":
        assert parse_unit_set(" ".join(reversed(name.split()))) == UNIT_SETS[name]
        assert parse_unit_set(name.replace("·", "*").replace("²", "^2")) == UNIT_SETS[name]


def test_what_is_not_named_follows_the_length() -> None:
    assert parse_unit_set("in")[Kind.MASS].symbol == "lb"
    assert parse_unit_set("in")[Kind.DENSITY].symbol == "lb/in³"
    mixed = parse_unit_set("mm lb lb*in^2 kgf*cm")
    assert mixed.name == "mm lb lb·in²"
    assert [mixed[kind].symbol for kind in (Kind.DENSITY, Kind.TORQUE)] == ["kg/m³", "kgf·cm"]
    assert parse_unit_set("J")[Kind.ENERGY].symbol == "J"


@pytest.mark.parametrize(("text", "said"), [
    ("", "no units were named"),
    ("mm cm", "mm and cm both measure length"),
    ("mm apples", '"apples" is no unit that is known here'),
    ("mm kg/s", "values are not shown in this"),
    ("mm lbf*in^2", "values are not shown in this"),
    ("%", "%"),
])
def test_a_set_that_cannot_be_is_refused(text: str, said: str) -> None:
    if text == "%":
        assert parse_unit_set(text)[Kind.NUMBER].symbol == said
        return
    with pytest.raises(QuantityError) as refused:
        parse_unit_set(text, where="--show-units")
    assert said in str(refused.value)


def test_a_set_writes_values_with_their_unit() -> None:
    assert DEFAULT_UNITS.text(0.3103, Kind.INERTIA, 4) == "0.3103 kg·m²"
    assert DEFAULT_UNITS.text(-math.pi / 2, Kind.ANGLE, 3) == "−90.0°"
    assert UNIT_SETS["in lb lb·in²"].text(0.0254, Kind.LENGTH, 3, decimal_mark=",") == "1,00 in"


def test_changing_one_unit_leaves_the_set_it_came_from() -> None:
    changed = DEFAULT_UNITS.with_unit(UNITS["kg·cm²"])
    assert changed == UNIT_SETS["mm kg kg·cm²"]
    assert DEFAULT_UNITS[Kind.INERTIA].symbol == "kg·m²"
