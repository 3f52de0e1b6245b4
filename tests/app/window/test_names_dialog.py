"""Named dimensions in the window: a table to edit them, number fields that take them, refusals in place."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest

pytest.importorskip("PySide6.QtWidgets")

from PySide6.QtCore import Qt
from PySide6.QtTest import QTest
from window_driver import dialog, enter, field, trigger

from app.window.dialogs.names import NAME, NOTE, TEXT, USED, VALUE
from app.window.fields import QuantityField, kept_text
from app.window.ledger.edits import counted, made_of, weighing
from core.assembly.fields import value_of
from core.assembly.names import NameEntry
from core.assembly.naming import with_entry
from core.document import read_document
from core.material import ByDensity, Weighed

if TYPE_CHECKING:
    from app.window.dialogs.names import NamesDialog
    from app.window.main import MainWindow


def opened(window: MainWindow) -> NamesDialog:
    trigger(window, "Edit", "Named dimensions…")
    return dialog(window)


def add(names: NamesDialog, name: str, text: str, note: str = "") -> None:
    for line, words in ((names.name, name), (names.text, text), (names.note, note)):
        line.setText(words)
    QTest.mouseClick(names.add, Qt.MouseButton.LeftButton)


def shown(names: NamesDialog) -> list[list[str]]:
    rows = range(names.table.rowCount())
    return [[names.table.item(row, column).text() for column in range(5)] for row in rows]


def select(window: MainWindow, key: str) -> None:
    window.session.select(frozenset({key}))
    window.pages.setCurrentWidget(window.part)


def wrong(window: MainWindow, name: str) -> str:
    line = field(window.part, name)
    return next(each for each in window.part.findChildren(QuantityField) if each.line is line).wrong.text()


def test_names_are_added_and_used_and_one_change_moves_every_number_in_one_undo_step(filled):
    names = opened(filled)
    add(names, "plate_d", "400 mm", "of the casting")
    add(names, "pitch_r", "plate_d/2 - 50 mm")
    assert shown(names) == [["plate_d", "400 mm", "400 mm", "1", "of the casting"], ["pitch_r", "plate_d/2 - 50 mm", "150 mm", "0", ""]]
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "plate_d")
    select(filled, "pins")
    enter(field(filled.part, "position x"), "pitch_r")
    assert [row[USED] for row in shown(names)] == ["2", "1"]
    before = filled.session.assembly
    names.table.item(0, TEXT).setText("600 mm")
    assert names.wrong.isHidden()
    after = filled.session.assembly
    assert (value_of(after.node("plate"), "dimension.diameter"), value_of(after.node("pins"), "position.0")) == (0.6, 0.25)
    assert field(filled.part, "position x").text() == "pitch_r"
    assert shown(names)[1][VALUE] == "250 mm"
    filled.session.undo()
    assert filled.session.assembly is before
    assert shown(names)[1][VALUE] == "150 mm"


def test_a_field_keeps_the_name_and_says_what_it_understood(filled):
    add(opened(filled), "plate_d", "400 mm")
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "2*plate_d + 10 mm")
    line = field(filled.part, "diameter")
    quantity = next(each for each in filled.part.findChildren(QuantityField) if each.line is line)
    assert line.text() == "2*plate_d + 10 mm"
    assert quantity.understood.text() == "= 810 mm"


@pytest.mark.parametrize(
    ("text", "sentence"),
    [("plate_x/2", 'there is no named dimension "plate_x"'), ("rotor_m", '"rotor_m" measures a mass, but a length is wanted'),
     ("n*10", "a unit is missing"), ("sin(30)", "sin takes an angle")],
)
def test_a_text_that_cannot_be_is_refused_beside_its_field(filled, text, sentence):
    names = opened(filled)
    add(names, "rotor_m", "2.5 kg")
    add(names, "n", "6")
    select(filled, "plate")
    enter(field(filled.part, "diameter"), text)
    assert sentence in wrong(filled, "diameter")
    assert value_of(filled.session.assembly.node("plate"), "dimension.diameter") == 0.4


@pytest.mark.parametrize(
    ("name", "text", "sentence"),
    [
        ("mm", "1 m", "mm is a unit"), ("", "1 m", "a name is missing"), ("x", "", "nothing was typed"),
        ("x", "y*2", 'there is no named dimension "y"'), ("plate_d", "1 m", "there is a named dimension of this name"),
        ("x", "x + 1 mm", "a named dimension depends on itself; read x → x"),
    ],
)
def test_what_cannot_be_a_name_is_refused_in_place_and_what_was_typed_stays(filled, name, text, sentence):
    names = opened(filled)
    add(names, "plate_d", "400 mm")
    add(names, name, text)
    assert sentence in names.wrong.text()
    assert names.wrong.isVisible()
    assert (names.name.text(), names.text.text()) == (name, text)
    assert len(filled.session.assembly.names) == 1


def test_a_change_that_a_line_cannot_take_is_refused_with_the_chain_and_the_cell_shows_the_old_text(filled):
    names = opened(filled)
    add(names, "base", "400 mm")
    add(names, "plate_d", "base")
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "plate_d")
    names.table.item(0, TEXT).setText("3 kg")
    assert names.wrong.text().startswith("plate, diameter → plate_d → base: ")
    assert shown(names)[0][TEXT] == "400 mm"
    names.table.item(0, TEXT).setText("plate_d")
    assert "base → plate_d → base" in names.wrong.text()
    names.table.item(0, TEXT).setText("500 mm")
    assert names.wrong.isHidden()


def test_renaming_in_the_table_follows_through_to_the_fields(filled):
    names = opened(filled)
    add(names, "plate_d", "400 mm")
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "plate_d/2")
    names.table.item(0, NAME).setText("dial_d")
    assert field(filled.part, "diameter").text() == "dial_d/2"
    names.table.item(0, NOTE).setText("as ordered")
    assert filled.session.assembly.names[0].note == "as ordered"
    names.table.item(0, NAME).setText("kg")
    assert "kg is a unit" in names.wrong.text()
    assert shown(names)[0][NAME] == "dial_d"


def test_deleting_a_used_name_names_the_lines_and_an_unused_one_goes(filled):
    names = opened(filled)
    add(names, "plate_d", "400 mm")
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "plate_d")
    names.table.setCurrentCell(0, NAME)
    QTest.keyClick(names.table, Qt.Key.Key_Delete)
    assert names.wrong.text().startswith('plate, diameter ("plate_d"): the named dimension "plate_d" is used')
    enter(field(filled.part, "diameter"), "400")
    QTest.mouseClick(names.delete, Qt.MouseButton.LeftButton)
    assert filled.session.assembly.names == ()
    assert not names.delete.isEnabled()


def test_names_are_saved_with_the_document_and_there_again_when_it_is_opened(filled, tmp_path):
    names = opened(filled)
    add(names, "plate_d", "400 mm")
    names.reject()
    select(filled, "plate")
    enter(field(filled.part, "diameter"), "plate_d")
    assert filled.session.save(tmp_path / "dial.masswright")
    assert read_document(tmp_path / "dial.masswright").assembly == filled.session.assembly
    filled.session.start_new()
    assert filled.session.open(tmp_path / "dial.masswright")
    assert [row[:3] for row in shown(opened(filled))] == [["plate_d", "400 mm", "400 mm"]]


@pytest.mark.parametrize(("text", "kept"), [("12", ""), (" -1,5e-3 ", ""), ("", ""), ("e", "e"), ("e5", "e5"), ("2*3", "2*3"), ("1 in", "1 in")])
def test_a_bare_number_is_not_kept_as_text_and_a_name_is(text, kept):
    assert kept_text(text) == kept


def test_the_cells_of_the_ledger_take_names_too(filled):
    names = opened(filled)
    for name, text in (("n", "4"), ("rho", "2700 kg/m^3"), ("ring_m", "1.5 kg")):
        add(names, name, text)
    names.reject()
    filled.activateWindow()
    assert filled.session.edit("", counted("pins", "2*n"))
    assert filled.session.edit("", made_of("plate", "rho", filled.session.units))
    assert filled.session.edit("", weighing("ring", "2*ring_m", filled.session.units))
    assert filled.session.edit("", lambda before: with_entry(before, NameEntry("n", "5")))
    assert filled.session.edit("", lambda before: with_entry(before, NameEntry("rho", "7850 kg/m^3")))
    assert filled.session.edit("", lambda before: with_entry(before, NameEntry("ring_m", "2 kg")))
    node = filled.session.assembly.node
    assert (node("pins").copies.count, node("plate").driver, node("ring").driver) == (10, ByDensity(7850.0), Weighed(4.0))
    assert filled.session.edit("", counted("pins", "3"))
    assert node("pins").typed != filled.session.assembly.node("pins").typed == ()
    assert "a quantity is a whole number" in filled.session.attempt("", counted("pins", "n/2"))
