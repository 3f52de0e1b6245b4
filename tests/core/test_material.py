"""Materials, and the one thing that says a part's mass."""

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.checks import DENSITY_RANGE
from core.errors import MaterialError
from core.material import (
    MATERIALS,
    ByDensity,
    ByMaterial,
    NotSet,
    PerArea,
    PerLength,
    Weighed,
    check_density,
    check_measure,
    implied_density,
    material,
    search,
)
from core.measure import Measure
from core.quantity import Kind, parse


@pytest.mark.parametrize(("text", "name"), [
    ("steel", "steel"),
    ("STEEL", "steel"),
    ("S235JR", "steel, S235"),
    ("en aw 6082", "aluminium EN AW-6082"),
    ("6082", "aluminium EN AW-6082"),
    ("aluminum", "aluminium"),
    ("17-4 PH", "stainless steel 1.4542"),
    ("grey", "grey cast iron"),
    ("ductile", "ductile cast iron"),
    ("pom", "POM"),
    ("Ti-6Al", "titanium Ti-6Al-4V"),
    ("7075-", "aluminium EN AW-7075"),
    ("iron, ductile", None),
])
def test_a_material_is_found_by_a_forgiving_name(text: str, name: str | None) -> None:
    if name is None:
        with pytest.raises(MaterialError, match="ductile cast iron"):
            material(text)
    else:
        assert material(text).name == name


@pytest.mark.parametrize(("text", "said"), [
    ("alu", 'several materials fit this name; read "alu". The nearest are: aluminium; aluminium EN AW-1100'),
    ("stainless", "and 2 more"),
    ("steell", 'no material has this name; read "steell". The nearest are: steel'),
    ("qqqq", 'Write e.g. "steel", or give a density'),
    ("", "no material has this name"),
    ("1.43", "no material has this name"),
    ("x" * 300, "…"),
])
def test_a_material_that_is_not_there_is_refused_with_the_nearest(text: str, said: str) -> None:
    with pytest.raises(MaterialError) as refused:
        material(text)
    assert said in str(refused.value)
    assert len(str(refused.value)) < 300


def test_every_name_finds_its_own_material_and_no_other() -> None:
    for known in MATERIALS:
        for name in (known.name, known.name.upper(), *known.also):
            assert material(name) is known


def test_every_material_is_whole() -> None:
    for known in MATERIALS:
        assert DENSITY_RANGE[0] < known.low <= known.density <= known.high < DENSITY_RANGE[1], known.name
        assert known.source
        assert known.high / known.low < 1.5, known.name
    assert len({known.name for known in MATERIALS}) == len(MATERIALS)


def test_search_finds_every_word_in_any_order() -> None:
    assert [known.name for known in search("6al titan")] == ["titanium Ti-6Al-4V"]
    assert {known.group for known in search("plastics")} == {"plastics"}
    assert search("") == MATERIALS
    assert search("qqqq") == ()


def test_each_driver_says_its_mass_its_basis_and_its_label() -> None:
    volume = 2e-3
    assert ByMaterial.named("en aw 6082").mass_of(volume) == pytest.approx(5.4)
    assert ByDensity(7200.0).mass_of(volume) == pytest.approx(14.4)
    assert Weighed(1.2).mass_of(volume) == 1.2
    assert NotSet().mass_of(volume) is None
    drivers = (ByMaterial.named("6082"), ByDensity(7200.0), Weighed(1.2), NotSet())
    assert [driver.basis for driver in drivers] == ["computed", "computed", "weighed", "not set"]
    assert [driver.label for driver in drivers] == ["aluminium EN AW-6082", "7200 kg/m³", "weighed", "not set"]


def test_the_drivers_of_thin_bodies_say_their_mass_their_basis_and_their_label() -> None:
    assert PerArea(12.0).mass_of(0.25) == 3.0
    assert PerLength(0.8).mass_of(2.5) == 2.0
    drivers = (PerArea(12.0), PerLength(0.8))
    assert [(driver.basis, driver.label) for driver in drivers] == [("computed", "12 kg/m²"), ("computed", "0.8 kg/m")]


def test_a_driver_that_multiplies_shows_a_label_that_reads_back() -> None:
    assert parse(ByDensity(1234.5).label, Kind.DENSITY).value == 1234.5
    assert parse(PerArea(31.4).label, Kind.AREA_DENSITY).value == 31.4
    assert parse(PerLength(0.617).label, Kind.LINEAR_DENSITY).value == 0.617


DRIVERS = (ByMaterial("steel", 7850.0), ByDensity(7850.0), PerArea(12.0), PerLength(0.8))


@pytest.mark.parametrize("measure", ["volume", "area", "length", "pieces"])
def test_a_driver_is_taken_exactly_where_the_body_has_what_it_multiplies(measure: Measure) -> None:
    for driver in (NotSet(), Weighed(1.2)):
        check_measure(driver, measure, "cover")
    for driver in DRIVERS:
        if driver.measure == measure:
            check_measure(driver, measure, "cover")
        else:
            with pytest.raises(MaterialError, match=f"cover: a .* read {driver.label}"):
                check_measure(driver, measure, "cover")


@given(st.floats(1e-3, 1e3), st.floats(1e-9, 1.0))
def test_a_weighed_mass_implies_the_density_that_gives_it_back(mass: float, volume: float) -> None:
    density = implied_density(mass, volume)
    assert density is not None
    assert ByDensity(density).mass_of(volume) == pytest.approx(mass, rel=1e-15)


def test_no_volume_implies_no_density() -> None:
    assert implied_density(1.0, 0.0) is None
    assert implied_density(1.0, -1e-3) is None


@pytest.mark.parametrize("value", [0.0, -1.0, math.nan, math.inf])
def test_a_mass_or_density_that_is_no_positive_number_is_refused(value: float) -> None:
    for make in (ByDensity, Weighed, PerArea, PerLength, lambda density: ByMaterial("steel", density)):
        with pytest.raises(MaterialError, match="is a number greater than zero"):
            make(value)


def test_a_saved_material_keeps_its_density_and_says_when_the_table_differs() -> None:
    saved = ByMaterial("steel", 7800.0)
    assert saved.mass_of(1.0) == 7800.0
    assert "7800 kg/m³ here, and the table now says 7850 kg/m³" in saved.differs_from_table
    assert "not in the table" in ByMaterial("moon rock", 3300.0).differs_from_table
    assert ByMaterial.named("steel").differs_from_table == ""


@pytest.mark.parametrize(("density", "said"), [
    (7.85, "If 7.85 g/cm³ is meant, write that unit behind it"),
    (7.85e6, "whether g/m³ was meant"),
    (0.0, "Check the number and its unit"),
    (-7850.0, "read −7850 kg/m³"),
    (math.nan, "read – kg/m³"),
    (math.inf, "Check the number and its unit"),
    (23_000.1, "a density lies between 20 and 23000 kg/m³"),
])
def test_a_density_that_nothing_has_is_refused_with_the_likely_slip(density: float, said: str) -> None:
    with pytest.raises(MaterialError) as refused:
        check_density(density, where="--density")
    assert said in str(refused.value)


@pytest.mark.parametrize("density", [20.0, 1000.0, 22_590.0, 23_000.0])
def test_a_density_that_something_has_is_returned(density: float) -> None:
    assert check_density(density) == density
