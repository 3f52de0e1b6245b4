from __future__ import annotations

import re

from core.assembly import Assembly, Part, ShapeBody, ledger_of
from core.handover import SheetChoice, sheet_of_assembly
from core.handover.text import text_of_ledger, text_of_sheet
from core.material import ByDensity
from core.placement import Pose, Ring
from core.quantity import UNIT_SETS, Kind
from core.shapes import SHAPES

UNITS = UNIT_SETS["mm kg kg·m²"]
BOX = ShapeBody(SHAPES["box"].of({"length_x": 0.1, "length_y": 0.2, "length_z": 0.3}))
ASSEMBLY = Assembly("dial", (
    Part("b", "block\x1b[31m", BOX, ByDensity(2700.0), Pose((0.4, -0.5, 0.6), (0.3, 0.2, 0.1))),
    Part("r", "ring", BOX, ByDensity(1000.0), Pose((0.4, 0.0, 0.0)), Ring(6)),
    Part("n", "not weighed", BOX),
))


def test_values_line_up_on_the_decimal_mark_and_have_ascii_signs():
    text = text_of_sheet(sheet_of_assembly(ASSEMBLY, SheetChoice(), UNITS), ",")
    lines = [line for line in text.splitlines() if re.match(r"  (I|P)[xyz]{2} ", line)]
    assert len(lines) == 6
    assert len({re.search(r"\d,", line).end() for line in lines}) == 1
    assert not any("−" in line[:30] for line in lines)


def test_no_control_sign_of_a_name_reaches_the_terminal():
    text = text_of_sheet(sheet_of_assembly(ASSEMBLY, SheetChoice(), UNITS)) + text_of_ledger(ledger_of(ASSEMBLY), UNITS)
    assert "\x1b" not in text


def test_every_line_of_the_ledger_adds_up_as_printed():
    lines = text_of_ledger(ledger_of(ASSEMBLY), UNITS).splitlines()[2:]
    rows = [line.rsplit(maxsplit=7) for line in lines if "not set" not in line or line.startswith("  TOTAL")]
    for _name, *row in [re.split(r"\s{2,}", line.strip()) for line in lines if "not weighed" not in line]:
        own, transfer, whole = (float(cell) for cell in row[2:5])
        assert abs(own + transfer - whole) <= 1.5e-5 * whole
    assert len(rows) == 3


def test_a_part_without_a_mass_has_dashes_in_the_ledger():
    (line,) = [line for line in text_of_ledger(ledger_of(ASSEMBLY), UNITS).splitlines() if "not weighed" in line]
    assert line.count("–") == 5


def test_the_ledger_shows_the_chosen_units_in_its_head():
    head = text_of_ledger(ledger_of(ASSEMBLY), UNIT_SETS["in lb lb·in²"]).splitlines()[1]
    assert "Mass lb" in head
    assert head.count("lb·in²") == 3
    assert UNIT_SETS["in lb lb·in²"][Kind.INERTIA].symbol == "lb·in²"
