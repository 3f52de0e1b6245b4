from __future__ import annotations

import csv
import io

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from core.assembly import Assembly, Part, ShapeBody
from core.handover import SheetChoice, csv_of_block, csv_of_sheet, sheet_of_assembly, tsv_of_block, tsv_of_sheet
from core.material import ByDensity
from core.placement import Pose
from core.quantity import UNIT_SETS
from core.shapes import SHAPES

PART = Part(
    "b", "=block", ShapeBody(SHAPES["box"].of({"length_x": 0.1, "length_y": 0.2, "length_z": 0.3})), ByDensity(2700.0),
    Pose((0.4, -0.5, 0.6), (0.3, 0.2, 0.1)),
)
SHEET = sheet_of_assembly(Assembly('=SUM(A1)\t"x"', (PART,)), SheetChoice(), UNIT_SETS["mm kg kg·cm²"])


def cells(text: str, separator: str) -> list[list[str]]:
    return list(csv.reader(io.StringIO(text), delimiter=separator))


@pytest.mark.parametrize(("write", "mark", "separator"), [
    (tsv_of_sheet, ".", "\t"), (tsv_of_sheet, ",", "\t"), (csv_of_sheet, ".", ","), (csv_of_sheet, ",", ";"),
])
def test_every_value_lands_as_the_same_number_in_a_cell_of_its_own(write, mark, separator):
    rows = cells(write(SHEET, mark), separator)
    assert {len(row) for row in rows} == {4}
    landed = {row[0]: (row[1], row[2]) for row in rows}
    for entry in SHEET.entries:
        number, unit = landed[entry.label]
        assert ("," in number) <= (mark == ",")
        assert ("." in number) <= (mark == ".")
        assert float(number.replace(",", ".")) == entry.value
        assert unit == entry.unit.symbol


@given(st.floats(allow_nan=False, allow_infinity=False), st.sampled_from([".", ","]))
def test_a_number_is_never_prefixed_and_uses_ascii_only(number: float, mark: str):
    (cell,), *_ = cells(tsv_of_block([[number]], mark), "\t")
    assert set(cell) <= set("0123456789-+E" + mark)
    assert float(cell.replace(",", ".")) == number


@pytest.mark.parametrize("start", ["=", "+", "-", "@", "\t=", " =", "\n+", "＝", "＠"])
def test_text_that_would_become_a_formula_is_kept_from_it(start: str):
    for write, separator in ((tsv_of_block, "\t"), (csv_of_block, ",")):
        ((cell, value),) = cells(write([[f"{start}cmd()", -1.5]]), separator)
        assert cell.startswith("'")
        assert value == "-1.5"


@given(st.lists(st.lists(st.text(), min_size=3, max_size=3), min_size=1))
def test_no_typed_text_breaks_out_of_its_cell_or_starts_a_formula(rows: list[list[str]]):
    for write, separator in ((tsv_of_block, "\t"), (csv_of_block, ",")):
        landed = cells(write(rows), separator)
        assert [len(row) for row in landed] == [3] * len(rows)
        assert not any(cell.lstrip()[:1] in tuple("=+-@") for row in landed for cell in row)


def test_tsv_has_no_tab_or_line_break_inside_a_cell():
    text = tsv_of_block([["a\tb\r\nc", 1.0]])
    assert text == "a b  c\t1\n"


def test_a_missing_value_is_a_dash_with_the_reason_beside_it():
    blank = Part("b", "blank", PART.body)
    sheet = sheet_of_assembly(Assembly(members=(blank,)), SheetChoice(), UNIT_SETS["SI"])
    row = next(row for row in cells(tsv_of_sheet(sheet), "\t") if row[0] == "Mass")
    assert row == ["Mass", "–", "kg", "no part in it has a mass; set a material, a density or a weighed mass"]


def test_failed_checks_and_cautions_go_with_the_values():
    heavy = Part("h", "heavy", PART.body, ByDensity(90_000.0))
    rows = cells(csv_of_sheet(sheet_of_assembly(Assembly(members=(heavy,)), SheetChoice(), UNIT_SETS["SI"])), ",")
    assert "Check failed: density" in {row[0] for row in rows}
    assert rows[-1][0] == "Caution"


def test_numpy_numbers_are_numbers_too():
    assert tsv_of_block([[np.float64(0.25), 3]]) == "0.25\t3\n"
