"""Cuts in the window: their lines in the ledger, renamed, counted, arranged and deleted; the pages show their part."""

from __future__ import annotations

from dataclasses import replace

import pytest
from PySide6.QtCore import Qt
from window_driver import cell, choose, keys, text_of, type_cell

from core.assembly import Assembly, Cut, Part, ShapeBody
from core.errors import EditRefused
from core.machine import Machine
from core.material import ByDensity
from core.placement import Mirrored, Pose, Ring
from core.shapes import Cylinder

pytestmark = pytest.mark.gui


@pytest.fixture
def cut(window):
    """A round plate with a bore and six holes, and a pin."""
    bore = Cut("bore", "bore", Cylinder(0.06, 0.02))
    holes = Cut("holes", "holes", Cylinder(0.01, 0.04), Pose((0.2, 0.0, -0.01)), Ring(6))
    plate = Part("plate", "plate", ShapeBody(Cylinder(0.5, 0.02)), ByDensity(2700.0), cuts=(bore, holes))
    pin = Part("pin", "pin", ShapeBody(Cylinder(0.01, 0.05)), ByDensity(7850.0), Pose((0.1, 0.0, 0.0)))
    window.session.take(Machine(Assembly("dial", (plate, pin))), None)
    return window


def test_each_cut_stands_below_its_part_with_what_it_takes_away(cut):
    assert keys(cut) == ["plate", "pin"]
    below = cut.ledger.tree.lines.index_of("plate")
    assert [cut.ledger.tree.lines.index(row, 0, below).data() for row in range(2)] == ["bore", "holes"]
    assert text_of(cut, "holes", "material") == "cut"
    assert text_of(cut, "bore", "mass").startswith("−0.152")
    assert text_of(cut, "holes", "count") == "6"


def test_a_cut_is_renamed_and_counted_in_its_line(cut):
    type_cell(cut, "bore", "name", "shaft seat")
    type_cell(cut, "holes", "count", "8")
    assert cut.session.assembly.cut("bore").name == "shaft seat"
    assert cut.session.assembly.cut("holes").copies == Ring(8)
    assert cut.session.history.undo_name == "Quantity of holes: 8"
    cut.session.undo()
    assert cut.session.assembly.cut("holes").copies == Ring(6)


def test_a_count_that_is_none_is_refused_for_a_cut_as_for_a_part(cut):
    lines = cut.ledger.tree.lines
    assert "a quantity is a whole number" in lines.attempt(cell(cut, "holes", "count"), "many")
    mirrored = replace(cut.session.assembly.cut("holes"), copies=Mirrored())
    cut.session.edit("mirror", lambda before: before.replaced_cut(mirrored))
    assert "a mirrored line is there twice" in lines.attempt(cell(cut, "holes", "count"), "3")
    assert "a line needs a name" in lines.attempt(cell(cut, "holes", "name"), " ")


@pytest.mark.parametrize("column", ["material", "mass"])
def test_material_and_mass_of_a_cut_are_not_typed(cut, column):
    index = cell(cut, "bore", column)
    assert not index.flags() & Qt.ItemFlag.ItemIsEditable
    with pytest.raises(EditRefused, match="is computed here"):
        cut.ledger.tree.lines.change(index, "steel")


def test_a_selected_cut_shows_its_part_on_the_pages_and_in_the_view(cut):
    cut.session.select(frozenset({"bore"}))
    assert cut.session.selected_part.key == "plate"
    assert cut._selected_parts() == {"plate"}
    choose(cut.sheet.of, "selected line")
    assert "plate" in cut.sheet.sheet.title


def test_a_cut_is_deleted_alone_and_undo_brings_it_back(cut):
    cut.session.select(frozenset({"bore"}))
    cut.delete()
    assert [each.key for each in cut.session.assembly.node("plate").cuts] == ["holes"]
    assert cut.session.history.undo_name == "Delete bore"
    cut.session.undo()
    assert [each.key for each in cut.session.assembly.node("plate").cuts] == ["bore", "holes"]


def test_a_part_goes_with_its_cuts(cut):
    cut.session.select(frozenset({"plate", "bore"}))
    cut.delete()
    assert keys(cut) == ["pin"]
    assert "bore" not in cut.session.assembly


def test_a_cut_moves_among_the_cuts_of_its_part_and_no_further(cut):
    cut.session.select(frozenset({"holes"}))
    cut.move_line(-1)
    cut.move_line(-1)
    assert [each.key for each in cut.session.assembly.node("plate").cuts] == ["holes", "bore"]
    assert cut.session.selected == {"holes"}


def test_a_cut_stays_with_its_part(cut, qtbot):
    cut.session.select(frozenset({"holes"}))
    before = cut.session.assembly
    with qtbot.waitSignal(cut.session.refused) as told:
        cut.move_out()
    assert "a cut stays with the part that it is taken out of" in told.args[0]
    assert cut.session.assembly is before
    assert not cell(cut, "holes", "name").flags() & Qt.ItemFlag.ItemIsDragEnabled


def test_a_new_part_comes_behind_the_part_whose_cut_is_selected(cut):
    cut.session.select(frozenset({"bore"}))
    cut.add_shape("box")
    assert len(keys(cut)) == 3
    assert keys(cut)[0] == "plate"
    assert keys(cut)[2] == "pin"


def test_a_cut_that_misses_is_refused_and_leaves_everything_as_it_was(cut):
    before = cut.session.assembly
    astray = replace(before.cut("bore"), pose=Pose((2.0, 0.0, 0.0)))
    refusal = cut.session.attempt("Move bore", lambda assembly: assembly.replaced_cut(astray))
    assert refusal == (
        "plate, bore: this cut takes nothing out: it lies outside the body; read a cut of 60 × 60 × 20 mm. "
        "Move it into the body, or leave it out."
    )
    assert cut.session.assembly is before


def test_the_ledger_by_share_keeps_cuts_below_their_part(cut):
    cut.ledger.tree.lines.sort_by_share(True)
    below = cut.ledger.tree.lines.index_of("plate")
    assert {cut.ledger.tree.lines.index(row, 0, below).data() for row in range(2)} == {"bore", "holes"}
