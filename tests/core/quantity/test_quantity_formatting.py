"""Values as text."""

import math
from decimal import Decimal

import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.errors import QuantityError
from core.quantity import compact, decimals_for, fixed, for_clipboard, parse_number, significant
from tests.strategies import FINITE, READABLE_SIZES


@pytest.mark.parametrize(("value", "digits", "text"), [
    (12.4, 5, "12.400"),
    (0.000292639653429, 5, "0.00029264"),
    (0.0000292639653429, 5, "2.9264E−5"),
    (-0.31, 4, "−0.3100"),
    (0.0, 5, "0"),
    (-0.0, 5, "0"),
    (99999.6, 5, "100000"),
    (123456.7, 5, "123460"),
    (9999999.0, 7, "9999999"),
    (1e7, 5, "1.0000E7"),
    (1.0, 1, "1"),
    (0.95, 1, "0.9"),  # the double lies below 0.95
    (2.5e-300, 2, "2.5E−300"),
    (math.nan, 5, "–"),
    (math.inf, 5, "∞"),
    (-math.inf, 5, "−∞"),
])
def test_significant_digits(value: float, digits: int, text: str) -> None:
    assert significant(value, digits) == text


def test_a_decimal_comma_is_shown_where_it_is_asked_for() -> None:
    assert significant(-12.4, 4, decimal_mark=",") == "−12,40"
    assert compact(12.5, decimal_mark=",") == "12,5"
    assert fixed(12.5, 3, decimal_mark=",") == "12,500"


@pytest.mark.parametrize(("value", "text"), [
    (40.0, "40"), (11.525, "11.525"), (1e9, "1E9"), (1.5e-7, "1.5E−7"), (100.0, "100"), (0.1 + 0.2, "0.3"), (-0.0, "0"),
])
def test_compact_text_has_no_trailing_zeros(value: float, text: str) -> None:
    assert compact(value) == text


def test_a_column_is_aligned_on_its_largest_value_and_hides_no_small_one() -> None:
    values = [12.41, 0.8213, 0.0, -3e-7, math.nan]
    decimals = decimals_for(values, 5)
    assert [fixed(value, decimals) for value in values] == ["12.410", "0.821", "0", "−3.0E−7", "–"]
    assert decimals_for([], 5) == 0
    assert decimals_for([999.96], 4) == 0
    assert decimals_for([1e-30], 3) == 12


@pytest.mark.parametrize(("value", "text"), [
    (12.0, "12"), (-0.0471, "-0.0471"), (1e-7, "1E-07"), (1e22, "1E+22"), (-0.0, "0"), (0.1 + 0.2, "0.30000000000000004"),
])
def test_clipboard_text_is_what_a_spreadsheet_reads_as_a_number(value: float, text: str) -> None:
    assert for_clipboard(value) == text
    assert for_clipboard(value, ",") == text.replace(".", ",")


@pytest.mark.parametrize("value", [math.nan, math.inf, -math.inf])
def test_no_number_is_not_copied(value: float) -> None:
    with pytest.raises(QuantityError, match="there is no number to copy"):
        for_clipboard(value)


@given(FINITE, st.sampled_from(".,"))
def test_clipboard_text_reads_back_as_the_same_double(value: float, mark: str) -> None:
    text = for_clipboard(value, mark)
    assert float(text.replace(",", ".")) == value
    assert parse_number(text) == value
    assert set(text) <= set("0123456789E+-" + mark)


@given(READABLE_SIZES, st.integers(1, 17), st.sampled_from(".,"))
def test_shown_text_reads_back_within_half_a_unit_of_its_last_digit(value: float, digits: int, mark: str) -> None:
    back = parse_number(significant(value, digits, decimal_mark=mark))
    if value == 0.0:
        assert back == 0.0
        return
    last = Decimal(10) ** (Decimal(abs(value)).adjusted() - digits + 1)
    assert abs(Decimal(back) - Decimal(value)) <= last * Decimal("0.5") + Decimal(abs(value)) * Decimal("2e-16")


@given(FINITE)
def test_seventeen_digits_lose_nothing_and_zero_is_the_only_value_shown_as_zero(value: float) -> None:
    assert parse_number(compact(value, 17)) == value
    assert (significant(value, 1) == "0") == (value == 0.0)
    assert (fixed(value, 3).strip("−0.") == "") == (value == 0.0)
