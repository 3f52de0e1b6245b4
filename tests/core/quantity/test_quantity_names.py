"""Names and functions in typed text: against Python's floats, and what is refused in which words."""

from __future__ import annotations

import math

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import QuantityError
from core.quantity import UNITS, Kind, check_name, measure, names_in, parse, parse_number, with_names_changed

LENGTH, MASS, ANGLE, NONE = (1, 0, 0, 0), (0, 1, 0, 0), (0, 0, 0, 1), (0, 0, 0, 0)
NAMES = {"plate_d": (0.4, LENGTH), "d1": (0.03, LENGTH), "rotor_m": (2.5, MASS), "n": (6.0, NONE), "tilt": (0.5, ANGLE),
         "Länge": (1.25, LENGTH), "MM": (7.0, NONE)}
MM = UNITS["mm"]


@pytest.mark.parametrize(
    ("text", "value"),
    [
        ("plate_d/2", 0.2), ("plate_d/2 + 3 mm", 0.203), ("-(plate_d - d1)", -0.37), ("n*10 mm", 0.06),
        ("d1", 0.03), ("Länge*2", 2.5), ("(plate_d + d1)/n", 0.43 / 6), ("sqrt(plate_d*plate_d + d1*d1)", math.hypot(0.4, 0.03)),
        ("min(plate_d; d1; 1 m)", 0.03), ("max(plate_d; d1)", 0.4), ("plate_d*sin(tilt)", 0.4 * math.sin(0.5)),
        ("plate_d*cos(60 deg)", 0.2), ("10 mm*plate_d/d1", 0.01 * 0.4 / 0.03), ("pi*plate_d", 0.4 * math.pi),
        ("sqrt(2)*10 mm", 0.01 * math.sqrt(2)), ("MM*1 mm", 0.007), ("min(3,5 mm; 4,5 mm)", 0.0035),
    ],
)
def test_names_and_functions_give_what_the_formula_gives(text: str, value: float) -> None:
    assert parse(text, Kind.LENGTH, MM, names=NAMES).value == pytest.approx(value, rel=1e-15)


@pytest.mark.parametrize(("degrees", "sine", "cosine"), [(0, 0, 1), (90, 1, 0), (180, 0, -1), (270, -1, 0), (-90, -1, 0), (720, 0, 1)])
def test_sine_and_cosine_are_exact_at_quarter_turns(degrees: int, sine: int, cosine: int) -> None:
    assert parse_number(f"sin({degrees} deg)") == sine
    assert parse_number(f"cos({degrees} deg)") == cosine


@given(st.floats(-50.0, 50.0))
def test_sine_cosine_and_tangent_follow_the_maths_library(angle: float) -> None:
    text = f"({angle!r} rad)"
    assert parse_number(f"sin{text}") == pytest.approx(math.sin(angle), rel=1e-12, abs=2e-14)
    assert parse_number(f"cos{text}") == pytest.approx(math.cos(angle), rel=1e-12, abs=2e-14)
    if abs(math.cos(angle)) > 1e-3:
        assert parse_number(f"tan{text}") == pytest.approx(math.tan(angle), rel=1e-9, abs=2e-14)


@st.composite
def formulas(draw: st.DrawFn, depth: int = 3) -> tuple[str, float]:
    """A text of lengths a, b, c and its value in Python's floats; every step is a length, and positive."""
    values = {"a": 0.4, "b": 0.07, "c_2": 1.3}
    kind = draw(st.sampled_from(["name", "number"] if depth == 0 else ["name", "sum", "times", "root", "min", "max", "over"]))
    if kind == "name":
        name = draw(st.sampled_from(sorted(values)))
        return name, values[name]
    if kind == "number":
        number = draw(st.integers(1, 999))
        return f"{number} mm", number / 1000
    left, x = draw(formulas(depth - 1))
    right, y = draw(formulas(depth - 1))
    factor = draw(st.integers(1, 9))
    return {
        "sum": (f"({left} + {right})", x + y), "times": (f"{factor}*({left})", factor * x),
        "root": (f"sqrt(({left})*({right}))", math.sqrt(x * y)), "over": (f"({left})/{factor}", x / factor),
        "min": (f"min({left}; {right})", min(x, y)), "max": (f"max({left};{right})", max(x, y)),
    }[kind]


@given(formulas())
def test_any_formula_with_names_gives_what_pythons_floats_give(formula: tuple[str, float]) -> None:
    text, value = formula
    if len(text) <= 200:
        names = {"a": (0.4, LENGTH), "b": (0.07, LENGTH), "c_2": (1.3, LENGTH)}
        assert measure(text, names=names) == (pytest.approx(value, rel=1e-14), LENGTH)


@pytest.mark.parametrize(
    ("text", "kind", "sentence"),
    [
        ("rotor_m/2", Kind.LENGTH, '"rotor_m" measures a mass, but a length is wanted; read "rotor_m/2"'),
        ("plate_d*d1", Kind.LENGTH, "this measures an area, but a length is wanted"),
        ("plate_x2/2", Kind.LENGTH, 'there is no named dimension "plate_x2"; read "plate_x2/2"'),
        ("n*10", Kind.LENGTH, 'a unit is missing; read "n*10". Write one behind it, such as "mm"'),
        ("360/n", Kind.ANGLE, "a unit is missing"),
        ("plate_d + 2", Kind.LENGTH, "a number without a unit stands beside one with a unit"),
        ("2 plate_d", Kind.LENGTH, '"plate_d" stands without a sign before it'),
        ("plate_d^2", Kind.AREA, "only units are raised to a power"),
        ("plate_d²", Kind.AREA, "only units are raised to a power"),
        ("plate_d mm", Kind.LENGTH, '"mm" is a second unit in one term'),
        ("sin(30)", Kind.NUMBER, "sin takes an angle, and this is a number without a unit, which can mean degrees or radians"),
        ("cos(plate_d)", Kind.NUMBER, "cos takes an angle, and this is something else"),
        ("tan(90 deg)", Kind.NUMBER, "a right angle has no tangent"),
        ("sqrt(-2)", Kind.NUMBER, "a negative number has no square root"),
        ("sqrt(plate_d)", Kind.LENGTH, "the root of this is no kind of quantity"),
        ("sqrt(4 mm^2; 2 mm^2)", Kind.LENGTH, "sqrt takes one value, and 2 were given"),
        ("min(2,5 mm)", Kind.LENGTH, 'min takes two or more values, with ";" between them'),
        ("max(plate_d; rotor_m)", Kind.LENGTH, "the values of max are of different kinds"),
        ("max(plate_d; 2)", Kind.LENGTH, "the values of max are of different kinds"),
        ("sqrt", Kind.NUMBER, "the value of sqrt is missing"),
        ("sqrt(4", Kind.NUMBER, 'a "(" is not closed'),
        ("(2; 3)", Kind.NUMBER, '";" was not expected here'),
        ("mm", Kind.LENGTH, '"mm" was not expected here'),
        ("sqrt(" * 30 + "2" + ")" * 30, Kind.NUMBER, "nested more than 20 deep"),
        ("1/(d1 - d1)", Kind.NUMBER, "this divides by zero"),
    ],
)
def test_what_cannot_be_is_refused_with_a_sentence(text: str, kind: Kind, sentence: str) -> None:
    unit = None if kind is Kind.NUMBER else {Kind.LENGTH: MM, Kind.ANGLE: UNITS["°"], Kind.AREA: UNITS["mm²"]}[kind]
    with pytest.raises(QuantityError) as refused:
        parse(text, kind, unit, names=NAMES)
    assert sentence in str(refused.value)


def test_minutes_are_still_a_unit_beside_the_function_min() -> None:
    assert parse("2 min", Kind.TIME).value == 120
    assert parse("min(2 min; 90 s)", Kind.TIME).value == 90


@pytest.mark.parametrize("name", ["plate_d", "d1", "h1", "t2", "Länge", "x", "MM", "rotor_mass", "Δ", "a_2b"])
def test_these_can_be_names(name: str) -> None:
    check_name(name)


@pytest.mark.parametrize(
    ("name", "sentence"),
    [
        ("", "a name is missing"), ("mm", "mm is a unit"), ("m2", "m2 is a unit"), ("mm3", "mm3 is a unit"),
        ("min", "min is a function"), ("sqrt", "sqrt is a function"), ("pi", "pi is a constant"), ("h", "h is a unit"),
        ("GD2", "GD2 is a unit"), ("Nm", "Nm is a unit"), ("ton", "ton is a unit"),
        ("2d", "a name is made of letters"), ("_d", "a name is made of letters"), ("a b", "a name is made of letters"),
        ("a-b", "a name is made of letters"), ("d²", "a name is made of letters"), ("a" * 61, "a name has at most 60 signs"),
    ],
)
def test_these_cannot_be_names(name: str, sentence: str) -> None:
    with pytest.raises(QuantityError, match=sentence.replace("(", r"\(")):
        check_name(name)


def test_a_name_is_found_only_where_it_stands_alone() -> None:
    assert names_in("a + ab/a2 - sqrt(b) + 3 mm", {"a", "b", "mm2"}) == ("a", "b")
    assert names_in("?? a", {"a"}) == ()


def test_renaming_changes_the_name_and_nothing_else_in_a_text() -> None:
    assert with_names_changed(" a /2  + ab*a - 1 3/8 in", {"a": "plate_d"}) == " plate_d /2  + ab*plate_d - 1 3/8 in"
    assert with_names_changed("3 mm", {"a": "b"}) == "3 mm"
