"""What people type into a number field, and what it is taken for."""

import math
import subprocess
import sys
from fractions import Fraction

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import QuantityError
from core.quantity import (
    UNITS,
    UNITS_BY_KIND,
    Kind,
    parse,
    parse_axis,
    parse_number,
    parse_triple,
    unit_named,
)
from tests.strategies import FINITE, typed_decimals, typed_sums

MM = UNITS["mm"]
KGM2 = UNITS["kg·m²"]


@pytest.mark.parametrize(("text", "millimetres"), [
    ("3/8 in + 2 mm", "11.525"),
    ("3/8 in", "9.525"),
    ("2*25.4", "50.8"),
    ("2·25,4", "50.8"),
    ("12.5", "12.5"),
    ("12,5", "12.5"),
    (".5", "0.5"),
    (",5", "0.5"),
    ("12.", "12"),
    ("1e-3", "0.001"),
    ("1,5E−3 m", "1.5"),
    ("1e-016", "1e-16"),
    ("+3", "3"),
    ("−3", "-3"),
    ("-(2 + 3)*2 mm", "-10"),
    ("2 - -3", "5"),
    ("(1 mm + 2 mm)*2/3", "2"),
    ("2 in * 3", "152.4"),
    ("1 3/8 in", "34.925"),
    ("-1 3/8 in", "-34.925"),
    ("2*1 1/2", "3"),
    ('3"', "76.2"),
    ("3″", "76.2"),
    ("5' + 3\"", "1600.2"),
    ("2 feet", "609.6"),
    ("10 inches", "254"),
    ("20 µm", "0.02"),
    ("20 μm", "0.02"),
    ("20um", "0.02"),
    ("  7\tmm ", "7"),
    ("1.5\u00a0mm", "1.5"),
    ("(6 mm^2)/(2 mm)", "3"),
    ("3 yd", "2743.2"),
    ("0.5 mil", "0.0127"),
])
def test_a_length_field_understands(text: str, millimetres: str) -> None:
    assert parse(text, Kind.LENGTH, MM).value == float(Fraction(millimetres) / 1000)


def test_what_was_understood_is_shown_and_what_was_typed_is_kept() -> None:
    understood = parse("3/8 in + 2 mm", Kind.LENGTH, MM)
    assert (understood.text, understood.shown) == ("3/8 in + 2 mm", "11.525 mm")
    assert parse("-1 in", Kind.LENGTH, MM).shown == "−25.4 mm"
    assert parse("0.25 rev", Kind.ANGLE, UNITS["°"]).shown == "90°"
    assert parse("2.7 g/cm3", Kind.DENSITY).shown == "2700 kg/m³"


@pytest.mark.parametrize(("text", "kind", "value"), [
    ("2 kg m2", Kind.INERTIA, 2.0),
    ("2 kg*m^2", Kind.INERTIA, 2.0),
    ("2 kg·m²", Kind.INERTIA, 2.0),
    ("2 kgm2", Kind.INERTIA, 2.0),
    ("2 kg-m^2", Kind.INERTIA, 2.0),
    ("2 kgcm²", Kind.INERTIA, 2e-4),
    ("2 kg * (30 mm) * (30 mm)", Kind.INERTIA, 0.0018),
    ("5 Nm", Kind.TORQUE, 5.0),
    ("5 N*m", Kind.TORQUE, 5.0),
    ("1 rev/s", Kind.SPEED, 2 * math.pi),
    ("60 rpm", Kind.SPEED, 2 * math.pi),
    ("360 deg", Kind.ANGLE, 2 * math.pi),
    ("180°/s", Kind.SPEED, math.pi),
    ("1 gn", Kind.ACCELERATION, 9.80665),
    ("9.81 m/s/s", Kind.ACCELERATION, 9.81),
    ("9.81 m s^-2", Kind.ACCELERATION, 9.81),
    ("(12 kg)/(0.004 m^3)", Kind.DENSITY, 3000.0),
    ("90 min", Kind.TIME, 5400.0),
    ("0.9 %", Kind.NUMBER, 0.009),
    ("(6 in)/(2 in)", Kind.NUMBER, 3.0),
])
def test_other_kinds_understand(text: str, kind: Kind, value: float) -> None:
    assert parse(text, kind).value == pytest.approx(value, rel=1e-15)


@pytest.mark.parametrize(("text", "kind", "said"), [
    ("1.234,5", Kind.LENGTH, '"1.234,5" has more than one decimal mark'),
    ("1,234,567", Kind.LENGTH, '"1,234,567" has more than one decimal mark'),
    ("1 234", Kind.LENGTH, '"1 234" are two numbers without a sign between them'),
    ("1 234/567 in", Kind.LENGTH, '"1 234" are two numbers without a sign between them'),
    ("1\u202f234", Kind.LENGTH, "two numbers without a sign between them"),
    ("2.5 3/8 in", Kind.LENGTH, '"2.5 3" are two numbers without a sign between them'),
    ("1 9/8 in", Kind.LENGTH, '"1 9" are two numbers without a sign between them'),
    ("1/2 3/8 in", Kind.LENGTH, 'a mixed fraction behind "/" is read in two ways'),
    ("1'234", Kind.LENGTH, '"234" stands without a sign before it'),
    ("5' 3\"", Kind.LENGTH, '"3" stands without a sign before it'),
    ("25 + 2 mm", Kind.LENGTH, "a number without a unit stands beside one with a unit"),
    ("1 + 5 %", Kind.NUMBER, "a number without a unit stands beside one with a unit"),
    ("2 mm + 3 kg", Kind.LENGTH, "different kinds of quantity are added"),
    ("2 in * 3 in", Kind.AREA, '"in" is a second unit in one term'),
    ("(1 mm) mm", Kind.LENGTH, '"mm" is a second unit in one term'),
    ("12 kg", Kind.LENGTH, '"kg" measures a mass, but a length is wanted'),
    ("(2 mm)*(3 mm)", Kind.LENGTH, "this measures an area, but a length is wanted"),
    ("10 Hz", Kind.SPEED, '"Hz" is another kind of quantity, but a speed of rotation is wanted'),
    ("12 apples", Kind.LENGTH, '"apples" is no unit that is known here; read "12 apples"'),
    ("3 MM", Kind.LENGTH, 'Write "mm" if that is meant'),
    ("3 ton", Kind.MASS, '"ton" has two meanings'),
    ("5 __annotations__", Kind.LENGTH, '"__annotations__" is no unit that is known here'),
    ("5 " + "m" * 60, Kind.LENGTH, "is no unit that is known here"),
    ("5 gr", Kind.MASS, '"gr" has two meanings'),
    ("5 degC", Kind.ANGLE, '"degC" is no unit that is known here'),
    ("3 dB", Kind.NUMBER, '"dB" is no unit that is known here'),
    ("1 mol", Kind.NUMBER, '"mol" is no unit that is known here'),
    ("3 kg/m*s", Kind.LENGTH, 'a product behind "/"'),
    ("2 mm^9", Kind.LENGTH, 'the exponent 9 of "mm" is out of range'),
    ("2 mm^0", Kind.LENGTH, 'the exponent 0 of "mm" is out of range'),
    ("2^3", Kind.LENGTH, "only units are raised to a power"),
    ("1/0", Kind.LENGTH, "this divides by zero"),
    ("1/(2 − 2)", Kind.LENGTH, "this divides by zero"),
    ("1e390", Kind.LENGTH, "the value is too large to be held"),
    ("1e-390", Kind.LENGTH, "the value is too small to be held"),
    ("1e999999999999", Kind.LENGTH, "is beyond all measure"),
    ("nan", Kind.LENGTH, '"nan" was not expected here'),
    ("inf", Kind.LENGTH, '"inf" was not expected here'),
    ("", Kind.LENGTH, "nothing was typed"),
    (" \t", Kind.LENGTH, "nothing was typed"),
    ("mm", Kind.LENGTH, '"mm" was not expected here'),
    ("2 +", Kind.LENGTH, "the text ends too early"),
    ("(2", Kind.LENGTH, 'a "(" is not closed'),
    ("2)", Kind.LENGTH, '")" was not expected here'),
    ("9" * 201, Kind.LENGTH, "the text is longer than 200 signs"),
    ("(" * 21 + "1" + ")" * 21, Kind.LENGTH, "parentheses are nested more than 20 deep"),
    ("⌀40", Kind.LENGTH, "a diameter sign is not taken"),
    ("½ in", Kind.LENGTH, 'the sign "½" means nothing here'),
    ("٣", Kind.LENGTH, 'the sign "٣" means nothing here'),
    ("2\x00", Kind.LENGTH, "the sign U+0000 means nothing here"),
    ("2–3", Kind.LENGTH, 'the sign "–" means nothing here'),
    ("__import__('os')", Kind.LENGTH, '"__import__" was not expected here'),
    ("7850", Kind.DENSITY, 'a unit is missing; read "7850". Write one behind it, such as "kg/m³"'),
])
def test_a_field_refuses_and_says_why(text: str, kind: Kind, said: str) -> None:
    unit = MM if kind is Kind.LENGTH else None
    with pytest.raises(QuantityError) as refused:
        parse(text, kind, unit, where="bore")
    assert said in str(refused.value)
    assert str(refused.value).startswith("bore: ")
    assert refused.value.remedy


def test_twenty_parentheses_are_still_read() -> None:
    assert parse_number("(" * 20 + "1" + ")" * 20) == 1.0


@pytest.mark.parametrize(("text", "readings"), [
    ("4 lb-in", ("lbf*in*s^2", "lb*in^2", "386.089")),
    ("4 lb in", ("lbf*in*s^2", "lb*in^2", "386.089")),
    ("4 lb·in·s²", ("lbf*in*s^2", "lb*in^2", "386.089")),
    ("4 lbf·in", ("lbf*in*s^2", "lb*in^2", "386.089")),
    ("4 kg·cm·s²", ("kgf*cm*s^2", "kg*cm^2", "980.665")),
    ("4 kg m s2", ("kgf*m*s^2", "kg*m^2", "9.80665")),
    ("4 oz in s^2", ("ozf*in*s^2", "oz*in^2", "386.089")),
    ("4 kgf·m²", ("kgf*m^2 GD2", "kgf*m^2 WR2", "kg*m^2")),
])
def test_a_loosely_written_inertia_is_refused_with_its_readings(text: str, readings: tuple[str, ...]) -> None:
    with pytest.raises(QuantityError) as refused:
        parse(text, Kind.INERTIA, KGM2)
    for reading in readings:
        assert reading in str(refused.value)


@pytest.mark.parametrize(("text", "kind", "reading"), [
    ("4 lb-in", Kind.TORQUE, "lbf*in"),
    ("4 kg·m", Kind.TORQUE, "kgf*m"),
    ("4 kg", Kind.FORCE, "kgf"),
    ("4 lbf", Kind.MASS, "lb"),
    ("4 lbf/in^3", Kind.DENSITY, "lb/in^3"),
])
def test_mass_and_force_are_told_apart(text: str, kind: Kind, reading: str) -> None:
    with pytest.raises(QuantityError, match="if that is meant") as refused:
        parse(text, kind)
    assert f'"{reading}"' in refused.value.remedy
    assert parse(f"4 {reading}", kind).value > 0


@pytest.mark.parametrize(("text", "unit", "shown"), [
    ("1.788 kgf*m^2 GD2", "kg·m²", "J = GD²/4 = 0.447 kg·m²"),
    ("1,788 kg m² GD²", "kg·m²", "J = GD²/4 = 0.447 kg·m²"),
    ("1.788", "kgf·m² GD²", "J = GD²/4 = 0.447 kg·m²"),
    ("0.447 kg m2", "kgf·m² GD²", "0.447 kg·m²"),
    ("1.788 kgf*m^2 GD2", "kg·cm²", "J = GD²/4 = 4470 kg·cm²"),
    ("17.5345 N*m^2 GD2", "kg·m²", "J = GD²/4 = 0.447005348 kg·m²"),
    ("2 lb*ft^2 WR2", "lb·ft²", "J = WR² = 2 lb·ft²"),
    ("2 lb*ft^2 WK2", "lb·ft²", "J = WK² = 2 lb·ft²"),
    ("4 kg*m^2 GD2 + 1 kg*m^2", "kg·m²", "2 kg·m², with J = GD²/4"),
])
def test_a_flywheel_effect_says_how_it_becomes_an_inertia(text: str, unit: str, shown: str) -> None:
    assert parse(text, Kind.INERTIA, UNITS[unit]).shown == shown


@pytest.mark.parametrize("text", ["4 GD2", "4 kg GD2", "4 kg*m^2*s GD2", "4 kg*m^2 GD3"])
def test_a_flywheel_effect_without_weight_and_length_squared_is_refused(text: str) -> None:
    with pytest.raises(QuantityError):
        parse(text, Kind.INERTIA, KGM2)


def test_a_unit_beyond_the_catalogue_comes_from_pint_and_one_within_it_does_not_import_pint() -> None:
    assert unit_named("furlong", Kind.LENGTH).factor == pytest.approx(660 * 0.3048, rel=1e-5)  # survey foot
    assert unit_named("kip*in", Kind.TORQUE).factor == pytest.approx(1000 * 0.45359237 * 9.80665 * 0.0254, rel=1e-14)
    probe = (
        "import sys; from core.quantity import Kind, parse, parse_unit_set, UNITS; "
        "parse('7850 kg/m^3', Kind.DENSITY); parse_unit_set('mm kg kg*cm^2'); parse('1.2 kg', Kind.MASS); "
        "sys.exit('pint' in sys.modules)"
    )
    assert subprocess.run([sys.executable, "-c", probe], check=False).returncode == 0


def test_a_triple_takes_commas_or_blanks_and_units() -> None:
    assert parse_triple("0,-12.5,3", MM) == (0.0, -0.0125, 0.003)
    assert parse_triple("0 -12.5 3", MM) == (0.0, -0.0125, 0.003)
    assert parse_triple("0, 1 in, 3/8 in + 2 mm", MM) == (0.0, 0.0254, 0.011525)


@pytest.mark.parametrize("text", ["", "1,2", "1,2,3,4", "1;2;3", "0,5 1,5 2,5", "1,2,", "1,2,x", "1,2,3 kg"])
def test_a_triple_of_another_form_is_refused(text: str) -> None:
    with pytest.raises(QuantityError):
        parse_triple(text, MM, where="--about")


def test_an_axis_is_a_point_and_a_direction() -> None:
    assert parse_axis("0,0,10; 0,0,2.5", MM) == ((0.0, 0.0, 0.01), (0.0, 0.0, 2.5))
    for text, said in [
        ("0,0,10", 'no ";" between the point and the direction'),
        ("0,0,0;0,0,0", "the direction of the axis has no length"),
        ("0,0;0,0,1", "three numbers are wanted, and 2 were found"),
        ("0,0,0;0,0,1 mm", '"mm" measures a length, but a plain number is wanted'),
    ]:
        with pytest.raises(QuantityError) as refused:
            parse_axis(text, MM, where="--axis")
        assert said in str(refused.value)


@given(typed_sums)
def test_arithmetic_is_exact_until_the_nearest_double(typed: tuple[str, Fraction]) -> None:
    text, value = typed
    assert parse_number(text) == float(value)


@given(typed_sums)
def test_a_decimal_comma_means_what_a_decimal_point_means(typed: tuple[str, Fraction]) -> None:
    text, _ = typed
    assert parse_number(text.replace(".", ",")) == parse_number(text)


@given(FINITE, st.sampled_from([unit for units in UNITS_BY_KIND.values() for unit in units]))
def test_the_shortest_text_of_a_number_reads_back_in_every_unit(value: float, unit) -> None:
    exact = Fraction(repr(value)) * unit.ratio
    if value != 0.0 and not 1e-300 < abs(exact) < 1e300:
        return
    assert parse(f"{value!r} {unit.symbol}", unit.kind).value == float(exact)


@given(typed_decimals(), typed_decimals())
def test_a_quotient_before_a_unit_is_taken_as_a_whole(top: tuple[str, Fraction], bottom: tuple[str, Fraction]) -> None:
    if bottom[1] != 0:
        expected = float(top[1] / bottom[1] * Fraction("25.4"))
        assert parse(f"{top[0]}/{bottom[0]} in", Kind.LENGTH, MM).value * 1000 == pytest.approx(expected, rel=1e-15)


@given(st.text(max_size=40) | st.text("0123456789.,+-*/()^ einmkgGD²lbf·s\"'°%", max_size=40))
def test_no_text_raises_anything_but_the_refusal(text: str) -> None:
    for kind, unit in ((Kind.LENGTH, MM), (Kind.INERTIA, KGM2), (Kind.NUMBER, None)):
        try:
            value = parse(text, kind, unit).value
        except QuantityError as refused:
            assert "\n" not in str(refused)  # noqa: PT017  (the message is what is proved, where there is one)
        else:
            assert math.isfinite(value)
