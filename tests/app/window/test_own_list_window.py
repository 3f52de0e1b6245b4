"""The user's own list in the window: offered where materials, known parts and groups are chosen, and managed."""

from __future__ import annotations

from typing import TYPE_CHECKING

import pytest
from PySide6.QtCore import Qt
from PySide6.QtWidgets import QApplication, QComboBox, QFileDialog, QMenu, QMessageBox, QPushButton
from window_driver import (
    choose,
    dialog,
    enter,
    names,
    no_dialog,
    open_editor,
    put_away,
    solid,
    text_of,
    trigger,
    type_cell,
)

from app.window.own_list import data_folder
from core.assembly import Assembly, KnownAxial, KnownTensor
from core.document import read_document, save_document
from core.document.own_list import KNOWN_PARTS, OWN_MATERIALS, OwnPart, read_list, with_entry_kept
from core.machine import Machine
from core.material import ByMaterial, Material

if TYPE_CHECKING:
    from pathlib import Path

pytestmark = pytest.mark.gui

MELT = Material("melt A", 7790.0, 7780.0, 7800.0, "mill certificate 12", "own list")
ROTOR = OwnPart("6-pole rotor", KnownAxial(1.9, (0.0, 0.0, 0.05), 0.0021, 0.08, "sheet 17, page 3"))
PUMP = OwnPart("pump", KnownTensor(4.0, (0.0, 0.01, 0.0), (0.02, 0.03, 0.04, 0.001, 0.0, -0.002), "origin", "sheet"))


@pytest.fixture
def folder() -> Path:
    """Give the test's user a list with a material and two known parts."""
    with_entry_kept(OWN_MATERIALS, data_folder(), MELT)
    for part in (ROTOR, PUMP):
        with_entry_kept(KNOWN_PARTS, data_folder(), part)
    return data_folder()


@pytest.fixture
def listed(folder, filled):  # noqa: ARG001  # it is there before the window is
    """Show the dial in a window whose user has the list."""
    return filled


def manage(window):
    trigger(window, "Part", "Own list…")
    return dialog(window)


def press(widget, words):
    next(each for each in widget.findChildren(QPushButton) if each.text() == words).click()
    QApplication.processEvents()


def column(page, at: int = 0) -> list[str]:
    return [page.table.item(row, at).text() for row in range(page.table.rowCount())]


# --- where it appears ------------------------------------------------------------------------------------------------


def test_the_material_cell_proposes_own_materials_with_their_origin_and_takes_their_density(listed):
    editor = open_editor(listed, "plate", "material")
    model = editor.completer().model()
    shown = [model.index(row, 0).data() for row in range(model.rowCount())]
    assert shown[0] == "melt A  (own list)"
    assert "steel" in shown
    assert "own list: mill certificate 12" in model.index(0, 0).data(Qt.ItemDataRole.ToolTipRole)
    editor.completer().setCompletionPrefix("lt a")
    assert editor.completer().currentCompletion() == "melt A"
    put_away(listed, editor)
    type_cell(listed, "plate", "material", "melt a")
    assert listed.session.assembly.node("plate").driver == ByMaterial("melt A", 7790.0)
    assert text_of(listed, "plate", "material") == "melt A"


def test_the_part_page_offers_own_materials(listed):
    listed.session.select(frozenset({"plate"}))
    listed.pages.setCurrentWidget(listed.part)
    box = next(each for each in listed.part.findChildren(QComboBox) if each.accessibleName() == "Material")
    assert box.itemData(0, Qt.ItemDataRole.DisplayRole) == "melt A  (own list)"
    choose(box, "melt A  (own list)")
    assert listed.session.assembly.node("plate").driver == ByMaterial("melt A", 7790.0)
    assert box.lineEdit().text() == "melt A"


def test_a_document_needs_no_list_once_it_has_the_density(listed, tmp_path, folder):
    type_cell(listed, "plate", "material", "melt A")
    mass = listed.session.ledger.total.mass
    listed.session.save(tmp_path / "dial.masswright")
    (folder / "materials.toml").unlink()
    assert read_document(tmp_path / "dial.masswright").assembly.total.mass == pytest.approx(mass, rel=1e-14)


def test_a_known_part_is_picked_from_the_list(listed):
    trigger(listed, "Part", "Add known part…")
    box = dialog(listed)
    for name, body in (("6-pole rotor", ROTOR.body), ("pump", PUMP.body)):
        choose(box.own, name)
        assert box.name.text() == name
        assert box._body() == body
    box.take_button.click()
    added = listed.session.assembly.table.parts[-1]
    assert (added.name, added.body) == ("pump", PUMP.body)


def test_a_known_part_is_kept_in_the_list_when_it_is_added(listed, folder):
    trigger(listed, "Part", "Add known part…")
    box = dialog(listed)
    enter(box.name, "brake disc", None)
    enter(box.mass.line, "0.8 kg", None)
    choose(box.about, "one inertia, about the part's own axis")
    enter(box.axial.line, "0.001 kg*m^2", None)
    box.keep.setChecked(True)
    box.take_button.click()
    assert no_dialog(listed)
    assert [part.name for part in read_list(KNOWN_PARTS, folder)] == ["6-pole rotor", "pump", "brake disc"]
    assert "brake disc" in [name.strip(".") for name in names(listed)]


def test_a_known_part_whose_name_the_list_has_is_not_added_and_nothing_is_replaced(listed, folder):
    before, file = listed.session.machine, (folder / "known_parts.toml").read_bytes()
    trigger(listed, "Part", "Add known part…")
    box = dialog(listed)
    choose(box.own, "pump")
    enter(box.mass.line, "5 kg", None)
    box.keep.setChecked(True)
    box.take_button.click()
    assert box.wrong.text().startswith("Nothing was added: your list has a known part of this name already")
    assert listed.session.machine is before
    assert (folder / "known_parts.toml").read_bytes() == file
    box.reject()


def test_without_a_list_the_dialog_offers_no_choice_from_one(filled):
    trigger(filled, "Part", "Add known part…")
    box = dialog(filled)
    assert not box.own.isVisible()
    box.reject()


def test_a_damaged_file_is_told_in_one_sentence_and_the_rest_works(folder, window):
    (folder / "materials.toml").write_text("[[material")
    window.session.own.refresh()
    assert window.notice.words.text().startswith("Your own list: materials.toml: the text cannot be read")
    assert window.session.own.materials == ()
    assert window.session.own.known_parts == (ROTOR, PUMP)
    box = manage(window)
    enter(box.materials.name, "foam", None)
    enter(box.materials.density.line, "80 kg/m3", None)
    box.materials.add.click()
    assert "the text cannot be read" in box.materials.wrong.text()
    assert (folder / "materials.toml").read_text() == "[[material"
    box.reject()


# --- managing it -----------------------------------------------------------------------------------------------------


def test_a_material_is_added_with_its_spread_and_one_of_a_taken_name_is_refused_in_place(listed, folder):
    box = manage(listed)
    page = box.materials
    assert column(page) == ["melt A"]
    enter(page.name, "foam", None)
    enter(page.density.line, "0.08 g/cm3", None)
    enter(page.spread.line, "5 kg/m3", None)
    enter(page.source, "weighed", None)
    page.add.click()
    assert page.wrong.isHidden()
    assert column(page) == ["melt A", "foam"]
    (_, foam) = read_list(OWN_MATERIALS, folder)
    assert (foam.density, foam.low, foam.high, foam.source) == (pytest.approx(80), pytest.approx(75), pytest.approx(85), "weighed")
    enter(page.name, "Melt-A", None)
    page.add.click()
    assert "your list has a material of this name already" in page.wrong.text()
    enter(page.name, "steel", None)
    page.add.click()
    assert "the table has a material of this name already" in page.wrong.text()
    assert column(page) == ["melt A", "foam"]
    box.reject()


def test_removing_asks_first_and_leaves_documents_as_they_are(listed, folder):
    type_cell(listed, "plate", "material", "melt A")
    box = manage(listed)
    for words, left in (("Cancel", ["melt A"]), ("Remove", [])):
        press(box.materials, "Remove…")
        question = box.materials.findChild(QMessageBox)
        press(question, words)
        QApplication.processEvents()
        assert column(box.materials) == left
    assert read_list(OWN_MATERIALS, folder) == ()
    assert listed.session.assembly.node("plate").driver == ByMaterial("melt A", 7790.0)
    box.reject()


def test_lists_are_exported_to_new_files_only_and_imported_under_other_names(listed, tmp_path):
    box = manage(listed)
    page = box.known_parts
    page.table.selectRow(1)
    press(page, "Export…")
    place = page.findChild(QFileDialog)
    assert place.testOption(QFileDialog.Option.DontConfirmOverwrite)
    place.reject()
    page.export_to(tmp_path / "pumps")
    assert page.wrong.isHidden()
    page.export_to(tmp_path / "pumps.toml")
    assert "it is there already, and is not replaced" in page.wrong.text()
    page.export_to(tmp_path / "pumps")
    assert "it is there already" in page.wrong.text()
    text = (tmp_path / "pumps.toml").read_text(encoding="utf-8")
    assert "6-pole rotor" not in text
    (tmp_path / "other.toml").write_text(text.replace('"4.0 kg"', '"4.5 kg"'), encoding="utf-8")
    page.import_file(tmp_path / "pumps.toml")
    assert listed.told.toolTip() == "0 added; 1 there already"
    page.import_file(tmp_path / "other.toml")
    assert listed.told.toolTip() == "1 added; taken names changed: pump is pump (2)"
    assert column(page) == ["6-pole rotor", "pump", "pump (2)"]
    page.import_file(tmp_path / "gone.toml")
    assert "there is no such file" in page.wrong.text()
    box.reject()


def test_the_selected_known_part_is_kept(listed):
    box = manage(listed)
    press(box.known_parts, "Keep selected part")
    assert box.known_parts.wrong.text() == "Select one known part in the ledger first."
    listed.session.select(frozenset({"rotor"}))
    press(box.known_parts, "Keep selected part")
    assert column(box.known_parts)[-1] == "rotor"
    assert listed.session.own.known_parts[-1].body == listed.session.assembly.node("rotor").body
    box.reject()


# --- groups ----------------------------------------------------------------------------------------------------------


def test_a_kept_group_is_placed_as_a_copy_or_linked(listed, qtbot):
    listed.session.select(frozenset({"top"}))
    trigger(listed, "Part", "Keep group in own list")
    assert listed.told.text() == "Kept the group as top"
    trigger(listed, "Part", "Keep group in own list")
    assert [path.stem for path in listed.session.own.groups] == ["top", "top 2"]
    listed.session.select(frozenset())
    box = manage(listed)
    box.groups.table.selectRow(0)
    press(box.groups, "Place a copy")
    qtbot.waitUntil(lambda: "g1" in listed.session.assembly)
    assert listed.session.assembly.node("g1").link is None
    listed.session.select(frozenset())
    press(box.groups, "Place linked")
    qtbot.waitUntil(lambda: "g2" in listed.session.assembly)
    assert listed.session.assembly.node("g2").link.file_name == "top.masswright"
    lines = {line.key: line.mass for line in listed.session.ledger.lines}
    assert lines["g1"] == pytest.approx(lines["top"], rel=1e-12)
    assert lines["g2"] == pytest.approx(lines["top"], rel=1e-12)
    box.reject()
    qtbot.waitUntil(lambda: not listed.changed_files.busy)


def test_the_menu_offers_each_group_twice_or_says_that_there_is_none(listed, qtbot):
    menu = next(each for each in listed.findChildren(QMenu) if each.title() == "Place a group of own list")
    menu.aboutToShow.emit()
    assert [(action.text(), action.isEnabled()) for action in menu.actions()] == [("none yet", False)]
    listed.session.own.keep_group(Machine(Assembly("x", (solid("p1", "box"),))), "a & b")
    menu.aboutToShow.emit()
    assert [action.text() for action in menu.actions()] == ["a && b", "a && b, linked"]
    menu.actions()[1].trigger()
    qtbot.waitUntil(lambda: "g1" in listed.session.assembly)
    assert listed.session.assembly.node("g1").link is not None
    qtbot.waitUntil(lambda: not listed.changed_files.busy)


def test_groups_are_imported_exported_and_removed(listed, qtbot, tmp_path):
    save_document(Machine(Assembly("x", (solid("p1", "box"),))), tmp_path / "holder.masswright")
    box = manage(listed)
    page = box.groups
    page.import_file(tmp_path / "holder.masswright")
    qtbot.waitUntil(lambda: column(page) == ["holder"])
    page.export_to(0, tmp_path / "again")
    qtbot.waitUntil((tmp_path / "again.masswright").is_file)
    qtbot.waitUntil(lambda: listed.told.text() == "Wrote again.masswright")
    assert read_document(tmp_path / "again.masswright") == read_document(tmp_path / "holder.masswright")
    page.export_to(0, tmp_path / "again.masswright")
    qtbot.waitUntil(lambda: "it is there already" in page.wrong.text())
    (tmp_path / "bad.masswright").write_text("a letter")
    page.import_file(tmp_path / "bad.masswright")
    qtbot.waitUntil(lambda: "no Masswright document" in page.wrong.text())
    press(page, "Remove…")
    press(page.findChild(QMessageBox), "Remove")
    QApplication.processEvents()
    assert column(page) == []
    box.reject()


def test_without_a_selected_group_nothing_is_kept(listed):
    listed.session.select(frozenset({"plate"}))
    trigger(listed, "Part", "Keep group in own list")
    assert listed.notice.words.text() == "Select one group in the ledger first."
    assert listed.session.own.groups == ()


def test_an_edit_by_hand_is_seen_when_the_list_is_opened(listed, folder):
    text = (folder / "materials.toml").read_text(encoding="utf-8")
    (folder / "materials.toml").write_text(text.replace("melt A", "melt B"), encoding="utf-8")
    box = manage(listed)
    assert column(box.materials) == ["melt B"]
    box.reject()
