"""Outlines from tables and pasted text, and back."""

from __future__ import annotations

import pytest
from hypothesis import given, settings
from strategies import outlines

from core.errors import MasswrightError
from core.quantity import UNITS
from core.shapes import Outline
from core.shapes.profile import circle_loop, outline_of_rows, outline_of_text, text_of_outline

MM = UNITS["mm"]
PLATE = Outline.of([(0, 0), (0.04, 0), (0.04, 0.0125, 0.002), (0, 0.0125)])


@pytest.mark.parametrize(
    "text",
    [
        "0\t0\n40\t0\n40\t12.5\t2\n0\t12.5",
        "0\t0\n40\t0\n40\t12,5\t2\n0\t12,5\n",
        "x in mm\ty\tr\n0\t0\t\n40\t0\t\n40\t12,5\t2\n0\t12,5\t\n\n\n",
        "\n0;0\n40;0\n40;12.5;2\n0;12.5",
        "0 0\n 40 0\n40   12.5 2\r\n0 12.5",
        "0\t0\n40\t0\n40\t12.5\t2\n0\t12.5\n0\t0",
        "0;0\n4 cm;0\n40;1/2 in − 0.2 mm;2\n0;12.5",
        "0\t0\n4E1\t0\n+40\t12.5\t2\t0\n−0\t12.5",
    ],
)
def test_a_block_of_rows_is_read_whatever_separates_its_columns(text):
    assert outline_of_text(text, MM) == PLATE


def test_an_empty_row_begins_a_hole_and_an_arc_stands_in_the_fourth_column():
    text = "0\t0\n40\t0\n40\t30\n0\t30\n\t\t\t\n30\t15\t\t10\n10\t15\t\t10\n"
    assert outline_of_text(text, MM) == Outline.of(
        [(0, 0), (0.04, 0), (0.04, 0.03), (0, 0.03)], circle_loop(0.02, 0.02, 0.015)
    )


def test_inches_are_read_as_inches():
    assert outline_of_text("0 0\n1 0\n0 1", UNITS["in"]).loops[0][1].x == 0.0254


def test_a_mark_that_could_set_thousands_apart_is_asked_about():
    text = "0 0\n1.250 0\n0 1.500"
    with pytest.raises(MasswrightError) as refusal:
        outline_of_text(text, MM)
    assert str(refusal.value) == (
        'outline: it cannot be told whether "." is a decimal mark or sets thousands apart; read "1.250". '
        "Say which decimal mark the block has."
    )
    assert outline_of_text(text, MM, ".").loops[0][1].x == 0.00125


@pytest.mark.parametrize(
    ("text", "mark", "sentence"),
    [
        (
            "0 0\n1.5 0\n0 2,5", None,
            ('outline: the block has two decimal marks; read "1.5" and "2,5". '
            'Use either "." or "," throughout, and no marks between thousands.'),
        ),
        (
            "0 0\n1,5 0\n0 2,5", ".",
            ('outline: the decimal mark of this block is "."; read "1,5". '
            "Choose the other mark, or leave out marks between thousands."),
        ),
        (
            "0,0\n10,0\n0,10", None,
            ("row 1: a row has x and y, and up to two radii behind them; read 0,0. "
            "Separate the columns by tabs or semicolons."),
        ),
        (
            "0 0\n10 0 0 0 0", None,
            ("row 2: a row has x and y, and up to two radii behind them; read 10 | 0 | 0 | 0 | 0. "
            "Separate the columns by tabs or semicolons."),
        ),
        (
            "x;y\n0;0\n10;\n0;10", None,
            ("row 3: a row has x and y, and up to two radii behind them; read 10 | . "
            "Separate the columns by tabs or semicolons."),
        ),
        ("0 0\n10 wide\n0 10", None, 'row 2, y: "wide" was not expected here; read "wide". Write e.g. "3/8 in + 2 mm".'),
        ("", None, "outline: an outline needs points. Give three points at least."),
        ("x y\n\n", None, "outline: an outline needs points. Give three points at least."),
        (
            "0 0\n10 0\n", None,
            ("outline: the outer line has too few points to go round anything; read 2. "
            "Give three points at least, or two with an arc between them."),
        ),
        (
            "1" * 2_000_001, None,
            "outline: the text is longer than 2000000 signs; read 2000001. Paste at most 10000 points.",
        ),
    ],
)  # fmt: skip
def test_a_refused_block_names_the_row(text, mark, sentence):
    with pytest.raises(MasswrightError) as refusal:
        outline_of_text(text, MM, mark)
    assert str(refusal.value) == sentence


def test_cells_of_a_table_are_read_as_pasted_ones_are():
    assert outline_of_rows([("0", "0"), ("40", "0", "", ""), ("40", "12,5", "2"), ("0", "12,5")], MM) == PLATE


@pytest.mark.parametrize("mark", [".", ","])
@settings(max_examples=30)
@given(outline=outlines())
def test_a_copied_outline_reads_back(mark, outline):
    again = outline_of_text(text_of_outline(outline, UNITS["m"], mark), UNITS["m"], mark)
    assert again == outline
